"""How fine a mesh is, as shares of thickness and turn."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Density:
    """How fine the mesh is.

    Parameters
    ----------
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

    eta: float = 1e-4
    largest: float = 0.8
    slope: float = 1.0
    layers: int = 1
    first: float = 1.0
    ratio: float = 2.0
    turn: float = 0.2

    def finer(self, level: float) -> Density:
        """The density of a refinement level (0: this one)."""
        return Density(
            self.eta * 10.0 ** (-2 * level),
            self.largest * 0.7**level,
            max(0.35, self.slope * 0.8**level),
            self.layers,
            self.first * 0.7**level,
            1.0 + (self.ratio - 1.0) * 0.8**level,
            self.turn * 0.7**level,
        )
