"""Boundary values of the flexural stress function: tau = curl phi + tau_p with no traction on any boundary.

    tau_p = -e (a x^2 / 2, b y^2 / 2),   div tau_p = -e (a x + b y)                              (1)
    d phi = -tau_p . n ds = e (a x^2 / 2 dy - b y^2 / 2 dx)   along a boundary                    (2)

The integral of (2) round a hole is the load applied inside it, not zero: phi is multi-valued. It is made
single-valued by a constant jump along a cut path from every hole, which carries no stress.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .band import Array
from .contour import Loop, Path, cut_paths, loops, offsets
from .mesh import Index
from .space import Space


@dataclass(frozen=True)
class Contours:
    """Boundary loops of a space, cut paths, and unknowns of a stress function.

    Parameters
    ----------
    unknown : (N,) array of int
        -1 on the outer loop, one shared number for each hole, one for every other node.
    edge_nodes : tuple of (m, p + 1) arrays
        Local node numbers along each loop's edges, start to end.
    """

    space: Space
    loops: list[Loop]
    paths: list[Path]
    unknown: Index
    edge_nodes: tuple[Index, ...]


def contours(space: Space) -> Contours:
    """Loops, paths and unknowns of a space."""
    boundary = loops(space.mesh)
    inner = space.element.order - 1
    table = np.array([[i, *(3 + i * inner + np.arange(inner)), (i + 1) % 3] for i in range(3)])
    edge_nodes = tuple(table[loop.sides] for loop in boundary)
    unknown = np.zeros(space.count, dtype=np.int64)
    for i, (loop, local) in enumerate(zip(boundary, edge_nodes, strict=True)):
        unknown[space.nodes[loop.elements[:, None], local]] = -1 - i
    free = unknown == 0
    holes = len(boundary) - 1
    unknown[free] = holes + np.arange(free.sum())
    for i in range(1, len(boundary)):
        unknown[unknown == -1 - i] = i - 1
    return Contours(space, boundary, cut_paths(space.mesh, boundary), unknown, edge_nodes)


def boundary_values(on: Contours, e: Array, slopes: Array) -> Array:
    """Element values (e, k) of a function that satisfies (2) on every boundary and jumps at the paths.

    Parameters
    ----------
    e : (elements,) array
        Modulus ratio of each element [-].
    slopes : (2,) array
        a and b of f = a x + b y [1/L^3 per unit force].
    """
    mesh = on.space.mesh
    order = on.space.element.order
    k = on.space.nodes.shape[1]
    rises = [_rises(on, i, e, slopes) for i in range(len(on.loops))]
    # closing of each loop needs jumps: unit jumps show what each path adds to each loop
    paths = len(on.paths)
    effect = np.zeros((len(on.loops), paths))
    for j in range(paths):
        unit = offsets(mesh, on.paths, np.eye(paths)[j], k, order - 1)
        for i in on.paths[j].loops:
            effect[i, j] = _gain(on, i, unit)
    total = np.array([r[:, -1].sum() for r in rises])
    jumps = np.linalg.lstsq(effect, -total, rcond=None)[0] if paths else np.zeros(0)
    step = offsets(mesh, on.paths, jumps, k, order - 1)
    values = np.zeros(on.space.count)
    for i, (loop, rise) in enumerate(zip(on.loops, rises, strict=True)):
        local = on.edge_nodes[i]
        here = step[loop.elements[:, None], local]
        # a value seen by one element becomes the node's own by taking off that element's step
        enter = np.concatenate([[0.0], np.cumsum(rise[:-1, -1] - here[:-1, -1] + here[1:, 0])])
        seen = enter[:, None] + rise
        values[on.space.nodes[loop.elements[:, None], local]] = seen - here
    return values[on.space.nodes] + step


def _gain(on: Contours, i: int, step: Array) -> float:
    """What a step function adds on one way round loop i."""
    loop, local = on.loops[i], on.edge_nodes[i]
    here = step[loop.elements[:, None], local]
    return float(np.sum(np.roll(here[:, 0], -1) - here[:, -1]))


def _rises(on: Contours, i: int, e: Array, slopes: Array) -> Array:
    """Integral of (2) from the start of each edge of loop i to each of its nodes, (m, p + 1)."""
    loop = on.loops[i]
    order = on.space.element.order
    places = on.space.places[loop.elements[:, None], on.edge_nodes[i]]
    u = np.arange(order + 1) / order
    lagrange = np.linalg.inv(np.vander(u, increasing=True))
    powers = np.arange(order + 1)
    # exact for the edge's own polynomial: degree 2p of x^2 times p - 1 of dy
    g, w = np.polynomial.legendre.leggauss((3 * order) // 2 + 1)
    out = np.zeros(places.shape[:2])
    for n in range(1, order + 1):
        t = 0.5 * u[n] * (g + 1.0)
        at = np.einsum("gk,mkc->mgc", t[:, None] ** powers @ lagrange, places)
        slope = powers * t[:, None] ** np.maximum(powers - 1, 0) @ lagrange
        d = np.einsum("gk,mkc->mgc", slope, places)
        rate = 0.5 * (slopes[0] * at[..., 0] ** 2 * d[..., 1] - slopes[1] * at[..., 1] ** 2 * d[..., 0])
        out[:, n] = e[loop.elements] * (rate @ (0.5 * u[n] * w))
    return out
