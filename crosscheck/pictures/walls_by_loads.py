"""Walls by loads: how far the hand method's flow is off in every wall under every load, in numbers."""

from __future__ import annotations

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from crosscheck.comparison.load_results import WallByLoad
from crosscheck.comparison.result import Result
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import (
    FONT,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    caption_in_lines,
    fitted,
    sheet,
    text_width,
    title_in_lines,
    write_caption,
    write_title,
)
from crosscheck.reports.load_tables import share_text

MOST_WALLS = 40
ROW_MM, LEAST_COLUMN_MM = 4.6, 9.0
# Grey of a cell that uses its whole criterion, and from how many criteria on no cell grows darker.
LIGHTEST, DARKEST, FULL = 0.97, 0.6, 4.0


def walls_by_loads_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Table of differences as a picture; None where no wall was compared.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width_mm : int
        Width of the paper.

    Returns
    -------
    Figure or None
    """
    cells = {(row.wall, row.load): row for row in result.walls_by_loads if row.difference is not None}
    if not cells:
        return None
    wide = width_mm >= WIDE_PAPER
    walls = list(dict.fromkeys(wall for wall, _ in cells))
    left = min(max(text_width(one_line(wall, 30), FONT) for wall in walls) + 4.0, 0.3 * width_mm)
    right = 52.0 if wide else 3.0
    worst_loads = list(dict.fromkeys(load for _, load in cells))
    shown = set(worst_loads[: int((width_mm - left - right) / LEAST_COLUMN_MM)])
    order = dict.fromkeys(flow.load for flow in result.flows)
    loads = [load for load in order if load in shown]
    rows = walls[:MOST_WALLS]
    title = title_in_lines("Shear flow of the hand method, wall by wall, load by load", width_mm)
    caption = (
        "Per cent of the wall's own peak in FE where the two are farthest apart: + hand high, - hand low. "
        "Darker: farther apart. Framed, bold: more than the criterion. Worst wall first"
    )
    caption += ", its largest cause on the right." if wide else "."
    if len(loads) < len(worst_loads) or len(rows) < len(walls):
        caption += (
            f" The worst {len(rows)} of {len(walls)} walls and {len(loads)} of {len(worst_loads)} loads."
        )
    captions = caption_in_lines(caption, width_mm)
    names = [one_line(load, 24) for load in loads]
    head = max(text_width(name, FONT) for name in names) + 3.0
    above, below = 4.0 + 4.2 * len(title) + head, 4.0 + 3.2 * len(captions)
    height = above + below + ROW_MM * len(rows)
    column = min((width_mm - left - right) / len(loads), 24.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, column * len(loads) / width_mm, ROW_MM * len(rows) / height)
        )
        axes.set_xlim(0, len(loads))
        axes.set_ylim(len(rows), 0)
        axes.set_axis_off()
        for j, name in enumerate(names):
            axes.text(j + 0.5, -0.25, name, rotation=90, ha="center", va="bottom", fontsize=FONT)
        for i, wall in enumerate(rows):
            name = fitted(wall, left - 3.0)
            axes.text(-0.06, i + 0.5, name, ha="right", va="center", fontsize=FONT, color=INK)
            found = [cells[wall, load] for load in loads if (wall, load) in cells]
            for j, load in enumerate(loads):
                _draw_cell(axes, i, j, cells.get((wall, load)))
            if wide and found:
                _write_cause(axes, i, len(loads), found)
        write_title(figure, title)
        write_caption(figure, captions)
    return figure


def _draw_cell(axes: Axes, i: int, j: int, row: WallByLoad | None) -> None:
    """One cell: grey by share of the criterion, the number in it."""
    if row is None or row.difference is None:
        axes.text(j + 0.5, i + 0.5, "-", ha="center", va="center", fontsize=FONT, color=SOFT)
        return
    used = min(abs(row.difference) / row.criterion / FULL, 1.0)
    grey = LIGHTEST - (LIGHTEST - DARKEST) * used
    outside = row.verdict == "outside"
    axes.add_patch(
        Rectangle(
            (j + 0.03, i + 0.06), 0.94, 0.88, facecolor=str(grey), clip_on=False, lw=0.9,
            edgecolor=INK if outside else "white", zorder=3 if outside else 2,
        )
    )  # fmt: skip
    axes.text(
        j + 0.5,
        i + 0.52,
        share_text(row.difference),
        ha="center",
        va="center",
        fontsize=FONT,
        weight="bold" if outside else "normal",
        color=INK,
        zorder=4,
    )


def _write_cause(axes: Axes, i: int, columns: int, found: list[WallByLoad]) -> None:
    """Largest cause of the worst cell of a row."""
    worst = max(found, key=lambda row: abs(row.difference or 0.0))
    if worst.cause is not None and abs(worst.difference or 0.0) >= 1e-4:
        text = one_line(f"{worst.cause.step} {share_text(worst.cause.change)} %", 48)
        axes.text(columns + 0.12, i + 0.5, text, ha="left", va="center", fontsize=FONT - 0.5, color=SOFT)
