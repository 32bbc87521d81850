"""A plate that has nothing to draw and says why."""

from __future__ import annotations

import matplotlib as mpl
from matplotlib.figure import Figure

from crosscheck.pictures.canvas import STYLE, sheet, title_in_lines, write_title


def words_picture(text: str, width_mm: int = 160) -> Figure:
    """A figure of one sentence."""
    lines = title_in_lines(text, width_mm)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, 6.0 + 4.2 * len(lines))
        write_title(figure, lines)
    return figure
