"""A wall as a band: the map (s, n) -> (x, y) from arc length and offset to the plane.

s runs along the midline from the wall's start, n to its left. The map is defined beyond both ends:
straight walls run on, arcs run on along their tangents, thickness stays linear in s.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .section import Section, Wall

Array = NDArray[np.float64]

# A third point this close to the chord (relative to it) makes an arc whose rise is lost in round-off.
FLAT_ARC = 1e-9


@dataclass(frozen=True)
class Band:
    """Geometry of one wall.

    Parameters
    ----------
    name, start, end : str
    origin : (2,) array
        Start of the midline [L].
    heading : float
        Direction of the midline at the start [rad].
    length : float
        Arc length of the midline [L].
    curvature : float
        Positive where the midline turns left; 0 for a straight wall [1/L].
    thickness : (float, float)
        At s = 0 and s = length [L].
    """

    name: str
    start: str
    end: str
    origin: Array
    heading: float
    length: float
    curvature: float
    thickness: tuple[float, float]

    @cached_property
    def slope(self) -> float:
        """Change of half thickness along s [-]."""
        return 0.5 * (self.thickness[1] - self.thickness[0]) / self.length

    def half(self, s: ArrayLike) -> Array:
        """Half thickness at s [L]."""
        return 0.5 * self.thickness[0] + self.slope * np.asarray(s, dtype=float)

    def angle(self, s: ArrayLike) -> Array:
        """Direction of the midline at s [rad]; constant beyond the ends."""
        return self.heading + self.curvature * np.clip(np.asarray(s, dtype=float), 0.0, self.length)

    def direction(self, s: ArrayLike) -> Array:
        """Unit tangent at s, shape (..., 2)."""
        a = self.angle(s)
        return np.stack([np.cos(a), np.sin(a)], axis=-1)

    def normal(self, s: ArrayLike) -> Array:
        """Unit normal to the left at s, shape (..., 2)."""
        a = self.angle(s)
        return np.stack([-np.sin(a), np.cos(a)], axis=-1)

    def midline(self, s: ArrayLike) -> Array:
        """Point of the midline at s, shape (..., 2)."""
        s = np.asarray(s, dtype=float)
        if self.curvature == 0.0:
            return self.origin + s[..., None] * self.direction(s)
        inside = np.clip(s, 0.0, self.length)
        # chord of the arc in the form that keeps its digits for slight curvature
        half_turn = 0.5 * self.curvature * inside
        chord = inside * np.sinc(half_turn / np.pi)
        towards = self.heading + half_turn
        arc = self.origin + chord[..., None] * np.stack([np.cos(towards), np.sin(towards)], axis=-1)
        return arc + (s - inside)[..., None] * self.direction(s)

    def place(self, s: ArrayLike, n: ArrayLike) -> Array:
        """Point at arc length s and offset n to the left, shape (..., 2)."""
        n = np.asarray(n, dtype=float)
        return self.midline(s) + n[..., None] * self.normal(s)

    def face_slope(self, s: ArrayLike, sign: float) -> Array:
        """Derivative of the left (+1) or right (-1) face with s, shape (..., 2)."""
        s = np.asarray(s, dtype=float)
        curvature = np.where((s >= 0.0) & (s <= self.length), self.curvature, 0.0)
        stretch = 1.0 - curvature * sign * self.half(s)
        return stretch[..., None] * self.direction(s) + sign * self.slope * self.normal(s)

    @property
    def straight(self) -> bool:
        """True where the faces are straight lines."""
        return self.curvature == 0.0


def band(wall: Wall, section: Section) -> Band:
    """Geometry of a wall of the section."""
    p = np.array(section.points[wall.start], dtype=float)
    q = np.array(section.points[wall.end], dtype=float)
    chord = q - p
    span = float(np.hypot(*chord))
    heading = float(np.arctan2(chord[1], chord[0]))
    if wall.arc_through is not None:
        m = np.array(wall.arc_through, dtype=float)
        # angle at m under which the chord is seen; the arc turns by twice its supplement
        a, b = p - m, q - m
        seen = np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b)
        turn = 2.0 * (np.sign(seen) * np.pi - seen)
        if abs(turn) > FLAT_ARC:
            turn = -turn if _on_left(p, q, m) == (turn > 0) else turn
            curvature = 2.0 * np.sin(0.5 * turn) / span
            length, heading = float(turn / curvature), heading - 0.5 * turn
            return Band(
                wall.name, wall.start, wall.end, p, heading, length, float(curvature), wall.thickness
            )  # fmt: skip
    return Band(wall.name, wall.start, wall.end, p, heading, span, 0.0, wall.thickness)


def _on_left(p: Array, q: Array, m: Array) -> bool:
    """True where m lies to the left of the chord from p to q (then the arc turns right)."""
    return bool((q[0] - p[0]) * (m[1] - p[1]) - (q[1] - p[1]) * (m[0] - p[0]) > 0)


@dataclass(frozen=True)
class WallEnd:
    """A wall seen from one of its ends: s runs away from the joint, sides are left and right of that view."""

    band: Band
    reverse: bool

    @property
    def key(self) -> tuple[str, bool]:
        return self.band.name, self.reverse

    @property
    def opposite(self) -> WallEnd:
        return WallEnd(self.band, not self.reverse)

    def along(self, s: float) -> float:
        """The wall's own s for a distance s from this end."""
        return self.band.length - s if self.reverse else s

    @property
    def direction(self) -> Array:
        """Unit direction away from the joint, (2,)."""
        d = self.band.direction(self.along(0.0))
        return -d if self.reverse else d

    @property
    def bearing(self) -> float:
        """Direction away from the joint [rad], -pi to pi."""
        d = self.direction
        return float(np.arctan2(d[1], d[0]))

    def half(self, s: float = 0.0) -> float:
        """Half thickness at distance s from this end [L]."""
        return float(self.band.half(self.along(s)))

    def side(self, s: ArrayLike, sign: float) -> Array:
        """Point of the left (+1) or right (-1) face at distance s from the joint, shape (..., 2)."""
        own = self.band.length - np.asarray(s, float) if self.reverse else np.asarray(s, float)
        n = (-sign if self.reverse else sign) * self.band.half(own)
        return self.band.place(own, n)

    def side_slope(self, s: float, sign: float) -> Array:
        """Derivative of ``side`` with s, (2,)."""
        slope = self.band.face_slope(self.along(s), -sign if self.reverse else sign)
        return -slope if self.reverse else slope
