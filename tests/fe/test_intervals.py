"""Intervals as objects, and what a solution says about the accuracy it was asked for."""

from __future__ import annotations

import math

import pytest
from fe_sections import channel, lopsided_cell, rectangle, shape
from numpy.testing import assert_allclose

from fe_models import ACCURACY_RANGE, Interval, Solution, SolveError, solution, solve
from fe_models.density import Density
from fe_models.intervals import around

COARSE = Density(order=3, eta=1e-1, largest=2.0, slope=3.0, first=6.0, ratio=6.0)


def reached(found: Solution) -> float:
    """Largest relative half-width of what the accuracy is promised for, worked out anew."""
    q, extent = found.quantities, found.outline.extent
    widths = [0.5 * (q["torsion_constant"].high - q["torsion_constant"].low) / q["torsion_constant"].value]
    widths += [0.5 * (q[n].high - q[n].low) / extent for n in ("shear_centre_x", "shear_centre_y")]
    return max(widths)


def test_around_and_half_width() -> None:
    made = around(3.0, 0.5, "bound")
    assert (made.value, made.low, made.high, made.half_width) == (3.0, 2.5, 3.5, 0.5)
    assert made.known == 3.0
    assert made.basis == "bound"


def test_undefined_interval() -> None:
    none = Interval(None, None, None, "exact", "both principal moments are equal")
    assert none.half_width == 0.0
    with pytest.raises(ValueError, match="principal moments"):
        _ = none.known


def test_meet_of_bounds_is_their_intersection() -> None:
    met = Interval(2.0, 1.0, 3.0, "bound").meet(Interval(3.0, 2.0, 4.0, "bound"))
    assert (met.value, met.low, met.high) == (2.5, 2.0, 3.0)
    met = Interval(2.0, 1.0, 3.0, "bound").meet(Interval(2.5, 2.4, 2.6, "bound"))
    assert (met.low, met.high) == (2.4, 2.6)


def test_meet_leaves_estimates_alone() -> None:
    one = Interval(2.0, 1.0, 3.0, "estimate")
    assert one.meet(Interval(2.0, 1.9, 2.1, "estimate")) == one
    assert Interval(2.0, 1.0, 3.0, "bound").meet(one) == Interval(2.0, 1.0, 3.0, "bound")


def test_widened_and_padded() -> None:
    one = Interval(-4.0, -5.0, -3.0, "bound")
    assert one.padded(0.5) == Interval(-4.0, -5.5, -2.5, "bound")
    assert one.widened(0.25) == Interval(-4.0, -6.0, -2.0, "bound")
    assert one.padded(0.0) is one


@pytest.mark.parametrize("accuracy", [1e-2, 1e-3, 1e-5, 1e-6, 1e-7, 1e-8])
@pytest.mark.parametrize("name", ["channel", "lopsided cell"])
def test_request_is_met_and_said_so(name: str, accuracy: float) -> None:
    section = {"channel": channel(50.0, 100.0, 5.0), "lopsided cell": lopsided_cell()}[name]
    found = solve(section, accuracy)
    assert found.met
    assert reached(found) <= accuracy
    assert f"asked {accuracy:g}" in found.accuracy_note
    assert "NOT" not in found.accuracy_note
    said = float(found.accuracy_note.split("reached ")[1].split()[0].rstrip(","))
    assert_allclose(said, reached(found), rtol=0.1)


@pytest.mark.parametrize("passes", [1, 2])
@pytest.mark.parametrize("name", ["channel", "lopsided cell"])
def test_request_not_met_is_said(name: str, passes: int, monkeypatch: pytest.MonkeyPatch) -> None:
    """A coarse start and no time to refine: not met, said in words, and the wide intervals still hold."""
    section = {"channel": channel(50.0, 100.0, 5.0), "lopsided cell": lopsided_cell()}[name]
    exact = solve(section, 1e-7).quantities
    monkeypatch.setattr(solution, "MOST_PASSES", passes)
    monkeypatch.setattr(solution, "_start", lambda *_: COARSE)
    found = solve(section, 1e-7)
    assert found.mesh.passes == passes
    assert reached(found) > 1e-7
    assert not found.met
    assert "NOT REACHED" in found.accuracy_note
    for n in ("torsion_constant", "shear_centre_x", "shear_centre_y", "shear_area_x", "shear_area_y"):
        assert found.quantities[n].basis == "bound"
        assert found.quantities[n].low <= exact[n].high
        assert exact[n].low <= found.quantities[n].high
        assert found.quantities[n].half_width > exact[n].half_width


def test_refinement_helps(monkeypatch: pytest.MonkeyPatch) -> None:
    """From the coarse start the refinement itself reaches the default accuracy, narrower with every pass."""
    told: list[str] = []
    monkeypatch.setattr(solution, "_start", lambda *_: COARSE)
    found = solve(channel(50.0, 100.0, 5.0), 1e-5, progress=told.append)
    assert found.mesh.passes == len(told) > 1
    assert found.met
    excess = [float(t.split("unknowns, ")[1].split()[0]) for t in told]
    assert excess == sorted(excess, reverse=True)
    assert excess[0] > 1.0 >= excess[-1]


def test_mesh_failure_in_refinement_leaves_the_last_answer(monkeypatch: pytest.MonkeyPatch) -> None:
    """A finer mesh that cannot be made: the answer before it stands, and is not claimed to be met."""
    monkeypatch.setattr(solution, "_start", lambda *_: COARSE)
    real, calls = solution._fields, []

    def fails_later(*args: object) -> object:
        calls.append(1)
        if len(calls) > 1:
            raise SolveError("no finer mesh")
        return real(*args)

    monkeypatch.setattr(solution, "_fields", fails_later)
    found = solve(channel(50.0, 100.0, 5.0), 1e-6)
    assert len(calls) == 2
    assert not found.met
    assert "NOT REACHED" in found.accuracy_note


@pytest.mark.parametrize("accuracy", [0.0, -1e-5, 9e-9, 2e-2, 1.0, math.nan, math.inf])
def test_accuracy_out_of_range_is_refused(accuracy: float) -> None:
    with pytest.raises(ValueError, match=r"1e-08 to 0\.01"):
        solve(rectangle(30.0, 4.0), accuracy)
    assert ACCURACY_RANGE == (1e-8, 1e-2)


@pytest.mark.parametrize("ratio", [2.0, 2.2, 2.5, 2.6, 2.8, 3.0, 3.5])
def test_walls_hardly_long_enough_for_a_strip(ratio: float) -> None:
    """A strip of half a thickness between its two joints refines like any other part."""
    assert solve(rectangle(10.0 * ratio, 10.0)).met


def test_lower_accuracy_costs_less() -> None:
    section = shape("unequal I", 20.0)
    cheap, dear = solve(section, 1e-3), solve(section, 1e-8)
    assert cheap.mesh.unknowns < 0.5 * dear.mesh.unknowns
    assert reached(dear) < 1e-3 * reached(cheap)


@pytest.mark.parametrize("name", ["torsion_constant", "shear_centre_x", "shear_centre_y"])
def test_each_promise_counts(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """One interval of the three wider than asked, the others narrow: not met."""
    real = solution.quantities

    def widened(*args: object) -> dict[str, Interval]:
        made = real(*args)
        scale = made[name].value if name == "torsion_constant" else 130.43  # its larger overall dimension
        return made | {name: made[name].padded(2e-5 * scale)}

    monkeypatch.setattr(solution, "MOST_PASSES", 1)
    assert solve(lopsided_cell(), 1e-5).met
    monkeypatch.setattr(solution, "quantities", widened)
    found = solve(lopsided_cell(), 1e-5)
    assert not found.met
    assert "NOT REACHED" in found.accuracy_note
    assert_allclose(reached(found), 2e-5, rtol=0.5)
