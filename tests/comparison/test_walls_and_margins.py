"""Walls by loads with their causes, margins from allowables, named probes with fastener loads."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from crosscheck.comparison.comparing import compare, join
from crosscheck.reports.result_json import document
from crosscheck.reports.screen_blocks import margin_lines, model_lines, probe_lines, wall_line
from crosscheck.section_file.model import AllowableSpec, LoadSpec, ProbeSpec
from crosscheck.section_file.reader import read_section

from .stand_in import both_sides, channel_file

CASES = Path(__file__).parents[2] / "cases" / "sections"
TORQUE = LoadSpec("torque", torque=5000.0)
PULL = LoadSpec("pull", axial=9000.0, moment=(40000.0, 0.0), kind="ultimate")


@pytest.fixture(scope="module")
def box():
    return compare(read_section(CASES / "two_models_floor_box.toml"))


def joined(**changes):
    section = channel_file(**changes)
    return join(section, *both_sides(section))


def test_every_wall_under_every_load_worst_first(box):
    rows = box.walls_by_loads
    assert {row.load for row in rows} == {"freight", "side gust"}
    assert len(rows) == 20
    known = [abs(row.difference) for row in rows if row.difference is not None]
    assert known == sorted(known, reverse=True)
    assert len(known) == 14
    assert {row.reason for row in rows[14:]} == {"only FE sees this wall"}
    flows = {(flow.wall, flow.load): flow.difference for flow in box.flows}
    assert all(row.difference == flows[row.wall, row.load] for row in rows)


def test_steps_add_up_and_booms_are_the_cause_where_only_theory_has_them(box):
    for row in box.walls_by_loads:
        if row.difference is None:
            continue
        assert sum(step.change for step in row.steps) == pytest.approx(row.difference, rel=1e-9)
        assert row.cause.step == "boom idealisation"
    assert "mostly boom idealisation" in wall_line(box)


def test_between_booms_the_hand_flow_is_the_mean_of_fe(box):
    row = next(r for r in box.walls_by_loads if (r.wall, r.load) == ("upper skin 2", "freight"))
    assert abs(row.difference) > 0.5
    assert abs(row.mean_difference) < 1e-3
    assert row.mean_difference == pytest.approx(
        (abs(row.theory_mean) - abs(row.fe_mean)) / row.normaliser, abs=1e-12
    )


def test_unit_loads_stand_in_where_the_file_has_no_load():
    rows = joined(loads=()).walls_by_loads
    assert {row.load for row in rows} == {"unit Vx", "unit Vy", "unit T"}


def test_what_comes_of_the_two_models_is_one_step_of_every_cause(box):
    steps = [cause for cause in box.causes if cause.quantity == "second_moment_yy"]
    row = box.quantity("second_moment_yy")
    assert steps[0].step.startswith("theory's idealised model")
    assert sum(step.change for step in steps) == pytest.approx(row.difference["midline"], rel=1e-6)
    # Nearly all of it: the same walls on both sides differ by little.
    assert steps[0].change == pytest.approx(row.difference["midline"], rel=0.02)
    (line,) = model_lines(box)
    assert "theory sees 7 walls and 7 booms, FE sees 10 walls; 7 walls compared by name" in line
    assert "area 1177.6 and 1453.4 mm^2 (19.0 % low)" in line


def test_margins_are_allowable_over_the_largest_stress_of_either_side():
    allowables = (
        AllowableSpec(None, "shear_flow", 30.0, "list 4"),
        AllowableSpec("web", "shear_flow", 12.5, "test"),
        AllowableSpec(None, "direct_stress", 25.0),
    )
    result = joined(allowables=allowables, loads=(TORQUE, PULL, *channel_file().loads))
    rows = {(row.wall, row.kind): row for row in result.margins}
    assert len(rows) == 6
    flows = [f for f in result.flows if f.wall == "web" and f.load not in ("unit Vx", "unit Vy", "unit T")]
    probes = [p for flow in flows for p in flow.probes if p.fe is not None]
    web = rows["web", "shear_flow"]
    assert (web.allowable, web.source) == (12.5, "test")
    assert web.theory == pytest.approx(12.5 / max(abs(p.theory) for p in probes) - 1.0)
    assert web.fe == pytest.approx(12.5 / max(abs(p.fe) for p in probes) - 1.0)
    assert web.fe_low < web.fe < web.fe_high
    # FE's flow of a vertical shear is larger by 3 %: theory's margin flatters.
    assert web.effect == "unconservative"
    assert web.fe_stress.load == "gust"
    assert rows["top", "direct_stress"].fe_stress.load == "pull"
    smallest = [min(row.theory, row.fe) for row in result.margins]
    assert smallest == sorted(smallest)
    assert result.load_kinds == {"pull": "ultimate"}
    assert document(result)["load_kinds"] == {"pull": "ultimate"}


def test_a_margin_that_changes_its_sign_is_said(result):
    peak = max(
        abs(p.theory) for f in result.flows if (f.wall, f.load) == ("web", "gust") for p in f.probes if p.fe
    )
    found = joined(allowables=(AllowableSpec("web", "shear_flow", 1.01 * peak),))
    lines = list(margin_lines(found))
    assert lines[0].startswith("Smallest margin, allowable / stress - 1: by hand 0.01")
    assert lines[1].startswith("Margin of web, shear flow: 0.01")
    assert found.margins[0].changes_sign


def test_a_wall_without_stress_has_no_margin():
    found = joined(allowables=(AllowableSpec(None, "shear_flow", 5.0),), loads=(TORQUE,))
    assert all(row.theory is None for row in found.margins)
    assert "no load of the file" in (found.margins[-1].reason or "")


def test_shear_only_walls_of_theory_have_no_direct_margin(box):
    row = next(row for row in box.margins if (row.wall, row.kind) == ("right web", "direct_stress"))
    assert row.theory is None
    assert row.fe is not None
    assert "booms" in row.reason


def test_a_fastener_carries_flow_times_pitch():
    probes = (ProbeSpec("rivets", "web", 0.3, pitch=25.0), ProbeSpec("weld", "web", 0.01))
    found = joined(probes=probes)
    rivets, weld = found.named_probes
    assert rivets.theory_fastener == pytest.approx(25.0 * rivets.theory)
    assert rivets.fe_fastener == pytest.approx(25.0 * rivets.fe)
    assert (rivets.fastener_unit, weld.theory_fastener) == ("N", None)
    assert weld.fe is None
    assert "joint" in weld.reason
    first, second = probe_lines(found)
    assert "one fastener, pitch 25:" in first
    assert "in a joint" in second
    unit = joined(probes=probes, loads=()).named_probes
    assert [row.fastener_unit for row in unit if row.label == "rivets"] == ["1", "1", "1/mm"]


def test_a_probe_on_a_wall_of_one_side_says_so(box):
    lines = list(probe_lines(box))
    assert lines[1].startswith("blade weld: largest flow in FE 3.4410 N/mm (freight); only FE sees")


def test_means_and_steps_do_not_depend_on_the_walls_direction():
    section = channel_file()
    turned = tuple(replace(wall, start=wall.end, end=wall.start) for wall in section.walls)
    plain, other = (compare(each) for each in (section, replace(section, walls=turned, probes=())))
    known = {row.wall: row for row in compare(replace(section, probes=())).walls_by_loads}
    assert plain.walls_by_loads
    for row in other.walls_by_loads:
        np.testing.assert_allclose(row.mean_difference, known[row.wall].mean_difference, rtol=0, atol=1e-6)
        np.testing.assert_allclose(row.difference, known[row.wall].difference, rtol=0, atol=1e-6)
