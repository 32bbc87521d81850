"""The chart of where theory holds: a row a quantity over one parameter, a bar a line over two."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.family.threshold import Study, Threshold
from crosscheck.family.validity import common_stretches, level_shown_first, levels_of
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    WIDTHS,
    caption_in_lines,
    picture_bytes,
    sheet,
    size_text,
    title_in_lines,
    wrapped,
    write_caption,
    write_title,
)
from crosscheck.pictures.parameter_axis import scale_axis

MOST_ROWS = 30
BARS: dict[str, dict[str, Any]] = {
    "midline": {"color": HAND},
    "corrected": {"color": "#f0b48c", "edgecolor": FE, "lw": 0.5},
    "lumped": {"color": "white", "edgecolor": SOFT, "lw": 0.5, "hatch": "/////"},
}


def validity_pictures(study: Study) -> dict[str, bytes]:
    """The chart as files: name to bytes, SVG and PNG, both widths."""
    files: dict[str, bytes] = {}
    for width in WIDTHS:
        suffix = "" if width == WIDTHS[0] else f"_{width}mm"
        figure = validity_picture(study, width)
        for kind in ("svg", "png"):
            files[f"validity{suffix}.{kind}"] = picture_bytes(figure, kind)
    return files


def validity_picture(study: Study, width_mm: int = 160) -> Figure:
    """Where criteria hold over one parameter or two."""
    return _rows_picture(study, width_mm) if len(study.lines) == 1 else _lines_picture(study, width_mm)


def _name(each: Threshold) -> str:
    words = QUANTITIES[each.name].words
    return words if each.load is None else f"{words}, {each.load}"


def _rows_picture(study: Study, width_mm: int) -> Figure:
    """A row a quantity, governing first, a bar a level where the criterion holds."""
    (line,) = study.lines
    levels = levels_of(study)
    judged = level_shown_first(study)
    by_key = {(each.key, each.level): each for each in line.thresholds}
    known = [each for each in line.of_level(judged) if each.known is not None]
    # What never fails is counted: rows of full bars tell nothing.
    failing = [each for each in known if any(_fails(by_key[each.key, level]) for level in levels)]
    rows = (failing or known)[:MOST_ROWS]
    first = study.family.ranges[0]
    caption = (
        f"Bars: where the criterion holds at the levels {', '.join(levels)}, from the top; no bar: it "
        f"does not, or nothing is compared. Upright: the file as it stands, {first.name} = "
        f"{size_text(study.today[0])}."
    )
    if any(each.inconclusive for each in line.thresholds):
        caption += " Where FE's error leaves it open there is no bar either."
    if failing and len(failing) < len(known):
        more = len(known) - len(failing)
        words = "more quantity holds" if more == 1 else "more quantities hold"
        caption += f" {more} {words} throughout at all of these levels."
    left = 46.0 if width_mm >= WIDE_PAPER else 31.0
    names = [wrapped(one_line(_name(each), 60), left - 4) for each in rows]
    pitch = [max(5.0, 3.0 * len(name) + 1.0) for name in names]
    return _chart(
        study, width_mm, left, sum(pitch) or 5.0, caption, _RowsDrawn(rows, by_key, levels, names, pitch)
    )


def _fails(each: Threshold) -> bool:
    return each.known is not None and not each.throughout


class _RowsDrawn:
    """Draws the rows into axes whose height is in millimetres, downwards."""

    def __init__(
        self,
        rows: list[Threshold],
        by_key: dict[Any, Threshold],
        levels: list[str],
        names: list[list[str]],
        pitch: list[float],
    ) -> None:
        self.rows, self.by_key, self.levels, self.names, self.pitch = rows, by_key, levels, names, pitch

    def __call__(self, axes: Axes) -> None:
        top = 0.0
        axes.set_ylim(sum(self.pitch) or 5.0, 0.0)
        axes.set_yticks([])
        for each, name, high in zip(self.rows, self.names, self.pitch, strict=True):
            part = (high - 1.6) / len(self.levels)
            for place, level in enumerate(self.levels):
                for piece in self.by_key[each.key, level].pieces:
                    axes.barh(
                        top + 0.8 + part * (place + 0.5), piece.end - piece.start, left=piece.start,
                        height=0.86 * part, **BARS[level], zorder=2,
                    )  # fmt: skip
            axes.text(
                -0.02, top + high / 2, "\n".join(name), ha="right", va="center", fontsize=FONT - 0.5,
                linespacing=1.0, transform=axes.get_yaxis_transform(),
            )  # fmt: skip
            top += high
            axes.axhline(top, color="#d8d8d8", lw=0.4, zorder=1)


def _lines_picture(study: Study, width_mm: int) -> Figure:
    """A bar at each value of the second parameter where all quantities hold, and what ends it."""
    first, second = study.family.ranges
    caption = (
        f"Bars: where all criteria hold at level {study.judged}; beside them the quantity that ends them, "
        f"once while it stays the same. Solved at the values of {second.name} marked; nothing is drawn in "
        f"between. Circle: the file as it stands."
    )
    rows = sorted(study.lines, key=lambda line: line.second or 0.0)
    pitch = 9.0

    def draw(axes: Axes) -> None:
        axes.set_ylim(-0.7, len(rows) - 0.3)
        axes.set_yticks(range(len(rows)), [size_text(line.second or 0.0) for line in rows])
        axes.set_ylabel(one_line(second.name), labelpad=2)
        said: tuple[object, object] = (None, None)
        for place, line in enumerate(rows):
            for stretch in common_stretches(line.of_level(study.judged)):
                axes.barh(
                    place, stretch.end - stretch.start, left=stretch.start, height=0.4, color=HAND, zorder=2
                )
                keys = (stretch.start_key, stretch.end_key)
                if keys != said:
                    words = [
                        f"{'from' if way == 0 else 'to'} {QUANTITIES[key[0]].words}"
                        + (f", {key[1]}" if key[1] else "")
                        for way, key in enumerate(keys)
                        if key is not None
                    ]
                    axes.text(
                        0.01, place + 0.24, one_line("; ".join(words), 70), fontsize=FONT - 1, color=INK,
                        va="bottom", transform=axes.get_yaxis_transform(),
                    )  # fmt: skip
                said = keys
        values = [line.second for line in rows]
        if second.low <= study.today[1] <= second.high and first.low <= study.today[0] <= first.high:
            place_of_today = _between(values, study.today[1])
            axes.plot(study.today[0], place_of_today, "o", ms=5, mfc="white", mec=FE, mew=1.2, zorder=5)

    return _chart(study, width_mm, 16.0, pitch * len(rows), caption, draw)


def _between(values: list[float | None], value: float) -> float:
    """Place of a value among rows, in between where it is."""
    known = [each or 0.0 for each in values]
    for place, (low, high) in enumerate(pairwise(known)):
        if low <= value <= high:
            return place + (value - low) / (high - low)
    return float(known.index(value))


def _chart(study: Study, width_mm: int, left: float, tall: float, caption: str, draw: Any) -> Figure:
    """Axes over the first parameter with a title and a caption."""
    first = study.family.ranges[0]
    title_lines = title_in_lines(one_line(f"Where theory holds: {study.title}", 200), width_mm)
    caption_lines = caption_in_lines(one_line(caption, 600), width_mm)
    above, below, right = 4.0 + 4.2 * len(title_lines), 11.0 + 3.2 * len(caption_lines), 5.0
    height = above + tall + below
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, tall / height)
        )
        draw(axes)
        scale_axis(axes, first, "x")
        axes.set_xlabel(one_line(first.name), labelpad=1)
        axes.tick_params(which="both", length=2, pad=1.5, color=SOFT, labelcolor=SOFT)
        if len(study.lines) == 1 and first.low <= study.today[0] <= first.high:
            axes.axvline(study.today[0], color=INK, lw=0.9, zorder=4)
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)
        write_title(figure, title_lines)
        write_caption(figure, caption_lines)
    return figure
