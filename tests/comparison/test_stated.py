"""Stated values: whether a number stands, in its own terms, and which hand method it comes from."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from crosscheck.commands.compare import result_status
from crosscheck.comparison.comparing import compare, join
from crosscheck.comparison.stated_values import judge_stated
from crosscheck.exit_status import ExitStatus
from crosscheck.reports.stated import stated_heading, stated_lines
from crosscheck.section_file.model import StatedSpec

from .solved import section_of
from .stand_in import both_sides, channel_file


def judged(*stated: StatedSpec, fe=None, **changes):
    section = channel_file(stated=stated, **changes)
    return join(section, *both_sides(section, **(fe or {})))


def test_a_value_is_judged_against_fe_with_its_own_tolerance(result):
    fe = result.quantity("torsion_constant").fe.value
    for off, tolerance, verdict in ((0.03, 0.05, "within"), (0.03, 0.02, "outside"), (0.06, None, "outside")):
        (found,) = judged(StatedSpec("torsion_constant", fe * (1 + off), tolerance=tolerance)).stated
        assert found.verdict == verdict
        assert found.difference_fe == pytest.approx(off)
        assert found.effect == {"twist": "unconservative"}
    assert found.tolerance == 0.05
    assert found.tolerance_source == "default"


def test_the_fe_error_is_carried(result):
    fe = result.quantity("torsion_constant").fe.value
    stated = StatedSpec("torsion_constant", 1.02 * fe, tolerance=0.02)
    undecided = judged(stated, fe={"half_width": 1e-3})
    (found,) = undecided.stated
    assert found.verdict == "inconclusive"
    assert "cannot be decided" in next(stated_lines(undecided))[0]
    assert result_status(undecided) == ExitStatus.NOT_WITHIN


STRIP = """
    units = "mm N"
    [points]
    a = [0, 0]
    b = [60, 0]
    [[walls]]
    path = ["a", "b"]
    thickness = 3
"""


@pytest.mark.parametrize(
    ("value", "near"), [(540.0, ("midline", "lumped")), (523.0, ("corrected",)), (600.0, ())]
)
def test_the_method_is_named_only_where_it_is_near(value, near):
    # A flat strip's J: b t^3/3 = 540, with its ends (1 - 0.63 t/b) 523.
    result = compare(replace(section_of(STRIP), stated=(StatedSpec("torsion_constant", value),)))
    (found,) = result.stated
    assert found.near == near
    assert ("no level of theory has it (nearest midline" in next(stated_lines(result))[0]) == (not near)


def test_a_value_may_be_held_to_a_level_that_is_not_the_nearest():
    stated = (StatedSpec("torsion_constant", 523.0, level="midline"),)
    (found,) = compare(replace(section_of(STRIP), stated=stated)).stated
    assert found.level == "midline"
    assert found.difference_theory == pytest.approx((523.0 - 540.0) / found.fe.value)


@pytest.mark.parametrize(
    ("datum", "offset"), [(None, 0.0), ((10.0, 3.0), 10.0), ("a", 50.0)], ids=["axes", "place", "point"]
)
def test_positions_are_turned_into_the_terms_of_their_datum(result, datum, offset):
    row = result.quantity("shear_centre_x")
    (found,) = judged(StatedSpec("shear_centre_x", row.fe.value - offset, measured_from=datum)).stated
    assert found.fe.value == pytest.approx(row.fe.value - offset)
    assert found.theory["midline"] == pytest.approx(row.theory["midline"] - offset)
    assert found.difference_fe == pytest.approx(0.0, abs=1e-12)
    assert found.place[0] == pytest.approx(row.fe.value)


def test_a_wall_as_datum_means_the_distance_from_its_line(result):
    row = result.quantity("shear_centre_x")
    # The web lies on x = 0; the shear centre is on its left.
    for value in (-row.fe.value, row.fe.value):
        (found,) = judged(StatedSpec("shear_centre_x", value, measured_from="web")).stated
        assert found.verdict == "within"
        assert found.difference_fe == pytest.approx(0.0, abs=1e-12)
        assert found.place == pytest.approx((row.fe.value, result.quantity("shear_centre_y").fe.value))
    (along,) = judged(StatedSpec("shear_centre_y", 4.0, measured_from="web")).stated
    assert along.verdict is None
    assert "runs along y" in along.reason


def test_a_sloping_wall_is_measured_from_square_to_its_line():
    section = channel_file()
    points = {name: (x + 0.5 * y, y) for name, (x, y) in section.points.items()}
    stated = (StatedSpec("centroid_x", 1.0, measured_from="web"),)
    section = replace(section, points=points, stated=stated)
    found = join(section, *both_sides(section))
    x, y = (found.quantity(f"centroid_{axis}").fe.value for axis in "xy")
    assert found.stated[0].fe.value == pytest.approx((x - 0.5 * y) / math.hypot(1.0, 0.5))


def test_an_angle_is_stated_in_degrees(result):
    row = result.quantity("principal_angle")
    (found,) = judged(StatedSpec("principal_angle", math.degrees(row.fe.value) + 180.0)).stated
    assert found.unit == "deg"
    assert found.difference_fe == pytest.approx(0.0, abs=1e-9)


def test_a_quantity_of_a_load_is_that_of_its_load(result):
    fe = result.quantity("peak_flow", "unit Vy").fe.value
    (found,) = judged(StatedSpec("peak_flow", fe, load="unit Vy")).stated
    assert found.load == "unit Vy"
    assert found.verdict == "within"
    # Without a load it is that of the file's only one.
    (found,) = judged(StatedSpec("peak_flow", fe)).stated
    assert found.load == "gust"


def test_nothing_is_said_where_fe_has_nothing(result):
    broken = replace(result.quantity("torsion_constant"), normaliser=None, reason="not defined")
    section = channel_file(stated=(StatedSpec("torsion_constant", 1.0),))
    (found,) = judge_stated(section, [broken])
    assert found.verdict is None
    assert found.reason == "not defined"


def test_the_screen_says_it_in_order():
    text = f"""
        {STRIP}
        [[stated]]
        quantity = "torsion_constant"
        value = 540
        source = "sheet [bold]x[/bold]"
        tolerance = 0.01
        [[stated]]
        quantity = "area"
        value = 180
    """
    result = compare(section_of(text))
    lines = [line for line, _ in stated_lines(result)]
    assert stated_heading(result) == "Stated values: 1 of 2 stand:"
    assert lines[0].startswith(
        "torsion constant 540.00 mm^4 (sheet [bold]x[/bold]) does not stand: FE 522.98 "
    )
    assert "3.3 % high; unconservative for twist; 1 % allowed; levels midline and lumped have it" in lines[0]
    assert lines[1].startswith("area 180.00 mm^2 stands: FE 180.00; equal; 5 % allowed")
    assert result_status(result) == ExitStatus.NOT_WITHIN
