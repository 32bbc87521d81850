"""Quantities that need the real faces of the walls, or whole integrals over a solved section."""

from __future__ import annotations

import math

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.quantity import Quantity
from beam_theory.solution import Solution

__all__ = ["extreme_fibre", "face_quantities", "wagner_coefficients"]

_NO_WARPING = 1e-24


def extreme_fibre(solution: Solution, direction: complex) -> float:
    """Largest e times distance of a stressed fibre from the centroid along a direction [L].

    The fibres are the corners and outermost places of the faces, half a thickness from the midline, and booms
    at their point. Walls with direct_share 0 carry no direct stress and do not count.
    """
    p, section = solution.graph.pieces, solution.graph.section
    centroid = complex(solution.require("centroid_x"), solution.require("centroid_y"))
    sweep = p.curves.sweep
    bent = sweep != 0.0
    u = np.zeros((len(sweep), 12))
    u[:, 1] = 1.0
    angle = math.atan2(direction.imag, direction.real)
    for i, turn in enumerate(range(-5, 5)):
        # The face is outermost where its tangent is normal to the direction.
        at = (angle + (turn + 0.5) * math.pi - p.curves.heading) / np.where(bent, sweep, 1.0)
        u[:, 2 + i] = np.where(bent, np.clip(at, 0.0, 1.0), 0.0)
    place = p.curves.position(u) - centroid
    half = 0.5j * p.curves.tangent(u) * (p.t0[:, None] + (p.t1 - p.t0)[:, None] * u)
    reach = np.maximum(*(((place + side * half) * direction.conjugate()).real for side in (1.0, -1.0)))
    best = -math.inf
    e = np.array([wall.e for wall in section.walls])[p.wall]
    stressed = p.e > 0.0
    if stressed.any():
        best = float((e[:, None] * reach)[stressed].max())
    for boom in section.booms:
        if boom.point is not None:
            z = complex(*section.points[boom.point])
        else:
            assert boom.wall is not None
            z = complex(*solution.place(boom.wall, np.array([boom.at]))[0])
        best = max(best, boom.e * ((z - centroid) * direction.conjugate()).real)
    return best


def face_quantities(solution: Solution) -> dict[str, Quantity]:
    """Section moduli, torsion section modulus, Wagner coefficients and polar radius by name.

    section_modulus_x_top, _x_bottom = Ixx over the largest e y above and below the centroid, y_right, y_left
    alike, u_plus, u_minus, v_plus, v_minus for the principal axes (plus: towards +v for a moment about u,
    +u for a moment about v). They give the stress over e of bending about one axis alone.
    torsion_modulus = T over the largest shear stress of Saint-Venant torsion.
    """
    out: dict[str, Quantity] = {}
    angle = solution.quantities["principal_angle"].value
    turn = complex(math.cos(angle), math.sin(angle)) if angle is not None else 1.0
    sides = {
        "x_top": ("second_moment_xx", 1j),
        "x_bottom": ("second_moment_xx", -1j),
        "y_right": ("second_moment_yy", 1.0),
        "y_left": ("second_moment_yy", -1.0),
        "u_plus": ("principal_moment_u", 1j * turn),
        "u_minus": ("principal_moment_u", -1j * turn),
        "v_plus": ("principal_moment_v", turn),
        "v_minus": ("principal_moment_v", -turn),
    }
    for name, (moment, direction) in sides.items():
        found = solution.quantities[moment]
        if found.value is None:
            out[f"section_modulus_{name}"] = Quantity(None, found.reason)
        else:
            reach = extreme_fibre(solution, complex(direction))
            out[f"section_modulus_{name}"] = Quantity(found.value / reach)
    out["torsion_modulus"] = _torsion_modulus(solution)
    out |= wagner_coefficients(solution)
    return out


def _torsion_modulus(solution: Solution) -> Quantity:
    """T over the largest shear stress, cells and open walls together [L^3]."""
    constant = solution.quantities["torsion_constant"]
    if constant.value is None:
        return constant
    p = solution.graph.pieces
    flow = np.abs(solution.graph.cell_sum(solution.twist.cell_flow))
    alone = (solution.graph.left < 0) & (solution.graph.right < 0)
    thick = p.g * np.maximum(p.t0, p.t1)
    own = alone | (solution.level == "corrected")
    # Per unit rate of twist; in a cell q/t and g t are largest at different ends of a tapered wall.
    ends = [flow / t + np.where(own, p.g * t, 0.0) for t in (p.t0, p.t1)]
    stress = np.where(alone, thick, np.maximum(*ends))
    return Quantity(constant.value / float(stress.max()))


def wagner_coefficients(solution: Solution) -> dict[str, Quantity]:
    """Wagner coefficients and polar radius about the shear centre.

    The Wagner effect of direct stress is K = integral of sigma r^2 dA, r from the shear centre S. With the
    resultants of this package K = N r_0^2 + Mx beta_x + My beta_y + B beta_w, where

        beta_x = integral of e f_x r^2 t ds, f_x = a x + b y the stress over e of a unit Mx with My = 0,
        beta_y alike for a unit My, beta_w = integral of e omega r^2 t ds / I_w,
        r_0^2 = integral of e r^2 t ds / A.

    For principal axes beta_u = integral of e eta (xi^2 + eta^2) t ds / I_u - 2 eta_S (a moment that puts +v
    in tension) and beta_v = integral of e xi (xi^2 + eta^2) t ds / I_v - 2 xi_S, xi along u and eta along v
    from the centroid: the usual form. Names: wagner_x, wagner_y, wagner_u, wagner_v [L], wagner_omega [-],
    polar_radius_squared [L^2]. Midline integrals at every level.

    References
    ----------
    N. S. Trahair, Flexural-Torsional Buckling of Structures, 1993, ch. 17 (from memory; sign of the moment as
    here, not as there).
    """
    names = ("wagner_x", "wagner_y", "wagner_u", "wagner_v", "wagner_omega", "polar_radius_squared")
    mass, warp = solution.mass, solution.warp
    if warp is None or mass.reason is not None:
        return {name: Quantity(None, mass.reason) for name in names}
    p, graph = solution.graph.pieces, solution.graph
    place = p.curves.moved(-mass.centroid).position(p.u)
    node = graph.node - mass.centroid
    weight = p.eta

    def mean(inside: Floats, at_node: Floats) -> float:
        """Integral of value r^2 e t ds and of booms."""
        walls = (weight * inside * np.abs(place - warp.pole) ** 2).sum()
        return float(walls + (graph.boom * at_node * np.abs(node - warp.pole) ** 2).sum())

    def bending(k: complex) -> float:
        return mean((np.conj(k) * place).real, (np.conj(k) * node).real)

    turn = 1.0 + 0.0j
    if mass.angle is not None:
        turn = complex(math.cos(mass.angle), math.sin(mass.angle))
    u, v = mass.principal
    out = {
        "wagner_x": Quantity(bending(mass.slope(0.0, 1.0))),
        "wagner_y": Quantity(bending(mass.slope(1.0, 0.0))),
        "wagner_u": Quantity(bending(1j * turn / u)),
        "wagner_v": Quantity(bending(turn / v)),
        "polar_radius_squared": Quantity(mean(np.ones_like(weight), np.ones(len(node))) / mass.area),
    }
    if has_warping(solution):
        omega = mean(warp.at_quadrature, warp.node) / warp.constant
        out["wagner_omega"] = Quantity(omega)
    else:
        out["wagner_omega"] = Quantity(None, "the midline warping constant is zero")
    return out


def has_warping(solution: Solution) -> bool:
    """Whether the midline warping constant is more than round-off."""
    if solution.warp is None:
        return False
    node = solution.graph.node
    size = max(float(np.ptp(node.real)), float(np.ptp(node.imag)))
    return solution.warp.constant > _NO_WARPING * solution.mass.area * size**4
