"""Levels of theory beside FE: each with its number or its reason, and the judged one with the verdict."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import pytest
from numpy.testing import assert_allclose

import beam_theory
import crosscheck.comparison.levels
from crosscheck.comparison.comparing import compare, join
from crosscheck.comparison.models import theory_section
from crosscheck.reports.result_json import document
from crosscheck.reports.screen_blocks import levels_block
from crosscheck.section_file.model import CornerSpec
from crosscheck.section_file.reader import read_section

from .stand_in import both_sides, channel_file

SHIPPED = sorted((Path(__file__).parents[2] / "cases" / "sections").glob("*.toml"))


def test_every_level_has_its_value_beside_fe(result):
    row = result.quantity("torsion_constant")
    for level in ("midline", "corrected", "lumped"):
        expected = (
            beam_theory.solve(theory_section(channel_file()), level).quantities["torsion_constant"].value
        )
        assert row.theory[level] == expected
        assert_allclose(row.difference[level], (expected - row.fe.value) / row.fe.value, rtol=1e-12, atol=0)
    assert row.theory["corrected"] != row.theory["midline"]


@pytest.mark.parametrize("level", ["midline", "corrected", "lumped"])
def test_the_judged_level_has_the_verdict(level):
    section = channel_file(judged=level, criteria={"torsion_constant": 1e-9})
    row = join(section, *both_sides(section)).quantity("torsion_constant")
    assert row.judged_theory == row.theory[level]
    assert row.verdict == "outside"
    assert_allclose(row.factor, row.fe.value / row.theory[level], rtol=1e-12, atol=0)


def test_a_level_that_ends_here_is_null_with_the_reason():
    # No published joint term for walls of different thickness at a corner: no corrected J.
    walls = channel_file().walls
    section = channel_file(walls=(replace(walls[0], thickness=(3.0, 3.0)), *walls[1:]))
    row = join(section, *both_sides(section)).quantity("torsion_constant")
    assert row.theory["corrected"] is None
    assert row.difference["corrected"] is None
    assert row.theory_reasons["corrected"].startswith("not available here: ")
    assert row.verdict is not None


def test_a_judged_level_that_ends_here_leaves_no_verdict_but_the_other_levels():
    walls = channel_file().walls
    section = channel_file(walls=(replace(walls[0], thickness=(3.0, 3.0)), *walls[1:]), judged="corrected")
    row = join(section, *both_sides(section)).quantity("torsion_constant")
    assert row.verdict is None
    assert row.reason is not None
    assert row.reason.startswith("not available here: ")
    assert row.difference["midline"] is not None


def test_a_level_that_cannot_take_the_section_is_left_out_with_the_reason():
    section = channel_file(corners=(CornerSpec("every_bend", 60.0),))
    levels = crosscheck.comparison.levels.solve_levels(section)
    assert set(levels.solutions) == {"midline", "lumped"}
    row = join(section, *both_sides(section)).quantity("area")
    assert row.theory["corrected"] is None
    assert "bends at the ends of wall" in row.theory_reasons["corrected"]
    with pytest.raises(beam_theory.SectionError):
        crosscheck.comparison.levels.solve_levels(replace(section, judged="corrected"))


def test_flows_at_probes_have_every_level(result):
    web = next(flow for flow in result.flows if flow.load == "unit Vy" and flow.wall == "web")
    middle = next(probe for probe in web.probes if abs(probe.s - 50.0) < 1e-9)
    assert middle.levels["midline"] == middle.theory
    # Booms of the whole web sit at its ends and at the neutral axis: the lumped flow is constant beside it.
    lumped = {probe.levels["lumped"] for probe in web.probes if 5.0 < probe.s < 45.0}
    assert max(lumped) - min(lumped) < 1e-12
    assert abs(middle.levels["lumped"]) < abs(middle.theory)


def test_json_has_values_differences_and_reasons(result):
    rows = document(result)["quantities"]
    json.dumps(rows)
    for row in rows:
        assert set(row["theory"]) == set(row["difference"]) == {"midline", "corrected", "lumped"}
        assert set(row["theory_reasons"]) == {k for k, v in row["theory"].items() if v is None}
        assert all(row["theory_reasons"].values())


def test_screen_shows_where_levels_differ_and_the_torsion_constant(result):
    table = levels_block(result)
    assert table is not None
    assert [str(column.header) for column in table.columns][1:] == ["midline (judged)", "corrected", "lumped"]
    assert "torsion constant" in [str(cell) for cell in table.columns[0].cells]


@pytest.fixture(scope="module")
def torsion_constants():
    """J of midline, corrected and FE of every shipped section, by file."""
    found = {}
    for path in SHIPPED:
        row = compare(read_section(path)).quantity("torsion_constant")
        found[path.stem] = row
    return found


def test_corrected_is_nearer_to_fe_than_midline_in_j(torsion_constants):
    available = {k: r for k, r in torsion_constants.items() if r.theory["corrected"] is not None}
    assert len(available) >= 10
    nearer = {k: abs(r.difference["corrected"]) <= abs(r.difference["midline"]) for k, r in available.items()}
    worse = {k: available[k].difference for k, good in nearer.items() if not good}
    assert sum(nearer.values()) >= 0.9 * len(nearer), worse


def test_where_corrected_j_is_not_available_the_reason_is_given(torsion_constants):
    for name, row in torsion_constants.items():
        if row.theory["midline"] is not None and row.theory["corrected"] is None:
            assert row.theory_reasons["corrected"].startswith("not available here: "), name
