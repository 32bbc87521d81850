"""Walls drawn over a solid that is given by its outline: section lines across it, and both faces there.

Such a wall has no strip of the mesh. A section line runs along the normal of its midline from face to face,
through whatever elements lie there.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from .band import Array, Band
from .boundary import Piece
from .fields import Fields
from .location import elements_at, located
from .mesh import Index
from .outline import Outline
from .partition import LEAST_STRIP, MARGIN
from .recovery import LINE_POINTS, Chords, flows
from .sampling import Samples

# Places at which the solid is held against the wall, and by what share of its thickness a face may be off.
LOOKED_AT = 401
OFF_FACE = 0.1
# Section lines over which the disagreement of both fields is averaged.
MEAN_OF = 9
# Crossings of a section line with element edges closer than this share of the thickness are one.
SAME_CROSSING = 1e-9


@dataclass(frozen=True)
class SolidWall:
    """A wall over a solid.

    Parameters
    ----------
    band : Band
    span : (float, float)
        Distances along it between which the solid is the wall [L].
    in_cell : bool
        True where its faces lie on two rings of the outline: cutting it does not cut the solid in two.
    outline : Outline
    """

    band: Band
    span: tuple[float, float]
    in_cell: bool
    outline: Outline

    def chords(self, fields: Fields, s: Array) -> Chords:
        """Parts of the section lines at distances s [L] inside single elements."""
        faces, _ = _faces(self.outline, self.band, s)
        elements, low, high, line = [], [], [], []
        for i, (at, (right, left)) in enumerate(zip(s, faces, strict=True)):
            cuts = _crossings(fields, self.band, float(at), float(right), float(left))
            middle = self.band.place(np.full(len(cuts) - 1, at), 0.5 * (cuts[1:] + cuts[:-1]))
            elements.append(located(fields, middle - fields.inertia.centroid).elements)
            low.append(cuts[:-1])
            high.append(cuts[1:])
            line.append(np.full(len(cuts) - 1, i))
        own, a, b = np.concatenate(elements), np.concatenate(low), np.concatenate(high)
        number = np.concatenate(line)
        x, w = np.polynomial.legendre.leggauss(LINE_POINTS)
        n = a[:, None] + 0.5 * (x + 1.0) * (b - a)[:, None]
        at_s = np.broadcast_to(s[number][:, None], n.shape)
        samples = elements_at(fields, own, self.band.place(at_s, n))
        return Chords(samples, number, self.band.direction(at_s), 0.5 * w * (b - a)[:, None])

    def on_faces(self, fields: Fields, s: Array) -> Samples:
        """The points of the left face at distances s [L] and then of the right one."""
        faces, _ = _faces(self.outline, self.band, s)
        places, elements = [], []
        for column, inwards in ((1, -1.0), (0, 1.0)):
            n = faces[:, column]
            # a little inside, where the element is beyond doubt
            inside = self.band.place(s, n + inwards * 1e-6 * self.band.half(s))
            elements.append(located(fields, inside - fields.inertia.centroid).elements)
            places.append(self.band.place(s, n))
        return elements_at(fields, np.concatenate(elements), np.concatenate(places)[:, None])


def solid_walls(outline: Outline, bands: Iterable[Band]) -> dict[str, SolidWall | None]:
    """Walls over a solid by name; None where the solid is nowhere as thick as the wall."""
    return {band.name: _solid_wall(outline, band) for band in bands}


def _solid_wall(outline: Outline, band: Band) -> SolidWall | None:
    # not quite even: a section line should not run through a corner of the outline
    s = np.linspace(0.0, band.length, LOOKED_AT + 2)[1:-1] + 1e-7 * band.length
    faces, ring = _faces(outline, band, s)
    half = band.half(s)
    off = np.abs(faces - np.stack([-half, half], axis=1)).max(axis=1)
    good = off <= OFF_FACE * 2.0 * half
    edges = np.flatnonzero(np.diff(np.concatenate([[False], good, [False]]).astype(int)))
    runs = edges.reshape(-1, 2)
    if not len(runs):
        return None
    first, after = runs[np.argmax(runs[:, 1] - runs[:, 0])]
    thickest = max(band.thickness)
    low, high = s[first] + MARGIN * thickest, s[after - 1] - MARGIN * thickest
    if high - low < LEAST_STRIP * thickest:
        return None
    middle = ring[(first + after) // 2]
    return SolidWall(band, (float(low), float(high)), bool(middle[0] != middle[1]), outline)


def disagreement(fields: Fields, walls: Iterable[SolidWall]) -> Array:
    """Largest mean of kinematic less static flow over any wall in a cell, per unit load (3,)."""
    found = [np.zeros(3)]
    for wall in walls:
        s = np.linspace(*wall.span, MEAN_OF)
        static, kinematic = flows(fields, wall.chords(fields, s), MEAN_OF)
        found.append(np.abs(np.mean(kinematic - static, axis=1)))
    return np.asarray(np.max(found, axis=0))


def _faces(outline: Outline, band: Band, s: Array) -> tuple[Array, Index]:
    """Offsets (n, 2) [L] of the right and the left face at distances s and the numbers of their rings.

    Not a number where the midline is outside the solid.
    """
    origin, along = band.midline(s), band.normal(s)
    offsets, owner = [], []
    rings = [ring for cluster in outline.parts.clusters for ring in cluster.rings]
    for number, ring in enumerate(rings):
        for piece in ring:
            for found in _hits(piece, origin, along):
                offsets.append(found)
                owner.append(number)
    hits, which = np.array(offsets), np.array(owner)
    above, below = np.where(hits > 0.0, hits, np.inf), np.where(hits <= 0.0, hits, -np.inf)
    left, right = above.min(axis=0), below.max(axis=0)
    inside = np.isfinite(above).sum(axis=0) % 2 == 1
    faces = np.where(inside[:, None], np.stack([right, left], axis=1), np.nan)
    ring_of = np.stack([which[below.argmax(axis=0)], which[above.argmin(axis=0)]], axis=1)
    return faces, ring_of


def _hits(piece: Piece, origin: Array, along: Array) -> list[Array]:
    """Offsets (n,) at which lines from origins (n, 2) along (n, 2) meet a piece; not a number where none."""
    if piece.arc is None:
        chord = piece.end - piece.start
        apart = piece.start - origin
        turn = _cross(along, chord)
        with np.errstate(divide="ignore", invalid="ignore"):
            u, offset = _cross(apart, along) / turn, _cross(apart, chord) / turn
        return [np.where((u >= 0.0) & (u < 1.0), offset, np.nan)]
    arc = piece.arc
    to = origin - arc.centre
    half = np.sum(to * along, axis=1)
    root = half**2 - np.sum(to * to, axis=1) + arc.radius**2
    found = []
    for sign in (-1.0, 1.0):
        with np.errstate(invalid="ignore"):
            offset = -half + sign * np.sqrt(root)
        x, y = (to + offset[:, None] * along).T
        sweep = arc.last - arc.first
        passed = np.mod((np.arctan2(y, x) - arc.first) * np.sign(sweep), 2.0 * np.pi)
        found.append(np.where(passed < abs(sweep), offset, np.nan))
    return found


def _crossings(fields: Fields, band: Band, s: float, right: float, left: float) -> Array:
    """Offsets at which the section line at s passes from element to element, its two ends included."""
    origin = band.midline(s) - fields.inertia.centroid
    along = band.normal(s)
    corners = fields.space.places[:, :3]
    a, chord = corners, np.roll(corners, -1, axis=1) - corners
    apart, turn = a - origin, along[0] * chord[..., 1] - along[1] * chord[..., 0]
    with np.errstate(divide="ignore", invalid="ignore"):
        u = (apart[..., 0] * along[1] - apart[..., 1] * along[0]) / turn
        offset = (apart[..., 0] * chord[..., 1] - apart[..., 1] * chord[..., 0]) / turn
    gap = SAME_CROSSING * (left - right)
    hit = (u >= 0.0) & (u <= 1.0) & (offset > right + gap) & (offset < left - gap)
    found = np.concatenate([[right], np.sort(offset[hit]), [left]])
    kept = np.concatenate([[True], np.diff(found) > gap])
    kept[-1] = True
    return np.asarray(found[kept])


def _cross(a: Array, b: Array) -> Array:
    return np.asarray(a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0])
