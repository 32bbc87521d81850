"""Midline of one wall as the comparison needs it: places, left normals, distance along a line or an arc."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from crosscheck.comparison.drawn import Array
from crosscheck.section_file.model import Place, arc_angle


@dataclass(frozen=True)
class Midline:
    """A straight wall, or a circular arc through a third place.

    Attributes
    ----------
    start, end : (float, float)
        Ends in the axes of the section file [L].
    arc_through : (float, float) or None
        Third place on a circular arc [L]; None for a straight wall.
    """

    start: Place
    end: Place
    arc_through: Place | None = None

    @property
    def length(self) -> float:
        """Length along the midline [L]."""
        if self.arc_through is None:
            return math.dist(self.start, self.end)
        _, radius, _, sweep = self._arc()
        return radius * abs(sweep)

    def places(self, fractions: Array) -> Array:
        """Places (n, 2) [L] at fractions (n,) of the length [-]."""
        f = np.asarray(fractions, dtype=float)[:, None]
        if self.arc_through is None:
            return np.asarray(np.asarray(self.start) * (1 - f) + np.asarray(self.end) * f)
        centre, radius, angle, sweep = self._arc()
        turn = angle + sweep * f[:, 0]
        return np.asarray(centre) + radius * np.column_stack((np.cos(turn), np.sin(turn)))

    def left_normals(self, fractions: Array) -> Array:
        """Unit normals (n, 2) [-] to the left of the wall's direction at fractions (n,) [-]."""
        f = np.asarray(fractions, dtype=float)
        if self.arc_through is None:
            dx, dy = self.end[0] - self.start[0], self.end[1] - self.start[1]
            length = math.hypot(dx, dy)
            return np.tile((-dy / length, dx / length), (f.size, 1))
        _, _, angle, sweep = self._arc()
        turn = angle + sweep * f
        # Turning anticlockwise, left is towards the centre.
        return -math.copysign(1.0, sweep) * np.column_stack((np.cos(turn), np.sin(turn)))

    def _arc(self) -> tuple[Place, float, float, float]:
        """Centre, radius, start angle and signed sweep of the arc."""
        assert self.arc_through is not None
        centre, angle, sweep = arc_angle(self.start, self.arc_through, self.end)
        return centre, math.dist(centre, self.start), angle, sweep
