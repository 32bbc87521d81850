"""Geometry of the midline graph: what would make a section meaningless on either side."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from itertools import pairwise

import numpy as np

from crosscheck.faults import FaultList, quoted
from crosscheck.section_file.contacts import Contact, Floats, Segments, contacts
from crosscheck.section_file.graph import Parts
from crosscheck.section_file.keys import OFFSET_LIMIT, SLENDERNESS_LIMIT
from crosscheck.section_file.model import CutSpec, Place, WallSpec, arc_angle
from crosscheck.section_file.same_points import check_same_points, entry_path

_ARC_PIECES = 32
_NAMED_PARTS = 3
_NAMED_WALLS = 3


class GeometryCheck:
    """Checks walls and points together and notes faults.

    Parameters
    ----------
    walls : all walls whose path is known; faulty thicknesses are NaN
    named : for every wall's name whether the file gave it
    points : places of points that are without fault [L]
    faults : receives the faults
    """

    def __init__(
        self,
        walls: Sequence[WallSpec],
        named: Mapping[str, bool],
        points: Mapping[str, Place],
        faults: FaultList,
    ) -> None:
        self.walls = walls
        self.named = named
        self.points = points
        self.faults = faults
        self.used = {name for wall in walls for name in (wall.start, wall.end)}
        placed = [points[name] for name in self.used if name in points]
        for wall in walls:
            if wall.arc_through is not None and wall.start in points and wall.end in points:
                # an arc may reach far beyond its three places
                placed += _arc_places(points[wall.start], wall.arc_through, points[wall.end])
        self.places: Floats = np.array(placed, dtype=float).reshape(-1, 2)
        self.extent = float(np.ptp(self.places, axis=0).max()) if len(placed) else 0.0
        thicknesses = [t for wall in walls for t in wall.thickness if not math.isnan(t)]
        self.thinnest = min(thicknesses, default=0.0)
        self.thickest = max(thicknesses, default=0.0)
        # Far below what a drawing means, far above round-off: nobody draws a tenth of a per mille of t.
        self.tolerance = max(1e-9 * self.extent, min(1e-4 * self.thinnest, 1e-6 * self.extent))
        self.joined: list[tuple[str, str]] = []  # points that contacts join, so that one cause is said once

    def run(
        self,
        cuts: Sequence[CutSpec],
        complete: bool,
        load_points: Iterable[str],
        *,
        outlined: bool = False,
    ) -> list[str]:
        """Run every check.

        Parameters
        ----------
        cuts : the file's cuts
        complete : False when walls are missing for a fault, so that parts cannot be told
        load_points : points that loads use
        outlined : True where FE sees an outline, whatever walls there are

        Returns
        -------
        Remarks that are no faults.
        """
        loads = set(load_points)
        self._check_size()
        self._check_lengths()
        views = {"both": self.walls}
        if any(wall.seen_by != "both" for wall in self.walls):
            views = {side: seen_by(self.walls, side) for side in ("theory", "fe")}
        self._check_repeated_points(loads, list(views.values()))
        for view, seen in views.items():
            skip = view == "fe"  # what both sides see was judged with theory's walls
            same = check_same_points(seen, self.named, self.faults, skip)
            self._check_contacts(seen, same, skip)
        if complete:
            for view, seen in views.items():
                if not outlined or (self.walls and view != "fe"):
                    self._check_parts(seen, view)
            self._check_cuts(cuts)
        idle = [name for name in self.points if name not in self.used and name not in loads]
        return [f"points that no wall and no load uses: {_listed(idle)}"] if idle else []

    def _check_size(self) -> None:
        """Numbers must keep enough digits: not too far from the origin, not too slender."""
        if self.extent <= 0.0:
            return
        farthest = float(np.abs(self.places).max())
        if farthest > OFFSET_LIMIT * self.extent:
            found = f"a section {self.extent:.4g} wide or high at a distance of {farthest:.4g}"
            words = f"within {OFFSET_LIMIT:g} times the section's size from the origin"
            self.faults.add(("points",), found, words, "move the origin to the section")
        noted: set[str] = set()
        for wall in self.walls:
            thin = min(wall.thickness)
            if self.extent > SLENDERNESS_LIMIT * thin and wall.key not in noted:
                noted.add(wall.key)
                words = f"at least 1/{SLENDERNESS_LIMIT:g} of the section's size ({self.extent:.4g})"
                self.faults.add(entry_path(wall, "thickness"), f"{thin:.6g}", words)

    def _check_repeated_points(self, load_points: set[str], views: Sequence[Sequence[WallSpec]]) -> None:
        """Two names for one place, except places that only loads use or that no side sees both of."""
        sides = [{name for wall in walls for name in (wall.start, wall.end)} for walls in views]
        names = [name for name in self.points if name in self.used or name not in load_points]
        if len(names) < 2:
            return
        place = np.array([self.points[name] for name in names])
        # Neighbours in x within the tolerance form a group; repeated places are neighbours in y there.
        order = np.argsort(place[:, 0], kind="stable")
        group = np.empty(len(names), dtype=int)
        group[order] = np.cumsum(np.diff(place[order, 0], prepend=place[order[0], 0]) > self.tolerance)
        order = np.lexsort((np.arange(len(names)), place[:, 1], group))
        first, second = order[:-1], order[1:]
        near = np.hypot(*(place[first] - place[second]).T) <= self.tolerance
        for k in np.flatnonzero(near):
            a, b = sorted((int(first[k]), int(second[k])))
            if {names[a], names[b]} <= self.used and not any({names[a], names[b]} <= side for side in sides):
                continue
            found = f"the place of {quoted(names[a])}, {_place_text(self.points[names[a]])}"
            words = "a place of its own"
            self.faults.add(
                ("points", names[b]), found, words, f"use {quoted(names[a])} in the paths instead"
            )
            self.joined.append((names[a], names[b]))

    def _check_lengths(self) -> None:
        for wall in self.walls:
            if wall.start not in self.points or wall.end not in self.points:
                continue
            length = math.dist(self.points[wall.start], self.points[wall.end])
            if length <= self.tolerance:
                found = f"a length of {length:.4g} from {quoted(wall.start)} to {quoted(wall.end)}"
                self.faults.add(entry_path(wall, "path"), found, "walls of a length > 0")

    def _check_contacts(self, walls: Sequence[WallSpec], same: set[frozenset[str]], skip_both: bool) -> None:
        """Crossings, touches and overlaps among the walls that one side sees."""
        segments, ends = self._segments(walls)
        if not len(segments.wall):
            return
        reported: set[tuple[int | str, ...]] = set()
        for contact in contacts(segments, self.tolerance):
            if self.faults.full:
                self.faults.left_out += 1
                return
            first, second = walls[segments.wall[contact.first]], walls[segments.wall[contact.second]]
            if frozenset((first.name, second.name)) in same:
                continue
            if skip_both and first.seen_by == second.seen_by == "both":
                continue
            at = ends.get(contact.node)
            self.joined.append((at or first.start, ends.get(contact.other_node) or second.start))
            self.joined.append((first.start, second.start))
            marks: list[tuple[int | str, ...]] = [("pair", *sorted((first.name, second.name)))]
            if contact.node >= 0:
                marks.append(("end", contact.node, second.name))
            if contact.kind != "end" and reported.isdisjoint(marks):
                self._note_contact(contact, first, second, at)
            reported.update(marks)

    def _note_contact(self, contact: Contact, first: WallSpec, second: WallSpec, at: str | None) -> None:
        place = _place_text(contact.place)
        words = "clear of other walls except at shared points"
        if contact.kind == "touch" and at is not None:
            on = f"on the middle of {quoted(second.name)} ({second.key})"
            found = f"{quoted(first.name)} ending at {quoted(at)} {on}"
            remedy = f"add the point {quoted(at)} to the path of {quoted(second.name)}"
            self.faults.add(entry_path(first, "path"), found, words, remedy)
            return
        earlier, later = sorted((first, second), key=lambda wall: self.walls.index(wall))
        if contact.kind == "overlap":
            found = f"{quoted(later.name)} overlapping {quoted(earlier.name)} ({earlier.key}) at {place}"
            remedy = "let one wall end where the other begins"
        else:
            found = f"{quoted(later.name)} crossing {quoted(earlier.name)} ({earlier.key}) at {place}"
            remedy = "add a point there to both paths"
        self.faults.add(entry_path(later, "path"), found, words, remedy)

    def _segments(self, walls: Sequence[WallSpec]) -> tuple[Segments, dict[int, str]]:
        """Straight pieces of walls with known places, arcs as chords, and the point names of nodes."""
        numbers = {name: number for number, name in enumerate(self.points)}
        starts: list[Place] = []
        ends: list[Place] = []
        nodes: list[tuple[int, int]] = []
        owner: list[int] = []
        free = len(numbers)
        for index, wall in enumerate(walls):
            if wall.start not in numbers or wall.end not in numbers:
                continue
            a, b = self.points[wall.start], self.points[wall.end]
            if math.dist(a, b) <= self.tolerance:
                continue
            chain = [a, b] if wall.arc_through is None else _arc_places(a, wall.arc_through, b)
            inner = list(range(free, free + len(chain) - 2))
            free += len(inner)
            along = [numbers[wall.start], *inner, numbers[wall.end]]
            starts += chain[:-1]
            ends += chain[1:]
            nodes += pairwise(along)
            owner += [index] * (len(chain) - 1)
        node = np.array(nodes, dtype=np.int64).reshape(-1, 2)
        segments = Segments(
            np.array(starts, dtype=float).reshape(-1, 2),
            np.array(ends, dtype=float).reshape(-1, 2),
            node[:, 0],
            node[:, 1],
            np.array(owner, dtype=np.int64),
        )
        return segments, {number: name for name, number in numbers.items()}

    def _check_parts(self, walls: Sequence[WallSpec], view: str) -> None:
        """All walls that one side sees must hang together."""
        if not walls:
            words = "a wall or more that each side sees"
            self.faults.add(("walls",), f"no wall that {view} sees", words, f'seen_by = "both" or "{view}"')
        parts = Parts([(wall.start, wall.end) for wall in walls] + self.joined)
        by_part: dict[str, list[str]] = {}
        for wall in walls:
            by_part.setdefault(parts.of(wall.start), []).append(wall.name)
        if len(by_part) < 2:
            return
        listed = [_listed(names) for names in list(by_part.values())[:_NAMED_PARTS]]
        more = " | ..." if len(by_part) > _NAMED_PARTS else ""
        seen = "" if view == "both" else f" as seen by {view}"
        found = f"{len(by_part)} parts{seen}: {' | '.join(listed)}{more}"
        remedy = "let the parts share a point, or add a wall between them"
        self.faults.add(("walls",), found, "one connected section", remedy)

    def _check_cuts(self, cuts: Sequence[CutSpec]) -> None:
        """A cut opens a cell: with all cuts made the walls must still hang together."""
        by_name = {wall.name: wall for wall in seen_by(self.walls, "theory")}
        cut_walls = {cut.wall for cut in cuts}
        if not cut_walls or not cut_walls <= set(by_name):
            return
        left = [(w.start, w.end) for w in by_name.values() if w.name not in cut_walls]
        parts = Parts(left + self.joined)
        for index, cut in enumerate(cuts):
            wall = by_name[cut.wall]
            if parts.of(wall.start) != parts.of(wall.end):
                found = f"{quoted(cut.wall)}, at which the section falls in two"
                words = "a wall of a cell that no other cut has opened"
                self.faults.add(("cuts", index, "wall"), found, words)
                parts.join(wall.start, wall.end)


def seen_by(walls: Iterable[WallSpec], side: str) -> list[WallSpec]:
    """The walls that "theory" or "fe" sees."""
    return [wall for wall in walls if wall.seen_by in ("both", side)]


def _arc_places(start: Place, through: Place, end: Place) -> list[Place]:
    """Places along an arc, ends exact."""
    centre, first, sweep = arc_angle(start, through, end)
    radius = math.dist(centre, start)
    turns = (first + sweep * k / _ARC_PIECES for k in range(1, _ARC_PIECES))
    inner = [(centre[0] + radius * math.cos(turn), centre[1] + radius * math.sin(turn)) for turn in turns]
    return [start, *inner, end]


def _listed(names: Sequence[str]) -> str:
    """A few names in quotes."""
    return ", ".join(quoted(name) for name in names[:_NAMED_WALLS]) + (
        f" and {len(names) - _NAMED_WALLS} more" if len(names) > _NAMED_WALLS else ""
    )


def _place_text(place: Place) -> str:
    return f"({place[0]:.6g}, {place[1]:.6g})"
