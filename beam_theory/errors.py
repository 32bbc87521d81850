"""The error tree of beam_theory.

TheoryError
|-- SectionError        the section handed over cannot be solved: every fault in one go
|-- LoadError           a load, a wall name or a fraction asked for does not fit the section
`-- UndefinedQuantity   classical theory defines no such quantity for this section
"""

from __future__ import annotations

__all__ = ["LoadError", "SectionError", "TheoryError", "UndefinedQuantity"]


class TheoryError(Exception):
    """Root of every error that beam_theory raises on purpose."""


class SectionError(TheoryError):
    """A section that cannot be solved; `faults` lists every fault found, one sentence each."""

    def __init__(self, faults: list[str] | tuple[str, ...]) -> None:
        self.faults: tuple[str, ...] = tuple(faults)
        super().__init__("; ".join(self.faults))


class LoadError(TheoryError):
    """A load or a place that does not fit the section."""


class UndefinedQuantity(TheoryError):
    """Classical theory defines no such quantity for this section; the message says why."""
