"""Words and cells that several chapters share."""

from __future__ import annotations

import math
import re

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import FeValue, QuantityResult, Verdict
from crosscheck.dossier.content import Tone
from crosscheck.reports.wording import (
    effect_text,
    error_mark,
    error_text,
    full_difference_text,
    name_of,
    number_text,
    value_text,
)

TONES: dict[Verdict | None, Tone] = {
    "outside": "bad",
    "inconclusive": "doubt",
    "within": "plain",
    None: "quiet",
}
_RAISED = "⁰¹²³⁴⁵⁶⁷⁸⁹"


def plain_unit(unit: str) -> str:
    """A unit with raised digits, such as mm⁴."""
    return re.sub(r"\^(\d)", lambda found: _RAISED[int(found[1])], unit)


def unit_of(row: QuantityResult) -> str:
    """Unit as the values of a row are shown."""
    return "deg" if row.unit == "rad" else plain_unit(row.unit)


def bare_value(row: QuantityResult, value: float | None) -> str:
    """A value of a row without its unit."""
    return value_text(row, value).removesuffix(" deg")


def interval_text(fe: FeValue, half: float | None) -> str:
    """Half of FE's interval: ± before a bound, ~ before an estimate, ``exact`` without one."""
    if half is None:
        return "-"
    return "exact" if fe.basis == "exact" else f"{error_mark(fe)}{error_text(half)}"


def fe_error(row: QuantityResult) -> str:
    """Half of FE's interval of a row, in the unit it is shown in."""
    half = row.fe.half_width
    return interval_text(row.fe, math.degrees(half) if half is not None and row.unit == "rad" else half)


def share_text(share: float | None) -> str:
    """A share in per cent with two digits; a dash for None."""
    if share is None:
        return "-"
    if share == 0.0:
        return "0"
    percent = 100.0 * share
    return (
        f"{percent:.1e} %" if percent < 1e-3 else f"{percent:.2g} %" if percent < 10 else f"{percent:.0f} %"
    )


def signed_text(share: float | None) -> str:
    """A share in per cent with its sign; a dash for None."""
    if share is None:
        return "-"
    return "0" if abs(share) < 1e-12 else f"{'+' if share > 0 else '-'}{share_text(abs(share))}"


def conclusion(row: QuantityResult, length_unit: str) -> str:
    """A row in one sentence."""
    name = name_of(row)
    name = name[0].upper() + name[1:]
    unit = unit_of(row)
    hand, fe, error = bare_value(row, row.judged_theory), bare_value(row, row.fe.value), fe_error(row)
    if row.verdict is None:
        # A value within its own error is nothing, and no number of it is worth printing.
        known = row.fe.value is not None and abs(row.fe.value) > (row.fe.half_width or 0.0)
        alone = f" FE {fe} {unit}, {error}." if known else ""
        return f"{name}: not compared, {row.reason or 'undefined on a side'}.{alone}"
    words = full_difference_text(row, length_unit)
    words = {"equal": "equals FE", "in FE error": "is within FE's error"}.get(words, f"is {words}")
    criterion = f"{100 * row.criterion:g} %"
    verdict = {
        "within": f"within the criterion of {criterion}",
        "outside": f"OUTSIDE the criterion of {criterion}",
        "inconclusive": f"INCONCLUSIVE against the criterion of {criterion}",
    }[row.verdict]
    effect = effect_text(row)
    of = "" if QUANTITIES[row.name].axis is None else " of the larger overall dimension"
    text = f"{name}: the hand value {hand} {unit} {words} (FE {fe} {unit}, {error}), {verdict}{of}"
    if row.verdict == "outside" and row.factor is not None:
        text += f"; multiply the hand value by {number_text(row.factor, 4)}"
    return f"{text}{f'; {effect}' if effect else ''}."
