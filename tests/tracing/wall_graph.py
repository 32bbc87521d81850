"""Walls of a section as a graph that drawings can tell: stretches that run on smoothly are one wall.

A drawing shows no point where one wall runs on into the next, tangent and as thick: such a point of a section
file leaves no trace. Walls are compared after they are united there.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass

import numpy as np

from crosscheck.section_file.model import SectionFile, WallSpec, arc_angle

# Directions of walls that run on [cosine], and their thicknesses' difference.
ONWARD = 0.995
THICKNESS = 0.01


@dataclass(frozen=True)
class Counts:
    """Walls, joints (points where other than two walls meet, or two at a corner), free ends, cells."""

    walls: int
    joints: int
    free_ends: int
    cells: int


def counts(section: SectionFile) -> Counts:
    """What a drawing tells of a section's walls as FE sees them."""
    walls = [w for w in section.walls if w.seen_by != "theory"]
    degree = Counter(p for w in walls for p in (w.start, w.end))
    smooth = {p for p, n in degree.items() if n == 2 and _runs_on(section, walls, p)}
    cells = len(walls) - len(degree) + 1
    free = sum(n == 1 for n in degree.values())
    joints = len(degree) - free - len(smooth)
    # a ring without a joint is one wall
    return Counts(max(len(walls) - len(smooth), 1), joints, free, cells)


def _runs_on(section: SectionFile, walls: list[WallSpec], point: str) -> bool:
    leaving = [_leaving(section, w, point) for w in walls if point in (w.start, w.end)]
    (a, t), (b, u) = leaving
    return bool(-(a @ b) > ONWARD and abs(t - u) < THICKNESS * t)


def _leaving(section: SectionFile, wall: WallSpec, point: str) -> tuple[np.ndarray, float]:
    """Direction in which a wall leaves one of its points, and its thickness there."""
    start, end = (np.array(section.points[p]) for p in (wall.start, wall.end))
    at_start = wall.start == point
    thickness = wall.thickness[0 if at_start else 1]
    if wall.arc_through is None:
        along = (end - start) / np.hypot(*(end - start))
        return (along if at_start else -along), thickness
    _, first, sweep = arc_angle(section.points[wall.start], wall.arc_through, section.points[wall.end])
    angle = first if at_start else first + sweep
    tangent = np.sign(sweep) * np.array([-np.sin(angle), np.cos(angle)])
    return (tangent if at_start else -tangent), thickness
