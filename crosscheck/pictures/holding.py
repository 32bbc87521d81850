"""Share of the criterion that quantities use as all thicknesses grow, this section in the middle."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import matplotlib as mpl
from matplotlib.figure import Figure
from matplotlib.ticker import FixedLocator, FuncFormatter, LogLocator, NullLocator

from crosscheck.pictures.canvas import (
    FONT,
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
from crosscheck.pictures.intervals import MARKS, SHADES, words_beside

TALL = 82.0
FLOOR, CEILING = 1e-3, 1e2


@dataclass(frozen=True)
class Curve:
    """A quantity by its words, and the share of its criterion at every factor [-]."""

    words: str
    used: tuple[float | None, ...]


def holding_picture(
    factors: Sequence[float], curves: Sequence[Curve], title: str, width_mm: int = 160
) -> Figure | None:
    """Shares over the factor of thickness, both logarithmic; None without curves.

    Parameters
    ----------
    factors : sequence of float
        Of all thicknesses [-]; 1 is the section at hand.
    curves : sequence of Curve
        At most six are told apart.
    title : str
        What is seen.
    width_mm : int
        Width of the paper.
    """
    shown = [curve for curve in curves if any(curve.used)][: len(SHADES)]
    if not shown:
        return None
    titles = title_in_lines(title, width_mm)
    captions = caption_in_lines(
        "All thicknesses multiplied by the factor, everything else as in the file; each place solved on both "
        "sides. Share: difference and FE error over the criterion; beyond 100 % the hand method does "
        "not hold. Shares are drawn from 0.1 % to 10 000 %.",
        width_mm,
    )
    above, below = 4.0 + 4.2 * len(titles), 12.0 + 3.2 * len(captions)
    height = above + below + TALL
    left, right = (19.0, 42.0) if width_mm >= WIDE_PAPER else (17.0, 28.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, TALL / height)
        )
        axes.set_xscale("log")
        axes.set_yscale("log")
        ends = []
        for i, curve in enumerate(shown):
            pairs = [
                (factor, min(max(used, FLOOR), CEILING))
                for factor, used in zip(factors, curve.used, strict=True)
                if used is not None
            ]
            x, y = zip(*pairs, strict=True)
            axes.plot(x, y, marker=MARKS[i], ms=3.5, mfc="white", color=SHADES[i], lw=1.0)
            ends.append((math.log10(y[-1]), curve.words, SHADES[i]))
        axes.axhline(1.0, color=INK, lw=0.9)
        axes.axvline(1.0, color=SOFT, lw=0.7, ls=(0, (5, 3)))
        axes.set_xlim(min(factors) / 1.1, max(factors) * 1.1)
        top = max(1.6, *(min(max(v for v in c.used if v is not None), CEILING) * 1.5 for c in shown))
        bottom = min(0.5, *(max(min(v for v in c.used if v is not None), FLOOR) / 1.5 for c in shown))
        axes.set_ylim(bottom, top)
        axes.text(1.0, top, " this section", fontsize=FONT - 0.5, color=SOFT, va="bottom", ha="center")
        words_beside(axes, ends, TALL)
        axes.xaxis.set_major_locator(FixedLocator(list(factors)))
        axes.xaxis.set_major_formatter(FuncFormatter(lambda factor, _: f"{factor:.3g}"))
        axes.yaxis.set_major_formatter(FuncFormatter(lambda share, _: f"{100 * share:g} %"))
        axes.yaxis.set_major_locator(LogLocator(subs=(1.0, 2.0, 5.0)))
        axes.xaxis.set_minor_locator(NullLocator())
        axes.yaxis.set_minor_locator(NullLocator())
        axes.set_xlabel("factor on all thicknesses [-]", labelpad=1)
        axes.set_ylabel("share of the criterion used [%]", labelpad=1)
        axes.grid(True, which="major", lw=0.3, color="#d0d0d0")
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)
        axes.tick_params(which="both", length=2, color=SOFT, labelcolor=SOFT)
        write_title(figure, titles)
        write_caption(figure, captions)
    return figure
