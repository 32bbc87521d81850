"""Manufactured solutions: observed against expected order of convergence of both finite-element fields.

A field k* without traction on the boundary and with div k* = -e (a x + b y), and any smooth u*, solve

    k = g (grad u + P)  and  s = curl phi + tau_p   with the prescribed strain   P = k*/g - grad u*       (1)

on both sides at once: the kinematic side must find u* and k*, the static side k* (a stress function that is
a constant on each hole, with the jumps that a hole and a change of e demand). Elements of order p lose h^p in
the fields and h^(p+1) in the potential (Strang and Fix, An Analysis of the Finite Element Method, 1973,
chapter 3; from memory).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import NDArray

import fe_models
from crosscheck.verification.check import Series
from crosscheck.verification.code_checks import trial_meshes
from crosscheck.verification.code_checks.finding import Finding, code_check

GROUP = "manufactured solutions"
ORDERS = (1, 2, 3, 4)
ALLOWED = 0.1
# Wave number of u*: high enough for the interior to govern, since what interpolated curved sides add to the
# error shrinks half an order faster and would spoil the observed order.
WAVE = 3.3

Array = NDArray[np.float64]
Part = Callable[[Array, Array], Array]


@dataclass(frozen=True)
class Problem:
    """A manufactured problem.

    Parameters
    ----------
    trial : callable (n, order) -> Trial
        Mesh of size proportional to 1/n.
    sizes : three numbers n for orders 1 and 2, and three for orders 3 and 4
    slopes : (a, b) of the load
    field : callable (points, e) -> k*, both at the quadrature points
    """

    trial: Callable[[int, int], fe_models.Trial]
    sizes: tuple[tuple[int, int, int], tuple[int, int, int]]
    slopes: tuple[float, float]
    field: Part


def potential(points: Array) -> tuple[Array, Array]:
    """u* and its gradient, smooth and without any symmetry."""
    x, y = points[..., 0], points[..., 1]
    value = np.sin(WAVE * x + 0.4) * np.exp(0.7 * y)
    slope = np.stack([WAVE * np.cos(WAVE * x + 0.4) * np.exp(0.7 * y), 0.7 * value], -1)
    return value, slope


def _plate(n: int, order: int) -> fe_models.Trial:
    vertices, triangles = trial_meshes.plate(np.linspace(-1.2, 1.2, n + 1), np.linspace(-0.8, 0.8, n + 1))
    return fe_models.trial(vertices, triangles, order, g=1.7)


def _plate_field(points: Array, e: Array) -> Array:
    """tau of a rectangle in flexure and the curl of a function that vanishes on its sides."""
    x, y = points[..., 0], points[..., 1]
    a, b = 1.0, -0.6
    flexure = np.stack([0.5 * a * (1.44 - x**2), 0.5 * b * (0.64 - y**2)], -1)
    return flexure + _curl_of_product(x, y, 1.44 - x**2, -2.0 * x, 0.64 - y**2, -2.0 * y)


def _curl_of_product(x: Array, y: Array, px: Array, dpx: Array, py: Array, dpy: Array) -> Array:
    """curl of px(x) py(y) m with m = exp(0.5 x) cos y."""
    m = np.exp(0.5 * x) * np.cos(y)
    m_y = -np.exp(0.5 * x) * np.sin(y)
    return np.stack([px * (dpy * m + py * m_y), -py * (dpx * m + px * 0.5 * m)], -1)


# Where e and g change, on x = 0: e_1 A_1^2 = e_2 A_2^2 keeps the load of f = x in balance.
REACH = (1.6, 0.8)
STIFFER = 4.0


def _two_materials(n: int, order: int) -> fe_models.Trial:
    x = np.concatenate([np.linspace(-REACH[0], 0.0, 2 * n + 1), np.linspace(0.0, REACH[1], n + 1)[1:]])
    vertices, triangles = trial_meshes.plate(x, np.linspace(-0.7, 0.7, 2 * n + 1))
    right = vertices[triangles, 0].mean(axis=1) > 0.0
    return fe_models.trial(
        vertices, triangles, order, e=np.where(right, STIFFER, 1.0), g=np.where(right, 2.5, 1.0)
    )


def _two_materials_field(points: Array, e: Array) -> Array:
    """tau_x from the left edge on, so that it is continuous at the interface and nothing at both edges."""
    x, y = points[..., 0], points[..., 1]
    flexure = np.stack([0.5 * (REACH[0] ** 2 - e * x**2), 0.25 * e * (0.49 - y**2)], -1)
    px = (x + REACH[0]) * (REACH[1] - x)
    return flexure + _curl_of_product(x, y, px, REACH[1] - REACH[0] - 2.0 * x, 0.49 - y**2, -2.0 * y)


INNER, OUTER = 0.6, 1.5


def _ring(n: int, order: int) -> fe_models.Trial:
    vertices, triangles = trial_meshes.ring(INNER, OUTER, n, 8 * n)
    circles = [((0.0, 0.0), INNER), ((0.0, 0.0), OUTER)]
    return fe_models.trial(vertices, triangles, order, circles=circles)


def _ring_field(points: Array, e: Array) -> Array:
    """grad of the harmonic-plus-cubic flexure function of a ring, and a flow round its hole.

    chi = (c r + d/r - r^3/8) (a cos + b sin); d chi/dr = 0 at the radii r_i and r_o gives
    c = 3 (r_o^2 + r_i^2)/8 and d = 3 r_o^2 r_i^2/8.
    """
    x, y = points[..., 0], points[..., 1]
    r = np.hypot(x, y)
    a, b = 0.8, 0.5
    c, d = 0.375 * (INNER**2 + OUTER**2), 0.375 * (INNER * OUTER) ** 2
    over, rate = c + d / r**2 - r**2 / 8.0, -2.0 * d / r**4 - 0.25
    load = a * x + b * y
    flexure = np.stack([a * over + load * rate * x, b * over + load * rate * y], -1)
    # psi = (R - r) (1 + (r - r_i) cos(2 theta) / 2): a constant on the hole, nothing outside
    cos2, sin2 = (x**2 - y**2) / r**2, 2.0 * x * y / r**2
    psi_r = -1.0 - 0.5 * (r - INNER) * cos2 + 0.5 * (OUTER - r) * cos2
    psi_t = -(OUTER - r) * (r - INNER) * sin2 / r
    gradient = np.stack([psi_r * x / r - psi_t * y / r, psi_r * y / r + psi_t * x / r], -1)
    return flexure + np.stack([gradient[..., 1], -gradient[..., 0]], -1)


HALF_ANGLE = 0.9


def _strip(n: int, order: int) -> fe_models.Trial:
    """One curved wall about the origin, symmetric about the x axis, meshed as strips are."""
    radius, thickness = 0.5 * (INNER + OUTER), OUTER - INNER
    x, y = radius * np.cos(HALF_ANGLE), radius * np.sin(HALF_ANGLE)
    wall = fe_models.Wall("arc", "low", "top", (thickness, thickness), arc_through=(radius, 0.0))
    section = fe_models.Section({"low": (x, -y), "top": (x, y)}, (wall,))
    return fe_models.strip_trial(section, wall, 2 * n, n, order)


def _strip_field(points: Array, e: Array) -> Array:
    """f = y, whose load over the sector vanishes for every radius; then the curl of a bubble."""
    x, y = points[..., 0], points[..., 1]
    r, a = np.hypot(x, y), np.arctan2(y, x)
    total = (OUTER**3 - INNER**3) / 3.0
    along = (r - INNER) / (OUTER - INNER)
    radial = -((r**3 - INNER**3) / 3.0 - total * along) * np.sin(a) / r
    turning = total / (OUTER - INNER) * (np.cos(a) - np.cos(HALF_ANGLE))
    bubble_r = (OUTER + INNER - 2.0 * r) * (HALF_ANGLE**2 - a**2) * np.exp(a)
    bubble_a = (r - INNER) * (OUTER - r) * (HALF_ANGLE**2 - a**2 - 2.0 * a) * np.exp(a)
    radial, turning = radial + bubble_a / r, turning - bubble_r
    return np.stack([radial * x / r - turning * y / r, radial * y / r + turning * x / r], -1)


PROBLEMS = {
    "rectangle": Problem(_plate, ((6, 12, 24), (4, 8, 16)), (1.0, -0.6), _plate_field),
    "two materials": Problem(_two_materials, ((4, 8, 16), (2, 4, 8)), (1.0, 0.5), _two_materials_field),
    "ring with a hole": Problem(_ring, ((4, 8, 16), (4, 8, 16)), (0.8, 0.5), _ring_field),
    "curved strip": Problem(_strip, ((6, 12, 24), (4, 8, 16)), (0.0, 1.0), _strip_field),
}


def errors(problem: Problem, n: int, order: int) -> tuple[float, float, float]:
    """Errors of the kinematic field, of the static field and of the potential, square roots of integrals."""
    on = problem.trial(n, order)
    space = on.space
    e = np.broadcast_to(on.moduli.e[:, None], space.points.shape[:2])
    exact = problem.field(space.points, e)
    value, slope = potential(space.points)
    pair = on.pair(problem.slopes, exact / on.moduli.g[:, None, None] - slope)
    off = space.value(pair.potential) - value
    off -= space.integral(off) / space.integral(np.ones_like(off))
    fields = [space.integral(((k - exact) ** 2).sum(axis=-1)) for k in (pair.kinematic, pair.static)]
    return float(np.sqrt(fields[0])), float(np.sqrt(fields[1])), float(np.sqrt(space.integral(off**2)))


WORDS = ("kinematic field", "static field", "potential")


def order_found(name: str, order: int) -> Finding:
    """Observed orders between the two finer of three meshes of a problem."""
    problem = PROBLEMS[name]
    sizes = problem.sizes[0 if order <= 2 else 1]
    found = np.array([errors(problem, n, order) for n in sizes])
    observed = np.log2(found[-2] / found[-1])
    expected = np.array([order, order, order + 1.0])
    told = ", ".join(f"{w} {o:.3f}" for w, o in zip(WORDS, observed, strict=True))
    series = {
        word: Series(
            tuple(1.0 / n for n in sizes),
            tuple(float(v) for v in found[:, i]),
            "element size",
            "error",
            float(observed[i]),
            float(expected[i]),
        )
        for i, word in enumerate(WORDS)
    }
    return Finding(
        float(np.abs(observed - expected).max()),
        ALLOWED,
        f"Observed orders: {told}; expected {order}, {order} and {order + 1}.",
        series,
    )


FEATURES = {
    "two materials": {"two materials"},
    "ring with a hole": {"hole in a solid", "outline solid"},
    "curved strip": {"arc"},
}
CHECKS = tuple(
    code_check(
        f"order of convergence, {name}, elements of order {order}",
        GROUP,
        "fe",
        partial(order_found, name, order),
        quick=order == 3,
        features=FEATURES.get(name, ()),
    )
    for name in PROBLEMS
    for order in ORDERS
)
