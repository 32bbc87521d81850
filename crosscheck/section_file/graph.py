"""Walls between points while a section file is read: what faces, placed profiles and [mirror] work on."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field

from crosscheck.section_file.model import Place, WallSpec, arc_angle

# Fractions of a wall's length nearer than this are one place.
SAME = 1e-9


@dataclass(frozen=True)
class Piece:
    """A piece of a wall that was split: its name, its ends as fractions of the whole wall's length [-], and
    the points there."""

    name: str
    begin: float
    stop: float
    start: str
    end: str


WallKey = tuple[str, str]


def wall_key(wall: WallSpec) -> WallKey:
    """What tells a wall from all others: one of theory and one of FE may share a name."""
    return wall.name, wall.seen_by


def sides_of(wall: WallSpec) -> tuple[str, ...]:
    """The sides that see a wall."""
    return ("theory", "fe") if wall.seen_by == "both" else (wall.seen_by,)


@dataclass
class WallGraph:
    """Points, walls and what is known of them.

    Attributes
    ----------
    points : places [L] by name
    walls : in file order
    named : for every wall's name whether the file gave it
    paths : names of the walls of every path of several, by the name of the path
    pieces : of walls that were split, by the name of the whole wall, in its direction
    """

    points: dict[str, Place]
    walls: list[WallSpec]
    named: dict[str, bool]
    paths: dict[str, tuple[str, ...]] = field(default_factory=dict)
    pieces: dict[str, tuple[Piece, ...]] = field(default_factory=dict)

    @property
    def holds(self) -> bool:
        """Whether all walls have places, a length and a thickness: geometry can be made from them."""
        return bool(self.walls) and all(
            wall.start in self.points
            and wall.end in self.points
            and self.points[wall.start] != self.points[wall.end]
            and not math.isnan(sum(wall.thickness))
            for wall in self.walls
        )

    @property
    def extent(self) -> float:
        """Larger overall dimension of the points that walls use [L]."""
        xs, ys = zip(*(self.points[name] for name in self.used), strict=True)
        return float(max(max(xs) - min(xs), max(ys) - min(ys)))

    @property
    def used(self) -> dict[str, None]:
        """Names of the points that walls end at."""
        return dict.fromkeys(name for wall in self.walls for name in (wall.start, wall.end))

    def walls_of(self, name: str) -> list[str]:
        """Names of the walls that the name of a wall, a whole wall or a path stands for; none if unknown."""
        names = self.paths.get(name, (name,))
        names = tuple(piece for each in names for piece in self._pieces_of(each))
        return [each for each in names if each in self.named]

    def _pieces_of(self, name: str) -> tuple[str, ...]:
        return tuple(piece.name for piece in self.pieces[name]) if name in self.pieces else (name,)

    def ends(self, wall: WallSpec) -> tuple[Place, Place]:
        """Places of both ends of a wall [L]."""
        return self.points[wall.start], self.points[wall.end]

    def length(self, wall: WallSpec) -> float:
        """Length of a wall along its midline [L]."""
        start, end = self.ends(wall)
        return wall_length(start, end, wall.arc_through)


def wall_length(start: Place, end: Place, arc: Place | None) -> float:
    """Length of a straight wall or an arc [L]."""
    if arc is None:
        return math.dist(start, end)
    centre, _, sweep = arc_angle(start, arc, end)
    return math.dist(centre, start) * abs(sweep)


class Parts:
    """Connected parts of a graph of names."""

    def __init__(self, pairs: Iterable[tuple[str, str]]) -> None:
        self._above: dict[str, str] = {}
        for a, b in pairs:
            self.join(a, b)

    def of(self, name: str) -> str:
        """The name that stands for a name's part."""
        above = self._above
        above.setdefault(name, name)
        while above[name] != name:
            above[name] = above[above[name]]
            name = above[name]
        return name

    def join(self, a: str, b: str) -> None:
        """Put two names into one part."""
        self._above[self.of(b)] = self.of(a)
