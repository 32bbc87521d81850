"""Solution verification and budget: orders, index, corners, tolerances."""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.result import FeValue
from crosscheck.dossier.assumptions import register
from crosscheck.dossier.convergence import Run, convergence_index, observed_order, sharpest_corner
from crosscheck.dossier.holding import Track, crossings_of
from crosscheck.dossier.suite import read_suite
from crosscheck.faults import SectionFaults

from .conftest import suite_file


def run_of(value: float, unknowns: int) -> Run:
    return Run((1e-3,), 3, unknowns, 1, True, {"torsion_constant": FeValue(value, value, value, "bound")})


@pytest.mark.parametrize("order", [1.0, 4.0 / 3.0, 2.0, 6.0])
def test_three_meshes_show_their_order(order):
    unknowns = [400, 900, 2500]
    values = [7.0 + 3.0 * n ** (-order / 2.0) for n in unknowns]
    found = observed_order(values, unknowns)
    assert found is not None
    assert_allclose(found, order, rtol=1e-6)


def test_values_that_swing_show_no_order():
    assert observed_order([1.0, 2.0, 1.5], [100, 400, 1600]) is None


def test_index_of_three_meshes_is_the_published_one():
    # f = 1 + h^2 on h = 4, 2, 1: e21 = 3, r = 2, p = 2, so 1.25 |e21|/(4 - 1) over the normaliser.
    runs = [run_of(1.0 + h * h, 1600 // (h * h)) for h in (4, 2, 1)]
    index = convergence_index("torsion_constant", runs, 10.0, None)
    assert_allclose((index.order, index.ratio, index.factor), (2.0, 2.0, 1.25), rtol=1e-9)
    assert_allclose(index.index, 1.25 * 3.0 / 3.0 / 10.0, rtol=1e-9)


def test_two_meshes_take_the_order_of_the_corner_and_the_larger_factor():
    index = convergence_index("torsion_constant", [run_of(5.0, 100), run_of(2.0, 400)], 1.0, 4.0 / 3.0)
    assert (index.factor, index.grids) == (3.0, 2)
    assert_allclose(index.index, 3.0 * 3.0 / (2.0 ** (4.0 / 3.0) - 1.0), rtol=1e-12)


def test_one_mesh_has_no_index_and_says_so():
    index = convergence_index("torsion_constant", [run_of(5.0, 100)], 1.0, None)
    assert index.index is None
    assert index.reason is not None


@pytest.mark.parametrize("turned", [False, True])
def test_the_sharpest_corner_is_the_re_entrant_one(turned):
    angle = np.array([[0, 0], [4, 0], [4, 1], [1, 1], [1, 4], [0, 4]], dtype=float)
    loop = angle[::-1] if turned else angle
    found = sharpest_corner([loop])
    assert found is not None
    assert_allclose(found, 1.5 * math.pi, rtol=1e-12)


def test_a_hole_with_sharp_corners_counts_and_a_round_outline_does_not():
    turn = np.linspace(0.0, math.tau, 90, endpoint=False)
    ring = 10.0 * np.column_stack((np.cos(turn), np.sin(turn)))
    hole = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1]], dtype=float)
    assert sharpest_corner([ring]) is None
    assert_allclose(sharpest_corner([ring, hole]), 1.5 * math.pi, rtol=1e-12)


@pytest.mark.long
def test_intervals_shrink_with_unknowns(rail):
    halves = [run.values["torsion_constant"].half_width for run in rail.convergence.runs]
    assert len(halves) > 1
    assert halves == sorted(halves, reverse=True)
    assert_allclose(rail.convergence.corner_order, 4.0 / 3.0, rtol=1e-9)


def test_thickness_moves_the_area_by_its_tolerance_and_not_the_difference(rail):
    budgets = {(b.quantity, b.load): b for b in rail.uncertainty.budgets}
    area = budgets["area", None]
    assert_allclose(area.moves["thickness"], 0.04, rtol=1e-9)
    assert_allclose(area.shares["thickness"], 0.0, atol=1e-12)
    # Ixx goes as the cube of the depth; the difference moves far less than the value.
    ixx = budgets["second_moment_xx", None]
    assert ixx.moves["dimension"] > 0.01
    assert 0.0 < ixx.shares["dimension"] < 0.01 * ixx.moves["dimension"]
    assert rail.uncertainty.runs == 6


def test_shares_add_up_to_the_total(rail):
    for budget in rail.uncertainty.budgets:
        parts = [budget.numerical, budget.curves, budget.poisson or 0.0]
        parts += [share or 0.0 for share in budget.shares.values()]
        assert_allclose(budget.total, sum(parts), rtol=1e-12)
        assert budget.shares["material"] is None


def test_a_crossing_is_placed_between_logarithms():
    # A share of 8 f^3 crosses one at f = 1/2, wherever the factors beside it lie.
    factors = (0.25, 0.4, 0.7, 1.0)
    track = Track("area", None, tuple(8.0 * f**3 for f in factors))
    (crossing,) = crossings_of(track, factors)
    assert (crossing.low, crossing.high, crossing.within_below) == (0.4, 0.7, True)
    assert_allclose(crossing.about, 0.5, rtol=1e-9)
    assert crossings_of(Track("area", None, (2.0, None, 0.5, 0.2)), factors) == []


def test_thicker_walls_leave_theory_behind(rail):
    assert rail.holding is not None
    used = {(track.quantity, track.load): track.used for track in rail.holding.tracks}
    today = rail.holding.factors.index(1.0)
    for row in rail.result.quantities:
        if row.verdict is not None:
            assert used[row.name, row.load][today] == row.criterion_used
    torsion = [share for share in used["torsion_constant", None] if share is not None]
    assert torsion == sorted(torsion)


def test_the_register_says_what_this_section_shows(rail):
    entries = {a.name: a for a in register(rail.section, rail.result, rail.convergence)}
    length = next(row for row in rail.result.indicators if row.name == "characteristic_length")
    assert f"{length.fe.value:.0f}" in entries["Unrestrained warping"].evidence
    assert "270 degrees" in entries["No peak stress at sharp re-entrant corners"].evidence
    # The web is the most slender by width over thickness, the flanges by their free edge: 35/4 against 80/4.
    gross = entries["Gross section, no buckling, no holes"].evidence
    assert "one edge free" in gross
    ratio = 35.0 / 4.0
    stress = 0.425 * math.pi**2 * 72000 / (12 * (1 - 0.33**2)) / ratio**2
    assert f"{stress:.0f}"[:2] in gross


def test_stored_evidence_is_read_with_its_hash(tmp_path):
    suite = read_suite(str(suite_file(tmp_path / "e.json", failed=True)))
    assert suite.passed == 1
    assert len(suite.checks) == 2
    assert len(suite.sha256) == 64
    assert "1 of 2 checks" in suite.words


@pytest.mark.parametrize("text", ["", "[]", "{}", '{"outcomes": []}', '{"outcomes": [1]}', "nonsense"])
def test_what_is_no_evidence_is_refused(tmp_path, text):
    path = tmp_path / "e.json"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(SectionFaults):
        read_suite(str(path))
