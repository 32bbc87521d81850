"""A load as both sides see it: one line of action, a shear centre and so a torque of its own on each side."""

from __future__ import annotations

import itertools
from collections.abc import Mapping
from dataclasses import dataclass

from crosscheck.comparison.result import FeValue


@dataclass(frozen=True)
class LoadCase:
    """Shear on a line of action, a couple, and direct resultants at each side's own centroid.

    Attributes
    ----------
    name : str
        Name in the section file, or that of a unit load.
    shear : (float, float)
        Vx, Vy [F].
    through : (float, float) or None
        A place on the line of action [L]; None: through each side's own shear centre, without twist.
    torque : float
        Couple added to what the shear makes [F L], anticlockwise positive.
    unit : bool
        True for the three unit loads.
    axial : float
        N [F], tension positive.
    moment : (float, float)
        Mx, My [F L]; Mx > 0 puts +y in tension, My > 0 puts +x in tension.
    bimoment : float
        B [F L^2], tension where the warping function is positive.
    """

    name: str
    shear: tuple[float, float]
    through: tuple[float, float] | None
    torque: float
    unit: bool = False
    axial: float = 0.0
    moment: tuple[float, float] = (0.0, 0.0)
    bimoment: float = 0.0

    @property
    def has_shear(self) -> bool:
        """Whether it has a shear or a couple, so that it makes shear stress."""
        return self.shear != (0.0, 0.0) or self.torque != 0.0

    @property
    def has_direct(self) -> bool:
        """Whether it makes direct stress."""
        return self.axial != 0.0 or self.moment != (0.0, 0.0) or self.bimoment != 0.0


UNIT_CASES: tuple[LoadCase, LoadCase, LoadCase] = (
    LoadCase("unit Vx", (1.0, 0.0), None, 0.0, unit=True),
    LoadCase("unit Vy", (0.0, 1.0), None, 0.0, unit=True),
    LoadCase("unit T", (0.0, 0.0), None, 1.0, unit=True),
)


def fe_torque(case: LoadCase, fe: Mapping[str, FeValue]) -> FeValue:
    """Torque about FE's shear centre, T + (x_p - x_s) Vy - (y_p - y_s) Vx [F L], with its interval."""
    vx, vy = case.shear
    if case.through is None or (vx == 0 and vy == 0):
        return FeValue(case.torque, case.torque, case.torque, "exact")
    x_s, y_s = fe["shear_centre_x"], fe["shear_centre_y"]
    for side in (x_s, y_s):
        if side.value is None or side.low is None or side.high is None:
            return FeValue(None, None, None, side.basis, reason=side.reason or "FE gives no shear centre")
    x_p, y_p = case.through
    assert x_s.value is not None
    assert y_s.value is not None

    def torque(x: float | None, y: float | None) -> float:
        assert x is not None
        assert y is not None
        return case.torque + (x_p - x) * vy - (y_p - y) * vx

    corners = [torque(x, y) for x, y in itertools.product((x_s.low, x_s.high), (y_s.low, y_s.high))]
    return FeValue(torque(x_s.value, y_s.value), min(corners), max(corners), x_s.basis)


def fe_rate_of_twist(torque: FeValue, torsion_constant: FeValue, shear_modulus: float) -> FeValue:
    """Rate of twist T_sc/(G J) with its interval; G = 1 gives it per unit modulus."""
    ends = (torque.value, torque.low, torque.high, torsion_constant.low, torsion_constant.high)
    if torsion_constant.value is None or any(end is None for end in ends):
        reason = torque.reason or torsion_constant.reason or "FE gives no torsion constant"
        return FeValue(None, None, None, torsion_constant.basis, reason=reason)
    value, t_low, t_high, j_low, j_high = (float(end) for end in ends if end is not None)
    rates = [t / (shear_modulus * j) for t, j in itertools.product((t_low, t_high), (j_low, j_high))]
    return FeValue(
        value / (shear_modulus * torsion_constant.value), min(rates), max(rates), torsion_constant.basis
    )
