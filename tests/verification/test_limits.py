"""Theory and finite elements tend to each other as walls get thin, at the rates that are known.

Each rate is a slope between sections of growing slenderness; a wrong term on either side changes it.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
import pytest
from fe_sections import SHAPES, box, channel, joined, polyline, shape
from numpy.testing import assert_allclose

import beam_theory
import fe_models

# Share of the way along a strip at which flows are compared.
PROBES = np.array([0.05, 0.3, 0.5, 0.8, 0.95])


def theory_section(section: fe_models.Section) -> beam_theory.Section:
    walls = tuple(beam_theory.Wall(w.name, w.start, w.end, w.thickness) for w in section.walls)
    return beam_theory.Section(section.points, walls)


@cache
def both(make: Callable[[float], fe_models.Section], t: float, accuracy: float) -> tuple:
    """Theory's and FE's solution of the section with thickness t."""
    section = make(t)
    fe = fe_models.solve(section, accuracy)
    assert fe.met
    return beam_theory.solve(theory_section(section)), fe


def slopes(ts: np.ndarray, differences: list[float]) -> np.ndarray:
    """Order in t between neighbours."""
    d = np.array(differences)
    assert (np.abs(d) > 0).all()
    assert (np.sign(d) == np.sign(d[0])).all()
    return np.diff(np.log(np.abs(d))) / np.diff(np.log(ts))


def plain_channel(t: float) -> fe_models.Section:
    return channel(50.0, 100.0, t)


def square_box(t: float) -> fe_models.Section:
    return box(100.0, 100.0, t)


def two_cell_box(t: float) -> fe_models.Section:
    return shape("two-cell box", 100.0 / t)


def three_cell_box(t: float) -> fe_models.Section:
    return shape("tapering three-cell box", 100.0 / t)


def lipped_channel(t: float) -> fe_models.Section:
    return shape("lipped channel, unequal lips", 100.0 / t)


def finned_box(t: float) -> fe_models.Section:
    return shape("box with two fins", 100.0 / t)


def test_shear_centre_of_the_sharp_channel() -> None:
    """e_theory - e_FE = 0.0075 t^2 (b = 50, h = 100): second order to 3 b^2/(6 b + h) = 18.75."""
    ts = np.array([10.0, 5.0, 2.5, 1.25, 0.625])
    lost = []
    for t in ts:
        theory, fe = both(plain_channel, t, 1e-7)
        assert_allclose(theory.require("shear_centre_x"), -18.75, rtol=1e-12)
        x = fe.quantities["shear_centre_x"]
        lost.append(x.value + 18.75)
        assert x.half_width < 1e-2 * lost[-1]
    order = slopes(ts, lost)
    assert (np.abs(order - 2.0) < 0.05).all()
    assert abs(order[-1] - 2.0) < 0.01
    assert_allclose(lost[-1] / ts[-1] ** 2, 0.0075, rtol=0.01)


def test_bredt_of_the_square_box() -> None:
    """J_FE / (b^3 t) - 1 = c t/b + ...: first order; rows D050 and D052 give c = 0.455 and 0.51."""
    ts = np.array([10.0, 5.0, 2.0, 1.0, 0.5, 0.25])
    gained = []
    for t in ts:
        theory, fe = both(square_box, t, 3e-6)
        assert_allclose(theory.require("torsion_constant"), 100.0**3 * t, rtol=1e-12)
        gained.append(fe.quantities["torsion_constant"].value / (100.0**3 * t) - 1.0)
    order = slopes(ts, gained)
    assert ((order > 0.98) & (order < 1.2)).all()
    assert abs(order[-1] - 1.0) < 0.01
    assert_allclose(gained[2] / 0.02, 0.455, rtol=2e-3)
    assert_allclose(gained[0] / 0.1, 0.51004, rtol=1e-3)


@pytest.mark.parametrize("make", [two_cell_box, three_cell_box, finned_box])
def test_bredt_batho_of_several_cells(make: Callable[[float], fe_models.Section]) -> None:
    ts = np.array([4.0, 2.0, 1.0, 0.5])
    gained = []
    for t in ts:
        theory, fe = both(make, t, 1e-5)
        gained.append(fe.quantities["torsion_constant"].value / theory.require("torsion_constant") - 1.0)
    assert (np.abs(slopes(ts, gained) - 1.0) < 0.1).all()
    assert abs(gained[-1]) < 0.01


@pytest.mark.parametrize(
    ("name", "ends", "corners"),
    [("channel", 2, 2), ("lipped channel, unequal lips", 2, 4), ("unequal angle", 2, 1)],
)
def test_open_sections_in_torsion(name: str, ends: int, corners: int) -> None:
    """J_FE - sum L t^3/3 = (-0.10504 per end + 0.0725 per corner) t^4: first order in t/L.

    End constant: rectangle series (0.10504); corner constant of a right bend: row D16, k_L = 0.0725 with
    midline lengths to the corner. Both hold for long walls; the next order is exponentially small.
    """
    constant = -0.10504 * ends + 0.0725 * corners
    ts, lost = np.array([5.0, 2.0, 1.0, 0.5]), []
    for t in ts:
        theory, fe = both(lambda t: shape(name, 100.0 / t), t, 1e-7)
        plain = theory.require("torsion_constant")
        lost.append(fe.quantities["torsion_constant"].value / plain - 1.0)
        assert_allclose(
            (fe.quantities["torsion_constant"].value - plain) / t**4,
            constant,
            rtol=0,
            atol=2e-4 * (ends + corners),
        )
    assert (np.abs(slopes(ts, lost) - 1.0) < 1e-2).all()


@pytest.mark.parametrize("name", SHAPES)
def test_second_moments_and_area(name: str) -> None:
    """Relative differences of the exact quantities vanish like t or t^2: at least first order."""
    for quantity in ("area", "second_moment_xx", "second_moment_yy"):
        difference = []
        for ratio in (800.0, 3200.0):
            section = shape(name, ratio)
            theory = beam_theory.solve(theory_section(section)).require(quantity)
            got = fe_models.solve(section, 1e-2).quantities[quantity].value
            difference.append(abs(got / theory - 1.0))
        assert difference[1] <= max(0.3 * difference[0], 1e-12)
        assert difference[1] < 0.01


def test_midline_warping_constant_is_zero_and_the_solids_is_not() -> None:
    """Angle, tee, cruciform, square box, triangle: exactly zero on the midline, not in the solid."""
    for name in ("unequal angle", "angle, legs at 70 degrees", "tee", "cruciform", "square box",
                 "triangular cell, three thicknesses"):  # fmt: skip
        section = shape(name, 50.0)
        theory, fe = beam_theory.solve(theory_section(section)), fe_models.solve(section)
        scale = theory.require("torsion_constant") * fe.outline.extent**2
        assert abs(theory.require("warping_constant")) <= 1e-12 * scale
        got = fe.quantities["warping_constant"]
        assert got.value - got.half_width > 1e-8 * scale
        assert got.value < 0.1 * scale


@pytest.mark.parametrize(
    ("row", "legs"),
    [
        ("angle", [(100.0, 1.0), (60.0, 1.0)]),
        ("tee", [(40.0, 0.0), (40.0, 0.0), (100.0, 1.0)]),
        ("cruciform", [(50.0, 1.0)] * 4),
    ],
)
def test_secondary_warping_constant(row: str, legs: list[tuple[float, float]]) -> None:
    """I_w of legs that meet in one point tends to sum t^3 L^3 / 36, second order in t.

    Rows D350 (angle, t^3 (a^3 + b^3)/36) and D36 (tee, flange t^3 b^3/144: two legs of b/2 give the same).
    """
    name = {"angle": "unequal angle"}.get(row, row)
    ts, off = np.array([2.0, 1.0, 0.5]), []
    for t in ts:
        got = fe_models.solve(shape(name, 100.0 / t), 3e-6).quantities["warping_constant"].value
        off.append(got / (t**3 * sum(length**3 for length, _ in legs) / 36) - 1.0)
    assert (np.abs(slopes(ts, off) - 2.0) < 0.02).all()
    assert abs(off[-1]) < 2e-4


def flow_difference(make: Callable[[float], fe_models.Section], t: float) -> np.ndarray:
    """Largest difference of flows at probes over FE's peak, for unit Vx, Vy and T, (3,)."""
    theory, fe = both(make, t, 1e-5)
    units = [theory.unit_flow(n) for n in ("Vx", "Vy", "T")]
    worst, peak, error = np.zeros(3), np.zeros(3), np.zeros(3)
    for wall, strip in fe.strips.items():
        assert strip is not None
        at = strip[0] + PROBES * (strip[1] - strip[0])
        got = fe.flow_at(wall, at)
        want = np.array([u.at(wall, at) for u in units])
        worst = np.maximum(worst, np.abs(want - got.values).max(axis=1))
        peak = np.maximum(peak, np.abs(got.values).max(axis=1))
        error = np.maximum(error, got.errors.max(axis=1))
    assert (error[:2] <= 0.1 * worst[:2] + 1e-8 * peak[:2]).all()
    return worst / peak if peak[2] > 1e-3 * peak[:2].max() / 100.0 else worst / np.append(peak[:2], 1.0)


@pytest.mark.parametrize("make", [lipped_channel, two_cell_box, three_cell_box, finned_box])
def test_flows_at_probes(make: Callable[[float], fe_models.Section]) -> None:
    """Theory's and FE's flows come together with t, in first order or better; at depth/t 400 within 0.5 %."""
    ts = np.array([2.0, 1.0, 0.5, 0.25])
    found = np.array([flow_difference(make, t) for t in ts])
    loads = 2 if make is lipped_channel else 3
    for load in range(loads):
        order = slopes(ts, list(found[:, load]))
        assert ((order > 0.8) & (order < 2.3)).all(), (load, order)
        assert found[-1, load] < 0.005
    if loads == 2:
        # no flow from torsion on either side of an open section
        assert found[:, 2].max() < 1e-11


@pytest.mark.parametrize("make", [plain_channel, lipped_channel, square_box, two_cell_box, finned_box])
def test_shear_areas(make: Callable[[float], fe_models.Section]) -> None:
    """Energy of the midline's unit flows against the solid's two-sided shear areas: first order or better."""
    ts = np.array([4.0, 2.0, 1.0, 0.5])
    for name in ("shear_area_x", "shear_area_y"):
        off = []
        for t in ts:
            theory, fe = both(make, t, 1e-5)
            off.append(fe.quantities[name].value / theory.require(name) - 1.0)
        order = slopes(ts, off)
        assert ((order > 0.8) & (order < 2.3)).all(), (name, order, off)
        assert abs(off[-1]) < 0.01


@pytest.mark.parametrize("make", [lipped_channel, two_cell_box, three_cell_box, finned_box])
def test_shear_centre_and_warping_constant(make: Callable[[float], fe_models.Section]) -> None:
    """Shear centre over the depth and I_w tend to the midline's at least in first order."""
    ts = np.array([4.0, 2.0, 1.0, 0.5])
    apart, warping = [], []
    for t in ts:
        theory, fe = both(make, t, 1e-5)
        d = [fe.quantities[f"shear_centre_{i}"].value - theory.require(f"shear_centre_{i}") for i in "xy"]
        apart.append(float(np.hypot(*d)))
        warping.append(fe.quantities["warping_constant"].value / theory.require("warping_constant") - 1.0)
    assert (slopes(ts, apart) > 0.75).all()
    assert slopes(ts, apart)[-1] > 0.9
    assert apart[-1] < 0.01 * 100.0
    assert (slopes(ts, warping) > 0.8).all()
    assert abs(warping[-1]) < 0.05


def test_a_wrong_term_would_show() -> None:
    """The slopes can fail: a flange longer by half a thickness changes them."""
    ts = np.array([5.0, 2.5, 1.25])
    wrong = []
    for t in ts:
        section = plain_channel(t)
        bent = polyline([(50.0, 100.0), (0.0, 100.0), (0.0, 0.0), (50.5, 0.0)], t)
        theory = beam_theory.solve(theory_section(bent))
        wrong.append(
            fe_models.solve(section, 1e-6).quantities["shear_centre_x"].value
            - theory.require("shear_centre_x")
        )
    with pytest.raises(AssertionError):
        assert (np.abs(slopes(ts, wrong) - 2.0) < 0.05).all()
    angle = joined({"a": (40.0, 0.0), "o": (0.0, 0.0), "b": (0.0, 40.0)}, [("a", "o", 1.0), ("o", "b", 1.0)])
    assert beam_theory.solve(theory_section(angle)).require("torsion_constant") == pytest.approx(80 / 3)
