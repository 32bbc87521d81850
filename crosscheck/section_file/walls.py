"""Walls of a section file: paths taken apart, names given, thicknesses resolved."""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping, MutableMapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from crosscheck.faults import KeyPath, key_text, quoted, shown
from crosscheck.section_file.faces import LEFT, RIGHT, Taper
from crosscheck.section_file.graph import WallKey, sides_of, wall_key, wall_length
from crosscheck.section_file.keys import WALL_LIMIT
from crosscheck.section_file.model import (
    Place,
    WallSpec,
)
from crosscheck.section_file.numbers import POSITIVE, SHARE, Numbers
from crosscheck.section_file.same_points import same_points_fault
from crosscheck.section_file.smooth import FoldedPath, smooth_spans

UNKNOWN = math.nan  # stands for a thickness or coordinate whose fault is noted already


@dataclass(frozen=True)
class _Stretch:
    """One wall of a path: its number within the path from 0, its ends, and a third place on its arc.

    ``part``: 1 or 2 for the arcs of a span that a smooth path makes of two, else 0.
    """

    span: int
    part: int
    start: str
    end: str
    arc: Place | None


class WallReader:
    """Takes the wall tables of a document apart into walls between two points.

    Parameters
    ----------
    numbers : resolves numbers and takes faults
    points : places of points that are without fault; receives those where the arcs of smooth paths meet
    declared_points, declared_materials : all names in the file, faulty ones too
    base_material : material of a wall that names none
    prefix : key path of the list of wall tables

    Attributes
    ----------
    faces : LEFT or RIGHT by the key of each wall that is given by a face
    tapers : paths whose thickness is linear by length
    paths : names of the walls of every named path of several, by the name of the path
    """

    def __init__(
        self,
        numbers: Numbers,
        points: MutableMapping[str, Place],
        declared_points: Collection[str],
        declared_materials: Collection[str],
        base_material: str | None,
        prefix: KeyPath = ("walls",),
    ) -> None:
        self.numbers = numbers
        self.faults = numbers.faults
        self.points = points
        self.declared_points = declared_points
        self.declared_materials = declared_materials
        self.base_material = base_material
        self.prefix = prefix
        self.faces: dict[WallKey, int] = {}
        self.tapers: list[Taper] = []
        self.paths: dict[str, tuple[str, ...]] = {}
        self.complete = True  # False once an entry gave no walls

    def read(self, entries: Sequence[Mapping[str, Any]]) -> tuple[list[WallSpec], dict[str, bool]]:
        """Walls in file order, and for every name whether the file gave it.

        Walls of a faulty entry are kept where their points are known, with what is faulty set to NaN,
        so that the geometry can be checked in the same go.
        """
        count = sum(max(len(entry.get("path", ())) - 1, 0) for entry in entries)
        if not self._few_enough(count):
            return [], {}
        walls: list[WallSpec] = []
        seen: dict[tuple[str, str], WallSpec] = {}
        named: dict[str, bool] = {}
        for index, entry in enumerate(entries):
            for wall in self._entry(index, entry):
                sides = sides_of(wall)
                first = next((seen[side, wall.name] for side in sides if (side, wall.name) in seen), None)
                if first is not None:
                    self._repeated_name(index, entry, wall, first, named[wall.name])
                    continue
                named[wall.name] = "name" in entry
                # One wall of theory and one of FE may share a name: they are then compared.
                seen |= {(side, wall.name): wall for side in sides}
                walls.append(wall)
        # Smooth paths make up to two arcs of a span.
        return (walls, named) if self._few_enough(len(walls)) else ([], {})

    def _few_enough(self, count: int) -> bool:
        """False, with a fault, when there are more walls than the FE side takes."""
        if count <= WALL_LIMIT:
            return True
        self.complete = False
        self.faults.add(self.prefix, f"{count} walls", f"at most {WALL_LIMIT} walls")
        return False

    def _repeated_name(
        self, index: int, entry: Mapping[str, Any], wall: WallSpec, first: WallSpec, first_named: bool
    ) -> None:
        key = (*self.prefix, index, "name")
        unnamed = not first_named and "name" not in entry
        if unnamed and {first.start, first.end} == {wall.start, wall.end}:
            same_points_fault(self.faults, key, first, wall)
        else:
            found = f"{quoted(wall.name)} again (first at {first.key})"
            self.faults.add(key, found, "unique", "give each wall a name of its own")

    def _entry(self, index: int, entry: Mapping[str, Any]) -> list[WallSpec]:
        """Walls of one entry of [[walls]]."""
        path: KeyPath = (*self.prefix, index)
        points = entry.get("path")
        if points is None or not self._path_holds((*path, "path"), points):
            self.complete = False
            self._note_other_faults(path, entry, points)
            return []
        stretches = self._stretches(path, entry, points)
        thicknesses = self._thicknesses((*path, "thickness"), entry.get("thickness"), stretches)
        material = self._material((*path, "material"), entry.get("material"))
        share, theory_share = self._shares((*path, "direct_share"), entry.get("direct_share", 1.0))
        name = entry.get("name")
        several = len(points) > 2
        walls = []
        for stretch, thickness in zip(stretches, thicknesses, strict=True):
            own = f"{points[stretch.span]}-{points[stretch.span + 1]}"
            if name is not None:
                own = f"{name} {stretch.span + 1}" if several else name
            wall = WallSpec(
                name=f"{own}.{stretch.part}" if stretch.part else own,
                start=stretch.start,
                end=stretch.end,
                thickness=thickness,
                arc_through=stretch.arc,
                material=material,
                direct_share=share,
                theory_share=theory_share,
                seen_by=entry.get("seen_by", "both"),
                key=key_text(path),
            )
            walls.append(wall)
            if entry.get("line", "midline") != "midline":
                self.faces[wall_key(wall)] = LEFT if entry["line"] == "left face" else RIGHT
        if name is not None and several:
            self.paths[name] = tuple(wall.name for wall in walls)
        if isinstance(entry.get("thickness"), dict) and walls:
            ends = walls[0].thickness[0], walls[-1].thickness[1]
            self.tapers.append(Taper(tuple(wall_key(wall) for wall in walls), *ends))
        return walls

    def _note_other_faults(
        self, path: KeyPath, entry: Mapping[str, Any], points: Sequence[str] | None
    ) -> None:
        """Note what else is faulty in an entry whose path gives no walls; a list's length is not judged."""
        raw = entry.get("thickness")
        here: KeyPath = (*path, "thickness")
        parts: list[tuple[KeyPath, Any]] = [(here, raw)]
        if isinstance(raw, list):
            parts = [((*here, i), value) for i, value in enumerate(raw)]
        elif isinstance(raw, dict):
            parts = [((*here, key), raw.get(key)) for key in ("from", "to")]
        for part, value in parts:
            self._thickness(part, value)
        self._material((*path, "material"), entry.get("material"))
        self._shares((*path, "direct_share"), entry.get("direct_share", 1.0))
        # Between a point and itself there is neither an arc nor a smooth path to judge.
        if points is not None and all(a != b for a, b in pairwise(points)):
            self._stretches(path, entry, points)
        elif "arc" in entry:
            self.numbers.pair((*path, "arc", "through"), entry["arc"].get("through"))

    def _stretches(self, path: KeyPath, entry: Mapping[str, Any], points: Sequence[str]) -> list[_Stretch]:
        """Walls of a path: straight, one arc, or the arcs of a smooth path with the places where they
        meet."""
        arc = self._arc((*path, "arc"), entry, points)
        plain = [_Stretch(i, 0, start, end, arc) for i, (start, end) in enumerate(pairwise(points))]
        if not entry.get("smooth", False):
            return plain
        if len(points) < 3 or "arc" in entry:
            found = "an arc" if "arc" in entry else "a path of two points"
            words = "given with a path of at least three points, without arc"
            self.faults.add((*path, "smooth"), found, words)
            return plain
        places = [self.points[name] for name in points if name in self.points]
        if len(places) < len(points) or any(a == b for a, b in pairwise(places)):
            return plain  # noted as faults of the points
        try:
            spans = smooth_spans(places)
        except FoldedPath as folded:
            words = "a path that turns less, or more points round the turn"
            self.faults.add((*path, "path", folded.index), quoted(points[folded.index]), words)
            return plain
        made: list[_Stretch] = []
        for i, ((start, end), arcs) in enumerate(zip(pairwise(points), spans, strict=True)):
            if len(arcs) == 1:
                made.append(_Stretch(i, 0, start, end, arcs[0].through))
                continue
            between = self._free_point(f"{start}~{end}")
            self.points[between] = arcs[0].end
            made += [
                _Stretch(i, 1, start, between, arcs[0].through),
                _Stretch(i, 2, between, end, arcs[1].through),
            ]
        return made

    def _free_point(self, name: str) -> str:
        """A name for a point between two arcs that no other point has."""
        while name in self.points or name in self.declared_points:
            name += "~"
        return name

    def _path_holds(self, path: KeyPath, points: Sequence[str]) -> bool:
        """False when a path has a fault after which its walls mean nothing."""
        before = len(self.faults) + self.faults.left_out
        for position, point in enumerate(points):
            here = (*path, position)
            if point not in self.declared_points:
                words = "a point of [points]" if self.prefix == ("walls",) else "a point of the profile"
                self.faults.add(here, quoted(point), words, near=(point, self.declared_points))
            if position and point == points[position - 1]:
                self.faults.add(
                    here, f"{quoted(point)} twice in a row", "a point other than the one before it"
                )
        return len(self.faults) + self.faults.left_out == before

    def _material(self, path: KeyPath, name: str | None) -> str | None:
        if name is None:
            return self.base_material
        if name not in self.declared_materials:
            words = "a material of [materials]"
            self.faults.add(path, quoted(name), words, near=(name, self.declared_materials))
        return name

    def _shares(self, path: KeyPath, raw: Any) -> tuple[float, float | None]:
        """Share of direct stress, and theory's own where the file gives one for each side."""
        if not isinstance(raw, dict):
            share = self.numbers.number(path, raw, SHARE)
            return UNKNOWN if share is None else share, None
        fe, theory = (self.numbers.number((*path, side), raw.get(side), SHARE) for side in ("fe", "theory"))
        return UNKNOWN if fe is None else fe, theory

    def _arc(self, path: KeyPath, entry: Mapping[str, Any], points: Sequence[str]) -> Place | None:
        """Third place of an arc that the path's two points make a circle with."""
        if "arc" not in entry:
            return None
        through = self.numbers.pair((*path, "through"), entry["arc"].get("through"))
        if len(points) != 2:
            self.faults.add(path, f"a path of {len(points)} points", "given with a path of two points")
            return None
        ends = [self.points.get(name) for name in points]
        if through is None or ends[0] is None or ends[1] is None:
            return through
        (ax, ay), (bx, by), (cx, cy) = ends[0], through, ends[1]
        area = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax)
        size = max(math.dist(ends[0], through), math.dist(through, ends[1]), math.dist(ends[0], ends[1]))
        if abs(area) <= 1e-9 * size * size:
            found = f"{shown(entry['arc']['through'])} in line with both points"
            self.faults.add((*path, "through"), found, "off the line through both points")
            return None
        return through

    def _thicknesses(
        self, path: KeyPath, raw: Any, stretches: Sequence[_Stretch]
    ) -> list[tuple[float, float]]:
        """Thickness at start and end of every wall of a path [L]; NaN where it is faulty."""
        count = stretches[-1].span + 1
        if isinstance(raw, list):
            if len(raw) != count:
                words = f"one value, or a list of {count}, one per wall of the path"
                self.faults.add(path, f"a list of {len(raw)}", words)
                return [(UNKNOWN, UNKNOWN)] * len(stretches)
            values = [self._thickness((*path, i), entry) for i, entry in enumerate(raw)]
            return [(values[each.span], values[each.span]) for each in stretches]
        if isinstance(raw, dict):
            first = self._thickness((*path, "from"), raw.get("from"))
            last = self._thickness((*path, "to"), raw.get("to"))
            return self._taper(first, last, stretches)
        value = self._thickness(path, raw)
        return [(value, value)] * len(stretches)

    def _thickness(self, path: KeyPath, raw: Any) -> float:
        value = self.numbers.number(path, raw, POSITIVE)
        return UNKNOWN if value is None else value

    def _taper(self, first: float, last: float, stretches: Sequence[_Stretch]) -> list[tuple[float, float]]:
        """Thickness that is linear by length over a whole path, per wall [L]."""
        if any(point not in self.points for each in stretches for point in (each.start, each.end)):
            return [(UNKNOWN, UNKNOWN)] * len(stretches)
        along = [0.0]
        for each in stretches:
            along.append(along[-1] + wall_length(self.points[each.start], self.points[each.end], each.arc))
        whole = along[-1] or 1.0
        values = [first + (last - first) * distance / whole for distance in along]
        return list(pairwise(values))
