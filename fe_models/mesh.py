"""The mesh of a section: triangles of all strips and clusters, sharing the points of every cut."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .band import Array, Band
from .boundary import EndKey, Piece
from .boundary_points import boundary_points
from .density import Density
from .errors import SolveError
from .fill import Region, fill
from .grading import stretched
from .partition import Cluster, Partition, Strip

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
    strips : mapping of wall name to StripMesh
    labels : tuple of str
        Name of each part.
    bends : tuple of Bend
        Curved edges of the clusters' elements.
    """

    vertices: Array
    triangles: Index
    region: Index
    strips: dict[str, StripMesh]
    labels: tuple[str, ...]
    bends: tuple[Bend, ...] = ()


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
    bends: list[Bend] = []
    labels = [cluster_label(c) for c in parts.clusters] + [strip_label(w) for w in parts.strips]
    count = 0
    prepared = []
    for i, cluster in enumerate(parts.clusters):
        scale = min(thickness[p] for p in cluster.points)
        prepared.append(boundary_points(cluster, scale, density.finer(levels.get(labels[i], 0))))
    fillings = fill([p.region for p in prepared])
    for i, (cluster, points, filled) in enumerate(zip(parts.clusters, prepared, fillings, strict=True)):
        _check_cover(cluster, points.region, filled.vertices, filled.triangles)
        number = np.full(len(filled.vertices), -1, dtype=np.int64)
        for key, at in points.cuts.items():
            if key in cut_vertices:
                number[at] = cut_vertices[key]
        new = number < 0
        number[new] = count + np.arange(new.sum())
        vertices.append(filled.vertices[new])
        count += int(new.sum())
        for key, at in points.cuts.items():
            cut_vertices[key] = number[at]
        bends += [Bend(int(number[a]), int(number[b]), piece, u) for a, b, piece, u in points.bends]
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
        np.concatenate(vertices),
        np.concatenate(triangles),
        np.concatenate(region),
        strips,
        tuple(labels),
        tuple(bends),
    )


def cluster_label(cluster: Cluster) -> str:
    return "joint " + " ".join(cluster.points)


def strip_label(wall: str) -> str:
    return "strip " + wall


def _check_cover(cluster: Cluster, region: Region, vertices: Array, triangles: Index) -> None:
    """The triangles must cover the polygon: a region that was left out gives plausible, wrong numbers."""
    wanted = sum(_shoelace(p) for p in region.loops)
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
