"""Torsion and flexure, each solved twice: from above by a warping function, from below by a stress function.

With R = (-y, x), G of the base material 1, and curl phi = (phi_y, -phi_x):

    torsion   k = g (grad omega + R),         s = curl phi                                       (1)
    flexure   k = g grad chi,                 s = curl phi + tau_p                               (2)

k is compatible and in equilibrium with every discrete test function; s is in equilibrium exactly. The two
errors are orthogonal, so  integral of |k - s|^2 / g  is the sum of both squared energy errors.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from .band import Array
from .space import Equations, Space, equations
from .stress_function import Contours, boundary_values, contours

# Passes of residual correction: the first solves, the second takes off round-off.
PASSES = 2


@dataclass(frozen=True)
class Moduli:
    """Ratios of each element: g for shear, e for direct stress (with its share), (elements,) arrays [-]."""

    g: Array
    e: Array


@dataclass(frozen=True)
class Inertia:
    """e-weighted integrals over the section, and its centroid in the file's axes."""

    area: float
    centroid: Array
    xx: float
    yy: float
    xy: float

    def slopes(self, vx: float, vy: float) -> Array:
        """(a, b) of f = a x + b y for shear forces: [Iyy Ixy; Ixy Ixx] (a, b) = (Vx, Vy)."""
        return np.linalg.solve(np.array([[self.yy, self.xy], [self.xy, self.xx]]), np.array([vx, vy]))


@dataclass(frozen=True)
class Pair:
    """Both fields of one problem.

    Parameters
    ----------
    potential : (e, k) array
        Warping function omega or flexure function chi at the nodes.
    kinematic, static : (e, q, 2) arrays
        k and s at the quadrature points.
    function : (e, k) array
        Stress function phi.
    """

    potential: Array
    kinematic: Array
    static: Array
    function: Array


@dataclass(frozen=True)
class Fields:
    """Torsion and the flexure of unit Vx and Vy on one mesh.

    Attributes
    ----------
    space, moduli, inertia, contours : mesh with its basis, ratios of the elements, e-weighted second moments
        [L^4], boundary values of the stress function
    torsion, flexure : kinematic and static field of unit rate of twist [L], and of unit Vx and Vy [1/L^2]
    residual : largest residual of the equations over their largest load [-]
    above, below : factorized equations of the kinematic and of the static fields
    """

    space: Space
    moduli: Moduli
    inertia: Inertia
    contours: Contours
    torsion: Pair
    flexure: tuple[Pair, Pair]
    residual: float
    above: Equations
    below: Equations

    @property
    def unknowns(self) -> int:
        """Unknowns of the larger of the two systems."""
        return max(self.above.size, self.below.size)

    def gap(self, pair: Pair) -> Array:
        """|k - s|^2 / g integrated over each element, (e,)."""
        difference = pair.kinematic - pair.static
        return np.asarray(np.sum(self.space.weights * np.sum(difference**2, axis=-1), axis=1) / self.moduli.g)

    def energy(self, field: Array) -> float:
        """Integral of |field|^2 / g."""
        return self.space.integral(np.sum(field**2, axis=-1) / self.moduli.g[:, None])

    @cached_property
    def twist(self) -> float:
        """Torsion constant of the kinematic field: torque per unit rate of twist, G_base = 1 [L^4]."""
        return self.energy(self.torsion.kinematic)

    def torque(self, field: Array) -> float:
        """Integral of x tau_y - y tau_x about the centroid."""
        p = self.space.points
        return self.space.integral(p[..., 0] * field[..., 1] - p[..., 1] * field[..., 0])


def inertia(space: Space, moduli: Moduli, centre: Array) -> Inertia:
    """e-weighted area, centroid and second moments about it, by quadrature on the mesh."""
    w = space.weights * moduli.e[:, None]
    p = space.points
    area = float(w.sum())
    shift = np.einsum("eq,eqa->a", w, p) / area
    r = p - shift
    xx, yy, xy = (float(np.sum(w * r[..., i] * r[..., j])) for i, j in ((1, 1), (0, 0), (0, 1)))
    return Inertia(area, centre + shift, xx, yy, xy)


def solve(space: Space, moduli: Moduli, section: Inertia) -> Fields:
    """Solve torsion and flexure on a space whose origin is the centroid."""
    p = space.points
    arm = np.stack([-p[..., 1], p[..., 0]], axis=-1)
    on = contours(space, moduli.e)
    above = equations(space, moduli.g, np.arange(space.count) - 1)
    below = equations(space, 1.0 / moduli.g, on.unknown)
    still = np.zeros(p.shape)
    slopes = [np.zeros(2), section.slopes(1.0, 0.0), section.slopes(0.0, 1.0)]
    pairs, left = solve_pairs(above, below, on, moduli, slopes, [arm, still, still])
    return Fields(space, moduli, section, on, pairs[0], (pairs[1], pairs[2]), left, above, below)


def solve_pairs(
    above: Equations, below: Equations, on: Contours, moduli: Moduli, slopes: list[Array], strain: list[Array]
) -> tuple[list[Pair], float]:
    """Pairs k = g (grad u + strain), s = curl phi + tau_p for loads f = a x + b y, and the residual left.

    Parameters
    ----------
    slopes : list of (2,) arrays
        (a, b) of each problem.
    strain : list of (e, q, 2) arrays
        Prescribed strain of each problem: R in torsion, nothing or the Poisson term in flexure.
    """
    space = above.space
    p = space.points
    g = moduli.g[:, None, None]
    loads = [space.load(moduli.e[:, None] * (p @ s)) for s in slopes]
    potentials, kinematic, left = _compatible(above, g, [g * r for r in strain], loads)
    lifts = [boundary_values(on, s) if s.any() else np.zeros(space.nodes.shape) for s in slopes]
    particular = [-0.5 * moduli.e[:, None, None] * s * p**2 for s in slopes]
    first = [t + _curl(space, lift) for t, lift in zip(particular, lifts, strict=True)]
    functions, static = _equilibrated(below, g, first, strain)
    functions = [phi + lift for phi, lift in zip(functions, lifts, strict=True)]
    return [Pair(*each) for each in zip(potentials, kinematic, static, functions, strict=True)], left


def warping(space: Space, moduli: Moduli) -> Array:
    """The warping function alone, (e, k): the kinematic half of torsion."""
    p = space.points
    arm = np.stack([-p[..., 1], p[..., 0]], axis=-1)
    above = equations(space, moduli.g, np.arange(space.count) - 1)
    g = moduli.g[:, None, None]
    potentials, _, _ = _compatible(above, g, [g * arm], [np.zeros(space.count)])
    return potentials[0]


def _compatible(
    system: Equations, g: Array, start: list[Array], loads: list[Array]
) -> tuple[list[Array], list[Array], float]:
    """Potentials and fields k = start + g grad u with integral k . grad v = load for every v."""
    space = system.space
    fields = list(start)
    potentials = [np.zeros(space.nodes.shape) for _ in fields]
    for _ in range(PASSES):
        missing = np.column_stack([load - space.flux_load(k) for load, k in zip(loads, fields, strict=True)])
        step = system.solve(missing)
        for i in range(len(fields)):
            local = step[:, i][space.nodes]
            potentials[i] = potentials[i] + local
            fields[i] = fields[i] + g * space.gradient(local)
    left = [
        np.abs(load - space.flux_load(k)).max() / max(space.flux_scale(k), np.finfo(float).tiny)
        for load, k in zip(loads, fields, strict=True)
    ]
    return potentials, fields, float(max(left))


def _equilibrated(
    system: Equations, g: Array, start: list[Array], pull: list[Array]
) -> tuple[list[Array], list[Array]]:
    """Stress functions, and s = start + curl phi with integral (s / g - pull) . curl psi = 0."""
    space = system.space
    fields = list(start)
    functions = [np.zeros(space.nodes.shape) for _ in fields]
    for _ in range(PASSES):
        missing = np.column_stack(
            [-space.flux_load(_turn(s / g - p)) for s, p in zip(fields, pull, strict=True)]
        )
        step = system.solve(missing)
        for i in range(len(fields)):
            local = step[:, i][space.nodes]
            functions[i] = functions[i] + local
            fields[i] = fields[i] + _curl(space, local)
    return functions, fields


def _curl(space: Space, local: Array) -> Array:
    """curl phi = (phi_y, -phi_x) at the quadrature points, (e, q, 2)."""
    slope = space.gradient(local)
    return np.stack([slope[..., 1], -slope[..., 0]], axis=-1)


def _turn(field: Array) -> Array:
    """The field whose product with grad psi is that of ``field`` with curl psi."""
    return np.stack([-field[..., 1], field[..., 0]], axis=-1)
