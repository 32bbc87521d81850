"""Levels of theory beside the midline: `corrected` meets the solid, `lumped` carries what the walls carry."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import numpy as np

import beam_theory
import fe_models
from crosscheck.verification.check import Series
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.limits import tube
from crosscheck.verification.code_checks.shapes import SHAPES, Shape, Wall, symmetric_box, symmetric_channel

GROUP = "levels of theory"


def _tee() -> Shape:
    points = {"l": (-40.0, 100.0), "m": (0.0, 100.0), "r": (40.0, 100.0), "s": (0.0, 0.0)}
    t = (5.0, 5.0)
    return Shape(points, (Wall("l", "m", t), Wall("m", "r", t), Wall("m", "s", t)), {})


def _rhombus() -> Shape:
    z = (60.0 * float(np.cos(1.1)), 60.0 * float(np.sin(1.1)))
    points = {"a": (0.0, 0.0), "b": (60.0, 0.0), "c": (60.0 + z[0], z[1]), "d": z}
    return Shape(points, tuple(Wall(p, q, (1.0, 1.0)) for p, q in ("ab", "bc", "cd", "da")), {})


# Shape, bends by point, quantities and the largest relative difference from FE, with its reason.
SOLIDS: dict[str, tuple[Shape, dict[str, float], dict[str, float], str]] = {
    "sharp channel": (
        symmetric_channel(50.0, 100.0, 5.0), {}, {"torsion_constant": 2e-7, "area": 1e-10},
        "walls ten thicknesses long interact by exp(-2 pi 10) only; the mitre keeps the area",
    ),
    "sharp box": (
        symmetric_box(100.0, 8.0), {}, {"torsion_constant": 2e-8, "area": 1e-10}, "corner terms are exact",
    ),
    "sharp rhombus": (
        _rhombus(), {}, {"torsion_constant": 5e-6, "area": 1e-10},
        "length and area of a cell's corner are exact; its own t^4/10 is left out where it is not square",
    ),
    "round tube": (
        tube(20.0), {}, {"torsion_constant": 1e-8, "area": 1e-8, "second_moment_xx": 1e-8},
        "every term is exact",
    ),
    "bent channel": (
        symmetric_channel(50.0, 100.0, 5.0), {"b": 4.0, "c": 4.0},
        {"torsion_constant": 1.2e-4, "area": 1e-10, "second_moment_xx": 1e-10, "second_moment_yy": 1e-10},
        "J takes a bend as an arc of its own; what straight and curved walls do to each other is left out",
    ),
    "sharp tee": (
        _tee(), {}, {"torsion_constant": 4e-3},
        "the joint's term is a handbook fit for rolled tees, good to some hundredths of the joint",
    ),
}  # fmt: skip


def corrected(name: str) -> Finding:
    """Quantities at level corrected against FE's, which has the same outline."""
    shape, bends, allowed, reason = SOLIDS[name]
    section = replace(shape.theory(), corners=tuple(beam_theory.Corner(p, r) for p, r in bends.items()))
    solid = replace(shape.solid(), corners={p: fe_models.Rounding(r) for p, r in bends.items()})
    theory = beam_theory.solve(section, "corrected")
    fe = fe_models.solve(solid, 1e-6 if bends else 1e-7).quantities
    shares = {
        n: abs(theory.require(n) - fe[n].known) / (fe[n].half_width + limit * abs(fe[n].known))
        for n, limit in allowed.items()
    }
    where = max(shares, key=shares.__getitem__)
    off = theory.require(where) / fe[where].known - 1.0
    return Finding(shares[where], 1.0, f"{where}: {off:.1e} from FE, allowed {allowed[where]:g}: {reason}.")


def free_ends() -> Finding:
    """Rectangles b/t = 3, 5, 10 at level corrected against the torsion series: two free ends."""
    n = np.arange(1.0, 400.0, 2.0)
    worst = 0.0
    for ratio in (3.0, 5.0, 10.0):
        strip = Shape({"a": (0.0, 0.0), "b": (ratio, 0.0)}, (Wall("a", "b", (1.0, 1.0)),), {})
        exact = (
            ratio
            / 3.0
            * (1.0 - 192.0 / np.pi**5 / ratio * float((np.tanh(n * np.pi * ratio / 2.0) / n**5).sum()))
        )
        got = beam_theory.solve(strip.theory(), "corrected").require("torsion_constant")
        # ends of a wall of length b feel each other by 2 exp(-pi b/t)
        worst = max(worst, abs(got / exact - 1.0) / (1e-8 + np.exp(-np.pi * ratio)))
    return Finding(
        float(worst), 1.0, "Largest difference over exp(-pi b/t), by which the ends feel each other."
    )


def round_tubes() -> Finding:
    """Round tubes from hair-thin to nearly solid at level corrected: J, I and I/R by closed formulas."""
    worst, radius = 0.0, 100.0
    for share in (1e-3, 0.012, 0.019, 0.021, 0.2, 0.8, 1.6):
        t = share * radius
        theory = beam_theory.solve(tube(t).theory(), "corrected")
        inertia = 0.25 * np.pi * ((radius + 0.5 * t) ** 4 - (radius - 0.5 * t) ** 4)
        for n, v in (("torsion_constant", 2.0), ("second_moment_xx", 1.0), ("second_moment_yy", 1.0)):
            worst = max(worst, abs(theory.require(n) / (v * inertia) - 1.0))
        modulus = beam_theory.faces.face_quantities(theory)["section_modulus_u_plus"].require("modulus")
        worst = max(worst, abs(modulus * (radius + 0.5 * t) / inertia - 1.0))
    return Finding(float(worst), 1e-11, f"Largest difference {worst:.1e} for t/R from 0.001 to 1.6.")


def own_axis() -> Finding:
    """A slanted wall at level corrected: second moments and secondary warping of a rectangle b x t."""
    b, t, angle = 20.0, 1.5, 0.5
    end = (b * float(np.cos(angle)), b * float(np.sin(angle)))
    theory = beam_theory.solve(
        Shape({"a": (0.0, 0.0), "b": end}, (Wall("a", "b", (t, t)),), {}).theory(), "corrected"
    )
    major, minor = t * b**3 / 12.0, b * t**3 / 12.0
    mean, half = 0.5 * (major + minor), 0.5 * (major - minor)
    want = {
        "second_moment_yy": mean + half * float(np.cos(2 * angle)),
        "second_moment_xx": mean - half * float(np.cos(2 * angle)),
        "product_moment_xy": half * float(np.sin(2 * angle)),
        "principal_moment_u": major,
        "principal_moment_v": minor,
        "warping_constant": b**3 * t**3 / 144.0,
        "shear_centre_x": 0.5 * end[0],
        "shear_centre_y": 0.5 * end[1],
    }
    worst = max(abs(theory.require(n) / v - 1.0) for n, v in want.items())
    return Finding(worst, 1e-9, f"Largest difference {worst:.1e} of {len(want)} quantities of a rectangle.")


def secondary_bimoment() -> Finding:
    """Stress of a bimoment at level corrected: B/I_w omega, which changes by -n r_t across a wall."""
    shape = SHAPES["open section"]()
    theory = beam_theory.solve(shape.theory(), "corrected")
    pole = np.array([theory.require("shear_centre_x"), theory.require("shear_centre_y")])
    case = beam_theory.stress(theory, beam_theory.Load("B", bimoment=7.0))
    rate = 7.0 / theory.require("warping_constant")
    worst, peak = 0.0, 0.0
    for wall in shape.walls:
        line = shape.line(wall)
        sigma = case.direct(wall.name, line.fraction)
        tangent = line.step / np.hypot(*line.step.T)[:, None]
        along = ((line.place - pole) * tangent).sum(axis=1)
        omega = theory.warping_at(wall.name, line.fraction)
        peak = max(peak, float(np.abs(sigma).max()))
        worst = max(worst, float(np.abs(sigma.mean(axis=1) - rate * omega).max()))
        worst = max(worst, float(np.abs(sigma[:, 0] - sigma[:, 1] + rate * line.thickness * along).max()))
    return Finding(worst / peak, 1e-9, f"Largest difference {worst / peak:.1e} of the peak.")


def warping_comes_nearer() -> Finding:
    """I_w and I of channel and angle: what corrected leaves is a fraction of what the midline lacks."""
    worst, told = 0.0, []
    angle = Shape(
        {"a": (60.0, 0.0), "o": (0.0, 0.0), "b": (0.0, 100.0)},
        (Wall("a", "o", (4.0, 4.0)), Wall("o", "b", (4.0, 4.0))),
        {},
    )
    for name, shape, share in (("angle", angle, 0.05), ("channel", symmetric_channel(50.0, 100.0, 5.0), 0.6)):
        fe = fe_models.solve(shape.solid(), 1e-5).quantities["warping_constant"].known
        far, near = (
            abs(beam_theory.solve(shape.theory(), level).require("warping_constant") / fe - 1.0)
            for level in ("midline", "corrected")
        )
        worst = max(worst, near / far / share)
        told.append(f"{name}: midline {far:.2g}, corrected {near:.2g}")
    return Finding(worst, 1.0, f"Relative difference of I_w from FE; {'; '.join(told)}.")


def lumped(name: str) -> Finding:
    """Booms made from the walls: flows carry the load, and second moments of straight walls are unchanged."""
    shape = SHAPES[name]()
    base, solved = beam_theory.solve(shape.theory()), beam_theory.solve(shape.theory(), "lumped")
    place = next(iter(shape.points.values()))
    load = beam_theory.Load("gust", (0.8, -1.2), place, torque=40.0)
    got = solved.flow(load).resultant()
    want = (0.8, -1.2, 40.0 - 1.2 * place[0] - 0.8 * place[1])
    size = base.require("area") ** 0.5 * 10.0
    worst = max(abs(g - w) / s for g, w, s in zip(got, want, (1.0, 1.0, size), strict=True))
    if not any(w.through for w in shape.walls):
        for n in ("area", "second_moment_xx", "second_moment_yy", "torsion_constant", "warping_constant"):
            worst = max(worst, abs(solved.require(n) / base.require(n) - 1.0))
        for n in ("shear_centre_x", "shear_centre_y"):
            worst = max(worst, abs(solved.require(n) - base.require(n)) / size)
    return Finding(worst, 1e-9, f"Largest difference {worst:.1e}.")


def lumped_rate() -> Finding:
    """Shear areas at level lumped tend to the midline's, second order in the length of the parts."""
    section = SHAPES["curved nose"]().theory()
    exact = beam_theory.solve(section).require("shear_area_y")
    parts = (8, 16, 32)
    off = [abs(beam_theory.solve(section, "lumped", n).require("shear_area_y") / exact - 1.0) for n in parts]
    observed = float(np.log2(off[-2] / off[-1]))
    series = Series(tuple(1.0 / n for n in parts), tuple(off), "part of a wall", "difference", observed, 2.0)
    return Finding(
        abs(observed - 2.0), 0.1, f"Observed order {observed:.3f}, expected 2.", {"shear area": series}
    )


def boom_formula() -> Finding:
    """Channel under Vy, by hand: flanges t b/2 at each end, web t h/6 (2 - 1) at each end."""
    solved = beam_theory.solve(symmetric_channel(50.0, 100.0, 2.0).theory(), "lumped")
    assert isinstance(solved, beam_theory.LumpedSolution)
    made = {(m.wall, m.at): m.area for m in solved.lumps_of(beam_theory.Load("Vy", (0.0, 1.0)))}
    want = {("a-b", 0.0): 50.0, ("a-b", 1.0): 50.0, ("b-c", 0.0): 100.0 / 3.0, ("b-c", 1.0): 100.0 / 3.0}
    worst = max(abs(made[k] / v - 1.0) for k, v in want.items())
    return Finding(
        worst, 1e-12, f"Largest difference {worst:.1e} of {len(want)} booms (Megson, 4th ed., 20.2)."
    )


CHECKS = (
    *(
        code_check(
            f"corrected against the solid, {name}",
            GROUP,
            "both",
            partial(corrected, name),
            quick=name in ("bent channel", "round tube"),
            features={"bend"} if "bent" in name else (),
        )
        for name in SOLIDS
    ),
    code_check("corrected, round tubes of any thickness", GROUP, "theory", round_tubes, quick=True),
    code_check("corrected, free ends of rectangles", GROUP, "theory", free_ends, quick=True),
    code_check("corrected, bimoment at both faces", GROUP, "theory", secondary_bimoment, quick=True),
    code_check("corrected, own-axis terms of a slanted wall", GROUP, "theory", own_axis, quick=True),
    code_check("corrected, warping constant comes nearer", GROUP, "both", warping_comes_nearer),
    *(code_check(f"lumped, {n}", GROUP, "theory", partial(lumped, n), quick=True) for n in SHAPES),
    code_check("lumped tends to the midline", GROUP, "theory", lumped_rate, quick=True),
    code_check("booms of a channel", GROUP, "theory", boom_formula, quick=True),
)
