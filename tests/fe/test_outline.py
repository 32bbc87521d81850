"""Moments, loops, extent and notes of the solid against hand values and an independent polygon library."""

from __future__ import annotations

import math

import numpy as np
import pytest
from fe_sections import (
    SHAPES,
    bow_tie,
    box,
    channel,
    four_cells,
    lopsided_cell,
    polyline,
    rectangle,
    shape,
    triangular_cell,
    two_cell,
)
from numpy.testing import assert_allclose
from shapely.geometry import LineString, Polygon
from shapely.ops import unary_union

from fe_models import OutlineError, Rounding, Section, Wall, solve
from fe_models.outline import Outline, outline

ORIGIN = np.zeros(2)


def of_polygons(loops: tuple[np.ndarray, ...], pole: np.ndarray) -> np.ndarray:
    """(A, Sx, Sy of x and y, Ixx, Iyy, Ixy) of outer loop less holes: textbook sums over the vertices."""
    total = np.zeros(6)
    for i, loop in enumerate(loops):
        x, y = (loop - pole).T
        u, v = np.roll(x, -1), np.roll(y, -1)
        cross = x * v - u * y
        own = np.array(
            [
                cross.sum() / 2,
                ((x + u) * cross).sum() / 6,
                ((y + v) * cross).sum() / 6,
                ((y * y + y * v + v * v) * cross).sum() / 12,
                ((x * x + x * u + u * u) * cross).sum() / 12,
                ((x * v + 2 * x * y + 2 * u * v + u * y) * cross).sum() / 24,
            ]
        )
        total += own * (1.0 if i == 0 else -1.0) * np.sign(own[0])
    return total


def flat(solid: Outline, pole: np.ndarray) -> np.ndarray:
    m = solid.moments(pole)
    return np.array([m.area, *m.first, *m.second])


@pytest.mark.parametrize("ratio", [5.0, 20.0, 1000.0])
@pytest.mark.parametrize("name", SHAPES)
def test_moments_are_those_of_the_loops(name: str, ratio: float) -> None:
    solid = outline(shape(name, ratio))
    scale = solid.extent ** np.array([0, 1, 1, 2, 2, 2]) * solid.moments(ORIGIN).area
    for pole in (ORIGIN, np.array([31.0, -17.0])):
        assert_allclose(flat(solid, pole) / scale, of_polygons(solid.loops, pole) / scale, rtol=0, atol=1e-12)


def length_times_thickness(section: Section) -> float:
    places = {n: np.array(p) for n, p in section.points.items()}
    return sum(float(np.hypot(*(places[w.end] - places[w.start]))) * w.thickness[0] for w in section.walls)


@pytest.mark.parametrize(
    "section",
    [
        box(70.0, 40.0, 3.0, 5.0),
        lopsided_cell(),
        triangular_cell(),
        channel(50.0, 100.0, 7.0),
        shape("zed, three thicknesses", 9.0),
    ],
)
def test_area_of_mitred_bends_is_length_times_thickness(section: Section) -> None:
    """Corner and mitre lie opposite each other about the point, so each wall keeps its area L t."""
    assert_allclose(outline(section).moments(ORIGIN).area, length_times_thickness(section), rtol=1e-13)


def test_area_of_a_tee_joint_counts_the_overlap_once() -> None:
    """Both ends of the two-cell box's web lie t/2 deep in a flange: t^2/2 less at either end."""
    section = two_cell(40.0, 30.0, 50.0, 3.0)
    wanted = length_times_thickness(section) - 2 * 0.5 * 3.0**2
    assert_allclose(outline(section).moments(ORIGIN).area, wanted, rtol=1e-13)


def test_rectangle_by_hand() -> None:
    """b = 30, t = 4 from the origin along x: A = 120, centroid (15, 0), I about the origin."""
    got = flat(outline(rectangle(30.0, 4.0)), ORIGIN)
    assert_allclose(got, [120.0, 1800.0, 0.0, 30 * 4**3 / 12, 4 * 30**3 / 3, 0.0], rtol=1e-13, atol=1e-10)


def test_unequal_channel_by_hand() -> None:
    """Channel 50 x 100 of t = 5: outer 52.5 x 105 less the opening 50 x 95 (Ixx about mid-height)."""
    solid = outline(channel(50.0, 100.0, 5.0))
    m = solid.moments(np.array([0.0, 50.0]))
    assert_allclose(m.area, 52.5 * 105 - 50.0 * 95 + 2.5 * 95, rtol=1e-13)
    assert_allclose(m.second[0], (52.5 * 105**3 - 47.5 * 95**3) / 12, rtol=1e-13)
    assert solid.extent == pytest.approx(105.0, rel=1e-14)
    assert solid.notes == ()
    assert not solid.curved


def drawn(paths: list[list[tuple[float, float]]], t: float) -> Polygon:
    """Union of mitred, square-ended buffers of midline paths."""
    lines = [
        LineString(p).buffer(t / 2, cap_style="flat", join_style="mitre", mitre_limit=8.0) for p in paths
    ]
    return unary_union(lines)


@pytest.mark.parametrize(
    ("name", "paths"),
    [
        ("tee", [[(-40, 100), (40, 100)], [(0, 100), (0, 0)]]),
        ("cruciform", [[(-50, 0), (50, 0)], [(0, -50), (0, 50)]]),
        (
            "angle, legs at 70 degrees",
            [[(100, 0), (0, 0), (80 * math.cos(math.radians(70)), 75.17540966287267)]],
        ),
        ("lipped channel, unequal lips", [[(45, 80), (45, 100), (0, 100), (0, 0), (45, 0), (45, 30)]]),
        ("channel", [[(50, 100), (0, 100), (0, 0), (50, 0)]]),
    ],
)
@pytest.mark.parametrize("ratio", [8.0, 50.0])
def test_outline_is_the_mitred_buffer_of_the_midline(
    name: str, paths: list[list[tuple[float, float]]], ratio: float
) -> None:
    solid = outline(shape(name, ratio))
    want = drawn(paths, 100.0 / ratio)
    got = Polygon(solid.loops[0], list(solid.loops[1:]))
    assert got.symmetric_difference(want).area <= 1e-9 * want.area
    assert_allclose(solid.moments(ORIGIN).area, want.area, rtol=1e-12)


@pytest.mark.parametrize(
    ("section", "holes"),
    [
        (channel(50, 90, 3), 0),
        (lopsided_cell(), 1),
        (bow_tie(), 2),
        (four_cells(), 4),
        (two_cell(9, 8, 7, 1), 2),
    ],
)
def test_loops(section: Section, holes: int) -> None:
    """Walls - points + 2 boundaries, the outer one first and enclosing the rest; no vertex twice."""
    solid = outline(section)
    assert len(solid.loops) == 1 + holes == len(section.walls) - len(section.points) + 2
    outer = Polygon(solid.loops[0])
    for loop in solid.loops[1:]:
        assert outer.contains(Polygon(loop))
    for loop in solid.loops:
        assert np.hypot(*(loop - np.roll(loop, -1, axis=0)).T).min() > 1e-6
    assert Polygon(solid.loops[0], list(solid.loops[1:])).is_valid
    assert_allclose(solid.extent, np.ptp(solid.loops[0], axis=0).max(), rtol=1e-15)


def test_notes_name_what_was_done() -> None:
    sharp = outline(polyline([(100.0, 8.0), (0.0, 0.0), (100.0, -8.0)], 2.0))
    assert [n for n in sharp.notes if "bevel" in n]
    assert "w0" in sharp.notes[0]
    assert "w1" in sharp.notes[0]
    step = outline(polyline([(0.0, 0.0), (50.0, 0.0), (90.0, 0.0)], [4.0, 2.0]))
    assert [n for n in step.notes if "step" in n]
    short = outline(channel(50.0, 10.0, 4.0))
    assert [n for n in short.notes if n.endswith(": w1")]


def test_circular_tube_of_two_arcs() -> None:
    """Mean radius 10, t = 2: A = pi (11^2 - 9^2), Ixx = pi (11^4 - 9^4) / 4, to the round-off of the arcs."""
    points = {"r": (10.0, 0.0), "l": (-10.0, 0.0)}
    walls = (
        Wall("upper", "r", "l", (2.0, 2.0), arc_through=(0.0, 10.0)),
        Wall("lower", "l", "r", (2.0, 2.0), arc_through=(0.0, -10.0)),
    )
    solid = outline(Section(points, walls))
    m = solid.moments(ORIGIN)
    i = math.pi * (11**4 - 9**4) / 4
    assert solid.curved
    assert_allclose(m.area, math.pi * 40, rtol=1e-12)
    assert_allclose(m.second, [i, i, 0.0], rtol=1e-12, atol=1e-9 * i)
    assert_allclose(m.first, 0.0, rtol=0, atol=1e-9)


@pytest.mark.parametrize("radius", [1.0, 2.5])
def test_rounded_free_ends_lose_the_area_of_their_corners(radius):
    """Each of two ends of thickness 5 loses (2 - pi/2) r^2: two squares less two quarter circles."""
    points = {"a": (0.0, 0.0), "b": (50.0, 0.0), "c": (0.0, 40.0)}
    walls = (Wall("1", "a", "b", (5.0, 5.0)), Wall("2", "a", "c", (5.0, 5.0)))
    ends = {p: Rounding(0.0, radius) for p in "bc"}
    area = outline(Section(points, walls, ends)).moments(np.zeros(2)).area
    assert_allclose(area, 450.0 - 2.0 * (2.0 - np.pi / 2.0) * radius**2, rtol=1e-12, atol=0)


def test_wall_of_two_half_circles_is_a_round_bar():
    """J = pi r^4 / 2 (exact)."""
    bar = Section({"a": (0.0, 0.0), "b": (5.0, 0.0)}, (Wall("1", "a", "b", (5.0, 5.0)),),
                  {p: Rounding(0.0, 2.5) for p in "ab"})  # fmt: skip
    assert_allclose(solve(bar).quantities["torsion_constant"].value, np.pi / 2.0 * 2.5**4, rtol=5e-5, atol=0)
    j = solve(bar).quantities["torsion_constant"]
    # the union of crowded walls takes curved faces in chords: said by the basis, covered by the interval
    assert j.basis == "estimate"
    assert j.low <= np.pi / 2.0 * 2.5**4 <= j.high
    with pytest.raises(OutlineError, match="radius"):
        outline(Section(bar.points, bar.walls, {"a": Rounding(0.0, 2.6)}))


def test_face_that_ends_where_its_arc_begins_to_round_off_is_one_piece():
    # nose, web and a flange that runs on tangent to the nose: the face ends at the arc's end to 1e-14
    points = {"low": (0.0, -68.0), "high": (0.0, 68.0), "edge": (32.0, -68.0)}
    walls = (
        Wall("nose", "high", "low", (0.6, 0.6), arc_through=(-68.0, 0.0)),
        Wall("web", "low", "high", (0.9, 0.9)),
        Wall("flange", "low", "edge", (0.9, 0.9)),
    )
    solid = outline(Section(points, walls))
    pieces = [piece for cluster in solid.parts.clusters for ring in cluster.rings for piece in ring]
    assert min(piece.length for piece in pieces) > 1e-6
    assert solve(solid.section, 1e-3).met
