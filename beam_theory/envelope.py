"""Largest flows and stresses over many loads, with the load that governs."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.errors import LoadError
from beam_theory.section import Load
from beam_theory.solution import Solution
from beam_theory.stress import KINDS, Stress, stress

__all__ = ["Envelope", "PlaceEnvelope", "WallEnvelope", "envelope"]


@dataclass(frozen=True)
class WallEnvelope:
    """Largest value in magnitude of a wall over all loads, with its sign, place and governing load.

    Attributes
    ----------
    kind : "flow", "direct", "shear" or "von_mises"
    wall, at : the wall, and the fraction of its length [-]
    value : flow [F/L], stresses [F/L^2]
    load : name of the load that gives it
    """

    kind: str
    wall: str
    at: float
    value: float
    load: str


@dataclass(frozen=True)
class PlaceEnvelope:
    """Lowest and highest value at one place over all loads and both faces, each with its load.

    Attributes
    ----------
    kind : "flow", "direct", "shear" or "von_mises"
    wall, at : the wall, and the fraction of its length [-]
    low, high : values; flow [F/L], stresses [F/L^2]
    low_load, high_load : names of the loads that give them
    """

    kind: str
    wall: str
    at: float
    low: float
    low_load: str
    high: float
    high_load: str


@dataclass(frozen=True)
class Envelope:
    """Rows for kinds "flow" [F/L], "direct", "shear", "von_mises" [F/L^2].

    Attributes
    ----------
    walls : a row for each wall and kind
    places : a row for each place asked for and kind
    """

    walls: tuple[WallEnvelope, ...]
    places: tuple[PlaceEnvelope, ...]


def envelope(
    solution: Solution, loads: Sequence[Load], places: Mapping[str, Floats] | None = None
) -> Envelope:
    """Envelope of flows and stresses over loads.

    Parameters
    ----------
    solution : Solution
    loads : sequence of Load
        At least one; names tell them apart.
    places : mapping of wall to fractions (n,), optional
        Places for the second half of the result.

    Returns
    -------
    Envelope
        Flows [F/L] and stresses [F/L^2], largest of each wall and extremes at each place.

    Raises
    ------
    LoadError
        Without loads, or with two of one name.
    """
    names = [load.name for load in loads]
    if not loads or len(set(names)) != len(names):
        raise LoadError(f"loads: at least one, each with a name of its own, got {names}")
    cases = [stress(solution, load) for load in loads]
    walls = tuple(_largest(kind, wall, cases) for wall in solution.graph.walls for kind in ("flow", *KINDS))
    rows: list[PlaceEnvelope] = []
    for wall, fractions in (places or {}).items():
        at = np.atleast_1d(np.asarray(fractions, dtype=np.float64))
        for kind in ("flow", *KINDS):
            values = np.stack([_along(kind, case, wall, at) for case in cases])
            for i, place in enumerate(at.tolist()):
                here = values[:, i, :]
                low, high = here.min(axis=1), here.max(axis=1)
                first, last = int(np.argmin(low)), int(np.argmax(high))
                rows.append(
                    PlaceEnvelope(
                        kind, wall, place, float(low[first]), names[first], float(high[last]), names[last]
                    )
                )
    return Envelope(walls, tuple(rows))


def _along(kind: str, case: Stress, wall: str, at: Floats) -> Floats:
    """Values of one load (n, 1) for flow and (n, 2) for stresses."""
    if kind == "flow":
        flow = np.zeros(len(at)) if case.flow is None else case.flow.at(wall, at)
        return flow[:, None]
    return np.asarray(getattr(case, kind)(wall, at))


def _largest(kind: str, wall: str, cases: Sequence[Stress]) -> WallEnvelope:
    """The governing load of one wall."""
    best: WallEnvelope | None = None
    for case in cases:
        if kind == "flow":
            peak = None if case.flow is None else case.flow.peak(wall)
            at, value = (0.0, 0.0) if peak is None else (peak.at, peak.flow)
        else:
            found = case.largest(kind, wall)
            at, value = found.at, found.stress
        if best is None or abs(value) > abs(best.value):
            best = WallEnvelope(kind, wall, at, value, case.load.name)
    assert best is not None
    return best
