"""Section builders for the tests of fe_models, and what the tests measure on a section by themselves."""

from __future__ import annotations

import cmath
import math
from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from fe_models import Boom, Section, Wall

Place = tuple[float, float]


def polyline(places: Sequence[Place], thickness: Sequence[float] | float, closed: bool = False) -> Section:
    """Straight walls from place to place; points p0, p1, ..., walls w0, w1, ..."""
    points = {f"p{i}": (float(x), float(y)) for i, (x, y) in enumerate(places)}
    count = len(places) if closed else len(places) - 1
    t = [float(thickness)] * count if isinstance(thickness, (int, float)) else [float(v) for v in thickness]
    walls = tuple(Wall(f"w{i}", f"p{i}", f"p{(i + 1) % len(places)}", (t[i], t[i])) for i in range(count))
    return Section(points, walls)


def joined(points: Mapping[str, Place], walls: Sequence[tuple[str, str, float]]) -> Section:
    """Straight walls between named points, each (start, end, thickness), named start-end."""
    return Section(dict(points), tuple(Wall(f"{a}-{b}", a, b, (t, t)) for a, b, t in walls))


def channel(b: float, h: float, t: float) -> Section:
    """Web on x = 0 from 0 to h, flanges to x = b (midlines): w0 top flange, w1 web, w2 bottom flange."""
    return polyline([(b, h), (0.0, h), (0.0, 0.0), (b, 0.0)], t)


def rectangle(b: float, t: float) -> Section:
    """One horizontal wall of length b and thickness t."""
    return polyline([(0.0, 0.0), (b, 0.0)], t)


def box(b: float, h: float, t_b: float, t_h: float | None = None) -> Section:
    """Rectangular tube, midline b wide and h high: w0 bottom, w1 right, w2 top, w3 left."""
    t_h = t_b if t_h is None else t_h
    return polyline([(0.0, 0.0), (b, 0.0), (b, h), (0.0, h)], [t_b, t_h, t_b, t_h], closed=True)


def two_cell(b1: float, b2: float, h: float, t: float) -> Section:
    """Cells b1 and b2 wide side by side, uniform thickness."""
    points = {"a": (0.0, 0.0), "b": (b1, 0.0), "c": (b1 + b2, 0.0)}
    points |= {"d": (b1 + b2, h), "e": (b1, h), "f": (0.0, h)}
    return joined(points, [(p, q, t) for p, q in ("ab", "bc", "cd", "de", "ef", "fa", "be")])


def triangular_cell(scale: float = 1.0, turn: float = 1.0) -> Section:
    """Cell (0,0), (300,0), (0,160) with thickness 3, 2, 5; ``turn`` multiplies the thicknesses."""
    places = [(0.0, 0.0), (300.0 * scale, 0.0), (0.0, 160.0 * scale)]
    return polyline(places, [3.0 * turn, 2.0 * turn, 5.0 * turn], closed=True)


def lopsided_cell() -> Section:
    """One cell without any symmetry and four thicknesses."""
    places = [(0.0, 0.0), (90.0, -12.0), (110.0, 55.0), (-15.0, 40.0)]
    return polyline(places, [4.0, 2.5, 3.0, 6.0], closed=True)


def bow_tie() -> Section:
    """Two triangular cells of different size that share one point only."""
    points = {"m": (0.0, 0.0), "a": (60.0, -20.0), "b": (55.0, 35.0), "c": (-40.0, 30.0), "d": (-45.0, -25.0)}
    walls = [("m", "a", 3.0), ("a", "b", 2.0), ("b", "m", 3.0), ("m", "c", 2.0), ("c", "d", 4.0)]
    return joined(points, [*walls, ("d", "m", 2.0)])


def four_cells() -> Section:
    """Four cells without symmetry round a middle point and a fin."""
    points = {"m": (2.0, 3.0), "e": (60.0, 0.0), "n": (0.0, 50.0), "w": (-45.0, 5.0), "s": (5.0, -40.0)}
    points |= {"ne": (55.0, 48.0), "nw": (-50.0, 44.0), "sw": (-42.0, -38.0), "se": (58.0, -45.0)}
    points |= {"fin": (90.0, 10.0)}
    ring = ["e", "ne", "n", "nw", "w", "sw", "s", "se"]
    walls = [(p, q, 1.5 + 0.25 * i) for i, (p, q) in enumerate(zip(ring, [*ring[1:], "e"], strict=True))]
    walls += [("m", p, 2.0) for p in ("e", "n", "w", "s")]
    return joined(points, [*walls, ("e", "fin", 3.0)])


def mixed_cells() -> Section:
    """Two cells without symmetry whose walls differ in both moduli and in their direct share."""
    plain = two_cell(60.0, 35.0, 45.0, 3.0)
    e, g, share = (
        (1.0, 2.5, 0.7, 1.0, 3.0, 1.0, 0.5),
        (1.0, 0.4, 2.0, 1.0, 1.5, 1.0, 3.0),
        (1, 1, 0.4, 1, 1, 0, 1),
    )
    walls = tuple(replace(w, e=e[i], g=g[i], direct_share=float(share[i])) for i, w in enumerate(plain.walls))
    return replace(plain, walls=walls, points=dict(plain.points) | {"d": (102.0, 38.0)})


def boomed_cells() -> Section:
    """Six cells without symmetry of two materials, booms at joints and on walls."""
    shake = np.random.default_rng(11).uniform(-12.0, 12.0, (4, 3, 2))
    points = {
        f"{i}{j}": (60.0 * i + float(shake[i, j, 0]), 50.0 * j + float(shake[i, j, 1]))
        for i in range(4)
        for j in range(3)
    }
    lines = [(f"{i}{j}", f"{i + 1}{j}") for i in range(3) for j in range(3)]
    lines += [(f"{i}{j}", f"{i}{j + 1}") for i in range(4) for j in range(2)]
    walls = tuple(
        Wall(
            f"w{k}",
            a,
            b,
            (2.0, 2.0),
            e=2.9 if k % 3 == 0 else 1.0,
            g=2.6 if k % 3 == 0 else 1.0,
        )
        for k, (a, b) in enumerate(lines)
    )
    booms = (Boom(40.0, "00"), Boom(95.0, "21"), Boom(60.0, "32"), Boom(25.0, wall="w4", at=0.4))
    return Section(points, walls, booms=booms)


def _lipped(d: float, t: float) -> Section:
    places = [(0.45 * d, 0.8 * d), (0.45 * d, d), (0.0, d), (0.0, 0.0), (0.45 * d, 0.0), (0.45 * d, 0.3 * d)]
    return polyline(places, t)


def _zed(d: float, t: float) -> Section:
    return polyline([(-0.5 * d, d), (0.0, d), (0.0, 0.0), (0.6 * d, 0.0)], [t, 0.7 * t, 1.4 * t])


def _slanted_angle(d: float, t: float) -> Section:
    a = math.radians(70.0)
    return polyline([(d, 0.0), (0.0, 0.0), (0.8 * d * math.cos(a), 0.8 * d * math.sin(a))], t)


def _tee(d: float, t: float) -> Section:
    points = {"l": (-0.4 * d, d), "m": (0.0, d), "r": (0.4 * d, d), "s": (0.0, 0.0)}
    return joined(points, [("l", "m", t), ("m", "r", t), ("m", "s", t)])


def _cruciform(d: float, t: float) -> Section:
    points = {"m": (0.0, 0.0), "e": (0.5 * d, 0.0), "n": (0.0, 0.5 * d)}
    points |= {"w": (-0.5 * d, 0.0), "s": (0.0, -0.5 * d)}
    return joined(points, [("m", p, t) for p in "enws"])


def _unequal_i(d: float, t: float) -> Section:
    points = {"a": (-0.4 * d, 0.0), "m": (0.0, 0.0), "b": (0.4 * d, 0.0)}
    points |= {"c": (-0.25 * d, d), "n": (0.0, d), "d": (0.25 * d, d)}
    walls = [("a", "m", t), ("m", "b", t), ("m", "n", 0.7 * t), ("c", "n", 0.8 * t), ("n", "d", 0.8 * t)]
    return joined(points, walls)


def _finned_box(d: float, t: float) -> Section:
    points = {"a": (0.0, 0.0), "b": (1.2 * d, 0.0), "c": (1.2 * d, d), "d": (0.0, d)}
    points |= {"f": (1.8 * d, d), "g": (-0.5 * d, 0.0)}
    walls = [("a", "b", t), ("b", "c", t), ("c", "d", 1.2 * t), ("d", "a", t), ("c", "f", t), ("g", "a", t)]
    return joined(points, walls)


def _triangle(d: float, t: float) -> Section:
    return polyline([(0.0, 0.0), (1.875 * d, 0.0), (0.0, d)], [0.6 * t, 0.4 * t, t], closed=True)


def _tapering_three_cell(d: float, t: float) -> Section:
    low = {"a": (0.0, 0.0), "b": (0.9 * d, 0.08 * d), "c": (1.9 * d, 0.16 * d), "d": (2.7 * d, 0.25 * d)}
    top = {"e": (2.7 * d, 0.75 * d), "f": (1.9 * d, 0.85 * d), "g": (0.9 * d, 0.95 * d), "h": (0.0, d)}
    walls = [(p, q, t) for p, q in ("ab", "bc", "cd", "ef", "fg", "gh")]
    walls += [("d", "e", 0.8 * t), ("c", "f", 0.6 * t), ("b", "g", 0.7 * t), ("h", "a", t)]
    return joined(low | top, walls)


SHAPES = {
    "channel": lambda d, t: channel(0.5 * d, d, t),
    "lipped channel, unequal lips": _lipped,
    "zed, three thicknesses": _zed,
    "unequal angle": lambda d, t: polyline([(0.6 * d, 0.0), (0.0, 0.0), (0.0, d)], t),
    "angle, legs at 70 degrees": _slanted_angle,
    "tee": _tee,
    "cruciform": _cruciform,
    "unequal I": _unequal_i,
    "square box": lambda d, t: box(d, d, t),
    "box with two fins": _finned_box,
    "triangular cell, three thicknesses": _triangle,
    "two-cell box": lambda d, t: two_cell(d, 0.7 * d, d, t),
    "tapering three-cell box": _tapering_three_cell,
}


def shape(name: str, ratio: float) -> Section:
    """One of SHAPES, 100 deep, with depth over thickness ``ratio`` (of the wall called t above)."""
    return SHAPES[name](100.0, 100.0 / ratio)


def moved(section: Section, turn: complex = 1.0, shift: complex = 0.0, mirror: bool = False) -> Section:
    """The section mirrored about the x axis, then turned and scaled by ``turn``, then shifted."""
    size = abs(turn)

    def at(place: Place) -> Place:
        z = complex(*place)
        z = turn * (z.conjugate() if mirror else z) + shift
        return z.real, z.imag

    walls = tuple(
        replace(
            w,
            thickness=(w.thickness[0] * size, w.thickness[1] * size),
            arc_through=None if w.arc_through is None else at(w.arc_through),
        )
        for w in section.walls
    )
    return replace(section, points={name: at(xy) for name, xy in section.points.items()}, walls=walls)


def rewritten(section: Section) -> Section:
    """The same section with every wall turned round and points and walls listed backwards."""
    walls = tuple(
        replace(w, start=w.end, end=w.start, thickness=w.thickness[::-1]) for w in reversed(section.walls)
    )
    return replace(section, points=dict(reversed(list(section.points.items()))), walls=walls)


def quarter_turn() -> complex:
    """A rotation by an angle at which no wall of the shapes lies along an axis."""
    return cmath.exp(0.6j)


def random_graph(seed: int, thinnest: float = 0.003, thickest: float = 0.12) -> Section:
    """Walls of different thickness on a jittered grid: a tree with some or all of the other edges."""
    rng = np.random.default_rng(seed)
    columns, rows = int(rng.integers(2, 4)), int(rng.integers(2, 4))
    at = {
        (i, j): (i + rng.uniform(-0.2, 0.2), j + rng.uniform(-0.2, 0.2))
        for i in range(columns)
        for j in range(rows)
    }
    edges = [(p, (p[0] + i, p[1] + j)) for p in at for i, j in ((1, 0), (0, 1)) if (p[0] + i, p[1] + j) in at]
    more = rng.choice([0.0, 0.4, 1.0])
    group = {p: p for p in at}
    walls = []
    for k in rng.permutation(len(edges)).tolist():
        a, b = edges[k]
        if group[a] == group[b] and rng.random() >= more:
            continue
        group = {p: group[a] if g == group[b] else g for p, g in group.items()}
        t = 100.0 * float(np.exp(rng.uniform(np.log(thinnest), np.log(thickest))))
        walls.append((str(a), str(b), t) if rng.random() < 0.5 else (str(b), str(a), t))
    return joined({str(p): (100.0 * x, 100.0 * y) for p, (x, y) in at.items()}, walls)
