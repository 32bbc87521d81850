"""Counts and groupings of a suite's result that every report of it uses."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from crosscheck.verification.check import CheckOutcome
from crosscheck.verification.judging import RowOutcome
from crosscheck.verification.reference import OBTAINED
from crosscheck.verification.suite import SuiteResult

# How a value was obtained, where it stands for itself: nothing recalled, nothing made for the purpose.
FIRM = ("read", "exact")


@dataclass(frozen=True)
class Group:
    """Outcomes of one kind of check; worst: the one that uses most of its tolerance."""

    name: str
    passed: int
    count: int
    worst: CheckOutcome | None


def groups(result: SuiteResult) -> tuple[Group, ...]:
    """Outcomes by group, in the order of the suite."""
    made = []
    for name in dict.fromkeys(outcome.group for outcome in result.outcomes):
        own = [outcome for outcome in result.outcomes if outcome.group == name]
        judged = [o for o in own if o.allowed > 0.0 and math.isfinite(o.share) and not known(o)]
        worst = max(judged, key=lambda o: o.share, default=None)
        made.append(Group(name, sum(o.passed for o in own), len(own), worst))
    return tuple(made)


def known(outcome: CheckOutcome) -> bool:
    """Whether it is a known problem of its reference."""
    return isinstance(outcome, RowOutcome) and bool(outcome.known_problem)


def obtained_counts(rows: Iterable[RowOutcome]) -> dict[str, int]:
    """How many comparisons rest on values obtained in each way."""
    found = [row.obtained for row in rows]
    return {way: found.count(way) for way in OBTAINED if way in found}


def by_source(rows: Sequence[RowOutcome]) -> dict[str, list[RowOutcome]]:
    """Rows by the text of their source, sources with most rows first."""
    found: dict[str, list[RowOutcome]] = {}
    for row in rows:
        found.setdefault(row.source.text, []).append(row)
    return dict(sorted(found.items(), key=lambda item: (-len(item[1]), item[0])))


def headline(result: SuiteResult) -> str:
    """The outcome in one sentence."""
    count, failed = len(result.outcomes), len(result.failures)
    if failed:
        return f"{failed} of {count} checks failed."
    return f"All {count} checks passed." if count != 1 else "The one check passed."
