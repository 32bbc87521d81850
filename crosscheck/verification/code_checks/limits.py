"""Theory and finite elements tend to each other as walls get thin, with the slopes that are known.

The differences themselves are right, not faults: a midline has no corners, no free ends and no thickness.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import partial

import numpy as np

import beam_theory
import fe_models
from crosscheck.verification.check import Series
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import Shape, Wall, symmetric_box, symmetric_channel

GROUP = "limits"
ALLOWED = 0.05
DEPTH = 100.0


def channel(t: float) -> Shape:
    """b = 50, h = 100."""
    return symmetric_channel(0.5 * DEPTH, DEPTH, t)


def box(t: float) -> Shape:
    """Square tube, b = 100."""
    return symmetric_box(DEPTH, t)


def tube(t: float) -> Shape:
    """Round tube of two half circles, R = 100."""
    points = {"a": (DEPTH, 0.0), "b": (-DEPTH, 0.0)}
    walls = (
        Wall("a", "b", (t, t), through=(0.0, DEPTH)),
        Wall("b", "a", (t, t), through=(0.0, -DEPTH)),
    )
    return Shape(points, walls, {})


def offset(theory: beam_theory.Solution, fe: fe_models.Solution, t: float) -> float:
    """x_s of FE less theory's, over the depth."""
    return (fe.quantities["shear_centre_x"].known - theory.require("shear_centre_x")) / DEPTH


def excess(quantity: str, theory: beam_theory.Solution, fe: fe_models.Solution, t: float) -> float:
    """FE's quantity over theory's less one."""
    return fe.quantities[quantity].known / theory.require(quantity) - 1.0


Measure = Callable[[beam_theory.Solution, fe_models.Solution, float], float]


def slope(
    make: Callable[[float], Shape],
    measure: Measure,
    ts: tuple[float, ...],
    accuracy: float,
    expected: float,
    factor: float,
    factor_allowed: float,
) -> Finding:
    """Order in t between the two thinnest, and the factor of (t/DEPTH)^expected at the thinnest.

    ``factor_allowed`` is relative: what the next power of t makes, and the digits of the factor's source.
    """
    found = []
    for t in ts:
        shape = make(t)
        fe = fe_models.solve(shape.solid(), accuracy)
        found.append(measure(beam_theory.solve(shape.theory()), fe, t))
    if min(found) * max(found) <= 0.0:
        return Finding(float("inf"), ALLOWED, f"The differences {found} change sign.")
    observed = math.log(found[-2] / found[-1]) / math.log(ts[-2] / ts[-1])
    constant = found[-1] / (ts[-1] / DEPTH) ** expected
    share = max(abs(observed - expected) / ALLOWED, abs(constant / factor - 1.0) / factor_allowed)
    series = Series(
        tuple(t / DEPTH for t in ts),
        tuple(float(abs(v)) for v in found),
        "thickness over depth",
        "difference",
        observed,
        expected,
    )
    return Finding(
        share,
        1.0,
        f"Slope {observed:.3f}, expected {expected:g}; factor {constant:.5g}, expected {factor:.5g}.",
        {"difference of theory and finite elements": series},
    )


# Channel: x_s moves by 0.75 (t/h)^2 h (b/h = 1/2, rows D300 to D303 of cases/reference/published.json).
CHANNEL_CONSTANT = 0.75
# Square tube at t/b = 0.01, on the line through rows D050 and D052: 0.455 at t/b = 0.02, 0.51 at 0.1.
BOX_CONSTANT = 0.448
# End and corner constants of J (t^4 each): 0.10504 a free end (rectangle series), 0.0725 a right bend
# (row D16), over the channel's own 2 DEPTH t^3/3.
OPEN_CONSTANT = 1.5 * (-2.0 * 0.10504 + 2.0 * 0.0725)


def rectangle() -> Finding:
    """A rectangle: theory's b t^3/3 is high by exactly what the series says, and FE contains the series.

    J = b t^3/3 (1 - 192 t/(pi^5 b) sum tanh(n pi b/(2 t))/n^5), n odd (Timoshenko and Goodier, Theory of
    Elasticity, 3rd ed., art. 109).
    """
    b, worst, told = DEPTH, 0.0, []
    for t in (50.0, 20.0, 5.0):
        shape = Shape({"a": (0.0, 0.0), "b": (b, 0.0)}, (Wall("a", "b", (t, t)),), {})
        fe = fe_models.solve(shape.solid(), 1e-6).quantities["torsion_constant"]
        theory = beam_theory.solve(shape.theory()).require("torsion_constant")
        n = np.arange(1, 200, 2)
        lost = 192.0 / math.pi**5 * t / b * float((np.tanh(n * math.pi * b / (2.0 * t)) / n**5).sum())
        exact = b * t**3 / 3.0 * (1.0 - lost)
        worst = max(
            worst, abs(fe.known - exact) / fe.half_width, abs(theory / exact * (1.0 - lost) - 1.0) / 1e-12
        )
        told.append(f"t/b = {t / b:g}: theory high by {100.0 * (theory / fe.known - 1.0):.3g} %")
    return Finding(worst, 1.0, f"{'; '.join(told)}; each as the exact series says.")


CHECKS = (
    code_check(
        "shear centre of the sharp channel, (t/h)^2",
        GROUP,
        "both",
        partial(slope, channel, offset, (10.0, 5.0), 1e-6, 2.0, CHANNEL_CONSTANT, 0.02),
        quick=True,
        features={"open walls"},
    ),
    code_check(
        "torsion constant of the sharp channel, t/h",
        GROUP,
        "both",
        partial(
            slope, channel, partial(excess, "torsion_constant"), (10.0, 5.0, 2.5), 1e-6, 1.0,
            OPEN_CONSTANT, 0.01,
        ),
        features={"open walls"},
    ),
    code_check(
        "Bredt-Batho with sharp corners, t/b",
        GROUP,
        "both",
        partial(
            slope, box, partial(excess, "torsion_constant"), (4.0, 2.0, 1.0), 3e-6, 1.0, BOX_CONSTANT, 0.01
        ),
        quick=True,
        features={"closed cell"},
    ),
    code_check(
        "round tube, (t/R)^2",
        GROUP,
        "both",
        partial(slope, tube, partial(excess, "torsion_constant"), (20.0, 10.0, 5.0), 1e-6, 2.0, 0.25, 0.02),
        features={"closed cell", "arc"},
    ),
    code_check("rectangle against b t^3/3", GROUP, "both", rectangle, quick=True, features={"open walls"}),
)  # fmt: skip
