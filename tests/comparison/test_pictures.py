"""Pictures: every one at both widths, equal scale, lettered, without a date, safe with any name."""

from __future__ import annotations

import xml.etree.ElementTree as ET
from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.comparing import join
from crosscheck.comparison.drawing import mesh_values
from crosscheck.comparison.drawn import PictureMesh
from crosscheck.pictures import every_picture, figures, picture_bytes, section_picture
from crosscheck.pictures.canvas import MM, text_width, wrapped
from crosscheck.pictures.joints import torsion_stress
from crosscheck.section_file.model import LoadSpec

from .stand_in import both_sides, channel_file

NAMES = {
    "section",
    "both_sides",
    "causes",
    "criteria",
    "flow_unit_Vx",
    "flow_unit_Vy",
    "flow_gust",
    "walls_by_loads",
    "warping",
    "joints",
}


@pytest.mark.parametrize("width", [80, 160])
def test_every_picture_is_as_wide_as_the_paper(result, width):
    drawn = figures(result, width)
    assert set(drawn) == NAMES
    for name, figure in drawn.items():
        assert_allclose(figure.get_figwidth() / MM, width, rtol=1e-12, atol=0, err_msg=name)


@pytest.mark.parametrize("name", ["section", "both_sides", "flow_gust", "warping"])
def test_drawings_are_to_scale_with_units_on_both_axes(result, name):
    figure = figures(result, 160)[name]
    axes = figure.axes[0]
    figure.canvas.draw()
    (x0, y0), (x1, y1) = axes.transData.transform([(0.0, 0.0), (10.0, 10.0)])
    assert_allclose(x1 - x0, y1 - y0, rtol=1e-9, atol=0)
    assert axes.get_xlabel() == "x [mm]"
    assert axes.get_ylabel() == "y [mm]"


def test_section_is_lettered_directly_without_a_legend(result):
    axes = section_picture(result).axes[0]
    words = " ".join(text.get_text() for text in axes.texts)
    for word in (
        "bottom",
        "web",
        "top",
        "t 5",
        "gust",
        "1200 N",
        "C centroid",
        "shear centre",
        "105 mm",
        "52.5 mm",
    ):
        assert word in words
    assert axes.get_legend() is None


def test_offset_of_the_shear_centres_is_told(result):
    figure = section_picture(result)
    words = " ".join(text.get_text() for text in figure.texts)
    assert "hand minus FE: x -0.200, y 0 mm" in words


def test_load_arrow_starts_on_its_line_of_action(result):
    line = result.drawing.loads[0]
    assert line.through == (0.0, 0.0)
    assert line.shear == (0.0, -1200.0)


def test_files_are_the_same_in_two_runs_and_well_formed(result):
    first, second = every_picture(result), every_picture(result)
    assert first == second
    assert set(first) == {
        f"{name}{width}.{kind}" for name in NAMES for width in ("", "_80mm") for kind in ("svg", "png")
    }
    for name, content in first.items():
        if name.endswith(".svg"):
            assert ET.fromstring(content).tag.endswith("svg")
            assert b"<dc:date>" not in content
        else:
            assert content.startswith(b"\x89PNG")


def test_names_cannot_leave_the_folder_or_meet():
    loads = tuple(
        LoadSpec(name, (0.0, -1.0), (0.0, 0.0)) for name in ("../../up", "up", "..", "a/b", "a b", "x" * 300)
    )
    section = channel_file(loads=loads, title="$\\frac{1}{0}$ <b>&amp; \u05d0\u05d1")
    drawn = figures(join(section, *both_sides(section), pictures=True), 80)
    assert all("/" not in name and ".." not in name and len(name) < 80 for name in drawn)
    assert sum(name.startswith("flow") for name in drawn) == 2 + len(loads)
    assert picture_bytes(drawn["section"], "svg")


def test_pictures_need_a_drawing(result):
    with pytest.raises(ValueError, match="pictures=True"):
        section_picture(replace(result, drawing=None))


def test_text_is_wrapped_to_its_width():
    lines = wrapped("peak flow of the governing load by hand " * 4, 50.0, 7.0)
    assert len(lines) > 1
    assert max(text_width(line, 7.0) for line in lines) <= 50.0
    assert " ".join(lines).split() == ("peak flow of the governing load by hand " * 4).split()


SQUARE = PictureMesh(
    nodes=np.array([(0.0, 0.0), (2.0, 0.0), (2.0, 2.0), (0.0, 2.0)]),
    triangles=np.array([(0, 1, 2), (0, 2, 3)]),
    warping=np.array([1.0, 3.0, 6.0, 4.0]),
    pole=(1.0, 1.0),
    edges=np.array([(0, 1)]),
)


def test_values_inside_the_mesh_are_linear_and_outside_missing():
    # omega = 1 + x + 1.5 y on both triangles.
    found = mesh_values(SQUARE, np.array([(0.5, 1.5), (1.5, 0.5), (3.0, 0.0)]))
    assert_allclose(found, [3.75, 3.25, np.nan], rtol=1e-12, atol=0)


def test_torsion_stress_is_the_gradient_and_the_arm_about_the_pole():
    # grad omega + R at the middles (4/3, 2/3) and (2/3, 4/3), R = (-(y - 1), x - 1).
    expected = [(1 + 1 / 3, 1.5 + 1 / 3), (1 - 1 / 3, 1.5 - 1 / 3)]
    assert_allclose(torsion_stress(SQUARE), expected, rtol=1e-12, atol=0)


def test_cells_are_shown_anticlockwise_and_other_walls_up_or_right(result):
    turns = {wall.name: wall.turn for wall in result.drawing.walls}
    # bottom runs left, web up, top right.
    assert turns == {"bottom": -1, "web": 1, "top": 1}


def test_many_loads_are_numbered_and_told_in_the_caption(result):
    drawing = result.drawing
    loads = tuple(replace(drawing.loads[0], name=f"case {k}") for k in range(10))
    many = replace(result, drawing=replace(drawing, loads=loads), load_kinds={"case 3": "limit"})
    for width in (80, 160):
        figure = section_picture(many, width)
        told = " ".join(text.get_text() for text in reversed(figure.texts))
        assert "4 case 3 (limit) 1200 N;" in " ".join(told.split())
        written = {text.get_text() for text in figure.axes[0].texts}
        assert {str(k) for k in range(1, 11)} <= written
