"""Brackets and their narrowing on functions whose roots are known."""

from __future__ import annotations

import math
from bisect import insort

import numpy as np
import pytest

from crosscheck.family.crossings import Sample, crossings, pieces, wanted


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
