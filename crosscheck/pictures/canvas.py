"""Paper for pictures: millimetres, one scale both ways, lettering, and bytes that two runs share."""

from __future__ import annotations

import io
import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING, Any, cast

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.text import Text

from crosscheck.comparison.drawn import Array
from crosscheck.faults import one_line
from crosscheck.pictures.fonts import covered_text

if TYPE_CHECKING:
    from matplotlib.backend_bases import RendererBase

MM = 1 / 25.4
FONT = 7.0
# Dark, middle and light also in grey; the hues stay apart for every kind of colour vision.
HAND = "#00487a"
FE = "#c44601"
INK = "#202020"
SOFT = "#6b6b6b"
SOLID = "#dcdcdc"
EDGE = "#8a8a8a"
DPI = 200
# Every picture is drawn for a page and for a column [mm].
WIDTHS = (160, 80)
# Paper from this width on has room for every label [mm].
WIDE_PAPER = 120
# Any: the keys are a closed set in the stubs of newer versions only.
STYLE: Any = {
    "font.size": FONT,
    "font.family": "DejaVu Sans",
    "axes.linewidth": 0.5,
    "axes.labelsize": FONT,
    "axes.titlesize": FONT + 1.5,
    "xtick.labelsize": FONT - 0.5,
    "ytick.labelsize": FONT - 0.5,
    "xtick.major.width": 0.5,
    "ytick.major.width": 0.5,
    "lines.linewidth": 1.0,
    "svg.hashsalt": "crosscheck",
    "svg.fonttype": "path",
    "text.parse_math": False,
    "text.usetex": False,
    # Without hinting a line is as wide at every resolution as it was measured.
    "text.hinting": "none",
    "hatch.linewidth": 0.4,
}


def sheet(width_mm: int, height_mm: float) -> Figure:
    """An empty figure of a width and height in millimetres."""
    with mpl.rc_context(STYLE):
        figure = Figure(figsize=(width_mm * MM, height_mm * MM), dpi=DPI)
        FigureCanvasAgg(figure)
    return figure


def picture_bytes(figure: Figure, kind: str, dpi: int = DPI) -> bytes:
    """A figure as a file's bytes, without a date; ``kind`` is svg, png or pdf."""
    stream = io.BytesIO()
    kinds: dict[str, dict[str, Any]] = {
        "svg": {"Date": None, "Creator": "crosscheck"},
        "pdf": {"CreationDate": None, "ModDate": None, "Creator": "crosscheck"},
        "png": {"Software": "crosscheck"},
    }
    metadata = kinds[kind]
    for label in figure.findobj(Text):
        if isinstance(label, Text) and not label.get_text().isascii():
            label.set_text(covered_text(label.get_text()))
    with mpl.rc_context(STYLE):
        figure.savefig(stream, format=kind, metadata=metadata, dpi=dpi)
    return stream.getvalue()


@dataclass(frozen=True)
class Frame:
    """Rectangle that a drawing must show: low and high corner [L]."""

    low: tuple[float, float]
    high: tuple[float, float]

    @property
    def size(self) -> tuple[float, float]:
        """Width and height [L]."""
        return self.high[0] - self.low[0], self.high[1] - self.low[1]

    def grown(self, margin: float) -> Frame:
        """The frame with a margin on every side [L]."""
        return Frame(
            (self.low[0] - margin, self.low[1] - margin), (self.high[0] + margin, self.high[1] + margin)
        )


def frame_of(groups: Sequence[Array]) -> Frame:
    """Smallest frame round arrays of places (n, 2) [L]."""
    places = np.vstack([group for group in groups if len(group)])
    low, high = places.min(axis=0), places.max(axis=0)
    return Frame((float(low[0]), float(low[1])), (float(high[0]), float(high[1])))


def scale_drawing(
    width_mm: int, frame: Frame, title: str, caption: str, length_unit: str
) -> tuple[Figure, Axes]:
    """A figure with one axes at equal scale that just holds a frame.

    Parameters
    ----------
    width_mm : int
        Width of the picture.
    frame : Frame
        What must be seen [L].
    title, caption : str
        Over and under the drawing; wrapped to its width.
    length_unit : str
        Unit on both axes.

    Returns
    -------
    Figure, Axes
    """
    left, right = 13.0, 3.0
    title_lines = title_in_lines(title, width_mm)
    caption_lines = caption_in_lines(caption, width_mm)
    above = 3.0 + 4.2 * len(title_lines)
    below = 11.0 + 3.2 * len(caption_lines)
    wide = width_mm - left - right
    size = frame.size
    # Narrow paper needs room for labels above and below a flat section.
    least = 0.34 * width_mm if width_mm >= WIDE_PAPER else 0.7 * width_mm
    tall = min(max(wide * size[1] / size[0], least), 0.95 * width_mm)
    height = tall + above + below
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        axes = figure.add_axes((left / width_mm, below / height, wide / width_mm, tall / height))
        unit = max(size[0] / wide, size[1] / tall)
        middle = [(low + high) / 2 for low, high in zip(frame.low, frame.high, strict=True)]
        axes.set_xlim(middle[0] - unit * wide / 2, middle[0] + unit * wide / 2)
        axes.set_ylim(middle[1] - unit * tall / 2, middle[1] + unit * tall / 2)
        axes.set_aspect("equal")
        axes.set_xlabel(f"x [{length_unit}]", labelpad=1)
        axes.set_ylabel(f"y [{length_unit}]", labelpad=1)
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)
        axes.tick_params(length=2, pad=1.5, color=SOFT, labelcolor=SOFT)
        axes.locator_params(nbins=6)
        write_title(figure, title_lines)
        write_caption(figure, caption_lines)
    return figure, axes


def title_in_lines(text: str, width_mm: int) -> list[str]:
    """A title wrapped to the width of the paper."""
    return wrapped(text, 0.96 * width_mm, FONT + 1.5, bold=True)


def caption_in_lines(text: str, width_mm: int) -> list[str]:
    """A caption wrapped to the width of the paper."""
    return wrapped(text, 0.96 * width_mm, FONT - 0.5)


def write_title(figure: Figure, lines: Sequence[str]) -> None:
    """Title at the top left, one line of text each."""
    height = figure.get_figheight() / MM
    for number, line in enumerate(lines):
        figure.text(
            0.02,
            1 - (2.0 + 4.2 * number) / height,
            line,
            va="top",
            fontsize=FONT + 1.5,
            weight="bold",
            color=INK,
        )


def write_caption(figure: Figure, lines: Sequence[str]) -> None:
    """Caption at the bottom left."""
    height = figure.get_figheight() / MM
    for number, line in enumerate(reversed(lines)):
        figure.text(0.02, (1.5 + 3.2 * number) / height, line, va="bottom", fontsize=FONT - 0.5, color=SOFT)


def wrapped(text: str, width_mm: float, size: float = FONT, *, bold: bool = False) -> list[str]:
    """Text in lines that fit a width in millimetres at a font size; words are cut only where they must be."""
    lines: list[str] = []
    for part in text.split("\n"):
        line = ""
        for word in part.split():
            for piece in _pieces(word, width_mm, size, bold):
                longer = f"{line} {piece}" if line else piece
                if line and text_width(longer, size, bold=bold) > width_mm:
                    lines.append(line)
                    line = piece
                else:
                    line = longer
        if line:
            lines.append(line)
    return lines


def fitted(text: str, width_mm: float, size: float = FONT) -> str:
    """Text on one line, cut to a width in millimetres."""
    letters = len(text)
    while letters > 1 and text_width(one_line(text, letters), size) > width_mm:
        letters -= 1
    return one_line(text, letters)


def _pieces(word: str, width_mm: float, size: float, bold: bool) -> list[str]:
    """A word, in pieces where it is wider than a line."""
    if text_width(word, size, bold=bold) <= width_mm:
        return [word]
    half = len(word) // 2
    if half == 0:
        return [word]
    return [*_pieces(word[:half], width_mm, size, bold), *_pieces(word[half:], width_mm, size, bold)]


@cache
def text_width(text: str, size: float, *, bold: bool = False) -> float:
    """Width of one line of text in millimetres."""
    with mpl.rc_context(STYLE):
        font = FontProperties(size=size, weight="bold" if bold else "normal")
        width, _, _ = _ruler().get_text_width_height_descent(covered_text(text), font, ismath=False)
    return float(width) / DPI / MM


@cache
def _ruler() -> RendererBase:
    """A renderer that only measures."""
    return renderer_of(FigureCanvasAgg(Figure(dpi=DPI)))


def renderer_of(canvas: FigureCanvasAgg) -> RendererBase:
    """The renderer of a canvas; its stub has no types."""
    return cast("RendererBase", cast(Any, canvas).get_renderer())


def plain_unit(unit: str) -> str:
    """A unit with raised digits, as pictures show it: ``mm^4`` becomes mm with a small four."""
    return re.sub(r"\^(\d)", lambda found: "\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076"[int(found[1])], unit)


def power_text(value: float) -> str:
    """A power of ten with a raised exponent, for logarithmic axes."""
    raised = str.maketrans(
        "-0123456789", "\u207b\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076\u2077\u2078\u2079"
    )
    return f"10{str(round(math.log10(value))).translate(raised)}"


def size_text(value: float) -> str:
    """A dimension with at most four significant digits and no idle zeros."""
    return f"{value:.4g}"
