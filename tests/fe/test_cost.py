"""What a plain channel costs from stout to slender, and that no digit is lost on the way."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from fe_sections import channel
from numpy.testing import assert_allclose

from fe_models import Solution, solve

B, H = 50.0, 100.0
RATIOS = (10.0, 20.0, 30.0, 50.0, 100.0, 300.0, 1000.0, 3000.0)


@cache
def solved(ratio: float, accuracy: float = 1e-5) -> Solution:
    return solve(channel(B, H, H / ratio), accuracy)


@pytest.mark.parametrize("ratio", RATIOS)
def test_unknowns(ratio: float) -> None:
    """At most 4000 unknowns of one field at the default accuracy."""
    solution = solved(ratio)
    assert solution.met
    assert solution.mesh.unknowns <= 4000
    k = solution.fields.space.element.nodes.shape[0]
    assert solution.mesh.unknowns >= solution.mesh.elements * (k - 1) // 4


def test_cost_does_not_grow_with_slenderness() -> None:
    """From depth over thickness 10 to 3000 by less than half; accuracy is reached all along."""
    count = [solved(r).mesh.unknowns for r in RATIOS]
    assert count[-1] < 1.5 * count[0]
    assert max(count) < 1.5 * max(count[:2])


def test_torsion_constant_keeps_its_digits() -> None:
    """J = t^3 (2 b + h)/3 + c t^4 with one c for all slender channels: corners do not see ends.

    c from depth over thickness 25 tells J at 300, 3000 and 10000 to ten digits.
    """
    t = H / 25.0
    c = (solved(25.0, 1e-7).quantities["torsion_constant"].value - t**3 * (2 * B + H) / 3) / t**4
    assert_allclose(c, 2 * (0.0725 - 0.10504), rtol=0, atol=2e-4)
    for ratio in (300.0, 3000.0, 10000.0):
        t = H / ratio
        j = solved(ratio, 1e-7).quantities["torsion_constant"]
        predicted = t**3 * (2 * B + H) / 3 + c * t**4
        assert j.half_width <= 1e-8 * j.value
        assert j.low - 1e-10 * predicted <= predicted <= j.high + 1e-10 * predicted
        assert_allclose(j.value, predicted, rtol=1e-9)


def test_default_accuracy_keeps_digits_when_slender() -> None:
    """At 3000 the everyday mesh: J within 1e-6 of the prediction, and the interval says so."""
    t = H / 25.0
    c = (solved(25.0, 1e-7).quantities["torsion_constant"].value - t**3 * (2 * B + H) / 3) / t**4
    t = H / 3000.0
    j = solved(3000.0).quantities["torsion_constant"]
    predicted = t**3 * (2 * B + H) / 3 + c * t**4
    assert j.low <= predicted <= j.high
    assert j.half_width <= 1e-6 * j.value


def test_shear_centre_keeps_its_digits() -> None:
    """e = 18.75 - c2 t^2 - c3 t^3: both from depth/t 100 and 200 tell e at 3000 to 1e-8 of the depth."""
    ts = np.array([H / 100.0, H / 200.0])
    lost = [18.75 + solved(r, 1e-8).quantities["shear_centre_x"].value for r in (100.0, 200.0)]
    c2, c3 = np.linalg.solve(np.column_stack([ts**2, ts**3]), lost)
    assert_allclose(c2, 0.0075, rtol=0.02)
    for ratio, accuracy in ((1000.0, 1e-7), (3000.0, 1e-7), (3000.0, 1e-5)):
        t = H / ratio
        x = solved(ratio, accuracy).quantities["shear_centre_x"]
        assert x.half_width <= 1e-8 * H
        assert_allclose(-x.value, 18.75 - c2 * t**2 - c3 * t**3, rtol=0, atol=1e-8 * H)


def test_warping_constant_and_flow_keep_their_digits() -> None:
    """I_w within (t/h)^2 of the midline's; mid-web flow of unit Vy Q/I of the solid, at 3000."""
    solution, t = solved(3000.0), H / 3000.0
    plain = t * B**3 * H**2 * (3 * B + 2 * H) / (12 * (6 * B + H))
    assert_allclose(solution.quantities["warping_constant"].value, plain, rtol=10 / 3000.0**2)
    # outer rectangle less opening, both about mid-height
    outer, opening = (B + t / 2, H + t), (B - t / 2, H - t)
    inertia = (outer[0] * outer[1] ** 3 - opening[0] * opening[1] ** 3) / 12
    statical = (outer[0] * outer[1] ** 2 - opening[0] * opening[1] ** 2) / 8
    q = solution.flow_at("w1", 0.5).values[1, 0]
    assert_allclose(abs(q), statical / inertia, rtol=1e-9)
    assert solution.flow_at("w1", 0.5).errors[1, 0] <= 1e-9 * abs(q)
