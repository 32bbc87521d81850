"""Walls by loads: how far theory's flow is from FE's in every wall under every load, and why.

Each difference is at the probe where the two are farthest apart, over the wall's own FE peak, at least 5 % of
the section's. It is split into steps like the causes of a quantity: from the judged level to the midline
theory of the walls that FE sees, to its corrected level, to FE.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from crosscheck.comparison import verdicts
from crosscheck.comparison.drawn import Array
from crosscheck.comparison.flow_comparison import LoadFlows, signed_gap
from crosscheck.comparison.levels import Levels
from crosscheck.comparison.load_case import LoadCase
from crosscheck.comparison.load_results import FlowStep, WallByLoad
from crosscheck.comparison.panels import Panel
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import ProbeResult, WallFlow
from crosscheck.comparison.rows import criterion
from crosscheck.section_file.model import SectionFile

BOOMS = "boom idealisation"
IDEAL = "idealised walls"
LUMPED = "booms made from the walls"
THICKNESS = "thickness and corners, by theory"
SOLID = "real corners, by FE"
BEYOND_MIDLINE = "thickness and corners, by FE"


def walls_by_loads(
    section: SectionFile, flows: Sequence[LoadFlows], panels: Mapping[str, Panel], real: Levels | None
) -> tuple[WallByLoad, ...]:
    """Every wall under every load, worst first; under the unit loads where the file has no other.

    Parameters
    ----------
    section : SectionFile
        For the criterion of flows and the judged level.
    flows : sequence of LoadFlows
        Of all loads, unit loads first.
    panels : mapping of name to Panel
        Where.
    real : Levels or None
        Theory of the walls that FE sees, where those are others than theory's.
    """
    chosen = [found for found in flows if not found.case.unit] or list(flows)
    rows = [
        _row(section, found.case, wall, panels[wall.wall], real) for found in chosen for wall in found.walls
    ]
    return tuple(sorted(rows, key=lambda row: -1.0 if row.difference is None else -abs(row.difference) - 1.0))


def _row(
    section: SectionFile, case: LoadCase, wall: WallFlow, panel: Panel, real: Levels | None
) -> WallByLoad:
    """One wall under one load."""
    limit, _ = criterion(section, QUANTITIES["flow_at_probes"])
    compared = [probe for probe in wall.probes if probe.theory is not None and probe.fe is not None]
    if wall.difference is None or not wall.normaliser or not compared:
        return WallByLoad(case.name, wall.wall, wall.unit, limit, reason=wall.reason)
    worst = max(compared, key=lambda probe: abs((probe.theory or 0.0) - (probe.fe or 0.0)))
    doubt = (worst.fe_error or 0.0) / wall.normaliser
    hand_mean, fe_mean = _means(compared)
    mean_difference = None
    if hand_mean is not None and fe_mean is not None:
        mean_difference = signed_gap(hand_mean, fe_mean) / wall.normaliser
    return WallByLoad(
        load=case.name,
        wall=wall.wall,
        unit=wall.unit,
        criterion=limit,
        difference=wall.difference,
        uncertainty=doubt,
        normaliser=wall.normaliser,
        verdict=verdicts.verdict(wall.difference, doubt, limit),
        s=worst.s,
        theory=worst.theory,
        fe=worst.fe,
        theory_mean=hand_mean,
        fe_mean=fe_mean,
        mean_difference=mean_difference,
        steps=_steps(section, case, panel, worst, wall.normaliser, real),
    )


def _means(probes: Sequence[ProbeResult]) -> tuple[float | None, float | None]:
    """Mean flow of both sides between the outermost probes; None with fewer than two."""
    if len(probes) < 2:
        return None, None
    s = np.array([probe.s for probe in probes])

    def mean(values: Array) -> float:
        return float(np.trapezoid(values, s) / (s[-1] - s[0]))

    return (
        mean(np.array([probe.theory or 0.0 for probe in probes])),
        mean(np.array([probe.fe or 0.0 for probe in probes])),
    )


def _steps(
    section: SectionFile,
    case: LoadCase,
    panel: Panel,
    probe: ProbeResult,
    normaliser: float,
    real: Levels | None,
) -> tuple[FlowStep, ...]:
    """Steps of the difference at one probe, over the wall's own peak, in a fixed order."""
    assert probe.fe is not None
    stations: list[tuple[str, float | None]] = []
    known = probe.levels
    if real is not None:
        own = _real_flows(case, panel, probe, real)
        model = BOOMS if any(boom.seen_by == "theory" for boom in section.booms) else IDEAL
        stations = [(model, own.get("midline")), (THICKNESS, own.get("corrected"))]
    elif section.judged == "lumped":
        stations = [(LUMPED, known.get("midline")), (THICKNESS, known.get("corrected"))]
    elif section.judged == "midline":
        stations = [(THICKNESS, known.get("corrected"))]
    value, made = known.get(section.judged), []
    for step, reached in stations:
        if value is not None and reached is not None:
            made.append(FlowStep(step, _change(value, reached, probe.fe) / normaliser))
            value = reached
    last = SOLID if made and made[-1].step == THICKNESS else BEYOND_MIDLINE
    if value is not None:
        made.append(FlowStep(last, _change(value, probe.fe, probe.fe) / normaliser))
    return tuple(made)


def _real_flows(case: LoadCase, panel: Panel, probe: ProbeResult, real: Levels) -> dict[str, float]:
    """Flow by theory of the walls that FE sees, at a probe, at every level that has one."""
    assert panel.fe is not None
    at = panel.fe.on_wall(np.array([probe.s / panel.line.length]))
    return {
        level: float(found.flow.at(panel.fe.wall.name, at)[0])
        for level, found in real.flows(case).items()
        if found.flow is not None
    }


def _change(before: float, after: float, fe: float) -> float:
    """How much of a flow goes as one assumption changes, counted along FE's flow."""
    return signed_gap(before, fe) - signed_gap(after, fe)
