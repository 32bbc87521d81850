"""Sections given by an outline: FE alone without walls, a whole comparison with them."""

from __future__ import annotations

import math
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose

import fe_models
from crosscheck.comparison.causes import OWN_THICKNESS, SOLID, TRACED
from crosscheck.comparison.comparing import compare
from crosscheck.comparison.result import LEVELS, Result
from crosscheck.pictures import figures
from crosscheck.section_file.reader import read_section

from .solved import compared, section_of

CASES = Path(__file__).parents[2] / "cases" / "sections"
ALONE = "no hand method: the section is given by its outline alone"
ELLIPSE_FREE = """\
units = "mm N"
[outline]
boundary = { centre = [3, -2], radius = 6 }
[[loads]]
name = "push"
shear = [0, -50]
through = [5, 0]
"""
BOX = """\
units = "mm N"
[points]
a = [0, 0]
b = [60, 0]
c = [60, 40]
d = [0, 40]
e = [90, 40]
[[walls]]
name = "foot"
path = ["a", "b"]
thickness = 3
[[walls]]
name = "sides"
path = ["b", "c", "d", "a"]
thickness = [2, 3, 2]
[[walls]]
name = "fin"
path = ["c", "e"]
thickness = 3
[[loads]]
name = "gust"
shear = [100, -900]
through = [0, 0]
axial = 40
moment = [8000, 500]
"""
# The solid that those walls make, its corners written out.
BOX_OUTLINE = """\
[outline]
boundary = [[-1, -1.5], [61, -1.5], [61, 38.5], [90, 38.5], [90, 41.5], [-1, 41.5]]
openings = [[[1, 1.5], [59, 1.5], [59, 38.5], [1, 38.5]]]
"""


@cache
def drawn(name: str) -> Result:
    return compare(read_section(CASES / f"{name}.toml"), pictures=True)


def test_outline_alone_judges_nothing_and_has_exact_values() -> None:
    result = compared(ELLIPSE_FREE)
    assert result.outline_alone
    for row in result.quantities:
        assert row.verdict is None
        assert dict(row.theory) == dict.fromkeys(LEVELS)
        assert dict(row.theory_reasons) == dict.fromkeys(LEVELS, ALONE)
    torsion = result.quantity("torsion_constant").fe
    assert torsion.low <= math.pi * 6**4 / 2 <= torsion.high
    assert_allclose(result.quantity("section_modulus_x_top").fe.value, math.pi * 6**3 / 4, rtol=1e-3)
    assert_allclose(result.quantity("shear_centre_x").fe.value, 3.0, rtol=0, atol=1e-4)
    twist = result.quantity("rate_of_twist", "push").fe.value
    assert_allclose(twist, -50 * 2 / torsion.value, rtol=1e-4)


def test_outline_alone_peak_is_the_round_bar_s() -> None:
    """T r / J on the rim of a round bar under a unit torque."""
    peak = next(p for p in compared(ELLIPSE_FREE).fillet_peaks if p.load == "unit T")
    assert_allclose(peak.value, 2 / (math.pi * 6**3), rtol=1e-4)


@pytest.mark.parametrize("name", ["solid_ramp_hinge_knuckle", "extruded_door_sill"])
def test_shipped_outlines_have_pictures_of_what_there_is(name: str) -> None:
    for width in (160, 80):
        assert set(figures(drawn(name), width)) == {"section", "joints"}
    assert all(check.passed for check in drawn(name).checks)


def test_walls_over_their_own_outline_change_nothing() -> None:
    """FE on the outline of the walls' own solid gives what FE on the walls gives, at every probe."""
    walls, outline = compared(BOX), compared(BOX + BOX_OUTLINE)
    for row in outline.quantities:
        other = walls.quantity(row.name, row.load)
        if other.fe.value is None or row.name == "principal_angle":
            continue
        # the largest stress near a joint is an estimate, and the strips end a little differently
        near = 2e-2 if row.name in ("von_mises_stress", "surface_shear", "torsion_modulus") else 1e-3
        scale = max(abs(other.normaliser or 0.0), abs(other.fe.value))
        assert abs(row.fe.value - other.fe.value) <= near * scale, row.name
        assert row.verdict == other.verdict, row.name
    assert outline.outline_notes[0].startswith("FE takes the outline, theory the walls: ")


def test_flows_on_a_solid_are_those_of_the_strips() -> None:
    section = section_of(BOX + BOX_OUTLINE)
    assert section.outline is not None
    from crosscheck.comparison import models

    on_walls = fe_models.solve(models.fe_section(section))
    on_solid = models.fe_solution(section, 1e-5)
    assert on_solid.open_walls == on_walls.open_walls == {"fin"}
    for wall, strip in on_solid.strips.items():
        assert strip is not None
        assert_allclose(strip, on_walls.strips[wall], atol=0.02)
        at = np.linspace(*strip, 5)
        mine, other = on_solid.flow_at(wall, at), on_walls.flow_at(wall, at)
        off = np.abs(mine.values - other.values).max(axis=1) / np.abs(other.values).max(axis=1).clip(1e-12)
        assert (off[:2] < 1e-4).all(), wall
        inner = at[1:-1]
        actions = fe_models.Actions(shear=(3.0, 5.0), torque=70.0, axial=2.0, moment=(9.0, 4.0))
        faces, strips = (side.face_stress(wall, inner, actions) for side in (on_solid, on_walls))
        assert_allclose(faces.places, strips.places, atol=1e-9)
        assert_allclose(faces.direct, strips.direct, rtol=1e-3)
        assert_allclose(faces.shear, strips.shear, rtol=0, atol=5e-3 * np.abs(strips.shear).max())


def test_flow_in_a_round_tube_given_by_two_circles() -> None:
    """T/(2 A_m) round the tube, and the wall of it is in a cell."""
    tube = (
        'units = "mm N"\n[points]\na = [20, 0]\nb = [-20, 0]\n'
        '[[walls]]\nname = "upper"\npath = ["a", "b"]\narc = { through = [0, 20] }\nthickness = 1\n'
        '[[walls]]\nname = "lower"\npath = ["b", "a"]\narc = { through = [0, -20] }\nthickness = 1\n'
        "[outline]\nboundary = { centre = [0, 0], radius = 20.5 }\n"
        "openings = [{ centre = [0, 0], radius = 19.5 }]\n"
    )
    result = compared(tube)
    exact = 0.5 * (20.5**2 - 19.5**2) / (math.pi / 2 * (20.5**4 - 19.5**4))
    rows = [probe for flow in result.flows if flow.load == "unit T" for probe in flow.probes]
    seen = [probe.fe for probe in rows if probe.fe is not None]
    assert len(seen) >= 8
    # unit T makes tau = r/Ip, whose integral over the wall is (R^2 - r^2) / (2 Ip)
    assert_allclose(seen, exact, rtol=2e-6)


def test_causes_end_with_the_step_to_the_given_outline() -> None:
    causes = [c for c in compared(BOX + BOX_OUTLINE).causes if c.quantity == "torsion_constant"]
    assert [c.step for c in causes if c.step != OWN_THICKNESS] == [SOLID, TRACED]
    # the outline is that of the walls
    assert abs(causes[-1].change) <= causes[-1].uncertainty
    total = compared(BOX + BOX_OUTLINE).quantity("torsion_constant").difference["midline"]
    assert_allclose(sum(c.change for c in causes), total, rtol=0, atol=1e-9)


def test_walls_that_are_another_section_are_refused() -> None:
    other = BOX_OUTLINE.replace("90", "95")
    with pytest.raises(fe_models.OutlineError) as caught:
        compare(section_of(BOX + other))
    assert caught.value.kind == "agreement"
    assert "% of area" in caught.value.found


def test_seen_by_says_that_walls_idealise() -> None:
    only_fe = '[[walls]]\nname = "lip"\npath = ["e", "f"]\nthickness = 3\nseen_by = "fe"\n'
    text = BOX.replace("e = [90, 40]\n", "e = [90, 40]\nf = [90, 52]\n").replace(
        "[[loads]]", only_fe + "[[loads]]"
    )
    result = compared(text + BOX_OUTLINE)
    assert "which idealise (seen_by)" in result.outline_notes[0]
    assert result.quantity("torsion_constant").verdict is not None


def test_shipped_angle_with_its_outline_is_compared_in_full() -> None:
    result = drawn("filleted_angle_longeron")
    assert all(check.passed for check in result.checks)
    assert {"section", "both_sides", "criteria", "joints", "warping"} <= set(figures(result, 160))
    row = result.quantity("flow_at_probes", "floor load")
    assert row.fe.value is not None
    assert row.verdict == "within"
