"""What a good section file becomes."""

from __future__ import annotations

import hashlib
import json
import math
import pickle
import time
from collections.abc import Callable
from pathlib import Path

import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.section_file.model import BoomSpec, CornerSpec, LoadSpec, ProbeSpec, StatedSpec
from crosscheck.section_file.reader import (
    SectionFaults,
    SectionFile,
    read_section,
    read_source,
    section_from,
)

Read = Callable[..., SectionFile]

SHIPPED = Path(__file__).parents[2] / "cases" / "sections"
HEAD = 'units = "mm N"\n[points]\na = [0, 0]\nb = [50, 0]\nc = [50, 80]\nd = [0, 80]\n'
WALL = '[[walls]]\npath = ["a", "b", "c"]\nthickness = 2\n'


def test_lipped_channel() -> None:
    section = read_section(SHIPPED / "lipped_channel_floor_beam.toml")
    assert (section.length_unit, section.force_unit, section.judged) == ("mm", "N", "midline")
    assert section.title == "Floor beam, lipped channel with unequal lips"
    assert section.sha256 == hashlib.sha256(Path(section.path).read_bytes()).hexdigest()
    assert section.parameters["web_depth"] == 118.0
    assert section.points["lower_lip_end"] == (52.0, 21.0 - 59.0)
    assert [wall.name for wall in section.walls] == [
        "lower lip",
        "lower flange",
        "web",
        "upper flange",
        "upper lip",
    ]
    assert all(wall.thickness == (1.6, 1.6) for wall in section.walls)
    assert {wall.material for wall in section.walls} == {"sheet"} == {section.base_material}
    assert_allclose(section.materials["sheet"].G, 72000 / (2 * 1.33), rtol=1e-15, atol=0.0)
    gust, landing = section.loads
    assert gust == LoadSpec("gust", (0.0, -1180.0), (23.0, 59.0))
    assert landing == LoadSpec("landing", (310.0, -3450.0), (0.0, 59.0), 12500.0, through_point="web_head")
    assert section.probes[0] == ProbeSpec("floor panel screws", "upper flange", 0.5)
    assert section.criteria == {"torsion_constant": 0.03}
    assert section.extent == 118.0
    assert section.wall("web").key == "walls[2]"
    assert section.notes == ()


def test_a_closed_path_and_default_names(read: Read) -> None:
    section = read(HEAD + '[[walls]]\npath = ["a", "b", "c", "d", "a"]\nthickness = [1, 2, 3, 4]\n')
    assert [(w.name, w.start, w.end, w.thickness[0]) for w in section.walls] == [
        ("a-b", "a", "b", 1.0),
        ("b-c", "b", "c", 2.0),
        ("c-d", "c", "d", 3.0),
        ("d-a", "d", "a", 4.0),
    ]
    assert section.materials == {}
    assert section.base_material is None
    assert section.walls[0].material is None
    assert section.title == "part"


def test_names_of_a_named_path(read: Read) -> None:
    text = HEAD + '[[walls]]\nname = "web"\npath = ["a", "b"]\nthickness = 1\n'
    text += '[[walls]]\nname = "rim"\npath = ["b", "c", "d"]\nthickness = 1\n'
    assert [w.name for w in read(text).walls] == ["web", "rim 1", "rim 2"]


def test_walls_on_one_line(read: Read) -> None:
    text = 'units = "in kip"\nwalls = [ { path = ["a", "b"], thickness = "0.1" }, ]\n'
    section = read(text + "points.a = [0, 0]\npoints.b = [1, 0]\n")
    assert (section.length_unit, section.force_unit) == ("in", "kip")
    assert section.walls[0].thickness == (0.1, 0.1)


def test_materials(read: Read) -> None:
    text = 'base_material = "wood"\n' + HEAD + WALL
    text += "[materials.wood]\nE = 9000\nG = 3600\n[materials.odd]\nE = 9000\nnu = 0.3\nG = 600\n"
    section = read(text)
    wood = section.materials["wood"]
    assert (wood.E, wood.G, wood.nu) == (9000.0, 3600.0, 0.25)
    assert section.materials["odd"].G == 600.0
    assert section.notes[0] == "materials.odd: G = 600 is taken as given; E/(2(1+nu)) is 3461.5"


def test_notes(read: Read) -> None:
    section = read(HEAD + WALL + "[criteria]\narea = 5\n")
    assert section.notes == (
        "criteria.area = 5 accepts 500 % (5 % is written 0.05)",
        'points that no wall and no load uses: "d"',
    )


def test_load_through_the_midline_shear_centre(read: Read) -> None:
    text = HEAD + WALL + '[[loads]]\nname = "x"\nshear = [1, 0]\nthrough = "midline shear centre"\n'
    assert read(text).loads[0].through == "midline shear centre"


def test_a_load_point_may_lie_on_a_point_of_the_section(read: Read) -> None:
    text = HEAD.replace("d = [0, 80]", "reference = [50, 80]") + WALL
    text += '[[loads]]\nname = "x"\nshear = [1, 0]\nthrough = "reference"\n'
    section = read(text)
    assert section.loads[0].through == (50.0, 80.0)
    assert section.loads[0].through_point == "reference"
    assert section.notes == ()


OVERRIDABLE = 'units = "mm N"\n[parameters]\nt = 2\nu = "t * 2"\n' + HEAD.split("\n", 1)[1]
OVERRIDABLE += '[[walls]]\npath = ["a", "b", "c"]\nthickness = ["t", "u"]\n'


@pytest.mark.parametrize("overrides", [["t = 2.5"], ["t=2.5 "], {"t": 2.5}, ['t = "5 / 2"'], "t = 2.5"])
def test_overrides(read: Read, overrides: object) -> None:
    section = read(OVERRIDABLE, overrides)
    assert [w.thickness[0] for w in section.walls] == [2.5, 5.0]
    assert section.parameters == {"t": 2.5, "u": 5.0}
    assert list(section.overrides) == ["t"]


def test_an_override_may_use_earlier_parameters(read: Read) -> None:
    assert read(OVERRIDABLE, ["u = t / 4"]).parameters == {"t": 2.0, "u": 0.5}


def test_one_source_serves_many_sections() -> None:
    source = read_source(SHIPPED / "lipped_channel_floor_beam.toml")
    before = json.dumps(source.document)
    values = [section_from(source, {"thickness": t}).walls[0].thickness[0] for t in (1.0, 2.0, 3.0)]
    assert values == [1.0, 2.0, 3.0]
    assert json.dumps(source.document) == before


def test_byte_order_mark_and_foreign_line_ends(tmp_path: Path) -> None:
    path = tmp_path / "\u00f6l.toml"
    path.write_bytes(b"\xef\xbb\xbf" + (HEAD + WALL).replace("\n", "\r\n").encode())
    assert len(read_section(path).walls) == 2


@pytest.mark.parametrize("path", sorted(SHIPPED.glob("*.toml")), ids=lambda path: path.stem)
def test_shipped_files(path: Path) -> None:
    section = read_section(path)
    assert all(note.startswith(tuple(section.tables)) for note in section.notes)
    assert len(section.notes) == len(section.tables)
    assert section.loads
    assert section == read_section(path)
    assert pickle.loads(pickle.dumps(section)) == section
    assert section.walls or section.outline
    if not section.walls:
        return
    walls = [wall for wall in section.walls if wall.seen_by != "fe"]
    cells = len(walls) - len({p for w in walls for p in (w.start, w.end)}) + 1
    expected = {"box": 1, "cell": 1, "two_cell": 2, "three_cell": 3}
    assert cells == max((n for word, n in expected.items() if word in path.stem), default=0)


def test_there_are_sections_of_every_kind() -> None:
    assert len(list(SHIPPED.glob("*.toml"))) >= 16


def test_triangle_case_is_as_published_here() -> None:
    section = read_section(SHIPPED / "triangle_nose_cell.toml")
    assert [w.thickness[0] for w in section.walls] == [3.0, 2.0, 5.0]
    assert [section.points[w.start] for w in section.walls] == [(0.0, 0.0), (300.0, 0.0), (0.0, 160.0)]


def test_reading_is_quick_and_the_same_every_time() -> None:
    path = SHIPPED / "lipped_channel_floor_beam.toml"
    first = read_section(path)
    times = []
    for _ in range(5):
        began = time.perf_counter()
        again = read_section(path)
        times.append(time.perf_counter() - began)
        assert repr(again) == repr(first)
    assert sorted(times)[2] < 0.03


def test_faults_are_the_same_every_time(tmp_path: Path) -> None:
    path = tmp_path / "x.toml"
    path.write_text(HEAD + WALL.replace("2", "-2") * 3 + "[criteria]\nx = 1\n")
    texts = set()
    for _ in range(3):
        with pytest.raises(SectionFaults) as caught:
            read_section(path)
        texts.add(str(caught.value))
    assert len(texts) == 1


class TestFurtherKeys:
    """The model carries them: taking a row out of the table is enough to read them."""

    def test_arc(self, read: Read) -> None:
        text = HEAD + '[[walls]]\npath = ["a", "b"]\narc = { through = [25, "5 * 5"] }\nthickness = 1\n'
        assert read(text).walls[0].arc_through == (25.0, 25.0)

    def test_arc_and_chord_may_join_the_same_points_with_names(self, read: Read) -> None:
        bow = '[[walls]]\nname = "bow"\npath = ["a", "b"]\narc = { through = [25, 25] }\nthickness = 1\n'
        chord = '[[walls]]\nname = "chord"\npath = ["a", "b"]\nthickness = 1\n'
        assert [w.name for w in read(HEAD + bow + chord).walls] == ["bow", "chord"]

    def test_arc_in_line_is_refused(self, fault_lines: Callable[..., list[str]]) -> None:
        text = HEAD + '[[walls]]\npath = ["a", "b"]\narc = { through = [20, 0] }\nthickness = 1\n'
        assert fault_lines(text) == [
            "walls[0].arc.through: must be off the line through both points, "
            "got [20, 0] in line with both points"
        ]

    def test_arc_crossing_a_wall_is_refused(self, fault_lines: Callable[..., list[str]]) -> None:
        text = HEAD + 'e = [25, -9]\nf = [25, 60]\n[[walls]]\npath = ["a", "b"]\nthickness = 1\n'
        text += 'arc = { through = [25, 25] }\n[[walls]]\npath = ["e", "f"]\nthickness = 1\n'
        (line,) = fault_lines(text)
        assert line.startswith(
            "walls[1].path: must be clear of other walls except at shared points, "
            'got "e-f" crossing "a-b" (walls[0]) at (25, 2'
        )

    def test_taper_is_linear_by_length(self, read: Read) -> None:
        text = HEAD + '[[walls]]\npath = ["a", "b", "c"]\nthickness = { from = 3, to = 1.7 }\n'
        (first, second) = read(text).walls
        assert_allclose(first.thickness, (3.0, 2.5), rtol=1e-14, atol=0.0)
        assert_allclose(second.thickness, (2.5, 1.7), rtol=1e-14, atol=0.0)

    def test_taper_of_an_arc(self, read: Read) -> None:
        text = HEAD + '[[walls]]\npath = ["a", "b"]\narc = { through = [25, 25] }\n'
        assert read(text + "thickness = { from = 3, to = 1 }\n").walls[0].thickness == (3.0, 1.0)

    def test_two_materials_and_shares(self, read: Read) -> None:
        text = 'base_material = "m"\n' + HEAD + WALL + 'material = "n"\ndirect_share = 0\n'
        section = read(text + "[materials.m]\nE = 2\nnu = 0\n[materials.n]\nE = 1\nnu = 0.25\n")
        assert section.walls[0].material == "n"
        assert section.walls[0].direct_share == 0.0
        assert section.base_material == "m"

    def test_booms(self, read: Read) -> None:
        text = HEAD + WALL + '[[booms]]\nat = "a"\narea = 120\n[[booms]]\nwall = "a-b"\nat = [0.25, 0.75]\n'
        text += 'area = 60\n[[booms]]\nwall = "b-c"\ncount = 3\narea = 30\nseen_by = "theory"\n'
        assert read(text).booms == (
            BoomSpec(120.0, point="a"),
            BoomSpec(60.0, wall="a-b", at=0.25),
            BoomSpec(60.0, wall="a-b", at=0.75),
            *(BoomSpec(30.0, wall="b-c", at=at, seen_by="theory") for at in (0.25, 0.5, 0.75)),
        )

    @pytest.mark.parametrize("place", ["", "count = 3", 'at = 0.5\nwall = "a-b"\ncount = 2', "at = 0.5"])
    def test_booms_without_a_place(self, fault_lines: Callable[..., list[str]], place: str) -> None:
        (line,) = fault_lines(HEAD + WALL + f"[[booms]]\narea = 1\n{place}\n")
        assert line.startswith(
            "booms[0]: must be given by at = a point, by wall and at, or by wall and count, got "
        )

    def test_corners(self, read: Read) -> None:
        text = HEAD + WALL + "[corners]\nevery_bend = { inner_radius = 3 }\n"
        text += "b = { inner_radius = 5, outer_radius = 6 }\n"
        assert read(text).corners == (CornerSpec("every_bend", 3.0), CornerSpec("b", 5.0, 6.0))

    def test_loads(self, read: Read) -> None:
        text = HEAD + WALL + '[[loads]]\nname = "x"\naxial = 3\nmoment = [1, 2]\nbimoment = 4\n'
        assert read(text).loads == (LoadSpec("x", axial=3.0, moment=(1.0, 2.0), bimoment=4.0),)

    def test_stated(self, read: Read) -> None:
        text = HEAD + WALL + '[[stated]]\nquantity = "torsion_constant"\nvalue = 1000\n'
        text += 'source = "supplier sheet, page 12"\nmeasured_from = "b-c"\n'
        assert read(text).stated == (
            StatedSpec("torsion_constant", 1000.0, "supplier sheet, page 12", None, "b-c"),
        )

    def test_each_side_has_its_own_walls(self, read: Read, fault_lines: Callable[..., list[str]]) -> None:
        ours = HEAD + '[[walls]]\npath = ["a", "c"]\nthickness = 1\nseen_by = "theory"\n'
        theirs = '[[walls]]\npath = ["a", "b", "d"]\nthickness = 1\nseen_by = "fe"\n'
        # a-c and b-d cross, but no side sees both.
        assert [w.seen_by for w in read(ours + theirs).walls] == ["theory", "fe", "fe"]
        (line,) = fault_lines(ours + '[[walls]]\npath = ["b", "d"]\nthickness = 1\n')
        assert 'got "b-d" crossing "a-c" (walls[0]) at (25, 40)' in line

    def test_judged_level(self, read: Read) -> None:
        assert read('judged = "corrected"\n' + HEAD + WALL).judged == "corrected"


def test_cuts_of_independent_cells(read: Read, fault_lines: Callable[..., list[str]]) -> None:
    box = HEAD + '[[walls]]\npath = ["a", "b", "c", "d", "a"]\nthickness = 1\n'
    assert read(box + '[[cuts]]\nwall = "c-d"\nat = 0.5\n').cuts[0].wall == "c-d"
    (line,) = fault_lines(box + "".join(f'[[cuts]]\nwall = "{w}"\nat = 0.5\n' for w in ("c-d", "a-b")))
    assert line.startswith("cuts[0].wall: must be a wall of a cell that no other cut has opened")


def test_known_quantities_are_those_of_the_comparison() -> None:
    assert {"area", "torsion_constant", "shear_centre_x", "peak_flow"} <= set(QUANTITIES)


def test_extent_counts_arcs(read: Read) -> None:
    section = read(HEAD + WALL)
    assert section.extent == 80.0
    assert math.isfinite(section.extent)
