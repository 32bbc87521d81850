"""What each side sees: theory's walls of full length over FE's outline, a joint magnified, areas printed."""

from __future__ import annotations

from collections.abc import Sequence

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.comparison.drawn import Array, WallShape
from crosscheck.comparison.quantities import unit_text
from crosscheck.comparison.result import Result
from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    Frame,
    frame_of,
    plain_unit,
    scale_drawing,
)
from crosscheck.pictures.joints import joint_places
from crosscheck.pictures.walls import draw_midlines, draw_solid
from crosscheck.reports.wording import difference_text, number_text

HATCHES = ("/////", "\\\\\\\\\\", "-----", "|||||")


def both_sides_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Theory's model over FE's; None without walls.

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
    drawing = result.require_drawing()
    if not drawing.walls:
        return None
    area = result.quantity("area")
    unit = plain_unit(unit_text(2, 0, result.length_unit, result.force_unit))
    hand, fe = number_text(area.judged_theory), number_text(area.fe.value)
    judged = difference_text(area, result.length_unit)
    title = f"What each side sees: area by hand {hand}, FE {fe} {unit} ({judged})"
    caption = (
        "Grey: the solid that FE meshes. Hatched: the hand method's walls, from point to point at full "
        "thickness; they overlap on the inside of a corner and leave its outside open. Dashed: midlines."
    )
    if drawing.booms:
        caption += " Round marks: booms, larger for more area"
        caption += "; open: FE alone sees it." if any(b.seen_by == "fe" for b in drawing.booms) else "."
    joints = joint_places(drawing, 1)
    extent = drawing.extent
    frame = frame_of([drawing.loops[0]]).grown(0.05 * extent)
    side = 0.62 * max(frame.size[1], 0.5 * frame.size[0])
    wide = Frame(frame.low, (frame.high[0] + 1.12 * side if joints else frame.high[0], frame.high[1]))
    figure, axes = scale_drawing(width_mm, wide, title, caption, result.length_unit)
    with mpl.rc_context(STYLE):
        _draw_models(axes, result)
        if joints:
            place, reach = joints[0]
            middle = (frame.low[1] + frame.high[1]) / 2
            inset = axes.inset_axes(
                (frame.high[0] + 0.1 * side, middle - side / 2, side, side), transform=axes.transData
            )
            _draw_models(inset, result)
            inset.set_xlim(place[0] - reach, place[0] + reach)
            inset.set_ylim(place[1] - reach, place[1] + reach)
            inset.set_aspect("equal")
            inset.set_xticks([])
            inset.set_yticks([])
            for spine in inset.spines.values():
                spine.set_edgecolor(SOFT)
            times = frame.size[0] / (2 * reach) * side / frame.size[0]
            inset.set_title(f"{number_text(times, 2)} times", fontsize=FONT, color=SOFT, pad=2)
            # The paper under the magnified joint is no part of the scale.
            axes.set_xticks([tick for tick in axes.get_xticks() if frame.low[0] <= tick <= frame.high[0]])
            axes.spines["bottom"].set_bounds(axes.get_xlim()[0], frame.high[0])
            axes.set_xlabel(axes.get_xlabel(), loc="left")
            axes.indicate_inset_zoom(inset, edgecolor=INK, lw=0.5)
    return figure


def _draw_models(axes: Axes, result: Result) -> None:
    """The solid, theory's walls as hatched bands, and the midlines."""
    drawing = result.require_drawing()
    draw_solid(axes, drawing.loops, edge=FE)
    for wall, hatch in hatches(drawing.hand_walls):
        band = wall_band(wall)
        axes.fill(band[:, 0], band[:, 1], fill=False, hatch=hatch, ec=HAND, lw=0.5, zorder=3)
    draw_midlines(axes, drawing)
    largest = max((boom.area for boom in drawing.booms), default=0.0)
    for boom in drawing.booms:
        size = 2.5 + 3.5 * (boom.area / largest) ** 0.5
        if boom.seen_by == "fe":
            axes.plot(boom.x, boom.y, marker="o", ms=size, mfc="none", mec=FE, mew=1.0, zorder=7)
        else:
            axes.plot(boom.x, boom.y, marker="o", ms=size, color=HAND, mec="white", mew=0.4, zorder=6)


def hatches(walls: Sequence[WallShape]) -> list[tuple[WallShape, str]]:
    """A hatch for each wall that no wall it meets has, if there is one: overlaps show as crossed lines."""
    taken: dict[tuple[float, float], set[str]] = {}
    found = []
    for wall in walls:
        ends = [(float(x), float(y)) for x, y in wall.points[[0, -1]]]
        used = set().union(*(taken.setdefault(end, set()) for end in ends))
        hatch = next((kind for kind in HATCHES if kind not in used), HATCHES[0])
        for end in ends:
            taken[end].add(hatch)
        found.append((wall, hatch))
    return found


def wall_band(wall: WallShape) -> Array:
    """Outline (2 n, 2) of a wall swept half its thickness to each side [L]."""
    half = wall.normals * wall.thickness[:, None] / 2
    return np.vstack((wall.points + half, (wall.points - half)[::-1]))
