"""Both fields of the unit loads at chosen points of elements."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .band import Array
from .element import gradients, values
from .fields import Fields
from .mesh import Index
from .poisson import PoissonFlexure, anticlastic_strain


@dataclass(frozen=True)
class Samples:
    """Points in elements: c elements with q points each.

    Parameters
    ----------
    elements : (c,) array of int
    reference : (c, q, 2) array
        Reference coordinates [-].
    """

    elements: Index
    reference: Array


def places(fields: Fields, at: Samples) -> Array:
    """Sampled points relative to the centroid, (c, q, 2) [L]."""
    space = fields.space
    c, q, _ = at.reference.shape
    basis = values(space.element.order, at.reference.reshape(-1, 2)).reshape(c, q, -1)
    return np.einsum("cka,cqk->cqa", space.places[at.elements], basis)


def function_values(fields: Fields, at: Samples, local: Array) -> Array:
    """A function given by its element values (e, k) at the sampled points, (c, q)."""
    c, q, _ = at.reference.shape
    basis = values(fields.space.element.order, at.reference.reshape(-1, 2)).reshape(c, q, -1)
    return np.einsum("ck,cqk->cq", local[at.elements], basis)


def stresses(fields: Fields, at: Samples, poisson: PoissonFlexure | None = None) -> tuple[Array, Array]:
    """Static and kinematic stress of unit Vx, unit Vy and unit T at the sampled points.

    Flexure is that of nu = 0, or with Poisson's ratio where its fields are given.

    Returns
    -------
    two (3, c, q, 2) arrays
        Per unit force [1/L^2] and per unit torque [1/L^3].
    """
    space, e = fields.space, at.elements
    c, q, _ = at.reference.shape
    slopes = gradients(space.element.order, at.reference.reshape(-1, 2)).reshape(c, q, -1, 2)
    inverse = np.linalg.inv(np.einsum("cka,cqkb->cqab", space.offsets[e], slopes))
    points = places(fields, at)
    arm = np.stack([-points[..., 1], points[..., 0]], axis=-1)
    g = fields.moduli.g[e][:, None, None]
    twist = fields.twist

    def gradient(local: Array) -> Array:
        reference = np.einsum("ck,cqkb->cqb", local - local[:, :1], slopes)
        return np.asarray(np.einsum("cqb,cqba->cqa", reference, inverse))

    static, kinematic = [], []
    flexure = fields.flexure if poisson is None else poisson.pairs
    for axis, pair in enumerate((*flexure, fields.torsion)):
        phi, u = gradient(pair.function[e]), gradient(pair.potential[e])
        s = np.stack([phi[..., 1], -phi[..., 0]], axis=-1)
        if axis < 2:
            a_b = fields.inertia.slopes(1.0 - axis, float(axis))
            static.append(s - 0.5 * fields.moduli.e[e][:, None, None] * a_b * points**2)
            if poisson is not None:
                u = u + anticlastic_strain(points, a_b, poisson.nu)
            kinematic.append(g * u)
        else:
            static.append(s / twist)
            kinematic.append(g * (u + arm) / twist)
    return np.array(static), np.array(kinematic)
