"""Boundary loops of a mesh, and rows of edges that connect them."""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass

import numpy as np

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


def cut_paths(mesh: Mesh, boundary: list[Loop], joined: list[set[int]]) -> list[list[int]]:
    """Rows of vertices along mesh edges that connect all loops, one row per gap.

    Parameters
    ----------
    joined : list of set of int
        Loops that are connected already by edges at which the stress function jumps.

    Notes
    -----
    Each group of loops reaches for the nearest loop of another group, so rows are short: across one wall.
    """
    head = list(range(len(boundary)))

    def root(i: int) -> int:
        while head[i] != i:
            head[i] = head[head[i]]
            i = head[i]
        return i

    for together in joined:
        for i in together:
            head[root(i)] = root(min(together))
    if len({root(i) for i in range(len(boundary))}) == 1:
        return []
    of_vertex = loop_of_vertex(mesh, boundary)
    neighbours = _neighbours(mesh)
    made = []
    while len(groups := {root(i) for i in range(len(boundary))}) > 1:
        for group in sorted(groups - {root(0)}):
            if root(group) != group or group == root(0):
                continue
            members = {i for i in range(len(boundary)) if root(i) == group}
            row = _reach(boundary, members, of_vertex, neighbours)
            made.append(row)
            head[group] = root(int(of_vertex[row[-1]]))
    return made


def loop_of_vertex(mesh: Mesh, boundary: list[Loop]) -> Index:
    """Number of the loop that each vertex lies on, -1 inside, (v,)."""
    number = np.full(len(mesh.vertices), -1, dtype=np.int64)
    for i, loop in enumerate(boundary):
        number[loop.vertices] = i
    return number


def _neighbours(mesh: Mesh) -> list[list[int]]:
    """Vertices joined to every vertex by an edge."""
    made: list[list[int]] = [[] for _ in range(len(mesh.vertices))]
    for a, b, c in mesh.triangles.tolist():
        made[a] += (b, c)
        made[b] += (c, a)
        made[c] += (a, b)
    return made


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
