"""Equilibrium of the flows of theory and of the static field of finite elements."""

from __future__ import annotations

from functools import cache, partial

import numpy as np
from numpy.typing import NDArray

import beam_theory
import fe_models
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, Shape, tapered

GROUP = "equilibrium"
ROUND_OFF = 1e-9
UNITS = ("Vx", "Vy", "T")

Array = NDArray[np.float64]


@cache
def by_theory(name: str) -> tuple[Shape, beam_theory.Solution]:
    """A shape, as it is or "tapered", and what classical theory makes of it."""
    plain = name.removeprefix("tapered ")
    shape = SHAPES[plain]() if plain == name else tapered(SHAPES[plain]())
    return shape, beam_theory.solve(shape.theory())


@cache
def by_fe(name: str) -> fe_models.Solution:
    """What finite elements make of a shape."""
    return fe_models.solve(SHAPES[name]().solid())


def slopes(value: dict[str, float]) -> Array:
    """(a, b) of f = a x + b y for unit Vx and unit Vy in columns, from second moments, (2, 2)."""
    xx, yy, xy = (
        value[f"{n}_moment_{i}"] for n, i in (("second", "xx"), ("second", "yy"), ("product", "xy"))
    )
    return np.linalg.inv(np.array([[yy, xy], [xy, xx]]))


MOMENTS = ("centroid_x", "centroid_y", "second_moment_xx", "second_moment_yy", "product_moment_xy")


def resultants(name: str) -> Finding:
    """Flows of theory, summed along midlines that are worked out anew, against the loads they belong to.

    Units Vx and Vy act through theory's shear centre. The torque of walls in no cell is added to unit T's.
    """
    shape, theory = by_theory(name)
    pole = np.array([theory.require("shear_centre_x"), theory.require("shear_centre_y")])
    size = float(np.ptp(np.array(list(shape.points.values())), axis=0).max())
    wanted = {
        "Vx": np.array([1.0, 0.0, 0.0]),
        "Vy": np.array([0.0, 1.0, 0.0]),
        "T": np.array([0.0, 0.0, 1.0]),
    }
    worst = 0.0
    for unit in UNITS:
        flow = theory.unit_flow(unit)
        found = np.zeros(3)
        for wall in shape.walls:
            line = shape.line(wall)
            force = flow.at(wall.name, line.fraction)[:, None] * line.step
            arm = line.place - pole
            moment = float((arm[:, 0] * force[:, 1] - arm[:, 1] * force[:, 0]).sum())
            found += np.array([*force.sum(axis=0), moment])
        found[2] += flow.open_torque
        scale = np.array([1.0, 1.0, size]) if unit != "T" else np.array([1.0 / size, 1.0 / size, 1.0])
        worst = max(worst, float(np.abs((found - wanted[unit]) / scale).max()))
    return Finding(worst, ROUND_OFF, f"Largest miss of force or of torque over the size: {worst:.1e}.")


def balance(name: str) -> Finding:
    """Along every wall and at every point of theory's midlines: dq/ds = -e t f, booms step q by -e A f."""
    shape, theory = by_theory(name)
    value = {n: theory.require(n) for n in MOMENTS}
    centre, slope = np.array([value["centroid_x"], value["centroid_y"]]), slopes(value)
    worst = 0.0
    for i, unit in enumerate(UNITS[:2]):
        flow = theory.unit_flow(unit)
        leaving = {
            p: -a * float((np.array(shape.points[p]) - centre) @ slope[i]) for p, a in shape.booms.items()
        }
        peak = 0.0
        for wall in shape.walls:
            line = shape.line(wall)
            f = (line.place - centre) @ slope[i]
            gained = -float((wall.e * wall.direct_share * line.thickness * f * line.weight).sum())
            first, last = flow.at(wall.name, np.array([0.0, 1.0])).tolist()
            peak = max(peak, abs(first), abs(last))
            worst = max(worst, abs(last - first - gained) / peak)
            leaving[wall.start] = leaving.get(wall.start, 0.0) - first
            leaving[wall.end] = leaving.get(wall.end, 0.0) + last
        worst = max(worst, max(abs(v) for v in leaving.values()) / peak)
    return Finding(
        worst, ROUND_OFF, f"Largest flow left over at a point or along a wall: {worst:.1e} of the peak."
    )


def static_field(name: str) -> Finding:
    """Static fields of torsion and flexure tested with functions of one order more than their own."""
    fe = by_fe(name)
    left = fe_models.imbalance(fe.fields)
    told = ", ".join(f"unit {u} {v:.1e}" for u, v in zip(("T", "Vx", "Vy"), left, strict=True))
    return Finding(float(left.max()), ROUND_OFF, f"Left over of one element's part: {told}.")


# Walls of the open section that end freely at their start, straight and of one thickness.
FREE = ("a-b", "f-c")


def statics() -> Finding:
    """FE flows in walls with a free start against the load on what lies outside, f from FE's own moments."""
    shape, fe = SHAPES["open section"](), by_fe("open section")
    value = {n: fe.quantities[n].known for n in MOMENTS}
    centre, slope = np.array([value["centroid_x"], value["centroid_y"]]), slopes(value)
    worst = 0.0
    for wall in shape.walls:
        span = fe.strips[wall.name]
        if wall.name not in FREE or span is None:
            continue
        at = np.linspace(*span, 5)
        a, b = (np.array(shape.points[p]) for p in (wall.start, wall.end))
        length = float(np.hypot(*(b - a)))
        got = fe.flow_at(wall.name, at).values
        for i in range(2):
            # f at the middle of what lies outside, times its area
            f = (a + 0.5 * at[:, None] * (b - a) - centre) @ slope[i]
            want = -wall.thickness[0] * at * length * f
            worst = max(worst, float(np.abs(got[i] - want).max() / np.abs(want).max()))
        worst = max(worst, float(np.abs(got[2]).max() * length))
    return Finding(worst, 1e-7, f"Largest difference {worst:.1e} of the wall's peak.")


CHECKS = (
    *(
        code_check(
            f"resultants of theory's flows, {name}", GROUP, "theory", partial(resultants, name), quick=True
        )
        for name in SHAPES
    ),
    *(
        code_check(
            f"balance of theory's flows at points and along walls, {name}",
            GROUP,
            "theory",
            partial(balance, name),
            quick=True,
            features={"boom", "arc"} if name == "curved nose" else (),
        )
        for name in SHAPES
    ),
    *(
        code_check(
            f"static field point by point, {name}",
            GROUP,
            "fe",
            partial(static_field, name),
            quick=name != "open section",
            features={"many cells", "two materials"} if "cells" in name else (),
        )
        for name in ("open section", "two cells, two materials")
    ),
    code_check("finite-element flows from statics", GROUP, "fe", statics, quick=True, features={"fins"}),
)
