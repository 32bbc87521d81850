"""Who owns which part of a joint: lines from the point to the corners of the faces split it between walls.

Lines are drawn only between walls of different moduli; elements are handed out from them and from the cuts.
"""

from __future__ import annotations

from collections import deque
from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from .band import Array, Band
from .boundary import EndKey
from .chain import Chain
from .errors import SolveError
from .fill import Index
from .joint import Joint
from .partition import Cluster


@dataclass(frozen=True)
class Seam:
    """A line from a corner of the faces to the point, between the walls on its two sides.

    Seen from the corner towards the point, ``left`` lies to the left.
    """

    corner: Array
    point: str
    place: Array
    left: str
    right: str


def seams(cluster: Cluster, joints: Mapping[str, Joint], differ: Callable[[str, str], bool]) -> list[Seam]:
    """Seams of a cluster: one for each gap between two walls that differ."""
    made: list[Seam] = []
    if cluster.united:
        return made
    for name in cluster.points:
        joint = joints[name]
        for chain in joint.chains:
            first, second = chain.first.band.name, chain.second.band.name
            if first != second and differ(first, second):
                made.append(Seam(split_place(chain), name, joint.place, first, second))
    return made


def split_place(chain: Chain) -> Array:
    """Where a chain is split between its walls: corner, foot of a step, middle of an arc."""
    if not chain.pieces:
        return chain.first.side(chain.reach[0], 1.0)
    piece = chain.pieces[0]
    if piece.arc is not None:
        return piece.at(0.5)
    # the wider wall of a step ends square at the point; its foot is on the other wall's face
    return piece.end if chain.kind == "step" and chain.reach[0] == 0.0 else piece.start


def owners(
    cluster: Cluster,
    triangles: Index,
    vertices: Array,
    seam_edges: Mapping[tuple[int, int], str],
    cut_edges: Mapping[tuple[int, int], EndKey],
    bands: Mapping[str, Band],
) -> list[str]:
    """Wall that owns each triangle of a cluster.

    Parameters
    ----------
    seam_edges : mapping of directed vertex pair to wall name
        The wall to the left of each directed edge of a seam.
    cut_edges : mapping of directed vertex pair to wall end

    Raises
    ------
    SolveError
        A part of the joint belongs to no wall.
    """
    if cluster.united:
        return _nearest(cluster, triangles, vertices, bands, {k[0] for k in cut_edges.values()})
    seeds = list(seam_edges.items()) + [(edge, key[0]) for edge, key in cut_edges.items()]
    if not seam_edges:
        # one modulus throughout
        return [seeds[0][1] if seeds else cluster.walls[0]] * len(triangles)
    by_edge: dict[tuple[int, int], int] = {}
    for i, (a, b, c) in enumerate(triangles.tolist()):
        by_edge[a, b] = by_edge[b, c] = by_edge[c, a] = i
    found: dict[int, str] = {}
    queue: deque[int] = deque()
    for edge, wall in seeds:
        if edge in by_edge and by_edge[edge] not in found:
            found[by_edge[edge]] = wall
            queue.append(by_edge[edge])
    while queue:
        here = queue.popleft()
        a, b, c = triangles[here].tolist()
        for edge in ((b, a), (c, b), (a, c)):
            other = by_edge.get(edge)
            if other is None or other in found or edge in seam_edges:
                continue
            found[other] = found[here]
            queue.append(other)
    if len(found) != len(triangles):
        raise SolveError(f"part of joint {' '.join(cluster.points)} belongs to no wall")
    return [found[i] for i in range(len(triangles))]


def _nearest(
    cluster: Cluster, triangles: Index, vertices: Array, bands: Mapping[str, Band], leaving: set[str]
) -> list[str]:
    """Wall whose midline is nearest over its thickness, for joints too crowded for seams."""
    names = [*cluster.walls, *sorted(leaving)]
    middle = vertices[triangles].mean(axis=1)
    far = []
    for name in names:
        b = bands[name]
        line = b.midline(np.linspace(0.0, b.length, 65))
        gap = np.hypot(*(middle[:, None] - line[None]).transpose(2, 0, 1)).min(axis=1)
        far.append(gap / max(b.thickness))
    return [names[i] for i in np.argmin(far, axis=0)]
