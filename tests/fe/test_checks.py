"""Every self-check can fail: deliberate faults in a sound solution are found by the check meant for them."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from fe_sections import lopsided_cell, moved

from fe_models import Check, Interval, Solution, solve
from fe_models.checks import check, self_checks
from fe_models.fields import Fields
from fe_models.outline import Outline, outline


@cache
def sound() -> Solution:
    return solve(lopsided_cell(), 1e-4)


def failed(
    fields: Fields | None = None, solid: Outline | None = None, found: dict[str, Interval] | None = None
) -> set[str]:
    """Names of the checks that fail with these parts put in place of the sound ones."""
    made = self_checks(fields or sound().fields, solid or sound().outline, found or dict(sound().quantities))
    return {c.name for c in made if not c.passed}


def test_sound_solution_passes() -> None:
    assert failed() == set()
    assert len({c.name for c in sound().checks}) == len(sound().checks) >= 10


@pytest.mark.parametrize(
    ("value", "allowed", "passed"),
    [(1.0, 2.0, True), (2.0, 2.0, True), (2.1, 2.0, False), (math.nan, 2.0, False), (math.inf, 2.0, False)],
)
def test_a_check_passes_only_below_what_is_allowed(value: float, allowed: float, passed: bool) -> None:
    assert check("name", value, allowed) == Check("name", pytest.approx(value, nan_ok=True), allowed, passed)


def test_wrong_outline_is_found() -> None:
    larger = outline(moved(lopsided_cell(), 1.0 + 1e-7))
    turned = outline(moved(lopsided_cell(), complex(math.cos(1e-4), math.sin(1e-4))))
    for solid in (larger, turned):
        assert any(name.startswith("mesh") and "outline" in name for name in failed(solid=solid))


def test_residual_is_found() -> None:
    names = failed(replace(sound().fields, residual=1e-3))
    assert names == {"residual of the kinematic equations"}
    assert failed(replace(sound().fields, residual=math.nan)) == names


@pytest.mark.parametrize("kind", ["kinematic", "static"])
@pytest.mark.parametrize("axis", [0, 1])
def test_lost_force_is_found(axis: int, kind: str) -> None:
    fields = sound().fields
    pairs = list(fields.flexure)
    pairs[axis] = replace(pairs[axis], **{kind: getattr(pairs[axis], kind) * (1 + 1e-5)})
    names = failed(replace(fields, flexure=tuple(pairs)))
    assert f"resultant of the {kind} field of unit {('Vx', 'Vy')[axis]}" in names


@pytest.mark.parametrize("kind", ["kinematic", "static"])
def test_force_of_torsion_is_found(kind: str) -> None:
    fields = sound().fields
    stress = getattr(fields.torsion, kind)
    off = stress + 1e-5 * np.abs(stress).max()
    assert f"force of the {kind} field of unit twist" in failed(
        replace(fields, torsion=replace(fields.torsion, **{kind: off}))
    )


@pytest.mark.parametrize("low", [9.0, math.nan])
def test_crossed_or_undefined_interval_is_found(low: float) -> None:
    """Low above high, or bounds that are not numbers."""
    found = dict(sound().quantities) | {"shear_area_x": Interval(5.0, low, 1.0, "bound")}
    assert "intervals with low above high" in failed(found=found)


@pytest.mark.parametrize("axis", ["x", "y"])
def test_wrong_shear_centre_is_found(axis: str) -> None:
    q = sound().quantities[f"shear_centre_{axis}"]
    shift = 1e-3 * sound().outline.extent
    off = Interval(q.value + shift, q.low + shift, q.high + shift, q.basis)
    names = failed(found=dict(sound().quantities) | {f"shear_centre_{axis}": off})
    assert names == {"shear centre from flow moments against warping integrals"}


def test_contradicting_bounds_are_found() -> None:
    """Bounds of one quantity from two meshes that exclude each other prove a fault: it must not be silent."""
    met = Interval(1.0, 0.9, 1.1, "bound").meet(Interval(2.0, 1.9, 2.1, "bound"))
    assert "intervals with low above high" in failed(found=dict(sound().quantities) | {"shear_area_x": met})
