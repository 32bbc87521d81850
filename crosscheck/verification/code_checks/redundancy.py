"""Redundancy: key numbers of each side by two ways that share as little as possible."""

from __future__ import annotations

from functools import partial

import numpy as np
from numpy.typing import NDArray

import beam_theory
import fe_models
from crosscheck.verification.code_checks.equilibrium import UNITS, by_fe, by_theory
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, Shape

GROUP = "redundancy"
ROUND_OFF = 1e-9

Array = NDArray[np.float64]


def _ratio(one: float, two: float) -> float:
    return abs(one / two - 1.0)


def theory_moments(name: str) -> Finding:
    """Area, centroid and second moments of theory against sums over midlines that are worked out anew."""
    shape, theory = by_theory(name)
    rows = [
        np.column_stack([line.place, w.e * w.direct_share * line.thickness * line.weight])
        for w in shape.walls
        for line in (shape.line(w),)
    ]
    rows += [np.array([[*shape.points[p], a]]) for p, a in shape.booms.items()]
    x, y, m = np.concatenate(rows).T
    area = m.sum()
    plain = sum(float(line.thickness @ line.weight) for line in map(shape.line, shape.walls))
    plain += sum(shape.booms.values())
    x_c, y_c = (x * m).sum() / area, (y * m).sum() / area
    x, y = x - x_c, y - y_c
    size = float(np.ptp(x) + np.ptp(y))
    want = {
        "area": (area, area),
        "plain_area": (plain, plain),
        "centroid_x": (x_c, size),
        "centroid_y": (y_c, size),
        "second_moment_xx": (y * y @ m, y * y @ m),
        "second_moment_yy": (x * x @ m, x * x @ m),
        "product_moment_xy": (x * y @ m, size**2 * area),
    }
    worst = max(abs(theory.require(n) - v) / s for n, (v, s) in want.items())
    return Finding(float(worst), ROUND_OFF, f"Largest difference {worst:.1e}.")


def theory_torsion(name: str) -> Finding:
    """1/J against the energy of unit T: flows of cells, and t^3/3 of the walls in none.

    The walls that carry none of the cells' flow share what is left of the torque.
    """
    shape, theory = by_theory(name)
    flow = theory.unit_flow("T")
    energy, open_stiffness = 0.0, 0.0
    for wall in shape.walls:
        line = shape.line(wall)
        q = flow.at(wall.name, line.fraction)
        energy += float((q**2 / (wall.g * line.thickness)) @ line.weight)
        if not theory.in_cell(wall.name):
            open_stiffness += wall.g * float((line.thickness**3 / 3.0) @ line.weight)
    if open_stiffness > 0.0:
        energy += flow.open_torque**2 / open_stiffness
    j = theory.require("torsion_constant")
    return Finding(
        _ratio(1.0 / energy, j), ROUND_OFF, f"J {j:.12g}, from the energy of unit T {1.0 / energy:.12g}."
    )


def theory_shear_areas(name: str) -> Finding:
    """A_Vx, A_Vy against the energy of the unit flows, summed along midlines that are worked out anew."""
    shape, theory = by_theory(name)
    worst = 0.0
    for unit, quantity in zip(UNITS, ("shear_area_x", "shear_area_y"), strict=False):
        flow = theory.unit_flow(unit)
        energy = 0.0
        for wall in shape.walls:
            line = shape.line(wall)
            q = flow.at(wall.name, line.fraction)
            energy += float((q**2 / (wall.g * line.thickness)) @ line.weight)
        worst = max(worst, _ratio(1.0 / energy, theory.require(quantity)))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


def theory_warping(name: str) -> Finding:
    """omega from d omega/ds = q_T/(g t) - p, and I_w as the integral of its square, both summed anew."""
    shape, theory = by_theory(name)
    pole = np.array([theory.require("shear_centre_x"), theory.require("shear_centre_y")])
    flow, j = theory.unit_flow("T"), theory.require("torsion_constant")
    worst, square = 0.0, 0.0
    scale = float(np.sqrt(theory.require("warping_constant") / theory.require("area")))
    for wall in shape.walls:
        line = shape.line(wall)
        arm = line.place - pole
        swept = float((arm[:, 0] * line.step[:, 1] - arm[:, 1] * line.step[:, 0]).sum())
        rise = (
            j * float((flow.at(wall.name, line.fraction) / (wall.g * line.thickness)) @ line.weight) - swept
        )
        first, last = theory.warping_at(wall.name, np.array([0.0, 1.0])).tolist()
        worst = max(worst, abs(last - first - rise) / scale)
        omega = theory.warping_at(wall.name, line.fraction)
        square += wall.e * wall.direct_share * float((omega**2 * line.thickness) @ line.weight)
    for p, a in shape.booms.items():
        wall = next(w for w in shape.walls if p in (w.start, w.end))
        square += a * float(theory.warping_at(wall.name, np.array([0.0 if p == wall.start else 1.0]))[0]) ** 2
    worst = max(worst, _ratio(square, theory.require("warping_constant")))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


def theory_warping_by_sectorial_flow() -> Finding:
    """I_w of a chain of walls as the integral of S_omega p, S_omega the sectorial moment (Vlasov).

    Summed in small steps with the trapezium rule, which is second order: 2000 steps a wall.
    """
    shape = SHAPES["open section"]()
    chain = [w for w in shape.walls if w.name != "f-c"]
    plain = Shape(shape.points, tuple(chain), {})
    solved_chain = _theory(plain)
    pole = np.array([solved_chain.require("shear_centre_x"), solved_chain.require("shear_centre_y")])
    u = np.linspace(0.0, 1.0, 2001)
    moment, total = 0.0, 0.0
    for wall in chain:
        a, b = (np.array(shape.points[p]) for p in (wall.start, wall.end))
        length = float(np.hypot(*(b - a)))
        d, arm = (b - a) / length, a - pole
        p = arm[0] * d[1] - arm[1] * d[0]
        t = wall.thickness[0] + u * (wall.thickness[1] - wall.thickness[0])
        part = t * solved_chain.warping_at(wall.name, u)
        steps = 0.5 * (part[1:] + part[:-1]) * length / 2000.0
        s = moment + np.concatenate([[0.0], np.cumsum(steps)])
        moment = float(s[-1])
        total += p * float((0.5 * (s[1:] + s[:-1])).sum() * length / 2000.0)
    iw = solved_chain.require("warping_constant")
    return Finding(_ratio(total, iw), 1e-6, f"I_w {iw:.10g}, by sectorial flow {total:.10g}.")


def _theory(shape: Shape) -> beam_theory.Solution:
    return beam_theory.solve(shape.theory())


def fe_torsion(name: str) -> Finding:
    """J from above by energy, torque and I_p less the energy of warping; from below by energy and torque.

    Energies and torques agree by Galerkin's equations and by the equilibrium of the static field; the
    interval lies between them.
    """
    fe = by_fe(name)
    fields, j = fe.fields, fe.quantities["torsion_constant"]
    high, low = (fields.energy(f) for f in (fields.torsion.kinematic, fields.torsion.static))
    above, below = (fields.torque(f) for f in (fields.torsion.kinematic, fields.torsion.static))
    g = fields.moduli.g[:, None]
    polar = fields.space.integral(g * (fields.space.points**2).sum(axis=-1))
    slope = fields.space.gradient(fields.torsion.potential)
    third = polar - fields.space.integral(g * (slope**2).sum(axis=-1))
    pairs = ((above, high), (third, high), (below, low), (j.known, 0.5 * (low + high)))
    worst = max(_ratio(a, b) for a, b in pairs)
    return Finding(
        worst if low < high else float("inf"),
        _balanced(fe),
        f"J from above {high:.10g}, {above:.10g}, {third:.10g}; from below {low:.10g}, {below:.10g}.",
    )


def _balanced(fe: fe_models.Solution) -> float:
    """Curved sides are met by interpolated ones, so the static field balances to their accuracy only."""
    return 1e-6 if fe.outline.curved else 1e-8


def fe_shear(name: str) -> Finding:
    """Shear centre as the mean of both fields, and shear areas by energy and by work, against the intervals.

    The two torques may differ by no more than the product of both gaps (Cauchy and Schwarz).
    """
    fe = by_fe(name)
    fields = fe.fields
    worst, told = 0.0, []
    for axis, quantity, sign in ((1, "shear_centre_x", 1.0), (0, "shear_centre_y", -1.0)):
        centre, pair = fe.quantities[quantity], fields.flexure[axis]
        ways = [
            float(fields.inertia.centroid[1 - axis]) + sign * fields.torque(f)
            for f in (pair.kinematic, pair.static)
        ]
        gap = float(np.sqrt(fields.gap(fields.torsion).sum() * fields.gap(pair).sum()))
        worst = max(worst, abs(0.5 * sum(ways) - centre.known) / fe.outline.extent)
        if abs(ways[0] - ways[1]) > gap + _balanced(fe) * fe.outline.extent:
            worst = float("inf")
        told.append(f"{quantity} {ways[0]:.9g} and {ways[1]:.9g}")
    for axis, quantity in enumerate(("shear_area_x", "shear_area_y")):
        area, pair = fe.quantities[quantity], fields.flexure[axis]
        f = fields.moduli.e[:, None] * (fields.space.points @ fields.inertia.slopes(*np.eye(2)[axis]))
        least, most = fields.energy(pair.kinematic), fields.energy(pair.static)
        by_work = fields.space.integral(f * fields.space.value(pair.potential))
        worst = max(worst, _ratio(by_work, least), _ratio(area.known, 0.5 * (1.0 / least + 1.0 / most)))
        told.append(f"{quantity} {1.0 / least:.9g} and {1.0 / most:.9g}")
    return Finding(worst, _balanced(fe), f"{'; '.join(told)}.")


def fe_moments(name: str) -> Finding:
    """Area and second moments by the divergence theorem round the outline against sums over the elements."""
    fe = by_fe(name)
    space = fe.fields.space
    area = space.integral(np.ones(space.points.shape[:2]))
    exact = fe.outline.moments(fe.fields.inertia.centroid)
    p = space.points
    second = [space.integral(p[..., i] * p[..., j]) for i, j in ((1, 1), (0, 0), (0, 1))]
    off = max(_ratio(area, exact.area), float(np.abs(np.array(second) - exact.second).max() / max(second)))
    return Finding(off, 1e-6 if fe.outline.curved else ROUND_OFF, f"Largest difference {off:.1e}.")


def fe_warping(name: str) -> Finding:
    """I_w about the shear centre against that about the centroid moved there (parallel axes of omega).

    I_w(S) = I_w(C) - [I_wx I_wy] [Iyy Ixy; Ixy Ixx]^-1 [I_wx I_wy]: the least of all poles.
    """
    fe = by_fe(name)
    fields, iw = fe.fields, fe.quantities["warping_constant"]
    space, e = fields.space, fields.moduli.e[:, None]
    omega = space.value(fields.torsion.potential)
    omega = omega - space.integral(e * omega) / fields.inertia.area
    moments = np.array([space.integral(e * omega * space.points[..., i]) for i in (0, 1)])
    section = fields.inertia
    tensor = np.array([[section.yy, section.xy], [section.xy, section.xx]])
    least = space.integral(e * omega**2) - float(moments @ np.linalg.solve(tensor, moments))
    return Finding(
        _ratio(least, iw.known), 1e-7, f"I_w {iw.known:.10g}, by the least of all poles {least:.10g}."
    )


# Corners of a channel 50 x 100 between midlines, t = 5, and of a box 60 x 40, t = 4, by hand.
LOWER = ((-2.5, -2.5), (50.0, -2.5), (50.0, 2.5), (2.5, 2.5))
CHANNEL = (*LOWER, (2.5, 97.5), (50.0, 97.5), (50.0, 102.5), (-2.5, 102.5))
BOX = ((-2.0, -2.0), (62.0, -2.0), (62.0, 42.0), (-2.0, 42.0))
INSIDE = ((2.0, 2.0), (58.0, 2.0), (58.0, 38.0), (2.0, 38.0))
TWICE = {
    "channel": (
        (CHANNEL,),
        {"a": (50.0, 100.0), "b": (0.0, 100.0), "c": (0.0, 0.0), "d": (50.0, 0.0)},
        ("ab", "bc", "cd"),
        5.0,
    ),
    "box": (
        (BOX, INSIDE),
        {"a": (0.0, 0.0), "b": (60.0, 0.0), "c": (60.0, 40.0), "d": (0.0, 40.0)},
        ("ab", "bc", "cd", "da"),
        4.0,
    ),
}


def entered_twice(name: str) -> Finding:
    """One case from the corners of its drawing and from its midline: every quantity, over both error bars."""
    rings, points, walls, t = TWICE[name]
    drawn = fe_models.solve_solid(fe_models.Solid(tuple(fe_models.ClosedLine(r) for r in rings))).quantities
    section = fe_models.Section(points, tuple(fe_models.Wall(w, w[0], w[1], (t, t)) for w in walls))
    walled = fe_models.solve(section).quantities
    size = float(np.ptp(np.array(rings[0]), axis=0).max())
    worst, where = 0.0, ""
    for quantity, one in walled.items():
        two = drawn[quantity]
        if one.value is None or two.value is None:
            continue
        scale = size if quantity.endswith(("_x", "_y")) and "area" not in quantity else abs(one.value)
        allowed = (
            one.half_width + two.half_width + 1e-9 * max(scale, size**4 if "product" in quantity else 0.0)
        )
        apart = abs(one.value - two.value) / allowed
        if not apart <= worst:
            worst, where = apart, quantity
    return Finding(
        worst, 1.0, f"{len(walled)} quantities; the farthest, {where}, {worst:.2g} of both error bars."
    )


CHECKS = (
    *(
        code_check(f"{what}, {name}, theory", GROUP, "theory", partial(measure, name), quick=True)
        for what, measure in (
            ("area and second moments", theory_moments),
            ("J from its energy", theory_torsion),
            ("shear areas from their energy", theory_shear_areas),
            ("warping function and constant", theory_warping),
        )
        for name in (*SHAPES, "tapered two cells, two materials", "tapered curved nose")
    ),
    code_check(
        "warping constant by sectorial flow, theory",
        GROUP,
        "theory",
        theory_warping_by_sectorial_flow,
        quick=True,
    ),
    *(
        code_check(f"{what}, {name}, finite elements", GROUP, "fe", partial(measure, name), quick=True)
        for what, measure in (
            ("J from both formulations", fe_torsion),
            ("shear centre and shear areas from each field", fe_shear),
            ("area and second moments by the divergence theorem", fe_moments),
            ("warping constant by the least of all poles", fe_warping),
        )
        for name in SHAPES
    ),
    *(
        code_check(
            f"entered twice, {name}",
            GROUP,
            "fe",
            partial(entered_twice, name),
            quick=True,
            features={"outline solid", *({"hole in a solid"} if name == "box" else ())},
        )
        for name in TWICE
    ),
)
