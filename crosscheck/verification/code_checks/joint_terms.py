"""Terms of joints at level `corrected`, entered a second time from their sources or by another formula."""

from __future__ import annotations

import cmath
import math
from dataclasses import replace
from functools import partial
from itertools import permutations

import beam_theory
import fe_models
from beam_theory.corner_terms import (
    FREE_END,
    SHARP_CORNER,
    cell_corner_area,
    cell_corner_length,
    fillet_corner,
    tee,
)
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import Shape, Wall

GROUP = "joint terms"
ROUND_OFF = 1e-12


def tee_term() -> Finding:
    """El Darwish and Johnston 1965: alpha D^4 of a tee, less tf tw^3/6 of the stem inside the flange."""
    worst = 0.0
    for tf, tw, r in ((10.0, 6.0, 0.0), (12.7, 7.5, 12.0), (8.0, 8.0, 4.0)):
        alpha = (
            -0.042
            + 0.2204 * (tw / tf)
            + 0.1355 * (r / tf)
            - 0.0865 * (tw * r / tf**2)
            - 0.0725 * (tw / tf) ** 2
        )
        d = ((tf + r) ** 2 + (r + 0.25 * tw) * tw) / (2.0 * r + tf)
        worst = max(worst, abs(tee(tf, tw, r) / (alpha * d**4 - tf * tw**3 / 6.0) - 1.0))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of three tees.")


def fillet_term() -> Finding:
    """Roark's table 10.1 for an angle with a fillet: alpha = (d/b)(0.07 + 0.076 r/b), in both orders."""
    worst = 0.0
    for b, d, r in ((8.0, 6.0, 5.0), (5.0, 5.0, 2.5), (9.0, 4.0, 0.0)):
        alpha = (d / b) * (0.07 + 0.076 * r / b)
        across = 2.0 * (d + b + 3.0 * r - math.sqrt(2.0) * math.sqrt((2.0 * r + b) * (2.0 * r + d)))
        want = alpha * across**4 + (d * b**3 - b * d**3) / 6.0
        for first, second in ((b, d), (d, b)):
            worst = max(worst, abs(fillet_corner(first, second, r) / want - 1.0))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of three angles, in both orders.")


def cell_corner() -> Finding:
    """Length of a cell's corner: Hall 1968 at a right angle, the digamma form for walls of one thickness."""
    from scipy.special import digamma

    worst = abs(cell_corner_length(math.pi / 2.0, 1.0, 1.0) / (-2.0 / math.pi * math.log(2.0)) - 1.0)
    for b in (0.5, 2.0, 3.0):
        hall = (
            1.0 / b
            - 2.0 / math.pi * math.log(4.0 * b / (b**2 + 1.0))
            + (b**2 - 1.0) / (math.pi * b) * math.acos((b**2 - 1.0) / (b**2 + 1.0))
        )
        worst = max(
            worst, abs(cell_corner_length(math.pi / 2.0, 1.0, b) / (hall - 0.5 * (b + 1.0 / b)) - 1.0)
        )
    for degrees in (30.0, 75.0, 120.0, 150.0):
        turn = math.radians(degrees)
        closed = math.tan(turn / 2.0) + 2.0 / math.pi * float(
            digamma(0.5 - turn / (2.0 * math.pi)) - digamma(0.5)
        )
        closed_off = abs(cell_corner_length(turn, 2.0, 2.0) / closed - 1.0)
        worst = max(worst, closed_off * 1e-4)
    return Finding(worst, 1e-9, f"Largest difference {worst:.1e} (of the digamma form, 1e-4 times).")


def cell_corner_square() -> Finding:
    """Area of a right-angled corner of a cell by plain quadrature of the conformal map along the bisector."""
    from scipy.integrate import quad

    def slope(v: float) -> float:
        return 2.0 * v * math.sqrt(1.0 / math.tan(math.pi * v * v / 2.0))

    def rho(s: float) -> float:
        return float(quad(slope, 0.0, math.sqrt(s))[0])

    along = 0.5 - 0.25 * float(quad(lambda s: rho(s) ** 2, 0.0, 1.0)[0])
    kappa = 0.5 + math.log(2.0) / math.pi - 1.25 + 2.0 * along
    off = abs(cell_corner_area(math.pi / 2.0, 3.0, 3.0) / (9.0 * kappa) - 1.0)
    return Finding(off, 1e-7, f"Difference {off:.1e}.")


def constants() -> Finding:
    """Free end by its series; the sharp corner by FE's bounds of J of a sharp angle."""
    series = 192.0 / math.pi**5 * sum(1.0 / n**5 for n in range(1, 401, 2)) / 6.0
    off = abs(FREE_END / series - 1.0) / 1e-8
    angle = Shape(
        {"a": (20.0, 0.0), "o": (0.0, 0.0), "b": (0.0, 20.0)},
        (Wall("a", "o", (1.0, 1.0)), Wall("o", "b", (1.0, 1.0))),
        {},
    )
    j = fe_models.solve(angle.solid(), 1e-8).quantities["torsion_constant"]
    corner = j.known - 40.0 / 3.0 + 2.0 * series
    off = max(off, abs(corner - SHARP_CORNER) / (j.half_width + 1e-7))
    return Finding(off, 1.0, f"Sharp corner {corner:.8f} by FE, {SHARP_CORNER:.8f} in use.")


def _rolled(kind: str) -> tuple[Shape, str]:
    if kind == "tee":
        points = {"l": (-20.0, 30.0), "m": (0.0, 30.0), "r": (20.0, 30.0), "s": (0.0, 0.0)}
        walls = (Wall("l", "m", (5.0, 5.0)), Wall("m", "r", (5.0, 5.0)), Wall("m", "s", (4.0, 4.0)))
        return Shape(points, walls, {}), "m"
    points = {"a": (25.0, 0.0), "o": (0.0, 0.0), "b": (0.0, 30.0)}
    return Shape(points, (Wall("a", "o", (5.0, 5.0)), Wall("o", "b", (4.0, 4.0))), {}), "o"


def filleted(kind: str) -> Finding:
    """J of a stout tee or angle with a fillet against FE: the fits are good to some hundredths."""
    shape, point = _rolled(kind)
    corner = beam_theory.Corner(point, 4.0, 0.0 if kind == "angle" else None)
    theory = beam_theory.solve(replace(shape.theory(), corners=(corner,)), "corrected")
    rounding = fe_models.Rounding(4.0, 0.0 if kind == "angle" else None)
    fe = fe_models.solve(replace(shape.solid(), corners={point: rounding}), 1e-5)
    off = theory.require("torsion_constant") / fe.quantities["torsion_constant"].known - 1.0
    return Finding(abs(off), 0.04, f"J at level corrected {off:+.2%} from FE.")


Angle = tuple[float, float, float, float, float]
# Open corner: thicknesses, radius inside, turn [degrees], g of the second wall; whether it has a term.
CORNERS: dict[Angle, bool] = {
    (4.0, 4.0, 0.0, 90.0, 1.0): True,
    (4.0, 3.9, 0.0, 90.0, 1.0): False,
    (4.0, 4.0, 0.0, 89.0, 1.0): False,
    (4.0, 4.0, 0.0, 90.0, 2.0): False,
    (4.0, 2.05, 2.05, 90.0, 1.0): True,
    (2.05, 4.0, 7.9, -90.0, 1.0): True,
    (4.0, 4.0, 2.05, -90.0, 1.0): True,
    (4.0, 1.95, 3.0, 90.0, 1.0): False,
    (4.0, 4.0, 1.95, 90.0, 1.0): False,
    (4.0, 4.0, 8.05, 90.0, 1.0): False,
    (4.0, 4.0, 3.0, 88.0, 1.0): False,
    (4.0, 4.0, 0.0, 0.0, 1.0): True,
    (4.0, 3.0, 0.0, 0.0, 1.0): False,
}


def open_corners() -> Finding:
    """J of two open walls: g b t^3/3, ends and corner, for corners on both sides of every limit."""
    missed, worst, b, g = [], 0.0, 60.0, 1.3
    for case, has in CORNERS.items():
        t_1, t_2, r, turn, other = case
        z = b + b * cmath.rect(1.0, math.radians(turn))
        walls = (Wall("a", "o", (t_1, t_1), g=g), Wall("o", "b", (t_2, t_2), g=g * other))
        shape = Shape({"a": (0.0, 0.0), "o": (b, 0.0), "b": (z.real, z.imag)}, walls, {})
        corners = (beam_theory.Corner("o", r, 0.0),) if r > 0.0 else ()
        solved = beam_theory.solve(replace(shape.theory(), corners=corners), "corrected")
        value = solved.quantities["torsion_constant"].value
        if (value is not None) != has:
            missed.append(case)
        if value is None:
            continue
        ends = b * (t_1**3 + t_2**3) / 3.0 - FREE_END * (t_1**4 + t_2**4)
        corner = fillet_corner(t_1, t_2, r) if r > 0.0 else SHARP_CORNER * t_1**4 if turn else 0.0
        worst = max(worst, abs(value / (g * (ends + corner)) - 1.0))
    detail = f"Largest difference {worst:.1e} of {len(CORNERS)} corners; wrong range: {missed or 'none'}."
    return Finding(math.inf if missed else worst, ROUND_OFF, detail)


def tapered_corner() -> Finding:
    """Two tapered walls at a right angle: ends and corner by the thickness there, both ways to write them."""
    b, free, joint, worst = 60.0, (2.0, 3.0), 4.0, 0.0
    points = {"a": (-b, 0.0), "o": (0.0, 0.0), "b": (0.0, b)}
    walls = (Wall("a", "o", (free[0], joint)), Wall("o", "b", (joint, free[1])))
    want = SHARP_CORNER * joint**4
    for t in free:
        # integral of t^3 of a linear taper
        want += b * (joint + t) * (joint**2 + t**2) / 12.0 - FREE_END * t**4
    for shape in (Shape(points, walls, {}), Shape(points, walls, {}).rewritten()):
        got = beam_theory.solve(shape.theory(), "corrected").require("torsion_constant")
        worst = max(worst, abs(got / want - 1.0))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e}.")


# Tee: thickness of the flange's halves and the stem, radius, angle between flange and stem, whether a term.
TEES: dict[Angle, bool] = {
    (4.0, 4.0, 2.05, 0.0, 90.0): True,
    (4.0, 4.0, 4.0, 7.9, -90.0): True,
    (4.0, 4.0, 2.0, 2.0, 90.0): True,
    (4.0, 4.0, 1.95, 0.0, 90.0): False,
    (4.0, 4.0, 4.1, 0.0, 90.0): False,
    (4.0, 4.0, 3.0, 8.1, 90.0): False,
    (4.0, 3.8, 3.0, 0.0, 90.0): False,
    (4.0, 4.0, 3.0, 0.0, 88.0): False,
}


def open_tees() -> Finding:
    """J of a tee in all orders of its walls: g b t^3/3, ends and joint, on both sides of every limit."""
    missed, worst, b, g = [], 0.0, 60.0, 1.3
    for case, has in TEES.items():
        t_1, t_2, t_3, r, angle = case
        z, x = cmath.rect(b, 0.3 + math.radians(angle)), cmath.rect(b, 0.3)
        points = {"o": (0.0, 0.0), "l": (-x.real, -x.imag), "r": (x.real, x.imag), "s": (z.real, z.imag)}
        walls = (
            Wall("l", "o", (t_1, t_1), g=g), Wall("o", "r", (t_2, t_2), g=g), Wall("s", "o", (t_3, t_3), g=g),
        )  # fmt: skip
        corners = (beam_theory.Corner("o", r),) if r > 0.0 else ()
        for order in permutations(walls):
            shape = Shape(points, order, {})
            solved = beam_theory.solve(replace(shape.theory(), corners=corners), "corrected")
            value = solved.quantities["torsion_constant"].value
            if (value is not None) != has:
                missed.append(case)
            if value is None:
                continue
            want = sum(b * t**3 / 3.0 - FREE_END * t**4 for t in (t_1, t_2, t_3)) + tee(t_1, t_3, r)
            worst = max(worst, abs(value / (g * want) - 1.0))
    detail = f"Largest difference {worst:.1e} of {len(TEES)} tees; wrong range: {missed or 'none'}."
    return Finding(math.inf if missed else worst, ROUND_OFF, detail)


# Parallelogram: both thicknesses, turn of its corners in turns (the others turn by 180 degrees less that),
# radius inside one corner without a bend; whether both kinds of corner have a term.
CELLS: dict[tuple[float, float, float, float], tuple[bool, bool]] = {
    (3.0, 3.0, 90.0, 0.0): (True, True),
    (3.0, 3.0, 72.0, 0.0): (True, True),
    (3.0, 3.0, 1.05, 0.0): (True, False),
    (3.0, 3.0, 0.95, 0.0): (False, False),
    (3.0, 3.0, 159.0, 0.0): (True, True),
    (3.0, 3.0, 161.0, 0.0): (False, True),
    (3.0, 2.0, 31.0, 0.0): (True, True),
    (3.0, 2.0, 29.0, 0.0): (False, True),
    (3.0, 1.05, 80.0, 0.0): (True, True),
    (3.0, 0.95, 80.0, 0.0): (False, False),
    (3.0, 3.0, 80.0, 9.0): (False, True),
}


def cell_corners() -> Finding:
    """J of parallelograms from the cell's length and area with its corners, on both sides of every limit.

    2 A_m and the integral of ds/(g t) each get what the corners add; then J = (2 A)^2/integral + g b t^3/3.
    Every wall runs its own way, and both ways round.
    """
    missed, worst, b, h, g = [], 0.0, 200.0, 130.0, 1.3
    for case, has in CELLS.items():
        t_1, t_2, turn, r = case
        z = h * cmath.rect(1.0, math.radians(turn))
        for mirror in (1.0, -1.0):
            points = {"a": (0.0, 0.0), "b": (b, 0.0), "c": (b + z.real, mirror * z.imag)}
            points["d"] = (z.real, mirror * z.imag)
            walls = (
                Wall("a", "b", (t_1, t_1), g=g), Wall("c", "b", (t_2, t_2), g=g),
                Wall("c", "d", (t_1, t_1), g=g), Wall("a", "d", (t_2, t_2), g=g),
            )  # fmt: skip
            # a corner of the outline is left as it is where its outer radius is no bend's
            corners = (beam_theory.Corner("b", r, 0.0),) if r > 0.0 else ()
            section = replace(Shape(points, walls, {}).theory(), corners=corners)
            solved = beam_theory.solve(section, "corrected")
            if {j.point: j.term is not None for j in solved.joints} != dict(
                zip("bcda", (*has, has[0] or r > 0.0, has[1]), strict=True)
            ):
                missed.append(case)
            sharp = 4.0 * SHARP_CORNER * t_1**4 if turn == 90.0 else 0.0
            length, twice = 2.0 * (b / t_1 + h / t_2), 2.0 * b * abs(z.imag)
            for joint in solved.joints:
                own = turn if joint.point in "bd" else 180.0 - turn
                if joint.term is not None:
                    length += cell_corner_length(math.radians(own), t_1, t_2)
                    twice += 2.0 * cell_corner_area(math.radians(own), t_1, t_2)
            want = twice**2 / length + 2.0 * (b * t_1**3 + h * t_2**3) / 3.0 + sharp
            worst = max(worst, abs(solved.require("torsion_constant") / (g * want) - 1.0))
    detail = (
        f"Largest difference {worst:.1e} of {len(CELLS)} cells, both ways; wrong range: {missed or 'none'}."
    )
    return Finding(math.inf if missed else worst, ROUND_OFF, detail)


def cell_corner_exchange() -> Finding:
    """A corner's length is the same with its walls exchanged, at any turn and ratio of thicknesses."""
    worst = 0.0
    for degrees in (35.0, 60.0, 90.0, 120.0, 145.0):
        for ratio in (1.3, 2.0, 2.9):
            turn = math.radians(degrees)
            one, two = cell_corner_length(turn, 1.0, ratio), cell_corner_length(turn, ratio, 1.0)
            worst = max(worst, abs(one - two))
    return Finding(worst, 1e-9, f"Largest difference {worst:.1e} of 15 corners.")


CHECKS = (
    code_check("tee", GROUP, "theory", tee_term, quick=True),
    code_check("angle with a fillet", GROUP, "theory", fillet_term, quick=True),
    code_check("corner of a cell, length", GROUP, "theory", cell_corner, quick=True),
    code_check("corner of a cell, area", GROUP, "theory", cell_corner_square, quick=True),
    code_check("corner of a cell, walls exchanged", GROUP, "theory", cell_corner_exchange, quick=True),
    code_check("open corners and their ranges", GROUP, "theory", open_corners, quick=True),
    code_check("corner of tapered walls", GROUP, "theory", tapered_corner, quick=True, features={"taper"}),
    code_check("tees and their ranges", GROUP, "theory", open_tees, quick=True),
    code_check("cells of any corners and their ranges", GROUP, "theory", cell_corners, quick=True),
    code_check("free end and sharp corner", GROUP, "both", constants),
    code_check("tee with a fillet in J", GROUP, "both", partial(filleted, "tee"), features={"fillet"}),
    code_check("angle with a fillet in J", GROUP, "both", partial(filleted, "angle"), features={"fillet"}),
)
