"""What lies between neighbouring walls at a point: corners, mitres, bevels, steps and free ends.

Walls at a point are sorted by bearing, anticlockwise. Each gap between a wall and the next one is closed
by a chain of vertices that leads from the left face of the first to the right face of the second. For
straight walls of half thickness h1, h2 with the angle theta between them the faces meet at

    s1 = (h2 + h1 cos theta) / sin theta,    s2 = (h1 + h2 cos theta) / sin theta               (1)

from the point along either wall; Newton's method on the face curves from there serves arcs and tapers too.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from .band import Array, WallEnd
from .boundary import Piece
from .errors import OutlineError

# A mitre farther from its point than this many times the larger thickness becomes a bevel.
MITRE_LIMIT = 4.0
# Faces closer to one line than this [rad] are taken as one line.
COLLINEAR = 1e-7
# Half thicknesses that differ by less than this (relative) are equal.
SAME_HALF = 1e-9
NEWTON_STEPS = 40


@dataclass(frozen=True)
class Chain:
    """Vertices that close the gap from ``first`` (its left face) to ``second`` (its right face).

    Parameters
    ----------
    pieces : tuple of Piece
        Lines and arcs from the end of the first wall's left face to the start of the second's right face;
        none where the faces meet.
    reach : (float, float)
        Distance from the point at which each face begins [L]; negative where it is extended.
    kind : str
        ``corner``, ``fillet``, ``mitre``, ``rounding``, ``bevel``, ``step``, ``free end`` or ``smooth``.
    """

    first: WallEnd
    second: WallEnd
    pieces: tuple[Piece, ...]
    reach: tuple[float, float]
    kind: str


def free_end(end: WallEnd) -> Chain:
    """The square end of a wall that nothing else meets."""
    return Chain(end, end, _lines(end.side(0.0, 1.0), end.side(0.0, -1.0)), (0.0, 0.0), "free end")


def _lines(*vertices: Array) -> tuple[Piece, ...]:
    """Straight pieces through vertices."""
    return tuple(Piece("closing", a, b) for a, b in pairwise(vertices))


def _gap(first: WallEnd, second: WallEnd) -> float:
    """Angle from the first wall anticlockwise to the second, in (0, 2 pi]."""
    gap = (second.bearing - first.bearing) % (2.0 * np.pi)
    return gap if gap > COLLINEAR else 2.0 * np.pi


def chain(place: Array, first: WallEnd, second: WallEnd) -> Chain:
    """The chain between two neighbouring walls of a point, corners sharp."""
    theta = _gap(first, second)
    h1, h2 = first.half(), second.half()
    if abs(theta - np.pi) < COLLINEAR and abs(h1 - h2) <= SAME_HALF * max(h1, h2):
        return Chain(first, second, (), (0.0, 0.0), "smooth")
    sine, cosine = float(np.sin(theta)), float(np.cos(theta))
    if abs(theta - np.pi) < COLLINEAR:
        return _step(place, first, second, wide_first=h1 > h2)
    if min(theta, 2.0 * np.pi - theta) < COLLINEAR:
        raise OutlineError(
            "overlap",
            (first.band.name, second.band.name),
            "two walls that leave a shared point in one direction",
        )
    guess = (h2 + h1 * cosine) / sine, (h1 + h2 * cosine) / sine
    reflex = theta > np.pi
    if reflex != (guess[0] < 0.0):
        return _step(place, first, second, wide_first=True)
    if reflex != (guess[1] < 0.0):
        return _step(place, first, second, wide_first=False)
    if not reflex:
        s1, s2 = _meet(first, second, guess)
        return Chain(first, second, (), (s1, s2), "corner")
    # the faces extended beyond the point are straight, so the guess is exact up to the taper
    s1, s2 = _meet(first, second, guess)
    tip = first.side(s1, 1.0)
    limit = MITRE_LIMIT * 2.0 * max(h1, h2)
    distance = float(np.hypot(*(tip - place)))
    if distance <= limit:
        return Chain(first, second, (), (s1, s2), "mitre")
    towards = (tip - place) / distance
    ends = [
        _reach_plane(first, 1.0, place, towards, limit),
        _reach_plane(second, -1.0, place, towards, limit),
    ]
    line = _lines(first.side(ends[0], 1.0), second.side(ends[1], -1.0))
    return Chain(first, second, line, (ends[0], ends[1]), "bevel")


def _meet(first: WallEnd, second: WallEnd, guess: tuple[float, float]) -> tuple[float, float]:
    """Distances from the point at which the left face of first meets the right face of second."""
    s = np.array(guess)
    size = first.half() + second.half()
    for _ in range(NEWTON_STEPS):
        miss = first.side(s[0], 1.0) - second.side(s[1], -1.0)
        slopes = np.column_stack([first.side_slope(s[0], 1.0), -second.side_slope(s[1], -1.0)])
        try:
            step = np.linalg.solve(slopes, miss)
        except np.linalg.LinAlgError:
            break
        s = s - step
        if np.abs(step).max() <= 1e-12 * size:
            return float(s[0]), float(s[1])
    if np.hypot(*miss) <= 1e-9 * size:
        return float(s[0]), float(s[1])
    # faces that never meet eat up both walls: their joint is then made by polygon union
    return first.band.length, second.band.length


def _reach_plane(end: WallEnd, sign: float, place: Array, towards: Array, limit: float) -> float:
    """Distance along ``end`` at which its extended face reaches the plane at ``limit`` from the point."""
    base, slope = end.side(0.0, sign), end.side_slope(0.0, sign)
    return float((limit - (base - place) @ towards) / (slope @ towards))


def _step(place: Array, first: WallEnd, second: WallEnd, *, wide_first: bool) -> Chain:
    """The narrower wall's face run on to the square end of the wider wall."""
    wide, narrow, sign = (first, second, -1.0) if wide_first else (second, first, 1.0)
    s = 0.0
    for _ in range(NEWTON_STEPS):
        off = float((narrow.side(s, sign) - place) @ wide.direction)
        if abs(off) <= 1e-14 * wide.half():
            break
        s -= off / float(narrow.side_slope(s, sign) @ wide.direction)
    corner, foot = wide.side(0.0, -sign), narrow.side(s, sign)
    if wide_first:
        return Chain(first, second, _lines(corner, foot), (0.0, s), "step")
    return Chain(first, second, _lines(foot, corner), (s, 0.0), "step")
