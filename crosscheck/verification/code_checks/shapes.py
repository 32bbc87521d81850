"""Sections for code checks, told once and built for both sides; symmetric only where the name says so."""

from __future__ import annotations

import cmath
import math
from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

import beam_theory
import fe_models

Array = NDArray[np.float64]
Complexes = NDArray[np.complex128]
Place = tuple[float, float]
GAUSS_POINTS = 16


@dataclass(frozen=True)
class Wall:
    """A wall between two points: thickness at both ends, third point of an arc, moduli and direct share."""

    start: str
    end: str
    thickness: tuple[float, float]
    through: Place | None = None
    e: float = 1.0
    g: float = 1.0
    direct_share: float = 1.0

    @property
    def name(self) -> str:
        return f"{self.start}-{self.end}"


@dataclass(frozen=True)
class Line:
    """Gauss points of a wall's midline, worked out from its three points alone.

    fraction (q,), place (q, 2) [L], step (q, 2): tangent times weight, so that its sum is the chord [L];
    weight (q,): lengths that add up to the wall's [L]; thickness (q,) [L].
    """

    fraction: Array
    place: Array
    step: Array
    weight: Array
    thickness: Array


@dataclass(frozen=True)
class Shape:
    """Points [L], walls, and booms as e A [L^2] by point."""

    points: Mapping[str, Place]
    walls: tuple[Wall, ...]
    booms: Mapping[str, float]

    def theory(self) -> beam_theory.Section:
        """Classical theory's section."""
        walls = tuple(
            beam_theory.Wall(w.name, w.start, w.end, w.thickness, w.through, w.e, w.g, w.direct_share)
            for w in self.walls
        )
        return beam_theory.Section(
            self.points, walls, tuple(beam_theory.Boom(a, point=p) for p, a in self.booms.items())
        )

    def solid(self) -> fe_models.Section:
        """The finite-element side's section."""
        walls = tuple(
            fe_models.Wall(w.name, w.start, w.end, w.thickness, w.through, w.e, w.g, w.direct_share)
            for w in self.walls
        )
        booms = tuple(fe_models.Boom(a, point=p) for p, a in self.booms.items())
        return fe_models.Section(self.points, walls, booms=booms)

    def moved(self, turn: complex = 1.0, shift: complex = 0.0, mirror: bool = False) -> Shape:
        """Mirrored about the x axis, then turned and scaled by ``turn``, then shifted."""
        size = abs(turn)

        def at(place: Place) -> Place:
            z = complex(*place)
            z = turn * (z.conjugate() if mirror else z) + shift
            return z.real, z.imag

        walls = tuple(
            replace(
                w,
                thickness=(w.thickness[0] * size, w.thickness[1] * size),
                through=None if w.through is None else at(w.through),
            )
            for w in self.walls
        )
        points = {name: at(xy) for name, xy in self.points.items()}
        return Shape(points, walls, {p: a * size**2 for p, a in self.booms.items()})

    def curve(self, wall: Wall, u: Array) -> tuple[Complexes, Complexes]:
        """Places and their derivative by the fraction of a wall, from its three points alone."""
        a, b = complex(*self.points[wall.start]), complex(*self.points[wall.end])
        if wall.through is None:
            return np.asarray(a + u * (b - a)), np.asarray((b - a) + 0.0j * u)
        m = complex(*wall.through)
        # centre c: |a - c| = |b - c| = |m - c|
        one, two = b - a, m - a
        c = a + 1j * (one * abs(two) ** 2 - two * abs(one) ** 2) / (2.0 * (one.conjugate() * two).imag)
        to_m, to_b = cmath.phase((m - c) / (a - c)), cmath.phase((b - c) / (a - c))
        if not 0.0 < to_m / to_b < 1.0:
            to_b -= math.copysign(2.0 * math.pi, to_b)
        z = c + (a - c) * np.exp(1j * to_b * u)
        return z, 1j * to_b * (z - c)

    def line(self, wall: Wall) -> Line:
        """Gauss points of a wall."""
        x, w = np.polynomial.legendre.leggauss(GAUSS_POINTS)
        u = 0.5 * (x + 1.0)
        z, rate = self.curve(wall, u)
        step = 0.5 * w * rate
        t = wall.thickness[0] + u * (wall.thickness[1] - wall.thickness[0])
        place, along = (np.stack([v.real, v.imag], -1) for v in (z, step))
        return Line(u, place, along, np.abs(step), t)

    def rewritten(self) -> Shape:
        """The same section with every wall turned round, and walls and points listed backwards."""
        walls = tuple(
            replace(w, start=w.end, end=w.start, thickness=w.thickness[::-1]) for w in reversed(self.walls)
        )
        return Shape(dict(reversed(list(self.points.items()))), walls, self.booms)


def _walls(*rows: tuple[str, str, float]) -> tuple[Wall, ...]:
    return tuple(Wall(a, b, (t, t)) for a, b, t in rows)


def symmetric_channel(b: float, h: float, t: float) -> Shape:
    """Web on x = 0, flanges to x = b (midlines)."""
    points = {"a": (b, h), "b": (0.0, h), "c": (0.0, 0.0), "d": (b, 0.0)}
    return Shape(points, _walls(("a", "b", t), ("b", "c", t), ("c", "d", t)), {})


def symmetric_box(b: float, t: float) -> Shape:
    """Square tube, midline b wide."""
    points = {"a": (0.0, 0.0), "b": (b, 0.0), "c": (b, b), "d": (0.0, b)}
    return Shape(points, _walls(("a", "b", t), ("b", "c", t), ("c", "d", t), ("d", "a", t)), {})


def open_branched() -> Shape:
    """An open section with a branch and a tapered leg."""
    points = {"a": (45.0, 96.0), "b": (0.0, 100.0), "c": (0.0, 0.0), "d": (60.0, 8.0)}
    points |= {"e": (62.0, 30.0), "f": (-30.0, 4.0)}
    walls = _walls(("a", "b", 2.0), ("b", "c", 3.0), ("c", "d", 2.5), ("f", "c", 2.5))
    return Shape(points, (*walls, Wall("d", "e", (2.5, 1.5))), {})


def two_cells() -> Shape:
    """Two cells and a fin, with two materials, a shear-only skin and walls of different thickness."""
    points = {"a": (0.0, 0.0), "b": (60.0, -4.0), "c": (104.0, 6.0)}
    points |= {"d": (98.0, 44.0), "e": (62.0, 50.0), "f": (-3.0, 40.0), "g": (130.0, 50.0)}
    walls = (
        Wall("a", "b", (2.0, 2.0)),
        Wall("b", "c", (2.0, 2.0), e=2.9, g=2.8),
        Wall("c", "d", (2.0, 2.0)),
        Wall("d", "e", (2.0, 2.0), direct_share=0.4),
        Wall("e", "f", (2.0, 2.0)),
        Wall("f", "a", (3.0, 3.0), e=0.5, g=0.6),
        Wall("b", "e", (1.5, 1.5)),
        Wall("d", "g", (2.0, 2.0)),
    )
    return Shape(points, walls, {})


def nose_cell() -> Shape:
    """A curved nose closed by a web, with a curved fin and booms."""
    points = {"a": (0.0, 0.0), "b": (6.0, 50.0), "c": (55.0, 4.0)}
    walls = (
        Wall("b", "a", (1.5, 1.5), through=(-28.0, 30.0)),
        Wall("a", "b", (2.5, 2.5)),
        Wall("a", "c", (2.0, 2.0), through=(28.0, -4.0)),
    )
    return Shape(points, walls, {"b": 30.0})


def tapered(shape: Shape) -> Shape:
    """A shape with every wall tapered, straight ones and arcs."""
    walls = tuple(replace(w, thickness=(w.thickness[0], 0.7 * w.thickness[1])) for w in shape.walls)
    return Shape(shape.points, walls, shape.booms)


SHAPES = {"open section": open_branched, "two cells, two materials": two_cells, "curved nose": nose_cell}

# A motion without any special angle.
TURN, SHIFT = 1.7 * cmath.exp(0.6j), 310.0 - 95.0j
