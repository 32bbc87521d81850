"""Dimensional stiffnesses of a section for a beam model."""

from __future__ import annotations

import math
from dataclasses import dataclass

from beam_theory.quantity import Quantity
from beam_theory.solution import Solution

__all__ = ["Stiffness", "stiffness"]


@dataclass(frozen=True)
class Stiffness:
    """Beam stiffnesses; each a Quantity, None with a reason where theory defines none.

    Attributes
    ----------
    datum : where offsets are measured from [L]
    EA : [F]
    EIxx, EIyy, EIxy, EIu, EIv : about the centroid [F L^2]
    angle : of the principal axis u from x [rad]
    GJ, EIw : [F L^2], [F L^4]
    GA_Vx, GA_Vy, coupling : [F], and shear strain across x per Vy and the other way round [1/F]
    centroid_x, centroid_y, shear_centre_x, shear_centre_y : offsets from the datum [L]
    characteristic_length : sqrt(E I_w/(G J)) [L]; restrained warping matters over a length of that order from
        where it is restrained
    """

    datum: tuple[float, float]
    EA: Quantity
    EIxx: Quantity
    EIyy: Quantity
    EIxy: Quantity
    EIu: Quantity
    EIv: Quantity
    angle: Quantity
    GJ: Quantity
    EIw: Quantity
    GA_Vx: Quantity
    GA_Vy: Quantity
    coupling: Quantity
    centroid_x: Quantity
    centroid_y: Quantity
    shear_centre_x: Quantity
    shear_centre_y: Quantity
    characteristic_length: Quantity


def stiffness(solution: Solution, E: float, G: float, datum: tuple[float, float] = (0.0, 0.0)) -> Stiffness:
    """Stiffnesses from the moduli of the base material.

    Parameters
    ----------
    solution : Solution
    E, G : float [F/L^2]
        Moduli of the base material (e = g = 1).
    datum : (float, float) [L]
        Where offsets are measured from.

    Returns
    -------
    Stiffness
        In the units of E and G, [F], and of the section, [L].
    """
    q = solution.quantities

    def times(name: str, factor: float) -> Quantity:
        found = q[name]
        return found if found.value is None else Quantity(found.value * factor)

    def offset(name: str, origin: float) -> Quantity:
        found = q[name]
        return found if found.value is None else Quantity(found.value - origin)

    warping, torsion = q["warping_constant"], q["torsion_constant"]
    length = warping if warping.value is None else torsion
    if warping.value is not None and torsion.value is not None:
        length = Quantity(math.sqrt(max(E * warping.value, 0.0) / (G * torsion.value)))
    return Stiffness(
        datum,
        times("area", E),
        times("second_moment_xx", E),
        times("second_moment_yy", E),
        times("product_moment_xy", E),
        times("principal_moment_u", E),
        times("principal_moment_v", E),
        q["principal_angle"],
        times("torsion_constant", G),
        times("warping_constant", E),
        times("shear_area_x", G),
        times("shear_area_y", G),
        times("shear_coupling", 1.0 / G),
        offset("centroid_x", datum[0]),
        offset("centroid_y", datum[1]),
        offset("shear_centre_x", datum[0]),
        offset("shear_centre_y", datum[1]),
        length,
    )
