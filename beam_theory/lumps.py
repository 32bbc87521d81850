"""Booms made from walls for one distribution of direct stress."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.solution import Solution

__all__ = ["Lump", "lumps"]

Distribution = Callable[[str, Floats], Floats]

_ARC_STEP = math.pi / 8.0
_LOW = 0.1
_DEPTH = 6
_Z, _W = np.polynomial.legendre.leggauss(16)
_Z, _W = 0.5 * (_Z + 1.0), 0.5 * _W


@dataclass(frozen=True)
class Lump:
    """Part of a wall's direct-stress area put at a fraction of it.

    Attributes
    ----------
    wall, at : the wall, and the fraction of its length [-]
    area : [L^2]
    stress : f there of the load that the lumps are made for [F/L^2]
    """

    wall: str
    at: float
    area: float
    stress: float


def lumps(solution: Solution, stress: Distribution, parts: int) -> tuple[Lump, ...]:
    """Areas that carry the same force as the wall under a stress distribution.

    A part of length b with stresses f_1, f_2 at its ends gives A_1 = t b/6 (2 + f_2/f_1) at its first end and
    A_2 = t b/6 (2 + f_1/f_2) at its second, in general A_1 = integral of t (1 - xi) f/f_1 ds.

    Parameters
    ----------
    solution : Solution
        Midline solution of the section.
    stress : callable (wall, fractions (n,)) -> (n,)
        Stress over e, up to a factor.
    parts : int
        Parts of each wall; arcs are first divided so that no part turns by more than 22.5 degrees.

    Notes
    -----
    Near the neutral axis the ratio is undefined, or an area negative (ratio below -2 or above -1/2), or an
    area large where the stress is small (stresses of one sign with a ratio below 1/10): such a part is split
    where f = 0, and each share becomes one boom where its stress block acts. Force and moment of straight
    parts stay exact; a part with no stress anywhere gives no boom.

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, 4th ed. 2007, sect. 20.2 (the formula; the
    split is ours).
    """
    section = solution.graph.section
    swept = _sweep(solution)
    peak = max(float(np.abs(stress(w.name, np.linspace(0.0, 1.0, 9))).max()) for w in section.walls)
    out: list[Lump] = []
    for wall in section.walls:
        if wall.direct_share == 0.0 or peak == 0.0:
            continue
        count = max(parts, math.ceil(abs(swept[wall.name]) / _ARC_STEP - 1e-9))
        edges = np.linspace(0.0, 1.0, count + 1)
        f = stress(wall.name, edges)
        f = np.where(np.abs(f) <= 1e-10 * peak, 0.0, f)
        block = _Block(solution, wall.name, stress, wall.thickness, wall.direct_share, peak)
        for i in range(count):
            out += block.lumped(float(edges[i]), float(edges[i + 1]), float(f[i]), float(f[i + 1]))
    return tuple(out)


def _sweep(solution: Solution) -> dict[str, float]:
    """Turn of each wall's midline [rad]."""
    p = solution.graph.pieces
    return {name: float(p.curves.sweep[rows].sum()) for name, (_, rows) in solution.graph.walls.items()}


@dataclass(frozen=True)
class _Block:
    """Stress block of one wall."""

    solution: Solution
    wall: str
    stress: Distribution
    thickness: tuple[float, float]
    share: float
    peak: float

    @property
    def length(self) -> float:
        """[L]."""
        graph = self.solution.graph
        return float(graph.pieces.length[graph.rows(self.wall)].sum())

    def lumped(self, low: float, high: float, f_low: float, f_high: float, depth: int = 0) -> list[Lump]:
        """Booms of the part low..high with the stresses f_low, f_high at its ends."""
        if f_low * f_high < 0.0 and not -2.0 <= f_high / f_low <= -0.5:
            zero = self.zero(low, high, f_low, f_high)
            made = [*self.one(low, zero), *self.one(zero, high)]
        elif f_low * f_high >= 0.0 and min(abs(f_low), abs(f_high)) <= _LOW * max(abs(f_low), abs(f_high)):
            made = self.one(low, high)
        else:
            _, weight, stress, xi = self.samples(low, high)
            first = float((weight * (1.0 - xi) * stress).sum()) / f_low
            second = float((weight * xi * stress).sum()) / f_high
            made = [Lump(self.wall, low, first, f_low), Lump(self.wall, high, second, f_high)]
        if depth < _DEPTH and any(lump.area < 0.0 for lump in made):
            # Only on an arc, where the stress may turn inside a part.
            middle = 0.5 * (low + high)
            between = self.at(middle)
            return [
                *self.lumped(low, middle, f_low, between, depth + 1),
                *self.lumped(middle, high, between, f_high, depth + 1),
            ]
        return [lump for lump in made if lump.area > 0.0]

    def zero(self, low: float, high: float, f_low: float, f_high: float) -> float:
        """Fraction between low and high where the stress changes sign (false position, Illinois variant)."""
        middle = low
        for _ in range(60):
            middle = low + (high - low) * f_low / (f_low - f_high)
            there = self.at(middle)
            if there == 0.0 or high - low <= 1e-15:
                break
            if there * f_low > 0.0:
                low, f_low, f_high = middle, there, 0.5 * f_high
            else:
                high, f_high, f_low = middle, there, 0.5 * f_low
            if abs(there) <= 1e-15 * self.peak:
                break
        return middle

    def at(self, fraction: float) -> float:
        """Stress at one fraction."""
        return float(self.stress(self.wall, np.array([fraction]))[0])

    def one(self, low: float, high: float) -> list[Lump]:
        """One boom where the stress block of the part acts; area below zero when it acts outside the part."""
        u, weight, f, _ = self.samples(low, high)
        force = float((weight * f).sum())
        if float(np.abs(f).max()) <= 1e-10 * self.peak:
            return []
        moment = float((weight * f * u).sum())
        if not low * abs(force) <= moment * np.sign(force) <= high * abs(force) or force == 0.0:
            return [Lump(self.wall, low, -1.0, 0.0)]
        there = self.at(moment / force)
        area = force / there if there * force > 0.0 else -1.0
        return [Lump(self.wall, moment / force, area, there)]

    def samples(self, low: float, high: float) -> tuple[Floats, Floats, Floats, Floats]:
        """Fractions, weights of an integral of share t ds, stresses, and part fractions; all (k,)."""
        u = low + (high - low) * _Z
        t = self.thickness[0] + (self.thickness[1] - self.thickness[0]) * u
        weight = self.share * t * self.length * (high - low) * _W
        return u, weight, self.stress(self.wall, u), _Z
