"""Uneven outlines made even: runs of many short edges replaced by the fewest lines and arcs that they follow.

Break points are chosen by dynamic programming over the vertices of a run: the sum of squared distances over
the unevenness squared, plus a price for every line and every arc (shortest description; J. Rissanen,
"Modeling by shortest data description", Automatica 14, 1978; from memory).
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import shapely
from shapely.geometry import Polygon

import fe_models
from crosscheck.tracing.faces import Array
from crosscheck.tracing.joining import meeting_place
from crosscheck.tracing.wall_fit import FittedWall, fitted_line

# Runs of at least so many straight edges are looked at.
LEAST_EDGES = 6
# Edges go on from each other where they turn by less [rad], or where both are shorter than this share of the
# mean thickness.
SOFT_TURN = np.radians(20.0)
SOFT_LENGTH = 0.5
# Places nearer to the evened boundary than this share of the mean thickness have not moved.
SAME = 1e-5
# Vertices of a run from which its unevenness is told.
LEAST_UNEVEN = 60
# Unevenness below this share of the mean thickness is none.
EVEN = 2e-3
# Vertices between which breaks are looked for.
MOST_BREAKS = 500
# Prices of a line and an arc.
LINE, ARC = 24.0, 34.0
# Part of the mean thickness at both ends of a fitted stretch that is left out, where a break may be off.
TRIM = 0.25
# A stretch up to this many mean edges long between long ones may cut a corner.
CUT = 2.5
# Stretches whose directions differ by more at a break [cosine] meet at a corner.
CORNER = np.cos(np.radians(12.0))


@dataclass(frozen=True)
class Faired:
    """An evened solid.

    Attributes
    ----------
    solid : the same object where nothing was evened
    polygon : the solid as drawn, arcs in chords; None where nothing was evened
    noise : standard deviation of the unevenness [L], 0 where there is none
    remark : what was done, in words
    """

    solid: fe_models.Solid
    polygon: Polygon | None = None
    noise: float = 0.0
    remark: str = ""


def faired(solid: fe_models.Solid) -> Faired:
    """The solid with its runs of short edges as lines and arcs."""
    loops = [np.array(r.points, dtype=float) for r in solid.rings]
    if all(len(r) < LEAST_EDGES for r in loops):
        return Faired(solid)
    polygons = [Polygon(_chorded(r)) for r in solid.rings]
    polygons.sort(key=lambda p: -p.area)
    polygon = Polygon(polygons[0].exterior, [p.exterior for p in polygons[1:]])
    thickness = 2.0 * polygon.area / polygon.length
    runs = [_runs(ring, thickness) for ring in solid.rings]
    if not any(runs):
        return Faired(solid)
    noise = _unevenness(
        [_stretch(p, a, n) for p, found in zip(loops, runs, strict=True) for a, n in found], thickness
    )
    noise = noise if noise > EVEN * thickness else 0.0
    scale = max(noise, EVEN * thickness)
    rings = []
    before = after = 0
    for ring, found in zip(solid.rings, runs, strict=True):
        made = _evened(ring, found, scale, thickness)
        before, after = before + len(ring.points), after + len(made.points)
        rings.append(made)
    if after == before:
        return Faired(solid)
    made = shapely.union_all([shapely.LinearRing(_chorded(r)) for r in rings])
    off = float(shapely.distance(shapely.points(np.concatenate(loops)), made).max())
    remark = ""
    if off > SAME * thickness:
        remark = f"{before:,} edges taken as {after:,} lines and arcs within {off:.2g}"
    if noise > 0.0:
        remark += f"; the boundary is uneven, by {noise:.2g} (standard deviation)"
    return Faired(fe_models.Solid(tuple(rings), solid.e, solid.g, solid.nu), polygon, noise, remark)


def _chorded(ring: fe_models.ClosedLine) -> Array:
    """A ring with its arcs in chords."""
    through = ring.through or (None,) * len(ring.points)
    places = []
    for i, (a, m) in enumerate(zip(ring.points, through, strict=True)):
        places.append(np.array([a]))
        if m is not None:
            ends = np.array([a, m, ring.points[(i + 1) % len(ring.points)]])
            arc = fitted_line(ends, loop=False, arc=True)
            places.append(np.array([arc.at(s) for s in np.linspace(*arc.span, 65)[1:-1]]))
    return np.concatenate(places)


def _runs(ring: fe_models.ClosedLine, thickness: float) -> list[tuple[int, int]]:
    """First vertex and number of edges of every run of straight edges that go on from each other."""
    n = len(ring.points)
    p = np.array(ring.points, dtype=float)
    along = np.roll(p, -1, axis=0) - p
    length = np.hypot(*along.T)
    straight = np.array([t is None for t in ring.through]) if ring.through else np.ones(n, dtype=bool)
    before = np.roll(along, 1, axis=0)
    turn = np.abs(
        np.arctan2(before[:, 0] * along[:, 1] - before[:, 1] * along[:, 0], (before * along).sum(axis=1))
    )
    short = length < SOFT_LENGTH * thickness
    soft = straight & np.roll(straight, 1) & ((turn < SOFT_TURN) | (short & np.roll(short, 1)))
    hard = np.flatnonzero(~soft)
    if not len(hard):
        return [(0, n)] if n >= LEAST_EDGES else []
    made = []
    for a, b in zip(hard, np.append(hard[1:], hard[0] + n), strict=True):
        if b - a >= LEAST_EDGES and straight[a]:
            made.append((int(a), int(b - a)))
    return made


def _stretch(places: Array, first: int, edges: int) -> Array:
    """Vertices of a run."""
    return places[(first + np.arange(edges + 1)) % len(places)]


def _unevenness(runs: list[Array], thickness: float) -> float:
    """Standard deviation of vertices across their boundary, off cubics: smooth curves have none."""
    found = []
    for p in runs:
        edges = np.hypot(*np.diff(p, axis=0).T)
        if len(p) < LEAST_UNEVEN or np.median(edges) > SOFT_LENGTH * thickness:
            continue
        found.append(_off_cubic(p))
    if not found:
        return 0.0
    return float(np.median(np.concatenate(found))) / 0.6745


def _off_cubic(p: Array) -> Array:
    """Distance of vertices from the cubic through two neighbours to each side, over its own spread [L]."""
    s = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(p, axis=0).T))])
    around = [s[:-4], s[1:-3], s[3:-1], s[4:]]
    at = s[2:-2]
    weights = []
    for k, own in enumerate(around):
        others = [other for i, other in enumerate(around) if i != k]
        weights.append(np.prod([(at - o) / (own - o) for o in others], axis=0))
    places = [p[:-4], p[1:-3], p[3:-1], p[4:]]
    off = p[2:-2] - sum(w[:, None] * q for w, q in zip(weights, places, strict=True))
    chord = p[4:] - p[:-4]
    size = np.hypot(*chord.T)
    size[size == 0.0] = 1.0
    spread = np.sqrt(1.0 + sum(w * w for w in weights))
    return np.abs(chord[:, 0] * off[:, 1] - chord[:, 1] * off[:, 0]) / (size * spread)


def _evened(
    ring: fe_models.ClosedLine, runs: list[tuple[int, int]], scale: float, thickness: float
) -> fe_models.ClosedLine:
    """A ring with its runs evened."""
    n = len(ring.points)
    places = np.array(ring.points, dtype=float)
    through = ring.through or (None,) * n
    if runs and runs[0][1] == n:
        return _closed(places, scale, thickness)
    points: list[fe_models.Place] = []
    thirds: list[fe_models.Place | None] = []
    starts = dict(runs)
    i = runs[0][0] if runs else 0
    end = i + n
    while i < end:
        here = i % n
        if here in starts:
            run = _stretch(places, here, starts[here])
            breaks = _breaks(run, scale)
            corners, middles = _corners(run, breaks, thickness, closed=False)
            points += [_place(c) for c in corners[:-1]]
            thirds += middles
            i += starts[here]
        else:
            points.append(ring.points[here])
            thirds.append(through[here])
            i += 1
    return fe_models.ClosedLine(tuple(points), tuple(thirds))


def _closed(places: Array, scale: float, thickness: float) -> fe_models.ClosedLine:
    """A ring that is one run: begun at its farthest vertex, then once more at its sharpest break."""
    start = int(np.argmax(np.hypot(*(places - places.mean(axis=0)).T)))
    for _ in range(2):
        places = np.roll(places, -start, axis=0)
        run = np.concatenate([places, places[:1]])
        breaks = _breaks(run, scale)
        start = _sharpest(run, breaks)
    if len(breaks) == 1:
        arc = fitted_line(run[:-1], loop=True, arc=True)
        x, y = arc.centre
        return fe_models.ClosedLine.circle((float(x), float(y)), 1.0 / abs(arc.curvature))
    corners, middles = _corners(run, breaks, thickness, closed=True)
    return fe_models.ClosedLine(tuple(_place(c) for c in corners), tuple(middles))


def _sharpest(run: Array, breaks: list[tuple[int, int, bool]]) -> int:
    """The vertex between two stretches at which the chords turn most."""
    chords = np.array([run[b] - run[a] for a, b, _ in breaks])
    before = np.roll(chords, 1, axis=0)
    turn = np.arctan2(
        before[:, 0] * chords[:, 1] - before[:, 1] * chords[:, 0], (before * chords).sum(axis=1)
    )
    # the run's own start is left out: whether it is a break is to be found out
    return breaks[int(np.argmax(np.abs(turn[1:]))) + 1][0] if len(breaks) > 1 else 0


def _breaks(run: Array, scale: float) -> list[tuple[int, int, bool]]:
    """First and last vertex of every stretch of a run, and True where it is an arc."""
    dense, number = _dense(run)
    sums = _sums(dense)
    n = len(run)
    if n <= MOST_BREAKS:
        return _cheapest(np.arange(n), number, sums, scale)
    # first among some vertices, then among all that are near the breaks found
    stride = int(np.ceil(n / MOST_BREAKS))
    coarse = _cheapest(np.unique(np.append(np.arange(0, n, stride), n - 1)), number, sums, scale)
    ends = np.array([a for a, _, _ in coarse] + [n - 1])
    near = (ends[:, None] + np.arange(-stride, stride + 1)).ravel()
    return _cheapest(np.unique(near[(near >= 0) & (near < n)]), number, sums, scale)


def _cheapest(
    nodes: np.ndarray, number: np.ndarray, sums: Array, scale: float
) -> list[tuple[int, int, bool]]:
    """The cheapest way to take a run as lines and arcs between vertices of a choice, its ends among them."""
    at = np.searchsorted(number, nodes)
    best = np.full(len(nodes), np.inf)
    best[0] = 0.0
    origin = np.zeros(len(nodes), dtype=int)
    curved = np.zeros(len(nodes), dtype=bool)
    for j in range(1, len(nodes)):
        line, arc = _misfits(sums, at[:j], at[j])
        straight = line / scale**2 + LINE
        round_ = arc / scale**2 + ARC
        cost = best[:j] + np.minimum(straight, round_)
        i = int(np.argmin(cost))
        best[j], origin[j], curved[j] = cost[i], i, round_[i] < straight[i]
    found = []
    j = len(nodes) - 1
    while j > 0:
        i = origin[j]
        found.append((int(nodes[i]), int(nodes[j]), bool(curved[j])))
        j = i
    return found[::-1]


def _dense(run: Array) -> tuple[Array, np.ndarray]:
    """A run with places along its longer edges, and the number of the vertex that each belongs to."""
    length = np.hypot(*np.diff(run, axis=0).T)
    step = max(float(np.median(length)), 1e-12)
    parts, numbers = [], []
    for i, (a, b) in enumerate(pairwise(run)):
        count = int(min(max(2 if len(run) < 400 else 1, round(length[i] / step)), 40))
        u = np.arange(count) / count
        parts.append(a + u[:, None] * (b - a))
        numbers.append(np.full(count, i))
    return np.concatenate([*parts, run[-1:]]), np.concatenate([*numbers, [len(run) - 1]])


def _sums(places: Array) -> Array:
    """Running sums of 1, x, y, xx, xy, yy, z, zx, zy, zz with z = xx + yy, about the middle, (n + 1, 10)."""
    x, y = (places - places.mean(axis=0)).T
    z = x * x + y * y
    terms = np.stack([np.ones_like(x), x, y, x * x, x * y, y * y, z, z * x, z * y, z * z], axis=1)
    return np.vstack([np.zeros(10), np.cumsum(terms, axis=0)])


def _misfits(sums: Array, first: np.ndarray, last: int) -> tuple[Array, Array]:
    """Sums of squared distances of places first..last from their best line and circle, (k,) each [L^2]."""
    n, x, y, xx, xy, yy, z, zx, zy, zz = (sums[last + 1] - sums[first]).T
    mx, my, mz = x / n, y / n, z / n
    a, b, c = xx - n * mx * mx, xy - n * mx * my, yy - n * my * my
    spread = np.sqrt((0.5 * (a - c)) ** 2 + b * b)
    line = np.maximum(0.5 * (a + c) - spread, 0.0)
    # circle: z = p x + q y + r about the mean values, least squares in z
    u, v, w = zx - n * mz * mx, zy - n * mz * my, zz - n * mz * mz
    det = a * c - b * b
    with np.errstate(divide="ignore", invalid="ignore"):
        p, q = (c * u - b * v) / det, (a * v - b * u) / det
        rest = np.maximum(w - p * u - q * v, 0.0)
        r = mz - p * mx - q * my
        squared = r + 0.25 * (p * p + q * q)
        arc = rest / (4.0 * squared)
    good = np.isfinite(arc) & (squared > 0.0) & (n >= 5) & (det > 1e-12 * (a + c) ** 2)
    return line, np.where(good, arc, np.inf)


def _corners(
    run: Array, breaks: list[tuple[int, int, bool]], thickness: float, *, closed: bool
) -> tuple[list[Array], list[fe_models.Place | None]]:
    """Corners between stretches, and a third place of each stretch that is an arc."""
    breaks = _without_cut_corners(run, breaks, thickness)
    fitted = [fitted_line(_trimmed(run[a : b + 1], thickness), loop=False, arc=arc) for a, b, arc in breaks]
    corners: list[Array] = []
    for k, (a, _, _) in enumerate(breaks):
        if k == 0 and not closed:
            corners.append(run[0])
        else:
            corners.append(_corner(fitted[k - 1], fitted[k], run[a], thickness))
    if not closed:
        corners.append(run[-1])
    middles: list[fe_models.Place | None] = []
    ends = [*corners[1:], corners[0]] if closed else corners[1:]
    for curve, start, end in zip(fitted, corners, ends, strict=False):
        if curve.straight:
            middles.append(None)
            continue
        s, _ = curve.along(np.array([start, end]))
        full = 2.0 * np.pi / abs(curve.curvature)
        s += full * np.round((np.array(curve.span) - s) / full)
        middles.append(_place(curve.at(0.5 * float(s.sum()))))
    return corners, middles


def _without_cut_corners(
    run: Array, breaks: list[tuple[int, int, bool]], thickness: float
) -> list[tuple[int, int, bool]]:
    """Stretches without those of an edge or two that only cut a corner which no vertex hit."""
    length = np.hypot(*np.diff(run, axis=0).T)
    longest = min(CUT * float(np.median(length)), SOFT_LENGTH * thickness)
    kept = [breaks[0]]
    for a, b, arc in breaks[1:]:
        first, last, _ = kept[-1]
        cuts = len(kept) > 1 and last - first <= 3 and length[first:last].sum() <= longest
        if cuts and kept[-2][1] - kept[-2][0] > 3 and b - a > 3:
            middle = (first + last) // 2
            start, _, before = kept[-2]
            kept[-2:] = [(start, middle, before), (middle, b, arc)]
        else:
            kept.append((a, b, arc))
    return kept


def _trimmed(places: Array, thickness: float) -> Array:
    """A stretch without its ends, where a break may be off; at least half of it is kept."""
    s = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(places, axis=0).T))])
    cut = min(TRIM * thickness, 0.25 * s[-1])
    kept = places[(s >= cut) & (s <= s[-1] - cut)]
    return kept if len(kept) >= 5 else places


def _corner(before: FittedWall, after: FittedWall, at: Array, thickness: float) -> Array:
    """Where two stretches meet near a place."""
    ends = [float(c.along(at[None])[0][0]) for c in (before, after)]
    mean = 0.5 * (before.at(ends[0]) + after.at(ends[1]))
    if before.tangent(ends[0]) @ after.tangent(ends[1]) > CORNER:
        return np.asarray(mean)
    place = meeting_place([before.extended(ends[0], ends[0]), after.extended(ends[1], ends[1])], mean)
    return place if np.hypot(*(place - at)) < thickness else np.asarray(mean)


def _place(p: Array) -> fe_models.Place:
    return float(p[0]), float(p[1])
