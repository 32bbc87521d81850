"""Stress at any place of the section."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .band import Array
from .element import gradients, values
from .faces import Actions, load_stress
from .fields import Fields
from .mesh import Index
from .poisson import PoissonFlexure
from .sampling import Samples

# Elements tried for each place, and how far outside an element a place may be found [-].
TRIED = 12
OUTSIDE = 1e-6


@dataclass(frozen=True)
class PointStress:
    """Shear stress at n places, the mean of both fields.

    Parameters
    ----------
    shear : (n, 2) array
        (tau_x, tau_y) [F/L^2].
    error : (n,) array
        Half the magnitude of the fields' difference: an estimate, which may understate the error of a single
        point by a small factor [F/L^2].
    """

    shear: Array
    error: Array

    @property
    def magnitude(self) -> Array:
        """|tau|, (n,) [F/L^2]."""
        return np.hypot(*self.shear.T)


def point_stress(
    fields: Fields, places: Array, actions: Actions, poisson: PoissonFlexure | None = None
) -> PointStress:
    """Shear stress of a load at places (n, 2) in the file's axes; flexure with Poisson's ratio where given.

    Raises
    ------
    ValueError
        A place outside the section.
    """
    samples = located(fields, np.asarray(places, dtype=float).reshape(-1, 2) - fields.inertia.centroid)
    static, kinematic = load_stress(fields, samples, actions, poisson)
    mean, apart = 0.5 * (static + kinematic), 0.5 * (static - kinematic)
    return PointStress(mean[:, 0], np.hypot(*apart[:, 0].T))


def located(fields: Fields, places: Array) -> Samples:
    """Elements that hold places (n, 2) relative to the centroid, one sample each."""
    space = fields.space
    corners = space.places[:, :3]
    inverse = np.linalg.inv((corners[:, 1:] - corners[:, :1]).transpose(0, 2, 1))
    elements, reference = [], []
    for place in places:
        flat = np.einsum("eab,eb->ea", inverse, place - corners[:, 0])
        inside = np.minimum(flat.min(axis=1), 1.0 - flat.sum(axis=1))
        best = None
        for e in np.argsort(-inside)[:TRIED].tolist():
            at = _inverted(space.places[e], space.element.order, place, flat[e])
            depth = float(min(at.min(), 1.0 - at.sum()))
            if best is None or depth > best[0]:
                best = depth, e, at
            if depth >= 0.0:
                break
        if best is None or best[0] < -OUTSIDE:
            x, y = place + fields.inertia.centroid
            raise ValueError(f"place ({x:.6g}, {y:.6g}) lies outside the section")
        elements.append(best[1])
        reference.append(best[2])
    return Samples(np.array(elements), np.array(reference)[:, None])


def elements_at(fields: Fields, elements: Index, places: Array) -> Samples:
    """Places (c, q, 2) in the file's axes in elements (c,) that are known to hold them."""
    order, nodes = fields.space.element.order, fields.space.places[elements]
    rows = (places - fields.inertia.centroid).reshape(len(elements), -1, 2)
    at = [
        [_inverted(own, order, place, np.full(2, 1.0 / 3.0)) for place in row]
        for own, row in zip(nodes, rows, strict=True)
    ]
    return Samples(elements, np.array(at))


def _inverted(nodes: Array, order: int, place: Array, start: Array) -> Array:
    """Reference coordinates of a place in an element with nodes (k, 2), by Newton's method."""
    at = np.clip(start, -0.5, 1.5)
    for _ in range(20):
        miss = place - (values(order, at[None]) @ nodes)[0]
        jacobian = np.einsum("ka,kb->ab", nodes, gradients(order, at[None])[0])
        step = np.linalg.solve(jacobian, miss)
        at = at + step
        if np.abs(step).max() < 1e-13 or np.abs(at).max() > 10.0:
            break
    return at
