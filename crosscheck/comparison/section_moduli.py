"""Section moduli of the FE side: its second moments over the extreme fibres of its own outline.

A fibre's distance counts e-fold, as its stress does; walls that carry no direct stress have no fibres, and a
boom's fibre is its point. The fibres of a straight outline are its corners and so exact. On curved parts
the polygon's corners lie on the curve; between two of them, c apart, it misses c^2/(8 R), and that is the
error.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from crosscheck.comparison import models
from crosscheck.comparison.drawn import Array
from crosscheck.comparison.levels import Levels
from crosscheck.comparison.result import FeValue
from crosscheck.comparison.verdicts import EQUAL_MOMENTS

if TYPE_CHECKING:
    import fe_models
    from crosscheck.section_file.model import SectionFile
    from fe_models.band import Band

# Turn between two corners of the outline's polygon on a curve, at most [rad].
ARC_STEP = 0.05
# Samples of a curved face within its strip: misses 1e-8 of the radius per radian of sweep.
FACE_SAMPLES = 2001
# A corner of the outline lies on the extended face of a wall when it is this near [thickness].
ON_FACE = 1e-6
# A mitre reaches at most this many thicknesses past the end of a wall.
PAST_END = 4.5

Fibres = tuple[Array, Array]


def fe_section_moduli(
    section: SectionFile, levels: Levels, fe: fe_models.Solution, values: Mapping[str, FeValue]
) -> dict[str, FeValue]:
    """All eight section moduli by name: x_top, x_bottom, y_right, y_left, u_plus, u_minus, v_plus, v_minus.

    The principal axes are FE's own, turned to the sense of the judged level's so that plus means the same.

    Parameters
    ----------
    section : SectionFile
        Walls and booms with their materials.
    levels : Levels
        Theory, for the sense of its principal axes.
    fe : fe_models.Solution
        Outline and strips.
    values : mapping of name to FeValue
        FE's quantities.
    """
    x, y = values["centroid_x"].value, values["centroid_y"].value
    names = [f"section_modulus_{side}" for side in _directions(1.0 + 0.0j)]
    if x is None or y is None:
        return dict.fromkeys(names, FeValue(None, None, None, "estimate", reason="FE gives no centroid"))
    turn, reason = _principal(levels, values)
    places, weight = _fibres(section, fe)
    curved = _curve_error(section, fe)
    found: dict[str, FeValue] = {}
    for side, (moment, direction) in _directions(turn or 1.0 + 0.0j).items():
        second = values[moment]
        if reason is not None and side[0] in "uv":
            found[f"section_modulus_{side}"] = FeValue(None, None, None, "exact", reason=reason)
            continue
        reach = float((weight * ((places - np.array((x, y))) @ (direction.real, direction.imag))).max())
        if second.value is None or reach <= 0.0:
            found[f"section_modulus_{side}"] = FeValue(None, None, None, "exact", reason=second.reason)
            continue
        value = second.value / reach
        half = value * ((second.half_width or 0.0) / second.value + curved / reach)
        basis = "estimate" if curved else second.basis
        found[f"section_modulus_{side}"] = FeValue(value, value - half, value + half, basis)
    return found


def _directions(turn: complex) -> dict[str, tuple[str, complex]]:
    """Second moment and direction of the fibre of every modulus; ``turn``: direction of the axis u."""
    return {
        "x_top": ("second_moment_xx", 1j),
        "x_bottom": ("second_moment_xx", -1j),
        "y_right": ("second_moment_yy", 1.0 + 0.0j),
        "y_left": ("second_moment_yy", -1.0 + 0.0j),
        "u_plus": ("principal_moment_u", 1j * turn),
        "u_minus": ("principal_moment_u", -1j * turn),
        "v_plus": ("principal_moment_v", turn),
        "v_minus": ("principal_moment_v", -turn),
    }


def _principal(levels: Levels, values: Mapping[str, FeValue]) -> tuple[complex | None, str | None]:
    """Direction of FE's axis u in the sense of theory's, or why there is none."""
    own, theory = values["principal_angle"].value, levels.judged_values.get("principal_angle")
    u, v = values["principal_moment_u"].value, values["principal_moment_v"].value
    if own is None or u is None or v is None or u - v <= EQUAL_MOMENTS * (u + v) / 2:
        return None, "Iu and Iv are equal: every axis is principal"
    if theory is not None and math.cos(own - theory) < 0.0:
        own += math.pi
    return complex(math.cos(own), math.sin(own)), None


def _fibres(section: SectionFile, fe: fe_models.Solution) -> Fibres:
    """Places (n, 2) [L] of the fibres that can be extreme, and e of each (n,)."""
    if section.outline is not None:
        corners = np.vstack(fe.outline.loops)
        return corners, np.full(len(corners), section.outline.e)
    stressed = {
        wall.name: models.modulus_ratios(section, wall.material)[0]
        for wall in section.walls
        if wall.seen_by != "theory" and wall.direct_share > 0.0
    }
    uniform = len(set(stressed.values())) == 1 and len(stressed) == len(fe.outline.bands)
    places, weights = [np.zeros((0, 2))], [np.zeros(0)]
    corners = np.vstack(fe.outline.loops)
    if uniform:
        places.append(corners)
        weights.append(np.full(len(corners), next(iter(stressed.values()))))
    for name, e in stressed.items():
        band, strip = fe.outline.bands[name], fe.strips.get(name)
        if not uniform:
            on = corners[_on_faces(band, corners)]
            places.append(on)
            weights.append(np.full(len(on), e))
        if band.straight or strip is None:
            continue
        s = np.linspace(*strip, FACE_SAMPLES) * band.length
        for side in (1.0, -1.0):
            places.append(band.place(s, side * band.half(s)))
            weights.append(np.full(len(s), e))
    booms = [boom for boom in section.booms if boom.seen_by != "theory"]
    if booms:
        places.append(np.array([models.boom_place(section, boom) for boom in booms]))
        weights.append(np.array([models.modulus_ratios(section, boom.material)[0] for boom in booms]))
    return np.vstack(places), np.concatenate(weights)


def _on_faces(band: Band, corners: Array) -> NDArray[np.bool_]:
    """Whether corners (n, 2) lie on a face of a wall, extended past its ends by a mitre's length; (n,)."""
    thickest = max(band.thickness)
    reach = PAST_END * thickest
    if band.straight:
        along = band.direction(0.0)
        s = (corners - band.midline(0.0)) @ along
        s = np.clip(s, -reach, band.length + reach)
        offset = np.abs((corners - band.midline(s)) @ band.normal(0.0))
        off_line = np.abs((corners - band.midline(s)) @ along)
        return (np.abs(offset - band.half(s)) <= ON_FACE * thickest) & (off_line <= ON_FACE * thickest)
    s = np.linspace(-reach, band.length + reach, FACE_SAMPLES)
    line = band.midline(s)
    nearest = np.argmin(np.hypot(*(corners[:, None] - line[None]).transpose(2, 0, 1)), axis=1)
    distance = np.hypot(*(corners - line[nearest]).T)
    # The nearest sample is off by half a step at most.
    slack = 0.5 * (s[1] - s[0]) + ON_FACE * thickest
    return np.asarray(np.abs(distance - band.half(s[nearest])) <= slack)


def _curve_error(section: SectionFile, fe: fe_models.Solution) -> float:
    """What the polygon of the outline may miss of curved parts outside strips [L]; 0 without any."""
    if section.outline is not None:
        # curved edges are drawn in chords between corners on them
        turns = [
            arc.arc.radius * ARC_STEP**2 / 8.0
            for cluster in fe.outline.parts.clusters
            for ring in cluster.rings
            for arc in ring
            if arc.arc is not None
        ]
        return max(turns, default=0.0)
    missed = [0.0]
    thickest = max(max(wall.thickness) for wall in section.walls)
    for corner in section.corners:
        outer = corner.inner_radius + thickest if corner.outer_radius is None else corner.outer_radius
        missed.append(max(corner.inner_radius, outer) * ARC_STEP**2 / 8.0)
    for name, band in fe.outline.bands.items():
        if not band.straight:
            # Within the strip the faces themselves were looked at.
            strip = fe.strips.get(name) or (1.0, 0.0)
            beside = max(strip[0], 1.0 - strip[1]) * band.length
            radius = 1.0 / abs(band.curvature) + 0.5 * max(band.thickness)
            missed.append(min(beside, ARC_STEP * radius) ** 2 / (8.0 * radius))
    return max(missed)
