"""CSV tables beside a section file, and outlines written out in it."""

from __future__ import annotations

from pathlib import Path

from trial import CHANNEL, Content, Trial, outlined, section

LOADS = CHANNEL + '[tables]\nloads = "{}"\n'
PLAIN = "name,shear_x,shear_y,through\ngust,0,-900,b\n"


def loads(name: str, table: Content, status: int, *words: str, called: str = "loads.csv") -> Trial:
    """A table of loads beside the channel."""
    return section(name, LOADS.format(called), status, *words, loads_csv=table)


def _linked(path: Path) -> None:
    path.symlink_to("../secret.csv")


def _linked_folder(path: Path) -> None:
    path.symlink_to("..")


def _box(width: str, height: str = "40") -> str:
    return f"[[0, 0], [{width}, 0], [{width}, {height}], [0, {height}]]"


TABLES = (
    loads("table as it should be", PLAIN, 0, "loads.csv: 1 load", "gust"),
    loads("table with a byte order mark", b"\xef\xbb\xbf" + PLAIN.encode(), 0, "1 load"),
    loads("table with Windows line ends", PLAIN.replace("\n", "\r\n"), 0, "1 load"),
    loads("table with old line ends", PLAIN.replace("\n", "\r"), 2, "tables.loads"),
    loads("empty table", "", 2, "tables.loads", "an empty file"),
    loads("table of a heading", PLAIN[:29], 2, "no row below its header"),
    loads("table with NUL", PLAIN.replace("gust", "g\0"), 2, "a binary file"),
    loads("table in Latin-1", PLAIN.replace("gust", "B\u00f6").encode("latin-1"), 2, "byte 0xf6"),
    loads("table of a workbook", b"PK\x03\x04\x14\x00\x06\x00" + bytes(60), 2, "a binary file"),
    loads("5 MB table", PLAIN + "\n" * 5_000_000, 2, "at most 4 MB"),
    loads("unknown column", PLAIN.replace("shear_x", "sheer_x"), 2, 'did you mean "shear_x"?'),
    loads("column twice", PLAIN.replace("shear_x", "shear_y"), 2, "twice"),
    loads("other unit", PLAIN.replace("shear_x", "shear_x [kN]"), 2, "nothing is converted"),
    loads("row too short", PLAIN + "landing,1\n", 2, "line 3", "columns"),
    loads("row too long", PLAIN + "landing,1,2,b,5,6\n", 2, "line 3"),
    loads("quote never closed", PLAIN + '"landing,1,2,b\n', 2, "line 3"),
    loads("cell of a megabyte", PLAIN + "x" * 1_000_000 + ",1,2,b\n", 2, "line 3"),
    loads("both decimal marks", "name;shear_x;shear_y;through\na;1,5;0;b\nc;1.5;0;b\n", 2, "one decimal mark"),
    loads("thousands separators", "name;shear_x;shear_y;through\na;1.234,5;0;b\n", 2, "line 2, column shear_x"),
    loads("formula in a cell", PLAIN.replace("-900", "=1+1"), 2, "line 2, column shear_y"),
    loads("command in a cell", PLAIN.replace("-900", "=cmd|' /C calc'!A0"), 2, "line 2, column shear_y"),
    loads("formula as a name", PLAIN.replace("gust", "=HYPERLINK(1)"), 0, "=HYPERLINK(1)"),
    loads("infinite cell", PLAIN.replace("-900", "inf"), 2, "line 2, column shear_y", 'got "inf"'),
    loads("hexadecimal cell", PLAIN.replace("-900", "0x1F"), 2, "line 2, column shear_y"),
    loads("digits of another script", PLAIN.replace("-900", "\u0661\u0662"), 2, "line 2, column shear_y"),
    loads("escape codes in a cell", PLAIN.replace("gust", "\x1b[2J"), 2, "line 2, column name"),
    loads("1,001 rows", PLAIN.split("\n")[0] + "\n" + "".join(f"l{i},0,1,b\n" for i in range(1001)), 2, "1000"),
    loads("no such table", PLAIN, 2, "no such file", called="other.csv"),
    loads("table above the folder", PLAIN, 2, "in the folder of the section file", called="../secret.csv"),
    loads("table by its full path", PLAIN, 2, "in the folder of the section file", called="/etc/passwd"),
    loads("table by way of a link", _linked, 2, "in the folder of the section file"),
    section("table in a linked folder", LOADS.format("sub/secret.csv"), 2, "in the folder of the section file",
            sub=_linked_folder),
    loads("table that is a device", lambda path: path.symlink_to("/dev/zero"), 2, "in the folder of the section file"),
    loads("table that is a folder", lambda path: path.mkdir(), 2, "a directory"),
    section("unknown table", CHANNEL + '[tables]\nlords = "loads.csv"\n', 2, 'did you mean "loads"?'),
)  # fmt: skip

OUTLINES = (
    section("outline of two places", outlined(boundary="[[0, 0], [1, 0]]"), 2, "outline.boundary"),
    section("outline on a line", outlined(boundary="[[0, 0], [1, 0], [2, 0]]"), 2, "outline.boundary"),
    section("outline that crosses itself", outlined(boundary="[[0, 0], [9, 9], [9, 0], [0, 9]]"), 2, "meets itself"),
    section("outline of one place", outlined(boundary="[[1, 1], [1, 1], [1, 1]]"), 2, "outline.boundary"),
    section("outline without area", outlined(boundary=_box("1e-25")), 2, "outline.boundary"),
    section("outline of a hair", outlined(boundary=_box("1e-5", "1000")), 1, "area"),
    section("outline at 1e12", outlined(boundary="[[1e12, 0], [1000000000060, 0], [1000000000060, 40], [1e12, 40]]"), 2,
            "times the section's size from the origin"),
    section("outline with text", outlined(boundary='[[0, 0], [60, 0], [60, "x"]]'), 2, "outline.boundary[2]"),
    section("outline with nan", outlined(boundary="[[0, 0], [60, 0], [60, nan]]"), 2, "outline.boundary[2]"),
    section("outline of a number", outlined(boundary="5"), 2, "outline.boundary"),
    section("outline of nothing", outlined(), 2, "outline.boundary", "write boundary ="),
    section("outline of 20,001 places", outlined(boundary="[" + "[0, 0], " * 20_001 + "]"), 2, "8000"),
    section("opening outside", outlined(boundary=_box("60"), openings="[{ centre = [90, 20], radius = 5 }]"), 2, "opening 0"),
    section("opening across", outlined(boundary=_box("60"), openings="[{ centre = [60, 20], radius = 5 }]"), 2, "meet"),
    section("opening that is the boundary", outlined(boundary=_box("60"), openings=f"[{_box('60')}]"), 2, "outline"),
    section("opening in an opening",
            outlined(boundary=_box("60"), openings="[{ centre = [30, 20], radius = 9 }, { centre = [30, 20], radius = 5 }]"),
            2, "inside"),
    section("opening of no radius", outlined(boundary=_box("60"), openings="[{ centre = [30, 20], radius = 0 }]"), 2, "> 0"),
    section("20,000 openings", outlined(boundary=_box("60"), openings="[" + "{ centre = [30, 20], radius = 5 }, " * 20_000 + "]"),
            2, "at most 500 rings"),
    section("arc to nowhere", outlined(boundary="[[0, 0], { through = [1, 1] }, [60, 40]]"), 2, "outline.boundary[1].to"),
    section("arc first", outlined(boundary="[{ through = [1, 1], to = [2, 2] }, [60, 40]]"), 2, "begins at a corner"),
    section("arc with its middle outside", outlined(boundary="[[0, 0], { through = [90, 0], to = [60, 0] }, [60, 40]]"), 2, "arc"),
    section("outline and boom", outlined(boundary=_box("60")) + '[[booms]]\nat = "a"\narea = 5\n', 2, "belongs to walls"),
    section("outline of another section", CHANNEL + f"[outline]\nboundary = {_box('60')}\n", 2, "in agreement with the walls"),
    section("boundary and drawing", outlined(boundary=_box("60"), file='"part.dxf"'), 2, "left out beside file"),
)  # fmt: skip
