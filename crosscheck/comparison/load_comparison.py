"""Every load on both sides: flows, stresses, their rows, and the envelope over the file's loads."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.flow_comparison import LoadFlows, Probe, fe_unit_flows, load_flows, probes_of_walls
from crosscheck.comparison.levels import Levels, TheoryFlow, TheoryStress
from crosscheck.comparison.load_case import UNIT_CASES, LoadCase, fe_torque
from crosscheck.comparison.load_envelope import envelopes
from crosscheck.comparison.load_results import BoomFibre, FilletPeak, ProbeEnvelope, WallEnvelope, WallStress
from crosscheck.comparison.load_rows import flow_rows, stress_rows, torsion_modulus_row, twist_row
from crosscheck.comparison.midline import Midline
from crosscheck.comparison.quantities import flow_unit, stress_unit
from crosscheck.comparison.result import FeValue, QuantityResult, TheoryPeak, WallFlow
from crosscheck.comparison.stress_comparison import (
    LoadStress,
    load_stress,
    measure,
    unit_faces,
    wall_stresses,
)

if TYPE_CHECKING:
    from crosscheck.section_file.model import SectionFile


@dataclass(frozen=True)
class LoadComparison:
    """What the loads of a file gave, unit loads first; fields as in the result."""

    cases: tuple[LoadCase, ...]
    judged_flows: tuple[TheoryFlow, ...]
    rows: tuple[QuantityResult, ...]
    torsion_modulus: QuantityResult
    flows: tuple[WallFlow, ...]
    theory_peaks: tuple[TheoryPeak, ...]
    stresses: tuple[WallStress, ...]
    boom_fibres: tuple[BoomFibre, ...]
    fillet_peaks: tuple[FilletPeak, ...]
    wall_envelopes: tuple[WallEnvelope, ...]
    probe_envelopes: tuple[ProbeEnvelope, ...]


def compare_loads(
    section: SectionFile, levels: Levels, fe: fe_models.Solution, values: Mapping[str, FeValue]
) -> LoadComparison:
    """Compare unit loads and loads of a file.

    Parameters
    ----------
    section : SectionFile
        Loads, probes, units.
    levels : Levels
        Theory.
    fe : fe_models.Solution
        FE.
    values : mapping of name to FeValue
        FE's quantities.
    """
    cases = load_cases(section, levels)
    theory = [levels.flows(case) for case in cases]
    lines = models.midlines(section)
    midline_flows = [flow["midline"] for flow in theory]
    probes = _probes(section, midline_flows, fe, lines)
    bimoment = any(case.bimoment for case in cases)
    unit_flows = {wall: fe_unit_flows(fe, wall, probes[wall]) for wall in lines}
    faces = {wall: unit_faces(section, fe, wall, probes[wall], bimoment=bimoment) for wall in lines}
    midline = levels.solutions["midline"]
    open_walls = {wall for wall in lines if not midline.in_cell(wall)}
    extent, judged = float(fe.outline.extent), levels.judged
    units = (section.length_unit, section.force_unit)

    rows: list[QuantityResult] = []
    flows: list[LoadFlows] = []
    stresses: dict[str, LoadStress] = {}
    judged_stress: dict[str, TheoryStress] = {}
    peaks: list[TheoryPeak] = []
    for case, flow in zip(cases, theory, strict=True):
        torque = fe_torque(case, values)
        if case.has_shear:
            found = load_flows(
                case, flow, judged, unit_flows, fe.strips, torque, lines, probes, extent, units
            )
            flows.append(found)
            rows += flow_rows(section, found)
            peaks += [] if found.own_peak is None else [found.own_peak]
        if case.has_shear and not case.unit:
            rows.append(twist_row(section, case, flow, levels, values, torque, extent))
        by_level = levels.stresses(case)
        stress = load_stress(case, by_level, judged, faces, torque, lines, probes)
        stresses[case.name], judged_stress[case.name] = stress, by_level[judged]
        if not case.unit:
            peaks += _stress_peaks(case, by_level[judged], stress, lines, fe)
    for case in cases:
        torque = fe_torque(case, values)
        rows += stress_rows(
            section, stresses[case.name], levels, open_walls, stresses["unit T"], torque, extent
        )
    own = [stresses[case.name] for case in cases if not case.unit]
    walls, places = envelopes(
        [found for found in flows if not found.case.unit],
        own,
        judged,
        (flow_unit("", *units), stress_unit("", *units)),
    )
    return LoadComparison(
        cases=cases,
        judged_flows=tuple(flow[judged] for flow in theory),
        rows=tuple(sorted(rows, key=lambda row: [case.name for case in cases].index(row.load or ""))),
        torsion_modulus=torsion_modulus_row(section, stresses["unit T"], levels),
        flows=tuple(wall for found in flows for wall in found.walls),
        theory_peaks=tuple(peaks),
        stresses=tuple(
            wall for found in own for wall in wall_stresses(found, judged, stress_unit("", *units))
        ),
        boom_fibres=tuple(_boom_fibres(section, judged_stress, values, [c for c in cases if not c.unit])),
        fillet_peaks=tuple(_fillet_peaks(section, fe, values, cases)),
        wall_envelopes=walls,
        probe_envelopes=places,
    )


def load_cases(section: SectionFile, levels: Levels) -> tuple[LoadCase, ...]:
    """The unit loads, and the file's loads with their lines of action in coordinates."""
    midline = levels.solutions["midline"].quantities
    x, y = midline["shear_centre_x"].value, midline["shear_centre_y"].value
    centre = None if x is None or y is None else (x, y)
    return (*UNIT_CASES, *(models.load_case(load, centre) for load in section.loads))


def _probes(
    section: SectionFile,
    midline_flows: Sequence[TheoryFlow],
    fe: fe_models.Solution,
    lines: Mapping[str, Midline],
) -> dict[str, tuple[Probe, ...]]:
    """Probes of every wall: the user's, those of the strips, and where midline flows peak."""
    named: dict[str, list[tuple[float, str | None]]] = {}
    for probe in section.probes:
        named.setdefault(probe.wall, []).append((probe.at, probe.label))
    slenderness = {name: max(section.wall(name).thickness) / line.length for name, line in lines.items()}
    strips = {wall: fe.strips.get(wall) for wall in lines}
    return probes_of_walls(midline_flows, strips, named, slenderness)


def _stress_peaks(
    case: LoadCase,
    theory: TheoryStress,
    found: LoadStress,
    lines: Mapping[str, Midline],
    fe: fe_models.Solution,
) -> list[TheoryPeak]:
    """Theory's own largest direct and von Mises stress of a load, in joints too.

    The wall is found at the ends of the walls and at the probes, the place in it by search.
    """
    if theory.stress is None:
        return []
    made = []
    for kind in ("direct", "von_mises") if case.has_direct else ("von_mises",):
        sizes = {}
        for wall in found.walls:
            at = np.array([0.0, *(probe.at for probe in wall.probes), 1.0])
            field = np.stack([theory.stress.direct(wall.wall, at).T, theory.stress.shear(wall.wall, at).T])
            sizes[wall.wall] = float(np.abs(measure(kind, field)).max())
        most = max(sizes.values(), default=0.0)
        name = next((wall for wall, size in sizes.items() if size >= most * (1 - 1e-9)), None)
        if name is None or most == 0.0:
            continue
        peak = theory.stress.largest(kind, name)
        strip, line = fe.strips.get(name), lines[name]
        x, y = line.places(np.array([peak.at]))[0]
        inside = strip is not None and strip[0] <= peak.at <= strip[1]
        s = float(peak.at * line.length)
        made.append(TheoryPeak(case.name, name, s, float(x), float(y), float(peak.stress), inside, kind))
    return made


def _boom_fibres(
    section: SectionFile,
    stresses: Mapping[str, TheoryStress],
    fe: Mapping[str, FeValue],
    cases: Sequence[LoadCase],
) -> list[BoomFibre]:
    """Direct stress of the file's booms: theory's beside N/A + a x + b y of FE's own constants."""
    unit = stress_unit("", section.length_unit, section.force_unit)
    names = ("area", "centroid_x", "centroid_y", "second_moment_xx", "second_moment_yy", "product_moment_xy")
    area, x_c, y_c, xx, yy, xy = (fe[name].value or 0.0 for name in names)
    made = []
    for case in cases:
        if not case.has_direct:
            continue
        found = stresses[case.name]
        theory = [] if found.stress is None else found.stress.booms()
        for number, boom in enumerate(section.booms):
            place = boom.point if boom.point is not None else f"{boom.wall} at {boom.at:g}"
            own = theory[number].stress if number < len(theory) else None
            x, y = models.boom_place(section, boom)
            mx, my = case.moment
            a, b = np.linalg.solve([[yy, xy], [xy, xx]], [my, mx])
            e = models.modulus_ratios(section, boom.material)[0]
            value: float | None = float(e * (case.axial / area + a * (x - x_c) + b * (y - y_c)))
            reason = found.reason
            if case.bimoment:
                value, reason = None, "FE gives no warping at a boom's place: the bimoment's part is missing"
            made.append(BoomFibre(case.name, number, str(place), unit, own, value, reason))
    return made


def _fillet_peaks(
    section: SectionFile, fe: fe_models.Solution, values: Mapping[str, FeValue], cases: Sequence[LoadCase]
) -> list[FilletPeak]:
    """FE's largest shear stress on filleted and curved boundaries of joints; none without roundings."""
    if not section.corners:
        return []
    made = []
    for case in cases:
        torque = fe_torque(case, values).value
        if torque is None or not case.has_shear:
            continue
        unit = stress_unit(case.name if case.unit else "", section.length_unit, section.force_unit)
        for peak in fe.boundary_peaks(fe_models.Actions(shear=case.shear, torque=torque)):
            x, y = (float(v) for v in peak.place)
            made.append(FilletPeak(case.name, peak.where, x, y, peak.value, peak.error, unit))
    return made
