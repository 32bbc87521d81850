"""Points, walls, booms and loads from CSV tables beside the section file."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from pathlib import Path

import pytest

from crosscheck.section_file.model import BoomSpec, LoadSpec, SectionFile
from crosscheck.section_file.reader import SectionFaults, read_section, read_source, section_from

TEXT = (
    'units = "mm N"\n[parameters]\nh = 80\n[points]\na = [0, 0]\nb = [50, 0]\nc = [50, "h"]\n'
    '[[walls]]\npath = ["a", "b", "c"]\nthickness = 2\n[tables]\nloads = "loads.csv"\n'
)
HEADER = "name;shear_x;shear_y;through_x;through_y;torque\n"

Fails = Callable[..., list[str]]


@pytest.fixture
def read(tmp_path: Path) -> Callable[..., object]:
    def read_both(table: str | bytes, text: str = TEXT, name: str = "loads.csv") -> object:
        (tmp_path / "part.toml").write_text(text, encoding="utf-8")
        (tmp_path / name).write_bytes(table if isinstance(table, bytes) else table.encode())
        return read_section(tmp_path / "part.toml")

    return read_both


@pytest.fixture
def fails(read: Callable[..., object]) -> Fails:
    def lines(*arguments: object) -> list[str]:
        with pytest.raises(SectionFaults) as caught:
            read(*arguments)
        return [line.partition("part.toml: ")[2] for line in caught.value.lines]

    return lines


def test_semicolons_decimal_commas_and_arithmetic(read: Callable[..., object], tmp_path: Path) -> None:
    table = HEADER + "gust;;-1200,5;0;h/2;\n\nturn;10;;25;0;1,5e3\n"
    section = read(table)
    assert section.loads == (
        LoadSpec("gust", (0.0, -1200.5), (0.0, 40.0)),
        LoadSpec("turn", (10.0, 0.0), (25.0, 0.0), 1500.0),
    )
    assert section.notes[0] == "loads.csv: 2 loads, semicolons between columns, decimal comma"
    assert section.tables == {"loads.csv": hashlib.sha256((tmp_path / "loads.csv").read_bytes()).hexdigest()}


def test_commas_between_columns(read: Callable[..., object]) -> None:
    section = read('name,axial,moment_x,moment_y,bimoment,through\n"a, b",-3.5,1e3,,7,\n')
    assert section.loads == (LoadSpec("a, b", axial=-3.5, moment=(1000.0, 0.0), bimoment=7.0),)
    assert section.notes[0] == "loads.csv: 1 load, commas between columns, decimal point"


def test_loads_of_the_file_come_first(read: Callable[..., object]) -> None:
    own = '[[loads]]\nname = "own"\ntorque = 5\n'
    section = read("name,torque\nother,6\n", TEXT + own)
    assert [load.name for load in section.loads] == ["own", "other"]


def test_byte_order_mark_and_foreign_line_ends(read: Callable[..., object]) -> None:
    assert read(b"\xef\xbb\xbfname;torque\r\ngust;6,5\r\n").loads[0].torque == 6.5


def test_one_source_serves_many_sections(read: Callable[..., object], tmp_path: Path) -> None:
    read("name,torque\ngust,h\n")
    source = read_source(tmp_path / "part.toml")
    (tmp_path / "loads.csv").unlink()
    assert [section_from(source, {"h": h}).loads[0].torque for h in (70, 90)] == [70.0, 90.0]


FAULTS = [
    ("a faulty number", HEADER + "gust;0;x1;1;2;\n", "loads.csv line 2, column shear_y: must be", '"x1"'),
    (
        "a reserved name",
        "name;torque\nunit T;3\n",
        "loads.csv line 2, column name: must be named",
        '"unit T"',
    ),
    (
        "a repeated name",
        "name;torque\na;3\na;4\n",
        "loads.csv line 3, column name: must be unique",
        '"a" again',
    ),
    ("a name missing", "name;torque\n;3\n", "loads.csv line 2: name: must be given", "nothing"),
    ("no force", "name;torque\na;\n", "loads.csv line 2: must be given a force", "no force"),
    ("a shear without a line", "name;shear_y\na;3\n", "loads.csv line 2: through: must be given", "nothing"),
    ("an unknown point", "name;shear_y;through\na;3;q\n", "loads.csv line 2, column through: must be", '"q"'),
    ("an unknown column", "name;torqe\na;3\n", "tables.loads: must be a table with the columns", '"torqe"'),
    ("a column twice", "name;torque;torque\na;3;4\n", "tables.loads: must be a table with each", '"torque"'),
    (
        "no name column",
        "torque\n3\n",
        "tables.loads: must be a table with the columns name",
        "without the column",
    ),
    ("a short row", "name;torque\na\n", "tables.loads: must be a table with the 2 columns", "1 columns"),
    ("both marks", "name;torque;axial\na;3.5;4,5\n", "tables.loads: must be a table", "points"),
    ("half a place", "name;shear_y;through_x\na;3;4\n", "tables.loads: must be a table with both", "one of"),
    ("two places", "name;shear_y;through;through_x;through_y\na;3;b;1;2\n", "tables.loads", "besides"),
    ("no row", "name;torque\n", "tables.loads: must be a table of at least one load", "no row"),
    ("an empty file", "", "tables.loads: must be", "an empty file"),
    ("a binary file", b"name\0", "tables.loads: must be UTF-8 text", "binary"),
    ("an open quote", 'name;torque\n"a;3\n', "tables.loads: must be", "1 columns"),
]  # fmt: skip


@pytest.mark.parametrize(("table", "line", "found"), [r[1:] for r in FAULTS], ids=[r[0] for r in FAULTS])
def test_faults_name_the_line(fails: Fails, table: str | bytes, line: str, found: str) -> None:
    first = fails(table)[0]
    assert first.startswith(line)
    assert found in first.partition(", got ")[2]


@pytest.mark.parametrize("name", ["../loads.csv", "/etc/hostname", "sub/../../loads.csv", "missing.csv", "."])
def test_tables_stay_in_the_folder_of_the_file(tmp_path: Path, name: str) -> None:
    folder = tmp_path / "here"
    folder.mkdir()
    (tmp_path / "loads.csv").write_text("name,torque\nstolen,3\n")
    (folder / "part.toml").write_text(TEXT.replace("loads.csv", name))
    with pytest.raises(SectionFaults) as caught:
        read_section(folder / "part.toml")
    (line,) = caught.value.lines
    assert "tables.loads: must be a file in the folder of the section file" in line
    assert "stolen" not in line


def test_a_link_that_leads_out_of_the_folder_is_refused(tmp_path: Path) -> None:
    folder = tmp_path / "here"
    folder.mkdir()
    (tmp_path / "loads.csv").write_text("name,torque\nstolen,3\n")
    (folder / "loads.csv").symlink_to(tmp_path / "loads.csv")
    (folder / "part.toml").write_text(TEXT)
    with pytest.raises(SectionFaults, match="must be a file in the folder"):
        read_section(folder / "part.toml")


def test_a_table_that_is_no_name_is_a_fault_of_the_form(fails: Fails) -> None:
    assert fails("name,torque\na,1\n", TEXT.replace('"loads.csv"', "3"))[0].startswith(
        "tables.loads: must be"
    )


def test_a_thousand_and_one_loads_pass_the_limit(fails: Fails) -> None:
    rows = "".join(f"load {i};1\n" for i in range(1001))
    assert "at most 1000 entries" in fails("name;torque\n" + rows)[0]


PARTS = (
    'units = "mm N"\n[parameters]\nh = 80\n[points]\na = [0, 0]\n'
    '[tables]\npoints = "points.csv"\nwalls = "walls.csv"\nbooms = "booms.csv"\n'
)
GOOD_PARTS = {
    "points": "name; x [mm]; y (mm)\nb; 50,5; 0\nc; 50,5; h\nd; 0; h\n",
    "walls": (
        "name,start,end,thickness [mm],thickness_from,thickness_to,through_x,through_y,"
        "direct_share,seen_by,line\n"
        "floor,a,b,2,,,,,,,\nside,b,c,,1.5,h/40,,,0.5,,\nnose,d,a,2,,,-20,40,,,left face\n"
        "lid,c,d,2,,,,,,theory,\n"
        "real lid,c,d,2,,,,,,fe,\n"
    ),
    "booms": "point;wall;at;area [mm²];seen_by\na;;;120;\n;floor;0,25;60,5;theory\n",
}


def read_parts(folder: Path, **changed: str) -> SectionFile:
    (folder / "part.toml").write_text(PARTS, encoding="utf-8")
    for kind, table in {**GOOD_PARTS, **changed}.items():
        (folder / f"{kind}.csv").write_text(table, encoding="utf-8")
    return read_section(folder / "part.toml")


def test_points_walls_and_booms(tmp_path: Path) -> None:
    section = read_parts(tmp_path, walls=GOOD_PARTS["walls"].replace("left face", "midline"))
    assert section.points == {"a": (0.0, 0.0), "b": (50.5, 0.0), "c": (50.5, 80.0), "d": (0.0, 80.0)}
    assert [(w.name, w.start, w.end, w.thickness, w.seen_by) for w in section.walls] == [
        ("floor", "a", "b", (2.0, 2.0), "both"),
        ("side", "b", "c", (1.5, 2.0), "both"),
        ("nose", "d", "a", (2.0, 2.0), "both"),
        ("lid", "c", "d", (2.0, 2.0), "theory"),
        ("real lid", "c", "d", (2.0, 2.0), "fe"),
    ]
    assert section.walls[2].arc_through == (-20.0, 40.0)
    assert section.walls[1].direct_share == 0.5
    assert section.booms == (
        BoomSpec(120.0, "a"),
        BoomSpec(60.5, wall="floor", at=0.25, seen_by="theory"),
    )
    assert section.notes == (
        "points.csv: 3 points, semicolons between columns, decimal comma",
        "walls.csv: 5 walls, commas between columns, decimal point",
        "booms.csv: 2 booms, semicolons between columns, decimal comma",
    )
    assert set(section.tables) == {"points.csv", "walls.csv", "booms.csv"}


def test_the_line_column_is_read(tmp_path: Path) -> None:
    section = read_parts(tmp_path)
    # The nose runs downwards on the left: its left face is the inner one.
    assert section.points["a"][1] == pytest.approx(0.0, abs=1e-12)
    assert section.points["a"][0] < 0.0


PART_FAULTS = [
    (
        "a place that is no number",
        {"points": "name;x;y\nb;50,5;0\nc;50,5;hh\nd;0;h\n"},
        "points.csv line 3, column y: must be a number or arithmetic on parameters",
    ),
    (
        "a point twice",
        {"points": GOOD_PARTS["points"] + "a; 1; 1\n"},
        'tables.points: must be a table of points that have no place yet, got "a" again at points.csv line 5',
    ),
    (
        "half a place",
        {"points": GOOD_PARTS["points"] + "e; 1;\n"},
        "tables.points: must be a table with both or none in a row, got one of x and y at points.csv line 5",
    ),
    (
        "a wall to nowhere",
        {"walls": "start,end,thickness\na,b,2\nb,c,2\nc,dd,2\n"},
        'walls.csv line 4, column end: must be a point of [points], got "dd"; did you mean "d"?',
    ),
    (
        "a wall without thickness",
        {"walls": "name,start,end,thickness\nfloor,a,b,2\nside,b,c,\nlid,c,d,2\n"},
        "walls.csv line 3: thickness: must be a thickness > 0",
    ),
    (
        "two thicknesses",
        {
            "walls": "name,start,end,thickness,thickness_from,thickness_to\n"
            "floor,a,b,2,1,2\nside,b,c,1,,\nlid,c,d,2,,\n"
        },
        'tables.walls: must be a table with one of them in a row, got "thickness_from" besides thickness',
    ),
    (
        "a boom on a wall that is not there",
        {"booms": "wall,at,area\nflor,0.5,3\n"},
        'booms.csv line 2, column wall: must be the name of a wall, got "flor"; did you mean "floor"?',
    ),
    (
        "a boom at a point and on a wall",
        {"booms": "point,wall,at,area\na,floor,0.5,3\n"},
        'tables.booms: must be a table with one of them in a row, got "at" besides at at booms.csv line 2',
    ),
]


@pytest.mark.parametrize(
    ("changed", "start"), [row[1:] for row in PART_FAULTS], ids=[row[0] for row in PART_FAULTS]
)
def test_faults_of_parts(tmp_path: Path, changed: dict[str, str], start: str) -> None:
    with pytest.raises(SectionFaults) as caught:
        read_parts(tmp_path, **changed)
    assert any(line.partition("part.toml: ")[2].startswith(start) for line in caught.value.lines), str(
        caught.value
    )


UNITS = [
    ("shear_x [kN]", 'the column "shear_x [kN]" in loads.csv', "N"),
    ("torque [N m]", 'the column "torque [N m]" in loads.csv', "N mm"),
    ("bimoment (N mm)", 'the column "bimoment (N mm)" in loads.csv', "N mm^2"),
    ("axial [furlong]", 'the column "axial [furlong]" in loads.csv', "N"),
]


@pytest.mark.parametrize(("column", "found", "unit"), UNITS)
def test_units_of_columns_are_those_of_the_file(fails: Fails, column: str, found: str, unit: str) -> None:
    (line,) = fails(f"name,{column}\ngust,5\n")
    name = column.split()[0]
    assert line == (
        f"tables.loads: must be a table in the units of the file ({unit} here), got {found}; "
        f"nothing is converted: write it as {name} [{unit}], with its numbers in that unit"
    )


@pytest.mark.parametrize("unit", ["N mm", "Nmm", "mm N", "N·mm", "N*mm", "N.mm"])
def test_units_may_be_written_as_people_do(read: Callable[..., object], unit: str) -> None:
    assert read(f"name,torque [{unit}],bimoment (N mm²),kind\ngust,5,6,limit\n").loads == (
        LoadSpec("gust", torque=5.0, bimoment=6.0, kind="limit"),
    )


def test_names_have_no_unit(fails: Fails) -> None:
    (line,) = fails("name [N],torque\ngust,5\n")
    assert line.startswith("tables.loads: must be a table without units on names and words")
