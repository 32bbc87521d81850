"""What must not depend on how a section is written down: intervals overlap after any motion."""

from __future__ import annotations

import cmath
import math
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from fe_sections import lopsided_cell, moved, rewritten, shape
from numpy.testing import assert_allclose

from fe_models import Interval, Section, Solution, solve

SECTIONS = {
    "zed": (shape("zed, three thicknesses", 20.0), 1e-5),
    "slanted angle": (shape("angle, legs at 70 degrees", 50.0), 1e-5),
    "lopsided cell": (lopsided_cell(), 1e-5),
    "finned box": (shape("box with two fins", 20.0), 1e-5),
    "three cells": (shape("tapering three-cell box", 15.0), 1e-5),
    "slender zed": (shape("zed, three thicknesses", 1000.0), 1e-7),
    "slender cell": (shape("triangular cell, three thicknesses", 1000.0), 1e-7),
    "stout channel": (shape("channel", 5.0), 1e-5),
}
MOTIONS = {
    "translation": (1.0, 700.0 - 300.0j, False),
    "rotation": (cmath.exp(0.6j), 0.0, False),
    "quarter turn": (1j, 0.0, False),
    "mirror": (1.0, 0.0, True),
    "mirror and turn": (cmath.exp(-2.1j), 40.0 + 15.0j, True),
    "scale 1e-3": (1e-3, 0.0, False),
    "scale 1e3": (1e3, 0.0, False),
    "inch": (1 / 25.4, 0.0, False),
}


@cache
def solved(name: str) -> Solution:
    section, accuracy = SECTIONS[name]
    return solve(section, accuracy)


def overlap(one: Interval, two: Interval, factor: float = 1.0) -> bool:
    """True where the second interval overlaps the first one times a factor."""
    return two.low <= one.high * factor and one.low * factor <= two.high


def carried(q: Solution, name: str, turn: complex, shift: complex, mirror: bool) -> tuple[Interval, Interval]:
    """Both coordinates of a place with their intervals, carried along by a motion."""
    x, y = (q.quantities[f"{name}_{axis}"] for axis in "xy")
    z = complex(x.value, -y.value if mirror else y.value)
    centre = turn * z + shift
    reach = (
        abs(turn.real) * x.half_width + abs(turn.imag) * y.half_width,
        abs(turn.imag) * x.half_width + abs(turn.real) * y.half_width,
    )
    return tuple(
        Interval(c, c - r, c + r, "bound") for c, r in zip((centre.real, centre.imag), reach, strict=True)
    )


# Slender sections at 1e-7 take longest: not every motion for each of them.
CASES = [(n, m) for n in SECTIONS for m in MOTIONS if not n.startswith("slender")]
CASES += [("slender zed", m) for m in ("translation", "rotation", "scale 1e3")]
CASES += [("slender cell", m) for m in ("mirror and turn", "inch")]


@pytest.mark.parametrize(("name", "motion"), CASES)
def test_motions(name: str, motion: str) -> None:
    section, accuracy = SECTIONS[name]
    turn, shift, mirror = complex(MOTIONS[motion][0]), MOTIONS[motion][1], MOTIONS[motion][2]
    one, two = solved(name), solve(moved(section, turn, shift, mirror), accuracy)
    agree(one, two, turn, shift, mirror)
    assert two.met
    assert [c for c in two.checks if not c.passed] == []


def agree(one: Solution, two: Solution, turn: complex, shift: complex, mirror: bool) -> None:
    """J and shear centre by overlap, exact quantities to 1e-10, shear areas where axes stay axes."""
    size, a, b = abs(turn), one.quantities, two.quantities
    assert overlap(a["torsion_constant"], b["torsion_constant"], size**4)
    for name in ("shear_centre", "centroid"):
        for axis, want in zip("xy", carried(one, name, turn, shift, mirror), strict=True):
            got = b[f"{name}_{axis}"]
            # the place itself is only known to the round-off of its coordinates
            slack = 1e-14 * abs(shift) if name == "centroid" else 1e-13 * abs(shift)
            assert got.low <= want.high + slack
            assert want.low - slack <= got.high
    assert_allclose(b["area"].value, a["area"].value * size**2, rtol=1e-10)
    for n in ("principal_moment_u", "principal_moment_v"):
        assert_allclose(b[n].value, a[n].value * size**4, rtol=1e-10)
    direction = turn / size
    if abs(direction.real * direction.imag) < 1e-9:
        names = ("shear_area_x", "shear_area_y")
        for n, m in zip(names, names if abs(direction.real) > 0.5 else names[::-1], strict=True):
            assert overlap(a[n], b[m], size**2)
    else:
        # 1/A_Vx + 1/A_Vy is the trace of a tensor
        low, high = (sum(1 / getattr(a[f"shear_area_{i}"], s) for i in "xy") for s in ("high", "low"))
        other = [sum(1 / getattr(b[f"shear_area_{i}"], s) for i in "xy") / size**-2 for s in ("high", "low")]
        assert low <= other[1] * (1 + 1e-12)
        assert other[0] <= high * (1 + 1e-12)
    estimate, moved_one = a["warping_constant"], b["warping_constant"]
    allowed = estimate.half_width * size**6 + moved_one.half_width
    assert abs(moved_one.value - estimate.value * size**6) <= allowed


@pytest.mark.parametrize("name", SECTIONS)
def test_wall_order_and_direction(name: str) -> None:
    section, accuracy = SECTIONS[name]
    one, two = solved(name), solve(rewritten(section), accuracy)
    agree(one, two, 1.0 + 0.0j, 0.0, False)
    assert two.met
    assert_allclose(two.outline.extent, one.outline.extent, rtol=1e-13)


@pytest.mark.parametrize("motion", ["translation", "quarter turn", "mirror", "scale 1e-3", "scale 1e3"])
@pytest.mark.parametrize("name", ["zed", "lopsided cell", "finned box"])
def test_flows_move_along(name: str, motion: str) -> None:
    """Forces are carried along: flows per unit force go with 1/size, per unit torque with 1/size^2."""
    section, accuracy = SECTIONS[name]
    turn, shift, mirror = complex(MOTIONS[motion][0]), MOTIONS[motion][1], MOTIONS[motion][2]
    one, two = solved(name), solve(moved(section, turn, shift, mirror), accuracy)
    size = abs(turn)
    direction = turn / size
    for wall, strip in one.strips.items():
        if strip is None:
            continue
        at = np.linspace(*strip, 5)[1:-1]
        a, b = one.flow_at(wall, at), two.flow_at(wall, at)
        # the moved unit forces in the old axes: F' = turn (F or its mirror image)
        flip = -1.0 if mirror else 1.0
        rows = np.array([[direction.real, -direction.imag * flip], [direction.imag, direction.real * flip]])
        want = np.concatenate([rows @ a.values[:2] / size, flip * a.values[2:] / size**2])
        error = np.concatenate([np.abs(rows) @ a.errors[:2] / size, a.errors[2:] / size**2])
        peak = np.array([[0.05 / size], [0.05 / size], [1e-3 / size**2]])
        assert (np.abs(b.values - want) <= b.errors + error + 1e-9 * peak).all()


@pytest.mark.parametrize("factor", [1e-6, 1e6])
def test_extreme_units(factor: float) -> None:
    """A section in metres of something measured in micrometres: the same answer in other units."""
    section, accuracy = SECTIONS["lopsided cell"]
    one, two = solved("lopsided cell"), solve(moved(section, factor), accuracy)
    agree(one, two, complex(factor), 0.0, False)


def test_far_from_the_origin() -> None:
    """A hundred times its size away: the shear centre relative to a point stays put within its interval."""
    section, accuracy = SECTIONS["zed"]
    shift = 1e4 * (1 + 0.7j)
    one, two = solved("zed"), solve(moved(section, 1.0, shift), accuracy)
    for axis, off in (("x", shift.real), ("y", shift.imag)):
        a, b = one.quantities[f"shear_centre_{axis}"], two.quantities[f"shear_centre_{axis}"]
        assert abs(b.value - off - a.value) <= a.half_width + b.half_width
    assert overlap(one.quantities["torsion_constant"], two.quantities["torsion_constant"])
    angle = two.quantities["principal_angle"].value
    assert -math.pi / 2 < angle <= math.pi / 2


def test_splitting_a_wall_changes_nothing() -> None:
    """A point in the middle of a straight wall is smooth: the same solid, overlapping intervals."""
    section, accuracy = SECTIONS["lopsided cell"]
    first, *rest = section.walls
    a, b = (np.array(section.points[p]) for p in (first.start, first.end))
    parts = (replace(first, name="one", end="new"), replace(first, name="two", start="new"))
    middle = 0.3 * a + 0.7 * b
    points = dict(section.points) | {"new": (float(middle[0]), float(middle[1]))}
    two: Solution = solve(Section(points, (*parts, *rest)), accuracy)
    agree(solved("lopsided cell"), two, 1.0 + 0.0j, 0.0, False)
