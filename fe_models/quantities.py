"""Every quantity of the finite-element side by name."""

from __future__ import annotations

import numpy as np

from . import intervals
from .fields import Fields, Moduli, inertia
from .intervals import Interval, around
from .outline import Outline
from .partition import STEP

# Principal moments closer than this (relative) leave the axes undefined.
SAME_MOMENTS = 1e-9
EXACT_ROUND_OFF = 1e-12
# Curved sides: share of the geometry error by which intervals are widened. J of a closed tube is off by 0.8
# times the error of its second moments.
GEOMETRY_FACTOR = 2.0
# What chords of a polygon union take off, as a share: a circle in chords loses step^2 / 6 of its area and
# twice that of J.
CHORDS = STEP**2 / 2.0


def quantities(fields: Fields, solid: Outline) -> dict[str, Interval]:
    """Quantities of the outline (exact), bounds and estimates.

    Notes
    -----
    Area, centroid and second moments are boundary integrals of the outline, e-weighted. J, shear centre and
    shear areas are two-sided, on curved outlines widened by what the elements miss of the outline. The
    warping constant is an estimate.
    """
    basis = "bound on the interpolated outline" if solid.curved else "bound"
    if solid.chorded or any(s.nearest for s in solid.splits):
        # who owns what of a crowded joint then depends on the mesh; chords are not the outline
        basis = "estimate"
    doubt = ownership_doubt(fields, solid)
    made = _exact(fields, solid, doubt)
    off = doubt + (GEOMETRY_FACTOR * geometry_error(fields, solid) if solid.curved else 0.0)
    if solid.chorded:
        off += CHORDS
    made["torsion_constant"] = intervals.torsion_constant(fields, basis).widened(off)
    x_s, y_s = intervals.shear_centre(fields, solid.extent, basis)
    x_s, y_s = x_s.padded(off * solid.extent), y_s.padded(off * solid.extent)
    made["shear_centre_x"], made["shear_centre_y"] = x_s, y_s
    made["shear_area_x"] = intervals.shear_area(fields, 0, basis).widened(off)
    made["shear_area_y"] = intervals.shear_area(fields, 1, basis).widened(off)
    made["warping_constant"] = intervals.warping_constant(fields, np.array([x_s.known, y_s.known]))
    return made


def geometry_error(fields: Fields, solid: Outline) -> float:
    """Largest relative difference of the mesh's area and second moments from the outline's exact ones [-]."""
    ones = np.ones(len(fields.moduli.e))
    section = inertia(fields.space, Moduli(ones, ones), fields.inertia.centroid)
    m = solid.moments(section.centroid)
    second = np.array([section.xx, section.yy, section.xy])
    off = np.abs(second - m.second).max() / max(section.xx, section.yy)
    return float(max(off, abs(section.area / m.area - 1.0)))


def ownership_doubt(fields: Fields, solid: Outline) -> float:
    """Share of area and second moments in elements on the border between walls that no line splits [-].

    Zero unless a crowded joint's elements go to the nearest wall: these then could as well be the
    neighbour's.
    """
    m, weights = fields.space.mesh, fields.space.weights
    on = np.zeros(len(m.triangles), dtype=bool)
    spread = np.zeros((2, len(m.triangles)))
    for part, among in enumerate(solid.splits):
        if not among.nearest:
            continue
        rows = np.flatnonzero(m.region == part)
        corners, owner = m.triangles[rows], m.owner[rows]
        low, high = np.full(len(m.vertices), len(solid.moduli)), np.full(len(m.vertices), -1)
        np.minimum.at(low, corners, owner[:, None])
        np.maximum.at(high, corners, owner[:, None])
        on[rows] = (low[corners] != high[corners]).any(axis=1)
        spread[:, rows] = [[np.ptp(fields.moduli.e[rows])], [np.ptp(fields.moduli.g[rows])]]
    if not on.any():
        return 0.0
    shares = []
    for own, between in zip((fields.moduli.e, fields.moduli.g), spread, strict=True):
        for kernel in (1.0, np.sum(fields.space.points**2, axis=-1)):
            each = np.sum(weights * kernel, axis=1)
            shares.append(float(np.sum(between[on] * each[on]) / np.sum(own * each)))
    return max(shares)


def _exact(fields: Fields, solid: Outline, doubt: float) -> dict[str, Interval]:
    """Area to principal axes: from the outline's boundary where e is uniform, else from the mesh.

    Estimates where it is in doubt which wall owns what.
    """
    e, section, size = fields.moduli.e, fields.inertia, solid.extent
    if np.all(e == e[0]):
        m = solid.moments(section.centroid)
        shift = m.first / m.area
        area, place, off = float(e[0]) * m.area, section.centroid + shift, 0.0
        steiner = m.area * np.array([shift[1] ** 2, shift[0] ** 2, shift[0] * shift[1]])
        xx, yy, xy = float(e[0]) * (m.second - steiner)
    else:
        off = GEOMETRY_FACTOR * geometry_error(fields, solid) if solid.curved else 0.0
        area, place = section.area, section.centroid
        xx, yy, xy = section.xx, section.yy, section.xy
    tolerance = EXACT_ROUND_OFF + off + doubt
    basis = "estimate" if doubt else "exact"
    centre, radius = 0.5 * (xx + yy), float(np.hypot(0.5 * (xx - yy), xy))
    plain = {
        "area": area,
        "second_moment_xx": xx,
        "second_moment_yy": yy,
        "principal_moment_u": centre + radius,
        "principal_moment_v": centre - radius,
    }
    made = {n: around(float(v), tolerance * abs(float(v)), basis) for n, v in plain.items()}
    made["product_moment_xy"] = around(float(xy), tolerance * float(np.sqrt(xx * yy)), basis)
    for i, axis in enumerate("xy"):
        made[f"centroid_{axis}"] = around(float(place[i]), tolerance * size, basis)
    if radius <= SAME_MOMENTS * centre:
        made["principal_angle"] = Interval(None, None, None, "exact", "both principal moments are equal")
    else:
        # axis u, of the larger moment: I_u = Ixx cos^2 + Iyy sin^2 - 2 Ixy sin cos
        angle = 0.5 * float(np.arctan2(-2.0 * xy, xx - yy))
        angle = angle + np.pi if angle <= -0.5 * np.pi else angle
        made["principal_angle"] = around(angle, tolerance * centre / radius, basis)
    return made
