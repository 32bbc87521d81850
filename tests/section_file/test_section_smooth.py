"""Smooth paths: arcs through the points with one tangent wherever two of them meet."""

from __future__ import annotations

import cmath
import math
from collections.abc import Callable
from itertools import pairwise

import pytest
from numpy.testing import assert_allclose

from crosscheck.section_file.model import Place, arc_angle
from crosscheck.section_file.reader import SectionFile
from crosscheck.section_file.smooth import FoldedPath, smooth_spans

Read = Callable[..., SectionFile]
HEAD = 'units = "mm N"\n[points]\na = [0, 0]\nb = [60, -12]\nc = [130, 9]\nd = [150, 60]\n'


def ends(start: Place, end: Place, through: Place | None) -> tuple[complex, complex, float]:
    """Unit tangents at both ends of an arc, and its length."""
    if through is None:
        chord = complex(*end) - complex(*start)
        return chord / abs(chord), chord / abs(chord), abs(chord)
    centre, first, sweep = arc_angle(start, through, end)
    turn = math.copysign(1.0, sweep) * 1j
    radius = math.dist(centre, start)
    return turn * cmath.exp(1j * first), turn * cmath.exp(1j * (first + sweep)), radius * abs(sweep)


def runs(places: list[Place]) -> list[tuple[complex, complex, float]]:
    """Tangents and lengths of all arcs of a path in order."""
    found, here = [], places[0]
    for span in smooth_spans(places):
        for piece in span:
            found.append(ends(here, piece.end, piece.through))
            here = piece.end
    return found


@pytest.mark.parametrize(
    "places",
    [
        [(0, 0), (60, -12), (130, 9), (150, 60)],
        [(0, 0), (40, 0), (60, 30), (100, 30), (120, -20)],
        [(0, 0), (100, 0), (130, 80), (0, 120), (-20, 50), (0, 0)],
        [(0, 0), (100, 0), (0, 0)],
    ],
)
def test_tangents_meet_everywhere(places: list[Place]) -> None:
    arcs = runs(places)
    for (_, before, _), (after, _, _) in pairwise(arcs):
        assert_allclose(abs(before - after), 0.0, rtol=0, atol=1e-12)
    if places[0] == places[-1]:
        assert_allclose(abs(arcs[-1][1] - arcs[0][0]), 0.0, rtol=0, atol=1e-12)


def test_points_of_a_circle_give_the_circle_back() -> None:
    turns = (0.0, 0.4, 1.3, 2.0, 3.1)
    places = [(5.0 * math.cos(a) + 1.0, 5.0 * math.sin(a)) for a in turns]
    spans = smooth_spans(places)
    assert [len(span) for span in spans] == [1, 1, 1, 1]
    for span in spans:
        assert span[0].through is not None
        assert_allclose(math.dist(span[0].through, (1.0, 0.0)), 5.0, rtol=1e-13, atol=0)


def test_points_in_line_stay_straight() -> None:
    assert [piece.through for span in smooth_spans([(0, 0), (3, 1), (9, 3)]) for piece in span] == [
        None,
        None,
    ]


def test_two_points_out_and_back_make_a_circle_anticlockwise() -> None:
    spans = smooth_spans([(-1.0, 0.0), (1.0, 0.0), (-1.0, 0.0)])
    assert_allclose([span[0].through for span in spans], [(0.0, -1.0), (0.0, 1.0)], rtol=0, atol=1e-15)


def test_first_and_last_span_are_single_arcs() -> None:
    spans = smooth_spans([(0, 0), (40, 0), (60, 30), (100, 30), (120, -20)])
    assert [len(span) for span in spans] == [1, 2, 2, 1]


def test_a_path_that_folds_back_is_refused() -> None:
    with pytest.raises(FoldedPath):
        smooth_spans([(0, 0), (100, 0), (2, 1), (2, 50)])


def test_walls_of_a_smooth_path(read: Read) -> None:
    text = (
        HEAD + '[[walls]]\nname = "rib"\npath = ["a", "b", "c", "d"]\nthickness = [1, 2, 3]\nsmooth = true\n'
    )
    section = read(text)
    assert [(w.name, w.start, w.end, w.thickness[0]) for w in section.walls] == [
        ("rib 1", "a", "b", 1.0),
        ("rib 2.1", "b", "b~c", 2.0),
        ("rib 2.2", "b~c", "c", 2.0),
        ("rib 3", "c", "d", 3.0),
    ]
    assert all(wall.arc_through is not None for wall in section.walls)
    assert "b~c" in section.points


def test_taper_along_a_smooth_path_is_linear_by_arc_length(read: Read) -> None:
    text = HEAD + '[[walls]]\npath = ["a", "b", "c", "d"]\nthickness = { from = 3, to = 1 }\nsmooth = true\n'
    section = read(text)
    lengths = [ends(section.points[w.start], section.points[w.end], w.arc_through)[2] for w in section.walls]
    along, whole = 0.0, sum(lengths)
    for wall, length in zip(section.walls, lengths, strict=True):
        assert_allclose(wall.thickness[0], 3.0 - 2.0 * along / whole, rtol=1e-13, atol=0)
        along += length
    assert section.walls[-1].thickness[1] == 1.0


FAULTS = [
    (HEAD, 'path = ["a", "b"]\nsmooth = true', "walls[0].smooth", "a path of two points"),
    (HEAD, 'path = ["a", "b", "c"]\nsmooth = true\narc = { through = [1, 2] }', "walls[0].smooth", "an arc"),
    (
        'units = "mm N"\n[points]\na = [0, 0]\nb = [100, 0]\nc = [2, 1]\nd = [2, 50]\n',
        'path = ["a", "b", "c", "d"]\nsmooth = true',
        "walls[0].path[1]",
        '"b"',
    ),
]


@pytest.mark.parametrize(("points", "lines", "key", "found"), FAULTS)
def test_faults(fault_lines: Callable[..., list[str]], points: str, lines: str, key: str, found: str) -> None:
    first = fault_lines(f"{points}[[walls]]\nthickness = 1\n{lines}\n")[0]
    assert first.startswith(f"{key}: must be ")
    assert f"got {found}" in first
