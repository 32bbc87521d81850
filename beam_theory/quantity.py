"""A named number of the theory, or the reason why there is none; and a built-in check."""

from __future__ import annotations

from dataclasses import dataclass

from beam_theory.errors import UndefinedQuantity

__all__ = ["Check", "Quantity"]


@dataclass(frozen=True)
class Quantity:
    """A value, or None with the reason why classical theory does not define it here."""

    value: float | None
    reason: str | None = None

    def require(self, name: str) -> float:
        """The value; raises UndefinedQuantity with the reason when there is none."""
        if self.value is None:
            raise UndefinedQuantity(f"{name}: {self.reason}")
        return self.value


@dataclass(frozen=True)
class Check:
    """A self-check of a solution: a dimensionless value that must not exceed `allowed`."""

    name: str
    value: float
    allowed: float

    @property
    def passed(self) -> bool:
        """True when the value is a number not above what is allowed."""
        return self.value <= self.allowed
