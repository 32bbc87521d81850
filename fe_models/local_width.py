"""Width of a solid across its boundary: how far it is from each piece to the one that faces it.

Rays leave the boundary along its inner normal; the first boundary they hit is what faces it. Pieces are cut
until the width along each is nearly constant, so that points along it can follow the width.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .band import Array
from .boundary import Piece, Ring

# Places along a piece at which the width is taken.
SAMPLES = np.array([0.03, 0.27, 0.5, 0.73, 0.97])
# Largest over least width along a piece that is cut no more.
EVEN = 1.5
# A piece this many widths long is cut no more.
SHORT = 1.5
MOST_CUTS = 9
MOST_TIP_EDGES = 4.0
# Steps in which arcs are hit [rad].
STEP = 0.1
# Rise of such a step over the least width.
RISE = 0.1
# Facing pieces whose directions differ by less [cosine] bound a wall.
PARALLEL = 0.95
# Neighbours at a convex corner whose directions differ by more [cosine] make a blunt wedge.
BLUNT = 0.9
# Turn [rad] above which a re-entrant corner or arc disturbs what faces it.
SHARP = 0.1
# A disturbance farther away than this many widths does not matter.
FAR = 3.0
# Rays times lines that are looked at in one go.
BLOCK = 2_000_000


@dataclass(frozen=True)
class _Lines:
    """The whole boundary as m straight lines: ends (m, 2), and the piece of each (m,)."""

    start: Array
    end: Array
    piece: NDArray[np.int64]


@dataclass(frozen=True)
class _Hits:
    """What rays hit first: distance (n,), number of the piece (n,), fraction of it (n,), cosine (n,).

    The cosine is that between the boundary's directions at both ends, 1 where they run against each other.
    """

    distance: Array
    piece: NDArray[np.int64]
    fraction: Array
    cosine: Array


def with_widths(rings: list[Ring]) -> list[Ring]:
    """Rings, material on the left, cut into pieces that know the width of the solid across them."""
    pieces = [p for r in rings for p in r]
    lines, fractions = _lines(pieces)
    for _ in range(2):
        # arcs are hit as chords, whose rise must be small beside the width
        lines, fractions = _lines(pieces, _least_width(pieces, lines, fractions))
    marks = _marks(rings, lines, fractions)
    neighbours = _neighbours(rings)
    size = float(np.ptp(lines.start, axis=0).max())
    spans = [(i, 0.0, 1.0) for i in range(len(pieces))]
    done: list[tuple[int, float, Piece]] = []
    for depth in range(MOST_CUTS + 1):
        number = np.array([i for i, _, _ in spans])
        u = np.array([[a + s * (b - a) for s in SAMPLES] for _, a, b in spans])
        at = np.concatenate([pieces[i].at(row) for i, row in zip(number, u, strict=True)])
        rate = np.concatenate([pieces[i].rate(row) for i, row in zip(number, u, strict=True)])
        hits = _hits(at, _left(rate), lines, fractions)
        _pass_over_corners(hits, np.repeat(number, len(SAMPLES)), neighbours, size)
        widths = hits.distance.reshape(len(spans), -1)
        calm = hits.cosine.reshape(len(spans), -1).min(axis=1) > PARALLEL
        following = []
        for (i, a, b), w, quiet in zip(spans, widths, calm, strict=True):
            length = pieces[i].length * (b - a)
            near = [d for v, d in marks.get(i, []) if a <= v <= b and d < FAR * w.min()]
            least = min([float(w.min()), *near])
            even = w.max() <= EVEN * w.min() and not near
            if depth == MOST_CUTS:
                # the tip of a sharp wedge: the fields are small there
                least = max(least, length / MOST_TIP_EDGES)
            if even or length <= SHORT * least or depth == MOST_CUTS:
                done.append((i, a, pieces[i].part(a, b, least, bool(quiet and even))))
            else:
                middle = 0.5 * (a + b)
                following += [(i, a, middle), (i, middle, b)]
        if not following:
            break
        spans = following
    done.sort(key=lambda item: item[:2])
    made: list[Ring] = []
    first = 0
    for ring in rings:
        made.append([p for i, _, p in done if first <= i < first + len(ring)])
        first += len(ring)
    return made


def _left(rate: Array) -> Array:
    """Unit normals to the left of directions, (n, 2)."""
    return np.stack([-rate[:, 1], rate[:, 0]], axis=1) / np.hypot(*rate.T)[:, None]


def _least_width(pieces: list[Piece], lines: _Lines, fractions: Array) -> float:
    """Least of the widths at the samples of all pieces."""
    at = np.concatenate([p.at(SAMPLES) for p in pieces])
    rate = np.concatenate([p.rate(SAMPLES) for p in pieces])
    return float(_hits(at, _left(rate), lines, fractions).distance.min())


def _lines(pieces: list[Piece], width: float = np.inf) -> tuple[_Lines, Array]:
    """The boundary as straight lines, and the fractions of the piece at their ends (m, 2)."""
    starts, ends, numbers, fractions = [], [], [], []
    for i, piece in enumerate(pieces):
        radius = 0.0 if piece.arc is None else piece.arc.radius
        step = min(STEP, np.sqrt(8.0 * RISE * width / radius)) if radius else STEP
        u = np.linspace(0.0, 1.0, 1 + max(1, int(np.ceil(piece.turn / step))))
        points = piece.at(u)
        starts.append(points[:-1])
        ends.append(points[1:])
        numbers.append(np.full(len(u) - 1, i))
        fractions.append(np.stack([u[:-1], u[1:]], axis=1))
    return (
        _Lines(np.concatenate(starts), np.concatenate(ends), np.concatenate(numbers)),
        np.concatenate(fractions),
    )


def _neighbours(rings: list[Ring]) -> NDArray[np.int64]:
    """Numbers of the pieces before and after each piece, (pieces, 2)."""
    made, first = [], 0
    for ring in rings:
        k = np.arange(len(ring))
        made.append(first + np.stack([np.roll(k, 1), np.roll(k, -1)], axis=1))
        first += len(ring)
    return np.concatenate(made)


def _pass_over_corners(
    hits: _Hits, own: NDArray[np.int64], neighbours: NDArray[np.int64], size: float
) -> None:
    """Let sizes near a corner follow from the corner: forget hits on the other side of a blunt wedge."""
    beside = (neighbours[own] == hits.piece[:, None]).any(axis=1) & (hits.cosine < BLUNT)
    hits.distance[beside] = size


def _marks(rings: list[Ring], lines: _Lines, fractions: Array) -> dict[int, list[tuple[float, float]]]:
    """Per piece the fractions that re-entrant corners and arcs look at, and their distances."""
    at, towards, radii = [], [], []
    for ring in rings:
        for k, piece in enumerate(ring):
            before = ring[k - 1]
            a, b = before.rate(np.array([1.0]))[0], piece.rate(np.array([0.0]))[0]
            turn = float(np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b))
            if turn < -SHARP:
                normals = _left(np.array([a, b]))
                at += [piece.start] * 3
                radii += [0.0] * 3
                towards += [normals[0], normals[1], normals.sum(axis=0) / np.hypot(*normals.sum(axis=0))]
            if piece.arc is not None and piece.arc.last < piece.arc.first - SHARP:
                u = np.linspace(0.0, 1.0, 5)
                radii += [piece.arc.radius] * 5
                at += list(piece.at(u))
                towards += list(_left(piece.rate(u)))
    marks: dict[int, list[tuple[float, float]]] = {}
    if at:
        hits = _hits(np.array(at), np.array(towards), lines, fractions)
        found = zip(hits.piece.tolist(), hits.fraction.tolist(), hits.distance.tolist(), radii, strict=True)
        for i, v, d, radius in found:
            # the inner face of a round wall is no disturbance
            if radius <= FAR * d:
                marks.setdefault(i, []).append((v, d))
    return marks


def _hits(at: Array, towards: Array, lines: _Lines, fractions: Array) -> _Hits:
    """First line that each ray hits, beyond the place that it starts from."""
    along = lines.end - lines.start
    size = float(np.ptp(lines.start, axis=0).max())
    n = len(at)
    best, where, part = np.empty(n), np.empty(n, dtype=np.int64), np.empty(n)
    block = max(1, BLOCK // len(along))
    for first in range(0, n, block):
        rows = slice(first, min(n, first + block))
        p, d = at[rows, None], towards[rows, None]
        gap = lines.start[None] - p
        cross = d[..., 0] * along[:, 1] - d[..., 1] * along[:, 0]
        with np.errstate(divide="ignore", invalid="ignore"):
            distance = (gap[..., 0] * along[:, 1] - gap[..., 1] * along[:, 0]) / cross
            v = (gap[..., 0] * d[..., 1] - gap[..., 1] * d[..., 0]) / cross
        # from within the material a boundary is met from its left
        met = (v >= -1e-9) & (v <= 1.0 + 1e-9) & (cross > 0.0) & (distance > 1e-7 * size)
        distance = np.where(met, distance, np.inf)
        k = np.argmin(distance, axis=1)
        index = np.arange(len(k))
        best[rows], where[rows], part[rows] = distance[index, k], k, v[index, k]
    direction = along[where] / np.hypot(*along[where].T)[:, None]
    cosine = direction[:, 0] * towards[:, 1] - direction[:, 1] * towards[:, 0]
    lost = ~np.isfinite(best)
    best[lost], cosine[lost], part[lost] = size, 0.0, 0.5
    span = fractions[where]
    fraction = span[:, 0] + np.clip(part, 0.0, 1.0) * (span[:, 1] - span[:, 0])
    return _Hits(best, lines.piece[where], fraction, np.abs(cosine))
