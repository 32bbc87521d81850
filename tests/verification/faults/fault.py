"""A deliberate fault: text of a file that stands there once, and what it becomes."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Fault:
    """name: in words. path: from the top of the project. old: text of the file, standing there once. new."""

    name: str
    path: str
    old: str
    new: str
