"""Contacts of walls against a second, slow way; sizes up to the limit of walls and beyond."""

from __future__ import annotations

import itertools
import math
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from crosscheck.section_file.contacts import Contact, Segments, contacts
from crosscheck.section_file.keys import ENTRY_LIMITS, WALL_LIMIT
from crosscheck.section_file.reader import SectionFaults, read_section
from fe_models import outline


def segments(places: list[tuple[int, int]], pairs: list[tuple[int, int]]) -> Segments:
    """Pieces between numbered places."""
    at = np.array(places, dtype=float)
    a, b = np.array(pairs, dtype=np.int64).T
    return Segments(at[a], at[b], a, b, np.arange(len(pairs)))


def meets(p: tuple[int, int], q: tuple[int, int], a: tuple[int, int], b: tuple[int, int]) -> bool:
    """Whether two pieces with integer ends have a place in common: exact orientation tests."""

    def turn(u: tuple[int, int], v: tuple[int, int], w: tuple[int, int]) -> int:
        area = (v[0] - u[0]) * (w[1] - u[1]) - (v[1] - u[1]) * (w[0] - u[0])
        return (area > 0) - (area < 0)

    def between(u: tuple[int, int], v: tuple[int, int], w: tuple[int, int]) -> bool:
        return min(u[0], v[0]) <= w[0] <= max(u[0], v[0]) and min(u[1], v[1]) <= w[1] <= max(u[1], v[1])

    if turn(p, q, a) * turn(p, q, b) < 0 and turn(a, b, p) * turn(a, b, q) < 0:
        return True
    ends = ((p, q, a), (p, q, b), (a, b, p), (a, b, q))
    return any(turn(u, v, w) == 0 and between(u, v, w) for u, v, w in ends)


_PLACES = st.lists(st.tuples(st.integers(0, 6), st.integers(0, 6)), min_size=4, max_size=9, unique=True)


@settings(max_examples=300, deadline=None, derandomize=True)
@given(_PLACES, st.data())
def test_same_contacts_as_exact_integer_geometry(places: list[tuple[int, int]], data: st.DataObject) -> None:
    """Pairs without a shared point, against orientation tests in whole numbers."""
    every = list(itertools.combinations(range(len(places)), 2))
    pairs = data.draw(st.lists(st.sampled_from(every), min_size=2, max_size=10, unique=True))
    found = {
        frozenset((c.first, c.second))
        for c in contacts(segments(places, pairs), 1e-9)
        if not set(pairs[c.first]) & set(pairs[c.second])
    }
    expected = {
        frozenset((i, j))
        for (i, p), (j, q) in itertools.combinations(enumerate(pairs), 2)
        if not set(p) & set(q) and meets(places[p[0]], places[p[1]], places[q[0]], places[q[1]])
    }
    assert found == expected


@settings(max_examples=200, deadline=None, derandomize=True)
@given(_PLACES, st.data())
def test_overlaps_from_a_shared_point(places: list[tuple[int, int]], data: st.DataObject) -> None:
    """Some overlap is found about a point exactly when two pieces leave it in one direction."""
    every = list(itertools.combinations(range(len(places)), 2))
    pairs = data.draw(st.lists(st.sampled_from(every), min_size=2, max_size=10, unique=True))
    directions: dict[tuple[int, int, int], int] = {}
    for start, end in [*pairs, *((b, a) for a, b in pairs)]:
        dx, dy = places[end][0] - places[start][0], places[end][1] - places[start][1]
        shared = math.gcd(dx, dy)
        key = (start, dx // shared, dy // shared)
        directions[key] = directions.get(key, 0) + 1
    folded = [
        c for c in contacts(segments(places, pairs), 1e-9) if set(pairs[c.first]) & set(pairs[c.second])
    ]
    assert all(c.kind == "overlap" for c in folded)
    # k pieces in one direction are k - 1 neighbours in angle.
    assert len({frozenset((c.first, c.second)) for c in folded}) == sum(n - 1 for n in directions.values())


@pytest.mark.parametrize(
    ("second", "kind", "place"),
    [
        (((5, -5), (5, 5)), "crossing", (5.0, 0.0)),
        (((5, 0), (5, 5)), "touch", (5.0, 0.0)),
        (((3, 0), (14, 0)), "overlap", (3.0, 0.0)),
        (((10, 0), (14, 7)), "end", (10.0, 0.0)),
        (((2, 0), (6, 0)), "overlap", (2.0, 0.0)),
        (((11, 0), (14, 0)), None, None),
        (((5, 1), (5, 4)), None, None),
    ],
)
@pytest.mark.parametrize("angle", [0.0, 0.3, math.pi / 2, 2.5])
def test_kinds(
    second: tuple[tuple[int, int], tuple[int, int]],
    kind: str | None,
    place: tuple[float, float] | None,
    angle: float,
) -> None:
    turn = np.array([[math.cos(angle), math.sin(angle)], [-math.sin(angle), math.cos(angle)]])
    at = np.array([(0, 0), (10, 0), *second], dtype=float) @ turn + (100.0, -40.0)
    pieces = Segments(at[[0, 2]], at[[1, 3]], np.array([0, 2]), np.array([1, 3]), np.array([0, 1]))
    found: list[Contact] = list(contacts(pieces, 1e-6))
    if kind is None or place is None:
        assert found == []
        return
    assert [c.kind for c in found] == [kind]
    np.testing.assert_allclose(found[0].place, np.array(place) @ turn + (100.0, -40.0), rtol=0.0, atol=1e-9)


@pytest.mark.parametrize("count", [2, 3])
def test_overlap_across_the_angle_of_180_degrees(count: int) -> None:
    """Said once, whether or not another piece lies between the two in angle."""
    at = np.array([(0, 0), (-10, 1e-12), (-4, -1e-12), (7, 0)])
    start, end = np.zeros(count, dtype=np.int64), np.arange(1, count + 1)
    found = list(contacts(Segments(at[start], at[end], start, end, np.arange(count)), 1e-9))
    assert [(c.kind, c.first, c.second, c.node) for c in found] == [("overlap", 1, 0, 2)]


def test_near_misses_count_as_touches(fault_lines: Callable[..., list[str]]) -> None:
    """An end a ten-thousandth of the thickness off the other's middle is meant to touch."""
    text = 'units = "mm N"\n[points]\na = [0, 0]\nb = [100, 0]\nc = [40, 5e-5]\nd = [40, 70]\n'
    text += "".join(f'[[walls]]\npath = ["{p}", "{q}"]\nthickness = 2\n' for p, q in ("ab", "cd"))
    (line,) = fault_lines(text)
    assert 'ending at "c" on the middle of "a-b"' in line


def _grid(columns: int, rows: int) -> str:
    """A many-celled section."""
    lines = ['units = "mm N"', "[points]"]
    lines += [f"p{i}_{j} = [{i * 10}, {j * 10}]" for i in range(columns) for j in range(rows)]
    for i, j in itertools.product(range(columns), range(rows)):
        if i + 1 < columns:
            lines.append(f'[[walls]]\npath = ["p{i}_{j}", "p{i + 1}_{j}"]\nthickness = 0.5')
        if j + 1 < rows:
            lines.append(f'[[walls]]\npath = ["p{i}_{j}", "p{i}_{j + 1}"]\nthickness = 0.5')
    return "\n".join(lines)


def _star(count: int) -> str:
    """Walls that all share one point: every pair of boxes meets there."""
    lines = ['units = "mm N"', "[points]", "hub = [0, 0]"]
    for k in range(count):
        angle = 2 * math.pi * k / count
        lines.append(f"p{k} = [{1000 * math.cos(angle)!r}, {1000 * math.sin(angle)!r}]")
    lines += [f'[[walls]]\npath = ["hub", "p{k}"]\nthickness = 0.01' for k in range(count)]
    return "\n".join(lines)


@pytest.mark.parametrize(("text", "walls"), [(_grid(32, 32), 1984), (_star(2000), 2000)])
def test_as_many_walls_as_allowed(tmp_path: Path, text: str, walls: int) -> None:
    path = tmp_path / "many.toml"
    path.write_text(text)
    began = time.perf_counter()
    assert len(read_section(path).walls) == walls
    assert time.perf_counter() - began < 5.0


@pytest.mark.parametrize(
    ("text", "what"),
    [
        (_grid(72, 71), "points: must be a table of at most 4000 entries, got 5112 entries"),
        (_star(10_000), "points: must be a table of at most 4000 entries, got 10001 entries"),
        (_star(2001), "walls: must be a table of at most 2000 entries, got 2001 entries"),
    ],
    ids=["grid", "star", "one too many"],
)
def test_ten_thousand_walls(tmp_path: Path, text: str, what: str) -> None:
    """Refused by the reader at once, not by FE after minutes of theory."""
    path = tmp_path / "many.toml"
    path.write_text(text)
    began = time.perf_counter()
    with pytest.raises(SectionFaults) as caught:
        read_section(path)
    assert time.perf_counter() - began < 3.0
    assert caught.value.lines == (f"{path}: {what}",)


def test_limits_are_those_of_fe() -> None:
    """A tree of walls has one point more than walls."""
    assert WALL_LIMIT == outline.WALL_LIMIT
    assert ENTRY_LIMITS["walls"] == WALL_LIMIT
    assert ENTRY_LIMITS["points"] > WALL_LIMIT


def test_limit_of_walls(tmp_path: Path) -> None:
    path = tmp_path / "many.toml"
    zigzag = ", ".join('"a", "b"' for _ in range(15_000))
    path.write_text(
        f'units = "mm N"\n[points]\na = [0, 0]\nb = [1, 0]\n[[walls]]\npath = [{zigzag}]\nthickness = 1\n'
    )
    with pytest.raises(SectionFaults) as caught:
        read_section(path)
    assert caught.value.lines == (f"{path}: walls: must be at most 2000 walls, got 29999 walls",)


def test_limit_counts_the_arcs_of_smooth_paths(tmp_path: Path) -> None:
    """1500 spans that turn left and right in turn are two arcs each."""
    path = tmp_path / "wave.toml"
    lines = ['units = "mm N"', "[points]"]
    lines += [f"p{i} = [{10 * i}, {(0, 3, 1, 4)[i % 4]}]" for i in range(1501)]
    names = ", ".join(f'"p{i}"' for i in range(1501))
    lines += ["[[walls]]", f"path = [{names}]", "thickness = 0.1", "smooth = true"]
    path.write_text("\n".join(lines))
    with pytest.raises(SectionFaults) as caught:
        read_section(path)
    (line,) = caught.value.lines
    assert f"{path}: walls: must be at most 2000 walls, got " in line


def test_thousands_of_crossings_end_soon(tmp_path: Path) -> None:
    lines = ['units = "mm N"', "[points]"]
    for k in range(2000):
        lines += [f"l{k} = [0, {k}]", f"r{k} = [1000, {1999 - k}.5]"]
    lines += [f'[[walls]]\npath = ["l{k}", "r{k}"]\nthickness = 0.1' for k in range(2000)]
    path = tmp_path / "crossed.toml"
    path.write_text("\n".join(lines))
    began = time.perf_counter()
    with pytest.raises(SectionFaults) as caught:
        read_section(path)
    assert len(caught.value.faults) == 100
    assert caught.value.left_out >= 1
    assert time.perf_counter() - began < 5.0
