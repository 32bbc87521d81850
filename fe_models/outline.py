"""The real outline of a section: bands joined at their points, and the shapes that are refused."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property

import numpy as np
import shapely
from shapely.geometry import Polygon

from .band import Array, Band, WallEnd, band
from .booms import with_booms
from .boundary import Piece, Ring, polyline
from .errors import OutlineError
from .joint import Joint, joints
from .partition import Partition, partition, solid
from .rings import rings
from .seams import Split, split
from .section import Section

# More walls than this are refused: each joint is meshed on its own.
WALL_LIMIT = 2000
# Overlaps smaller than this share of the squared thickness are round-off.
OVERLAP = 1e-6
# Slenderness taken where there are no walls to measure it on.
STOUT = 4.0
# Cosine of the angle between neighbours below which they may not overlap along a whole wall.
SHARP = 0.75
# Gauss rules on a piece of boundary: exact for the moments of straight pieces, beyond round-off for arcs.
_GAUSS_STRAIGHT = np.polynomial.legendre.leggauss(3)
_GAUSS_CURVED = np.polynomial.legendre.leggauss(20)


@dataclass(frozen=True)
class Moments:
    """Integrals over a region in the file's axes: area and first and second moments about ``pole``.

    ``first`` holds the integrals of (x, y), ``second`` those of (y^2, x^2, x y).
    """

    area: float
    first: Array
    second: Array


@dataclass(frozen=True)
class Outline:
    """The solid of a section.

    Parameters
    ----------
    section : Section
    bands : dict of wall name to Band
    joints : dict of point name to Joint
    parts : Partition
        Strips and clusters.
    loops : tuple of (n, 2) arrays
        Closed polygons, the outer one first; curved faces in steps [L].
    extent : float
        Larger overall dimension D [L].
    notes : tuple of str
        Bevels, steps and short walls, in words.
    moduli : mapping of str to (float, float)
        e (with the share that carries direct stress) and g of each wall, or of the solid without walls [-].
    """

    section: Section
    bands: dict[str, Band]
    joints: dict[str, Joint]
    parts: Partition = field(repr=False)
    loops: tuple[Array, ...] = field(repr=False)
    extent: float
    notes: tuple[str, ...]
    moduli: Mapping[str, tuple[float, float]]

    @cached_property
    def splits(self) -> list[Split]:
        """How each cluster is split between walls of different moduli."""
        return [split(c, self.joints, self.moduli) for c in self.parts.clusters]

    @property
    def chorded(self) -> bool:
        """True where the union of crowded walls has taken curved faces in chords."""
        return any(
            c.united
            and (
                any(not self.bands[w].straight for w in c.walls)
                or any(p.arc is not None for n in c.points for k in self.joints[n].chains for p in k.pieces)
            )
            for c in self.parts.clusters
        )

    def moments(self, pole: Array) -> Moments:
        """Exact moments of the solid about a pole, from its boundary by Green's theorem."""
        total = np.zeros(6)
        for cluster in self.parts.clusters:
            for ring in cluster.rings:
                total += _ring_moments(ring, pole)
        for strip in self.parts.strips.values():
            total += _ring_moments(_strip_ring(strip.band, strip.span), pole)
        return Moments(float(total[0]), total[1:3], total[3:])

    def fine_loops(self, rise: float) -> tuple[Array, ...]:
        """Closed polygons of the boundary of walls, the outer one first, within ``rise`` of its arcs [L].

        As ``loops`` where crowded walls were united.
        """
        if any(c.united for c in self.parts.clusters):
            return self.loops
        found, _ = rings(self.joints, {}, list(self.joints))
        radius = max(p.radius for r in found for p in r if not p.straight) if self.curved else 1.0
        polygons = [polyline(r, min(0.05, float(np.sqrt(8.0 * rise / radius)))) for r in found]
        polygons.sort(key=lambda p: -float(np.prod(np.ptp(p, axis=0))))
        return tuple(polygons)

    @property
    def slenderness(self) -> float:
        """Mean length over thickness of the walls; that of a stout wall for a solid without walls [-]."""
        return float(np.mean([b.length / max(b.thickness) for b in self.bands.values()] or [STOUT]))

    @property
    def curved(self) -> bool:
        """True where the boundary is curved, so that elements only interpolate the outline."""
        rounded = any(not p.straight for c in self.parts.clusters for r in c.rings for p in r)
        return rounded or any(not b.straight for b in self.bands.values())


def outline(section: Section) -> Outline:
    """Build and check the solid of a section.

    Parameters
    ----------
    section : Section

    Returns
    -------
    Outline
        Places as in the section [L].

    Raises
    ------
    OutlineError
        Too many walls, unconnected walls, bands that overlap away from a shared point, a lost cell, a
        swallowed wall, no direct stress anywhere.
    """
    if len(section.walls) > WALL_LIMIT:
        raise OutlineError("limit", (section.walls[0].name,), f"{len(section.walls)} walls")
    if not section.booms and all(w.direct_share == 0.0 for w in section.walls):
        names = tuple(w.name for w in section.walls)
        raise OutlineError("direct", names, "a direct_share of 0 in every wall, and no boom")
    bands = {w.name: band(w, section) for w in section.walls}
    _refuse_overlaps(bands)
    points = {name: np.array(place, dtype=float) for name, place in section.points.items()}
    at = joints(points, bands.values(), section.corners)
    _refuse_folded(at)
    parts = with_booms(partition(at, bands), section.booms, bands)
    _refuse_parts_in_each_other(parts)
    found = _loops(at, bands, parts)
    expected = len(bands) - len(at) + 2
    if len(found) != expected:
        raise OutlineError(
            "lost cell",
            tuple(bands),
            f"an outline of {len(found)} boundaries where the walls make {expected}",
        )
    extent = float(np.ptp(found[0], axis=0).max())
    moduli = {w.name: (w.e * w.direct_share, w.g) for w in section.walls}
    made = Outline(section, bands, at, parts, tuple(found), extent, _notes(at, parts), moduli)
    return replace(made, notes=(*made.notes, *_ownership_notes(made)))


def _notes(at: dict[str, Joint], parts: Partition) -> tuple[str, ...]:
    made = []
    for joint in at.values():
        for chain in joint.chains:
            pair = f"walls {chain.first.band.name} and {chain.second.band.name} at {joint.point}"
            if chain.kind == "bevel":
                made.append(f"sharp turn bevelled: {pair}")
            if chain.kind == "step":
                made.append(f"step in the faces where walls of unequal thickness meet nearly in line: {pair}")
    for cluster in parts.clusters:
        if cluster.walls:
            made.append(f"meshed as part of its joint, without a strip: {', '.join(cluster.walls)}")
    return tuple(made)


def _ownership_notes(made: Outline) -> Iterator[str]:
    """Joints of walls with different moduli that no line splits."""
    for cluster, among in zip(made.parts.clusters, made.splits, strict=True):
        place = " ".join(cluster.points)
        if among.whole is not None:
            yield f"materials: the joint at {place} belongs whole to {among.whole}"
        elif among.nearest:
            yield f"materials: in the joint at {place} each element belongs to the nearest wall, an estimate"


def _loops(at: dict[str, Joint], bands: dict[str, Band], parts: Partition) -> list[Array]:
    """Closed polygons of the solid's boundary, the outer one first."""
    if not any(c.united for c in parts.clusters):
        found, _ = rings(at, {}, list(at))
        polygons = [polyline(r) for r in found]
    else:
        pieces = [c.polygon() for c in parts.clusters]
        pieces += [Polygon(polyline(_strip_ring(s.band, s.span))) for s in parts.strips.values()]
        # strips and clusters meet along their cuts: closing the hairline gaps that round-off leaves there
        size = 1e-7 * min(min(b.thickness) for b in bands.values())
        union = shapely.union_all([p.buffer(size, join_style="mitre") for p in pieces])
        union = union.buffer(-size, join_style="mitre")
        if union.geom_type != "Polygon":
            raise OutlineError("lost cell", tuple(bands), "a solid that falls apart")
        polygons = [np.array(r.coords)[:-1] for r in (union.exterior, *union.interiors)]
    polygons.sort(key=lambda p: -float(np.prod(np.ptp(p, axis=0))))
    return polygons


def _strip_ring(of: Band, span: tuple[float, float]) -> Ring:
    """The closed boundary of a strip, anticlockwise."""
    start, end = WallEnd(of, False), span[1]
    right = Piece("face", start.side(span[0], -1.0), start.side(end, -1.0), of, -1.0, (span[0], end))
    left = Piece("face", start.side(end, 1.0), start.side(span[0], 1.0), of, 1.0, (end, span[0]))
    return [right, Piece("cut", right.end, left.start), left, Piece("cut", left.end, right.start)]


def _ring_moments(ring: Ring, pole: Array) -> Array:
    """(A, Sy, Sx, Ixx, Iyy, Ixy) enclosed by a ring, by Gauss quadrature of boundary integrals."""
    total = np.zeros(6)
    for piece in ring:
        g, w = _GAUSS_STRAIGHT if piece.straight else _GAUSS_CURVED
        u = 0.5 * (g + 1.0)
        x, y = (piece.at(u) - pole).T
        dy = piece.rate(u)[:, 1] * 0.5 * w
        kernel = np.stack([x, 0.5 * x**2, x * y, x * y**2, x**3 / 3.0, 0.5 * x**2 * y])
        total += kernel @ dy
    return total


def _refuse_overlaps(bands: dict[str, Band]) -> None:
    """Refuse bands of walls without a shared point that overlap.

    Where a wall shorter than the thickness joins two others, these overlap beside it at the inner side of
    the bend: that much is the joint.
    """
    names = list(bands)
    shapes = [solid(WallEnd(b, False), b.length) for b in bands.values()]
    ends = [{b.start, b.end} for b in bands.values()]
    for i, j in _pairs(shapes):
        if ends[i] & ends[j]:
            continue
        common = shapes[i].intersection(shapes[j])
        least = min(*bands[names[i]].thickness, *bands[names[j]].thickness)
        if common.area <= OVERLAP * least * least:
            continue
        largest = max(*bands[names[i]].thickness, *bands[names[j]].thickness)
        link = [
            b for b, e in zip(bands.values(), ends, strict=True)
            if b.length <= largest and e & ends[i] and e & ends[j]
        ]  # fmt: skip
        if any(_beside(common, b, largest) for b in link):
            continue
        x, y = common.centroid.coords[0]
        raise OutlineError(
            "overlap",
            (names[i], names[j]),
            f"bands that overlap near ({x:.6g}, {y:.6g})",
        )


def _refuse_folded(at: dict[str, Joint]) -> None:
    """Refuse neighbours at a sharp angle that still overlap where the shorter one ends."""
    for joint in at.values():
        for chain in joint.chains:
            lengths = chain.first.band.length, chain.second.band.length
            sharp = chain.kind == "corner" and chain.first.direction @ chain.second.direction > SHARP
            if sharp and min(chain.reach) >= min(lengths):
                names = (chain.first.band.name, chain.second.band.name)
                raise OutlineError(
                    "overlap", names, f"bands that overlap along a whole wall from {joint.point}"
                )


def _beside(common: shapely.Geometry, link: Band, reach: float) -> bool:
    """True where an overlap keeps within ``reach`` of a short wall."""
    line = shapely.LineString(link.midline(np.array([0.0, link.length])))
    return bool(shapely.hausdorff_distance(common, line) <= 2.0 * reach and line.buffer(reach).covers(common))


def _refuse_parts_in_each_other(parts: Partition) -> None:
    """Refuse strips and joints that overlap: mitres that reach into a neighbour, folded arcs."""
    shapes = [c.polygon() for c in parts.clusters]
    names: list[tuple[str, ...]] = [
        tuple({e.cut[0] for r in c.rings for e in r if e.cut} | set(c.walls)) for c in parts.clusters
    ]
    least = [min((b.length for b in c.rings[0]), default=0.0) for c in parts.clusters]
    for name, strip in parts.strips.items():
        shapes.append(Polygon(polyline(_strip_ring(strip.band, strip.span))))
        names.append((name,))
        least.append(min(strip.band.thickness))
    thin = [min(min(s.band.thickness) for s in parts.strips.values())] if parts.strips else least
    limit = OVERLAP * min(thin) ** 2
    for shape, walls in zip(shapes, names, strict=True):
        if not shape.is_valid:
            raise OutlineError(
                "overlap", walls, f"an outline that crosses itself: {shapely.is_valid_reason(shape)}"
            )
    for i, j in _pairs(shapes):
        if shapes[i].intersection(shapes[j]).area > limit:
            walls = tuple(sorted({*names[i], *names[j]}))
            raise OutlineError("overlap", walls, "joints or bands that overlap")


def _pairs(shapes: list[Polygon]) -> Iterable[tuple[int, int]]:
    """Numbers of shapes whose interiors may meet, each pair once."""
    tree = shapely.STRtree(shapes)
    first, second = tree.query(shapes, predicate="intersects")
    return [(int(i), int(j)) for i, j in zip(first, second, strict=True) if i < j]
