"""Joints of a section and the correction that each has, if any."""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass

from beam_theory.corner_terms import (
    CELL_CORNER_RANGE,
    FREE_END,
    SHARP_CORNER,
    TEE_RANGE,
    cell_corner_area,
    cell_corner_length,
    fillet_corner,
    tee,
)
from beam_theory.network import Network

__all__ = ["Joint", "WallEnd", "joints"]

_SAME = 1e-6
_RIGHT = math.radians(0.05)
_ALONG = math.radians(0.05)


@dataclass(frozen=True)
class WallEnd:
    """One end of a wall at a point: piece number there, direction away from the point, thickness, moduli."""

    wall: str
    piece: int
    at_start: bool
    away: complex
    t: float
    g: float
    curved: bool
    in_cell: bool


@dataclass(frozen=True)
class Joint:
    """A point with what is added for it.

    Attributes
    ----------
    point : its name
    ends : the wall ends that meet there
    term : addend of J, weighted with g [L^4]; None where no term applies
    source : what stands behind it, or why there is nothing
    length, area : addends of a cell's integral of ds/(g t) [-] and of the area of the cell inside [L^2]
    turn : angle by which the midline turns there [rad]
    """

    point: str
    ends: tuple[WallEnd, ...]
    term: float | None
    source: str
    length: float = 0.0
    area: float = 0.0
    turn: float = 0.0

    @property
    def is_open(self) -> bool:
        """True when no wall of the joint belongs to a cell."""
        return not any(end.in_cell for end in self.ends)


def joints(graph: Network) -> tuple[Joint, ...]:
    """Every point of a section with its correction."""
    p, section = graph.pieces, graph.section
    ends: dict[str, list[WallEnd]] = {}
    for wall in section.walls:
        number, rows = graph.walls[wall.name]
        inside = bool(graph.cells.in_cell[number])
        first, last = rows.start, rows.stop - 1
        heading = float(p.curves.heading[first])
        leaving = float(p.curves.heading[last] + p.curves.sweep[last])
        ends.setdefault(wall.start, []).append(
            WallEnd(wall.name, first, True, cmath.exp(1j * heading), wall.thickness[0], wall.g,
                    bool(p.curves.sweep[first] != 0.0), inside)
        )  # fmt: skip
        ends.setdefault(wall.end, []).append(
            WallEnd(wall.name, last, False, -cmath.exp(1j * leaving), wall.thickness[1], wall.g,
                    bool(p.curves.sweep[last] != 0.0), inside)
        )  # fmt: skip
    fillets = {c.point: (c.inner_radius, c.outer_radius) for c in section.corners}
    return tuple(_joint(graph, name, tuple(found), fillets.get(name)) for name, found in ends.items())


def _joint(
    graph: Network, point: str, ends: tuple[WallEnd, ...], fillet: tuple[float, float | None] | None
) -> Joint:
    """The correction of one point."""
    radius = fillet[0] if fillet else 0.0
    if point in graph.bends:
        return Joint(point, ends, 0.0, "bend as an arc")
    if len(ends) == 1:
        term = -FREE_END * ends[0].g * ends[0].t ** 4
        return Joint(point, ends, term, "free end, 0.105 t^4 (Timoshenko and Goodier)")
    if max(e.g for e in ends) > (1.0 + _SAME) * min(e.g for e in ends):
        return Joint(point, ends, None, "walls of different shear modulus")
    if len(ends) == 2:
        return _corner(point, (ends[0], ends[1]), radius)
    if len(ends) == 3:
        return _tee(point, ends, radius)
    return Joint(point, ends, None, f"{len(ends)} walls meet")


def _corner(point: str, ends: tuple[WallEnd, WallEnd], radius: float) -> Joint:
    """Two walls that meet; the turn is that of walking in along the first and out along the second."""
    one, two = ends
    turn = cmath.phase(two.away / -one.away)
    equal = abs(one.t - two.t) <= _SAME * max(one.t, two.t)
    if abs(turn) <= _ALONG:
        if equal:
            return Joint(point, ends, 0.0, "smooth run of one thickness")
        return Joint(point, ends, None, "step of thickness in a smooth run")
    if one.curved or two.curved:
        return Joint(point, ends, None, "corner at the end of an arc")
    right = abs(abs(turn) - 0.5 * math.pi) <= _RIGHT
    if one.in_cell:
        return _cell_corner(point, ends, turn, radius, equal and right)
    g = one.g
    if not right:
        return Joint(point, ends, None, f"walls at {180.0 - abs(math.degrees(turn)):.4g} degrees")
    if radius == 0.0 and equal:
        return Joint(point, ends, SHARP_CORNER * g * one.t**4, "sharp right angle of equal walls (row D16)")
    thick, thin = max(one.t, two.t), min(one.t, two.t)
    if thin >= 0.5 * thick and 0.5 * thick <= radius <= 2.0 * thick:
        source = "right angle with a fillet (Trayer and March; Young and Budynas table 10.1)"
        return Joint(point, ends, g * fillet_corner(one.t, two.t, radius), source)
    return Joint(point, ends, None, "right angle of unequal walls, or fillet out of range")


def _cell_corner(
    point: str, ends: tuple[WallEnd, WallEnd], turn: float, radius: float, square: bool
) -> Joint:
    """A sharp corner of a cell."""
    one, two = ends
    degrees = abs(math.degrees(turn))
    low, high, ratio = CELL_CORNER_RANGE
    unequal = max(one.t, two.t) / min(one.t, two.t)
    if radius > 0.0:
        return Joint(point, ends, None, "corner of a cell with a fillet and no bend")
    if not low <= degrees <= high or unequal > ratio or (unequal > 1.0 + _SAME and degrees < 30.0):
        return Joint(point, ends, None, f"corner of a cell out of range: turn {degrees:.4g} degrees")
    term = SHARP_CORNER * one.g * one.t**4 if square else 0.0
    length = cell_corner_length(turn, one.t, two.t) / one.g
    area = cell_corner_area(turn, one.t, two.t)
    source = "sharp corner of a cell (conformal map; Hall 1968 at right angles)"
    return Joint(point, ends, term, source, length, area, turn)


def _tee(point: str, ends: tuple[WallEnd, ...], radius: float) -> Joint:
    """Three walls: a straight-through flange with a stem at right angles, all of them open."""
    if any(end.curved for end in ends):
        return Joint(point, ends, None, "joint of three walls with an arc")
    if any(end.in_cell for end in ends):
        return Joint(point, ends, None, "joint of three walls of which some are in a cell")
    for stem in ends:
        a, b = (end for end in ends if end is not stem)
        through = abs(cmath.phase(a.away / -b.away)) <= _ALONG and abs(a.t - b.t) <= _SAME * a.t
        square = abs(abs(cmath.phase(stem.away / a.away)) - 0.5 * math.pi) <= _RIGHT
        if through and square:
            low, high, r_low, r_high = TEE_RANGE
            if not low - 1e-9 <= stem.t / a.t <= high + 1e-9 or not r_low <= radius / a.t <= r_high:
                return Joint(point, ends, None, "tee out of the range of its formula")
            source = "tee (El Darwish and Johnston 1965)"
            return Joint(point, ends, a.g * tee(a.t, stem.t, radius), source)
    return Joint(point, ends, None, "three walls that form no tee")
