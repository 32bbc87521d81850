"""Shear flow across a strip: the integral through the thickness of the stress along the wall."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from .band import Array
from .fields import Fields
from .mesh import Index, StripMesh
from .sampling import Samples, stresses
from .space import strip_coordinates

# Gauss points on each element's part of a section line: exact for straight strips up to order 6.
LINE_POINTS = 6
# Share of the largest flow kept for round-off.
ROUND_OFF = 1e-10
# The same for curved strips, where a section line ends a little off the elements' interpolated faces.
CURVED = 1e-6
_GAUSS = np.polynomial.legendre.leggauss(LINE_POINTS)


@dataclass(frozen=True)
class FlowSamples:
    """Flows of unit Vx, unit Vy (each through the shear centre) and unit T at places of one wall.

    Parameters
    ----------
    values, errors : (3, n) arrays
        Of shear [1/L], of torque [1/L^2], positive from start to end of the wall; errors are estimates.
    """

    values: Array
    errors: Array


@dataclass(frozen=True)
class Chords:
    """Parts of section lines inside single triangles: c chords with q points each.

    Parameters
    ----------
    samples : Samples
    places : (c,) array of int
        Number of the section line.
    along : (c, q, 2) array
        Direction of the wall.
    weights : (c, q) array
        [L]
    """

    samples: Samples
    places: Index
    along: Array
    weights: Array


def flow_samples(fields: Fields, strip: StripMesh, at: ArrayLike, closing: Array) -> FlowSamples:
    """Flow at distances ``at`` [L] along a wall, inside its strip.

    The static field gives the value. In a wall of a cell its error is that of the closing flow,
    ``closing`` (3,); in an open wall it follows from equilibrium alone, ``closing`` is nothing and only
    round-off remains.

    Raises
    ------
    ValueError
        A place outside the strip.
    """
    s = np.atleast_1d(np.asarray(at, dtype=float))
    span = strip.s[-1] - strip.s[0]
    if (s < strip.s[0] - 1e-9 * span).any() or (s > strip.s[-1] + 1e-9 * span).any():
        raise ValueError(f"place outside the strip of wall {strip.band.name}: {strip.s[0]} to {strip.s[-1]}")
    share = ROUND_OFF if strip.band.straight else CURVED
    return sampled_flow(fields, strip_chords(strip, s), len(s), share * max(strip.band.thickness), closing)


def sampled_flow(fields: Fields, chords: Chords, count: int, allowance: float, closing: Array) -> FlowSamples:
    """Flow over section lines; ``allowance`` [L] times the largest stress is what round-off may make."""
    values, _ = flows(fields, chords, count)
    # round-off is that of the stress through the thickness, whose integral may vanish
    static, _ = stresses(fields, chords.samples)
    scale = np.abs(static).max(axis=(1, 2, 3)) * allowance
    errors = np.broadcast_to((scale + closing)[:, None], values.shape)
    return FlowSamples(values, np.array(errors))


def flows(fields: Fields, chords: Chords, count: int) -> tuple[Array, Array]:
    """Static and kinematic flow of the unit loads over section lines, two (3, count) arrays."""
    made = []
    for field in stresses(fields, chords.samples):
        parts = np.sum(chords.weights * np.sum(field * chords.along, axis=-1), axis=2)
        made.append(np.array([np.bincount(chords.places, part, count) for part in parts]))
    return made[0], made[1]


def closing_error(fields: Fields, strips: Iterable[StripMesh]) -> Array:
    """Estimated error of the closing flows of each unit load, (3,): the largest disagreement of any strip.

    Walls share the closing flows of their cells, and in one wall errors may cancel by chance.
    """
    found = [np.abs(_disagreement(fields, strip)) for strip in strips]
    return np.asarray(np.max(found, axis=0)) if found else np.zeros(3)


def _disagreement(fields: Fields, strip: StripMesh) -> Array:
    """Mean over a strip of the kinematic less the static flow for each unit load, (3,).

    Along a wall both flows change alike by equilibrium; what may differ is the closing flow, constant along
    it. Its mean over the strip is far more accurate than its value at one section line.
    """
    space, rows = fields.space, strip.triangles.ravel()
    s_mid = np.repeat(0.5 * (strip.s[:-1] + strip.s[1:]), strip.triangles.shape[1])
    along = strip.band.direction(s_mid)[:, None, :]
    length = float(strip.s[-1] - strip.s[0])
    twist = fields.twist
    found = []
    for pair, unit in (*((p, 1.0) for p in fields.flexure), (fields.torsion, twist)):
        difference = np.sum((pair.kinematic[rows] - pair.static[rows]) * along, axis=-1)
        found.append(float(np.sum(space.weights[rows] * difference)) / length / unit)
    return np.array(found)


def strip_chords(strip: StripMesh, s: Array) -> Chords:
    """Chords of the section lines at distances s.

    Triangles of a straight strip are straight in (s, offset), those of a curved one in (s, offset over half
    the thickness): the coordinates in which their nodes were placed.
    """
    columns = np.clip(np.searchsorted(strip.s, s, side="right") - 1, 0, len(strip.s) - 2)
    corner_s, corner_n = strip_coordinates(strip.s, strip.n)
    scale = np.ones(len(s)) if strip.band.straight else strip.band.half(s)
    if strip.band.straight:
        corner_n = corner_n * strip.band.half(corner_s)
    per = strip.triangles.shape[1]
    rows = (columns[:, None] * per + np.arange(per)).ravel()
    place = np.repeat(np.arange(len(s)), per)
    cs, cn, at_s = corner_s[rows], corner_n[rows], np.repeat(s, per)
    low, high = _range(cs, cn, at_s)
    kept = high - low > 1e-12 * np.abs(corner_n).max()
    rows, place, cs, cn = rows[kept], place[kept], cs[kept], cn[kept]
    at_s, low, high = at_s[kept], low[kept], high[kept]
    x, w = _GAUSS
    n = low[:, None] + 0.5 * (x + 1.0) * (high - low)[:, None]
    reference = in_triangles(cs, cn, np.broadcast_to(at_s[:, None], n.shape), n)
    weights = 0.5 * w * ((high - low) * scale[place])[:, None]
    along = strip.band.direction(np.broadcast_to(at_s[:, None], n.shape))
    return Chords(Samples(strip.triangles.ravel()[rows], reference), place, along, weights)


def in_triangles(cs: Array, cn: Array, s: Array, n: Array) -> Array:
    """Reference coordinates (c, q, 2) of points (s, n), (c, q), in triangles with (c, 3) corners."""
    first = np.stack([cs[:, 1] - cs[:, 0], cs[:, 2] - cs[:, 0]], -1)
    second = np.stack([cn[:, 1] - cn[:, 0], cn[:, 2] - cn[:, 0]], -1)
    offset = np.stack([s - cs[:, :1], n - cn[:, :1]], axis=-1)
    return np.asarray(np.einsum("cab,cqb->cqa", np.linalg.inv(np.stack([first, second], axis=1)), offset))


def _range(cs: Array, cn: Array, s: Array) -> tuple[Array, Array]:
    """Range of n in which lines of constant s run through triangles in (s, n); empty where low >= high."""
    low, high = np.full(len(s), np.inf), np.full(len(s), -np.inf)
    for i in range(3):
        a, b = cs[:, i], cs[:, (i + 1) % 3]
        flat = a == b
        u = (s - a) / np.where(flat, 1.0, b - a)
        hit = ~flat & (u >= -1e-9) & (u <= 1.0 + 1e-9)
        n = cn[:, i] + np.clip(u, 0.0, 1.0) * (cn[:, (i + 1) % 3] - cn[:, i])
        low = np.where(hit, np.minimum(low, n), low)
        high = np.where(hit, np.maximum(high, n), high)
    return low, high
