"""Where each difference comes from: its steps one under the other, each from where the last one ended."""

from __future__ import annotations

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.comparison.result import CauseStep, QuantityResult, Result
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
    title_in_lines,
    write_caption,
    write_title,
)
from crosscheck.reports.wording import name_of, worst_first

# Quantities shown, and the difference below which none is worth a row [-].
MOST_QUANTITIES = 6
LEAST_DIFFERENCE = 5e-4
ROW_MM = 4.4


def causes_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Steps of the largest differences; None where no difference is worth a row.

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
    groups = _groups(result)
    if not groups:
        return None
    wide = width_mm >= WIDE_PAPER
    caption = (
        "From the whole difference (hand minus FE) down to nothing: each bar changes one assumption and "
        "begins where the last one ended. Whisker: FE error. The order is fixed, and the split depends on it."
    )
    title = title_in_lines("Where the differences come from", width_mm)
    captions = caption_in_lines(caption, width_mm)
    rows = sum(len(steps) + 1 for _, steps in groups)
    above, below = 4.0 + 4.2 * len(title), 12.0 + 3.2 * len(captions)
    height = above + below + ROW_MM * rows
    left, right = (76.0, 18.0) if wide else (38.0, 14.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, ROW_MM * rows / height)
        )
        place = 0
        for row, steps in groups:
            place = _draw_group(axes, place, row, steps, int((left - 3) / 1.25))
        axes.axvline(0.0, color=INK, lw=0.6)
        axes.set_ylim(rows - 0.4, -0.6)
        axes.margins(x=0.12)
        axes.set_yticks([])
        axes.set_xlabel("hand method minus FE [%]", labelpad=1)
        for side in ("top", "right", "left"):
            axes.spines[side].set_visible(False)
        axes.tick_params(axis="x", length=2, color=SOFT, labelcolor=SOFT)
        write_title(figure, title)
        write_caption(figure, captions)
    return figure


def _groups(result: Result) -> list[tuple[QuantityResult, list[CauseStep]]]:
    """Quantities with their steps, largest difference first."""
    found = []
    for row in worst_first(result.quantities):
        steps = [c for c in result.causes if c.quantity == row.name and c.load == row.load]
        if steps and abs(sum(c.change for c in steps)) >= LEAST_DIFFERENCE:
            found.append((row, steps))
    return found[:MOST_QUANTITIES]


def _draw_group(axes: Axes, place: int, row: QuantityResult, steps: list[CauseStep], letters: int) -> int:
    """Bars of one quantity under its name; the next free place."""
    beside = axes.get_yaxis_transform()
    axes.text(-0.02, place, one_line(name_of(row), letters), ha="right", va="center", fontsize=FONT,
              fontweight="bold", transform=beside)  # fmt: skip
    total = 100.0 * sum(c.change for c in steps)
    axes.text(1.02, place, _percent(total), va="center", fontsize=FONT, fontweight="bold", transform=beside)
    reached = total
    for step in steps:
        place += 1
        change = 100.0 * step.change
        axes.barh(place, -change, left=reached, height=0.6, color=HAND, alpha=0.8, lw=0)
        reached -= change
        error = 100.0 * step.uncertainty
        axes.plot((reached - error, reached + error), (place, place), color=FE, lw=1.3, marker="|", ms=5)
        axes.text(-0.02, place, one_line(step.step, letters), ha="right", va="center", fontsize=FONT - 0.5,
                  color=SOFT, transform=beside)  # fmt: skip
        axes.text(1.02, place, _percent(change), va="center", fontsize=FONT - 0.5, transform=beside)
    return place + 1


def _percent(share: float) -> str:
    """A step in per cent; round-off is none."""
    return "0 %" if abs(share) < 1e-8 else f"{share:+.2g} %"
