"""A boom inside a wall against the same wall written as two, with the boom at the point between them."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import numpy as np

import beam_theory
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, Shape, Wall, tapered

GROUP = "invariances"
ROUND_OFF = 1e-9
# Where a wall is divided, and the booms' e and area.
AT, STIFFNESS, AREA = 0.37, 1.6, 25.0


def _part(shape: Shape, wall: Wall, low: float, high: float) -> Wall:
    """A stretch of a wall between two new points."""
    t, middle = wall.thickness, 0.5 * (low + high)
    z = complex(shape.curve(wall, np.array([middle]))[0][0])
    return replace(
        wall,
        start=wall.start if low == 0.0 else f"{wall.name} {low}",
        end=wall.end if high == 1.0 else f"{wall.name} {high}",
        thickness=(t[0] + low * (t[1] - t[0]), t[0] + high * (t[1] - t[0])),
        through=None if wall.through is None else (z.real, z.imag),
    )


def in_two(shape: Shape) -> Shape:
    """Every wall as two walls that meet at AT."""
    points, walls = dict(shape.points), []
    for wall in shape.walls:
        z = complex(shape.curve(wall, np.array([AT]))[0][0])
        points[f"{wall.name} {AT}"] = (z.real, z.imag)
        walls += [_part(shape, wall, 0.0, AT), _part(shape, wall, AT, 1.0)]
    return Shape(points, tuple(walls), shape.booms)


def divided(name: str, level: str) -> Finding:
    """Quantities, flows, warping and stresses of a load: one wall with a boom inside, or two walls."""
    shape = tapered(SHAPES[name]())
    two = in_two(shape)
    inside = tuple(beam_theory.Boom(AREA, wall=w.name, at=AT, e=STIFFNESS) for w in shape.walls)
    between = tuple(beam_theory.Boom(AREA, point=f"{w.name} {AT}", e=STIFFNESS) for w in shape.walls)
    one_section, two_section = shape.theory(), two.theory()
    one = beam_theory.solve(replace(one_section, booms=(*one_section.booms, *inside)), level)
    other = beam_theory.solve(replace(two_section, booms=(*two_section.booms, *between)), level)
    size = one.require("area") ** 0.5 * 10.0
    worst = 0.0
    for n, q in one.quantities.items():
        if q.value is None:
            worst = max(worst, 0.0 if other.quantities[n].value is None else np.inf)
            continue
        scale = size if "centre" in n or "centroid" in n else abs(q.value) or 1.0
        worst = max(worst, abs(q.value - other.require(n)) / scale)
    load = beam_theory.Load("gust", (0.8, -1.2), (3.0, 7.0), 40.0, axial=9.0, moment=(50.0, -80.0))
    cases = beam_theory.stress(one, load), beam_theory.stress(other, load)
    u = np.array([0.02, 0.41, 0.98])
    for wall, (low, first), (high, second) in zip(
        shape.walls,
        ((0.0, w) for w in two.walls[::2]),
        ((AT, w) for w in two.walls[1::2]),
        strict=True,
    ):
        for kind in ("direct", "shear"):
            whole = cases[0].largest(kind, wall.name).stress
            parts = max(abs(cases[1].largest(kind, w.name).stress) for w in (first, second))
            worst = max(worst, abs(abs(whole) - parts) / (parts or 1.0))
        zeros = one.flow(load).stationary(wall.name)
        apart = [AT * v for v in other.flow(load).stationary(first.name)]
        apart += [AT + (1.0 - AT) * v for v in other.flow(load).stationary(second.name)]
        worst = max(worst, np.inf if len(zeros) != len(apart) else float(np.abs(zeros - apart).sum()))
        peaks = [other.flow(load).peak(part.name).flow for part in (first, second)]
        peak = one.flow(load).peak(wall.name)
        worst = max(worst, abs(abs(peak.flow) / max(np.abs(peaks)) - 1.0))
        there = other.flow(load).peak((first if abs(peaks[0]) > abs(peaks[1]) else second).name).at
        place = AT * there if abs(peaks[0]) > abs(peaks[1]) else AT + (1.0 - AT) * there
        worst = max(worst, abs(peak.at - place) if abs(abs(peaks[0]) / abs(peaks[1]) - 1.0) > 1e-9 else 0.0)
        for start, part, span in ((low, first, AT), (high, second, 1.0 - AT)):
            pairs = [
                (one.flow(load).at(wall.name, start + span * u), other.flow(load).at(part.name, u)),
                (one.warping_at(wall.name, start + span * u), other.warping_at(part.name, u)),
                (cases[0].direct(wall.name, start + span * u), cases[1].direct(part.name, u)),
                (cases[0].shear(wall.name, start + span * u), cases[1].shear(part.name, u)),
            ]
            worst = max(worst, *(float(np.abs(a - b).max() / (np.abs(a).max() + 1e-6)) for a, b in pairs))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


def cuts() -> Finding:
    """Cuts on both sides of a boom inside a wall come back where they were made, and change no flow."""
    section = SHAPES["two cells, two materials"]().theory()
    section = replace(section, booms=(beam_theory.Boom(AREA, wall="b-c", at=AT),))
    load = beam_theory.Load("gust", (0.8, -1.2), (3.0, 7.0), 40.0)
    u, worst = np.linspace(0.01, 0.99, 9), 0.0
    want = beam_theory.solve(section).flow(load)
    for at in (0.2, AT, 0.6, 1.0):
        made = (beam_theory.Cut("b-c", at), beam_theory.Cut("f-a", 0.3))
        solved = beam_theory.solve(replace(section, cuts=made))
        rows = {row.wall: row for row in beam_theory.working(solved, load).cuts}
        worst = max(worst, abs(rows["b-c"].at - at), abs(rows["f-a"].at - 0.3))
        if any(row.chosen for row in rows.values()):
            worst = float("inf")
        peak = abs(want.peak().flow)
        for wall in section.walls:
            off = solved.flow(load).at(wall.name, u) - want.at(wall.name, u)
            worst = max(worst, float(np.abs(off).max()) / peak)
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of four places.")


CHECKS = (
    *(
        code_check(
            f"boom inside a wall, {name}, {level}",
            GROUP,
            "theory",
            partial(divided, name, level),
            quick=level == "midline",
            features={"boom", "taper"},
        )
        for name in SHAPES
        for level in ("midline", "corrected")
    ),
    code_check("cuts beside a boom", GROUP, "theory", cuts, quick=True, features={"boom", "cut choice"}),
)
