"""The walk along faces and chains that strings boundary pieces into closed rings."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from itertools import pairwise

from .band import WallEnd
from .boundary import EndKey, Piece, Ring
from .joint import Joint

# Shortest piece of boundary over the length of its wall.
ROUND_OFF = 1e-9


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
        ring: Ring = []
        here = first
        while here in open_chains:
            open_chains.discard(here)
            joint = joints[here[0]]
            chain = joint.chains[here[1]]
            ring += chain.pieces
            end = chain.second
            begin = chain.reach[1]
            if end.key in cuts:
                stop = cuts[end.key]
                following = joint.chain_after(end)
                ring += _face(end, -1.0, begin, stop)
                ring.append(Piece("cut", end.side(stop, -1.0), end.side(stop, 1.0), cut=end.key))
                ring += _face(end, 1.0, stop, following.reach[0])
                sound &= begin < stop and following.reach[0] < stop
                here = (here[0], joint.position(following))
            else:
                far = joints[end.band.start if end.reverse else end.band.end]
                following = far.chain_after(end.opposite)
                stop = end.band.length - following.reach[0]
                ring += _face(end, -1.0, begin, stop)
                sound &= begin < stop
                here = (far.point, far.position(following))
        if ring:
            found.append(ring)
    return found, sound


def _face(end: WallEnd, sign: float, begin: float, stop: float) -> list[Piece]:
    """The left or right face of a wall, seen from one end, from distance begin to stop.

    Where the face of an arc is extended beyond the wall, its straight part is a piece of its own.
    """
    side = -sign if end.reverse else sign
    bounds = [begin, stop]
    if not end.band.straight:
        low, high = min(begin, stop), max(begin, stop)
        # a straight part shorter than round-off is none
        room = ROUND_OFF * end.band.length
        inner = [s for s in (0.0, end.band.length) if low + room < s < high - room]
        bounds = [begin, *(inner if begin < stop else inner[::-1]), stop]
    return [
        Piece("face", end.side(a, sign), end.side(b, sign), end.band, side, (end.along(a), end.along(b)))
        for a, b in pairwise(bounds)
    ]
