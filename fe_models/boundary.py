"""Boundary pieces and the walk along faces and chains that strings them into closed rings."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from .band import Array, Band, WallEnd
from .joint import Chain, Joint

EndKey = tuple[str, bool]


@dataclass(frozen=True)
class Piece:
    """One smooth piece of a boundary, run through with the material on its left.

    Parameters
    ----------
    kind : str
        ``face`` of a wall, ``cut`` across a wall (no boundary of the solid), or ``closing`` line of a chain.
    start, end : (2,) arrays
        End points [L].
    band : Band, optional
        The wall of a face.
    side : float
        +1 left, -1 right face in the wall's own direction.
    span : (float, float)
        The wall's own s at start and end of the piece [L].
    cut : (str, bool), optional
        Key of the wall end that a cut leads to.
    """

    kind: str
    start: Array
    end: Array
    band: Band | None = None
    side: float = 0.0
    span: tuple[float, float] = (0.0, 0.0)
    cut: EndKey | None = None

    @property
    def straight(self) -> bool:
        return self.band is None or self.band.straight

    @property
    def length(self) -> float:
        """Length of the piece [L] (of an arc: along the face)."""
        if self.straight or self.band is None:
            return float(np.hypot(*(self.end - self.start)))
        s = np.linspace(*self.span, 33)
        points = self.band.place(s, self.side * self.band.half(s))
        return float(np.hypot(*np.diff(points, axis=0).T).sum())

    def at(self, u: ArrayLike) -> Array:
        """Points at fractions u of the piece, shape (..., 2); the ends are exact."""
        u = np.asarray(u, dtype=float)
        if self.straight or self.band is None:
            return self.start + u[..., None] * (self.end - self.start)
        s = self.span[0] + u * (self.span[1] - self.span[0])
        return self.band.place(s, self.side * self.band.half(s))


Ring = list[Piece]


def rings(
    joints: Mapping[str, Joint], cuts: Mapping[EndKey, float], within: Collection[str]
) -> tuple[list[Ring], bool]:
    """Closed rings round the material of the joints in ``within``, closed by the cuts.

    Returns
    -------
    list of Ring
        With the material on the left: outer ring anticlockwise, holes clockwise.
    bool
        False where a face is eaten up from both ends, so that the rings cross themselves.
    """
    open_chains = {(p, i) for p in within for i in range(len(joints[p].chains))}
    found: list[Ring] = []
    sound = True
    for first in sorted(open_chains):
        if first not in open_chains:
            continue
        ring: Ring = []
        here = first
        while here in open_chains:
            open_chains.discard(here)
            joint = joints[here[0]]
            chain = joint.chains[here[1]]
            ring += _closing(chain)
            end = chain.second
            begin = chain.reach[1]
            if end.key in cuts:
                stop = cuts[end.key]
                following = joint.chain_after(end)
                ring.append(_face(end, -1.0, begin, stop))
                ring.append(Piece("cut", end.side(stop, -1.0), end.side(stop, 1.0), cut=end.key))
                ring.append(_face(end, 1.0, stop, following.reach[0]))
                sound &= begin < stop and following.reach[0] < stop
                here = (here[0], joint.position(following))
            else:
                far = joints[end.band.start if end.reverse else end.band.end]
                following = far.chain_after(end.opposite)
                stop = end.band.length - following.reach[0]
                ring.append(_face(end, -1.0, begin, stop))
                sound &= begin < stop
                here = (far.point, far.position(following))
        found.append(ring)
    return found, sound


def _face(end: WallEnd, sign: float, begin: float, stop: float) -> Piece:
    """The left or right face of a wall, seen from one end, from distance begin to stop."""
    return Piece(
        "face", end.side(begin, sign), end.side(stop, sign), end.band, -sign if end.reverse else sign,
        (end.along(begin), end.along(stop)),
    )  # fmt: skip


def _closing(chain: Chain) -> Ring:
    """The straight lines of a chain."""
    v = chain.vertices
    return [Piece("closing", v[i], v[i + 1]) for i in range(len(v) - 1)]


def polyline(ring: Ring, step: float = 0.05) -> Array:
    """Vertices of a ring without repetition, shape (n, 2); curved faces in steps of at most ``step`` rad."""
    points = []
    for piece in ring:
        count = 1
        if not piece.straight and piece.band is not None:
            turn = abs(piece.band.curvature * (piece.span[1] - piece.span[0]))
            count = max(1, int(np.ceil(turn / step)))
        points.append(piece.at(np.arange(count) / count))
    return np.concatenate(points)
