"""Ranges as the command line takes them, and what it says of faulty ones."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.family.ranges import ranges_of
from crosscheck.faults import SectionFaults
from crosscheck.section_file.source import SectionSource

SOURCE = SectionSource("file.toml", "", {"parameters": {"t": 2, "depth": 100}})


def values(text):
    (found,) = ranges_of([text], SOURCE)
    assert found.name == "t"
    return found.values


def test_equal_distances_between_both_ends():
    assert values("t from 1 to 12 in 23") == tuple(np.arange(1, 12.5, 0.5))
    assert values("t from 12 to 1 in 3") == (12, 6.5, 1)
    assert len(values("t from 1 to 12")) == 25


def test_equal_ratios_between_both_ends():
    found = values("t from 1000 to 0.1 in 9 log")
    assert (found[0], found[-1]) == (1000, 0.1)
    assert_allclose(np.diff(np.log(found)), np.log(1e-4) / 8, rtol=1e-12, atol=0)


def test_a_list_stays_as_given():
    assert values("t in 2, 1, 1/3") == (2, 1, 1 / 3)


def test_the_words_mean_the_same_range():
    for text in ("t from 1 to 12 in 23", "t from 4 to 1e-3 in 7 log", "t in 2, 1, 0.25"):
        (found,) = ranges_of([text], SOURCE)
        assert ranges_of([found.words], SOURCE) == (found,)


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("t 1 to 12", "must be of the form"),
        ("thick from 1 to 12", 'must be a parameter of [parameters], got "thick"'),
        ("dept from 1 to 2", 'did you mean "depth"?'),
        ("t from 1 to x", "numbers or arithmetic on numbers"),
        ("t from 1 to 2 in 1", "whole number from 2"),
        ("t from 1 to 2 in 2.5", "whole number from 2"),
        ("t from -1 to 2 log", "ends of one sign"),
        ("t from 1 to 1", "two different ends"),
        ("t in 1, 1", "different values"),
        ("t in 1, , 2", "numbers or arithmetic"),
    ],
)
def test_faults_say_what_and_what_is_allowed(text, told):
    with pytest.raises(SectionFaults) as caught:
        ranges_of([text], SOURCE)
    (line,) = caught.value.lines
    assert line.startswith("file.toml: vary ")
    assert told in line


def test_all_faults_at_once():
    with pytest.raises(SectionFaults) as caught:
        ranges_of(["x in 1, 2", "y in 1, 2"], SOURCE)
    assert len(caught.value.lines) == 2


def test_a_parameter_is_varied_once_and_not_set_as_well():
    for texts, overrides in ((["t in 1, 2", "t in 3, 4"], ()), (["t in 1, 2"], ("t = 3",))):
        with pytest.raises(SectionFaults, match="second time"):
            ranges_of(texts, SOURCE, overrides)
    with pytest.raises(SectionFaults, match="one range or two"):
        ranges_of([], SOURCE)
