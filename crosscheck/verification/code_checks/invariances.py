"""Invariances: the same answer however a section is placed, turned, scaled or written down, on both sides."""

from __future__ import annotations

import cmath
from collections.abc import Callable, Mapping
from functools import cache, partial

import beam_theory
import fe_models
from crosscheck.verification.check import Side
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, SHIFT, TURN, Shape

GROUP = "invariances"
# Round-off of theory and of FE's exact quantities, over the quantity or the size.
ROUND_OFF = 1e-9
# What a change of mesh may move estimates by.
ESTIMATES = 2e-5

Values = Mapping[str, float]
Answer = tuple[Values, Values]
SCALARS = {"area": 2, "torsion_constant": 4, "warping_constant": 6}


def theory_answer(shape: Shape) -> Answer:
    """Theory's quantities and no error bars."""
    solved = beam_theory.solve(shape.theory())
    names = [n for n, q in solved.quantities.items() if q.value is not None]
    return {n: solved.require(n) for n in names}, dict.fromkeys(names, 0.0)


def fe_answer(shape: Shape) -> Answer:
    """Finite-element quantities and their half-widths."""
    found = fe_models.solve(shape.solid(), 1e-4).quantities
    return (
        {n: q.known for n, q in found.items() if q.value is not None},
        {n: q.half_width for n, q in found.items() if q.value is not None},
    )


@cache
def start(name: str, answer: Callable[[Shape], Answer]) -> Answer:
    """The answer for a shape as it is told."""
    return answer(SHAPES[name]())


def expected(value: Values, turn: complex, shift: complex, mirror: bool) -> dict[str, float]:
    """Quantities of the section mirrored about x, then turned and scaled, then shifted."""
    size, sign = abs(turn), -1.0 if mirror else 1.0
    axis = turn / size
    found = {n: value[n] * size**p for n, p in SCALARS.items()}
    for what in ("centroid", "shear_centre"):
        z = turn * complex(value[f"{what}_x"], sign * value[f"{what}_y"]) + shift
        found[f"{what}_x"], found[f"{what}_y"] = z.real, z.imag
    # integral of (x + i y)^2 turns by twice the angle
    xx, yy = value["second_moment_xx"], value["second_moment_yy"]
    square = axis**2 * complex(yy - xx, 2.0 * sign * value["product_moment_xy"])
    found["second_moment_xx"] = 0.5 * size**4 * (xx + yy - square.real)
    found["second_moment_yy"] = 0.5 * size**4 * (xx + yy + square.real)
    found["product_moment_xy"] = 0.5 * size**4 * square.imag
    angle = sign * value["principal_angle"] + cmath.phase(axis)
    found["principal_angle"] = cmath.phase(cmath.exp(2j * angle)) / 2.0
    for axis_name in "uv":
        found[f"principal_moment_{axis_name}"] = value[f"principal_moment_{axis_name}"] * size**4
    return found


MOTIONS = {
    "shift": (1.0 + 0.0j, SHIFT, False),
    "turn and scale": (TURN, 0.0j, False),
    "mirror": (1.0 + 0.0j, 0.0j, True),
    "mirror, turn, scale and shift": (TURN.conjugate(), SHIFT, True),
}


def motion(
    name: str, answer: Callable[[Shape], Answer], turn: complex, shift: complex, mirror: bool
) -> Finding:
    """Largest difference of any quantity from what the motion makes of it, over what is allowed."""
    value, half = start(name, answer)
    got, got_half = answer(SHAPES[name]().moved(turn, shift, mirror))
    scaled = {n: half[n] * abs(turn) ** SCALARS.get(n, 0) for n in half}
    for n in ("shear_centre_x", "shear_centre_y"):
        scaled[n] = max(half["shear_centre_x"], half["shear_centre_y"]) * abs(turn) * 2.0
    return _difference(expected(value, turn, shift, mirror), scaled, got, got_half)


def order_and_direction(name: str, answer: Callable[[Shape], Answer]) -> Finding:
    """Every wall turned round, walls and points listed backwards."""
    value, half = start(name, answer)
    got, got_half = answer(SHAPES[name]().rewritten())
    return _difference(value, half, got, got_half)


def units(name: str) -> Finding:
    """Theory in millimetres and in kilometres: powers of the unit alone."""
    value, half = start(name, theory_answer)
    got, got_half = theory_answer(SHAPES[name]().moved(1e-6))
    return _difference(expected(value, 1e-6, 0.0, False), half, got, got_half)


def flow_motion(name: str) -> Finding:
    """Theory's flows of a force along a turned axis: those of its components before the turn."""
    shape = SHAPES[name]()
    turned = shape.moved(TURN, SHIFT)
    before, after = (beam_theory.solve(s.theory()) for s in (shape, turned))
    at, worst, peak = shape.line(shape.walls[0]).fraction, 0.0, 0.0
    force = 0.8 - 0.6j
    along = force * TURN / abs(TURN)
    first = before.flow(beam_theory.Load("before", (force.real, force.imag)))
    second = after.flow(beam_theory.Load("after", (along.real, along.imag)))
    for wall in shape.walls:
        q, moved = first.at(wall.name, at), second.at(wall.name, at) * abs(TURN)
        worst, peak = max(worst, float(abs(q - moved).max())), max(peak, float(abs(q).max()))
    return Finding(worst / peak, ROUND_OFF, f"Largest difference {worst / peak:.1e} of the peak.")


def _difference(want: Values, half: Values, got: Values, got_half: Values) -> Finding:
    """Differences over what both error bars and round-off allow."""
    size = got["area"] ** 0.5 * 10.0
    scale = {n: abs(v) for n, v in want.items()}
    for n in ("centroid_x", "centroid_y", "shear_centre_x", "shear_centre_y"):
        scale[n] = size + abs(want[n])
    scale["product_moment_xy"] = (want["second_moment_xx"] * want["second_moment_yy"]) ** 0.5
    scale["principal_angle"] = 1.0
    worst, where = 0.0, ""
    for n, v in want.items():
        allowed = half[n] + got_half[n] + ROUND_OFF * scale[n]
        if n == "warping_constant" and half[n] > 0.0:
            allowed += ESTIMATES * scale[n]
        if not abs(got[n] - v) <= worst * allowed:
            worst, where = abs(got[n] - v) / allowed, n
    return Finding(
        worst,
        1.0,
        f"Largest difference {worst:.2g} of what round-off and both error bars allow ({where or 'none'}).",
    )


SIDES: tuple[tuple[Side, Callable[[Shape], Answer]], ...] = (("theory", theory_answer), ("fe", fe_answer))
CHECKS = (
    *(
        code_check(
            f"{what}, {name}, {side}",
            GROUP,
            side,
            partial(motion, name, answer, turn, shift, mirror),
            quick=side == "theory" or (name == "open section" and mirror),
        )
        for side, answer in SIDES
        for name in SHAPES
        for what, (turn, shift, mirror) in MOTIONS.items()
    ),
    *(
        code_check(
            f"order and direction of walls, {name}, {side}",
            GROUP,
            side,
            partial(order_and_direction, name, answer),
            quick=side == "theory" or name == "open section",
        )
        for side, answer in SIDES
        for name in SHAPES
    ),
    *(
        code_check(f"unit of length, {name}", GROUP, "theory", partial(units, name), quick=True)
        for name in SHAPES
    ),
    *(
        code_check(
            f"flows of a turned section, {name}", GROUP, "theory", partial(flow_motion, name), quick=True
        )
        for name in SHAPES
    ),
)
