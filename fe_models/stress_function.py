"""Boundary values of the flexural stress function: tau = curl phi + tau_p with no traction on any boundary.

    tau_p = -e (a x^2 / 2, b y^2 / 2),   div tau_p = -e (a x + b y)                              (1)
    d phi = -tau_p . n ds = e (a x^2 / 2 dy - b y^2 / 2 dx)   along a boundary                    (2)

The integral of (2) round a hole is the load applied inside it, not zero, and where e changes from one element
to the next the flux of (1) is not continuous: phi is given jumps along such edges and along cut paths.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np

from .band import Array
from .contour import Loop, loops
from .jumps import Network, network, start_jumps, steps
from .mesh import Index
from .space import Space


@dataclass(frozen=True)
class Contours:
    """Boundary loops of a space, edges with jumps, and unknowns of a stress function.

    Parameters
    ----------
    unknown : (N,) array of int
        -1 on the outer loop, one shared number for each hole, one for every other node.
    edge_nodes : (3, p + 1) array of int
        Local node numbers along each edge of an element, start to end.
    e : (elements,) array
        Modulus ratio of each element [-].
    """

    space: Space
    loops: list[Loop]
    network: Network
    unknown: Index
    edge_nodes: Index
    e: Array


def contours(space: Space, e: Array) -> Contours:
    """Loops, edges with jumps and unknowns of a space."""
    boundary = loops(space.mesh)
    inner = space.element.order - 1
    table = np.array([[i, *(3 + i * inner + np.arange(inner)), (i + 1) % 3] for i in range(3)])
    unknown = np.zeros(space.count, dtype=np.int64)
    for i, loop in enumerate(boundary):
        unknown[space.nodes[loop.elements[:, None], table[loop.sides]]] = -1 - i
    free = unknown == 0
    holes = len(boundary) - 1
    unknown[free] = holes + np.arange(free.sum())
    for i in range(1, len(boundary)):
        unknown[unknown == -1 - i] = i - 1
    return Contours(space, boundary, network(space.mesh, boundary, e), unknown, table, e)


def boundary_values(on: Contours, slopes: Array) -> Array:
    """Element values (e, k) of a function that satisfies (2) on every boundary and has the needed jumps.

    Parameters
    ----------
    slopes : (2,) array
        a and b of f = a x + b y [1/L^3 per unit force].
    """
    mesh, net = on.space.mesh, on.network
    rises = [on.e[loop.elements, None] * _rises(on, loop.elements, loop.sides, slopes) for loop in on.loops]
    change = (on.e[net.left] - on.e[net.right])[:, None] * _rises(on, net.left, net.side, slopes)
    flux = np.array([r[:, -1].sum() for r in rises])
    jump = start_jumps(net, change[:, -1], flux)[:, None] + change
    step = steps(mesh, net, jump, on.space.nodes.shape[1])
    values = np.zeros(on.space.count)
    for loop, rise in zip(on.loops, rises, strict=True):
        local = on.edge_nodes[loop.sides]
        here = step[loop.elements[:, None], local]
        # a value seen by one element becomes the node's own by taking off that element's step
        enter = np.concatenate([[0.0], np.cumsum(rise[:-1, -1] - here[:-1, -1] + here[1:, 0])])
        seen = enter[:, None] + rise
        values[on.space.nodes[loop.elements[:, None], local]] = seen - here
    return values[on.space.nodes] + step


@cache
def _gauss(points: int) -> tuple[Array, Array]:
    """Gauss points and weights on -1..1; making them costs more than using them."""
    return np.polynomial.legendre.leggauss(points)


def _rises(on: Contours, elements: Index, sides: Index, slopes: Array) -> Array:
    """Integral of (2) with e = 1 from the start of element edges to each of their nodes, (m, p + 1)."""
    order = on.space.element.order
    places = on.space.places[elements[:, None], on.edge_nodes[sides]]
    offsets = on.space.offsets[elements[:, None], on.edge_nodes[sides]]
    u = np.arange(order + 1) / order
    lagrange = np.linalg.inv(np.vander(u, increasing=True))
    powers = np.arange(order + 1)
    # exact for the edge's own polynomial: degree 2p of x^2 times p - 1 of dy
    g, w = _gauss((3 * order) // 2 + 1)
    out = np.zeros(places.shape[:2])
    for n in range(1, order + 1):
        t = 0.5 * u[n] * (g + 1.0)
        at = np.einsum("gk,mkc->mgc", t[:, None] ** powers @ lagrange, places)
        slope = powers * t[:, None] ** np.maximum(powers - 1, 0) @ lagrange
        d = np.einsum("gk,mkc->mgc", slope, offsets)
        rate = 0.5 * (slopes[0] * at[..., 0] ** 2 * d[..., 1] - slopes[1] * at[..., 1] ** 2 * d[..., 0])
        out[:, n] = rate @ (0.5 * u[n] * w)
    return out
