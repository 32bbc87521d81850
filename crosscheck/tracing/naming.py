"""Names a person would give: walls by where they are and what they do, points after them, thicknesses."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components

from crosscheck.tracing.model import TracedWall, WallModel

# A wall with a free end that is shorter than this share of the one it hangs on is a lip.
LIP = 0.4
# Distance from the middle, over the overall dimension, up to which a wall is a middle one.
MIDDLE = 0.1


@dataclass(frozen=True)
class Thickness:
    """A thickness that walls share: name of its parameter and value [L]."""

    name: str
    value: float


@dataclass(frozen=True)
class Names:
    """Names of walls and points in order, and for each wall the numbers of its thicknesses at both ends."""

    walls: tuple[str, ...]
    points: tuple[str, ...]
    thicknesses: tuple[Thickness, ...]
    thickness_of: tuple[tuple[int, int], ...]


def names(model: WallModel) -> Names:
    """Names for everything in a wall model."""
    nouns = _nouns(model)
    walls = _placed(model, nouns)
    thicknesses, thickness_of = _thicknesses(model, nouns, walls)
    return Names(walls, _points(model, walls), thicknesses, thickness_of)


def _nouns(model: WallModel) -> list[str]:
    """What each wall is: web, skin, flange, lip, leg, bar."""
    walls = model.walls
    degree = Counter(k for w in walls for k in (w.start, w.end))
    if len(walls) == 1:
        return ["bar" if walls[0].through is None else "shell"]
    in_cell = _on_cycles(model)
    free = [degree[w.start] == 1 or degree[w.end] == 1 for w in walls]
    if len(walls) == 2 and all(free):
        return ["leg", "leg"]
    if len(degree) == len(walls) + 1 and sum(free) == len(walls):
        return ["arm" if len(walls) > 3 else _tee(w, walls) for w in walls]
    inner = [i for i in range(len(walls)) if not free[i] and not in_cell[i]]
    web = max(inner, key=lambda i: walls[i].length, default=None)
    upright = web is None or _upright(walls[web])
    made = []
    for i, wall in enumerate(walls):
        if in_cell[i]:
            noun = "nose" if wall.through is not None else "web" if _upright(wall) else "skin"
            made.append(noun if wall.through is None or len(walls) < 6 else "skin")
        elif not free[i]:
            made.append("web" if _upright(wall) == upright and not any(in_cell) else "flange")
        else:
            held = wall.start if degree[wall.end] == 1 else wall.end
            beside = [w.length for k, w in enumerate(walls) if k != i and held in (w.start, w.end)]
            lip = degree[held] == 2 and wall.length < LIP * max(beside) and len(inner) > 1
            made.append("lip" if lip else "fin" if any(in_cell) else "flange")
    return made


def _tee(wall: TracedWall, walls: Sequence[TracedWall]) -> str:
    """Of three walls from one joint: the two in line are flanges."""
    own = wall.fitted.direction
    return "flange" if any(w is not wall and abs(own @ w.fitted.direction) > 0.97 for w in walls) else "web"


def _upright(wall: TracedWall) -> bool:
    chord = wall.fitted.at(wall.fitted.span[1]) - wall.fitted.at(wall.fitted.span[0])
    return bool(abs(chord[1]) > abs(chord[0]))


def _on_cycles(model: WallModel) -> list[bool]:
    """True for walls without which the section still hangs together: those of cells."""
    ends = np.array([(w.start, w.end) for w in model.walls])
    n = len(model.points)
    made = []
    for i in range(len(ends)):
        rest = np.delete(ends, i, axis=0)
        graph = coo_matrix((np.ones(len(rest)), rest.T), shape=(n, n))
        part = connected_components(graph, directed=False)[1]
        made.append(bool(part[ends[i, 0]] == part[ends[i, 1]]))
    return made


def _placed(model: WallModel, nouns: Sequence[str]) -> tuple[str, ...]:
    """Nouns with where the wall lies, unique."""
    middles = np.array([w.fitted.at(0.5 * sum(w.fitted.span)) for w in model.walls])
    places = np.array([p.place for p in model.points])
    low, high = (
        np.minimum(places.min(axis=0), middles.min(axis=0)),
        np.maximum(places.max(axis=0), middles.max(axis=0)),
    )
    off = (middles - 0.5 * (low + high)) / max(float((high - low).max()), 1e-300)
    words = []
    for i, wall in enumerate(model.walls):
        across, up = ("left", "right"), ("lower", "upper")
        x = "" if abs(off[i, 0]) < MIDDLE else across[int(off[i, 0] > 0.0)]
        y = "" if abs(off[i, 1]) < MIDDLE else up[int(off[i, 1] > 0.0)]
        words.append((x or "middle", y) if _upright(wall) else (y or "middle", x))
    made = list(nouns)
    for depth in (1, 2):
        count = Counter(made)
        made = [
            name if count[name] == 1 else " ".join([*filter(None, words[i][:depth]), nouns[i]])
            for i, name in enumerate(made)
        ]
    return tuple(_unique(made))


def _unique(made: Sequence[str], sign: str = " ") -> list[str]:
    """Names told apart by a number where they are the same."""
    count, seen = Counter(made), Counter[str]()
    out = []
    for name in made:
        seen[name] += 1
        out.append(name if count[name] == 1 else f"{name}{sign}{seen[name]}")
    return out


def _points(model: WallModel, walls: Sequence[str]) -> tuple[str, ...]:
    """Points: free ends after their wall, the others by kind and number."""
    made = []
    for i, point in enumerate(model.points):
        beside = [walls[k] for k, w in enumerate(model.walls) if i in (w.start, w.end)]
        made.append(f"{beside[0]} end" if point.kind == "free end" else point.kind)
    return tuple(name.replace(" ", "_") for name in _unique(made))


def _thicknesses(
    model: WallModel, nouns: Sequence[str], walls: Sequence[str]
) -> tuple[tuple[Thickness, ...], tuple[tuple[int, int], ...]]:
    """Nearly equal thicknesses as one parameter."""
    share = max(0.005, model.tolerance)
    values = [(t, i, k) for i, w in enumerate(model.walls) for k, t in enumerate(w.thickness)]
    lengths = [w.length for w in model.walls]
    groups: list[list[tuple[float, int, int]]] = []
    for value in sorted(values):
        if groups and value[0] <= groups[-1][0][0] * (1.0 + share):
            groups[-1].append(value)
        else:
            groups.append([value])
    made, number = [], {}
    names_made = []
    for n, group in enumerate(groups):
        weight = np.array([lengths[i] for _, i, _ in group])
        mean = float(np.array([t for t, _, _ in group]) @ weight / weight.sum())
        made.append(mean)
        names_made.append(_thickness_name(model, group, nouns, walls, len(groups)))
        for _, i, k in group:
            number[i, k] = n
    unique = _unique(names_made)
    kept = tuple(
        Thickness(f"{name} thickness".replace(" ", "_"), value)
        for name, value in zip(unique, made, strict=True)
    )
    return kept, tuple((number[i, 0], number[i, 1]) for i in range(len(model.walls)))


def _thickness_name(
    model: WallModel,
    group: Sequence[tuple[float, int, int]],
    nouns: Sequence[str],
    walls: Sequence[str],
    groups: int,
) -> str:
    whole = sorted({i for _, i, _ in group})
    if groups == 1:
        return "wall"
    tapered = all(abs(model.walls[i].fitted.slope) > 0.0 for i in whole)
    kinds = {nouns[i] for i in whole}
    if len(whole) == 1:
        base = walls[whole[0]]
    elif len(kinds) == 1:
        base = next(iter(kinds))
    else:
        base = walls[max(whole, key=lambda i: model.walls[i].length)]
    if tapered:
        free = {
            model.points[(model.walls[i].start, model.walls[i].end)[k]].kind == "free end"
            for _, i, k in group
        }
        base += " end" if free == {True} else " root" if free == {False} else ""
    return base
