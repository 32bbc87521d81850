"""The section as drawn: outline, midlines, names, centroid, both shear centres, loads, signs."""

from __future__ import annotations

import math
from collections.abc import Sequence

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.comparison.drawn import Array, LoadLine
from crosscheck.comparison.result import Result
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    frame_of,
    scale_drawing,
    size_text,
)
from crosscheck.pictures.lettering import Lettering
from crosscheck.pictures.walls import (
    centre_of,
    draw_arrow,
    draw_dimension,
    draw_direction,
    draw_midlines,
    draw_solid,
    draw_torque,
    outward,
    overall,
)
from crosscheck.reports.wording import number_text

Place = tuple[float, float]
FEW_WALLS = 6
MANY_WALLS = 16
TOO_MANY_WALLS = 48
# Labels of forces and couples on narrow and on wide paper; more of them are numbers, told in the caption.
MOST_LABELS = (4, 8)
MOST_NUMBERED = 20
# Length of a force arrow and radius of a couple's, over the larger overall dimension.
ARROW = 0.13
CIRCLE = 0.07
SIGNS = (
    "Seen: the face whose outward normal points at the viewer; V and T are resultants of the stress on it, "
    "T > 0 anticlockwise."
)
DIRECTIONS = "Arrowheads: each wall's own direction, q > 0 along it."


def section_picture(result: Result, width_mm: int = 160) -> Figure:
    """Picture of the section itself.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width_mm : int
        Width of the paper: 80 or 160.

    Returns
    -------
    Figure
    """
    drawing = result.require_drawing()
    unit = result.length_unit
    x0, y0, x1, y1 = overall(drawing.loops)
    hand, fe = shear_centres(result)
    stated = stated_places(result)
    centres = [place for place in (hand, fe, *stated.values()) if place is not None]
    groups = [drawing.loops[0], *(np.array([place]) for place in centres)]
    groups += [reach for load in drawing.loads if (reach := _reach_of(load, drawing.extent)) is not None]
    gap = 0.16 * drawing.extent if width_mm >= WIDE_PAPER else 0.22 * drawing.extent
    frame = frame_of(groups).grown(gap)
    directions = DIRECTIONS if drawing.walls else ""
    numbered = _many_labels(drawing.loads) > MOST_LABELS[width_mm >= WIDE_PAPER]
    labels = _load_labels(result, numbered=numbered)
    listed = [f"{label} {text}" for label, text in labels.values() if numbered and label]
    loads = f"Loads: {'; '.join(listed)}." if listed else ""
    caption = " ".join(filter(None, (SIGNS, directions, _offset_text(result, hand, fe), loads)))
    figure, axes = scale_drawing(width_mm, frame, one_line(result.title, 200), caption, unit)
    with mpl.rc_context(STYLE):
        draw_solid(axes, drawing.loops)
        draw_midlines(axes, drawing)
        lettering = Lettering(axes)
        for loop in drawing.loops:
            lettering.keep_clear(np.vstack((loop, loop[:1])))
        for wall in drawing.walls:
            draw_direction(axes, wall, 1.0, colour=SOFT, at=0.62)
            lettering.keep_clear(wall.points)
        _draw_overall(axes, (x0, y0, x1, y1), 0.55 * gap, unit, lettering)
        for place in centres:
            lettering.keep_clear_of_mark(place)
        for load in drawing.loads:
            _keep_clear_of_load(load, drawing.extent, centre_of(drawing), lettering)
        for load in drawing.loads:
            _draw_load(axes, result, load, labels[load.name][0], lettering, numbered=numbered)
        _mark_centres(axes, result, hand, fe, lettering)
        for words, place in stated.items():
            axes.plot(*place, marker="D", ms=4.5, mfc="none", mec=INK, mew=0.9, zorder=5)
            lettering.write((words, words.replace("\n", " ")), place, (0.3, -1.0))
        _name_walls(result, lettering, short=width_mm < WIDE_PAPER)
    return figure


def shear_centres(result: Result) -> tuple[Place | None, Place | None]:
    """Shear centre of theory and of FE [L]; None where a side has none."""
    x, y = result.quantity("shear_centre_x"), result.quantity("shear_centre_y")
    hand = (x.judged_theory, y.judged_theory)
    fe = (x.fe.value, y.fe.value)
    return (
        None if hand[0] is None or hand[1] is None else (hand[0], hand[1]),
        None if fe[0] is None or fe[1] is None else (fe[0], fe[1]),
    )


def stated_places(result: Result) -> dict[str, Place]:
    """Stated positions in words [L]; both coordinates of one source are one place."""
    found: dict[tuple[str, str], Place] = {}
    for stated in result.stated:
        if stated.place is None:
            continue
        key = (stated.quantity[:-2], stated.source)
        known = found.get(key)
        x, y = stated.place
        if known is not None:
            x, y = (known[0], y) if stated.quantity.endswith("_y") else (x, known[1])
        found[key] = (x, y)
    return {
        f"stated {name.replace('_', ' ')}" + (f"\n({one_line(source, 30)})" if source else ""): place
        for (name, source), place in found.items()
    }


def _draw_overall(
    axes: Axes, box: tuple[float, float, float, float], off: float, unit: str, lettering: Lettering
) -> None:
    """Overall width and height."""
    x0, y0, x1, y1 = box
    draw_dimension(axes, (x0, y0 - off), (x1, y0 - off), f"{size_text(x1 - x0)} {unit}", (0, -1))
    draw_dimension(axes, (x1 + off, y0), (x1 + off, y1), f"{size_text(y1 - y0)} {unit}", (1, 0))
    along = np.linspace(0, 1, 15)[:, None]
    lettering.keep_clear_of_mark((x1 + off * 1.15, (y0 + y1) / 2), 16.0)
    lettering.keep_clear_of_mark(((x0 + x1) / 2, y0 - off * 1.15), 14.0)
    lettering.keep_clear(np.array([[x0, y0 - off]]) * (1 - along) + np.array([[x1, y0 - off]]) * along)
    lettering.keep_clear(np.array([[x1 + off, y0]]) * (1 - along) + np.array([[x1 + off, y1]]) * along)


def _mark_centres(
    axes: Axes, result: Result, hand: Place | None, fe: Place | None, lettering: Lettering
) -> None:
    """Centroid and both shear centres, the offset between them in words."""
    centroid = (result.quantity("centroid_x").fe.value, result.quantity("centroid_y").fe.value)
    if centroid[0] is not None and centroid[1] is not None:
        axes.plot(centroid[0], centroid[1], marker="+", ms=7, mew=1.0, color=INK, zorder=5)
        lettering.keep_clear_of_mark((centroid[0], centroid[1]))
        lettering.write("C centroid", (centroid[0], centroid[1]), (1, 1))
    if fe is not None:
        axes.plot(*fe, marker="o", ms=6.5, mfc="none", mec=FE, mew=1.1, zorder=5)
    if hand is not None:
        axes.plot(*hand, marker="x", ms=5, mew=1.1, color=HAND, zorder=5)
    if hand is None or fe is None:
        for name, place, colour in (("S hand", hand, HAND), ("S FE", fe, FE)):
            if place is not None:
                lettering.write(name, place, (-1, 1), colour=colour)
        return
    dx, dy = hand[0] - fe[0], hand[1] - fe[1]
    if math.hypot(dx, dy) < 0.05 * result.require_drawing().extent:
        middle = centre_of(result.require_drawing())
        away = (fe[0] - middle[0], fe[1] - middle[1])
        text = "S shear centre\n(x hand, o FE)"
        lettering.write((text, text.replace("\n", " ")), fe, away if any(away) else (-1, 1))
    else:
        axes.plot((hand[0], fe[0]), (hand[1], fe[1]), color=SOFT, lw=0.6, zorder=4)
        lettering.write("S hand", hand, (dx, dy), colour=HAND)
        lettering.write("S FE", fe, (-dx, -dy), colour=FE)


def _offset_text(result: Result, hand: Place | None, fe: Place | None) -> str:
    """Offset of the shear centre by hand from FE's; 0 where the FE error hides it."""
    if hand is None or fe is None:
        return ""
    told = []
    for axis, name in enumerate(("shear_centre_x", "shear_centre_y")):
        row = result.quantity(name)
        offset = hand[axis] - fe[axis]
        hidden = abs(offset) <= max(row.fe.half_width or 0.0, 1e-6 * result.require_drawing().extent)
        told.append("0" if hidden else number_text(offset, 3))
    return f"Shear centre, hand minus FE: x {told[0]}, y {told[1]} {result.length_unit}."


def _reach_of(load: LoadLine, extent: float) -> Array | None:
    """Places (n, 2) [L] that a load's arrows reach."""
    if load.through is None:
        return None
    through, force = np.array(load.through), math.hypot(*load.shear)
    places = [through]
    if force > 0:
        places.append(through + ARROW * extent * np.array(load.shear) / force)
    if load.torque:
        places += [through - CIRCLE * extent, through + CIRCLE * extent]
    return np.vstack(places)


def _keep_clear_of_load(load: LoadLine, extent: float, middle: Place, lettering: Lettering) -> None:
    """Line of action and arrow of a load, before any label is written."""
    force = math.hypot(*load.shear)
    if force > 0 and load.through is not None:
        direction, through = np.array(load.shear) / force, np.array(load.through)
        lettering.keep_clear(through + np.linspace(-2.0, 2.0, 120)[:, None] * extent * direction)
        lettering.keep_clear(through + np.linspace(0.0, ARROW, 20)[:, None] * extent * direction)
    if load.torque:
        lettering.keep_clear_of_circle(load.through or middle, CIRCLE * extent)


def _many_labels(loads: Sequence[LoadLine]) -> int:
    """How many forces and couples there are to letter."""
    return sum((load.shear != (0.0, 0.0)) + (load.torque != 0.0) for load in loads)


def _load_labels(result: Result, *, numbered: bool) -> dict[str, tuple[str, str]]:
    """Label of every load that is drawn, its name or a number, and its sizes in words."""
    labels = {}
    for number, load in enumerate(result.require_drawing().loads, 1):
        kind = result.load_kinds.get(load.name)
        words = one_line(load.name, 30) + (f" ({kind})" if kind else "")
        sizes = []
        if load.shear != (0.0, 0.0):
            sizes.append(f"{number_text(math.hypot(*load.shear), 4)} {result.force_unit}")
        if load.torque:
            couple = f"{number_text(abs(load.torque), 4)} {result.force_unit} {result.length_unit}"
            sizes.append(f"T {couple}")
        labels[load.name] = (str(number) if numbered else words, f"{words} {', '.join(sizes)}".strip())
    if numbered and len(labels) > MOST_NUMBERED:
        return dict.fromkeys(labels, ("", ""))
    return labels


def _draw_load(
    axes: Axes, result: Result, load: LoadLine, label: str, lettering: Lettering, *, numbered: bool
) -> None:
    """Line of action, arrow and size of a load; a couple as a round arrow."""
    extent = result.require_drawing().extent
    force = math.hypot(*load.shear)
    if force > 0 and load.through is not None:
        direction = np.array(load.shear) / force
        through = np.array(load.through)
        axes.axline(
            tuple(through),
            tuple(through + direction * extent),
            color=INK,
            lw=0.4,
            ls=(0, (8, 2, 1, 2)),
            zorder=2,
        )
        tail, head = through, through + ARROW * extent * direction
        draw_arrow(axes, tail, head, INK)
        middle = head if numbered else (tail + head) / 2
        size = f"{number_text(force, 4)} {result.force_unit}"
        away = (1.0, 0.0) if abs(direction[1]) > 0.5 else (0.0, 1.0)
        texts = (label,) if numbered else (f"{label}\n{size}", f"{label} {size}")
        if label:
            lettering.write(texts, (float(middle[0]), float(middle[1])), away)
    if load.torque:
        place = load.through or centre_of(result.require_drawing())
        draw_torque(axes, place, CIRCLE * extent, load.torque, INK)
        couple = f"{number_text(abs(load.torque), 4)} {result.force_unit} {result.length_unit}"
        top = (place[0], place[1] + CIRCLE * extent)
        if not numbered:
            lettering.write((f"{label} T\n{couple}", f"{label} T {couple}"), top, (0.3, 1.0))
        elif label and force == 0.0:
            lettering.write(label, top, (0.3, 1.0))


def _name_walls(result: Result, lettering: Lettering, *, short: bool) -> None:
    """Name and thickness beside each wall, fewer words where there are many walls."""
    walls = result.require_drawing().walls
    if len(walls) > TOO_MANY_WALLS:
        return
    centre = centre_of(result.require_drawing())
    for wall in walls:
        text = one_line(wall.name, 24)
        if len(walls) <= (FEW_WALLS if short else MANY_WALLS):
            first, last = (size_text(float(wall.thickness[end])) for end in (0, -1))
            text += f"\nt {first}" if first == last else f"\nt {first} to {last}"
        i = len(wall.points) // 2
        place = (float(wall.points[i, 0]), float(wall.points[i, 1]))
        texts = (text, text.replace("\n", ", "))
        lettering.write(texts, place, outward(wall, centre), size=FONT - 0.5)
