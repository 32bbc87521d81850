"""Both fields of torsion and flexure: the gap identity, statics, hole constants, resultants."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from fe_sections import (
    bow_tie,
    box,
    channel,
    four_cells,
    lopsided_cell,
    mixed_cells,
    rectangle,
    shape,
    triangular_cell,
    two_cell,
)
from numpy.testing import assert_allclose

from fe_models import Section, Solution, Wall, solve
from fe_models.contour import loops
from fe_models.intervals import warping_function

SECTIONS = {
    "rectangle": rectangle(30.0, 8.0),
    "channel": channel(50.0, 100.0, 6.0),
    "slender channel": channel(50.0, 100.0, 0.1),
    "zed": shape("zed, three thicknesses", 20.0),
    "box": box(60.0, 40.0, 3.0, 4.0),
    "lopsided cell": lopsided_cell(),
    "triangular cell": triangular_cell(),
    "two cells": two_cell(50.0, 30.0, 40.0, 3.0),
    "bow tie": bow_tie(),
    "four cells": four_cells(),
    "three cells": shape("tapering three-cell box", 15.0),
    "mixed moduli": mixed_cells(),
}
CLOSED = [
    "box",
    "lopsided cell",
    "triangular cell",
    "two cells",
    "bow tie",
    "four cells",
    "three cells",
    "mixed moduli",
]


@cache
def solved(name: str, accuracy: float = 1e-4) -> Solution:
    return solve(SECTIONS[name], accuracy)


def moduli(name: str) -> tuple[np.ndarray, np.ndarray]:
    """e and g of every element, (elements, 1)."""
    on = solved(name).fields.moduli
    assert (len(np.unique(on.g)) > 1) == (name == "mixed moduli")
    return on.e[:, None], on.g[:, None]


@pytest.mark.parametrize("name", SECTIONS)
def test_gap_of_torsion(name: str) -> None:
    """High - low = integral |k - s|^2 / g, low being the integral 2 R.s - |s|^2 / g of any residual."""
    on = solved(name).fields
    x, y = np.moveaxis(on.space.points, -1, 0)
    k, s = on.torsion.kinematic, on.torsion.static
    arm, g = np.stack([-y, x], axis=-1), moduli(name)[1]
    high = on.space.integral((k**2).sum(-1) / g)
    low = on.space.integral((2 * arm * s).sum(-1) - (s**2).sum(-1) / g)
    gap = on.space.integral(((k - s) ** 2).sum(-1) / g)
    assert_allclose(high - low, gap, rtol=0, atol=1e-11 * high)
    assert_allclose(float(on.gap(on.torsion).sum()), gap, rtol=1e-12)
    # orthogonality: k . s and s . s integrate alike, and the torque of s is its energy
    energy = on.space.integral((s**2).sum(-1) / g)
    assert_allclose(on.space.integral((k * s).sum(-1) / g), energy, rtol=1e-10)
    assert_allclose(on.torque(s), energy, rtol=1e-10)
    assert_allclose(on.torque(k), high, rtol=1e-10)
    assert gap > 1e-9 * high or name == "slender channel"
    interval = solved(name).quantities["torsion_constant"]
    # after refinement the interval may be the meet of several, never wider than this one and its allowance
    assert interval.low >= low - 3e-10 * high
    assert interval.high <= high + 3e-10 * high


@pytest.mark.parametrize("axis", [0, 1])
@pytest.mark.parametrize("name", SECTIONS)
def test_gap_of_flexure(name: str, axis: int) -> None:
    """1/A_V: integral |s|^2 / g from above, 2 integral e f chi - |k|^2 / g from below; gap as before."""
    on = solved(name).fields
    pair = on.flexure[axis]
    e, g = moduli(name)
    f = e * (on.space.points @ on.inertia.slopes(1.0 - axis, float(axis)))
    most = on.space.integral((pair.static**2).sum(-1) / g)
    least = on.space.integral(2 * f * on.space.value(pair.potential) - (pair.kinematic**2).sum(-1) / g)
    gap = on.space.integral(((pair.kinematic - pair.static) ** 2).sum(-1) / g)
    assert_allclose(most - least, gap, rtol=0, atol=1e-11 * most)
    interval = solved(name).quantities[f"shear_area_{'xy'[axis]}"]
    assert 1 / most * (1 - 3e-10) <= interval.low <= interval.high <= 1 / least * (1 + 3e-10)


@pytest.mark.parametrize("name", SECTIONS)
def test_kinematic_fields_are_gradients(name: str) -> None:
    """k = g (grad omega + R) and k = g grad chi at the quadrature points, from element nodes."""
    on = solved(name).fields
    el = on.space.element
    x, y = np.moveaxis(on.space.points, -1, 0)
    sides = np.stack(
        [on.space.places[:, 1] - on.space.places[:, 0], on.space.places[:, 2] - on.space.places[:, 0]], -1
    )
    for pair, arm in (
        (on.torsion, np.stack([-y, x], axis=-1)),
        (on.flexure[0], 0.0),
        (on.flexure[1], 0.0),
    ):
        local = pair.potential - pair.potential[:, :1]
        by_reference = np.einsum("ek,qkb->eqb", local, el.gradients)
        slope = np.einsum("eqb,eba->eqa", by_reference, np.linalg.inv(sides))
        peak = np.abs(pair.kinematic).max()
        # relative to each element's size: potentials are known to 1e-16 of their largest value
        sizes = np.sqrt(on.space.weights.sum(axis=1))[:, None, None]
        noise = 1e-14 * (np.abs(pair.potential).max() + peak * solved(name).outline.extent) / sizes
        stress = moduli(name)[1][..., None] * (slope + arm)
        assert (np.abs(stress - pair.kinematic) <= 1e-10 * peak + noise).all()


@pytest.mark.parametrize("name", SECTIONS)
def test_resultants(name: str) -> None:
    """Unit forces from both flexure fields, no force from both torsion fields."""
    on = solved(name).fields
    for kind, small in (("static", 1e-9), ("kinematic", 1e-9)):
        for axis, pair in enumerate(on.flexure):
            force = [on.space.integral(getattr(pair, kind)[..., i]) for i in (0, 1)]
            assert_allclose(force, np.eye(2)[axis], rtol=0, atol=small)
        twist = on.energy(on.torsion.kinematic)
        force = [on.space.integral(getattr(on.torsion, kind)[..., i]) for i in (0, 1)]
        assert_allclose(force, 0.0, rtol=0, atol=1e-8 * twist / solved(name).outline.extent)


@pytest.mark.parametrize("name", SECTIONS)
def test_shear_centre_interval(name: str) -> None:
    """Mean torque of both flexure fields, +- half the product of both gaps (Cauchy and Schwarz)."""
    solution = solve(SECTIONS[name], 1e-2)
    assert solution.mesh.passes == 1
    on = solution.fields
    x, y = np.moveaxis(on.space.points, -1, 0)
    g = on.moduli.g[:, None]
    twist = on.space.integral(((on.torsion.kinematic - on.torsion.static) ** 2).sum(-1) / g)
    for axis, sign, quantity in ((1, 1.0, "shear_centre_x"), (0, -1.0, "shear_centre_y")):
        pair = on.flexure[axis]
        both = [
            on.space.integral(x * field[..., 1] - y * field[..., 0])
            for field in (pair.kinematic, pair.static)
        ]
        gap = on.space.integral(((pair.kinematic - pair.static) ** 2).sum(-1) / g)
        half = 0.5 * np.sqrt(twist * gap)
        got = solution.quantities[quantity]
        extent = solution.outline.extent
        assert_allclose(
            got.value, on.inertia.centroid[1 - axis] + sign * np.mean(both), rtol=0, atol=1e-12 * extent
        )
        assert half <= got.half_width <= half + 2e-10 * extent
        # the two torques differ, and by no more than the product of the gaps
        assert abs(both[0] - both[1]) <= 2 * half + 1e-10 * extent


@pytest.mark.parametrize("name", CLOSED)
def test_hole_constants(name: str) -> None:
    """phi is zero outside, one constant on each hole; J = 2 integral phi + 2 sum of constant x area."""
    solution = solved(name)
    on = solution.fields
    phi = on.torsion.function
    scale = np.abs(phi).max()
    boundary = loops(on.space.mesh)
    j = 2 * on.space.integral(on.space.value(phi))
    order = on.space.element.order
    for i, loop in enumerate(boundary):
        nodes = [[s, *(3 + s * (order - 1) + np.arange(order - 1)), (s + 1) % 3] for s in loop.sides.tolist()]
        values = phi[loop.elements[:, None], np.array(nodes)]
        assert_allclose(values, values[0, 0], rtol=0, atol=1e-12 * scale)
        if i == 0:
            assert_allclose(values, 0.0, rtol=0, atol=1e-15 * scale)
        else:
            assert values[0, 0] > 1e-3 * scale
            j += 2 * values[0, 0] * abs(loop.area)
    assert_allclose(j, on.torque(on.torsion.static), rtol=1e-10)


@pytest.mark.parametrize("name", CLOSED)
def test_rate_of_twist_round_holes(name: str) -> None:
    """Round a hole the integral of tau ds / g is twice its area for unit twist, and zero for shear.

    On average over the wall round it: with psi one on the hole's boundary and zero farther in, by parts,
    integral R . curl psi = 2 (integral psi + hole area), which s / g must match and shear must not have.
    """
    on, g = solved(name).fields, moduli(name)[1]
    inner = on.space.element.order - 1
    x, y = np.moveaxis(on.space.points, -1, 0)
    arm = np.stack([-y, x], axis=-1)
    for loop in loops(on.space.mesh)[1:]:
        psi = np.zeros(on.space.count)
        for e, s in zip(loop.elements, loop.sides, strict=True):
            psi[on.space.nodes[e, [s, *(3 + s * inner + np.arange(inner)), (s + 1) % 3]]] = 1.0
        local = psi[on.space.nodes]
        slope = on.space.gradient(local)
        curl = np.stack([slope[..., 1], -slope[..., 0]], axis=-1)
        twice = 2 * (on.space.integral(on.space.value(local)) + abs(loop.area))
        assert_allclose(on.space.integral((arm * curl).sum(-1)), twice, rtol=1e-10)
        assert_allclose(on.space.integral((on.torsion.static * curl).sum(-1) / g), twice, rtol=1e-10)
        for pair in on.flexure:
            parts = (pair.static * curl).sum(-1) / g
            scale = on.space.integral(np.abs(parts))
            assert_allclose(on.space.integral(parts), 0.0, rtol=0, atol=1e-10 * scale)


@pytest.mark.parametrize("name", [n for n in SECTIONS if n != "mixed moduli"])
def test_inertia_of_the_mesh(name: str) -> None:
    """Area, centroid and second moments by quadrature are those of the outline."""
    solution = solved(name)
    on, m = solution.fields.inertia, solution.outline.moments(solution.fields.inertia.centroid)
    assert_allclose(on.area, m.area, rtol=1e-12)
    assert_allclose(m.first / m.area, 0.0, rtol=0, atol=1e-12 * solution.outline.extent)
    assert_allclose([on.xx, on.yy, on.xy], m.second, rtol=0, atol=1e-11 * (on.xx + on.yy))
    a, b = on.slopes(0.3, -0.7)
    assert_allclose([on.yy * a + on.xy * b, on.xy * a + on.xx * b], [0.3, -0.7], rtol=1e-12)


@pytest.mark.parametrize("name", SECTIONS)
def test_warping_function_about_the_shear_centre(name: str) -> None:
    """Mean zero, orthogonal to x and y; the value of I_w is the integral of its square (e-weighted)."""
    solution = solved(name)
    on, q, e = solution.fields, solution.quantities, moduli(name)[0]
    pole = np.array([q["shear_centre_x"].value, q["shear_centre_y"].value])
    omega = on.space.value(warping_function(on, pole))
    size = float(np.abs(omega).max())
    x, y = np.moveaxis(on.space.points, -1, 0)
    assert_allclose(on.space.integral(e * omega), 0.0, rtol=0, atol=1e-10 * size * on.inertia.area)
    # a pole off by d leaves d times the second moments
    reach = q["shear_centre_x"].half_width + q["shear_centre_y"].half_width + 1e-9 * solution.outline.extent
    for moment, own in ((x, on.inertia.yy), (y, on.inertia.xx)):
        left = on.space.integral(e * moment * omega)
        assert abs(left) <= (own + abs(on.inertia.xy)) * reach
    assert_allclose(q["warping_constant"].value, on.space.integral(e * omega**2), rtol=1e-9)
    assert q["warping_constant"].basis == "estimate"


def test_self_checks_pass_and_are_many() -> None:
    for name in SECTIONS:
        checks = solved(name).checks
        assert len(checks) >= 10
        assert [c for c in checks if not c.passed] == []
        assert all(c.passed == (c.value <= c.allowed) for c in checks)


@pytest.mark.parametrize("accuracy", [1e-3, 1e-4])
def test_two_walls_between_two_points_make_a_cell(accuracy: float) -> None:
    """A lens of two arcs, walls of unlike thickness: one hole, J between its sides, all checks passed."""
    points = {"a": (0.0, 0.0), "b": (60.0, 0.0)}
    walls = (
        Wall("upper", "a", "b", (2.0, 2.0), arc_through=(30.0, 25.0)),
        Wall("lower", "b", "a", (3.0, 3.0), arc_through=(30.0, -12.0)),
    )
    solution = solve(Section(points, walls), accuracy)
    assert solution.met
    assert len(solution.outline.loops) == 2
    assert solution.quantities["torsion_constant"].basis == "bound on the interpolated outline"
    assert all(c.passed for c in solution.checks)
