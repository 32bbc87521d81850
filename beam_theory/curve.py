"""Midline curves of many walls at once: straight lines and circular arcs in one stable closed form.

With the fraction u of the length L, the heading psi at the start and the sweep alpha (zero for a straight
wall), a place on the midline is, as a complex number x + i y,

    P(u) = P0 + L exp(i psi) u phi1(i alpha u),      phi1(z) = (exp z - 1)/z,

and the integrals that thin-walled theory needs follow from phi2(z) = (exp z - 1 - z)/z^2 and
phi3(z) = (exp z - 1 - z - z^2/2)/z^3. The phi functions are entire, so shallow arcs lose no digit and a
straight wall is the case alpha = 0. They are those of exponential integrators (Hochbruck and Ostermann,
Acta Numerica 19, 2010, eq. 2.10, from memory).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Complexes, Floats, Integers

__all__ = ["Curves", "arc", "cross", "phi"]

_TERMS = 10
_ODD = tuple((-1.0) ** k / math.factorial(2 * k + 3) for k in range(_TERMS))
_EVEN = tuple((-1.0) ** k / math.factorial(2 * k + 4) for k in range(_TERMS))


def phi(order: int, angle: Floats) -> Complexes:
    """phi_order(i angle) for order 1, 2 or 3; any shape in, the same shape out.

    phi1 = exp(i a/2) sinc(a/2), phi2 = sinc(a/2)^2/2 + i a S, phi3 = S + i a C, with S = (a - sin a)/a^3 and
    C = (cos a - 1 + a^2/2)/a^4, by series below 1.
    """
    out = np.full(np.shape(angle), 1.0 / math.factorial(order), dtype=np.complex128)
    bent = angle != 0.0
    if not bent.any():
        return out
    a = angle[bent]
    if order == 1:
        out[bent] = np.exp(0.5j * a) * np.sinc(a / (2.0 * np.pi))
        return out
    near = np.abs(a) < 1.0
    far = np.where(near, 1.0, a)
    odd = np.where(near, _series(_ODD, a), (far - np.sin(far)) / far**3)
    if order == 2:
        out[bent] = 0.5 * np.sinc(a / (2.0 * np.pi)) ** 2 + 1j * a * odd
        return out
    even = np.where(near, _series(_EVEN, a), (np.cos(far) - 1.0 + 0.5 * far**2) / far**4)
    out[bent] = odd + 1j * a * even
    return out


def _series(terms: tuple[float, ...], a: Floats) -> Floats:
    """Power series in a^2; only meant for |a| < 1."""
    square = np.minimum(a * a, 1.0)
    value = np.full_like(a, terms[-1])
    for term in terms[-2::-1]:
        value = value * square + term
    return value


def cross(a: Complexes, b: Complexes) -> Floats:
    """z component of the vector product of plane vectors given as complex numbers."""
    return np.asarray((np.conj(a) * b).imag, dtype=np.float64)


def arc(start: complex, end: complex, through: complex | None) -> tuple[float, float, float]:
    """Heading at the start, length and sweep of the curve from start to end; through None: straight.

    The turn between the two chords at the third point is half of the sweep.
    """
    chord = end - start
    if through is None:
        return math.atan2(chord.imag, chord.real), abs(chord), 0.0
    turn = (through - start).conjugate() * (end - through)
    half = math.atan2(turn.imag, turn.real)
    return math.atan2(chord.imag, chord.real) - half, abs(chord) * half / math.sin(half), 2.0 * half


@dataclass(frozen=True)
class Curves:
    """n curves: start (n,) complex [L], heading (n,), length (n,) [L], sweep (n,), anticlockwise positive.

    In all methods u holds fractions of shape (n, k), one row a curve.
    """

    start: Complexes
    heading: Floats
    length: Floats
    sweep: Floats

    def travel(self, u: Floats) -> Complexes:
        """P(u) - P(0), (n, k) [L]."""
        scale = (self.length * np.exp(1j * self.heading))[:, None]
        return np.asarray(scale * u * phi(1, self.sweep[:, None] * u))

    def position(self, u: Floats) -> Complexes:
        """P(u), (n, k) [L]."""
        return np.asarray(self.start[:, None] + self.travel(u))

    def tangent(self, u: Floats) -> Complexes:
        """Unit tangent as a complex number, (n, k) [-]."""
        return np.asarray(np.exp(1j * (self.heading[:, None] + self.sweep[:, None] * u)))

    def arm(self, u: Floats) -> Floats:
        """Distance of the tangent line from the origin, anticlockwise positive, (n, k) [L]."""
        return cross(self.position(u), self.tangent(u))

    def swept(self, u: Floats) -> Floats:
        """Twice the area swept by the radius from the origin between 0 and u, (n, k) [L^2]."""
        bow = (self.length[:, None] * u) ** 2 * phi(2, self.sweep[:, None] * u).imag
        return np.asarray(cross(self.start[:, None] + 0.0 * u, self.travel(u)) + bow)

    def first_moment(self, u: Floats, at_start: Floats, rise: Floats) -> Complexes:
        """Integral of (at_start + rise u) P ds from 0 to u: S_x + i S_y, (n, k); at_start, rise (n,)."""
        angle = self.sweep[:, None] * u
        p2, p3 = phi(2, angle), phi(3, angle)
        a, r = at_start[:, None], rise[:, None]
        scale = (self.length * np.exp(1j * self.heading))[:, None]
        local = scale * u**2 * (a * p2 + r * u * (p2 - p3))
        plain = self.start[:, None] * u * (a + 0.5 * r * u)
        return np.asarray(self.length[:, None] * (plain + local))

    def moved(self, shift: complex) -> Curves:
        """The same curves with every place shifted."""
        return Curves(self.start + shift, self.heading, self.length, self.sweep)

    def pick(self, rows: slice | Integers) -> Curves:
        """Some of the curves."""
        return Curves(self.start[rows], self.heading[rows], self.length[rows], self.sweep[rows])
