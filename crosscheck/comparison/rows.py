"""One judged row: theory at every level beside FE, difference, verdict, effect and factor of the judged
level."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Literal

from crosscheck.comparison import verdicts
from crosscheck.comparison.levels import reason_at
from crosscheck.comparison.quantities import QuantityKind
from crosscheck.comparison.result import LEVELS, FeValue, QuantityResult
from crosscheck.section_file.model import SectionFile


def criterion(section: SectionFile, kind: QuantityKind) -> tuple[float, Literal["default", "file"]]:
    """Criterion of a quantity and who set it."""
    own = section.criteria.get(kind.name)
    return (kind.default_criterion, "default") if own is None else (own, "file")


def judged_row(
    section: SectionFile,
    kind: QuantityKind,
    unit: str,
    load: str | None,
    theory: Mapping[str, float | None],
    reasons: Mapping[str, str],
    fe: FeValue,
    yardstick: verdicts.Yardstick,
    *,
    reason: str | None = None,
    note: str | None = None,
    differences: Mapping[str, float | None] | None = None,
) -> QuantityResult:
    """A row; a missing side or yardstick makes it null with the reason.

    Parameters
    ----------
    section : SectionFile
        For the criterion and the judged level.
    kind : QuantityKind
        What is compared.
    unit, load : str
        Unit as written; load case, None for the section itself.
    theory : mapping of level to value
        In the unit.
    reasons : mapping of level to str
        Why a level has no value.
    fe : FeValue
        FE's value in the same unit.
    yardstick : Yardstick
        What differences are divided by.
    reason : str or None
        Why nothing can be compared, where that is known already.
    note : str or None
        Said beside a row that fails.
    differences : mapping, optional
        Differences over the yardstick where they are not those of the two values [-].
    """
    limit, source = criterion(section, kind)
    own = theory.get(section.judged)
    levels = {level: theory.get(level) for level in LEVELS}
    missing = {
        level: reasons.get(level) or reason or reason_at(level, None)
        for level, value in levels.items()
        if value is None
    }
    half = fe.half_width
    found = reason or _missing(own, missing.get(section.judged), fe, yardstick)
    if found is not None or own is None or fe.value is None or yardstick.value is None or half is None:
        nulls: dict[str, float | None] = dict.fromkeys(LEVELS)
        if reason is None and fe.value is not None and yardstick.value is not None:
            # Only the judged level is missing: the others keep their differences.
            nulls = {level: _gap(kind, value, fe.value, yardstick.value) for level, value in levels.items()}
        return QuantityResult(
            kind.name, kind.symbol, unit, load, levels, fe, nulls, yardstick.value, limit, source,
            None, None, None, None, found or "FE gives no interval", section.judged, note, missing,
        )  # fmt: skip
    if differences is None:
        differences = {level: _gap(kind, value, fe.value, yardstick.value) for level, value in levels.items()}
    difference = differences[section.judged]
    assert difference is not None
    uncertainty = half / yardstick.value
    if kind.name == "flow_at_probes":
        factor, no_factor = None, None
    else:
        factor, no_factor = verdicts.factor(kind, own, fe.value, yardstick.value)
    return QuantityResult(
        name=kind.name,
        symbol=kind.symbol,
        unit=unit,
        load=load,
        theory=levels,
        fe=fe,
        difference={level: differences.get(level) for level in LEVELS},
        normaliser=yardstick.value,
        criterion=limit,
        criterion_source=source,
        uncertainty=uncertainty,
        verdict=verdicts.verdict(difference, uncertainty, limit),
        effect=verdicts.effect(kind, own, fe.value, difference, uncertainty),
        factor=factor,
        reason=None,
        judged=section.judged,
        note=note or no_factor,
        theory_reasons=missing,
    )


def _missing(own: float | None, reason: str | None, fe: FeValue, yardstick: verdicts.Yardstick) -> str | None:
    """Why a row cannot be judged, or None."""
    if own is None:
        return reason or "theory does not define it"
    if fe.value is None:
        return fe.reason or "FE does not give it"
    return yardstick.reason if yardstick.value is None else None


def _gap(kind: QuantityKind, theory: float | None, fe: float, yardstick: float) -> float | None:
    """Difference of one level over the yardstick."""
    if theory is None:
        return None
    gap = verdicts.angle_between(theory, fe) if kind.normaliser == "angle" else theory - fe
    return gap / yardstick
