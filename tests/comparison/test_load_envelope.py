"""What governs over many loads, per wall and per probe, on both sides."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.comparing import join
from crosscheck.reports.result_json import document
from crosscheck.reports.screen_blocks import governing_lines, probe_lines
from crosscheck.reports.tables import envelope_table, probes_table
from crosscheck.section_file.model import LoadSpec

from .stand_in import both_sides, channel_file


@pytest.fixture
def result():
    loads = (
        LoadSpec("up", (0.0, 900.0), (0.0, 0.0)),
        LoadSpec("down", (0.0, -1200.0), (0.0, 0.0)),
        LoadSpec("side", (1100.0, 0.0), (0.0, 50.0)),
        LoadSpec("pull", axial=40000.0),
    )
    section = channel_file(loads=loads)
    return join(section, *both_sides(section))


def walls(result, kind):
    return {entry.wall: entry for entry in result.wall_envelopes if entry.kind == kind}


def test_governing_load_of_a_wall_is_the_largest_in_magnitude(result):
    web = walls(result, "flow")["web"]
    assert (web.theory.load, web.fe.load) == ("down", "down")
    # Largest flow of a unit Vy in the middle of the web is 0.01125 (see the comparison's own test).
    assert_allclose(abs(web.theory.value), 1200 * 0.01125, rtol=1e-9, atol=0)
    assert_allclose(web.theory.s, 50.0, rtol=1e-9, atol=0)
    assert_allclose(web.difference, 1 / 1.03 - 1, rtol=1e-9, atol=0)


def test_every_wall_and_kind_is_there(result):
    assert {(e.kind, e.wall) for e in result.wall_envelopes} == {
        (kind, wall) for kind in ("flow", "direct", "von_mises") for wall in ("bottom", "web", "top")
    }
    assert {entry.fe.load for entry in walls(result, "direct").values()} == {"pull"}


def test_envelope_is_what_the_loads_have(result):
    for entry in result.wall_envelopes:
        if entry.kind != "flow":
            continue
        every = [
            (abs(probe.theory), flow.load)
            for flow in result.flows
            if flow.wall == entry.wall and not flow.load.startswith("unit")
            for probe in flow.probes
            if probe.fe is not None
        ]
        assert_allclose(abs(entry.theory.value), max(every)[0], rtol=1e-9, atol=0)


def test_probes_have_lowest_and_highest_with_their_loads(result):
    rivets = next(
        entry for entry in result.probe_envelopes if entry.label == "rivet line" and entry.kind == "flow"
    )
    loads = {rivets.theory_low.load, rivets.theory_high.load}
    assert loads == {"up", "down"}
    assert rivets.theory_low.value < 0 < rivets.theory_high.value
    sizes = {end.load: abs(end.value) for end in (rivets.theory_low, rivets.theory_high)}
    assert_allclose(sizes["down"] / sizes["up"], 1200 / 900, rtol=1e-9, atol=0)


def test_a_probe_in_a_joint_has_theory_only(result):
    weld = next(e for e in result.probe_envelopes if e.label == "corner weld" and e.kind == "flow")
    assert weld.fe_low is None
    assert weld.theory_low is not None


def test_kind_without_values_is_left_out():
    section = channel_file()
    kinds = {entry.kind for entry in join(section, *both_sides(section)).wall_envelopes}
    assert kinds == {"flow", "von_mises"}


def test_screen_names_the_governing_loads(result):
    lines = list(governing_lines(result))
    assert lines[0] == "Governs, flow: side (bottom, top); down (web)"
    assert lines[1] == "Governs, direct stress: pull (all 3 walls)"
    told = list(probe_lines(result))
    assert any(line.startswith("rivet line: largest flow") for line in told)
    assert any(line.startswith("corner weld") and "in a joint" in line for line in told)


def test_one_load_needs_no_envelope_on_screen():
    section = channel_file()
    assert list(governing_lines(join(section, *both_sides(section)))) == []


def test_both_sides_are_named_where_they_disagree(result):
    from dataclasses import replace

    first = result.wall_envelopes[0]
    other = replace(first, fe=replace(first.fe, load="up"))
    changed = replace(result, wall_envelopes=(other, *result.wall_envelopes[1:]))
    assert "hand side, FE up (bottom)" in next(iter(governing_lines(changed)))


def test_tables_and_json_have_the_same_rows(result):
    assert len(envelope_table(result).rows) == len(document(result)["envelope"]["walls"])
    assert len(probes_table(result).rows) == len(document(result)["envelope"]["probes"])
    for table in (envelope_table(result), probes_table(result)):
        assert all(len(row) == len(table.columns) for row in table.rows)


def test_many_loads_do_not_multiply_the_probes():
    loads = tuple(
        LoadSpec(f"case {i}", (900.0 * np.cos(i / 30), 900.0 * np.sin(i / 30)), (0.0, 0.0)) for i in range(90)
    )
    section = channel_file(loads=loads)
    found = join(section, *both_sides(section))
    counts = {flow.wall: len(flow.probes) for flow in found.flows}
    assert max(counts.values()) <= 7 + 2 + 12 + 50
    # Each load's largest flow is still met to what a parabola loses beside its top.
    for peak in found.theory_peaks:
        if peak.kind == "flow" and peak.has_fe:
            row = found.quantity("peak_flow", peak.load)
            assert_allclose(row.theory["midline"], abs(peak.value), rtol=2e-3, atol=1e-12)
