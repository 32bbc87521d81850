"""Triangles inside polygons with given boundary points: the one place that runs the mesh generator."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .band import Array
from .errors import SolveError

Index = NDArray[np.int64]

# the README's line; a test compares them
SYSTEM_LIBRARIES = (
    "sudo apt-get install -y python3-venv libglu1-mesa libgl1 libx11-6 libxcursor1 libxext6 libxfixes3 "
    "libxft2 libxinerama1 libxrender1 libfontconfig1 libgomp1"
)

# More different sizes than this are rounded down to powers of the ratio: each size is a field to evaluate.
MOST_SIZES = 40
SIZE_RATIO = 1.25


@dataclass(frozen=True)
class Region:
    """Closed loops of boundary points, and the sizes wanted inside.

    Parameters
    ----------
    loops : tuple of (k, 2) arrays
        Boundary points [L]; every two in a row become one element edge.
    inner : (k, 2) array
        Points that must be vertices inside [L].
    lines : tuple of tuple of int
        Rows of points (numbers among the loops' points, then the inner ones) whose steps must be edges.
    corners : tuple of (int, float)
        Points among all loops' points from which sizes grow, and the size at each [L].
    largest : float
        Largest size inside [L].
    slope : float
        Growth of the size with distance from a corner [-].
    """

    loops: tuple[Array, ...]
    inner: Array
    lines: tuple[tuple[int, ...], ...]
    corners: tuple[tuple[int, float], ...]
    largest: float
    slope: float


@dataclass(frozen=True)
class Filling:
    """Triangles of a region: first the loops' points in order, then the inner ones, then the rest."""

    vertices: Array
    triangles: Index


def fill(regions: list[Region]) -> list[Filling]:
    """Triangulate regions; no point is added on a boundary.

    Raises
    ------
    SolveError
        When the generator is missing, fails, or leaves a region unmeshed.
    """
    with generator() as gmsh:
        try:
            gmsh.option.setNumber("Mesh.Algorithm", 6)
            gmsh.option.setNumber("Mesh.MeshSizeExtendFromBoundary", 0)
            gmsh.option.setNumber("Mesh.MeshSizeFromPoints", 0)
            gmsh.option.setNumber("Mesh.Optimize", 0)
            return [_fill_one(gmsh, region) for region in regions]
        except SolveError:
            raise
        except Exception as fault:  # the generator raises bare Exception
            raise SolveError(f"meshing a joint failed: {fault}") from None


@contextmanager
def generator() -> Iterator[Any]:
    """The mesh generator, silent and on one thread; left as it was found.

    Raises
    ------
    SolveError
        When it is missing or does not work.
    """
    try:
        import gmsh
    except (ImportError, OSError) as fault:
        raise SolveError(
            f"the mesh generator cannot be loaded ({fault}); its system libraries: {SYSTEM_LIBRARIES}"
        ) from None
    started = bool(gmsh.isInitialized())
    if not started:
        gmsh.initialize(readConfigFiles=False, interruptible=False)
        try:
            _settle(gmsh)
        except Exception as fault:  # the generator raises bare Exception
            gmsh.finalize()
            raise SolveError(f"the mesh generator cannot mesh one triangle: {fault}") from None
    try:
        gmsh.option.setNumber("General.Terminal", 0)
        gmsh.option.setNumber("General.NumThreads", 1)
        yield gmsh
    finally:
        if not started:
            gmsh.clear()


def _settle(gmsh: Any) -> None:
    """Mesh one triangle and forget it.

    The first triangulation of a process differs in order and last digits from the same one made later:
    without this, numbers would depend on what the process solved before.
    """
    gmsh.option.setNumber("General.Terminal", 0)
    gmsh.model.add("first")
    geo = gmsh.model.geo
    corners = [geo.addPoint(x, y, 0.0) for x, y in ((0.0, 0.0), (1.0, 0.0), (0.0, 1.0))]
    lines = [geo.addLine(corners[i], corners[(i + 1) % 3]) for i in range(3)]
    geo.addPlaneSurface([geo.addCurveLoop(lines)])
    geo.synchronize()
    gmsh.model.mesh.generate(2)
    gmsh.model.remove()


def _fill_one(gmsh: Any, region: Region) -> Filling:
    gmsh.model.add("joint")
    try:
        geo = gmsh.model.geo
        points = np.concatenate([*region.loops, region.inner])
        centre, size = points.mean(axis=0), np.ptp(points, axis=0).max()
        scaled = (points - centre) / size
        tags = [geo.addPoint(float(x), float(y), 0.0) for x, y in scaled]
        loops, first = [], 0
        for loop in region.loops:
            own = tags[first : first + len(loop)]
            first += len(loop)
            lines = [geo.addLine(a, b) for a, b in zip(own, own[1:] + own[:1], strict=True)]
            for line in lines:
                geo.mesh.setTransfiniteCurve(line, 2)
            loops.append(geo.addCurveLoop(lines))
        surface = geo.addPlaneSurface(loops)
        seams = [geo.addLine(tags[a], tags[b]) for row in region.lines for a, b in pairwise(row)]
        for line in seams:
            geo.mesh.setTransfiniteCurve(line, 2)
        geo.synchronize()
        if seams:
            gmsh.model.mesh.embed(1, seams, 2, surface)
        _sizes(gmsh, region, tags, size)
        gmsh.model.mesh.generate(2)
        node_tags, coordinates, _ = gmsh.model.mesh.getNodes()
        place = np.zeros((int(node_tags.max()) + 1, 2))
        place[node_tags] = coordinates.reshape(-1, 3)[:, :2]
        corner_nodes = np.array([gmsh.model.mesh.getNodes(0, t)[0][0] for t in tags], dtype=np.int64)
        _, element_nodes = gmsh.model.mesh.getElementsByType(2, surface)
        triangles = element_nodes.reshape(-1, 3).astype(np.int64)
        inside = np.setdiff1d(np.unique(triangles), corner_nodes)
        number = np.full(place.shape[0], -1, dtype=np.int64)
        number[corner_nodes] = np.arange(len(corner_nodes))
        number[inside] = len(corner_nodes) + np.arange(len(inside))
        vertices = np.concatenate([points, place[inside] * size + centre])
        triangles = number[triangles]
        if triangles.size == 0 or (triangles < 0).any():
            raise SolveError("the mesh generator left a joint unmeshed")
        return Filling(vertices, _anticlockwise(vertices, triangles))
    finally:
        gmsh.model.remove()


def _sizes(gmsh: Any, region: Region, tags: list[int], size: float) -> None:
    """Background field: the least of the sizes that grow from each corner, one field for equal sizes."""
    field = gmsh.model.mesh.field
    grown = []
    for least, indices in _groups(region).items():
        distance, size_at = field.add("Distance"), field.add("Threshold")
        field.setNumbers(distance, "PointsList", [tags[i] for i in indices])
        field.setNumber(size_at, "InField", distance)
        field.setNumber(size_at, "SizeMin", least / size)
        field.setNumber(size_at, "SizeMax", region.largest / size)
        field.setNumber(size_at, "DistMin", 0.0)
        field.setNumber(size_at, "DistMax", (region.largest - least) / region.slope / size)
        grown.append(size_at)
    gmsh.option.setNumber("Mesh.MeshSizeMax", region.largest / size)
    if grown:
        least_of_all = field.add("Min")
        field.setNumbers(least_of_all, "FieldsList", grown)
        field.setAsBackgroundMesh(least_of_all)


def _groups(region: Region) -> dict[float, list[int]]:
    """Points by the size that grows from them; many different sizes are rounded down to a coarse scale."""
    small = [(i, size) for i, size in region.corners if size < region.largest]
    if len({size for _, size in small}) > MOST_SIZES:
        small = [(i, float(SIZE_RATIO ** np.floor(np.log(s) / np.log(SIZE_RATIO)))) for i, s in small]
    made: dict[float, list[int]] = {}
    for i, size in small:
        made.setdefault(size, []).append(i)
    return made


def _anticlockwise(vertices: Array, triangles: Index) -> Index:
    a, b, c = (vertices[triangles[:, i]] for i in range(3))
    turned = (b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0] < 0
    triangles = triangles.copy()
    triangles[turned] = triangles[turned][:, [0, 2, 1]]
    return triangles
