"""Stress at the real faces of strips, and peaks on filleted and curved boundaries.

Where the mesh is smooth the two fields lie on either side of the true stress, so their mean is reported and
half their difference is its error: an estimate.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from .band import Array
from .element import EDGES
from .fields import Fields
from .intervals import warping_function
from .mesh import StripMesh
from .poisson import PoissonFlexure
from .recovery import in_triangles
from .sampling import Samples, function_values, places, stresses
from .space import strip_coordinates

# Points on each curved element edge at which a peak is looked for.
EDGE_POINTS = 9


@dataclass(frozen=True)
class Actions:
    """Stress resultants on the face whose outward normal points at the viewer.

    Parameters
    ----------
    shear : (Vx, Vy) [F]
    torque : about the shear centre, anticlockwise positive [F L]
    axial : tension positive [F]
    moment : (Mx, My): Mx > 0 puts +y in tension, My > 0 puts +x in tension [F L]
    bimoment : tension where the warping function is positive [F L^2]
    """

    shear: tuple[float, float] = (0.0, 0.0)
    torque: float = 0.0
    axial: float = 0.0
    moment: tuple[float, float] = (0.0, 0.0)
    bimoment: float = 0.0


@dataclass(frozen=True)
class FaceStress:
    """Stress at n places on the left (row 0) and right (row 1) face of a wall.

    Parameters
    ----------
    places : (2, n, 2) array
        In the file's axes [L].
    direct : (2, n) array
        sigma, exact for the section's own constants [F/L^2].
    shear, error : (2, n) arrays
        tau along the wall from start to end and its estimated error [F/L^2].
    """

    places: Array
    direct: Array
    shear: Array
    error: Array

    @property
    def von_mises(self) -> Array:
        """sqrt(sigma^2 + 3 tau^2), (2, n) [F/L^2]."""
        return np.sqrt(self.direct**2 + 3.0 * self.shear**2)


@dataclass(frozen=True)
class Peak:
    """Largest shear stress on a curved boundary.

    Parameters
    ----------
    where : str
        The joint or strip it belongs to.
    place : (2,) array
        In the file's axes [L].
    value, error : float
        Magnitude and its estimated error [F/L^2].
    """

    where: str
    place: Array
    value: float
    error: float


def face_stress(
    fields: Fields, strip: StripMesh, at: ArrayLike, centre: Array, actions: Actions
) -> FaceStress:
    """Stress at distances ``at`` [L] along a wall, inside its strip, on both faces.

    ``centre`` is the shear centre, about which warping by the bimoment is taken.
    """
    s = np.atleast_1d(np.asarray(at, dtype=float))
    return sampled_faces(fields, _on_faces(strip, s), strip.band.direction(s), centre, actions)


def sampled_faces(
    fields: Fields, samples: Samples, direction: Array, centre: Array, actions: Actions
) -> FaceStress:
    """Stress at samples on the left face and then on the right one of a wall of a direction (n, 2)."""
    shear, error = _shear(fields, samples, np.concatenate([direction, direction])[:, None], actions)
    points = places(fields, samples)
    e = fields.moduli.e[samples.elements][:, None]
    direct = e * _direct(fields, points, actions)
    if actions.bimoment:
        omega = warping_function(fields, centre)
        squared = fields.space.integral(fields.moduli.e[:, None] * fields.space.value(omega) ** 2)
        direct = direct + e * actions.bimoment * function_values(fields, samples, omega) / squared
    n = len(direction)
    rows = (points[:, 0] + fields.inertia.centroid).reshape(2, n, 2)
    return FaceStress(rows, direct.reshape(2, n), shear.reshape(2, n), error.reshape(2, n))


def _on_faces(strip: StripMesh, s: Array) -> Samples:
    """The points (s, n = 1) and then (s, n = -1) in the triangles that have an edge on that face."""
    columns = np.clip(np.searchsorted(strip.s, s, side="right") - 1, 0, len(strip.s) - 2)
    corner_s, corner_n = strip_coordinates(strip.s, strip.n)
    per = strip.triangles.shape[1]
    rows, sides = [], []
    for side in (1.0, -1.0):
        on_face = np.isclose(corner_n.reshape(-1, per, 3), side).sum(axis=2) == 2
        rows.append(columns * per + on_face.argmax(axis=1)[columns])
        sides.append(np.full(len(s), side))
    row, n, both = np.concatenate(rows), np.concatenate(sides), np.concatenate([s, s])
    reference = in_triangles(corner_s[row], corner_n[row], both[:, None], n[:, None])
    return Samples(strip.triangles.ravel()[row], reference)


def _shear(fields: Fields, samples: Samples, along: Array, actions: Actions) -> tuple[Array, Array]:
    """Stress along a direction for a load, and half the difference of the two fields, (c, q)."""
    static, kinematic = load_stress(fields, samples, actions)
    s, k = np.sum(static * along, axis=-1), np.sum(kinematic * along, axis=-1)
    return 0.5 * (s + k), 0.5 * np.abs(s - k)


def load_stress(
    fields: Fields, samples: Samples, actions: Actions, poisson: PoissonFlexure | None = None
) -> tuple[Array, Array]:
    """Static and kinematic shear stress of a load at sampled points, two (c, q, 2) arrays."""
    factors = np.array([*actions.shear, actions.torque])
    static, kinematic = stresses(fields, samples, poisson)
    return np.tensordot(factors, static, axes=1), np.tensordot(factors, kinematic, axes=1)


def _direct(fields: Fields, points: Array, actions: Actions) -> Array:
    """N/A + a x + b y with [Iyy Ixy; Ixy Ixx] (a, b) = (My, Mx), (c, q)."""
    a_b = fields.inertia.slopes(actions.moment[1], actions.moment[0])
    return np.asarray(actions.axial / fields.inertia.area + points @ a_b)


def boundary_peaks(fields: Fields, actions: Actions) -> list[Peak]:
    """Largest shear stress on the filleted and curved boundary of every joint, largest first.

    A sharp re-entrant corner has no peak stress: only curved boundaries are looked at.
    """
    mesh = fields.space.mesh
    found: dict[str, Peak] = {}
    if not mesh.bends:
        return []
    owner = {
        (int(mesh.triangles[e, a]), int(mesh.triangles[e, b])): (int(e), i)
        for e in np.flatnonzero(np.isin(mesh.triangles, [b.start for b in mesh.bends]).any(axis=1))
        for i, (a, b) in enumerate(EDGES)
    }
    corners = np.array([[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]])
    u = np.linspace(0.0, 1.0, EDGE_POINTS)[:, None]
    elements, reference, along = [], [], []
    for bend in mesh.bends:
        e, i = owner[bend.start, bend.end]
        a, b = EDGES[i]
        elements.append(e)
        reference.append(corners[a] + u * (corners[b] - corners[a]))
        rate = bend.piece.rate(bend.u[0] + u[:, 0] * (bend.u[1] - bend.u[0]))
        along.append(rate / np.hypot(*rate.T)[:, None])
    samples = Samples(np.array(elements), np.array(reference))
    value, error = _shear(fields, samples, np.array(along), actions)
    points = places(fields, samples) + fields.inertia.centroid
    for row, e in enumerate(elements):
        label = mesh.labels[int(mesh.region[e])]
        best = int(np.argmax(np.abs(value[row])))
        size = float(abs(value[row, best]))
        if label not in found or size > found[label].value:
            found[label] = Peak(label, points[row, best], size, float(error[row, best]))
    return sorted(found.values(), key=lambda p: -p.value)
