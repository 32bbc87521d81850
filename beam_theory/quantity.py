"""A named number of the theory, or the reason why there is none; and a built-in check."""

from __future__ import annotations

from dataclasses import dataclass

from beam_theory.errors import UndefinedQuantity

__all__ = ["Check", "Quantity"]


@dataclass(frozen=True)
class Quantity:
    """A value, or None with the reason why classical theory does not define it here.

    Attributes
    ----------
    value : in the unit that its name has in the nomenclature: area [L^2], torsion constant [L^4] ...
    reason : why there is none
    """

    value: float | None
    reason: str | None = None

    def require(self, name: str) -> float:
        """The value; raises UndefinedQuantity with the reason when there is none."""
        if self.value is None:
            raise UndefinedQuantity(f"{name}: {self.reason}")
        return self.value


@dataclass(frozen=True)
class Check:
    """A self-check of a solution.

    Attributes
    ----------
    name : what is checked
    value : what is left over, without dimension [-]
    allowed : largest value that passes [-]
    """

    name: str
    value: float
    allowed: float

    @property
    def passed(self) -> bool:
        """True when the value is a number not above what is allowed."""
        return self.value <= self.allowed
