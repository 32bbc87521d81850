"""Lagrange triangles of any order on the reference triangle (0,0), (1,0), (0,1).

Local nodes: three corners, then the inner nodes of edges 0-1, 1-2, 2-0 in that direction, then the interior.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from scipy.special import roots_jacobi

from .band import Array

EDGES = ((0, 1), (1, 2), (2, 0))


@dataclass(frozen=True)
class Element:
    """Reference element of an order p with a quadrature rule exact to degree 2p.

    Parameters
    ----------
    order : int
    nodes : (k, 2) array
        Reference coordinates of the nodes [-].
    points : (q, 2) array
        Quadrature points [-].
    weights : (q,) array
        They add up to 1/2 [-].
    values : (q, k) array
        Basis functions at the points [-].
    gradients : (q, k, 2) array
        Their reference gradients at the points [-].
    """

    order: int
    nodes: Array
    points: Array
    weights: Array
    values: Array
    gradients: Array


@cache
def element(order: int) -> Element:
    """The Lagrange triangle of an order, 1 to 6."""
    nodes = _nodes(order)
    points, weights = _quadrature(order + 1)
    return Element(order, nodes, points, weights, values(order, points), gradients(order, points))


def values(order: int, at: Array) -> Array:
    """Basis functions at reference points, (q, 2) -> (q, k)."""
    return _monomials(order, at) @ _inverse(order)


def gradients(order: int, at: Array) -> Array:
    """Reference gradients of the basis functions, (q, 2) -> (q, k, 2)."""
    powers = _powers(order)
    x, y = at[:, 0, None], at[:, 1, None]
    i, j = powers[:, 0], powers[:, 1]
    dx = i * x ** np.maximum(i - 1, 0) * y**j
    dy = j * x**i * y ** np.maximum(j - 1, 0)
    return np.stack([dx @ _inverse(order), dy @ _inverse(order)], axis=-1)


def _powers(order: int) -> Array:
    return np.array([(i, d - i) for d in range(order + 1) for i in range(d, -1, -1)], dtype=float)


def _monomials(order: int, at: Array) -> Array:
    powers = _powers(order)
    return at[:, 0, None] ** powers[:, 0] * at[:, 1, None] ** powers[:, 1]


@cache
def _inverse(order: int) -> Array:
    return np.asarray(np.linalg.inv(_monomials(order, _nodes(order))), dtype=np.float64)


def _nodes(order: int) -> Array:
    corners = np.array([[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]])
    inner = np.arange(1, order) / order
    edges = [corners[a] + inner[:, None] * (corners[b] - corners[a]) for a, b in EDGES]
    inside = [[i / order, j / order] for j in range(1, order) for i in range(1, order - j)]
    return np.concatenate([corners, *edges, np.array(inside).reshape(-1, 2)])


def _quadrature(n: int) -> tuple[Array, Array]:
    """Gauss rule on the triangle collapsed from the square, exact to degree 2n - 2."""
    a, wa = (np.asarray(v, dtype=np.float64) for v in roots_jacobi(n, 0.0, 0.0))
    b, wb = (np.asarray(v, dtype=np.float64) for v in roots_jacobi(n, 1.0, 0.0))
    u, v = 0.5 * (a + 1.0), 0.5 * (b + 1.0)
    x = (u[:, None] * (1.0 - v[None, :])).ravel()
    y = np.broadcast_to(v, (n, n)).ravel()
    return np.column_stack([x, y]), (0.125 * wa[:, None] * wb[None, :]).ravel()
