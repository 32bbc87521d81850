"""Slit and closed circular tubes from stout to slender, and the peak in the bends of a box."""

from __future__ import annotations

import math
from functools import cache

import numpy as np
import pytest
from numpy.testing import assert_allclose
from solid_shapes import row

from fe_models import Actions, Rounding, Section, Solution, Wall, solve

RATIOS = (10.0, 100.0, 1000.0)  # mean radius over thickness
GAP = 0.05  # of the slit, over the thickness


def place(angle: float) -> tuple[float, float]:
    return math.cos(angle), math.sin(angle)


@cache
def slit(ratio: float, accuracy: float) -> Solution:
    """A tube of mean radius 1 with a real gap at the angle pi: two arched walls with radial ends."""
    t, half = 1.0 / ratio, half_angle(ratio)
    points = {"a": place(-half), "m": (1.0, 0.0), "b": place(half)}
    walls = (
        Wall("lower", "a", "m", (t, t), arc_through=place(-half / 2)),
        Wall("upper", "m", "b", (t, t), arc_through=place(half / 2)),
    )
    return solve(Section(points, walls), accuracy)


def half_angle(ratio: float) -> float:
    return math.pi - 0.5 * GAP / ratio


def sector_torsion_constant(inner: float, outer: float, half: float) -> float:
    """J of a ring sector -half..half, exact.

    With rho = ln r the stress function solves phi,rho rho + phi,theta theta = -2 exp(2 rho), zero all round:
    a sine series over rho, s_k = integral of exp(2 rho) sin(kappa (rho - rho_inner)), gives
    J = sum 16 s_k^2 (half - tanh(kappa half)/kappa)/(l kappa^2), l = ln(outer/inner), kappa = k pi/l.
    """
    length = math.log(outer / inner)
    k = np.arange(1, 200_001)
    kappa = k * math.pi / length
    s = kappa * (inner**2 - (-1.0) ** k * outer**2) / (4.0 + kappa**2)
    return float(np.sum(16.0 * s**2 * (half - np.tanh(kappa * half) / kappa) / (length * kappa**2)))


def test_the_series_itself() -> None:
    """Row A33, a zero slit; and a thin straight strip, J = b t^3/3 (1 - 0.630 t/b)."""
    assert_allclose(sector_torsion_constant(0.9, 1.0, math.pi), row("A33")["value"], rtol=1e-7)
    far, t, b = 1e4, 1.0, 20.0
    strip = sector_torsion_constant(far - t / 2, far + t / 2, b / 2 / far)
    assert_allclose(strip, b * t**3 / 3 * (1 - 0.63025 * t / b), rtol=1e-5)


@pytest.mark.parametrize("ratio", RATIOS)
def test_slit_tube(ratio: float) -> None:
    t = 1.0 / ratio
    exact = sector_torsion_constant(1 - t / 2, 1 + t / 2, half_angle(ratio))
    j = slit(ratio, 1e-5).quantities["torsion_constant"]
    assert_allclose(j.value, exact, rtol=1e-5)
    assert j.low * (1 - 1e-9) <= exact <= j.high * (1 + 1e-9)
    for name in ("shear_centre_x", "warping_constant"):
        coarse, fine = (slit(ratio, a).quantities[name] for a in (1e-5, 1e-6))
        assert_allclose(coarse.value, fine.value, rtol=2e-6)
    # e = 2 R (1 - t^2/(4 R^2)) and so on: the thin values 2 R and t R^5 (2 pi^3/3 - 4 pi), midline theory
    thin = t * (2 * math.pi**3 / 3 - 4 * math.pi)
    assert abs(slit(ratio, 1e-5).quantities["shear_centre_x"].value / 2 - 1) < 0.3 * t**2
    assert abs(slit(ratio, 1e-5).quantities["warping_constant"].value / thin - 1) < 0.1 * t


@pytest.mark.parametrize("ratio", RATIOS)
def test_closed_tube(ratio: float) -> None:
    t = 1.0 / ratio
    walls = (
        Wall("upper", "a", "b", (t, t), arc_through=(0.0, 1.0)),
        Wall("lower", "b", "a", (t, t), arc_through=(0.0, -1.0)),
    )
    solution = solve(Section({"a": (1.0, 0.0), "b": (-1.0, 0.0)}, walls))
    exact = math.pi / 2 * ((1 + t / 2) ** 4 - (1 - t / 2) ** 4)
    j = solution.quantities["torsion_constant"]
    assert j.low <= exact <= j.high
    assert_allclose((j.low, j.high), exact, rtol=1e-5)


def bent_box(radius: float) -> Section:
    """Midline 12 x 12, t = 1, uniform round the corners."""
    points = {"a": (0.0, 0.0), "b": (12.0, 0.0), "c": (12.0, 12.0), "d": (0.0, 12.0)}
    walls = tuple(Wall(a + b, a, b, (1.0, 1.0)) for a, b in ("ab", "bc", "cd", "da"))
    return Section(points, walls, dict.fromkeys(points, Rounding(radius)))


@pytest.mark.parametrize(("name", "radius"), [("D420", 0.25), ("D422", 1.0)])
def test_peak_in_the_bend_of_a_box(name: str, radius: float) -> None:
    """Over Bredt's stress T/(2 A t); it converges, and four bends alike have four alike."""
    found = []
    for accuracy in (1e-4, 1e-5, 1e-6):
        peaks = solve(bent_box(radius), accuracy).boundary_peaks(Actions(torque=1.0))
        found.append(peaks[0].value)
        assert len(peaks) == 4
        assert_allclose([p.value for p in peaks], peaks[0].value, rtol=2e-3)
    reference = row(name)
    area = 12.0**2 - (4.0 - math.pi) * (radius + 0.5) ** 2
    assert_allclose(found[-1] * 2 * area, reference["value"], rtol=0, atol=reference["tolerance"])
    assert abs(found[2] - found[1]) <= abs(found[1] - found[0]) + 1e-6 * found[2]
    assert_allclose(found[1], found[2], rtol=1e-3)


def test_a_sharp_box_has_no_peak() -> None:
    sharp = bent_box(1.0)
    assert solve(Section(sharp.points, sharp.walls), 1e-4).boundary_peaks(Actions(torque=1.0)) == []
