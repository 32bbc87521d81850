"""What a section file says beside its geometry: allowables, tolerances, front matter, pitch of probes."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from crosscheck.section_file.model import AllowableSpec, SectionFile

Read = Callable[..., SectionFile]
Lines = Callable[..., list[str]]

BOX = """units = "mm N"
[parameters]
f = 2
[points]
a = [0, 0]
b = [50, 0]
c = [50, 80]
d = [0, 80]
[[walls]]
name = "shell"
path = ["a", "b", "c", "d"]
thickness = 2
[[walls]]
name = "lid"
path = ["d", "a"]
thickness = 2
"""


def test_allowables_of_every_wall_of_paths_and_of_single_walls(read: Read) -> None:
    text = """[allowables]
shear_stress = "60 * f"
von_mises_stress = 300
source = "material sheet"
[allowables.walls.shell]
shear_flow = 30
source = "rivets, page 4"
[allowables.walls."shell 2"]
shear_flow = 20
direct_stress = 150
"""
    assert read(BOX + text).allowables == (
        AllowableSpec(None, "shear_stress", 120.0, "material sheet"),
        AllowableSpec(None, "von_mises_stress", 300.0, "material sheet"),
        AllowableSpec("shell 1", "shear_flow", 30.0, "rivets, page 4"),
        AllowableSpec("shell 2", "shear_flow", 20.0, ""),
        AllowableSpec("shell 3", "shear_flow", 30.0, "rivets, page 4"),
        AllowableSpec("shell 2", "direct_stress", 150.0, ""),
    )


def test_allowables_follow_split_and_mirrored_walls(read: Read) -> None:
    text = """[mirror]
about = "y"
[profiles.lip]
points = { foot = [0, 0], tip = [0, 9] }
walls = [{ path = ["foot", "tip"], thickness = 1 }]
[[placed]]
profile = "lip"
wall = "shell 2"
at = 0.5
[allowables.walls.shell]
shear_flow = 30
"""
    allowables = read(BOX + text).allowables
    names = ["shell 1", "shell 2.1", "shell 2.2", "shell 3"]
    assert [each.wall for each in allowables] == names + [f"{name} mirrored" for name in names]


def test_tolerances_and_front_matter(read: Read) -> None:
    text = """[tolerances]
thickness = 0.05
dimension = "0.15 * f"
material = 0.02
[document]
number = "GL-114"
intended_use = "Sizing of the floor beam."
changes = [{ issue = "A", date = "2024-05-02", text = "First issue." }]
"""
    section = read(BOX + text)
    assert section.tolerances == {"thickness": 0.05, "dimension": 0.3, "material": 0.02}
    assert section.document == {
        "number": "GL-114",
        "intended_use": "Sizing of the floor beam.",
        "changes": [{"issue": "A", "date": "2024-05-02", "text": "First issue."}],
    }


def test_pitch_of_probes_and_labels_of_loads(read: Read) -> None:
    text = '[[probes]]\nlabel = "rivets"\nwall = "lid"\nat = 0.5\npitch = "10 * f"\n'
    section = read(BOX + text + '[[loads]]\nname = "gust"\ntorque = 5\nkind = "ultimate"\n')
    assert section.probes[0].pitch == 20.0
    assert section.loads[0].kind == "ultimate"


ONE_FAULT = [
    (
        "an unknown kind of allowable",
        "[allowables]\nshear = 100\n",
        'allowables.shear: must be a known key of [allowables], got "shear"; did you mean "shear_flow"?',
    ),
    (
        "an allowable without a number",
        '[allowables]\nsource = "sheet"\n',
        "allowables: must be a table with one or more of shear_stress, shear_flow, direct_stress, "
        "von_mises_stress, got none",
    ),
    (
        "an allowable of no wall",
        "[allowables.walls.shel]\nshear_flow = 3\n",
        'allowables.walls.shel: must be the name of a wall or path, got "shel"; did you mean "shell"?',
    ),
    (
        "an allowable below zero",
        "[allowables.walls.lid]\nshear_flow = -3\n",
        "allowables.walls.lid.shear_flow: must be > 0, got -3",
    ),
    (
        "a key of one wall's allowables",
        "[allowables.walls.lid]\nshear_flo = 3\n",
        'allowables.walls.lid.shear_flo: must be a known key of [allowables.walls.lid], got "shear_flo"',
    ),
    (
        "a tolerance in per cent",
        "[tolerances]\nthickness = 5\n",
        "tolerances.thickness: must be > 0 and < 1, got 5",
    ),
    (
        "an unknown tolerance",
        "[tolerances]\nthicknes = 0.1\n",
        'tolerances.thicknes: must be a known key of [tolerances], got "thicknes"; did you mean "thickness"?',
    ),
    (
        "unknown front matter",
        '[document]\nauthor = "x"\n',
        'document.author: must be a known key of [document], got "author"',
    ),
    (
        "a change without its text",
        '[document]\nchanges = [{ issue = "A", date = "today" }]\n',
        "document.changes[0].text: must be given, got nothing",
    ),
    (
        "a pitch of nothing",
        '[[probes]]\nlabel = "rivets"\nwall = "lid"\nat = 0.5\npitch = 0\n',
        "probes[0].pitch: must be > 0, got 0",
    ),
    (
        "another kind of load",
        '[[loads]]\nname = "gust"\ntorque = 5\nkind = "proof"\n',
        'loads[0].kind: must be "limit" or "ultimate", got "proof"',
    ),
]


@pytest.mark.parametrize(("text", "start"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT])
def test_one_fault(fault_lines: Lines, text: str, start: str) -> None:
    (line,) = fault_lines(BOX + text)
    assert line.startswith(start)
