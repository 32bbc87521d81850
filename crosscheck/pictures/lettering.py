"""Labels beside what they name, clear of each other and of what is drawn."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.text import Text

from crosscheck.comparison.drawn import Array
from crosscheck.pictures.canvas import DPI, FONT, INK, STYLE, renderer_of
from crosscheck.pictures.fonts import covered_text

# Labels farther than this from what they name get a line to it [pixels].
LEADER_FROM = 20.0
# Distances tried between a label and what it names [pixels].
AIRS = (3.0, 8.0, 14.0, 22.0, 34.0, 52.0, 80.0, 120.0)


@dataclass
class Lettering:
    """Places labels beside what they name, clear of each other and of what is drawn.

    Obstacles are points of the drawing and boxes of labels already placed, both in pixels. ``inside``: labels
    stay between the left and the right end of the axes, which have neighbours.
    """

    axes: Axes
    points: list[Array] = field(default_factory=list)
    boxes: list[tuple[float, float, float, float]] = field(default_factory=list)
    inside: bool = False

    def keep_clear(self, places: Array) -> None:
        """Add places (n, 2) [L] that labels should not cover."""
        dense = [places]
        if len(places) > 1:
            # Long segments need points in between, or a label sits on the line unseen.
            for share in (0.2, 0.4, 0.6, 0.8):
                dense.append(places[:-1] * (1 - share) + places[1:] * share)
        self.points.append(np.asarray(self.axes.transData.transform(np.vstack(dense))))

    def keep_clear_of_mark(self, place: tuple[float, float], size: float = 4.0) -> None:
        """Add a mark at a place [L] with a radius in points."""
        x, y = self.axes.transData.transform(place)
        reach = size * DPI / 72
        self.boxes.append((x - reach, y - reach, x + reach, y + reach))

    def keep_clear_of_circle(self, place: tuple[float, float], radius: float) -> None:
        """Add a circle round a place [L]."""
        turn = np.linspace(0.0, math.tau, 24)
        self.keep_clear(np.asarray(place) + radius * np.column_stack((np.cos(turn), np.sin(turn))))

    def write(
        self,
        texts: str | Sequence[str],
        place: tuple[float, float],
        away: tuple[float, float] = (1.0, 0.0),
        *,
        colour: str = INK,
        size: float = FONT,
        leader: bool = True,
    ) -> None:
        """Write a label near a place [L], towards ``away`` if it can be; of several texts the best one."""
        anchor = np.asarray(self.axes.transData.transform(place))
        best: tuple[float, Array, float, Text] | None = None
        for text in (texts,) if isinstance(texts, str) else texts:
            label = self._label(text, place, colour, size)
            width, height = self._size(label)
            cost, centre, distance = self._cheapest(anchor, away, width, height)
            if best is None or cost < best[0]:
                if best is not None:
                    best[3].remove()
                best = (cost, centre, distance, label)
            else:
                label.remove()
        assert best is not None
        _, centre, distance, label = best
        width, height = self._size(label)
        label.set_position(tuple(self.axes.transData.inverted().transform(centre)))
        box = (centre[0] - width / 2, centre[1] - height / 2, centre[0] + width / 2, centre[1] + height / 2)
        self.boxes.append(box)
        if leader and distance > LEADER_FROM:
            tip = (
                float(np.clip(anchor[0], box[0], box[2])),
                float(np.clip(anchor[1], box[1], box[3])),
            )
            ends = self.axes.transData.inverted().transform(np.vstack((anchor, tip)))
            self.axes.plot(ends[:, 0], ends[:, 1], color=colour, lw=0.4, zorder=5, clip_on=False)

    def _label(self, text: str, place: tuple[float, float], colour: str, size: float) -> Text:
        """A label on the axes, its place still to be found."""
        with mpl.rc_context(STYLE):
            return self.axes.text(
                *place,
                covered_text(text),
                color=colour,
                fontsize=size,
                ha="center",
                va="center",
                linespacing=1.05,
                zorder=6,
                clip_on=False,
                bbox={"facecolor": "white", "alpha": 0.7, "lw": 0, "pad": 0.4},
            )

    def _size(self, label: Text) -> tuple[float, float]:
        """Width and height of a label in pixels, with a little air."""
        canvas = self.axes.figure.canvas
        assert isinstance(canvas, FigureCanvasAgg)
        box = label.get_window_extent(renderer_of(canvas))
        return float(box.width) + 4.0, float(box.height) + 2.0

    def _cheapest(
        self, anchor: Array, away: tuple[float, float], width: float, height: float
    ) -> tuple[float, Array, float]:
        """Cost, centre and distance of the best place round an anchor, all in pixels."""
        turns = np.arange(24)
        steps = turns // 2 + turns % 2
        angles = math.atan2(away[1], away[0]) + steps * np.where(turns % 2, 1, -1) * math.tau / 24
        rays = np.column_stack((np.cos(angles), np.sin(angles)))
        # Distance at which the box just clears its anchor in each direction.
        clear = (np.array((width, height)) / 2 / np.maximum(np.abs(rays), 1e-9)).min(axis=1)
        airs = np.array(AIRS)
        reach = clear[:, None] + airs
        centres = (anchor + rays[:, None] * reach[..., None]).reshape(-1, 2)
        half = np.array((width / 2, height / 2))
        low, high = centres - half, centres + half
        cost = np.broadcast_to(1.2 * airs + 1.5 * steps[:, None], reach.shape).ravel().copy()
        if self.points:
            points = np.vstack(self.points)
            near = points[(np.abs(points - anchor) < reach.max() + half.max()).all(axis=1)]
            inside = (near > low[:, None] - 2) & (near < high[:, None] + 2)
            cost += 50.0 * np.minimum(inside.all(axis=2).sum(axis=1), 40)
        if self.boxes:
            boxes = np.array(self.boxes)
            hit = (low[:, None] < boxes[:, 2:]) & (high[:, None] > boxes[:, :2])
            cost += 3000.0 * hit.all(axis=2).sum(axis=1)
        frame = self.axes.get_window_extent()
        # On the right the paper's edge counts, not that of the axes: there is nothing beside them.
        edge = float(frame.x1) if self.inside else self.axes.figure.bbox.x1 - 4.0
        over = np.maximum(np.array((frame.x0, frame.y0)) - low, 0).sum(axis=1)
        over += np.maximum(high - np.array((edge, frame.y1)), 0).sum(axis=1)
        cost += 8.0 * over + 4000.0 * (over > 0)
        best = int(np.argmin(cost))
        return float(cost[best]), centres[best], float(airs[best % airs.size])
