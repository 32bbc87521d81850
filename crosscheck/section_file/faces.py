"""Midlines of walls that are given by one of their faces.

The midline of such a wall lies half its thickness beside the path: a parallel line, a concentric arc, or with
a linear taper the line whose band has that face. A point belongs to the midlines of all its walls: the place
nearest to them all (least squares) is their intersection where they have one, and square beside the written
point where they all run the same way. Free ends are square. The taper's lengths are those of the midlines, so
that the places are found by iteration.
"""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from crosscheck.faults import FaultList, quoted
from crosscheck.section_file.graph import WallGraph, WallKey, wall_key, wall_length
from crosscheck.section_file.model import Place, WallSpec, arc_angle
from crosscheck.section_file.same_points import entry_path

Floats = NDArray[np.float64]

LEFT, RIGHT = 1, -1
# As for mitres: midlines that meet farther away than so many thicknesses count as running the same way.
FARTHEST = 4.0
_ROUNDS = 100


@dataclass(frozen=True)
class Taper:
    """Walls of one path, in its order, whose thickness is linear by length from first to last [L]."""

    walls: tuple[WallKey, ...]
    first: float
    last: float


def midlines_from_faces(
    graph: WallGraph,
    sides: Mapping[WallKey, int],
    tapers: Sequence[Taper],
    axes: Collection[str],
    faults: FaultList,
) -> list[str]:
    """Move points, arcs and tapers of a graph from faces to midlines.

    Parameters
    ----------
    graph : points and walls as written; changed in place
    sides : by the key of each wall that is given by a face, LEFT or RIGHT
    tapers : paths whose thickness is linear by length
    axes : "x", "y": axes on which points stay that lie on them, since their walls go on beyond
    faults : receives walls whose faces make no midline

    Returns
    -------
    Remarks: points at which the midlines pass each other.
    """
    if not sides or not graph.holds:
        return []
    before = len(faults) + faults.left_out
    _check_forms(graph, sides, faults)
    if len(faults) + faults.left_out > before:
        return []
    offset = _Offset(graph, sides, tapers, axes)
    offset.settle()
    offset.check_directions(faults)
    notes = offset.misses(faults)
    graph.points.update(offset.moved())
    graph.walls[:] = offset.walls()
    return notes


def _check_forms(graph: WallGraph, sides: Mapping[WallKey, int], faults: FaultList) -> None:
    """Note arcs whose face has no midline that is an arc."""
    for wall in graph.walls:
        if wall_key(wall) not in sides or wall.arc_through is None:
            continue
        start, end = graph.ends(wall)
        if wall.thickness[0] != wall.thickness[1]:
            found = f"a face of {quoted(wall.name)}, an arc of linear thickness"
            words = 'line = "midline" where an arc tapers (its midline is no arc beside the face)'
            faults.add(entry_path(wall, "line"), found, words)
            continue
        centre, _, sweep = arc_angle(start, wall.arc_through, end)
        radius = math.dist(centre, start)
        inside = sides[wall_key(wall)] * math.copysign(1.0, sweep) < 0.0
        if inside and radius <= 0.5 * wall.thickness[0]:
            found = (
                f"an outer face of radius {radius:.4g} on {quoted(wall.name)}, {wall.thickness[0]:.4g} thick"
            )
            faults.add(entry_path(wall, "line"), found, "a radius of more than half the thickness")


class _Offset:
    """Places of the midlines' points, found by iteration; places are (2,) arrays [L]."""

    def __init__(
        self, graph: WallGraph, sides: Mapping[WallKey, int], tapers: Sequence[Taper], axes: Collection[str]
    ) -> None:
        self.graph = graph
        self.sides = sides
        self.tapers = tapers
        self.by_key = {wall_key(wall): wall for wall in graph.walls}
        self.thickness = {wall_key(wall): wall.thickness for wall in graph.walls}
        self.written: dict[str, Floats] = {name: np.array(graph.points[name]) for name in graph.used}
        self.place = dict(self.written)
        self.size = graph.extent
        self.at_point: dict[str, list[tuple[WallSpec, int]]] = {}
        for wall in graph.walls:
            for end, name in enumerate((wall.start, wall.end)):
                self.at_point.setdefault(name, []).append((wall, end))
        self.touched = [
            name for name, met in self.at_point.items() if any(wall_key(wall) in sides for wall, _ in met)
        ]
        # Row of an axis: the coordinate that stays zero on it.
        self.on_axis = {
            name: [np.eye(2)[k] for axis, k in (("x", 1), ("y", 0)) if axis in axes and self._zero(name, k)]
            for name in self.touched
        }
        self.circles = {
            wall_key(wall): self._circle(wall) for wall in graph.walls if wall.arc_through is not None
        }

    def _zero(self, name: str, k: int) -> bool:
        return bool(abs(self.written[name][k]) <= 1e-9 * self.size)

    def _circle(self, wall: WallSpec) -> tuple[Floats, float, float]:
        """Centre and radius of the arc as written [L], and +1 where it turns anticlockwise, else -1."""
        assert wall.arc_through is not None
        start, end = self.graph.ends(wall)
        centre, _, sweep = arc_angle(start, wall.arc_through, end)
        return np.array(centre), math.dist(centre, start), math.copysign(1.0, sweep)

    def settle(self) -> None:
        """Iterate until no point moves."""
        for _ in range(_ROUNDS):
            self._taper()
            new = {name: self._nearest(name) for name in self.touched}
            moved = max(float(np.abs(new[name] - self.place[name]).max()) for name in new)
            self.place.update(new)
            if moved <= 1e-14 * self.size:
                break

    def _taper(self) -> None:
        """Thickness of tapered paths by the lengths of their midlines as they are now."""
        for taper in self.tapers:
            along = [0.0]
            for key in taper.walls:
                wall = self.by_key[key]
                start, end = (self._as_place(p) for p in (wall.start, wall.end))
                along.append(along[-1] + wall_length(start, end, self._arc_through(wall)))
            values = [taper.first + (taper.last - taper.first) * s / along[-1] for s in along]
            for k, key in enumerate(taper.walls):
                self.thickness[key] = (values[k], values[k + 1])

    def _as_place(self, point: str) -> Place:
        x, y = self.place[point]
        return float(x), float(y)

    def _slope(self, wall: WallSpec) -> float:
        """Tangent of the angle from a straight wall's midline to its left face."""
        first, last = self.thickness[wall_key(wall)]
        return 0.5 * (last - first) / float(np.hypot(*(self.place[wall.end] - self.place[wall.start])))

    def _normal(self, wall: WallSpec, at: Floats) -> Floats:
        """Unit left normal of the midline, for a place of its face at one of its ends."""
        if wall_key(wall) in self.circles:
            centre, _, turn = self.circles[wall_key(wall)]
            out = at - centre
            return np.asarray(-turn * out / np.hypot(*out))
        along = self.written[wall.end] - self.written[wall.start]
        back = complex(1.0, -self.sides[wall_key(wall)] * self._slope(wall))
        normal = complex(-along[1], along[0]) * back
        return np.array((normal.real, normal.imag)) / abs(normal)

    def _row(self, wall: WallSpec, end: int, at: Floats) -> tuple[Floats, float]:
        """Unit normal n and distance d [L]: n . step = d brings a place onto the wall's midline."""
        half = 0.5 * self.thickness[wall_key(wall)][end] * self.sides.get(wall_key(wall), 0)
        if wall_key(wall) in self.circles:
            centre, radius, turn = self.circles[wall_key(wall)]
            out = at - centre
            distance = float(np.hypot(*out))
            return out / distance, radius + turn * half - distance
        begin, stop = self.written[wall.start], self.written[wall.end]
        along = (stop - begin) / np.hypot(*(stop - begin))
        face = np.array((-along[1], along[0]))
        return face, float(face @ (begin - at) - half / math.hypot(1.0, self._slope(wall)))

    def _rows(self, name: str) -> tuple[Floats, Floats]:
        """Rows (n, 2) and distances (n,) of all that a point has to lie on."""
        at = self.place[name]
        rows = [self._row(wall, end, at) for wall, end in self.at_point[name]]
        rows += [(row, -float(row @ at)) for row in self.on_axis[name]]
        return np.array([row for row, _ in rows]), np.array([distance for _, distance in rows])

    def _nearest(self, name: str) -> Floats:
        """The next place of a point."""
        met = self.at_point[name]
        if len(met) == 1 and not self.on_axis[name]:
            (wall, end), written = met[0], self.written[name]
            half = 0.5 * self.thickness[wall_key(wall)][end] * self.sides[wall_key(wall)]
            return np.asarray(written - half * self._normal(wall, written))
        rows, distances = self._rows(name)
        left, size, right = np.linalg.svd(rows, full_matrices=False)
        steps = np.where(size > 1e-9 * size[0], (left.T @ distances) / np.maximum(size, 1e-300), 0.0)
        thickest = max(max(self.thickness[wall_key(wall)]) for wall, _ in met)
        new = self.place[name] + right.T @ steps
        if np.hypot(*(new - self.written[name])) > FARTHEST * thickest:
            new = self.place[name] + right[0] * steps[0]
        return np.asarray(new)

    def _arc_through(self, wall: WallSpec) -> Place | None:
        """Third place of the midline's arc."""
        if wall.arc_through is None or wall_key(wall) not in self.sides:
            return wall.arc_through
        centre, radius, turn = self.circles[wall_key(wall)]
        middle = radius + 0.5 * turn * self.sides[wall_key(wall)] * self.thickness[wall_key(wall)][0]
        x, y = centre + (np.array(wall.arc_through) - centre) * (middle / radius)
        return float(x), float(y)

    def check_directions(self, faults: FaultList) -> None:
        """Note walls that are too short for their corners: their midline would run backwards."""
        for wall in self.graph.walls:
            face = self.written[wall.end] - self.written[wall.start]
            if face @ (self.place[wall.end] - self.place[wall.start]) <= 1e-9 * float(face @ face):
                found = f"{quoted(wall.name)}, too short for the thickness of the walls at its corners"
                faults.add(entry_path(wall, "line"), found, "a wall whose midline has a length")

    def misses(self, faults: FaultList) -> list[str]:
        """Remarks on points that do not lie on all midlines; faults where they are far off."""
        notes = []
        for name in self.touched:
            if len(self.at_point[name]) == 1 and not self.on_axis[name]:
                continue
            _, distances = self._rows(name)
            miss = float(np.abs(distances).max())
            if miss <= 1e-9 * self.size:
                continue
            thinnest = min(min(self.thickness[wall_key(wall)]) for wall, _ in self.at_point[name])
            if self.on_axis[name] or miss > 0.5 * thinnest:
                found = f"midlines that pass {quoted(name)} at distances up to {miss:.4g}"
                wall = next(w for w, _ in self.at_point[name] if wall_key(w) in self.sides)
                words = "faces whose midlines meet in one point, within half the thinnest wall there"
                remedy = 'give the walls there by their midlines (line = "midline")'
                faults.add(entry_path(wall, "line"), found, words, remedy)
                continue
            notes.append(
                f"point {quoted(name)}: the midlines beside the faces do not meet in one point; it is put at "
                f"the place nearest to them all, and faces there are up to {miss:.3g} off, as where walls of "
                "two thicknesses are flush; draw the solid under [outline] where FE must have them exactly"
            )
        return notes

    def moved(self) -> dict[str, Place]:
        """New places of the points that faces move."""
        return {name: self._as_place(name) for name in self.touched}

    def walls(self) -> list[WallSpec]:
        """The walls with arcs and thicknesses of their midlines."""
        return [
            replace(wall, thickness=self.thickness[wall_key(wall)], arc_through=self._arc_through(wall))
            for wall in self.graph.walls
        ]
