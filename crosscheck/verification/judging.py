"""One reference case run: every row of it judged."""

from __future__ import annotations

import math
import time
from dataclasses import dataclass, field, replace
from pathlib import PurePath

import beam_theory
import fe_models
from crosscheck.faults import CrosscheckError
from crosscheck.verification.answers import Answer, Answers, spread
from crosscheck.verification.check import CheckOutcome, Side
from crosscheck.verification.features import midline_of, row_features, section_features
from crosscheck.verification.reference import ReferenceCase, ReferenceRow, Source

# Exact values are given to more digits than this; a bound must hold them [relative].
EXACT_DIGITS = 1e-9
GROUPS = {"value": "reference values", "relative difference": "known differences",
          "absolute difference": "known differences"}  # fmt: skip


@dataclass(frozen=True)
class RowOutcome(CheckOutcome):
    """What came of a reference row on one side: `value` is found minus reference, `allowed` its tolerance.

    section: file and parameters set in it; asked: load and place of the quantity.
    found: the number found; expected: the reference's; half: half of FE's interval, 0 for theory.
    known_problem: why the reference is known to be wrong; then passed means that it still disagrees.
    """

    case: str = ""
    section: str = ""
    quantity: str = ""
    asked: str = ""
    found: float = math.nan
    expected: float = math.nan
    printed: str = ""
    unit: str = ""
    half: float = 0.0
    level: str = ""
    tolerance: str = ""
    why: str = ""
    source: Source = field(default_factory=lambda: Source("", "", ""))
    place: str = ""
    obtained: str = ""
    note: str = ""
    known_problem: str = ""


def run_case(case: ReferenceCase) -> tuple[RowOutcome, ...]:
    """Every row of a case on every side it names; a side that fails makes its rows fail."""
    answers = Answers(case.section, case.accuracy)
    of_section = section_features(case, midline_of(case.section))
    made = []
    for row in case.rows:
        for side in row.sides:
            start = time.perf_counter()
            features = of_section | row_features(case, row)
            try:
                outcome = judged(case, row, side, answers, features)
            except (CrosscheckError, beam_theory.TheoryError, fe_models.FeError, ValueError) as fault:
                outcome = _outcome(case, row, side, features, None, False, f"no value: {fault}")
            made.append(_timed(outcome, time.perf_counter() - start))
    return tuple(made)


def judged(
    case: ReferenceCase, row: ReferenceRow, side: str, answers: Answers, features: frozenset[str]
) -> RowOutcome:
    """One row on one side.

    It passes where the number found differs from the reference by at most the tolerance, where half of FE's
    interval is within the tolerance too, and where FE's bounds hold a value that is exact.
    """
    answer = answers.of(row, side) if row.kind == "value" else _difference(row, answers)
    allowed = row.tolerance.of(row.value)
    off = abs(answer.value - row.value)
    reasons = []
    if not off <= allowed:
        reasons.append(f"{off:.3g} off, {allowed:.3g} allowed")
    if answer.half > allowed:
        reasons.append(f"FE's half-width {answer.half:.1e} is more than the tolerance: not accurate enough")
    if side == "fe" and row.obtained == "exact" and answer.basis == "bound":
        slack = answer.half + EXACT_DIGITS * abs(row.value)
        if off > slack:
            reasons.append(f"the exact value lies outside FE's bounds: {off:.3g} off, {answer.half:.3g} wide")
    passed = not reasons
    if row.known_problem:
        reasons = [] if reasons else ["agrees, though listed as a known problem"]
        passed = not reasons
    text = f"found {spread(answer)}, reference {row.printed}"
    return _outcome(case, row, side, features, answer, passed, "; ".join([*reasons, text]))


def _difference(row: ReferenceRow, answers: Answers) -> Answer:
    """Theory minus FE, over FE where relative, with FE's error passed on."""
    theory, fe = answers.of(row, "theory"), answers.of(row, "fe")
    if row.kind == "absolute difference":
        return Answer(theory.value - fe.value, fe.half, fe.basis)
    return Answer(theory.value / fe.value - 1.0, abs(theory.value / fe.value**2) * fe.half, fe.basis)


def _outcome(
    case: ReferenceCase,
    row: ReferenceRow,
    side: str,
    features: frozenset[str],
    answer: Answer | None,
    passed: bool,
    detail: str,
) -> RowOutcome:
    both = len(row.sides) > 1
    found = math.nan if answer is None else answer.value
    return RowOutcome(
        name=f"{row.name} ({side})" if both else row.name,
        group=GROUPS[row.kind],
        side=_side(side),
        passed=passed,
        value=found - row.value,
        allowed=row.tolerance.of(row.value),
        detail=detail,
        features=features,
        case=case.name,
        section=_section_words(case),
        quantity=row.quantity if row.kind == "value" else f"{row.quantity}: {row.kind} of theory from FE",
        asked=_asked_words(row),
        found=found,
        expected=row.value,
        printed=row.printed,
        unit=row.unit,
        half=0.0 if answer is None else answer.half,
        level="" if side == "fe" else row.level,
        tolerance=row.tolerance.text,
        why=row.tolerance.why,
        source=row.source,
        place=row.place,
        obtained=row.obtained,
        note=row.note,
        known_problem=row.known_problem,
    )


def _section_words(case: ReferenceCase) -> str:
    """The section file's name and the parameters set, as `crosscheck compare --set` takes them."""
    set_here = ", ".join(f"{name} = {value}" for name, value in case.overrides.items())
    name = PurePath(case.section.path).name
    return f"{name}: {set_here}" if set_here else name


def _asked_words(row: ReferenceRow) -> str:
    """Load, wall and place that the quantity is asked for."""
    words = [row.load] if row.load else []
    if row.wall is not None:
        face = f", {row.face} face" if row.face else ""
        words.append(f"wall {row.wall} at {row.at:g}{face}")
    if row.point is not None:
        words.append(f"at ({row.point[0]:g}, {row.point[1]:g})")
    if row.nu:
        words.append("with nu")
    return ", ".join(words)


def _side(side: str) -> Side:
    return "theory" if side == "theory" else "fe" if side == "fe" else "both"


def _timed(outcome: RowOutcome, seconds: float) -> RowOutcome:
    return replace(outcome, seconds=seconds)
