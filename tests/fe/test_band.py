"""The wall's own map (s, n) -> (x, y) for straight walls, arcs and tapers, seen from either end."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from fe_models import Section, Wall
from fe_models.band import Band, WallEnd, band

QUARTER = (10.0 * np.cos(np.pi / 4), 10.0 * np.sin(np.pi / 4))
THROUGH = {
    "straight": None,
    "quarter, left": QUARTER,
    "three quarters, right": (-QUARTER[0], -QUARTER[1]),
}


def wall(through: tuple[float, float] | None, t: tuple[float, float] = (2.0, 2.0)) -> Band:
    """From (10, 0) to (0, 10): the chord or an arc about the origin."""
    section = Section(
        {"a": (10.0, 0.0), "b": (0.0, 10.0)}, (Wall("w", "a", "b", t, None if through is None else through),)
    )
    return band(section.walls[0], section)


@pytest.mark.parametrize("name", THROUGH)
@pytest.mark.parametrize("t", [(2.0, 2.0), (1.0, 3.0)])
def test_ends_and_thickness(name: str, t: tuple[float, float]) -> None:
    b = wall(THROUGH[name], t)
    assert_allclose(b.midline(0.0), [10.0, 0.0], rtol=0, atol=1e-13)
    assert_allclose(b.midline(b.length), [0.0, 10.0], rtol=0, atol=1e-13)
    assert_allclose(2 * b.half([0.0, 0.5 * b.length, b.length]), [t[0], 0.5 * sum(t), t[1]], rtol=1e-14)


def test_arc_lengths_and_curvature() -> None:
    """Quarter and three quarters of a circle of radius 10; positive where the midline turns left."""
    assert_allclose(wall(None).length, np.sqrt(200.0), rtol=1e-15)
    left, right = wall(THROUGH["quarter, left"]), wall(THROUGH["three quarters, right"])
    assert_allclose([left.length, left.curvature], [5.0 * np.pi, 0.1], rtol=1e-13)
    assert_allclose([right.length, right.curvature], [15.0 * np.pi, -0.1], rtol=1e-13)


@pytest.mark.parametrize("name", ["quarter, left", "three quarters, right"])
def test_arc_lies_on_its_circle(name: str) -> None:
    b = wall(THROUGH[name])
    s = np.linspace(0.0, b.length, 23)
    assert_allclose(np.hypot(*b.midline(s).T), 10.0, rtol=1e-13)
    through = np.array(THROUGH[name])
    assert_allclose(b.midline(0.5 * b.length), through, rtol=0, atol=1e-12)
    # faces are circles of radius 10 -+ 1: the left one inside where the midline turns left
    assert_allclose(np.hypot(*b.place(s, 1.0).T), 10.0 - np.sign(b.curvature), rtol=1e-13)


def test_slight_arc_keeps_its_digits() -> None:
    """Rise 1e-6 of the chord: the middle of the arc is the third point to 1e-15 of the chord."""
    section = Section(
        {"a": (0.0, 0.0), "b": (1.0, 0.0)}, (Wall("w", "a", "b", (0.1, 0.1), arc_through=(0.5, 1e-6)),)
    )
    b = band(section.walls[0], section)
    assert_allclose(b.midline(0.5 * b.length), [0.5, 1e-6], rtol=0, atol=1e-15)
    assert b.curvature < 0.0
    assert_allclose(b.curvature, -8e-6, rtol=1e-9)


@pytest.mark.parametrize("name", THROUGH)
@pytest.mark.parametrize("t", [(2.0, 2.0), (1.0, 3.0)])
def test_tangent_is_the_derivative_of_the_midline(name: str, t: tuple[float, float]) -> None:
    b = wall(THROUGH[name], t)
    s, h = np.linspace(0.3, b.length - 0.3, 9), 1e-5
    difference = (b.midline(s + h) - b.midline(s - h)) / (2 * h)
    assert_allclose(b.direction(s), difference, rtol=0, atol=1e-9)
    turned = np.stack([-b.direction(s)[:, 1], b.direction(s)[:, 0]], axis=-1)
    assert_allclose(b.normal(s), turned, rtol=0, atol=1e-15)
    assert_allclose(b.place(s, 0.7) - b.midline(s), 0.7 * b.normal(s), rtol=0, atol=1e-14)


@pytest.mark.parametrize("name", THROUGH)
def test_walls_run_on_along_their_tangents(name: str) -> None:
    """Beyond both ends the map is straight and the thickness stays linear."""
    b = wall(THROUGH[name], (1.0, 3.0))
    for end, outward in ((0.0, -1.0), (b.length, 1.0)):
        far = b.midline(end + outward * 4.0)
        assert_allclose(far, b.midline(end) + outward * 4.0 * b.direction(end), rtol=0, atol=1e-13)
        near, beyond = b.half(end), b.half(end + outward * 4.0)
        assert_allclose(beyond - near, outward * 4.0 * 1.0 / b.length, rtol=1e-12)


@pytest.mark.parametrize("name", THROUGH)
@pytest.mark.parametrize("t", [(2.0, 2.0), (1.0, 3.0)])
@pytest.mark.parametrize("reverse", [False, True])
@pytest.mark.parametrize("sign", [-1.0, 1.0])
def test_side_slope_is_the_derivative_of_the_side(
    name: str, t: tuple[float, float], reverse: bool, sign: float
) -> None:
    end = WallEnd(wall(THROUGH[name], t), reverse)
    h = 1e-6
    for s in (-2.0, 0.4, 3.0, 0.5 * end.band.length, end.band.length + 1.0):
        difference = (end.side(s + h, sign) - end.side(s - h, sign)) / (2 * h)
        assert_allclose(end.side_slope(s, sign), difference, rtol=0, atol=1e-8)


def test_sides_seen_from_either_end() -> None:
    """The left face seen from the start is the right face seen from the end."""
    b = wall(None, (1.0, 3.0))
    start, end = WallEnd(b, False), WallEnd(b, True)
    for s in (0.0, 3.0, b.length):
        assert_allclose(start.side(s, 1.0), end.side(b.length - s, -1.0), rtol=0, atol=1e-13)
    assert_allclose(start.direction, [-np.sqrt(0.5), np.sqrt(0.5)], rtol=1e-14)
    assert_allclose(end.direction, -start.direction, rtol=1e-14)
    assert_allclose([start.half(), end.half()], [0.5, 1.5], rtol=1e-14)
    # left of a wall that runs up and to the left is down and to the left
    assert_allclose(start.side(0.0, 1.0), [10.0 - 0.5 * np.sqrt(0.5), -0.5 * np.sqrt(0.5)], rtol=1e-13)
    assert start.opposite == end
