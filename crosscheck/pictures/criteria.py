"""Share of the criterion used by every quantity, worst first, with the FE error as whiskers."""

from __future__ import annotations

import matplotlib as mpl
from matplotlib.figure import Figure

from crosscheck.comparison.result import QuantityResult, Result
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
from crosscheck.reports.stated import stated_difference, stated_name, stated_row
from crosscheck.reports.wording import (
    STARRED,
    difference_text,
    has_own_normaliser,
    name_of,
    one_row_a_family,
    verdict_sentence,
    worst_first,
)

MOST_ROWS = 40
FULL = 1.5
HATCH = {"within": "", "outside": "////", "inconclusive": "...."}


def criteria_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Bars of criterion used; None where nothing was compared.

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
    compared = one_row_a_family(worst_first(result.quantities))
    rows = [
        (name_of(row), row, difference_text(row, result.length_unit))
        for row in compared
        if row.verdict is not None
    ]
    stated = [(stated, stated_row(result, stated)) for stated in result.stated]
    told = [
        (f"stated {stated_name(entry)}", row, stated_difference(result, entry))
        for entry, row in stated
        if row is not None
    ]
    rows = (told + rows)[:MOST_ROWS]
    if not rows:
        return None
    caption = (
        "Bar: difference over criterion; whisker: FE error over criterion. Full criterion at 100 %. Hatched: "
        "outside; dotted: inconclusive."
    )
    if any(has_own_normaliser(row) for _, row, _ in rows):
        caption += f" {STARRED}"
    if told:
        caption += " Above the line: stated values, over their tolerance."
    title_lines = title_in_lines(one_line(verdict_sentence(result), 400), width_mm)
    caption_lines = caption_in_lines(caption, width_mm)
    above, below = 4.0 + 4.2 * len(title_lines), 12.0 + 3.2 * len(caption_lines)
    height = above + below + 4.4 * len(rows)
    left, right = (46.0, 36.0) if width_mm >= WIDE_PAPER else (30.0, 23.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, 4.4 * len(rows) / height)
        )
        for place, (_, row, text) in enumerate(rows):
            _draw_row(axes, place, row, text, small=width_mm < WIDE_PAPER)
        axes.axvline(1.0, color=INK, lw=0.9)
        if told:
            axes.axhline(len(told) - 0.5, color=SOFT, lw=0.5)
        axes.set_xlim(0, FULL)
        axes.set_ylim(len(rows) - 0.4, -0.6)
        axes.set_xticks([0, 0.5, 1.0, 1.5], ["0", "50", "100", "150 %"])
        axes.set_yticks(range(len(rows)), ["" for _ in rows])
        axes.set_xlabel("share of the criterion used [%]", labelpad=1)
        for place, (name, _, _) in enumerate(rows):
            letters = int((left - 3) / 1.25)
            axes.text(
                -0.02, place, one_line(name, letters), ha="right", va="center", fontsize=FONT,
                transform=axes.get_yaxis_transform(),
            )  # fmt: skip
        for side in ("top", "right", "left"):
            axes.spines[side].set_visible(False)
        axes.tick_params(axis="y", length=0)
        axes.tick_params(axis="x", length=2, color=SOFT, labelcolor=SOFT)
        write_title(figure, title_lines)
        write_caption(figure, caption_lines)
    return figure


def _draw_row(axes: mpl.axes.Axes, place: int, row: QuantityResult, text: str, *, small: bool) -> None:
    """One bar with its whisker and the difference in words."""
    share = abs(row.judged_difference or 0.0) / row.criterion
    error = (row.uncertainty or 0.0) / row.criterion
    shown = min(share, FULL)
    axes.barh(
        place,
        shown,
        height=0.62,
        color=HAND,
        alpha=0.85 if row.verdict == "within" else 0.5,
        hatch=HATCH[row.verdict or "within"],
        edgecolor="white" if row.verdict == "within" else INK,
        lw=0.4,
        zorder=2,
    )
    if share + error < FULL:
        ends = (max(share - error, 0.0), share + error)
        axes.plot(ends, (place, place), color=FE, lw=1.3, marker="|", ms=5, zorder=3)
    if share > FULL and not small:
        text += f" ({share * 100:.0f} %)"
    axes.text(1.02, place, text, va="center", fontsize=FONT - 0.5, transform=axes.get_yaxis_transform())
