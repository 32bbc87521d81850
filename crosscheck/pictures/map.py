"""A map of a difference over two parameters: contours, criterion, the section of the file."""

from __future__ import annotations

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.contour import QuadContourSet
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from crosscheck.comparison.drawn import Array
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import LEVELS
from crosscheck.family.sweep import Series, Sweep
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    caption_in_lines,
    sheet,
    size_text,
    title_in_lines,
    write_caption,
    write_title,
)
from crosscheck.pictures.lettering import Lettering
from crosscheck.pictures.parameter_axis import scale_axis

CONTOURS = (1.0, 2.0, 5.0, 10.0)
SHADES = ("#ffffff", "#ececec", "#d6d6d6", "#bbbbbb", "#9c9c9c")


def map_picture(sweep: Sweep, series: Series, width_mm: int = 160) -> Figure | None:
    """Size of the judged level's difference over both parameters; None where there is nothing.

    Parameters
    ----------
    sweep : Sweep
        Of two parameters.
    series : Series
        Of one quantity.
    width_mm : int
        Width of the paper.
    """
    first, second = sweep.family.ranges
    shape = len(first.values), len(second.values)
    own = series.differences[:, LEVELS.index(sweep.judged)]
    if np.isfinite(own).sum() < 4:
        return None
    columns, rows = np.argsort(first.values), np.argsort(second.values)
    grid = 100 * np.abs(own.reshape(shape))[np.ix_(columns, rows)].T
    x, y = np.array(first.values)[columns], np.array(second.values)[rows]
    load = f", {series.load}" if series.load else ""
    words = QUANTITIES[series.name].words
    title = f"{words[:1].upper()}{words[1:]}{load}: {sweep.title}"
    caption = (
        f"Size of the difference at level {sweep.judged} in per cent, darker is larger; blue: criterion, "
        f"{100 * series.criterion:g} %. Circle: the file as it stands, "
        f"{first.name} = {size_text(sweep.today[0])}, {second.name} = {size_text(sweep.today[1])}."
    )
    gaps = ~np.isfinite(grid)
    if gaps.any():
        caption += " Hatched, crosses: no result, the section cannot be built or was not solved."
    title_lines = title_in_lines(one_line(title, 200), width_mm)
    caption_lines = caption_in_lines(one_line(caption, 600), width_mm)
    above, below = 5.0 + 4.2 * len(title_lines), 11.0 + 3.2 * len(caption_lines)
    left, right = 15.0, 5.0
    tall = 0.55 * width_mm if width_mm >= WIDE_PAPER else 0.7 * width_mm
    height = above + tall + below
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, tall / height)
        )
        scale_axis(axes, first, "x")
        scale_axis(axes, second, "y")
        axes.set_xlabel(one_line(first.name), labelpad=1)
        axes.set_ylabel(one_line(second.name), labelpad=1)
        axes.tick_params(which="both", length=2, pad=1.5, color=SOFT, labelcolor=SOFT)
        lettering = Lettering(axes)
        _draw_contours(axes, lettering, x, y, grid, 100 * series.criterion)
        if gaps.any():
            # Shows wherever no shade lies over it: white alone would read as the smallest differences.
            axes.add_patch(
                Rectangle(
                    (0, 0), 1, 1, transform=axes.transAxes, fc="none", ec=SOFT, lw=0, hatch="////", zorder=0
                )
            )
            at_y, at_x = np.nonzero(gaps)
            axes.plot(x[at_x], y[at_y], "x", color=INK, ms=3.2, mew=0.7, clip_on=False, zorder=4)
        today = (sweep.today[0], sweep.today[1])
        if first.low <= today[0] <= first.high and second.low <= today[1] <= second.high:
            axes.plot(*today, "o", ms=5, mfc="white", mec=FE, mew=1.2, zorder=7, clip_on=False)
        write_title(figure, title_lines)
        write_caption(figure, caption_lines)
    return figure


def _draw_contours(
    axes: Axes, lettering: Lettering, x: Array, y: Array, grid: Array, criterion: float
) -> None:
    """Shades and lines at the fixed values, the criterion on top; each lettered once."""
    masked = np.ma.masked_invalid(grid)
    axes.contourf(x, y, masked, levels=(0.0, *CONTOURS, 1e9), colors=SHADES, zorder=1)
    least, most = float(np.nanmin(grid)), float(np.nanmax(grid))
    plain = [level for level in CONTOURS if level != criterion and least < level < most]
    marked = [criterion] if least < criterion < most else []
    drawn: list[tuple[float, QuadContourSet, str]] = []
    for level in (*plain, *marked):
        colour, lw = (HAND, 1.8) if level == criterion else (INK, 0.7)
        drawn.append(
            (level, axes.contour(x, y, masked, levels=[level], colors=colour, linewidths=lw), colour)
        )
    lines = {level: _longest(found) for level, found, _ in drawn}
    for line in lines.values():
        if line is not None:
            lettering.keep_clear(line)
    for level, _, colour in drawn:
        line = lines[level]
        if line is not None:
            place = line[len(line) // 2]
            lettering.write(
                f"{level:g} %", (float(place[0]), float(place[1])), colour=colour, size=FONT, leader=False
            )


def _longest(found: QuadContourSet) -> Array | None:
    """The longest piece of a contour (n, 2)."""
    pieces = [
        np.asarray(piece, dtype=np.float64)
        for path in found.get_paths()
        for piece in path.to_polygons(closed_only=False)
    ]
    return max(pieces, key=len) if pieces else None
