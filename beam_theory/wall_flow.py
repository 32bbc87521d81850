"""Flow of one stretch of wall in closed form, for the hand sheet."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.flow import Flow

__all__ = ["WallFlow", "wall_flows"]


@dataclass(frozen=True)
class WallFlow:
    """Flow between two booms, v running 0..1 from `first` to `last`.

    Straight: q = sum of polynomial[k] v^k. Arc: on top of that trigonometric = (c, s, vc, vs) adds
    (c + vc v) cos(phi) + (s + vs v) sin(phi), phi = phi_start + sweep v the polar angle seen from the centre
    of the arc; empty for a straight wall.

    Attributes
    ----------
    wall, first, last : the wall, and fractions of its length [-]
    start, middle, end : values there [F/L]
    polynomial, trigonometric : coefficients [F/L]
    phi_start, sweep : of an arc [rad]
    """

    wall: str
    first: float
    last: float
    start: float
    middle: float
    end: float
    polynomial: tuple[float, ...]
    trigonometric: tuple[float, ...] = ()
    phi_start: float = 0.0
    sweep: float = 0.0

    def at(self, v: Floats) -> Floats:
        """Flow at stretch fractions v (n,), from the printed coefficients alone."""
        q = np.polynomial.polynomial.polyval(v, np.array(self.polynomial))
        if self.trigonometric:
            c, s, vc, vs = self.trigonometric
            phi = self.phi_start + self.sweep * v
            q = q + (c + vc * v) * np.cos(phi) + (s + vs * v) * np.sin(phi)
        return np.asarray(q)


def wall_flows(flow: Flow, start: Floats) -> tuple[WallFlow, ...]:
    """Closed forms of the flow of every stretch for the flow at its start, (m,) [F/L]."""
    p, section = flow.graph.pieces, flow.graph.section
    half = np.full((len(p.t0), 1), 0.5)
    rows = np.arange(len(p.t0))
    middle = start - flow.run(rows, half)[:, 0]
    end = start - flow.run(rows, 2.0 * half)[:, 0]
    out = []
    for i, number in enumerate(p.wall.tolist()):
        polynomial, trigonometric, phi = _closed_form(flow, i, float(start[i]))
        out.append(
            WallFlow(
                section.walls[number].name, float(p.first[i]), float(p.last[i]), float(start[i]),
                float(middle[i]), float(end[i]), polynomial, trigonometric, phi, float(p.curves.sweep[i]),
            )
        )  # fmt: skip
    return tuple(out)


def _closed_form(flow: Flow, i: int, q0: float) -> tuple[tuple[float, ...], tuple[float, ...], float]:
    """Polynomial and trigonometric coefficients of stretch i, and the polar angle at its start."""
    p = flow.graph.pieces
    k = flow.slope.conjugate()
    place = complex(p.curves.start[i]) - flow.centroid
    length, sweep, heading = float(p.length[i]), float(p.curves.sweep[i]), float(p.curves.heading[i])
    at, rise = float(p.e[i] * p.t0[i]), float(p.e[i] * (p.t1[i] - p.t0[i]))
    if sweep == 0.0:
        return (q0, *flow.cubic(i)), (), 0.0
    radius = length / abs(sweep)
    phi = heading - np.copysign(0.5 * np.pi, sweep)
    centre = place - radius * complex(np.exp(1j * phi))
    weight = k * length * radius
    b0 = weight * (-1j * at / sweep + rise / sweep**2)
    b1 = weight * (-1j * rise / sweep)
    constant = q0 + (b0 * complex(np.exp(1j * phi))).real
    line = -(k * centre).real * length
    return (constant, line * at, 0.5 * line * rise), (-b0.real, b0.imag, -b1.real, b1.imag), float(phi)
