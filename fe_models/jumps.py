"""Mesh edges across which the flexural stress function jumps.

It jumps by a known polynomial where e changes from one element to the next, and by a constant along cut paths
from hole to hole: the flux that a hole's boundary must pass on. The jump J of an edge is the value seen from
its left less that from its right. Going once round a vertex inside the material must add up to nothing, and
going round a loop to the flux through it, so the jumps at the edges' starts are a flow in the network of
these edges, with the loops as nodes; the smallest such flow is taken.
"""

from __future__ import annotations

from collections import deque
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from scipy.sparse import csc_matrix
from scipy.sparse.csgraph import connected_components
from scipy.sparse.linalg import splu

from .band import Array
from .contour import Loop, cut_paths, loop_of_vertex
from .element import EDGES
from .mesh import Index, Mesh


@dataclass(frozen=True)
class Network:
    """Directed edges (m of them) at which the stress function may jump.

    Parameters
    ----------
    ends : (m, 2) array of int
        Vertices at start and end.
    left, right : (m,) arrays of int
        Triangles on either side.
    side : (m,) array of int
        Number of the edge in its left triangle, which runs through it from start to end.
    node : (m, 2) array of int
        Node of the network at start and end: loops first, then vertices inside.
    """

    ends: Index
    left: Index
    right: Index
    side: Index
    node: Index


def network(mesh: Mesh, boundary: list[Loop], e: Array) -> Network:
    """Edges between elements of different e, and cut paths so that all loops hang together."""
    t = mesh.triangles
    width = np.int64(len(mesh.vertices))
    starts = np.concatenate([t[:, a] for a, _ in EDGES])
    ends = np.concatenate([t[:, b] for _, b in EDGES])
    key = starts * width + ends
    order = np.argsort(key)
    sorted_key = key[order]

    def find(wanted: Index) -> Index:
        """Positions of directed edges among all, -1 where absent."""
        at = np.minimum(np.searchsorted(sorted_key, wanted), len(sorted_key) - 1)
        return np.where(sorted_key[at] == wanted, order[at], -1)

    opposite = find(ends * width + starts)
    once = np.flatnonzero((opposite >= 0) & (starts < ends))
    owner = np.tile(np.arange(len(t)), 3)
    changes = once[e[owner[once]] != e[owner[opposite[once]]]]
    on_loop = loop_of_vertex(mesh, boundary)
    pairs = {(int(starts[i]), int(ends[i])) for i in changes}
    for row in cut_paths(mesh, boundary, _joined(pairs, on_loop)):
        pairs |= {(a, b) for a, b in pairwise(row) if (b, a) not in pairs}
    table = np.array(sorted(pairs), dtype=np.int64).reshape(-1, 2)
    forward = find(table[:, 0] * width + table[:, 1])
    backward = find(table[:, 1] * width + table[:, 0])
    inside = np.unique(table[on_loop[table] < 0])
    number = np.full(len(mesh.vertices), -1, dtype=np.int64)
    number[inside] = len(boundary) + np.arange(len(inside))
    node = np.where(on_loop[table] >= 0, on_loop[table], number[table])
    return Network(table, owner[forward], owner[backward], forward // len(t), node)


def _joined(pairs: set[tuple[int, int]], on_loop: Index) -> list[set[int]]:
    """Groups of loops connected by edges."""
    near: dict[int, list[int]] = {}
    for a, b in pairs:
        near.setdefault(a, []).append(b)
        near.setdefault(b, []).append(a)
    seen: set[int] = set()
    groups = []
    for first in near:
        if first in seen:
            continue
        seen.add(first)
        queue, group = deque([first]), set()
        while queue:
            here = queue.popleft()
            if on_loop[here] >= 0:
                group.add(int(on_loop[here]))
            fresh = [v for v in near[here] if v not in seen]
            seen.update(fresh)
            queue.extend(fresh)
        if group:
            groups.append(group)
    return groups


def start_jumps(of: Network, rise: Array, flux: Array) -> Array:
    """Jumps at the edges' starts, (m,).

    Parameters
    ----------
    rise : (m,) array
        What the jump gains from start to end of each edge.
    flux : (loops,) array
        What the function gains along the boundary edges of each loop.
    """
    m, nodes = len(of.ends), int(max(of.node.max(initial=0), len(flux) - 1)) + 1
    if m == 0:
        return np.zeros(0)
    edge = np.arange(m)
    rows, columns = of.node.T.ravel(), np.concatenate([edge, edge])
    signs = np.concatenate([np.ones(m), -np.ones(m)])
    incidence = csc_matrix((signs, (rows, columns)), shape=(nodes, m))
    supply = np.asarray(np.bincount(of.node[:, 1], rise, nodes), dtype=float)
    supply[: len(flux)] += flux
    # in each connected part one node's balance follows from the others
    laplacian = incidence @ incidence.T
    _, part = connected_components(laplacian, directed=False)
    free = np.ones(nodes, dtype=bool)
    free[np.unique(part, return_index=True)[1]] = False
    kept = csc_matrix(incidence.tocsr()[free])
    y = splu(csc_matrix(kept @ kept.T)).solve(supply[free]) if free.any() else np.zeros(0)
    return np.asarray(kept.T @ y)


def steps(mesh: Mesh, of: Network, jump: Array, nodes: int) -> Array:
    """Element values (e, nodes) of a function with the given jumps and the value 0 elsewhere.

    Parameters
    ----------
    jump : (m, p + 1) array
        Jump of each edge at its nodes, start to end.
    """
    made = np.zeros((len(mesh.triangles), nodes))
    inner = jump.shape[1] - 2
    for i in range(inner):
        made[of.left, 3 + of.side * inner + i] = jump[:, 1 + i]
    across: dict[tuple[int, int, int], float] = {}
    for (a, b), left, right, j in zip(
        of.ends.tolist(), of.left.tolist(), of.right.tolist(), jump, strict=True
    ):
        for v, value in ((a, float(j[0])), (b, float(j[-1]))):
            across[v, left, right] = -value
            across[v, right, left] = value
    t = mesh.triangles
    flagged = np.zeros(len(mesh.vertices), dtype=bool)
    flagged[of.ends] = True
    around: dict[int, list[int]] = {}
    for e in np.flatnonzero(flagged[t].any(axis=1)).tolist():
        for v in t[e].tolist():
            if flagged[v]:
                around.setdefault(v, []).append(e)
    for v, ring in around.items():
        seen = {ring[0]: 0.0}
        queue = [ring[0]]
        while queue:
            here = queue.pop()
            mine = set(t[here].tolist())
            for other in ring:
                if other not in seen and len(mine.intersection(t[other].tolist())) == 2:
                    seen[other] = seen[here] + across.get((v, here, other), 0.0)
                    queue.append(other)
        for e, value in seen.items():
            made[e, int(np.flatnonzero(t[e] == v)[0])] = value
    return made
