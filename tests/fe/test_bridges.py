"""Walls in no cell: those whose removal leaves the section in two, by brute force."""

from __future__ import annotations

import numpy as np
import pytest
from fe_sections import bow_tie, channel, four_cells, shape

from fe_models import Section, Wall
from fe_models.bridges import open_walls


def parts(walls: list[Wall], points: set[str]) -> int:
    """Number of connected parts of a wall graph, by flooding."""
    left, found = set(points), 0
    while left:
        found += 1
        queue = [left.pop()]
        while queue:
            here = queue.pop()
            for w in walls:
                for a, b in ((w.start, w.end), (w.end, w.start)):
                    if a == here and b in left:
                        left.discard(b)
                        queue.append(b)
    return found


def by_removal(section: Section) -> set[str]:
    """Names of the walls without which there is one part more."""
    walls = list(section.walls)
    points = {p for w in walls for p in (w.start, w.end)}
    whole = parts(walls, points)
    return {w.name for w in walls if parts([v for v in walls if v is not w], points) > whole}


@pytest.mark.parametrize("seed", range(60))
def test_random_graphs(seed: int) -> None:
    """Trees with a few more walls, doubled ones among them (two walls between the same points)."""
    rng = np.random.default_rng(seed)
    n = int(rng.integers(2, 14))
    pairs = [(int(rng.integers(0, i)), i) for i in range(1, n)]
    pairs += [tuple(rng.choice(n, 2, replace=False)) for _ in range(int(rng.integers(0, n // 2 + 1)))]
    order = rng.permutation(len(pairs))
    walls = tuple(
        Wall(f"w{k}", *(f"p{j}" for j in rng.permutation(pairs[i])), (1.0, 1.0)) for k, i in enumerate(order)
    )
    points = {f"p{i}": (float(i), float(i * i)) for i in range(n)}
    section = Section(points, walls)
    assert open_walls(section) == by_removal(section)


def test_known_sections() -> None:
    assert open_walls(channel(50.0, 100.0, 2.0)) == {"w0", "w1", "w2"}
    assert open_walls(bow_tie()) == set()
    assert open_walls(four_cells()) == {"e-fin"}
    assert open_walls(shape("box with two fins", 20.0)) == {"c-f", "g-a"}


def test_link_between_two_cells_is_open() -> None:
    ring = [("a", "b"), ("b", "c"), ("c", "a"), ("d", "e"), ("e", "f"), ("f", "d"), ("c", "d")]
    walls = tuple(Wall(p + q, p, q, (1.0, 1.0)) for p, q in ring)
    section = Section({p: (float(i), float(i % 3)) for i, p in enumerate("abcdef")}, walls)
    assert open_walls(section) == {"cd"}


def test_deep_trees_need_no_recursion() -> None:
    n = 5000
    walls = tuple(Wall(f"w{i}", f"p{i}", f"p{i + 1}", (1.0, 1.0)) for i in range(n))
    section = Section({f"p{i}": (float(i), 0.0) for i in range(n + 1)}, walls)
    assert len(open_walls(section)) == n
