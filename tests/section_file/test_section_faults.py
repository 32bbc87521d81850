"""Every fault of an input: one line with key, what is allowed and what was found."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from crosscheck.section_file.reader import read_section

Lines = Callable[..., list[str]]

HEAD = 'units = "mm N"\n'
POINTS = "[points]\na = [0, 0]\nb = [50, 0]\nc = [50, 80]\nd = [0, 80]\n"
WALL = '[[walls]]\npath = ["a", "b", "c"]\nthickness = 2\n'
GOOD = HEAD + POINTS + WALL
ARITHMETIC = "a number or arithmetic on parameters (+ - * / ** ( ) sqrt sin cos tan pi)"


def wall(line: str) -> str:
    """The good file with another thickness line."""
    return GOOD.replace("thickness = 2", line)


def test_the_good_file_is_good(tmp_path: Path) -> None:
    (tmp_path / "part.toml").write_text(GOOD)
    assert len(read_section(tmp_path / "part.toml").walls) == 2


# One row: name, text, key, and the rest of the only line.
ONE_FAULT = [
    (
        "no units",
        POINTS + WALL,
        "units",
        'must be one of "mm N", "in lbf", "m N", "m kN", "in kip", got nothing; '
        'write units = "mm N" at the top',
    ),
    (
        "unknown units",
        GOOD.replace("mm N", "mm kN"),
        "units",
        'must be one of "mm N", "in lbf", "m N", "m kN", "in kip", got "mm kN"; did you mean "mm N"?',
    ),
    (
        "unknown key",
        GOOD + "thicknes = 2\n",
        "walls[0].thicknes",
        'must be a known key of [[walls]], got "thicknes"; did you mean "thickness"?',
    ),
    (
        "list of the file below a table",
        GOOD + 'walls = [{ path = ["c", "d"], thickness = 2 }]\n',
        "walls[0].walls",
        'must be a known key of [[walls]], got "walls"; a list walls = [...] of the file stands '
        "above its first [table]",
    ),
    (
        "stated at no probe",
        GOOD
        + '[[probes]]\nlabel = "rivets"\nwall = "b-c"\nat = 0.5\n[[stated]]\nquantity = "flow_at_probes"\n'
        'value = 2\nload = "unit Vy"\nprobe = "rivet"\n',
        "stated[0].probe",
        'must be the label of a probe of [[probes]], got "rivet"; did you mean "rivets"?',
    ),
    (
        "another quantity stated at a probe",
        GOOD + '[[stated]]\nquantity = "peak_flow"\nvalue = 2\nload = "unit Vy"\nprobe = "rivets"\n',
        "stated[0].probe",
        "must be left out, or given for flow_at_probes, got a probe for peak_flow",
    ),
    (
        "unknown table",
        GOOD + "[point]\nz = [0, 0]\n",
        "point",
        'must be a known key of the file, got "point"; did you mean "points"?',
    ),
    (
        "unknown key unlike any",
        GOOD + "zzz = 2\n",
        "walls[0].zzz",
        'must be a known key of [[walls]], got "zzz"',
    ),
    (
        "unknown point",
        GOOD.replace('"b", "c"]', '"b", "cc"]'),
        "walls[0].path[2]",
        'must be a point of [points], got "cc"; did you mean "c"?',
    ),
    (
        "unknown material",
        GOOD + 'material = "sheat"\n[materials.sheet]\nE = 72000\nnu = 0.33\n',
        "walls[0].material",
        'must be a material of [materials], got "sheat"; did you mean "sheet"?',
    ),
    (
        "unknown material where there is none",
        GOOD + 'material = "sheet"\n',
        "walls[0].material",
        'must be a material of [materials], got "sheet"',
    ),
    (
        "repeated place",
        GOOD.replace("d = [0, 80]", "d = [50, 80.0]"),
        "points.d",
        'must be a place of its own, got the place of "c", (50, 80); use "c" in the paths instead',
    ),
    (
        "repeated name",
        GOOD.replace("d = [0, 80]", "a = [0, 80]"),
        "line 6, column 12",
        'must be valid TOML, got "a = [0, 80]"; this key stands twice (cannot overwrite a value)',
    ),
    (
        "point twice in a row",
        GOOD.replace('"b", "c"]', '"b", "b", "c"]'),
        "walls[0].path[2]",
        'must be a point other than the one before it, got "b" twice in a row',
    ),
    ("thickness zero", wall("thickness = 0"), "walls[0].thickness", "must be > 0, got 0"),
    ("thickness negative", wall("thickness = -1.2"), "walls[0].thickness", "must be > 0, got -1.2"),
    (
        "thickness nan",
        wall("thickness = nan"),
        "walls[0].thickness",
        "must be a thickness > 0, a finite number, got nan",
    ),
    (
        "thickness infinite",
        wall("thickness = inf"),
        "walls[0].thickness",
        "must be a thickness > 0, a finite number, got inf",
    ),
    (
        "thickness boolean",
        wall("thickness = true"),
        "walls[0].thickness",
        f"must be a thickness > 0, {ARITHMETIC}, got true",
    ),
    (
        "thickness text",
        wall('thickness = "thick"'),
        "walls[0].thickness",
        f'must be {ARITHMETIC}, got "thick"; unknown name "thick"',
    ),
    (
        "thickness empty text",
        wall('thickness = ""'),
        "walls[0].thickness",
        f'must be {ARITHMETIC}, got ""; it is empty',
    ),
    (
        "thickness from arithmetic",
        wall('thickness = "2 - 3"'),
        "walls[0].thickness",
        'must be > 0, got -1 from "2 - 3"',
    ),
    (
        "thickness a date",
        wall("thickness = 1979-05-27"),
        "walls[0].thickness",
        f"must be a thickness > 0, {ARITHMETIC}, got 1979-05-27",
    ),
    (
        "thickness beyond numbers",
        wall(f"thickness = 0x{'f' * 300}"),
        "walls[0].thickness",
        "must be a number of magnitude at most 1e+30, got an integer of about 362 digits",
    ),
    (
        "thickness list of the wrong length",
        wall("thickness = [2, 3, 4]"),
        "walls[0].thickness",
        "must be one value, or a list of 2, one per wall of the path, got a list of 3",
    ),
    ("thickness list entry", wall("thickness = [2, 0]"), "walls[0].thickness[1]", "must be > 0, got 0"),
    (
        "no thickness",
        wall(""),
        "walls[0].thickness",
        "must be a thickness > 0: one value, or a list with one per wall of the path, got nothing",
    ),
    (
        "too thin",
        wall("thickness = 1e-9"),
        "walls[0].thickness",
        "must be at least 1/1e+06 of the section's size (80), got 1e-09",
    ),
    (
        "circular parameters",
        GOOD + '[parameters]\nt = "u + 1"\nu = "v"\nv = "2 * t"\n',
        "parameters.t",
        'must be a number or arithmetic on parameters that stand earlier in the file, got "u + 1"; '
        "circular: t -> u -> v -> t",
    ),
    (
        "parameter of itself",
        GOOD + '[parameters]\nt = "t + 1"\n',
        "parameters.t",
        'must be a number or arithmetic on parameters that stand earlier in the file, got "t + 1"; '
        "circular: t -> t",
    ),
    (
        "later parameter",
        GOOD + '[parameters]\nt = "u + 1"\nu = 2\n',
        "parameters.t",
        'must be a number or arithmetic on parameters that stand earlier in the file, got "u + 1"; '
        '"u" comes later in the file: move it up',
    ),
    (
        "huge power",
        GOOD + '[parameters]\nt = "9 ** 9 ** 9"\n',
        "parameters.t",
        f'must be {ARITHMETIC}, got "9 ** 9 ** 9"; exponent 3.8742e+08 outside -64 to 64',
    ),
    (
        "parameter name",
        GOOD + "[parameters]\nsqrt = 2\n",
        "parameters.sqrt",
        "must be named by at most 60 letters a-z, digits and _, a letter first, "
        'not cos, pi, sin, sqrt, tan, got "sqrt"',
    ),
    (
        "load through an unknown point",
        GOOD + '[[loads]]\nname = "gust"\nshear = [0, 1]\nthrough = "bb"\n',
        "loads[0].through",
        'must be coordinates [x, y], a point of [points] or "midline shear centre", got "bb"; '
        'did you mean "b"?',
    ),
    (
        "load without a line",
        GOOD + '[[loads]]\nname = "gust"\nshear = [0, 1]\n',
        "loads[0].through",
        'must be given with a shear, got nothing; coordinates [x, y], a point name or "midline shear centre"',
    ),
    (
        "load without force",
        GOOD + '[[loads]]\nname = "gust"\n',
        "loads[0]",
        "must be given a force, got no force; give shear with through, or torque",
    ),
    (
        "load of zero",
        GOOD + '[[loads]]\nname = "gust"\ntorque = 0\n',
        "loads[0]",
        "must be a force other than zero, got zero in every part",
    ),
    (
        "load name of a unit load",
        GOOD + '[[loads]]\nname = "unit Vy"\ntorque = 3\n',
        "loads[0].name",
        'must be named otherwise: unit loads have this name, got "unit Vy"',
    ),
    (
        "shear of three",
        GOOD + '[[loads]]\nname = "gust"\nshear = [0, 1, 2]\nthrough = "a"\n',
        "loads[0].shear",
        "must be a pair [Vx, Vy], got a list of 3",
    ),
    ("criterion zero", GOOD + "[criteria]\narea = 0\n", "criteria.area", "must be > 0, got 0"),
    (
        "criterion infinite",
        GOOD + "[criteria]\narea = inf\n",
        "criteria.area",
        "must be a finite number, got inf",
    ),
    (
        "criterion unknown",
        GOOD + "[criteria]\ntorsion_constnt = 0.1\n",
        "criteria.torsion_constnt",
        'must be the name of a quantity, got "torsion_constnt"; did you mean "torsion_constant"?',
    ),
    (
        "two materials without a base",
        GOOD + "[materials.x1]\nE = 1\nnu = 0\n[materials.x2]\nE = 2\nnu = 0\n",
        "base_material",
        'must be given when the file has more than one material, got nothing; for example "x1"',
    ),
    (
        "Poisson's ratio",
        GOOD + "[materials.x1]\nE = 1\nnu = 0.6\n",
        "materials.x1.nu",
        "must be > -1 and <= 0.5, got 0.6",
    ),
    (
        "no Poisson's ratio",
        GOOD + "[materials.x1]\nE = 1\n",
        "materials.x1.nu",
        "must be given, or G instead, got nothing; nu = 0.3 suits most metals",
    ),
    (
        "probe on a wall of a named path",
        GOOD.replace("thickness = 2", 'thickness = 2\nname = "web"')
        + '[[probes]]\nlabel = "weld"\nwall = "web"\nat = 0.5\n',
        "probes[0].wall",
        'must be the name of a wall, got "web"; the walls of that path are "web 1", "web 2" and so on',
    ),
    (
        "probe off its wall",
        GOOD + '[[probes]]\nlabel = "weld"\nwall = "a-b"\nat = 1.5\n',
        "probes[0].at",
        "must be from 0 to 1, got 1.5",
    ),
    (
        "cut of an open wall",
        GOOD + '[[cuts]]\nwall = "a-b"\nat = 0.5\n',
        "cuts[0].wall",
        'must be a wall of a cell that no other cut has opened, got "a-b", at which the section falls in two',
    ),
    (
        "far from the origin",
        HEAD + '[points]\na = [1e9, 0]\nb = [1000000050, 0]\n[[walls]]\npath = ["a", "b"]\nthickness = 2\n',
        "points",
        "must be within 1e+06 times the section's size from the origin, "
        "got a section 50 wide or high at a distance of 1e+09; move the origin to the section",
    ),
    (
        "walls with one bracket",
        HEAD + POINTS + '[walls]\npath = ["a", "b"]\nthickness = 2\n',
        "walls",
        "must be a list of at least one wall, each under [[walls]], got "
        '{ path = ["a", "b"], thickness = 2 }; write [[walls]] with two brackets',
    ),
    (
        "units below a table",
        POINTS.replace("[points]\n", '[parameters]\nunits = "mm N"\n[points]\n') + WALL,
        "units",
        'must be one of "mm N", "in lbf", "m N", "m kN", "in kip", got nothing; '
        "move units above [parameters]",
    ),
    ("schema", "schema = 2\n" + GOOD, "schema", "must be 1, got 2"),
    (
        "coordinate",
        GOOD.replace("d = [0, 80]", "d = [0]"),
        "points.d",
        "must be a place [x, y], got a list of 1",
    ),
    (
        "bad TOML",
        GOOD + "[[loads]\n",
        "line 10, column 8",
        "must be valid TOML, got \"[[loads]\"; expected ']]' at the end of an array declaration",
    ),
]


@pytest.mark.parametrize(
    ("text", "key", "words"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT]
)
def test_one_line(fault_lines: Lines, text: str, key: str, words: str) -> None:
    # A parameter called "units" is a second fault of the file that has it.
    lines = [line for line in fault_lines(text) if not line.startswith("parameters.units")]
    assert lines == [f"{key}: {words}"]


def test_all_faults_at_once_in_file_order(fault_lines: Lines) -> None:
    text = (
        'tittle = "x"\n[parameters]\nt = "1 / 0"\nu = "t"\n[points]\na = [0, 0]\nb = [true, 0]\n'
        'c = [5, "w"]\n'
        '[[walls]]\npath = ["a", "b"]\nthickness = -1\n[[walls]]\npath = ["b", "q"]\nthickness = "u"\n'
        '[[loads]]\nname = "gust"\nshear = [1, nan]\nthrough = "r"\n[criteria]\narea = -1\n'
    )
    lines = fault_lines(text)
    assert [line.split(":")[0] for line in lines] == [
        "units",
        "tittle",
        "parameters.t",
        "points.b[0]",
        "points.c[1]",
        "walls[0].thickness",
        "walls[1].path[1]",
        "loads[0].shear[1]",
        "loads[0].through",
        "criteria.area",
    ]
