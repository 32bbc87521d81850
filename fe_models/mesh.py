"""The mesh of a section: triangles of all strips and clusters, sharing the points of every cut."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from .band import Array, Band
from .booms import breaks
from .boundary import EndKey, Piece
from .boundary_points import boundary_points
from .density import Density
from .errors import SolveError
from .fill import Filling, Region, fill
from .grading import stretched
from .outline import Outline
from .partition import Cluster, Strip
from .seams import Seam, owners

Index = NDArray[np.int64]


@dataclass(frozen=True)
class StripMesh:
    """Columns of a strip: bounds in s, and the triangles of each column.

    Parameters
    ----------
    s : (m + 1,) array
        Column bounds along the wall [L].
    n : (layers + 1,) array
        Layer bounds over the half thickness, -1 to 1 [-].
    triangles : (m, 2 layers) array of int
        Triangle numbers by column.
    """

    band: Band
    s: Array
    n: Array
    triangles: Index


@dataclass(frozen=True)
class Bend:
    """An element edge, from vertex ``start`` to ``end``, that follows a curved piece over fractions ``u``."""

    start: int
    end: int
    piece: Piece
    u: tuple[float, float]


@dataclass(frozen=True)
class Mesh:
    """Triangles of the whole section.

    Parameters
    ----------
    vertices : (v, 2) array
        [L]
    triangles : (e, 3) array of int
        Anticlockwise.
    region : (e,) array of int
        Number of the part (clusters first, then strips).
    owner : (e,) array of int
        Number of the wall that each triangle belongs to.
    boom : (e,) array
        e that booms add to the wall's own [-].
    strips : mapping of wall name to StripMesh
    labels : tuple of str
        Name of each part.
    bends : tuple of Bend
        Curved edges of the clusters' elements.
    """

    vertices: Array
    triangles: Index
    region: Index
    owner: Index
    boom: Array
    strips: dict[str, StripMesh]
    labels: tuple[str, ...]
    bends: tuple[Bend, ...] = ()


def mesh(solid: Outline, density: Density, levels: Mapping[str, float]) -> Mesh:
    """Mesh the parts of a solid.

    Parameters
    ----------
    solid : Outline
    levels : mapping of part label to float
        Refinement level of each part (0 where absent).

    Raises
    ------
    SolveError
        When the mesh generator fails or a part is not covered by its triangles.
    """
    parts = solid.parts
    number_of = {name: i for i, name in enumerate(solid.moduli)}
    thickness = _least_thickness(solid)

    made = _Rows([], [], [], [], [])
    cut_vertices: dict[EndKey, Index] = {}
    bends: list[Bend] = []
    labels = [cluster_label(c) for c in parts.clusters] + [strip_label(w) for w in parts.strips]
    prepared = [
        boundary_points(c, _least_width(c, thickness), density.finer(levels.get(label, 0)), among.seams)
        for c, label, among in zip(parts.clusters, labels, solid.splits, strict=False)
    ]
    fillings = fill([p.region for p in prepared])
    for i, (cluster, points, filled) in enumerate(zip(parts.clusters, prepared, fillings, strict=True)):
        _check_cover(cluster, points.region, filled)
        base = made.count
        for key, at in points.cuts.items():
            cut_vertices[key] = base + at
        bends += [Bend(base + a, base + b, piece, u) for a, b, piece, u in points.bends]
        names = owners(
            cluster,
            filled.triangles,
            filled.vertices,
            solid.splits[i],
            _seam_edges(points.region.lines, solid.splits[i].seams),
            {(int(a), int(b)): key for key, at in points.cuts.items() for a, b in pairwise(at)},
            solid.bands,
        )
        area = cluster_area(cluster)
        made.add(
            filled.vertices, base + filled.triangles, i, [number_of[n] for n in names], cluster.boom / area
        )
    strips = {}
    for j, (name, strip) in enumerate(parts.strips.items()):
        fineness = density.finer(levels.get(strip_label(name), 0))
        grid, inner, own = _strip(strip, fineness, cut_vertices, made.count, made.total)
        strips[name] = grid
        booms = np.repeat(_patch_density(strip, grid.s), own.shape[0] // (len(grid.s) - 1))
        made.add(inner, own, len(parts.clusters) + j, [number_of[name]] * len(own), booms)
    return Mesh(
        np.concatenate(made.vertices),
        np.concatenate(made.triangles),
        np.concatenate(made.region),
        np.concatenate(made.owner),
        np.concatenate(made.boom),
        strips,
        tuple(labels),
        tuple(bends),
    )


@dataclass
class _Rows:
    """Arrays of the parts of a mesh under construction."""

    vertices: list[Array]
    triangles: list[Index]
    region: list[Index]
    owner: list[Index]
    boom: list[Array]
    count: int = 0
    total: int = 0

    def add(
        self, vertices: Array, triangles: Index, region: int, owner: Sequence[int], boom: float | Array
    ) -> None:
        """Append a part: its new vertices, its triangles, their part, their walls, their booms' e."""
        self.vertices.append(vertices)
        self.triangles.append(triangles)
        self.region.append(np.full(len(triangles), region))
        self.owner.append(np.array(owner, dtype=np.int64))
        self.boom.append(np.broadcast_to(boom, len(triangles)))
        self.count += len(vertices)
        self.total += len(triangles)


def _least_thickness(solid: Outline) -> dict[str, float]:
    """Least thickness of the walls at each point [L]."""
    found: dict[str, float] = {}
    for w in solid.section.walls:
        for p in (w.start, w.end):
            found[p] = min(found.get(p, np.inf), *w.thickness)
    return found


def _least_width(cluster: Cluster, thickness: Mapping[str, float]) -> float:
    """Least thickness of a cluster's walls, or least width of a solid without walls [L]."""
    widths = [p.width for r in cluster.rings for p in r if p.width is not None]
    return min([*(thickness[p] for p in cluster.points), *widths])


def _seam_edges(lines: Sequence[tuple[int, ...]], of: Sequence[Seam]) -> dict[tuple[int, int], str]:
    """The wall to the left of every directed edge along seams."""
    made: dict[tuple[int, int], str] = {}
    for row, seam in zip(lines, of, strict=True):
        for a, b in pairwise(row):
            made[a, b], made[b, a] = seam.left, seam.right
    return made


def _patch_density(strip: Strip, s: Array) -> Array:
    """e that booms add to each column of a strip [-]."""
    middle = 0.5 * (s[:-1] + s[1:])
    made = np.zeros(len(middle))
    for patch in strip.patches:
        low, high = patch.span
        area = (high - low) * 2.0 * float(strip.band.half(0.5 * (low + high)))
        made[(middle > low) & (middle < high)] += patch.area / area
    return made


def cluster_label(cluster: Cluster) -> str:
    return " ".join(("joint", *cluster.points) if cluster.points else cluster.walls)


def strip_label(wall: str) -> str:
    return "strip " + wall


def cluster_area(cluster: Cluster) -> float:
    """Area of a cluster, curved faces in fine steps [L^2]."""
    return float(cluster.polygon().area)


def _check_cover(cluster: Cluster, region: Region, filled: Filling) -> None:
    """The triangles must cover the polygon: a region that was left out gives plausible, wrong numbers."""
    wanted = sum(_shoelace(p) for p in region.loops)
    a, b, c = (filled.vertices[filled.triangles[:, i]] for i in range(3))
    found = 0.5 * ((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0]).sum()
    if abs(found - wanted) > 1e-9 * abs(wanted):
        raise SolveError(f"mesh of {cluster_label(cluster)} covers {found:.6g} of {wanted:.6g}")


def _shoelace(p: Array) -> float:
    q = p - p[0]
    return 0.5 * float(np.sum(q[:, 0] * np.roll(q[:, 1], -1) - np.roll(q[:, 0], -1) * q[:, 1]))


def _strip(
    strip: Strip, density: Density, cuts: Mapping[EndKey, Index], count: int, total: int
) -> tuple[StripMesh, Array, Index]:
    """Columns of a strip: its mesh, its new vertices and its triangles."""
    band, (a, b) = strip.band, strip.span
    least = 2.0 * float(min(band.half(a), band.half(b)))
    radius = 1.0 / abs(band.curvature) if band.curvature else np.inf
    limit = density.arc_step(radius, least) * radius if band.curvature else np.inf
    bounds = breaks(strip)
    rows = [
        low + (high - low) * stretched(high - low, density.first * least, density.ratio, limit)[:-1]
        for low, high in pairwise(bounds)
    ]
    s = np.append(np.concatenate(rows), b)
    n = np.linspace(-1.0, 1.0, density.layers + 1)
    inner = s[1:-1]
    grid_s, grid_n = np.meshgrid(inner, n, indexing="ij")
    points = band.place(grid_s, grid_n * band.half(grid_s)).reshape(-1, 2)
    grid = [cuts[band.name, False][None], count + np.arange(len(points)).reshape(len(inner), len(n)),
            cuts[band.name, True][::-1][None]]  # fmt: skip
    ids = np.concatenate(grid)
    p, q, r, t = ids[:-1, :-1], ids[1:, :-1], ids[1:, 1:], ids[:-1, 1:]
    quads = np.stack([np.stack([p, q, r], -1), np.stack([p, r, t], -1)], axis=2)
    columns = len(s) - 1
    own = quads.reshape(-1, 3)
    table = total + np.arange(len(own)).reshape(columns, 2 * density.layers)
    return StripMesh(band, s, n, table), points, own
