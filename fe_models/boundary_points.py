"""Graded points on the rings of a cluster, and the sizes that grow from them into it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .band import Array
from .boundary import EndKey, Piece
from .density import Density
from .errors import OutlineError
from .fill import Region
from .grading import corner_size, graded
from .partition import Cluster
from .seams import Seam

# On all rings of one cluster: the mesh generator's time grows with their square.
MOST_POINTS = 40_000
# Length of elements over the width of the solid between pieces that face each other all along.
CALM = 8.0
# Rise of an element's arc over the width of the solid.
RISE = 0.05


@dataclass(frozen=True)
class BoundaryPoints:
    """What the mesh of a cluster starts from.

    Parameters
    ----------
    region : Region
        Points of all rings, in order, with the sizes wanted inside.
    cuts : dict of wall end to array of int
        Numbers of the points on each cut, from its right to its left.
    bends : list of (int, int, Piece, (float, float))
        Edges on curved pieces: two point numbers, the piece, and the fractions of it between which they run.
    """

    region: Region
    cuts: dict[EndKey, NDArray[np.int64]]
    bends: list[tuple[int, int, Piece, tuple[float, float]]]


def boundary_points(
    cluster: Cluster, scale: float, density: Density, seams: Sequence[Seam] = ()
) -> BoundaryPoints:
    """Points on a cluster's rings and seams; ``scale`` is the least thickness of its walls [L].

    Raises
    ------
    OutlineError
        More points than the mesh generator can take.
    """
    loops, corners, cuts, bends = [], [], {}, []
    base, largest = 0, density.largest * scale
    for ring in cluster.rings:
        n = len(ring)
        sizes = [_corner(ring[i - 1], ring[i], scale, density) for i in range(n)]
        fractions = [_fractions(p, sizes[i], sizes[(i + 1) % n], scale, density) for i, p in enumerate(ring)]
        total = sum(len(u) - 1 for u in fractions)
        first = 0
        for i, (piece, u) in enumerate(zip(ring, fractions, strict=True)):
            numbers = base + (first + np.arange(len(u))) % total
            corners.append((int(numbers[0]), sizes[i]))
            largest = max(largest, _longest(piece, scale, density))
            if piece.cut is not None:
                cuts[piece.cut] = numbers
            if not piece.straight:
                spans = zip(u[:-1].tolist(), u[1:].tolist(), strict=True)
                edges = zip(numbers[:-1].tolist(), numbers[1:].tolist(), spans, strict=True)
                bends += [(a, b, piece, span) for a, b, span in edges]
                corners += [(int(k), piece.length * float(np.diff(u).max())) for k in numbers[1:-1]]
            first += len(u) - 1
        loops.append(np.concatenate([p.at(u[:-1]) for p, u in zip(ring, fractions, strict=True)]))
        base += total
        if base > MOST_POINTS:
            where = f"the joint at {cluster.points[0]}" if cluster.points else "the outline"
            raise OutlineError("points", cluster.walls, f"{base} points or more round {where}")
    inner, lines = _seam_points(np.concatenate(loops), dict(corners), seams, scale, density)
    region = Region(tuple(loops), inner, lines, tuple(corners), largest, density.slope)
    return BoundaryPoints(region, cuts, bends)


def _seam_points(
    outline: Array, sizes: Mapping[int, float], seams: Sequence[Seam], scale: float, density: Density
) -> tuple[Array, tuple[tuple[int, ...], ...]]:
    """Points inside along seams, and the rows of numbers that they make."""
    inner: list[Array] = []
    centre: dict[str, int] = {}
    lines = []
    for seam in seams:
        if seam.across:
            centre[seam.point] = int(np.argmin(np.hypot(*(outline - seam.place).T)))
        elif seam.point not in centre:
            centre[seam.point] = len(outline) + len(inner)
            inner.append(seam.place)
        first = int(np.argmin(np.hypot(*(outline - seam.corner).T)))
        length = float(np.hypot(*(seam.place - outline[first])))
        largest = density.largest * scale
        u = graded(length, sizes.get(first, largest), largest, largest, density.slope)[1:-1]
        numbers = len(outline) + len(inner) + np.arange(len(u))
        inner += list(outline[first] + u[:, None] * (seam.place - outline[first]))
        lines.append((first, *(int(i) for i in numbers), centre[seam.point]))
    return np.array(inner).reshape(-1, 2), tuple(lines)


def _fractions(piece: Piece, first: float, last: float, scale: float, density: Density) -> Array:
    """Fractions 0 ... 1 of a piece at which points lie."""
    if piece.cut is not None:
        return np.linspace(0.0, 1.0, density.layers + 1)
    u = graded(piece.length, first, last, _longest(piece, scale, density), density.slope)
    least = int(np.ceil(piece.turn / density.arc_step(piece.radius, _thickness(piece, scale))))
    if piece.arc is not None and piece.width is None:
        # an even number, so that a seam can end in the middle
        least = 2 * int(np.ceil(max(least, len(u) - 1) / 2))
    if len(u) - 1 < least:
        return np.linspace(0.0, 1.0, least + 1)
    return u


def _longest(piece: Piece, scale: float, density: Density) -> float:
    """Longest edge along a piece [L]."""
    longest = density.largest * _thickness(piece, scale) * (CALM if piece.calm else 1.0)
    if piece.width is not None and piece.arc is not None:
        # the rise of each edge's arc stays a small share of the width
        rise = float(np.sqrt(8.0 * RISE * piece.width * piece.arc.radius))
        longest = min(longest, density.turn * piece.arc.radius, rise)
    return longest


def _thickness(piece: Piece, scale: float) -> float:
    """Thickness that sets the size along a piece [L]."""
    if piece.width is not None:
        return piece.width
    if piece.band is None:
        return max(scale, piece.length if piece.cut is not None else 0.0)
    return 2.0 * float(min(piece.band.half(piece.span[0]), piece.band.half(piece.span[1])))


def _corner(before: Piece, after: Piece, scale: float, density: Density) -> float:
    """Wanted size at the vertex between two pieces [L]."""
    own = min(_thickness(before, scale), _thickness(after, scale))
    if before.cut is not None or after.cut is not None:
        return own / density.layers
    a, b = before.rate(np.array([1.0]))[0], after.rate(np.array([0.0]))[0]
    turn = np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b)
    reach, eta = own, density.eta
    if before.width is not None:
        # the singular field of a corner between short edges reaches no farther than these
        reach = min(own, before.length, after.length)
        eta = min(1.0, eta * (own / reach) ** 2)
    size = corner_size(np.pi - float(turn), reach, eta)
    steps = [
        p.length * min(1.0, density.arc_step(p.radius, own) / p.turn)
        for p in (before, after)
        if not p.straight
    ]
    return min(size, before.length, after.length, density.largest * own, *steps)
