"""Rows of a load: peak flow, worst probe, rate of twist, and the largest stresses at the real faces."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence

from crosscheck.comparison import models, verdicts
from crosscheck.comparison.flow_comparison import LoadFlows, signed_gap
from crosscheck.comparison.levels import NOT_HERE, Levels, TheoryFlow
from crosscheck.comparison.load_case import LoadCase, fe_rate_of_twist
from crosscheck.comparison.load_results import BoomFibre
from crosscheck.comparison.quantities import QUANTITIES, flow_unit, stress_unit, unit_text
from crosscheck.comparison.result import LEVELS, FeValue, ProbeResult, QuantityResult
from crosscheck.comparison.rows import judged_row
from crosscheck.comparison.stress_comparison import FacePeak, LoadStress, WallFaces, fe_peak, level_peak
from crosscheck.section_file.model import SectionFile

# A surface shear below this share of that of |T| + |V| D is none.
NO_STRESS = 1e-9
NO_SHARED_WALL = "no wall carries direct stress on both sides: theory's is in the booms"


def flow_rows(section: SectionFile, found: LoadFlows) -> list[QuantityResult]:
    """Rows of the peak flow and of the worst probe of a load."""
    case, fe = found.case, found.fe_peak
    unit = flow_unit(case.name if case.unit else "", section.length_unit, section.force_unit)
    yardstick = verdicts.Yardstick(fe.value or None, "the FE value is zero")
    own = found.own_peak
    note = None
    if own is not None and not own.has_fe and found.reason is None:
        note = (
            f"theory's own peak {abs(own.value):.4g} {unit} is in a joint (wall {own.wall}, s = {own.s:.4g} "
            f"{section.length_unit}): no FE counterpart"
        )
    kind = QUANTITIES["peak_flow"]
    peak = judged_row(
        section, kind, unit, case.name, found.peaks, found.reasons, fe, yardstick,
        reason=found.reason, note=note,
    )  # fmt: skip
    return [peak, _worst_probe_row(section, found, unit, yardstick)]


def _worst_probe_row(
    section: SectionFile, found: LoadFlows, unit: str, yardstick: verdicts.Yardstick
) -> QuantityResult:
    """Row of the probe at which the judged level is farthest from FE; the other levels at that probe."""
    kind, worst, peak = QUANTITIES["flow_at_probes"], found.worst, found.fe_peak.value
    if worst is None or worst.fe is None or not peak or found.reason is not None:
        nothing = FeValue(None, None, None, "estimate", reason=found.reason)
        reason = found.reason or "no probe on both sides"
        levels: dict[str, float | None] = dict.fromkeys(LEVELS)
        return judged_row(
            section, kind, unit, found.case.name, levels, found.reasons, nothing, yardstick, reason=reason
        )
    error = worst.fe_error or 0.0
    at_worst = FeValue(worst.fe, worst.fe - error, worst.fe + error, "estimate")
    where = f"worst at wall {found.worst_wall}, s = {worst.s:.4g} {section.length_unit}"
    differences = {level: _level_gap(worst, value, peak) for level, value in worst.levels.items()}
    return judged_row(
        section, kind, unit, found.case.name, worst.levels, found.reasons, at_worst, yardstick,
        note=where, differences=differences,
    )  # fmt: skip


def _level_gap(probe: ProbeResult, theory: float | None, peak: float) -> float | None:
    """Difference of one level at a probe over FE's peak, counted along FE's flow."""
    if theory is None or probe.fe is None:
        return None
    return signed_gap(theory, probe.fe) / peak


def twist_row(
    section: SectionFile,
    case: LoadCase,
    flows: Mapping[str, TheoryFlow],
    levels: Levels,
    fe: Mapping[str, FeValue],
    torque: FeValue,
    extent: float,
) -> QuantityResult:
    """Row of the rate of twist phi' = T_sc/(G J) of a load, per unit G where the file names no material.

    The yardstick is FE's value, but no smaller than what 5 % of |T| + |V| D would make: a load through the
    shear centre twists nothing, and nothing divides badly.
    """
    modulus = models.shear_modulus(section)
    unit = (
        unit_text(-3, 1, section.length_unit, section.force_unit)
        if modulus is None
        else unit_text(-1, 0, section.length_unit, section.force_unit).replace("1/", "rad/")
    )
    g = 1.0 if modulus is None else modulus
    torsion_constant = fe["torsion_constant"]
    value = fe_rate_of_twist(torque, torsion_constant, g)
    own = levels.values("torsion_constant")
    reasons = levels.reasons("torsion_constant")
    rates: dict[str, float | None] = {}
    for level in LEVELS:
        flow, j = flows[level].flow, own[level]
        rates[level] = None if flow is None or not j else float(flow.torque_about_shear_centre) / (g * j)
        if flow is None:
            reasons[level] = flows[level].reason or NOT_HERE
    if value.value is None or not torsion_constant.value:
        yardstick = verdicts.Yardstick(None, value.reason)
    else:
        floor = verdicts.FLOOR * reach(case, extent) / (g * torsion_constant.value)
        yardstick = verdicts.Yardstick(max(abs(value.value), floor) or None, "the load makes no twist")
    note = "per unit shear modulus: the file names no material" if modulus is None else None
    kind = QUANTITIES["rate_of_twist"]
    return judged_row(section, kind, unit, case.name, rates, reasons, value, yardstick, note=note)


def reach(case: LoadCase, extent: float) -> float:
    """|T| + (|Vx| + |Vy|) D: a torque that a load is measured by [F L]."""
    return abs(case.torque) + (abs(case.shear[0]) + abs(case.shear[1])) * extent


def stress_rows(
    section: SectionFile,
    found: LoadStress,
    levels: Levels,
    open_walls: Collection[str],
    unit_torque: LoadStress,
    torque: FeValue,
    extent: float,
    fibres: Sequence[BoomFibre] = (),
) -> list[QuantityResult]:
    """Rows of the largest surface shear of open walls, direct stress and von Mises stress of a load.

    Parameters
    ----------
    section : SectionFile
        Units and criteria.
    found : LoadStress
        Both sides' stresses of the load.
    levels : Levels
        Theory.
    open_walls : collection of str
        Walls in no cell.
    unit_torque : LoadStress
        Those of a unit torque.
    torque : FeValue
        Torque of the load about FE's shear centre [F L].
    extent : float
        Larger overall dimension D [L].
    fibres : sequence of BoomFibre
        Direct stress at theory's booms, compared where no wall carries direct stress on both sides.
    """
    case = found.case
    rows = []
    walls = [wall for wall in found.walls if wall.wall in open_walls]
    if walls and (case.torque if case.unit else case.has_shear):
        unit_walls = [wall for wall in unit_torque.walls if wall.wall in open_walls]
        rows.append(_surface_row(section, found, walls, levels, unit_walls, torque, extent))
    if case.unit:
        return rows
    alike = tuple(wall for wall in found.walls if wall.both_sides and wall.shear_only is None)
    if case.has_direct and alike:
        rows.append(_peak_row(section, "direct_stress", "direct", found, alike))
    elif case.has_direct:
        rows.append(_boom_row(section, case, fibres, found))
    reason = None if alike or found.reason else NO_SHARED_WALL
    rows.append(_peak_row(section, "von_mises_stress", "von_mises", found, alike, reason))
    return rows


def _boom_row(
    section: SectionFile, case: LoadCase, fibres: Sequence[BoomFibre], found: LoadStress
) -> QuantityResult:
    """Row of the largest direct stress at theory's booms, where its walls carry none and FE's do."""
    unit = stress_unit("", section.length_unit, section.force_unit)
    own = [f for f in fibres if f.load == case.name]
    both = [(f.theory, f.fe) for f in own if f.theory is not None and f.fe is not None]
    nothing: dict[str, float | None] = dict.fromkeys(LEVELS)
    kind = QUANTITIES["direct_stress"]
    if not both:
        reason = next((f.reason for f in own if f.reason), None) or "theory sees no boom"
        none = FeValue(None, None, None, "estimate", reason=reason)
        return judged_row(
            section, kind, unit, case.name, nothing, found.reasons, none, verdicts.Yardstick(None, reason),
            reason=reason,
        )  # fmt: skip
    hand, fe = (max(abs(pair[side]) for pair in both) for side in (0, 1))
    theory = {**nothing, section.judged: hand}
    value = FeValue(fe, fe, fe, "exact")
    yardstick = verdicts.Yardstick(fe or None, "the FE value is zero")
    return judged_row(
        section, kind, unit, case.name, theory, {}, value, yardstick, note="at the places of theory's booms"
    )


def _peak_row(
    section: SectionFile,
    name: str,
    kind: str,
    found: LoadStress,
    walls: tuple[WallFaces, ...],
    no_walls: str | None = None,
) -> QuantityResult:
    """Row of the largest stress of a kind over the probes of both sides."""
    peak = fe_peak(kind, walls)
    unit = stress_unit("", section.length_unit, section.force_unit)
    theory = {level: level_peak(kind, level, walls) for level in LEVELS}
    value = _fe_value(peak)
    yardstick = verdicts.Yardstick(value.value or None, "the FE value is zero")
    where = None if peak is None else f"FE's largest at wall {peak.wall}, {peak.face} face, s = {peak.s:.4g}"
    return judged_row(
        section, QUANTITIES[name], unit, found.case.name, theory, found.reasons, value, yardstick,
        reason=no_walls or found.reason, note=where,
    )  # fmt: skip


def _surface_row(
    section: SectionFile,
    found: LoadStress,
    walls: list[WallFaces],
    levels: Levels,
    unit_walls: list[WallFaces],
    torque: FeValue,
    extent: float,
) -> QuantityResult:
    """Row of the largest surface shear g T t/J of open walls; FE's is that of a unit torque times its torque.

    A load through the shear centre makes none: the yardstick is at least 5 % of what |T| + |V| D would make.
    """
    case = found.case
    unit = stress_unit(case.name if case.unit else "", section.length_unit, section.force_unit)
    constants = levels.values("torsion_constant")
    theory = {
        level: level_peak("surface", level, walls) if constants[level] is not None else None
        for level in LEVELS
    }
    reasons = {**levels.reasons("torsion_constant"), **found.reasons}
    peak, size, half = fe_peak("surface", unit_walls), abs(torque.value or 0.0), torque.half_width or 0.0
    value, floor, where = _fe_value(peak), 0.0, None
    if peak is not None:
        low, high = max(size - half, 0.0) * peak.low, (size + half) * peak.high
        value = FeValue(size * peak.value, low, high, "estimate")
        floor = peak.value * reach(case, extent)
        where = f"FE's largest at wall {peak.wall}, s = {peak.s:.4g} {section.length_unit}"
    yardstick = verdicts.Yardstick(
        max(value.value or 0.0, verdicts.FLOOR * floor) or None, "the load makes no surface shear"
    )
    reason = found.reason
    if reason is None and max(theory[section.judged] or 0.0, value.value or 0.0) <= NO_STRESS * floor:
        reason = "the load makes no torque about the shear centre"
    return judged_row(
        section, QUANTITIES["surface_shear"], unit, case.name, theory, reasons, value, yardstick,
        reason=reason, note=where,
    )  # fmt: skip


def torsion_modulus_row(section: SectionFile, found: LoadStress, levels: Levels) -> QuantityResult:
    """Row of T over the largest shear stress at the faces, from a unit torque at the probes of both sides."""
    kind = QUANTITIES["torsion_modulus"]
    unit = unit_text(3, 0, section.length_unit, section.force_unit)
    constants = levels.values("torsion_constant")
    walls = tuple(wall for wall in found.walls if wall.both_sides)
    peaks = {level: level_peak("shear", level, walls) for level in LEVELS}
    theory = {
        level: 1.0 / peak if peak and constants[level] is not None else None for level, peak in peaks.items()
    }
    peak = fe_peak("shear", walls)
    value = FeValue(None, None, None, "estimate", reason="no wall has a strip")
    if peak is not None and peak.low > 0.0:
        value = FeValue(1.0 / peak.value, 1.0 / peak.high, 1.0 / peak.low, "estimate")
    yardstick = verdicts.Yardstick(value.value, value.reason)
    where = None if peak is None else f"FE's largest stress at wall {peak.wall}, {peak.face} face"
    reasons = {**levels.reasons("torsion_constant"), **found.reasons}
    return judged_row(section, kind, unit, None, theory, reasons, value, yardstick, note=where)


def _fe_value(peak: FacePeak | None) -> FeValue:
    """A peak as FE's value."""
    if peak is None:
        return FeValue(None, None, None, "estimate", reason="FE reports no stress: no wall has a strip")
    return FeValue(peak.value, peak.low, peak.high, "estimate")
