"""A solid given by its outline: closed lines of straight and circular edges, one round the others."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from shapely.geometry import Polygon

from .band import Array
from .boundary import Arc, Piece, Ring, polyline
from .errors import OutlineError
from .local_width import with_widths
from .outline import Outline
from .partition import Cluster, Partition
from .section import Section

# Name under which the whole solid stands among walls and parts.
NAME = "solid"
# Places closer than this share of the overall dimension are one.
SAME_PLACE = 1e-9
# Rise of an arc over its chord below which it is a line.
FLAT_RISE = 1e-10
# Steps [rad] in which arcs are checked for crossings: the finer ones only where the coarse one finds one.
STEPS = (0.05, 0.01, 0.001)

Place = tuple[float, float]


@dataclass(frozen=True)
class ClosedLine:
    """A closed line of straight and circular edges.

    Parameters
    ----------
    points : tuple of (float, float)
        Corners in order, either way round, the first not repeated [L].
    through : tuple of (float, float) or None
        For the edge that leaves each corner: a third point of its arc, or None where it is straight. May be
        left out where all are straight.
    """

    points: tuple[Place, ...]
    through: tuple[Place | None, ...] = ()

    @classmethod
    def circle(cls, centre: Place, radius: float) -> ClosedLine:
        """A full circle [L]."""
        x, y = centre
        ends = ((x + radius, y), (x - radius, y))
        return cls(ends, ((x, y + radius), (x, y - radius)))


@dataclass(frozen=True)
class Solid:
    """One material inside an outline.

    Parameters
    ----------
    rings : tuple of ClosedLine
        The outer boundary and any openings, in any order.
    e, g : float
        Moduli over those of the base material [-].
    nu : float, optional
        Poisson's ratio [-].
    """

    rings: tuple[ClosedLine, ...]
    e: float = 1.0
    g: float = 1.0
    nu: float | None = None


def outline_of_solid(solid: Solid) -> Outline:
    """Check a solid and prepare it for the mesh: one part without strips.

    Parameters
    ----------
    solid : Solid

    Returns
    -------
    Outline
        Places as in the solid [L].

    Raises
    ------
    OutlineError
        Rings that do not bound one solid; ``walls`` names them as rings[0], rings[1], ...
    """
    oriented = _oriented(solid)
    cluster = Cluster((), (NAME,), with_widths(oriented))
    drawn = tuple(polyline(r) for r in oriented)
    extent = float(np.ptp(drawn[0], axis=0).max())
    section = Section({}, (), nu=solid.nu)
    moduli = {NAME: (solid.e, solid.g)}
    return Outline(section, {}, {}, Partition({}, (cluster,)), drawn, extent, (), moduli)


def loops_of_solid(solid: Solid) -> tuple[Array, ...]:
    """Check a solid as ``outline_of_solid`` does.

    Parameters
    ----------
    solid : Solid

    Returns
    -------
    tuple of (n, 2) arrays
        Closed polygons, the outer one first [L].
    """
    return tuple(polyline(r) for r in _oriented(solid))


def _oriented(solid: Solid) -> list[Ring]:
    """The rings of a solid with the material on their left, the outer one first."""
    names = [f"rings[{i}]" for i in range(len(solid.rings))]
    if not names:
        raise OutlineError("ring", (NAME,), "no ring")
    rings = [_ring(line, name) for line, name in zip(solid.rings, names, strict=True)]
    loops = _clear(rings, names)
    outer = _outer(loops, names)
    oriented = [_turned(r, p, i == outer) for i, (r, p) in enumerate(zip(rings, loops, strict=True))]
    oriented.insert(0, oriented.pop(outer))
    return oriented


def _ring(line: ClosedLine, name: str) -> Ring:
    """Pieces of a closed line as it was given."""
    places = np.array(line.points, dtype=float).reshape(-1, 2)
    through = line.through or (None,) * len(places)
    curved = sum(t is not None for t in through)
    finite = np.isfinite(places).all() and all(np.isfinite(t).all() for t in through if t is not None)
    if len(through) != len(places) or len(places) < (2 if curved else 3) or not finite:
        found = f"{len(places)} points and {curved} arcs" if finite else "a place that is not finite"
        raise OutlineError("ring", (name,), found)
    least = SAME_PLACE * float(np.ptp(places, axis=0).max())
    ring = []
    for i, (a, b, third) in enumerate(zip(places, np.roll(places, -1, axis=0), through, strict=True)):
        if np.hypot(*(b - a)) <= least:
            raise OutlineError("zero length", (name,), f"edge {i} from ({a[0]:.6g}, {a[1]:.6g}) to itself")
        arc = None if third is None else _arc(a, b, np.array(third, dtype=float), f"edge {i}", name)
        ring.append(Piece("closing" if arc is None else "arc", a, b, arc=arc))
    return ring


def _arc(a: Array, b: Array, m: Array, where: str, name: str) -> Arc | None:
    """The arc from a to b through m; None where the three lie on one line."""
    chord, to_m, from_m = b - a, m - a, b - m
    span = float(np.hypot(*chord))
    rise = float(chord[0] * to_m[1] - chord[1] * to_m[0]) / span
    near = min(float(np.hypot(*to_m)), float(np.hypot(*from_m)))
    if near <= SAME_PLACE * span or (abs(rise) <= FLAT_RISE * span and to_m @ from_m < 0.0):
        raise OutlineError("arc", (name,), f"({m[0]:.6g}, {m[1]:.6g}) on {where}")
    if abs(rise) <= FLAT_RISE * span:
        return None
    # centre at equal distance from a, b and m, in coordinates along and across the chord
    along = float(to_m @ chord) / span
    height = (along * (along - span) + rise * rise) / (2.0 * rise)
    across = np.array([-chord[1], chord[0]]) / span
    centre = a + 0.5 * chord + height * across
    radius = float(np.hypot(0.5 * span, height))
    first = float(np.arctan2(*(a - centre)[::-1]))
    last = float(np.arctan2(*(b - centre)[::-1]))
    # m to the left of the chord: the arc runs clockwise
    sweep = (last - first) % (2.0 * np.pi)
    return Arc(centre, radius, first, first + (sweep - 2.0 * np.pi if rise > 0.0 else sweep))


def _clear(rings: list[Ring], names: list[str]) -> list[Polygon]:
    """The rings as polygons that neither cross nor touch themselves or each other."""
    fault: OutlineError | None = None
    for step in STEPS:
        loops = [polyline(r, step) for r in rings]
        fault = _crossing(loops, names)
        if fault is None:
            return [Polygon(p) for p in loops]
        if not any(p.arc is not None for r in rings for p in r):
            break
    assert fault is not None
    raise fault


def _crossing(loops: list[Array], names: list[str]) -> OutlineError | None:
    """The first crossing or touch of closed polygons."""
    lines = [shapely.LinearRing(p) for p in loops]
    for line, name in zip(lines, names, strict=True):
        if not line.is_simple or not Polygon(line).is_valid:
            reason = shapely.is_valid_reason(Polygon(line))
            return OutlineError("crossing", (name,), f"a ring that meets itself ({reason.lower()})")
    tree = shapely.STRtree(lines)
    first, second = tree.query(lines, predicate="intersects")
    for i, j in zip(first.tolist(), second.tolist(), strict=True):
        if i < j:
            x, y = shapely.intersection(lines[i], lines[j]).representative_point().coords[0]
            found = f"{names[i]} and {names[j]} that meet near ({x:.6g}, {y:.6g})"
            return OutlineError("crossing", (names[i], names[j]), found)
    return None


def _outer(loops: list[Polygon], names: list[str]) -> int:
    """Number of the ring that holds all others; the others must lie side by side."""
    outer = int(np.argmax([p.area for p in loops]))
    order = sorted(range(len(loops)), key=lambda i: i != outer)
    for i in order[1:]:
        if not loops[outer].contains(loops[i]):
            raise OutlineError("opening", (names[i],), f"{names[i]} outside {names[outer]}")
    tree = shapely.STRtree(loops)
    for i, j in zip(*(t.tolist() for t in tree.query(loops, predicate="contains")), strict=True):
        if i not in (j, outer):
            raise OutlineError("opening", (names[j],), f"{names[j]} inside {names[i]}")
    return outer


def _turned(ring: Ring, polygon: Polygon, outer: bool) -> Ring:
    """The ring anticlockwise where it is the outer one, clockwise where it is an opening."""
    if polygon.exterior.is_ccw == outer:
        return ring
    made = []
    for p in reversed(ring):
        arc = None if p.arc is None else Arc(p.arc.centre, p.arc.radius, p.arc.last, p.arc.first)
        made.append(Piece(p.kind, p.end, p.start, arc=arc))
    return made
