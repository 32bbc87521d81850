"""Shear flow across a strip: the integral through the thickness of the stress along the wall."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from .band import Array
from .element import gradients
from .fields import Fields
from .mesh import Index, StripMesh
from .space import strip_coordinates

# Gauss points on each element's part of a section line: exact for straight strips up to order 6.
LINE_POINTS = 4
# Share of the largest flow kept for round-off.
ROUND_OFF = 1e-10


@dataclass(frozen=True)
class FlowSamples:
    """Flows of unit Vx, unit Vy (each through the shear centre) and unit T at places of one wall.

    Parameters
    ----------
    values, errors : (3, n) arrays
        [1/L for shear, 1/L^2 for torque], positive from start to end of the wall; errors are estimates.
    """

    values: Array
    errors: Array


@dataclass(frozen=True)
class _Chords:
    """Parts of section lines inside single triangles: c chords with q points each.

    Parameters
    ----------
    elements, places : (c,) arrays of int
        Triangle, and number of the section line.
    reference, at, along : (c, q, 2) arrays
        Reference coordinates, points relative to the centroid [L], direction of the wall.
    weights : (c, q) array
        [L]
    """

    elements: Index
    places: Index
    reference: Array
    at: Array
    along: Array
    weights: Array


def flow_samples(fields: Fields, strip: StripMesh, at: ArrayLike, *, open_wall: bool) -> FlowSamples:
    """Flow at distances ``at`` [L] along a wall, inside its strip.

    The static field gives the value. In a wall of a cell its error is what it and the kinematic field
    disagree on, the closing flow; in an open wall it follows from equilibrium alone and only round-off
    remains.

    Raises
    ------
    ValueError
        A place outside the strip.
    """
    s = np.atleast_1d(np.asarray(at, dtype=float))
    span = strip.s[-1] - strip.s[0]
    if (s < strip.s[0] - 1e-9 * span).any() or (s > strip.s[-1] + 1e-9 * span).any():
        raise ValueError(f"place outside the strip of wall {strip.band.name}: {strip.s[0]} to {strip.s[-1]}")
    values = _static_flows(fields, _chords(fields, strip, s), len(s))
    scale = np.abs(values).max(axis=1, keepdims=True)
    errors = np.full(values.shape, ROUND_OFF) * scale
    if not open_wall:
        errors = errors + np.abs(_disagreement(fields, strip))[:, None]
    return FlowSamples(values, errors)


def _disagreement(fields: Fields, strip: StripMesh) -> Array:
    """Mean over a strip of the kinematic less the static flow for each unit load, (3,).

    Along a wall both flows change alike by equilibrium; what may differ is the closing flow, constant along
    it. Its mean over the strip is far more accurate than its value at one section line.
    """
    space, rows = fields.space, strip.triangles.ravel()
    s_mid = np.repeat(0.5 * (strip.s[:-1] + strip.s[1:]), strip.triangles.shape[1])
    along = strip.band.direction(s_mid)[:, None, :]
    length = float(strip.s[-1] - strip.s[0])
    twist = fields.energy(fields.torsion.kinematic)
    found = []
    for pair, unit in (*((p, 1.0) for p in fields.flexure), (fields.torsion, twist)):
        difference = np.sum((pair.kinematic[rows] - pair.static[rows]) * along, axis=-1)
        found.append(float(np.sum(space.weights[rows] * difference)) / length / unit)
    return np.array(found)


def _static_flows(fields: Fields, chords: _Chords, count: int) -> Array:
    """Static flow of the three unit loads at every place, (3, count)."""
    space, e = fields.space, chords.elements
    c, q, _ = chords.reference.shape
    slopes = gradients(space.element.order, chords.reference.reshape(-1, 2)).reshape(c, q, -1, 2)
    inverse = np.linalg.inv(np.einsum("cka,cqkb->cqab", space.places[e], slopes))
    twist = fields.energy(fields.torsion.kinematic)
    flows = []
    for row, pair in enumerate((*fields.flexure, fields.torsion)):
        local = pair.function[e]
        phi = np.einsum("cqb,cqba->cqa", np.einsum("ck,cqkb->cqb", local - local[:, :1], slopes), inverse)
        s = np.stack([phi[..., 1], -phi[..., 0]], axis=-1)
        unit = twist
        if row < 2:
            a_b = fields.inertia.slopes(1.0 - row, float(row))
            s = s - 0.5 * fields.moduli.e[e][:, None, None] * a_b * chords.at**2
            unit = 1.0
        part = np.sum(chords.weights * np.sum(s * chords.along, axis=-1), axis=1) / unit
        flows.append(np.bincount(chords.places, part, count))
    return np.array(flows)


def _chords(fields: Fields, strip: StripMesh, s: Array) -> _Chords:
    """Chords of the section lines at distances s."""
    columns = np.clip(np.searchsorted(strip.s, s, side="right") - 1, 0, len(strip.s) - 2)
    corner_s, corner_n = strip_coordinates(strip.s, strip.n)
    per = strip.triangles.shape[1]
    rows = (columns[:, None] * per + np.arange(per)).ravel()
    place = np.repeat(np.arange(len(s)), per)
    cs, cn, at_s = corner_s[rows], corner_n[rows], np.repeat(s, per)
    low, high = _range(cs, cn, at_s)
    kept = high - low > 1e-12
    rows, place, cs, cn = rows[kept], place[kept], cs[kept], cn[kept]
    at_s, low, high = at_s[kept], low[kept], high[kept]
    x, w = np.polynomial.legendre.leggauss(LINE_POINTS)
    n = low[:, None] + 0.5 * (x + 1.0) * (high - low)[:, None]
    first = np.stack([cs[:, 1] - cs[:, 0], cs[:, 2] - cs[:, 0]], -1)
    second = np.stack([cn[:, 1] - cn[:, 0], cn[:, 2] - cn[:, 0]], -1)
    matrix = np.stack([first, second], axis=1)
    offset = np.stack([np.broadcast_to((at_s - cs[:, 0])[:, None], n.shape), n - cn[:, :1]], axis=-1)
    reference = np.einsum("cab,cqb->cqa", np.linalg.inv(matrix), offset)
    half = strip.band.half(at_s)
    full_s = np.broadcast_to(at_s[:, None], n.shape)
    at = strip.band.place(full_s, n * half[:, None]) - fields.inertia.centroid
    weights = 0.5 * w * ((high - low) * half)[:, None]
    return _Chords(strip.triangles.ravel()[rows], place, reference, at, strip.band.direction(full_s), weights)


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
