"""Outlines for the tests of solids, and the reference rows they are held against."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np

from fe_models import ClosedLine, Interval, Solid, Solution, closed_lines, fitted_edges, solve_solid

REFERENCE = Path(__file__).parents[2] / "cases" / "reference"
Place = tuple[float, float]


@cache
def row(name: str) -> dict[str, Any]:
    """A row of published.json."""
    rows = json.loads((REFERENCE / "published.json").read_text(encoding="utf-8"))
    return next(r for r in rows if r["id"] == name)


@cache
def rolled(name: str) -> dict[str, Any]:
    """A row of rolled_sections.json."""
    rows = json.loads((REFERENCE / "rolled_sections.json").read_text(encoding="utf-8"))
    return next(r for r in rows if r["id"] == name)


def holds(interval: Interval, value: float, tolerance: float = 0.0) -> bool:
    """True where the interval, widened by a tolerance of the reference, holds the value."""
    assert interval.low is not None
    assert interval.high is not None
    return interval.low - tolerance <= value <= interval.high + tolerance


def polygon(*places: Place) -> ClosedLine:
    return ClosedLine(tuple((float(x), float(y)) for x, y in places))


def rectangle(b: float, h: float) -> ClosedLine:
    """Centred on the origin."""
    return polygon((-b / 2, -h / 2), (b / 2, -h / 2), (b / 2, h / 2), (-b / 2, h / 2))


def ellipse(a: float, b: float, error: float) -> ClosedLine:
    """Arcs within ``error`` of an ellipse."""

    def place(u: np.ndarray) -> np.ndarray:
        return np.stack([a * np.cos(u), b * np.sin(u)], axis=1)

    (line,) = closed_lines(fitted_edges(place, 0.0, 2.0 * np.pi, error, 4), 1e-9 * a).lines
    return line


def rounded(corners: Sequence[Place], radii: Sequence[float]) -> ClosedLine:
    """A polygon whose corners are rounded by the given radii (0: sharp)."""
    points: list[Place] = []
    through: list[Place | None] = []
    p = np.array(corners, dtype=float)
    for i, r in enumerate(radii):
        here, before, after = p[i], p[i - 1] - p[i], p[(i + 1) % len(p)] - p[i]
        if r == 0.0:
            points.append((float(here[0]), float(here[1])))
            through.append(None)
            continue
        u, v = before / np.hypot(*before), after / np.hypot(*after)
        half = 0.5 * math.acos(float(np.clip(u @ v, -1.0, 1.0)))
        bisector = (u + v) / np.hypot(*(u + v))
        first, last = here + u * r / math.tan(half), here + v * r / math.tan(half)
        middle = here + bisector * (r / math.sin(half) - r)
        points += [(float(first[0]), float(first[1])), (float(last[0]), float(last[1]))]
        through += [(float(middle[0]), float(middle[1])), None]
    return ClosedLine(tuple(points), tuple(through))


def solved(*rings: ClosedLine, accuracy: float = 1e-6, nu: float | None = None) -> Solution:
    return solve_solid(Solid(rings, nu=nu), accuracy)
