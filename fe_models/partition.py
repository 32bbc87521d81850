"""Split of a section into strips (long parts of walls) and clusters (joints with the short walls between).

Cut distance of a wall end: the farthest of its corners along it plus a margin. A wall too short for two cuts
belongs to a cluster with both its joints. Where the faces of short walls are eaten up by their neighbours the
cluster's boundary is the polygon union of its parts.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
import shapely
from shapely.geometry import MultiPoint, Polygon

from .band import Array, Band, WallEnd
from .boundary import EndKey, Piece, Ring, polyline
from .errors import OutlineError
from .joint import Joint
from .rings import rings

# Distance from the last corner to the cut, and the least length of a strip, over the thickness.
MARGIN = 1.0
LEAST_STRIP = 0.5
# Two ends of a cut are found again among the union's vertices within this share of the thickness.
SNAP = 1e-6
# Curved faces in a polygon union are taken in steps of this angle [rad].
STEP = 0.01


@dataclass(frozen=True)
class Strip:
    """Part of a wall clear of its ends, from s = span[0] to span[1] along the wall's own direction [L]."""

    band: Band
    span: tuple[float, float]
    patches: tuple[Patch, ...] = ()


@dataclass(frozen=True)
class Patch:
    """Part of a strip, from s = span[0] to span[1] [L], over which a boom of e times area [L^2] is spread."""

    span: tuple[float, float]
    area: float


@dataclass(frozen=True)
class Cluster:
    """One compact region: its points, the walls wholly inside it, its closed rings, its booms' e area."""

    points: tuple[str, ...]
    walls: tuple[str, ...]
    rings: list[Ring] = field(repr=False)
    united: bool = False
    boom: float = 0.0

    def polygon(self) -> Polygon:
        """The region as a polygon; curved faces in steps."""
        outlines = [polyline(r) for r in self.rings]
        areas = [shapely.Polygon(o).area for o in outlines]
        outer = int(np.argmax(areas))
        return Polygon(outlines[outer], [o for i, o in enumerate(outlines) if i != outer])


@dataclass(frozen=True)
class Partition:
    """Strips by wall name, and the clusters; together they are the solid."""

    strips: dict[str, Strip]
    clusters: tuple[Cluster, ...]


def partition(joints: Mapping[str, Joint], bands: Mapping[str, Band]) -> Partition:
    """Strips and clusters of a section.

    Raises
    ------
    OutlineError
        Where a cluster loses a cell or swallows a wall.
    """
    cuts, strips = _cuts(joints, bands)
    clusters = []
    for points, walls in _clusters(joints, bands, strips):
        found, sound = rings(joints, cuts, points)
        cluster = Cluster(points, walls, found)
        if not sound or not (len(walls) == 0 or _is_simple(cluster)):
            cluster = _united(cluster, joints, bands, cuts)
        clusters.append(cluster)
    return Partition(strips, tuple(clusters))


def _cuts(
    joints: Mapping[str, Joint], bands: Mapping[str, Band]
) -> tuple[dict[EndKey, float], dict[str, Strip]]:
    """Cut distances of the wall ends that have one, and the strips between them."""
    cuts: dict[EndKey, float] = {}
    strips: dict[str, Strip] = {}
    for name, b in bands.items():
        ends = WallEnd(b, False), WallEnd(b, True)
        distance = []
        for end, point in zip(ends, (b.start, b.end), strict=True):
            clear = joints[point].clear_of(end)
            distance.append(clear + MARGIN * 2.0 * end.half(clear))
        if b.length - sum(distance) >= LEAST_STRIP * max(b.thickness):
            cuts[ends[0].key], cuts[ends[1].key] = distance
            strips[name] = Strip(b, (distance[0], b.length - distance[1]))
    return cuts, strips


def _clusters(
    joints: Mapping[str, Joint], bands: Mapping[str, Band], strips: Mapping[str, Strip]
) -> list[tuple[tuple[str, ...], tuple[str, ...]]]:
    """Points joined by walls without a strip, with those walls."""
    head = {p: p for p in joints}

    def root(p: str) -> str:
        while head[p] != p:
            head[p] = head[head[p]]
            p = head[p]
        return p

    merged = [b for b in bands.values() if b.name not in strips]
    for b in merged:
        head[root(b.start)] = root(b.end)
    groups: dict[str, tuple[list[str], list[str]]] = {}
    for p in joints:
        groups.setdefault(root(p), ([], []))[0].append(p)
    for b in merged:
        groups[root(b.start)][1].append(b.name)
    return [(tuple(p), tuple(w)) for p, w in groups.values()]


def _is_simple(cluster: Cluster) -> bool:
    """True where the rings neither cross themselves nor each other."""
    polygon = cluster.polygon()
    return bool(polygon.is_valid)


def solid(end: WallEnd, stop: float) -> Polygon:
    """The band of a wall from its point to distance ``stop``, as a polygon."""
    turn = abs(end.band.curvature) * stop
    s = np.linspace(0.0, stop, 2 + int(turn / STEP))
    return Polygon(np.concatenate([end.side(s, -1.0), end.side(s[::-1], 1.0)]))


def fills(joint: Joint) -> list[Polygon]:
    """What mitres, bevels, steps and fillets add to the bands at a joint."""
    parts = []
    for chain in joint.chains:
        if chain.kind == "fillet":
            feet = chain.first.side(chain.reach[0], 1.0), chain.second.side(chain.reach[1], -1.0)
            parts.append(Polygon([joint.place, feet[0], *polyline(list(chain.pieces))[1:], feet[1]]))
        if chain.kind in ("mitre", "bevel", "step"):
            ends = [chain.first.side(0.0, 1.0), chain.second.side(0.0, -1.0)]
            vertices = [chain.first.side(chain.reach[0], 1.0), chain.second.side(chain.reach[1], -1.0)]
            vertices += [p.start for p in chain.pieces]
            hull = MultiPoint(np.array([joint.place, *ends, *vertices])).convex_hull
            if hull.geom_type == "Polygon":
                parts.append(hull)
    return parts


def trims(joint: Joint) -> list[Polygon]:
    """What rounded outer sides and rounded free ends take off the bands with their mitres at a joint."""
    parts = []
    for chain in joint.chains:
        if chain.kind not in ("rounding", "free end"):
            continue
        for piece in chain.pieces:
            if piece.arc is not None:
                arc = piece.at(np.linspace(0.0, 1.0, 2 + int(piece.turn / STEP)))
                # the tangents at the ends of the arc meet at the tip that is taken off
                ends = piece.rate(np.array([0.0, 1.0]))
                lengths = np.linalg.solve(np.column_stack([ends[0], ends[1]]), arc[-1] - arc[0])
                parts.append(Polygon([*arc[::-1], arc[0] + lengths[0] * ends[0]]))
    return parts


def _united(
    cluster: Cluster, joints: Mapping[str, Joint], bands: Mapping[str, Band], cuts: Mapping[EndKey, float]
) -> Cluster:
    """The cluster with its rings from the polygon union of its parts."""
    parts: list[Polygon] = []
    own: dict[str, Polygon] = {}
    kept: list[tuple[EndKey, Array, Array]] = []
    for p in cluster.points:
        parts += fills(joints[p])
        for end in joints[p].ends:
            if end.key in cuts:
                stop = cuts[end.key]
                parts.append(solid(end, stop))
                kept.append((end.key, end.side(stop, -1.0), end.side(stop, 1.0)))
    for name in cluster.walls:
        own[name] = solid(WallEnd(bands[name], False), bands[name].length)
    size = min(max(bands[w].thickness) for w in cluster.walls)
    _refuse_swallowed(parts, own, size)
    union = shapely.union_all([*parts, *own.values()])
    for p in cluster.points:
        union = union.difference(shapely.union_all(trims(joints[p])))
    union = shapely.simplify(_without_slivers(union, size), 1e-9 * size)
    expected = len(cluster.walls) - len(cluster.points) + 2
    if union.geom_type != "Polygon" or 1 + len(union.interiors) != expected:
        raise OutlineError("lost cell", cluster.walls, "bands that fill or split a cell of the midline")
    outlines = [np.array(union.exterior.coords)[:-1], *(np.array(r.coords)[:-1] for r in union.interiors)]
    made: list[Ring] = []
    for i, o in enumerate(outlines):
        signed = shapely.LinearRing(o).is_ccw
        made.append(_ring(o if signed == (i == 0) else o[::-1], kept, size))
    if sum(p.kind == "cut" for r in made for p in r) != len(kept):
        raise OutlineError("overlap", cluster.walls, "a wall that leaves its joint through its neighbours")
    return Cluster(cluster.points, cluster.walls, made, united=True)


def _without_slivers(union: shapely.Geometry, size: float) -> shapely.Geometry:
    """The largest polygon where cutting off a rounded end has left others of no area beside it."""
    parts = sorted(shapely.get_parts(union), key=lambda p: -p.area)
    small = all(p.area <= 1e-6 * size * size for p in parts[1:])
    return parts[0] if parts and small else union


def _refuse_swallowed(parts: list[Polygon], own: Mapping[str, Polygon], size: float) -> None:
    """Refuse a wall whose band lies inside the others'."""
    for name, band in own.items():
        others = shapely.union_all([*parts, *(b for n, b in own.items() if n != name)])
        left = band.difference(others).area
        if left <= 1e-6 * size * size:
            raise OutlineError("swallowed", (name,), "a wall wholly inside its neighbours")


def _ring(outline: Array, kept: list[tuple[EndKey, Array, Array]], size: float) -> Ring:
    """Pieces of a union's ring, with the cuts found again in it."""
    ring: Ring = []
    for a, b in zip(outline, np.roll(outline, -1, axis=0), strict=True):
        match = None
        for key, right, left in kept:
            if np.hypot(*(a - right)) < SNAP * size and np.hypot(*(b - left)) < SNAP * size:
                match = Piece("cut", right, left, cut=key)
        ring.append(match or Piece("closing", a, b))
    return ring
