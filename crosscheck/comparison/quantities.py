"""What is compared: a row per quantity with its symbol, dimension, normaliser, use and default criterion."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Normaliser = Literal["value", "extent", "second moments", "angle", "warping", "load peak", "twist", "surface"]
Direction = Literal["right", "up"] | None
Use = Literal["twist", "deflection", "stress"]


@dataclass(frozen=True)
class QuantityKind:
    """One compared quantity.

    Attributes
    ----------
    name : str
        Key in section files and results.
    symbol : str
        Symbol of the nomenclature.
    words : str
        What people call it.
    length_power, force_power : int
        Dimension of the quantity of a section or of a load in the file [L^length_power F^force_power].
    normaliser : str
        What the difference is divided by; see :mod:`crosscheck.comparison.verdicts`.
    stiffness_for : str or None
        Use for which an understated value is conservative: a stiffness, or a modulus that stress is over.
    severity_for : str or None
        Use for which an overstated magnitude is conservative.
    axis : str or None
        ``right`` for a position along x, ``up`` along y, None for anything else.
    default_criterion : float
        Largest accepted difference unless the section file gives another [-].
    """

    name: str
    symbol: str
    words: str
    length_power: int
    force_power: int = 0
    normaliser: Normaliser = "value"
    stiffness_for: Use | None = None
    severity_for: Use | None = None
    axis: Direction = None
    default_criterion: float = 0.05


SECTION_QUANTITIES: tuple[QuantityKind, ...] = (
    QuantityKind("area", "A", "area", 2, stiffness_for="deflection"),
    QuantityKind(
        "centroid_x", "x_c", "centroid, x", 1, normaliser="extent", axis="right", default_criterion=0.01
    ),
    QuantityKind(
        "centroid_y", "y_c", "centroid, y", 1, normaliser="extent", axis="up", default_criterion=0.01
    ),
    QuantityKind("second_moment_xx", "Ixx", "2nd moment Ixx", 4, stiffness_for="deflection"),
    QuantityKind("second_moment_yy", "Iyy", "2nd moment Iyy", 4, stiffness_for="deflection"),
    QuantityKind("product_moment_xy", "Ixy", "product Ixy", 4, normaliser="second moments"),
    QuantityKind("principal_angle", "alpha", "principal angle", 0, normaliser="angle"),
    QuantityKind("principal_moment_u", "Iu", "principal Iu", 4, stiffness_for="deflection"),
    QuantityKind("principal_moment_v", "Iv", "principal Iv", 4, stiffness_for="deflection"),
    QuantityKind(
        "shear_centre_x",
        "x_s",
        "shear centre, x",
        1,
        normaliser="extent",
        axis="right",
        default_criterion=0.01,
    ),
    QuantityKind(
        "shear_centre_y", "y_s", "shear centre, y", 1, normaliser="extent", axis="up", default_criterion=0.01
    ),
    QuantityKind("torsion_constant", "J", "torsion constant", 4, stiffness_for="twist"),
    QuantityKind(
        "warping_constant", "I_w", "warping constant", 6, normaliser="warping", stiffness_for="twist"
    ),
    QuantityKind("shear_area_x", "A_Vx", "shear area A_Vx", 2, stiffness_for="deflection"),
    QuantityKind("shear_area_y", "A_Vy", "shear area A_Vy", 2, stiffness_for="deflection"),
)

_SIDES = {
    "x_top": ("W_x top", "modulus W_x, top"),
    "x_bottom": ("W_x bottom", "modulus W_x, bottom"),
    "y_right": ("W_y right", "modulus W_y, right"),
    "y_left": ("W_y left", "modulus W_y, left"),
    "u_plus": ("W_u +v", "modulus W_u, +v side"),
    "u_minus": ("W_u -v", "modulus W_u, -v side"),
    "v_plus": ("W_v +u", "modulus W_v, +u side"),
    "v_minus": ("W_v -u", "modulus W_v, -u side"),
}
# Section moduli at the real faces: second moment over the farthest fibre, for bending about one axis alone.
MODULI: tuple[QuantityKind, ...] = tuple(
    QuantityKind(f"section_modulus_{side}", symbol, words, 3, stiffness_for="stress")
    for side, (symbol, words) in _SIDES.items()
)
# T over the largest shear stress of a unit T at the faces, at the probes of both sides.
TORSION_MODULUS = QuantityKind("torsion_modulus", "W_T", "torsion modulus", 3, stiffness_for="stress")

LOAD_QUANTITIES: tuple[QuantityKind, ...] = (
    QuantityKind("peak_flow", "q_max", "peak flow", -1, 1, normaliser="load peak", severity_for="stress"),
    QuantityKind("flow_at_probes", "q", "probe flow", -1, 1, normaliser="load peak", severity_for="stress"),
    QuantityKind("rate_of_twist", "phi'", "rate of twist", -1, 0, normaliser="twist", severity_for="twist"),
    QuantityKind(
        "surface_shear", "tau_T", "surface shear", -2, 1, normaliser="surface", severity_for="stress"
    ),
    QuantityKind(
        "direct_stress", "sigma", "direct stress", -2, 1, normaliser="load peak", severity_for="stress"
    ),
    QuantityKind(
        "von_mises_stress", "sigma_v", "von Mises", -2, 1, normaliser="load peak", severity_for="stress"
    ),
)

QUANTITIES: dict[str, QuantityKind] = {
    kind.name: kind for kind in (*SECTION_QUANTITIES, *MODULI, TORSION_MODULUS, *LOAD_QUANTITIES)
}

# The one that may be stated at a named probe.
AT_PROBES = "flow_at_probes"
# Quantities that belong to a load, by name.
OF_A_LOAD = frozenset(kind.name for kind in LOAD_QUANTITIES)

UNIT_LOADS: tuple[str, str, str] = ("unit Vx", "unit Vy", "unit T")


def power_text(unit: str, power: int) -> str:
    """Unit raised to a power as written in results, e.g. ``mm^4``; empty for power 0."""
    if power == 0:
        return ""
    return unit if power == 1 else f"{unit}^{power}"


def unit_text(length_power: int, force_power: int, length: str, force: str) -> str:
    """Unit of a quantity as written in results, such as ``mm^4``, ``N/mm`` or ``1/mm^2``.

    Parameters
    ----------
    length_power, force_power : int
        Exponents of length and force [-].
    length, force : str
        Unit names of the section file.

    Returns
    -------
    str
        Numerator over denominator; ``1`` when the quantity has no dimension.
    """
    powers = ((force, force_power), (length, length_power))
    above = " ".join(power_text(unit, power) for unit, power in powers if power > 0)
    below = " ".join(power_text(unit, -power) for unit, power in powers if power < 0)
    if not below:
        return above or "1"
    return f"{above or '1'}/{below}" if " " not in below else f"{above or '1'}/({below})"


def stress_unit(load: str, length: str, force: str) -> str:
    """Unit of a stress: per unit force or torque for the unit loads, else force per area."""
    if load == "unit T":
        return unit_text(-3, 0, length, force)
    if load in UNIT_LOADS:
        return unit_text(-2, 0, length, force)
    return unit_text(-2, 1, length, force)


def flow_unit(load: str, length: str, force: str) -> str:
    """Unit of a shear flow: per unit force or torque for the unit loads, else force per length."""
    if load == "unit T":
        return unit_text(-2, 0, length, force)
    if load in UNIT_LOADS:
        return unit_text(-1, 0, length, force)
    return unit_text(-1, 1, length, force)
