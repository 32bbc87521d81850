"""Who owns which part of a joint: lines from the point to the corners of the faces split it between walls.

Lines are drawn only between walls of different moduli; elements are handed out from them and from the cuts.
"""

from __future__ import annotations

from collections import deque
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from shapely.geometry import LineString, Point, Polygon

from .band import Array, Band
from .boundary import EndKey
from .chain import Chain
from .errors import SolveError
from .fill import Index
from .joint import Joint
from .partition import Cluster

# Thicknesses within this share are the same.
SAME = 1e-9
# Least slope of a seam against the boundary it starts from and against another, as sine of the angle.
CLEAR = 0.3


@dataclass(frozen=True)
class Seam:
    """A line from a corner of the faces to the point, between the walls on its two sides.

    Seen from the corner, ``left`` lies to the left. At a bend the line runs on to the opposite face:
    ``across`` is then True and ``place`` the end there, for the point of a rounded bend may lie outside.
    """

    corner: Array
    point: str
    place: Array
    left: str
    right: str
    across: bool = False


@dataclass(frozen=True)
class Split:
    """How a cluster's elements are handed out: along seams, whole to one wall, or each to the nearest wall.

    Only the last depends on the mesh.
    """

    seams: tuple[Seam, ...] = ()
    whole: str | None = None
    nearest: bool = False


def split(cluster: Cluster, joints: Mapping[str, Joint], moduli: Mapping[str, tuple[float, float]]) -> Split:
    """Seams of a cluster, one for each gap between two walls that differ.

    Where they cannot be drawn (at steps and bevels, and where a line would leave the solid, run along its
    boundary or beside another) a joint goes whole to its thickest wall, of equally thick ones to the one with
    the largest e. Where short walls are part of the cluster its elements go to the nearest wall.
    """
    names = {e.band.name for p in cluster.points if p in joints for e in joints[p].ends}
    if len({moduli[n] for n in names}) < 2:
        return Split()
    drawn = None if cluster.united else _seams(cluster, joints, moduli)
    if drawn is not None:
        return Split(tuple(drawn))
    if cluster.united or cluster.walls or len(cluster.points) != 1:
        return Split(nearest=True)
    return Split(whole=_stoutest(joints[cluster.points[0]], moduli))


def _stoutest(joint: Joint, moduli: Mapping[str, tuple[float, float]]) -> str:
    """The thickest wall at a joint, then that of the largest e and g; by name where nothing else differs."""
    thickness = {e.band.name: 2.0 * float(e.band.half(e.along(0.0))) for e in joint.ends}
    most = max(thickness.values())
    thick = [name for name, t in thickness.items() if t >= most * (1.0 - SAME)]
    return max(sorted(thick), key=lambda name: moduli[name])


def _seams(
    cluster: Cluster, joints: Mapping[str, Joint], moduli: Mapping[str, tuple[float, float]]
) -> list[Seam] | None:
    """Seams where all can be drawn, else None."""
    made: list[Seam] = []
    for name in cluster.points:
        joint = joints[name]
        if len(joint.ends) == 2 and all(c.kind in ("fillet", "rounding") for c in joint.chains):
            inner, outer = joint.chains
            first, second = inner.first.band.name, inner.second.band.name
            if moduli[first] != moduli[second]:
                made.append(Seam(split_place(inner), name, split_place(outer), first, second, across=True))
            continue
        for chain in joint.chains:
            first, second = chain.first.band.name, chain.second.band.name
            if first != second and moduli[first] != moduli[second]:
                if chain.kind in ("step", "bevel"):
                    # a line from the foot of a step runs along the wider wall's end
                    return None
                made.append(Seam(split_place(chain), name, joint.place, first, second))
    polygon = cluster.polygon()
    return made if all(_is_clear(seam, polygon) for seam in made) and _are_apart(made) else None


def _are_apart(made: list[Seam]) -> bool:
    """True where seams that end at one point do so from directions well apart."""
    for i, one in enumerate(made):
        for other in made[:i]:
            a, b = one.corner - one.place, other.corner - other.place
            sine = abs(a[0] * b[1] - a[1] * b[0]) / (np.hypot(*a) * np.hypot(*b))
            if one.point == other.point and a @ b > 0.0 and sine < CLEAR:
                return False
    return True


def _is_clear(seam: Seam, polygon: Polygon) -> bool:
    """True where a seam runs inside the solid, well away from its boundary between its ends."""
    line = LineString([seam.corner, seam.place])
    u = np.linspace(0.1, 0.9 if seam.across else 1.0, 9)
    points = seam.corner + u[:, None] * (seam.place - seam.corner)
    return all(
        polygon.contains(Point(p)) and polygon.boundary.distance(Point(p)) > CLEAR * share * line.length
        for p, share in zip(points, np.minimum(u, 1.0 - u if seam.across else u), strict=True)
    )


def split_place(chain: Chain) -> Array:
    """Where a chain is split between its walls: its corner, or the middle of its arc."""
    return chain.pieces[0].at(0.5) if chain.pieces else chain.first.side(chain.reach[0], 1.0)


def owners(
    cluster: Cluster,
    triangles: Index,
    vertices: Array,
    among: Split,
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
    if among.whole is not None:
        return [among.whole] * len(triangles)
    if among.nearest:
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
