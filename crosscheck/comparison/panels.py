"""Panels: stretches of wall at which both sides are compared, matched through the walls' names.

Where both sides see one wall, that wall is the panel. Where theory sees an idealised section and FE the real
one, walls of one name are one panel, at equal fractions of their lengths. Where a path is split at other
points on the two sides ("skin" beside "skin 1", "skin 2"), its walls are laid beside each other by share of
the whole path's length, and each stretch without a joint of either side is a panel. A wall that only one
side sees is a panel of that side alone.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from crosscheck.comparison.drawn import Array
from crosscheck.comparison.midline import Midline
from crosscheck.comparison.models import has_two_models
from crosscheck.comparison.result import TwoModels
from crosscheck.section_file.model import SectionFile, WallSpec

# Number of a wall within its path: "skin 2", "gutter 2.1".
NUMBER = re.compile(r" \d+(\.\d+)*\Z")
# Paths of the two sides whose ends are farther apart than this share of their length are not one.
NEAR = 0.25
# Stretches shorter than this share of a path are round-off.
SHORTEST = 1e-9

ONLY_FE = "only FE sees this wall"
ONLY_THEORY = "only theory sees this wall"


@dataclass(frozen=True)
class Stretch:
    """Part of a wall of one side that a panel covers.

    Attributes
    ----------
    wall : WallSpec
        The wall.
    first, last : float
        Fractions of its length at the panel's start and end [-]; last < first where directions oppose.
    """

    wall: WallSpec
    first: float = 0.0
    last: float = 1.0

    @property
    def sign(self) -> float:
        """+1 where the wall runs along the panel, -1 against it."""
        return 1.0 if self.last >= self.first else -1.0

    def on_wall(self, at: Array) -> Array:
        """Fractions of the wall (n,) at fractions of the panel (n,) [-]."""
        if (self.first, self.last) == (0.0, 1.0):
            return np.asarray(at, dtype=float)
        return np.asarray(self.first + (self.last - self.first) * np.asarray(at, dtype=float))

    def on_panel(self, at: float) -> float:
        """Fraction of the panel at a fraction of the wall [-]; outside 0..1 where it lies elsewhere."""
        return (at - self.first) / (self.last - self.first)


@dataclass(frozen=True)
class Panel:
    """A stretch of wall that one side or both report on.

    Attributes
    ----------
    name : str
        Name of its wall, of the finer split one where the sides differ.
    line : Midline
        Where it lies: on FE's wall where FE sees it [L].
    theory, fe : Stretch or None
        Walls of the two sides.
    """

    name: str
    line: Midline
    theory: Stretch | None
    fe: Stretch | None

    @property
    def seen_by(self) -> str:
        """Which side sees it: "both", "theory" or "fe"."""
        if self.theory is None:
            return "fe"
        return "theory" if self.fe is None else "both"

    @property
    def reason(self) -> str | None:
        """Why nothing can be compared on it, or None."""
        return {"fe": ONLY_FE, "theory": ONLY_THEORY}.get(self.seen_by)

    @property
    def spec(self) -> WallSpec:
        """FE's wall, or theory's where FE has none."""
        stretch = self.fe or self.theory
        assert stretch is not None
        return stretch.wall

    @property
    def shear_only(self) -> str | None:
        """The side whose wall alone carries no direct stress, "theory" or "FE"; None where both are alike."""
        if self.theory is None or self.fe is None:
            return None
        theory, fe = self.theory.wall.share_in_theory > 0.0, self.fe.wall.direct_share > 0.0
        return None if theory == fe else "FE" if theory else "theory"

    @property
    def slenderness(self) -> float:
        """Largest thickness over length [-]."""
        return max(self.spec.thickness) / self.line.length

    def strip(self, strips: Mapping[str, tuple[float, float] | None]) -> tuple[float, float] | None:
        """Part of the panel clear of FE's joints [-]; None where there is none."""
        if self.fe is None:
            return None
        found = strips.get(self.fe.wall.name)
        if found is None:
            return None
        low, high = sorted(self.fe.on_panel(at) for at in found)
        low, high = max(low, 0.0), min(high, 1.0)
        return (low, high) if low < high else None


def panels_of(section: SectionFile) -> dict[str, Panel]:
    """Panels of a section by name, in the order of the file."""
    if all(wall.seen_by == "both" for wall in section.walls):
        return {wall.name: _whole(section, wall) for wall in section.walls}
    groups: dict[str, tuple[list[WallSpec], list[WallSpec]]] = {}
    for wall in section.walls:
        if wall.seen_by != "both":
            sides = groups.setdefault(NUMBER.sub("", wall.name), ([], []))
            sides[0 if wall.seen_by == "theory" else 1].append(wall)
    made: dict[str, Panel] = {}
    for wall in section.walls:
        if wall.seen_by == "both":
            made[wall.name] = _whole(section, wall)
            continue
        group = groups.pop(NUMBER.sub("", wall.name), None)
        for panel in () if group is None else _matched(section, *group):
            made[_free(panel.name, made)] = panel
    return {name: panel if panel.name == name else _renamed(panel, name) for name, panel in made.items()}


def two_models(section: SectionFile) -> TwoModels | None:
    """What each side is made of; None where both see the same."""
    if not has_two_models(section):
        return None
    seen = {
        (kind, side): sum(part.seen_by in ("both", side) for part in parts)
        for kind, parts in (("walls", section.walls), ("booms", section.booms))
        for side in ("theory", "fe")
    }
    both = sum(panel.seen_by == "both" for panel in panels_of(section).values())
    return TwoModels(
        seen["walls", "theory"], seen["booms", "theory"], seen["walls", "fe"], seen["booms", "fe"], both
    )


def _free(name: str, taken: Mapping[str, Panel]) -> str:
    """The name, or with the side's where another panel has it."""
    number, free = 1, name
    while free in taken:
        number += 1
        free = f"{name} ({number})"
    return free


def _renamed(panel: Panel, name: str) -> Panel:
    return Panel(name, panel.line, panel.theory, panel.fe)


def _whole(section: SectionFile, wall: WallSpec) -> Panel:
    """A whole wall as a panel of the sides that see it."""
    theory = Stretch(wall) if wall.seen_by != "fe" else None
    fe = Stretch(wall) if wall.seen_by != "theory" else None
    return Panel(wall.name, line_of(section, wall), theory, fe)


def line_of(section: SectionFile, wall: WallSpec) -> Midline:
    """Midline of a wall [L]."""
    return Midline(section.points[wall.start], section.points[wall.end], wall.arc_through)


def _matched(section: SectionFile, theory: Sequence[WallSpec], fe: Sequence[WallSpec]) -> Iterator[Panel]:
    """Panels of the walls of one path name."""
    if {wall.name for wall in theory} == {wall.name for wall in fe}:
        other = {wall.name: wall for wall in theory}
        for wall in fe:
            yield from _pair(section, other[wall.name], wall)
        return
    if theory and fe and (turn := _beside(section, theory, fe)) is not None:
        yield from _laid_beside(section, theory, fe, turn)
        return
    pairs = {wall.name: wall for wall in theory}
    for wall in fe:
        known = pairs.pop(wall.name, None)
        yield from (_whole(section, wall),) if known is None else _pair(section, known, wall)
    yield from (_whole(section, wall) for wall in pairs.values())


def _pair(section: SectionFile, theory: WallSpec, fe: WallSpec) -> Iterator[Panel]:
    """Two walls of one name at equal fractions of their lengths, turned where they run against each other."""
    a, b = line_of(section, theory), line_of(section, fe)
    along = sum(math.dist(p, q) for p, q in ((a.start, b.start), (a.end, b.end)))
    across = sum(math.dist(p, q) for p, q in ((a.start, b.end), (a.end, b.start)))
    stretch = Stretch(theory) if along <= across else Stretch(theory, 1.0, 0.0)
    yield Panel(fe.name, b, stretch, Stretch(fe))


def _beside(section: SectionFile, theory: Sequence[WallSpec], fe: Sequence[WallSpec]) -> int | None:
    """+1 where two paths run together, -1 where against each other, None where they are not one path."""
    if not (_is_chain(theory) and _is_chain(fe)):
        return None
    ends = [(section.points[path[0].start], section.points[path[-1].end]) for path in (theory, fe)]
    reach = NEAR * sum(line_of(section, wall).length for wall in fe)
    (a, b), (c, d) = ends
    if math.dist(a, c) <= reach and math.dist(b, d) <= reach:
        return 1
    return -1 if math.dist(a, d) <= reach and math.dist(b, c) <= reach else None


def _is_chain(walls: Sequence[WallSpec]) -> bool:
    """Whether each wall begins where the one before it ends."""
    return all(one.end == other.start for one, other in pairwise(walls))


def _laid_beside(
    section: SectionFile, theory: Sequence[WallSpec], fe: Sequence[WallSpec], turn: int
) -> Iterator[Panel]:
    """Panels between the joints of two paths, by share of their lengths."""
    own, hand = list(_shares(section, fe)), list(_shares(section, theory))
    if turn < 0:
        hand = [(wall, 1.0 - last, 1.0 - first) for wall, first, last in hand]
    for wall, low, high in own:
        inside = [entry for entry in hand if min(entry[2], high) - max(entry[1], low) > SHORTEST]
        for other, first, last in inside:
            a, b = max(low, first), min(high, last)
            on_fe = Stretch(wall, *((at - low) / (high - low) for at in (a, b)))
            ends = [(at - first) / (last - first) for at in (a, b)]
            on_theory = Stretch(other, *(ends if turn > 0 else [1.0 - at for at in ends]))
            covered = low <= first + SHORTEST and last <= high + SHORTEST
            several = other.name if covered else f"{wall.name} at {other.name}"
            name = wall.name if len(inside) == 1 else several
            yield Panel(name, _part(line_of(section, wall), on_fe), on_theory, on_fe)


def _shares(section: SectionFile, path: Iterable[WallSpec]) -> Iterator[tuple[WallSpec, float, float]]:
    """Each wall of a path with the shares of the path's length at which it starts and ends [-]."""
    walls = list(path)
    lengths = np.array([line_of(section, wall).length for wall in walls])
    ends = np.concatenate(([0.0], np.cumsum(lengths))) / lengths.sum()
    for wall, (first, last) in zip(walls, pairwise(ends.tolist()), strict=True):
        yield wall, first, last


def _part(line: Midline, stretch: Stretch) -> Midline:
    """Part of a midline."""
    if (stretch.first, stretch.last) == (0.0, 1.0):
        return line
    (x0, y0), (xm, ym), (x1, y1) = line.places(stretch.on_wall(np.array([0.0, 0.5, 1.0]))).tolist()
    return Midline((x0, y0), (x1, y1), None if line.arc_through is None else (xm, ym))
