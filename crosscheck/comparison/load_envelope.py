"""Envelope over load cases: what governs in every wall and at every probe, on both sides."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from crosscheck.comparison.drawn import Array
from crosscheck.comparison.flow_comparison import LoadFlows
from crosscheck.comparison.load_results import Governing, ProbeEnvelope, WallEnvelope
from crosscheck.comparison.stress_comparison import FACES, LoadStress, measure, peak_error

KINDS = ("flow", "direct", "von_mises")


@dataclass(frozen=True)
class _Field:
    """Values of one kind in one wall: theory and FE (loads, faces, probes), NaN where there is none."""

    wall: str
    s: Array
    labels: tuple[str | None, ...]
    loads: tuple[str, ...]
    theory: Array
    fe: Array
    error: Array


def envelopes(
    flows: Sequence[LoadFlows], stresses: Sequence[LoadStress], judged: str, units: tuple[str, str]
) -> tuple[tuple[WallEnvelope, ...], tuple[ProbeEnvelope, ...]]:
    """Envelopes of flow, direct stress and von Mises stress over the loads of a file.

    Both sides at the same probes, so that like is compared with like; FE has values in the strips only, and a
    wall's envelope takes theory's where FE has one. Signs are kept: of a wall the largest magnitude governs,
    of a
    probe the lowest and the highest value are given.

    Parameters
    ----------
    flows, stresses : sequences
        Of the loads, without the unit loads.
    judged : str
        Level of theory.
    units : (str, str)
        Of flow and of stress.
    """
    walls: list[WallEnvelope] = []
    probes: list[ProbeEnvelope] = []
    direct = any(found.case.has_direct for found in stresses)
    for kind in KINDS if direct else ("flow", "von_mises"):
        unit = units[0] if kind == "flow" else units[1]
        for field in _fields(kind, flows, stresses, judged):
            walls.append(_wall(kind, field, unit))
            probes += [_probe(kind, field, i, unit) for i in range(len(field.s))]
    return tuple(walls), tuple(probes)


def shear_envelopes(stresses: Sequence[LoadStress], judged: str, unit: str) -> tuple[WallEnvelope, ...]:
    """Largest shear stress at the faces of every wall over the loads, as :func:`envelopes` gives others."""
    return tuple(_wall("shear", field, unit) for field in _fields("shear", (), stresses, judged))


def _fields(
    kind: str, flows: Sequence[LoadFlows], stresses: Sequence[LoadStress], judged: str
) -> Iterable[_Field]:
    """Values of one kind, wall by wall."""
    return _flow_fields(flows) if kind == "flow" else _stress_fields(kind, stresses, judged)


def _flow_fields(flows: Sequence[LoadFlows]) -> Iterable[_Field]:
    """Flow of all loads, wall by wall."""
    if not flows:
        return
    loads = tuple(found.case.name for found in flows)
    for rows in zip(*(found.walls for found in flows), strict=True):
        first = rows[0].probes
        theory = [[[_nan(probe.theory) for probe in row.probes]] for row in rows]
        fe = [[[_nan(probe.fe) for probe in row.probes]] for row in rows]
        error = [[[_nan(probe.fe_error) for probe in row.probes]] for row in rows]
        labels = tuple(probe.label for probe in first)
        s = np.array([probe.s for probe in first])
        shape = (len(loads), 1, len(first))
        values = (np.array(side).reshape(shape) for side in (theory, fe, error))
        yield _Field(rows[0].wall, s, labels, loads, *values)


def _stress_fields(kind: str, stresses: Sequence[LoadStress], judged: str) -> Iterable[_Field]:
    """Stress of all loads, wall by wall."""
    if not stresses:
        return
    loads = tuple(found.case.name for found in stresses)
    for walls in zip(*(found.walls for found in stresses), strict=True):
        nothing = np.full((2, len(walls[0].s)), np.nan)
        # Of walls that carry direct stress on one side only there is no such stress to compare.
        told = kind == "shear" or walls[0].shear_only is None
        theory = [
            measure(kind, wall.theory[judged]) if told and judged in wall.theory else nothing
            for wall in walls
        ]
        fe = [measure(kind, wall.fe) for wall in walls]
        error = [peak_error(kind, wall) for wall in walls]
        labels = tuple(probe.label for probe in walls[0].probes)
        values = (np.array(side) for side in (theory, fe, error))
        yield _Field(walls[0].wall, walls[0].s, labels, loads, *values)


def _wall(kind: str, field: _Field, unit: str) -> WallEnvelope:
    """The value of largest magnitude of a wall on each side."""
    shared = np.where(np.isnan(field.fe), np.nan, field.theory)
    theory, fe = _largest(kind, field, shared), _largest(kind, field, field.fe, field.error)
    difference = None
    if theory is not None and fe is not None and fe.value != 0.0:
        difference = (abs(theory.value) - abs(fe.value)) / abs(fe.value)
    return WallEnvelope(kind, field.wall, unit, theory, fe, difference)


def _probe(kind: str, field: _Field, i: int, unit: str) -> ProbeEnvelope:
    """Lowest and highest value at one probe on each side."""
    ends: list[Governing | None] = []
    for side in (field.theory, field.fe):
        here = side[:, :, i]
        for find in (np.nanargmin, np.nanargmax):
            if not np.isfinite(here).any():
                ends.append(None)
                continue
            load, face = np.unravel_index(int(find(here)), here.shape)
            at, error = (int(load), int(face), i), None if side is field.theory else field.error
            ends.append(_governing(kind, field, at, float(here[load, face]), error))
    return ProbeEnvelope(kind, field.wall, float(field.s[i]), field.labels[i], unit, *ends)


def _largest(kind: str, field: _Field, values: Array, error: Array | None = None) -> Governing | None:
    """The largest magnitude; of equal ones the first load's."""
    if not np.isfinite(values).any():
        return None
    size = np.abs(values)
    # A hair larger does not count, so that of equal loads the first is named, run after run.
    flat = np.nan_to_num(size, nan=-1.0).ravel()
    first = int(np.argmax(flat >= np.nanmax(size) * (1.0 - 1e-9)))
    load, face, i = (int(k) for k in np.unravel_index(first, values.shape))
    return _governing(kind, field, (load, face, i), float(values[load, face, i]), error)


def _governing(
    kind: str, field: _Field, at: tuple[int, int, int], value: float, error: Array | None
) -> Governing:
    """A value with its load, place, face and error; ``at``: numbers of load, face and probe."""
    face = None if kind == "flow" else FACES[at[1]]
    half = None if error is None else float(error[at])
    return Governing(value, field.loads[at[0]], float(field.s[at[2]]), face, half)


def _nan(value: float | None) -> float:
    return float("nan") if value is None else value
