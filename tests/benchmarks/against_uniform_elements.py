"""Torsion of a sharp channel: this project's strips and joints against uniform quadratic triangles.

Run by hand (needs the general-purpose library scikit-fem):

    python tests/benchmarks/against_uniform_elements.py [depth over thickness] [relative error ...]

The uniform elements give the kinematic torsion constant only. Ours is solved whole: both bounds of J, flexure
in both directions, both shear-centre coordinates and both shear areas. Times are the median of five pairs in
one run.
"""

from __future__ import annotations

import logging
import statistics
import sys
import time
from collections.abc import Iterator, Sequence

import numpy as np
import skfem
from skfem.helpers import dot, grad

from fe_models import Section, Wall, solve

PAIRS = 5
FINEST = 40
HEAD = """\
| depth / thickness | J within | uniform, unknowns | seconds | ours, unknowns | seconds | fewer | faster |
|---|---|---|---|---|---|---|---|"""


def channel(slenderness: float) -> Section:
    """Midline 100 x 50, sharp corners."""
    points = {"a": (50.0, -50.0), "b": (0.0, -50.0), "c": (0.0, 50.0), "d": (50.0, 50.0)}
    t = 100.0 / slenderness
    return Section(points, tuple(Wall(p + q, p, q, (t, t)) for p, q in ("ab", "bc", "cd")))


def uniform_torsion(slenderness: float, layers: int) -> tuple[float, int]:
    """J and unknowns of uniform quadratic triangles with ``layers`` squares through the thickness."""
    t = 100.0 / slenderness
    x = np.linspace(-t / 2, 50.0, round((50.0 + t / 2) / t * layers) + 1)
    y = np.linspace(-50.0 - t / 2, 50.0 + t / 2, round((100.0 + t) / t * layers) + 1)
    web, ends = np.searchsorted(x, t / 2 - 1e-9), np.searchsorted(y, -50.0 + t / 2 - 1e-9)
    parts = [
        skfem.MeshTri.init_tensor(x, y[: ends + 1]),
        skfem.MeshTri.init_tensor(x[: web + 1], y[ends : len(y) - ends]),
        skfem.MeshTri.init_tensor(x, y[len(y) - ends - 1 :]),
    ]
    mesh = parts[0] + parts[1] + parts[2]
    basis = skfem.Basis(mesh, skfem.ElementTriP2())
    stiffness = skfem.BilinearForm(lambda u, v, _: dot(grad(u), grad(v))).assemble(basis)
    load = skfem.LinearForm(lambda v, w: w.x[1] * grad(v)[0] - w.x[0] * grad(v)[1]).assemble(basis)
    warping = skfem.solve(*skfem.condense(stiffness, load, D=np.array([0])))
    squared = skfem.Functional(lambda w: (w["u"].grad[0] - w.x[1]) ** 2 + (w["u"].grad[1] + w.x[0]) ** 2)
    return float(squared.assemble(basis, u=basis.interpolate(warping))), len(warping)


def layers_needed(slenderness: float, error: float, exact: float) -> tuple[int, float]:
    """Layers at which the uniform elements first reach an error, and the error there."""
    for layers in range(2, FINEST + 1, 2 if error > 5e-5 else 4):
        j, _ = uniform_torsion(slenderness, layers)
        if abs(j / exact - 1.0) <= error:
            return layers, abs(j / exact - 1.0)
    return FINEST, abs(j / exact - 1.0)


def table(slenderness: float, errors: Sequence[float] = (1e-3, 1e-4, 1e-5)) -> Iterator[str]:
    """Rows of a Markdown table, one an error."""
    logging.getLogger("skfem").setLevel(logging.ERROR)
    section = channel(slenderness)
    solve(section)
    exact = solve(section, 1e-8).quantities["torsion_constant"].known
    for error in errors:
        layers, reached = layers_needed(slenderness, error, exact)
        theirs, ours = [], []
        for _ in range(PAIRS):
            start = time.perf_counter()
            _, many = uniform_torsion(slenderness, layers)
            middle = time.perf_counter()
            solution = solve(section, error)
            ours.append(time.perf_counter() - middle)
            theirs.append(middle - start)
        few = solution.mesh.unknowns
        ratio = statistics.median(a / b for a, b in zip(theirs, ours, strict=True))
        left = "" if reached <= error else f" ({reached:.1e} reached)"
        yield (
            f"| {slenderness:g} | {error:.0e} | {many:,}{left} | {statistics.median(theirs):.2f} | {few:,}"
            f" | {statistics.median(ours):.3f} | {many / few:.0f} x | {ratio:.1f} x |"
        )


def main(arguments: list[str]) -> None:
    """The table of one slenderness."""
    slenderness = float(arguments[0]) if arguments else 100.0
    errors = [float(a) for a in arguments[1:]] or [1e-3, 1e-4, 1e-5]
    print(HEAD)
    for row in table(slenderness, errors):
        print(row)


if __name__ == "__main__":
    main(sys.argv[1:])
