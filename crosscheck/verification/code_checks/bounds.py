"""Two-sidedness and monotonicity: bounds contain the answer and only come closer when the mesh is refined."""

from __future__ import annotations

from functools import partial

import numpy as np

import fe_models
from crosscheck.verification.check import Series
from crosscheck.verification.code_checks import trial_meshes
from crosscheck.verification.code_checks.corner_rate import SOLID
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES

GROUP = "two-sidedness and monotonicity"
# Round-off of a bound, as a share of its value.
ROUND_OFF = 1e-10
ACCURACIES = (1e-3, 1e-4, 1e-6)
BOUNDED = ("torsion_constant", "shear_area_x", "shear_area_y")


def _angle(n: int, order: int) -> fe_models.Trial:
    return fe_models.trial(*trial_meshes.angle(np.linspace(-1.0, 1.0, 2 * n + 1)), order)


def _two_materials(n: int, order: int) -> fe_models.Trial:
    """A square tube of side 6 and thickness 1 (6 n by 6 n cells) whose lower half is stiffer."""
    lines = np.linspace(-3.0, 3.0, 6 * n + 1)
    vertices, triangles = trial_meshes.plate(lines, lines)
    middle = vertices[triangles].mean(axis=1)
    kept = triangles[np.abs(middle).max(axis=1) > 2.0]
    used, number = np.unique(kept, return_inverse=True)
    triangles, vertices = number.reshape(-1, 3), vertices[used]
    low = vertices[triangles, 1].mean(axis=1) < 0.0
    return fe_models.trial(vertices, triangles, order, e=np.where(low, 3.0, 1.0), g=np.where(low, 2.0, 1.0))


TRIALS = {"sharp angle": _angle, "tube of two materials": _two_materials}


def sides(fields: fe_models.Fields) -> dict[str, tuple[float, float]]:
    """Low and high of J and of both shear areas, from the plain energies of the two sides."""
    high = fields.energy(fields.torsion.kinematic)
    found = {"torsion_constant": (high - float(fields.gap(fields.torsion).sum()), high)}
    for axis, name in enumerate("xy"):
        pair = fields.flexure[axis]
        most = fields.energy(pair.static)
        found[f"shear_area_{name}"] = (1.0 / most, 1.0 / (most - float(fields.gap(pair).sum())))
    return found


def nested(name: str, order: int) -> Finding:
    """Each mesh is refined into the next, so bounds may not get worse by more than round-off."""
    sizes = (1, 2, 4)
    found = [sides(TRIALS[name](n, order).fields()) for n in sizes]
    worst, told = 0.0, []
    for quantity in BOUNDED:
        low, high = np.array([f[quantity] for f in found]).T
        scale = abs(high[-1])
        worst = max(worst, float((low - high).max()) / scale)
        worst = max(worst, float((low[:-1] - low[1:]).max()) / scale)
        worst = max(worst, float((high[1:] - high[:-1]).max()) / scale)
        told.append(f"{quantity} {low[0]:.6g}..{high[0]:.6g} to {low[-1]:.6g}..{high[-1]:.6g}")
    series = {
        q: Series(
            tuple(1.0 / n for n in sizes),
            tuple(f[q][1] - f[q][0] for f in found),
            "element size",
            "high - low",
        )
        for q in BOUNDED
    }
    return Finding(worst, ROUND_OFF, f"From the first to the third mesh: {'; '.join(told)}.", series)


def contained(name: str) -> Finding:
    """The intervals at three accuracies overlap: each contains the one answer."""
    section = None if name == "sharp angle" else SHAPES[name]().solid()
    found = []
    for accuracy in ACCURACIES:
        solved = (
            fe_models.solve_solid(SOLID, accuracy) if section is None else fe_models.solve(section, accuracy)
        )
        if not solved.met:
            return Finding(
                float("inf"), 1.0, f"Accuracy {accuracy:g} was not reached: {solved.accuracy_note}."
            )
        found.append(solved.quantities)
    worst, where = 0.0, ""
    for quantity in (*BOUNDED, "shear_centre_x", "shear_centre_y"):
        fine = found[-1][quantity]
        for coarse in (f[quantity] for f in found[:-1]):
            apart = abs(fine.known - coarse.known) / (coarse.half_width + fine.half_width)
            if apart > worst:
                worst, where = apart, quantity
    return Finding(
        worst,
        1.0,
        f"Values at 1e-3 and 1e-4 lie at most {worst:.3g} of both half-widths from those at 1e-6 ({where}).",
    )


CHECKS = (
    *(
        code_check(
            f"bounds on nested meshes, {name}, elements of order {order}",
            GROUP,
            "fe",
            partial(nested, name, order),
            quick=order == 3,
            features={"two materials", "closed cell"} if name == "tube of two materials" else (),
        )
        for name in TRIALS
        for order in (3, 4)
    ),
    *(
        code_check(
            f"intervals at three accuracies, {name}",
            GROUP,
            "fe",
            partial(contained, name),
            quick=name == "sharp angle",
        )
        for name in ("sharp angle", "open section", "two cells, two materials")
    ),
)
