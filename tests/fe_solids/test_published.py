"""Solids with exact or published answers, from cases/reference/published.json.

Exact values must lie inside the interval where it is a bound; printed ones within the row's tolerance.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose
from solid_shapes import ellipse, holds, keyway, polygon, rectangle, regular, rounded, row, sector, solved

from fe_models import Actions, ClosedLine

TORQUE = Actions(torque=1.0)


def disc(radius: float = 1.0) -> ClosedLine:
    return ClosedLine.circle((0.0, 0.0), radius)


def test_ellipse() -> None:
    """Arcs within 1e-5 of the ellipse: J is monotone in the domain, so (1 +- d/b)^4 bounds the ellipse's."""
    r, d = row("A01"), 1e-5
    j = solved(ellipse(2.0, 1.0, d)).quantities["torsion_constant"]
    assert j.low * (1 - d) ** 4 <= r["value"] <= j.high * (1 + d) ** 4
    assert_allclose(j.value, r["value"], rtol=r["tolerance"])


def test_ellipse_in_short_lines() -> None:
    """400 lines inside the ellipse, none farther from it than the largest rise."""
    a = 2.0 * np.pi * np.arange(400) / 400
    rise = 2.0 * (1.0 - math.cos(np.pi / 400))
    j = solved(polygon(*zip(2.0 * np.cos(a), np.sin(a), strict=True)), accuracy=1e-5).quantities
    assert j["torsion_constant"].high < row("A01")["value"]
    assert j["torsion_constant"].low * (1 + rise) ** 4 > row("A01")["value"]


def test_hollow_ellipse() -> None:
    s = solved(ellipse(2.0, 1.0, 1e-5), ellipse(1.2, 0.6, 1e-5))
    r = row("A04")
    assert_allclose(s.quantities["torsion_constant"].value, r["value"], rtol=r["tolerance"])
    stress = s.stress_at([(0.0, 1.0 - 1e-5)], TORQUE).magnitude[0]
    assert_allclose(stress, row("A05")["value"], rtol=row("A05")["tolerance"])


def test_circle_and_tube() -> None:
    for rings, exact in (
        ((disc(),), math.pi / 2),
        ((disc(), disc(0.8)), row("A32")["value"]),
        ((disc(), disc(0.99)), math.pi / 2 * (1 - 0.99**4)),
    ):
        j = solved(*rings).quantities["torsion_constant"]
        assert j.basis == "bound on the interpolated outline"
        assert holds(j, exact)
        assert j.half_width < 1e-6 * exact


@pytest.mark.parametrize("name", ["D030", "D031"])
def test_tube_over_bredt(name: str) -> None:
    r, t = row(name), 0.05 if name == "D030" else 0.2
    s = solved(disc(1 + t / 2), disc(1 - t / 2))
    assert_allclose(
        s.quantities["torsion_constant"].value / (2 * math.pi * t), r["value"], rtol=r["tolerance"]
    )
    peak = s.boundary_peaks(TORQUE)[0]
    other = row("D040" if name == "D030" else "D041")
    assert_allclose(peak.value * 2 * math.pi * t, other["value"], rtol=other["tolerance"])
    assert_allclose(np.hypot(*peak.place), 1 + t / 2, rtol=1e-6)


def test_triangles() -> None:
    """Equilateral: J = sqrt(3) a^4 / 80 (Timoshenko and Goodier, art. 106) and its mid-side stress."""
    s = solved(polygon((0, 0), (1, 0), (0.5, math.sqrt(0.75))), nu=0.5)
    assert holds(s.quantities["torsion_constant"], math.sqrt(3) / 80)
    assert_allclose(s.stress_at([(0.5, 0.0)], TORQUE).magnitude, row("A08")["value"], rtol=1e-5)
    r = row("B61")
    shear = s.stress_at([(0.5, math.sqrt(0.75) / 3)], Actions(shear=(0.0, 1.0)), with_nu=True)
    assert_allclose(shear.shear[0, 1] * math.sqrt(3) / 4, r["value"], rtol=r["tolerance"])
    right = solved(polygon((0, 0), (1, 0), (0, 1)), nu=0.3)
    for n in ("shear_centre_x", "shear_centre_y"):
        assert holds(right.quantities[n], row("B60")["value"])
        assert_allclose(right.quantities[n].with_nu, 0.298994, rtol=0, atol=1e-6)
    assert_allclose(
        right.stress_at([(0.5, 0.5)], TORQUE).magnitude[0], row("A10")["independent_value"], rtol=5e-4
    )


@pytest.mark.parametrize(
    ("name", "sides", "size"),
    [
        ("A11", 6, 1 / math.sqrt(3)),
        ("A13", 8, 0.5 / math.cos(math.pi / 8)),
        ("A15", 5, 1.0),
    ],
)
def test_regular_polygons(name: str, sides: int, size: float) -> None:
    r = row(name)
    j = solved(regular(sides, size)).quantities["torsion_constant"]
    assert holds(j, r["value"], r["tolerance"] * r["value"])
    # the independent number has more digits: two meshes of another program, agreeing to 1e-6
    assert holds(j, r["independent_value"], 1e-6 * j.value)
    assert j.half_width <= 1e-6 * j.value


@pytest.mark.parametrize(("b", "name"), [(1, "A20"), (1.5, "A22"), (2, "A23"), (3, "A25"), (10, "A28")])
def test_rectangles(b: float, name: str) -> None:
    """The rows' exact series, to all its digits, inside the interval; the stress at one point within 5e-4."""
    s = solved(rectangle(b, 1.0))
    assert holds(s.quantities["torsion_constant"], row(name + "J")["independent_value"] * b)
    stress = s.stress_at([(0.0, -0.5)], TORQUE).magnitude[0]
    assert_allclose(1 / (stress * b), row(name + "S")["independent_value"], rtol=5e-4)


def test_warping_constant_of_rectangles() -> None:
    for b, name, key in ((2.0, "A30", "value"), (20.0, "A31", "independent_value")):
        got = solved(rectangle(b, 1.0), accuracy=1e-7).quantities["warping_constant"]
        assert got.basis == "estimate"
        assert_allclose(got.value, row(name)[key], rtol=2e-6)


@pytest.mark.parametrize(
    ("degrees", "name"), [(45, "A40"), (90, "A42"), (180, "A44"), (270, "A45"), (360, "A47")]
)
def test_sectors(degrees: float, name: str) -> None:
    """The exact ring-sector series; 360 degrees with a slit of 1e-5 degrees, which costs 4e-8 of J."""
    r = row(name)
    gap = 1e-5 if degrees == 360 else 0.0
    j = solved(sector(1.0, degrees - gap), accuracy=1e-5).quantities["torsion_constant"]
    assert holds(j, r["independent_value"], 1e-7 * j.value)
    assert j.half_width <= 1e-5 * j.value


def test_half_disc() -> None:
    """J, the Trefftz shear centre 8/(5 pi), and the coefficient 6/7 for a load along the diameter."""
    s = solved(sector(1.0, 180.0), nu=0.3)
    q = s.quantities
    assert holds(q["torsion_constant"], row("A48")["value"])
    assert holds(q["shear_centre_y"], row("B30")["value"])
    assert q["shear_centre_y"].half_width < 1e-6
    assert holds(q["shear_area_x"], 6 / 7 * math.pi / 2)


def test_half_disc_coefficient_along_its_axis() -> None:
    r = row("B33")
    s = solved(sector(1.0, 180.0), nu=0.0)
    assert_allclose(s.poisson.mean_coefficient[1], r["value"], rtol=r["tolerance"])
    assert_allclose(s.poisson.mean_coefficient[1], r["independent_value"], rtol=1e-6)


def test_shaft_with_a_keyway() -> None:
    """J, and the stress at the bottom of the groove for unit twist."""
    s = solved(keyway(0.1))
    j = s.quantities["torsion_constant"]
    assert holds(j, row("A35J")["value"])
    peak = s.boundary_peaks(TORQUE)[0]
    assert_allclose(peak.place, (0.9, 0.0), rtol=0, atol=1e-3)
    assert_allclose(peak.value * j.value, row("A35S")["value"], rtol=5e-4)


def test_slit_rings() -> None:
    """A slit of 1e-6 rad: J by the exact series (A33), the shear centre outside the ring (D330, D332)."""
    for t, name in ((0.05, "D330"), (0.4, "D332")):
        s = solved(slit(1 + t / 2, 1 - t / 2), accuracy=1e-5)
        assert_allclose(-s.quantities["shear_centre_x"].value, -row(name)["value"], rtol=0.5e-5)
    j = solved(slit(1.0, 0.9), accuracy=1e-5).quantities["torsion_constant"]
    assert holds(j, row("A33")["value"], 1e-6 * j.value)


def slit(outer: float, inner: float, gap: float = 1e-6) -> ClosedLine:
    """A ring slit at the angle pi."""
    half = math.pi - gap / 2
    ends = [
        (r * math.cos(half), s * r * math.sin(half))
        for r, s in ((outer, -1), (outer, 1), (inner, 1), (inner, -1))
    ]
    return ClosedLine(tuple(ends), ((outer, 0.0), None, (inner, 0.0), None))


def test_half_ring() -> None:
    r, t = row("D340"), 0.05
    a, b = 1 + t / 2, 1 - t / 2
    line = ClosedLine(((0, -a), (0, a), (0, b), (0, -b)), ((a, 0), None, (b, 0), None))
    x = solved(line).quantities["shear_centre_x"]
    assert_allclose(x.value, r["value"], rtol=0, atol=0.5e-5)


@pytest.mark.parametrize(("name", "radius"), [("D400", 0.1), ("D402", 0.5), ("D403", 1.0)])
def test_fillet_stress_of_an_angle(name: str, radius: float) -> None:
    """Legs 12 outside, t = 1: the peak sits on the fillet; a sharp corner has none."""
    corners = [(0, 0), (12, 0), (12, 1), (1, 1), (1, 12), (0, 12)]
    s = solved(rounded(corners, (0, 0, 0, radius, 0, 0)), accuracy=1e-5)
    peak = s.boundary_peaks(TORQUE)[0]
    j = s.quantities["torsion_constant"].value
    assert_allclose(peak.value * j, row(name)["value"], rtol=row(name)["tolerance"])
    assert peak.error * j < 0.01
    assert solved(polygon(*corners), accuracy=1e-4).boundary_peaks(TORQUE) == []
