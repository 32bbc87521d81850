"""The thin-walled section as beam_theory takes it: points, walls, booms, cuts, corners and loads."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from beam_theory.errors import SectionError

__all__ = ["Boom", "Corner", "Cut", "Load", "Section", "Wall"]

Position = tuple[float, float]


@dataclass(frozen=True)
class Wall:
    """A wall: a straight midline or a circular arc between two named points.

    Parameters
    ----------
    name : str
        Unique name.
    start, end : str
        Names of two different points; the wall's own direction runs from start to end.
    thickness : (float, float) [L]
        At start and end, linear along the midline in between; both above zero.
    arc_through : (float, float) or None [L]
        A third point of a circular arc, between start and end; None for a straight wall.
    e, g : float [-]
        Young's and shear modulus over those of the base material.
    direct_share : float [-]
        Share of the wall that carries direct stress, 0..1; 0 is a shear-only skin.
    """

    name: str
    start: str
    end: str
    thickness: tuple[float, float]
    arc_through: Position | None = None
    e: float = 1.0
    g: float = 1.0
    direct_share: float = 1.0


@dataclass(frozen=True)
class Boom:
    """An area that carries direct stress only, at a point or on a wall.

    Parameters
    ----------
    area : its area [L^2]
    point : name of the point where it is, or
    wall, at : the wall, and the fraction of its length where it is, 0 to 1 [-]
    e : Young's modulus over that of the base material [-]
    """

    area: float
    point: str | None = None
    wall: str | None = None
    at: float | None = None
    e: float = 1.0


@dataclass(frozen=True)
class Cut:
    """Where the hand method cuts a cell.

    Parameters
    ----------
    wall : name of the wall
    at : fraction of its length, 0 to 1 [-]
    """

    wall: str
    at: float = 0.0


@dataclass(frozen=True)
class Corner:
    """A rounded corner.

    Parameters
    ----------
    point : name of the point
    inner_radius : radius of the inner face [L]
    outer_radius : radius of the outer face [L]; inner plus thickness where None
    """

    point: str
    inner_radius: float
    outer_radius: float | None = None


@dataclass(frozen=True)
class Load:
    """Stress resultants on the face whose outward normal is z.

    Parameters
    ----------
    name : str
    shear : (float, float) [F]
        Vx, Vy.
    through : (float, float) or None [L]
        A point of the line of action; None: through the shear centre of this side.
    torque : float [F L]
        A couple, anticlockwise positive, added to what the shear makes.
    axial : float [F]
        N at the centroid, tension positive.
    moment : (float, float) [F L]
        Mx puts +y in tension, My puts +x in tension (so My is not the right-hand vector).
    bimoment : float [F L^2]
        Tension where the warping function is positive.
    """

    name: str
    shear: Position = (0.0, 0.0)
    through: Position | None = None
    torque: float = 0.0
    axial: float = 0.0
    moment: Position = (0.0, 0.0)
    bimoment: float = 0.0


@dataclass(frozen=True)
class Section:
    """A connected graph of walls between named points, with booms, cuts and rounded corners.

    Corners matter to the level `corrected` only; the midline of the other levels has sharp corners.

    Parameters
    ----------
    points : place (x, y) of each point by its name [L]
    walls : at least one
    booms, cuts, corners : as many as there are
    """

    points: Mapping[str, Position]
    walls: tuple[Wall, ...]
    booms: tuple[Boom, ...] = ()
    cuts: tuple[Cut, ...] = ()
    corners: tuple[Corner, ...] = field(default=())

    def check(self) -> None:
        """Raise SectionError with every fault that can be seen without solving."""
        faults = [
            *_point_faults(self),
            *_wall_faults(self),
            *_boom_faults(self),
            *_cut_faults(self),
            *_corner_faults(self),
        ]
        if not faults:
            faults = _connection_faults(self)
        if faults:
            raise SectionError(faults)


def _finite(*values: float) -> bool:
    """True when every value is a finite number."""
    return all(math.isfinite(value) for value in values)


def _point_faults(section: Section) -> list[str]:
    """Faults of the points."""
    return [
        f"points.{name}: coordinates must be finite, got {xy}"
        for name, xy in section.points.items()
        if not _finite(*xy)
    ]


def _wall_faults(section: Section) -> list[str]:
    """Faults of the walls, each on its own."""
    faults: list[str] = []
    if not section.walls:
        faults.append("walls: at least one wall is needed, got none")
    seen: set[str] = set()
    for wall in section.walls:
        where = f"walls.{wall.name}"
        if wall.name in seen:
            faults.append(f"{where}: name used twice; give each wall its own name")
        seen.add(wall.name)
        missing = [end for end in (wall.start, wall.end) if end not in section.points]
        faults += [f"{where}: no point named {end!r}; known: {sorted(section.points)}" for end in missing]
        if wall.start == wall.end:
            faults.append(
                f"{where}: starts and ends on point {wall.start!r}; split a closed wall into two arcs"
            )
        elif (
            not missing
            and wall.arc_through is None
            and section.points[wall.start] == section.points[wall.end]
        ):
            faults.append(f"{where}: length is zero; start and end lie on the same place")
        if len(wall.thickness) != 2 or not _finite(*wall.thickness) or min(wall.thickness) <= 0.0:
            faults.append(f"{where}.thickness: two finite values > 0, got {wall.thickness}")
        for key, value in (("e", wall.e), ("g", wall.g)):
            if not _finite(value) or value <= 0.0:
                faults.append(f"{where}.{key}: must be finite and > 0, got {value}")
        if not _finite(wall.direct_share) or not 0.0 <= wall.direct_share <= 1.0:
            faults.append(f"{where}.direct_share: must be within 0..1, got {wall.direct_share}")
        if wall.arc_through is not None and not missing:
            faults += _arc_faults(
                where, section.points[wall.start], section.points[wall.end], wall.arc_through
            )
    return faults


def _arc_faults(where: str, start: Position, end: Position, through: Position) -> list[str]:
    """Faults of an arc's third point."""
    if not _finite(*through):
        return [f"{where}.arc_through: coordinates must be finite, got {through}"]
    a, b, c = complex(*start), complex(*end), complex(*through)
    size = max(abs(b - a), abs(c - a), abs(b - c))
    if min(abs(b - a), abs(c - a), abs(b - c)) <= 1e-12 * size:
        return [f"{where}.arc_through: three different places are needed, got {start}, {through}, {end}"]
    inward = (c - a).conjugate() * (b - c)
    if abs(inward.imag) <= 1e-12 * abs(inward):
        return [
            f"{where}.arc_through: {through} lies in line with the ends; leave it out for a straight wall"
        ]
    return []


def _boom_faults(section: Section) -> list[str]:
    """Faults of the booms."""
    faults: list[str] = []
    walls = {wall.name for wall in section.walls}
    used = {end for wall in section.walls for end in (wall.start, wall.end)}
    for i, boom in enumerate(section.booms):
        where = f"booms[{i}]"
        if not _finite(boom.area) or boom.area <= 0.0:
            faults.append(f"{where}.area: must be finite and > 0, got {boom.area}")
        if not _finite(boom.e) or boom.e <= 0.0:
            faults.append(f"{where}.e: must be finite and > 0, got {boom.e}")
        if (boom.point is None) == (boom.wall is None):
            faults.append(f"{where}: give either a point or a wall with a fraction")
        elif boom.point is not None and boom.point not in used:
            faults.append(f"{where}.point: no wall starts or ends on {boom.point!r}; join it by a wall")
        elif boom.wall is not None:
            if boom.wall not in walls:
                faults.append(f"{where}.wall: no wall named {boom.wall!r}; known: {sorted(walls)}")
            if boom.at is None or not _finite(boom.at) or not 0.0 <= boom.at <= 1.0:
                faults.append(f"{where}.at: a fraction within 0..1 is needed, got {boom.at}")
    return faults


def _cut_faults(section: Section) -> list[str]:
    """Faults of the cuts that need no graph."""
    faults: list[str] = []
    walls = {wall.name for wall in section.walls}
    for i, cut in enumerate(section.cuts):
        if cut.wall not in walls:
            faults.append(f"cuts[{i}].wall: no wall named {cut.wall!r}; known: {sorted(walls)}")
        if not _finite(cut.at) or not 0.0 <= cut.at <= 1.0:
            faults.append(f"cuts[{i}].at: a fraction within 0..1 is needed, got {cut.at}")
    return faults


def _corner_faults(section: Section) -> list[str]:
    """Faults of the rounded corners that need no geometry."""
    faults: list[str] = []
    for i, corner in enumerate(section.corners):
        if corner.point not in section.points:
            faults.append(f"corners[{i}].point: no point named {corner.point!r}")
        if not _finite(corner.inner_radius) or corner.inner_radius < 0.0:
            faults.append(f"corners[{i}].inner_radius: must be finite and >= 0, got {corner.inner_radius}")
        if corner.outer_radius is not None and (
            not _finite(corner.outer_radius) or corner.outer_radius < 0.0
        ):
            faults.append(f"corners[{i}].outer_radius: must be finite and >= 0, got {corner.outer_radius}")
    return faults


def _connection_faults(section: Section) -> list[str]:
    """A fault when the walls fall into parts that share no point."""
    group: dict[str, str] = {}

    def root(name: str) -> str:
        group.setdefault(name, name)
        while group[name] != name:
            group[name] = group[group[name]]
            name = group[name]
        return name

    for wall in section.walls:
        group[root(wall.start)] = root(wall.end)
    home = root(section.walls[0].start)
    loose = [wall.name for wall in section.walls if root(wall.start) != home]
    if not loose:
        return []
    return [f"walls: all must hang together; no way from {section.walls[0].name!r} to {loose[:5]}"]
