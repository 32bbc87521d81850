"""The public face of beam_theory: names, independence, units by scaling, speed."""

from __future__ import annotations

import ast
import time
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import channel, moved, polyline

import beam_theory
from beam_theory import LEVELS, Load, LoadError, Section, Wall, envelope, solve, stress

PACKAGE = Path(beam_theory.__file__).parent

# Power of length that each quantity scales with, at every level.
UNITS = {
    "area": 2, "plain_area": 2, "centroid_x": 1, "centroid_y": 1, "second_moment_xx": 4,
    "second_moment_yy": 4,
    "product_moment_xy": 4, "principal_angle": 0, "principal_moment_u": 4, "principal_moment_v": 4,
    "shear_centre_x": 1, "shear_centre_y": 1, "torsion_constant": 4, "torsion_constant_cells": 4,
    "torsion_constant_open": 4, "warping_constant": 6, "shear_area_x": 2, "shear_area_y": 2,
    "shear_coupling": -2,
    "section_modulus_x_top": 3, "section_modulus_x_bottom": 3, "section_modulus_y_right": 3,
    "section_modulus_y_left": 3, "section_modulus_u_plus": 3, "section_modulus_u_minus": 3,
    "section_modulus_v_plus": 3, "section_modulus_v_minus": 3, "torsion_modulus": 3, "wagner_x": 1,
    "wagner_y": 1,
    "wagner_u": 1, "wagner_v": 1, "wagner_omega": 0, "polar_radius_squared": 2,
}  # fmt: skip


def test_all_is_what_is_there() -> None:
    for name in beam_theory.__all__:
        assert hasattr(beam_theory, name), name
    assert len(set(beam_theory.__all__)) == len(beam_theory.__all__)


@pytest.mark.parametrize("path", sorted(PACKAGE.glob("*.py")), ids=lambda path: path.name)
def test_files_stand_alone(path: Path) -> None:
    """Imports only numpy, scipy, itself and the standard library; at most 400 lines; its __all__ is true."""
    text = path.read_text(encoding="utf-8")
    assert len(text.splitlines()) <= 400
    tree = ast.parse(text)
    names: set[str] = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            names |= {alias.name.split(".")[0] for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0
            names.add((node.module or "").split(".")[0])
    allowed = {"numpy", "scipy", "beam_theory"}
    assert not names & {"fe_models", "crosscheck"}
    standard = {
        "__future__",
        "ast",
        "cmath",
        "collections",
        "dataclasses",
        "functools",
        "itertools",
        "math",
        "types",
        "typing",
    }
    assert names <= allowed | standard, names
    assert ast.get_docstring(tree)


@pytest.mark.parametrize("level", LEVELS)
def test_units_by_scaling(level: str) -> None:
    """Every quantity scales with its power of length; the same names at every level."""
    section = polyline([(48, 82), (60, 100), (0, 100), (0, 0), (55, 0), (55, 18)], 2.0)
    one, two = solve(section, level), solve(moved(section, 25.4), level)
    assert set(one.quantities) == set(UNITS)
    for name, power in UNITS.items():
        if one.quantities[name].value is None:
            assert two.quantities[name].value is None
            assert one.quantities[name].reason
            continue
        want = one.require(name) * 25.4**power
        assert_allclose(two.require(name), want, rtol=1e-9, atol=1e-9 * 25.4**power, err_msg=name)


def test_flow_units_by_scaling() -> None:
    """Unit V: flow [1/L]; unit T: [1/L^2]; warping [L^2]; surface shear of a torque [F/L^2]."""
    section = channel(50, 100, 2)
    one, two = solve(section), solve(moved(section, 1e3))
    u = np.array([0.1, 0.6])
    assert_allclose(two.unit_flow("Vy").at("w1", u), one.unit_flow("Vy").at("w1", u) / 1e3, rtol=1e-10)
    assert_allclose(two.warping_at("w0", u), one.warping_at("w0", u) * 1e6, rtol=1e-10)
    assert_allclose(two.surface_shear(1.0, "w0", u), one.surface_shear(1.0, "w0", u) / 1e9, rtol=1e-10)


def test_results_cannot_be_changed() -> None:
    solution = solve(channel(50, 100, 2))
    with pytest.raises(TypeError):
        solution.quantities["area"] = solution.quantities["plain_area"]  # type: ignore[index]
    with pytest.raises(AttributeError):
        solution.level = "other"  # type: ignore[misc]


def ladder(cells: int, per_cell: int) -> Section:
    """A row of cells with several walls along the top and the bottom of each."""
    points: dict[str, tuple[float, float]] = {}
    count = cells * per_cell
    for i in range(count + 1):
        x = i / per_cell
        points[f"t{i}"], points[f"b{i}"] = (x, 1 + 0.1 * np.sin(x)), (x, -0.1 * np.cos(x))
    walls = [Wall(f"t{i}", f"t{i}", f"t{i + 1}", (0.01, 0.012)) for i in range(count)]
    walls += [Wall(f"b{i}", f"b{i}", f"b{i + 1}", (0.01, 0.01)) for i in range(count)]
    ribs = range(0, count + 1, per_cell)
    walls += [Wall(f"web{i}", f"t{i}", f"b{i}", (0.02, 0.01)) for i in ribs]
    return Section(points, tuple(walls))


def test_speed_and_accuracy_of_a_large_section() -> None:
    """About 1000 walls and 100 cells, all unit loads and warping: 0.1 s of processor time."""
    section = ladder(100, 5)
    solve(section)
    best = np.inf
    for _ in range(5):
        begin = time.process_time()
        solution = solve(section)
        for name in ("Vx", "Vy", "T"):
            solution.unit_flow(name)
        best = min(best, time.process_time() - begin)
    assert len(solution.cells) == 100
    assert all(check.passed for check in solution.checks)
    assert best < 0.1, best


def test_ten_thousand_walls() -> None:
    solution = solve(ladder(2000, 2))
    assert len(solution.graph.walls) == 10001
    assert all(check.passed for check in solution.checks)


def test_envelope() -> None:
    """The governing load of every wall and place is the one found by looking at each load in turn."""
    solution = solve(channel(50, 100, 2))
    loads = [
        Load("up", (0.0, 100.0), (0.0, 0.0)),
        Load("down", (0.0, -170.0), (3.0, 0.0), moment=(-9000.0, 0.0)),
        Load("side", (60.0, 0.0), (0.0, 0.0), moment=(4000.0, 0.0)),
        Load("pull", axial=500.0, moment=(0.0, -3000.0)),
    ]
    at = np.array([0.0, 0.4, 1.0])
    found = envelope(solution, loads, {"w1": at})
    assert len(found.walls) == 3 * 4
    assert len(found.places) == 3 * 4
    for row in found.walls:
        if row.kind == "flow":
            flows = {load.name: stress(solution, load).flow for load in loads}
            tops = {name: abs(flow.peak(row.wall).flow) for name, flow in flows.items() if flow is not None}
            assert tops[row.load] == max(tops.values()) == abs(row.value)
        else:
            peaks = {
                load.name: abs(stress(solution, load).largest(row.kind, row.wall).stress) for load in loads
            }
            assert peaks[row.load] == max(peaks.values()) == abs(row.value)
    for row in found.places:
        if row.kind == "direct":
            values = {load.name: stress(solution, load).direct("w1", np.array([row.at])) for load in loads}
            assert (
                row.high == max(float(v.max()) for v in values.values()) == float(values[row.high_load].max())
            )
            assert (
                row.low == min(float(v.min()) for v in values.values()) == float(values[row.low_load].min())
            )
    with pytest.raises(LoadError, match="name of its own"):
        envelope(solution, [loads[0], loads[0]])
