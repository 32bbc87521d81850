"""Medial axis of an outline from the Voronoi diagram of samples on its faces, and its clear runs.

A ridge of the diagram between two samples is *clear* where both look straight at each other: there the solid
is a wall. What lies between clear runs is a knot: a joint, a bend, a free end or a lump.

References: H. Blum, "A transformation for extracting new descriptors of shape", 1967 (medial axis; from
memory).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components
from scipy.spatial import Voronoi

from crosscheck.tracing.faces import Array, Face, FacedOutline, Integers

# Cosine between a sample's normal and the line to the sample that it faces.
FACING = np.cos(np.radians(20.0))
# Least length of a run over its thickness, to be a wall.
SHORT = 0.45
# Centres of two arcs that bound one wall are no farther apart than this share of its thickness.
CONCENTRIC = 0.5
# A face whose rise is below this share of the thickness may face a straight one.
FLAT = 0.06
# Change of radius over length from which two faces bound a wedge, no wall; and length over the largest radius
# up to which a wedge that runs out to nothing is a corner.
WEDGE = 0.2
CORNER = 10.0


@dataclass(frozen=True)
class Run:
    """A clear stretch of the medial axis, along which two faces bound a wall.

    Attributes
    ----------
    left, right : samples (n, 2) on the faces to both sides, in its direction [L]
    path : medial places (m, 2) in order [L]
    radius : distance from the faces along the path (m,) [L]
    knots : numbers of the knots at start and end; None for a closed loop
    faces : numbers of the left and right face
    """

    left: Array
    right: Array
    path: Array
    radius: Array
    knots: tuple[int, int] | None
    faces: tuple[int, int]

    @property
    def length(self) -> float:
        return float(np.hypot(*np.diff(self.path, axis=0).T).sum())

    @property
    def thickness(self) -> float:
        return 2.0 * float(np.median(self.radius))


@dataclass(frozen=True)
class Knot:
    """What lies between clear runs.

    Attributes
    ----------
    places, radius : medial places (m, 2) and their distance from the boundary (m,) [L]
    faces : numbers of the faces that are nearest somewhere
    """

    places: Array
    radius: Array
    faces: tuple[int, ...]


@dataclass(frozen=True)
class MedialAxis:
    """Clear runs and the knots between them."""

    runs: tuple[Run, ...]
    knots: dict[int, Knot]


def medial_axis(outline: FacedOutline) -> MedialAxis:
    """The medial axis of an outline, taken apart into clear runs and knots."""
    places = outline.places
    diagram = Voronoi(places)
    ridge, ends = diagram.ridge_points, np.array(diagram.ridge_vertices)
    vertex = diagram.vertices
    inside = shapely.contains_xy(outline.polygon, *vertex.T)
    following = outline.following
    i, j = ridge.T
    keep = (ends >= 0).all(axis=1)
    keep &= inside[ends].all(axis=1) & (following[i] != j) & (following[j] != i)
    ridge, ends = ridge[keep], ends[keep]
    i, j = ridge.T
    radius = np.full(len(vertex), np.nan)
    for column in (0, 1):
        radius[ends[:, column]] = np.hypot(*(vertex[ends[:, column]] - places[i]).T)
    across = places[j] - places[i]
    across /= np.hypot(*across.T)[:, None]
    clear = ((outline.normals[i] * across).sum(axis=1) > FACING) & (
        (-outline.normals[j] * across).sum(axis=1) > FACING
    )
    pair = np.sort(outline.face[ridge], axis=1)
    clear &= pair[:, 0] != pair[:, 1]
    taken = np.zeros(len(ridge), dtype=bool)
    found: list[tuple[Integers, Integers]] = []
    for label in np.unique(pair[clear], axis=0):
        rows = np.flatnonzero(clear & (pair == label).all(axis=1))
        for part in _connected(ends[rows]):
            path = _path(ends[rows[part]])
            if _is_wall(outline, label, rows[part], ridge, vertex[path], radius[path]):
                found.append((rows[part], path))
                taken[rows[part]] = True
    n = len(vertex)
    rest = ends[~taken]
    graph = coo_matrix((np.ones(len(rest)), rest.T), shape=(n, n))
    knot = connected_components(graph, directed=False)[1]
    runs = tuple(_run(outline, rows, path, ridge, ends, vertex, radius, knot) for rows, path in found)
    used = {k for r in runs if r.knots for k in r.knots}
    if not runs:
        used = set(np.unique(knot[rest]).tolist())
    knots = {}
    for k in sorted(used):
        at = np.flatnonzero((knot == k) & np.isfinite(radius))
        beside = rest[:, 0][knot[rest[:, 0]] == k], ridge[~taken][knot[rest[:, 0]] == k]
        knots[k] = Knot(vertex[at], radius[at], tuple(np.unique(outline.face[beside[1]]).tolist()))
    return MedialAxis(runs, knots)


def _connected(ends: Integers) -> list[Integers]:
    """Rows of edges (m, 2) by connected part."""
    _, number = np.unique(ends, return_inverse=True)
    number = number.reshape(ends.shape)
    n = int(number.max()) + 1
    graph = coo_matrix((np.ones(len(ends)), number.T), shape=(n, n))
    part = connected_components(graph, directed=False)[1][number[:, 0]]
    return [np.flatnonzero(part == k) for k in range(int(part.max()) + 1)]


def _path(ends: Integers) -> Integers:
    """Vertices of a chain of edges in order; of a loop with the first one repeated at the end."""
    beside: dict[int, list[int]] = {}
    for a, b in ends.tolist():
        beside.setdefault(a, []).append(b)
        beside.setdefault(b, []).append(a)
    loose = [v for v, near in beside.items() if len(near) == 1]
    here = loose[0] if loose else next(iter(beside))
    path, seen = [here], {here}
    while True:
        onward = [v for v in beside[path[-1]] if v not in seen]
        if not onward:
            break
        path.append(onward[0])
        seen.add(onward[0])
    if not loose:
        path.append(path[0])
    return np.array(path)


def _is_wall(
    outline: FacedOutline, label: Integers, rows: Integers, ridge: Integers, path: Array, radius: Array
) -> bool:
    """True where a clear run is long enough, and its faces run alongside each other."""
    steps = np.hypot(*np.diff(path, axis=0).T)
    length, thickness = float(steps.sum()), 2.0 * float(np.median(radius))
    if length < SHORT * thickness:
        return False
    first, second = (outline.faces[k] for k in label)
    if not _alongside(first, second, thickness):
        return False
    change = float(np.ptp(radius))
    runs_out = radius.min() < 0.25 * radius.max() and length < CORNER * radius.max()
    return change <= WEDGE * length and not runs_out


def _alongside(a: Face, b: Face, thickness: float) -> bool:
    """True where two faces may bound one wall: both nearly flat, or arcs about nearly one centre."""
    rises = [0.0 if f.centre is None else f.length**2 / (8.0 * f.radius) for f in (a, b)]
    if max(rises) <= FLAT * thickness:
        return True
    if a.centre is None or b.centre is None or a.convex == b.convex:
        # a fillet that faces a straight wall is a knot's; a long shallow arc is a wall's
        return all(f.centre is None or f.radius > 12.0 * thickness for f in (a, b))
    return bool(np.hypot(*(a.centre - b.centre)) <= CONCENTRIC * thickness)


def _run(
    outline: FacedOutline,
    rows: Integers,
    path: Integers,
    ridge: Integers,
    ends: Integers,
    vertex: Array,
    radius: Array,
    knot: Integers,
) -> Run:
    """A run with its samples told apart by side."""
    position = {v: k for k, v in enumerate(path[:-1].tolist())}
    position.setdefault(int(path[-1]), len(path) - 1)
    order = np.array([[position.get(v, 0) for v in pair] for pair in ends[rows].tolist()])
    direction = vertex[ends[rows, 1]] - vertex[ends[rows, 0]]
    direction[order[:, 0] > order[:, 1]] *= -1.0
    if path[0] == path[-1]:
        jump = np.abs(order[:, 0] - order[:, 1]) > 1
        direction[jump] *= -1.0
    a, b = ridge[rows].T
    across = outline.places[b] - outline.places[a]
    turn = direction[:, 0] * across[:, 1] - direction[:, 1] * across[:, 0]
    # faces of a run keep their sides: the sum outvotes ridges of no length
    lower = np.minimum(outline.face[a], outline.face[b])
    turn = np.where(outline.face[a] == lower, turn, -turn)
    low_is_right = turn.sum() > 0.0
    first, second = outline.face[ridge[rows[0]]]
    low, high = (first, second) if first < second else (second, first)
    samples = np.unique(ridge[rows])
    on_low = samples[outline.face[samples] == low]
    on_high = samples[outline.face[samples] == high]
    left, right = (on_high, on_low) if low_is_right else (on_low, on_high)
    loop = path[0] == path[-1]
    faces = (int(high), int(low)) if low_is_right else (int(low), int(high))
    return Run(
        outline.places[left],
        outline.places[right],
        vertex[path],
        radius[path],
        None if loop else (int(knot[path[0]]), int(knot[path[-1]])),
        faces,
    )
