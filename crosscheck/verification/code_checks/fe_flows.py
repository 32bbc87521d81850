"""Shear flows of finite elements: their change along every strip by statics, and their level by theory."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import numpy as np

import fe_models
from crosscheck.verification.code_checks.equilibrium import MOMENTS, by_fe, by_theory, slopes
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, Shape, Wall
from fe_models.recovery import flows, strip_chords

GROUP = "flows of finite elements"
# Gauss points along and across a wall.
ALONG, ACROSS = 12, 4


def _load(shape: Shape, wall: Wall, low: float, high: float) -> np.ndarray:
    """Integral of e (1, x, y) over the band of a wall between two fractions, (3,): e times its share."""
    x, w = np.polynomial.legendre.leggauss(ALONG)
    n, v = np.polynomial.legendre.leggauss(ACROSS)
    u = low + 0.5 * (high - low) * (x + 1.0)
    place, rate = shape.curve(wall, u)
    t = wall.thickness[0] + u * (wall.thickness[1] - wall.thickness[0])
    tangent = rate / np.abs(rate)
    # an arc turns evenly with the fraction
    turn = float(np.angle(tangent[1] / tangent[0])) / (u[1] - u[0])
    z = place[:, None] + 1j * tangent[:, None] * (0.5 * t[:, None] * n)
    stretch = np.abs(rate)[:, None] - turn * 0.5 * t[:, None] * n
    area = 0.5 * (high - low) * w[:, None] * 0.5 * t[:, None] * v * stretch
    e = wall.e * wall.direct_share
    return e * np.array([area.sum(), (area * z.real).sum(), (area * z.imag).sum()])


def change(name: str) -> Finding:
    """q changes by minus the integral of e f between, f from FE's own moments; the flow of unit T is even."""
    shape, fe = SHAPES[name](), by_fe(name)
    value = {n: fe.quantities[n].known for n in MOMENTS}
    centre, slope = np.array([value["centroid_x"], value["centroid_y"]]), slopes(value)
    worst, peak = np.zeros(3), np.zeros(3)
    for wall in shape.walls:
        span = fe.strips[wall.name]
        if span is None:
            continue
        at = np.linspace(span[0], span[1], 5)[[0, 1, 3, 4]]
        got = fe.flow_at(wall.name, at).values
        peak = np.maximum(peak, np.abs(got).max(axis=1))
        for i in range(3):
            whole = _load(shape, wall, at[i], at[i + 1])
            moment = whole[1:] - whole[0] * centre
            gain = np.array([-moment @ slope[0], -moment @ slope[1], 0.0])
            worst = np.maximum(worst, np.abs(got[:, i + 1] - got[:, i] - gain))
    # an open section has no flow of unit T: it is measured on that of unit V over the size
    peak[2] = max(peak[2], 1e-3 * peak[:2].max() / value["second_moment_xx"] ** 0.25)
    share = float((worst / peak).max())
    return Finding(share, 2e-6 if fe.outline.curved else 1e-9, f"Largest difference {share:.1e} of the peak.")


def level(name: str) -> Finding:
    """Flows in every strip against theory's, over each load's peak: some t/b remains between them."""
    (shape, theory), fe = by_theory(name), by_fe(name)
    units = [theory.unit_flow(n) for n in ("Vx", "Vy", "T")]
    peak, worst = np.zeros(3), np.zeros(3)
    for wall in shape.walls:
        span = fe.strips[wall.name]
        if span is None:
            continue
        at = np.linspace(*span, 5)
        got = fe.flow_at(wall.name, at).values
        want = np.array([u.at(wall.name, at) for u in units])
        peak = np.maximum(peak, np.abs(want).max(axis=1))
        worst = np.maximum(worst, np.abs(got - want).max(axis=1))
    share = [w / p for w, p in zip(worst, peak, strict=True) if p > 0.0]
    told = ", ".join(f"{s:.2g}" for s in share)
    return Finding(float(max(share)), 0.03, f"Largest differences over the peaks: {told}.")


def closing(name: str) -> Finding:
    """Torque of the flows of unit T: each wall's even flow times twice its swept area, near one.

    The flow of a strip is taken for the whole wall, and what the thickness carries by itself is left out:
    a share of some t/b remains.
    """
    (shape, theory), fe = by_theory(name), by_fe(name)
    total = 0.0
    for wall in shape.walls:
        span = fe.strips[wall.name]
        if span is None or not theory.in_cell(wall.name):
            continue
        line = shape.line(wall)
        swept = float((line.place[:, 0] * line.step[:, 1] - line.place[:, 1] * line.step[:, 0]).sum())
        total += swept * float(fe.flow_at(wall.name, [0.5]).values[2, 0])
    return Finding(abs(total - 1.0), 0.02, f"Torque {total:.5f} of 1.")


def errors(name: str) -> Finding:
    """Error bars of flows in cells at 1e-3 cover the answer at 1e-6; open walls need none."""
    shape = SHAPES[name]()
    coarse, fine = (fe_models.solve(shape.solid(), a) for a in (1e-3, 1e-6))
    worst = 0.0
    for wall in shape.walls:
        spans = [s.strips[wall.name] for s in (coarse, fine)]
        if spans[0] is None or spans[1] is None:
            continue
        at = np.linspace(max(s[0] for s in spans if s), min(s[1] for s in spans if s), 3)
        one, two = (s.flow_at(wall.name, at) for s in (coarse, fine))
        allowed = one.errors + two.errors
        worst = max(worst, float((np.abs(one.values - two.values) / allowed).max()))
    return Finding(worst, 1.0, f"Largest difference {worst:.2g} of both error bars.")


def kinematic_flow(name: str) -> Finding:
    """Kinematic less static flow of unit T over section lines: of its mean the error bars of cells are made.

    400 lines a strip against the integral over the strip's area; within a factor of two, since it is small.
    """
    fe, most = by_fe(name), 0.0
    for wall, strip in fe.fields.space.mesh.strips.items():
        if wall in fe.open_walls:
            continue
        s = strip.s[0] + (strip.s[-1] - strip.s[0]) * (np.arange(400) + 0.5) / 400.0
        static, kinematic = flows(fe.fields, strip_chords(strip, s), len(s))
        most = max(most, abs(float((kinematic - static)[2].mean())))
    ratio = most / float(fe.closing_error[2])
    away = abs(float(np.log2(ratio))) if ratio > 0.0 else float("inf")
    return Finding(away, 1.0, f"Largest mean {most:.2e}, {ratio:.2f} of the closing error.")


def rectangle_with_nu() -> Finding:
    """Cowper's coefficient 10 (1 + nu)/(12 + 11 nu) of a rectangle, and A_V = 5/6 A at nu = 0 by energy."""
    corners = ((0.0, 0.0), (1.0, 0.0), (1.0, 2.0), (0.0, 2.0))
    worst = 0.0
    for nu in (0.0, 0.3):
        solved_one = fe_models.solve_solid(fe_models.Solid((fe_models.ClosedLine(corners),), nu=nu), 1e-6)
        assert solved_one.poisson is not None
        mean = 10.0 * (1.0 + nu) / (12.0 + 11.0 * nu)
        worst = max(worst, float(np.abs(solved_one.poisson.mean_coefficient / mean - 1.0).max()))
        if nu == 0.0:
            worst = max(worst, float(np.abs(solved_one.poisson.energy_coefficient * 1.2 - 1.0).max()))
    return Finding(worst, 1e-8, f"Largest difference {worst:.1e} (Cowper, J. Appl. Mech. 33, 1966).")


def circle_with_nu() -> Finding:
    """Circle: 6 (1 + nu)/(7 + 6 nu) by mean displacement, 6 (1 + nu)^2/(7 + 14 nu + 8 nu^2) by energy."""
    worst = 0.0
    for g, nu in ((1.0, 0.3), (2.5, 0.5)):
        ring = fe_models.ClosedLine.circle((3.0, -2.0), 1.5)
        solved_one = fe_models.solve_solid(fe_models.Solid((ring,), e=g, g=g, nu=nu), 1e-6)
        assert solved_one.poisson is not None
        mean = 6.0 * (1.0 + nu) / (7.0 + 6.0 * nu)
        energy = 6.0 * (1.0 + nu) ** 2 / (7.0 + 14.0 * nu + 8.0 * nu**2)
        centre = float(np.abs(solved_one.poisson.shear_centre - np.array([3.0, -2.0])).max())
        worst = max(
            worst,
            float(np.abs(solved_one.poisson.mean_coefficient / mean - 1.0).max()),
            float(np.abs(solved_one.poisson.energy_coefficient / energy - 1.0).max()),
            centre,
        )
    return Finding(worst, 2e-6, f"Largest difference {worst:.1e} (Cowper, J. Appl. Mech. 33, 1966).")


def without_nu() -> Finding:
    """Flexure with nu = 0 on a section without symmetry: shear centre and shear areas of the comparison."""
    section = replace(SHAPES["open section"]().solid(), nu=0.0)
    fe = fe_models.solve(section, 1e-4)
    assert fe.poisson is not None
    q = fe.quantities
    worst = max(
        abs(float(fe.poisson.shear_centre[i]) - q[f"shear_centre_{axis}"].known) / fe.outline.extent
        for i, axis in enumerate("xy")
    )
    for i, axis in enumerate("xy"):
        own = float(fe.poisson.energy_coefficient[i]) * q["area"].known
        area = q[f"shear_area_{axis}"]
        # one is the mean of both areas, the other the inverse of the mean energy
        worst = max(worst, abs(own - area.known) / area.known - (area.half_width / area.known) ** 2)
    return Finding(worst, 1e-9, f"Largest difference {worst:.1e}.")


CHECKS = (
    *(
        code_check(f"change of flow along strips, {name}", GROUP, "fe", partial(change, name), quick=True)
        for name in SHAPES
    ),
    *(
        code_check(f"level of flows against theory, {name}", GROUP, "both", partial(level, name), quick=True)
        for name in SHAPES
    ),
    *(
        code_check(f"torque of the flows of unit T, {name}", GROUP, "fe", partial(closing, name), quick=True)
        for name in ("two cells, two materials", "curved nose")
    ),
    *(
        code_check(f"error bars of flows, {name}", GROUP, "fe", partial(errors, name))
        for name in ("open section", "two cells, two materials")
    ),
    *(
        code_check(f"kinematic flow over section lines, {n}", GROUP, "fe", partial(kinematic_flow, n))
        for n in ("two cells, two materials", "curved nose")
    ),
    code_check(
        "rectangle with nu", GROUP, "fe", rectangle_with_nu, quick=True, features={"nu", "outline solid"}
    ),
    code_check("nu = 0 on a section without symmetry", GROUP, "fe", without_nu, quick=True, features={"nu"}),
    code_check("circle with nu", GROUP, "fe", circle_with_nu, quick=True, features={"nu", "outline solid"}),
)
