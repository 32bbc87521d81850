"""Both sides of one section joined: every quantity with its difference, verdict, effect and factor."""

from __future__ import annotations

import time
from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, Literal

import beam_theory
import fe_models
from crosscheck import models, verdicts
from crosscheck.drawing import drawing_of
from crosscheck.flow_comparison import LoadFlows, TheoryFlow, load_flows, probes_of_walls, signed_gap
from crosscheck.load_case import UNIT_CASES, LoadCase, fe_rate_of_twist, fe_torque
from crosscheck.provenance import provenance
from crosscheck.quantities import QUANTITIES, SECTION_QUANTITIES, QuantityKind, flow_unit, unit_text
from crosscheck.result import (
    LEVELS,
    CheckResult,
    FeValue,
    MeshResult,
    QuantityResult,
    Result,
)

if TYPE_CHECKING:
    from crosscheck.section_model import SectionFile

Progress = Callable[[str], None]
DEFAULT_ACCURACY = 1e-5


def compare(
    section: SectionFile,
    accuracy: float = DEFAULT_ACCURACY,
    progress: Progress | None = None,
    *,
    pictures: bool = False,
) -> Result:
    """Solve a section on both sides and compare.

    Parameters
    ----------
    section : SectionFile
        As read.
    accuracy : float
        Half-width asked of FE's intervals, over J and over the larger overall dimension [-].
    progress : callable, optional
        Told in words what is being done.
    pictures : bool
        True where pictures will be drawn: the result then carries geometry and curves as well.

    Returns
    -------
    Result

    Raises
    ------
    fe_models.OutlineError
        Where the walls do not make a solid.
    fe_models.SolveError
        Where the FE side fails.
    beam_theory.TheoryError
        Where theory cannot take the section.

    Notes
    -----
    Verification and model comparison: both sides are prismatic, linear elastic, Saint-Venant, with an
    undistorted cross-section.
    """
    tell = progress or (lambda _: None)
    clock = time.perf_counter
    start = clock()
    tell("classical theory")
    theory = beam_theory.solve(models.theory_section(section))
    after_theory = clock()
    tell("finite elements")
    fe = fe_models.solve(models.fe_section(section), accuracy, lambda text: tell(f"finite elements, {text}"))
    after_fe = clock()
    tell("comparison")
    seconds = {"theory": after_theory - start, "fe": after_fe - after_theory}
    return join(section, theory, fe, accuracy, seconds=seconds, pictures=pictures)


def join(
    section: SectionFile,
    theory: beam_theory.Solution,
    fe: fe_models.Solution,
    accuracy: float = DEFAULT_ACCURACY,
    *,
    seconds: Mapping[str, float] | None = None,
    pictures: bool = False,
) -> Result:
    """Compare two solutions of one section; see :func:`compare`."""
    start = time.perf_counter()
    fe_values = {name: _fe_value(interval) for name, interval in fe.quantities.items()}
    theory_values = {name: quantity.value for name, quantity in theory.quantities.items()}
    reasons = {name: quantity.reason for name, quantity in theory.quantities.items()}
    extent = float(fe.outline.extent)
    units = (section.length_unit, section.force_unit)

    rows = [
        _section_row(section, kind, theory_values, reasons.get(kind.name), fe_values, extent)
        for kind in SECTION_QUANTITIES
    ]
    centre = (theory_values.get("shear_centre_x"), theory_values.get("shear_centre_y"))
    theory_centre = None if centre[0] is None or centre[1] is None else (centre[0], centre[1])
    cases = (*UNIT_CASES, *(models.load_case(load, theory_centre) for load in section.loads))
    theory_flows = [_theory_flow(theory, case) for case in cases]
    lines = models.midlines(section)
    named: dict[str, list[tuple[float, str | None]]] = {}
    for probe in section.probes:
        named.setdefault(probe.wall, []).append((probe.at, probe.label))
    probes = probes_of_walls(theory_flows, {wall: fe.strips.get(wall) for wall in lines}, named)
    flows: list[LoadFlows] = []
    for case, theory_flow in zip(cases, theory_flows, strict=True):
        torque = fe_torque(case, fe_values)
        found = load_flows(case, theory_flow, fe, torque, lines, probes, extent, units)
        flows.append(found)
        rows += _flow_rows(section, found)
        if not case.unit:
            rows.append(_twist_row(section, case, theory_flow, theory_values, fe_values, torque, extent))
    drawing = drawing_of(section, theory, fe, cases, theory_flows) if pictures else None
    stages = {**(seconds or {}), "compare": time.perf_counter() - start}
    return Result(
        title=section.title,
        length_unit=section.length_unit,
        force_unit=section.force_unit,
        judged=section.judged,
        per_modulus=not section.materials,
        quantities=tuple(rows),
        flows=tuple(wall for found in flows for wall in found.walls),
        theory_peaks=tuple(found.own_peak for found in flows if found.own_peak is not None),
        stated=(),
        causes=(),
        working=None,
        mesh=MeshResult(fe.mesh.order, fe.mesh.unknowns, fe.mesh.elements, fe.mesh.strips, fe.mesh.joints),
        checks=(*_checks("theory", theory.checks), *_checks("FE", fe.checks)),
        accuracy=accuracy,
        accuracy_met=bool(fe.met),
        accuracy_note=fe.accuracy_note,
        outline_notes=tuple(fe.outline.notes),
        provenance=provenance(str(section.path), section.sha256, stages),
        drawing=drawing,
    )


def _fe_value(interval: fe_models.Interval) -> FeValue:
    """FE's interval as the result records it."""
    return FeValue(
        interval.value, interval.low, interval.high, interval.basis, interval.with_nu, interval.reason
    )


def _checks(
    side: str, checks: Sequence[beam_theory.Check] | Sequence[fe_models.Check]
) -> tuple[CheckResult, ...]:
    """Self-checks of one side, with the side in front of the name."""
    return tuple(
        CheckResult(f"{side}: {check.name}", float(check.value), float(check.allowed), bool(check.passed))
        for check in checks
    )


def _theory_flow(theory: beam_theory.Solution, case: LoadCase) -> TheoryFlow:
    """Theory's flow of a load, or why there is none."""
    try:
        if case.unit:
            unit: dict[str, Literal["Vx", "Vy", "T"]] = {"unit Vx": "Vx", "unit Vy": "Vy", "unit T": "T"}
            return TheoryFlow(theory.unit_flow(unit[case.name]), None)
        return TheoryFlow(theory.flow(models.theory_load(case)), None)
    except beam_theory.UndefinedQuantity as undefined:
        # A section without a shear centre has no shear flow for the same reason, said without a load's name.
        return TheoryFlow(None, theory.quantities["shear_centre_x"].reason or str(undefined))


def _criterion(section: SectionFile, kind: QuantityKind) -> tuple[float, Literal["default", "file"]]:
    """Criterion of a quantity and who set it."""
    own = section.criteria.get(kind.name)
    return (kind.default_criterion, "default") if own is None else (own, "file")


def _row(
    section: SectionFile,
    kind: QuantityKind,
    unit: str,
    load: str | None,
    theory: float | None,
    fe: FeValue,
    yardstick: verdicts.Yardstick,
    reason: str | None,
    note: str | None = None,
    difference: float | None = None,
) -> QuantityResult:
    """One judged row; a missing side or yardstick makes it null with the reason."""
    criterion, source = _criterion(section, kind)
    levels = {level: theory if level == "midline" else None for level in LEVELS}
    if theory is None:
        reason = reason or "theory does not define it"
    elif fe.value is None:
        reason = reason or fe.reason or "FE does not give it"
    elif yardstick.value is None:
        reason = reason or yardstick.reason
    half = fe.half_width
    if reason is not None or theory is None or fe.value is None or yardstick.value is None or half is None:
        reason = reason or "FE gives no interval"
        nulls: dict[str, float | None] = dict.fromkeys(LEVELS)
        return QuantityResult(
            kind.name, kind.symbol, unit, load, levels, fe, nulls, yardstick.value, criterion, source,
            None, None, None, None, reason, section.judged, note,
        )  # fmt: skip
    if difference is None:
        gap = verdicts.angle_between(theory, fe.value) if kind.normaliser == "angle" else theory - fe.value
        difference = gap / yardstick.value
    uncertainty = half / yardstick.value
    if kind.name == "flow_at_probes":
        factor, no_factor = None, None
    else:
        factor, no_factor = verdicts.factor(kind, theory, fe.value, yardstick.value)
    return QuantityResult(
        name=kind.name,
        symbol=kind.symbol,
        unit=unit,
        load=load,
        theory=levels,
        fe=fe,
        difference={level: difference if level == "midline" else None for level in LEVELS},
        normaliser=yardstick.value,
        criterion=criterion,
        criterion_source=source,
        uncertainty=uncertainty,
        verdict=verdicts.verdict(difference, uncertainty, criterion),
        effect=verdicts.effect(kind, theory, fe.value, difference, uncertainty),
        factor=factor,
        reason=None,
        judged=section.judged,
        note=note or no_factor,
    )


def _section_row(
    section: SectionFile,
    kind: QuantityKind,
    theory: Mapping[str, float | None],
    reason: str | None,
    fe: Mapping[str, FeValue],
    extent: float,
) -> QuantityResult:
    """Row of a quantity of the section itself."""
    missing = FeValue(None, None, None, "estimate", reason="FE does not give it")
    complete = {name: fe.get(name, missing) for name in (row.name for row in SECTION_QUANTITIES)}
    value = theory.get(kind.name)
    yardstick = verdicts.section_yardstick(kind, theory, complete, extent)
    if kind.normaliser == "angle":
        unit = "rad"
    else:
        unit = unit_text(kind.length_power, kind.force_power, section.length_unit, section.force_unit)
    note = None
    if kind.name.startswith("shear_centre") and value is not None and complete[kind.name].value is not None:
        note = _offset_torque(section, kind, value - (complete[kind.name].value or 0.0))
    return _row(section, kind, unit, None, value, complete[kind.name], yardstick, reason, note)


def _offset_torque(section: SectionFile, kind: QuantityKind, offset: float) -> str | None:
    """What an offset of the shear centre means as a torque, for each load that it matters to."""
    along_x = kind.axis == "right"
    torques = [
        (load.name, abs(offset * load.shear[1 if along_x else 0]))
        for load in section.loads
        if load.shear[1 if along_x else 0] != 0
    ]
    if not torques:
        return None
    unit = unit_text(1, 1, section.length_unit, section.force_unit)
    return "offset times shear: " + ", ".join(f"{name} {torque:.4g} {unit}" for name, torque in torques)


def _flow_rows(section: SectionFile, found: LoadFlows) -> list[QuantityResult]:
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
    peak = _row(
        section,
        QUANTITIES["peak_flow"],
        unit,
        case.name,
        found.theory_peak,
        fe,
        yardstick,
        found.reason,
        note,
    )
    worst = found.worst
    kind = QUANTITIES["flow_at_probes"]
    if worst is None or worst.fe is None or worst.theory is None or not fe.value or found.reason is not None:
        nothing = FeValue(None, None, None, "estimate", reason=found.reason)
        return [
            peak,
            _row(
                section,
                kind,
                unit,
                case.name,
                None,
                nothing,
                yardstick,
                found.reason or "no probe on both sides",
            ),
        ]
    error = worst.fe_error or 0.0
    at_worst = FeValue(worst.fe, worst.fe - error, worst.fe + error, "estimate")
    where = f"worst at wall {found.worst_wall}, s = {worst.s:.4g} {section.length_unit}"
    difference = signed_gap(worst) / fe.value
    return [
        peak,
        _row(section, kind, unit, case.name, worst.theory, at_worst, yardstick, None, where, difference),
    ]


def _twist_row(
    section: SectionFile,
    case: LoadCase,
    flow: TheoryFlow,
    theory: Mapping[str, float | None],
    fe: Mapping[str, FeValue],
    torque: FeValue,
    extent: float,
) -> QuantityResult:
    """Row of the rate of twist phi' = T_sc/(G J) of a load, per unit G where the file names no material.

    The yardstick is FE's value, but no smaller than what 5 % of |T| + |V| D would make: a load through the
    shear centre twists nothing, and nothing divides badly.
    """
    kind = QUANTITIES["rate_of_twist"]
    modulus = models.shear_modulus(section)
    unit = (
        unit_text(-3, 1, section.length_unit, section.force_unit)
        if modulus is None
        else unit_text(-1, 0, section.length_unit, section.force_unit).replace("1/", "rad/")
    )
    g = 1.0 if modulus is None else modulus
    torsion_constant = fe["torsion_constant"]
    value = fe_rate_of_twist(torque, torsion_constant, g)
    j = theory.get("torsion_constant")
    theory_rate = None if flow.flow is None or not j else float(flow.flow.torque_about_shear_centre) / (g * j)
    if value.value is None or not torsion_constant.value:
        yardstick = verdicts.Yardstick(None, value.reason)
    else:
        reach = abs(case.torque) + (abs(case.shear[0]) + abs(case.shear[1])) * extent
        floor = verdicts.FLOOR * reach / (g * torsion_constant.value)
        yardstick = verdicts.Yardstick(max(abs(value.value), floor) or None, "the load makes no twist")
    note = "per unit shear modulus: the file names no material" if modulus is None else None
    return _row(section, kind, unit, case.name, theory_rate, value, yardstick, flow.reason, note)
