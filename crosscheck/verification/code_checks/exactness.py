"""Polynomial exactness: what lies in the elements' spaces comes out to round-off, on distorted meshes too."""

from __future__ import annotations

import math
from functools import partial

import numpy as np
from numpy.typing import NDArray

import fe_models
from crosscheck.verification.code_checks import trial_meshes
from crosscheck.verification.code_checks.finding import Finding, code_check

GROUP = "polynomial exactness"
ROUND_OFF = 1e-11

Array = NDArray[np.float64]


def _distorted(order: int, g: float = 1.0) -> fe_models.Trial:
    """A rectangle 2 x 1.2 about the origin whose inner vertices are shaken."""
    x, y = np.linspace(-1.0, 1.0, 5), np.linspace(-0.6, 0.6, 4)
    vertices, triangles = trial_meshes.plate(x, y)
    inside = (np.abs(vertices[:, 0]) < 0.99) & (np.abs(vertices[:, 1]) < 0.59)
    shake = np.random.default_rng(5).uniform(-0.12, 0.12, vertices.shape)
    return fe_models.trial(vertices + inside[:, None] * shake, triangles, order, g=g)


def prescribed(order: int) -> Finding:
    """u of full degree p and, from p = 3 on, the flexure field of a rectangle, both sides, g = 1.7.

    On a rectangle tau = (a (A^2 - x^2)/2, b (B^2 - y^2)/2) balances f = a x + b y and leaves the sides free.
    """
    on = _distorted(order, g=1.7)
    x, y = on.space.points[..., 0], on.space.points[..., 1]
    powers = [(i, d - i) for d in range(order + 1) for i in range(d + 1)]
    factors = np.random.default_rng(7).uniform(-1.0, 1.0, len(powers))
    value, slope = np.zeros_like(x), np.zeros((*x.shape, 2))
    for c, (i, j) in zip(factors, powers, strict=True):
        value += c * x**i * y**j
        slope[..., 0] += c * i * x ** max(i - 1, 0) * y**j
        slope[..., 1] += c * j * x**i * y ** max(j - 1, 0)
    a, b = (0.9, -0.7) if order >= 3 else (0.0, 0.0)
    exact = np.stack([0.5 * a * (1.0 - x**2), 0.5 * b * (0.36 - y**2)], -1)
    pair = on.pair((a, b), exact / 1.7 - slope)
    off = on.space.value(pair.potential) - value
    off -= on.space.integral(off) / on.space.integral(np.ones_like(off))
    worst = {
        "potential": float(np.abs(off).max()),
        "kinematic field": float(np.abs(pair.kinematic - exact).max()),
        "static field": float(np.abs(pair.static - exact).max()),
    }
    told = ", ".join(f"{name} {v:.1e}" for name, v in worst.items())
    return Finding(max(worst.values()), ROUND_OFF, f"Largest errors: {told}.")


def quadrature() -> Finding:
    """Integrals of all monomials over the distorted rectangle, by the divergence theorem exact."""
    worst, order = 0.0, 4
    on = _distorted(order)
    x, y = on.space.points[..., 0], on.space.points[..., 1]
    for i in range(2 * order + 1):
        for j in range(2 * order + 1 - i):
            exact = 0.0 if i % 2 or j % 2 else 4.0 * 0.6 ** (j + 1) / ((i + 1) * (j + 1))
            worst = max(worst, abs(on.space.integral(x**i * y**j) - exact))
    return Finding(
        worst, ROUND_OFF, f"Monomials to degree {2 * order} over a rectangle: largest error {worst:.1e}."
    )


def on_circles(order: int) -> Finding:
    """Nodes of curved boundary sides lie on their circles, evenly by angle."""
    vertices, triangles = trial_meshes.ring(1.0, 2.0, 1, 10)
    on = fe_models.trial(vertices, triangles, order, circles=[((0.0, 0.0), 1.0), ((0.0, 0.0), 2.0)])
    worst = 0.0
    for loop, radius in zip(on.contours.loops, (2.0, 1.0), strict=True):
        places = on.space.places[loop.elements[:, None], on.contours.edge_nodes[loop.sides]]
        z = places[..., 0] + 1j * places[..., 1]
        turn = np.angle(z[:, 1:] / z[:, :-1])
        worst = max(worst, float(np.abs(np.abs(z) / radius - 1.0).max()))
        worst = max(worst, float(np.abs(np.abs(turn) - 0.2 * np.pi / order).max()))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


def triangle() -> Finding:
    """Equilateral triangle: omega is a cubic, J = sqrt(3) a^4/80 (Timoshenko and Goodier, art. 109)."""
    side = 2.0
    vertices = np.array([[0.0, 0.0], [side, 0.0], [0.5 * side, 0.5 * math.sqrt(3.0) * side]])
    fields = fe_models.trial(vertices, [[0, 1, 2]], 3).fields()
    exact = math.sqrt(3.0) * side**4 / 80.0
    high = fields.energy(fields.torsion.kinematic)
    low = high - float(fields.gap(fields.torsion).sum())
    off = max(abs(high / exact - 1.0), abs(low / exact - 1.0))
    return Finding(
        off,
        ROUND_OFF,
        f"J from below {low:.15g}, from above {high:.15g}, exact {exact:.15g}, in one element.",
    )


def rectangle_in_flexure(order: int) -> Finding:
    """Rectangle b x h at nu = 0: A_V = 5/6 A both ways, shear centre at the centroid."""
    on = _distorted(order)
    fields = on.fields()
    area = 2.0 * 1.2
    worst, told = 0.0, []
    for axis, name in enumerate("xy"):
        pair = fields.flexure[axis]
        ways = [1.0 / fields.energy(field) for field in (pair.kinematic, pair.static)]
        torques = [fields.torque(field) for field in (pair.kinematic, pair.static)]
        worst = max([worst, *(abs(v / (area * 5.0 / 6.0) - 1.0) for v in ways), *map(abs, torques)])
        told.append(f"A_V{name} {ways[0]:.14g} and {ways[1]:.14g}")
    return Finding(worst, ROUND_OFF, f"{'; '.join(told)}; exact {area * 5.0 / 6.0:.14g}.")


CHECKS = (
    *(
        code_check(
            f"polynomials of degree {order} on a distorted mesh",
            GROUP,
            "fe",
            partial(prescribed, order),
            quick=True,
        )
        for order in (1, 2, 3, 4)
    ),
    code_check("quadrature", GROUP, "fe", quadrature, quick=True),
    *(
        code_check(f"nodes on circles, order {p}", GROUP, "fe", partial(on_circles, p), quick=True)
        for p in (2, 3, 4)
    ),
    code_check("torsion of an equilateral triangle", GROUP, "fe", triangle, quick=True),
    *(
        code_check(
            f"flexure of a rectangle, elements of order {order}",
            GROUP,
            "fe",
            partial(rectangle_in_flexure, order),
            quick=True,
        )
        for order in (3, 4)
    ),
)
