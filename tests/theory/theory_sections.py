"""Small section builders for the tests of beam_theory."""

from __future__ import annotations

import cmath
import math
from collections.abc import Sequence

import numpy as np

from beam_theory import Boom, Cut, Section, Wall

Place = tuple[float, float]


def polyline(places: Sequence[Place], thickness: Sequence[float] | float, closed: bool = False) -> Section:
    """Straight walls from place to place; points p0, p1, ..., walls w0, w1, ..."""
    points = {f"p{i}": (float(x), float(y)) for i, (x, y) in enumerate(places)}
    count = len(places) if closed else len(places) - 1
    t = [float(thickness)] * count if isinstance(thickness, (int, float)) else [float(v) for v in thickness]
    walls = tuple(Wall(f"w{i}", f"p{i}", f"p{(i + 1) % len(places)}", (t[i], t[i])) for i in range(count))
    return Section(points, walls)


def joined(points: dict[str, Place], walls: Sequence[tuple[str, str, float]], **extra: object) -> Section:
    """Straight walls between named points, each (start, end, thickness), named start-end."""
    made = tuple(Wall(f"{a}-{b}", a, b, (t, t)) for a, b, t in walls)
    return Section(points, made, **extra)  # type: ignore[arg-type]


def channel(b: float, h: float, t: float) -> Section:
    """Web on x = 0 from -h/2 to h/2, flanges to x = b."""
    return polyline([(b, -h / 2), (0, -h / 2), (0, h / 2), (b, h / 2)], t)


def arc_section(radius: float, half_angle: float, t: float, pieces: int = 1) -> Section:
    """Arc about the origin, symmetric about the positive x axis, in one wall or several."""
    at = np.linspace(-half_angle, half_angle, 2 * pieces + 1)
    place = [(radius * math.cos(a), radius * math.sin(a)) for a in at]
    points = {f"p{i}": place[2 * i] for i in range(pieces + 1)}
    walls = tuple(
        Wall(f"w{i}", f"p{i}", f"p{i + 1}", (t, t), arc_through=place[2 * i + 1]) for i in range(pieces)
    )
    return Section(points, walls)


def d_cell(radius: float, t_arc: float, t_web: float) -> Section:
    """Half circle to the right of x = 0, web on x = 0."""
    points = {"low": (0.0, -radius), "top": (0.0, radius)}
    return Section(
        points,
        (
            Wall("nose", "low", "top", (t_arc, t_arc), arc_through=(radius, 0.0)),
            Wall("web", "top", "low", (t_web, t_web)),
        ),
    )


def random_section(seed: int) -> Section:
    """A connected plane graph on a jittered grid: open, closed or mixed; tapers, arcs, weights and booms."""
    rng = np.random.default_rng(seed)
    columns, rows = int(rng.integers(2, 5)), int(rng.integers(2, 4))
    place = {
        (i, j): complex(i, j) + complex(*rng.uniform(-0.18, 0.18, 2))
        for i in range(columns)
        for j in range(rows)
    }
    edges = [((i, j), (i + 1, j)) for i in range(columns - 1) for j in range(rows)]
    edges += [((i, j), (i, j + 1)) for i in range(columns) for j in range(rows - 1)]
    straight = len(edges)
    for i in range(columns - 1):
        for j in range(rows - 1):
            if rng.random() < 0.4:
                edges.append(((i, j), (i + 1, j + 1)) if rng.random() < 0.5 else ((i + 1, j), (i, j + 1)))
    kept = _connected(rng, list(place), edges)
    size = 10.0 ** rng.uniform(-2, 3)
    turn = cmath.exp(1j * rng.uniform(0, 2 * math.pi)) * size
    shift = complex(*rng.uniform(-3, 3, 2)) * size
    weighted, share = rng.random() < 0.5, rng.random() < 0.4
    xy = {node: turn * z + shift for node, z in place.items()}
    walls: list[Wall] = []
    for number in kept:
        a, b = edges[number]
        if rng.random() < 0.5:
            a, b = b, a
        bows: list[float | None] = [None]
        if number < straight and rng.random() < 0.4:
            bow = rng.uniform(0.005, 0.07) * rng.choice([-1, 1])
            bows = [bow, -bow] if rng.random() < 0.3 else [bow]
        for k, bow_k in enumerate(bows):
            t = size * 10.0 ** rng.uniform(-3, -1, 2)
            if rng.random() < 0.5:
                t[1] = t[0]
            through = None if bow_k is None else 0.5 * (xy[a] + xy[b]) + 1j * bow_k * (xy[b] - xy[a])
            e, g = 10.0 ** rng.uniform(-1, 1, 2) if weighted else (1.0, 1.0)
            part = float(rng.choice([0.0, 0.5, 1.0])) if share else 1.0
            name = f"w{number}" + "abc"[k]
            where = None if through is None else (through.real, through.imag)
            walls.append(Wall(name, str(a), str(b), (t[0], t[1]), where, float(e), float(g), part))
    points = {str(node): (z.real, z.imag) for node, z in xy.items()}
    used = sorted({end for wall in walls for end in (wall.start, wall.end)})
    booms: list[Boom] = []
    if rng.random() < 0.5 or share:
        for name in rng.choice(used, size=min(4, len(used)), replace=False):
            booms.append(Boom(float(size**2 * rng.uniform(0.01, 0.1)), point=str(name)))
        for wall in walls[:2]:
            booms += [
                Boom(float(size**2 * rng.uniform(0.01, 0.1)), wall=wall.name, at=float(at), e=2.0)
                for at in rng.uniform(0.05, 0.95, 2)
            ]
    return Section(points, tuple(walls), tuple(booms))


def _connected(
    rng: np.random.Generator,
    nodes: list[tuple[int, int]],
    edges: list[tuple[tuple[int, int], tuple[int, int]]],
) -> list[int]:
    """Numbers of the edges of a random tree and some more."""
    group = {node: node for node in nodes}

    def root(node: tuple[int, int]) -> tuple[int, int]:
        while group[node] != node:
            node = group[node]
        return node

    more = rng.choice([0.0, 0.3, 0.7, 1.0])
    kept: list[int] = []
    for number in rng.permutation(len(edges)).tolist():
        a, b = root(edges[number][0]), root(edges[number][1])
        if a != b:
            group[a] = b
            kept.append(number)
        elif rng.random() < more:
            kept.append(number)
    return sorted(kept)


def moved(section: Section, turn: complex = 1.0, shift: complex = 0.0, mirror: bool = False) -> Section:
    """The section mirrored about the x axis, then turned and scaled by `turn`, then shifted."""
    size = abs(turn)

    def at(place: Place) -> Place:
        z = complex(*place)
        z = turn * (z.conjugate() if mirror else z) + shift
        return z.real, z.imag

    walls = tuple(
        Wall(
            w.name,
            w.start,
            w.end,
            (w.thickness[0] * size, w.thickness[1] * size),
            None if w.arc_through is None else at(w.arc_through),
            w.e,
            w.g,
            w.direct_share,
        )
        for w in section.walls
    )
    booms = tuple(Boom(b.area * size**2, b.point, b.wall, b.at, b.e) for b in section.booms)
    return Section({name: at(xy) for name, xy in section.points.items()}, walls, booms, section.cuts)


def reversed_walls(section: Section) -> Section:
    """Every wall's own direction turned round, and the order of the walls too."""
    walls = tuple(
        Wall(w.name, w.end, w.start, w.thickness[::-1], w.arc_through, w.e, w.g, w.direct_share)
        for w in reversed(section.walls)
    )
    booms = tuple(
        Boom(b.area, b.point, b.wall, None if b.at is None else 1.0 - b.at, b.e) for b in section.booms
    )
    cuts = tuple(Cut(c.wall, 1.0 - c.at) for c in section.cuts)
    return Section(section.points, walls, booms, cuts)
