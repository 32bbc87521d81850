"""Poisson's ratio stands beside the comparison: shear coefficients by two definitions, shear centre."""

from __future__ import annotations

import pytest
from numpy.testing import assert_allclose

from crosscheck.reports.result_json import document
from crosscheck.reports.screen_blocks import poisson_line
from crosscheck.reports.tables import stiffness_table

from .solved import compared

ROD = """\
units = "mm N"
[materials.foil]
E = 70000
nu = 0.3
[outline]
boundary = { centre = [0, 0], radius = 10 }
"""
ANGLE = """\
units = "mm N"
base_material = "one"
[materials]
one = { E = 70000, nu = 0.33 }
two = { E = 200000, nu = 0.29 }
[points]
a = [50, 0]
b = [0, 0]
c = [0, 30]
[[walls]]
path = ["a", "b"]
thickness = 3
[[walls]]
path = ["b", "c"]
thickness = 2
material = "two"
"""
WITHOUT_NU = """\
units = "mm N"
[materials.two]
E = 200000
nu = 0
""" + ANGLE[ANGLE.index("[points]") :]


def coefficients(text):
    return {row.name: row for row in compared(text).shear_coefficients}


def test_round_bar_by_both_definitions() -> None:
    """Energy: 6 (1 + nu)^2/(7 + 14 nu + 8 nu^2); mean displacement: 6 (1 + nu)/(7 + 6 nu) (Cowper 1966)."""
    rows = coefficients(ROD)
    nu = 0.3
    for axis in "xy":
        energy, mean = (rows[f"shear_coefficient_{name}_{axis}"].fe for name in ("energy", "mean"))
        assert_allclose(energy.value, 6 / 7, rtol=1e-5)
        assert_allclose(energy.with_nu, 6 * (1 + nu) ** 2 / (7 + 14 * nu + 8 * nu**2), rtol=1e-5)
        assert_allclose(mean.value, 6 / 7, rtol=1e-5)
        assert_allclose(mean.with_nu, 6 * (1 + nu) / (7 + 6 * nu), rtol=1e-5)


def test_without_nu_both_definitions_are_one() -> None:
    """Of an unsymmetrical section too: both are V^2 over the energy of the shear stress."""
    rows = coefficients(WITHOUT_NU)
    for axis in "xy":
        energy, mean = (rows[f"shear_coefficient_{name}_{axis}"].fe for name in ("energy", "mean"))
        assert_allclose(energy.with_nu, energy.value, rtol=1e-4)
        assert_allclose(mean.with_nu, energy.value, rtol=1e-4)


def test_theory_has_area_ratios_at_every_level() -> None:
    rows = coefficients(ANGLE)
    result = compared(ANGLE)
    row = rows["shear_coefficient_energy_y"]
    ratio = result.quantity("shear_area_y").theory["midline"] / result.quantity("area").theory["midline"]
    assert row.theory["midline"] == pytest.approx(ratio)


def test_different_materials_have_a_reason() -> None:
    result = compared(ANGLE)
    assert result.nu is None
    reason = "not available: walls of different materials have no one Poisson's ratio"
    assert result.nu_reason == reason
    written = document(result)
    by_name = {row["name"]: row["fe"] for row in written["quantities"] if row["load"] is None}
    for name in ("shear_centre_x", "shear_area_y"):
        assert by_name[name]["with_nu"] is None
        assert by_name[name]["with_nu_reason"] == reason
    assert by_name["area"]["with_nu_reason"] is None
    assert written["poisson"]["reason"] == reason
    assert poisson_line(result) is None
    remarks = [row[-1] for row in stiffness_table(result).rows if row[0] == "GA_Vy"]
    assert reason in remarks[0]


def test_one_material_is_told_where_a_reader_looks() -> None:
    result = compared(ROD)
    assert result.nu == 0.3
    line = poisson_line(result)
    assert line is not None
    assert "With nu = 0.3" in line
    assert "0.8864, 0.8864 by mean displacement (Cowper)" in line
    written = document(result)["poisson"]
    assert written["nu"] == 0.3
    assert [row["name"] for row in written["shear_coefficients"]] == [
        "shear_coefficient_energy_x",
        "shear_coefficient_energy_y",
        "shear_coefficient_mean_x",
        "shear_coefficient_mean_y",
    ]
    column = stiffness_table(result).columns.index("FE with nu")
    assert any(row[0] == "shear_centre_x" and row[column] is not None for row in stiffness_table(result).rows)
