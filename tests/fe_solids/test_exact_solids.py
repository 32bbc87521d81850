"""Solids with exact answers: bounds on domains that hold the exact one, or lie in it.

Published values are rows of cases/reference/published_solids.toml.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose
from solid_shapes import ellipse, holds, polygon, rectangle, row, solved

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


def test_sharp_corner_has_no_peak() -> None:
    corners = [(0, 0), (12, 0), (12, 1), (1, 1), (1, 12), (0, 12)]
    assert solved(polygon(*corners), accuracy=1e-4).boundary_peaks(TORQUE) == []


def test_stress_without_nu_is_parabolic() -> None:
    """nu = 0: tau_y = 1.5 V/A (1 - (2 y / h)^2) everywhere in a rectangle."""
    s = solved(rectangle(3.0, 2.0))
    got = s.stress_at([(0.3, 0.5), (-1.4, -0.9)], Actions(shear=(0.0, 1.0)))
    assert_allclose(got.shear[:, 1], [0.25 * 0.75, 0.25 * 0.19], rtol=1e-8)
    assert_allclose(got.shear[:, 0], 0.0, rtol=0, atol=1e-9)
    with pytest.raises(ValueError, match="ratio"):
        s.stress_at([(0.0, 0.0)], Actions(shear=(0.0, 1.0)), with_nu=True)
    with pytest.raises(ValueError, match=r"\(1.6, 0\) lies outside"):
        s.stress_at([(1.6, 0.0)], Actions(shear=(0.0, 1.0)))
