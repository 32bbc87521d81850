"""The mesh of a section: triangles of all strips and clusters, sharing the points of every cut."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .band import Array, Band
from .boundary import EndKey, Piece, Ring
from .errors import SolveError
from .fill import Region, fill
from .grading import corner_size, graded, stretched
from .partition import Cluster, Partition, Strip

Index = NDArray[np.int64]


@dataclass(frozen=True)
class Density:
    """How fine the mesh is.

    Parameters
    ----------
    eta : float
        Energy share lost at a corner's first element [-], see grading.
    largest : float
        Largest size in a cluster over the thickness [-].
    slope : float
        Growth of the size with distance from a corner [-].
    layers : int
        Elements across a strip.
    first : float
        First element of a strip over its thickness [-].
    ratio : float
        Growth from one element of a strip to the next [-].
    turn : float
        Largest angle of an arc in one element [rad].
    """

    eta: float = 1e-4
    largest: float = 0.8
    slope: float = 1.0
    layers: int = 1
    first: float = 1.0
    ratio: float = 2.0
    turn: float = 0.2

    def finer(self, level: float) -> Density:
        """The density of a refinement level (0: this one)."""
        return Density(
            self.eta * 10.0 ** (-2 * level),
            self.largest * 0.7**level,
            max(0.35, self.slope * 0.8**level),
            self.layers,
            self.first * 0.7**level,
            1.0 + (self.ratio - 1.0) * 0.8**level,
            self.turn * 0.7**level,
        )


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
    strips : mapping of wall name to StripMesh
    labels : tuple of str
        Name of each part.
    """

    vertices: Array
    triangles: Index
    region: Index
    strips: dict[str, StripMesh]
    labels: tuple[str, ...]


def mesh(
    parts: Partition, thickness: Mapping[str, float], density: Density, levels: Mapping[str, float]
) -> Mesh:
    """Mesh a partition.

    Parameters
    ----------
    thickness : mapping of point name to float
        Least thickness of the walls at each point [L].
    levels : mapping of part label to float
        Refinement level of each part (0 where absent).

    Raises
    ------
    SolveError
        When the mesh generator fails or a part is not covered by its triangles.
    """
    vertices: list[Array] = []
    cut_vertices: dict[EndKey, Index] = {}
    triangles: list[Index] = []
    region: list[Index] = []
    labels = [cluster_label(c) for c in parts.clusters] + [strip_label(w) for w in parts.strips]
    count = 0
    prepared, regions = [], []
    for i, cluster in enumerate(parts.clusters):
        scale = min(thickness[p] for p in cluster.points)
        fineness = density.finer(levels.get(labels[i], 0))
        prepared.append([_points(ring, scale, fineness) for ring in cluster.rings])
        regions.append(_region(cluster, prepared[-1], scale, fineness))
    fillings = fill(regions)
    for i, (cluster, rings, filled) in enumerate(zip(parts.clusters, prepared, fillings, strict=True)):
        _check_cover(cluster, rings, filled.vertices, filled.triangles)
        number = np.full(len(filled.vertices), -1, dtype=np.int64)
        base = 0
        for points, cuts in rings:
            for key, at in cuts.items():
                wrapped = base + at % len(points)
                if key in cut_vertices:
                    number[wrapped] = cut_vertices[key]
            base += len(points)
        new = number < 0
        number[new] = count + np.arange(new.sum())
        vertices.append(filled.vertices[new])
        count += int(new.sum())
        base = 0
        for points, cuts in rings:
            for key, at in cuts.items():
                cut_vertices[key] = number[base + at % len(points)]
            base += len(points)
        triangles.append(number[filled.triangles])
        region.append(np.full(len(filled.triangles), i))
    strips = {}
    total = sum(len(t) for t in triangles)
    for j, (name, strip) in enumerate(parts.strips.items()):
        fineness = density.finer(levels.get(strip_label(name), 0))
        made, inner, own = _strip(strip, fineness, cut_vertices, count, total)
        vertices.append(inner)
        count += len(inner)
        total += len(own)
        strips[name] = made
        triangles.append(own)
        region.append(np.full(len(own), len(parts.clusters) + j))
    return Mesh(
        np.concatenate(vertices), np.concatenate(triangles), np.concatenate(region), strips, tuple(labels)
    )


def cluster_label(cluster: Cluster) -> str:
    return "joint " + " ".join(cluster.points)


def strip_label(wall: str) -> str:
    return "strip " + wall


def _points(ring: Ring, scale: float, density: Density) -> tuple[Array, dict[EndKey, Index]]:
    """Graded boundary points of a ring, and where each cut's points lie among them (right to left)."""
    n = len(ring)
    sizes = [_corner(ring[i - 1], ring[i], scale, density) for i in range(n)]
    points, cuts, count = [], {}, 0
    for i, piece in enumerate(ring):
        if piece.cut is not None:
            u = np.linspace(0.0, 1.0, density.layers + 1)
            cuts[piece.cut] = count + np.arange(density.layers + 1)
        else:
            own = _thickness(piece, scale)
            u = graded(piece.length, sizes[i], sizes[(i + 1) % n], density.largest * own, density.slope)
            if not piece.straight and piece.band is not None:
                turn = abs(piece.band.curvature * (piece.span[1] - piece.span[0]))
                if turn / (len(u) - 1) > density.turn:
                    u = np.linspace(0.0, 1.0, int(np.ceil(turn / density.turn)) + 1)
        points.append(piece.at(u[:-1]))
        count += len(u) - 1
    return np.concatenate(points), cuts


def _region(
    cluster: Cluster, rings: list[tuple[Array, dict[EndKey, Index]]], scale: float, density: Density
) -> Region:
    """A cluster's boundary points with the sizes that grow from its corners."""
    corners, base, thickest = [], 0, scale
    for ring, (points, _) in zip(cluster.rings, rings, strict=True):
        for i, piece in enumerate(ring):
            size = _corner(ring[i - 1], piece, scale, density)
            first = int(np.argmin(np.hypot(*(points - piece.start).T)))
            corners.append((base + first, size))
            thickest = max(thickest, _thickness(piece, scale))
        base += len(points)
    return Region(tuple(p for p, _ in rings), tuple(corners), density.largest * thickest, density.slope)


def _thickness(piece: Piece, scale: float) -> float:
    """Thickness that sets the size along a piece [L]."""
    if piece.band is None:
        return max(scale, piece.length if piece.cut is not None else 0.0)
    return 2.0 * float(min(piece.band.half(piece.span[0]), piece.band.half(piece.span[1])))


def _corner(before: Piece, after: Piece, scale: float, density: Density) -> float:
    """Wanted size at the vertex between two pieces [L]."""
    own = min(_thickness(before, scale), _thickness(after, scale))
    if before.cut is not None or after.cut is not None:
        return own / density.layers
    a = before.at(1.0) - before.at(1.0 - 1e-6)
    b = after.at(1e-6) - after.at(0.0)
    turn = np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b)
    size = corner_size(np.pi - float(turn), own, density.eta)
    return min(size, before.length, after.length, density.largest * own)


def _check_cover(
    cluster: Cluster, rings: list[tuple[Array, dict[EndKey, Index]]], vertices: Array, triangles: Index
) -> None:
    """The triangles must cover the polygon: a region that was left out gives plausible, wrong numbers."""
    wanted = sum(_shoelace(p) for p, _ in rings)
    a, b, c = (vertices[triangles[:, i]] for i in range(3))
    found = 0.5 * ((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0]).sum()
    if abs(found - wanted) > 1e-9 * abs(wanted):
        raise SolveError(f"mesh of joint {' '.join(cluster.points)} covers {found:.6g} of {wanted:.6g}")


def _shoelace(p: Array) -> float:
    q = p - p[0]
    return 0.5 * float(np.sum(q[:, 0] * np.roll(q[:, 1], -1) - np.roll(q[:, 0], -1) * q[:, 1]))


def _strip(
    strip: Strip, density: Density, cuts: Mapping[EndKey, Index], count: int, total: int
) -> tuple[StripMesh, Array, Index]:
    """Columns of a strip: its mesh, its new vertices and its triangles."""
    band, (a, b) = strip.band, strip.span
    least = 2.0 * float(min(band.half(a), band.half(b)))
    limit = density.turn / abs(band.curvature) if band.curvature else np.inf
    s = a + (b - a) * stretched(b - a, density.first * least, density.ratio, limit)
    n = np.linspace(-1.0, 1.0, density.layers + 1)
    inner = s[1:-1]
    grid_s, grid_n = np.meshgrid(inner, n, indexing="ij")
    points = band.place(grid_s, grid_n * band.half(grid_s)).reshape(-1, 2)
    rows = [cuts[band.name, False][None], count + np.arange(len(points)).reshape(len(inner), len(n)),
            cuts[band.name, True][::-1][None]]  # fmt: skip
    ids = np.concatenate(rows)
    p, q, r, t = ids[:-1, :-1], ids[1:, :-1], ids[1:, 1:], ids[:-1, 1:]
    quads = np.stack([np.stack([p, q, r], -1), np.stack([p, r, t], -1)], axis=2)
    columns = len(s) - 1
    own = quads.reshape(-1, 3)
    table = total + np.arange(len(own)).reshape(columns, 2 * density.layers)
    return StripMesh(band, s, n, table), points, own
