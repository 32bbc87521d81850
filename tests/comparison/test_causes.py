"""The breakdown of differences: steps add up, carry the FE error, and say what was merged."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.causes import BENDS, OWN_THICKNESS, ROUNDING, SHARP, SOLID
from crosscheck.comparison.comparing import compare
from crosscheck.section_file.model import CornerSpec
from crosscheck.section_file.reader import read_section

CASES = Path(__file__).resolve().parents[2] / "cases" / "sections"


def compared(name: str):
    return compare(read_section(CASES / f"{name}.toml"))


@pytest.mark.parametrize(
    "name", ["stout_channel_hitch", "bent_zed_seat_rail", "triangle_nose_cell", "cruciform_winch_post"]
)
def test_steps_add_up_to_the_difference(name):
    result = compared(name)
    told = 0
    for row in result.quantities:
        steps = [c for c in result.causes if (c.quantity, c.load) == (row.name, row.load)]
        if row.load is not None or row.difference["midline"] is None:
            assert not steps
        if not steps:
            continue
        told += 1
        total = sum(step.change for step in steps)
        assert_allclose(total, row.difference["midline"], rtol=1e-9, atol=1e-14, err_msg=row.name)
        assert all(step.uncertainty >= 0.0 for step in steps)
    assert told >= 10


def test_bends_of_theory_are_one_step_and_leave_nothing_to_fe():
    steps = [c for c in compared("bent_zed_seat_rail").causes if c.quantity == "second_moment_xx"]
    assert [c.step for c in steps] == [OWN_THICKNESS, BENDS, SOLID]
    by_name = {c.step: c.change for c in steps}
    assert by_name[BENDS] > 0.01
    assert abs(by_name[SOLID]) < 0.05 * by_name[BENDS]


def test_corners_that_theory_cannot_correct_are_a_step_of_fe():
    filleted = replace(
        read_section(CASES / "cruciform_winch_post.toml"), corners=(CornerSpec("centre", 3.0),)
    )
    steps = [c for c in compare(filleted).causes if c.quantity == "torsion_constant"]
    assert [c.step for c in steps] == [SHARP, ROUNDING]
    assert "not available here" in steps[0].note
    # More material at the joint: the hand value is the lower for it.
    assert steps[1].change < -steps[1].uncertainty


def test_missing_step_is_merged_and_says_so():
    steps = [c for c in compared("cruciform_winch_post").causes if c.quantity == "torsion_constant"]
    assert [c.step for c in steps] == [SOLID]
    assert "not available here" in steps[0].note


def test_corrections_explain_the_torsion_constant_of_the_stout_channel():
    """Free ends and sharp corners by published constants leave less than 0.01 % of 1.7 % unexplained."""
    steps = {c.step: c for c in compared("stout_channel_hitch").causes if c.quantity == "torsion_constant"}
    assert steps[OWN_THICKNESS].change > 0.01
    assert abs(steps[SOLID].change) < 1e-4
    assert steps[SOLID].uncertainty <= 1e-5
