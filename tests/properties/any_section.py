"""Sections with every feature of the file, drawn by hypothesis: a plan that is written down in any placement.

A plan holds the numbers of one section in its own axes; ``text`` writes it as a section file after a turn, a
mirror, a shift and a scale, with walls in another order or direction. Walls join neighbours on a shaken
grid.
"""

from __future__ import annotations

import cmath
from dataclasses import dataclass, field

from hypothesis import strategies as st

PITCH = 100.0
SHAKE = 0.3


@dataclass(frozen=True)
class PlannedWall:
    """A wall between two points; ``bulge`` is the arc's rise over its chord, 0 for a straight wall."""

    name: str
    start: str
    end: str
    thickness: tuple[float, float]
    bulge: float = 0.0
    direct_share: float = 1.0
    material: str = "light"


@dataclass(frozen=True)
class Plan:
    """One section: places as complex numbers, walls, radii, booms, the load's place and components."""

    places: dict[str, complex]
    walls: tuple[PlannedWall, ...]
    radii: dict[str, float]
    booms: dict[str, float]
    load: tuple[complex, complex, float]
    materials: dict[str, tuple[float, float]] = field(default_factory=lambda: {"light": (70000.0, 0.33)})


@dataclass(frozen=True)
class Placement:
    """How a plan is written down: z -> scale (turn (z or its conjugate) + shift); order and direction."""

    turn: complex = 1.0
    shift: complex = 0.0
    mirror: bool = False
    scale: float = 1.0
    backwards: bool = False

    def direction(self, z: complex) -> complex:
        """A vector turned and mirrored, not scaled."""
        return self.turn * (z.conjugate() if self.mirror else z)

    def place(self, z: complex) -> complex:
        """A place moved and scaled."""
        return self.scale * (self.direction(z) + self.shift)


@st.composite
def plans(draw: st.DrawFn, *, booms: bool = True, thinner: float = 1.0) -> Plan:
    """Any plan of 2 to 12 walls; thickness ratios up to 1 : 5."""
    columns, rows = draw(st.sampled_from([(3, 1), (2, 2), (3, 2), (2, 3), (3, 3)]))
    shaken = st.floats(-SHAKE, SHAKE).map(lambda v: round(v, 3))
    places = {
        f"p{i}{j}": PITCH * complex(i + draw(shaken), j + draw(shaken))
        for i in range(columns)
        for j in range(rows)
    }
    lines = [(f"p{i}{j}", f"p{i + 1}{j}") for i in range(columns - 1) for j in range(rows)]
    lines += [(f"p{i}{j}", f"p{i}{j + 1}") for i in range(columns) for j in range(rows - 1)]
    chosen = _connected(draw(st.permutations(lines)), draw(st.integers(0, 4)))
    two = draw(st.booleans())
    thickest = draw(st.sampled_from([2.0, 4.0, 8.0])) * thinner
    walls = tuple(_wall(draw, f"wall {k}", a, b, thickest, two) for k, (a, b) in enumerate(chosen))
    used = sorted({point for line in chosen for point in line})
    meeting = {point: sum(point in line for line in chosen) for point in used}
    radii = {
        p: draw(st.sampled_from([0.5, 1.0])) * thickest
        for p in used
        if meeting[p] == 2 and draw(st.booleans())
    }
    areas = {p: draw(st.sampled_from([30.0, 120.0])) for p in used if booms and draw(st.integers(0, 4)) == 0}
    force = complex(draw(st.integers(-5, 5)), draw(st.integers(1, 5))) * 100.0
    through = PITCH * complex(draw(shaken), draw(shaken))
    materials = {"light": (70000.0, 0.33), "stiff": (210000.0, 0.29)} if two else {"light": (70000.0, 0.33)}
    return Plan(
        {p: places[p] for p in used},
        walls,
        radii,
        areas,
        (force, through, draw(st.integers(-9, 9)) * 1e3),
        materials,
    )


def _connected(order: list[tuple[str, str]], extra: int) -> list[tuple[str, str]]:
    """Lines that join all points without a cell, and a few of the others, which close cells."""
    head: dict[str, str] = {}

    def root(p: str) -> str:
        while head.setdefault(p, p) != p:
            p = head[p]
        return p

    tree, rest = [], []
    for a, b in order:
        if root(a) == root(b):
            rest.append((a, b))
        else:
            head[root(a)] = root(b)
            tree.append((a, b))
    return tree + rest[:extra]


def _wall(draw: st.DrawFn, name: str, a: str, b: str, thickest: float, two: bool) -> PlannedWall:
    t = thickest * draw(st.sampled_from([0.2, 0.5, 0.8, 1.0]))
    end = t * draw(st.sampled_from([1.0, 1.0, 0.7, 1.3]))
    return PlannedWall(
        name,
        *((a, b) if draw(st.booleans()) else (b, a)),
        (t, end),
        draw(st.sampled_from([0.0, 0.0, 0.0, 0.15, -0.1])),
        draw(st.sampled_from([1.0, 1.0, 1.0, 0.5, 0.0])),
        draw(st.sampled_from(["light", "stiff"])) if two else "light",
    )


def text(plan: Plan, at: Placement | None = None) -> str:
    """The plan as a section file."""
    at = at or Placement()
    lines = ['schema = 1\ntitle = "Any section"\nunits = "mm N"\nbase_material = "light"']
    lines += [f"[materials.{name}]\nE = {E!r}\nnu = {nu!r}" for name, (E, nu) in plan.materials.items()]
    lines.append("[points]")
    lines += [f"{name} = {_pair(at.place(z))}" for name, z in plan.places.items()]
    for wall in reversed(plan.walls) if at.backwards else plan.walls:
        start, end, (t, u) = wall.start, wall.end, wall.thickness
        if at.backwards:
            start, end, t, u = end, start, u, t
        lines.append(
            f'[[walls]]\nname = "{wall.name}"\npath = ["{start}", "{end}"]\nmaterial = "{wall.material}"'
        )
        lines.append(f"thickness = {{ from = {at.scale * t!r}, to = {at.scale * u!r} }}")
        lines.append(f"direct_share = {wall.direct_share!r}")
        if wall.bulge:
            a, b = plan.places[wall.start], plan.places[wall.end]
            lines.append(f"arc = {{ through = {_pair(at.place((a + b) / 2 + 1j * wall.bulge * (b - a)))} }}")
    for point, area in plan.booms.items():
        lines.append(f'[[booms]]\nat = "{point}"\narea = {at.scale**2 * area!r}')
    if plan.radii:
        lines.append("[corners]")
        lines += [f"{point} = {{ inner_radius = {at.scale * r!r} }}" for point, r in plan.radii.items()]
    force, through, torque = plan.load
    couple = -torque if at.mirror else torque
    lines.append(f'[[loads]]\nname = "load"\nshear = {_pair(at.direction(force))}')
    lines.append(f"through = {_pair(at.place(through))}\ntorque = {at.scale * couple!r}")
    return "\n".join(lines) + "\n"


def _pair(z: complex) -> str:
    return f"[{z.real!r}, {z.imag!r}]"


@st.composite
def placements(draw: st.DrawFn) -> Placement:
    """Any placement: quarter turns and odd ones, mirrored or not, shifted, to another unit, backwards."""
    angle = draw(st.sampled_from([0.0, 0.4, cmath.pi / 2, -2.3]))
    return Placement(
        cmath.rect(1.0, angle),
        complex(draw(st.integers(-300, 300)), draw(st.integers(-300, 300))),
        draw(st.booleans()),
        draw(st.sampled_from([1.0, 1e-3, 1 / 25.4, 1e3])),
        draw(st.booleans()),
    )
