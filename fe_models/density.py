"""How fine a mesh is, as shares of thickness and turn."""

from __future__ import annotations

from dataclasses import dataclass

# Largest angle of an arc in one element [rad].
TURN = 0.2
# Largest (radius / thickness) angle^(p + 1) of a curved side of order p: what a side and the boundary values
# on it stray by, as a share of the thickness, is some hundredth of it.
STRAY = {3: 3e-4, 4: 5e-3}


@dataclass(frozen=True)
class Density:
    """How fine the mesh is.

    Parameters
    ----------
    order : int
        Of the elements, 3 or 4.
    eta : float
        Energy share lost at a corner's first element [-], see grading.
    largest : float
        Largest size in a cluster over the thickness [-].
    slope : float
        Growth of the size with distance from a corner [-].
    layers : int
        Elements across a strip.
    first : float
        First element of a strip over its thickness [-].
    ratio : float
        Growth from one element of a strip to the next [-].
    turn : float
        Largest angle of an arc in one element [rad].
    """

    order: int = 3
    eta: float = 1e-4
    largest: float = 0.8
    slope: float = 1.0
    layers: int = 1
    first: float = 1.0
    ratio: float = 2.0
    turn: float = TURN

    def arc_step(self, radius: float, thickness: float) -> float:
        """Largest angle of an element on an arc [rad].

        A side of order p strays from the arc by a multiple of radius angle^(p + 1).
        """
        if radius == float("inf"):
            return self.turn
        stray = STRAY[self.order] * thickness / radius
        return min(self.turn, float(stray ** (1.0 / (self.order + 1))) * self.turn / TURN)

    def finer(self, level: float) -> Density:
        """The density of a refinement level (0: this one)."""
        return Density(
            self.order,
            self.eta * 10.0 ** (-2 * level),
            self.largest * 0.7**level,
            max(0.35, self.slope * 0.8**level),
            self.layers,
            self.first * 0.7**level,
            1.0 + (self.ratio - 1.0) * 0.8**level,
            self.turn * 0.7**level,
        )
