"""Points along a piece: monotone, with both ends, sizes respected."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from fe_models.grading import corner_size, graded, stretched

sizes = st.floats(1e-4, 3.0)


@settings(max_examples=300, deadline=None, derandomize=True)
@given(st.floats(0.01, 50.0), sizes, sizes, st.floats(0.05, 3.0), st.floats(0.3, 1.5))
def test_graded(length: float, first: float, last: float, largest: float, slope: float) -> None:
    u = graded(length, first, last, largest, slope)
    assert u[0] == 0.0
    assert u[-1] == 1.0
    h = np.diff(u) * length
    assert (h > 0.0).all()
    start, end = np.cumsum(np.concatenate([[0.0], h[:-1]])), np.cumsum(h)

    def wanted(d: np.ndarray) -> np.ndarray:
        return np.minimum(np.minimum(first + slope * d, last + slope * (length - d)), largest)

    # an element never exceeds the largest size wanted inside it
    inside = np.linspace(start, end, 33)
    assert (h <= wanted(inside).max(axis=0) * (1 + 0.05)).all()
    # and it is no finer than needed: one element fewer would be too few for the integral of ds / wanted
    near = np.concatenate([[0.0], np.geomspace(1e-7 * length, 0.5 * length, 20_000)])
    fine = np.concatenate([near, length - near[-2::-1]])
    need = float(np.sum(0.5 * (1 / wanted(fine[:-1]) + 1 / wanted(fine[1:])) * np.diff(fine)))
    assert (1 - 1e-4) * need - 1e-4 <= len(h) <= (1 + 1e-4) * need + 1.0


def test_graded_ends_are_as_small_as_asked() -> None:
    """A corner of 0.001 at one end and 0.1 at the other of a unit length."""
    h = np.diff(graded(1.0, 0.001, 0.1, 0.5, 0.7))
    assert 0.0005 <= h[0] <= 0.0015
    assert 0.06 <= h[-1] <= 0.15
    assert (h[1:] / h[:-1] < 2.2).all()


def test_graded_short_piece_is_one_element() -> None:
    assert_allclose(graded(0.05, 0.1, 0.2, 0.5, 1.0), [0.0, 1.0], rtol=0, atol=0)


def test_graded_is_alike_from_both_ends() -> None:
    there, back = graded(3.0, 0.01, 0.3, 0.8, 1.0), graded(3.0, 0.3, 0.01, 0.8, 1.0)
    assert_allclose(there, 1.0 - back[::-1], rtol=0, atol=1e-12)


@settings(max_examples=200, deadline=None, derandomize=True)
@given(st.floats(0.01, 5000.0), st.floats(0.05, 2.0), st.floats(1.2, 3.0), st.floats(0.1, 1e6))
def test_stretched(length: float, first: float, ratio: float, largest: float) -> None:
    u = stretched(length, first, ratio, largest)
    assert u[0] == 0.0
    assert u[-1] == 1.0
    assert_allclose(u, 1.0 - u[::-1], rtol=0, atol=1e-12)
    h = np.diff(u) * length
    assert (h > 0.0).all()
    assert (h <= 2.0 * largest * (1 + 1e-9)).all() or len(h) == 1
    # growth towards the middle, never faster than the ratio
    half = h[: len(h) // 2]
    if len(half) > 1:
        assert (half[1:] / half[:-1] <= ratio * (1 + 1e-9)).all()
        assert (half[1:] / half[:-1] >= 1 - 1e-9).all()
    # sizes are rescaled to fill the length by less than a factor of two
    if len(h) > 1:
        assert 0.5 * min(first, largest) <= h[0] <= 2.0 * min(first, largest)
    else:
        assert length <= 1.5 * first + 1e-12


def test_stretched_needs_few_elements_whatever_the_length() -> None:
    """Cost grows with the logarithm of the slenderness: a hundred times longer, 2 log2(100) elements more."""
    short, long = len(stretched(30.0, 1.0, 2.0, np.inf)), len(stretched(3000.0, 1.0, 2.0, np.inf))
    assert long - short <= 2 * np.log2(100) + 2
    assert long <= 24


@pytest.mark.parametrize(("degrees", "expected"), [(60, 0.1 ** (2 / 3)), (90, 0.1), (270, 1e-3), (360, 1e-4)])
def test_corner_size_loses_the_same_share_everywhere(degrees: float, expected: float) -> None:
    """h/t = eta^(alpha / 2 pi): a tenth of t at a right convex corner, a thousandth at a re-entrant one."""
    assert_allclose(corner_size(np.radians(degrees), 7.0, 1e-4), 7.0 * expected, rtol=1e-12)


@pytest.mark.parametrize(("degrees", "bend"), [(135, 45), (120, 60), (225, 45), (190, 10)])
def test_slight_corners_carry_less(degrees: float, bend: float) -> None:
    """The strength of the singularity goes with the bend, its energy with the square of that."""
    share = 1e-4 * (90 / bend) ** 2
    assert_allclose(corner_size(np.radians(degrees), 7.0, 1e-4), 7.0 * share ** (degrees / 360), rtol=1e-12)


def test_corner_size_of_no_corner_is_the_scale() -> None:
    assert corner_size(np.pi + 1e-4, 3.0, 1e-4) == 3.0
    assert corner_size(np.pi + 0.03, 3.0, 1e-4) <= 3.0
