"""Rings that bound a solid and rings that do not; the mesh follows the width of the solid."""

from __future__ import annotations

import itertools
import math
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from numpy.testing import assert_allclose
from solid_shapes import holds, polygon, rectangle, rounded, solved

from fe_models import (
    ClosedLine,
    Edge,
    OutlineError,
    Section,
    Solid,
    Solution,
    Wall,
    circle_edges,
    closed_lines,
    fitted_edges,
    outline_of_solid,
    solve,
    solve_solid,
)
from fe_models.boundary import Piece
from fe_models.local_width import with_widths

DISC = ClosedLine.circle((0.0, 0.0), 1.0)


def reversed_line(line: ClosedLine) -> ClosedLine:
    """The same closed line run through the other way."""
    through = line.through or (None,) * len(line.points)
    return ClosedLine(line.points[::-1], (*through[-2::-1], through[-1]))


def fault_of(*rings: ClosedLine) -> OutlineError:
    with pytest.raises(OutlineError) as caught:
        outline_of_solid(Solid(rings))
    return caught.value


@pytest.mark.parametrize(
    ("kind", "rings"),
    [
        ("ring", ()),
        ("ring", (polygon((0, 0), (1, 0)),)),
        ("ring", (ClosedLine(((0, 0), (1, 0), (1, math.nan))),)),
        ("ring", (ClosedLine(((0, 0), (1, 0), (1, 1)), (None, None)),)),
        ("zero length", (polygon((0, 0), (1, 0), (1, 0), (0, 1)),)),
        ("zero length", (polygon((0, 0), (1, 0), (0, 1), (0, 0)),)),
        ("arc", (ClosedLine(((0, 0), (1, 0), (0, 1)), ((1, 0), None, None)),)),
        ("arc", (ClosedLine(((0, 0), (1, 0), (0, 1)), ((2, 0), None, None)),)),
        ("crossing", (polygon((0, 0), (1, 1), (1, 0), (0, 1)),)),
        ("crossing", (polygon((0, 0), (2, 0), (2, 2), (1, 0), (0, 2)),)),
        ("crossing", (DISC, ClosedLine.circle((0.8, 0.0), 0.5))),
        ("crossing", (DISC, ClosedLine.circle((0.5, 0.0), 0.5))),
        ("opening", (DISC, ClosedLine.circle((3.0, 0.0), 0.5))),
        ("opening", (DISC, ClosedLine.circle((0.0, 0.0), 0.5), ClosedLine.circle((0.0, 0.0), 0.2))),
    ],
)
def test_what_is_no_solid(kind: str, rings: tuple[ClosedLine, ...]) -> None:
    fault = fault_of(*rings)
    assert fault.kind == kind
    assert str(fault) == f"must be {fault.allowed}, got {fault.found}"


def test_faults_name_the_ring_and_the_place() -> None:
    fault = fault_of(rectangle(4, 4), rectangle(1, 1), polygon((5, 5), (6, 5), (6, 6)))
    assert fault.walls == ("rings[2]",)
    fault = fault_of(rectangle(4, 4), polygon((1, 0), (3, 0), (1, 1)))
    assert fault.walls == ("rings[0]", "rings[1]")
    assert "near (2, 0" in fault.found


def test_thin_tube_is_not_taken_for_crossing() -> None:
    """Coarse chords of both circles would cross."""
    solid = outline_of_solid(Solid((DISC, ClosedLine.circle((0.0, 0.0), 1 - 1e-5))))
    assert len(solid.loops) == 2
    assert_allclose(solid.moments(np.zeros(2)).area, math.pi * (1 - (1 - 1e-5) ** 2), rtol=1e-9)


def test_direction_and_order_of_rings_do_not_matter() -> None:
    outer = ClosedLine(((0, 0), (4, 0), (4, 3), (0, 3)), ((2, -0.5), None, None, None))
    inner = ClosedLine(((1, 1), (2, 1), (2, 2)), (None, (2.3, 1.5), None))
    first = solved(outer, inner).quantities
    turned = solved(reversed_line(inner), reversed_line(outer)).quantities
    for name, q in first.items():
        assert_allclose(turned[name].value, q.value, rtol=1e-6, atol=1e-9, err_msg=name)
    assert_allclose(first["area"].value, turned["area"].value, rtol=1e-13)


def test_exact_moments_of_arcs() -> None:
    """Half disc: A = pi/2, centroid 4/(3 pi), Ixx about it pi/8 - 8/(9 pi), Iyy = pi/8."""
    q = solved(ClosedLine(((1, 0), (-1, 0)), ((0, 1), None))).quantities
    assert_allclose(q["area"].value, math.pi / 2, rtol=1e-13)
    assert_allclose(q["centroid_y"].value, 4 / (3 * math.pi), rtol=1e-12)
    assert_allclose(q["second_moment_xx"].value, math.pi / 8 - 8 / (9 * math.pi), rtol=1e-11)
    assert_allclose(q["second_moment_yy"].value, math.pi / 8, rtol=1e-12)


def test_moduli_of_the_solid() -> None:
    plain = solve_solid(Solid((rectangle(3, 1),)))
    stiff = solve_solid(Solid((rectangle(3, 1),), e=2.0, g=3.0)).quantities
    assert_allclose(
        stiff["torsion_constant"].value, 3 * plain.quantities["torsion_constant"].value, rtol=1e-9
    )
    assert_allclose(stiff["second_moment_xx"].value, 2 * 3 / 12, rtol=1e-12)
    assert plain.strips == {}
    assert plain.fields.space.mesh.labels == ("solid",)
    assert all(c.passed for c in plain.checks)


@cache
def sharp_angle(accuracy: float) -> Solution:
    corners = [(0, 0), (10, 0), (10, 2), (2, 2), (2, 10), (0, 10)]
    return solve_solid(Solid((polygon(*corners),)), accuracy)


@pytest.mark.parametrize("accuracy", [1e-3, 1e-5, 1e-7])
def test_accuracy_is_met(accuracy: float) -> None:
    s = sharp_angle(accuracy)
    j = s.quantities["torsion_constant"]
    assert s.met
    assert j.half_width <= accuracy * j.value
    assert holds(j, sharp_angle(1e-8).quantities["torsion_constant"].value)


def thin_i(depth: float) -> ClosedLine:
    """I section with walls 1 thick, depth and flanges as wide as given, sharp corners."""
    a, h = depth / 2, 0.5
    right = [(a, depth), (a, depth - 1), (h, depth - 1), (h, 1), (a, 1), (a, 0)]
    return polygon(*right, *((-x, y) for x, y in reversed(right)))


def test_thin_walls_cost_little() -> None:
    """Unknowns grow far slower than slenderness, and the answer is that of the walls."""
    cost = {}
    for depth in (20.0, 200.0, 2000.0):
        s = solve_solid(Solid((thin_i(depth),)))
        cost[depth] = s.mesh.unknowns
        a, d = depth / 2, depth - 0.5
        points = {"a": (-a, 0.5), "m": (0, 0.5), "b": (a, 0.5), "c": (-a, d), "n": (0, d), "d": (a, d)}
        walls = tuple(Wall(n, n[0], n[1], (1.0, 1.0)) for n in ("am", "mb", "mn", "cn", "nd"))
        j = solve(Section(points, walls)).quantities["torsion_constant"]
        assert holds(s.quantities["torsion_constant"], j.value, j.half_width)
    assert cost[2000.0] < 12 * cost[20.0]


def widths(*rings: ClosedLine) -> list[tuple[Piece, float]]:
    (cluster,) = outline_of_solid(Solid(rings)).parts.clusters
    return [(p, p.width) for r in cluster.rings for p in r]


def test_width_is_the_distance_to_what_faces() -> None:
    for p, w in widths(DISC, ClosedLine.circle((0.0, 0.0), 0.9)):
        assert_allclose(w, 0.1, rtol=0.02)  # faces are met as chords
        assert p.calm
    found = widths(rectangle(20.0, 1.0))
    assert_allclose([w for p, w in found if p.length > 5], 1.0, rtol=1e-9)
    assert all(p.calm for p, _ in found)


def test_width_sees_a_notch_that_points_at_a_face() -> None:
    """A notch 0.02 wide that leaves 0.5 of 10: the face below it is cut there."""
    corners = [(0, 0), (100, 0), (100, 10), (50.01, 10), (50, 0.5), (49.99, 10), (0, 10)]
    near = [(p, w) for p, w in widths(polygon(*corners)) if p.start[1] == 0 and p.end[1] == 0]
    least = min(near, key=lambda item: item[1])
    assert_allclose(least[1], 0.5, rtol=0.05)
    assert least[0].start[0] <= 50.0 <= least[0].end[0]
    assert least[0].length < 2.0
    assert max(w for _, w in near) > 9.0


def test_cut_pieces_are_the_ring() -> None:
    line = rounded([(0, 0), (40, 0), (40, 3), (3, 3), (3, 50), (0, 50)], [0, 0, 1, 2, 1, 0])
    (cluster,) = outline_of_solid(Solid((line,))).parts.clusters
    (ring,) = cluster.rings
    assert len(ring) > 12
    for before, piece in zip(ring, ring[1:] + ring[:1], strict=True):
        assert_allclose(before.at(1.0), piece.at(0.0), rtol=0, atol=1e-12)
    bare = [replace(p, width=None, calm=False) for p in ring]
    assert_allclose(
        sum(p.length for p in bare), sum(p.length for r in with_widths([bare]) for p in r), rtol=1e-12
    )


def test_sharp_wedge_stays_cheap() -> None:
    s = solved(polygon((0, 0), (100, 0), (0, 1)), accuracy=1e-5)
    assert s.met
    assert s.mesh.unknowns < 10_000


def test_loose_edges_are_chained() -> None:
    """Any order and direction; gaps closed within what is stated; doubles and crumbs counted."""
    edges = [
        Edge((0, 0), (4, 0)),
        Edge((4, 3), (4, 0.001)),
        Edge((0, 3), (4, 3), (2, 4)),
        Edge((0, 3), (0, 0)),
        Edge((4, 0), (0, 0)),
        Edge((0, 3), (0, 3.0005)),
        *circle_edges((2, 1.5), 0.5),
    ]
    made = closed_lines(edges, 0.01)
    assert sorted(len(line.points) for line in made.lines) == [2, 4]
    assert (made.short, made.twice) == (1, 1)
    assert 0.0005 < made.widest_gap < 0.002
    area = outline_of_solid(Solid(made.lines)).moments(np.zeros(2)).area
    half_angle = 2 * math.atan(0.5)
    segment = 2.5**2 * (half_angle - math.sin(half_angle) * math.cos(half_angle))
    assert_allclose(area, 12 + segment - math.pi / 4, rtol=1e-3)


def test_edges_that_do_not_close() -> None:
    square = [Edge((0, 0), (1, 0)), Edge((1, 0), (1, 1)), Edge((1, 1), (0, 1)), Edge((0, 1), (0, 0.2))]
    with pytest.raises(OutlineError, match=r"open end at \(0, 0.*0.2 from the nearest") as caught:
        closed_lines(square, 0.01)
    assert caught.value.kind == "gap"
    with pytest.raises(OutlineError, match=r"3 edges at \(1, 1\)"):
        closed_lines([*square[:3], Edge((0, 1), (0, 0)), Edge((1, 1), (2, 2)), Edge((2, 2), (3, 1))], 0.01)


def test_arcs_fitted_to_a_curve() -> None:
    def parabola(u: np.ndarray) -> np.ndarray:
        return np.stack([u, u**2], axis=1)

    for error in (1e-2, 1e-4, 1e-6):
        edges = fitted_edges(parabola, -1.0, 2.0, error)
        assert edges[0].start == (-1.0, 1.0)
        assert edges[-1].end == (2.0, 4.0)
        assert all(a.end == b.start for a, b in itertools.pairwise(edges))
        for e in edges:
            (line,) = closed_lines([e, Edge(e.end, e.start)], 1e-12).lines
            (cluster,) = outline_of_solid(Solid((line,))).parts.clusters
            arc = next(p.arc for p in cluster.rings[0] if p.arc is not None)
            x = np.linspace(e.start[0], e.end[0], 50)
            off = np.hypot(x - arc.centre[0], x**2 - arc.centre[1]) - arc.radius
            assert np.abs(off).max() <= 1.05 * error
    with pytest.raises(OutlineError, match="more than 4096 arcs"):
        fitted_edges(parabola, -1.0, 2.0, 1e-16)
