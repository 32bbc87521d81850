"""Self-checks of both sides: all pass on sound solutions, and each fails on the fault it is there for."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import partial
from typing import Any

import numpy as np

import fe_models
from beam_theory.checks import checks
from crosscheck.verification.code_checks.equilibrium import by_fe, by_theory
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES
from fe_models.checks import self_checks

GROUP = "self-checks"


def sound(name: str) -> Finding:
    """Every self-check of both sides on a shape."""
    (_, theory), fe = by_theory(name), by_fe(name)
    failed = [c.name for c in theory.checks if not c.passed] + [c.name for c in fe.checks if not c.passed]
    count = len(theory.checks) + len(fe.checks)
    return Finding(
        float(len(failed)) if count >= 15 else math.inf,
        0.0,
        f"{count} self-checks; failed: {failed or 'none'}.",
    )


def theory_can_fail() -> Finding:
    """Each self-check of theory with one number of the solution changed by a thousandth."""
    _, good = by_theory("curved nose")
    assert good.shear is not None
    assert good.warp is not None
    pole = good.warp.pole

    def failing(sectorial: complex = pole, **changes: Any) -> set[str]:
        return {c.name for c in checks(replace(good, **changes), sectorial) if not c.passed}

    shear, warp = good.shear, good.warp
    twist = replace(good.twist, cell_flow=good.twist.cell_flow * 1.001)
    bent = replace(shear, start=shear.start * 1.001)
    closing = replace(shear, closing=shear.closing * 1.001)
    tilted = replace(warp, at_quadrature=warp.at_quadrature + 1e-3 * good.graph.pieces.u * 60.0**2)
    assert good.shear_centre is not None
    seen = {
        "resultant of unit T": failing(twist=twist),
        "no gap in warping round the cells": failing(twist=twist),
        "resultant of unit Vx": failing(shear=bent),
        "resultant of unit Vy": failing(shear=bent) & failing(shear_centre=good.shear_centre + 0.01),
        "single cell closed by moment equilibrium": failing(shear=closing),
        "node balance": failing(shear=replace(shear, imbalance=1e-6)),
        "shear centre from flow moments and from sectorial moments": failing(pole + 1e-3),
        "warping makes no bending moment": failing(warp=tilted),
        "warping function closes round the cells": failing(warp=replace(warp, gap=1e-6)),
    }
    missed = [name for name, names in seen.items() if name not in names] + sorted(failing())
    return Finding(float(len(missed)), 0.0, f"{len(seen)} changes; not found: {missed or 'none'}.")


def fe_can_fail() -> Finding:
    """Each self-check of finite elements with one field or number changed by 1e-5."""
    good = by_fe("two cells, two materials")
    fields, found = good.fields, dict(good.quantities)

    def failing(changed: fe_models.Fields = fields, **numbers: fe_models.Interval) -> set[str]:
        return {c.name for c in self_checks(changed, good.outline, found | numbers) if not c.passed}

    seen = {"residual of the kinematic equations": failing(replace(fields, residual=1e-5))}
    for kind in ("kinematic", "static"):
        for axis, unit in enumerate(("Vx", "Vy")):
            pairs = list(fields.flexure)
            pairs[axis] = replace(pairs[axis], **{kind: getattr(pairs[axis], kind) * (1.0 + 1e-5)})
            changed = replace(fields, flexure=(pairs[0], pairs[1]))
            seen[f"resultant of the {kind} field of unit {unit}"] = failing(changed)
        stress = getattr(fields.torsion, kind)
        off = replace(fields.torsion, **{kind: stress + 1e-5 * np.abs(stress).max()})
        seen[f"force of the {kind} field of unit twist"] = failing(replace(fields, torsion=off))
    q = found["shear_centre_x"]
    shift = 1e-3 * good.outline.extent
    assert q.low is not None
    assert q.high is not None
    moved = fe_models.Interval(q.known + shift, q.low + shift, q.high + shift, q.basis)
    seen["shear centre from flow moments against warping integrals"] = failing(shear_centre_x=moved)
    crossed = fe_models.Interval(1.0, 0.9, 1.1, "bound").meet(fe_models.Interval(2.0, 1.9, 2.1, "bound"))
    seen["intervals with low above high"] = failing(shear_area_x=crossed)
    missed = [name for name, names in seen.items() if name not in names] + sorted(failing())
    return Finding(float(len(missed)), 0.0, f"{len(seen)} changes; not found: {missed or 'none'}.")


def curved_intervals() -> Finding:
    """A round tube and a disc at the coarsest accuracy: their exact values lie within the intervals."""
    worst, told = 0.0, []
    for inner in (0.0, 70.0):
        rings = [fe_models.ClosedLine.circle((5.0, -3.0), r) for r in (100.0, inner) if r > 0.0]
        q = fe_models.solve_solid(fe_models.Solid(tuple(rings)), 1e-2).quantities
        fourth = math.pi * (100.0**4 - inner**4) / 4.0
        exact = {
            "torsion_constant": 2.0 * fourth, "second_moment_xx": fourth, "second_moment_yy": fourth,
            "shear_centre_x": 5.0, "shear_centre_y": -3.0, "centroid_x": 5.0, "centroid_y": -3.0,
            "area": math.pi * (100.0**2 - inner**2),
        }  # fmt: skip
        for name, value in exact.items():
            worst = max(worst, abs(q[name].known - value) / q[name].half_width)
        told.append(f"J {q['torsion_constant'].known:.8g} +- {q['torsion_constant'].half_width:.1e}")
    return Finding(worst, 1.0, f"{'; '.join(told)}; farthest {worst:.2g} of a half-width.")


CHECKS = (
    *(code_check(f"self-checks pass, {n}", GROUP, "both", partial(sound, n), quick=True) for n in SHAPES),
    code_check("self-checks of theory can fail", GROUP, "theory", theory_can_fail, quick=True),
    code_check("self-checks of finite elements can fail", GROUP, "fe", fe_can_fail, quick=True),
    code_check("exact values within intervals on curved outlines", GROUP, "fe", curved_intervals, quick=True),
)
