"""[tolerances]: how far the part may be from the numbers of the file."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from crosscheck.section_file.numbers import BELOW_ONE, POSITIVE, Numbers


def read_tolerances(document: Mapping[str, Any], numbers: Numbers) -> dict[str, float]:
    """Tolerances by name: that of dimensions a length [L], the others relative [-]."""
    read = {}
    for name, raw in document.get("tolerances", {}).items():
        value = numbers.number(("tolerances", name), raw, POSITIVE if name == "dimension" else BELOW_ONE)
        if value is not None:
            read[name] = value
    return read
