"""What must not change a result: where cells are cut, how materials are named, what all moduli are."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.comparing import compare, join
from crosscheck.comparison.levels import solve_levels
from crosscheck.comparison.result import Result
from crosscheck.section_file.model import CutSpec, Material, SectionFile
from crosscheck.section_file.reader import read_section

from .stand_in import StandInFe

CASES = Path(__file__).parents[2] / "cases" / "sections"


def theory_of(section: SectionFile) -> Result:
    """The comparison with a stand-in for FE: for what theory alone decides."""
    levels = solve_levels(section)
    return join(section, levels, StandInFe(levels.solutions["midline"], section))


def flows(result: Result) -> dict[tuple[str, str], np.ndarray]:
    return {(f.load, f.wall): np.array([probe.theory for probe in f.probes]) for f in result.flows}


@pytest.mark.parametrize(
    ("name", "cuts"),
    [
        ("d_nose_cell_leading_edge", [("nose", 0.2)]),
        ("d_nose_cell_leading_edge", [("web", 0.9)]),
        ("boom_box_wing_root", [("front web", 0.5)]),
        ("boom_box_wing_root", [("upper skin", 0.3)]),
        ("two_cell_tail_boom", [("lower skin 1", 0.0), ("middle web", 1.0)]),
        ("three_cell_wing_box", [("front web", 0.1), ("second web", 0.4), ("upper skin 3", 0.7)]),
        ("oval_cell_towing_strut", [("tube 3.1", 0.5)]),
    ],
)
def test_moving_cuts_changes_no_flow(name, cuts):
    section = read_section(CASES / f"{name}.toml")
    moved = replace(section, cuts=tuple(CutSpec(wall, at) for wall, at in cuts))
    before, after = flows(theory_of(section)), flows(theory_of(moved))
    for load in {load for load, _ in before}:
        peak = max(np.abs(q).max() for (own, _), q in before.items() if own == load)
        for key in before:
            if key[0] == load:
                assert_allclose(after[key], before[key], rtol=0, atol=1e-12 * peak, err_msg=str(key))


def numbers(result: Result) -> dict[tuple[str, str | None, str], float]:
    """Every value of both sides by quantity, load and side, of the rows that are judged."""
    found = {}
    for row in result.quantities:
        if row.verdict is None:
            continue
        for side, value in (*row.theory.items(), ("fe", row.fe.value)):
            if value is not None:
                found[row.name, row.load, side] = value
    return found


def same(first: Result, second: Result, rtol: float, names: set[str] | None = None) -> None:
    """Equal values, round-off apart."""
    one, two = numbers(first), numbers(second)
    assert set(one) == set(two)
    scale = {(row.name, row.load): row.normaliser or 0.0 for row in first.quantities}
    for key, value in one.items():
        if names is None or key[0] in names:
            floor = max(scale[key[0], key[1]], abs(value))
            assert_allclose(two[key], value, rtol=rtol, atol=rtol * floor, err_msg=str(key))


def test_one_material_split_in_two_of_equal_moduli_changes_nothing():
    section = read_section(CASES / "lipped_channel_floor_beam.toml")
    sheet = section.materials["sheet"]
    twin = Material("twin", sheet.E, sheet.G, sheet.nu)
    walls = tuple(
        replace(wall, material="twin") if index % 2 else wall for index, wall in enumerate(section.walls)
    )
    split = replace(section, materials={"sheet": sheet, "twin": twin}, walls=walls)
    same(compare(section), compare(split), 1e-8)


@pytest.mark.parametrize("name", ["two_material_hat_battery_tray", "bent_zed_seat_rail"])
def test_doubling_all_moduli_changes_no_geometry_result(name):
    section = read_section(CASES / f"{name}.toml")
    doubled = {key: Material(key, 2 * m.E, 2 * m.G, m.nu) for key, m in section.materials.items()}
    first, second = compare(section), compare(replace(section, materials=doubled))
    geometry = {row.name for row in first.quantities} - {"rate_of_twist"}
    same(first, second, 1e-12, geometry)
    for load in (load.name for load in section.loads):
        before, after = (r.quantity("rate_of_twist", load).theory["midline"] for r in (first, second))
        assert_allclose(after, 0.5 * before, rtol=1e-12, atol=1e-18)


def test_order_of_walls_changes_nothing_with_two_materials():
    section = read_section(CASES / "two_material_hat_battery_tray.toml")
    turned = replace(section, walls=section.walls[::-1])
    first, second = compare(section), compare(turned)
    same(first, second, 1e-5, {row.name for row in first.quantities} - {"flow_at_probes"})
    theory = {row.name for row in first.quantities if row.load is None}
    for name in theory:
        before, after = first.quantity(name), second.quantity(name)
        size = max(abs(before.normaliser or 0.0), abs(before.judged_theory or 0.0))
        assert_allclose(after.judged_theory, before.judged_theory, rtol=1e-10, atol=1e-10 * size)


def test_shear_only_skins_have_flow_constant_from_boom_to_boom():
    result = compare(read_section(CASES / "boom_box_wing_root.toml"))
    for flow in result.flows:
        q = np.array([probe.theory for probe in flow.probes])
        distinct = np.unique(np.round(q / max(np.abs(q).max(), 1e-300), 9))
        assert len(distinct) <= (3 if flow.wall == "upper skin" else 1), (flow.load, flow.wall)
