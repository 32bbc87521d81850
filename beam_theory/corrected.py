"""Level `corrected`: bends as arcs, and the walls' own thickness where published terms exist."""

from __future__ import annotations

from dataclasses import replace

from beam_theory.inertia import Inertia
from beam_theory.midline import midline
from beam_theory.own_axis import own_second_moments, secondary_warping, thin_plate_centre
from beam_theory.quantity import Quantity
from beam_theory.section import Section
from beam_theory.solution import Solution, frozen
from beam_theory.thick_torsion import ThickTorsion, thick_torsion

__all__ = ["corrected"]


def corrected(section: Section) -> Solution:
    """Midline theory on rounded bends, own-axis second moments, secondary warping, thick-wall torsion.

    Notes
    -----
    Area, shear centre, shear flow and shear areas are those of the rounded midline. Fillets where three or
    more walls meet and overlaps of walls at a joint change J only. The torsion constant is None with a reason
    where a joint of a section without cells has no published term.
    """
    solution = midline(section, "corrected", rounded=True)
    thick = thick_torsion(solution.graph)
    out = dict(solution.quantities)
    _second_moments(solution, out)
    _torsion(thick, out)
    if solution.warp is not None and solution.shear_centre is not None:
        own = secondary_warping(solution.graph, solution.shear_centre)
        out["warping_constant"] = Quantity(solution.warp.constant + own)
    elif solution.mass.area > 0.0 and float(solution.graph.pieces.e.max()) > 0.0:
        pole = thin_plate_centre(solution.graph)
        out["shear_centre_x"], out["shear_centre_y"] = Quantity(pole.real), Quantity(pole.imag)
        out["warping_constant"] = Quantity(secondary_warping(solution.graph, pole))
    twist = solution.twist if thick.reason else thick.torsion
    if thick.reason:
        solution = replace(
            solution, notes=(*solution.notes, f"torque is shared as at midline level: {thick.reason}")
        )
    bends = tuple(f"bend at {point} as an arc" for point in solution.graph.bends)
    return replace(
        solution,
        twist=twist,
        quantities=frozen(out),
        notes=(*solution.notes, *bends, *thick.notes),
        joints=thick.joints,
    )


def _second_moments(solution: Solution, out: dict[str, Quantity]) -> None:
    """Second moments and centroid with own-axis terms."""
    mass = solution.mass
    if mass.area <= 0.0:
        return
    first, xx, yy, xy = own_second_moments(solution.graph, mass.centroid)
    shift = first / mass.area
    full = Inertia(
        mass.area,
        mass.plain_area,
        mass.centroid + shift,
        mass.xx + xx - mass.area * shift.imag**2,
        mass.yy + yy - mass.area * shift.real**2,
        mass.xy + xy - mass.area * shift.real * shift.imag,
        None,
    )
    u, v = full.principal
    out["centroid_x"], out["centroid_y"] = Quantity(full.centroid.real), Quantity(full.centroid.imag)
    out["second_moment_xx"], out["second_moment_yy"] = Quantity(full.xx), Quantity(full.yy)
    out["product_moment_xy"] = Quantity(full.xy)
    out["principal_moment_u"], out["principal_moment_v"] = Quantity(u), Quantity(v)
    angle = full.angle
    out["principal_angle"] = Quantity(angle, None if angle is not None else "every axis is principal")


def _torsion(thick: ThickTorsion, out: dict[str, Quantity]) -> None:
    """Torsion constant and its parts."""
    twist = thick.torsion
    parts = {
        "torsion_constant": twist.constant,
        "torsion_constant_cells": twist.cell_part,
        "torsion_constant_open": twist.open_part,
    }
    for name, value in parts.items():
        out[name] = Quantity(None, thick.reason) if thick.reason else Quantity(value)
