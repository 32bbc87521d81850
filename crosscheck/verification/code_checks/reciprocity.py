"""Reciprocity (Betti): what one load does to the other equals what the other does to it."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

import numpy as np

import beam_theory
from crosscheck.verification.check import Side
from crosscheck.verification.code_checks.equilibrium import MOMENTS, by_fe, by_theory, slopes
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES

GROUP = "reciprocity"
ROUND_OFF = 1e-9


def flexure_coupling(name: str) -> Finding:
    """Work of unit Vx on the warping of unit Vy and the other way round, and the energy of both together."""
    fe = by_fe(name)
    fields = fe.fields
    space, section, (x, y) = fields.space, fields.inertia, fields.flexure
    work = []
    for load, pair in (((1.0, 0.0), y), ((0.0, 1.0), x)):
        f = fields.moduli.e[:, None] * (space.points @ section.slopes(*load))
        work.append(space.integral(f * space.value(pair.potential)))
    g = fields.moduli.g[:, None]
    together = space.integral((x.kinematic * y.kinematic).sum(axis=-1) / g)
    scale = float(np.sqrt(fields.energy(x.kinematic) * fields.energy(y.kinematic)))
    worst = max(abs(work[0] - work[1]), abs(work[0] - together)) / scale
    return Finding(
        worst,
        1e-8,
        f"Vx on Vy {work[0]:.10g}, Vy on Vx {work[1]:.10g}, energy {together:.10g}, over {scale:.4g}.",
    )


def shear_centre_of_fe(name: str) -> Finding:
    """Torque of the kinematic flexure field against the work of its load on the warping of torsion."""
    fe = by_fe(name)
    fields = fe.fields
    space, section = fields.space, fields.inertia
    omega = space.value(fields.torsion.potential)
    worst, told = 0.0, []
    for load, pair in zip(((1.0, 0.0), (0.0, 1.0)), fields.flexure, strict=True):
        f = fields.moduli.e[:, None] * (space.points @ section.slopes(*load))
        by_work, by_flow = -space.integral(f * omega), fields.torque(pair.kinematic)
        worst = max(worst, abs(by_work - by_flow) / fe.outline.extent)
        told.append(f"{by_flow:.10g} and {by_work:.10g}")
    return Finding(worst, 1e-8, f"Torque of unit Vx and Vy about the centroid, two ways: {'; '.join(told)}.")


def shear_centre_of_theory(name: str) -> Finding:
    """Moments of theory's warping function about its own shear centre: nothing, by Betti's theorem.

    Integrated along midlines that are worked out anew; the miss is told as a distance over the size.
    """
    shape, theory = by_theory(name)
    value = {n: theory.require(n) for n in MOMENTS}
    centre = np.array([value["centroid_x"], value["centroid_y"]])
    moment, mean = np.zeros(2), 0.0
    for wall in shape.walls:
        line = shape.line(wall)
        omega = theory.warping_at(wall.name, line.fraction)
        weight = wall.e * wall.direct_share * line.thickness * line.weight * omega
        moment += weight @ (line.place - centre)
        mean += float(weight.sum())
    for p, a in shape.booms.items():
        wall = next(w for w in shape.walls if p in (w.start, w.end))
        force = a * float(theory.warping_at(wall.name, np.array([0.0 if p == wall.start else 1.0]))[0])
        moment += force * (np.array(shape.points[p]) - centre)
        mean += force
    size = float(np.ptp(np.array(list(shape.points.values())), axis=0).max())
    off = np.abs(moment @ slopes(value)).max() / size
    worst = max(float(off), abs(mean) / (theory.require("area") * size**2))
    return Finding(
        worst, ROUND_OFF, f"Shear centres from flows and from warping lie {off:.1e} of the size apart."
    )


def twist_of_a_line_of_action(name: str) -> Finding:
    """Rate of twist of Vx, Vy through the centroid against the rotation of the centroid under T.

    Under a torque the section turns about the shear centre, so the centroid moves by twist times its
    distance; and the gap of warping round each cell gives the twist of the flows by itself.
    """
    shape, theory = by_theory(name)
    centre = (theory.require("centroid_x"), theory.require("centroid_y"))
    arm = np.array(centre) - [theory.require("shear_centre_x"), theory.require("shear_centre_y")]
    j = theory.require("torsion_constant")
    walls = {w.name: w for w in shape.walls}
    worst = 0.0
    for force, moves in (((1.0, 0.0), -arm[1]), ((0.0, 1.0), arm[0])):
        flow = theory.flow(beam_theory.Load("unit", force, through=centre))
        scale = float(np.hypot(*arm)) / j
        worst = max(worst, abs(flow.twist - moves / j) / scale)
        for loop, area in zip(theory.cells, theory.cell_areas.tolist(), strict=True):
            gap = 0.0
            for w, sign in loop:
                line = shape.line(walls[w])
                gap += sign * float((flow.at(w, line.fraction) / (walls[w].g * line.thickness)) @ line.weight)
            worst = max(worst, abs(gap / (2.0 * area) - moves / j) / scale)
    return Finding(worst, ROUND_OFF, f"Largest difference of the rates of twist: {worst:.1e}.")


THICK = ("open section", "two cells, two materials")
KINDS: tuple[tuple[str, Side, Callable[[str], Finding], tuple[str, ...], frozenset[str]], ...] = (
    ("flexure in x and in y", "fe", flexure_coupling, THICK, frozenset()),
    ("shear centre from flow and from warping, fe", "fe", shear_centre_of_fe, THICK, frozenset()),
    ("shear centre from flow and from warping, theory", "theory", shear_centre_of_theory, tuple(SHAPES),
     frozenset()),
    ("twist of shear through the centroid, theory", "theory", twist_of_a_line_of_action, tuple(SHAPES),
     frozenset({"load on a line"})),
)  # fmt: skip
CHECKS = tuple(
    code_check(f"{what}, {name}", GROUP, side, partial(measure, name), quick=True, features=features)
    for what, side, measure, names, features in KINDS
    for name in names
)
