"""Points of a section file."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from crosscheck.faults import quoted
from crosscheck.section_file.model import EVERY_BEND, MIDLINE_SHEAR_CENTRE, Place
from crosscheck.section_file.numbers import Numbers

_RESERVED_POINTS = (MIDLINE_SHEAR_CENTRE, EVERY_BEND)


def read_points(document: Mapping[str, Any], numbers: Numbers) -> dict[str, Place]:
    """Places of all points that are without fault."""
    points: dict[str, Place] = {}
    for name, raw in document.get("points", {}).items():
        if name in _RESERVED_POINTS:
            numbers.faults.add(("points", name), quoted(name), "named otherwise: this name is reserved")
        place = numbers.pair(("points", name), raw)
        if place is not None:
            points[name] = place
    return points
