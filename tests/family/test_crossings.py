"""Brackets and their narrowing on functions whose roots are known."""

from __future__ import annotations

import math
from bisect import insort

import numpy as np
import pytest

from crosscheck.family.crossings import Sample, crossings, pieces, undecided, wanted


def refined(function, criterion, low, high, scan=25, error=0.0, most=40):
    """Samples of a scan and of every refinement, and how many refinements there were."""
    chance = np.random.default_rng(3)

    def sample(at):
        value = function(at)
        if value is None:
            return Sample(at, None)
        # FE's value is off by up to its error, and says so.
        return Sample(at, value + error * chance.uniform(-1, 1), error)

    samples = [sample(at) for at in np.linspace(low, high, scan)]
    count = 0
    for _ in range(most):
        more = wanted(samples, criterion, high - low)
        if not more:
            return samples, count
        for at in more:
            insort(samples, sample(at), key=lambda each: each.at)
            count += 1
    raise AssertionError("it never ends")


@pytest.mark.parametrize("error", [0.0, 1e-9, 1e-5, 1e-3])
def test_a_smooth_root_lies_inside_and_is_narrow(error):
    samples, count = refined(lambda p: p**2, 0.05, 0, 1, error=error)
    (found,) = crossings(samples, 0.05)
    exact = math.sqrt(0.05)
    assert found.low <= exact <= found.high
    assert found.outside_above
    assert found.high - found.low <= 1e-6 + 12 * error / (2 * exact)
    assert abs(found.value - exact) <= 1e-7 + 3 * error / (2 * exact)
    assert count <= 12


def test_the_kink_of_the_size_is_no_trouble():
    """From + 0.2 to - 0.2 within one step of the scan: two roots."""
    samples, _ = refined(lambda p: 0.2 * math.tanh(60 * (0.52 - p)), 0.05, 0, 1, scan=5)
    first, second = crossings(samples, 0.05)
    offset = math.atanh(0.25) / 60
    assert first.value == pytest.approx(0.52 - offset, abs=1e-6)
    assert second.value == pytest.approx(0.52 + offset, abs=1e-6)
    assert (first.outside_above, second.outside_above) == (False, True)
    (piece,) = pieces(samples, 0.05)
    assert (piece.start, piece.end) == (first.value, second.value)


def test_several_thresholds_and_what_holds_between():
    samples, _ = refined(lambda p: 0.1 * math.sin(p), 0.05, 0, 9, error=1e-6)
    found = crossings(samples, 0.05)
    sixth = math.pi / 6
    roots = [
        sixth,
        math.pi - sixth,
        math.pi + sixth,
        2 * math.pi - sixth,
        2 * math.pi + sixth,
        3 * math.pi - sixth,
    ]
    assert [each.value for each in found] == pytest.approx(roots, abs=1e-4)
    assert all(each.low <= root <= each.high for each, root in zip(found, roots, strict=True))
    holds = [(piece.start, piece.end) for piece in pieces(samples, 0.05)]
    expected = [(0, roots[0]), (roots[1], roots[2]), (roots[3], roots[4]), (roots[5], 9)]
    assert np.allclose(holds, expected, rtol=0, atol=1e-4)


def test_a_jump_is_found():
    samples, count = refined(lambda p: 0.01 if p < 0.3711 else 0.09, 0.05, 0, 1)
    (found,) = crossings(samples, 0.05)
    assert found.low <= 0.3711 <= found.high
    assert found.high - found.low < 1e-5
    assert count < 70


def test_nothing_is_read_across_a_gap():
    samples, _ = refined(lambda p: None if 0.4 < p < 0.6 else p / 10, 0.05, 0, 1)
    assert crossings(samples, 0.05) == ()
    (piece,) = pieces(samples, 0.05)
    assert piece.start == 0
    assert piece.end <= 0.4


def test_throughout_and_nowhere():
    inside, _ = refined(lambda p: 0.01, 0.05, 0, 1)
    outside, _ = refined(lambda p: -0.1, 0.05, 0, 1)
    assert [(piece.start, piece.end) for piece in pieces(inside, 0.05)] == [(0, 1)]
    assert pieces(outside, 0.05) == ()


def verdicts(samples, criterion):
    """Ends of where it is shown to hold, of where it is shown to fail, and whether anything else is open."""
    holds, fails = (
        [(piece.start, piece.end) for piece in pieces(samples, criterion, holding)]
        for holding in (True, False)
    )
    return holds, fails, undecided(samples, criterion)


def test_an_unsure_end_decides_nothing():
    """An inconclusive first member beyond the criterion does not speak for the definite ones after it."""
    rows = [(0.5, 0.06, 0.05), (1.0, 0.01, 0.01), (1.5, 0.02, 0.01), (2.0, 0.04, 0.03)]
    samples = [Sample(*row) for row in rows]
    assert verdicts(samples, 0.05) == ([(1.0, 1.5)], [], True)
    assert verdicts(samples[1:3], 0.05) == ([(1.0, 1.5)], [], False)


def test_inconclusive_all_over_is_neither_throughout_nor_nowhere():
    for difference in (0.01, -0.06):
        samples = [Sample(at, difference, 0.1) for at in (0.0, 1.0, 2.0)]
        assert verdicts(samples, 0.05) == ([], [], True)


def test_what_fails_is_shown_as_well():
    samples, _ = refined(lambda p: None if p > 0.8 else p / 10, 0.05, 0, 1, error=1e-6)
    holds, fails, still_open = verdicts(samples, 0.05)
    (threshold,) = crossings(samples, 0.05)
    assert holds == [(0.0, threshold.value)]
    assert fails == [(threshold.value, pytest.approx(0.7917, abs=1e-4))]
    assert not still_open


def test_an_inconclusive_stretch_between_definite_ones_is_left_out():
    rows = [(0.0, 0.01, 0.0), (1.0, 0.01, 0.0), (2.0, 0.049, 0.01), (3.0, 0.01, 0.0), (4.0, 0.01, 0.0)]
    assert verdicts([Sample(*row) for row in rows], 0.05) == ([(0.0, 1.0), (3.0, 4.0)], [], True)
