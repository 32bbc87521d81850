"""What one check of the verification suite is, and what came of it.

Reference rows and code checks give the same outcome, so that reports know one kind only.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Literal

Side = Literal["theory", "fe", "both"]

# What a section (or a check) exercises; a feature that no check exercises fails the suite.
FEATURES = (
    "open walls",
    "closed cell",
    "many cells",
    "fins",
    "arc",
    "smooth path",
    "taper",
    "bend",
    "fillet",
    "boom",
    "two materials",
    "shear-only skin",
    "cut choice",
    "load on a line",
    "torque",
    "axial and moment",
    "bimoment",
    "outline solid",
    "hole in a solid",
    "nu",
)


@dataclass(frozen=True)
class Series:
    """Points of an order plot, both axes logarithmic.

    x, y: equally many positive numbers, x what was refined (unknowns, element size, thickness).
    expected: the slope d log y/d log x that theory demands; None where none is demanded.
    slope: the slope found, as the check computed it.
    """

    x: tuple[float, ...]
    y: tuple[float, ...]
    x_label: str
    y_label: str
    slope: float | None = None
    expected: float | None = None


@dataclass(frozen=True)
class CheckOutcome:
    """One line of the evidence.

    name: unique in the suite. group: the heading it stands under ("manufactured solutions", "invariances").
    value, allowed: the number found and the largest (absolute) number allowed; what they are is in `detail`.
    detail: one sentence with the numbers that a reviewer wants; also the reason where the check failed.
    """

    name: str
    group: str
    side: Side
    passed: bool
    value: float
    allowed: float
    detail: str
    features: frozenset[str] = frozenset()
    series: Mapping[str, Series] = field(default_factory=dict)
    seconds: float = 0.0

    @property
    def share(self) -> float:
        """Share of the tolerance that is used; infinite where nothing was allowed and something found."""
        if self.allowed > 0.0:
            return abs(self.value) / self.allowed
        return 0.0 if self.value == 0.0 else float("inf")


@dataclass(frozen=True)
class CodeCheck:
    """A check that the suite runs in a worker process.

    run: a function at the top of a module (it is pickled by name), without arguments; the suite fills in
        `seconds` itself, and turns an exception into a failed outcome.
    quick: part of `--quick`, which has twenty seconds on two cores for everything.
    """

    name: str
    group: str
    side: Side
    run: Callable[[], CheckOutcome]
    quick: bool = False
    features: frozenset[str] = frozenset()
