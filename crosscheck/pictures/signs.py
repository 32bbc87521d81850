"""The sign convention as a picture: axes, resultants, and the direction of a flow."""

from __future__ import annotations

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from crosscheck.pictures.canvas import (
    FE,
    FONT,
    HAND,
    INK,
    SOFT,
    STYLE,
    caption_in_lines,
    sheet,
    title_in_lines,
    write_caption,
    write_title,
)
from crosscheck.pictures.walls import draw_arrow, draw_torque

TALL = 52.0


def signs_picture(width_mm: int = 160) -> Figure:
    """Axes and shear, torque, moments, and flow along a wall, side by side; the same for every section."""
    title = title_in_lines("Axes and signs: the face whose outward normal points at the viewer", width_mm)
    caption = caption_in_lines(
        "All resultants are those of the stress on the face seen. A moment Mx > 0 puts the upper side "
        "in tension, My > 0 the right one. A flow q > 0 runs along its wall's own direction. z, N and "
        "a bimoment's tension point at the viewer.",
        width_mm,
    )
    above, below = 4.0 + 4.2 * len(title), 3.0 + 3.2 * len(caption)
    height = above + below + TALL
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        wide = width_mm / 3
        drawn = (_axes_and_shear, _moments, _flow)
        for number, draw in enumerate(drawn):
            axes = figure.add_axes((number * wide / width_mm, below / height, wide / width_mm, TALL / height))
            axes.set_xlim(-1.2, 1.2)
            axes.set_ylim(-1.2 * TALL / wide, 1.2 * TALL / wide)
            axes.set_aspect("equal")
            axes.axis("off")
            draw(axes)
        write_title(figure, title)
        write_caption(figure, caption)
    return figure


def _arrow(axes: Axes, tail: tuple[float, float], head: tuple[float, float], colour: str = INK) -> None:
    draw_arrow(axes, np.array(tail), np.array(head), colour)


def _text(axes: Axes, x: float, y: float, words: str, colour: str = INK, bold: bool = False) -> None:
    axes.text(
        x, y, words, ha="center", va="center", fontsize=FONT, color=colour, weight="bold" if bold else None
    )


def _axes_and_shear(axes: Axes) -> None:
    """x, y, z and the resultants Vx, Vy, T."""
    _arrow(axes, (-0.75, -0.75), (0.15, -0.75), SOFT)
    _arrow(axes, (-0.75, -0.75), (-0.75, 0.15), SOFT)
    axes.plot(-0.75, -0.75, "o", ms=6, mfc="white", mec=SOFT)
    axes.plot(-0.75, -0.75, "o", ms=1.6, color=SOFT)
    _text(axes, 0.27, -0.75, "x", SOFT)
    _text(axes, -0.75, 0.27, "y", SOFT)
    _text(axes, -0.93, -0.9, "z", SOFT)
    _arrow(axes, (0.2, 0.15), (0.85, 0.15), HAND)
    _arrow(axes, (0.2, 0.15), (0.2, 0.8), HAND)
    _text(axes, 0.97, 0.15, "Vx", HAND)
    _text(axes, 0.2, 0.92, "Vy", HAND)
    draw_torque(axes, (0.2, 0.15), 0.3, 1.0, FE)
    _text(axes, 0.62, 0.5, "T", FE)


def _moments(axes: Axes) -> None:
    """Where Mx and My make tension."""
    axes.plot([-0.55, 0.55, 0.55, -0.55, -0.55], [-0.55, -0.55, 0.55, 0.55, -0.55], color=SOFT, lw=0.8)
    _text(axes, 0.0, 0.72, "tension by Mx > 0", HAND)
    _text(axes, 0.0, -0.72, "compression by Mx > 0", HAND)
    axes.text(0.72, 0.0, "tension\nby My > 0", rotation=90, ha="center", va="center", fontsize=FONT, color=FE)
    axes.text(
        -0.72, 0.0, "compression\nby My > 0", rotation=90, ha="center", va="center", fontsize=FONT, color=FE
    )
    axes.plot([-0.55, 0.55], [0, 0], color=SOFT, lw=0.4, ls=(0, (6, 3)))
    axes.plot([0, 0], [-0.55, 0.55], color=SOFT, lw=0.4, ls=(0, (6, 3)))


def _flow(axes: Axes) -> None:
    """A wall with its direction and a positive flow."""
    start, end = np.array((-0.8, -0.55)), np.array((0.8, 0.55))
    along = (end - start) / np.hypot(*(end - start))
    across = np.array((-along[1], along[0]))
    for side in (-0.09, 0.09):
        line = np.vstack((start, end)) + side * across
        axes.plot(line[:, 0], line[:, 1], color=SOFT, lw=0.8)
    _arrow(axes, tuple(start - 0.24 * across + 0.3 * along), tuple(end - 0.24 * across - 0.3 * along), HAND)
    _text(axes, 0.3, -0.3, "q > 0", HAND)
    _arrow(axes, tuple(start + 0.3 * along), tuple(end - 0.3 * along), SOFT)
    _text(axes, -0.97, -0.62, "start")
    _text(axes, 0.95, 0.66, "end")
    _text(axes, -0.25, 0.25, "wall's direction", SOFT)
