"""How far the hand flow is from FE's in every wall under every load, as a table of shades and numbers."""

from __future__ import annotations

import matplotlib as mpl
import numpy as np
from matplotlib.figure import Figure
from matplotlib.patches import Rectangle

from crosscheck.comparison.quantities import QUANTITIES, UNIT_LOADS
from crosscheck.comparison.result import Result
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import (
    FONT,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    caption_in_lines,
    sheet,
    title_in_lines,
    wrapped,
    write_caption,
    write_title,
)

ROW_MM = 4.6
MOST_WALLS = 36
MOST_LOADS = {160: 10, 80: 4}


def walls_by_loads_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Walls down, loads across; the worst where there are too many. None where no flow is compared.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width_mm : int
        Width of the paper.
    """
    found = {(f.wall, f.load): f.difference for f in result.flows if f.difference is not None}
    if not found:
        return None
    own = [load for load in dict.fromkeys(f.load for f in result.flows) if load not in UNIT_LOADS]
    loads = [load for load in own or UNIT_LOADS if any(key[1] == load for key in found)]
    loads = loads or list(dict.fromkeys(load for _, load in found))
    walls = list(dict.fromkeys(wall for wall, load in found if load in loads))
    told = ""
    if len(walls) > MOST_WALLS or len(loads) > MOST_LOADS[width_mm]:
        told = f" The worst of {len(walls)} walls and {len(loads)} loads."
        loads = _worst(found, loads, 1, MOST_LOADS[width_mm])
        walls = _worst(found, walls, 0, MOST_WALLS)
    criterion = next(
        (row.criterion for row in result.quantities if row.name == "flow_at_probes"),
        QUANTITIES["flow_at_probes"].default_criterion,
    )
    beyond = sum(abs(found.get((w, load), 0.0)) > criterion for w in walls for load in loads)
    title = (
        f"Hand flow against FE, wall by wall: {beyond} of {len(walls) * len(loads)} places beyond "
        f"{100 * criterion:g} % of the wall's own peak"
    )
    caption = (
        "Difference of the hand flow from FE's at the worst probe, per cent of the wall's own peak (at "
        f"least 5 % of the section's); + high, - low; framed beyond {100 * criterion:g} %. Empty: no flow to "
        f"compare.{told}"
    )
    return _draw(found, walls, loads, criterion, title, caption, width_mm)


def _worst(found: dict[tuple[str, str], float], names: list[str], part: int, most: int) -> list[str]:
    """The names with the largest differences, in their given order."""
    size = {name: max((abs(v) for k, v in found.items() if k[part] == name), default=0.0) for name in names}
    chosen = set(sorted(names, key=lambda name: -size[name])[:most])
    return [name for name in names if name in chosen]


def _draw(
    found: dict[tuple[str, str], float],
    walls: list[str],
    loads: list[str],
    criterion: float,
    title: str,
    caption: str,
    width_mm: int,
) -> Figure:
    titles, captions = title_in_lines(title, width_mm), caption_in_lines(caption, width_mm)
    left = 42.0 if width_mm >= WIDE_PAPER else 26.0
    cell = min((width_mm - left - 4.0) / len(loads), 34.0)
    heads = [wrapped(one_line(load, 40), cell - 1.0, FONT - 0.5)[:3] for load in loads]
    above = 5.0 + 4.2 * len(titles) + 3.2 * max(len(head) for head in heads)
    below = 3.0 + 3.2 * len(captions)
    height = above + below + ROW_MM * len(walls)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes(
            (left / width_mm, below / height, cell * len(loads) / width_mm, ROW_MM * len(walls) / height)
        )
        axes.set_xlim(0, len(loads))
        axes.set_ylim(len(walls), 0)
        axes.axis("off")
        for column, head in enumerate(heads):
            axes.text(
                column + 0.5, -0.15, "\n".join(head), ha="center", va="bottom", fontsize=FONT - 0.5, color=INK
            )
        for row, wall in enumerate(walls):
            axes.text(
                -0.4 / cell * 4, row + 0.5, one_line(wall, int((left - 3) / 1.25)), ha="right", va="center",
                fontsize=FONT - 0.5,
            )  # fmt: skip
            for column, load in enumerate(loads):
                value = found.get((wall, load))
                if value is None:
                    continue
                shade = 0.85 * float(np.clip(abs(value) / (2.0 * criterion), 0.0, 1.0)) ** 0.7
                frame = abs(value) > criterion
                axes.add_patch(
                    Rectangle(
                        (column + 0.03, row + 0.06), 0.94, 0.88, fc=mpl.colormaps["Blues"](shade),
                        lw=1.0 if frame else 0.3, ec=INK if frame else "#c0c0c0",
                    )
                )  # fmt: skip
                axes.text(
                    column + 0.5, row + 0.52, _percent(value), ha="center", va="center", fontsize=FONT - 0.5,
                    color="white" if shade > 0.55 else INK,
                )  # fmt: skip
        write_title(figure, titles)
        write_caption(figure, captions)
        figure.texts[-1].set_color(SOFT)
    return figure


def _percent(value: float) -> str:
    """A difference in per cent with its sign, short."""
    percent = 100.0 * value
    return "0" if abs(percent) < 0.005 else f"{percent:+.2g} %" if abs(percent) < 10 else f"{percent:+.0f} %"
