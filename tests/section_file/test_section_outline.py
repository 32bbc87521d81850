"""The table [outline] in a whole section file, with and without walls."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from pathlib import Path

import ezdxf
import pytest

from crosscheck.section_file.model import SectionFile
from crosscheck.section_file.reader import read_section

Read = Callable[..., SectionFile]
Lines = Callable[..., list[str]]

HEAD = 'units = "mm N"\n'
SQUARE = '[outline]\nboundary = [[0, 0], ["w", 0], ["w", "w"], [0, "w"]]\n'
WIDE = "[parameters]\nw = 20\n"


def test_outline_alone_needs_neither_points_nor_walls(read: Read) -> None:
    section = read(HEAD + WIDE + SQUARE, ["w = 30"])
    assert section.outline is not None
    assert section.outline.rings[0].points == ((0, 0), (30, 0), (30, 30), (0, 30))
    assert section.outline.nu == 0.3
    assert section.walls == ()
    assert section.points == {}


def test_nu_is_that_of_the_only_material(read: Read) -> None:
    section = read(HEAD + WIDE + "[materials.foil]\nE = 7\nnu = 0.4\n" + SQUARE)
    assert section.outline is not None
    assert section.outline.nu == 0.4


def test_loads_without_walls_go_through_coordinates_or_points(read: Read, fault_lines: Lines) -> None:
    load = '[points]\np = [1, 2]\n[[loads]]\nname = "a"\nshear = [0, 1]\nthrough = '
    assert read(HEAD + WIDE + SQUARE + load + '"p"\n').loads[0].through == (1, 2)
    assert read(HEAD + WIDE + SQUARE + load + "[3, 4]\n").loads[0].through == (3, 4)
    (line,) = fault_lines(HEAD + WIDE + SQUARE + load + '"midline shear centre"\n')
    assert line.startswith("loads[0].through: must be coordinates [x, y] or a point: without walls")


def test_what_belongs_to_walls_is_refused_without_them(fault_lines: Lines) -> None:
    text = (
        HEAD + WIDE + SQUARE + "[points]\np = [0, 0]\n"
        '[[probes]]\nlabel = "rivets"\nwall = "web"\nat = 0.5\n'
        "[corners]\np = { inner_radius = 1 }\n"
    )
    lines = fault_lines(text)
    assert "probes: must be left out: it belongs to walls, got given without walls" in lines
    assert "corners: must be left out: it belongs to walls, got given without walls" in lines


def test_neither_walls_nor_outline(fault_lines: Lines) -> None:
    assert [line.split(":")[0] for line in fault_lines(HEAD)] == ["points", "walls"]


def test_faults_of_outline_and_file_come_at_once(fault_lines: Lines) -> None:
    text = HEAD + WIDE + '[materials.m]\nE = -1\nnu = 0.3\n[outline]\nboundary = [[0, 0], [1, "v"], [0, 1]]\n'
    keys = [line.split(": ")[0] for line in fault_lines(text)]
    assert keys == ["materials.m.E", "outline.boundary[1][1]"]


def test_two_materials_are_refused(fault_lines: Lines) -> None:
    two = 'base_material = "a"\n' + WIDE + "[materials]\na = { E = 1, nu = 0.3 }\nb = { E = 2, nu = 0.3 }\n"
    (line,) = fault_lines(HEAD + two + SQUARE)
    assert line.startswith("materials: must be one with [outline]")


def test_walls_beside_an_outline_may_be_theory_s_alone(read: Read) -> None:
    walls = (
        "[points]\np = [0, 10]\nq = [20, 10]\n"
        '[[walls]]\npath = ["p", "q"]\nthickness = 20\nseen_by = "theory"\n'
    )
    section = read(HEAD + WIDE + SQUARE + walls)
    assert section.outline is not None
    assert [wall.name for wall in section.walls] == ["p-q"]


def test_drawing_is_hashed_and_its_reading_told(tmp_path: Path) -> None:
    document = ezdxf.new(units=4)
    document.modelspace().add_circle((0, 0), 5)
    document.saveas(tmp_path / "rod.dxf")
    path = tmp_path / "rod.toml"
    path.write_text(HEAD + '[outline]\nfile = "rod.dxf"\n')
    section = read_section(path)
    assert section.tables == {"rod.dxf": hashlib.sha256((tmp_path / "rod.dxf").read_bytes()).hexdigest()}
    assert section.notes[0].startswith("rod.dxf: drawing in mm, as the drawing states; ")


@pytest.mark.parametrize("word", ["boundry", "hole"])
def test_unknown_key_of_the_table(fault_lines: Lines, word: str) -> None:
    lines = fault_lines(HEAD + WIDE + SQUARE + f"{word} = 1\n")
    assert any(line.startswith(f"outline.{word}: must be a known key of [outline]") for line in lines)
