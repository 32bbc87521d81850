"""What must not depend on how a section is written down."""

from __future__ import annotations

import cmath
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import moved, random_section, reversed_walls

from beam_theory import Boom, Cut, Load, Section, Solution, Wall, solve

SEEDS = range(0, 60, 3)
U = np.linspace(0.0, 1.0, 5)


def size_of(section: Section) -> float:
    xy = np.array(list(section.points.values()))
    return float(np.ptp(xy, axis=0).max())


def agree(one: Solution, two: Solution, turn: complex, shift: complex, mirror: bool = False) -> None:
    """Every quantity of `two` is that of `one` carried along by the motion."""
    scale, flip = abs(turn), -1.0 if mirror else 1.0
    size = size_of(two.graph.section)

    def at(name: str) -> complex:
        z = complex(one.require(f"{name}_x"), one.require(f"{name}_y"))
        return turn * (z.conjugate() if mirror else z) + shift

    for name in ("centroid", "shear_centre"):
        got = complex(two.require(f"{name}_x"), two.require(f"{name}_y"))
        assert abs(got - at(name)) <= 1e-10 * max(size, abs(got - shift))
    for name, power in (("area", 2), ("plain_area", 2), ("torsion_constant", 4), ("principal_moment_u", 4)):
        assert_allclose(two.require(name), one.require(name) * scale**power, rtol=1e-10)
    floor = 1e-10 * one.require("torsion_constant") * size_of(one.graph.section) ** 2 * scale**6
    assert_allclose(
        two.require("warping_constant"), one.require("warping_constant") * scale**6, rtol=1e-10, atol=floor
    )
    v = one.require("principal_moment_v") * scale**4
    assert_allclose(two.require("principal_moment_v"), v, rtol=1e-10, atol=1e-12 * v)
    form = np.array(
        [
            [1 / one.require("shear_area_x"), one.require("shear_coupling")],
            [one.require("shear_coupling"), 1 / one.require("shear_area_y")],
        ]
    )
    unit = turn / scale
    rotation = np.array([[unit.real, -unit.imag * flip], [unit.imag, unit.real * flip]])
    want = rotation @ form @ rotation.T / scale**2
    got_form = [[1 / two.require("shear_area_x"), two.require("shear_coupling")]]
    got_form += [[two.require("shear_coupling"), 1 / two.require("shear_area_y")]]
    assert_allclose(got_form, want, rtol=1e-10, atol=1e-10 * float(np.abs(want).max()))


def flows_agree(one: Solution, two: Solution, load: Load, other: Load, factor: float = 1.0) -> None:
    """Flows of both solutions wall by wall; factor turns the first into units of the second."""
    a, b = one.flow(load), two.flow(other)
    peak = max(abs(a.peak().flow), 1e-300) * abs(factor)
    for wall in one.graph.walls:
        assert_allclose(b.at(wall, U), factor * a.at(wall, U), rtol=0, atol=1e-10 * peak)


@pytest.mark.parametrize("seed", SEEDS)
@pytest.mark.parametrize(
    ("turn", "shift", "mirror"),
    [
        (1.0, 7.0 - 3.0j, False),
        (cmath.exp(0.7j), 0.0, False),
        (1.0, 0.0, True),
        (1e-3, 0.0, False),
        (1e3, 0.0, False),
        (1 / 25.4, 0.0, False),
        (-25.4j, 2.0, True),
    ],
)
def test_motion_and_scale(seed: int, turn: complex, shift: complex, mirror: bool) -> None:
    """Translation, rotation, mirror, scale by 1e-3 and 1e3, inch against millimetre."""
    section = random_section(seed)
    shift *= size_of(section) * abs(turn)
    one, two = solve(section), solve(moved(section, turn, shift, mirror))
    agree(one, two, turn, shift, mirror)
    force = complex(0.6, -0.8)
    carried = turn / abs(turn) * (force.conjugate() if mirror else force)
    through = complex(0.3, 0.2) * size_of(section)
    place = turn * (through.conjugate() if mirror else through) + shift
    first = Load("a", (force.real, force.imag), (through.real, through.imag))
    second = Load("a", (carried.real, carried.imag), (place.real, place.imag))
    flows_agree(one, two, first, second, 1 / abs(turn))


@pytest.mark.parametrize("seed", range(60))
def test_wall_order_and_direction(seed: int) -> None:
    """Turning every wall round and listing them backwards turns the flow's sign and nothing else."""
    section = random_section(seed)
    one, two = solve(section), solve(reversed_walls(section))
    agree(one, two, 1.0, 0.0)
    for name in ("Vx", "Vy", "T"):
        a, b = one.unit_flow(name), two.unit_flow(name)
        peak = abs(a.peak().flow)
        for wall in section.walls:
            inside = U[1:-1] + 1e-6
            assert_allclose(b.at(wall.name, 1 - inside), -a.at(wall.name, inside), rtol=0, atol=1e-10 * peak)
        omega = np.concatenate([one.warping_at(w.name, U) for w in section.walls])
        other = np.concatenate([two.warping_at(w.name, 1 - U) for w in section.walls])
        swing = size_of(section) ** 2
        assert_allclose(other, omega, rtol=0, atol=1e-10 * swing)


def cellular(cells: int) -> Section:
    """A box of several cells with taper, arcs, two materials and booms."""
    points = {f"t{i}": (float(i), 1.0 + 0.05 * i) for i in range(cells + 1)}
    points |= {f"b{i}": (float(i), -0.1 * i * (cells - i) / cells) for i in range(cells + 1)}
    walls = [Wall("nose", "t0", "b0", (0.01, 0.02), arc_through=(-0.5, 0.4))]
    for i in range(cells):
        bow = (i + 0.5, points[f"t{i}"][1] + 0.15)
        walls.append(Wall(f"top{i}", f"t{i}", f"t{i + 1}", (0.01, 0.03 - 0.002 * i), bow, e=2.0, g=1.7))
        walls.append(Wall(f"low{i}", f"b{i}", f"b{i + 1}", (0.02, 0.01)))
    walls += [Wall(f"web{i}", f"t{i}", f"b{i}", (0.015, 0.01), e=0.5, g=0.8) for i in range(1, cells + 1)]
    booms = (Boom(0.02, point="t1"), Boom(0.01, wall="low0", at=0.4, e=3.0), Boom(0.015, wall="web1", at=0.7))
    return Section(points, tuple(walls), booms)


@pytest.mark.parametrize("cells", [1, 2, 7])
def test_cuts_do_not_matter(cells: int) -> None:
    """Moving cuts changes no final flow beyond 1e-12 of the peak."""
    plain = cellular(cells)
    reference = solve(plain)
    load = Load("a", (0.3, 1.0), (0.2, 0.1), torque=0.4)
    flow = reference.flow(load)
    peak = abs(flow.peak().flow)
    rng = np.random.default_rng(cells)
    for _ in range(12):
        pick = [
            str(rng.choice(["nose" if i == 0 else f"top{i}", f"top{i}", f"low{i}"])) for i in range(cells)
        ]
        cuts = tuple(Cut(wall, float(rng.choice([0.0, 0.37, 0.4, 0.9, 1.0]))) for wall in dict.fromkeys(pick))
        moved_flow = solve(replace(plain, cuts=cuts)).flow(load)
        for wall in plain.walls:
            assert_allclose(moved_flow.at(wall.name, U), flow.at(wall.name, U), rtol=0, atol=1e-12 * peak)


def test_symmetric_box_carries_no_flow_on_its_axis() -> None:
    """Doubly symmetric box, load on its axis of symmetry: flow zero there and symmetric (common practice)."""
    points = {"a": (-50.0, -30.0), "b": (50.0, -30.0), "c": (50.0, 30.0), "d": (-50.0, 30.0)}
    walls = tuple(
        Wall(n, n[0], n[1], (t, t)) for n, t in (("ab", 3.0), ("bc", 2.0), ("cd", 3.0), ("da", 2.0))
    )
    for cut in (Cut("ab", 0.2), Cut("bc", 0.9), Cut("da", 0.0), Cut("cd", 0.5)):
        flow = solve(Section(points, walls, cuts=(cut,))).unit_flow("Vy")
        peak = abs(flow.peak().flow)
        assert_allclose([flow.at("ab", [0.5])[0], flow.at("cd", [0.5])[0]], 0.0, atol=1e-13 * peak)
        assert_allclose(flow.at("ab", U), -flow.at("ab", 1 - U), rtol=0, atol=1e-13 * peak)
        assert_allclose(flow.at("bc", U), -flow.at("da", 1 - U), rtol=0, atol=1e-13 * peak)


@pytest.mark.parametrize("seed", range(0, 40, 2))
def test_scaling_moduli_and_splitting_walls(seed: int) -> None:
    """Doubling E and G leaves geometry and doubles stiffness; a wall split in two is the same wall."""
    section = random_section(seed)
    one = solve(section)
    stiff = replace(
        section,
        walls=tuple(replace(w, e=2 * w.e, g=2 * w.g) for w in section.walls),
        booms=tuple(replace(b, e=2 * b.e) for b in section.booms),
    )
    two = solve(stiff)
    for name in ("centroid_x", "shear_centre_x", "shear_centre_y"):
        assert_allclose(two.require(name), one.require(name), rtol=0, atol=1e-10 * size_of(section))
    for name in ("area", "torsion_constant", "second_moment_xx", "shear_area_y"):
        assert_allclose(two.require(name), 2 * one.require(name), rtol=1e-10)
    flows_agree(one, two, Load("v", (1.0, 0.4)), Load("v", (1.0, 0.4)))
    wall = section.walls[0]
    x, y = one.place(wall.name, np.array([0.25, 0.5, 0.75])).T
    mid = 0.5 * sum(wall.thickness)
    bent = wall.arc_through is not None
    parts = (
        replace(wall, name="first", end="new", thickness=(wall.thickness[0], mid)),
        replace(wall, name="second", start="new", thickness=(mid, wall.thickness[1])),
    )
    if bent:
        parts = (
            replace(parts[0], arc_through=(x[0], y[0])),
            replace(parts[1], arc_through=(x[2], y[2])),
        )
    booms = []
    for boom in section.booms:
        if boom.wall == wall.name and boom.at is not None:
            name, at = ("first", 2 * boom.at) if boom.at <= 0.5 else ("second", 2 * boom.at - 1)
            boom = replace(boom, wall=name, at=at)
        booms.append(boom)
    points = dict(section.points) | {"new": (float(x[1]), float(y[1]))}
    split = solve(Section(points, parts + section.walls[1:], tuple(booms)))
    for name in ("torsion_constant", "area", "second_moment_yy", "shear_area_x"):
        assert_allclose(split.require(name), one.require(name), rtol=1e-10)
    assert_allclose(
        split.require("shear_centre_x"), one.require("shear_centre_x"), rtol=0, atol=1e-10 * size_of(section)
    )
