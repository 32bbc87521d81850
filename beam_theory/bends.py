"""The run of each wall's midline: one stroke, or more where bends at its ends are rounded."""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass

from beam_theory.curve import arc
from beam_theory.errors import SectionError
from beam_theory.section import Corner, Section

__all__ = ["Run", "Stroke", "bend_radius", "runs"]

_STRAIGHT_ON = 1e-9


@dataclass(frozen=True)
class Stroke:
    """A straight line or arc that covers the fractions first..last of a wall."""

    first: float
    last: float
    start: complex
    heading: float
    length: float
    sweep: float


@dataclass(frozen=True)
class Run:
    """Strokes of every wall in order, and places of the points (moved where a bend is rounded)."""

    strokes: tuple[tuple[Stroke, ...], ...]
    places: dict[str, complex]
    bends: tuple[str, ...]


def bend_radius(corner: Corner, thickness: float) -> float | None:
    """Radius of the midline of a bend [L]; None where only the inside is rounded (a fillet).

    The outer radius follows as inner plus thickness; a given one counts as a bend's within half a thickness.
    """
    follows = corner.inner_radius + thickness
    outer = follows if corner.outer_radius is None else corner.outer_radius
    return 0.5 * (corner.inner_radius + outer) if abs(outer - follows) <= 0.5 * thickness else None


def runs(section: Section, rounded: bool) -> Run:
    """Midlines of a checked section, sharp or with its corners rounded where two straight walls meet.

    A rounded wall keeps its fractions: those of the sharp wall; inside a bend they are spread evenly over its
    half of the arc.
    """
    places = {name: complex(*xy) for name, xy in section.points.items()}
    ends: dict[str, list[tuple[int, bool]]] = {}
    for i, wall in enumerate(section.walls):
        ends.setdefault(wall.start, []).append((i, True))
        ends.setdefault(wall.end, []).append((i, False))
    # (wall, at its start): tangent length, radius, half of the turn when walking away from the point.
    half: dict[tuple[int, bool], tuple[float, float, float]] = {}
    moved = dict(places)
    done: list[str] = []
    for corner in section.corners if rounded else ():
        two = ends.get(corner.point, [])
        if len(two) != 2 or any(section.walls[i].arc_through is not None for i, _ in two):
            continue
        away = []
        for i, at_start in two:
            wall = section.walls[i]
            other = places[wall.end if at_start else wall.start]
            away.append((other - places[corner.point]) / abs(other - places[corner.point]))
        t = 0.5 * sum(section.walls[i].thickness[0 if at_start else 1] for i, at_start in two)
        radius = bend_radius(corner, t)
        turn = cmath.phase(away[0] / -away[1])
        if radius is None or abs(turn) <= _STRAIGHT_ON:
            continue
        reach = radius * math.tan(0.5 * abs(turn))
        half[two[0]] = (reach, radius, 0.5 * turn)
        half[two[1]] = (reach, radius, -0.5 * turn)
        middle = (away[0] + away[1]) / abs(away[0] + away[1])
        moved[corner.point] += middle * radius * (1.0 / math.cos(0.5 * turn) - 1.0)
        done.append(corner.point)
    strokes = tuple(_wall_strokes(section, i, places, moved, half) for i in range(len(section.walls)))
    return Run(strokes, moved, tuple(done))


def _wall_strokes(
    section: Section,
    number: int,
    places: dict[str, complex],
    moved: dict[str, complex],
    half: dict[tuple[int, bool], tuple[float, float, float]],
) -> tuple[Stroke, ...]:
    """Half bend at the start, the wall itself, half bend at the end."""
    wall = section.walls[number]
    start, end = places[wall.start], places[wall.end]
    through = None if wall.arc_through is None else complex(*wall.arc_through)
    heading, length, sweep = arc(start, end, through)
    first, last = half.get((number, True)), half.get((number, False))
    if first is None and last is None:
        return (Stroke(0.0, 1.0, start, heading, length, sweep),)
    along = cmath.exp(1j * heading)
    low = first[0] if first else 0.0
    high = length - (last[0] if last else 0.0)
    if high <= low * (1.0 + 1e-12):
        raise SectionError(
            [
                f"corners: the bends at the ends of wall {wall.name!r} need {low + length - high:.6g}, it is "
                f"{length:.6g} long; use smaller radii"
            ]
        )
    out: list[Stroke] = []
    if first:
        turn = first[2]
        out.append(Stroke(0.0, low / length, moved[wall.start], heading - turn, first[1] * abs(turn), turn))
    out.append(Stroke(low / length, high / length, start + along * low, heading, high - low, 0.0))
    if last:
        turn = -last[2]
        out.append(Stroke(high / length, 1.0, start + along * high, heading, last[1] * abs(turn), turn))
    return tuple(out)
