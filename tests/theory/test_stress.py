"""Direct, shear and von Mises stress at the real faces; moduli, Wagner coefficients, stiffness table."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import arc_section, channel, d_cell, joined, polyline, random_section

from beam_theory import (
    Boom,
    Load,
    LoadError,
    Section,
    UndefinedQuantity,
    Wall,
    solve,
    stiffness,
    stress,
)

U = np.linspace(0.0, 1.0, 5)


def box(b: float, h: float, tb: float, th: float) -> Section:
    return polyline(
        [(-b / 2, -h / 2), (b / 2, -h / 2), (b / 2, h / 2), (-b / 2, h / 2)], [tb, th, tb, th], True
    )


def test_bending_of_a_box_at_its_faces() -> None:
    """sigma = Mx y/Ixx at y = +-(h/2 + t/2); Mx puts +y in tension, My puts +x in tension."""
    solution = solve(box(80, 60, 2, 3))
    ixx = 2 * 80 * 2 * 30**2 + 2 * 3 * 60**3 / 12
    iyy = 2 * 60 * 3 * 40**2 + 2 * 2 * 80**3 / 12
    found = stress(solution, Load("m", moment=(1e5, 0.0)))
    # Wall w2 runs from right to left along the top: its right face is the upper one.
    assert_allclose(found.direct("w2", U)[:, 1], 1e5 * 31 / ixx, rtol=1e-12)
    assert_allclose(found.direct("w2", U)[:, 0], 1e5 * 29 / ixx, rtol=1e-12)
    assert_allclose(found.direct("w0", U)[:, 1], -1e5 * 31 / ixx, rtol=1e-12)
    other = stress(solution, Load("m", moment=(0.0, 1e5)))
    assert_allclose(other.direct("w1", U)[:, 1], 1e5 * 41.5 / iyy, rtol=1e-12)
    peak = found.largest("direct")
    assert_allclose(abs(peak.stress), 1e5 * 31 / ixx, rtol=1e-12)
    assert peak.face == "right"
    for name, want in (
        ("section_modulus_x_top", ixx / 31),
        ("section_modulus_x_bottom", ixx / 31),
        ("section_modulus_y_right", iyy / 41.5),
        ("section_modulus_y_left", iyy / 41.5),
    ):
        assert_allclose(solution.require(name), want, rtol=1e-12)


def test_unsymmetric_bending_and_axial() -> None:
    """[Iyy Ixy; Ixy Ixx][a b] = [My Mx]: moments and force come out again from the stress."""
    section = polyline([(48, 82), (60, 100), (0, 100), (0, -100), (-65, -100), (-50, -85)], [2, 3, 2, 4, 1])
    solution = solve(section)
    found = stress(solution, Load("m", axial=700.0, moment=(3e4, -2e4)))
    z, w = np.polynomial.legendre.leggauss(8)
    z, w = 0.5 * (z + 1), 0.5 * w
    total = np.zeros(3)
    for wall in section.walls:
        xy = solution.place(wall.name, z) - [solution.require("centroid_x"), solution.require("centroid_y")]
        mid = found.direct(wall.name, z).mean(axis=1)
        length = math.dist(section.points[wall.start], section.points[wall.end])
        force = w * mid * wall.thickness[0] * length
        total += [force.sum(), (force * xy[:, 1]).sum(), (force * xy[:, 0]).sum()]
    assert_allclose(total, [700.0, 3e4, -2e4], rtol=1e-10)


def test_materials_booms_and_shares() -> None:
    """Stress follows e; a shear-only skin carries none; a boom has that of its place."""
    section = box(80, 60, 2, 2)
    walls = list(section.walls)
    walls[0] = replace(walls[0], e=3.0)
    walls[1] = replace(walls[1], direct_share=0.0)
    section = replace(
        section, walls=tuple(walls), booms=(Boom(50.0, point="p2", e=2.0), Boom(9.0, wall="w3", at=0.5))
    )
    solution = solve(section)
    found = stress(solution, Load("n", axial=1000.0))
    area = solution.require("area")
    assert_allclose(area, 80 * 2 * 3 + 80 * 2 + 60 * 2 + 100 + 9, rtol=1e-12)
    assert_allclose(found.direct("w0", U), 3000.0 / area, rtol=1e-12)
    assert_allclose(found.direct("w1", U), 0.0, atol=0.0)
    assert_allclose([boom.stress for boom in found.booms()], [2000.0 / area, 1000.0 / area], rtol=1e-12)


def test_bimoment() -> None:
    """I section: sigma = B omega/I_w is bending of the flanges, M_f = B/h against t b^3/12 each."""
    points = {
        "a": (-40.0, 0.0),
        "m": (0.0, 0.0),
        "b": (40.0, 0.0),
        "c": (-40.0, 100.0),
        "n": (0.0, 100.0),
        "d": (40.0, 100.0),
    }
    section = joined(points, [("a", "m", 3), ("m", "b", 3), ("m", "n", 2), ("c", "n", 3), ("n", "d", 3)])
    solution = solve(section)
    found = stress(solution, Load("b", bimoment=6e6))
    tip = 6e6 / 100 / (3 * 80**3 / 12) * 40
    ends = [
        abs(found.direct(w, np.array([at]))[0, 0]) for w, at in (("a-m", 0.0), ("m-b", 1.0), ("c-n", 0.0))
    ]
    assert_allclose(ends, tip, rtol=1e-10)
    assert_allclose(found.direct("m-n", U), 0.0, atol=1e-10 * tip)
    corners = [
        found.direct(w, np.array([at]))[0, 0]
        for w, at in (("a-m", 0.0), ("m-b", 1.0), ("c-n", 0.0), ("n-d", 1.0))
    ]
    assert_allclose(corners, corners[0] * np.array([1, -1, -1, 1]), rtol=1e-10)
    with pytest.raises(UndefinedQuantity, match="warping constant is zero"):
        stress(
            solve(polyline([(0, 0), (50, 0), (50, 50), (0, 50)], 2.0, closed=True)), Load("b", bimoment=1.0)
        )


def test_torsion_of_an_open_wall() -> None:
    """T > 0 turns anticlockwise round the wall: along s on its right face, against it on the left one."""
    solution = solve(channel(50, 100, 2))
    found = stress(solution, Load("t", torque=1000.0))
    tau = 1000.0 * 2 / (8 * 200 / 3)
    assert_allclose(found.shear("w0", U), np.tile([-tau, tau], (5, 1)), rtol=1e-12)
    assert_allclose(found.von_mises("w0", U), math.sqrt(3) * tau, rtol=1e-12)
    assert_allclose(1000.0 / solution.require("torsion_modulus"), tau, rtol=1e-12)


def test_torsion_modulus_of_a_box() -> None:
    """T/(2 A t_min) (Bredt)."""
    solution = solve(box(80, 60, 2, 3))
    assert_allclose(solution.require("torsion_modulus"), 2 * 4800 * 2, rtol=1e-12)
    found = stress(solution, Load("t", torque=1e5)).largest("shear")
    assert_allclose(abs(found.stress), 1e5 / (2 * 4800 * 2), rtol=1e-12)


@pytest.mark.parametrize("seed", [1, 5, 9, 14, 20])
@pytest.mark.parametrize("kind", ["direct", "shear", "von_mises"])
def test_largest_is_the_largest(seed: int, kind: str) -> None:
    """No finer look finds more, and the stress at the place named is the one named."""
    section = random_section(seed)
    solution = solve(section)
    size = float(np.ptp(np.array(list(section.points.values())), axis=0).max())
    load = Load("a", (1.0, -2.0), next(iter(section.points.values())), 0.3 * size, 4.0, (size, -0.4 * size))
    found = stress(solution, load)
    peak = found.largest(kind)
    along = getattr(found, kind)
    there = along(peak.wall, np.array([peak.at]))[0, ("left", "right").index(peak.face)]
    assert_allclose(there, peak.stress, rtol=1e-12)
    fine = max(float(np.abs(along(w.name, np.linspace(0, 1, 1501))).max()) for w in section.walls)
    assert abs(peak.stress) >= fine * (1 - 1e-9)
    assert abs(found.largest(kind, peak.wall).stress) == abs(peak.stress)


def test_largest_shear_of_a_channel() -> None:
    """V Q/(I t) at mid-web."""
    solution = solve(channel(50, 100, 2))
    peak = stress(solution, Load("v", (0.0, 1.0))).largest("shear")
    inertia = 2 * 100**3 / 12 + 50 * 2 * 100**2 / 2
    assert_allclose(peak.stress, (50 * 100 / 2 + 100**2 / 8) / inertia, rtol=1e-12)
    assert peak.wall == "w1"
    assert_allclose(peak.at, 0.5, atol=1e-6)
    with pytest.raises(LoadError, match="kind"):
        stress(solution, Load("v", (0.0, 1.0))).largest("normal")


def test_solid_rectangle_bends_in_its_plane() -> None:
    """One straight wall has no stiffness across; along it M y/I at its ends."""
    strip = Section({"a": (0.0, 0.0), "b": (0.0, 60.0)}, (Wall("w", "a", "b", (2.0, 2.0)),))
    solution = solve(strip)
    found = stress(solution, Load("m", moment=(100.0, 0.0)))
    assert_allclose(
        found.direct("w", np.array([0.0, 1.0]))[:, 0], [-100 * 30 / 36000, 100 * 30 / 36000], rtol=1e-12
    )
    with pytest.raises(UndefinedQuantity, match="straight line"):
        stress(solution, Load("m", moment=(100.0, 1.0)))
    assert solution.quantities["section_modulus_y_right"].value is None
    assert_allclose(solution.require("section_modulus_x_top"), 36000 / 30, rtol=1e-12)
    thick = solve(strip, "corrected")
    assert_allclose(thick.require("section_modulus_y_right"), 60 * 8 / 12 / 1.0, rtol=1e-12)
    both = stress(thick, Load("m", moment=(0.0, 1.0)))
    assert_allclose(np.abs(both.direct("w", U)), 1.0 / (60 * 8 / 12), rtol=1e-12)


def test_extreme_fibre_of_arcs() -> None:
    """Circular tube: R + t/2 in every direction; half ring: R + t/2 at the crown."""
    for turn in (0.0, 0.4, 1.3):
        at = [complex(math.cos(turn + a), math.sin(turn + a)) for a in (0.0, 2.0, 3.5, 5.0)]
        place = [(z.real, z.imag) for z in at]
        walls = (Wall("a", "p", "q", (0.1, 0.1), place[1]), Wall("b", "q", "p", (0.1, 0.1), place[3]))
        solution = solve(Section({"p": place[0], "q": place[2]}, walls))
        inertia = math.pi * 0.1
        for name in ("x_top", "x_bottom", "y_right", "y_left"):
            assert_allclose(solution.require(f"section_modulus_{name}"), inertia / 1.05, rtol=1e-12)
    solution = solve(arc_section(1.0, math.pi / 2, 0.1))
    want = solution.require("second_moment_yy") / (1.05 - solution.require("centroid_x"))
    assert_allclose(solution.require("section_modulus_y_right"), want, rtol=1e-12)


def test_wagner_coefficients() -> None:
    """Principal-axis form: integral y (x^2 + y^2) dA / Ixx - 2 y_s; zero by symmetry; resultant of a load."""
    points = {
        "a": (-40.0, 0.0),
        "m": (0.0, 0.0),
        "b": (40.0, 0.0),
        "c": (-25.0, 100.0),
        "n": (0.0, 100.0),
        "d": (25.0, 100.0),
    }
    section = joined(points, [("a", "m", 4), ("m", "b", 4), ("m", "n", 2), ("c", "n", 3), ("n", "d", 3)])
    solution = solve(section)
    yc, ys = solution.require("centroid_y"), solution.require("shear_centre_y")
    low, top = -yc, 100 - yc
    cubic = (
        80 * 4 * low**3
        + 4 * 80**3 / 12 * low
        + 50 * 3 * top**3
        + 3 * 50**3 / 12 * top
        + 2 * (top**4 - low**4) / 4
    )
    beta = cubic / solution.require("second_moment_xx") - 2 * (ys - yc)
    assert_allclose(solution.require("wagner_x"), beta, rtol=1e-10)
    assert_allclose(abs(solution.require("wagner_u")), abs(beta), rtol=1e-10)
    assert_allclose(solution.require("wagner_y"), 0.0, atol=1e-10 * 100)
    total = solution.require("second_moment_xx") + solution.require("second_moment_yy")
    polar = total / solution.require("area") + (ys - yc) ** 2
    assert_allclose(solution.require("polar_radius_squared"), polar, rtol=1e-12)


@pytest.mark.parametrize("seed", [2, 6, 30])
def test_wagner_resultant(seed: int) -> None:
    """K = N r0^2 + Mx beta_x + My beta_y + B beta_w, integrated from the stress itself."""
    section = random_section(seed)
    if section.booms or any(w.direct_share != 1.0 for w in section.walls):
        section = Section(section.points, tuple(replace(w, direct_share=1.0) for w in section.walls))
    solution = solve(section)
    size = float(np.ptp(np.array(list(section.points.values())), axis=0).max())
    load = Load("k", axial=2.0, moment=(0.7 * size, -0.4 * size), bimoment=0.3 * size**2)
    found = stress(solution, load)
    z, w = np.polynomial.legendre.leggauss(40)
    z, w = 0.5 * (z + 1), 0.5 * w
    pole = [solution.require("shear_centre_x"), solution.require("shear_centre_y")]
    total = 0.0
    for wall in section.walls:
        xy = solution.place(wall.name, z)
        rows = solution.graph.rows(wall.name)
        length = float(solution.graph.pieces.length[rows].sum())
        t = wall.thickness[0] + (wall.thickness[1] - wall.thickness[0]) * z
        mid = found.direct(wall.name, z).mean(axis=1)
        total += float((w * length * t * mid * ((xy - pole) ** 2).sum(axis=1)).sum())
    want = 2.0 * solution.require("polar_radius_squared") + 0.7 * size * solution.require("wagner_x")
    want += -0.4 * size * solution.require("wagner_y") + 0.3 * size**2 * solution.require("wagner_omega")
    assert_allclose(total, want, rtol=1e-8)


def test_stiffness_table() -> None:
    solution = solve(channel(50, 100, 2))
    table = stiffness(solution, 70000.0, 27000.0, datum=(1.0, 2.0))
    assert_allclose(table.EA.require("EA"), 70000 * 400, rtol=1e-12)
    assert_allclose(table.GJ.require("GJ"), 27000 * 1600 / 3, rtol=1e-12)
    assert_allclose(table.shear_centre_x.require("x_s"), -19.75, rtol=1e-12)
    assert_allclose(table.GA_Vy.require("GA"), 27000 * solution.require("shear_area_y"), rtol=1e-12)
    length = math.sqrt(70000 * solution.require("warping_constant") / (27000 * 1600 / 3))
    assert_allclose(table.characteristic_length.require("length"), length, rtol=1e-12)
    strip = solve(Section({"a": (0.0, 0.0), "b": (9.0, 0.0)}, (Wall("w", "a", "b", (1.0, 1.0)),)))
    assert stiffness(strip, 1.0, 1.0).EIw.value is None
    assert stiffness(strip, 1.0, 1.0).characteristic_length.value is None


def test_flow_and_stress_levels_agree_in_kind() -> None:
    """The same call works at every level."""
    section = d_cell(30.0, 1.0, 2.0)
    load = Load("a", (10.0, 20.0), (0.0, 0.0), 5.0, 100.0, (1e3, 200.0))
    values = [
        abs(stress(solve(section, level), load).largest("von_mises").stress)
        for level in ("midline", "corrected", "lumped")
    ]
    assert_allclose(values, values[0], rtol=0.15)
