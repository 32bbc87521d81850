"""How FE's intervals shrink with the number of unknowns."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import matplotlib as mpl
import numpy as np
from matplotlib.figure import Figure
from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter

from crosscheck.pictures.canvas import (
    FONT,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    caption_in_lines,
    power_text,
    sheet,
    title_in_lines,
    write_caption,
    write_title,
)

TALL = 78.0
SHADES = ("#00487a", "#c44601", "#4d4d4d", "#2f7f5f", "#7a3e8e", "#8a6d00")
MARKS = ("o", "s", "^", "D", "v", "P")


@dataclass(frozen=True)
class Line:
    """A quantity: unknowns of its runs and half intervals over its normaliser [-]; ``kind`` bound or "
    "estimate."""

    words: str
    unknowns: tuple[int, ...]
    halves: tuple[float, ...]
    kind: str


def intervals_picture(
    lines: Sequence[Line], corner_order: float | None, width_mm: int = 160
) -> Figure | None:
    """Half intervals over unknowns, both logarithmic; None where there is nothing to follow.

    Parameters
    ----------
    lines : sequence of Line
        One a quantity.
    corner_order : float, optional
        Order in h that the sharpest corner allows on uniform meshes, drawn as a slope.
    width_mm : int
        Width of the paper.
    """
    shown = [line for line in lines if line.halves and max(line.halves) > 0]
    if not shown:
        return None
    caption = (
        "Half of FE's interval over the normaliser of each quantity, for the accuracies asked of it; "
        "full line: bound, dashed: estimate."
    )
    if corner_order is not None:
        caption += (
            f" Dotted: the slope that the sharpest re-entrant corner allows on uniform meshes, order "
            f"{corner_order:.2f} in the mesh size."
        )
    title = title_in_lines("FE's error shrinks as unknowns are added", width_mm)
    captions = caption_in_lines(caption, width_mm)
    above, below = 4.0 + 4.2 * len(title), 12.0 + 3.2 * len(captions)
    height = above + below + TALL
    left, right = (17.0, 40.0) if width_mm >= WIDE_PAPER else (15.0, 27.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, TALL / height)
        )
        ends = []
        for i, line in enumerate(shown):
            pairs = [(n, half) for n, half in zip(line.unknowns, line.halves, strict=True) if half > 0]
            n, halves = zip(*pairs, strict=True)
            axes.loglog(
                n, halves, ls="-" if line.kind != "estimate" else (0, (4, 2)), marker=MARKS[i % 6], ms=3.5,
                mfc="white", color=SHADES[i % 6], lw=1.0,
            )  # fmt: skip
            ends.append((math.log10(halves[-1]), line.words, SHADES[i % 6]))
        _slope(axes, shown, corner_order)
        words_beside(axes, ends, TALL)
        axes.set_xlabel("unknowns [-]", labelpad=1)
        axes.set_ylabel("half interval over normaliser [-]", labelpad=1)
        axes.xaxis.set_major_locator(LogLocator(subs=(1.0, 2.0, 5.0)))
        axes.xaxis.set_major_formatter(FuncFormatter(lambda n, _: f"{n:,.0f}"))
        axes.yaxis.set_major_formatter(FuncFormatter(lambda share, _: power_text(share)))
        axes.xaxis.set_minor_formatter(NullFormatter())
        axes.yaxis.set_minor_formatter(NullFormatter())
        axes.grid(True, which="major", lw=0.3, color="#d0d0d0")
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)
        axes.tick_params(which="both", length=2, color=SOFT, labelcolor=SOFT)
        write_title(figure, title)
        write_caption(figure, captions)
    return figure


def words_beside(axes: mpl.axes.Axes, ends: Sequence[tuple[float, str, str]], tall_mm: float) -> None:
    """Words beside the ends of lines, as far apart as letters need; ends as (log of y, words, colour)."""
    low, high = (math.log10(value) for value in axes.get_ylim())
    step = (high - low) * 3.4 / tall_mm
    places: list[float] = []
    for end, _, _ in sorted(ends):
        places.append(max(end, places[-1] + step) if places else end)
    # What does not fit under the top moves down together.
    shift = max(0.0, places[-1] - high) if places else 0.0
    for place, (_, words, colour) in zip(places, sorted(ends), strict=True):
        axes.text(
            1.02, (place - shift - low) / (high - low), words, color=colour, fontsize=FONT - 0.5, va="center",
            transform=axes.transAxes,
        )  # fmt: skip


def _slope(axes: mpl.axes.Axes, lines: Sequence[Line], order: float | None) -> None:
    """A dotted line from the largest error with the slope of uniform meshes."""
    if order is None:
        return
    n = np.array(
        [min(min(line.unknowns) for line in lines), max(max(line.unknowns) for line in lines)], float
    )
    if n[1] <= n[0]:
        return
    top = max(max(line.halves) for line in lines)
    axes.loglog(n, top * (n / n[0]) ** (-order / 2.0), ls=":", color=INK, lw=0.9)
