"""Shear flow of the unit loads, one panel each, at the scale of its own peak."""

from __future__ import annotations

import matplotlib as mpl
from matplotlib.figure import Figure

from crosscheck.comparison.flow_comparison import NO_FLOW_REASON
from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import Result
from crosscheck.pictures.canvas import (
    FONT,
    INK,
    SOFT,
    STYLE,
    Frame,
    caption_in_lines,
    plain_unit,
    sheet,
    title_in_lines,
    wrapped,
    write_caption,
    write_title,
)
from crosscheck.pictures.diagram import Diagram, diagram, draw_diagram
from crosscheck.pictures.flow import draw_flow_directions, flow_marks
from crosscheck.reports.wording import difference_text, number_text

# Sections flatter than this get their panels one under the other.
FLAT = 0.62
LEFT, RIGHT, GAP = 12.0, 3.0, 4.0
HEAD, FOOT = 7.0, 8.0
# Panels together are not taller than this share of the width.
MOST_TALL = 0.95


def unit_flows_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Panels of the unit loads that make a flow; None where none does.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width_mm : int
        Width of the paper.
    """
    loads = [load for load in UNIT_LOADS if _has_flow(result, load)]
    if not loads:
        return None
    drawing = result.require_drawing()
    panels = [_diagram(result, load) for load in loads]
    low = tuple(min(panel.frame.low[i] for panel in panels) for i in (0, 1))
    high = tuple(max(panel.frame.high[i] for panel in panels) for i in (0, 1))
    frame = Frame((low[0], low[1]), (high[0], high[1]))
    ratio = frame.size[1] / frame.size[0]
    columns = 1 if ratio < FLAT else len(loads)
    wide = (width_mm - LEFT - RIGHT - GAP * (columns - 1)) / columns
    rows = -(-len(loads) // columns)
    tall = min(wide * ratio, MOST_TALL * width_mm / rows)
    titles = title_in_lines("Shear flow of the unit loads, hand and FE", width_mm)
    captions = caption_in_lines(
        "Line: hand method. Circles: FE with error bar. Arrowheads: direction of the flow, drawn on the "
        "right-hand side of the wall as one follows it. Each panel has its own scale of flow. Shear acts "
        "through each side's own shear centre.",
        width_mm,
    )
    above, below = 3.0 + 4.2 * len(titles), 3.0 + 3.2 * len(captions)
    height = above + below + rows * (HEAD + tall + FOOT)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        for number, (load, panel) in enumerate(zip(loads, panels, strict=True)):
            column, row = number % columns, number // columns
            left = LEFT + column * (wide + GAP)
            bottom = height - above - (row + 1) * (HEAD + tall + FOOT) + FOOT
            axes = figure.add_axes((left / width_mm, bottom / height, wide / width_mm, tall / height))
            unit = max(frame.size[0] / wide, frame.size[1] / tall)
            middle = [(a + b) / 2 for a, b in zip(frame.low, frame.high, strict=True)]
            axes.set_xlim(middle[0] - unit * wide / 2, middle[0] + unit * wide / 2)
            axes.set_ylim(middle[1] - unit * tall / 2, middle[1] + unit * tall / 2)
            axes.set_aspect("equal")
            head = wrapped(_title(result, load), wide + GAP, FONT)[:2]
            axes.set_title("\n".join(head), fontsize=FONT, loc="left", pad=2, color=INK)
            axes.set_xlabel(f"x [{result.length_unit}]", labelpad=1)
            if column == 0:
                axes.set_ylabel(f"y [{result.length_unit}]", labelpad=1)
            else:
                axes.set_yticklabels([])
            for side in ("top", "right"):
                axes.spines[side].set_visible(False)
            axes.tick_params(length=2, pad=1.5, color=SOFT, labelcolor=SOFT)
            axes.locator_params(nbins=5)
            draw_diagram(axes, panel, lambda q: number_text(q, 4), small=columns > 1, inside=columns > 1)
            draw_flow_directions(axes, drawing, drawing.flows.get(load, {}))
        write_title(figure, titles)
        write_caption(figure, captions)
    return figure


def _has_flow(result: Result, load: str) -> bool:
    """Whether a side has a flow to show."""
    if not any(flow.load == load for flow in result.flows):
        return False
    peak = result.quantity("peak_flow", load)
    theory = result.require_drawing().flows.get(load)
    if peak.reason == NO_FLOW_REASON:
        return False
    return peak.verdict is not None or bool(theory)


def _diagram(result: Result, load: str) -> Diagram:
    drawing = result.require_drawing()
    marks = {flow.wall: flow_marks(flow) for flow in result.flows if flow.load == load}
    return diagram(drawing, drawing.flows.get(load, {}), marks)


def _title(result: Result, load: str) -> str:
    """Name, unit and how far the peak by hand is."""
    peak = result.quantity("peak_flow", load)
    judged = difference_text(peak, result.length_unit) if peak.verdict else peak.reason or "not compared"
    unit = next(flow.unit for flow in result.flows if flow.load == load)
    return f"{load} [{plain_unit(unit)}]: peak by hand {judged}"
