"""Up to where each hand method holds: thresholds of one parameter, for one value or several of a second one.

The range is scanned first; then every change of verdict is narrowed on sections solved anew.
"""

from __future__ import annotations

import math
from bisect import insort
from collections.abc import Callable, Collection, Iterator
from dataclasses import dataclass, field
from itertools import count, pairwise

from crosscheck.batch.running import Hands
from crosscheck.batch.task import Point
from crosscheck.comparison.result import LEVELS
from crosscheck.family.crossings import Crossing, Piece, Sample, crossings, pieces, undecided, wanted
from crosscheck.family.members import Family, Member, Row, member_of
from crosscheck.family.ranges import Range

Key = tuple[str, str | None]
Tell = Callable[[str], None]
# Rounds of refinement; each solves all sections that any threshold asks for.
MOST_ROUNDS = 30


@dataclass(frozen=True)
class Choice:
    """What is asked for: quantities and levels (empty: all), and a criterion instead of the file's."""

    quantities: Collection[str] = ()
    levels: Collection[str] = ()
    criterion: float | None = None

    def rows(self, member: Member) -> Iterator[tuple[Row, int, float]]:
        """Rows of a member that are asked for, each with its level's place and its criterion."""
        for row in member.rows:
            if not self.quantities or row.name in self.quantities:
                for place, level in enumerate(LEVELS):
                    if not self.levels or level in self.levels:
                        yield row, place, row.criterion if self.criterion is None else self.criterion


@dataclass(frozen=True)
class Threshold:
    """One quantity at one level along one line: where it holds, and the thresholds.

    ``pieces`` and ``fails``: where it is shown to hold and to fail; ``scanned``: first and last value tried;
    ``today``: difference and uncertainty of the file as it stands [-]; ``reason``: why nothing is compared.
    """

    name: str
    load: str | None
    level: str
    criterion: float
    basis: str
    crossings: tuple[Crossing, ...]
    pieces: tuple[Piece, ...]
    fails: tuple[Piece, ...]
    known: tuple[float, float] | None
    complete: bool
    inconclusive: bool
    scanned: tuple[float, float]
    today_value: float | None
    today: tuple[float, float] | None
    reason: str | None

    @property
    def key(self) -> Key:
        """Quantity and load."""
        return self.name, self.load

    @property
    def holds_today(self) -> bool | None:
        """Whether the criterion holds for the file as it stands; None where that is not known or not sure."""
        if self.today is None:
            return None
        size, error = abs(self.today[0]), self.today[1]
        if size + error <= self.criterion:
            return True
        return False if size - error > self.criterion else None

    @property
    def nearest(self) -> Crossing | None:
        """The threshold nearest to the file as it stands, by ratio; the first one without such a value."""
        if not self.crossings:
            return None
        today = self.today_value
        if today is None:
            return self.crossings[0]
        return min(self.crossings, key=lambda each: _distance(today, each.value))

    @property
    def share(self) -> float | None:
        """Today's value over the nearest threshold [-]."""
        nearest = self.nearest
        if nearest is None or self.today_value is None or nearest.value == 0:
            return None
        return self.today_value / nearest.value

    @property
    def throughout(self) -> bool:
        """Whether it is shown to hold wherever it is known."""
        return bool(self.pieces) and not self.crossings and not self.inconclusive

    @property
    def order(self) -> tuple[int, float]:
        """Governing first: what fails today, then what is nearest to its threshold, then what never fails."""
        if self.known is None:
            return 4, 0.0
        if self.holds_today is False and self.today is not None:
            return 0, -abs(self.today[0]) / self.criterion
        if self.nearest is not None:
            today = self.today_value
            return 1, 0.0 if today is None else _distance(today, self.nearest.value)
        return (3, 0.0) if self.pieces else (2, 0.0)


def _distance(one: float, other: float) -> float:
    """How far apart two values are, by ratio where they have one."""
    if one * other > 0:
        return abs(math.log(one / other))
    return math.inf if one != other else 0.0


@dataclass(frozen=True)
class Line:
    """Thresholds along the first parameter at one value of the second (None: there is no second)."""

    second: float | None
    thresholds: tuple[Threshold, ...]
    gaps: tuple[tuple[float, str], ...]

    def of_level(self, level: str) -> list[Threshold]:
        """Thresholds of a level, governing first."""
        return sorted((each for each in self.thresholds if each.level == level), key=lambda each: each.order)


@dataclass(frozen=True)
class Study:
    """All lines of a family; ``today`` are the file's own values of the parameters."""

    family: Family
    title: str
    length_unit: str
    force_unit: str
    judged: str
    today: tuple[float, ...]
    lines: tuple[Line, ...]
    solved: int
    failed: tuple[str, ...]

    @property
    def step(self) -> float:
        """Largest step of the scan, in the first parameter's unit."""
        values = sorted(self.family.ranges[0].values)
        return max(b - a for a, b in pairwise(values))


@dataclass
class _Line:
    """Members solved so far along one line."""

    second: float | None
    members: dict[float, Member] = field(default_factory=dict)
    order: list[float] = field(default_factory=list)

    def add(self, at: float, member: Member) -> None:
        if at not in self.members:
            insort(self.order, at)
        self.members[at] = member

    def tracks(self, choice: Choice) -> dict[tuple[Key, int], tuple[float, list[Sample]]]:
        """Samples of every quantity and level asked for, with the criterion."""
        found: dict[tuple[Key, int], tuple[float, list[Sample]]] = {}
        for at in self.order:
            for row, place, criterion in choice.rows(self.members[at]):
                found.setdefault((row.key, place), (criterion, []))
        for at in self.order:
            told = {
                (row.key, place): Sample(at, row.difference[place], row.uncertainty or 0.0)
                for row, place, _ in choice.rows(self.members[at])
                if row.uncertainty is not None
            }
            for name, (_, samples) in found.items():
                samples.append(told.get(name) or Sample(at, None))
        return found


def study(family: Family, hands: Hands, choice: Choice = Choice(), tell: Tell = lambda _: None) -> Study:
    """Scan and refine.

    Parameters
    ----------
    family : Family
        Its first range is scanned and refined, at every value of the second.
    hands : Hands
        Who solves.
    choice : Choice
        What is asked for.
    tell : callable
        Told in words what is being done.

    Raises
    ------
    BatchError
        Where the members cannot be solved at all.
    """
    section = family.section()
    today = tuple(section.parameters[name] for name in family.names)
    first = family.ranges[0]
    seconds: tuple[float | None, ...] = family.ranges[1].values if len(family.ranges) > 1 else (None,)
    lines = [_Line(second) for second in seconds]
    numbers = count()
    failed: list[str] = []
    with hands.ready_for(family.task) as crew:

        def solve(asked: list[tuple[_Line, float]], words: str) -> None:
            places: dict[int, tuple[_Line, float]] = {}

            def points() -> Iterator[Point]:
                for line, at in asked:
                    number = next(numbers)
                    places[number] = line, at
                    yield Point(number, [at] if line.second is None else [at, line.second])

            for done, outcome in enumerate(crew.solve(points())):
                tell(f"{words}: {done + 1} of {len(asked)} sections")
                line, at = places.pop(outcome.number)
                member = member_of(outcome)
                line.add(at, member)
                if member.status == "failed":
                    failed.append(f"{first.name} {at:g}: {member.reason}")

        scan = set(first.values)
        if seconds == (None,) and first.low <= today[0] <= first.high:
            scan.add(today[0])
        solve([(line, at) for line in lines for at in sorted(scan)], "scan")
        for turn in range(1, MOST_ROUNDS + 1):
            asked = [(line, at) for line in lines for at in _asked(line, choice, first)]
            if not asked:
                break
            solve(asked, f"refining, round {turn}")
    own = today[0] if seconds == (None,) else None
    return Study(
        family,
        section.title,
        section.length_unit,
        section.force_unit,
        section.judged,
        today,
        tuple(_finished(line, choice, own) for line in lines),
        sum(member.status == "solved" for line in lines for member in line.members.values()),
        tuple(failed),
    )


def _asked(line: _Line, choice: Choice, first: Range) -> list[float]:
    """Values at which this line wants to be solved next; values nearly the same are solved once."""
    span = first.high - first.low
    found: list[float] = []
    for criterion, samples in line.tracks(choice).values():
        found += wanted(samples, criterion, span)
    inside = sorted(at for at in found if first.low < at < first.high and at not in line.members)
    shared: list[float] = []
    for at in inside:
        if not shared or at - shared[-1] > 1e-9 * span:
            shared.append(at)
    return shared


def _finished(line: _Line, choice: Choice, today: float | None) -> Line:
    """Thresholds of a line."""
    rows: dict[tuple[Key, int], list[tuple[float, Row]]] = {}
    for at in line.order:
        for row, place, _ in choice.rows(line.members[at]):
            rows.setdefault((row.key, place), []).append((at, row))
    thresholds = []
    for (key, place), (criterion, samples) in line.tracks(choice).items():
        known = [each for each in samples if each.difference is not None]
        own = next((each for each in known if each.at == today), None)
        bases = {row.basis for _, row in rows[key, place] if row.fe is not None}
        reasons = [row.reason for _, row in rows[key, place] if row.reason is not None]
        thresholds.append(
            Threshold(
                key[0],
                key[1],
                LEVELS[place],
                criterion,
                "estimate" if "estimate" in bases else next(iter(sorted(bases)), "estimate"),
                crossings(samples, criterion),
                pieces(samples, criterion),
                pieces(samples, criterion, holding=False),
                (known[0].at, known[-1].at) if known else None,
                len(known) == len(samples),
                undecided(samples, criterion),
                (samples[0].at, samples[-1].at),
                today,
                None if own is None else (own.difference or 0.0, own.uncertainty),
                None if known else (reasons[0] if reasons else "not available at this level"),
            )
        )
    gaps = tuple(
        (at, line.members[at].reason or "") for at in line.order if line.members[at].status != "solved"
    )
    return Line(line.second, tuple(thresholds), gaps)
