"""Random wall graphs on a shaken grid: walls straight, arched or tapered, corners sharp or rounded."""

from __future__ import annotations

from collections import Counter

import numpy as np

from fe_models import Rounding, Section, Wall

PITCH = 100.0
# Points move by up to this share of the pitch: angles go down to about 15 degrees.
SHAKE = 0.38


def random_section(seed: int) -> Section:
    """2 to some 30 walls: open, branched, one cell or many; thickness ratios up to 1 : 8."""
    rng = np.random.default_rng(seed)
    columns, rows = int(rng.integers(1, 5)), int(rng.integers(1, 5))
    if columns * rows < 3:
        columns = 3
    places = {
        f"{i},{j}": tuple(PITCH * (np.array([i, j]) + SHAKE * rng.uniform(-1.0, 1.0, 2)))
        for i in range(columns)
        for j in range(rows)
    }
    lines = [(f"{i},{j}", f"{i + 1},{j}") for i in range(columns - 1) for j in range(rows)]
    lines += [(f"{i},{j}", f"{i},{j + 1}") for i in range(columns) for j in range(rows - 1)]
    order = rng.permutation(len(lines))
    tree, rest, head = [], [], {p: p for p in places}

    def root(p: str) -> str:
        while head[p] != p:
            p = head[p]
        return p

    for a, b in (lines[k] for k in order):
        if root(a) == root(b):
            rest.append((a, b))
        else:
            head[root(a)] = root(b)
            tree.append((a, b))
    chosen = tree + rest[: int(rng.integers(0, len(rest) + 1))]
    thickest = 10.0 ** rng.uniform(-0.5, 1.2)
    walls = tuple(_wall(rng, a, b, places, thickest) for a, b in chosen)
    meeting = Counter(p for line in chosen for p in line)
    corners = {
        p: Rounding(rng.uniform(0.2, 1.0) * thickest)
        for p in places
        if meeting[p] >= 2 and rng.random() < 0.4
    }
    return Section(places, walls, corners)


def _wall(rng, a, b, places, thickest) -> Wall:
    """One wall in either direction; three in ten arched, three in ten tapered."""
    if rng.random() < 0.5:
        a, b = b, a
    t = thickest * rng.uniform(0.125, 1.0)
    end = t * rng.uniform(0.6, 1.4) if rng.random() < 0.3 else t
    arc = None
    if rng.random() < 0.3:
        p, q = np.array(places[a]), np.array(places[b])
        across = np.array([p[1] - q[1], q[0] - p[0]])
        arc = tuple((p + q) / 2.0 + rng.uniform(-0.2, 0.2) * across)
    return Wall(f"{a} to {b}", a, b, (t, end), arc_through=arc)
