"""Unit systems of section files: a length and a force, nothing is converted."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True)
class UnitSystem:
    """Names of the unit of length [L] and of force [F]."""

    length: str
    force: str

    def powers(self, length_power: int, force_power: int) -> dict[str, int]:
        """Units of a dimension with their powers, as `unit_powers` reads them."""
        return {u: n for u, n in ((self.force, force_power), (self.length, length_power)) if n}

    def text(self, length_power: int, force_power: int) -> str:
        """Unit of a dimension as text: N mm^2; "-" where it has none."""
        powers = self.powers(length_power, force_power).items()
        return " ".join(unit if power == 1 else f"{unit}^{power}" for unit, power in powers) or "-"


_UNIT = re.compile(
    r"[\s·*.]*(?P<unit>kip|lbf|daN|kN|MN|N|mm|cm|in|ft|m)(?:\^?(?P<power>[1-9])|(?P<small>[²³⁴]))?"
)
_SMALL = {"²": 2, "³": 3, "⁴": 4}


def unit_powers(text: str) -> dict[str, int] | None:
    """Units in a text such as "N mm", "Nmm^2", "mm²" or "-", with their powers; None if it is none known."""
    powers: dict[str, int] = {}
    at, text = 0, text.strip()
    if text in ("-", "1", ""):
        return powers
    while at < len(text):
        match = _UNIT.match(text, at)
        if match is None:
            return None
        power = _SMALL[match["small"]] if match["small"] else int(match["power"] or 1)
        powers[match["unit"]] = powers.get(match["unit"], 0) + power
        at = match.end()
    return powers


UNIT_SYSTEMS: Mapping[str, UnitSystem] = {
    "mm N": UnitSystem("mm", "N"),
    "in lbf": UnitSystem("in", "lbf"),
    "m N": UnitSystem("m", "N"),
    "m kN": UnitSystem("m", "kN"),
    "in kip": UnitSystem("in", "kip"),
}
