"""How well walls stand for their drawing: the outline rebuilt from them against the drawn one."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import shapely
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components
from shapely.geometry import Polygon

import fe_models
from crosscheck.comparison.models import boom_place, fe_section
from crosscheck.section_file.model import SectionFile
from crosscheck.tracing.faces import Array
from crosscheck.tracing.model import WallModel

# Least share of the area in clear walls, least length over thickness of the longest wall, and largest
# thickness over the radius of an arc, for thin-walled theory (common practice puts thin walls well beyond).
LEAST_CLEAR = 0.5
LEAST_SLENDER = 4.0
MOST_CURVED = 0.5
# Largest difference of area and of second moments, and largest distance over the mean thickness, of a good
# tracing.
MOST_APART = 0.02
MOST_DISTANT = 0.5
# Area, and centroid over the overall size, nearer than this are one section's to compare (its limit: 0.005).
AGREES = 0.004
# Walls at a point whose directions differ by less run on [cosine].
ONWARD = 0.98
# Rise of a chord of the rebuilt outline over the mean thickness.
RISE = 1e-3
# Boundaries nearer to a lump than this many roots of its area are its own.
LUMP_REACH = 1.2


@dataclass(frozen=True)
class Quality:
    """The drawing beside the outline rebuilt from the walls.

    Attributes
    ----------
    drawn, rebuilt : area [L^2] and Ixx, Iyy, Ixy [L^4] about the drawing's centroid; lumps as booms in the
        second
    distance, place : largest distance between both boundaries, lumps apart, and where on them [L]; None
        where not rebuilt
    loops, rebuilt_loops : polygons of both
    refused : why the walls make no outline; empty where they do
    thickness : mean thickness of the drawing [L]
    agrees : True where area and centroid are near enough to be compared as one section
    unsuited : why thin-walled theory does not apply, one sentence each
    """

    drawn: tuple[float, float, float, float]
    rebuilt: tuple[float, float, float, float] | None
    distance: float | None
    place: Array | None
    loops: tuple[Array, ...]
    rebuilt_loops: tuple[Array, ...]
    refused: str
    unsuited: tuple[str, ...]
    thickness: float
    agrees: bool

    @property
    def apart(self) -> tuple[float, ...] | None:
        """Rebuilt minus drawn: area and Ixx, Iyy over the drawn ones [-]."""
        if self.rebuilt is None:
            return None
        return tuple(r / d - 1.0 for r, d in zip(self.rebuilt[:3], self.drawn[:3], strict=True))

    @property
    def good(self) -> bool:
        """True where the walls stand for the drawing, and thin-walled theory may."""
        if self.unsuited or self.apart is None or self.distance is None:
            return False
        return max(map(abs, self.apart)) <= MOST_APART and self.distance <= MOST_DISTANT * self.thickness


def rebuilt_outline(section: SectionFile) -> fe_models.Outline | fe_models.OutlineError:
    """The outline that the walls make, or why they make none."""
    try:
        return fe_models.outline_of_walls(fe_section(section))
    except fe_models.OutlineError as fault:
        return fault


def polygon_of(outline: fe_models.Outline, thickness: float) -> Polygon:
    """The solid of walls as a polygon, fine beside their thickness [L]."""
    loops = outline.fine_loops(RISE * thickness)
    return Polygon(loops[0], loops[1:])


def quality(model: WallModel, section: SectionFile) -> Quality:
    """Hold the outline rebuilt from a section's walls against the drawn one.

    Parameters
    ----------
    model : WallModel
    section : SectionFile
        The same walls as written, with booms for the lumps.
    """
    polygon = model.drawn
    centroid = np.array(polygon.centroid.coords[0])
    own = _about(polygon, centroid)
    loops = tuple(np.array(r.coords)[:-1] for r in (polygon.exterior, *polygon.interiors))
    unsuited = _unsuited(model)
    found = rebuilt_outline(section)
    if isinstance(found, fe_models.OutlineError):
        return Quality(own, None, None, None, loops, (), str(found), unsuited, model.outline.thickness, False)
    values = np.array(_moments(found, centroid))
    first = np.array(found.moments(centroid).first)
    for boom in section.booms:
        x, y = np.array(boom_place(section, boom)) - centroid
        values += boom.area * np.array([1.0, y * y, x * x, x * y])
        first += boom.area * np.array([x, y])
    off = max(abs(values[0] / own[0] - 1.0), float(np.abs(first / values[0]).max()) / found.extent)
    step = 0.2 * model.outline.thickness
    beside = [(lump.place, LUMP_REACH * float(np.sqrt(lump.area))) for lump in model.lumps]
    distance, place = _distance(polygon, polygon_of(found, model.outline.thickness), step, beside)
    rebuilt = (float(values[0]), float(values[1]), float(values[2]), float(values[3]))
    agrees = bool(off < AGREES)
    thickness = model.outline.thickness
    return Quality(own, rebuilt, distance, place, loops, found.loops, "", unsuited, thickness, agrees)


def _about(polygon: Polygon, pole: Array) -> tuple[float, float, float, float]:
    """Area, Ixx, Iyy and Ixy of a polygon."""
    total = np.zeros(4)
    for number, ring in enumerate((polygon.exterior, *polygon.interiors)):
        x, y = (np.array(ring.coords) - pole).T
        x0, x1, y0, y1 = x[:-1], x[1:], y[:-1], y[1:]
        cross = x0 * y1 - x1 * y0
        own = [
            0.5 * cross.sum(),
            (cross * (y0 * y0 + y0 * y1 + y1 * y1)).sum() / 12.0,
            (cross * (x0 * x0 + x0 * x1 + x1 * x1)).sum() / 12.0,
            (cross * (x0 * y1 + 2.0 * x0 * y0 + 2.0 * x1 * y1 + x1 * y0)).sum() / 24.0,
        ]
        sign = -np.sign(own[0]) if number else np.sign(own[0])
        total += sign * np.array(own)
    return float(total[0]), float(total[1]), float(total[2]), float(total[3])


def _moments(outline: fe_models.Outline, pole: Array) -> tuple[float, float, float, float]:
    m = outline.moments(pole)
    return float(m.area), float(m.second[0]), float(m.second[1]), float(m.second[2])


def _distance(a: Polygon, b: Polygon, step: float, beside: list[tuple[Array, float]]) -> tuple[float, Array]:
    """Largest distance of a place on one boundary, clear of lumps, from the other one, and the place."""
    worst, where = 0.0, np.array(a.representative_point().coords[0])
    for one, other in ((a, b), (b, a)):
        at = shapely.get_coordinates(shapely.segmentize(one.boundary, step))
        for lump, reach in beside:
            at = at[np.hypot(*(at - lump).T) > reach]
        if not len(at):
            continue
        places = shapely.points(at)
        lines = _segments(other)
        pairs, distance = shapely.STRtree(lines).query_nearest(
            places, return_distance=True, all_matches=False
        )
        k = int(np.argmax(distance))
        if distance[k] > worst:
            worst, where = float(distance[k]), shapely.get_coordinates(places[pairs[0, k]])[0]
    return worst, where


def _segments(polygon: Polygon) -> Array:
    """The boundary as single lines."""
    parts = []
    for ring in (polygon.exterior, *polygon.interiors):
        at = np.array(ring.coords)
        parts.append(np.stack([at[:-1], at[1:]], axis=1))
    return np.asarray(shapely.linestrings(np.concatenate(parts)))


def _slenderness(model: WallModel) -> list[float]:
    """Length over thickness of walls [-], those that run on smoothly taken as one."""
    walls = model.walls
    pairs = []
    for n in range(len(model.points)):
        at = [(i, k) for i, w in enumerate(walls) for k, p in enumerate((w.start, w.end)) if p == n]
        if len(at) == 2:
            a, b = (walls[i].fitted.tangent(walls[i].fitted.span[k]) * (1 - 2 * k) for i, k in at)
            if a @ b < -ONWARD:
                pairs.append((at[0][0], at[1][0]))
    rows = np.array(pairs, dtype=int).reshape(-1, 2)
    graph = coo_matrix((np.ones(len(rows)), rows.T), shape=(len(walls), len(walls)))
    chain = connected_components(graph, directed=False)[1]
    lengths = np.array([w.length for w in walls])
    thickness = np.array([max(w.thickness) for w in walls])
    return [float(lengths[chain == c].sum() / thickness[chain == c].max()) for c in np.unique(chain)]


def _unsuited(model: WallModel) -> tuple[str, ...]:
    """Reasons against thin-walled theory, with their numbers."""
    reasons = []
    if model.clear_share < LEAST_CLEAR:
        reasons.append(
            f"only {100 * model.clear_share:.0f} % of the area lies in walls clear of their joints and ends "
            f"(at least {100 * LEAST_CLEAR:.0f} % expected)"
        )
    slender = max(_slenderness(model))
    if slender < LEAST_SLENDER:
        reasons.append(
            f"the longest wall is {slender:.2g} times as long as thick (at least {LEAST_SLENDER:g} expected)"
        )
    curved = max((max(w.thickness) * abs(w.fitted.curvature) for w in model.walls), default=0.0)
    if curved > MOST_CURVED:
        reasons.append(
            f"a wall is {curved:.2g} times as thick as its own radius (at most {MOST_CURVED:g} expected)"
        )
    return tuple(reasons)
