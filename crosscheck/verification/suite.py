"""The suite: what runs, run in worker processes of one numerical thread each, and what came of it."""

from __future__ import annotations

import base64
import pickle
import time
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np

from crosscheck.batch.task import Point, Task
from crosscheck.batch.workers import Crew
from crosscheck.case_files import case_folder
from crosscheck.faults import SectionFaults
from crosscheck.verification.check import FEATURES, CheckOutcome, CodeCheck
from crosscheck.verification.code_checks import code_checks
from crosscheck.verification.features import midline_of, row_features, section_features
from crosscheck.verification.judging import RowOutcome, run_case
from crosscheck.verification.reference import ReferenceCase
from crosscheck.verification.row_file import read_rows, row_files

Job = ReferenceCase | CodeCheck
Told = Callable[[int, int, str], None]
# Longest time for one case or check [s].
TIME_LIMIT = 600.0


@dataclass(frozen=True)
class Selection:
    """What of the suite is wanted: parts of names, of sources, and features; empty means all."""

    names: tuple[str, ...] = ()
    sources: tuple[str, ...] = ()
    features: tuple[str, ...] = ()

    def __bool__(self) -> bool:
        return bool(self.names or self.sources or self.features)


@dataclass(frozen=True)
class Plan:
    """Cases and code checks to run; whole: nothing was left out, so that coverage is judged."""

    cases: tuple[ReferenceCase, ...]
    checks: tuple[CodeCheck, ...]
    quick: bool
    whole: bool

    @property
    def jobs(self) -> tuple[Job, ...]:
        """Long ones first, so that no worker ends far behind the others."""
        costly = [case for case in self.cases if case.needs_fe]
        return (*self.checks, *costly, *(case for case in self.cases if not case.needs_fe))


@dataclass(frozen=True)
class Coverage:
    """How often a feature is exercised: by rows of theory, of FE, of their difference, and by code checks."""

    theory: int
    fe: int
    difference: int
    checks: int

    @property
    def rows(self) -> int:
        """Reference rows of any side."""
        return self.theory + self.fe + self.difference


@dataclass(frozen=True)
class SuiteResult:
    """Outcomes in the order of the plan; seconds of wall-clock time."""

    outcomes: tuple[CheckOutcome, ...]
    quick: bool
    whole: bool
    seconds: float
    coverage: Mapping[str, Coverage] = field(default_factory=dict)

    @property
    def rows(self) -> tuple[RowOutcome, ...]:
        """Outcomes of reference rows."""
        return tuple(outcome for outcome in self.outcomes if isinstance(outcome, RowOutcome))

    @property
    def failures(self) -> tuple[CheckOutcome, ...]:
        """Outcomes that failed."""
        return tuple(outcome for outcome in self.outcomes if not outcome.passed)


def plan(paths: Sequence[Path] = (), *, quick: bool = False, selection: Selection | None = None) -> Plan:
    """What to run: the shipped rows and code checks, or the row files given.

    Raises
    ------
    SectionFaults
        All faults of all row files at once.
    """
    chosen = selection or Selection()
    files = [file for path in paths or (case_folder() / "reference",) for file in row_files(path)]
    cases: list[ReferenceCase] = []
    faults: list[SectionFaults] = []
    for file in files:
        try:
            cases += read_rows(file)
        except SectionFaults as fault:
            faults.append(fault)
    if faults:
        raise SectionFaults([f for one in faults for f in one.faults], sum(f.left_out for f in faults))
    checks = () if paths else code_checks()
    if quick:
        cases = [case for case in cases if case.quick or not case.needs_fe]
        checks = tuple(check for check in checks if check.quick)
    if chosen:
        cases = [kept for case in cases for kept in _selected(case, chosen)]
        checks = tuple(check for check in checks if _wanted(check, chosen))
    return Plan(tuple(cases), checks, quick, not paths and not chosen)


def run(planned: Plan, workers: int = 1, tell: Told | None = None) -> SuiteResult:
    """Run a plan.

    Parameters
    ----------
    planned : Plan
    workers : int
        Processes; 0 runs everything here.
    tell : callable, optional
        Told how many jobs are done, how many there are, and the name of the last one.
    """
    start = time.perf_counter()
    jobs = planned.jobs
    told = tell or (lambda done, count, name: None)
    found: dict[str, tuple[CheckOutcome, ...]] = {}
    for done, (job, made) in enumerate(_ran(jobs, workers), 1):
        found[_key(job)] = made
        told(done, len(jobs), job.name)
    ordered: list[Job] = [*planned.cases, *planned.checks]
    outcomes: list[CheckOutcome] = [outcome for job in ordered for outcome in found[_key(job)]]
    counted = coverage(outcomes)
    if planned.whole:
        outcomes += [_covered(feature, counts) for feature, counts in counted.items()]
    return SuiteResult(tuple(outcomes), planned.quick, planned.whole, time.perf_counter() - start, counted)


def coverage(outcomes: Iterable[CheckOutcome]) -> dict[str, Coverage]:
    """How often every feature is exercised."""
    found = list(outcomes)
    rows = [outcome for outcome in found if isinstance(outcome, RowOutcome)]
    checks = [outcome for outcome in found if not isinstance(outcome, RowOutcome)]

    def count(feature: str, side: str) -> int:
        return sum(feature in row.features for row in rows if row.side == side)

    return {
        feature: Coverage(
            count(feature, "theory"),
            count(feature, "fe"),
            count(feature, "both"),
            sum(feature in check.features for check in checks),
        )
        for feature in FEATURES
    }


def _covered(feature: str, counts: Coverage) -> CheckOutcome:
    """A feature without a reference row fails the suite."""
    return CheckOutcome(
        name=f"coverage: {feature}",
        group="coverage",
        side="both",
        passed=counts.rows > 0,
        value=0.0 if counts.rows else 1.0,
        allowed=0.0,
        detail=f"{counts.rows} rows and {counts.checks} code checks"
        if counts.rows
        else "no reference row exercises it",
    )


def _ran(jobs: Sequence[Job], workers: int) -> Iterable[tuple[Job, tuple[CheckOutcome, ...]]]:
    """Jobs and their outcomes as they end."""
    if workers == 0 or len(jobs) == 1:
        for job in jobs:
            yield job, run_job(job)
        return
    with Crew(Task(_packed, tuple(jobs)), min(workers, len(jobs)), TIME_LIMIT) as crew:
        for outcome in crew.solve(Point(number, number) for number in range(len(jobs))):
            job = jobs[outcome.number]
            if outcome.failure is None:
                yield job, pickle.loads(base64.b64decode(outcome.found))
            else:
                yield job, (_broken(job, outcome.failure.text),)


def _packed(jobs: tuple[Job, ...], number: int) -> str:
    """Outcomes of a job as a worker sends them: text."""
    return base64.b64encode(pickle.dumps(run_job(jobs[number]))).decode()


def run_job(job: Job) -> tuple[CheckOutcome, ...]:
    """Outcomes of one job; an exception becomes a failed outcome, and so does a number that is none."""
    start = time.perf_counter()
    try:
        # the largest of some numbers may hide one that is none
        with np.errstate(divide="raise", invalid="raise", over="raise"):
            if isinstance(job, ReferenceCase):
                return run_case(job)
            outcome = job.run()
    except Exception as fault:  # whatever goes wrong in a check is its failure
        return (_broken(job, f"{type(fault).__name__}: {fault}"),)
    return (replace(outcome, seconds=time.perf_counter() - start, features=outcome.features | job.features),)


def _broken(job: Job, what: str) -> CheckOutcome:
    """The failure of a job that did not come to an end."""
    group = "reference values" if isinstance(job, ReferenceCase) else job.group
    detail = f"stopped by {' '.join(what.split())[:300]}"
    return CheckOutcome(job.name, group, "both", False, 1.0, 0.0, detail)


def _key(job: Job) -> str:
    return f"{job.file}: {job.name}" if isinstance(job, ReferenceCase) else f"check: {job.name}"


def _selected(case: ReferenceCase, chosen: Selection) -> list[ReferenceCase]:
    """The case with the rows that are wanted, if any."""
    of_section = section_features(case, midline_of(case.section)) if chosen.features else frozenset()
    rows = tuple(
        row
        for row in case.rows
        if _named(f"{row.name} {case.name}", chosen.names)
        and _named(f"{row.source.key} {row.source.text} {row.place}", chosen.sources)
        and (not chosen.features or set(chosen.features) & (of_section | row_features(case, row)))
    )
    return [replace(case, rows=rows)] if rows else []


def _wanted(check: CodeCheck, chosen: Selection) -> bool:
    if chosen.sources:
        return False
    features = not chosen.features or bool(set(chosen.features) & check.features)
    return features and _named(f"{check.name} {check.group}", chosen.names)


def _named(text: str, parts: Sequence[str]) -> bool:
    """Whether any part stands in a text, capital letters or not."""
    return not parts or any(part.lower() in text.lower() for part in parts)
