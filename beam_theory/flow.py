"""Shear flow of one load along every wall."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from beam_theory.arrays import Complexes, Floats
from beam_theory.curve import Curves
from beam_theory.network import Network

__all__ = ["Flow", "FlowPeak", "FlowPolynomial"]

_NEUTRAL = 1e-11


@dataclass(frozen=True)
class FlowPeak:
    """Largest flow of a set of walls, with its sign, and where.

    Attributes
    ----------
    wall, at : the wall, and the fraction of its length [-]
    flow : [F/L]
    """

    wall: str
    at: float
    flow: float


@dataclass(frozen=True)
class FlowPolynomial:
    """Flow of a straight piece between two wall fractions: q = sum of coefficients[k] v^k.

    Attributes
    ----------
    first, last : fractions of the wall; v runs from 0 to 1 between them [-]
    coefficients : (4,), constant first [F/L]
    """

    first: float
    last: float
    coefficients: tuple[float, float, float, float]


@dataclass(frozen=True)
class Flow:
    """Shear flow q = q_V + q_T, positive along each wall's own direction [F/L].

    Parameters
    ----------
    graph : Network
        The walls in pieces.
    centroid : complex
        x + i y in the file's axes [L].
    slope : complex
        a + i b of f = a x + b y [F/L^4], x and y from the centroid.
    shear_start : (m,) [F/L]
        Flow of the shear at the start of each piece, zero twist.
    torque_flow : (m,) [F/L]
        Flow of the torque in each piece; zero in walls in no cell.
    torque_about_shear_centre : float [F L]
        T_sc = T + (x_p - x_s) Vy - (y_p - y_s) Vx.
    open_torque : float [F L]
        Part of T_sc that walls in no cell carry.
    twist : float [F/L^2]
        Rate of twist times G_base.
    """

    graph: Network = field(repr=False)
    centroid: complex
    slope: complex
    shear_start: Floats = field(repr=False)
    torque_flow: Floats = field(repr=False)
    torque_about_shear_centre: float
    open_torque: float
    twist: float

    def at(self, wall: str, fractions: Floats) -> Floats:
        """Flow at fractions (n,) of a wall, (n,) [F/L]; at a boom the value on the start's side of it."""
        piece, u = self.graph.place(wall, fractions)
        start = self.shear_start[piece] + self.torque_flow[piece]
        return np.asarray(start - self.run(piece, u[:, None])[:, 0])

    def shear_at(self, wall: str, fractions: Floats) -> Floats:
        """Part of the flow that belongs to the shear through the shear centre, (n,) [F/L]."""
        piece, u = self.graph.place(wall, fractions)
        return np.asarray(self.shear_start[piece] - self.run(piece, u[:, None])[:, 0])

    def stationary(self, wall: str) -> Floats:
        """Fractions (k,) strictly inside the wall where dq/ds = 0 because f changes sign there."""
        found: list[float] = []
        p = self.graph.pieces
        rows = self.graph.rows(wall)
        for piece in range(rows.start, rows.stop):
            if p.e[piece] > 0.0:
                span = p.last[piece] - p.first[piece]
                found += [float(p.first[piece] + span * v) for v in self._zeros(piece)]
        return np.array([v for v in sorted(found) if 0.0 < v < 1.0])

    def polynomial(self, wall: str) -> tuple[FlowPolynomial, ...]:
        """Flow of a straight wall as cubics, one for each piece between booms.

        Raises
        ------
        ValueError
            For an arc, whose flow is no polynomial.
        """
        p = self.graph.pieces
        out = []
        for piece in range(self.graph.rows(wall).start, self.graph.rows(wall).stop):
            if p.curves.sweep[piece] != 0.0:
                raise ValueError(f"wall {wall!r} is an arc: its flow is no polynomial")
            start = float(self.shear_start[piece] + self.torque_flow[piece])
            coefficients = (start, *self.cubic(piece))
            out.append(FlowPolynomial(float(p.first[piece]), float(p.last[piece]), coefficients))
        return tuple(out)

    def cubic(self, piece: int) -> tuple[float, float, float]:
        """Coefficients of v, v^2, v^3 of the flow of a straight piece [F/L]."""
        p = self.graph.pieces
        place = p.curves.start[piece] - self.centroid
        length = float(p.length[piece])
        along = length * np.exp(1j * p.curves.heading[piece])
        at, rise = p.e[piece] * p.t0[piece], p.e[piece] * (p.t1[piece] - p.t0[piece])
        k = np.conj(self.slope)
        c1 = -float((k * place * at).real) * length
        c2 = -float((k * 0.5 * (place * rise + along * at)).real) * length
        c3 = -float((k * along * rise / 3.0).real) * length
        return c1, c2, c3

    def resultant(self) -> tuple[float, float, float]:
        """Vx, Vy [F] and torque about the origin of the axes [F L], open walls' own torque included."""
        p = self.graph.pieces
        flow = self.at_quadrature()
        force = complex((p.ds * flow * p.curves.tangent(p.u)).sum())
        local = p.curves.moved(-self.centroid)
        torque = float((p.ds * flow * local.arm(p.u)).sum())
        carried = (self.centroid.conjugate() * force).imag
        return force.real, force.imag, torque + carried + self.open_torque

    def peak(self, wall: str | None = None) -> FlowPeak:
        """Largest |q| of a wall, or of all walls, at ends, booms or stationary places."""
        best: FlowPeak | None = None
        p = self.graph.pieces
        for name in (wall,) if wall is not None else tuple(self.graph.walls):
            rows = self.graph.rows(name)
            for piece in range(rows.start, rows.stop):
                v = np.array([0.0, 1.0, *self._zeros(piece)])
                start = self.shear_start[piece] + self.torque_flow[piece]
                q = start - self.run(np.full(len(v), piece), v[:, None])[:, 0]
                i = int(np.argmax(np.abs(q)))
                if best is None or abs(q[i]) > abs(best.flow) * (1.0 + 1e-12):
                    at = p.first[piece] + (p.last[piece] - p.first[piece]) * v[i]
                    best = FlowPeak(name, float(at), float(q[i]))
        assert best is not None
        return best

    def run(self, piece: np.ndarray, u: Floats) -> Floats:
        """What e t f takes from the flow between the start of each piece and u; (n,), (n, k) -> (n, k)."""
        p = self.graph.pieces
        curves = p.curves.moved(-self.centroid).pick(piece)
        e = p.e[piece]
        moment = curves.first_moment(u, e * p.t0[piece], e * (p.t1[piece] - p.t0[piece]))
        return np.asarray((np.conj(self.slope) * moment).real)

    def at_quadrature(self) -> Floats:
        """Flow at the quadrature points, (m, k) [F/L]."""
        p = self.graph.pieces
        return np.asarray(
            (self.shear_start + self.torque_flow)[:, None] - self.run(np.arange(len(p.t0)), p.u)
        )

    def _zeros(self, piece: int) -> list[float]:
        """Fractions within a piece where f = 0 with a change of sign: between its extremes, never at one."""
        p = self.graph.pieces
        k = self.slope
        if k == 0.0 or p.e[piece] == 0.0:
            return []
        curve = p.curves.moved(-self.centroid).pick(slice(piece, piece + 1))
        sweep = float(curve.sweep[0])
        marks = [0.0, 1.0]
        if sweep != 0.0:
            # f is extreme where the tangent is normal to (a, b).
            across = math.atan2(k.imag, k.real) + 0.5 * math.pi - float(curve.heading[0])
            turns = range(-4, 5)
            marks += [v for n in turns if 0.0 < (v := (across + n * math.pi) / sweep) < 1.0]
        u = np.array(sorted(marks))
        f = (np.conj(k) * curve.position(u[None, :])[0]).real
        scale = abs(k) * float(np.abs(self.graph.node - self.centroid).max())
        f[np.abs(f) <= _NEUTRAL * scale] = 0.0
        out: list[float] = []
        for i in range(len(u) - 1):
            if f[i] * f[i + 1] < 0.0:
                out.append(_root(curve, k, float(u[i]), float(u[i + 1]), float(f[i]), float(f[i + 1])))
        return out


def _root(curve: Curves, k: complex, low: float, high: float, f_low: float, f_high: float) -> float:
    """Zero of f between two marks of different sign: secant steps kept inside a shrinking bracket."""
    u = low + (high - low) * f_low / (f_low - f_high)
    if curve.sweep[0] == 0.0:
        return u
    for _ in range(80):
        place: Complexes = curve.position(np.array([[u]]))
        f = float((np.conj(k) * place[0, 0]).real)
        if f == 0.0:
            break
        if f * f_low > 0.0:
            low = u
        else:
            high = u
        tangent = curve.tangent(np.array([[u]]))[0, 0]
        rate = float((np.conj(k) * tangent).real) * float(curve.length[0])
        step = u - f / rate if rate != 0.0 else low
        step = step if low < step < high else 0.5 * (low + high)
        if abs(step - u) <= 4e-16:
            break
        u = step
    return u
