"""Cells of a wall graph: bridges (walls in no cell) and the bounded faces of the rest."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats, Integers
from beam_theory.curve import Curves
from beam_theory.errors import SectionError

__all__ = ["Cells", "bridges", "cells"]


@dataclass(frozen=True)
class Cells:
    """The c cells of n walls.

    left, right (n,): cell on the left and on the right of each wall's own direction, -1 for none.
    loops: per cell its walls in anticlockwise order as (wall, +1 along / -1 against its own direction).
    area (c,): enclosed by the midlines [L^2].
    """

    left: Integers
    right: Integers
    loops: tuple[tuple[tuple[int, int], ...], ...]
    area: Floats

    @property
    def count(self) -> int:
        """Number of cells."""
        return len(self.loops)

    @property
    def in_cell(self) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
        """(n,) True for walls in a cell, False for bridges."""
        return np.asarray((self.left >= 0) | (self.right >= 0))


def bridges(nodes: int, start: Integers, end: Integers) -> list[bool]:
    """Per wall whether taking it out would part the graph; several walls may join one pair of nodes.

    References
    ----------
    R. E. Tarjan, A note on finding the bridges of a graph, Information Processing Letters 2, 1974
    (from memory).
    """
    around: list[list[tuple[int, int]]] = [[] for _ in range(nodes)]
    for wall, (a, b) in enumerate(zip(start.tolist(), end.tolist(), strict=True)):
        around[a].append((wall, b))
        around[b].append((wall, a))
    order = [-1] * nodes
    low = [0] * nodes
    bridge = [False] * len(start)
    count = 0
    for first in range(nodes):
        if order[first] >= 0:
            continue
        order[first] = low[first] = count
        count += 1
        stack: list[tuple[int, int, int]] = [(first, -1, 0)]
        while stack:
            node, entry, turn = stack.pop()
            if turn < len(around[node]):
                stack.append((node, entry, turn + 1))
                wall, other = around[node][turn]
                if wall == entry:
                    continue
                if order[other] >= 0:
                    low[node] = min(low[node], order[other])
                else:
                    order[other] = low[other] = count
                    count += 1
                    stack.append((other, wall, 0))
            elif stack:
                parent = stack[-1][0]
                low[parent] = min(low[parent], low[node])
                bridge[entry] = low[node] > order[parent]
    return bridge


def cells(nodes: int, start: Integers, end: Integers, curves: Curves, names: list[str]) -> Cells:
    """Bounded faces of the walls that lie in a closed path, each part of the graph on its own.

    Raises
    ------
    SectionError
        When the faces do not add up, which happens only where walls cross or overlap.
    """
    n = len(start)
    free = np.array(bridges(nodes, start, end), dtype=bool)
    none = np.full(n, -1, dtype=np.int64)
    if free.all():
        return Cells(none, none.copy(), (), np.zeros(0))
    following = _following(start, end, curves, free)
    one = np.ones((n, 1))
    half_area = 0.5 * curves.swept(one)[:, 0]
    seen = [False] * (2 * n)
    left, right = none.tolist(), none.tolist()
    loops: list[tuple[tuple[int, int], ...]] = []
    areas: list[float] = []
    outer = 0
    for first in range(2 * n):
        if seen[first] or free[first // 2]:
            continue
        walk: list[int] = []
        half = first
        while not seen[half]:
            seen[half] = True
            walk.append(half)
            half = following[half]
        loop = tuple((h // 2, 1 - 2 * (h % 2)) for h in walk)
        area = sum(sign * half_area[wall] for wall, sign in loop)
        if area <= 0.0:
            outer += 1
            continue
        if area <= 1e-12 * sum(curves.length[wall] for wall, _ in loop) ** 2:
            raise SectionError([f"walls: {[names[w] for w, _ in loop][:6]} overlap; they enclose no area"])
        for h in walk:
            (right if h % 2 else left)[h // 2] = len(loops)
        loops.append(loop)
        areas.append(area)
    _count_faces(nodes, start, end, free, len(loops), outer)
    return Cells(np.array(left), np.array(right), tuple(loops), np.array(areas))


def _following(start: Integers, end: Integers, curves: Curves, free: np.ndarray) -> list[int]:
    """Per half-edge (2 w along wall w, 2 w + 1 against it) the one after it round the face on its left.

    Half-edges are ordered round a node by where they first leave a small circle about it: that tells apart
    walls that leave along one tangent with different curvature.
    """
    n = len(start)
    reach = curves.length * np.sinc(np.minimum(np.abs(curves.sweep), np.pi) / (2.0 * np.pi))
    near = np.full(int(max(start.max(), end.max())) + 1, np.inf)
    np.minimum.at(near, start, reach)
    np.minimum.at(near, end, reach)
    curvature = curves.sweep / curves.length
    angle = np.empty(2 * n)
    angle[0::2] = curves.heading + np.arcsin(0.25 * near[start] * curvature)
    angle[1::2] = curves.heading + curves.sweep + np.pi + np.arcsin(-0.25 * near[end] * curvature)
    angle = np.mod(angle, 2.0 * np.pi)
    origin = np.empty(2 * n, dtype=np.int64)
    origin[0::2], origin[1::2] = start, end
    halves = np.flatnonzero(~np.repeat(free, 2))
    ordered = halves[np.lexsort((angle[halves], origin[halves]))].tolist()
    following = [-1] * (2 * n)
    first = 0
    for i, half in enumerate(ordered):
        if i + 1 == len(ordered) or origin[ordered[i + 1]] != origin[half]:
            ring = ordered[first : i + 1]
            for k, leaving in enumerate(ring):
                following[leaving ^ 1] = ring[k - 1]
            first = i + 1
    return following


def _count_faces(
    nodes: int, start: Integers, end: Integers, free: np.ndarray, inner: int, outer: int
) -> None:
    """Euler's formula, part by part: inner faces = walls - nodes + parts, one outer face a part."""
    group = list(range(nodes))

    def root(node: int) -> int:
        while group[node] != node:
            group[node] = group[group[node]]
            node = group[node]
        return node

    used: set[int] = set()
    walls = 0
    for a, b, loose in zip(start.tolist(), end.tolist(), free.tolist(), strict=True):
        if not loose:
            walls += 1
            used.update((a, b))
            group[root(a)] = root(b)
    parts = len({root(node) for node in used})
    if inner != walls - len(used) + parts or outer != parts:
        raise SectionError(["walls: some cross or overlap between their points; join them at a shared point"])
