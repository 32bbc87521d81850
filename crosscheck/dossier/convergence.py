"""Solution verification of one section: intervals against unknowns, observed order, grid convergence index.

References
----------
P. J. Roache, Verification and Validation in Computational Science and Engineering, 1998: the index.
ASME V&V 20, Standard for Verification and Validation in Computational Fluid Dynamics and Heat Transfer, 2009:
the same procedure with an effective refinement ratio for grids that are not geometrically similar.
G. Strang and G. J. Fix, An Analysis of the Finite Element Method, 1973, chapter on singularities: the order
that a re-entrant corner allows on uniform meshes (from memory).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

import fe_models
from crosscheck.comparison.drawn import Array
from crosscheck.comparison.result import FeValue, Result
from crosscheck.dossier.bench import Bench
from crosscheck.section_file.model import SectionFile

ACCURACIES = (1e-3, 1e-4, 1e-5, 1e-6, 1e-7)
# Quantities whose intervals come from fields; the others are exact for the outline.
FOLLOWED = (
    "torsion_constant",
    "shear_centre_x",
    "shear_centre_y",
    "shear_area_x",
    "shear_area_y",
    "warping_constant",
)
# Safety factors of the index: three grids with an observed order, two grids with an assumed one.
THREE_GRIDS, TWO_GRIDS = 1.25, 3.0
# A turn of the outline sharper than this is a corner and no sampled curve [rad].
CORNER = math.radians(25.0)
# Changes smaller than this share of the value are round-off and show no order [-].
ROUND_OFF = 1e-12


@dataclass(frozen=True)
class Run:
    """One mesh: its size, the accuracies that it answers, and the intervals on it."""

    accuracies: tuple[float, ...]
    order: int
    unknowns: int
    elements: int
    met: bool
    values: Mapping[str, FeValue]


@dataclass(frozen=True)
class Index:
    """Grid convergence index of one quantity; ``order`` in the mesh size h, with N ~ 1/h^2 unknowns.

    ``index`` is over the normaliser of the quantity [-]; None with the reason where it cannot be formed.
    """

    quantity: str
    interval_order: float | None
    index: float | None
    order: float | None
    ratio: float | None
    factor: float | None
    grids: int
    reason: str | None = None


@dataclass(frozen=True)
class Convergence:
    """Runs from coarse to fine, the order that corners allow on uniform meshes, and the indices."""

    runs: tuple[Run, ...]
    corner_angle: float | None
    corner_order: float | None
    indices: tuple[Index, ...]


def converge(section: SectionFile, nominal: Result, bench: Bench, tell: Callable[[str], None]) -> Convergence:
    """Solve the section at every accuracy and follow its intervals.

    Parameters
    ----------
    section : SectionFile
        As read.
    nominal : Result
        The comparison at hand, with its drawing; gives normalisers and the outline.
    bench : Bench
        Compares.
    tell : callable
        Told in words what is being done.

    Raises
    ------
    fe_models.FeError
        Where the section cannot be solved at one of them.
    """
    results = {nominal.accuracy: nominal}
    *coarser, finest = ACCURACIES
    for wanted in (coarser, [finest]):
        others = [accuracy for accuracy in wanted if accuracy not in results]
        trials = [(section, accuracy) for accuracy in others]
        for accuracy, result in zip(others, bench.work(trials, "solution verification", tell), strict=True):
            if isinstance(result, str):
                raise fe_models.FeError(f"solution verification at {accuracy:g}: {result}")
            results[accuracy] = result
        if answers(results[coarser[-1]], finest):
            # The finest mesh costs most and need not be solved twice.
            results.setdefault(finest, results[coarser[-1]])
    runs = _distinct([(accuracy, results[accuracy]) for accuracy in ACCURACIES])
    angle = sharpest_corner(nominal.require_drawing().loops)
    order = None if angle is None else 2.0 * math.pi / angle
    scales = {row.name: row.normaliser for row in nominal.quantities if row.load is None}
    indices = tuple(convergence_index(name, runs, scales.get(name), order) for name in FOLLOWED)
    return Convergence(runs, angle, order, indices)


def answers(result: Result, accuracy: float) -> bool:
    """Whether the intervals of a result are narrow enough for an accuracy that was not asked of it."""
    rows = [result.quantity(name) for name in ("torsion_constant", "shear_centre_x", "shear_centre_y")]
    halves = [(row.fe.half_width, row.normaliser) for row in rows]
    return all(half is not None and scale and half <= accuracy * scale for half, scale in halves)


def _distinct(found: Sequence[tuple[float, Result]]) -> tuple[Run, ...]:
    """One run for each mesh: several accuracies may be answered by the same one."""
    runs: dict[tuple[int, int, int], list[tuple[float, Result]]] = {}
    for accuracy, result in found:
        mesh = result.mesh
        runs.setdefault((mesh.order, mesh.unknowns, mesh.elements), []).append((accuracy, result))
    ordered = sorted(runs.items(), key=lambda item: item[0][1])
    return tuple(
        Run(
            tuple(accuracy for accuracy, _ in entries),
            order,
            unknowns,
            elements,
            all(result.accuracy_met for _, result in entries),
            {name: entries[0][1].quantity(name).fe for name in FOLLOWED},
        )
        for (order, unknowns, elements), entries in ordered
    )


def sharpest_corner(loops: Sequence[Array]) -> float | None:
    """Largest angle inside the solid at a re-entrant corner of its boundary [rad]; None without any.

    Parameters
    ----------
    loops : sequence of (n, 2)
        Outer loop and holes, in any sense [L].
    """
    largest = math.pi + CORNER
    found = False
    for number, loop in enumerate(loops):
        places = np.asarray(loop, dtype=float)
        before, after = np.roll(places, 1, axis=0), np.roll(places, -1, axis=0)
        area = 0.5 * float(np.sum(places[:, 0] * after[:, 1] - after[:, 0] * places[:, 1]))
        # The solid is on the left of an anticlockwise outer loop, and of a clockwise hole.
        sign = math.copysign(1.0, area) * (1.0 if number == 0 else -1.0)
        first, second = places - before, after - places
        cross = first[:, 0] * second[:, 1] - first[:, 1] * second[:, 0]
        turn = np.arctan2(cross, np.sum(first * second, axis=1))
        angle = float(np.max(math.pi - sign * turn))
        if angle > largest:
            largest, found = angle, True
    return largest if found else None


def convergence_index(
    name: str, runs: Sequence[Run], normaliser: float | None, corner_order: float | None
) -> Index:
    """Index of one quantity from the finest runs of one element order.

    Three grids whose changes shrink give the observed order, at most that of energies on smooth solutions
    (twice the element's), and a factor of 1.25; two grids take the order that the corners allow, or two
    without corners, and a factor of 3.
    """
    known = [run for run in runs if run.values[name].value is not None]
    shrinking = _interval_order(name, known)
    if not known or not normaliser:
        return Index(name, None, None, None, None, None, 0, "no FE value")
    orders = [run.order for run in known]
    best = max(set(orders), key=lambda order: (orders.count(order), order))
    grids = [run for run in known if run.order == best][-3:]
    if len(grids) < 2:
        reason = f"one mesh of order {best} answers every accuracy: the interval stands alone"
        return Index(name, shrinking, None, None, None, None, len(grids), reason)
    values = [float(run.values[name].value or 0.0) for run in grids]
    fine = abs(values[-1] - values[-2])
    ratio = math.sqrt(grids[-1].unknowns / grids[-2].unknowns)
    if fine <= ROUND_OFF * max(normaliser, abs(values[-1])):
        reason = "the values of the last two meshes agree to round-off"
        return Index(name, shrinking, 0.0, None, ratio, None, len(grids), reason)
    if len(grids) == 3:
        order = observed_order(values, [run.unknowns for run in grids])
        if order is not None:
            order = min(order, 2.0 * best)
            index = THREE_GRIDS * fine / normaliser / (ratio**order - 1.0)
            return Index(name, shrinking, index, order, ratio, THREE_GRIDS, 3)
    order = corner_order or 2.0
    index = TWO_GRIDS * fine / normaliser / (ratio**order - 1.0)
    return Index(name, shrinking, index, order, ratio, TWO_GRIDS, 2)


def observed_order(values: Sequence[float], unknowns: Sequence[int]) -> float | None:
    """Order in h from three grids, coarse to fine, by fixed-point iteration; None where none is seen.

    ``p = |ln(e32/e21) + ln((r21^p - 1)/(r32^p - 1))| / ln r21`` with effective ratios r = sqrt(N/N').
    """
    e32, e21 = values[0] - values[1], values[1] - values[2]
    if e21 == 0.0 or e32 / e21 <= 1.0:
        return None
    r21, r32 = math.sqrt(unknowns[2] / unknowns[1]), math.sqrt(unknowns[1] / unknowns[0])
    if min(r21, r32) < 1.01:
        return None
    p = math.log(e32 / e21) / math.log(r21)
    for _ in range(200):
        if not 0.05 < p < 40.0:
            return None
        new = abs(math.log(e32 / e21) + math.log((r21**p - 1.0) / (r32**p - 1.0))) / math.log(r21)
        if abs(new - p) < 1e-10:
            return new
        p = 0.5 * (p + new)
    return None


def _interval_order(name: str, runs: Sequence[Run]) -> float | None:
    """Order in h at which the interval shrinks, least squares over all runs; None with fewer than two."""
    pairs = [(run.unknowns, run.values[name].half_width) for run in runs]
    logs = [(math.log(n), math.log(half)) for n, half in pairs if half]
    if len(logs) < 2:
        return None
    n, half = np.array(logs).T
    return float(-2.0 * np.polyfit(n, half, 1)[0])
