"""Lumps of the drawing that no wall covers, offered as booms."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import shapely
from shapely.geometry import LineString, Polygon

from crosscheck.tracing.faces import Array
from crosscheck.tracing.model import Lump, TracedWall, WallModel

# Least area of a lump over the squared thickness of the wall that it lies on.
LEAST = 0.4
# Parts thinner than twice this share of the wall's thickness are no lumps.
SLIVER = 0.2
# A lump no farther than this many thicknesses from a point sits at it.
AT_POINT = 1.5


def with_lumps(model: WallModel, rebuilt: Polygon) -> WallModel:
    """The model with a lump for every part of the drawing that the rebuilt walls leave out."""
    missing = shapely.difference(model.outline.polygon, rebuilt)
    parts = [p for p in getattr(missing, "geoms", [missing]) if isinstance(p, Polygon)]
    taken = {lump.point for lump in model.lumps}
    points: dict[int, list[Polygon]] = {}
    walls: dict[int, list[Polygon]] = {}
    lines = [LineString(_midline(w)) for w in model.walls]
    for part in parts:
        i = int(np.argmin([part.distance(line) for line in lines]))
        wall = model.walls[i]
        thickness = wall.fitted.at_thickness(0.5 * sum(wall.fitted.span))
        if part.buffer(-SLIVER * thickness).is_empty:
            continue
        apart = [float(shapely.Point(*p.place).distance(part.centroid)) for p in model.points]
        n = int(np.argmin(apart))
        if apart[n] <= AT_POINT * max(thickness, np.sqrt(part.area)):
            points.setdefault(n, []).append(part)
        else:
            walls.setdefault(i, []).append(part)
    lumps = list(model.lumps)
    for n, found in points.items():
        beside = [max(w.thickness) for w in model.walls if n in (w.start, w.end)]
        area, place = _sum(found)
        if n not in taken and area > LEAST * max(beside) ** 2:
            lumps.append(Lump(area, place, point=n))
    for i, found in walls.items():
        wall = model.walls[i]
        for group in _neighbours(found):
            area, place = _sum(group)
            if area > LEAST * max(wall.thickness) ** 2:
                s = float(wall.fitted.along(place[None])[0][0])
                at = (s - wall.fitted.span[0]) / wall.length
                lumps.append(Lump(area, place, wall=i, at=float(np.clip(at, 0.0, 1.0))))
    return replace(model, lumps=tuple(lumps))


def _midline(wall: TracedWall) -> Array:
    return np.array([wall.fitted.at(s) for s in np.linspace(*wall.fitted.span, 33)])


def _sum(parts: list[Polygon]) -> tuple[float, Array]:
    """Area and centroid of parts."""
    areas = np.array([p.area for p in parts])
    places = np.array([p.centroid.coords[0] for p in parts])
    return float(areas.sum()), np.asarray(areas @ places / areas.sum())


def _neighbours(parts: list[Polygon]) -> list[list[Polygon]]:
    """Parts in groups that lie beside each other, as both sides of a boss do."""
    groups: list[list[Polygon]] = []
    for part in parts:
        near = [
            g for g in groups
            if any(p.centroid.distance(part.centroid) < 3.0 * np.sqrt(max(p.area, part.area)) for p in g)
        ]  # fmt: skip
        merged = [part, *(p for g in near for p in g)]
        groups = [g for g in groups if g not in near] + [merged]
    return groups
