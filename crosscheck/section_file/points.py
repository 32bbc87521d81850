"""Points of a section file."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from crosscheck.faults import KeyPath, quoted
from crosscheck.section_file.model import EVERY_BEND, MIDLINE_SHEAR_CENTRE, Place
from crosscheck.section_file.numbers import Numbers

_RESERVED_POINTS = (MIDLINE_SHEAR_CENTRE, EVERY_BEND)


def read_points(table: Mapping[str, Any], numbers: Numbers, path: KeyPath = ("points",)) -> dict[str, Place]:
    """Places of all points of a table, at a key path, that are without fault."""
    points: dict[str, Place] = {}
    for name, raw in table.items():
        if name in _RESERVED_POINTS:
            numbers.faults.add((*path, name), quoted(name), "named otherwise: this name is reserved")
        place = numbers.pair((*path, name), raw)
        if place is not None:
            points[name] = place
    return points
