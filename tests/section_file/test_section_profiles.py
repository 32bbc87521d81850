"""Profiles placed along walls: stringers that FE sees beside booms that theory sees, panel by panel."""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest

from crosscheck.comparison.models import fe_section, theory_section
from crosscheck.section_file.model import BoomSpec, CutSpec, ProbeSpec, SectionFile

Read = Callable[..., SectionFile]
Lines = Callable[..., list[str]]

HEAD = 'units = "mm N"\n'
SKIN = """[points]
a = [0, 0]
b = [100, 0]
c = [100, 60]
[[walls]]
name = "skin"
path = ["a", "b"]
thickness = { from = 2, to = 3 }
[[walls]]
name = "web"
path = ["b", "c"]
thickness = 2
[profiles.zed]
points = { foot = [0, 0], top = [0, 20], lip = [8, 20] }
walls = [
  { name = "web", path = ["foot", "top"], thickness = 1.5 },
  { path = ["top", "lip"], thickness = 1 },
]
"""


def test_the_wall_is_split_and_every_name_says_where_it_belongs(read: Read) -> None:
    section = read(HEAD + SKIN + '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = [0.25, 0.75]\n')
    assert [(w.name, w.start, w.end, w.thickness) for w in section.walls] == [
        ("skin 1", "a", "zed 1 foot", (2.0, 2.25)),
        ("skin 2", "zed 1 foot", "zed 2 foot", (2.25, 2.75)),
        ("skin 3", "zed 2 foot", "b", (2.75, 3.0)),
        ("web", "b", "c", (2.0, 2.0)),
        ("zed 1 web", "zed 1 foot", "zed 1 top", (1.5, 1.5)),
        ("zed 1 top-lip", "zed 1 top", "zed 1 lip", (1.0, 1.0)),
        ("zed 2 web", "zed 2 foot", "zed 2 top", (1.5, 1.5)),
        ("zed 2 top-lip", "zed 2 top", "zed 2 lip", (1.0, 1.0)),
    ]
    assert section.points["zed 2 lip"] == (83.0, 20.0)


def test_sides_and_angles(read: Read) -> None:
    placed = '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = 0.5\nside = "right"\nangle = 60\n'
    section = read(
        HEAD + SKIN + placed + '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = 0.5\nangle = 120\n'
    )
    s = math.sin(math.radians(60.0)) * 20
    assert section.points["zed 1 top"] == pytest.approx((60.0, -s), abs=1e-12)
    assert section.points["zed 2 top"] == pytest.approx((40.0, s), abs=1e-12)
    # Both stand at one place: they share their foot.
    assert [w.start for w in section.walls if w.name.startswith("zed") and "web" in w.name] == [
        "zed 1 foot"
    ] * 2


def test_on_an_arc_they_stand_square(read: Read) -> None:
    text = SKIN.replace("thickness = { from = 2, to = 3 }", "thickness = 2\narc = { through = [50, -50] }")
    section = read(HEAD + text + '[[placed]]\nprofile = "zed"\nwall = "skin"\ncount = 3\n')
    assert section.points["zed 2 foot"] == pytest.approx((50.0, -50.0), abs=1e-12)
    # The arc runs anticlockwise below: its left is inside.
    assert section.points["zed 2 top"] == pytest.approx((50.0, -30.0), abs=1e-12)
    assert section.points["zed 2 lip"] == pytest.approx((58.0, -30.0), abs=1e-12)
    whole = 50.0 * math.pi
    lengths = [
        2.0 * 50.0 * math.asin(math.dist(section.points[w.start], section.points[w.end]) / 100.0)
        for w in section.walls[:4]
    ]
    assert lengths == pytest.approx([whole / 4.0] * 4, rel=1e-12)


HAT = """[profiles.hat]
points = { foot = [-10, 0], left = [-6, 15], right = [6, 15], heel = [10, 0] }
walls = [{ path = ["foot", "left", "right", "heel"], thickness = 1, name = "hat" }]
"""


def test_a_hat_has_two_feet(read: Read) -> None:
    section = read(HEAD + SKIN + HAT + '[[placed]]\nprofile = "hat"\nwall = "skin"\nat = [0.3, 0.6]\n')
    assert [w.end for w in section.walls[:5]] == ["hat 1 foot", "hat 1 heel", "hat 2 foot", "hat 2 heel", "b"]
    assert [section.points[name][0] for name in ("hat 1 foot", "hat 2 heel")] == pytest.approx([20.0, 70.0])


def test_what_stands_on_the_whole_wall_finds_its_piece(read: Read) -> None:
    more = (
        '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = [0.25, 0.75]\n'
        '[[probes]]\nlabel = "splice"\nwall = "skin"\nat = 0.5\n'
        '[[probes]]\nlabel = "own"\nwall = "skin 3"\nat = 0.5\n'
        '[[booms]]\nwall = "skin"\nat = [0.125, 0.75]\narea = 9\n'
        '[[stated]]\nquantity = "shear_centre_y"\nvalue = 3\nmeasured_from = "skin"\n'
    )
    section = read(HEAD + SKIN + more)
    assert section.probes == (ProbeSpec("splice", "skin 2", 0.5), ProbeSpec("own", "skin 3", 0.5))
    assert section.booms == (BoomSpec(9.0, None, "skin 1", 0.5), BoomSpec(9.0, "zed 2 foot"))
    assert section.stated[0].measured_from == "skin 1"


# Half a wing box of a glider: three cells, 22 stringers, booms and shear-only skins for theory.
WING = """title = "Wing box, three cells and 22 stringers"
units = "mm N"
[parameters]
front = 140
rear = 90
skin = 2
stringer = "1.6 * (24 + 14)"
[materials.sheet]
E = 72000
nu = 0.33
[points]
a = [0, "front / 2"]
b = [200, 75]
c = [420, 65]
d = [600, "rear / 2"]
e = [0, 0]
f = [200, 0]
g = [420, 0]
h = [600, 0]
[[walls]]
name = "upper skin"
path = ["a", "b", "c", "d"]
thickness = "skin"
direct_share = { theory = 0, fe = 1 }
[profiles.stringer]
points = { foot = [0, 0], top = [0, 24], lip = [14, 24] }
walls = [
  { name = "web", path = ["foot", "top"], thickness = 1.6 },
  { name = "lip", path = ["top", "lip"], thickness = 1.6 },
]
"""
SPARS = """[[walls]]
name = "front web"
path = ["a", "e"]
thickness = 3
direct_share = { theory = 0, fe = 1 }
[[walls]]
name = "second web"
path = ["b", "f"]
thickness = 2
direct_share = { theory = 0, fe = 1 }
[[walls]]
name = "third web"
path = ["c", "g"]
thickness = 2
direct_share = { theory = 0, fe = 1 }
[[walls]]
name = "rear web"
path = ["d", "h"]
thickness = 2
direct_share = { theory = 0, fe = 1 }
[mirror]
about = "x"
[[placed]]
profile = "stringer"
wall = ["upper skin 1", "upper skin 2"]
count = 4
side = "right"
boom = "stringer + skin * 40"
[[placed]]
profile = "stringer"
wall = "upper skin 3"
count = 3
side = "right"
boom = "stringer + skin * 40"
[[booms]]
at = "a"
area = 400
seen_by = "theory"
[[booms]]
at = "d"
area = 300
seen_by = "theory"
[[probes]]
label = "splice"
wall = "upper skin 2"
at = 0.5
[[cuts]]
wall = "upper skin 3"
at = 0.1
"""


def test_job_of_booms_beside_real_stringers(read: Read) -> None:
    section = read(WING + SPARS)
    theory, fe = theory_section(section), fe_section(section)
    panels = [name for name in (wall.name for wall in theory.walls) if "skin" in name]
    assert len(panels) == 2 * (5 + 5 + 4)
    assert panels[:6] == [f"upper skin 1.{k}" for k in range(1, 6)] + ["upper skin 2.1"]
    assert panels[14:16] == ["upper skin 1.1 mirrored", "upper skin 1.2 mirrored"]
    # Both sides see the same panels and webs by the same names; FE sees the stringers besides.
    assert {wall.name for wall in theory.walls} <= {wall.name for wall in fe.walls}
    assert len(fe.walls) - len(theory.walls) == 22 * 2
    assert len(theory.booms) == 22 + 4
    assert fe.booms == ()
    assert {wall.direct_share for wall in theory.walls} == {0.0}
    assert {wall.direct_share for wall in fe.walls} == {1.0}
    assert [probe.wall for probe in section.probes] == ["upper skin 2.3", "upper skin 2.3 mirrored"]
    # The image of a cut in one cell would cut it in two.
    assert section.cuts == (CutSpec("upper skin 3.1", pytest.approx(0.4)),)
    # Stringers stand inside.
    assert all(y < 75.0 for name, (_, y) in section.points.items() if name.endswith("lip"))


ONE_FAULT = [
    (
        "an unknown profile",
        '[[placed]]\nprofile = "zet"\nwall = "skin"\nat = 0.5\n',
        'placed[0].profile: must be a profile of [profiles], got "zet"; did you mean "zed"?',
    ),
    (
        "an unknown wall",
        '[[placed]]\nprofile = "zed"\nwall = "skim"\nat = 0.5\n',
        'placed[0].wall: must be the name of a wall, got "skim"; did you mean "skin"?',
    ),
    (
        "neither at nor count",
        '[[placed]]\nprofile = "zed"\nwall = "skin"\n',
        "placed[0]: must be given by at or by count, got none of them",
    ),
    (
        "a boom beside walls that theory sees",
        '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = 0.5\nboom = 100\nseen_by = "both"\n',
        'placed[0].seen_by: must be left out, or "fe", beside a boom that theory sees instead, got "both"',
    ),
    (
        "a foot beside the wall",
        HAT + '[[placed]]\nprofile = "hat"\nwall = "skin"\nat = 0.95\n',
        'placed[0]: must be a place at which all feet stand on the wall (0 to 1), got foot "heel" at 1.05',
    ),
    (
        "two feet at an angle",
        HAT + '[[placed]]\nprofile = "hat"\nwall = "skin"\nat = 0.5\nangle = 80\n',
        "placed[0]: must be a profile with one foot where the wall is an arc or the angle is not 90",
    ),
    (
        "profiles that meet",
        '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = [0.5, 0.55]\n',
        'placed[0]: must be clear of other walls except at shared points, got "zed 2 web" ',
    ),
    (
        "a foot off the axis",
        "[profiles.bad]\npoints = { a = [0, 1], b = [0, 9] }\n"
        'walls = [{ path = ["a", "b"], thickness = 1 }]\n',
        "profiles.bad.points: must be a table whose first point is the foot: y = 0, and an end of one of its",
    ),
    (
        "a fault within a profile",
        "[profiles.bad]\npoints = { a = [0, 0], b = [0, 9] }\n"
        'walls = [{ path = ["a", "c"], thickness = -1 }]\n',
        'profiles.bad.walls[0].path[1]: must be a point of the profile, got "c"',
    ),
    (
        "an unknown key within a profile",
        "[profiles.bad]\npoints = { a = [0, 0], b = [0, 9] }\n"
        'walls = [{ path = ["a", "b"], thicknes = 1 }]\n',
        "profiles.bad.walls[0].thickness: must be a thickness > 0",
    ),
    (
        "pieces whose name is taken",
        '[[walls]]\nname = "skin 1"\npath = ["c", "a"]\nthickness = 1\n'
        '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = 0.3\n',
        'placed: must be on walls whose pieces have names of their own, got "skin 1" again',
    ),
]


@pytest.mark.parametrize(("text", "start"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT])
def test_one_fault(fault_lines: Lines, text: str, start: str) -> None:
    line, *_ = fault_lines(HEAD + SKIN + text)
    assert line.startswith(start)


def test_a_path_is_told_by_its_walls(fault_lines: Lines) -> None:
    text = SKIN.replace('path = ["a", "b"]', 'path = ["a", "b", "c"]').replace(
        'name = "web"\npath', "path", 1
    )
    (line,) = fault_lines(
        HEAD
        + text.replace('path = ["b", "c"]', 'path = ["c", "a"]')
        + '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = 0.5\n'
    )
    assert line.endswith('the walls of that path are "skin 1", "skin 2": name one or a list')


def test_faces_within_a_profile(read: Read) -> None:
    text = SKIN.replace("thickness = 1.5", 'thickness = 2, line = "left face"')
    section = read(HEAD + text + '[[placed]]\nprofile = "zed"\nwall = "skin"\nat = 0.5\n')
    assert section.points["zed 1 foot"] == pytest.approx((51.0, 0.0), abs=1e-12)
    assert section.points["zed 1 top"] == pytest.approx((51.0, 20.0), abs=1e-12)
