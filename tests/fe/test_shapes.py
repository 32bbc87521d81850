"""Thirteen shapes from stout to slender: the default accuracy is kept, and finer answers lie inside."""

from __future__ import annotations

from functools import cache

import pytest
from fe_sections import SHAPES, shape

from fe_models import DEFAULT_ACCURACY, Solution, solve

RATIOS = (5.0, 20.0, 100.0, 1000.0)
TWO_SIDED = ("torsion_constant", "shear_centre_x", "shear_centre_y", "shear_area_x", "shear_area_y")


@cache
def usual(name: str, ratio: float) -> Solution:
    return solve(shape(name, ratio))


@pytest.mark.parametrize("ratio", RATIOS)
@pytest.mark.parametrize("name", SHAPES)
def test_default_accuracy(name: str, ratio: float) -> None:
    """Half-width of J at most 1e-5 J, of the shear centre at most 1e-5 D; all self-checks pass."""
    solution = usual(name, ratio)
    q, extent = solution.quantities, solution.outline.extent
    assert DEFAULT_ACCURACY == 1e-5
    # at depth over thickness 5 every shape still has all its cells
    walls, points = len(solution.outline.bands), len(solution.outline.joints)
    assert len(solution.outline.loops) == walls - points + 2
    assert q["torsion_constant"].half_width <= 1e-5 * q["torsion_constant"].value
    for n in ("shear_centre_x", "shear_centre_y"):
        assert q[n].half_width <= 1e-5 * extent
    assert solution.met
    assert "NOT" not in solution.accuracy_note
    assert [c for c in solution.checks if not c.passed] == []
    assert solution.mesh.order in (3, 4)
    for n in TWO_SIDED:
        assert q[n].basis == "bound"
        assert q[n].low <= q[n].value <= q[n].high


def _finer_answer_overlaps(name: str, ratio: float) -> None:
    coarse, fine = usual(name, ratio), solve(shape(name, ratio), 1e-7)
    assert fine.met
    extent = fine.outline.extent
    j = fine.quantities["torsion_constant"]
    assert j.half_width <= 1e-7 * j.value
    for n in TWO_SIDED:
        one, two = coarse.quantities[n], fine.quantities[n]
        assert one.low <= two.high, n
        assert two.low <= one.high, n
        # the finer interval is narrower, so the coarse one is not merely the same run
        assert two.half_width <= max(0.5 * one.half_width, 3e-10 * max(extent, abs(two.value))), n
    for n in ("shear_centre_x", "shear_centre_y"):
        assert fine.quantities[n].half_width <= 1e-7 * extent
    estimate = coarse.quantities["warping_constant"]
    shift = abs(estimate.value - fine.quantities["warping_constant"].value)
    # an estimate, not judged below 1e-7 of the value
    allowed = estimate.half_width + fine.quantities["warping_constant"].half_width
    assert shift <= allowed + 1e-7 * estimate.value


@pytest.mark.parametrize("name", SHAPES)
def test_finer_answer_overlaps(name: str) -> None:
    """Accuracy 1e-7 at depth/t 20: intervals overlap, the warping constant within its estimate."""
    _finer_answer_overlaps(name, 20.0)


@pytest.mark.long
@pytest.mark.parametrize("ratio", [5.0, 100.0, 1000.0])
@pytest.mark.parametrize("name", SHAPES)
def test_finer_answer_overlaps_stout_to_slender(name: str, ratio: float) -> None:
    _finer_answer_overlaps(name, ratio)
