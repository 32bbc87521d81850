"""Shear flows of both sides at the same probes: per load and wall, with peaks and differences."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from crosscheck.load_case import LoadCase
from crosscheck.midline import Midline
from crosscheck.quantities import flow_unit
from crosscheck.result import Array, FeValue, ProbeResult, TheoryPeak, WallFlow
from crosscheck.verdicts import FLOOR

if TYPE_CHECKING:
    import beam_theory
    import fe_models

# Two probes closer than this share of the wall are one.
SAME_PLACE = 1e-6
# Flow below this share of V/D or T/D^2 is no flow at all.
NO_FLOW = 1e-9
NO_FLOW_REASON = "no net flow on either side"


@dataclass(frozen=True)
class Probe:
    """A place on a wall, as a fraction 0..1 of it; ``in_strip`` is False where FE reports no flow."""

    at: float
    label: str | None
    in_strip: bool


@dataclass(frozen=True)
class TheoryFlow:
    """Theory's flow of one load, or the reason why there is none."""

    flow: beam_theory.Flow | None
    reason: str | None


@dataclass(frozen=True)
class LoadFlows:
    """Both sides' flows of one load.

    ``difference`` is that of the worst probe over FE's peak; it is ``worst``'s, on wall ``worst_wall``.
    """

    case: LoadCase
    walls: tuple[WallFlow, ...]
    theory_peak: float | None
    fe_peak: FeValue
    worst: ProbeResult | None
    worst_wall: str | None
    own_peak: TheoryPeak | None
    reason: str | None


def probes_of_walls(
    flows: Iterable[TheoryFlow],
    strips: Mapping[str, tuple[float, float] | None],
    named: Mapping[str, Sequence[tuple[float, str | None]]],
) -> dict[str, tuple[Probe, ...]]:
    """Probes of every wall: ends and quarter points of its strip, where theory's flows peak, and the user's.

    Parameters
    ----------
    flows : iterable of TheoryFlow
        Flows whose stationary places become probes.
    strips : mapping of wall to (from, to) or None
        Part of each wall clear of its joints [-]; None where a wall has none.
    named : mapping of wall to sequence of (at, label)
        The user's probes [-].

    Returns
    -------
    dict of wall to tuple of Probe
        In order along the wall.
    """
    solved = [entry.flow for entry in flows if entry.flow is not None]
    probes: dict[str, tuple[Probe, ...]] = {}
    for wall, strip in strips.items():
        found = [
            Probe(at, label, strip is not None and strip[0] <= at <= strip[1])
            for at, label in named.get(wall, ())
        ]
        if strip is not None:
            low, high = strip
            places = [*(low + (high - low) * np.array((0.0, 0.25, 0.5, 0.75, 1.0)))]
            for flow in solved:
                places += [at for at in np.asarray(flow.stationary(wall), dtype=float) if low < at < high]
            for at in places:
                if all(abs(at - probe.at) > SAME_PLACE for probe in found):
                    found.append(Probe(float(min(max(at, low), high)), None, True))
        probes[wall] = tuple(sorted(found, key=lambda probe: probe.at))
    return probes


def load_flows(
    case: LoadCase,
    theory: TheoryFlow,
    fe: fe_models.Solution,
    torque: FeValue,
    midlines: Mapping[str, Midline],
    probes: Mapping[str, Sequence[Probe]],
    extent: float,
    units: tuple[str, str],
) -> LoadFlows:
    """Flows of one load on both sides, wall by wall.

    FE's flow is Vx q_Vx + Vy q_Vy + T_sc q_T with the torque about FE's own shear centre; theory's solution
    does the same with its own.

    Parameters
    ----------
    case : LoadCase
        The load.
    theory : TheoryFlow
        Theory's flow of it.
    fe : fe_models.Solution
        Source of FE's unit flows.
    torque : FeValue
        Torque about FE's shear centre [F L].
    midlines : mapping of wall to Midline
        Geometry [L].
    probes : mapping of wall to sequence of Probe
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
    for wall, midline in midlines.items():
        places = probes.get(wall, ())
        at = np.array([probe.at for probe in places])
        q_theory = theory.flow.at(wall, at) if theory.flow is not None and at.size else None
        q_fe, errors = _fe_flow(case, fe, torque, wall, places)
        xy = midline.places(at)
        raw[wall] = tuple(
            ProbeResult(
                s=float(at[i] * midline.length),
                x=float(xy[i, 0]),
                y=float(xy[i, 1]),
                theory=None if q_theory is None else float(q_theory[i]),
                fe=None if np.isnan(q_fe[i]) else float(q_fe[i]),
                fe_error=None if np.isnan(q_fe[i]) else float(errors[i]),
                label=probe.label,
            )
            for i, probe in enumerate(places)
        )
    shared = [(wall, probe) for wall, row in raw.items() for probe in row if probe.fe is not None]
    fe_peak = _peak_interval([probe for _, probe in shared])
    compared = [(wall, probe) for wall, probe in shared if probe.theory is not None]
    theory_peak = max((abs(probe.theory or 0.0) for _, probe in compared), default=None)
    reason = theory.reason or fe_peak.reason
    if reason is None and theory_peak is not None and _is_no_flow(theory_peak, fe_peak, scale):
        reason = NO_FLOW_REASON
    worst_wall, worst = max(compared, key=lambda pair: _gap(pair[1]), default=(None, None))
    unit = flow_unit(case.name if case.unit else "", *units)
    walls = tuple(_wall_flow(case, wall, unit, row, fe_peak, reason) for wall, row in raw.items())
    own_peak = None if theory.flow is None else _own_peak(case, theory.flow, midlines, fe.strips)
    return LoadFlows(case, walls, theory_peak, fe_peak, worst, worst_wall, own_peak, reason)


def _fe_flow(
    case: LoadCase, fe: fe_models.Solution, torque: FeValue, wall: str, places: Sequence[Probe]
) -> tuple[Array, Array]:
    """FE's flow (n,) and its error (n,) at the probes of a wall; NaN outside its strip."""
    flow, error = np.full(len(places), np.nan), np.full(len(places), np.nan)
    inside = np.array([probe.in_strip for probe in places], dtype=bool)
    if torque.value is None or not inside.any():
        return flow, error
    samples = fe.flow_at(wall, np.array([probe.at for probe in places if probe.in_strip]))
    combined = np.array((*case.shear, torque.value))
    used = combined != 0
    flow[inside] = combined[used] @ samples.values[used]
    error[inside] = np.abs(combined[used]) @ samples.errors[used]
    half = torque.half_width
    if half:
        error[inside] += half * np.abs(samples.values[2])
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
        reason = "the wall has no strip: it is shorter than its joints"
    if reason is not None or fe_peak.value is None:
        return WallFlow(case.name, wall, unit, row, None, None, reason)
    own = max(abs(probe.fe or 0.0) for probe in compared)
    normaliser = max(own, FLOOR * fe_peak.value)
    worst = max(compared, key=_gap)
    return WallFlow(case.name, wall, unit, row, signed_gap(worst) / normaliser, normaliser)


def signed_gap(probe: ProbeResult) -> float:
    """Theory minus FE at a probe, counted along FE's flow: positive where theory's flow is the larger."""
    assert probe.theory is not None
    assert probe.fe is not None
    return (probe.theory - probe.fe) * (-1.0 if probe.fe < 0 else 1.0)


def _own_peak(
    case: LoadCase,
    flow: beam_theory.Flow,
    midlines: Mapping[str, Midline],
    strips: Mapping[str, tuple[float, float] | None],
) -> TheoryPeak | None:
    """Theory's own largest flow, wherever it is, and whether FE has a counterpart there."""
    best: TheoryPeak | None = None
    for wall, midline in midlines.items():
        at = np.concatenate(((0.0, 1.0), np.asarray(flow.stationary(wall), dtype=float)))
        q = flow.at(wall, at)
        i = int(np.argmax(np.abs(q)))
        # A hair larger does not count: of equal peaks the first wall's is listed, run after run.
        if best is None or abs(q[i]) > abs(best.value) * (1 + 1e-9):
            strip = strips.get(wall)
            x, y = midline.places(at[i : i + 1])[0]
            has_fe = strip is not None and strip[0] <= at[i] <= strip[1]
            best = TheoryPeak(
                case.name, wall, float(at[i] * midline.length), float(x), float(y), float(q[i]), bool(has_fe)
            )
    return best
