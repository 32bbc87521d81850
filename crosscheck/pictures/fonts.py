"""The font of the pictures, which comes with the plotting library: same letters on every machine."""

from __future__ import annotations

from functools import cache
from pathlib import Path

import matplotlib as mpl
from matplotlib.font_manager import get_font

NAME = "DejaVuSans.ttf"


def font_folder() -> Path:
    """Folder with the font files."""
    return Path(mpl.get_data_path()) / "fonts" / "ttf"


@cache
def _shapes() -> frozenset[int]:
    """Code points that the font has a shape for."""
    return frozenset(get_font(str(font_folder() / NAME)).get_charmap())


def covered_text(text: str) -> str:
    """Text that the font can show: a letter without a shape by its number."""
    return "".join(c if c.isspace() or covered(c) else f"[U+{ord(c):04X}]" for c in text)


def covered(letter: str) -> bool:
    """Whether the font has a shape for a letter."""
    return ord(letter) in _shapes()
