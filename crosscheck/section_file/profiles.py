"""Profiles drawn once and placed on walls many times: stringers, stiffeners, hats.

A profile is drawn standing on a wall that runs along its x axis, on the wall's left: points with y = 0 are
its feet. Placing it splits the wall at the feet, so that both sides see the same panels by the same names.
"""

from __future__ import annotations

import cmath
import math
from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Any

from crosscheck.faults import FaultList, KeyPath, quoted
from crosscheck.section_file.faces import midlines_from_faces
from crosscheck.section_file.graph import SAME, Piece, WallGraph, sides_of
from crosscheck.section_file.keys import WALL_LIMIT
from crosscheck.section_file.model import BoomSpec, Place, WallSpec, arc_angle
from crosscheck.section_file.numbers import ANGLE, POSITIVE, SHARE, Numbers
from crosscheck.section_file.points import read_points
from crosscheck.section_file.walls import WallReader


@dataclass(frozen=True)
class Profile:
    """A profile as drawn: its points and walls, and its feet, the one that stands at the place first."""

    graph: WallGraph
    feet: tuple[str, ...]


@dataclass(frozen=True)
class _Placing:
    """One profile at one place: its number among those of its name, the wall, where, and which way."""

    path: KeyPath
    name: str
    number: int
    wall: WallSpec
    at: float
    turn: complex  # from the profile's axes to those along and left of the wall
    left: bool
    seen_by: str
    boom: float | None


def read_profiles(
    document: Mapping[str, Any], numbers: Numbers, materials: Collection[str], base_material: str | None
) -> dict[str, Profile]:
    """Profiles by name; those with faults are left out."""
    profiles = {}
    faults = numbers.faults
    for name, table in document.get("profiles", {}).items():
        path: KeyPath = ("profiles", name)
        before = len(faults) + faults.left_out
        drawn = table.get("points", {})
        points = read_points(drawn, numbers, (*path, "points"))
        reader = WallReader(numbers, points, drawn, materials, base_material, (*path, "walls"))
        graph = WallGraph(points, *reader.read(table.get("walls", [])))
        first = next(iter(drawn), None)
        if len(faults) + faults.left_out > before:
            continue
        if first in points and (points[first][1] != 0.0 or first not in graph.used):
            found = f"{quoted(first)} at y = {points[first][1]:.6g}" if points[first][1] else quoted(first)
            words = "a table whose first point is the foot: y = 0, and an end of one of its walls"
            faults.add((*path, "points"), found, words)
        if len(faults) + faults.left_out > before or not graph.holds:
            continue
        midlines_from_faces(graph, reader.faces, reader.tapers, ("x",), faults)
        feet = [point for point in graph.used if abs(graph.points[point][1]) <= SAME * graph.extent]
        if len(faults) + faults.left_out == before and first in feet:
            feet.sort(key=lambda point: point != first)
            profiles[name] = Profile(graph, tuple(feet))
    return profiles


class ProfilePlacer:
    """Places profiles on the walls of a graph, which it changes.

    Parameters
    ----------
    graph : points and walls, midlines
    numbers : resolves numbers and takes faults
    profiles : by name, those without fault
    declared : names of all profiles in the file, faulty ones too
    base_material : of booms whose profile names none
    """

    def __init__(
        self,
        graph: WallGraph,
        numbers: Numbers,
        profiles: Mapping[str, Profile],
        declared: Collection[str],
        base_material: str | None,
    ) -> None:
        self.graph = graph
        self.numbers = numbers
        self.faults: FaultList = numbers.faults
        self.profiles = profiles
        self.declared = declared
        self.base_material = base_material
        self.booms: list[BoomSpec] = []

    def place(self, entries: list[Mapping[str, Any]]) -> None:
        """Place every entry of [[placed]]; the booms that theory sees instead are collected in ``booms``."""
        by_name: dict[str, list[WallSpec]] = {}
        for wall in self.graph.walls:
            by_name.setdefault(wall.name, []).append(wall)
        placings: list[_Placing] = []
        counts: dict[str, int] = {}
        for index, entry in enumerate(entries):
            for placing in self._placings(("placed", index), entry, by_name, counts):
                placings.append(placing)
        if not self.graph.holds or len(placings) > WALL_LIMIT:
            if len(placings) > WALL_LIMIT:
                self.faults.add(("placed",), f"{len(placings)} profiles", f"at most {WALL_LIMIT}")
            return
        feet: dict[str, list[tuple[float, str]]] = {}
        made: list[WallSpec] = []
        for placing in placings:
            made += self._stand(placing, feet)
        self._split(feet)
        for wall in made:
            self._add_wall(wall, int(wall.key.partition("[")[2][:-1]))
        if len(self.graph.walls) > WALL_LIMIT:
            self.faults.add(("placed",), f"{len(self.graph.walls)} walls in all", f"at most {WALL_LIMIT}")

    def _placings(
        self,
        path: KeyPath,
        entry: Mapping[str, Any],
        walls: Mapping[str, list[WallSpec]],
        counts: dict[str, int],
    ) -> Iterator[_Placing]:
        """One placing for every place of an entry, in order."""
        name = entry.get("profile", "")
        if name and name not in self.declared:
            near = (name, self.declared)
            self.faults.add((*path, "profile"), quoted(name), "a profile of [profiles]", near=near)
        angle = self.numbers.number((*path, "angle"), entry.get("angle", 90), ANGLE)
        boom = self.numbers.number((*path, "boom"), entry.get("boom"), POSITIVE)
        seen_by = entry.get("seen_by", "fe" if "boom" in entry else "both")
        if "boom" in entry and seen_by != "fe":
            words = 'left out, or "fe", beside a boom that theory sees instead'
            self.faults.add((*path, "seen_by"), quoted(seen_by), words)
        if ("at" in entry) == ("count" in entry):
            keys = "both" if "at" in entry else "none of them"
            self.faults.add(path, keys, "given by at or by count")
            return
        fractions = self._fractions(path, entry)
        chosen = entry.get("wall", [])
        for wall_name in [chosen] if isinstance(chosen, str) else chosen:
            if wall_name not in walls:
                if walls:
                    of_path = ", ".join(map(quoted, self.graph.paths.get(wall_name, ())[:4]))
                    remedy = f"the walls of that path are {of_path}: name one or a list" if of_path else ""
                    like = None if of_path else (wall_name, walls)
                    found, words = quoted(wall_name), "the name of a wall"
                    self.faults.add((*path, "wall"), found, words, remedy, near=like)
                continue
            if len(walls[wall_name]) > 1:
                found = f"{quoted(wall_name)}, a wall of theory and one of FE"
                self.faults.add((*path, "wall"), found, "the name of one wall")
                continue
            (wall,) = walls[wall_name]
            for at in fractions:
                counts[name] = counts.get(name, 0) + 1
                if name in self.profiles and angle is not None:
                    turn = cmath.rect(1.0, math.radians(angle - 90.0))
                    left = entry.get("side", "left") == "left"
                    yield _Placing(path, name, counts[name], wall, at, turn, left, seen_by, boom)

    def _fractions(self, path: KeyPath, entry: Mapping[str, Any]) -> list[float]:
        count, at = entry.get("count"), entry.get("at")
        if count is not None:
            return [number / (count + 1) for number in range(1, count + 1)]
        given = at if isinstance(at, list) else [at]
        values = [self.numbers.number((*path, "at", i), each, SHARE) for i, each in enumerate(given)]
        return [value for value in values if value is not None]

    def _stand(self, placing: _Placing, feet: dict[str, list[tuple[float, str]]]) -> list[WallSpec]:
        """Walls of one placed profile; its points are added to the graph, its feet to those of the wall."""
        profile, wall = self.profiles[placing.name], placing.wall
        origin, along = self._axes(wall, placing.at)
        drawn = {name: complex(*place) for name, place in profile.graph.points.items()}
        foot = drawn[profile.feet[0]]
        # Turned about its own foot: that one stays on the wall.
        turned = {name: foot + (z - foot) * placing.turn for name, z in drawn.items()}

        def placed(z: complex) -> Place:
            w = origin + along * (z if placing.left else z.conjugate())
            return w.real, w.imag

        own = {name: f"{placing.name} {placing.number} {name}" for name in profile.graph.used}
        length = self.graph.length(wall)
        if len(profile.feet) > 1 and (placing.turn != 1.0 or wall.arc_through is not None):
            found = f"{quoted(placing.name)}, which has {len(profile.feet)} feet, on {quoted(wall.name)}"
            words = "a profile with one foot where the wall is an arc or the angle is not 90"
            self.faults.add(placing.path, found, words)
            return []
        for name in profile.feet:
            at = placing.at + drawn[name].real / length
            if not -SAME <= at <= 1.0 + SAME:
                found = f"foot {quoted(name)} at {at:.6g} of the length of {quoted(wall.name)}"
                self.faults.add(placing.path, found, "a place at which all feet stand on the wall (0 to 1)")
                return []
            own[name] = self._foot(wall, at, own[name], feet)
        for name, shown in own.items():
            if name in profile.feet:
                continue
            if shown in self.graph.points:
                self.faults.add(placing.path, f"a point {quoted(shown)}, which is there", "named otherwise")
            self.graph.points[shown] = placed(turned[name])
        if placing.boom is not None:
            material = profile.graph.walls[0].material or self.base_material
            boom = BoomSpec(placing.boom, own[profile.feet[0]], material=material, seen_by="theory")
            self.booms.append(boom)
        arcs = {
            each.name: None
            if each.arc_through is None
            else placed(foot + (complex(*each.arc_through) - foot) * placing.turn)
            for each in profile.graph.walls
        }
        return [
            replace(
                each,
                name=f"{placing.name} {placing.number} {each.name}",
                start=own[each.start],
                end=own[each.end],
                arc_through=arcs[each.name],
                seen_by=placing.seen_by if each.seen_by == "both" else each.seen_by,
                key=f"placed[{placing.path[1]}]",
            )
            for each in profile.graph.walls
        ]

    def _axes(self, wall: WallSpec, at: float) -> tuple[complex, complex]:
        """Place and unit direction of a wall at a fraction of its length."""
        start, end = self.graph.ends(wall)
        if wall.arc_through is None:
            a, b = complex(*start), complex(*end)
            return a + at * (b - a), (b - a) / abs(b - a)
        centre, first, sweep = arc_angle(start, wall.arc_through, end)
        out = cmath.rect(1.0, first + sweep * at)
        along = out * complex(0.0, math.copysign(1.0, sweep))
        return complex(*centre) + math.dist(centre, start) * out, along

    def _foot(self, wall: WallSpec, at: float, name: str, feet: dict[str, list[tuple[float, str]]]) -> str:
        """The point of a foot: an end of the wall, that of another foot there, or a new one."""
        for end, point in ((0.0, wall.start), (1.0, wall.end), *feet.get(wall.name, ())):
            if abs(at - end) <= SAME:
                return point
        place, _ = self._axes(wall, at)
        self.graph.points[name] = (place.real, place.imag)
        feet.setdefault(wall.name, []).append((at, name))
        return name

    def _split(self, feet: Mapping[str, list[tuple[float, str]]]) -> None:
        """Put the pieces of every wall with feet in its place, and make their names known."""
        whole = list(self.graph.walls)
        self.graph.walls.clear()
        for wall in whole:
            if wall.name not in feet:
                self.graph.walls.append(wall)
                continue
            named = self.graph.named.pop(wall.name)
            stops = [(0.0, wall.start), *sorted(feet[wall.name]), (1.0, wall.end)]
            join = "." if wall.name[-1].isdigit() else " "
            pieces = []
            for k, ((begin, start), (stop, end)) in enumerate(pairwise(stops), start=1):
                name = f"{wall.name}{join}{k}"
                first, last = wall.thickness
                ends = first + (last - first) * begin, first + (last - first) * stop
                through = None
                if wall.arc_through is not None:
                    middle, _ = self._axes(wall, 0.5 * (begin + stop))
                    through = (middle.real, middle.imag)
                piece = replace(wall, name=name, start=start, end=end, thickness=ends, arc_through=through)
                pieces.append(Piece(name, begin, stop, start, end))
                self.graph.walls.append(piece)
                self.graph.named[name] = named
            self.graph.pieces[wall.name] = tuple(pieces)
        seen: set[tuple[str, str]] = set()
        for wall in self.graph.walls:
            keys = {(side, wall.name) for side in sides_of(wall)}
            if keys & seen:
                found = f"{quoted(wall.name)} again, for a piece between placed profiles or a wall of its own"
                self.faults.add(("placed",), found, "on walls whose pieces have names of their own")
            seen |= keys

    def _add_wall(self, wall: WallSpec, index: int) -> None:
        if wall.name in self.graph.named:
            self.faults.add(
                ("placed", index), f"a wall {quoted(wall.name)}, which is there", "named otherwise"
            )
            return
        self.graph.named[wall.name] = True
        self.graph.walls.append(wall)
