"""Rows of the section's own quantities, section moduli at the real faces among them."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from crosscheck.comparison import verdicts
from crosscheck.comparison.levels import Levels
from crosscheck.comparison.quantities import MODULI, SECTION_QUANTITIES, QuantityKind, unit_text
from crosscheck.comparison.result import FeValue, QuantityResult
from crosscheck.comparison.rows import judged_row
from crosscheck.comparison.section_moduli import fe_section_moduli

if TYPE_CHECKING:
    import fe_models
    from crosscheck.section_file.model import SectionFile

MISSING = FeValue(None, None, None, "estimate", reason="FE does not give it")


def section_rows(
    section: SectionFile, levels: Levels, fe: fe_models.Solution, values: Mapping[str, FeValue]
) -> list[QuantityResult]:
    """Rows of area to shear areas, and of the section moduli.

    Parameters
    ----------
    section : SectionFile
        Units, criteria, loads.
    levels : Levels
        Theory.
    fe : fe_models.Solution
        For the outline's extreme fibres.
    values : mapping of name to FeValue
        FE's quantities.
    """
    complete = {kind.name: values.get(kind.name, MISSING) for kind in SECTION_QUANTITIES}
    moduli = fe_section_moduli(section, levels, fe, values)
    extent = float(fe.outline.extent)
    rows = [_row(section, levels, kind, complete, extent) for kind in SECTION_QUANTITIES]
    return [*rows, *(_modulus_row(section, levels, kind, moduli[kind.name]) for kind in MODULI)]


def _unit(section: SectionFile, kind: QuantityKind) -> str:
    """Unit of a quantity of the section as written."""
    if kind.normaliser == "angle":
        return "rad"
    return unit_text(kind.length_power, kind.force_power, section.length_unit, section.force_unit)


def _row(
    section: SectionFile, levels: Levels, kind: QuantityKind, fe: Mapping[str, FeValue], extent: float
) -> QuantityResult:
    """Row of a quantity that both solutions have by name."""
    yardstick = verdicts.section_yardstick(kind, levels.judged_values, fe, extent)
    values = levels.values(kind.name)
    own = values[section.judged]
    note = None
    if kind.name.startswith("shear_centre") and own is not None and fe[kind.name].value is not None:
        note = _offset_torque(section, kind, own - (fe[kind.name].value or 0.0))
    reasons = levels.reasons(kind.name)
    return judged_row(
        section, kind, _unit(section, kind), None, values, reasons, fe[kind.name], yardstick, note=note
    )


def _modulus_row(section: SectionFile, levels: Levels, kind: QuantityKind, fe: FeValue) -> QuantityResult:
    """Row of a section modulus."""
    yardstick = verdicts.Yardstick(fe.value or None, fe.reason)
    values, reasons = levels.values(kind.name), levels.reasons(kind.name)
    return judged_row(section, kind, _unit(section, kind), None, values, reasons, fe, yardstick)


def _offset_torque(section: SectionFile, kind: QuantityKind, offset: float) -> str | None:
    """What an offset of the shear centre means as a torque, for the loads that it matters most to."""
    along_x = kind.axis == "right"
    torques = [
        (load.name, abs(offset * load.shear[1 if along_x else 0]))
        for load in section.loads
        if load.shear[1 if along_x else 0] != 0
    ]
    if not torques:
        return None
    torques.sort(key=lambda entry: -entry[1])
    unit = unit_text(1, 1, section.length_unit, section.force_unit)
    return "offset times shear: " + ", ".join(f"{name} {torque:.4g} {unit}" for name, torque in torques[:4])
