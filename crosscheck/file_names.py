"""Plain file names from the words of a section file."""

from __future__ import annotations

import re
from collections.abc import Container


def free_name(words: str, taken: Container[str], otherwise: str = "file") -> str:
    """A plain file name of the words, with a number where it is taken; no folder, no odd letters."""
    name = re.sub(r"[^A-Za-z0-9-]+", "_", words).strip("_")[:60] or otherwise
    number, free = 1, name
    while free in taken:
        number += 1
        free = f"{name}_{number}"
    return free
