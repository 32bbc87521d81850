"""Clear runs joined to walls: runs of one wall united, bends recognised, walls brought together at points."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from crosscheck.tracing.faces import Array, Face
from crosscheck.tracing.medial_axis import Knot, MedialAxis
from crosscheck.tracing.wall_fit import FittedWall, fitted_wall

# Runs whose directions differ by less may be one wall [cosine].
ONWARD = np.cos(np.radians(12.0))
# An arc between two straight walls with an inner radius up to this many thicknesses is a bend.
BEND = 8.0
# Turn of a bend [cosine of the angle between its walls' directions]; a U-turn stays an arc.
U_TURN = np.cos(np.radians(150.0))
# Pull to the middle of a knot against the midlines' own places, where these are nearly in line.
PULL = 1e-3


@dataclass
class Strand:
    """A wall in the making: samples on both faces, medial path, fit, knots at both ends, faces beside it."""

    left: Array
    right: Array
    path: Array
    wall: FittedWall
    knots: tuple[int, int] | None
    faces: tuple[int, ...]

    def reversed(self) -> Strand:
        """The strand run through the other way."""
        knots = None if self.knots is None else self.knots[::-1]
        return Strand(self.right, self.left, self.path[::-1], self.wall.reversed(), knots, self.faces)

    def leaving(self, knot: int) -> Strand:
        """The strand in the direction away from a knot at one of its ends."""
        assert self.knots is not None
        return self if self.knots[0] == knot else self.reversed()


def strands(axis: MedialAxis, tolerance: float) -> list[Strand]:
    """A strand for every run; ``tolerance`` is a share of its thickness [-]."""
    made = []
    for run in axis.runs:
        wall = fitted_wall(run.left, run.right, run.path, tolerance * run.thickness, run.knots is None)
        made.append(Strand(run.left, run.right, run.path, wall, run.knots, run.faces))
    return made


def ends_at(found: Sequence[Strand]) -> dict[int, list[Strand]]:
    """Strands by the knots that they end at; twice where both ends are there."""
    at: dict[int, list[Strand]] = {}
    for strand in found:
        for knot in strand.knots or ():
            at.setdefault(knot, []).append(strand)
    return at


def united(found: list[Strand], knots: dict[int, Knot], tolerance: float) -> list[Strand]:
    """Strands that one wall fits, across knots where just two meet, made one."""
    found = list(found)
    for knot in list(knots):
        meeting = [s for s in found if s.knots and knot in s.knots]
        if len(meeting) != 2:
            continue
        before, after = meeting[0].leaving(knot).reversed(), meeting[1].leaving(knot)
        assert before.knots is not None
        assert after.knots is not None
        if before.wall.tangent(before.wall.span[1]) @ after.wall.tangent(after.wall.span[0]) < ONWARD:
            continue
        thickness = [
            before.wall.at_thickness(before.wall.span[1]),
            after.wall.at_thickness(after.wall.span[0]),
        ]
        if abs(thickness[0] - thickness[1]) > 0.3 * min(thickness):
            continue
        left = np.concatenate([before.left, after.left])
        right = np.concatenate([before.right, after.right])
        path = np.concatenate([before.path, after.path])
        wall = fitted_wall(left, right, path, tolerance * min(thickness))
        if wall.residual > max(tolerance * min(thickness), before.wall.residual, after.wall.residual):
            continue
        ends = before.knots[0], after.knots[1]
        loop = ends[0] == ends[1] and len([s for s in found if s.knots and ends[0] in s.knots]) == 2
        if loop and not wall.straight:
            continue
        one = Strand(left, right, path, wall, ends, before.faces + after.faces)
        found = [s for s in found if s is not meeting[0] and s is not meeting[1]] + [one]
    return found


def bent(
    found: list[Strand], knots: dict[int, Knot], faces: Sequence[Face]
) -> tuple[list[Strand], dict[int, Knot]]:
    """Arcs that round a bend of two straight walls taken out; their knots become one."""
    found, knots = list(found), dict(knots)
    for arc in list(found):
        if arc.wall.straight or arc.knots is None or arc.knots[0] == arc.knots[1]:
            continue
        at = ends_at(found)
        pairs = [at[k] for k in arc.knots]
        if any(len(p) != 2 for p in pairs):
            continue
        beside = [next((s for s in p if s is not arc), None) for p in pairs]
        if beside[0] is None or beside[1] is None or beside[0] is beside[1]:
            continue
        before, after = beside[0].leaving(arc.knots[0]).reversed(), beside[1].leaving(arc.knots[1])
        if not (before.wall.straight and after.wall.straight):
            continue
        a, b = before.wall.direction, after.wall.direction
        first, last = arc.wall.tangent(arc.wall.span[0]), arc.wall.tangent(arc.wall.span[1])
        thickness = arc.wall.at_thickness(0.0)
        inner = 1.0 / abs(arc.wall.curvature) - 0.5 * thickness
        if inner > BEND * thickness or a @ b < U_TURN or min(a @ first, b @ last) < 0.9:
            continue
        k, gone = arc.knots
        united = knots[k], knots[gone]
        knots[k] = Knot(
            np.concatenate([united[0].places, united[1].places, arc.path]),
            np.concatenate([united[0].radius, united[1].radius, np.full(len(arc.path), 0.5 * thickness)]),
            tuple({*united[0].faces, *united[1].faces, *arc.faces}),
        )
        del knots[gone]
        found = [s for s in found if s is not arc]
        for s in found:
            if s.knots and gone in s.knots:
                s.knots = (k if s.knots[0] == gone else s.knots[0], k if s.knots[1] == gone else s.knots[1])
    return found, knots


def meeting_place(walls: Sequence[FittedWall], middle: Array) -> Array:
    """Least-squares place where the midlines of walls that leave a knot meet, weighted by thickness [L].

    Midlines nearly in line do not say where along them: there the place stays near the knot's middle. The
    pull towards it is repeated, so that where midlines cross it leaves no trace.
    """
    weight = np.array([w.at_thickness(w.span[0]) for w in walls])
    weight = weight / weight.sum()
    place = middle
    for _ in range(12):
        normal, off = [], []
        for wall in walls:
            s, left = wall.along(place[None])
            t = wall.tangent(float(s[0]))
            normal.append(np.array([-t[1], t[0]]))
            off.append(float(left[0]))
        n = np.array(normal)
        matrix = (n * weight[:, None]).T @ n + PULL * np.eye(2)
        place = place - np.linalg.solve(matrix, (n * weight[:, None]).T @ np.array(off))
    return np.asarray(place)
