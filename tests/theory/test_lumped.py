"""Level `lumped`: booms made from the walls for the load at hand."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import channel, d_cell, joined, polyline, random_section

from beam_theory import Load, LoadError, LumpedSolution, Section, Wall, solve
from beam_theory.lumps import lumps

V = Load("v", (0.0, 1.0))


def lumped(section: Section, parts: int = 1) -> LumpedSolution:
    solution = solve(section, "lumped", parts)
    assert isinstance(solution, LumpedSolution)
    return solution


def test_boom_formula() -> None:
    """Channel under Vy: flanges of one stress t b/2 each end, web with ratio -1 t h/6 (Megson 20.2)."""
    made = lumped(channel(50, 100, 2)).lumps_of(V)
    areas = {(lump.wall, lump.at): lump.area for lump in made}
    assert_allclose([areas["w0", 0.0], areas["w0", 1.0]], [50.0, 50.0], rtol=1e-12)
    assert_allclose([areas["w1", 0.0], areas["w1", 1.0]], [200 / 6, 200 / 6], rtol=1e-12)
    assert len(made) == 6


def test_boom_formula_any_ratio() -> None:
    """A_1 = t b/6 (2 + f_2/f_1) on a wall with one sign of stress."""
    section = polyline([(0, 0), (40, 0), (70, 90)], 3.0)
    base = solve(section)

    def stress(wall: str, at: np.ndarray) -> np.ndarray:
        return 2.0 + 3.0 * at if wall == "w1" else np.zeros_like(at)

    first, second = lumps(base, stress, 1)
    b = math.hypot(30, 90)
    assert_allclose(first.area, 3 * b / 6 * (2 + 2.5), rtol=1e-12)
    assert_allclose(second.area, 3 * b / 6 * (2 + 0.4), rtol=1e-12)


@pytest.mark.parametrize("ends", [(-1.0, 3.0), (0.0, 1.0), (3.0, -1.0), (0.05, 1.0), (1.0, 0.0), (-1.0, 1.9)])
@pytest.mark.parametrize("parts", [1, 2, 5])
def test_near_the_neutral_axis(ends: tuple[float, float], parts: int) -> None:
    """Ratio undefined, below -2 or above -1/2: no negative area, force and moment as in the wall."""
    section = Section({"a": (0.0, 0.0), "b": (10.0, 0.0), "c": (10.0, 5.0)},
                      (Wall("w", "a", "b", (1.0, 3.0)), Wall("x", "b", "c", (1.0, 1.0))))  # fmt: skip
    base = solve(section)

    def stress(wall: str, at: np.ndarray) -> np.ndarray:
        return ends[0] + (ends[1] - ends[0]) * at if wall == "w" else np.zeros_like(at)

    made = lumps(base, stress, parts)
    assert all(lump.area > 0.0 for lump in made)
    z = np.linspace(0.0, 1.0, 4001)
    z = 0.5 * (z[1:] + z[:-1])
    f = (1 + 2 * z) * (ends[0] + (ends[1] - ends[0]) * z) * 10 / len(z)
    force = sum(lump.area * lump.stress for lump in made)
    moment = sum(lump.area * lump.stress * lump.at for lump in made)
    assert_allclose([force, moment], [f.sum(), (f * z).sum()], rtol=1e-5, atol=1e-5)
    for lump in made:
        assert_allclose(float(stress("w", np.array([lump.at]))[0]), lump.stress, atol=1e-9)


@pytest.mark.parametrize("parts", [1, 3])
@pytest.mark.parametrize("section", [
    channel(50, 100, 2),
    polyline([(0, 0), (300, 0), (0, 160)], [3, 2, 5], closed=True),
    polyline([(48, 82), (60, 100), (0, 100), (0, -100), (-65, -100), (-50, -85)], 2.0),
])  # fmt: skip
def test_straight_walls_keep_their_moments(section: Section, parts: int) -> None:
    """For straight walls second moments, I_w, J and the shear centre are those of the midline."""
    one, two = solve(section), lumped(section, parts)
    for name in ("area", "second_moment_xx", "second_moment_yy", "torsion_constant", "principal_moment_v"):
        assert_allclose(two.require(name), one.require(name), rtol=1e-10)
    floor = 1e-12 * one.require("torsion_constant") * 300**2
    assert_allclose(two.require("warping_constant"), one.require("warping_constant"), rtol=1e-10, atol=floor)
    assert_allclose(two.require("product_moment_xy"), one.require("product_moment_xy"), rtol=1e-10, atol=1e-4)
    for name in ("shear_centre_x", "shear_centre_y"):
        assert_allclose(two.require(name), one.require(name), rtol=0, atol=1e-10 * 300)
    assert all(check.passed for check in two.checks)
    assert len(two.checks) > 0


def test_flow_is_stepwise_constant_and_carries_the_load() -> None:
    """Skins between booms have one flow; the average over a web is that of the midline theory."""
    section = channel(50, 100, 2)
    two = lumped(section)
    flow = two.flow(Load("a", (3.0, -7.0), (5.0, 5.0), torque=2.0))
    assert_allclose(flow.resultant(), (3.0, -7.0, 2.0 + 5 * -7.0 - 5 * 3.0), rtol=1e-10)
    q = two.flow(V).at("w1", np.linspace(0, 1, 5))
    assert_allclose(q, 0.01, rtol=1e-12)
    assert len(two.flow(V).stationary("w1")) == 0


def test_more_parts_tend_to_the_midline() -> None:
    """Flow at mid-parts, arcs and taper: second order in the length of a part."""
    section = replace(d_cell(1.0, 0.02, 0.03))
    exact = solve(section)
    errors = []
    for parts in (8, 16, 32):
        two = lumped(section, parts)
        at = (np.arange(4) * 0.25 + 0.5 / parts) % 1.0
        flow = two.flow(V).at("nose", at)
        errors.append(float(np.abs(flow - exact.flow(V).at("nose", at)).max()))
        assert_allclose(two.require("shear_centre_x"), exact.require("shear_centre_x"), rtol=0.2 / parts)
    orders = np.log2(np.array(errors[:-1]) / np.array(errors[1:]))
    assert (orders > 1.7).all(), (errors, orders)


@pytest.mark.parametrize("seed", range(0, 60, 4))
def test_random_sections(seed: int) -> None:
    """Any section can be lumped, and its flow carries the load."""
    section = random_section(seed)
    two = lumped(section, 2)
    size = float(np.ptp(np.array(list(section.points.values())), axis=0).max())
    place = next(iter(section.points.values()))
    flow = two.flow(Load("a", (1.0, 0.5), place, torque=size))
    want = size + place[0] * 0.5 - place[1]
    got = flow.resultant()
    assert_allclose(got[:2], (1.0, 0.5), rtol=1e-9)
    assert_allclose(got[2], want, rtol=0, atol=1e-9 * (size + abs(complex(*place))))
    assert all(check.passed for check in two.checks)


def test_wall_on_the_neutral_axis_and_faults() -> None:
    """A wall with no stress anywhere makes no boom; parts must be sensible."""
    points = {
        "a": (-5.0, 4.0),
        "b": (0.0, 4.0),
        "m": (0.0, 0.0),
        "w": (7.0, 0.0),
        "c": (0.0, -4.0),
        "d": (-5.0, -4.0),
    }
    walls = [("a", "b", 1.0), ("b", "m", 1.0), ("m", "w", 1.0), ("m", "c", 1.0), ("c", "d", 1.0)]
    made = lumped(joined(points, walls)).lumps_of(V)
    assert "m-w" not in {lump.wall for lump in made}
    # Each half of the web has no stress at the middle: one boom at two thirds, 3/4 of its area.
    half = [lump for lump in made if lump.wall == "b-m"]
    assert_allclose([(lump.at, lump.area) for lump in half], [(1 / 3, 3.0)], rtol=1e-9)
    with pytest.raises(LoadError, match="parts"):
        solve(channel(50, 100, 2), "lumped", 0)
    straight = solve(
        Section({"a": (0.0, 0.0), "b": (9.0, 0.0)}, (Wall("w", "a", "b", (1.0, 1.0)),)), "lumped"
    )
    assert straight.quantities["shear_centre_x"].value is None
