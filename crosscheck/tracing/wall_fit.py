"""Least-squares walls: a straight or circular midline with a thickness that is constant or linear along it.

Samples on both faces are fitted, not medial places: on exact faces the fit is exact, ends that bend into a
joint do not matter.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from scipy.optimize import least_squares

from crosscheck.tracing.faces import Array

# A thickness that changes by less than this share over its wall is constant.
CONSTANT = 0.01
# Rise over the chord below which an arc is not tried.
FLAT_RISE = 1e-4


@dataclass(frozen=True)
class FittedWall:
    """A midline with a thickness along it.

    Attributes
    ----------
    origin, direction : a place on the midline and the unit direction there; s = 0 [L]
    curvature : of the midline, positive to the left [1/L]
    thickness : at s = 0 [L]
    slope : change of thickness with s [-]
    span : s at the first and last sample [L]
    residual : largest distance of a sample from its fitted face [L]
    """

    origin: Array
    direction: Array
    curvature: float
    thickness: float
    slope: float
    span: tuple[float, float]
    residual: float

    @property
    def straight(self) -> bool:
        return self.curvature == 0.0

    @property
    def centre(self) -> Array:
        """Of an arc [L]."""
        return self.origin + _left(self.direction) / self.curvature

    def at(self, s: float) -> Array:
        """Place on the midline [L]."""
        if self.straight:
            return np.asarray(self.origin + s * self.direction)
        a = self.curvature * s
        return np.asarray(
            self.origin
            + (np.sin(a) * self.direction + (1.0 - np.cos(a)) * _left(self.direction)) / self.curvature
        )

    def tangent(self, s: float) -> Array:
        """Unit direction at s (2,)."""
        a = self.curvature * s
        return np.asarray(np.cos(a) * self.direction + np.sin(a) * _left(self.direction))

    def along(self, places: Array) -> tuple[Array, Array]:
        """s and distance to the left of places (n, 2) [L]."""
        apart = places - self.origin
        x, y = apart @ self.direction, apart @ _left(self.direction)
        if self.straight:
            return x, y
        radius = 1.0 / self.curvature
        a = np.arctan2(np.sign(radius) * x, np.sign(radius) * (radius - y))
        return a * radius, radius - np.sign(radius) * np.hypot(x, radius - y)

    def at_thickness(self, s: float) -> float:
        """Thickness at s [L]."""
        return self.thickness + self.slope * s

    def extended(self, first: float, last: float) -> FittedWall:
        """The wall from s = first to last."""
        return replace(self, span=(first, last))

    def reversed(self) -> FittedWall:
        """The wall run through the other way."""
        return FittedWall(
            self.origin,
            -self.direction,
            -self.curvature,
            self.thickness,
            -self.slope,
            (-self.span[1], -self.span[0]),
            self.residual,
        )


def fitted_wall(left: Array, right: Array, path: Array, tolerance: float, loop: bool = False) -> FittedWall:
    """The simplest wall that fits.

    Parameters
    ----------
    left, right : (n, 2), (m, 2) arrays
        Samples on the faces to both sides [L].
    path : (k, 2) array
        Medial places in order, for direction and start [L].
    tolerance : float
        Largest distance between samples and fitted faces with which a straight wall will do [L].
    loop : bool
        True for a closed path.
    """
    if not loop:
        straight = _straight(left, right, path)
        if straight.residual <= tolerance:
            return _evened(straight)
    arc = _arc(left, right, path, loop)
    if arc is None:
        return _evened(straight)
    return _evened(arc) if loop or arc.residual < straight.residual else _evened(straight)


def fitted_line(places: Array, *, loop: bool, arc: bool) -> FittedWall:
    """A line, or a circle, through places (n, 2) in order, as a wall of thickness one [L]."""
    if arc:
        found = _arc(places, places, places, loop, width=0.0)
        if found is not None:
            return replace(found, thickness=1.0, slope=0.0)
    return replace(_straight(places, places, places), thickness=1.0, slope=0.0)


def _evened(wall: FittedWall) -> FittedWall:
    """With constant thickness, where it is nearly so."""
    first, last = wall.span
    change = abs(wall.slope) * (last - first)
    middle = wall.at_thickness(0.5 * (first + last))
    if change > CONSTANT * middle:
        return wall
    return replace(wall, thickness=middle, slope=0.0)


def _straight(left: Array, right: Array, path: Array) -> FittedWall:
    """Midline half-way between the lines through both faces' samples."""
    middles, directions = [], []
    towards = path[-1] - path[0]
    for side in (left, right):
        middle = side.mean(axis=0)
        _, _, axes = np.linalg.svd(side - middle, full_matrices=False)
        axis = axes[0] if axes[0] @ towards >= 0.0 else -axes[0]
        middles.append(middle)
        directions.append(axis)
    direction = directions[0] + directions[1]
    direction /= np.hypot(*direction)
    across = _left(direction)
    origin = path.mean(axis=0)
    offsets, slopes = [], []
    residual = 0.0
    for side, middle, axis in zip((left, right), middles, directions, strict=True):
        slope = float((axis @ across) / (axis @ direction))
        offsets.append(float((middle - origin) @ across) - slope * float((middle - origin) @ direction))
        slopes.append(slope)
        residual = max(residual, float(np.abs((side - middle) @ _left(axis)).max()))
    s = np.concatenate([(side - origin) @ direction for side in (left, right)])
    return FittedWall(
        origin + 0.5 * (offsets[0] + offsets[1]) * across,
        direction,
        0.0,
        offsets[0] - offsets[1],
        slopes[0] - slopes[1],
        (float(s.min()), float(s.max())),
        residual,
    )


def _arc(left: Array, right: Array, path: Array, loop: bool, width: float | None = None) -> FittedWall | None:
    """Midline on a circle; None where the path shows no rise. A ``width`` is held."""
    start = _circle(path)
    if start is None:
        return None
    centre, radius = start
    first = path[0] - centre
    # left of the path is the centre's side where it runs anticlockwise
    steps = np.diff(path, axis=0)
    turn = float(np.sum((path[:-1] - centre)[:, 0] * steps[:, 1] - (path[:-1] - centre)[:, 1] * steps[:, 0]))
    sign = 1.0 if turn > 0.0 else -1.0
    side = np.concatenate([np.full(len(left), -sign), np.full(len(right), sign)])
    at = np.concatenate([left, right])
    middle = path[len(path) // 2] - centre if not loop else first
    reference = middle / np.hypot(*middle)

    def angle(apart: Array) -> Array:
        cross = reference[0] * apart[:, 1] - reference[1] * apart[:, 0]
        return sign * np.arctan2(cross, apart @ reference)

    def misfit(x: Array) -> Array:
        apart = at - x[:2]
        thickness = held if held is not None else x[3] + (0.0 if loop else x[4]) * angle(apart)
        return np.hypot(*apart.T) - x[2] - 0.5 * side * thickness

    held = width
    if held is None:
        width = abs(float(np.hypot(*(left - centre).T).mean() - np.hypot(*(right - centre).T).mean()))
        x0 = np.array([*centre, radius, width, 0.0])
        scale = np.array([radius, radius, radius, width, width])
    else:
        x0, scale = np.array([*centre, radius]), np.full(3, radius)
    found = least_squares(misfit, x0, x_scale=scale, xtol=1e-14)
    x = found.x if held is None else np.append(found.x, [0.0, 0.0])
    centre, radius, thickness, per_angle = x[:2], float(x[2]), float(x[3]), float(x[4])
    angles = angle(at - centre)
    origin = centre + radius * reference
    direction = sign * _left(reference)
    low, high = (-np.pi, np.pi) if loop else (float(angles.min()), float(angles.max()))
    return FittedWall(
        origin,
        direction,
        sign / radius,
        thickness,
        0.0 if loop else per_angle / radius,
        (low * radius, high * radius),
        float(np.abs(found.fun).max()),
    )


def _circle(path: Array) -> tuple[Array, float] | None:
    """Algebraic least-squares circle through places; None where they lie on a line."""
    middle = path.mean(axis=0)
    p = path - middle
    size = float(np.abs(p).max())
    p = p / size
    if np.linalg.svd(p, compute_uv=False)[-1] < FLAT_RISE:
        return None
    a = np.column_stack([2.0 * p, np.ones(len(p))])
    x, y, c = np.linalg.lstsq(a, (p**2).sum(axis=1), rcond=None)[0]
    return middle + size * np.array([x, y]), size * float(np.sqrt(c + x * x + y * y))


def _left(direction: Array) -> Array:
    return np.array([-direction[1], direction[0]])
