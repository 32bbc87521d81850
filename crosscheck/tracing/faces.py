"""Faces of an outline: its straight and circular pieces, and samples along them that follow the width."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from shapely.geometry import Polygon

import fe_models
from fe_models.boundary import Piece

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

# Spacing of samples over the width of the solid there.
SPACING = 0.22
LEAST_SAMPLES = 5
# Largest step of samples round an arc [rad].
TURN = 0.12
# Rise of a chord of the solid's polygon over the width of the solid there.
RISE = 2e-4
# Neighbours that differ from one line or circle by less than this share of the mean thickness are one face.
SAME = 1e-3


@dataclass(frozen=True)
class Face:
    """A straight or circular stretch of the boundary.

    Attributes
    ----------
    ring : number of the boundary it lies on, 0 the outer one
    length : [L]
    centre, radius : of an arc; None and infinite for a straight one [L]
    convex : True where the material lies on the centre's side of an arc
    turn : angle through which it turns [rad]
    """

    ring: int
    length: float
    centre: Array | None = None
    radius: float = float("inf")
    convex: bool = False
    turn: float = 0.0


@dataclass(frozen=True)
class FacedOutline:
    """An outline as faces and samples.

    Attributes
    ----------
    faces : tuple of Face
    places, normals : samples (n, 2) [L], and unit normals into the material (n, 2)
    face : number of each sample's face (n,)
    following : number of the next sample along the boundary (n,)
    polygon : the solid, arcs in steps
    thickness : mean thickness, twice the area over the perimeter [L]
    """

    faces: tuple[Face, ...]
    places: Array
    normals: Array
    face: Integers
    following: Integers
    polygon: Polygon
    thickness: float


def faced(outline: fe_models.Outline) -> FacedOutline:
    """Faces and samples of a solid's outline."""
    rings = outline.parts.clusters[0].rings
    rough = Polygon(outline.loops[0], outline.loops[1:])
    thickness = 2.0 * rough.area / rough.length
    loops = [np.concatenate([_chords(p, RISE * (p.width or thickness)) for p in ring]) for ring in rings]
    polygon = Polygon(loops[0], loops[1:])
    faces: list[Face] = []
    places, normals, numbers, following = [], [], [], []
    first = 0
    for number, ring in enumerate(rings):
        groups = _groups(ring, SAME * thickness)
        for group in groups:
            arc = group[0].arc
            length = sum(p.length for p in group)
            if arc is None:
                faces.append(Face(number, length))
            else:
                turn = sum(p.turn for p in group)
                faces.append(Face(number, length, arc.centre, arc.radius, arc.last > arc.first, turn))
            for piece in group:
                step = SPACING * (piece.width or thickness)
                least = max(1, round(LEAST_SAMPLES * piece.length / length))
                count = max(least, int(np.ceil(piece.length / step)), int(np.ceil(piece.turn / TURN)))
                u = (np.arange(count) + 0.5) / count
                rate = piece.rate(u)
                places.append(piece.at(u))
                normals.append(np.stack([-rate[:, 1], rate[:, 0]], axis=1) / np.hypot(*rate.T)[:, None])
                numbers.append(np.full(count, len(faces) - 1))
        last = sum(len(p) for p in places)
        following.append(np.append(np.arange(first + 1, last), first))
        first = last
    return FacedOutline(
        tuple(faces),
        np.concatenate(places),
        np.concatenate(normals),
        np.concatenate(numbers),
        np.concatenate(following),
        polygon,
        thickness,
    )


def _chords(piece: Piece, rise: float) -> Array:
    """Places along a piece, its end left out, whose chords keep within a rise of it."""
    if piece.arc is None:
        return piece.start[None]
    step = np.sqrt(8.0 * rise / piece.arc.radius)
    count = max(2, int(np.ceil(piece.turn / step)))
    return piece.at(np.arange(count) / count)


def _groups(ring: list[Piece], same: float) -> list[list[Piece]]:
    """Neighbouring pieces of a ring that lie on one line or circle."""
    starts = [k for k in range(len(ring)) if not _one(ring[k - 1], ring[k], same)]
    if not starts:
        return [ring]
    turned = ring[starts[0] :] + ring[: starts[0]]
    groups: list[list[Piece]] = []
    for k, piece in enumerate(turned):
        if k and _one(turned[k - 1], piece, same) and _one(groups[-1][0], piece, same):
            groups[-1].append(piece)
        else:
            groups.append([piece])
    return groups


def _one(a: Piece, b: Piece, same: float) -> bool:
    """True where two pieces lie on one line or circle."""
    if a is b:
        return False
    if a.arc is None or b.arc is None:
        if a.arc is not b.arc:
            return False
        along = (a.end - a.start) / a.length
        across = np.array([-along[1], along[0]])
        off = np.abs((np.array([b.start, b.end]) - a.start) @ across).max()
        return bool(off <= same and (b.end - b.start) @ along > 0.0)
    turns = (a.arc.last > a.arc.first) == (b.arc.last > b.arc.first)
    apart = np.hypot(*(a.arc.centre - b.arc.centre)) + abs(a.arc.radius - b.arc.radius)
    return bool(turns and apart <= 3.0 * same)
