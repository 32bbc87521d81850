"""Boundary loops of a mesh, and cut paths between them along which a stress function may jump."""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np

from .band import Array
from .element import EDGES
from .errors import SolveError
from .mesh import Index, Mesh


@dataclass(frozen=True)
class Loop:
    """A closed row of boundary edges with the material on the left.

    Parameters
    ----------
    vertices : (m,) array of int
        Start vertex of each edge.
    elements, sides : (m,) arrays of int
        The triangle of each edge and the number of the edge in it (see element.EDGES).
    area : float
        Signed area inside [L^2]: positive for the outer loop.
    """

    vertices: Index
    elements: Index
    sides: Index
    area: float


@dataclass(frozen=True)
class Path:
    """A row of mesh edges from one loop to another, and the triangles that see its nodes from the left.

    Parameters
    ----------
    vertices : tuple of int
    loops : (int, int)
        Loop at its start and at its end.
    left : tuple of (int, int)
        (triangle, local node of order 1 or the edge's number + 3) are resolved by ``Cuts.offset``: pairs of
        triangle and vertex on the path.
    edges : tuple of (int, int)
        Triangle to the left of each edge and the number of that edge in it.
    """

    vertices: tuple[int, ...]
    loops: tuple[int, int]
    left: tuple[tuple[int, int], ...] = field(repr=False)
    edges: tuple[tuple[int, int], ...] = field(repr=False)


def loops(mesh: Mesh) -> list[Loop]:
    """Boundary loops of a mesh, the outer one first."""
    t = mesh.triangles
    starts = np.concatenate([t[:, a] for a, _ in EDGES])
    ends = np.concatenate([t[:, b] for _, b in EDGES])
    owner = np.tile(np.arange(len(t)), 3)
    side = np.repeat(np.arange(3), len(t))
    width = np.int64(len(mesh.vertices))
    inner = np.isin(starts * width + ends, ends * width + starts)
    outside = np.flatnonzero(~inner)
    by_start = {int(starts[i]): int(i) for i in outside}
    if len(by_start) != len(outside):
        raise SolveError("the solid touches itself at a point of its boundary")
    found = []
    while by_start:
        here = next(iter(by_start))
        row = []
        while here in by_start:
            i = by_start.pop(here)
            row.append(i)
            here = int(ends[i])
        p = mesh.vertices[starts[row]]
        p = p - p[0]
        q = np.roll(p, -1, axis=0)
        area = 0.5 * float(np.sum(p[:, 0] * q[:, 1] - q[:, 0] * p[:, 1]))
        found.append(Loop(starts[row], owner[row], side[row], area))
    found.sort(key=lambda loop: -loop.area)
    if found[0].area <= 0.0 or any(loop.area >= 0.0 for loop in found[1:]):
        raise SolveError("the mesh has more than one outer boundary")
    return found


def cut_paths(mesh: Mesh, boundary: list[Loop]) -> list[Path]:
    """One path per hole such that all loops are connected by paths.

    Each hole is joined by the shortest row of edges to a loop that is not yet connected with it.
    """
    if len(boundary) == 1:
        return []
    of_vertex = np.full(len(mesh.vertices), -1, dtype=np.int64)
    for i, loop in enumerate(boundary):
        of_vertex[loop.vertices] = i
    neighbours, around = _adjacency(mesh)
    head = list(range(len(boundary)))

    def root(i: int) -> int:
        while head[i] != i:
            head[i] = head[head[i]]
            i = head[i]
        return i

    made = []
    while len({root(i) for i in range(len(boundary))}) > 1:
        # every group of loops other than the outer one reaches out once per round
        for group in sorted({root(i) for i in range(len(boundary))} - {root(0)}):
            if root(group) != group or group == root(0):
                continue
            members = {i for i in range(len(boundary)) if root(i) == group}
            row = _reach(boundary, members, of_vertex, neighbours)
            first, last = int(of_vertex[row[0]]), int(of_vertex[row[-1]])
            made.append(_path(mesh, row, (first, last), around))
            head[root(first)] = root(last)
            if root(0) != root(last):
                continue
    return made


def _adjacency(mesh: Mesh) -> tuple[list[list[int]], list[list[int]]]:
    """Neighbours of every vertex, and the triangles around it."""
    around: list[list[int]] = [[] for _ in range(len(mesh.vertices))]
    neighbours: list[list[int]] = [[] for _ in range(len(mesh.vertices))]
    for e, (a, b, c) in enumerate(mesh.triangles.tolist()):
        for v, (p, q) in ((a, (b, c)), (b, (c, a)), (c, (a, b))):
            around[v].append(e)
            neighbours[v] += (p, q)
    return neighbours, around


def _reach(
    boundary: list[Loop], members: set[int], of_vertex: Index, neighbours: list[list[int]]
) -> list[int]:
    """Shortest row of edges from the loops in ``members`` to any other loop, inside the material."""
    before = {int(v): -1 for i in sorted(members) for v in boundary[i].vertices}
    queue = deque(before)
    while queue:
        here = queue.popleft()
        for v in neighbours[here]:
            if v in before:
                continue
            before[v] = here
            if of_vertex[v] >= 0:
                row = [v]
                while before[row[-1]] >= 0:
                    row.append(before[row[-1]])
                return row[::-1]
            queue.append(v)
    raise SolveError("a hole of the mesh cannot be joined to its outer boundary")


def _path(mesh: Mesh, row: list[int], ends: tuple[int, int], around: list[list[int]]) -> Path:
    """The path along a row of vertices, with the triangles on its left."""
    t = mesh.triangles
    steps = set(pairwise(row))
    edges = []
    for a, b in pairwise(row):
        for e in around[a]:
            for i, (p, q) in enumerate(EDGES):
                if t[e, p] == a and t[e, q] == b:
                    edges.append((e, i))
    left: set[tuple[int, int]] = set()
    for (a, b), (e, _) in zip(pairwise(row), edges, strict=True):
        for v in (a, b):
            # all triangles round v that are reached from e without crossing the path
            queue = [e]
            while queue:
                here = queue.pop()
                if (here, v) in left:
                    continue
                left.add((here, v))
                for p, q in EDGES:
                    i, j = int(t[here, p]), int(t[here, q])
                    if v not in (i, j) or (i, j) in steps or (j, i) in steps:
                        continue
                    queue += [f for f in around[v] if f != here and i in t[f] and j in t[f]]
    return Path(tuple(row), ends, tuple(sorted(left)), tuple(edges))


def offsets(mesh: Mesh, paths: list[Path], jumps: Array, nodes: int, inner: int) -> Array:
    """Element values of the step functions that rise by ``jumps`` from right to left of each path.

    Parameters
    ----------
    jumps : (paths,) array
    nodes, inner : int
        Nodes of an element, and inner nodes of an edge.

    Returns
    -------
    (e, k) array
        Zero except at nodes on a path seen from its left.
    """
    made = np.zeros((len(mesh.triangles), nodes))
    for path, jump in zip(paths, jumps, strict=True):
        for e, v in path.left:
            made[e, int(np.flatnonzero(mesh.triangles[e] == v)[0])] += jump
        for e, side in path.edges:
            made[e, 3 + side * inner : 3 + (side + 1) * inner] += jump
    return made
