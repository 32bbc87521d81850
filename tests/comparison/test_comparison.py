"""Both sides joined: values, differences, probes, loads and their torque about each shear centre."""

from __future__ import annotations

import json
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.comparing import join
from crosscheck.comparison.load_case import LoadCase, fe_rate_of_twist, fe_torque
from crosscheck.comparison.midline import Midline
from crosscheck.comparison.models import fe_section, theory_section
from crosscheck.comparison.result import FeValue
from crosscheck.reports.result_json import document, json_text
from crosscheck.section_file.model import CornerSpec, LoadSpec, Material

from .stand_in import FE_OVER_THEORY, both_sides, channel_file, channel_of_steel


def test_difference_is_theory_minus_fe_over_fe(result):
    row = result.quantity("torsion_constant")
    # Stand-in FE is 2 % above theory: theory/FE - 1 = 1/1.02 - 1.
    assert_allclose(row.difference["midline"], 1 / 1.02 - 1, rtol=1e-12, atol=0)
    assert_allclose(row.uncertainty, 1e-4, rtol=1e-9, atol=0)
    assert_allclose(row.factor, FE_OVER_THEORY["torsion_constant"], rtol=1e-12, atol=0)
    assert row.verdict == "within"
    assert row.effect == {"twist": "conservative"}


def test_shear_centre_is_measured_on_the_larger_overall_dimension(result):
    row = result.quantity("shear_centre_x")
    assert_allclose(row.difference["midline"], -0.2 / 100.0, rtol=1e-9, atol=0)
    assert row.effect is None
    assert row.factor is None
    assert row.criterion == 0.01


def test_shear_centre_note_gives_the_torque_of_each_load(result):
    note = result.quantity("shear_centre_x").note
    assert note is not None
    assert "gust 240 N mm" in note


def test_plain_channel_theory_values_are_the_textbook_ones(result):
    # e = 3 b^2 t / (6 b t + h t) = 18.75 from the web midline for h = 100, b = 50 (thin-walled channel).
    assert_allclose(result.quantity("shear_centre_x").theory["midline"], -18.75, rtol=1e-12, atol=0)
    assert_allclose(result.quantity("torsion_constant").theory["midline"], 200 * 125 / 3, rtol=1e-12, atol=0)


def test_flow_of_a_load_takes_its_torque_about_each_sides_own_shear_centre(result):
    # An open section: torque makes no flow, so only the factor on unit Vy shows.
    row = result.quantity("peak_flow", "gust")
    assert_allclose(row.theory["midline"], 1200 * 0.01125, rtol=1e-9, atol=0)
    assert_allclose(row.fe.value, 1200 * 0.01125 * 1.03, rtol=1e-9, atol=0)
    assert row.effect == {"stress": "unconservative"}


def test_error_of_a_loads_flow_adds_up_from_its_unit_flows(result):
    wall = next(flow for flow in result.flows if flow.load == "gust" and flow.wall == "web")
    errors = [probe.fe_error for probe in wall.probes if probe.fe is not None]
    # 1200 N times 1e-6, plus the torque 1200 x 18.55 N mm times 1e-6.
    assert_allclose(errors, 1200e-6 + 1200 * 18.55e-6, rtol=1e-9, atol=0)


def test_probes_are_strip_ends_quarters_stationary_places_and_the_users(result):
    wall = next(flow for flow in result.flows if flow.load == "unit Vy" and flow.wall == "web")
    places = [probe.s for probe in wall.probes]
    # The strip runs from 10 to 90; a thickness inside its ends are 15 and 85.
    assert_allclose(places, [1.0, 10.0, 15.0, 30.0, 50.0, 70.0, 85.0, 90.0], rtol=0, atol=1e-9)
    assert [probe.label for probe in wall.probes if probe.label] == ["corner weld", "rivet line"]


def test_stationary_place_of_theory_is_a_probe():
    # The web's quarter points are at 27.5, 50, 72.5; a load along x is largest elsewhere in the flanges.
    section = channel_file(probes=())
    result = join(section, *both_sides(section))
    top = next(flow for flow in result.flows if flow.load == "unit Vx" and flow.wall == "top")
    places = [probe.s for probe in top.probes]
    # f changes sign at the centroid, 12.5 from the web.
    assert min(abs(s - 12.5) for s in places) < 1e-9


def test_a_probe_in_a_joint_has_no_fe_flow_and_does_not_count(result):
    wall = next(flow for flow in result.flows if flow.load == "unit Vy" and flow.wall == "web")
    weld = next(probe for probe in wall.probes if probe.label == "corner weld")
    assert weld.fe is None
    assert weld.fe_error is None
    assert weld.theory is not None


def test_difference_of_a_wall_is_over_its_own_peak(result):
    top = next(flow for flow in result.flows if flow.load == "unit Vy" and flow.wall == "top")
    assert_allclose(top.difference, 1 / 1.03 - 1, rtol=1e-9, atol=0)


def test_wall_peak_is_floored_at_five_per_cent_of_the_sections(result):
    # Unit Vx leaves the web nearly without flow: its own peak is far below the flanges'.
    web = next(flow for flow in result.flows if flow.load == "unit Vx" and flow.wall == "web")
    section_peak = result.quantity("peak_flow", "unit Vx").fe.value
    own = max(abs(probe.fe) for probe in web.probes if probe.fe is not None)
    assert_allclose(web.normaliser, max(own, 0.05 * section_peak), rtol=1e-12, atol=0)


def test_theorys_own_peak_in_a_joint_is_listed_without_counterpart(result):
    # Unit Vx: the flow of each flange is largest at f = 0, inside; unit Vy: in the middle of the web.
    peaks = {peak.load: peak for peak in result.theory_peaks}
    assert peaks["unit Vy"].has_fe
    assert peaks["unit Vy"].wall == "web"
    assert_allclose(peaks["unit Vy"].s, 50.0, rtol=1e-9, atol=0)


def test_torque_makes_no_flow_in_an_open_section_and_that_is_null_with_a_reason(result):
    row = result.quantity("peak_flow", "unit T")
    assert row.verdict is None
    assert row.reason == "no net flow on either side"
    assert row.difference["midline"] is None


def test_rate_of_twist_per_unit_modulus_and_with_a_material(result):
    theory = result.quantity("rate_of_twist", "gust").theory["midline"]
    # T about the shear centre: (0 + 18.75) x (-1200).
    assert_allclose(theory, -1200 * 18.75 / (200 * 125 / 3), rtol=1e-12, atol=0)
    assert result.quantity("rate_of_twist", "gust").unit == "N/mm^3"
    steel = channel_of_steel()
    row = join(steel, *both_sides(steel)).quantity("rate_of_twist", "gust")
    assert_allclose(row.theory["midline"], theory / 80000.0, rtol=1e-12, atol=0)
    assert row.unit == "rad/mm"


def test_fe_twist_takes_the_torque_about_fes_own_shear_centre(result):
    row = result.quantity("rate_of_twist", "gust")
    assert_allclose(row.fe.value, -1200 * 18.55 / (1.02 * 200 * 125 / 3), rtol=1e-12, atol=0)


def test_load_through_the_midline_shear_centre_twists_fe_only():
    section = channel_file(loads=(LoadSpec("lift", (0.0, 1000.0), "midline shear centre"),))
    row = join(section, *both_sides(section)).quantity("rate_of_twist", "lift")
    assert_allclose(row.theory["midline"], 0.0, rtol=0, atol=1e-12)
    # FE's arm is -18.75 + 18.55 = -0.2; the yardstick is 5 % of V D = 5, so 0.2/5 = 4 %.
    assert_allclose(row.difference["midline"], 0.04, rtol=1e-9, atol=0)
    assert row.factor is None


def test_criteria_of_the_file_replace_the_defaults_and_say_so():
    section = channel_file(criteria={"torsion_constant": 0.005})
    row = join(section, *both_sides(section)).quantity("torsion_constant")
    assert (row.criterion, row.criterion_source, row.verdict) == (0.005, "file", "outside")


def test_undefined_theory_is_null_with_the_reason():
    section = channel_file(walls=channel_file().walls[1:2], loads=(), probes=())
    result = join(section, *both_sides(section, strip=None))
    row = result.quantity("shear_centre_x")
    assert row.theory["midline"] is None
    assert row.verdict is None
    assert row.reason
    assert result.quantity("torsion_constant").verdict == "within"


def test_fe_torque_carries_the_interval_of_the_shear_centre():
    fe = {
        "shear_centre_x": FeValue(-18.5, -18.6, -18.4, "bound"),
        "shear_centre_y": FeValue(50.0, 49.9, 50.2, "bound"),
    }
    torque = fe_torque(LoadCase("gust", (2.0, -3.0), (1.0, 4.0), 7.0), fe)
    # T + (x_p - x_s) Vy - (y_p - y_s) Vx = 7 + 19.5 (-3) - (-46) 2
    assert_allclose(torque.value, 7 - 58.5 + 92, rtol=1e-15, atol=0)
    assert_allclose((torque.low, torque.high), (40.5 - 0.3 - 0.2, 40.5 + 0.3 + 0.4), rtol=1e-12, atol=0)


def test_rate_of_twist_interval_holds_every_corner():
    rate = fe_rate_of_twist(FeValue(-1.0, -2.0, 1.0, "bound"), FeValue(4.0, 2.0, 5.0, "bound"), 10.0)
    assert_allclose((rate.value, rate.low, rate.high), (-0.025, -0.1, 0.05), rtol=1e-15, atol=0)


def test_arc_of_a_quarter_circle():
    line = Midline((1.0, 0.0), (0.0, 1.0), (np.sqrt(0.5), np.sqrt(0.5)))
    assert_allclose(line.length, np.pi / 2, rtol=1e-14, atol=0)
    assert_allclose(line.places(np.array([1 / 3])), [[np.sqrt(0.75), 0.5]], rtol=1e-14, atol=1e-15)
    assert_allclose(line.left_normals(np.array([0.0])), [[-1.0, 0.0]], rtol=0, atol=1e-15)


def test_left_normal_of_a_straight_wall():
    assert_allclose(Midline((0, 0), (0, 2)).left_normals(np.array([0.5])), [[-1.0, 0.0]], rtol=0, atol=0)


def test_json_has_the_schemas_keys_in_order_and_reads_back(result):
    text = json_text([result])
    read = json.loads(text)
    assert list(read)[:5] == ["schema", "title", "units", "per_modulus", "judged"]
    assert read["schema"] == "crosscheck.result/1"
    row = next(entry for entry in read["quantities"] if entry["name"] == "torsion_constant")
    sides = {"theory", "fe", "difference", "normaliser"}
    judgement = {"criterion", "criterion_source", "verdict", "effect", "factor", "reason"}
    assert {"symbol", "unit", "load"} | sides | judgement <= set(row)
    assert set(row["theory"]) == {"midline", "corrected", "lumped"}
    assert set(row["fe"]) == {"value", "low", "high", "basis", "with_nu", "with_nu_reason"}
    # Full precision: the number survives the text exactly.
    assert row["theory"]["midline"] == result.quantity("torsion_constant").theory["midline"]


def test_two_runs_differ_in_provenance_only(channel):
    first, second = (document(join(channel, *both_sides(channel))) for _ in range(2))
    first.pop("provenance")
    second.pop("provenance")
    assert json.dumps(first) == json.dumps(second)


def test_not_a_number_never_reaches_the_json(result):
    broken = replace(result, quantities=(replace(result.quantities[0], normaliser=float("nan")),))
    with pytest.raises(ValueError, match=r"quantities\[0\]\.normaliser is nan"):
        json_text([broken])


def test_every_bend_rounds_points_of_two_walls_and_a_points_own_radius_wins():
    corners = (CornerSpec("every_bend", 3.0), CornerSpec("c", 8.0, 10.0))
    section = channel_file(corners=corners)
    theory = {corner.point: corner.inner_radius for corner in theory_section(section).corners}
    assert theory == {"b": 3.0, "c": 8.0}
    fe = {point: (rounding.inner, rounding.outer) for point, rounding in fe_section(section).corners.items()}
    assert fe == {"b": (3.0, None), "c": (8.0, 10.0)}


def test_moduli_of_both_models_are_over_the_base_material():
    steel = Material("steel", 210000.0, 80000.0, 0.3125)
    brass = Material("brass", 105000.0, 39000.0, 0.346)
    walls = (replace(channel_of_steel().walls[0], material="brass"), *channel_of_steel().walls[1:])
    section = replace(channel_of_steel(), materials={"steel": steel, "brass": brass}, walls=walls)
    for model in (theory_section(section), fe_section(section)):
        assert [(wall.e, wall.g) for wall in model.walls] == [(0.5, 39 / 80), (1.0, 1.0), (1.0, 1.0)]
