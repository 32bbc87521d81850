"""Level `lumped`: booms made from the walls for the load at hand, skins that carry shear only."""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.errors import LoadError, UndefinedQuantity
from beam_theory.flow import Flow
from beam_theory.lumps import Distribution, Lump, lumps
from beam_theory.midline import midline
from beam_theory.quantity import Check, Quantity
from beam_theory.section import Boom, Load, Section
from beam_theory.shear import shear_flexibility
from beam_theory.solution import Solution, frozen

__all__ = ["LumpedSolution", "lumped"]


@dataclass(frozen=True)
class LumpedSolution(Solution):
    """Boom and skin theory: every load has its own booms, `lumps_of(load)`; torsion is that of the skins.

    Attributes, besides those of Solution
    -------------------------------------
    parts : parts of each wall that booms are made from
    walls : the solution at level "midline", with lengths in [L] as there
    made : solutions made so far by the slope of their load's stress
    """

    parts: int = field(default=1)
    walls: Solution | None = field(default=None, repr=False)
    # Flow and stress of one load ask for the same booms.
    made: dict[tuple[float, float], Solution] = field(default_factory=dict, repr=False, compare=False)

    def lumps_of(self, load: Load) -> tuple[Lump, ...]:
        """Booms made from the walls for the shear of a load."""
        base = self._base
        if load.shear == (0.0, 0.0):
            return ()
        if base.mass.reason is not None:
            raise UndefinedQuantity(f"load {load.name!r}: {base.mass.reason}")
        return lumps(base, _bending(base, base.mass.slope(*load.shear)), self.parts)

    def for_load(self, load: Load) -> Solution:
        """The section of shear-only skins with the booms made for the shear of a load, solved."""
        if load.shear == (0.0, 0.0):
            return self._base
        if load.shear not in self.made:
            self.made[load.shear] = midline(_with_booms(self._base, self.lumps_of(load)), "lumped")
        return self.made[load.shear]

    def flow(self, load: Load) -> Flow:
        """Shear flow of a load in the skins between the booms made for it; stepwise constant.

        The line of action through the shear centre is that of the boom section for this direction of load.
        """
        return self.for_load(load).flow(load)

    @property
    def _base(self) -> Solution:
        """The midline solution that the booms come from."""
        assert self.walls is not None
        return self.walls


def lumped(section: Section, parts: int = 1) -> LumpedSolution:
    """Boom and skin idealisation of a section, each wall in so many parts.

    Notes
    -----
    For straight walls the booms of a stress distribution keep its force and moments, so area, second moments,
    I_w and J equal those of the midline; flows, shear centre and shear areas differ. Second moments use the
    booms of bending about that axis alone, positions and shear areas those of a unit shear.
    """
    if parts < 1 or parts > 200:
        raise LoadError(f"parts: a whole number within 1..200, got {parts}")
    base = midline(section)
    out = dict(base.quantities)
    notes = (*base.notes, f"booms made from each wall in {parts} part(s), skins carry shear only")
    checks: tuple[Check, ...] = ()
    if base.mass.reason is None:
        checks = _quantities(base, parts, out)
    return LumpedSolution(
        "lumped", base.graph, base.mass, base.twist, base.shear, base.warp, base.shear_centre,
        frozen(out), checks, notes, (), parts, base,
    )  # fmt: skip


def _bending(base: Solution, slope: complex) -> Distribution:
    """a x + b y along a wall."""

    def stress(wall: str, at: Floats) -> Floats:
        xy = base.place(wall, at)
        local = xy[:, 0] + 1j * xy[:, 1] - base.mass.centroid
        return np.asarray((np.conj(slope) * local).real)

    return stress


def _with_booms(base: Solution, made: tuple[Lump, ...]) -> Section:
    """The section with shear-only skins, its own booms and those made from its walls."""
    section = base.graph.section
    e = {wall.name: wall.e for wall in section.walls}
    booms = [*section.booms]
    for lump in made:
        if lump.area != 0.0:
            booms.append(Boom(lump.area, wall=lump.wall, at=lump.at, e=e[lump.wall]))
    walls = tuple(replace(wall, direct_share=0.0) for wall in section.walls)
    return replace(section, walls=walls, booms=tuple(booms))


def _quantities(base: Solution, parts: int, out: dict[str, Quantity]) -> tuple[Check, ...]:
    """Replace what booms change; returns the checks of both boom sections."""
    mass = base.mass
    places, weights = _own_booms(base)

    def moments(stress: Distribution) -> tuple[float, float, float]:
        made = lumps(base, stress, parts)
        e = {wall.name: wall.e for wall in base.graph.section.walls}
        xy = [base.place(lump.wall, np.array([lump.at]))[0] for lump in made]
        z = np.array([complex(*p) - mass.centroid for p in xy] + places)
        w = np.array([lump.area * e[lump.wall] for lump in made] + weights)
        return float(w @ z.imag**2), float(w @ z.real**2), float(w @ (z.real * z.imag))

    xx, _, xy = moments(_bending(base, 1j))
    _, yy, _ = moments(_bending(base, 1.0))
    out["second_moment_xx"], out["second_moment_yy"] = Quantity(xx), Quantity(yy)
    out["product_moment_xy"] = Quantity(xy)
    full = replace(mass, xx=xx, yy=yy, xy=xy, frame=None)
    u, v = full.principal
    out["principal_moment_u"], out["principal_moment_v"] = Quantity(u), Quantity(v)
    angle = full.angle
    out["principal_angle"] = Quantity(angle, None if angle is not None else "every axis is principal")
    out["warping_constant"] = Quantity(_warping_constant(base, parts))
    made_x = lumps(base, _bending(base, mass.slope(1.0, 0.0)), parts)
    made_y = lumps(base, _bending(base, mass.slope(0.0, 1.0)), parts)
    try:
        solved_x, solved_y = midline(_with_booms(base, made_x)), midline(_with_booms(base, made_y))
        flow_x, flow_y = solved_x.unit_flow("Vx"), solved_y.unit_flow("Vy")
    except UndefinedQuantity as error:
        for name in ("shear_centre_x", "shear_centre_y", "shear_area_x", "shear_area_y", "shear_coupling"):
            out[name] = Quantity(None, f"booms made from the walls: {error}")
        return ()
    # A unit Vy through S makes x_s about the origin, a unit Vx makes -y_s.
    out["shear_centre_x"] = Quantity(flow_y.resultant()[2])
    out["shear_centre_y"] = Quantity(-flow_x.resultant()[2])
    for name, solved, flow in (("shear_area_x", solved_x, flow_x), ("shear_area_y", solved_y, flow_y)):
        assert solved.shear is not None
        own, _ = shear_flexibility(solved.shear, flow.slope, flow.slope)
        out[name] = Quantity(1.0 / float(own[0]))
    out["shear_coupling"] = Quantity(None, "the booms of Vx and Vy differ: no common energy")
    both = [*solved_x.checks, *solved_y.checks]
    return tuple(check for check in both if "unit V" in check.name or "balance" in check.name)


def _own_booms(base: Solution) -> tuple[list[complex], list[float]]:
    """Places from the centroid and stiffnesses of the section's own booms."""
    graph = base.graph
    has = np.flatnonzero(graph.boom)
    places = [complex(z) - base.mass.centroid for z in graph.node[has]]
    return places, [float(w) for w in graph.boom[has]]


def _warping_constant(base: Solution, parts: int) -> float:
    """Sum of e A omega^2 over booms made for the stress of a bimoment, and own booms."""
    assert base.warp is not None
    made = lumps(base, base.warping_at, parts)
    e = {wall.name: wall.e for wall in base.graph.section.walls}
    total = sum(e[lump.wall] * lump.area * lump.stress**2 for lump in made)
    return float(total + (base.graph.boom * base.warp.node**2).sum())
