"""Section files: bytes, TOML, forms, numbers, names, geometry."""

from __future__ import annotations

import os

from trial import BOX, CHANNEL, Trial, channel, section

PROBE = '[[probes]]\nlabel = "rivets"\nwall = "{}"\nat = {}\n'
LOAD = '[[loads]]\nname = "gust"\nshear = [0, -900]\nthrough = {}\n'


def _fan(count: int) -> str:
    """Walls that all begin at one point."""
    ends = "".join(f"p{i} = [{100 + i}, {i * i}]\n" for i in range(count))
    walls = "".join(f'[[walls]]\npath = ["o", "p{i}"]\nthickness = 1\n' for i in range(count))
    return f'units = "mm N"\n[points]\no = [0, 0]\n{ends}{walls}'


def _comb(count: int) -> str:
    """A long wall in pieces."""
    points = "".join(f"p{i} = [{10 * i}, {i % 2}]\n" for i in range(count + 1))
    path = ", ".join(f'"p{i}"' for i in range(count + 1))
    return f'units = "mm N"\n[points]\n{points}[[walls]]\npath = [{path}]\nthickness = 1\n'


def _angle(degrees: float, thickness: float = 2.0) -> str:
    """Two walls of 100 at an angle."""
    return (
        f'units = "mm N"\n[points]\na = [100, 0]\no = [0, 0]\n'
        f'b = ["100 * cos({degrees!r})", "100 * sin({degrees!r})"]\n'
        f'[[walls]]\npath = ["a", "o", "b"]\nthickness = {thickness!r}\n'
    )


def _moved(x: float) -> str:
    return channel(
        "a = [30, 0]\nb = [0, 0]\nc = [0, 60]\nd = [30, 60]",
        f'a = ["{x!r} + 30", 0]\nb = [{x!r}, 0]\nc = [{x!r}, 60]\nd = ["{x!r} + 30", 60]',
    )


BYTES = (
    section("empty", "", 2, "an empty file", 'start with units = "mm N"'),
    section("blank", " \n\t\n", 2, "an empty file"),
    section("comment alone", "# nothing\n", 2, "no keys"),
    section("NUL byte", CHANNEL.replace("web", "w\0b"), 2, "a binary file (byte 0 at offset"),
    section(
        "Latin-1", CHANNEL.replace("web", "Stegh\u00f6he").encode("latin-1"), 2, "byte 0xf6", "UTF-8 text"
    ),
    section("UTF-16", CHANNEL.encode("utf-16"), 2, "a binary file"),
    section("lone surrogate", b'title = "\xed\xa0\x80"\n' + CHANNEL.encode(), 2, "byte 0xed", "UTF-8 text"),
    section("escaped surrogate", 'title = "\\ud800"\n' + CHANNEL, 2, "valid TOML"),
    section("byte order mark", b"\xef\xbb\xbf" + CHANNEL.encode(), 0, "torsion constant"),
    section("Windows line ends", CHANNEL.replace("\n", "\r\n"), 0, "torsion constant"),
    section("old Macintosh line ends", CHANNEL.replace("\n", "\r"), 2, "valid TOML"),
    section("4 MB of comment", CHANNEL + "# " + "x" * 4_000_000, 2, "a larger file", "at most 4 MB"),
    section("3 MB of comment", CHANNEL + "# " + "x" * 3_000_000, 0, "torsion constant"),
    section("folder", lambda path: path.mkdir(), 2, "must be a section file or a folder with *.toml files"),
    section("pipe", os.mkfifo, 2, "a pipe or device"),
    section("device", lambda path: path.symlink_to("/dev/zero"), 2, "a pipe or device"),
    section("link to itself", lambda path: path.symlink_to(path.name), 2, "cannot be read"),
    section("link to nothing", lambda path: path.symlink_to("absent"), 2, "no such file", "check the path"),
    Trial("no such file", {}, 2, ("no such file",)),
    Trial("name with a line break", {}, 2, ("no such file",), ("compare", "gi\nven\x1b[2J.toml")),
    Trial("name with a NUL", {}, 2, ("cannot be read",), ("compare", "gi\0ven.toml")),
    Trial("very long name", {}, 2, ("cannot be read",), ("compare", "x" * 5000)),
    Trial("file as folder", {"a": CHANNEL}, 2, ("a part of the path is a file",), ("compare", "a/b.toml")),
    Trial("folder of nothing", {"a/b": ""}, 2, ("a folder with none",), ("compare", "a")),
    Trial(
        "good and bad together",
        {"a.toml": CHANNEL, "b.toml": ""},
        2,
        ("b.toml: must be a section file",),
        ("compare", "a.toml", "b.toml", "--accuracy", "1e-2"),
    ),
)

FORMS = (
    section("YAML", "units: mm N\npoints:\n  a: [0, 0]\n", 2, "line 1", "valid TOML"),
    section("JSON", '{"units": "mm N"}', 2, "line 1", "valid TOML"),
    section("XML", "<?xml version='1.0'?><section/>", 2, "valid TOML"),
    section("prose", "A channel of 60 by 30.", 2, "valid TOML"),
    section("cut off", CHANNEL[:-9], 2, "valid TOML"),
    section("key twice", channel("t = 2", "t = 2\nt = 3"), 2, "line 4", "stands twice"),
    section("table twice", CHANNEL + "[points]\ne = [1, 2]\n", 2, "stands twice"),
    section("walls as a table", channel('[[walls]]\nname = "low"', '[walls]\nname = "low"'), 2, "stands twice"),
    section("deep lists", "x = " + "[" * 100_000, 2, "nested very deep"),
    section("deep tables", "x = " + "{a = " * 20_000, 2, "nested very deep"),
    section("long dotted key", ".".join("a" * 3000) + " = 1\n" + CHANNEL, 2, "16 dotted parts"),
    section("integer of 5,000 digits", channel("t = 2", "t = " + "9" * 5000), 2, "thousands of digits"),
    section("integer of 400 digits", channel("t = 2", "t = " + "9" * 400), 2, "magnitude at most 1e+30"),
    section("1e400", channel("t = 2", "t = 1e400"), 2, "finite"),
    section("nan", channel("a = [30, 0]", "a = [30, nan]"), 2, "a finite number"),
    section("date for a number", channel("t = 2", "t = 2001-02-03"), 2, "parameters.t", "a number"),
    section("true for a number", channel("t = 2", "t = true"), 2, "parameters.t", "a number", "got true"),
    section("text for a list", channel('["a", "b"]', '"a, b"'), 2, "walls[0].path"),
    section("three coordinates", channel("[30, 60]", "[30, 60, 0]"), 2, "points.d"),
    section("unknown key", CHANNEL + "thicknes = 2\n", 2, "thicknes", 'did you mean "thickness"?'),
    section("dunder key", CHANNEL + "__class__ = 2\n", 2, "__class__", "must be a known key"),
    section("no units", CHANNEL[14:], 2, "units"),
    section("other units", channel("mm N", "furlong stone"), 2, '"furlong stone"', '"mm N"'),
    section("later format", "schema = 99\n" + CHANNEL, 2, "schema", "got 99"),
    section("format as text", 'schema = "1"\n' + CHANNEL, 2, "schema"),
    section("no walls", 'units = "mm N"\n[points]\na = [0, 0]\n', 2, "walls"),
    section("empty walls", 'units = "mm N"\nwalls = []\n[points]\na = [0, 0]\n', 2, "walls"),
    section("two thousand and one walls", _comb(2001), 2, "2000"),
    section("boom count of a milliard", CHANNEL + '[[booms]]\nwall = "web"\ncount = 1000000000\narea = 5\n', 2,
            "a whole number from 1 to 1000"),
    section("booms without end", CHANNEL + '[[booms]]\nwall = "web"\ncount = 1000\narea = 5\n' * 30, 2, "20000"),
    section("probes without end", CHANNEL + PROBE.format("web", 0.5) * 6000, 2, "5000"),
    section("10,000 faults", CHANNEL + "".join(f"k{i} = 1\n" for i in range(10_000)), 2, "more faults"),
)  # fmt: skip

NUMBERS = (
    section("code for a number", channel('thickness = "t"', "thickness = \"__import__('os').system('touch run')\""), 2,
            "walls[0].thickness", "arithmetic on parameters"),
    section("attribute", channel('thickness = "t"', 'thickness = "t.__class__"'), 2, "walls[0].thickness"),
    section("tower of powers", channel("t = 2", 't = "9 ** 9 ** 9 ** 9"'), 2, "parameters.t"),
    section("10,000 brackets", channel("t = 2", f't = "{"(" * 10_000}1{")" * 10_000}"'), 2, "parameters.t"),
    section("a million signs", channel("t = 2", f't = "{"-" * 1_000_000}1"'), 2, "parameters.t"),
    section("root of minus one", channel("t = 2", 't = "sqrt(-1)"'), 2, "square root of a negative number"),
    section("division by zero", channel("t = 2", 't = "1 / (2 - 2)"'), 2, "division by zero"),
    section("letter that looks like t", channel('thickness = "t"', 'thickness = "\u0442"'), 2, "walls[0].thickness"),
    section("digits that look like 2", channel("t = 2", 't = "\uff12"'), 2, "parameters.t"),
    section("minus sign of typography", channel("t = 2", 't = "3 \u2212 1"'), 2, "a minus is written -"),
    section("decimal comma", channel("t = 2", 't = "2,5"'), 2, "a decimal point is written as a point"),
    section("circle", channel("t = 2", 't = "u"\nu = "t"'), 2, "circular: t -> u -> t"),
    section("later parameter", channel("t = 2", 't = "u"\nu = 2'), 2, "move it up"),
    section("parameter named pi", channel("t = 2", "t = 2\npi = 3"), 2, "parameters.pi"),
    section("2,000 parameters", channel("t = 2", "t = 2\n" + "".join(f"p{i} = {i}\n" for i in range(2001))), 2, "2000"),
    section("thickness 0", channel("t = 2", "t = 0"), 2, "> 0"),
    section("thickness -1", channel("t = 2", "t = -1"), 2, "> 0"),
    section("thickness 1e-31", channel("t = 2", "t = 1e-31"), 2, "magnitude 1e-30 to 1e+30"),
    section("places at 1e31", channel("[30, 60]", "[30, 1e31]"), 2, "magnitude"),
    section("taper to nothing", channel('thickness = "t"', "thickness = { from = 2, to = 0 }"), 2, "> 0"),
    section("share of 2", CHANNEL + "direct_share = 2\n", 2, "direct_share", "from 0 to 1"),
    section("nu of 0.7", CHANNEL + "[materials.m]\nE = 1\nnu = 0.7\n", 2, "materials.m.nu", "0.5"),
    section("E of 0", CHANNEL + "[materials.m]\nE = 0\nnu = 0.3\n", 2, "materials.m.E", "> 0"),
    section("override of nothing", CHANNEL, 2, 'set "u = 3"', "a parameter",
            command=("compare", "given.toml", "--set", "u = 3")),
    section("override with code", CHANNEL, 2, "set", "arithmetic on parameters",
            command=("compare", "given.toml", "--set", "t = open('x', 'w')")),
    section("override without value", CHANNEL, 2, "name = value", command=("compare", "given.toml", "--set", "t")),
    section("accuracy of 0", CHANNEL, 2, "from 1e-08 to 0.01", command=("compare", "given.toml", "--accuracy", "0")),
    section("accuracy nan", CHANNEL, 2, "from 1e-08", command=("compare", "given.toml", "--accuracy", "nan")),
)  # fmt: skip

NAMES = (
    section("escape codes in the title", 'title = "\\u001b[2J\\u001b]0;x\\u0007"\n' + CHANNEL, 2, "title", "printable"),
    section("direction marks in the title", 'title = "a\u202eb"\n' + CHANNEL, 2, "title", "printable"),
    section("line break in a name", CHANNEL.replace('"web"', '"we\\nb"'), 2, "walls[1].name"),
    section("escape codes in a key", CHANNEL + '"\\u001b[31m" = 1\n', 2, "\\x1b[31m"),
    section("markup in the title", 'title = "[bold red]x[/bold red] <script> :smile: {0} %s"\n' + CHANNEL, 0,
            "[bold red]x[/bold red] <script> :smile: {0} %s"),
    section("title of 300 letters", f'title = "{"x" * 300}"\n' + CHANNEL, 2, "title", "200"),
    section("title in many scripts", 'title = "\u0411\u0430\u043b\u043a\u0430 \u6881 \U0001f6e9 e\u0301 \u0645"\n' + CHANNEL, 0, "\u6881"),
    section("wall twice", CHANNEL.replace('"web"', '"low"'), 2, '"low"', "walls[1].name"),
    section("path to nowhere", channel('["c", "d"]', '["c", "e"]'), 2, "walls[2].path"),
    section("path of one point", channel('["c", "d"]', '["c"]'), 2, "walls[2].path"),
    section("load of no name", CHANNEL + "[[loads]]\nshear = [0, 1]\n", 2, "loads[0].name"),
    section("load twice", CHANNEL + LOAD.format('"b"') * 2, 2, '"gust"', "loads[1].name"),
    section("name of a unit load", CHANNEL + LOAD.format('"b"').replace("gust", "unit Vx"), 2, "unit Vx"),
    section("load nowhere", CHANNEL + LOAD.format('"e"'), 2, "loads[0].through"),
    section("probe on no wall", CHANNEL + PROBE.format("webb", 0.5), 2, 'did you mean "web"?'),
    section("probe beyond the wall", CHANNEL + PROBE.format("web", 1.5), 2, "probes[0].at"),
    section("cut of an open section", CHANNEL + '[[cuts]]\nwall = "web"\nat = 0.5\n', 2, "falls in two"),
    section("stated nothing", CHANNEL + '[[stated]]\nquantity = "beauty"\nvalue = 1\nsource = "x"\n', 2, "stated[0].quantity"),
    section("criterion below 0", CHANNEL + "[criteria]\narea = -1\n", 2, "criteria.area"),
    section("profile of itself", CHANNEL + '[[placed]]\nprofile = "p"\nwall = "web"\nat = 0.5\n', 2, "placed[0].profile"),
    section("placed a milliard times",
            CHANNEL + '[profiles.p]\npoints = { f = [0, 0], g = [0, 5] }\nwalls = [{ path = ["f", "g"], thickness = 1 }]\n'
            '[[placed]]\nprofile = "p"\nwall = "web"\ncount = 1000000000\n', 2, "placed[0].count"),
    section("placed beyond the limit",
            CHANNEL + '[profiles.p]\npoints = { f = [0, 0], g = [0, 5] }\nwalls = [{ path = ["f", "g"], thickness = 1 }]\n'
            + '[[placed]]\nprofile = "p"\nwall = "web"\ncount = 1000\n' * 4, 2, "2000"),
    section("names that would leave the folder",
            CHANNEL + LOAD.format('"b"').replace("gust", "../../../out"),
            0, "hold", command=(*["compare", "given.toml", "--accuracy", "1e-2", "--working", "--json", "out.json"],)),
    section("formulas for names", CHANNEL.replace('"web"', '"=1+cmd()"') + LOAD.format('"b"').replace("gust", "@x"), 0,
            "=1+cmd()", command=(*["compare", "given.toml", "--accuracy", "1e-2", "--table", "walls"],)),
)  # fmt: skip

GEOMETRY = (
    section("wall of no length", channel("b = [0, 0]", "b = [30, 0]"), 2, "points.b", "a place of its own"),
    section("walls that cross", channel("d = [30, 60]", "d = [20, -30]"), 2, "crossing", "add a point there"),
    section("walls that overlap", channel("d = [30, 60]", "d = [0, 20]"), 2, "overlapping"),
    section("wall that touches", channel("d = [30, 60]", "d = [15, 0]"), 2, "add the point"),
    section("two parts", channel('["c", "d"]', '["d", "e"]').replace("d = [30", "e = [90, 90]\nd = [30"), 2, "2 parts"),
    section("wall back and forth", channel('["c", "d"]', '["c", "b"]'), 2, "walls[2]"),
    section("arc through its end", CHANNEL + "arc = { through = [0, 60] }\n", 2, "walls[2].arc"),
    section("arc on a line", CHANNEL + "arc = { through = [15, 60] }\n", 2, "walls[2].arc"),
    section("arc of a milliard", CHANNEL + "arc = { through = [15, 60.0000001] }\n", 0, "shear area"),
    section("arc through the web", CHANNEL + "arc = { through = [-1, 30] }\n", 2, "cross"),
    section("radius too large", CHANNEL + "[corners]\nb = { inner_radius = 100 }\n", 2, "corners"),
    section("corner at an end", CHANNEL + "[corners]\na = { inner_radius = 1 }\n", 2, "corners.a"),
    section("walls thicker than long", channel("t = 2", "t = 500"), 1, "low"),
    section("a thousandth of a degree", _angle(0.001), 2, "must be"),
    section("a degree", _angle(1.0), 2, "must be"),
    section("a thousandth of a degree, thin", _angle(0.001, 1e-4), 2, "must be"),
    section("a thousandth of a degree off straight", _angle(179.999), 1, "shear area"),
    section("a milliardth of a degree off straight", _angle(180.0 - 1e-9), 0, "shear area"),
    section("thickness ratio of 1,000", CHANNEL.replace('"t"', "2e-3", 1), 1, "torsion constant"),
    section("thickness ratio of 10,000", CHANNEL.replace('"t"', "2e-4", 1), 1, "torsion constant", long=True),
    section("too slender", CHANNEL.replace('"t"', "2e-5", 1), 2, "1/1e+06"),
    section("at 1e9", _moved(1e9), 2, "1e+06 times the section's size from the origin", "move the origin"),
    section("at 1e7", _moved(1e7), 0, "torsion constant"),
    section("a fan of 300", _fan(300), 2, "must be"),
    section("spokes too near", _fan(40), 2, "must be"),
    section("mirror of what crosses", CHANNEL + '[mirror]\nabout = ["x"]\n', 0, "shear centre"),
    section("points by the thousand at one place",
            CHANNEL.replace("[points]", "[points]\n" + "".join(f"q{i} = [5, 5]\n" for i in range(3000))), 2,
            "a place of its own", "more faults"),
    section("box with no inside", BOX.replace("thickness = 2", "thickness = 39.999"), 1, "torsion constant"),
    section("box with hardly an inside", BOX.replace("thickness = 2", "thickness = 39.9"), 1, "torsion constant"),
)  # fmt: skip

SECTIONS = (*BYTES, *FORMS, *NUMBERS, *NAMES, *GEOMETRY)
