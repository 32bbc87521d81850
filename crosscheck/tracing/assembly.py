"""Walls put together: points from knots, walls from strands, links between walls that miss each other."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

import numpy as np
import shapely
from shapely.geometry import Polygon

from crosscheck.tracing.faces import Array, Face, FacedOutline
from crosscheck.tracing.free_end import free_end
from crosscheck.tracing.joining import Strand, ends_at, meeting_place
from crosscheck.tracing.medial_axis import Knot
from crosscheck.tracing.model import Lump, Remark, TracedPoint, TracedWall
from crosscheck.tracing.wall_fit import FittedWall

# Walls brought together by more than this share of their thickness are remarked on.
MOVED = 0.05
# Walls whose midlines miss a joint by more than this share of their thickness get a link to it.
LINK = 0.35
# Directions of two walls in line [cosine].
STEP = np.cos(np.radians(3.0))


@dataclass
class Draft:
    """Points and walls in the making."""

    points: list[TracedPoint] = field(default_factory=list)
    walls: list[TracedWall] = field(default_factory=list)
    lumps: list[Lump] = field(default_factory=list)
    remarks: list[Remark] = field(default_factory=list)
    linked: bool = True


def join(draft: Draft, found: list[Strand], knots: dict[int, Knot], outline: FacedOutline) -> None:
    """Points from knots, walls from strands."""
    # number of the point at the start (0) and end (1) of each strand
    number: dict[tuple[int, int], int] = {}
    order = {id(s): i for i, s in enumerate(found)}
    sides = {k for s in found for k in s.faces}
    for knot, meeting in ends_at(found).items():
        ends = [(order[id(s)], 0 if s.knots == (knot, knot) or s.leaving(knot) is s else 1) for s in meeting]
        # a strand with both ends here comes twice
        ends = [(i, 1 if (i, end) in ends[:n] else end) for n, (i, end) in enumerate(ends)]
        if len(ends) == 1:
            number[ends[0]] = len(draft.points)
            draft.points.append(_end_point(draft, meeting[0], knot, knots[knot], outline))
            continue
        leaving = [found[i].wall if end == 0 else found[i].wall.reversed() for i, end in ends]
        faces = [outline.faces[k] for k in knots[knot].faces if k not in sides]
        number |= _meet(draft, dict(zip(ends, leaving, strict=True)), knots[knot], faces, outline.polygon)
    for i, strand in enumerate(found):
        if strand.knots is None:
            _closed(draft, strand)
            continue
        start, end = number[i, 0], number[i, 1]
        places = np.array([draft.points[n].place for n in (start, end)])
        s, off = strand.wall.along(places)
        wall = strand.wall
        if not wall.straight:
            # an arc of more than half a turn: s of its ends nearest to its span
            full = 2.0 * np.pi / abs(wall.curvature)
            s = s + full * np.round((np.array(wall.span) - s) / full)
        wall = wall.extended(float(s[0]), float(s[1]))
        for k in (0, 1):
            if abs(off[k]) > MOVED * wall.at_thickness(wall.span[k]):
                text = f"a wall whose end was moved by {abs(off[k]):.3g} to meet the others"
                draft.remarks.append(Remark(text, places[k]))
        if start == end:
            _two_halves(draft, wall, start)
        else:
            _add_wall(draft, wall, start, end, off)


def _meet(
    draft: Draft,
    leaving: dict[tuple[int, int], FittedWall],
    region: Knot,
    faces: Sequence[Face],
    polygon: Polygon,
) -> dict[tuple[int, int], int]:
    """The points at which walls that leave a knot begin: one, and links to those whose midlines miss it."""
    walls = list(leaving.values())
    middle = np.array([w.at(w.span[0]) for w in walls]).mean(axis=0)
    place = meeting_place(walls, middle) if len(walls) > 2 else _step(walls, polygon)
    if place is None:
        place = meeting_place(walls, middle)
    off = [abs(float(w.along(place[None])[1][0])) for w in walls]
    far = [d > LINK * w.at_thickness(w.span[0]) for d, w in zip(off, walls, strict=True)]
    feet = [w.at(float(w.along(place[None])[0][0])) for w in walls]
    made: dict[tuple[int, int], int] = {}
    spine = _spine(walls) if any(far) and draft.linked else None
    if not draft.linked:
        far = [False] * len(far)
    if spine is not None:
        return _along_spine(draft, leaving, spine, region)
    if len(walls) == 2 and all(far):
        for key, foot in zip(leaving, feet, strict=True):
            made[key] = len(draft.points)
            draft.points.append(TracedPoint(foot, "corner"))
        first, last = made.values()
        _link(draft, first, last, region, walls)
        return made
    point = len(draft.points)
    draft.points.append(
        _rounded_point(draft, TracedPoint(place, "corner" if len(walls) == 2 else "joint"), walls, faces)
    )
    for key, foot, apart in zip(leaving, feet, far, strict=True):
        made[key] = point
        if apart:
            made[key] = len(draft.points)
            draft.points.append(TracedPoint(foot, "corner"))
            _link(draft, point, made[key], region, walls)
    return made


def _step(walls: Sequence[FittedWall], polygon: Polygon) -> Array | None:
    """Where two walls in line change their thickness, so that their areas are the drawing's."""
    a, b = walls[0].reversed(), walls[1]
    if not (a.straight and b.straight) or a.direction @ b.direction < STEP:
        return None
    start, end = a.at(a.span[1]), b.at(b.span[0])
    length = float((end - start) @ b.direction)
    first, last = a.at_thickness(a.span[1]), b.at_thickness(b.span[0])
    if length <= 0.0 or abs(first - last) < 0.02 * max(first, last):
        return None
    reach = 2.0 * max(first, last) * np.array([-b.direction[1], b.direction[0]])
    between = shapely.intersection(polygon, Polygon([start - reach, end - reach, end + reach, start + reach]))
    x = float(np.clip((between.area - last * length) / (first - last), 0.0, length))
    return np.asarray(0.5 * (start + end) + (x - 0.5 * length) * b.direction)


def _spine(walls: Sequence[FittedWall]) -> tuple[int, int] | None:
    """Two walls in line that leave a knot to both sides; the thickest pair, None without one."""
    pairs = []
    for i, a in enumerate(walls):
        for j, b in enumerate(walls[:i]):
            start = b.at(b.span[0])
            off = abs(float(a.along(start[None])[1][0]))
            thickness = a.at_thickness(a.span[0])
            if a.straight and a.tangent(a.span[0]) @ b.tangent(b.span[0]) < -STEP and off < 0.2 * thickness:
                pairs.append((thickness, j, i))
    return max(pairs)[1:] if pairs and len(walls) > 2 else None


def _along_spine(
    draft: Draft, leaving: dict[tuple[int, int], FittedWall], spine: tuple[int, int], region: Knot
) -> dict[tuple[int, int], int]:
    """Points along two walls in line, one where each other wall of the knot comes in, and links between."""
    keys, walls = list(leaving), list(leaving.values())
    first, last = (walls[k] for k in spine)
    crossing: list[tuple[float, int]] = []
    for k, wall in enumerate(walls):
        if k not in spine:
            place = meeting_place([first, wall], wall.at(wall.span[0]))
            crossing.append((float(first.along(place[None])[0][0]), k))
    # from the wall that leaves backwards to the one that leaves forwards
    crossing.sort(reverse=True)
    made: dict[tuple[int, int], int] = {}
    before: float | None = None
    for s, k in crossing:
        near = 0.5 * walls[k].at_thickness(walls[k].span[0])
        if before is None or before - s > near:
            draft.points.append(TracedPoint(first.at(s), "joint"))
            if before is None:
                made[keys[spine[0]]] = len(draft.points) - 1
            else:
                _link(draft, len(draft.points) - 2, len(draft.points) - 1, region, [first, last])
            before = s
        made[keys[k]] = len(draft.points) - 1
    made[keys[spine[1]]] = len(draft.points) - 1
    return made


def _link(draft: Draft, first: int, last: int, region: Knot, walls: Sequence[FittedWall]) -> None:
    """A short wall between points of one knot, as thick as the drawing is there."""
    start, end = draft.points[first].place, draft.points[last].place
    length = float(np.hypot(*(end - start)))
    apart = np.hypot(*(region.places - 0.5 * (start + end)).T)
    least = min(w.at_thickness(w.span[0]) for w in walls)
    thickness = max(2.0 * float(region.radius[np.argmin(apart)]), least)
    thickness = min(thickness, 2.0 * least)
    link = FittedWall(start, (end - start) / length, 0.0, thickness, 0.0, (0.0, length), 0.0)
    _add_wall(draft, link, first, last, np.zeros(2))
    if region.radius.max() > 0.7 * least:
        text = f"a lump between walls {length:.3g} apart, taken as a wall of thickness {thickness:.3g}"
        draft.remarks.append(Remark(text, 0.5 * (start + end)))


def _add_wall(draft: Draft, wall: FittedWall, start: int, end: int, off: Array) -> None:
    through = None
    if not wall.straight:
        middle = 0.5 * (wall.span[0] + wall.span[1])
        tangent = wall.tangent(middle)
        through = wall.at(middle) + 0.5 * float(off.sum()) * np.array([-tangent[1], tangent[0]])
    thickness = wall.at_thickness(wall.span[0]), wall.at_thickness(wall.span[1])
    if wall.straight:
        # from point to point, as it is written
        origin, chord = draft.points[start].place, draft.points[end].place - draft.points[start].place
        length = float(np.hypot(*chord))
        slope = (thickness[1] - thickness[0]) / length
        wall = FittedWall(origin, chord / length, 0.0, thickness[0], slope, (0.0, length), wall.residual)
    draft.walls.append(TracedWall(start, end, thickness, through, wall))


def _two_halves(draft: Draft, wall: FittedWall, point: int) -> None:
    """A wall that begins and ends at one point, as two."""
    middle = 0.5 * (wall.span[0] + wall.span[1])
    draft.points.append(TracedPoint(wall.at(middle), "corner"))
    new = len(draft.points) - 1
    _add_wall(draft, wall.extended(wall.span[0], middle), point, new, np.zeros(2))
    _add_wall(draft, wall.extended(middle, wall.span[1]), new, point, np.zeros(2))


def _closed(draft: Draft, strand: Strand) -> None:
    """A round tube without joints: two half circles."""
    wall = strand.wall
    centre, radius = wall.centre, 1.0 / abs(wall.curvature)
    first = len(draft.points)
    for sign in (1.0, -1.0):
        draft.points.append(TracedPoint(centre + np.array([sign * radius, 0.0]), "corner"))
    for k, sign in enumerate((1.0, -1.0)):
        start = draft.points[first + k].place
        tangent = np.array([0.0, sign])
        half = FittedWall(
            start, tangent, 1.0 / radius, wall.thickness, 0.0, (0.0, np.pi * radius), wall.residual
        )
        _add_wall(draft, half, first + k, first + 1 - k, np.zeros(2))


def _end_point(draft: Draft, strand: Strand, knot: int, region: Knot, outline: FacedOutline) -> TracedPoint:
    """The point of a free end; its bulb becomes a lump."""
    wall = strand.leaving(knot).reversed().wall
    thickness = wall.at_thickness(wall.span[1])
    arcs = [f for f in (outline.faces[k] for k in region.faces) if f.centre is not None and f.convex]
    arcs = [f for f in arcs if 0.05 * thickness < f.radius <= 0.55 * thickness and f.turn > 1.2]
    full = len(arcs) == 1 and arcs[0].turn > 2.8
    alike = len(arcs) == 2 and abs(arcs[0].radius - arcs[1].radius) < 0.02 * thickness
    radius = min(arcs[0].radius, 0.5 * thickness) if full or alike else None
    end = free_end(wall, outline.polygon, radius)
    place = wall.at(end.s)
    if end.remark:
        draft.remarks.append(Remark(end.remark, place))
    if end.bulb > 0.0:
        draft.lumps.append(Lump(end.bulb, end.place, point=len(draft.points)))
    outer = radius if end.bulb == 0.0 and radius is not None else None
    return TracedPoint(place, "free end", None if outer is None else 0.0, outer)


def _rounded_point(
    draft: Draft, point: TracedPoint, walls: Sequence[FittedWall], faces: Sequence[Face]
) -> TracedPoint:
    """A point with the rounding found on faces that belong to no wall; ``walls`` leave it."""
    if len(walls) == 2 and not all(w.straight for w in walls):
        return point
    thickness = max(w.at_thickness(w.span[0]) for w in walls)
    arcs = [f for f in faces if f.centre is not None and f.radius < 40.0 * thickness and f.turn > 0.05]
    inner = [f.radius for f in arcs if not f.convex]
    outer = [f.radius for f in arcs if f.convex]
    if len(walls) > 2:
        if inner and max(inner) > 1.1 * min(inner):
            text = f"fillets of {min(inner):.3g} to {max(inner):.3g} at one joint, taken as their mean"
            draft.remarks.append(Remark(text, point.place))
        return replace(point, inner=float(np.mean(inner))) if inner else point
    if not inner and not outer:
        return point
    r = float(np.mean(inner)) if inner else 0.0
    follows = r + 0.5 * sum(w.at_thickness(w.span[0]) for w in walls)
    big = float(np.mean(outer)) if outer else 0.0
    return replace(point, inner=r, outer=None if abs(big - follows) < 0.02 * thickness else big)


def stand_in(draft: Draft, outline: FacedOutline) -> None:
    """One wall of the drawing's area along its longer axis, where there is none to be found."""
    box = np.array(shapely.minimum_rotated_rectangle(outline.polygon).exterior.coords)[:4]
    sides = np.diff(np.vstack([box, box[:1]]), axis=0)
    lengths = np.hypot(*sides.T)
    k = int(np.argmax(lengths[:2]))
    direction, length = sides[k] / lengths[k], float(lengths[k])
    middle = np.array(outline.polygon.centroid.coords[0])
    thickness = outline.polygon.area / length
    wall = FittedWall(middle, direction, 0.0, thickness, 0.0, (-0.5 * length, 0.5 * length), 0.0)
    for s in wall.span:
        draft.points.append(TracedPoint(wall.at(s), "free end"))
    _add_wall(draft, wall, 0, 1, np.zeros(2))
    text = "no wall was found: one of the drawing's area along its longer side stands in"
    draft.remarks.append(Remark(text, middle))
