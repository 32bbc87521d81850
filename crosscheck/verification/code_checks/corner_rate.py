"""The rate at which a sharp re-entrant corner lets J converge, and its cure.

Near a corner of interior angle alpha the stress grows like r^(pi/alpha - 1), so on uniform meshes the energy,
and with it J, converges like h^(2 pi/alpha) whatever the order of the elements: h^(4/3) at 270 degrees
(Strang and Fix, An Analysis of the Finite Element Method, 1973, chapter 8; from memory).
"""

from __future__ import annotations

from functools import partial

import numpy as np

import fe_models
from crosscheck.verification.check import Series
from crosscheck.verification.code_checks import trial_meshes
from crosscheck.verification.code_checks.finding import Finding, code_check

GROUP = "corner-limited rate"
ALLOWED = 0.1
CORNER_RATE = 4.0 / 3.0
# Steps towards the corner shrink like (i/n)^POWER: more than p / (2/3) gives order p its full rate 2 p.
POWER = 2.0
SIZES = (16, 32, 64)
# The solid that the trial meshes fill: a square of side 2 without its upper right quarter.
SOLID = fe_models.Solid(
    (fe_models.ClosedLine(((-1.0, -1.0), (1.0, -1.0), (1.0, 0.0), (0.0, 0.0), (0.0, 1.0), (-1.0, 1.0))),)
)


def width(n: int, order: int, power: float) -> tuple[float, int]:
    """High less low of J of the sharp angle, and the unknowns."""
    vertices, triangles = trial_meshes.angle(trial_meshes.graded_lines(n, power))
    fields = fe_models.trial(vertices, triangles, order).fields()
    return float(fields.gap(fields.torsion).sum()), fields.unknowns


def rate(order: int, power: float, expected: float, sizes: tuple[int, ...]) -> Finding:
    """Observed order of the width of J's interval."""
    found = [width(n, order, power)[0] for n in sizes]
    observed = float(np.log(found[-2] / found[-1]) / np.log(sizes[-1] / sizes[-2]))
    series = Series(
        tuple(1.0 / n for n in sizes), tuple(found), "element size", "high - low of J", observed, expected
    )
    return Finding(
        abs(observed - expected),
        ALLOWED,
        f"Observed order {observed:.3f}, expected {expected:.3f}.",
        {"width of J's interval": series},
    )


def cure() -> Finding:
    """Our own meshes against a uniform mesh of cubic elements with at least as many unknowns."""
    uniform, many = width(24, 3, 1.0)
    solved = fe_models.solve_solid(SOLID, 1e-6)
    j = solved.quantities["torsion_constant"]
    few = solved.mesh.unknowns
    share = 2.0 * j.half_width / uniform
    return Finding(
        share if few < many else float("inf"),
        1e-3,
        f"Interval of J: {2.0 * j.half_width:.1e} wide with {few} unknowns graded towards the corner, "
        f"{uniform:.1e} with {many} unknowns of one size.",
    )


CHECKS = (
    *(
        code_check(
            f"J on uniform meshes of a sharp angle, elements of order {order}",
            GROUP,
            "fe",
            partial(rate, order, 1.0, CORNER_RATE, (4, 8, 16) if order > 2 else (8, 16, 32)),
            quick=order == 3,
        )
        for order in (2, 3, 4)
    ),
    code_check(
        "J on meshes graded towards the corner, elements of order 1",
        GROUP,
        "fe",
        partial(rate, 1, POWER, 2.0, SIZES),
    ),
    code_check("our meshes of a sharp angle against uniform ones", GROUP, "fe", cure, quick=True),
)
