"""Torsion constant with the thickness of the walls taken into account."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.joints import Joint, joints
from beam_theory.network import Network
from beam_theory.torsion import Torsion, closing

__all__ = ["ThickTorsion", "thick_torsion"]


@dataclass(frozen=True)
class ThickTorsion:
    """Corrected torsion; reason: why there is no corrected J; joints and notes: what was done where."""

    torsion: Torsion
    reason: str | None
    joints: tuple[Joint, ...]
    notes: tuple[str, ...]


def thick_torsion(graph: Network) -> ThickTorsion:
    """Torsion constant of walls with thickness: J = 2 A . c + J_0, F c = 2 A.

    J_0 is what remains with no flow round any cell: the integral of g t^3/3 over *all* walls, with end and
    joint terms. F and A come from the harmonic function that carries a cell's flow: corners and the curvature
    of arcs change them. In an arc of mid radius R, with x = t/(2 R), exact for concentric faces,
    ds/(g t) is multiplied by x/artanh x, the area per radian changes by R^2/2 (x/artanh x - 1) and t^3/3 is
    multiplied by 3/(4 x^2) (1 + x^2 - x/artanh x).

    End and joint terms of open walls come all together or not at all: without the joints the ends make J
    worse. A section without cells has no corrected J where a joint has no published term.

    References
    ----------
    Closed rounded boxes: EN 10210-2, annex, I_t = t^3 h/3 + 2 K A_h (the same but for the curvature terms,
    from memory). Arcs: exact for rings (any text). Joints: see corner_terms.
    """
    p = graph.pieces
    curvature = p.curves.sweep / p.curves.length
    x = np.minimum(0.5 * p.t * np.abs(curvature)[:, None], 1.0 - 1e-12)
    tension = _over_artanh(x)
    flexibility = p.over_gt(tension)
    # Twice the area to the left of each piece: the midline's and the change by curvature.
    bent = np.abs(curvature) > 0.0
    radius = np.where(bent, 1.0 / np.where(bent, curvature, 1.0), 0.0)
    centre = complex(np.mean(graph.node))
    one = np.ones((len(p.t0), 1))
    swept = p.curves.moved(-centre).swept(one)[:, 0]
    weight = p.ds
    swept = swept + (weight * (radius[:, None] * (tension - 1.0))).sum(axis=1)
    own = p.g * (weight * p.t**3 / 3.0 * _thick_ring(x, tension)).sum(axis=1)
    found = joints(graph)
    terms, notes, reason = _terms(graph, found)
    for joint in found:
        if joint.turn != 0.0:
            end = joint.ends[0]
            flexibility[end.piece] += joint.length
            walked = -1.0 if end.at_start else 1.0
            swept[end.piece] += 2.0 * joint.area * walked * (1.0 if joint.turn > 0.0 else -1.0)
    twice = graph.round_cells(swept)
    flow = closing(graph, twice[:, None], flexibility)[:, 0]
    torsion = Torsion(flow, float(twice @ flow), float(own.sum()) + terms, own)
    return ThickTorsion(torsion, reason, found, notes)


def _terms(graph: Network, found: tuple[Joint, ...]) -> tuple[float, tuple[str, ...], str | None]:
    """Sum of the end and joint terms that may be used, notes, and the reason why J has none."""
    notes: list[str] = []
    missing = [f"{j.point} ({j.source})" for j in found if j.term is None]
    closed = sum(j.term for j in found if j.term is not None and not j.is_open)
    if graph.cells.count == 0:
        if missing:
            return 0.0, (), "not available here: no published joint term at " + ", ".join(missing[:6])
        return sum(j.term for j in found if j.term is not None), (), None
    if missing:
        notes.append("corrected torsion constant: no term for the joints at " + ", ".join(missing[:6]))
    opened = [j for j in found if j.is_open]
    if opened:
        notes.append("corrected torsion constant: free ends and joints of walls outside the cells left out")
    return closed, tuple(notes), None


def _over_artanh(x: Floats) -> Floats:
    """x/artanh(x), by series near zero."""
    small = x < 0.02
    safe = np.where(small, 0.5, x)
    series = 1.0 - x**2 / 3.0 - 4.0 * x**4 / 45.0 - 44.0 * x**6 / 945.0
    return np.where(small, series, safe / np.arctanh(safe))


def _thick_ring(x: Floats, over: Floats) -> Floats:
    """3/(4 x^2) (1 + x^2 - x/artanh x), by series near zero."""
    small = x < 0.02
    safe = np.where(small, 0.5, x)
    series = 1.0 + x**2 / 15.0 + 11.0 * x**4 / 315.0
    return np.where(small, series, 0.75 / safe**2 * (1.0 + safe**2 - over))
