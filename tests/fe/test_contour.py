"""Boundary loops, cut paths, step functions and the multi-valued boundary values of the stress function."""

from __future__ import annotations

from functools import cache
from itertools import pairwise

import numpy as np
import pytest
from fe_sections import bow_tie, box, channel, four_cells, lopsided_cell, shape, two_cell
from numpy.testing import assert_allclose
from shapely.geometry import Polygon

from fe_models import Solution, solve
from fe_models.contour import Loop, cut_paths, loops
from fe_models.element import EDGES
from fe_models.jumps import network, start_jumps, steps
from fe_models.mesh import Mesh
from fe_models.space import Space, space
from fe_models.stress_function import boundary_values, contours

SECTIONS = {
    "channel": channel(50.0, 100.0, 6.0),
    "box": box(60.0, 40.0, 3.0, 4.0),
    "lopsided": lopsided_cell(),
    "two cells": two_cell(50.0, 30.0, 40.0, 3.0),
    "bow tie": bow_tie(),
    "four cells": four_cells(),
    "three cells": shape("tapering three-cell box", 15.0),
}
CELLS = [n for n in SECTIONS if n != "channel"]


@cache
def solved(name: str) -> Solution:
    return solve(SECTIONS[name], 1e-3)


def mesh_of(name: str) -> Mesh:
    return solved(name).fields.space.mesh


@pytest.mark.parametrize("name", SECTIONS)
def test_loops_are_the_outline(name: str) -> None:
    """As many as the outline has, with its areas; every edge in the triangle said, material on the left."""
    mesh, outline = mesh_of(name), solved(name).outline
    found = loops(mesh)
    wanted = [Polygon(p).area * (1 if i == 0 else -1) for i, p in enumerate(outline.loops)]
    assert_allclose(sorted(loop.area for loop in found), sorted(wanted), rtol=1e-9)
    assert found[0].area > 0
    for loop in found:
        following = np.roll(loop.vertices, -1)
        for a, b, e, side in zip(loop.vertices, following, loop.elements, loop.sides, strict=True):
            p, q = EDGES[side]
            assert (mesh.triangles[e, p], mesh.triangles[e, q]) == (a, b)


@pytest.mark.parametrize("name", SECTIONS)
def test_euler(name: str) -> None:
    """V - E + F = 1 - holes for a connected region."""
    t = mesh_of(name).triangles
    edges = {tuple(sorted((int(a), int(b)))) for row in t for a, b in (row[[0, 1]], row[[1, 2]], row[[2, 0]])}
    assert len(np.unique(t)) == len(mesh_of(name).vertices)
    assert len(np.unique(t)) - len(edges) + len(t) == 1 - (len(loops(mesh_of(name))) - 1)


@pytest.mark.parametrize("name", SECTIONS)
def test_paths_join_every_hole_to_the_outside(name: str) -> None:
    """One row of edges for each hole, through the material, from one loop to another; together a tree."""
    mesh = mesh_of(name)
    boundary = loops(mesh)
    paths = cut_paths(mesh, boundary, [])
    assert len(paths) == len(boundary) - 1
    on = {int(v): i for i, loop in enumerate(boundary) for v in loop.vertices}
    edges = {frozenset((int(row[a]), int(row[b]))) for row in mesh.triangles for a, b in EDGES}
    group = list(range(len(boundary)))
    for path in paths:
        assert on[path[0]] != on[path[-1]]
        assert not any(v in on for v in path[1:-1])
        assert all(frozenset(s) in edges for s in pairwise(path))
        first, last = group[on[path[0]]], group[on[path[-1]]]
        assert first != last
        group = [first if g == last else g for g in group]
    assert set(group) == {group[0]}


def test_loops_that_are_joined_already_need_no_path() -> None:
    mesh = mesh_of("four cells")
    boundary = loops(mesh)
    assert cut_paths(mesh, boundary, [{0, 1, 2, 3, 4}]) == []
    assert len(cut_paths(mesh, boundary, [{0, 3}, {1, 2}])) == 2


def jumps(on: Space, made: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Inner edges (m, 2) as vertex pairs in the direction of the triangle on their left, and the trace from
    the left less the trace from the right at their p + 1 nodes, (m, p + 1), of element values (e, k)."""
    t, inner = on.mesh.triangles, on.element.order - 1
    rows = [[a, *(3 + i * inner + np.arange(inner)), b] for i, (a, b) in enumerate(EDGES)]
    owner = {(int(r[a]), int(r[b])): (e, i) for e, r in enumerate(t) for i, (a, b) in enumerate(EDGES)}
    pairs = [(a, b) for a, b in owner if (b, a) in owner]
    left = np.array([on.nodes[owner[p][0], rows[owner[p][1]]] for p in pairs])
    right = np.array([on.nodes[owner[b, a][0], rows[owner[b, a][1]]][::-1] for a, b in pairs])
    assert (left == right).all()
    seen = [made[owner[a, b][0], rows[owner[a, b][1]]] for a, b in pairs]
    beyond = [made[owner[b, a][0], rows[owner[b, a][1]]][::-1] for a, b in pairs]
    return np.array(pairs), np.array(seen) - np.array(beyond)


@pytest.mark.parametrize("order", [1, 3, 4])
@pytest.mark.parametrize("name", CELLS)
def test_step_functions_jump_by_one_across_their_path_and_nowhere_else(name: str, order: int) -> None:
    """Traces of both triangles at every inner edge, at its p + 1 nodes: left minus right of the path is 1."""
    mesh = mesh_of(name)
    on, boundary = space(mesh, order, np.zeros(2)), loops(mesh)
    paths = cut_paths(mesh, boundary, [])
    net = network(mesh, boundary, np.ones(len(mesh.triangles)))
    of_net = {tuple(pair): i for i, pair in enumerate(net.ends.tolist())}
    parts = []
    for path in paths:
        ahead = list(pairwise(path))
        wanted = np.zeros(len(of_net))
        for a, b in ahead:
            assert ((a, b) in of_net) != ((b, a) in of_net)
            wanted[of_net.get((a, b), of_net.get((b, a)))] = 1.0 if (a, b) in of_net else -1.0
        made = steps(mesh, net, np.repeat(wanted[:, None], order + 1, axis=1), on.nodes.shape[1])
        edges, jump = jumps(on, made)
        there = np.array([(a, b) in ahead for a, b in edges.tolist()], dtype=float)
        back = np.array([(b, a) in ahead for a, b in edges.tolist()], dtype=float)
        assert there.sum() == back.sum() == len(path) - 1
        assert_allclose(jump, np.repeat((there - back)[:, None], order + 1, axis=1), rtol=0, atol=1e-14)
        parts.append((wanted, jump))
    weights = np.arange(1.0, len(paths) + 1)
    total = np.tensordot(weights, np.array([w for w, _ in parts]), axes=1)
    made = steps(mesh, net, np.repeat(total[:, None], order + 1, axis=1), on.nodes.shape[1])
    both = np.tensordot(weights, np.array([j for _, j in parts]), axes=1)
    assert_allclose(jumps(on, made)[1], both, rtol=0, atol=1e-12)


@pytest.mark.parametrize("name", CELLS)
def test_jumps_balance_the_flux_of_every_loop(name: str) -> None:
    """What a loop's boundary gains leaves through the edges at it; at vertices inside nothing is left."""
    mesh = mesh_of(name)
    boundary = loops(mesh)
    net = network(mesh, boundary, np.ones(len(mesh.triangles)))
    flux = np.random.default_rng(1).normal(size=len(boundary))
    flux[0] = -flux[1:].sum()
    found = start_jumps(net, np.zeros(len(net.ends)), flux)
    left_over = np.zeros(net.node.max() + 1)
    np.add.at(left_over, net.node[:, 0], found)
    np.add.at(left_over, net.node[:, 1], -found)
    left_over[: len(flux)] -= flux
    assert_allclose(left_over, 0.0, rtol=0, atol=1e-12)


@pytest.mark.parametrize("order", [3, 4])
@pytest.mark.parametrize("name", SECTIONS)
def test_boundary_values_carry_off_the_traction(name: str, order: int) -> None:
    """Along every boundary edge d phi = (a x^2 dy - b y^2 dx) / 2, with phi as its own triangle sees it."""
    fields = solved(name).fields
    on = space(fields.space.mesh, order, fields.inertia.centroid)
    holds = contours(on, np.ones(len(on.mesh.triangles)))
    for force in ((1.0, 0.0), (0.0, 1.0)):
        a, b = fields.inertia.slopes(*force)
        phi = boundary_values(holds, np.array([a, b]))
        scale = np.abs(phi).max()
        for loop in holds.loops:
            local = holds.edge_nodes[loop.sides]
            p = on.places[loop.elements[:, None], local]
            start, step = p[:, :1], p - p[:, :1]
            # closed integral of a quadratic along a straight line from the start of the edge, Simpson's rule
            middle = start + 0.5 * step

            def rate(at: np.ndarray, step: np.ndarray = step, a: float = a, b: float = b) -> np.ndarray:
                return 0.5 * (a * at[..., 0] ** 2 * step[..., 1] - b * at[..., 1] ** 2 * step[..., 0])

            want = (rate(start) + 4 * rate(middle) + rate(p)) / 6
            seen = phi[loop.elements[:, None], local]
            assert_allclose(seen - seen[:, :1], want, rtol=0, atol=1e-12 * scale)


@pytest.mark.parametrize("name", CELLS)
def test_stress_function_is_multi_valued(name: str) -> None:
    """Round a hole phi rises by the load its area would carry, clockwise minus the integral of a x + b y.

    Across inner edges it jumps by constants only, which carry no stress; on a cell without symmetry they are
    far from zero.
    """
    solution = solved(name)
    fields, on = solution.fields, solution.fields.contours
    holes = _holes(solution, on.loops)
    largest = 0.0
    for axis, pair in enumerate(fields.flexure):
        slopes = fields.inertia.slopes(1.0 - axis, float(axis))
        phi = pair.function
        for loop, hole in zip(on.loops[1:], holes, strict=True):
            seen = phi[loop.elements[:, None], on.edge_nodes[loop.sides]]
            wanted = -float(slopes @ hole)
            assert_allclose((seen[:, -1] - seen[:, 0]).sum(), wanted, rtol=1e-9, atol=1e-11)
            largest = max(largest, abs(wanted))
        _, jump = jumps(on.space, phi)
        assert_allclose(jump, np.repeat(jump[:, :1], jump.shape[1], axis=1), rtol=0, atol=1e-12)
        assert (np.abs(jump[:, 0]) > 1e-12).sum() <= 2 * len(on.network.ends)
    assert largest > 1e-2 or name == "box"


def _holes(solution: Solution, boundary: list[Loop]) -> list[np.ndarray]:
    """First moments (integrals of x, y about the centroid) of the mesh's holes, in their order."""
    places = [Polygon(p - solution.fields.inertia.centroid) for p in solution.outline.loops]
    vertices = solution.fields.space.mesh.vertices - solution.fields.inertia.centroid
    found = []
    for loop in boundary[1:]:
        at = Polygon(vertices[loop.vertices]).representative_point()
        (own,) = [p for p in places[1:] if p.contains(at)]
        found.append(own.area * np.array(own.centroid.coords[0]))
    return found
