"""Verdicts, effects, factors and normalisers, each on numbers worked by hand."""

from __future__ import annotations

import math

import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison import verdicts
from crosscheck.comparison.quantities import (
    LOAD_QUANTITIES,
    QUANTITIES,
    SECTION_QUANTITIES,
    flow_unit,
    unit_text,
)
from crosscheck.comparison.result import FeValue


@pytest.mark.parametrize(
    ("difference", "uncertainty", "expected"),
    [
        (0.04, 0.01, "within"),
        (-0.04, 0.01, "within"),
        (0.045, 0.01, "inconclusive"),
        (0.055, 0.01, "inconclusive"),
        (0.061, 0.01, "outside"),
        (-0.061, 0.01, "outside"),
        (0.0, 0.051, "inconclusive"),
        (0.05, 0.0, "within"),
    ],
)
def test_verdict_by_difference_and_uncertainty(difference, uncertainty, expected):
    assert verdicts.verdict(difference, uncertainty, 0.05) == expected


def test_understated_stiffness_is_conservative_for_twist():
    kind = QUANTITIES["torsion_constant"]
    assert verdicts.effect(kind, 90.0, 100.0, -0.1, 0.0) == {"twist": "conservative"}
    assert verdicts.effect(kind, 110.0, 100.0, 0.1, 0.0) == {"twist": "unconservative"}


def test_overstated_flow_is_conservative_in_magnitude():
    kind = QUANTITIES["peak_flow"]
    assert verdicts.effect(kind, -11.0, -10.0, -0.1, 0.0) == {"stress": "conservative"}
    assert verdicts.effect(kind, -9.0, -10.0, 0.1, 0.0) == {"stress": "unconservative"}


def test_stress_effect_of_the_warping_constant_depends():
    effects = verdicts.effect(QUANTITIES["warping_constant"], 9.0, 10.0, -0.1, 0.0)
    assert effects == {"twist": "conservative", "stress": "depends"}


@pytest.mark.parametrize("name", ["centroid_x", "shear_centre_y", "principal_angle", "product_moment_xy"])
def test_positions_and_directions_have_no_effect(name):
    assert verdicts.effect(QUANTITIES[name], 9.0, 10.0, -0.1, 0.0) is None


def test_no_effect_where_the_fe_error_hides_the_sign():
    assert verdicts.effect(QUANTITIES["torsion_constant"], 99.0, 100.0, -0.01, 0.02) is None


def test_factor_is_fe_over_hand():
    assert verdicts.factor(QUANTITIES["torsion_constant"], 80.0, 100.0, 100.0) == (1.25, None)


def test_no_factor_from_a_hand_value_of_zero():
    value, reason = verdicts.factor(QUANTITIES["warping_constant"], 0.0, 5.0, 700.0)
    assert value is None
    assert reason is not None
    assert "zero" in reason


@pytest.mark.parametrize(
    ("theory", "fe", "turn"),
    [(0.1, 0.0, 0.1), (math.pi / 2, -math.pi / 2 + 0.01, -0.01), (-1.5, 1.5, math.pi - 3.0), (0.3, 0.3, 0.0)],
)
def test_axes_have_no_sense_so_angles_wrap_at_half_a_turn(theory, fe, turn):
    assert_allclose(verdicts.angle_between(theory, fe), turn, rtol=0, atol=1e-15)


def exact(value):
    return FeValue(value, value, value, "exact")


def test_angle_yardstick_turns_a_small_angle_into_a_share_of_product_moment():
    # Iu = 9, Iv = 4: a turn d leaves (9 - 4) d as product moment, over sqrt(36) = 6.
    fe = {"principal_moment_u": exact(9.0), "principal_moment_v": exact(4.0)}
    theory = {"principal_moment_u": 9.0, "principal_moment_v": 4.0}
    assert_allclose(verdicts.angle_yardstick(theory, fe).value, 6.0 / 5.0, rtol=1e-15, atol=0)


@pytest.mark.parametrize("side", ["theory", "fe"])
def test_equal_principal_moments_leave_the_angle_undefined(side):
    moments = {"theory": (9.0, 4.0), "fe": (9.0, 4.0)}
    moments[side] = (5.0, 5.0)
    theory = dict(zip(("principal_moment_u", "principal_moment_v"), moments["theory"], strict=True))
    fe = {f"principal_moment_{axis}": exact(v) for axis, v in zip("uv", moments["fe"], strict=True)}
    yardstick = verdicts.angle_yardstick(theory, fe)
    assert yardstick.value is None
    assert yardstick.reason is not None
    assert "equal" in yardstick.reason


def test_warping_yardstick_is_the_larger_of_fe_and_j_times_d_squared():
    fe = {"warping_constant": exact(5.0), "torsion_constant": exact(2.0)}
    assert_allclose(verdicts.warping_yardstick(fe, 10.0).value, 200.0, rtol=1e-15, atol=0)
    assert_allclose(verdicts.warping_yardstick(fe, 1.0).value, 5.0, rtol=1e-15, atol=0)


def test_product_moment_yardstick():
    fe = {"second_moment_xx": exact(9.0), "second_moment_yy": exact(4.0)}
    assert_allclose(verdicts.product_moment_yardstick(fe).value, 6.0, rtol=1e-15, atol=0)


def test_default_criteria():
    tight = {kind.name for kind in (*SECTION_QUANTITIES, *LOAD_QUANTITIES) if kind.default_criterion == 0.01}
    assert tight == {"centroid_x", "centroid_y", "shear_centre_x", "shear_centre_y"}
    assert {kind.default_criterion for kind in QUANTITIES.values()} == {0.01, 0.05}


@pytest.mark.parametrize(
    ("length_power", "force_power", "text"),
    [
        (4, 0, "mm^4"),
        (1, 0, "mm"),
        (-1, 1, "N/mm"),
        (-1, 0, "1/mm"),
        (-2, 0, "1/mm^2"),
        (1, 1, "N mm"),
        (0, 0, "1"),
    ],
)
def test_units_as_written(length_power, force_power, text):
    assert unit_text(length_power, force_power, "mm", "N") == text


def test_unit_of_flows():
    assert flow_unit("unit Vx", "in", "lbf") == "1/in"
    assert flow_unit("unit T", "in", "lbf") == "1/in^2"
    assert flow_unit("", "in", "lbf") == "lbf/in"
