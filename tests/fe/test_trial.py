"""Trials on meshes that the caller brings: curved sides, and what a field leaves unbalanced."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from fe_sections import mixed_cells
from numpy.testing import assert_allclose

import fe_models
from crosscheck.verification.code_checks.trial_meshes import ring


@pytest.mark.parametrize("order", [1, 2, 3, 4])
def test_sides_on_circles_follow_them(order: int) -> None:
    vertices, triangles = ring(1.0, 2.0, 2, 12)
    circles = [((0.0, 0.0), 1.0), ((0.0, 0.0), 2.0)]
    on = fe_models.trial(vertices, triangles, order, circles=circles)
    assert len(on.mesh.bends) == 24
    area = on.space.integral(np.ones(on.space.points.shape[:2]))
    assert_allclose(area, 3.0 * np.pi, rtol={1: 0.05, 2: 2e-3, 3: 2e-3, 4: 2e-6}[order])
    loops = on.contours.loops
    at = on.space.places[loops[0].elements[:, None], on.contours.edge_nodes[loops[0].sides]]
    assert_allclose(np.hypot(*at.reshape(-1, 2).T), 2.0, rtol=1e-14)


def test_derivatives_of_the_map_shrink_with_their_order() -> None:
    """Halving an arc divides the p-th derivative of the map by 2^p: the element's order rests on it."""
    found = []
    for round_it in (16, 32):
        vertices, triangles = ring(1.0, 2.0, 2, round_it)
        on = fe_models.trial(vertices, triangles, 3, circles=[((0.0, 0.0), 2.0)])
        outer = on.contours.loops[0].elements
        # third derivatives: coefficients of the cubic monomials, by the nodes' finite differences
        nodes = on.space.element.nodes
        powers = [(i, d - i) for d in range(4) for i in range(d + 1)]
        monomials = np.stack([nodes[:, 0] ** i * nodes[:, 1] ** j for i, j in powers], -1)
        coefficients = np.linalg.solve(monomials, on.space.places[outer])
        found.append(float(np.abs(coefficients[:, -4:]).max()))
    assert_allclose(np.log2(found[0] / found[1]), 3.0, atol=0.1)


def test_strip_alone() -> None:
    """A tapered arc as a strip: area by quadrature of the band."""
    wall = fe_models.Wall("w", "a", "b", (2.0, 1.0), arc_through=(0.0, 10.0))
    section = fe_models.Section({"a": (10.0, 0.0), "b": (-10.0, 0.0)}, (wall,))
    on = fe_models.strip_trial(section, wall, 12, 2, 4)
    assert_allclose(on.space.integral(np.ones(on.space.points.shape[:2])), np.pi * 10.0 * 1.5, rtol=1e-7)


def test_imbalance_is_seen() -> None:
    """The static fields are in balance, kinematic ones are not, nor is a static one that lost a part."""
    fields = fe_models.solve(mixed_cells(), 1e-4).fields
    assert (fe_models.imbalance(fields) < 1e-9).all()
    swapped = replace(fields.torsion, static=fields.torsion.kinematic)
    assert fe_models.imbalance(replace(fields, torsion=swapped))[0] > 1e-5
    lost = replace(fields.flexure[0], static=fields.flexure[0].static * (1.0 + 1e-6))
    assert fe_models.imbalance(replace(fields, flexure=(lost, fields.flexure[1])))[1] > 1e-8
