"""Flexure with Poisson's ratio, beside the comparison basis nu = 0.

For one material with nu the strain of flexure is grad chi + P (Love 1944, art. 229; sign of DESIGN's chi):

    P = -nu / (2 (1 + nu)) (a (x^2 - y^2)/2 + b x y,  b (y^2 - x^2)/2 + a x y)                   (1)

Its local rate of twist, half the curl of P, has the mean zero, so the torque of the field gives the shear
centre at zero mean twist.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .band import Array
from .fields import Fields, Pair, solve_pairs


@dataclass(frozen=True)
class PoissonFlexure:
    """Flexure of unit Vx and unit Vy for a Poisson's ratio.

    Parameters
    ----------
    nu : float
    shear_centre : (2,) array
        At zero mean twist, in the file's axes [L].
    energy_coefficient : (2,) array
        Shear coefficient by energy: (1 / integral of |tau|^2) over the area [-].
    mean_coefficient : (2,) array
        Shear coefficient by mean displacement and mean rotation (Cowper 1966) [-].
    pairs : (Pair, Pair)
        The fields.
    """

    nu: float
    shear_centre: Array
    energy_coefficient: Array
    mean_coefficient: Array
    pairs: tuple[Pair, Pair]


def poisson_flexure(fields: Fields, nu: float) -> PoissonFlexure:
    """Solve flexure with nu on the equations of a solution of one material.

    References
    ----------
    .. [1] G. R. Cowper, "The shear coefficient in Timoshenko's beam theory", J. Appl. Mech. 33, 1966,
       pp. 335-340: K A G times (mean slope plus mean rotation) = V, mean rotation = (integral of x w) / I.
    """
    space, section = fields.space, fields.inertia
    slopes = [section.slopes(1.0, 0.0), section.slopes(0.0, 1.0)]
    strain = [anticlastic_strain(space.points, s, nu) for s in slopes]
    pairs, _ = solve_pairs(fields.above, fields.below, fields.contours, fields.moduli, slopes, strain)
    torque = [0.5 * (fields.torque(p.kinematic) + fields.torque(p.static)) for p in pairs]
    centre = section.centroid + np.array([torque[1], -torque[0]])
    ratio = float(fields.moduli.g[0])
    area = space.integral(np.ones(space.points.shape[:2]))
    energy = np.array([0.5 * (fields.energy(p.kinematic) + fields.energy(p.static)) for p in pairs])
    tensor = np.array([[section.yy, section.xy], [section.xy, section.xx]]) / float(fields.moduli.e[0])
    mean = []
    for axis, (pair, p) in enumerate(zip(pairs, strain, strict=True)):
        chi = space.value(pair.potential)
        moments = np.array([space.integral(chi * space.points[..., i]) for i in (0, 1)])
        slope = space.integral(p[..., axis]) / area
        mean.append(1.0 / (area * ratio * (slope + np.linalg.solve(tensor, moments)[axis])))
    return PoissonFlexure(nu, centre, 1.0 / (energy * area * ratio), np.array(mean), (pairs[0], pairs[1]))


def anticlastic_strain(points: Array, slopes: Array, nu: float) -> Array:
    """P of equation (1) at points (e, q, 2)."""
    x, y = points[..., 0], points[..., 1]
    a, b = slopes
    half = 0.5 * (x**2 - y**2)
    return np.asarray(
        -nu / (2.0 * (1.0 + nu)) * np.stack([a * half + b * x * y, a * x * y - b * half], axis=-1)
    )
