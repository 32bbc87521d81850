"""Unit systems of section files: a length and a force, nothing is converted."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True)
class UnitSystem:
    """Names of the unit of length [L] and of force [F]."""

    length: str
    force: str


UNIT_SYSTEMS: Mapping[str, UnitSystem] = {
    "mm N": UnitSystem("mm", "N"),
    "in lbf": UnitSystem("in", "lbf"),
    "m N": UnitSystem("m", "N"),
    "m kN": UnitSystem("m", "kN"),
    "in kip": UnitSystem("in", "kip"),
}
