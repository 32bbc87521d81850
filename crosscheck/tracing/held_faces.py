"""Faces that stay where they are when a thickness changes, and how points move so that they do."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from shapely.geometry import Point, Polygon

from crosscheck.tracing.faces import Array
from crosscheck.tracing.model import TracedWall, WallModel

# A face nearer to the convex hull than this share of the wall's thickness lies on it.
ON_HULL = 0.1
# Walls at a point whose normals differ by less say only together where it goes [share of the largest].
IN_LINE = 0.05

Moves = tuple[tuple[int, Array], ...]


def held_sides(model: WallModel) -> tuple[int, ...]:
    """For every wall: +1 where its left face is held, -1 where its right one is, 0 where its midline is.

    Held is the face to the outside where the other looks into a cell; else the one on the convex hull.
    """
    polygon = model.outline.polygon
    outside = Polygon(polygon.exterior)
    hull = polygon.convex_hull.exterior
    return tuple(_held(w, outside, polygon, hull) for w in model.walls)


def _held(wall: TracedWall, outside: Polygon, polygon: Polygon, hull: object) -> int:
    s = 0.5 * sum(wall.fitted.span)
    tangent = wall.fitted.tangent(s)
    left = np.array([-tangent[1], tangent[0]])
    thickness = wall.fitted.at_thickness(s)
    at = wall.fitted.at(s)
    beyond = [Point(*(at + 0.6 * side * thickness * left)) for side in (1, -1)]
    in_cell = [outside.contains(p) and not polygon.contains(p) for p in beyond]
    if in_cell[0] != in_cell[1]:
        return -1 if in_cell[0] else 1
    if all(in_cell):
        return 0
    faces = [Point(*(at + 0.5 * side * thickness * left)) for side in (1, -1)]
    on_hull = [f.distance(hull) < ON_HULL * thickness for f in faces]
    return 0 if on_hull[0] == on_hull[1] else 1 if on_hull[0] else -1


def point_moves(
    model: WallModel, sides: Sequence[int], thickness_of: Sequence[tuple[int, int]]
) -> tuple[Moves, ...]:
    """For every point, how it moves with each thickness (number, (2,)) so that held faces stay."""
    made: list[Moves] = []
    for n in range(len(model.points)):
        normals, shifts = [], []
        for i, wall in enumerate(model.walls):
            for k, point in enumerate((wall.start, wall.end)):
                if point == n:
                    tangent = wall.fitted.tangent(wall.fitted.span[k])
                    normals.append([-tangent[1], tangent[0]])
                    shifts.append((thickness_of[i][k], -0.5 * sides[i]))
        numbers = sorted({t for t, _ in shifts})
        solved = np.linalg.pinv(np.array(normals), rcond=IN_LINE)
        moves = []
        for number in numbers:
            move = solved @ np.array([shift if t == number else 0.0 for t, shift in shifts])
            if np.abs(move).max() > 1e-9:
                moves.append((number, move))
        made.append(tuple(moves))
    return tuple(made)


def through_move(wall: TracedWall, side: int) -> Array:
    """How the third place of an arc moves with its thickness there."""
    tangent = wall.fitted.tangent(0.5 * sum(wall.fitted.span))
    return np.asarray(-0.5 * side * np.array([-tangent[1], tangent[0]]))
