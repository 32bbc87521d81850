"""The static fields are in equilibrium exactly: an evaluator of its own on the values at quadrature points.

Every component of tau is a polynomial on an element. It is fitted to the values at the element's quadrature
points, differentiated for the divergence, and evaluated on the edges for tractions. Nothing of the package's
stress functions is used.
"""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from fe_sections import (
    boomed_cells,
    bow_tie,
    channel,
    four_cells,
    lopsided_cell,
    mixed_cells,
    shape,
    triangular_cell,
)
from numpy.testing import assert_allclose

from fe_models import solve
from fe_models.fields import Fields

SECTIONS = {
    "channel": channel(50.0, 100.0, 6.0),
    "zed": shape("zed, three thicknesses", 20.0),
    "slanted angle": shape("angle, legs at 70 degrees", 40.0),
    "lopsided cell": lopsided_cell(),
    "triangular cell": triangular_cell(),
    "bow tie": bow_tie(),
    "four cells": four_cells(),
    "three cells": shape("tapering three-cell box", 15.0),
    "slender three cells": shape("tapering three-cell box", 300.0),
    "mixed moduli": mixed_cells(),
    "six cells, two materials, booms": boomed_cells(),
}
# Order 3 on all, order 4 with tiny elements at corners on some.
CASES = [(name, 1e-4) for name in SECTIONS]
CASES += [(n, 1e-5) for n in ("zed", "mixed moduli", "six cells, two materials, booms")]
CASES += [(n, 1e-6) for n in ("channel", "triangular cell", "bow tie", "slender three cells", "mixed moduli")]
# Largest imbalance anywhere over the mean stress: the finer the elements at corners, the more digits their
# stress functions lose.
ANYWHERE = {1e-4: 1e-9, 1e-5: 1e-8, 1e-6: 1e-7}


@cache
def fields(name: str, accuracy: float) -> Fields:
    solution = solve(SECTIONS[name], accuracy)
    # what is shown here is what makes it a bound
    assert solution.quantities["torsion_constant"].basis == "bound"
    return solution.fields


class Polynomials:
    """Fit of a field's values at quadrature points by one polynomial an element, in scaled coordinates."""

    def __init__(self, on: Fields, values: np.ndarray) -> None:
        # stress functions of order p plus a quadratic: degree max(p - 1, 2)
        degree = max(on.space.element.order - 1, 2)
        self.powers = [(i, j) for i in range(degree + 1) for j in range(degree + 1 - i)]
        # coordinates along two sides of the triangle, so that slender elements are fitted as well as others
        corners = on.space.places[:, :3]
        sides = np.stack([corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]], axis=-1)
        self.inverse = np.linalg.inv(sides)
        table = self.monomials(on.space.element.points)
        self.factors = np.linalg.pinv(table) @ values  # (e, m, 2)
        self.misfit = np.abs(table @ self.factors - values).max(axis=(1, 2))

    def monomials(self, at: np.ndarray) -> np.ndarray:
        u, v = at.T
        return np.stack([u**i * v**j for i, j in self.powers], axis=-1)

    def __call__(self, at: np.ndarray) -> np.ndarray:
        """Values at reference places (q, 2) of every element, (e, q, 2)."""
        return self.monomials(at) @ self.factors

    def divergence(self, at: np.ndarray) -> np.ndarray:
        """At reference places (q, 2), (e, q)."""
        u, v = at.T
        du = np.stack([i * u ** max(i - 1, 0) * v**j for i, j in self.powers], axis=-1)
        dv = np.stack([j * u**i * v ** max(j - 1, 0) for i, j in self.powers], axis=-1)
        by_local = np.stack([du @ self.factors, dv @ self.factors], axis=-1)  # (e, q, component, local)
        return np.einsum("eqcl,elc->eq", by_local, self.inverse)


def tractions(on: Fields, values: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """tau . n along the edges, (e, 3, 5); of each edge the other triangle's number or -1, and its edge."""
    p = on.space.places[:, :3]
    d = np.roll(p, -1, axis=1) - p
    normal = np.stack([d[..., 1], -d[..., 0]], axis=-1) / np.hypot(d[..., 0], d[..., 1])[..., None]
    corners = np.array([[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]])
    u = np.linspace(0.0, 1.0, 5)[:, None]
    at = np.array([(1 - u) * corners[i] + u * corners[(i + 1) % 3] for i in range(3)])
    fitted = Polynomials(on, values)(at.reshape(-1, 2)).reshape(len(p), 3, 5, 2)
    found = np.einsum("esqa,esa->esq", fitted, normal)
    t = on.space.mesh.triangles
    owner = {(int(r[i]), int(r[(i + 1) % 3])): (e, i) for e, r in enumerate(t) for i in range(3)}
    other = np.array([[owner.get((int(r[(i + 1) % 3]), int(r[i])), (-1, -1)) for i in range(3)] for r in t])
    return found, other[..., 0], other[..., 1]


def out_of_balance(on: Fields, values: np.ndarray, slopes: np.ndarray) -> dict[str, np.ndarray]:
    """What is missing of div tau = -f, of zero traction and of continuity, and what no polynomial fits.

    ``inside`` (e,): div tau + f times the element's size; ``boundary``, ``across`` (e, 3): largest traction
    and largest jump of an edge; ``misfit`` (e,). All are stresses.
    """
    size = np.sqrt(on.space.weights.sum(axis=1))
    fitted = Polynomials(on, values)
    e = on.moduli.e[:, None]
    inside = fitted.divergence(on.space.element.points) + e * (on.space.points @ slopes)
    normal, other, edge = tractions(on, values)
    row, s = np.nonzero(other >= 0)
    across = np.zeros(other.shape)
    beyond = normal[other[row, s], edge[row, s]][:, ::-1]
    across[row, s] = np.abs(normal[row, s] + beyond).max(axis=1)
    boundary = np.where(other < 0, np.abs(normal).max(axis=2), 0.0)
    assert (other < 0).sum() > 0
    return {
        "inside": np.abs(inside).max(axis=1) * size,
        "boundary": boundary,
        "across": across,
        "misfit": fitted.misfit,
    }


def assert_balanced(
    name: str, on: Fields, found: dict[str, np.ndarray], mean: float, unit: float, anywhere: float
) -> None:
    """Below 1e-9 of the mean stress wherever elements are not tiny; tiny ones leak next to nothing.

    Elements at singular corners are down to 1e-5 t small: a stress function known to 1e-16 of its largest
    value makes their stress uncertain by 1e-16 D / h, up to some 1e-9 at the default accuracy; what leaks
    through their edges stays below 1e-11 of the load (1e-9 of the largest stress function in torsion).
    """
    p = on.space.places[:, :3]
    length = np.hypot(*np.moveaxis(np.roll(p, -1, axis=1) - p, -1, 0))
    size = np.sqrt(on.space.weights.sum(axis=1))
    coarse = size > 0.05 * min(min(w.thickness) for w in SECTIONS[name].walls)
    assert coarse.sum() > 10
    slender = 10.0 if name.startswith("slender") else 1.0
    for what, value in found.items():
        assert value.max() <= slender * anywhere * mean, what
        assert value[coarse].max() <= 1e-9 * mean, what
        per_edge = value if value.ndim == 2 else value[:, None]
        assert (per_edge * length).max() <= 10.0 * slender * unit, what
        rms = np.sqrt(float(np.sum(per_edge**2 * length)) / float(length.sum()))
        assert rms <= 1e-9 * mean, what


@pytest.mark.parametrize(("name", "accuracy"), CASES)
def test_flexure_is_in_equilibrium(name: str, accuracy: float) -> None:
    """div tau = -f inside, tau . n continuous across edges and zero on every boundary, holes included.

    With e f for f where the moduli of walls differ.
    """
    on = fields(name, accuracy)
    for axis, pair in enumerate(on.flexure):
        found = out_of_balance(on, pair.static, on.inertia.slopes(1.0 - axis, float(axis)))
        assert_balanced(name, on, found, 1.0 / on.inertia.area, 1e-12, ANYWHERE[accuracy])


@pytest.mark.parametrize(("name", "accuracy"), CASES)
def test_torsion_is_in_equilibrium(name: str, accuracy: float) -> None:
    """The same with div tau = 0, against the mean stress of unit twist."""
    on = fields(name, accuracy)
    mean = float(np.sqrt(on.space.integral((on.torsion.static**2).sum(-1)) / on.inertia.area))
    unit = 1e-9 * float(np.abs(on.torsion.function).max())
    assert_balanced(name, on, out_of_balance(on, on.torsion.static, np.zeros(2)), mean, unit, 1e-9)


def test_the_evaluator_sees_what_is_out_of_balance() -> None:
    """The kinematic field fails on boundaries and edges, the static field of Vx fails inside for Vy."""
    on = fields("lopsided cell", 1e-4)
    mean = 1.0 / on.inertia.area
    of_vx, of_vy = on.inertia.slopes(1.0, 0.0), on.inertia.slopes(0.0, 1.0)
    kinematic = out_of_balance(on, on.flexure[1].kinematic, of_vy)
    assert kinematic["boundary"].max() > 1e-3 * mean
    assert kinematic["across"].max() > 1e-3 * mean
    assert out_of_balance(on, on.flexure[0].static, of_vy)["inside"].max() > 1e-2 * mean
    with pytest.raises(AssertionError):
        assert_balanced(
            "lopsided cell", on, out_of_balance(on, on.flexure[0].static, 1.001 * of_vx), mean, 1e-12, 1.0
        )


def test_polynomials_differentiate() -> None:
    """The evaluator's own check: (x^2 - 3 x y, y^2 / 2 + 4 x) has divergence 2 x - 3 y + y."""
    on = fields("zed", 1e-4)
    x, y = np.moveaxis(on.space.points, -1, 0)
    fitted = Polynomials(on, np.stack([x**2 - 3 * x * y, 0.5 * y**2 + 4 * x], axis=-1))
    found = fitted.divergence(on.space.element.points)
    coarse = on.space.weights.sum(axis=1) > 0.01 * on.space.weights.sum(axis=1).max()
    assert_allclose(found[coarse], (2 * x - 2 * y)[coarse], rtol=0, atol=1e-7 * np.abs(x).max())
