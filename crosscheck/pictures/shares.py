"""Bars of how much of what is allowed each check uses, on a logarithmic scale."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import matplotlib as mpl
from matplotlib.figure import Figure

from crosscheck.pictures.canvas import (
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    caption_in_lines,
    fitted,
    sheet,
    title_in_lines,
    write_caption,
    write_title,
)

ROW_MM = 4.0
MOST_ROWS = 40
LEAST = 1e-6


@dataclass(frozen=True)
class Share:
    """A check by its name, the share of what it allows that it used [-], and whether it passed."""

    name: str
    used: float
    passed: bool


def shares_picture(checks: Sequence[Share], title: str, width_mm: int = 160) -> Figure | None:
    """Largest share first; None without checks."""
    ordered = sorted(checks, key=lambda check: (check.passed, -check.used))
    rows = ordered[:MOST_ROWS]
    if not rows:
        return None
    caption = "Bar: share of what is allowed that the check used; it fails beyond 100 %. Hatched: failed."
    if len(ordered) > len(rows):
        caption += f" The {len(rows)} that use most of {len(ordered)}."
    titles, captions = title_in_lines(title, width_mm), caption_in_lines(caption, width_mm)
    above, below = 4.0 + 4.2 * len(titles), 12.0 + 3.2 * len(captions)
    height = above + below + ROW_MM * len(rows)
    left, right = (70.0, 18.0) if width_mm >= WIDE_PAPER else (36.0, 14.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (
                left / width_mm,
                below / height,
                (width_mm - left - right) / width_mm,
                ROW_MM * len(rows) / height,
            )
        )
        axes.set_xscale("log")
        for place, check in enumerate(rows):
            axes.barh(
                place, max(check.used, 2 * LEAST) - LEAST, left=LEAST, height=0.6, color=HAND,
                alpha=0.85 if check.passed else 0.5, hatch="" if check.passed else "////",
                edgecolor="white" if check.passed else INK, lw=0.3,
            )  # fmt: skip
            beside = axes.get_yaxis_transform()
            axes.text(-0.02, place, fitted(check.name, left - 3.0, FONT - 0.5), ha="right", va="center",
                      fontsize=FONT - 0.5, transform=beside)  # fmt: skip
            axes.text(
                1.02, place, f"{100 * check.used:.2g} %", va="center", fontsize=FONT - 0.5, transform=beside
            )
        axes.axvline(1.0, color=INK, lw=0.9)
        axes.set_xlim(LEAST, max(3.0, 1.5 * max(check.used for check in rows)))
        axes.set_ylim(len(rows) - 0.4, -0.6)
        axes.set_yticks([])
        ticks = [1e-6, 1e-4, 1e-2, 1.0]
        axes.set_xticks(ticks, ["0.0001 %", "0.01 %", "1 %", "100 %"])
        axes.minorticks_off()
        axes.set_xlabel("share of what is allowed [%]", labelpad=1)
        for side in ("top", "right", "left"):
            axes.spines[side].set_visible(False)
        axes.tick_params(axis="x", length=2, color=SOFT, labelcolor=SOFT)
        write_title(figure, titles)
        write_caption(figure, captions)
    return figure
