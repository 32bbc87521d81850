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

    EA [F]; EIxx, EIyy, EIxy, EIu, EIv [F L^2] about the centroid; angle of u [rad]; GJ [F L^2]; EIw [F L^4];
    GA_Vx, GA_Vy [F]; coupling [1/F]: shear strain across x per Vy and the other way round; centroid and shear
    centre as offsets from the datum [L]; characteristic_length = sqrt(E I_w/(G J)) [L]: restrained warping
    matters over a length of that order from where it is restrained.
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
