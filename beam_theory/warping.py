"""Warping function and constant of a wall graph, and the sectorial shear centre."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats, Integers
from beam_theory.inertia import Inertia
from beam_theory.network import Network
from beam_theory.torsion import Torsion

__all__ = ["Warping", "sectorial_shear_centre", "warping"]


@dataclass(frozen=True)
class Warping:
    """omega about a pole: node (n,) [L^2], at the quadrature points (m, k); constant [L^6].

    gap: largest step of omega left over round a cell, over the largest omega: a check.
    pole: complex [L], from the centroid; cell_flow (c,): cell flows per unit rate of twist [L^2].
    """

    pole: complex
    cell_flow: Floats
    node: Floats
    at_quadrature: Floats
    constant: float
    gap: float


def along(
    graph: Network, mass: Inertia, cell_flow: Floats, pole: complex, rows: Integers, u: Floats
) -> Floats:
    """omega(u) - omega(0) on pieces (rows): integral of q_T/(g t) - p; u and result (rows, k)."""
    p = graph.pieces
    curves = p.curves.moved(-mass.centroid - pole).pick(rows)
    flow = graph.cell_sum(cell_flow)[rows]
    return np.asarray((flow * p.flexibility[rows])[:, None] * p.logarithmic(rows, u) - curves.swept(u))


# A warping function smaller than this share of the squared size of the section is round-off.
ROUND_OFF = 1e-13


def warping(graph: Network, mass: Inertia, twist: Torsion, pole: complex) -> Warping:
    """Warping function, e-weighted mean zero: d(omega)/ds = q_T/(g t) - p per unit rate of twist."""
    p = graph.pieces
    rows = np.arange(len(p.t0))
    one = np.ones((len(rows), 1))
    rise = along(graph, mass, twist.cell_flow, pole, rows, one)[:, 0]
    steps = rise.tolist()
    node = [0.0] * len(graph.node)
    for child, parent, piece, sign in reversed(graph.tree):
        node[child] = node[parent] - sign * steps[piece]
    corner = np.array(node)
    inside = corner[p.start][:, None] + along(graph, mass, twist.cell_flow, pole, rows, p.u)
    weight = p.eta
    mean = ((weight * inside).sum() + (graph.boom * corner).sum()) / mass.area
    corner, inside = corner - mean, inside - mean
    swept = np.abs(p.curves.moved(-mass.centroid - pole).swept(one)[:, 0])
    gap = float(np.abs(corner[p.end] - corner[p.start] - rise).max()) / max(float(swept.max()), 1e-300)
    # what is left of a warping function that cancels (angle, tee, square box) is round-off: exactly nothing
    largest = max(float(np.abs(corner).max()), float(np.abs(inside).max()))
    if largest <= ROUND_OFF * float(np.ptp(graph.node.real) + np.ptp(graph.node.imag)) ** 2:
        corner, inside = np.zeros_like(corner), np.zeros_like(inside)
    constant = float((weight * inside**2).sum() + (graph.boom * corner**2).sum())
    return Warping(pole, twist.cell_flow, corner, inside, constant, gap)


def sectorial_shear_centre(graph: Network, mass: Inertia, about_centroid: Warping) -> complex:
    """Shear centre from the centroid [L]: the pole for which the moments of e omega x and e omega y vanish.

    Moving the pole to s adds x_s y - y_s x to omega, so with I_wx, I_wy about the centroid
    Ixy x_s - Iyy y_s = -I_wx and Ixx x_s - Ixy y_s = -I_wy.
    """
    p = graph.pieces
    place = p.curves.moved(-mass.centroid).position(p.u)
    node = graph.node - mass.centroid
    weight = p.eta * about_centroid.at_quadrature
    force = graph.boom * about_centroid.node
    wx = float((weight * place.real).sum() + (force * node.real).sum())
    wy = float((weight * place.imag).sum() + (force * node.imag).sum())
    k = mass.slope(wx, wy)
    # mass.slope solves [Iyy Ixy; Ixy Ixx](a, b) = (wx, wy): a = y_s, b = -x_s.
    return complex(-k.imag, k.real)
