"""Level `midline`: sharp corners, own-axis terms of the walls left out."""

from __future__ import annotations

from dataclasses import replace

from beam_theory.arrays import Floats
from beam_theory.checks import checks
from beam_theory.inertia import FLAT, Inertia, inertia
from beam_theory.network import network
from beam_theory.quantity import Quantity
from beam_theory.section import Section
from beam_theory.shear import Shear, shear, shear_flexibility
from beam_theory.solution import Solution, frozen
from beam_theory.torsion import Torsion, torsion
from beam_theory.warping import Warping, sectorial_shear_centre, warping

__all__ = ["midline"]


def midline(section: Section, level: str = "midline", rounded: bool = False) -> Solution:
    """Solve a section on its midlines; raises SectionError with all faults found."""
    graph = network(section, rounded)
    mass = inertia(graph)
    twist = torsion(graph)
    if mass.reason is not None:
        quantities = _quantities(mass, twist, None, None, None)
        return Solution(level, graph, mass, twist, None, None, None, frozen(quantities), (), (mass.reason,))
    found = shear(graph, mass)
    k_x, k_y = mass.slope(1.0, 0.0), mass.slope(0.0, 1.0)
    # A unit Vy through S makes the moment x_s about the centroid, a unit Vx makes -y_s.
    x_s = (k_y.conjugate() * found.torque).real
    y_s = -(k_x.conjugate() * found.torque).real
    pole = complex(x_s, y_s)
    warp = warping(graph, mass, twist, pole)
    sectorial = sectorial_shear_centre(graph, mass, warping(graph, mass, twist, 0.0))
    quantities = _quantities(mass, twist, found, warp, shear_flexibility(found, k_x, k_y))
    solution = Solution(level, graph, mass, twist, found, warp, mass.centroid + pole, frozen(quantities), ())
    return replace(solution, checks=checks(solution, sectorial))


def _quantities(
    mass: Inertia,
    twist: Torsion,
    found: Shear | None,
    warp: Warping | None,
    flex: tuple[Floats, float] | None,
) -> dict[str, Quantity]:
    """Every quantity of the level by name."""
    none = mass.reason
    weightless = none if mass.area <= 0.0 else None
    out: dict[str, Quantity] = {}

    def put(name: str, value: float | None, reason: str | None = None) -> None:
        out[name] = Quantity(None if value is None or reason is not None else float(value), reason)

    u, v = mass.principal
    flat = FLAT * u
    put("area", mass.area, weightless)
    put("centroid_x", mass.centroid.real, weightless)
    put("centroid_y", mass.centroid.imag, weightless)
    put("second_moment_xx", mass.xx, none if mass.xx <= flat else None)
    put("second_moment_yy", mass.yy, none if mass.yy <= flat else None)
    put("product_moment_xy", mass.xy, weightless)
    put(
        "principal_angle",
        mass.angle,
        (weightless or "every axis is principal") if mass.angle is None else None,
    )
    put("principal_moment_u", u, none if u <= 0.0 else None)
    put("principal_moment_v", v, none)
    pole = None if warp is None else mass.centroid + warp.pole
    put("shear_centre_x", None if pole is None else pole.real, none)
    put("shear_centre_y", None if pole is None else pole.imag, none)
    put("torsion_constant", twist.constant)
    put("warping_constant", None if warp is None else warp.constant, none)
    areas = (None, None) if flex is None else (1.0 / float(flex[0][0]), 1.0 / float(flex[0][1]))
    put("shear_area_x", areas[0], none)
    put("shear_area_y", areas[1], none)
    put("shear_coupling", None if flex is None else flex[1], none)
    put("plain_area", mass.plain_area)
    put("torsion_constant_cells", twist.cell_part)
    put("torsion_constant_open", twist.open_part)
    return out
