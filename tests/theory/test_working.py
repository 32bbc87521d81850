"""The hand sheet: a checker with a calculator gets from its printed numbers to its results."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import channel, d_cell, joined, random_section

from beam_theory import Boom, Cut, Load, Section, Wall, Working, solve, working

Z, W = np.polynomial.legendre.leggauss(24)
Z, W = 0.5 * (Z + 1), 0.5 * W


def recompute(sheet: Working) -> None:
    """Redo every line of a sheet from its own numbers."""
    vx, vy = sheet.load.shear
    ixx, iyy, ixy = sheet.second_moment_xx, sheet.second_moment_yy, sheet.product_moment_xy
    assert_allclose(sheet.determinant, ixx * iyy - ixy**2, rtol=1e-9)
    assert_allclose(sheet.a, (ixx * vx - ixy * vy) / sheet.determinant, rtol=1e-8, atol=1e-300)
    assert_allclose(sheet.b, (iyy * vy - ixy * vx) / sheet.determinant, rtol=1e-8, atol=1e-300)
    peak = max(abs(v) for row in sheet.total for v in (row.start, row.middle, row.end)) + 1e-300
    for rows in (sheet.basic, sheet.shear, sheet.total):
        for row, wall in zip(rows, sheet.walls, strict=True):
            assert (row.wall, row.first, row.last) == (wall.wall, wall.first, wall.last)
            got = row.at(np.array([0.0, 0.5, 1.0]))
            slack = 1e-9 * peak * (1 + 1e3 * (abs(wall.sweep) < 0.5) * bool(wall.sweep))
            assert_allclose(got, [row.start, row.middle, row.end], rtol=1e-9, atol=slack)
            fall = sheet.a * wall.first_moment[0] + sheet.b * wall.first_moment[1]
            assert_allclose(row.start - fall, row.end, rtol=1e-9, atol=1e-9 * peak)
    for boom in sheet.booms:
        want = -boom.stiffness * (sheet.a * boom.place[0] + sheet.b * boom.place[1])
        assert_allclose(boom.step, want, rtol=1e-9, atol=1e-12 * peak)
    for cut in sheet.cuts:
        row, wall = sheet.basic[cut.stretch], sheet.walls[cut.stretch]
        assert row.wall == cut.wall
        assert row.first <= cut.at <= row.last
        slack = 1e-9 * peak * (1 + 1e3 * (abs(wall.sweep) < 0.5) * bool(wall.sweep))
        assert_allclose(row.at(np.array([(cut.at - row.first) / (row.last - row.first)])), 0.0, atol=slack)
    closing(sheet)
    torque(sheet, peak)
    sums = np.array([[row.x, row.y, row.torque] for row in sheet.forces]).sum(axis=0)
    assert_allclose(sums[:2], sheet.resultant[:2], rtol=1e-9, atol=1e-9)
    about_origin = (
        sums[2] + sheet.centroid[0] * sums[1] - sheet.centroid[1] * sums[0] + sheet.torque.open_torque
    )
    scale = abs(sheet.applied[2]) + abs(complex(*sheet.centroid)) + 1e-300
    assert_allclose(about_origin, sheet.resultant[2], rtol=1e-8, atol=1e-9 * scale)
    assert_allclose(sheet.resultant[:2], sheet.applied[:2], rtol=1e-8, atol=1e-9)
    assert_allclose(sheet.resultant[2], sheet.applied[2], rtol=1e-8, atol=1e-9 * scale)


def closing(sheet: Working) -> None:
    """F c = -gap for the shear, F c = 2 A for the torque, flows wall by wall."""
    if not sheet.cells:
        return
    matrix = np.array([cell.flexibility for cell in sheet.cells])
    gap = np.array([cell.gap for cell in sheet.cells])
    c = np.array([cell.closing for cell in sheet.cells])
    assert_allclose(
        matrix @ c, -gap, rtol=1e-8, atol=1e-9 * float(np.abs(matrix).max() * np.abs(c).max() + 1e-300)
    )
    twist = np.array([cell.twist_flow for cell in sheet.cells])
    assert_allclose(matrix @ twist, [2 * cell.area for cell in sheet.cells], rtol=1e-8)
    for number, cell in enumerate(sheet.cells, start=1):
        own = sum(w.flexibility for w in sheet.walls if number in (w.left, w.right))
        assert_allclose(cell.flexibility[number - 1], own, rtol=1e-9)
    padded, turned = [0.0, *c.tolist()], [0.0, *(cell.torque_flow for cell in sheet.cells)]
    peak = max(abs(row.start) for row in sheet.total) + 1e-300
    for wall, basic, shear, total in zip(sheet.walls, sheet.basic, sheet.shear, sheet.total, strict=True):
        assert_allclose(
            shear.start - basic.start, padded[wall.left] - padded[wall.right], rtol=1e-8, atol=1e-9 * peak
        )
        assert_allclose(
            total.start - shear.start, turned[wall.left] - turned[wall.right], rtol=1e-8, atol=1e-9 * peak
        )


def torque(sheet: Working, peak: float) -> None:
    """Shear centre, torque about it, and its shares."""
    t = sheet.torque
    assert t.shear_centre is not None
    moments = {row.unit: row for row in sheet.shear_centre}
    for row in moments.values():
        assert_allclose(sum(row.moments), row.moment, rtol=1e-8, atol=1e-10 * max(map(abs, row.moments)))
    scale = abs(complex(*t.shear_centre)) + abs(complex(*sheet.centroid))
    assert_allclose(sheet.centroid[0] + moments["Vy"].moment, t.shear_centre[0], rtol=1e-9, atol=1e-9 * scale)
    assert_allclose(sheet.centroid[1] - moments["Vx"].moment, t.shear_centre[1], rtol=1e-9, atol=1e-9 * scale)
    vx, vy = sheet.load.shear
    want = t.torque
    if t.through is not None:
        want += (t.through[0] - t.shear_centre[0]) * vy - (t.through[1] - t.shear_centre[1]) * vx
    assert_allclose(t.torque_about_shear_centre, want, rtol=1e-9, atol=1e-12 * (abs(want) + scale))
    cells = sum(2 * cell.area * cell.twist_flow for cell in sheet.cells)
    opened = sum(w.torsion for w in sheet.walls if w.left == 0 and w.right == 0)
    assert_allclose(t.torsion_constant_cells, cells, rtol=1e-9)
    assert_allclose(t.torsion_constant_open, opened, rtol=1e-9)
    assert_allclose(t.torsion_constant, cells + opened, rtol=1e-9)
    assert_allclose(t.twist, t.torque_about_shear_centre / t.torsion_constant, rtol=1e-9)
    assert_allclose(t.cell_torque + t.open_torque, t.torque_about_shear_centre, rtol=1e-9)
    assert_allclose(t.open_torque, t.twist * opened, rtol=1e-9)
    for cell in sheet.cells:
        assert_allclose(cell.torque_flow, t.twist * cell.twist_flow, rtol=1e-9)
    if len(sheet.cells) == 1:
        (cell,) = sheet.cells
        assert sheet.closing_by_moments is not None
        both = cell.closing + cell.torque_flow
        assert_allclose(sheet.closing_by_moments, both, rtol=1e-8, atol=1e-9 * peak)
    else:
        assert sheet.closing_by_moments is None


@pytest.mark.parametrize("seed", range(40))
def test_sheet_of_random_sections(seed: int) -> None:
    section = random_section(seed)
    size = float(np.ptp(np.array(list(section.points.values())), axis=0).max())
    load = Load("gust", (0.8, -1.2), next(iter(section.points.values())), torque=0.2 * size)
    recompute(working(solve(section), load))


def test_sheet_with_cuts_and_booms() -> None:
    """Two cells, the user's cuts, a boom along a wall, a fin."""
    points = {
        "a": (0.0, 0.0),
        "b": (90.0, 0.0),
        "c": (150.0, 10.0),
        "d": (150.0, 70.0),
        "e": (90.0, 80.0),
        "f": (0.0, 80.0),
    }
    points["g"] = (190.0, 10.0)
    names = [
        ("a", "b", 2.0),
        ("b", "c", 3.0),
        ("c", "d", 3.0),
        ("d", "e", 3.0),
        ("e", "f", 2.0),
        ("f", "a", 2.0),
        ("b", "e", 1.5),
        ("c", "g", 2.0),
    ]
    section = joined(
        points,
        names,
        cuts=(Cut("e-f", 0.25), Cut("c-d", 0.5)),
        booms=(Boom(40.0, wall="a-b", at=0.3), Boom(60.0, point="d")),
    )
    sheet = working(solve(section), Load("v", (10.0, -300.0), (90.0, 0.0), torque=500.0))
    recompute(sheet)
    assert {(cut.wall, cut.at, cut.chosen) for cut in sheet.cuts} == {
        ("e-f", 0.25, False),
        ("c-d", 0.5, False),
    }
    assert len(sheet.cells) == 2
    assert len(sheet.booms) == 2
    assert [row.wall for row in sheet.walls].count("a-b") == 2


def test_sheet_of_arcs_and_lumped_level() -> None:
    """Arcs print trigonometric terms; at level `lumped` the booms made from the walls are on the sheet."""
    sheet = working(solve(d_cell(100.0, 1.5, 2.5)), Load("v", (3.0, 40.0), (10.0, 0.0)))
    recompute(sheet)
    nose = next(row for row in sheet.total if row.wall == "nose")
    assert len(nose.trigonometric) == 4
    flow = solve(d_cell(100.0, 1.5, 2.5)).flow(sheet.load)
    assert_allclose(nose.at(Z), flow.at("nose", Z), rtol=1e-10, atol=1e-12)
    boomed = working(solve(channel(50, 100, 2), "lumped"), Load("v", (0.0, 40.0), (10.0, 0.0)))
    recompute(boomed)
    assert len(boomed.booms) == 4
    assert all(wall.direct_share == 0.0 for wall in boomed.walls)


def test_sheet_of_a_pure_torque() -> None:
    """Also where shear is undefined."""
    strip = Section({"a": (0.0, 0.0), "b": (9.0, 0.0)}, (Wall("w", "a", "b", (1.0, 1.0)),))
    sheet = working(solve(strip), Load("t", torque=5.0))
    assert sheet.torque.shear_centre is None
    assert_allclose(sheet.torque.open_torque, 5.0)
    assert_allclose(sheet.resultant, (0.0, 0.0, 5.0), atol=1e-12)
    assert sheet.shear_centre == ()
