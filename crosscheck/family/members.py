"""A family of sections: one file, the parameters that vary, and each member solved to rows."""

from __future__ import annotations

import platform
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import product
from math import prod
from typing import TYPE_CHECKING, Any, NamedTuple

from crosscheck.batch.task import Outcome, Point, Task
from crosscheck.comparison.provenance import PACKAGES, code_digest, installed_version
from crosscheck.comparison.result import LEVELS, QuantityResult, Verdict
from crosscheck.family.ranges import Range
from crosscheck.faults import ExpressionError, Fault, SectionFaults, quoted
from crosscheck.section_file.arithmetic import evaluate
from crosscheck.section_file.source import SectionSource

if TYPE_CHECKING:
    from crosscheck.section_file.model import SectionFile

# Neither changes a number of a comparison.
_NO_INFLUENCE = ("matplotlib", "rich")


class Row(NamedTuple):
    """One quantity of one member; ``theory`` and ``difference`` in the order of the levels."""

    name: str
    load: str | None
    unit: str
    theory: Sequence[float | None]
    fe: float | None
    fe_low: float | None
    fe_high: float | None
    basis: str
    difference: Sequence[float | None]
    normaliser: float | None
    uncertainty: float | None
    criterion: float
    verdict: Verdict | None
    reason: str | None

    @property
    def key(self) -> tuple[str, str | None]:
        """What tells rows of one member apart."""
        return self.name, self.load


@dataclass(frozen=True)
class Member:
    """What is known of one member: its rows, or why there are none (``reason``).

    ``status``: "solved"; "refused" where the section cannot be built; "failed" where a solver, or the process
    it ran in, failed.
    """

    status: str
    rows: tuple[Row, ...] = ()
    ratio: float | None = None
    reason: str | None = None
    failed_checks: tuple[str, ...] = ()
    accuracy_met: bool = True


@dataclass(frozen=True)
class Family:
    """What every member is made from.

    Attributes
    ----------
    source : SectionSource
        The file, read once.
    overrides : tuple of str
        Parameters set anew for all members, such as "depth = 90".
    ranges : tuple of Range
        One or two.
    accuracy : float
        Asked of FE's intervals [-].
    ratio : str or None
        Arithmetic on parameters told beside each member, such as "t / depth".
    """

    source: SectionSource
    overrides: tuple[str, ...]
    ranges: tuple[Range, ...]
    accuracy: float
    ratio: str | None = None

    def __len__(self) -> int:
        return prod(len(each.values) for each in self.ranges)

    @property
    def names(self) -> tuple[str, ...]:
        """Parameters that vary."""
        return tuple(each.name for each in self.ranges)

    @property
    def task(self) -> Task:
        """How a member is solved in a worker."""
        return Task(solve_member, self)

    def grid(self) -> Iterator[tuple[float, ...]]:
        """Values of the members in order, the last range fastest."""
        return product(*(each.values for each in self.ranges))

    def points(self) -> Iterator[Point]:
        """Members as points of a batch."""
        return (Point(number, list(values)) for number, values in enumerate(self.grid()))

    def section(self, values: Sequence[float] | None = None) -> SectionFile:
        """The section of a member; that of the file itself (with its overrides) without values.

        Raises
        ------
        SectionFaults
            Where it cannot be read so.
        """
        from crosscheck.section_file.reader import with_own_solid

        if values is None:
            return self._as_read()
        section = self._as_read(values)
        if section.outline is not None and section.walls and self._leaves_outline():
            return with_own_solid(section, "the outline is of one member only")
        return section

    def _as_read(self, values: Sequence[float] | None = None) -> SectionFile:
        from crosscheck.section_file.reader import section_from

        own = zip(self.names, values, strict=True) if values is not None else ()
        return section_from(self.source, (*self.overrides, *(f"{name} = {value!r}" for name, value in own)))

    def _leaves_outline(self) -> bool:
        """Whether members have walls that the file's outline is not of, so that all take their own solid."""
        for values in product(*((each.low, each.high) for each in self.ranges)):
            try:
                if self._as_read(values).outline is None:
                    return True
            except SectionFaults:
                continue
        return False

    def ratio_of(self, parameters: Mapping[str, float]) -> float | None:
        """The ratio told beside a member.

        Raises
        ------
        SectionFaults
            Where the arithmetic is faulty.
        """
        if self.ratio is None:
            return None
        try:
            return evaluate(self.ratio, parameters)
        except ExpressionError as fault:
            words = "arithmetic on parameters of the file"
            place = f"ratio {quoted(self.ratio)}"
            raise SectionFaults([Fault(self.source.path, place, fault.reason, words)]) from None

    @property
    def inputs(self) -> dict[str, Any]:
        """Everything that the members' numbers depend on, as plain JSON."""
        return {
            "sha256": self.source.sha256,
            "tables": {table.name: table.sha256 for table in self.source.tables.values()},
            "set": list(self.overrides),
            "vary": [each.words for each in self.ranges],
            "accuracy": self.accuracy,
            "ratio": self.ratio,
            "version": installed_version("crosscheck"),
            "code": code_digest(),
            "packages": {name: installed_version(name) for name in PACKAGES if name not in _NO_INFLUENCE},
            "python": platform.python_version(),
        }


def solve_member(family: Family, values: Sequence[float]) -> dict[str, Any]:
    """Compare both sides of one member; see :func:`member_of` for what it gives."""
    import beam_theory
    import fe_models
    from crosscheck.comparison.comparing import compare

    try:
        section = family.section(values)
        result = compare(section, family.accuracy)
        ratio = family.ratio_of(section.parameters)
    except SectionFaults as faults:
        first = faults.faults[0]
        return {"status": "refused", "reason": f"{first.key}: must be {first.allowed}, got {first.found}"}
    except (fe_models.OutlineError, beam_theory.SectionError) as fault:
        return {"status": "refused", "reason": str(fault)}
    except fe_models.FeError as fault:
        return {"status": "failed", "reason": f"finite elements: {fault}"}
    except beam_theory.TheoryError as fault:
        return {"status": "failed", "reason": f"classical theory: {fault}"}
    return {
        "status": "solved",
        "ratio": ratio,
        "failed_checks": [check.name for check in result.checks if not check.passed],
        "accuracy_met": result.accuracy_met,
        "rows": [list(_row(row)) for row in result.quantities],
    }


def _row(row: QuantityResult) -> Row:
    half = row.fe.half_width
    return Row(
        row.name,
        row.load,
        row.unit,
        [row.theory.get(level) for level in LEVELS],
        row.fe.value,
        row.fe.low,
        row.fe.high,
        row.fe.basis,
        [row.difference.get(level) for level in LEVELS],
        row.normaliser,
        None if half is None or not row.normaliser else half / row.normaliser,
        row.criterion,
        row.verdict,
        row.reason,
    )


def member_of(outcome: Outcome) -> Member:
    """A member from what :func:`solve_member` gave, or from the reason why it gave nothing."""
    if outcome.failure is not None:
        return Member("failed", reason=f"{outcome.failure.kind}: {outcome.failure.text}")
    found = outcome.found
    return Member(
        found["status"],
        tuple(Row(*row) for row in found.get("rows", ())),
        found.get("ratio"),
        found.get("reason"),
        tuple(found.get("failed_checks", ())),
        found.get("accuracy_met", True),
    )
