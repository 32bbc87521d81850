"""Shear flow of one load along the walls."""

from __future__ import annotations

from collections.abc import Mapping

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.comparison.drawn import Array, Drawing
from crosscheck.comparison.flow_comparison import NO_FLOW_REASON
from crosscheck.comparison.result import Result, WallFlow
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import HAND, INK, STYLE, plain_unit
from crosscheck.pictures.diagram import Mark, along_walls
from crosscheck.pictures.walls import draw_direction, draw_torque
from crosscheck.reports.wording import difference_text, number_text


def flow_picture(result: Result, load: str, width_mm: int = 160) -> Figure | None:
    """Flow diagram of one load; None where neither side has a flow to show.

    Parameters
    ----------
    result : Result
        What a comparison found.
    load : str
        Name of a load, or of a unit load.
    width_mm : int
        Width of the paper.

    Returns
    -------
    Figure or None
    """
    drawing = result.require_drawing()
    flows = [flow for flow in result.flows if flow.load == load]
    if not flows:
        return None
    peak = result.quantity("peak_flow", load)
    theory = drawing.flows.get(load, {})
    if (peak.verdict is None and not theory) or peak.reason == NO_FLOW_REASON:
        return None
    unit = plain_unit(flows[0].unit)
    marks = {flow.wall: flow_marks(flow) for flow in flows}
    judged = difference_text(peak, result.length_unit) if peak.verdict else peak.reason or "not compared"
    title = f"Shear flow, {one_line(load, 60)} [{unit}]: peak by hand {judged}"
    if peak.verdict is not None and judged != "equal":
        title += f" ({peak.verdict})"
    caption = (
        "Line: hand method. Circles: FE with error bar. Arrowheads: direction of the flow, drawn on the "
        "right-hand side of the wall as one follows it."
    )
    line = next((line for line in drawing.loads if line.name == load), None)
    arrows = []
    if line is not None and line.through is not None and any(line.shear):
        tail, shear = np.asarray(line.through), np.asarray(line.shear)
        head = tail + 0.13 * drawing.extent * shear / np.hypot(*shear)
        arrows.append(np.vstack((tail, head)))
    figure, lettering = along_walls(
        drawing,
        theory,
        marks,
        width_mm,
        title,
        caption,
        result.length_unit,
        lambda q: number_text(q, 4),
        arrows=arrows,
    )
    with mpl.rc_context(STYLE):
        axes = lettering.axes
        draw_flow_directions(axes, drawing, theory)
        if line is not None and line.torque:
            low, high = axes.get_xlim(), axes.get_ylim()
            aside = (low[0] + 0.1 * (low[1] - low[0]), high[0] + 0.1 * (high[1] - high[0]))
            draw_torque(axes, line.through or aside, 0.05 * drawing.extent, line.torque, INK)
    return figure


def draw_flow_directions(axes: Axes, drawing: Drawing, theory: Mapping[str, Array]) -> None:
    """An arrowhead along every wall where its flow is largest; none where it is next to nothing."""
    largest = max((float(np.abs(values).max()) for values in theory.values()), default=0.0)
    for wall in drawing.walls:
        values = theory.get(wall.name)
        if values is None or np.abs(values).max() < 0.01 * largest:
            continue
        i = int(np.argmax(np.abs(values[4:-4]))) + 4
        draw_direction(axes, wall, float(np.sign(values[i])), colour=HAND, at=i / (len(values) - 1))


def flow_marks(flow: WallFlow) -> tuple[Mark, ...]:
    """FE's probes of one wall."""
    return tuple(
        Mark(probe.s, probe.fe, probe.fe_error or 0.0, probe.theory)
        for probe in flow.probes
        if probe.fe is not None
    )
