"""Walls found in a drawing: their own outline over the drawn one, midlines, lumps, and what was lost."""

from __future__ import annotations

import matplotlib as mpl
import numpy as np
from matplotlib.figure import Figure

from crosscheck.comparison.drawn import Array
from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    frame_of,
    scale_drawing,
)
from crosscheck.pictures.lettering import Lettering
from crosscheck.pictures.walls import draw_solid
from crosscheck.reports.wording import counted, number_text
from crosscheck.tracing.idealising import Idealisation

CAPTION = (
    "Grey: the drawing. Dark line: the outline rebuilt from the walls. Dashed: midlines. Squares: lumps, "
    "offered as booms. Numbers in rings: what the walls do not represent, as listed in the section file. "
    "Cross: where both boundaries are farthest apart."
)
# Outlines nearer than this share of the mean thickness are drawn as one.
SAME = 1e-3
# More walls than this are not named on wide and narrow paper.
MOST_NAMES = {160: 24, 80: 8}


def tracing_picture(found: Idealisation, width_mm: int = 160) -> Figure:
    """Picture of walls found in a drawing.

    Parameters
    ----------
    found : Idealisation
    width_mm : int
        Width of the paper.

    Returns
    -------
    Figure
    """
    quality, model = found.quality, found.model
    unit = found.source.length_unit
    title = f"{found.source.name}: {counted(len(model.walls), 'wall')}, {counted(model.cells, 'cell')}"
    if quality.distance is not None:
        away = ", lumps apart" if model.lumps else ""
        near = quality.distance < SAME * quality.thickness
        apart = "coincide" if near else f"within {number_text(quality.distance, 2)} {unit}"
        title += f"; outlines {apart}{away}"
    frame = frame_of([quality.loops[0], *quality.rebuilt_loops[:1]])
    size = max(frame.size)
    figure, axes = scale_drawing(width_mm, frame.grown(0.06 * size), title, CAPTION, unit)
    with mpl.rc_context(STYLE):
        draw_solid(axes, quality.loops)
        rims: list[Array] = []
        for loop in quality.rebuilt_loops:
            closed = np.vstack([loop, loop[:1]])
            axes.plot(closed[:, 0], closed[:, 1], color=HAND, lw=0.6, zorder=2)
            rims.append(closed)
        letters = Lettering(axes)
        for rim in rims:
            letters.keep_clear(rim)
        labels: list[tuple[float, float, str]] = []
        for wall, name in zip(model.walls, found.names.walls, strict=True):
            line = np.array([wall.fitted.at(s) for s in np.linspace(*wall.fitted.span, 49)])
            letters.keep_clear(line)
            axes.plot(line[:, 0], line[:, 1], color=INK, lw=0.6, ls=(0, (6, 2)), zorder=3)
            if len(model.walls) <= MOST_NAMES[width_mm]:
                middle = wall.fitted.at(0.5 * sum(wall.fitted.span))
                labels.append((float(middle[0]), float(middle[1]), name))
        places = np.array([p.place for p in model.points])
        axes.plot(places[:, 0], places[:, 1], ls="", marker="o", ms=2.2, color=INK, zorder=4)
        for lump in model.lumps:
            letters.keep_clear_of_mark((float(lump.place[0]), float(lump.place[1])), 3.5)
            axes.plot(*lump.place, marker="s", ms=5, mfc="none", mec=FE, mew=1.0, zorder=5)
        if quality.place is not None and quality.distance and quality.distance > SAME * quality.thickness:
            axes.plot(*quality.place, marker="x", ms=5, color=FE, mew=1.0, zorder=5)
        for number, remark in enumerate(found.remarks, 1):
            if remark.place is not None:
                letters.keep_clear_of_mark((float(remark.place[0]), float(remark.place[1])), 5.0)
                axes.plot(*remark.place, marker="o", ms=9, mfc="white", mec=FE, mew=0.9, zorder=6)
                x, y = (float(v) for v in remark.place)
                axes.text(x, y, str(number), ha="center", va="center", size=FONT - 1.5, color=SOFT, zorder=7)
        for x, y, name in labels:
            letters.write(name, (x, y), _away((x, y), frame.low, frame.high))
    return figure


def _away(
    place: tuple[float, float], low: tuple[float, float], high: tuple[float, float]
) -> tuple[float, float]:
    """Direction from the middle of a frame."""
    x, y = (p - 0.5 * (a + b) for p, a, b in zip(place, low, high, strict=True))
    return (x, y) if x or y else (1.0, 0.0)
