"""A finite-element cross-check for thin-walled beam theory: one section, both sides, every difference judged.

``from crosscheck import read_section, compare``; names are loaded on first use, so that help comes at once.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from crosscheck.comparison.comparing import compare
    from crosscheck.comparison.result import Result
    from crosscheck.faults import CrosscheckError, SectionFaults
    from crosscheck.section_file.model import SectionFile
    from crosscheck.section_file.reader import read_section

__all__ = ["CrosscheckError", "Result", "SectionFaults", "SectionFile", "compare", "read_section"]

_HOMES = {
    "CrosscheckError": "crosscheck.faults",
    "Result": "crosscheck.comparison.result",
    "SectionFaults": "crosscheck.faults",
    "SectionFile": "crosscheck.section_file.model",
    "compare": "crosscheck.comparison.comparing",
    "read_section": "crosscheck.section_file.reader",
}


def __getattr__(name: str) -> Any:
    """A public name, imported when it is first asked for."""
    if name not in _HOMES:
        raise AttributeError(f"module 'crosscheck' has no attribute {name!r}")
    return getattr(importlib.import_module(_HOMES[name]), name)


def __dir__() -> list[str]:
    """Public names."""
    return sorted(__all__)
