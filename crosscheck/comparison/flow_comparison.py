"""Shear flows of both sides at the same probes: per load and wall, with peaks and differences."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from crosscheck.comparison.drawn import Array
from crosscheck.comparison.levels import TheoryFlow
from crosscheck.comparison.load_case import LoadCase
from crosscheck.comparison.panels import Panel
from crosscheck.comparison.quantities import flow_unit
from crosscheck.comparison.result import FeValue, ProbeResult, TheoryPeak, WallFlow
from crosscheck.comparison.verdicts import FLOOR

if TYPE_CHECKING:
    import beam_theory
    import fe_models

# Two probes closer than this share of the wall are one.
SAME_PLACE = 1e-6
# So many loads, the unit loads among them, have probes just where their flows peak. Of further loads a probe
# within NEAR_PEAK of the wall's length is enough: a parabola over the whole wall is off its top by
# 4 NEAR_PEAK^2 there.
EXACT_PEAKS = 12
NEAR_PEAK = 0.02
# Flow below this share of V/D or T/D^2 is no flow at all.
NO_FLOW = 1e-9
NO_FLOW_REASON = "no net flow on either side"
NO_STRIP = "the wall has no strip: it is shorter than its joints"


@dataclass(frozen=True)
class Probe:
    """A place on a wall, as a fraction 0..1 of it; ``in_strip`` is False where FE reports no flow.

    ``clear``: at least a thickness inside the strip, where what a joint does to stress at the faces has died
    down.
    """

    at: float
    label: str | None
    in_strip: bool
    clear: bool = True


@dataclass(frozen=True)
class LoadFlows:
    """Both sides' flows of one load.

    ``worst`` is the probe, on wall ``worst_wall``, at which the judged level is farthest from FE. ``peaks``:
    largest flow over the same probes at every level; ``reasons``: why a level has none.
    """

    case: LoadCase
    judged: str
    walls: tuple[WallFlow, ...]
    peaks: Mapping[str, float | None]
    reasons: Mapping[str, str]
    fe_peak: FeValue
    worst: ProbeResult | None
    worst_wall: str | None
    own_peak: TheoryPeak | None
    reason: str | None


def probes_of_panels(
    flows: Iterable[TheoryFlow],
    panels: Mapping[str, Panel],
    strips: Mapping[str, tuple[float, float] | None],
    named: Mapping[str, Sequence[tuple[float, str | None]]],
) -> dict[str, tuple[Probe, ...]]:
    """Probes of every panel: ends and quarter points of its strip, where theory's flows peak, and the user's.

    Where the strip is long enough, places a thickness inside its ends too: the first ones clear of the
    joints. A wall that only theory sees has the user's probes, and its ends and middle.

    Parameters
    ----------
    flows : iterable of TheoryFlow
        Flows whose stationary places become probes.
    panels : mapping of name to Panel
        Where.
    strips : mapping of name to (from, to) or None
        Part of each panel clear of its joints [-]; None where it has none.
    named : mapping of name to sequence of (at, label)
        The user's probes [-].

    Returns
    -------
    dict of name to tuple of Probe
        In order along the panel.
    """
    solved = [entry.flow for entry in flows if entry.flow is not None]
    probes: dict[str, tuple[Probe, ...]] = {}
    for name, panel in panels.items():
        strip, thin = strips[name], panel.slenderness
        found = [_probe(at, label, strip, thin) for at, label in named.get(name, ())]
        low, high = (0.0, 1.0) if strip is None else strip
        places = [*(low + (high - low) * np.array((0.0, 0.25, 0.5, 0.75, 1.0)))]
        if strip is None:
            places = [0.0, 0.5, 1.0] if panel.fe is None else []
        else:
            if high - low > 2.0 * thin:
                places += [low + thin, high - thin]
            for number, flow in enumerate(solved if panel.theory is not None else ()):
                spacing = SAME_PLACE if number < EXACT_PEAKS else NEAR_PEAK
                assert panel.theory is not None
                tops = [panel.theory.on_panel(float(at)) for at in flow.stationary(panel.theory.wall.name)]
                stationary = [at for at in tops if low < at < high]
                places += [at for at in stationary if all(abs(at - other) > spacing for other in places)]
        for at in places:
            if all(abs(at - probe.at) > SAME_PLACE for probe in found):
                found.append(_probe(float(min(max(at, low), high)), None, strip, thin))
        probes[name] = tuple(sorted(found, key=lambda probe: probe.at))
    return probes


def flow_on(panel: Panel, flow: beam_theory.Flow, at: Array) -> Array:
    """Theory's flow (n,) along a panel at fractions of it (n,) [F/L]."""
    assert panel.theory is not None
    return np.asarray(panel.theory.sign * flow.at(panel.theory.wall.name, panel.theory.on_wall(at)))


def _probe(at: float, label: str | None, strip: tuple[float, float] | None, slenderness: float) -> Probe:
    """A probe and where it lies in the strip of its wall."""
    if strip is None:
        return Probe(at, label, False, False)
    low, high = strip
    margin = min(slenderness, 0.5 * (high - low))
    return Probe(at, label, low <= at <= high, low + margin - SAME_PLACE <= at <= high - margin + SAME_PLACE)


def load_flows(
    case: LoadCase,
    theory: Mapping[str, TheoryFlow],
    judged: str,
    unit_flows: Mapping[str, Array],
    strips: Mapping[str, tuple[float, float] | None],
    torque: FeValue,
    panels: Mapping[str, Panel],
    probes: Mapping[str, Sequence[Probe]],
    extent: float,
    units: tuple[str, str],
) -> LoadFlows:
    """Flows of one load on both sides, panel by panel.

    FE's flow is Vx q_Vx + Vy q_Vy + T_sc q_T with the torque about FE's own shear centre; theory's solution
    does the same with its own.

    Parameters
    ----------
    case : LoadCase
        The load.
    theory : mapping of level to TheoryFlow
        Theory's flow of it.
    judged : str
        The level that verdicts judge.
    unit_flows : mapping of panel to (2, 3, n)
        FE's, from ``fe_unit_flows``.
    strips : mapping of panel to (from, to) or None
        Part of each clear of its joints [-].
    torque : FeValue
        Torque about FE's shear centre [F L].
    panels : mapping of name to Panel
        Geometry and the walls of both sides.
    probes : mapping of panel to sequence of Probe
        Where to report.
    extent : float
        Larger overall dimension D [L].
    units : (str, str)
        Length and force.

    Returns
    -------
    LoadFlows
    """
    scale = (abs(case.shear[0]) + abs(case.shear[1])) / extent + abs(torque.value or 0.0) / extent**2
    raw: dict[str, tuple[ProbeResult, ...]] = {}
    for wall, panel in panels.items():
        midline, places = panel.line, probes.get(wall, ())
        at = np.array([probe.at for probe in places])
        q_theory = {
            level: flow_on(panel, found.flow, at)
            for level, found in theory.items()
            if found.flow is not None and at.size and panel.theory is not None
        }
        q_fe, errors = _fe_flow(case, unit_flows[wall], torque)
        xy = midline.places(at)
        raw[wall] = tuple(
            ProbeResult(
                s=float(at[i] * midline.length),
                x=float(xy[i, 0]),
                y=float(xy[i, 1]),
                theory=float(q_theory[judged][i]) if judged in q_theory else None,
                fe=None if np.isnan(q_fe[i]) else float(q_fe[i]),
                fe_error=None if np.isnan(q_fe[i]) else float(errors[i]),
                label=probe.label,
                levels={level: float(q_theory[level][i]) if level in q_theory else None for level in theory},
            )
            for i, probe in enumerate(places)
        )
    shared = [
        (wall, probe)
        for wall, row in raw.items()
        if panels[wall].seen_by == "both"
        for probe in row
        if probe.fe is not None
    ]
    fe_peak = _peak_interval([probe for _, probe in shared])
    compared = [(wall, probe) for wall, probe in shared if probe.theory is not None]
    peaks = {level: _level_peak(level, [probe for _, probe in shared]) for level in theory}
    own = peaks[judged]
    reason = theory[judged].reason or fe_peak.reason
    if reason is None and own is not None and _is_no_flow(own, fe_peak, scale):
        reason = NO_FLOW_REASON
    # four digits: of places that symmetry makes alike the first is named, not the one that round-off favours
    worst_wall, worst = max(compared, key=lambda pair: float(f"{_gap(pair[1]):.4g}"), default=(None, None))
    unit = flow_unit(case.name if case.unit else "", *units)
    walls = tuple(
        _wall_flow(case, wall, unit, row, fe_peak, reason or panels[wall].reason) for wall, row in raw.items()
    )
    flow = theory[judged].flow
    own_peak = None if flow is None else _own_peak(case, flow, panels, strips)
    reasons = {level: found.reason for level, found in theory.items() if found.reason is not None}
    return LoadFlows(case, judged, walls, peaks, reasons, fe_peak, worst, worst_wall, own_peak, reason)


def _level_peak(level: str, probes: Sequence[ProbeResult]) -> float | None:
    """Largest flow of one level over probes, in magnitude."""
    values = (probe.levels.get(level) for probe in probes)
    return max((abs(value) for value in values if value is not None), default=None)


def fe_unit_flows(fe: fe_models.Solution, panel: Panel, probes: Sequence[Probe]) -> Array:
    """FE's flows and errors of unit Vx, Vy and T at the probes of a panel, (2, 3, n); NaN outside its
    strip."""
    found = np.full((2, 3, len(probes)), np.nan)
    inside = np.array([probe.in_strip for probe in probes], dtype=bool)
    if inside.any() and panel.fe is not None:
        at = panel.fe.on_wall(np.array([probe.at for probe in probes if probe.in_strip]))
        samples = fe.flow_at(panel.fe.wall.name, at)
        found[0][:, inside], found[1][:, inside] = samples.values, samples.errors
    return found


def _fe_flow(case: LoadCase, unit: Array, torque: FeValue) -> tuple[Array, Array]:
    """FE's flow (n,) and its error (n,) at the probes of a wall; NaN outside its strip."""
    if torque.value is None:
        return np.full(unit.shape[2], np.nan), np.full(unit.shape[2], np.nan)
    combined = np.array((*case.shear, torque.value))
    used = combined != 0
    nothing = np.where(np.isnan(unit[0, 0]), np.nan, 0.0)
    flow = nothing + combined[used] @ unit[0][used]
    error = nothing + np.abs(combined[used]) @ unit[1][used]
    half = torque.half_width
    if half:
        error = error + half * np.abs(unit[0][2])
    return flow, error


def _peak_interval(probes: Sequence[ProbeResult]) -> FeValue:
    """FE's largest magnitude over probes, with its interval."""
    values = [(abs(probe.fe), probe.fe_error or 0.0) for probe in probes if probe.fe is not None]
    if not values:
        return FeValue(None, None, None, "estimate", reason="FE reports no flow: no wall has a strip")
    return FeValue(
        max(q for q, _ in values),
        max(max(q - e, 0.0) for q, e in values),
        max(q + e for q, e in values),
        "estimate",
    )


def _is_no_flow(theory_peak: float, fe_peak: FeValue, scale: float) -> bool:
    """Whether theory says exactly nothing and FE cannot tell its flow from nothing."""
    fe_low = fe_peak.low or 0.0
    return theory_peak <= NO_FLOW * scale and fe_low <= NO_FLOW * scale


def _gap(probe: ProbeResult) -> float:
    """Distance between both sides at a probe."""
    assert probe.theory is not None
    assert probe.fe is not None
    return abs(probe.theory - probe.fe)


def _wall_flow(
    case: LoadCase,
    wall: str,
    unit: str,
    row: tuple[ProbeResult, ...],
    fe_peak: FeValue,
    reason: str | None,
) -> WallFlow:
    """One wall's flows with the difference over its own FE peak, floored at 5 % of the section's."""
    compared = [probe for probe in row if probe.theory is not None and probe.fe is not None]
    if reason is None and not compared:
        reason = NO_STRIP
    if reason is not None or fe_peak.value is None:
        return WallFlow(case.name, wall, unit, row, None, None, reason)
    own = max(abs(probe.fe or 0.0) for probe in compared)
    normaliser = max(own, FLOOR * fe_peak.value)
    worst = max(compared, key=_gap)
    gap = signed_gap(worst.theory or 0.0, worst.fe or 0.0)
    return WallFlow(case.name, wall, unit, row, gap / normaliser, normaliser)


def signed_gap(theory: float, fe: float) -> float:
    """Theory minus FE, counted along FE's flow: positive where theory's flow is the larger."""
    return (theory - fe) * (-1.0 if fe < 0 else 1.0)


def _own_peak(
    case: LoadCase,
    flow: beam_theory.Flow,
    panels: Mapping[str, Panel],
    strips: Mapping[str, tuple[float, float] | None],
) -> TheoryPeak | None:
    """Theory's own largest flow, wherever it is, and whether FE has a counterpart there."""
    best: TheoryPeak | None = None
    for wall, panel in panels.items():
        if panel.theory is None:
            continue
        found = flow.peak(panel.theory.wall.name)
        at = panel.theory.on_panel(float(found.at))
        if not -SAME_PLACE <= at <= 1.0 + SAME_PLACE:
            continue  # on another panel of the same wall
        # A hair larger does not count: of equal peaks the first wall's is listed, run after run.
        if best is None or abs(found.flow) > abs(best.value) * (1 + 1e-9):
            strip = strips.get(wall)
            x, y = panel.line.places(np.array([at]))[0]
            has_fe = strip is not None and strip[0] <= at <= strip[1]
            best = TheoryPeak(
                case.name,
                wall,
                float(at * panel.line.length),
                float(x),
                float(y),
                float(panel.theory.sign * found.flow),
                has_fe,
            )
    return best
