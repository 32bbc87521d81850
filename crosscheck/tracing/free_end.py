"""Where a wall ends: at its end face, found by area; or in a bulb, offered as a boom."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from shapely.geometry import Point, Polygon

from crosscheck.tracing.faces import Array
from crosscheck.tracing.wall_fit import FittedWall

# What lies beyond a cut is a bulb, where it is wider than the wall by this factor and its area beyond the
# wall's by this one.
WIDER = 1.35
FULLER = 1.15
# An end whose mean place by area is this share of the thickness short of its farthest place is no square one.
NOT_SQUARE = 0.04


@dataclass(frozen=True)
class FreeEnd:
    """The end of a wall.

    Attributes
    ----------
    s : where it ends, on the wall's own s [L]
    bulb : area beyond that of the wall [L^2], 0 without a bulb
    place : centroid of what lies beyond the last clear place [L]
    remark : what the square end leaves out, in words; empty where it is one
    """

    s: float
    bulb: float
    place: Array
    remark: str


def free_end(wall: FittedWall, polygon: Polygon, radius: float | None) -> FreeEnd:
    """The free end at the upper end of a wall's span.

    Parameters
    ----------
    wall : FittedWall
    polygon : Polygon
        The solid.
    radius : float or None
        Radius of the two arcs that round the end's corners, where there are two of one radius [L].
    """
    cut = wall.span[1]
    thickness = wall.at_thickness(cut)
    tangent = wall.tangent(cut)
    across = np.array([-tangent[1], tangent[0]])
    at = wall.at(cut)
    beyond = _beyond(polygon, at, tangent, across, thickness)
    if beyond is None:
        return FreeEnd(cut, 0.0, at, "")
    corners = np.array(beyond.exterior.coords) - at
    depth = float((corners @ tangent).max())
    width = float(np.ptp(corners @ across))
    area = float(beyond.area)
    middle = np.array(beyond.centroid.coords[0])
    plain = thickness * depth + 0.5 * wall.slope * depth**2
    if width > WIDER * thickness and area > FULLER * plain * min(1.0, thickness / width * 1.2):
        moment = area * float((middle - at) @ tangent)
        room = max(area * area - 2.0 * thickness * moment, 0.0)
        reach = min((area - float(np.sqrt(room))) / thickness, depth)
        bulb = area - thickness * reach
        if bulb > 0.3 * thickness**2:
            return FreeEnd(cut + reach, bulb, middle, "")
    # thickness t + b s over a reach of the same area
    reach = area / thickness
    for _ in range(20):
        reach = (area - 0.5 * wall.slope * reach**2) / thickness
    if wall.straight and radius is not None:
        # both corners rounded alike: the wall runs to the end face, its rounding is stated
        return FreeEnd(cut + depth, 0.0, middle, "")
    short = depth - reach
    remark = (
        ""
        if not wall.straight or abs(short) < NOT_SQUARE * thickness
        else "a free end that is not square, taken as a square one of its area"
    )
    return FreeEnd(cut + reach, 0.0, middle, remark)


def _beyond(polygon: Polygon, at: Array, tangent: Array, across: Array, thickness: float) -> Polygon | None:
    """The part of the solid beyond a cut across a wall that hangs on the wall."""
    x0, y0, x1, y1 = polygon.bounds
    size = 2.0 * float(np.hypot(x1 - x0, y1 - y0))
    half = Polygon(
        [
            at - size * across,
            at - size * across + size * tangent,
            at + size * across + size * tangent,
            at + size * across,
        ]
    )
    found = shapely.intersection(polygon, half)
    parts = [p for p in getattr(found, "geoms", [found]) if isinstance(p, Polygon) and not p.is_empty]
    if not parts:
        return None
    probe = Point(*(at + 0.02 * thickness * tangent))
    return min(parts, key=lambda p: p.distance(probe))
