"""Values drawn along the walls, square to them: theory as a line, FE as marks with error bars."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.comparison.drawn import Array, Drawing, WallShape
from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    Frame,
    frame_of,
    scale_drawing,
)
from crosscheck.pictures.lettering import Lettering
from crosscheck.pictures.walls import draw_arrow, draw_solid

# Largest ordinate over the larger and over the smaller overall dimension: diagrams of a flat box stay apart.
HEIGHT = 0.15
LOW_HEIGHT = 0.36


@dataclass(frozen=True)
class Mark:
    """An FE value with its error at a distance along a wall [L], and theory's value there."""

    s: float
    fe: float
    error: float
    theory: float | None


def along_walls(
    drawing: Drawing,
    theory: Mapping[str, Array],
    marks: Mapping[str, Sequence[Mark]],
    width_mm: int,
    title: str,
    caption: str,
    length_unit: str,
    letter: Callable[[float], str],
    turned: bool = True,
    least_peak: float = 0.0,
    arrows: Sequence[Array] = (),
) -> tuple[Figure, Lettering]:
    """A diagram of a quantity along the walls.

    Parameters
    ----------
    drawing : Drawing
        Geometry.
    theory : mapping of wall to (n,)
        Theory's values at the samples of each wall, along its own direction.
    marks : mapping of wall to marks
        FE's values.
    width_mm : int
        Width of the paper.
    title, caption : str
        Over and under it.
    length_unit : str
        Unit of both axes.
    letter : callable
        Value to text.
    turned : bool
        True where the sign of the value goes with the wall's direction, as that of a flow does.
    least_peak : float
        The scale is not stretched for peaks smaller than this.
    arrows : sequence of (2, 2)
        Tail and head of forces to draw [L].

    Returns
    -------
    Figure, Lettering
        The lettering can place more labels.
    """
    drawn = diagram(drawing, theory, marks, turned=turned, least_peak=least_peak, arrows=arrows)
    figure, axes = scale_drawing(width_mm, drawn.frame, title, caption, length_unit)
    lettering = draw_diagram(axes, drawn, letter, small=width_mm < WIDE_PAPER)
    return figure, lettering


@dataclass(frozen=True)
class Diagram:
    """A diagram before it is drawn: what it shows, the scale of its ordinates, its peak and its frame."""

    drawing: Drawing
    curves: Mapping[str, Array]
    marks: Mapping[str, Sequence[Mark]]
    arrows: Sequence[Array]
    turned: bool
    scale: float
    peak: float
    frame: Frame


def diagram(
    drawing: Drawing,
    theory: Mapping[str, Array],
    marks: Mapping[str, Sequence[Mark]],
    *,
    turned: bool = True,
    least_peak: float = 0.0,
    arrows: Sequence[Array] = (),
) -> Diagram:
    """Scale, curves and frame of a diagram; parameters as in :func:`along_walls`."""
    peaks = [float(np.abs(values).max()) for values in theory.values()]
    peaks += [abs(mark.fe) for row in marks.values() for mark in row]
    peak = max((*peaks, least_peak)) or 1.0
    width, height = frame_of([drawing.loops[0]]).size
    scale = min(HEIGHT * max(width, height), LOW_HEIGHT * min(width, height)) / peak
    curves = {
        wall.name: _ordinates(wall, theory[wall.name], scale, turned)
        for wall in drawing.walls
        if wall.name in theory
    }
    tips = [
        _tip(wall, mark.s, mark.fe, scale, turned)[1]
        for wall in drawing.walls
        for mark in marks.get(wall.name, ())
    ]
    frame = frame_of([drawing.loops[0], *curves.values(), *(tip[None, :] for tip in tips), *arrows])
    frame = frame.grown(0.13 * drawing.extent)
    return Diagram(drawing, curves, marks, arrows, turned, scale, peak, frame)


def draw_diagram(
    axes: Axes, drawn: Diagram, letter: Callable[[float], str], *, small: bool, inside: bool = False
) -> Lettering:
    """Draw a diagram on axes of equal scale; the lettering can place more labels.

    ``small``: little room, so fewer labels; ``inside``: the axes have neighbours on the right.
    """
    drawing, scale, turned = drawn.drawing, drawn.scale, drawn.turned
    lettering = Lettering(axes, inside=inside)
    for arrow in drawn.arrows:
        draw_arrow(axes, arrow[0], arrow[1], INK)
        lettering.keep_clear(np.linspace(arrow[0], arrow[1], 20))
    for wall in drawing.walls:
        for mark in drawn.marks.get(wall.name, ()):
            tip = _tip(wall, mark.s, mark.fe, scale, turned)[1]
            # Twice, so that a mark weighs more than a bit of line and less than a label.
            lettering.keep_clear(np.vstack((tip, tip)))
    with mpl.rc_context(STYLE):
        draw_solid(axes, drawing.loops, face="#ececec", edge="#b0b0b0")
        for wall in drawing.walls:
            axes.plot(wall.points[:, 0], wall.points[:, 1], color=SOFT, lw=0.5, zorder=2)
            lettering.keep_clear(wall.points)
            curve = drawn.curves.get(wall.name)
            if curve is not None:
                ring = np.vstack((wall.points, curve[::-1]))
                axes.fill(ring[:, 0], ring[:, 1], color=HAND, alpha=0.12, lw=0, zorder=2)
                axes.plot(curve[:, 0], curve[:, 1], color=HAND, lw=1.1, zorder=3)
                axes.plot(*np.vstack((wall.points[0], curve[0])).T, color=HAND, lw=0.4, zorder=3)
                axes.plot(*np.vstack((wall.points[-1], curve[-1])).T, color=HAND, lw=0.4, zorder=3)
                lettering.keep_clear(curve)
            for mark in drawn.marks.get(wall.name, ()):
                _draw_mark(axes, wall, mark, scale, turned)
        for wall in drawing.walls:
            row = drawn.marks.get(wall.name, ())
            if row and len(drawing.walls) <= 40:
                _letter_peak(lettering, wall, row, drawn.peak, scale, turned, letter, small=small)
    return lettering


def _ordinates(wall: WallShape, values: Array, scale: float, turned: bool) -> Array:
    """Tips (n, 2) of the ordinates: positive to the right of the direction in which reports show the wall."""
    sign = -1.0 if turned else -float(wall.turn)
    return np.asarray(wall.points + wall.normals * (sign * scale * values)[:, None])


def _tip(wall: WallShape, s: float, value: float, scale: float, turned: bool) -> tuple[Array, Array]:
    """Foot and tip (2,) of one ordinate."""
    foot = np.array([np.interp(s, wall.s, wall.points[:, axis]) for axis in (0, 1)])
    normal = np.array([np.interp(s, wall.s, wall.normals[:, axis]) for axis in (0, 1)])
    sign = -1.0 if turned else -float(wall.turn)
    return foot, foot + normal * sign * scale * value


def _draw_mark(axes: mpl.axes.Axes, wall: WallShape, mark: Mark, scale: float, turned: bool) -> None:
    """An FE mark with its error bar, square to the wall."""
    _, tip = _tip(wall, mark.s, mark.fe, scale, turned)
    axes.plot(*tip, marker="o", ms=2.6, mfc="white", mec=FE, mew=0.8, zorder=4)
    if mark.error > 0:
        ends = (mark.fe - mark.error, mark.fe + mark.error)
        bar = np.vstack([_tip(wall, mark.s, end, scale, turned)[1] for end in ends])
        axes.plot(bar[:, 0], bar[:, 1], color=FE, lw=0.8, zorder=4)


def _letter_peak(
    lettering: Lettering,
    wall: WallShape,
    row: Sequence[Mark],
    peak: float,
    scale: float,
    turned: bool,
    letter: Callable[[float], str],
    small: bool,
) -> None:
    """Both sides' values where FE's is largest in a wall; small walls' only where the paper has room."""
    mark = max(row, key=lambda entry: abs(entry.fe))
    if abs(mark.fe) < (0.25 if small else 0.08) * peak:
        return
    foot, tip = _tip(wall, mark.s, mark.fe, scale, turned)
    reach = tip - foot
    if not reach.any():
        reach = wall.normals[0]

    def lettered(value: float) -> str:
        return letter(0.0 if abs(value) < 1e-9 * peak else abs(value) if turned else value)

    hand = "" if mark.theory is None else f"hand {lettered(mark.theory)}\n"
    text = f"{hand}FE {lettered(mark.fe)}"
    lettering.write(
        text, (float(tip[0]), float(tip[1])), (float(reach[0]), float(reach[1])), colour=INK, size=FONT - 1
    )
