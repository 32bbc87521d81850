"""Loads given about another reference: resolved into the file's axes, with the same physical meaning."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from crosscheck.section_file.model import LoadSpec, SectionFile

Read = Callable[..., SectionFile]
Lines = Callable[..., list[str]]

TEXT = 'units = "mm N"\n[points]\na = [0, 0]\nb = [50, 0]\nlra = [20, 5]\n'
TEXT += '[[walls]]\npath = ["a", "b"]\nthickness = 2\n'
LOADS = """[[loads]]
name = "all"
shear = [10, 20]
torque = 30
moment = [40, 50]
bimoment = 60
[[loads]]
name = "own"
shear = [1, 2]
through = "b"
[[loads]]
name = "moment"
moment = [7, 0]
"""


def loads_about(read: Read, reference: str) -> tuple[LoadSpec, ...]:
    return read(TEXT + LOADS + f'[load_reference]\nat = "lra"\n{reference}').loads


def test_a_reference_point_alone(read: Read) -> None:
    about_point, own, moment = loads_about(read, "")
    assert about_point == LoadSpec(
        "all", (10.0, 20.0), (20.0, 5.0), 30.0, 0.0, (40.0, 50.0), 60.0, through_point="lra"
    )
    # A load that says where it acts is in the file's own axes; a pure moment acts nowhere.
    assert own == LoadSpec("own", (1.0, 2.0), (50.0, 0.0), through_point="b")
    assert moment == LoadSpec("moment", moment=(7.0, 0.0))


def test_axes_turned_by_a_quarter(read: Read) -> None:
    # Their x points up, their y to the left: a turn, so that torques keep their sign.
    load, own, _ = loads_about(read, 'x_axis = "+y"\ny_axis = "-x"\n')
    assert load.shear == (-20.0, 10.0)
    # Mx = 40 puts their +y, our -x, in tension; My = 50 puts their +x, our +y, in tension.
    assert load.moment == (50.0, -40.0)
    assert (load.torque, load.bimoment) == (30.0, 60.0)
    assert own.shear == (1.0, 2.0)


def test_axes_of_the_other_hand(read: Read) -> None:
    # Their x points left, their y up: what turns from x to y turns clockwise.
    load, _, moment = loads_about(read, 'x_axis = "-x"\n')
    assert load.shear == (-10.0, 20.0)
    assert load.moment == (40.0, -50.0)
    assert (load.torque, load.bimoment) == (-30.0, -60.0)
    assert moment.moment == (7.0, 0.0)
    assert str(moment.moment[1]) == "0.0"


def test_axial_forces_need_a_word(read: Read) -> None:
    axial = '[[loads]]\nname = "pull"\naxial = 9\n'
    (load,) = read(TEXT + axial + '[load_reference]\nat = [1, 2]\naxial_at = "centroid"\n').loads
    assert load == LoadSpec("pull", axial=9.0)


ONE_FAULT = [
    (
        "axes along one line",
        '[load_reference]\nat = "a"\nx_axis = "+y"\n',
        'load_reference.y_axis: must be "+x" or "-x" beside x_axis = "+y", got "+y"',
    ),
    (
        "no such point",
        '[load_reference]\nat = "ira"\n',
        'load_reference.at: must be coordinates [x, y], a point of [points] or "midline shear centre", '
        'got "ira"; did you mean "lra"?',
    ),
    ("no place", '[load_reference]\nx_axis = "+x"\n', "load_reference.at: must be given, got nothing"),
    (
        "an axial force at the reference",
        '[load_reference]\nat = "a"\n[[loads]]\nname = "pull"\naxial = 9\n',
        'loads[0].axial: must be left out, or [load_reference] with axial_at = "centroid", got 9; '
        "N is taken at each side's centroid: add the moment of an N at the reference to moment",
    ),
]


@pytest.mark.parametrize(("text", "line"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT])
def test_one_fault(fault_lines: Lines, text: str, line: str) -> None:
    assert fault_lines(TEXT + text) == [line]
