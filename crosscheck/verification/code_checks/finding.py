"""What a code check measures, and how a measurement becomes a check of the suite."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field
from functools import partial

from crosscheck.verification.check import CheckOutcome, CodeCheck, Series, Side


@dataclass(frozen=True)
class Finding:
    """A value that must not exceed ``allowed``, and one sentence with the numbers."""

    value: float
    allowed: float
    detail: str
    series: Mapping[str, Series] = field(default_factory=dict)


def code_check(
    name: str,
    group: str,
    side: Side,
    measure: Callable[[], Finding],
    *,
    quick: bool = False,
    features: Iterable[str] = (),
) -> CodeCheck:
    """The check of a measurement; ``measure`` is a function at the top of a module or a partial of one."""
    shown = frozenset(features)
    return CodeCheck(name, group, side, partial(_outcome, name, group, side, measure, shown), quick, shown)


def _outcome(
    name: str, group: str, side: Side, measure: Callable[[], Finding], features: frozenset[str]
) -> CheckOutcome:
    """Not-a-number fails."""
    found = measure()
    passed = bool(found.value <= found.allowed)
    return CheckOutcome(
        name, group, side, passed, found.value, found.allowed, found.detail, features, found.series
    )
