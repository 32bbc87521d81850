"""Loose edges, as drawings hold them: fitted to curves, and chained to closed lines."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_matrix
from scipy.sparse.csgraph import connected_components
from scipy.spatial import cKDTree

from .band import Array
from .errors import OutlineError
from .solid import ClosedLine, Place

# Arcs into which one curve is cut at most, and places at which each is compared with its curve.
MOST_ARCS = 4096
# Gaps below this share of the coordinates are none.
ROUND_OFF = 1e-12
# Largest coordinate [L].
FARTHEST = 1e30
PLACES = np.array([0.1, 0.25, 0.4, 0.6, 0.75, 0.9])


@dataclass(frozen=True)
class Edge:
    """A line, or an arc.

    Parameters
    ----------
    start, end : its ends [L]
    through : a third place of the arc [L]; None for a line
    """

    start: Place
    end: Place
    through: Place | None = None


@dataclass(frozen=True)
class Chained:
    """Closed lines, and what was done to chain them.

    Attributes
    ----------
    lines : the closed lines
    short, twice : edges left out as shorter than the gap, and as drawn twice
    widest_gap : widest gap that was closed [L]
    """

    lines: tuple[ClosedLine, ...]
    short: int
    twice: int
    widest_gap: float


def circle_edges(centre: Place, radius: float) -> list[Edge]:
    """A full circle as two arcs.

    Parameters
    ----------
    centre, radius : [L]

    Returns
    -------
    list of Edge
    """
    line = ClosedLine.circle(centre, radius)
    (a, b), (top, bottom) = line.points, line.through
    return [Edge(a, b, top), Edge(b, a, bottom)]


def fitted_edges(
    curve: Callable[[Array], Array], first: float, last: float, error: float, pieces: int = 1
) -> list[Edge]:
    """Arcs that keep within a distance of a curve.

    Parameters
    ----------
    curve : callable
        Parameters (n,) to places (n, 2) [L].
    first, last : float
        Range of the parameter.
    error : float
        Largest distance between curve and arcs, looked at in six places of each arc [L].
    pieces : int
        Pieces to begin with; each is halved until it is near enough.

    Returns
    -------
    list of Edge
        In the order of the parameter [L].

    Raises
    ------
    OutlineError
        The error asked for needs too many arcs.
    """
    bounds = np.linspace(first, last, pieces + 1)
    spans = list(zip(bounds[:-1].tolist(), bounds[1:].tolist(), strict=True))
    done: list[tuple[float, Edge]] = []
    while spans:
        a, b = spans.pop()
        at = curve(np.concatenate([[a, 0.5 * (a + b), b], a + PLACES * (b - a)]))
        start, middle, end = at[:3]
        if _distance_from_arc(start, middle, end, at[3:]) <= error:
            done.append((a, Edge(_place(start), _place(end), _place(middle))))
        else:
            spans += [(a, 0.5 * (a + b)), (0.5 * (a + b), b)]
        if len(spans) + len(done) > MOST_ARCS:
            raise OutlineError("arc", (), f"a curve that needs more than {MOST_ARCS} arcs for {error:g}")
    done.sort(key=lambda item: item[0] if first <= last else -item[0])
    return [edge for _, edge in done]


def _distance_from_arc(start: Array, middle: Array, end: Array, at: Array) -> float:
    """Largest distance of places (n, 2) from the circle through three points, or from their line."""
    chord, to_middle = end - start, middle - start
    span = float(np.hypot(*chord))
    if span == 0.0:
        return np.inf
    rise = float(chord[0] * to_middle[1] - chord[1] * to_middle[0]) / span
    across = np.array([-chord[1], chord[0]]) / span
    if abs(rise) < 1e-9 * span:
        return float(np.abs((at - start) @ across).max())
    along = float(to_middle @ chord) / span
    height = (along * (along - span) + rise * rise) / (2.0 * rise)
    centre = start + 0.5 * chord + height * across
    return float(np.abs(np.hypot(*(at - centre).T) - np.hypot(0.5 * span, height)).max())


def _place(point: Array) -> Place:
    return float(point[0]), float(point[1])


def closed_lines(edges: Sequence[Edge], gap: float) -> Chained:
    """Chain loose edges, in any order and direction, to closed lines.

    Parameters
    ----------
    edges : sequence of Edge
    gap : float
        Ends that lie apart by no more than this are one point [L].

    Returns
    -------
    Chained
        Lines with their places in the edges' unit [L].

    Raises
    ------
    OutlineError
        An end that no other meets, or a point at which more than two edges meet.
    """
    ends = np.array([p for e in edges for p in (e.start, e.end)], dtype=float).reshape(-1, 2)
    if not len(ends):
        raise OutlineError("gap", (), "no edge")
    if not np.isfinite(ends).all() or np.abs(ends).max() > FARTHEST:
        raise OutlineError("ring", (), "an end that is not a finite number, or is beyond 1e30")
    point = _points(ends, gap)
    number = point.reshape(-1, 2)
    loose = [number[i, 0] == number[i, 1] and _is_short(e, gap) for i, e in enumerate(edges)]
    kept: dict[tuple[int, int, int, int], int] = {}
    for i, e in enumerate(edges):
        if not loose[i]:
            a, b = sorted(number[i].tolist())
            kept.setdefault((a, b, *_middle(e, gap)), i)
    chosen = sorted(kept.values())
    if not chosen:
        raise OutlineError("gap", (), f"no edge longer than the gap of {gap:.4g}")
    at: dict[int, list[int]] = {}
    for i in chosen:
        for n in number[i].tolist():
            at.setdefault(n, []).append(i)
    places = _means(ends, point)
    for n, meeting in at.items():
        x, y = places[n]
        if len(meeting) == 1:
            apart = np.hypot(*(places[[m for m in at if m != n]] - places[n]).T)
            near = f", {apart.min():.4g} from the nearest other" if len(apart) else ""
            raise OutlineError("gap", (), f"an open end at ({x:.6g}, {y:.6g}){near}")
        if len(meeting) > 2:
            raise OutlineError("branch", (), f"{len(meeting)} edges at ({x:.6g}, {y:.6g})")
    lines = _walk(edges, chosen, number, at, places)
    widest = float(2.0 * np.hypot(*(ends - places[point]).T).max())
    widest = widest if widest > ROUND_OFF * float(np.abs(ends).max()) else 0.0
    return Chained(tuple(lines), sum(loose), len(edges) - sum(loose) - len(chosen), widest)


def _walk(
    edges: Sequence[Edge],
    chosen: list[int],
    number: NDArray[np.int64],
    at: dict[int, list[int]],
    places: Array,
) -> list[ClosedLine]:
    """Closed lines from edges of which two meet at every point."""
    left = set(chosen)
    lines = []
    for first in chosen:
        if first not in left:
            continue
        points: list[Place] = []
        through: list[Place | None] = []
        here, edge = int(number[first, 0]), first
        while edge in left:
            left.discard(edge)
            points.append(_place(places[here]))
            through.append(edges[edge].through)
            a, b = number[edge].tolist()
            here = b if here == a else a
            edge = next((i for i in at[here] if i in left), edge)
        lines.append(ClosedLine(tuple(points), tuple(through)))
    return lines


def _points(ends: Array, gap: float) -> NDArray[np.int64]:
    """Number of the point that each end belongs to, (n,)."""
    pairs = cKDTree(ends).query_pairs(gap, output_type="ndarray")
    n = len(ends)
    graph = csr_matrix((np.ones(len(pairs)), (pairs[:, 0], pairs[:, 1])), shape=(n, n))
    return np.asarray(connected_components(graph, directed=False)[1], dtype=np.int64)


def _means(ends: Array, point: NDArray[np.int64]) -> Array:
    count = np.bincount(point)
    return np.stack([np.bincount(point, ends[:, i]) / count for i in (0, 1)], axis=1)


def _is_short(edge: Edge, gap: float) -> bool:
    return edge.through is None or bool(np.hypot(*np.subtract(edge.through, edge.start)) <= gap)


def _middle(edge: Edge, gap: float) -> tuple[int, int]:
    """A key that tells edges between the same points apart."""
    x, y = edge.through or (0.5 * (edge.start[0] + edge.end[0]), 0.5 * (edge.start[1] + edge.end[1]))
    return round(x / (4.0 * gap)), round(y / (4.0 * gap))
