"""Every load on both sides: flows, stresses, their rows, and the envelope over the file's loads."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.flow_comparison import (
    SAME_PLACE,
    LoadFlows,
    fe_unit_flows,
    load_flows,
    probes_of_panels,
)
from crosscheck.comparison.levels import Levels, TheoryFlow, TheoryStress
from crosscheck.comparison.load_case import UNIT_CASES, LoadCase, fe_torque
from crosscheck.comparison.load_envelope import envelopes, shear_envelopes
from crosscheck.comparison.load_results import (
    BoomFibre,
    FilletPeak,
    Margin,
    NamedProbe,
    ProbeEnvelope,
    WallByLoad,
    WallEnvelope,
    WallStress,
)
from crosscheck.comparison.load_rows import flow_rows, stress_rows, torsion_modulus_row, twist_row
from crosscheck.comparison.margins import margins
from crosscheck.comparison.named_probes import named_probes
from crosscheck.comparison.panels import Panel, panels_of
from crosscheck.comparison.quantities import flow_unit, stress_unit
from crosscheck.comparison.result import FeValue, QuantityResult, TheoryPeak, WallFlow
from crosscheck.comparison.stress_comparison import (
    LoadStress,
    faces_on,
    load_stress,
    measure,
    unit_faces,
    wall_stresses,
)
from crosscheck.comparison.walls_by_loads import walls_by_loads

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
    walls_by_loads: tuple[WallByLoad, ...]
    margins: tuple[Margin, ...]
    named_probes: tuple[NamedProbe, ...]
    wall_envelopes: tuple[WallEnvelope, ...]
    probe_envelopes: tuple[ProbeEnvelope, ...]


def compare_loads(
    section: SectionFile,
    levels: Levels,
    fe: fe_models.Solution,
    values: Mapping[str, FeValue],
    real: Levels | None = None,
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
    real : Levels, optional
        Theory of the walls that FE sees, where those are others than theory's.
    """
    cases = load_cases(section, levels)
    theory = [levels.flows(case) for case in cases]
    panels = panels_of(section)
    strips = {name: panel.strip(fe.strips) for name, panel in panels.items()}
    probes = probes_of_panels([flow["midline"] for flow in theory], panels, strips, _named(section, panels))
    bimoment = any(case.bimoment for case in cases)
    unit_flows = {name: fe_unit_flows(fe, panel, probes[name]) for name, panel in panels.items()}
    faces = {
        name: unit_faces(section, fe, panel, probes[name], bimoment=bimoment)
        for name, panel in panels.items()
    }
    midline = levels.solutions.get("midline")
    open_walls = {
        name
        for name, panel in panels.items()
        if midline is not None and panel.theory is not None and not midline.in_cell(panel.theory.wall.name)
    }
    extent, judged = float(fe.outline.extent), levels.judged
    units = (section.length_unit, section.force_unit)

    rows: list[QuantityResult] = []
    flows: list[LoadFlows] = []
    stresses: dict[str, LoadStress] = {}
    judged_stress: dict[str, TheoryStress] = {}
    peaks: list[TheoryPeak] = []
    for case, flow in zip(cases, theory, strict=True):
        torque = fe_torque(case, values)
        if case.has_shear and panels:
            found = load_flows(case, flow, judged, unit_flows, strips, torque, panels, probes, extent, units)
            flows.append(found)
            rows += flow_rows(section, found)
            peaks += [] if found.own_peak is None else [found.own_peak]
        if case.has_shear and not case.unit:
            rows.append(twist_row(section, case, flow, levels, values, torque, extent))
        by_level = levels.stresses(case)
        stress = load_stress(case, by_level, judged, faces, torque, panels, probes)
        stresses[case.name], judged_stress[case.name] = stress, by_level[judged]
        if not case.unit:
            peaks += _stress_peaks(case, by_level[judged], stress, panels, strips)
    fibres = tuple(_boom_fibres(section, judged_stress, values, [c for c in cases if not c.unit]))
    for case in cases if panels else ():
        torque = fe_torque(case, values)
        rows += stress_rows(
            section, stresses[case.name], levels, open_walls, stresses["unit T"], torque, extent, fibres
        )
    own = [stresses[case.name] for case in cases if not case.unit]
    walls, places = envelopes(
        [found for found in flows if not found.case.unit],
        own,
        judged,
        (flow_unit("", *units), stress_unit("", *units)),
    )
    shear = shear_envelopes(own, judged, stress_unit("", *units)) if section.allowables else ()
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
        boom_fibres=fibres,
        fillet_peaks=tuple(_fillet_peaks(section, fe, values, cases)),
        walls_by_loads=walls_by_loads(section, flows, panels, real),
        margins=margins(section.allowables, (*walls, *shear), panels),
        named_probes=named_probes(section, flows),
        wall_envelopes=walls,
        probe_envelopes=places,
    )


def load_cases(section: SectionFile, levels: Levels) -> tuple[LoadCase, ...]:
    """The unit loads, and the file's loads with their lines of action in coordinates."""
    x, y = (levels.values(f"shear_centre_{axis}")["midline"] for axis in "xy")
    centre = None if x is None or y is None else (x, y)
    return (*UNIT_CASES, *(models.load_case(load, centre) for load in section.loads))


def _named(section: SectionFile, panels: Mapping[str, Panel]) -> dict[str, list[tuple[float, str | None]]]:
    """The user's probes by panel, as fractions of it [-]: where both sides see the wall, else where one does.

    A probe on a wall that is split otherwise on the other side lands on the panel that covers its place.
    """
    named: dict[str, list[tuple[float, str | None]]] = {}
    for probe in section.probes:
        best: tuple[bool, str, float] | None = None
        for name, panel in panels.items():
            for stretch in (panel.fe, panel.theory):
                if stretch is None or stretch.wall.name != probe.wall:
                    continue
                at = stretch.on_panel(probe.at)
                if -SAME_PLACE <= at <= 1.0 + SAME_PLACE:
                    found = (panel.seen_by == "both", name, min(max(at, 0.0), 1.0))
                    best = found if best is None or (found[0] and not best[0]) else best
                    break
        assert best is not None, probe
        named.setdefault(best[1], []).append((best[2], probe.label))
    return named


def _stress_peaks(
    case: LoadCase,
    theory: TheoryStress,
    found: LoadStress,
    panels: Mapping[str, Panel],
    strips: Mapping[str, tuple[float, float] | None],
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
            if panels[wall.wall].theory is not None:
                at = np.array([0.0, *(probe.at for probe in wall.probes), 1.0])
                field = faces_on(panels[wall.wall], theory.stress, at)
                sizes[wall.wall] = float(np.abs(measure(kind, field)).max())
        most = max(sizes.values(), default=0.0)
        name = next((wall for wall, size in sizes.items() if size >= most * (1 - 1e-9)), None)
        if name is None or most == 0.0:
            continue
        panel, strip = panels[name], strips[name]
        assert panel.theory is not None
        peak = theory.stress.largest(kind, panel.theory.wall.name)
        at_peak = panel.theory.on_panel(float(peak.at))
        line = panel.line
        x, y = line.places(np.array([at_peak]))[0]
        inside = strip is not None and strip[0] <= at_peak <= strip[1]
        s = float(at_peak * line.length)
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
    booms = [boom for boom in section.booms if boom.seen_by != "fe"]
    for case in cases:
        if not case.has_direct:
            continue
        found = stresses[case.name]
        theory = [] if found.stress is None else found.stress.booms()
        for number, boom in enumerate(booms):
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
    """FE's largest shear stress on filleted and curved boundaries of joints and given outlines."""
    if not section.corners and section.outline is None:
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
