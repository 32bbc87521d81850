"""Two models in one file: what only theory or only FE sees, each a valid section of its own."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from crosscheck.comparison.models import fe_section, theory_section
from crosscheck.section_file.model import SectionFile, StatedSpec

Read = Callable[..., SectionFile]
Lines = Callable[..., list[str]]

HEAD = 'units = "mm N"\n'
WALLS = """[points]
a = [0, 0]
b = [100, 0]
c = [40, -5]
d = [40, 20]
e = [40, 0]
[[walls]]
name = "skin"
path = ["a", "b"]
thickness = 2
seen_by = "theory"
[[walls]]
name = "real skin"
path = ["a", "e", "b"]
thickness = 2
seen_by = "fe"
[[walls]]
name = "web"
path = ["e", "d"]
thickness = 1.5
seen_by = "fe"
"""


def test_walls_of_one_side_do_not_meet_those_of_the_other(read: Read) -> None:
    section = read(HEAD + WALLS + '[[walls]]\nname = "flange"\npath = ["b", "d"]\nthickness = 3\n')
    assert [wall.name for wall in theory_section(section).walls] == ["skin", "flange"]
    assert [wall.name for wall in fe_section(section).walls] == [
        "real skin 1",
        "real skin 2",
        "web",
        "flange",
    ]


def test_a_wall_of_each_side_may_have_one_name_and_probes_may_be_on_one_side(read: Read) -> None:
    probes = (
        '[[probes]]\nlabel = "p"\nwall = "web"\nat = 0.5\n[[probes]]\nlabel = "q"\nwall = "skin"\nat = 0.5\n'
    )
    section = read(HEAD + WALLS.replace("real skin", "skin") + probes)
    assert [wall.name for wall in fe_section(section).walls] == ["skin 1", "skin 2", "web"]
    assert [probe.wall for probe in section.probes] == ["web", "skin"]


def test_points_of_the_two_sides_may_lie_on_each_other(read: Read) -> None:
    other = (
        'seen_by = "fe"\n[[walls]]\nname = "other"\npath = ["c", "d"]\nthickness = 2\nseen_by = "theory"\n'
    )
    text = "[points]\na = [0, 0]\nb = [100, 0]\nc = [0, 0]\nd = [100, 0]\n"
    read(HEAD + text + '[[walls]]\npath = ["a", "b"]\nthickness = 2\n' + other)


def test_direct_share_of_each_side(read: Read) -> None:
    share = "direct_share = { theory = 0, fe = 1 }\n"
    points = "[points]\na = [0, 0]\nb = [100, 0]\n"
    section = read(HEAD + points + '[[walls]]\npath = ["a", "b"]\nthickness = 2\n' + share)
    assert theory_section(section).walls[0].direct_share == 0.0
    assert fe_section(section).walls[0].direct_share == 1.0


def test_stated_values_are_read(read: Read) -> None:
    stated = (
        '[[stated]]\nquantity = "shear_centre_x"\nvalue = "2 * 9"\n'
        'source = "sheet, page 3"\ntolerance = 0.02\n'
        'measured_from = "flange"\n[[stated]]\nquantity = "peak_flow"\nvalue = 3\n'
        'load = "unit Vy"\nlevel = "lumped"\n'
    )
    section = read(HEAD + WALLS + '[[walls]]\nname = "flange"\npath = ["b", "d"]\nthickness = 3\n' + stated)
    assert section.stated == (
        StatedSpec("shear_centre_x", 18.0, "sheet, page 3", 0.02, "flange"),
        StatedSpec("peak_flow", 3.0, load="unit Vy", level="lumped"),
    )


ONE_FAULT = [
    (
        "crossing on one side",
        '[[walls]]\npath = ["c", "d"]\nthickness = 1\nseen_by = "theory"\n',
        'walls[3].path: must be clear of other walls except at shared points, got "c-d" crossing "skin"',
    ),
    (
        "a part of its own",
        '[[walls]]\npath = ["c", "d"]\nthickness = 1\nseen_by = "theory"\n'
        '[[walls]]\npath = ["c", "a"]\nthickness = 1\n',
        "walls[3].path: must be clear",
    ),
    (
        "a cut on a wall of FE",
        '[[cuts]]\nwall = "web"\nat = 0.5\n',
        'cuts[0].wall: must be a wall that theory sees, got "web", which only fe sees',
    ),
    (
        "a boom of theory on a wall of FE",
        '[[booms]]\nwall = "web"\nat = 0.5\narea = 3\nseen_by = "theory"\n',
        'booms[0].wall: must be a wall that theory sees, got "web", which only fe sees',
    ),
    (
        "a boom where one side has no wall",
        '[[booms]]\nat = "d"\narea = 3\n',
        'booms[0].at: must be a point that a wall ends at, got "d", where theory has no wall',
    ),
    (
        "a stated value of a load that is not there",
        '[[stated]]\nquantity = "peak_flow"\nvalue = 3\nload = "unit Vz"\n',
        'stated[0].load: must be a load of this file or a unit load, got "unit Vz"',
    ),
]


@pytest.mark.parametrize(("text", "start"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT])
def test_one_fault(fault_lines: Lines, text: str, start: str) -> None:
    (line,) = fault_lines(HEAD + WALLS + text)
    assert line.startswith(start)


def test_each_side_needs_a_wall(fault_lines: Lines) -> None:
    wall = '[[walls]]\npath = ["a", "b"]\nthickness = 2\nseen_by = "fe"\n'
    (line,) = fault_lines(HEAD + "[points]\na = [0, 0]\nb = [9, 0]\n" + wall)
    words = "walls: must be a wall or more that each side sees, got no wall that theory sees"
    assert line == f'{words}; seen_by = "both" or "theory"'


def test_each_side_must_hang_together(fault_lines: Lines) -> None:
    walls = '[[walls]]\npath = ["a", "b"]\nthickness = 2\n[[walls]]\npath = ["c", "d"]\nthickness = 2\n'
    joint = '[[walls]]\npath = ["b", "c"]\nthickness = 2\nseen_by = "fe"\n'
    points = "[points]\na = [0, 0]\nb = [9, 0]\nc = [9, 9]\nd = [0, 9]\n"
    (line,) = fault_lines(HEAD + points + walls + joint)
    assert '2 parts as seen by theory: "a-b" | "c-d"' in line
