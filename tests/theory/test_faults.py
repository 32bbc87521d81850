"""Sections and loads that cannot be solved say so in full; quantities that do not exist say why."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import channel, d_cell, joined, polyline

from beam_theory import (
    Boom,
    Cut,
    Load,
    LoadError,
    Section,
    SectionError,
    TheoryError,
    UndefinedQuantity,
    Wall,
    solve,
)
from beam_theory.checks import checks

P = {"a": (0.0, 0.0), "b": (10.0, 0.0), "c": (0.0, 10.0)}


@pytest.mark.parametrize(
    ("section", "words"),
    [
        (Section(P, ()), "at least one wall"),
        (Section(P, (Wall("w", "a", "x", (1, 1)),)), "no point named 'x'"),
        (Section(P, (Wall("w", "a", "a", (1, 1)),)), "split a closed wall"),
        (Section(P, (Wall("w", "a", "b", (1, 0)),)), "thickness"),
        (Section(P, (Wall("w", "a", "b", (1, math.nan)),)), "thickness"),
        (Section(P, (Wall("w", "a", "b", (1, 1), e=0.0),)), "walls.w.e"),
        (Section(P, (Wall("w", "a", "b", (1, 1), direct_share=1.5),)), "direct_share"),
        (Section(P, (Wall("w", "a", "b", (1, 1)), Wall("w", "b", "c", (1, 1)))), "used twice"),
        (Section(P, (Wall("w", "a", "b", (1, 1), arc_through=(5.0, 0.0)),)), "in line"),
        (Section(P, (Wall("w", "a", "b", (1, 1), arc_through=(0.0, 0.0)),)), "three different places"),
        (Section(P | {"d": (0.0, 0.0)}, (Wall("w", "a", "d", (1, 1)),)), "length is zero"),
        (Section(P | {"d": (9.0, 9.0)}, (Wall("v", "a", "b", (1, 1)), Wall("w", "c", "d", (1, 1)))), "hang"),
        (Section({"a": (0.0, math.inf), "b": (1.0, 0.0)}, (Wall("w", "a", "b", (1, 1)),)), "finite"),
        (Section(P, (Wall("w", "a", "b", (1, 1)),), booms=(Boom(1.0, point="c"),)), "join it by a wall"),
        (Section(P, (Wall("w", "a", "b", (1, 1)),), booms=(Boom(-1.0, point="a"),)), "area"),
        (Section(P, (Wall("w", "a", "b", (1, 1)),), booms=(Boom(1.0),)), "either a point or a wall"),
        (Section(P, (Wall("w", "a", "b", (1, 1)),), booms=(Boom(1.0, wall="w", at=2.0),)), "fraction"),
        (Section(P, (Wall("w", "a", "b", (1, 1)),), cuts=(Cut("x"),)), "cuts[0].wall"),
        (Section(P, (Wall("w", "a", "b", (1, 1)),), cuts=(Cut("w"),)), "in no cell"),
        (
            joined(P, [("a", "b", 1), ("b", "c", 1), ("c", "a", 1)], cuts=(Cut("a-b"), Cut("b-c"))),
            "at most one",
        ),
        (Section(P, (Wall("v", "a", "b", (1, 1)), Wall("w", "a", "b", (1, 1)))), "overlap"),
    ],
)
def test_section_faults(section: Section, words: str) -> None:
    with pytest.raises(SectionError) as caught:
        solve(section)
    assert any(words in fault for fault in caught.value.faults), caught.value.faults


def test_all_faults_at_once() -> None:
    section = Section(
        P, (Wall("v", "a", "q", (1, 1)), Wall("w", "b", "c", (0, 1))), booms=(Boom(0.0, point="a"),)
    )
    with pytest.raises(SectionError) as caught:
        solve(section)
    assert len(caught.value.faults) == 3
    assert isinstance(caught.value, TheoryError)


def test_cuts_that_part_the_section() -> None:
    """Two cuts in one outer wall run of a two-cell box leave a loose piece."""
    points = {
        "a": (0.0, 0.0),
        "b": (1.0, 0.0),
        "c": (2.0, 0.0),
        "d": (2.0, 1.0),
        "e": (1.0, 1.0),
        "f": (0.0, 1.0),
    }
    walls = [
        ("a", "b", 0.1),
        ("b", "c", 0.1),
        ("c", "d", 0.1),
        ("d", "e", 0.1),
        ("e", "f", 0.1),
        ("f", "a", 0.1),
        ("b", "e", 0.1),
    ]
    solve(joined(points, walls, cuts=(Cut("a-b"), Cut("b-c"))))
    with pytest.raises(SectionError, match="part the section"):
        solve(joined(points, walls, cuts=(Cut("b-c"), Cut("c-d"))))


def test_crossing_walls_in_cells() -> None:
    """A bow tie with crossing walls is no plane graph."""
    points = {"a": (0.0, 0.0), "b": (1.0, 0.0), "c": (0.0, 1.0), "d": (1.0, 1.0)}
    walls = [
        ("a", "b", 0.1),
        ("b", "d", 0.1),
        ("d", "c", 0.1),
        ("c", "a", 0.1),
        ("a", "d", 0.1),
        ("b", "c", 0.1),
    ]
    with pytest.raises(SectionError, match="cross"):
        solve(joined(points, walls))


@pytest.mark.parametrize("end", [(10.0, 0.0), (0.0, 10.0), (3.0, 4.0), (1e-3, 2e3)])
def test_single_straight_wall(end: tuple[float, float]) -> None:
    """Area, centroid and J exist; nothing that needs stiffness across the wall does."""
    solution = solve(Section({"a": (0.0, 0.0), "b": end}, (Wall("w", "a", "b", (0.5, 0.5)),)))
    length = math.hypot(*end)
    assert_allclose(solution.require("area"), 0.5 * length, rtol=1e-12)
    assert_allclose(solution.require("torsion_constant"), length * 0.125 / 3, rtol=1e-12)
    assert_allclose(solution.require("principal_moment_u"), 0.5 * length**3 / 12, rtol=1e-12)
    missing = ["principal_moment_v", "shear_centre_x", "shear_centre_y", "warping_constant", "shear_area_x"]
    if end[1] == 0.0:
        missing.append("second_moment_xx")
    if end[0] == 0.0:
        missing.append("second_moment_yy")
    for name in missing:
        quantity = solution.quantities[name]
        assert quantity.value is None
        assert quantity.reason is not None
        assert "straight line" in quantity.reason
    with pytest.raises(UndefinedQuantity, match="straight line"):
        solution.unit_flow("Vy")
    with pytest.raises(UndefinedQuantity):
        solution.warping_at("w", np.array([0.5]))
    assert_allclose(solution.unit_flow("T").at("w", np.array([0.5])), [0.0])


def test_no_direct_stress_at_all() -> None:
    """Shear-only skins without booms: J exists, area and second moments do not."""
    walls = [("a", "b", 1.0), ("b", "c", 1.0), ("c", "a", 1.0)]
    section = joined(P, walls)
    skins = replace(section, walls=tuple(replace(w, direct_share=0.0) for w in section.walls))
    solution = solve(skins)
    assert solution.quantities["area"].value is None
    assert solution.quantities["second_moment_xx"].value is None
    assert_allclose(
        solution.require("torsion_constant"), solve(section).require("torsion_constant"), rtol=1e-12
    )
    assert solution.require("plain_area") > 0.0


def test_every_axis_principal() -> None:
    solution = solve(polyline([(0, 0), (5, 0), (5, 5), (0, 5)], 0.1, closed=True))
    assert solution.quantities["principal_angle"].value is None
    assert solution.quantities["principal_angle"].reason == "every axis is principal"


@pytest.mark.parametrize(
    ("places", "angle"),
    [
        ([(20, -50), (0, -50), (0, 50), (20, 50)], 0.0),
        ([(-50, 20), (-50, 0), (50, 0), (50, 20)], math.pi / 2),
    ],
)
def test_major_axis(places: list[tuple[float, float]], angle: float) -> None:
    """The major axis u is the one about which the second moment is largest."""
    solution = solve(polyline(places, 1.0))
    assert_allclose(solution.require("principal_angle"), angle, atol=1e-12)
    tilted = solve(polyline([(x * 0.8 - y * 0.6, x * 0.6 + y * 0.8) for x, y in places], 1.0))
    want = math.remainder(angle + math.atan2(0.6, 0.8), math.pi)
    assert_allclose(tilted.require("principal_angle"), want, atol=1e-12)


def test_bad_requests() -> None:
    solution = solve(channel(50, 100, 2))
    with pytest.raises(LoadError, match="unit load"):
        solution.unit_flow("Vz")
    flow = solution.unit_flow("Vy")
    with pytest.raises(LoadError, match="no wall named"):
        flow.at("w9", np.array([0.5]))
    with pytest.raises(LoadError, match=r"within 0\.\.1"):
        flow.at("w0", np.array([1.5]))
    with pytest.raises(LoadError, match="level"):
        solve(channel(50, 100, 2), level="finest")
    with pytest.raises(ValueError, match="arc"):
        solve(d_cell(1.0, 0.1, 0.1)).unit_flow("Vy").polynomial("nose")


def test_load_on_a_line() -> None:
    """T_sc = T + (x_p - x_s) Vy - (y_p - y_s) Vx; the resultant about the origin is that of the load."""
    solution = solve(channel(50, 100, 2))
    flow = solution.flow(Load("a", (3.0, -7.0), (11.0, 5.0), torque=2.0))
    x_s, y_s = solution.require("shear_centre_x"), solution.require("shear_centre_y")
    want = 2.0 + (11.0 - x_s) * -7.0 - (5.0 - y_s) * 3.0
    assert_allclose(flow.torque_about_shear_centre, want, rtol=1e-12)
    assert_allclose(flow.resultant(), (3.0, -7.0, 2.0 + 11.0 * -7.0 - 5.0 * 3.0), rtol=1e-10)


def test_boom_steps_along_a_wall() -> None:
    """At a boom on a wall the flow steps by e A f; `at` gives the value on the start's side."""
    section = replace(channel(50, 100, 2), booms=(Boom(40.0, wall="w1", at=0.25, e=2.0),))
    solution = solve(section)
    flow = solution.unit_flow("Vy")
    before, after = flow.at("w1", np.array([0.25, 0.25 + 1e-13]))
    y = -25.0 - solution.require("centroid_y")
    x = 0.0 - solution.require("centroid_x")
    f = flow.slope.real * x + flow.slope.imag * y
    assert_allclose(after - before, -80.0 * f, rtol=1e-8)
    first, second = flow.polynomial("w1")
    assert_allclose((first.last, second.first), (0.25, 0.25), rtol=1e-12)
    assert_allclose([sum(first.coefficients), second.coefficients[0]], [before, after], rtol=1e-8)


def test_built_in_checks_can_fail() -> None:
    """Each check notices the fault it is there for."""
    points = {"a": (0.0, 0.0), "b": (60.0, 0.0), "c": (60.0, 40.0), "d": (0.0, 55.0), "e": (90.0, 5.0)}
    walls = [("a", "b", 2), ("b", "c", 2.5), ("c", "d", 2), ("d", "a", 3), ("b", "e", 6)]
    good = solve(joined(points, walls))
    assert good.shear is not None
    assert good.warp is not None
    pole = good.warp.pole
    assert all(check.passed for check in checks(good, pole))

    def failing(**changes: object) -> set[str]:
        bad = replace(good, **changes)  # type: ignore[arg-type]
        return {check.name for check in checks(bad, pole) if not check.passed}

    twist = replace(good.twist, cell_flow=good.twist.cell_flow * 1.001)
    assert "resultant of unit T" in failing(twist=twist)
    assert "no gap in warping round the cells" in failing(twist=twist)
    bent = replace(good.shear, start=good.shear.start * 1.001)
    assert "resultant of unit Vx" in failing(shear=bent)
    assert "resultant of unit Vy" in failing(shear=bent)
    assert "single cell closed by moment equilibrium" in failing(
        shear=replace(good.shear, closing=good.shear.closing * 1.001)
    )
    assert "node balance" in failing(shear=replace(good.shear, imbalance=1e-6))
    moved_pole = replace(good.warp, pole=pole + 1e-3)
    assert "shear centre from flow moments and from sectorial moments" in failing(warp=moved_pole)
    tilted = replace(good.warp, at_quadrature=good.warp.at_quadrature + 1e-3 * good.graph.pieces.u * 60**2)
    assert "warping makes no bending moment" in failing(warp=tilted)
    assert "warping function closes round the cells" in failing(warp=replace(good.warp, gap=1e-6))
