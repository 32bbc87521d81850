"""Where walls of a midline graph meet without a shared point: crossings, touches, overlaps.

Pure geometry on arrays: a sweep over bounding boxes in blocks, then exact tests on the pairs left.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

_BLOCK = 64


@dataclass(frozen=True)
class Segments:
    """Straight pieces of walls.

    Attributes
    ----------
    start, end : places (n, 2) [L]
    start_node, end_node : numbers of their ends (n,); pieces that share a number share a point
    wall : number of the wall that each piece belongs to (n,)
    """

    start: Floats
    end: Floats
    start_node: Ints
    end_node: Ints
    wall: Ints


@dataclass(frozen=True)
class Contact:
    """Two pieces that meet without a shared point.

    Attributes
    ----------
    kind : "crossing"; "touch": an end of the first on the middle of the second; "overlap": one lies on
        the other; "end": end on end, two numbers for one place
    first, second : the pieces
    place : where [L]
    node : the end that touches, for "touch"; of the first piece for "end"; -1 otherwise
    other_node : the end of the second piece for "end"; -1 otherwise
    """

    kind: str
    first: int
    second: int
    place: tuple[float, float]
    node: int = -1
    other_node: int = -1


def contacts(segments: Segments, tolerance: float) -> Iterator[Contact]:
    """Every contact of pieces of different walls, found lazily.

    Parameters
    ----------
    segments : the pieces, of length above the tolerance
    tolerance : distance up to which places count as one [L]
    """
    yield from _folded(segments, tolerance)
    for first, second in _candidates(segments, tolerance):
        yield from _apart(segments, first, second, tolerance)


def _folded(segments: Segments, tolerance: float) -> Iterator[Contact]:
    """Overlaps of pieces that leave a shared point in one direction: neighbours in angle about the point."""
    n = len(segments.wall)
    piece = np.concatenate((np.arange(n), np.arange(n)))
    node = np.concatenate((segments.start_node, segments.end_node))
    near = np.concatenate((segments.start, segments.end))
    far = np.concatenate((segments.end, segments.start))
    far_node = np.concatenate((segments.end_node, segments.start_node))
    direction = far - near
    angle = np.arctan2(direction[:, 1], direction[:, 0])
    order = np.lexsort((angle, node))
    # The last about a point is also neighbour of the first, across the angle of 180 degrees.
    begins = np.flatnonzero(np.diff(node[order], prepend=-1))
    ends = np.append(begins[1:], len(order)) - 1
    following = np.arange(1, len(order) + 1)
    following[ends] = begins
    a, b = order, order[following]
    keep = (
        (piece[a] != piece[b])
        & (far_node[a] != far_node[b])
        & (segments.wall[piece[a]] != segments.wall[piece[b]])
    )
    a, b = a[keep], b[keep]
    shorter_is_a = np.hypot(*direction[a].T) <= np.hypot(*direction[b].T)
    short, long = np.where(shorter_is_a, a, b), np.where(shorter_is_a, b, a)
    _, distance = _projection(far[short], near[long], far[long])
    seen: set[tuple[int, int]] = set()
    for k in np.flatnonzero(distance <= tolerance):
        pair = (int(piece[short[k]]), int(piece[long[k]]))
        if pair not in seen:
            seen.add(pair)
            x, y = far[short[k]]
            yield Contact("overlap", *pair, (float(x), float(y)), int(far_node[short[k]]))


def _candidates(segments: Segments, tolerance: float) -> Iterator[tuple[Ints, Ints]]:
    """Pairs of pieces of different walls without a shared point whose bounding boxes meet, in blocks."""
    low = np.minimum(segments.start, segments.end) - tolerance
    high = np.maximum(segments.start, segments.end) + tolerance
    order = np.argsort(low[:, 0], kind="stable")
    low_x = low[order, 0]
    for begin in range(0, len(order), _BLOCK):
        rows = order[begin : begin + _BLOCK]
        stop = int(np.searchsorted(low_x, high[rows, 0].max(), side="right"))
        columns = order[begin:stop]
        meet = np.arange(len(rows))[:, None] < np.arange(len(columns))[None, :]
        meet &= low_x[begin:stop][None, :] <= high[rows, 0][:, None]
        meet &= low[columns, 1][None, :] <= high[rows, 1][:, None]
        meet &= high[columns, 1][None, :] >= low[rows, 1][:, None]
        row, column = np.nonzero(meet)
        a, b = rows[row], columns[column]
        apart = segments.wall[a] != segments.wall[b]
        for nodes in (segments.start_node, segments.end_node):
            apart &= (nodes[a] != segments.start_node[b]) & (nodes[a] != segments.end_node[b])
        a, b = a[apart], b[apart]
        a, b = np.minimum(a, b), np.maximum(a, b)
        reach = _may_reach(segments, a, b, tolerance)
        if reach.any():
            yield a[reach], b[reach]


def _may_reach(segments: Segments, a: Ints, b: Ints, tolerance: float) -> NDArray[np.bool_]:
    """False (m,) where the second piece lies on one side of the first's line: most pairs, at little cost."""
    along = segments.end[a] - segments.start[a]
    margin = tolerance * np.hypot(*along.T)
    start = _cross(along, segments.start[b] - segments.start[a])
    end = _cross(along, segments.end[b] - segments.start[a])
    reach: NDArray[np.bool_] = (np.minimum(start, end) <= margin) & (np.maximum(start, end) >= -margin)
    return reach


def _apart(segments: Segments, a: Ints, b: Ints, tolerance: float) -> Iterator[Contact]:
    """Contacts of pairs of pieces (m,), (m,) that share no point."""
    p1, p2, q1, q2 = segments.start[a], segments.end[a], segments.start[b], segments.end[b]
    ends = (q1, q2, p1, p2)
    onto = ((p1, p2), (p1, p2), (q1, q2), (q1, q2))
    near = np.zeros((4, len(a)), dtype=bool)
    inside = np.zeros((4, len(a)), dtype=bool)
    for k, (end, (begin, stop)) in enumerate(zip(ends, onto, strict=True)):
        _, distance = _projection(end, begin, stop)
        near[k] = distance <= tolerance
        off_ends = np.minimum(np.hypot(*(end - begin).T), np.hypot(*(end - stop).T))
        inside[k] = near[k] & (off_ends > tolerance)
    d, e = p2 - p1, q2 - q1
    from_p = (_cross(d, q1 - p1), _cross(d, q2 - p1))
    from_q = (_cross(e, p1 - q1), _cross(e, p2 - q1))
    crosses = (from_p[0] * from_p[1] < 0.0) & (from_q[0] * from_q[1] < 0.0)
    count = near.sum(axis=0)
    nodes = (segments.start_node[b], segments.end_node[b], segments.start_node[a], segments.end_node[a])
    for m in np.flatnonzero((count > 0) | crosses):
        i, j = int(a[m]), int(b[m])
        touching = int(np.argmax(inside[:, m] if inside[:, m].any() else near[:, m]))
        place = _place(ends[touching][m])
        if count[m] == 0:
            share = from_q[0][m] / (from_q[0][m] - from_q[1][m])
            yield Contact("crossing", i, j, _place(p1[m] + share * d[m]))
        elif not inside[:, m].any():
            ours = int(nodes[2 if near[2, m] else 3][m])
            theirs = int(nodes[0 if near[0, m] else 1][m])
            yield Contact("end", i, j, place, ours, theirs)
        elif count[m] > 1:
            yield Contact("overlap", i, j, place)
        else:
            # The first of a touch is the piece that ends on the other.
            pair = (j, i) if touching < 2 else (i, j)
            yield Contact("touch", *pair, place, int(nodes[touching][m]))


def _place(row: Floats) -> tuple[float, float]:
    return float(row[0]), float(row[1])


def _cross(a: Floats, b: Floats) -> Floats:
    """z of the cross products of vectors (m, 2), (m, 2)."""
    product: Floats = a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0]
    return product


def _projection(place: Floats, begin: Floats, stop: Floats) -> tuple[Floats, Floats]:
    """Fraction (m,) of the nearest place on pieces (m, 2)-(m, 2) and the distance (m,) to it."""
    along = stop - begin
    length2 = np.maximum((along**2).sum(axis=1), np.finfo(float).tiny)
    fraction = np.clip(((place - begin) * along).sum(axis=1) / length2, 0.0, 1.0)
    return fraction, np.hypot(*(begin + fraction[:, None] * along - place).T)
