"""Every member of a family solved, and what the screen and the pictures need of them."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

import numpy as np

from crosscheck.batch.journal import Journal
from crosscheck.comparison.drawn import Array
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import LEVELS
from crosscheck.family.members import Family, Member, Row, member_of

Key = tuple[str, str | None]
VERDICTS = ("outside", "inconclusive", "within", None)


@dataclass
class KeySummary:
    """What one quantity did over the family, at the judged level: constant in size."""

    name: str
    load: str | None
    unit: str
    criterion: float
    counts: dict[str | None, int] = field(default_factory=lambda: dict.fromkeys(VERDICTS, 0))
    first: float | None = None
    last: float | None = None
    worst: float | None = None
    worst_at: tuple[float, ...] = ()
    worst_share: float = 0.0
    reason: str | None = None

    def add(self, row: Row, values: tuple[float, ...], level: int) -> None:
        """Take a member in."""
        self.counts[row.verdict] += 1
        difference = row.difference[level]
        if row.verdict is None or difference is None:
            self.reason = self.reason or row.reason
            return
        self.first = difference if self.first is None else self.first
        self.last = difference
        share = (abs(difference) + (row.uncertainty or 0.0)) / row.criterion
        if self.worst is None or share > self.worst_share:
            self.worst, self.worst_at, self.worst_share = difference, values, share

    @property
    def compared(self) -> int:
        """Members with a verdict."""
        return sum(count for verdict, count in self.counts.items() if verdict is not None)

    @property
    def family(self) -> str:
        """Quantities of one kind: all section moduli, all loads."""
        return "section_modulus" if self.name.startswith("section_modulus") else self.name


@dataclass(frozen=True)
class Sweep:
    """A family solved: what it is, counts, and a summary of each quantity, worst first.

    ``reasons``: why members were not solved, with how many and the values of the first.
    """

    family: Family
    title: str
    length_unit: str
    force_unit: str
    judged: str
    today: tuple[float, ...]
    today_ratio: float | None
    solved: int
    summaries: tuple[KeySummary, ...]
    reasons: dict[tuple[str, str], tuple[int, tuple[float, ...]]]
    failed_checks: int
    not_met: int

    @property
    def held(self) -> bool:
        """Whether every verdict of every member is within and every self-check passed."""
        return not self.failed_checks and all(
            each.counts["outside"] == each.counts["inconclusive"] == 0 for each in self.summaries
        )

    @property
    def failed(self) -> int:
        """Members at which a solver or its process failed."""
        return sum(count for (status, _), (count, _) in self.reasons.items() if status == "failed")

    def worst_families(self, most: int) -> tuple[Key, ...]:
        """The worst quantity of each kind, worst kinds first."""
        found: dict[str, Key] = {}
        for each in self.summaries:
            if each.compared:
                found.setdefault(each.family, (each.name, each.load))
        return tuple(found.values())[:most]


@dataclass(frozen=True)
class Series:
    """One quantity over a family: values (n, ranges), differences (n, levels), uncertainties (n,) [-].

    NaN stands where there is no number: a gap.
    """

    name: str
    load: str | None
    criterion: float
    values: Array
    ratios: Array
    differences: Array
    uncertainties: Array


def members_of(family: Family, journal: Journal) -> Iterator[tuple[tuple[float, ...], Member]]:
    """Members with their values in order, read from the journal one at a time."""
    for values, outcome in zip(family.grid(), journal.outcomes(), strict=True):
        yield values, member_of(outcome)


def summarised(family: Family, journal: Journal) -> Sweep:
    """What became of a family, from its complete journal."""
    today = family.section()
    level = LEVELS.index(today.judged)
    summaries: dict[Key, KeySummary] = {}
    reasons: dict[tuple[str, str], tuple[int, tuple[float, ...]]] = {}
    solved = failed_checks = not_met = 0
    for values, member in members_of(family, journal):
        if member.status != "solved":
            key = member.status, member.reason or ""
            count, first = reasons.get(key, (0, values))
            reasons[key] = count + 1, first
            continue
        solved += 1
        failed_checks += bool(member.failed_checks)
        not_met += not member.accuracy_met
        for row in member.rows:
            if row.key not in summaries:
                summaries[row.key] = KeySummary(row.name, row.load, row.unit, row.criterion)
            summaries[row.key].add(row, values, level)
    ordered = sorted(summaries.values(), key=lambda each: (not each.compared, -each.worst_share))
    return Sweep(
        family,
        today.title,
        today.length_unit,
        today.force_unit,
        today.judged,
        tuple(today.parameters[name] for name in family.names),
        family.ratio_of(today.parameters),
        solved,
        tuple(ordered),
        reasons,
        failed_checks,
        not_met,
    )


def series_of(family: Family, journal: Journal, keys: Sequence[Key]) -> dict[Key, Series]:
    """Differences of chosen quantities over the family."""
    count = len(family)
    values = np.empty((count, len(family.ranges)))
    ratios = np.full(count, np.nan)
    differences = {key: np.full((count, len(LEVELS)), np.nan) for key in keys}
    uncertainties = {key: np.full(count, np.nan) for key in keys}
    criteria = {key: QUANTITIES[key[0]].default_criterion for key in keys}
    for number, (own, member) in enumerate(members_of(family, journal)):
        values[number] = own
        ratios[number] = np.nan if member.ratio is None else member.ratio
        for row in member.rows:
            if row.key in differences and row.uncertainty is not None:
                differences[row.key][number] = [np.nan if d is None else d for d in row.difference]
                uncertainties[row.key][number] = row.uncertainty
                criteria[row.key] = row.criterion
    return {
        key: Series(*key, criteria[key], values, ratios, differences[key], uncertainties[key]) for key in keys
    }
