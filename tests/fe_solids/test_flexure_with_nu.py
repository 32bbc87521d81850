"""Shear coefficients and stresses of solids with Poisson's ratio, from cases/reference/published.json."""

from __future__ import annotations

import math

import pytest
from numpy.testing import assert_allclose
from solid_shapes import ellipse, rectangle, row, solved

from fe_models import Actions, ClosedLine

ALONG_Y = Actions(shear=(0.0, 1.0))
DISC = ClosedLine.circle((0.0, 0.0), 1.0)


@pytest.mark.parametrize(("nu", "name"), [(0.0, "B00"), (0.3, "B01"), (0.5, "B02")])
def test_circle(nu: float, name: str) -> None:
    s = solved(DISC, accuracy=1e-7, nu=nu)
    assert_allclose(s.poisson.mean_coefficient, row(name + "C")["value"], rtol=1e-6)
    energy = 6 * (1 + nu) ** 2 / (7 + 14 * nu + 8 * nu**2)
    assert_allclose(s.poisson.energy_coefficient, energy, rtol=1e-6)
    if name != "B02":
        stress = s.stress_at([(0.0, 0.0)], ALONG_Y, with_nu=True)
        assert_allclose(stress.shear[0], (0.0, row(name + "T")["value"] / math.pi), rtol=1e-5, atol=1e-6)
    if name == "B01":
        edge = s.stress_at([(1.0, 0.0)], ALONG_Y, with_nu=True)
        assert_allclose(edge.shear[0, 1] * math.pi, row("B03")["value"], rtol=row("B03")["tolerance"])


def test_ellipses() -> None:
    """Semi-axis 2 along the load, then across it."""
    line = ellipse(2.0, 1.0, 1e-5)
    s = solved(line, accuracy=1e-6, nu=0.3)
    assert_allclose(s.poisson.mean_coefficient[0], row("B10C")["value"], rtol=row("B10C")["tolerance"])
    at = [(0.0, 0.0), (0.0, 1.0 - 1e-5)]
    along = s.stress_at(at, Actions(shear=(1.0, 0.0)), with_nu=True).shear[:, 0]
    assert_allclose(along[0], row("B10T")["value"], rtol=row("B10T")["tolerance"])
    assert_allclose(along[1], row("B10E")["value"], rtol=row("B10E")["tolerance"])
    across = s.stress_at(at[:1], ALONG_Y, with_nu=True).shear[0, 1]
    assert_allclose(across, row("B11T")["value"], rtol=row("B11T")["tolerance"])


@pytest.mark.parametrize(("m", "name"), [(0.5, "B20C"), (0.9, "B21C")])
def test_hollow_circles(m: float, name: str) -> None:
    s = solved(DISC, ClosedLine.circle((0.0, 0.0), m), nu=0.3)
    assert_allclose(s.poisson.mean_coefficient, row(name)["value"], rtol=row(name)["tolerance"])
    if m == 0.5:
        area = math.pi * (1 - m * m)
        edge = s.stress_at([(m, 0.0)], ALONG_Y, with_nu=True)
        assert_allclose(edge.shear[0, 1] * area, row("B20T")["value"], rtol=row("B20T")["tolerance"])


def test_rectangle_by_mean_displacement() -> None:
    """K = 10 (1 + nu) / (12 + 11 nu) for every ratio of sides (Cowper 1966)."""
    s = solved(rectangle(1.0, 2.0), accuracy=1e-7, nu=0.3)
    assert_allclose(s.poisson.mean_coefficient, row("B40")["value"], rtol=1e-8)


@pytest.mark.parametrize(
    ("h", "nu", "name"),
    [
        (2.0, 0.25, "B41a0"),
        (2.0, 0.5, "B41a1"),
        (1.0, 0.25, "B41b0"),
        (1.0, 0.5, "B41b1"),
        (0.5, 0.5, "B41c1"),
        (0.25, 0.25, "B41d0"),
    ],
)
def test_rectangle_by_energy(h: float, nu: float, name: str) -> None:
    """The series to all its digits, and the table as printed."""
    kappa = solved(rectangle(1.0, h), accuracy=1e-7, nu=nu).poisson.energy_coefficient[1]
    assert_allclose(kappa, row(name)["independent_value"], rtol=1e-7)
    assert_allclose(kappa, row(name)["value"], rtol=row(name)["tolerance"])


@pytest.mark.parametrize(
    ("h", "name", "place"),
    [
        (2.0, "B42a0", (0.0, 0.0)),
        (2.0, "B42a1", (0.5, 0.0)),
        (1.0, "B42b0", (0.0, 0.0)),
        (0.5, "B42c1", (0.5, 0.0)),
        (0.25, "B42d0", (0.0, 0.0)),
        (0.25, "B42d1", (0.5, 0.0)),
    ],
)
def test_stress_of_rectangles(h: float, name: str, place: tuple[float, float]) -> None:
    """Over 1.5 V / A, nu = 1/4 (Timoshenko and Goodier, art. 124)."""
    s = solved(rectangle(1.0, h), nu=0.25)
    got = s.stress_at([place], ALONG_Y, with_nu=True)
    assert_allclose(got.shear[0, 1] * h / 1.5, row(name)["independent_value"], rtol=5e-4)
    assert got.error[0] < 1e-3 * got.magnitude[0]


def test_stress_without_nu_is_parabolic() -> None:
    """nu = 0: tau_y = 1.5 V/A (1 - (2 y / h)^2) everywhere in a rectangle."""
    s = solved(rectangle(3.0, 2.0))
    got = s.stress_at([(0.3, 0.5), (-1.4, -0.9)], ALONG_Y)
    assert_allclose(got.shear[:, 1], [0.25 * 0.75, 0.25 * 0.19], rtol=1e-8)
    assert_allclose(got.shear[:, 0], 0.0, rtol=0, atol=1e-9)
    with pytest.raises(ValueError, match="ratio"):
        s.stress_at([(0.0, 0.0)], ALONG_Y, with_nu=True)
    with pytest.raises(ValueError, match=r"\(1.6, 0\) lies outside"):
        s.stress_at([(1.6, 0.0)], ALONG_Y)


def test_flat_strip_loaded_flatwise() -> None:
    r = row("D55")
    got = solved(rectangle(10.0, 1.0), nu=0.3).stress_at([(5.0, 0.0), (0.0, 0.0)], ALONG_Y, with_nu=True)
    assert_allclose(got.shear[:, 1] * 10 / 1.5, (r["value"], 1 / 1.3), rtol=1e-3)
