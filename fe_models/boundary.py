"""Boundary pieces: straight lines, faces of walls and circular arcs, and the rings they make."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from .band import Array, Band

EndKey = tuple[str, bool]


@dataclass(frozen=True)
class Arc:
    """A circular arc from angle ``first`` to ``last`` [rad] about a centre."""

    centre: Array
    radius: float
    first: float
    last: float


@dataclass(frozen=True)
class Piece:
    """One smooth piece of a boundary, run through with the material on its left.

    Parameters
    ----------
    kind : str
        ``face`` of a wall, ``cut`` across a wall (no boundary of the solid), ``closing`` line of a gap, or
        ``arc`` of a fillet or a rounded corner.
    start, end : (2,) arrays
        End points [L].
    band : Band, optional
        The wall of a face.
    side : float
        +1 left, -1 right face in the wall's own direction.
    span : (float, float)
        The wall's own s at start and end of the piece [L].
    cut : (str, bool), optional
        Key of the wall end that a cut leads to.
    arc : Arc, optional
    width : float, optional
        Width of the solid across the piece, where no wall tells it [L].
    calm : bool
        True where another piece faces this one all along at that width, so that long elements serve.
    """

    kind: str
    start: Array
    end: Array
    band: Band | None = None
    side: float = 0.0
    span: tuple[float, float] = (0.0, 0.0)
    cut: EndKey | None = None
    arc: Arc | None = None
    width: float | None = None
    calm: bool = False

    @property
    def straight(self) -> bool:
        return self.turn == 0.0

    @property
    def turn(self) -> float:
        """Angle through which the piece turns [rad], without sign."""
        if self.arc is not None:
            return abs(self.arc.last - self.arc.first)
        if self.band is None:
            return 0.0
        inside = np.clip(self.span, 0.0, self.band.length)
        return abs(self.band.curvature * float(inside[1] - inside[0]))

    @property
    def radius(self) -> float:
        """Radius of a curved piece, of its wall's midline for a face [L]; infinite for a straight one."""
        if self.arc is not None:
            return self.arc.radius
        return np.inf if self.straight or self.band is None else 1.0 / abs(self.band.curvature)

    @property
    def length(self) -> float:
        """Length of the piece [L]."""
        if self.arc is not None:
            return self.arc.radius * self.turn
        if self.straight:
            return float(np.hypot(*(self.end - self.start)))
        points = self.at(np.linspace(0.0, 1.0, 33))
        return float(np.hypot(*np.diff(points, axis=0).T).sum())

    def at(self, u: ArrayLike) -> Array:
        """Points at fractions u of the piece, shape (..., 2)."""
        u = np.asarray(u, dtype=float)
        if self.arc is not None:
            a = self.arc.first + u * (self.arc.last - self.arc.first)
            return self.arc.centre + self.arc.radius * np.stack([np.cos(a), np.sin(a)], axis=-1)
        if self.straight or self.band is None:
            return self.start + u[..., None] * (self.end - self.start)
        s = self.span[0] + u * (self.span[1] - self.span[0])
        return self.band.place(s, self.side * self.band.half(s))

    def rate(self, u: Array) -> Array:
        """Derivative of ``at`` with u, shape (q, 2)."""
        if self.arc is not None:
            sweep = self.arc.last - self.arc.first
            a = self.arc.first + u * sweep
            return self.arc.radius * sweep * np.stack([-np.sin(a), np.cos(a)], axis=-1)
        if self.straight or self.band is None:
            return np.broadcast_to(self.end - self.start, (*u.shape, 2))
        s = self.span[0] + u * (self.span[1] - self.span[0])
        return self.band.face_slope(s, self.side) * (self.span[1] - self.span[0])

    def part(self, first: float, last: float, width: float, calm: bool) -> Piece:
        """Fractions ``first`` to ``last`` of a line or an arc, with the width of the solid there."""
        start, end = self.start, self.end
        if (first, last) != (0.0, 1.0):
            start, end = self.at(np.array([first, last]))
        arc = self.arc
        if arc is not None:
            sweep = arc.last - arc.first
            arc = replace(arc, first=arc.first + first * sweep, last=arc.first + last * sweep)
        return replace(self, start=start, end=end, arc=arc, width=width, calm=calm)


Ring = list[Piece]


def polyline(ring: Ring, step: float = 0.05) -> Array:
    """Vertices of a ring without repetition, shape (n, 2); curved pieces in steps of at most ``step`` rad."""
    points = []
    for piece in ring:
        # two pieces make a ring only where an arc shows its rise
        least = 2 if len(ring) == 2 and not piece.straight else 1
        count = max(least, int(np.ceil(piece.turn / step)))
        points.append(piece.at(np.arange(count) / count))
    return np.concatenate(points)
