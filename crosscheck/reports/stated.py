"""Stated values in words: does the number stand, by how much, and which hand method does it come from."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import LEVELS, QuantityResult, Result, StatedJudgement, Verdict
from crosscheck.comparison.stated_values import ITS_MIDLINE
from crosscheck.faults import one_line
from crosscheck.reports.wording import (
    effect_text,
    error_mark,
    error_text,
    full_difference_text,
    number_text,
)

STANDS: dict[Verdict | None, str] = {
    "within": "stands",
    "outside": "does not stand",
    "inconclusive": "cannot be decided: the FE error is too large",
    None: "cannot be judged",
}
LINE_LIMIT = 500


def stated_row(result: Result, stated: StatedJudgement) -> QuantityResult | None:
    """The row of the comparison with the stated value in theory's place; None where there is no judgement."""
    if stated.difference_fe is None:
        return None
    row = result.quantity(stated.quantity, stated.load)
    return replace(
        row,
        theory={"stated": stated.value},
        difference={"stated": stated.difference_fe},
        judged="stated",
        fe=stated.fe if row.unit != "rad" else row.fe,
        normaliser=row.normaliser if stated.probe is None else stated.normaliser,
        uncertainty=stated.uncertainty,
        criterion=stated.tolerance,
        verdict=stated.verdict,
        effect=stated.effect,
        factor=None,
        note=None,
    )


def stated_name(stated: StatedJudgement) -> str:
    """What was stated, with its probe and its load."""
    words = QUANTITIES[stated.quantity].words
    if stated.probe is not None:
        words = f"flow at {stated.probe}"
    return words if stated.load is None else f"{words}, {stated.load}"


def stated_heading(result: Result) -> str | None:
    """How many stated values stand; None where none is stated."""
    if not result.stated:
        return None
    held = sum(stated.verdict == "within" for stated in result.stated)
    total = len(result.stated)
    if total == 1:
        return f"The stated value {STANDS[result.stated[0].verdict].partition(':')[0]}:"
    return f"Stated values: {'all' if held == total else held} of {total} stand:".replace("all of", "all")


def stated_lines(result: Result, *, unicode: bool = True) -> Iterator[tuple[str, Verdict | None]]:
    """One line for every stated value, in the order of the file, with its verdict."""
    for stated in result.stated:
        yield one_line(_line(result, stated, unicode), LINE_LIMIT), stated.verdict


def stated_difference(result: Result, stated: StatedJudgement) -> str:
    """By how much a stated value is off FE's, in words; empty where there is no judgement."""
    row = stated_row(result, stated)
    if row is None or row.normaliser is None:
        return ""
    if stated.measured_from is not None and stated.measured_from.endswith(f"({ITS_MIDLINE})"):
        distance = (stated.difference_fe or 0.0) * row.normaliser
        if abs(stated.difference_fe or 0.0) > (stated.uncertainty or 0.0):
            way = "too far" if abs(stated.value) > abs(stated.fe.value or 0.0) else "too near"
            return f"{number_text(abs(distance), 3)} {result.length_unit} {way}"
    return full_difference_text(row, result.length_unit)


def _instead(stated: StatedJudgement) -> str:
    """What to use in place of a value that does not stand: FE's, and the level of theory nearest to it."""
    assert stated.fe.value is not None
    gaps = {
        level: abs(value - stated.fe.value) for level, value in stated.theory.items() if value is not None
    }
    best = min(gaps, key=lambda level: gaps[level], default=None)
    beside = [] if best is None else [f"level {best}: {number_text(stated.theory[best])}"]
    if QUANTITIES[stated.quantity].axis is None and stated.value:
        beside.insert(0, f"stated x {number_text(stated.fe.value / stated.value, 4)}")
    return f"use FE's {number_text(stated.fe.value)} ({'; '.join(beside)})" if beside else "use FE's value"


def method_text(stated: StatedJudgement) -> str:
    """Which hand method a stated value may come from, or how far the nearest is."""
    if stated.difference_theory is None:
        return ""
    known = [level for level in LEVELS if stated.theory.get(level) is not None]
    if stated.near and len(stated.near) == len(known):
        return "every level of theory has it" if len(known) > 1 else f"level {known[0]} has it"
    if len(stated.near) == 1:
        return f"level {stated.near[0]} has it"
    if stated.near:
        return f"levels {' and '.join(stated.near)} have it"
    share = number_text(abs(100.0 * stated.difference_theory), 2)
    return f"no level of theory has it (nearest {stated.level}, {share} % away)"


def _line(result: Result, stated: StatedJudgement, unicode: bool) -> str:
    """One stated value."""
    unit = f" {stated.unit}" if stated.unit not in ("", "1") else ""
    datum = "" if stated.measured_from is None else f" from {stated.measured_from}"
    source = f" ({stated.source})" if stated.source else ""
    head = f"{stated_name(stated)} {number_text(stated.value)}{unit}{datum}{source}"
    if stated.verdict is None:
        return f"{head} {STANDS[None]}: {stated.reason}"
    half = stated.fe.half_width or 0.0
    error = "" if stated.fe.basis == "exact" else f" {error_mark(stated.fe, unicode)}{error_text(half)}"
    judged = stated_row(result, stated)
    allowed, effect = f"{100.0 * stated.tolerance:g} % allowed", ""
    if judged is not None and QUANTITIES[stated.quantity].normaliser == "extent":
        distance = stated.tolerance * (judged.normaliser or 0.0)
        allowed = f"{number_text(distance, 3)} {result.length_unit} allowed"
    if judged is not None:
        effect = effect_text(judged)
    difference, method = stated_difference(result, stated), method_text(stated)
    parts = [f"FE {number_text(stated.fe.value)}{error}", difference, effect, allowed, method]
    if stated.verdict == "outside":
        parts.append(_instead(stated))
    verdict = STANDS[stated.verdict].partition(":")[0]
    return f"{head} {verdict}: {'; '.join(part for part in parts if part)}"
