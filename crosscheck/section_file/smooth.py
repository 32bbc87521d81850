"""Smooth paths: a chain of circular arcs through points, with one tangent wherever two of them meet.

At an inner point the tangent is that of the circle through the point and its two neighbours; at an end it
mirrors the tangent of the next point about the chord, so that the last span is one arc. A span whose ends
do not lie on one circle with both tangents gets two arcs of equal tangent lengths (a biarc), which meet at a
place of their own. Points taken from a circle give that circle back.

References
----------
K. M. Bolton, Biarc curves, Computer-Aided Design 7, 1975, pp. 89-92 (the method; from memory).
"""

from __future__ import annotations

import cmath
import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from crosscheck.section_file.model import Place

# Turn of an arc [rad] below which it is a straight wall.
STRAIGHT = 1e-9
# Angle between a span and the tangent at its end [rad] above which the chain folds back on itself.
STEEPEST = 2.6


@dataclass(frozen=True)
class ArcPiece:
    """One arc of a span: its end and a third place on it [L]; ``through`` None where it is straight."""

    end: Place
    through: Place | None


class FoldedPath(ValueError):
    """A path that turns too sharply for arcs; ``index`` is that of the point in the path."""

    def __init__(self, index: int) -> None:
        super().__init__(index)
        self.index = index


def smooth_spans(places: Sequence[Place]) -> list[tuple[ArcPiece, ...]]:
    """Arcs of every span of a path, one or two each.

    Parameters
    ----------
    places : of the points, neighbours apart; the first again at the end for a closed path [L]

    Returns
    -------
    One tuple of arcs per span; the first arc starts at the span's first point.

    Raises
    ------
    FoldedPath : where a tangent points back along a span
    """
    z = [complex(*place) for place in places]
    tangents = _tangents(z)
    spans: list[tuple[ArcPiece, ...]] = []
    for index, ((p, q), (t, u)) in enumerate(zip(pairwise(z), pairwise(tangents), strict=True)):
        chord = (q - p) / abs(q - p)
        first, last = cmath.phase(t / chord), cmath.phase(u / chord)
        # The tangent at a free end follows from the point next to it, which is then the one that folds.
        if abs(first) > STEEPEST:
            raise FoldedPath(index or 1)
        if abs(last) > STEEPEST:
            raise FoldedPath(min(index + 1, len(z) - 2))
        if abs(first + last) <= STRAIGHT:
            spans.append((_arc(p, q, first),))
            continue
        d = _tangent_length(q - p, t, u)
        middle = 0.5 * (p + d * t + q - d * u)
        start_turn = cmath.phase((middle - p) / t)
        end_turn = cmath.phase(u / (q - middle))
        spans.append((_arc(p, middle, -start_turn), _arc(middle, q, -end_turn)))
    return spans


def _tangents(z: Sequence[complex]) -> list[complex]:
    """Unit tangent at every place of a path."""
    if z[0] == z[-1]:
        inner = [_tangent(z[k - 1] if k else z[-2], z[k], z[k + 1]) for k in range(len(z) - 1)]
        return [*inner, inner[0]]
    inner = [_tangent(*z[k - 1 : k + 2]) for k in range(1, len(z) - 1)]
    first = _mirrored(inner[0], z[1] - z[0])
    last = _mirrored(inner[-1], z[-1] - z[-2])
    return [first, *inner, last]


def _tangent(before: complex, here: complex, after: complex) -> complex:
    """Direction at a place of the circle through it and its neighbours; of a full circle anticlockwise."""
    chord = after - before
    if chord == 0:  # two points, out and back: the circle on them as diameter
        out = here - before
        return complex(-out.imag, out.real) / abs(out)
    turned = (here - before) * (after - here) / chord
    return turned / abs(turned)


def _mirrored(tangent: complex, chord: complex) -> complex:
    """Direction at the other end of the single arc over a chord."""
    return chord / chord.conjugate() * tangent.conjugate()


def _tangent_length(v: complex, t: complex, u: complex) -> float:
    """d of |v - d (t + u)| = 2 d: both arcs of the biarc over v have tangents of this length [L]."""
    along = (v * (t + u).conjugate()).real
    across = 2.0 * (1.0 - (t * u.conjugate()).real)
    # The form without cancellation: v v/(along + root) solves the quadratic equation for across = 0 too.
    return abs(v) ** 2 / (along + math.sqrt(along * along + across * abs(v) ** 2))


def _arc(p: complex, q: complex, turn: float) -> ArcPiece:
    """The arc from p to q whose tangent at p lies at the angle ``turn`` from the chord [rad]."""
    end = (q.real, q.imag)
    if abs(turn) <= STRAIGHT:
        return ArcPiece(end, None)
    # Tangent left of the chord: the arc bulges to the left by half the chord times tan(turn/2).
    rise = 0.5 * math.tan(0.5 * turn)
    through = p + (q - p) * complex(0.5, rise)
    return ArcPiece(end, (through.real, through.imag))
