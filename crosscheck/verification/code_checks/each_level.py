"""Identities of each level of theory: flows carry their loads, a bend is an arc, skins carry even flows."""

from __future__ import annotations

import cmath
import math
from dataclasses import replace
from decimal import Decimal, localcontext
from functools import partial
from itertools import permutations

import numpy as np
from numpy.polynomial import Polynomial

import beam_theory
from beam_theory.corner_terms import FREE_END
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import (
    SHAPES,
    Shape,
    Wall,
    symmetric_box,
    symmetric_channel,
    tapered,
)

GROUP = "levels of theory"
ROUND_OFF = 1e-9
LOADS = (
    beam_theory.Load("Vx", (1.0, 0.0)),
    beam_theory.Load("Vy", (0.0, 1.0)),
    beam_theory.Load("T", torque=30.0),
    beam_theory.Load("gust", (0.8, -1.2), (7.0, -4.0), 40.0),
)


def resultants(name: str) -> Finding:
    """Resultants of flows at every level; without a place, the torque is that about the shear centre."""
    worst = 0.0
    section = tapered(SHAPES[name]()).theory()
    for level in beam_theory.LEVELS:
        solved = beam_theory.solve(section, level)
        for load in LOADS:
            carrying = solved.for_load(load)
            pole = carrying.shear_centre
            assert pole is not None
            x, y = (pole.real, pole.imag) if load.through is None else load.through
            vx, vy = load.shear
            got = solved.flow(load).resultant()
            want = (vx, vy, load.torque + x * vy - y * vx)
            size = 10.0 * solved.require("area") ** 0.5 + abs(pole)
            scale = (1.0, 1.0, size) if load.torque == 0.0 else (1.0, 1.0, size + load.torque)
            worst = max(worst, *(abs(g - w) / s for g, w, s in zip(got, want, scale, strict=True)))
    return Finding(worst, ROUND_OFF, f"Largest miss {worst:.1e} at {len(beam_theory.LEVELS)} levels.")


# Turns of the bends of a polyline [degrees] and their radii; every wall is long enough for both of its bends.
BENDS = ((50.0, 9.0), (-70.0, 14.0), (110.0, 6.0))


def bends() -> Finding:
    """A line of four walls with three bends of any turn, against the same line with arcs for walls.

    Both ways of every wall; areas to second moments, J, shear centre and I_w at level corrected.
    """
    t, b = 2.0, 60.0
    heading, corner = 0.2, 0.0 + 0.0j
    sharp, rounded = {"0": (0.0, 0.0)}, {"0": (0.0, 0.0)}
    arcs: list[Wall] = []
    for i, (degrees, radius) in enumerate(BENDS, 1):
        turn = math.radians(degrees)
        corner += cmath.rect(b, heading)
        sharp[str(i)] = (corner.real, corner.imag)
        reach = radius * math.tan(0.5 * abs(turn))
        first, last = corner - cmath.rect(reach, heading), corner + cmath.rect(reach, heading + turn)
        centre = first + math.copysign(radius, turn) * 1j * cmath.rect(1.0, heading)
        middle = centre + radius * (corner - centre) / abs(corner - centre)
        for key, z in ((f"{i} in", first), (f"{i} out", last)):
            rounded[key] = (z.real, z.imag)
        arcs += [Wall("0" if i == 1 else f"{i - 1} out", f"{i} in", (t, t))]
        arcs += [Wall(f"{i} in", f"{i} out", (t, t), through=(middle.real, middle.imag))]
        heading += turn
    end = corner + cmath.rect(b, heading)
    sharp["4"] = rounded["4"] = (end.real, end.imag)
    arcs += [Wall("3 out", "4", (t, t))]
    walls = tuple(Wall(str(i), str(i + 1), (t, t)) for i in range(4))
    corners = tuple(beam_theory.Corner(str(i), r - 0.5 * t) for i, (_, r) in enumerate(BENDS, 1))
    want = beam_theory.solve(Shape(rounded, tuple(arcs), {}).theory(), "corrected")
    worst = 0.0
    for shape in (Shape(sharp, walls, {}), Shape(sharp, walls, {}).rewritten()):
        got = beam_theory.solve(replace(shape.theory(), corners=corners), "corrected")
        for n, q in want.quantities.items():
            if q.value is None:
                worst = max(worst, 0.0 if got.quantities[n].value is None else math.inf)
                continue
            scale = 4.0 * b if "centre" in n or "centroid" in n else abs(q.value) or 1.0
            worst = max(worst, abs(got.require(n) - q.value) / scale)
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of {len(want.quantities)} quantities.")


def even_flows(name: str) -> Finding:
    """At level lumped flows are even between booms; booms of straight walls carry no force and the moments.

    f of unit Vx makes sum of e A f x = 1, of e A f y = 0. A torque makes no booms; its flow is the midline's.
    """
    shape = SHAPES[name]()
    solved = beam_theory.solve(shape.theory(), "lumped")
    assert isinstance(solved, beam_theory.LumpedSolution)
    base = beam_theory.solve(shape.theory())
    centre = complex(base.require("centroid_x"), base.require("centroid_y"))
    worst, e = 0.0, {w.name: w.e for w in shape.walls}
    for load in LOADS:
        flow = solved.flow(load)
        p = flow.graph.pieces
        worst = max(
            worst, float(np.abs(np.ptp(flow.at_quadrature(), axis=1)).max()) if any(load.shear) else 0.0
        )
        made = solved.lumps_of(load)
        if not any(load.shear):
            worst = max(worst, math.inf if made or len(p.t0) != len(base.graph.pieces.t0) else 0.0)
            torque = [flow.at(w.name, np.array([0.3]))[0] for w in shape.walls]
            same = [base.flow(load).at(w.name, np.array([0.3]))[0] for w in shape.walls]
            worst = max(worst, float(np.abs(np.array(torque) - np.array(same)).max()))
            continue
        z = [complex(*base.place(m.wall, np.array([m.at]))[0]) - centre for m in made]
        slope = base.mass.slope(*load.shear)
        worst = max(
            worst,
            *(abs(m.stress - (slope.conjugate() * there).real) for m, there in zip(made, z, strict=True)),
        )
        if not any(w.through for w in shape.walls):
            force = [e[m.wall] * m.area * m.stress for m in made]
            moment = sum(f * there for f, there in zip(force, z, strict=True))
            worst = max(worst, abs(moment - complex(*load.shear)), abs(sum(force)))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of {len(LOADS)} loads.")


KEPT = ("area", "second_moment_xx", "second_moment_yy", "product_moment_xy", "principal_moment_u",
        "principal_moment_v", "principal_angle", "torsion_constant", "warping_constant")  # fmt: skip


def with_booms() -> Finding:
    """Straight walls with booms at points and inside: what lumping keeps is that of the midline."""
    section = SHAPES["two cells, two materials"]().theory()
    booms = (
        beam_theory.Boom(35.0, point="e", e=1.4), beam_theory.Boom(20.0, point="g"),
        beam_theory.Boom(28.0, wall="a-b", at=0.3, e=0.7),
    )  # fmt: skip
    section = replace(section, booms=booms)
    worst = 0.0
    base, size = beam_theory.solve(section), 100.0
    for parts in (1, 3):
        solved = beam_theory.solve(section, "lumped", parts)
        for n in KEPT:
            worst = max(worst, abs(solved.require(n) / base.require(n) - 1.0))
        for n in ("shear_centre_x", "shear_centre_y"):
            worst = max(worst, abs(solved.require(n) - base.require(n)) / size)
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


NOT_FLAT = ("principal_moment_v", "shear_area_x", "shear_area_y", "warping_constant", "shear_centre_x")


def flat() -> Finding:
    """A strip along x, along y and askew: only bending in its own plane is defined, and says so."""
    missed = []
    for turn, kept in ((1.0, {"yy"}), (1j, {"xx"}), (cmath.rect(1.0, 0.5), {"xx", "yy"})):
        end = 40.0 * turn
        shape = Shape({"a": (0.0, 0.0), "b": (end.real, end.imag)}, (Wall("a", "b", (2.0, 2.0)),), {})
        solved = beam_theory.solve(shape.theory())
        q = solved.quantities
        moment = 2.0 * 40.0**3 / 12.0
        missed += [
            f"I{n} at {turn:.2f}"
            for n in ("xx", "yy")
            if (q[f"second_moment_{n}"].value is not None) != (n in kept)
        ]
        missed += [n for n in NOT_FLAT if q[n].value is not None or not q[n].reason]
        missed += [
            n for n in ("area", "centroid_x", "torsion_constant", "principal_moment_u") if q[n].value is None
        ]
        # bending moments in the plane of the strip: My puts +x in tension
        load = beam_theory.Load("M", moment=(moment * turn.imag, moment * turn.real))
        sigma = beam_theory.stress(solved, load).direct("a-b", np.array([0.0, 0.5, 1.0])).mean(axis=1)
        if float(np.abs(sigma - np.array([-20.0, 0.0, 20.0])).max()) > 1e-9:
            missed.append(f"stress at {turn:.2f}")
    return Finding(float(len(missed)), 0.0, f"Three strips; wrong: {missed or 'none'}.")


def shear_only() -> Finding:
    """A box of skins that carry shear only: no area and no bending, which is said; J by Bredt."""
    b, h, t = 50.0, 30.0, 2.0
    points = {"a": (0.0, 0.0), "b": (b, 0.0), "c": (b, h), "d": (0.0, h)}
    walls = tuple(Wall(w[0], w[1], (t, t), direct_share=0.0) for w in ("ab", "bc", "cd", "da"))
    q = beam_theory.solve(Shape(points, walls, {}).theory()).quantities
    none = (*KEPT[:-2], "centroid_x", *NOT_FLAT)
    wrong = [n for n in none if q[n].value is not None or "carries direct stress" not in (q[n].reason or "")]
    off = abs(q["torsion_constant"].require("J") / (2.0 * (b * h) ** 2 * t / (b + h)) - 1.0)
    return Finding(
        math.inf if wrong else off, ROUND_OFF, f"J {off:.1e}; without a reason: {wrong or 'none'}."
    )


def symmetric_axes() -> Finding:
    """Principal angle of a section symmetric about an axis: 0 where Ixx is larger, pi/2 where Iyy is.

    A square tube has none: every axis is principal.
    """
    square = beam_theory.solve(symmetric_box(40.0, 2.0).theory()).quantities["principal_angle"]
    worst = 0.0 if square.value is None and square.reason else math.inf
    for b, h in ((20.0, 100.0), (100.0, 20.0)):
        solved = beam_theory.solve(symmetric_channel(b, h, 2.0).theory())
        xx, yy = solved.require("second_moment_xx"), solved.require("second_moment_yy")
        worst = max(worst, abs(solved.require("principal_angle") - (0.0 if xx > yy else 0.5 * math.pi)))
        worst = max(worst, abs(solved.require("principal_moment_u") / max(xx, yy) - 1.0))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


def tapered_strip() -> Finding:
    """A strip of two tapered walls at level corrected: centre weighted with e t^3 (Trefftz), I_w about it.

    I_w = integral of e t^3/12 (s - s_0)^2 ds, by polynomials.
    """
    heading, start = cmath.rect(1.0, 0.7), 12.0 - 5.0j
    lengths, taper, e = (30.0, 18.0), ((1.0, 3.0), (3.0, 1.5)), (1.0, 2.2)
    at = np.concatenate([[0.0], np.cumsum(lengths)])
    points = {
        n: ((start + s * heading).real, (start + s * heading).imag) for n, s in zip("abc", at, strict=True)
    }
    walls = tuple(Wall(n[0], n[1], t, e=k) for n, t, k in zip(("ab", "bc"), taper, e, strict=True))
    sums = np.zeros(3)
    for low, length, (first, last), k in zip(at, lengths, taper, e, strict=False):
        t = Polynomial((first, (last - first) / length))
        s = Polynomial((low, 1.0))
        sums += [k * float((t**3 * s**n).integ()(length)) for n in range(3)]
    centre = start + heading * sums[1] / sums[0]
    warping = (sums[2] - sums[1] ** 2 / sums[0]) / 12.0
    solved = beam_theory.solve(Shape(points, walls, {}).theory(), "corrected")
    got = complex(solved.require("shear_centre_x"), solved.require("shear_centre_y"))
    worst = max(abs(got - centre) / at[-1], abs(solved.require("warping_constant") / warping - 1.0))
    return Finding(float(worst), ROUND_OFF, f"Largest difference {worst:.1e}.")


def long_arc() -> Finding:
    """Places where the flow stands still on arcs of 300 and 140 degrees against a search for f = 0."""
    radius, worst = 30.0, 0.0
    for start, sweep in ((0.3, math.radians(300.0)), (2.1, math.radians(140.0))):
        a, m, b = (cmath.rect(radius, start + k * sweep) for k in (0.0, 0.5, 1.0))
        for first, last in ("ab", "ba"):
            wall = Wall(first, last, (2.0, 2.0), through=(m.real, m.imag))
            shape = Shape({"a": (a.real, a.imag), "b": (b.real, b.imag)}, (wall,), {})
            solved = beam_theory.solve(shape.theory())
            for n in range(24):
                force = cmath.rect(1.0, n * math.pi / 12.0 + 0.05)
                flow = solved.flow(beam_theory.Load("V", (force.real, force.imag)))
                u = np.linspace(0.0, 1.0, 2001)
                z = np.array([complex(*p) for p in solved.place(wall.name, u)]) - flow.centroid
                f = (np.conj(flow.slope) * z).real
                at = np.flatnonzero(f[:-1] * f[1:] < 0.0)
                want = u[at] + (u[1] - u[0]) * f[at] / (f[at] - f[at + 1])
                got = flow.stationary(wall.name)
                worst = max(worst, math.inf if len(got) != len(want) else float(np.abs(got - want).max()))
    return Finding(worst, 1e-6, f"Largest difference {worst:.1e} of a fraction, 96 loads.")


def cells_of_arcs() -> Finding:
    """Two cells between three arcs of half a turn and more, in every order: areas by circular segments."""
    worst, half = 0.0, 20.0
    rises = {"up": 24.0, "mid": 20.0, "down": -20.0}

    def segment(rise: float) -> float:
        radius = (half**2 + rise**2) / (2.0 * abs(rise))
        angle = 4.0 * math.atan2(abs(rise), half)
        return math.copysign(0.5 * radius**2 * (angle - math.sin(angle)), rise)

    want = sorted(
        (segment(rises["up"]) - segment(rises["mid"]), segment(rises["mid"]) - segment(rises["down"]))
    )
    for order in permutations(rises):
        for start, end in (("a", "b"), ("b", "a")):
            walls = tuple(beam_theory.Wall(n, start, end, (1.0, 1.0), (half, rises[n])) for n in order)
            section = beam_theory.Section({"a": (0.0, 0.0), "b": (2.0 * half, 0.0)}, walls)
            got = sorted(beam_theory.solve(section).cell_areas.tolist())
            worst = max(worst, *(abs(g / w - 1.0) for g, w in zip(got, want, strict=True)))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}, 12 ways to write it.")


def one_tangent() -> Finding:
    """Two arcs and a straight wall that leave a point along one tangent, closed by two walls: both cells.

    Areas by the trapezoid formula over the curves themselves, in every order of the walls.
    """

    def on(radius: float, angle: float) -> complex:
        return 1j * radius + cmath.rect(radius, angle - 0.5 * math.pi)

    ends = {"p": (20.0, 1.2), "q": (45.0, 0.8)}
    places = {n: on(r, a) for n, (r, a) in ends.items()} | {"o": 0.0j, "s": 40.0 + 0.0j}
    points = {n: (z.real, z.imag) for n, z in places.items()}
    walls = []
    for n, (r, a) in ends.items():
        middle = on(r, 0.5 * a)
        walls.append(Wall("o", n, (1.0, 1.0), through=(middle.real, middle.imag)))
    walls += [Wall("o", "s", (1.0, 1.0)), Wall("p", "q", (1.0, 1.0)), Wall("q", "s", (1.0, 1.0))]

    def twice(z: np.ndarray) -> float:
        return float((z[:-1].real * z[1:].imag - z[1:].real * z[:-1].imag).sum())

    curves = {n: np.array([on(r, a * u) for u in np.linspace(0.0, 1.0, 4001)]) for n, (r, a) in ends.items()}
    loops = (
        np.concatenate([[0.0], [places["s"]], curves["q"][::-1]]),
        np.concatenate([curves["q"], curves["p"][::-1]]),
    )
    want, worst = sorted(0.5 * twice(z) for z in loops), 0.0
    for order in permutations(walls):
        shape = Shape(points, order, {})
        for way in (shape, shape.rewritten()):
            got = sorted(beam_theory.solve(way.theory()).cell_areas.tolist())
            pairs = zip(got, want, strict=True)
            worst = max(worst, *(abs(g / w - 1.0) for g, w in pairs))
    return Finding(worst, 1e-6, f"Largest difference {worst:.1e} of 240 ways to write it.")


def thick_arcs() -> Finding:
    """J of an open arc at level corrected: R theta t^3/3 times 3/(4 x^2) (1 + x^2 - x/artanh x), x = t/(2 R).

    By forty digits, on both sides of where theory changes to a series; ends as of straight walls.
    """
    worst, theta, radius = 0.0, 2.0, 10.0
    with localcontext() as exact:
        exact.prec = 40
        for x in (0.004, 0.015, 0.0199, 0.0201, 0.1, 0.4):
            t, y = 2.0 * radius * x, Decimal(x)
            over = 1 / sum((y ** (2 * k) / (2 * k + 1) for k in range(60)), Decimal(0))
            factor = float(3 / (4 * y**2) * (1 + y**2 - over))
            want = radius * theta * t**3 / 3.0 * factor - 2.0 * FREE_END * t**4
            a, m, b = (cmath.rect(radius, k * theta) for k in (0.0, 0.5, 1.0))
            wall = Wall("a", "b", (t, t), through=(m.real, m.imag))
            shape = Shape({"a": (a.real, a.imag), "b": (b.real, b.imag)}, (wall,), {})
            got = beam_theory.solve(shape.theory(), "corrected").require("torsion_constant")
            worst = max(worst, abs(got / want - 1.0))
    return Finding(worst, 1e-11, f"Largest difference {worst:.1e} of six arcs.")


def fin_inside() -> Finding:
    """J of a box with a fin inside, in every order of its walls: Bredt's cell and b t^3/3 of the fin."""
    t, b, h, fin = 2.0, 50.0, 30.0, 12.0
    points = {"a": (0.0, 0.0), "b": (b, 0.0), "c": (b, h), "d": (0.0, h), "e": (fin * 0.6, fin * 0.8)}
    want = 2.0 * (b * h) ** 2 * t / (b + h) + fin * t**3 / 3.0
    worst = 0.0
    for order in permutations(("ab", "bc", "cd", "da", "ae")):
        shape = Shape(points, tuple(Wall(w[0], w[1], (t, t)) for w in order), {})
        solved = beam_theory.solve(shape.theory())
        worst = max(worst, abs(solved.require("torsion_constant") / want - 1.0))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of 120 orders.")


CHECKS = (
    *(
        code_check(f"flows carry their loads, {n}", GROUP, "theory", partial(resultants, n), quick=True)
        for n in SHAPES
    ),
    *(
        code_check(f"lumped, even flows, {n}", GROUP, "theory", partial(even_flows, n), quick=True)
        for n in SHAPES
    ),
    code_check("lumped, with booms", GROUP, "theory", with_booms, quick=True, features={"boom"}),
    code_check("skins alone", GROUP, "theory", shear_only, quick=True, features={"shear-only skin"}),
    code_check("principal axes of symmetry", GROUP, "theory", symmetric_axes, quick=True),
    code_check("tapered strip", GROUP, "theory", tapered_strip, quick=True, features={"taper"}),
    code_check("flat strips", GROUP, "theory", flat, quick=True),
    code_check("flow stands still on an arc", GROUP, "theory", long_arc, quick=True, features={"arc"}),
    code_check(
        "cells of arcs alone", GROUP, "theory", cells_of_arcs, quick=True, features={"arc", "many cells"}
    ),
    code_check("walls along one tangent", GROUP, "theory", one_tangent, features={"arc", "many cells"}),
    code_check("corrected, thick arcs", GROUP, "theory", thick_arcs, quick=True, features={"arc"}),
    code_check("fin inside a cell", GROUP, "theory", fin_inside, features={"fins"}),
    code_check("bends of any turn as arcs", GROUP, "theory", bends, quick=True, features={"bend"}),
)
