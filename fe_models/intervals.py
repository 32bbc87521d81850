"""From fields to numbers with error bars.

With k and s of ``fields`` and gap^2 = integral of |k - s|^2 / g:

    J      between  integral |k|^2/g - gap_T^2  and  integral |k|^2/g                            (1)
    1/A_V  between  integral |k|^2/g  and  integral |k|^2/g + gap_V^2                            (2)
    L      integral R.k - (1/2) integral (s - k).(s_T - k_T)/g,  plus or minus gap_T gap_V / 2   (3)

(2) starts from k, whose energy is a lower bound whatever s is: on curved boundaries the stress function only
interpolates what frees them of traction, and the energy of s is off by the work of what is left, to first
order. (3) is half the torque of both fields where s is free of traction; since the errors of k and of s are
orthogonal to each other and both problems use the same spaces, its error is half the difference of two
products, each bounded by Cauchy and Schwarz. What is left of traction enters only times the error of k.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from .band import Array
from .fields import Fields, warping
from .space import Space, space

# Share of a value kept for round-off in every interval.
ROUND_OFF = 1e-10


@dataclass(frozen=True)
class Interval:
    """A finite-element number and its error bar.

    Parameters
    ----------
    value, low, high : float or None
        Low <= value <= high; None where the quantity is not defined. In the unit that its name has in the
        nomenclature: area [L^2], torsion constant [L^4] ...
    basis : str
        ``exact`` (of the outline), ``bound``, ``bound on the interpolated outline`` or ``estimate``.
    reason : str, optional
        Why there is no value.
    with_nu : float, optional
        Value for the section's Poisson's ratio, where it differs.
    """

    value: float | None
    low: float | None
    high: float | None
    basis: str
    reason: str | None = None
    with_nu: float | None = None

    @property
    def half_width(self) -> float:
        """Half of high - low; 0 where there is no value."""
        return 0.0 if self.low is None or self.high is None else 0.5 * (self.high - self.low)

    @property
    def known(self) -> float:
        """The value of a quantity that always has one [its own unit]."""
        if self.value is None:
            raise ValueError(self.reason or "the quantity is not defined")
        return self.value

    def widened(self, share: float) -> Interval:
        """The interval widened by a share of its value."""
        return self.padded(share * abs(self.value or 0.0))

    def padded(self, by: float) -> Interval:
        """The interval widened by an amount at both ends [the quantity's own unit]."""
        if by == 0.0 or self.low is None or self.high is None:
            return self
        return replace(self, low=self.low - by, high=self.high + by)

    def meet(self, other: Interval) -> Interval:
        """Intersection of two bounds for one quantity; this one where they are not bounds.

        Bounds that exclude each other give an interval with low above high, which a self-check finds.
        """
        if self.low is None or other.low is None or self.high is None or other.high is None:
            return self
        if not self.basis.startswith("bound") or not other.basis.startswith("bound"):
            return self
        low, high = max(self.low, other.low), min(self.high, other.high)
        return Interval(0.5 * (low + high), low, high, self.basis, self.reason, self.with_nu)


def around(value: float, half: float, basis: str) -> Interval:
    """The interval value plus or minus half."""
    return Interval(value, value - half, value + half, basis)


def torsion_constant(fields: Fields, basis: str) -> Interval:
    """J between its two sides, equation (1) [L^4]."""
    high = fields.twist
    gap = float(fields.gap(fields.torsion).sum())
    return around(high - 0.5 * gap, 0.5 * gap + ROUND_OFF * high, basis)


def shear_area(fields: Fields, axis: int, basis: str) -> Interval:
    """A_Vx (axis 0) or A_Vy (axis 1) from the energy of unit shear, equation (2) [L^2]."""
    pair = fields.flexure[axis]
    energy = fields.energy(pair.kinematic)
    most = energy + float(fields.gap(pair).sum()) + ROUND_OFF * energy
    least = (1.0 - ROUND_OFF) * energy
    return Interval(0.5 * (1.0 / most + 1.0 / least), 1.0 / most, 1.0 / least, basis)


def shear_centre(fields: Fields, extent: float, basis: str) -> tuple[Interval, Interval]:
    """x_s and y_s in the file's axes from the torque of unit Vy and Vx, equation (3) [L]."""
    torsion = fields.torsion
    twist = float(fields.gap(torsion).sum())
    g = fields.moduli.g[:, None]
    found = []
    for axis, sign in ((1, 1.0), (0, -1.0)):
        pair = fields.flexure[axis]
        apart = np.sum((pair.static - pair.kinematic) * (torsion.static - torsion.kinematic), axis=-1) / g
        torque = fields.torque(pair.kinematic) - 0.5 * fields.space.integral(apart)
        half = 0.5 * float(np.sqrt(twist * fields.gap(pair).sum())) + ROUND_OFF * extent
        place = float(fields.inertia.centroid[1 - axis]) + sign * torque
        found.append(around(place, half, basis))
    return found[0], found[1]


def warping_function(fields: Fields, centre: Array) -> Array:
    """omega about the shear centre with e-weighted mean zero, at the nodes, (e, k) [L^2].

    The pole moves by  omega_S = omega_C - (y_s x - x_s y).
    """
    return _about(fields.space, fields, fields.torsion.potential, centre)


def warping_constant(fields: Fields, centre: Array) -> Interval:
    """I_w, the integral of e omega^2 [L^6]: an estimate.

    The error bar is the change from a solution one order lower on the same mesh, whose own error is larger.
    """
    value = _squared(fields.space, fields, warping_function(fields, centre))
    below = space(fields.space.mesh, fields.space.element.order - 1, fields.inertia.centroid)
    lower = _squared(below, fields, _about(below, fields, warping(below, fields.moduli), centre))
    return around(value, abs(value - lower) + ROUND_OFF * value, "estimate")


def _about(on: Space, fields: Fields, potential: Array, centre: Array) -> Array:
    """A warping function moved to the pole ``centre`` and to mean zero, (e, k)."""
    x_s, y_s = centre - fields.inertia.centroid
    local = potential - (y_s * on.places[..., 0] - x_s * on.places[..., 1])
    mean = on.integral(fields.moduli.e[:, None] * on.value(local)) / fields.inertia.area
    return np.asarray(local - mean)


def _squared(on: Space, fields: Fields, local: Array) -> float:
    return on.integral(fields.moduli.e[:, None] * on.value(local) ** 2)
