"""The sentences of every report: the verdict in one line, differences in words, what the numbers are not."""

from __future__ import annotations

import math
from collections.abc import Iterable

from crosscheck.comparison.quantities import QUANTITIES, UNIT_LOADS
from crosscheck.comparison.result import FeValue, QuantityResult, Result
from crosscheck.comparison.verdicts import ROUND_OFF

SAFETY = (
    "Verification and model comparison: not test evidence, not approval. The applicable code and a licensed "
    "engineer decide."
)
ASSUMED = (
    "prismatic, linear elastic, Saint-Venant, undistorted cross-section; no buckling, "
    "shear lag or restrained warping."
)
SHARED_ASSUMPTIONS = f"Both sides assume: {ASSUMED}"
FE_ASSUMPTIONS = f"FE assumes: {ASSUMED}"
STARRED = (
    "* per cent of something larger than the FE value: flows, of FE's peak for the load; Ixy, of "
    "sqrt(Ixx Iyy); I_w, of J D^2 where warping hardly matters; twist and surface shear, of what 5 % of "
    "V D would make."
)
# Up to this many loads each has its own rows on screen.
FEW_LOADS = 4
IN_ERROR = "in FE error"
UNDECIDED = "inconclusive: the FE error is too large to tell; ask for a finer --accuracy"

VERDICT_ORDER = {"outside": 0, "inconclusive": 1, "within": 2, None: 3}


def counted(number: int, noun: str) -> str:
    """A number of things in words."""
    return f"{number:,} {noun}" if number == 1 else f"{number:,} {noun}s"


def number_text(value: float | None, digits: int = 5) -> str:
    """A number with the given significant digits, as an engineer writes it; a dash for None."""
    if value is None:
        return "-"
    if value == 0:
        return "0"
    size = math.floor(math.log10(abs(value)))
    if -3 < size <= max(digits, 4):
        rounded = f"{value:.{max(digits - 1 - size, 0)}f}"
        return rounded if "." in rounded else f"{float(f'{value:.{digits - 1}e}'):.0f}"
    # Small numbers spend their columns on the exponent.
    mantissa, exponent = f"{value:.{min(digits, 4) - 1 if size < 0 else digits - 1}e}".split("e")
    return f"{mantissa}e{int(exponent)}"


def value_text(row: QuantityResult, value: float | None, digits: int = 5) -> str:
    """A value with five significant digits, an angle in degrees."""
    if value is not None and row.unit == "rad":
        # An angle of round-off is none.
        value = 0.0 if abs(value) < 1e-12 else value
        return f"{number_text(math.degrees(value), digits)} deg"
    if value is not None and row.normaliser is not None and abs(value) < 1e-9 * row.normaliser:
        return "0"
    return number_text(value, digits)


def error_mark(fe: FeValue, unicode: bool = True) -> str:
    """What stands before an error: plus-minus for a bound, a tilde for an estimate."""
    return "~" if fe.basis == "estimate" else ("±" if unicode else "+-")


def error_text(half: float) -> str:
    """An error with one significant digit, rounded up: an error bar must not shrink in print."""
    if half == 0:
        return "0"
    mantissa, exponent = f"{half:.6e}".split("e")
    digit = -int(-float(mantissa) // 1)
    power = int(exponent)
    if digit == 10:
        digit, power = 1, power + 1
    if -3 <= power <= 3:
        return f"{digit * 10.0**power:.{max(-power, 0)}f}"
    return f"{digit}e{power}"


def percent_text(share: float, coarse_below: float = 0.1) -> str:
    """A share in per cent: one significant digit below a limit, two up to 10 %, else three."""
    percent = abs(share) * 100
    if percent < 0.001:
        return "< 0.001 %"
    digits = 1 if percent < coarse_below else 2 if percent < 10 else 3
    rounded = float(f"{percent:.{digits - 1}e}")
    return f"{rounded:.{max(digits - 1 - math.floor(math.log10(rounded)), 0)}f} %"


def name_of(row: QuantityResult) -> str:
    """What people call the row, with its load."""
    words = QUANTITIES[row.name].words
    return words if row.load is None else f"{words}, {row.load}"


def family_of(row: QuantityResult, *, by_load: bool) -> tuple[str, str | None]:
    """Rows of one family are told by their worst: flows of a load, its stresses, section moduli, torsion's.

    ``by_load`` False: the file's loads are one family too.
    """
    kinds = {"peak_flow": "flow", "flow_at_probes": "flow"}
    kinds |= dict.fromkeys(("direct_stress", "von_mises_stress", "surface_shear"), "stress")
    if row.name == "torsion_modulus" or (row.name == "surface_shear" and row.load == "unit T"):
        return "torsion modulus", None
    kind = "modulus" if row.name.startswith("section_modulus") else kinds.get(row.name, row.name)
    if row.load is None or row.load in UNIT_LOADS or by_load:
        return kind, row.load
    return kind, "any load"


def one_row_a_family(rows: Iterable[QuantityResult]) -> list[QuantityResult]:
    """Rows in their order, of each family the worst only; with many loads, of all loads the worst only."""
    rows = list(rows)
    loads = {row.load for row in rows if row.load is not None and row.load not in UNIT_LOADS}
    by_load = len(loads) <= FEW_LOADS
    worst: dict[tuple[str, str | None], QuantityResult] = {}
    for row in worst_first(rows):
        worst.setdefault(family_of(row, by_load=by_load), row)
    return [row for row in rows if row is worst[family_of(row, by_load=by_load)]]


def difference_text(row: QuantityResult, length_unit: str) -> str:
    """How theory differs from FE, in words: high or low, or a distance and its direction.

    Parameters
    ----------
    row : QuantityResult
        A row of the comparison.
    length_unit : str
        For positions.

    Returns
    -------
    str
        The reason where the row has no difference.
    """
    difference = row.judged_difference
    if difference is None:
        return row.reason or "not compared"
    if abs(difference) <= ROUND_OFF:
        return "equal"
    if row.uncertainty is not None and abs(difference) <= row.uncertainty:
        return IN_ERROR
    kind = QUANTITIES[row.name]
    if kind.axis is not None:
        distance = difference * (row.normaliser or 0.0)
        ways = ("right", "left") if kind.axis == "right" else ("up", "down")
        return f"{number_text(abs(distance), 3)} {length_unit} {ways[distance < 0]}"
    if kind.normaliser == "angle":
        turn = math.degrees(difference * (row.normaliser or 0.0))
        return f"{number_text(abs(turn), 3)} deg {'ccw' if turn > 0 else 'cw'}"
    overstated = difference > 0
    if kind.normaliser in ("second moments", "value", "warping", "twist") and row.fe.value is not None:
        # A negative value that is too negative is high in magnitude; "low" would mislead.
        overstated = (difference > 0) == (row.fe.value >= 0)
    star = "*" if has_own_normaliser(row) else ""
    # The star takes a column, so a starred share gives up a digit.
    share = percent_text(difference, 1.0 if star else 0.1)
    return f"{share}{star}" if share.startswith("<") else f"{share} {'high' if overstated else 'low'}{star}"


def full_difference_text(row: QuantityResult, length_unit: str) -> str:
    """Difference in words for a sentence: what the per cent are of stands there instead of a mark.

    Where that takes a sentence of its own, the mark stays and leads to the starred note.
    """
    text = difference_text(row, length_unit)
    if not text.endswith("*"):
        return text
    of = {
        "warping": "of J D^2",
        "second moments": "of sqrt(Ixx Iyy)",
        "load peak": "of FE's peak",
    }
    normaliser = QUANTITIES[row.name].normaliser
    if normaliser in ("twist", "surface"):
        return text
    return f"{text.removesuffix('*')} ({of.get(normaliser, 'of the normaliser')})"


def has_own_normaliser(row: QuantityResult) -> bool:
    """Whether a difference in per cent is over something else than the FE value beside it."""
    kind = QUANTITIES[row.name]
    if kind.normaliser in ("extent", "angle") or row.normaliser is None or row.fe.value is None:
        return False
    return abs(row.normaliser - abs(row.fe.value)) > ROUND_OFF * row.normaliser


def effect_text(row: QuantityResult) -> str:
    """Effect for its use, such as ``unconservative for twist``; empty where there is none."""
    if not row.effect:
        return ""
    return "; ".join(
        f"{effect} for {use}" if effect != "depends" else f"{use} depends"
        for use, effect in row.effect.items()
    )


def worst_first(rows: Iterable[QuantityResult]) -> list[QuantityResult]:
    """Rows by verdict, then by the share of the criterion used; equal ones in their given order."""
    return sorted(rows, key=lambda row: (VERDICT_ORDER[row.verdict], -(row.criterion_used or 0.0)))


def verdict_sentence(result: Result) -> str:
    """The outcome in one sentence.

    Parameters
    ----------
    result : Result
        What a comparison found.

    Returns
    -------
    str
        Such as ``Hand methods hold for 7 of 8 quantities; not for the torsion constant: 2.1 % high,
        unconservative for twist.``
    """
    if result.outline_alone:
        return "No hand method: the section is given by its outline alone."
    rows = one_row_a_family(worst_first(result.quantities))
    judged = [row for row in rows if row.verdict is not None]
    held = [row for row in judged if row.verdict == "within"]
    outside = [row for row in judged if row.verdict == "outside"]
    undecided = [row for row in judged if row.verdict == "inconclusive"]
    if not judged:
        return "Nothing could be compared: theory or FE leaves every quantity undefined."
    if len(held) == len(judged):
        worst = judged[0]
        return (
            f"Hand methods hold for all {len(judged)} quantities compared; worst: {name_of(worst)}, "
            f"{full_difference_text(worst, result.length_unit)}."
        )
    text = f"Hand methods hold for {len(held)} of {len(judged)} quantities"
    if outside:
        told = [_told(row, result.length_unit) for row in outside[:2]]
        more = f"; nor for {len(outside) - 2} more" if len(outside) > 2 else ""
        text += f"; not for {'; nor for '.join(told)}{more}"
    if undecided:
        names = ", ".join(name_of(row) for row in undecided[:2])
        more = f" and {len(undecided) - 2} more" if len(undecided) > 2 else ""
        text += f"; not decided for {names}{more}"
    return f"{text}."


def _told(row: QuantityResult, length_unit: str) -> str:
    """A row that fails, as the sentence tells it."""
    effect = effect_text(row)
    article = "" if row.load is not None or QUANTITIES[row.name].axis is not None else "the "
    return f"{article}{name_of(row)}: {full_difference_text(row, length_unit)}" + (
        f", {effect}" if effect else ""
    )


def criteria_note(result: Result) -> str:
    """Which criteria are defaults and which come from the file."""
    own = {row.name: row.criterion for row in result.quantities if row.criterion_source == "file"}
    told = ", ".join(f"{name} {100 * value:g} %" for name, value in sorted(own.items()))
    defaults = "5 %, positions 1 % of the larger overall dimension (defaults)"
    return f"Criteria: {defaults}; from the file: {told or 'none'}."
