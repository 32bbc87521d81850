"""What most pictures share: the solid, the midlines, direction arrows and dimension lines."""

from __future__ import annotations

import math

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import FancyArrowPatch, PathPatch
from matplotlib.path import Path

from crosscheck.comparison.drawn import Array, Drawing, WallShape
from crosscheck.pictures.canvas import EDGE, FONT, INK, SOFT, SOLID


def draw_solid(axes: Axes, loops: tuple[Array, ...], *, face: str = SOLID, edge: str = EDGE) -> None:
    """The solid: outer loop filled, holes left open."""
    vertices: list[Array] = []
    codes: list[int] = []
    for loop in loops:
        closed = np.vstack((loop, loop[:1]))
        vertices.append(closed)
        codes += [int(Path.MOVETO), *[int(Path.LINETO)] * (len(closed) - 2), int(Path.CLOSEPOLY)]
    path = Path(np.vstack(vertices), np.array(codes, dtype=np.uint8))
    axes.add_patch(PathPatch(path, facecolor=face, edgecolor=edge, lw=0.5, zorder=1))


def draw_midlines(axes: Axes, drawing: Drawing, *, dashed: bool = True, colour: str = INK) -> None:
    """Midline of every wall."""
    for wall in drawing.walls:
        axes.plot(
            wall.points[:, 0],
            wall.points[:, 1],
            color=colour,
            lw=0.6,
            ls=(0, (6, 2)) if dashed else "-",
            zorder=2,
        )


def draw_direction(axes: Axes, wall: WallShape, sign: float, *, colour: str, at: float = 0.5) -> None:
    """An arrowhead along a wall at a fraction of it, in its direction (+1) or against it (-1)."""
    i = min(max(round(at * (len(wall.points) - 1)), 1), len(wall.points) - 2)
    tail, head = wall.points[i - 1], wall.points[i + 1]
    if sign < 0:
        tail, head = head, tail
    middle = (tail + head) / 2
    step = (head - tail) / np.hypot(*(head - tail)) * 1e-3 * float(wall.s[-1])
    axes.add_patch(_arrow(tuple(middle - step), tuple(middle + step), colour, 0.6, 6))


def draw_arrow(axes: Axes, tail: Array, head: Array, colour: str) -> None:
    """A heavy arrow between two places (2,) [L], as for a force."""
    axes.add_patch(_arrow(tuple(tail), tuple(head), colour, 1.4, 9))


def _arrow(
    tail: tuple[float, float], head: tuple[float, float], colour: str, width: float, tip: float
) -> FancyArrowPatch:
    """An arrow that begins and ends exactly at its places."""
    return FancyArrowPatch(
        tail,
        head,
        arrowstyle="-|>",
        mutation_scale=tip,
        color=colour,
        lw=width,
        zorder=5,
        shrinkA=0,
        shrinkB=0,
    )


def outward(wall: WallShape, centre: tuple[float, float], at: float = 0.5) -> tuple[float, float]:
    """Unit normal of a wall at a fraction of it that points away from a centre."""
    i = round(at * (len(wall.points) - 1))
    normal, place = wall.normals[i], wall.points[i]
    sign = 1.0 if float(normal @ (place - np.asarray(centre))) >= 0 else -1.0
    return float(sign * normal[0]), float(sign * normal[1])


def draw_dimension(
    axes: Axes, start: tuple[float, float], end: tuple[float, float], text: str, side: tuple[float, float]
) -> None:
    """A dimension line between two places with its text on one side [L]."""
    axes.annotate(
        "", end, start, arrowprops={"arrowstyle": "<|-|>", "lw": 0.5, "color": SOFT, "mutation_scale": 5,
                                    "shrinkA": 0, "shrinkB": 0}, zorder=3
    )  # fmt: skip
    middle = ((start[0] + end[0]) / 2, (start[1] + end[1]) / 2)
    upright = abs(end[1] - start[1]) > abs(end[0] - start[0])
    axes.annotate(
        text,
        middle,
        xytext=(2.5 * side[0], 2.5 * side[1]),
        textcoords="offset points",
        ha="center" if not upright else ("left" if side[0] > 0 else "right"),
        va="center" if upright else ("bottom" if side[1] > 0 else "top"),
        rotation=90 if upright else 0,
        fontsize=FONT - 0.5,
        color=SOFT,
        zorder=3,
        # A line of action may cross it.
        bbox={"facecolor": "white", "edgecolor": "none", "pad": 0.6},
    )


def overall(loops: tuple[Array, ...]) -> tuple[float, float, float, float]:
    """Low x, low y, high x, high y of the outer loop [L]."""
    low, high = loops[0].min(axis=0), loops[0].max(axis=0)
    return float(low[0]), float(low[1]), float(high[0]), float(high[1])


def centre_of(drawing: Drawing) -> tuple[float, float]:
    """Middle of the outer loop's frame [L]."""
    x0, y0, x1, y1 = overall(drawing.loops)
    return (x0 + x1) / 2, (y0 + y1) / 2


def draw_torque(axes: Axes, place: tuple[float, float], radius: float, sign: float, colour: str) -> None:
    """A round arrow about a place, anticlockwise for a positive sign [L]."""
    angles = np.linspace(math.radians(-60), math.radians(220), 40)
    if sign < 0:
        angles = angles[::-1]
    x = place[0] + radius * np.cos(angles)
    y = place[1] + radius * np.sin(angles)
    axes.plot(x[:-2], y[:-2], color=colour, lw=0.9, zorder=5)
    axes.add_patch(_arrow((x[-3], y[-3]), (x[-1], y[-1]), colour, 0.9, 7))
