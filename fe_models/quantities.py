"""Every quantity of the finite-element side by name."""

from __future__ import annotations

import numpy as np

from . import intervals
from .fields import Fields
from .intervals import Interval, around
from .outline import Outline

# Principal moments closer than this (relative) leave the axes undefined.
SAME_MOMENTS = 1e-9
EXACT_ROUND_OFF = 1e-12
# Curved sides: share of the geometry error by which intervals are widened. J of a closed tube is off by 0.8
# times the error of its second moments.
GEOMETRY_FACTOR = 2.0


def quantities(fields: Fields, solid: Outline) -> dict[str, Interval]:
    """Quantities of the outline (exact), bounds and estimates.

    Notes
    -----
    Area, centroid and second moments are boundary integrals of the outline, e-weighted. J, shear centre and
    shear areas are two-sided, on curved outlines widened by what the elements miss of the outline. The
    warping constant is an estimate.
    """
    basis = "bound on the interpolated outline" if solid.curved else "bound"
    made = _exact(fields, solid)
    off = GEOMETRY_FACTOR * geometry_error(fields, solid) if solid.curved else 0.0
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
    section = fields.inertia
    m = solid.moments(section.centroid)
    e = float(fields.moduli.e[0])
    second = np.array([section.xx, section.yy, section.xy])
    off = np.abs(second - e * m.second).max() / max(section.xx, section.yy)
    return float(max(off, abs(section.area / (e * m.area) - 1.0)))


def _exact(fields: Fields, solid: Outline) -> dict[str, Interval]:
    """Area to principal axes from the outline's boundary."""
    e = float(fields.moduli.e[0])
    pole = fields.inertia.centroid
    m = solid.moments(pole)
    shift = m.first / m.area
    xx, yy, xy = e * (m.second - m.area * np.array([shift[1] ** 2, shift[0] ** 2, shift[0] * shift[1]]))
    centre, radius = 0.5 * (xx + yy), float(np.hypot(0.5 * (xx - yy), xy))
    size = solid.extent
    plain = {
        "area": e * m.area,
        "second_moment_xx": xx,
        "second_moment_yy": yy,
        "principal_moment_u": centre + radius,
        "principal_moment_v": centre - radius,
    }
    made = {n: _exactly(float(v), EXACT_ROUND_OFF * abs(float(v))) for n, v in plain.items()}
    made["product_moment_xy"] = _exactly(float(xy), EXACT_ROUND_OFF * float(np.sqrt(xx * yy)))
    for i, axis in enumerate("xy"):
        made[f"centroid_{axis}"] = _exactly(float(pole[i] + shift[i]), EXACT_ROUND_OFF * size)
    if radius <= SAME_MOMENTS * centre:
        made["principal_angle"] = Interval(None, None, None, "exact", "both principal moments are equal")
    else:
        # axis u, of the larger moment: I_u = Ixx cos^2 + Iyy sin^2 - 2 Ixy sin cos
        angle = 0.5 * float(np.arctan2(-2.0 * xy, xx - yy))
        angle = angle + np.pi if angle <= -0.5 * np.pi else angle
        made["principal_angle"] = _exactly(angle, EXACT_ROUND_OFF * centre / radius)
    return made


def _exactly(value: float, half: float) -> Interval:
    return around(value, half, "exact")
