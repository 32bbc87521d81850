"""Rows of cases/reference/published.json about solids, and that every row is run or has its reason."""

from __future__ import annotations

import ast
import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from test_published import CASES, MIDLINE_ONLY, NOT_RUN, ROWS, TABLES, Answer, tube
from theory_sections import channel, polyline

from beam_theory import Corner, Load, Section, Wall, solve, stress

# Rows whose solid or closed value test_corrected.py runs at level `corrected`; each test is marked with its
# rows.
# The hand formulas of D10, D12 and D14 themselves are another convention (three free ends at an angle) and
# are not used there.
CORRECTED = {
    "A31", "A33", "D01", "D023", "D024", "D030", "D031", "D050", "D052", "D054", "D10", "D12", "D14", "D18",
    "D19", "D20t", "D22t", "D23t", "D25t", "D27t", "D28t", "D310", "D311", "D313", "D320", "D321", "D323",
    "D350", "D36", "D16",
}  # fmt: skip

# Rows about solids that no level of theory answers, each with its own reason.
_TREFFTZ = "shear centre of the solid (Trefftz); theory's is that of the midline, compared in "
_FILLET = "stress concentration at a fillet: no level of theory gives stress in a joint"
_FORMULA = "Roark's re-entrant formula beside the solid, itself 30 % off: not a formula of beam_theory"
SOLIDS: dict[str, str] = {
    "D300": _TREFFTZ + "C01",
    "D303": _TREFFTZ + "C01",
    "D330": _TREFFTZ + "C12e",
    "D332": _TREFFTZ + "C12e; t/R = 0.4 is no thin wall",
    "D340": _TREFFTZ + "C13e",
    "D400": _FILLET,
    "D402": _FILLET,
    "D403": _FILLET,
    "D410": _FORMULA + " (r/t = 0.1)",
    "D411": _FORMULA + " (r/t = 0.25)",
    "D412": _FORMULA + " (r/t = 0.5)",
    "D413": _FORMULA + " (r/t = 1)",
    "D420": "peak stress at the inner corner of a box: no level of theory gives stress in a joint",
    "D422": "peak stress at the inner corner of a box: no level of theory gives stress in a joint",
    "D55": "flat strip loaded flatwise: shear across the thickness, which thin-walled theory leaves out",
}


def thin_rows() -> list[str]:
    """Rows about thin walls: the C rows and the D rows."""
    return [name for name in ROWS if name[0] in "CD" or name in NOT_RUN]


def strip_ratio(length: float) -> float:
    """J over b t^3/3 of a rectangle at level corrected, t = 1."""
    strip = Section({"a": (0.0, 0.0), "b": (length, 0.0)}, (Wall("w", "a", "b", (1.0, 1.0)),))
    return solve(strip, "corrected").require("torsion_constant") / (length / 3)


def tube_stress_ratio(t: float) -> float:
    """Largest stress of a tube of mean radius 1 at level corrected, over Bredt's T/(2 A t)."""
    found = stress(solve(tube(1, t), "corrected"), Load("torque", torque=1.0))
    return (
        max(float(np.abs(found.shear(w.name, np.array([0.5]))).max()) for w in tube(1, t).walls)
        * 2
        * math.pi
        * t
    )


def solid_peak_flow(t: float) -> float:
    """Flow in the middle of the web of a channel per unit Vy."""
    flow = solve(channel(50, 100, t), "corrected").unit_flow("Vy")
    return abs(float(flow.at("w1", np.array([0.5]))[0]))


# Rows of solids that level corrected comes near to: answer, and tolerance on the solid's value.
NEAR: dict[str, tuple[Answer, float]] = {
    "D020": (lambda: strip_ratio(1.0), 0.13),
    "D021": (lambda: strip_ratio(2.0), 3e-3),
    "D040": (lambda: tube_stress_ratio(0.05), 1e-5),
    "D041": (lambda: tube_stress_ratio(0.2), 1e-5),
    "D06s": (lambda: corrected_box(100, 100, 5), 0.025),
    "D600": (lambda: solid_peak_flow(2), 1e-3),
    "D602": (lambda: solid_peak_flow(20), 5e-2),
}


def corrected_box(h: float, b: float, t: float) -> float:
    places = [(0, 0), (h - t, 0), (h - t, b - t), (0, b - t)]
    corners = tuple(Corner(f"p{i}", t, 1.5 * t) for i in range(4))
    return solve(replace(polyline(places, t, closed=True), corners=corners), "corrected").require(
        "torsion_constant"
    )


@pytest.mark.parametrize("name", sorted(NEAR))
def test_solid_value_of_a_row(name: str) -> None:
    answer, tolerance = NEAR[name]
    assert abs(answer() / ROWS[name]["independent_value"] - 1) <= tolerance, (ROWS[name]["title"], answer())


def test_every_thin_walled_row_is_accounted_for() -> None:
    """Every row about thin walls is run or has its reason, once; none is named that is not there."""
    groups = [set(CASES), set(MIDLINE_ONLY), set(TABLES), set(NOT_RUN), CORRECTED, set(SOLIDS), set(NEAR)]
    named = [name for group in groups for name in group]
    assert len(named) == len(set(named))
    assert set(thin_rows()) <= set(named)
    assert set(named) <= set(ROWS)


def test_corrected_rows_are_those_that_test_corrected_runs() -> None:
    """Both ways: the ids that tests there are marked with are the ids relied on here."""
    tree = ast.parse((Path(__file__).parent / "test_corrected.py").read_text(encoding="utf-8"))
    marked: set[str] = set()
    for function in tree.body:
        if not isinstance(function, ast.FunctionDef):
            continue
        for mark in function.decorator_list:
            if isinstance(mark, ast.Call) and ast.unparse(mark.func) == "pytest.mark.rows":
                assert function.name.startswith("test_")
                marked |= {ast.literal_eval(argument) for argument in mark.args}
    assert marked == CORRECTED


@pytest.mark.parametrize("t", [0.01, 0.05, 0.2, 0.5])
def test_stress_of_the_round_tube_is_exact(t: float) -> None:
    """tau = T r/J: (1 + t/2R)/(1 + t^2/4R^2) times Bredt's at the outer face (exact)."""
    assert abs(tube_stress_ratio(t) / ((1 + t / 2) / (1 + t * t / 4)) - 1) <= 1e-12
