"""[mirror]: points, walls and what stands on them doubled about the x axis, the y axis, or both.

Points on an axis are shared and walls along it are not doubled. The images are named "web mirrored" where
there is one axis; "web mirrored x", "web mirrored y" and "web mirrored xy" where there are two. An image runs
from the image of the start to that of the end.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace
from itertools import chain
from typing import Any

from crosscheck.faults import FaultList, quoted
from crosscheck.section_file.graph import Parts, Piece, WallGraph
from crosscheck.section_file.keys import WALL_LIMIT
from crosscheck.section_file.model import (
    AllowableSpec,
    BoomSpec,
    CornerSpec,
    CutSpec,
    Place,
    ProbeSpec,
    WallSpec,
    arc_angle,
)
from crosscheck.section_file.same_points import entry_path

ON_AXIS = 1e-9  # distance from the axis over the overall dimension up to which a point lies on it


def mirror_axes(about: Any) -> tuple[str, ...]:
    """The axes that about = "x", "y", "xy" or a list of them names."""
    return tuple(axis for axis in ("x", "y") if axis in about)


@dataclass
class Mirror:
    """One axis, and the names of the images of points and walls; what lies on the axis is its own image.

    Attributes
    ----------
    axis : "x" or "y", the line that everything is mirrored about
    alone : whether it is the file's only one
    points, walls : names of images
    """

    axis: str
    alone: bool
    points: dict[str, str] = field(default_factory=dict)
    walls: dict[str, str] = field(default_factory=dict)

    def name(self, name: str) -> str:
        """Name of the image of something that is not on the axis."""
        if self.alone:
            return f"{name} mirrored"
        if self.axis == "y" and name.endswith(" mirrored x"):
            return f"{name}y"
        return f"{name} mirrored {self.axis}"

    def place(self, place: Place) -> Place:
        """Image of a place."""
        x, y = place
        return (x, -y) if self.axis == "x" else (-x, y)

    def off(self, place: Place) -> float:
        """Signed distance of a place from the axis [L]."""
        return place[1] if self.axis == "x" else place[0]

    def double(self, graph: WallGraph, faults: FaultList) -> None:
        """Add the images of all points and walls to a graph."""
        if not graph.holds:
            return
        reach = ON_AXIS * max(graph.extent, *(2.0 * abs(self.off(graph.points[name])) for name in graph.used))
        before = len(faults) + faults.left_out
        for wall in graph.walls:
            self._check_crossing(graph, wall, reach, faults)
        for name in graph.used:
            x, y = graph.points[name]
            if abs(self.off((x, y))) <= reach:
                self.points[name] = name
                graph.points[name] = (x, 0.0) if self.axis == "x" else (0.0, y)
            else:
                self.points[name] = self._free(name, graph.points, ("points", name), faults)
        for wall in graph.walls:
            if self._lies_along(wall):
                self.walls.setdefault(wall.name, wall.name)
            else:
                self.walls[wall.name] = self._free(wall.name, graph.named, entry_path(wall, "name"), faults)
        count = len(graph.walls) + sum(not self._lies_along(wall) for wall in graph.walls)
        if count > WALL_LIMIT:
            faults.add(("mirror",), f"{count} walls in all", f"at most {WALL_LIMIT} walls")
        if len(faults) + faults.left_out > before:
            return
        self._add(graph)

    def _lies_along(self, wall: WallSpec) -> bool:
        """Whether a wall lies on the axis."""
        shared = self.points[wall.start] == wall.start and self.points[wall.end] == wall.end
        return shared and wall.arc_through is None

    def _free(self, name: str, taken: Iterable[str], path: tuple[str | int, ...], faults: FaultList) -> str:
        image = self.name(name)
        if image in taken:
            found = f"{quoted(name)}, whose image {quoted(image)} is there already"
            faults.add(path, found, "named so that [mirror] can name the image", f"rename {quoted(image)}")
        return image

    def _check_crossing(self, graph: WallGraph, wall: WallSpec, reach: float, faults: FaultList) -> None:
        """Note a wall that lies on both sides of the axis."""
        start, end = graph.ends(wall)
        offs = [self.off(start), self.off(end)]
        if wall.arc_through is not None:
            offs += [self.off(place) for place in _extremes(start, wall.arc_through, end)]
        if min(offs) < -reach and max(offs) > reach:
            found = f"{quoted(wall.name)} crossing the {self.axis} axis, about which [mirror] doubles it"
            words = "on one side of the axis"
            faults.add(entry_path(wall, "path"), found, words, "give one half, up to a point on the axis")

    def _add(self, graph: WallGraph) -> None:
        for name, image in self.points.items():
            graph.points.setdefault(image, self.place(graph.points[name]))
        for wall in list(graph.walls):
            if self._lies_along(wall):
                continue
            image = self.walls[wall.name]
            through = None if wall.arc_through is None else self.place(wall.arc_through)
            ends = self.points[wall.start], self.points[wall.end]
            # Two arcs from axis to axis join the same points; the image has a name that tells them apart.
            graph.named[wall.name] = graph.named[wall.name] or ends == (wall.start, wall.end)
            graph.named[image] = graph.named[wall.name]
            graph.walls.append(replace(wall, name=image, start=ends[0], end=ends[1], arc_through=through))
        for path, walls in list(graph.paths.items()):
            graph.paths[self.name(path)] = tuple(self.walls.get(name, self.name(name)) for name in walls)
        for whole, pieces in list(graph.pieces.items()):
            if self.walls[pieces[0].name] == pieces[0].name:
                continue
            self.walls[whole] = self.name(whole)
            graph.pieces[self.name(whole)] = tuple(
                Piece(
                    self.walls[piece.name],
                    piece.begin,
                    piece.stop,
                    self.points[piece.start],
                    self.points[piece.end],
                )
                for piece in pieces
            )

    def booms(self, booms: Sequence[BoomSpec], graph: WallGraph) -> tuple[BoomSpec, ...]:
        """Booms with their images; one on the axis is shared."""
        images = []
        for boom in booms:
            if boom.point is not None:
                image = self.points.get(boom.point, boom.point)
                if image != boom.point:
                    images.append(replace(boom, point=image))
            elif boom.wall in self.walls and self.walls[boom.wall] != boom.wall:
                wall = next(each for each in graph.walls if each.name == boom.wall)
                at_end = {0.0: wall.start, 1.0: wall.end}.get(boom.at or 0.0)
                if at_end is None or self.points[at_end] != at_end:
                    images.append(replace(boom, wall=self.walls[boom.wall]))
        return (*booms, *images)

    def corners(self, corners: Sequence[CornerSpec]) -> tuple[CornerSpec, ...]:
        """Rounded corners with their images, which the file may give itself."""
        given = {corner.point for corner in corners}
        images = [
            replace(corner, point=image)
            for corner in corners
            for image in (self.points.get(corner.point, corner.point),)
            if image not in given
        ]
        return (*corners, *images)

    def probes(self, probes: Sequence[ProbeSpec], faults: FaultList) -> tuple[ProbeSpec, ...]:
        """Probes with their images, labelled as these are named."""
        labels = {probe.label for probe in probes}
        images = []
        for probe in probes:
            image = self.walls.get(probe.wall, probe.wall)
            if image == probe.wall:
                continue
            label = self._free(probe.label, labels, ("probes",), faults)
            images.append(replace(probe, label=label, wall=image))
        return (*probes, *images)

    def cuts(self, cuts: Sequence[CutSpec], walls: Sequence[WallSpec]) -> tuple[CutSpec, ...]:
        """Cuts with their images where these open a cell that no other cut has opened.

        ``walls``: those that theory sees.
        """
        made = list(cuts)
        by_name = {wall.name: wall for wall in walls}
        for cut in cuts:
            image = by_name.get(self.walls.get(cut.wall, ""))
            opened = {each.wall for each in made} | {image.name if image else ""}
            if image is None or image.name in {each.wall for each in made}:
                continue
            parts = Parts((wall.start, wall.end) for wall in walls if wall.name not in opened)
            if parts.of(image.start) == parts.of(image.end):
                made.append(CutSpec(image.name, cut.at))
        return tuple(made)

    def allowables(self, allowables: Sequence[AllowableSpec]) -> tuple[AllowableSpec, ...]:
        """Allowables with those of the images of their walls, which the file may give itself."""
        given = {(each.wall, each.kind) for each in allowables}
        images = [
            replace(each, wall=image)
            for each in allowables
            if each.wall is not None
            for image in (self.walls.get(each.wall, each.wall),)
            if (image, each.kind) not in given
        ]
        return tuple(chain(allowables, images))


def _extremes(start: Place, through: Place, end: Place) -> list[Place]:
    """Places of an arc that are farthest along x and y, both ways."""
    centre, first, sweep = arc_angle(start, through, end)
    radius = math.dist(centre, start)
    places = []
    for quarter in range(4):
        turn = 0.5 * math.pi * quarter
        past = (turn - first) % math.tau if sweep > 0 else (first - turn) % math.tau
        if past < abs(sweep):
            places.append((centre[0] + radius * math.cos(turn), centre[1] + radius * math.sin(turn)))
    return places
