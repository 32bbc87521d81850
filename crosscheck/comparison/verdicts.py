"""How one difference is judged: normaliser, difference, verdict, effect for a use, and the factor to use."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from crosscheck.comparison.quantities import QuantityKind
from crosscheck.comparison.result import Effect, FeValue, Verdict

# Below this share of the normaliser a difference is round-off and has no direction worth a word.
ROUND_OFF = 1e-9
# Principal moments nearer than this share of their mean leave the principal directions undefined.
EQUAL_MOMENTS = 1e-6
# Peak of a wall and torque of a load are not taken smaller than this share of the section's own.
FLOOR = 0.05


@dataclass(frozen=True)
class Yardstick:
    """What a difference is divided by, in the quantity's unit; None with a reason where nothing serves."""

    value: float | None
    reason: str | None = None


def verdict(difference: float, uncertainty: float, criterion: float) -> Verdict:
    """Verdict on a difference whose FE side is uncertain.

    ``within`` when d + u <= criterion, ``outside`` when d - u > criterion, else ``inconclusive``.

    Parameters
    ----------
    difference : float
        Theory minus FE over the normaliser [-].
    uncertainty : float
        Half FE interval over the normaliser [-].
    criterion : float
        Largest accepted difference [-].

    Returns
    -------
    str
        ``within``, ``outside`` or ``inconclusive``.
    """
    d = abs(difference)
    if d + uncertainty <= criterion:
        return "within"
    if d - uncertainty > criterion:
        return "outside"
    return "inconclusive"


def effect(
    kind: QuantityKind, theory: float, fe: float, difference: float, uncertainty: float
) -> Mapping[str, Effect] | None:
    """Effect of using theory's number, for the use the quantity serves.

    Understated stiffness and overstated flow (in magnitude) are conservative. The warping constant is a
    stiffness for twist, but a stiffer restraint also attracts bimoment: its effect on stress depends. None
    for positions and directions, and where the FE error hides the sign of the difference.
    """
    if kind.stiffness_for is None and kind.severity_for is None:
        return None
    if abs(difference) <= max(uncertainty, ROUND_OFF):
        return None
    overstated = abs(theory) > abs(fe)
    effects: dict[str, Effect] = {}
    if kind.stiffness_for is not None:
        effects[kind.stiffness_for] = "unconservative" if overstated else "conservative"
    if kind.severity_for is not None:
        effects[kind.severity_for] = "conservative" if overstated else "unconservative"
    if kind.name == "warping_constant":
        effects["stress"] = "depends"
    return effects


def factor(
    kind: QuantityKind, theory: float, fe: float, normaliser: float
) -> tuple[float | None, str | None]:
    """FE over hand, to multiply the hand value by; None with the reason where a ratio says nothing."""
    if kind.normaliser in ("extent", "angle"):
        return None, None
    if abs(theory) <= ROUND_OFF * normaliser:
        return None, "the hand value is zero, so no factor turns it into the FE value"
    return fe / theory, None


def angle_between(theory: float, fe: float) -> float:
    """Turn from the FE direction to theory's, of two axes without a sense, in (-pi/2, pi/2] [rad]."""
    turn = math.remainder(theory - fe, math.pi)
    return turn if turn > -math.pi / 2 else turn + math.pi


def product_moment_yardstick(fe: Mapping[str, FeValue]) -> Yardstick:
    """sqrt(Ixx Iyy) of FE [L^4]: Ixy itself may be zero."""
    ixx, iyy = fe["second_moment_xx"].value, fe["second_moment_yy"].value
    if ixx is None or iyy is None or ixx <= 0 or iyy <= 0:
        return Yardstick(None, "sqrt(Ixx Iyy) is not defined")
    return Yardstick(math.sqrt(ixx * iyy))


def angle_yardstick(theory: Mapping[str, float | None], fe: Mapping[str, FeValue]) -> Yardstick:
    """The turn [rad] that counts as a difference of one, from FE's principal moments.

    A small turn d of the principal axes leaves the product moment (Iu - Iv) d about the turned axes. Measured
    like Ixy, over sqrt(Iu Iv), the difference is d (Iu - Iv)/sqrt(Iu Iv): the yardstick is
    sqrt(Iu Iv)/(Iu - Iv). It grows without limit as Iu and Iv become equal, as it should: there the
    directions carry no information.
    """
    for moment_u, moment_v in (
        (fe["principal_moment_u"].value, fe["principal_moment_v"].value),
        (theory.get("principal_moment_u"), theory.get("principal_moment_v")),
    ):
        if moment_u is None or moment_v is None:
            return Yardstick(None, "the principal moments are not defined on both sides")
        if moment_u - moment_v <= EQUAL_MOMENTS * (moment_u + moment_v) / 2:
            return Yardstick(None, "Iu and Iv are equal: every axis is principal")
    fe_u, fe_v = fe["principal_moment_u"].value, fe["principal_moment_v"].value
    assert fe_u is not None
    assert fe_v is not None
    if fe_v <= 0:
        return Yardstick(None, "Iv is not positive")
    return Yardstick(math.sqrt(fe_u * fe_v) / (fe_u - fe_v))


def warping_yardstick(fe: Mapping[str, FeValue], extent: float) -> Yardstick:
    """The larger of FE's I_w and J D^2 [L^6]: midline I_w is exactly zero for many sections."""
    warping, torsion = fe["warping_constant"].value, fe["torsion_constant"].value
    if warping is None or torsion is None:
        return Yardstick(None, "FE gives no warping constant")
    return Yardstick(max(warping, torsion * extent**2))


def section_yardstick(
    kind: QuantityKind, theory: Mapping[str, float | None], fe: Mapping[str, FeValue], extent: float
) -> Yardstick:
    """Normaliser of a section quantity.

    Parameters
    ----------
    kind : QuantityKind
        The quantity.
    theory, fe : mapping
        All section quantities of both sides, in the units of the file.
    extent : float
        Larger overall dimension D of the outline [L].

    Returns
    -------
    Yardstick
        In the unit of the quantity.
    """
    match kind.normaliser:
        case "extent":
            return Yardstick(extent)
        case "second moments":
            return product_moment_yardstick(fe)
        case "angle":
            return angle_yardstick(theory, fe)
        case "warping":
            return warping_yardstick(fe, extent)
        case _:
            value = fe[kind.name].value
            return Yardstick(abs(value)) if value else Yardstick(None, "the FE value is zero")
