"""Exact rows once more, without crosscheck's arithmetic and without either side."""

from __future__ import annotations

import ast
import math
import operator
import tomllib
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from crosscheck.case_files import case_folder
from crosscheck.section_file.model import SectionFile, WallSpec
from crosscheck.verification.reference import ReferenceCase, ReferenceRow
from crosscheck.verification.row_file import printed_half_unit, read_rows, row_files

FOLDER = case_folder() / "reference"
EXACT: list[tuple[ReferenceCase, ReferenceRow]] = [
    (case, row)
    for path in row_files(FOLDER)
    for case in read_rows(path)
    for row in case.rows
    if row.obtained == "exact"
]
FORMULAS = [(case, row) for case, row in EXACT if printed_half_unit(row.printed) is None]
MOMENTS = (
    "area", "centroid_x", "centroid_y", "second_moment_xx", "second_moment_yy", "product_moment_xy",
)  # fmt: skip
OPERATORS: dict[type, Any] = {
    ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul, ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}  # fmt: skip
FUNCTIONS = {
    "sqrt": math.sqrt,
    "sin": lambda degrees: math.sin(math.radians(degrees)),
    "cos": lambda degrees: math.cos(math.radians(degrees)),
    "tan": lambda degrees: math.tan(math.radians(degrees)),
}


def plain(text: str, names: dict[str, float]) -> float:
    """Arithmetic by Python's own parser."""

    def of(node: ast.expr) -> float:
        match node:
            case ast.Constant():
                return float(node.value)
            case ast.Name():
                return math.pi if node.id == "pi" else names[node.id]
            case ast.BinOp():
                return OPERATORS[type(node.op)](of(node.left), of(node.right))
            case ast.UnaryOp():
                return -of(node.operand) if isinstance(node.op, ast.USub) else of(node.operand)
            case ast.Call():
                return FUNCTIONS[ast.unparse(node.func)](of(node.args[0]))
        raise AssertionError(ast.dump(node))

    return of(ast.parse(text, mode="eval").body)


def parameters(case: ReferenceCase) -> dict[str, float]:
    """Parameters of the section file, worked out from its text."""
    document = tomllib.loads(Path(case.section.path).read_text(encoding="utf-8"))
    names: dict[str, float] = {}
    for name, raw in {**document.get("parameters", {}), **case.overrides}.items():
        names[name] = plain(str(raw), names)
    return names


@pytest.mark.parametrize(("case", "row"), FORMULAS, ids=[row.name for _, row in FORMULAS])
def test_formula_by_another_arithmetic(case: ReferenceCase, row: ReferenceRow) -> None:
    assert row.value == pytest.approx(plain(row.printed, parameters(case)), rel=1e-11)


def midline_moments(section: SectionFile) -> dict[str, float]:
    """Integrals along the midlines by the midpoint rule, e-weighted, corners sharp."""
    base = section.materials[section.base_material].E if section.base_material else 1.0
    parts = []
    for wall in section.walls:
        share = wall.direct_share * (section.materials[wall.material].E / base if wall.material else 1.0)
        places, part = along(section, wall, 20000)
        parts.append((places, share * part))
    booms = [(section.points[boom.point], boom.area) for boom in section.booms if boom.point]
    x = np.concatenate([p[:, 0] for p, _ in parts] + [np.array([at[0] for at, _ in booms])])
    y = np.concatenate([p[:, 1] for p, _ in parts] + [np.array([at[1] for at, _ in booms])])
    a = np.concatenate([part for _, part in parts] + [np.array([area for _, area in booms])])
    area = a.sum()
    x_c, y_c = (a * x).sum() / area, (a * y).sum() / area
    x, y = x - x_c, y - y_c
    found = (area, x_c, y_c, (a * y * y).sum(), (a * x * x).sum(), (a * x * y).sum())
    return dict(zip(MOMENTS, map(float, found), strict=True))


def along(section: SectionFile, wall: WallSpec, count: int) -> tuple[np.ndarray, np.ndarray]:
    """Middles (n, 2) and areas (n,) of equal pieces of a wall."""
    start, end = (np.array(section.points[name]) for name in (wall.start, wall.end))
    u = (np.arange(count) + 0.5) / count
    t = wall.thickness[0] + (wall.thickness[1] - wall.thickness[0]) * u
    if wall.arc_through is None:
        length = np.hypot(*(end - start))
        return start + u[:, None] * (end - start), t * length / count
    m = np.array(wall.arc_through)
    # centre: equidistant from three places
    matrix = 2 * np.array([m - start, end - start])
    centre = np.linalg.solve(matrix, [m @ m - start @ start, end @ end - start @ start])
    first, middle, last = (math.atan2(*(p - centre)[::-1]) for p in (start, m, end))
    sweep = (last - first) % math.tau
    if (middle - first) % math.tau > sweep:
        sweep -= math.tau
    radius = np.hypot(*(start - centre))
    angle = first + sweep * u
    places = centre + radius * np.stack([np.cos(angle), np.sin(angle)], axis=1)
    return places, t * radius * abs(sweep) / count


BY_MIDPOINTS = [
    (case, row)
    for case, row in EXACT
    if row.quantity.removeprefix("-") in MOMENTS
    and "theory" in row.sides
    and row.level == "midline"
    and not any(boom.wall for boom in case.section.booms)
]


@pytest.mark.parametrize(("case", "row"), BY_MIDPOINTS, ids=[row.name for _, row in BY_MIDPOINTS])
def test_moments_by_the_midpoint_rule(case: ReferenceCase, row: ReferenceRow) -> None:
    assert len(BY_MIDPOINTS) >= 12
    found = midline_moments(case.section)[row.quantity.removeprefix("-")]
    sign = -1.0 if row.quantity.startswith("-") else 1.0
    assert row.value == pytest.approx(sign * found, rel=1e-7)


def rectangle_series(b: float) -> tuple[float, float]:
    """J/(b t^3) and T/(tau_max b t^2) of a rectangle b x 1, b >= 1 (Timoshenko and Goodier, art. 109)."""
    n = np.arange(1.0, 2001.0, 2.0)
    a = np.minimum(n * np.pi * b / 2, 300.0)
    k1 = 1 / 3 * (1 - 192 / (np.pi**5 * b) * float((np.tanh(a) / n**5).sum()))
    stress = 1 - 8 / np.pi**2 * float((1 / (n**2 * np.cosh(a))).sum())
    return k1, k1 / stress


@pytest.mark.parametrize(("name", "b"), [("A20", 1), ("A22", 1.5), ("A23", 2), ("A25", 3), ("A26", 4),
                                         ("A27", 5), ("A28", 10)])  # fmt: skip
def test_rectangles_by_their_series(name: str, b: float) -> None:
    known = {row.name: row.value for _, row in EXACT}
    k1, k2 = rectangle_series(b)
    if name != "A26":
        assert known[f"{name}J recomputed"] == pytest.approx(k1, rel=1e-12)
    if name != "A27":
        assert known[f"{name}S recomputed"] == pytest.approx(k2, rel=1e-11)
    if b in (1, 2, 5, 10):
        assert known[f"rectangle {b} x 1 by b t^3/3"] == pytest.approx(1 / (3 * k1) - 1, abs=1e-11)


@pytest.mark.parametrize(("name", "degrees"), [("A40", 45.0), ("A42", 90.0), ("A44", 180.0), ("A45", 270.0),
                                               ("A47", 360.0)])  # fmt: skip
def test_sectors_by_a_series_of_their_own(name: str, degrees: float) -> None:
    """phi = sum of f_m(r) sin(m theta) over m = (2 k + 1) pi/a, f'' + f'/r - m^2 f/r^2 = -8/(pi (2 k + 1)).

    f = c (r^2 - r^m)/(m^2 - 4), c = 8/(pi (2 k + 1)); where m = 2, f = -c r^2 ln(r)/4. J = 2 integral of phi.
    """
    a = math.radians(degrees)
    k = 2.0 * np.arange(2_000_000) + 1.0
    m, c = k * math.pi / a, 8.0 / (math.pi * k)
    around = 2.0 / m
    with np.errstate(divide="ignore", invalid="ignore"):
        radial = c * (1 / 4 - 1 / (m + 2)) / (m**2 - 4)
    radial[np.abs(m - 2) < 1e-9] = (c / 64)[np.abs(m - 2) < 1e-9]
    j = 2 * float((radial * around).sum())
    known = {row.name: row.value for _, row in EXACT}
    assert known[f"{name} recomputed"] == pytest.approx(j, rel=1e-8)
