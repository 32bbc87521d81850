"""The wall graph ready to be solved: walls split at their booms, nodes, cells, and a tree that spans it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from beam_theory.arrays import Complexes, Floats, Integers
from beam_theory.bends import Run, Stroke, runs
from beam_theory.cells import Cells, cells
from beam_theory.curve import Curves
from beam_theory.errors import LoadError, SectionError
from beam_theory.section import Section

__all__ = ["Network", "Pieces", "network"]

_GAUSS_POINTS = 24
_Z, _W = np.polynomial.legendre.leggauss(_GAUSS_POINTS)
_Z, _W = 0.5 * (_Z + 1.0), 0.5 * _W


@dataclass(frozen=True)
class Pieces:
    """m pieces of walls, each between two nodes and free of booms inside.

    wall, start, end (m,): wall and node numbers. first, last (m,): fractions of the wall.
    t0, t1 (m,) [L]: thickness at the ends. e, g (m,): moduli, e times direct_share.

    Quadrature: with the logarithmic mean thickness t_log, du/t = dz/t_log, so the fractions
    u = expm1(l z)/expm1(l), l = ln(t1/t0), at Gauss points z make every integrand entire in z. It is exact
    to round-off for tapers and arcs alike.
    """

    wall: Integers
    first: Floats
    last: Floats
    start: Integers
    end: Integers
    curves: Curves
    t0: Floats
    t1: Floats
    e: Floats
    g: Floats
    u: Floats
    t: Floats
    t_log: Floats

    @property
    def length(self) -> Floats:
        """(m,) [L]."""
        return self.curves.length

    @property
    def ds(self) -> Floats:
        """Weights of an integral over s, (m, k) [L]."""
        return np.asarray((self.length / self.t_log)[:, None] * _W * self.t)

    @property
    def eta(self) -> Floats:
        """Weights of an integral of e t ds with direct_share, (m, k) [L^2]."""
        return np.asarray(self.e[:, None] * self.t * self.ds)

    @property
    def flexibility(self) -> Floats:
        """Integral of ds/(g t), (m,) [-]."""
        return np.asarray(self.length / (self.g * self.t_log))

    def over_gt(self, value: Floats) -> Floats:
        """Integral of value ds/(g t) over each piece; value (m, k) at the quadrature fractions."""
        return np.asarray(self.flexibility * (value @ _W))

    def logarithmic(self, rows: slice | Integers, u: Floats) -> Floats:
        """Part of the integral of ds/t reached at u, 0..1, same shape as u (rows, k)."""
        x = ((self.t1 - self.t0) / self.t0)[rows, None]
        flat = x == 0.0
        safe = np.where(flat, 1.0, x)
        return np.where(flat, u, np.log1p(safe * u) / np.log1p(safe))


@dataclass(frozen=True)
class Network:
    """Pieces, nodes, cells and the spanning tree; places are complex numbers in the file's axes.

    node (n,) complex [L]; boom (n,): sum of e A_b at each node; boom_area (n,): sum of A_b.
    walls: name to (number, slice of its pieces).
    left, right (m,): cells beside each piece, -1 for none.
    chord: pieces cut open, with the piece fraction of each cut; tree: (node, its parent, piece, sign) from
    the leaves to the root, sign +1 where the piece starts on the node. bends: points that were rounded.
    """

    section: Section
    pieces: Pieces
    node: Complexes
    boom: Floats
    boom_area: Floats
    walls: Mapping[str, tuple[int, slice]]
    cells: Cells
    left: Integers
    right: Integers
    chord: Integers
    chord_at: Floats
    tree: tuple[tuple[int, int, int, int], ...]
    bends: tuple[str, ...] = ()

    @property
    def cell_area(self) -> Floats:
        """Area enclosed by the midlines of each cell, (c,) [L^2]."""
        centre = complex(np.mean(self.node))
        one = np.ones((len(self.pieces.t0), 1))
        return 0.5 * self.round_cells(self.pieces.curves.moved(-centre).swept(one)[:, 0])

    def rows(self, wall: str) -> slice:
        """Pieces of a wall."""
        if wall not in self.walls:
            raise LoadError(f"no wall named {wall!r}; known: {sorted(self.walls)}")
        return self.walls[wall][1]

    def place(self, wall: str, fractions: Floats) -> tuple[Integers, Floats]:
        """Pieces and piece fractions (k,) of wall fractions (k,); a boom belongs to the piece before it."""
        rows = self.rows(wall)
        at = np.atleast_1d(np.asarray(fractions, dtype=np.float64))
        if at.ndim != 1 or not ((at >= 0.0) & (at <= 1.0)).all():
            raise LoadError(f"wall {wall!r}: fractions must be a row of numbers within 0..1, got {fractions}")
        edges = self.pieces.last[rows][:-1]
        piece = rows.start + np.searchsorted(edges, at, side="left")
        first, last = self.pieces.first[piece], self.pieces.last[piece]
        return piece, np.clip((at - first) / (last - first), 0.0, 1.0)

    def cell_sum(self, per_cell: Floats) -> Floats:
        """Value of the cell on the left minus that on the right of each piece, (m,)."""
        padded = np.append(per_cell, 0.0)
        return np.asarray(padded[self.left] - padded[self.right])

    def round_cells(self, per_piece: Floats) -> Floats:
        """Sum of a piece quantity anticlockwise round each cell, (c,)."""
        out = np.zeros(self.cells.count + 1)
        np.add.at(out, self.left, per_piece)
        np.add.at(out, self.right, -per_piece)
        return out[:-1]


def network(section: Section, rounded: bool = False) -> Network:
    """The solvable graph of a section; raises SectionError with the faults found.

    rounded: bends of two straight walls as arcs, after the section's corners.
    """
    section.check()
    points = list(dict.fromkeys(end for wall in section.walls for end in (wall.start, wall.end)))
    number = {name: i for i, name in enumerate(points)}
    start = np.array([number[wall.start] for wall in section.walls])
    end = np.array([number[wall.end] for wall in section.walls])
    sharp = runs(section, False)
    whole = _curves([strokes[0] for strokes in sharp.strokes])
    centre = complex(np.mean(whole.start))
    found = cells(len(points), start, end, whole.moved(-centre), [wall.name for wall in section.walls])
    run = runs(section, True) if rounded and section.corners else sharp
    pieces, node, boom, boom_area, rows = _split(section, points, number, run)
    left, right = found.left[pieces.wall], found.right[pieces.wall]
    walls = {wall.name: (i, rows[i]) for i, wall in enumerate(section.walls)}
    cut = _cut_pieces(section, walls, pieces, found)
    chord, tree = _spanning_tree(len(node), pieces, left, right, cut)
    at = np.array([cut.get(piece, 0.0) for piece in chord])
    cut_pieces = np.array(chord, dtype=np.int64)
    return Network(
        section, pieces, node, boom, boom_area, walls, found, left, right, cut_pieces, at, tree, run.bends
    )


def _curves(strokes: list[Stroke]) -> Curves:
    """Curves of some strokes, in the file's axes."""
    return Curves(
        np.array([s.start for s in strokes]),
        np.array([s.heading for s in strokes]),
        np.array([s.length for s in strokes]),
        np.array([s.sweep for s in strokes]),
    )


def _split(
    section: Section, points: list[str], number: dict[str, int], run: Run
) -> tuple[Pieces, Complexes, Floats, Floats, list[slice]]:
    """Split walls at their booms and strokes; booms at the end of a wall go to its point."""
    node = [run.places[name] for name in points]
    stiffness, area = [0.0] * len(node), [0.0] * len(node)
    along: dict[str, dict[float, list[float]]] = {}
    ends = {wall.name: (wall.start, wall.end) for wall in section.walls}
    for b in section.booms:
        point = b.point
        if b.wall is not None and b.at in (0.0, 1.0):
            point = ends[b.wall][int(b.at)]
        if point is not None:
            stiffness[number[point]] += b.e * b.area
            area[number[point]] += b.area
        elif b.wall is not None and b.at is not None:
            sums = along.setdefault(b.wall, {}).setdefault(b.at, [0.0, 0.0])
            sums[0] += b.e * b.area
            sums[1] += b.area
    parts: list[Stroke] = []
    wall_of: list[int] = []
    start: list[int] = []
    end: list[int] = []
    rows: list[slice] = []
    for i, wall in enumerate(section.walls):
        booms = along.get(wall.name, {})
        split = [part for stroke in run.strokes[i] for part in _stretches(stroke, sorted(booms))]
        joints = [number[wall.start]]
        for part in split[1:]:
            joints.append(len(node))
            node.append(part.start)
            own = booms.get(part.first, (0.0, 0.0))
            stiffness.append(own[0])
            area.append(own[1])
        joints.append(number[wall.end])
        rows.append(slice(len(parts), len(parts) + len(split)))
        parts += split
        wall_of += [i] * len(split)
        start += joints[:-1]
        end += joints[1:]
    index = np.array(wall_of)
    u0, u1 = np.array([p.first for p in parts]), np.array([p.last for p in parts])
    t = np.array([wall.thickness for wall in section.walls], dtype=np.float64)[index]
    rise = t[:, 1] - t[:, 0]
    t0, t1 = t[:, 0] + rise * u0, np.where(u1 == 1.0, t[:, 1], t[:, 0] + rise * u1)
    e = np.array([wall.e * wall.direct_share for wall in section.walls])[index]
    g = np.array([wall.g for wall in section.walls], dtype=np.float64)[index]
    u, thickness, t_log = _quadrature(t0, t1)
    pieces = Pieces(
        index, u0, u1, np.array(start), np.array(end), _curves(parts), t0, t1, e, g, u, thickness, t_log
    )
    return pieces, np.array(node), np.array(stiffness), np.array(area), rows


def _stretches(stroke: Stroke, stations: list[float]) -> list[Stroke]:
    """A stroke split at the wall fractions that lie inside it."""
    inside = [at for at in stations if stroke.first < at < stroke.last]
    if not inside:
        return [stroke]
    edges = [stroke.first, *inside, stroke.last]
    span = stroke.last - stroke.first
    curve = _curves([stroke])
    out = []
    for low, high in pairwise(edges):
        a, b = (low - stroke.first) / span, (high - stroke.first) / span
        place = complex(curve.position(np.array([[a]]))[0, 0]) if a > 0.0 else stroke.start
        heading = stroke.heading + stroke.sweep * a
        out.append(Stroke(low, high, place, heading, stroke.length * (b - a), stroke.sweep * (b - a)))
    return out


def _quadrature(t0: Floats, t1: Floats) -> tuple[Floats, Floats, Floats]:
    """Fractions and thickness at the quadrature points (m, k), logarithmic mean thickness (m,)."""
    x = (t1 - t0) / t0
    flat = x == 0.0
    safe = np.where(flat, 1.0, x)
    span = np.log1p(safe)
    t_log = np.where(flat, t0, t0 * safe / span)
    u = np.where(flat[:, None], _Z, np.expm1(span[:, None] * _Z) / safe[:, None])
    return u, t0[:, None] + (t1 - t0)[:, None] * u, t_log


def _cut_pieces(
    section: Section, walls: Mapping[str, tuple[int, slice]], pieces: Pieces, found: Cells
) -> dict[int, float]:
    """Piece and piece fraction of each of the user's cuts; a wall in no cell must not be cut."""
    out: dict[int, float] = {}
    faults: list[str] = []
    in_cell = found.in_cell
    for i, cut in enumerate(section.cuts):
        number, rows = walls[cut.wall]
        if not in_cell[number]:
            faults.append(f"cuts[{i}]: wall {cut.wall!r} is in no cell; cut walls of cells only")
            continue
        piece = rows.start + int(np.searchsorted(pieces.last[rows][:-1], cut.at, side="left"))
        if any(pieces.wall[other] == number for other in out):
            faults.append(f"cuts[{i}]: wall {cut.wall!r} is cut twice; one cut a wall")
        out[piece] = float((cut.at - pieces.first[piece]) / (pieces.last[piece] - pieces.first[piece]))
    if len(section.cuts) > found.count:
        faults.append(f"cuts: at most one for each of the {found.count} cells, got {len(section.cuts)}")
    if faults:
        raise SectionError(faults)
    return out


def _spanning_tree(
    nodes: int, pieces: Pieces, left: Integers, right: Integers, cut: dict[int, float]
) -> tuple[list[int], tuple[tuple[int, int, int, int], ...]]:
    """Pieces left out of a spanning tree (the user's cuts, then outer walls of cells) and the tree itself."""
    group = list(range(nodes))

    def root(node: int) -> int:
        while group[node] != node:
            group[node] = group[group[node]]
            node = group[node]
        return node

    start, end = pieces.start.tolist(), pieces.end.tolist()
    sides = ((left >= 0).astype(int) + (right >= 0)).tolist()
    # Outer walls come last, so that each is left out before a wall shared by two cells.
    rank = [3 if piece in cut else (0, 2, 1)[sides[piece]] for piece in range(len(start))]
    chord: list[int] = []
    around: list[list[tuple[int, int, int]]] = [[] for _ in range(nodes)]
    for piece in sorted(range(len(start)), key=rank.__getitem__):
        a, b = root(start[piece]), root(end[piece])
        if a == b:
            chord.append(piece)
            continue
        if piece in cut:
            raise SectionError(
                ["cuts: together they part the section; leave a way from every wall to every other"]
            )
        group[a] = b
        around[start[piece]].append((end[piece], piece, -1))
        around[end[piece]].append((start[piece], piece, 1))
    order: list[tuple[int, int, int, int]] = []
    parent = [-1] * nodes
    queue = [0]
    for node in queue:
        for other, piece, sign in around[node]:
            if other != parent[node]:
                parent[other] = node
                queue.append(other)
                order.append((other, node, piece, sign))
    return sorted(chord), tuple(reversed(order))
