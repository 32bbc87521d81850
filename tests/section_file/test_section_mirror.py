"""[mirror]: a half is the full section, on both sides of the comparison."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from crosscheck.comparison.comparing import compare
from crosscheck.section_file.model import BoomSpec, CornerSpec, CutSpec, ProbeSpec, SectionFile

Read = Callable[..., SectionFile]
Lines = Callable[..., list[str]]

HEAD = 'units = "mm N"\n'
LOAD = '[[loads]]\nname = "gust"\nshear = [100, -1200]\nthrough = [7, 3]\nmoment = [5e4, 0]\n'

HALF_CHANNEL = """[points]
middle = [0, 0]
head = [0, 60]
tip = [40, 60]
[[walls]]
name = "web"
path = ["middle", "head"]
thickness = 2
[[walls]]
name = "flange"
path = ["head", "tip"]
thickness = { from = 3, to = 2 }
[corners]
head = { inner_radius = 3 }
[[booms]]
at = "tip"
area = 50
[[booms]]
at = "middle"
area = 70
[[probes]]
label = "rivets"
wall = "flange"
at = 0.4
pitch = 20
"""
FULL_CHANNEL = """[points]
middle = [0, 0]
head = [0, 60]
tip = [40, 60]
"head mirrored" = [0, -60]
"tip mirrored" = [40, -60]
[[walls]]
name = "web"
path = ["middle", "head"]
thickness = 2
[[walls]]
name = "flange"
path = ["head", "tip"]
thickness = { from = 3, to = 2 }
[[walls]]
name = "web mirrored"
path = ["middle", "head mirrored"]
thickness = 2
[[walls]]
name = "flange mirrored"
path = ["head mirrored", "tip mirrored"]
thickness = { from = 3, to = 2 }
[corners]
head = { inner_radius = 3 }
"head mirrored" = { inner_radius = 3 }
[[booms]]
at = "tip"
area = 50
[[booms]]
at = "middle"
area = 70
[[booms]]
at = "tip mirrored"
area = 50
[[probes]]
label = "rivets"
wall = "flange"
at = 0.4
pitch = 20
[[probes]]
label = "rivets mirrored"
wall = "flange mirrored"
at = 0.4
pitch = 20
"""
QUARTER_TUBE = """[points]
right = [30, 0]
top = [0, 20]
[[walls]]
name = "quarter"
path = ["right", "top"]
thickness = 2
arc = { through = [19, 16] }
"""


def test_a_half_is_the_full_section_on_both_sides(read: Read) -> None:
    half = read(HEAD + HALF_CHANNEL + '[mirror]\nabout = "x"\n' + LOAD)
    full = read(HEAD + FULL_CHANNEL + LOAD)
    for name in ("points", "corners", "booms", "probes", "loads"):
        assert getattr(half, name) == getattr(full, name)
    # An image is defined where its original is.
    assert [replace(wall, key="") for wall in half.walls] == [replace(wall, key="") for wall in full.walls]
    of_half, of_full = compare(half), compare(full)
    assert len(of_half.quantities) > 30
    for own, other in zip(of_half.quantities, of_full.quantities, strict=True):
        assert (own.name, own.load) == (other.name, other.load)
        for value, expected in (
            (own.theory["midline"], other.theory["midline"]),
            (own.fe.value, other.fe.value),
        ):
            assert (value is None) == (expected is None)
            assert value is None or value == pytest.approx(expected, rel=1e-12, abs=0.0)


def test_a_quarter_makes_a_tube(read: Read) -> None:
    section = read(HEAD + QUARTER_TUBE + '[mirror]\nabout = ["x", "y"]\n')
    names = ["quarter", "quarter mirrored x", "quarter mirrored y", "quarter mirrored xy"]
    assert [wall.name for wall in section.walls] == names
    assert section.points == {
        "right": (30.0, 0.0),
        "top": (0.0, 20.0),
        "top mirrored x": (0.0, -20.0),
        "right mirrored y": (-30.0, 0.0),
    }
    assert section.walls[3].arc_through == (-19.0, -16.0)
    assert section.walls == read(HEAD + QUARTER_TUBE + '[mirror]\nabout = "xy"\n').walls


def test_half_a_tube_from_axis_to_axis(read: Read) -> None:
    text = '[points]\na = [30, 0]\nb = [-30, 0]\n[[walls]]\npath = ["a", "b"]\nthickness = 2\n'
    section = read(HEAD + text + 'arc = { through = [0, 30] }\n[mirror]\nabout = "x"\n')
    assert [(w.name, w.start, w.end, w.arc_through) for w in section.walls] == [
        ("a-b", "a", "b", (0.0, 30.0)),
        ("a-b mirrored", "a", "b", (0.0, -30.0)),
    ]


CELLS = """[points]
a = [0, 0]
b = [50, 0]
c = [50, 30]
d = [0, 30]
[[walls]]
name = "spine"
path = ["a", "b"]
thickness = 2
[[walls]]
name = "skin"
path = ["b", "c", "d", "a"]
thickness = 1
[mirror]
about = "x"
"""


def test_walls_on_the_axis_are_shared_and_cuts_doubled_where_they_open_a_cell(read: Read) -> None:
    booms = (
        '[[booms]]\nwall = "spine"\nat = 0.3\narea = 9\n[[booms]]\nwall = "skin 1"\nat = [0, 0.5]\narea = 8\n'
    )
    section = read(HEAD + CELLS + booms + '[[cuts]]\nwall = "skin 2"\nat = 0.25\n')
    assert [wall.name for wall in section.walls][:4] == ["spine", "skin 1", "skin 2", "skin 3"]
    assert len(section.walls) == 7
    assert section.cuts == (CutSpec("skin 2", 0.25), CutSpec("skin 2 mirrored", 0.25))
    assert [(boom.wall, boom.at) for boom in section.booms] == [
        ("spine", 0.3),
        ("skin 1", 0.0),
        ("skin 1", 0.5),
        ("skin 1 mirrored", 0.5),
    ]
    one_cell = CELLS.replace('[[walls]]\nname = "spine"\npath = ["a", "b"]\nthickness = 2\n', "")
    section = read(HEAD + one_cell + '[[cuts]]\nwall = "skin 2"\nat = 0.25\n')
    assert section.cuts == (CutSpec("skin 2", 0.25),)


def test_images_may_be_named_by_the_file(read: Read) -> None:
    probe = '[[probes]]\nlabel = "clip"\nwall = "skin 2 mirrored"\nat = 0.5\n'
    section = read(HEAD + CELLS + probe + '[corners]\n"c mirrored" = { inner_radius = 2 }\n')
    assert section.probes == (ProbeSpec("clip", "skin 2 mirrored", 0.5),)
    assert section.corners == (CornerSpec("c mirrored", 2.0),)


def test_faces_that_end_on_the_axis_go_on_beyond_it(read: Read) -> None:
    points = "[points]\nridge = [0, 40]\neave = [50, 0]\n"
    wall = '[[walls]]\nname = "roof"\npath = ["ridge", "eave"]\nthickness = 3\n'
    section = read(HEAD + points + wall + 'line = "left face"\n[mirror]\nabout = "y"\n')
    x, y = section.points["ridge"]
    slope = (50**2 + 40**2) ** 0.5 / 50
    assert (x, y) == pytest.approx((0.0, 40.0 - 1.5 * slope), abs=1e-12)
    assert section.booms == ()


ONE_FAULT = [
    (
        "a wall across the axis",
        HALF_CHANNEL.replace("middle = [0, 0]", "middle = [0, -1]"),
        'walls[0].path: must be on one side of the axis, got "web" crossing the x axis, about which [mirror] '
        "doubles it; give one half, up to a point on the axis",
    ),
    (
        "an arc across the axis",
        '[points]\na = [0, 10]\nb = [0, 30]\n[[walls]]\npath = ["a", "b"]\nthickness = 1\n'
        "arc = { through = [26, 0] }\n",
        'walls[0].path: must be on one side of the axis, got "a-b" crossing the x axis',
    ),
    (
        "a name that an image needs",
        HALF_CHANNEL + '[[walls]]\nname = "web mirrored"\npath = ["head", "middle"]\nthickness = 2\n'
        "arc = { through = [-9, 30] }\n",
        'walls[0].name: must be named so that [mirror] can name the image, got "web", whose image',
    ),
    (
        "halves apart",
        '[points]\na = [0, 10]\nb = [0, 30]\n[[walls]]\npath = ["a", "b"]\nthickness = 1\n',
        'walls: must be one connected section, got 2 parts: "a-b" | "a-b mirrored"',
    ),
    (
        "an image that crosses",
        "[points]\na = [0, 0]\nb = [30, 10]\nc = [10, -12]\nd = [25, -1]\n"
        '[[walls]]\npath = ["a", "b"]\nthickness = 1\n[[walls]]\npath = ["a", "c", "d"]\nthickness = 1\n',
        'walls[0].path: must be clear of other walls except at shared points, got "a-b mirrored" crossing',
    ),
    ("another axis", HALF_CHANNEL, 'mirror.about: must be "x" or "y" or "xy", got "z"'),
    (
        "a wall by its face on the axis",
        "[points]\na = [0, 0]\nb = [30, 0]\nc = [30, 30]\n"
        '[[walls]]\npath = ["a", "b"]\nthickness = 1\nline = "left face"\n'
        '[[walls]]\npath = ["b", "c"]\nthickness = 1\n',
        "walls[0].line: must be faces whose midlines meet in one point",
    ),
]


@pytest.mark.parametrize(("text", "start"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT])
def test_one_fault(fault_lines: Lines, text: str, start: str) -> None:
    about = "z" if '"z"' in start else "x"
    line, *_ = fault_lines(HEAD + text + f'[mirror]\nabout = "{about}"\n')
    assert line.startswith(start)


def test_booms_on_the_axis_are_shared(read: Read) -> None:
    booms = read(HEAD + HALF_CHANNEL + '[mirror]\nabout = "x"\n').booms
    assert booms == (BoomSpec(50.0, "tip"), BoomSpec(70.0, "middle"), BoomSpec(50.0, "tip mirrored"))
