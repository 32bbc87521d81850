"""Shear flow of a wall graph: basic flow of the cut section, closing flow at zero twist.

Both unit distributions f = x and f = y (from the centroid) are carried as one complex number: the flow of
f = a x + b y is Re(conj(a + i b) Q), Q = Q_x + i Q_y.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Complexes, Floats
from beam_theory.inertia import Inertia
from beam_theory.network import Network
from beam_theory.torsion import closing

__all__ = ["Shear", "shear"]


@dataclass(frozen=True)
class Shear:
    """Flow of the unit distributions, complex as above; all about the centroid.

    basic (m,) [L^3]: flow at the start of each piece with the cells cut; moment (m,) [L^3]: first moment of a
    whole piece; closing (c,): closing flow of each cell; start (m,): basic and closing together;
    flow (m, k): at the quadrature points; torque [L^5] about the centroid; energy [L^6]: integrals of
    Qx Qx, Qy Qy, Qx Qy ds/(g t); imbalance: what is left over at the root of the tree over the largest flow.
    """

    basic: Complexes
    moment: Complexes
    closing: Complexes
    start: Complexes
    flow: Complexes
    torque: complex
    energy: tuple[float, float, float]
    imbalance: float


def shear(graph: Network, mass: Inertia) -> Shear:
    """dq/ds = -e t f, a boom steps q by -e A_b f; then no gap in warping round any cell."""
    pieces = graph.pieces
    curves = pieces.curves.moved(-mass.centroid)
    at, rise = pieces.e * pieces.t0, pieces.e * (pieces.t1 - pieces.t0)
    one = np.ones((len(at), 1))
    moment = curves.first_moment(one, at, rise)[:, 0]
    start = np.zeros(len(at), dtype=np.complex128)
    if len(graph.chord):
        cut = graph.chord
        start[cut] = curves.pick(cut).first_moment(graph.chord_at[:, None], at[cut], rise[cut])[:, 0]
    # Balance at a node: flows leaving at a start minus flows arriving at an end = minus e A f.
    balance = -graph.boom * (graph.node - mass.centroid)
    np.add.at(balance, pieces.end, start - moment)
    np.add.at(balance, pieces.start, -start)
    rest = balance.tolist()
    basic = start.tolist()
    for node, parent, piece, sign in graph.tree:
        basic[piece] = sign * rest[node]
        rest[parent] += rest[node]
    first = np.array(basic, dtype=np.complex128)
    run = -curves.first_moment(pieces.u, at, rise)
    gap = pieces.flexibility * first + _over_gt(graph, run)
    sums = np.column_stack([graph.round_cells(gap.real), graph.round_cells(gap.imag)])
    cell = closing(graph, -sums)
    closed = cell[:, 0] + 1j * cell[:, 1]
    total = first + graph.cell_sum(closed.real) + 1j * graph.cell_sum(closed.imag)
    flow = total[:, None] + run
    torque = complex((pieces.ds * curves.arm(pieces.u) * flow).sum())
    energy = (
        float(pieces.over_gt(flow.real**2).sum()),
        float(pieces.over_gt(flow.imag**2).sum()),
        float(pieces.over_gt(flow.real * flow.imag).sum()),
    )
    peak = max(float(np.abs(flow).max()), float(np.abs(first).max()), 1e-300)
    return Shear(first, moment, closed, total, flow, torque, energy, abs(rest[0]) / peak)


def _over_gt(graph: Network, value: Complexes) -> Complexes:
    """Integral of a complex value (m, k) over ds/(g t), (m,)."""
    p = graph.pieces
    return np.asarray(p.over_gt(value.real) + 1j * p.over_gt(value.imag))


def shear_flexibility(found: Shear, k_x: complex, k_y: complex) -> tuple[Floats, float]:
    """Integrals of q q ds/(g t) of the two unit loads: ((2,) own terms, coupling) [1/L^2]."""
    xx, yy, xy = found.energy
    form = np.array([[xx, xy], [xy, yy]])
    a, b = np.array([k_x.real, k_x.imag]), np.array([k_y.real, k_y.imag])
    return np.array([a @ form @ a, b @ form @ b]), float(a @ form @ b)
