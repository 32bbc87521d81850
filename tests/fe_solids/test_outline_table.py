"""The table [outline] of a section file."""

from __future__ import annotations

import hashlib
import math
import tomllib
from pathlib import Path
from typing import Any

import ezdxf
import meshio
import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.faults import FaultList, SectionFaults
from crosscheck.section_file.numbers import Numbers
from crosscheck.section_file.outline import outline_of, read_outline
from fe_models import Solid, outline_of_solid


def table(text: str) -> dict[str, Any]:
    return tomllib.loads("[outline]\n" + text)["outline"]


def area(solid: Solid) -> float:
    return outline_of_solid(solid).moments(np.zeros(2)).area


def faults_of(text: str, folder: Path = Path(), **options: Any) -> list[str]:
    with pytest.raises(SectionFaults) as caught:
        read_outline(table(text), folder, name="part.toml", **options)
    return list(caught.value.lines)


def test_boundary_and_openings() -> None:
    solid = outline_of(
        table(
            "boundary = [[0, 0], [60, 0], "
            "{ through = [67.0710678119, 2.9289321881], to = [70, 10] }, [70, 40], [0, 40]]\n"
            "openings = [[[10, 10], [10, 20], [20, 20]], { centre = [50, 20], radius = 8 }]"
        ),
        Path(),
        nu=0.3,
    )
    assert solid.nu == 0.3
    assert len(solid.rings) == 3
    assert_allclose(area(solid), 2800 - (1 - math.pi / 4) * 100 - 50 - 64 * math.pi, rtol=1e-10)


def test_an_arc_may_close_the_ring() -> None:
    """The last arc ends on the first corner: no further edge."""
    half = "boundary = [[1, 0], { through = [0, 1], to = [-1, 0] }"
    assert_allclose(area(outline_of(table(half + "]"), Path())), math.pi / 2, rtol=1e-12)
    whole = half + ", { through = [0, -1], to = [1, 0] }]"
    assert_allclose(area(outline_of(table(whole), Path())), math.pi, rtol=1e-12)


def test_arithmetic_on_parameters() -> None:
    numbers = Numbers(FaultList("part.toml"), {"w": 12, "r": "w / 4"})
    text = 'boundary = [[0, 0], ["w", 0], ["w", "w - r"], [0, "w"]]\n'
    text += 'openings = [{ centre = [4, 4], radius = "r / 2" }]'
    solid = outline_of(table(text), Path(), numbers=numbers)
    assert_allclose(area(solid), 12 * 10.5 - math.pi * 2.25, rtol=1e-12)
    with pytest.raises(SectionFaults, match=r"boundary\[1\]\[0\].*wide"):
        outline_of(table('boundary = [[0, 0], ["wide", 0], [1, 1]]'), Path(), numbers=numbers)


LINES = "boundary = [[0, 0], [4, 0], [0, 4]]"
DISC = "boundary = { centre = [0, 0], radius = 1 }"
FAULTS: list[tuple[str, list[str]]] = [
    ("", ["outline.boundary: must be given, got nothing"]),
    ("boundary = 3", ["outline.boundary: must be a list of places"]),
    ("boundary = [[0, 0]]", ["outline.boundary: must be a list of places", "got a list of 1"]),
    ('boundary = [[0, 0], "q", [1, true]]', ["boundary[1]: must be a place", "boundary[2][1]: must be"]),
    (
        "boundary = [{ to = [0, 0], through = [1, 1] }, [1, 0]]",
        ["boundary[0]: must be a place [x, y]: a ring"],
    ),
    ("boundary = [[0, 0], { to = [2, 0] }, [1, 1]]", ["boundary[1].through: must be a place"]),
    (
        "boundary = [[0, 0], { to = [2, 0], via = [1, 1], through = [1, 1] }]",
        ['boundary[1].via: must be through or to, got "via"'],
    ),
    ("boundary = { centre = [0, 0], radius = -1 }", ["boundary.radius: must be > 0, got -1"]),
    ("boundary = { centre = [0, 0] }", ["boundary.radius: must be a number"]),
    (LINES + "\ngap = 2", ["outline.gap: must be left out without a file"]),
    (
        LINES + "\nopening = []",
        ['must be a known key of [outline], got "opening"; did you mean "openings"?'],
    ),
    (LINES + "\nopenings = 1", ["outline.openings: must be a list of rings"]),
    (
        "boundary = [[0, 0], [1, 1], [1, 0], [0, 1]]",
        ["outline.boundary: must be clear of itself", "0.5 0.5"],
    ),
    (
        LINES + "\nopenings = [{ centre = [1, 1], radius = 0.2 }, { centre = [3, 3], radius = 0.2 }]",
        ["outline.openings[1]: must be inside the outer ring", "got opening 1 outside the boundary"],
    ),
    (LINES + "\nopenings = [{ centre = [1, 1], radius = 1.0 }]", ["the boundary and opening 0 that meet"]),
    (
        DISC + "\nopenings = [{ centre = [0, 0], radius = 2 }]",
        ["outline.boundary: must be the ring round all openings"],
    ),
    ('file = "../part.dxf"', ["outline.file: must be a file in the section file's folder or below it"]),
    ('file = "part.dxf"', ["outline.file: must be a file that is there"]),
    ('file = "part.txt"', ["outline.file: must be a file that ends in .dxf, .step"]),
    ("file = 3", ["outline.file: must be the name of a drawing"]),
    (
        'file = "part.step"\nlayers = "A"\ndrawing_unit = "mile"',
        ["outline.layers: must be left out", "drawing_unit: must be one of", "must be a file that is there"],
    ),
    ('file = "part.dxf"\nboundary = [[0, 0]]', ["outline.boundary: must be left out beside file"]),
]


@pytest.mark.parametrize(("text", "lines"), FAULTS)
def test_faults(text: str, lines: list[str], tmp_path: Path) -> None:
    found = "\n".join(faults_of(text, tmp_path))
    for words in lines:
        assert words in found


def test_drawings(tmp_path: Path) -> None:
    document = ezdxf.new(units=0)
    document.modelspace().add_lwpolyline([(0, 0), (2, 0), (2, 1), (0, 1)], close=True)
    document.saveas(tmp_path / "part.dxf")
    (line,) = faults_of('file = "part.dxf"', tmp_path)
    assert line.startswith(
        "part.toml: outline.drawing_unit: must be given, got a drawing that states no unit"
    )
    read = read_outline(table('file = "part.dxf"\ndrawing_unit = "in"'), tmp_path, length_unit="mm")
    assert_allclose(area(read.solid), 2 * 25.4**2, rtol=1e-12)
    assert read.file == "part.dxf"
    assert read.sha256 == hashlib.sha256((tmp_path / "part.dxf").read_bytes()).hexdigest()
    assert "drawing in in, as stated in the section file" in read.notes


def test_mesh_in_another_unit(tmp_path: Path) -> None:
    points = np.array([[0.0, 0, 0], [3, 0, 0], [3, 4, 0]])
    meshio.write(tmp_path / "part.vtk", meshio.Mesh(points, [("triangle", np.array([[0, 1, 2]]))]))
    read = read_outline(table('file = "part.vtk"\ndrawing_unit = "cm"'), tmp_path)
    assert_allclose(area(read.solid), 600.0, rtol=1e-12)
    (tmp_path / "part.stl").write_text("solid\n")
    assert "part.stl" in faults_of('file = "part.stl"', tmp_path)[0]


def test_a_drawing_that_bounds_no_solid(tmp_path: Path) -> None:
    document = ezdxf.new(units=4)
    for x in (0, 10):
        document.modelspace().add_circle((x, 0), 2)
    document.saveas(tmp_path / "part.dxf")
    (line,) = faults_of('file = "part.dxf"', tmp_path)
    assert "outline.file: must be inside the outer ring" in line
