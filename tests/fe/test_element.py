"""The Lagrange triangle: nodality, partition of unity, gradients, quadrature, orders 1 to 6."""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose

from fe_models.element import EDGES, element, gradients, values

ORDERS = range(1, 7)


def inside(count: int = 40) -> np.ndarray:
    """Random places inside the reference triangle, (count, 2)."""
    p = np.random.default_rng(3).uniform(0.0, 1.0, (count, 2))
    over = p.sum(axis=1) > 1.0
    p[over] = 1.0 - p[over]
    return p


@pytest.mark.parametrize("order", ORDERS)
def test_nodes_are_as_many_as_polynomials_and_all_different(order: int) -> None:
    nodes = element(order).nodes
    assert nodes.shape == ((order + 1) * (order + 2) // 2, 2)
    apart = np.hypot(*(nodes[:, None] - nodes[None]).transpose(2, 0, 1))
    assert apart[~np.eye(len(nodes), dtype=bool)].min() > 0.9 / order


@pytest.mark.parametrize("order", ORDERS)
def test_edge_nodes_run_from_corner_to_corner(order: int) -> None:
    """Three corners, then the inner nodes of edges 0-1, 1-2, 2-0 in that direction, then the interior."""
    nodes = element(order).nodes
    assert_allclose(nodes[:3], [[0, 0], [1, 0], [0, 1]], atol=0, rtol=0)
    for i, (a, b) in enumerate(EDGES):
        own = nodes[3 + i * (order - 1) : 3 + (i + 1) * (order - 1)]
        u = np.arange(1, order)[:, None] / order
        assert_allclose(own, (1 - u) * nodes[a] + u * nodes[b], rtol=0, atol=1e-15)
    rest = nodes[3 * order :]
    assert (rest > 0).all()
    assert (rest.sum(axis=1) < 1).all()


@pytest.mark.parametrize("order", ORDERS)
def test_nodality(order: int) -> None:
    nodes = element(order).nodes
    assert_allclose(values(order, nodes), np.eye(len(nodes)), rtol=0, atol=1e-11)


@pytest.mark.parametrize("order", ORDERS)
def test_partition_of_unity(order: int) -> None:
    at = inside()
    assert_allclose(values(order, at).sum(axis=1), 1.0, rtol=0, atol=1e-11)
    assert_allclose(gradients(order, at).sum(axis=1), 0.0, rtol=0, atol=1e-10)


@pytest.mark.parametrize("order", ORDERS)
def test_gradients_against_differences(order: int) -> None:
    at, step = inside(), 1e-5
    for axis in (0, 1):
        shift = step * np.eye(2)[axis]
        difference = (values(order, at + shift) - values(order, at - shift)) / (2 * step)
        assert_allclose(gradients(order, at)[..., axis], difference, rtol=0, atol=3e-8 * order**3)


@pytest.mark.parametrize("order", ORDERS)
def test_polynomials_of_the_order_are_reproduced(order: int) -> None:
    """x^i y^j with i + j <= p exactly, x^(p+1) not."""
    at, nodes = inside(), element(order).nodes
    shape = values(order, at)
    for i in range(order + 1):
        for j in range(order + 1 - i):
            assert_allclose(
                shape @ (nodes[:, 0] ** i * nodes[:, 1] ** j),
                at[:, 0] ** i * at[:, 1] ** j,
                atol=1e-11,
                rtol=0,
            )
    left_over = np.abs(shape @ nodes[:, 0] ** (order + 1) - at[:, 0] ** (order + 1)).max()
    assert left_over > 1e-6


@pytest.mark.parametrize("order", ORDERS)
def test_quadrature_is_exact_to_twice_the_order(order: int) -> None:
    """The integral of x^i y^j over the triangle is i! j! / (i + j + 2)! (Dirichlet)."""
    el = element(order)
    assert (el.weights > 0).all()
    assert ((el.points > 0).all(axis=1) & (el.points.sum(axis=1) < 1)).all()
    for i in range(2 * order + 1):
        for j in range(2 * order + 1 - i):
            exact = math.factorial(i) * math.factorial(j) / math.factorial(i + j + 2)
            assert_allclose(
                el.weights @ (el.points[:, 0] ** i * el.points[:, 1] ** j), exact, rtol=1e-13, atol=0
            )
    # and it is a rule of finite degree: far above it the monomial is missed
    i = 4 * order + 6
    assert abs(el.weights @ el.points[:, 1] ** i * (i + 1) * (i + 2) - 1.0) > 1e-9


@pytest.mark.parametrize("order", ORDERS)
def test_tables_belong_to_the_quadrature_points(order: int) -> None:
    el = element(order)
    assert_allclose(el.values, values(order, el.points), rtol=0, atol=0)
    assert_allclose(el.gradients, gradients(order, el.points), rtol=0, atol=0)
