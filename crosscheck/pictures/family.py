"""Pictures of a family: differences over one parameter as curves, over two as maps."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import combinations
from typing import Any

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import FixedLocator, FuncFormatter, MaxNLocator, NullLocator
from numpy.typing import NDArray

from crosscheck.comparison.drawn import Array
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import LEVELS
from crosscheck.family.sweep import Key, Series, Sweep
from crosscheck.faults import one_line
from crosscheck.file_names import free_name
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
from crosscheck.pictures.lettering import Lettering
from crosscheck.pictures.map import map_picture
from crosscheck.pictures.parameter_axis import scale_axis

# Any: keys of the plotting library.
LINES: dict[str, dict[str, Any]] = {
    "midline": {"color": HAND, "ls": "-", "lw": 1.3},
    "corrected": {"color": FE, "ls": (0, (5, 1.5)), "lw": 1.1},
    "lumped": {"color": SOFT, "ls": (0, (1, 1)), "lw": 1.3},
}
OF = {
    "value": "of FE",
    "extent": "of the larger overall dimension",
    "second moments": "of sqrt(Ixx Iyy)",
    "angle": "as product moment",
    "warping": "of the larger of I_w and J D\u00b2",
    "load peak": "of FE's peak",
    "twist": "of FE, at least of 5 % of V D",
    "surface": "of FE, at least of 5 % of V D",
}
# Curves are cut at this many criteria: what is beyond is outside anyway.
MOST_CRITERIA = 6.0
# Levels closer than this share of the frame all along are told as one.
SAME = 0.004
# Members are marked on the curves up to this many.
MARKED = 40


def family_pictures(sweep: Sweep, series: Mapping[Key, Series]) -> dict[str, bytes]:
    """A picture of each quantity as files: name to bytes, SVG and PNG, both widths."""
    files: dict[str, bytes] = {}
    kind = "difference" if len(sweep.family.ranges) == 1 else "map"
    names: dict[str, Key] = {}
    for key in series:
        names[free_name(f"{kind}_{key[0]}{f'_{key[1]}' if key[1] else ''}", names)] = key
    for width in WIDTHS:
        suffix = "" if width == WIDTHS[0] else f"_{width}mm"
        for name, key in names.items():
            draw = difference_picture if kind == "difference" else map_picture
            figure = draw(sweep, series[key], width)
            if figure is not None:
                for form in ("svg", "png"):
                    files[f"{name}{suffix}.{form}"] = picture_bytes(figure, form)
    return files


def difference_picture(sweep: Sweep, series: Series, width_mm: int = 160) -> Figure | None:
    """Difference against the parameter at every level, FE error as a band; None where there is nothing.

    Parameters
    ----------
    sweep : Sweep
        Of one parameter.
    series : Series
        Of one quantity.
    width_mm : int
        Width of the paper.
    """
    if not np.isfinite(series.differences).any():
        return None
    (varied,) = sweep.family.ranges
    order = np.argsort(series.values[:, 0], kind="stable")
    x, d, u = series.values[order, 0], series.differences[order], series.uncertainties[order]
    load = f", {series.load}" if series.load else ""
    title = f"{_capital(QUANTITIES[series.name].words)}{load}: {sweep.title}"
    frame = _frame(d, series.criterion)
    beyond = float(np.nanmax(np.abs(d)))
    caption = (
        f"Differences at the levels of theory; band: FE error. Dashed across: criterion, "
        f"{100 * series.criterion:g} %. Upright: the file as it stands, {varied.name} = "
        f"{size_text(sweep.today[0])}."
    )
    if beyond > max(-frame[0], frame[1]):
        caption += f" Beyond the frame: up to {100 * beyond:.3g} %."
    gaps = x[~np.isfinite(d).any(axis=1)]
    if gaps.size:
        caption += " Crosses: no result, the section cannot be built or was not solved."
    title_lines = title_in_lines(one_line(title, 200), width_mm)
    caption_lines = caption_in_lines(one_line(caption, 600), width_mm)
    ratio = sweep.family.ratio if np.isfinite(series.ratios).sum() > 1 else None
    above = 4.0 + 4.2 * len(title_lines) + (9.0 if ratio else 0.0)
    below = 11.0 + 3.2 * len(caption_lines)
    tall = 0.5 * width_mm if width_mm >= WIDE_PAPER else 0.62 * width_mm
    label = wrapped(f"theory minus FE [% {OF[QUANTITIES[series.name].normaliser]}]", tall, FONT + 0.5)
    left, right = 11.5 + 3.5 * len(label), 19.0 if width_mm >= WIDE_PAPER else 15.0
    height = above + tall + below
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, (width_mm - left - right) / width_mm, tall / height)
        )
        scale_axis(axes, varied, "x")
        axes.set_ylim(100 * frame[0], 100 * frame[1])
        axes.set_xlabel(one_line(f"{varied.name}"), labelpad=1)
        axes.set_ylabel("\n".join(label), labelpad=2, linespacing=1.05)
        axes.yaxis.set_major_locator(MaxNLocator(6, steps=[1, 2, 5, 10]))
        axes.yaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)
        axes.tick_params(which="both", length=2, pad=1.5, color=SOFT, labelcolor=SOFT)
        axes.axhline(0.0, color=SOFT, lw=0.5, zorder=1)
        for limit in (-series.criterion, series.criterion):
            if frame[0] < limit < frame[1]:
                axes.axhline(100 * limit, color=INK, lw=0.7, ls=(0, (6, 3)), zorder=1)
        lettering = Lettering(axes)
        _draw_levels(axes, lettering, x, d, u, frame)
        if varied.low <= sweep.today[0] <= varied.high:
            axes.axvline(sweep.today[0], color=INK, lw=0.6, zorder=1)
        if gaps.size:
            axes.plot(
                gaps, np.full(gaps.size, 0.015), "x", color=INK, ms=3.2, mew=0.7, clip_on=False,
                transform=axes.get_xaxis_transform(),
            )  # fmt: skip
        if ratio:
            _ratio_axis(axes, x, series.ratios[order], ratio)
        write_title(figure, title_lines)
        write_caption(figure, caption_lines)
    return figure


def _capital(words: str) -> str:
    return words[:1].upper() + words[1:]


def _frame(differences: Array, criterion: float) -> tuple[float, float]:
    """Low and high end of the differences' axis."""
    most = MOST_CRITERIA * criterion
    low = max(float(np.nanmin(differences)), -most)
    high = min(float(np.nanmax(differences)), most)
    low = min(1.12 * low, -1.2 * criterion) if low < -0.02 * criterion else -0.15 * criterion
    high = max(1.12 * high, 1.2 * criterion) if high > 0.02 * criterion else 0.15 * criterion
    if high - low < criterion:
        high = 1.2 * criterion
    return low, high


def _draw_levels(
    axes: Axes, lettering: Lettering, x: Array, d: Array, u: Array, frame: tuple[float, float]
) -> None:
    """A line for each level, lettered at its right end; equal levels share a line and a label."""
    shown = {level: d[:, i] for i, level in enumerate(LEVELS) if np.isfinite(d[:, i]).any()}
    groups: list[list[str]] = [[level] for level in shown]
    for one, other in combinations(list(shown), 2):
        # Clipped to the frame, for what lies beyond it is not seen.
        apart = np.abs(np.clip(shown[one], *frame) - np.clip(shown[other], *frame))
        same_gaps = (np.isfinite(shown[one]) == np.isfinite(shown[other])).all()
        if same_gaps and np.nanmax(apart) < SAME * (frame[1] - frame[0]):
            first = next(group for group in groups if one in group)
            second = next(group for group in groups if other in group)
            if first is not second:
                first += second
                groups.remove(second)
    labels: list[tuple[str, tuple[float, float], str]] = []
    for group in groups:
        style = LINES[group[0]]
        line = shown[group[0]]
        axes.fill_between(
            x, 100 * (line - u), 100 * (line + u), color=style["color"], alpha=0.25, lw=0, zorder=2
        )
        axes.plot(x, 100 * line, **style, marker="o" if x.size <= MARKED else None, ms=1.8, zorder=3)
        inside = np.flatnonzero((line >= frame[0]) & (line <= frame[1]))
        for piece in np.split(inside, np.flatnonzero(np.diff(inside) > 1) + 1):
            if piece.size:
                lettering.keep_clear(np.column_stack((x[piece], 100 * line[piece])))
        if inside.size:
            others = [shown[other[0]] for other in groups if other is not group]
            end = _most_apart(line, others, inside)
            labels.append((", ".join(group), (float(x[end]), 100 * float(line[end])), str(style["color"])))
    for text, place, colour in labels:
        lettering.write((text, text.replace(", ", ",\n")), place, (1.0, 0.0), colour=colour)


def _most_apart(line: Array, others: list[Array], inside: NDArray[np.int64]) -> int:
    """Where a label tells a line from the others best: the last place unless another is clearly better."""
    if not others:
        return int(inside[-1])
    gaps = np.nan_to_num(np.abs(np.array(others) - line), nan=np.inf).min(axis=0)[inside]
    finite = gaps[np.isfinite(gaps)]
    if finite.size == 0 or gaps[-1] >= 0.5 * finite.max():
        return int(inside[-1])
    return int(inside[np.argmax(np.where(np.isfinite(gaps), gaps, -1.0))])


def _ratio_axis(axes: Axes, x: Array, ratios: Array, text: str) -> None:
    """A second axis on top with round values of the ratio; none where the ratio turns back."""
    known = np.isfinite(ratios)
    x, ratios = x[known], ratios[known]
    steps = np.diff(ratios)
    if not ((steps > 0).all() or (steps < 0).all()):
        return
    log = axes.get_xscale() == "log" and (ratios > 0).all()
    if log:
        candidates = np.array([m * 10.0**e for e in range(-9, 10) for m in (1, 2, 5)])
    else:
        candidates = np.asarray(MaxNLocator(7).tick_values(ratios.min(), ratios.max()))
    ticks = candidates[(candidates >= ratios.min()) & (candidates <= ratios.max())]
    rising = np.argsort(ratios)
    if log:
        places = np.exp(np.interp(np.log(ticks), np.log(ratios[rising]), np.log(x[rising])))
    else:
        places = np.interp(ticks, ratios[rising], x[rising])
    top = axes.twiny()
    top.set_xscale(axes.get_xscale())
    top.set_xlim(axes.get_xlim())
    top.xaxis.set_major_locator(FixedLocator(list(places)))
    top.xaxis.set_minor_locator(NullLocator())
    top.xaxis.set_major_formatter(
        FuncFormatter(lambda value, _: f"{ticks[int(np.argmin(np.abs(places - value)))]:g}")
    )
    top.tick_params(length=2, pad=1.0, color=SOFT, labelcolor=SOFT, labelsize=FONT - 0.5)
    top.set_xlabel(one_line(text, 60), labelpad=4, fontsize=FONT)
    for side in ("bottom", "right", "left"):
        top.spines[side].set_visible(False)
