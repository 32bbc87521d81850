"""Promises that hold for every section: both sides, whole product, from the text of a file.

A failure that hypothesis shrinks becomes a file in ``regressions`` and is run for ever after.
"""

from __future__ import annotations

import math
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest
from any_section import Placement, Plan, placements, plans, text
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

import fe_models
from crosscheck import Result, SectionFaults, compare, read_section

REGRESSIONS = sorted((Path(__file__).parent / "regressions").glob("*.toml"))
EVERYDAY = settings(max_examples=8, deadline=None, derandomize=True, suppress_health_check=list(HealthCheck))
LONG = settings(max_examples=300, deadline=None, suppress_health_check=list(HealthCheck), print_blob=True)
CENTRES = (("centroid_x", "centroid_y"), ("shear_centre_x", "shear_centre_y"))
# Quantities without a direction, with their dimension as a power of length.
SCALARS = {
    "area": 2,
    "principal_moment_u": 4,
    "principal_moment_v": 4,
    "torsion_constant": 4,
    "warping_constant": 6,
}


def solved(content: str, accuracy: float = 1e-3) -> Result | None:
    """The comparison of a text; None where it is refused with a reason."""
    with TemporaryDirectory() as folder:
        path = Path(folder) / "any.toml"
        path.write_text(content, encoding="utf-8")
        return _compared(path, accuracy)


def _compared(path: Path, accuracy: float) -> Result | None:
    try:
        return compare(read_section(path), accuracy)
    except (SectionFaults, fe_models.OutlineError):
        return None


def sound(result: Result) -> list[str]:
    """What is wrong with a result in itself."""
    wrong = [f"{c.name}: {c.value:.3g} > {c.allowed:.3g}" for c in result.checks if not c.passed]
    for row in result.quantities:
        fe = row.fe
        if fe.value is not None and not fe.low <= fe.value <= fe.high:  # type: ignore[operator]
            wrong.append(f"{row.name} {row.load}: {fe}")
        if row.verdict is not None and row.judged_difference is None:
            wrong.append(f"{row.name} {row.load}: a verdict without a difference")
        for number in (fe.value, *row.theory.values()):
            if number is not None and not math.isfinite(number):
                wrong.append(f"{row.name} {row.load}: {number}")
    if not result.accuracy_met and "NOT REACHED" not in result.accuracy_note:
        wrong.append(result.accuracy_note)
    return wrong


def apart(name: str, one: Result, two: Result, factor: float, slack: float) -> list[str]:
    """Theory that differs beyond round-off, and intervals of FE that do not overlap."""
    a, b = one.quantity(name), two.quantity(name)
    wrong = []
    scale = abs(b.judged_theory or 0.0) + slack
    if (
        a.judged_theory is not None
        and abs(factor * a.judged_theory - (b.judged_theory or 0.0)) > 1e-8 * scale
    ):
        wrong.append(f"theory's {name}: {factor * a.judged_theory!r}, {b.judged_theory!r}")
    if a.fe.low is not None and a.fe.basis != "estimate" and b.fe.basis != "estimate":
        room = 1e-9 * scale
        if factor * a.fe.low > b.fe.high + room or b.fe.low > factor * a.fe.high + room:  # type: ignore[operator]
            wrong.append(f"FE's {name}: {factor} x {a.fe}, {b.fe}")
    return wrong


def invariance(plan: Plan, at: Placement) -> list[str]:
    """What differs between a plan as it is and the same plan in another placement."""
    one, two = solved(text(plan)), solved(text(plan, at))
    if one is None or two is None:
        return [] if one is two else ["refused in one placement only"]
    wrong = sound(one) + sound(two)
    for name, power in SCALARS.items():
        extent = one.quantity("torsion_constant").fe.value or 0.0
        slack = {"warping_constant": 1e4 * extent}.get(name, 0.0) * at.scale**power
        wrong += apart(name, one, two, at.scale**power, slack)
    for x, y in CENTRES:
        rows = [(result.quantity(x), result.quantity(y)) for result in (one, two)]
        if any(
            (row.judged_theory is None) != (rows[0][0].judged_theory is None) for pair in rows for row in pair
        ):
            wrong.append(f"theory's {x}, {y}: defined in one placement only")
            continue
        if rows[0][0].judged_theory is not None:
            places = [complex(p.judged_theory, q.judged_theory) for p, q in rows]
            if abs(at.place(places[0]) - places[1]) > 1e-8 * at.scale * 1e3:
                wrong.append(f"theory's {x}, {y}: {at.place(places[0])}, {places[1]}")
        found = [complex(p.fe.value, q.fe.value) for p, q in rows]
        widths = [math.hypot(p.fe.half_width, q.fe.half_width) for p, q in rows]
        reach = at.scale * widths[0] + widths[1] + 1e-6 * at.scale
        if abs(at.place(found[0]) - found[1]) > reach:
            wrong.append(f"FE's {x}, {y}: {at.place(found[0])}, {found[1]}, reach {reach}")
    return wrong


def refinement(plan: Plan) -> list[str]:
    """Bounds at 1e-3 and at 1e-6 that do not overlap."""
    coarse, fine = solved(text(plan)), solved(text(plan), 1e-6)
    if coarse is None or fine is None:
        return [] if coarse is fine else ["refused at one accuracy only"]
    wrong = sound(coarse) + sound(fine)
    for row in coarse.quantities:
        if row.load is None and row.fe.basis == "bound":
            wrong += [w for w in apart(row.name, coarse, fine, 1.0, 0.0) if w.startswith("FE")]
    return wrong


@given(plans(), placements())
@EVERYDAY
def test_placement_order_and_unit_do_not_matter(plan, at):
    assert invariance(plan, at) == []


@given(plans())
@EVERYDAY
def test_coarse_and_fine_intervals_overlap(plan):
    assert refinement(plan) == []


@given(st.data())
@settings(EVERYDAY, max_examples=4)
def test_both_sides_tend_to_each_other(data):
    plan = data.draw(plans(booms=False, thinner=0.25))
    thin = Plan(
        plan.places,
        tuple(
            type(w)(
                w.name, w.start, w.end, tuple(t / 8 for t in w.thickness), w.bulge, w.direct_share, w.material
            )
            for w in plan.walls
        ),
        {},
        {},
        plan.load,
        plan.materials,
    )
    wide = Plan(plan.places, plan.walls, {}, {}, plan.load, plan.materials)
    results = [solved(text(each), 1e-5) for each in (wide, thin)]
    if None in results:
        return
    for name in ("area", "torsion_constant", "shear_centre_x", "shear_centre_y"):
        stout, slender = (abs(r.quantity(name).judged_difference or 0.0) for r in results)
        # one power of the thickness at least, with room for terms of both signs that cancel in the stout one
        assert slender <= max(0.25 * stout, 2e-3), (name, stout, slender)


@pytest.mark.long
@given(plans(), placements())
@LONG
def test_placement_order_and_unit_do_not_matter_for_many(plan, at):
    assert invariance(plan, at) == []


@pytest.mark.long
@given(plans())
@LONG
def test_coarse_and_fine_intervals_overlap_for_many(plan):
    assert refinement(plan) == []


@pytest.mark.parametrize("path", REGRESSIONS, ids=lambda p: p.stem)
def test_what_once_failed(path):
    coarse = _compared(path, 1e-3)
    assert coarse is not None
    assert sound(coarse) == []
