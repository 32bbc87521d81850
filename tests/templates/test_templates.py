"""Every template is a section file that runs as it is, is understood, and draws the shape that it names."""

from __future__ import annotations

import math
import re
import tomllib

import pytest

from crosscheck import compare, read_section
from crosscheck.command_line import main
from crosscheck.templates import template_names, template_text

# Free ends, cells and joints of three walls and more that the shape's name promises.
GRAPHS = {
    "aerofoil_wing_box": (0, 1, 0),
    "angle": (2, 0, 0),
    "box": (0, 1, 0),
    "box_with_fins": (2, 1, 2),
    "channel": (2, 0, 0),
    "circular_tube": (0, 1, 0),
    "cruciform": (4, 0, 1),
    "d_nose_cell": (0, 1, 0),
    "hat": (2, 0, 0),
    "hat_on_plate": (2, 1, 2),
    "i_section": (4, 0, 2),
    "lipped_channel": (2, 0, 0),
    "lipped_zed": (2, 0, 0),
    "n_cell_box": (0, 4, 6),
    "slit_tube": (2, 0, 0),
    "stringer_panel": (5, 0, 3),
    "tee": (3, 0, 1),
    "trapezoid_box_girder": (2, 1, 2),
    "two_cell_box": (0, 2, 2),
    "unequal_i_section": (4, 0, 2),
    "zed": (2, 0, 0),
}


def test_there_are_at_least_twenty_shapes_and_all_are_listed_here():
    assert set(template_names()) == set(GRAPHS)
    assert len(GRAPHS) >= 20


@pytest.mark.parametrize("name", template_names())
def test_it_runs_as_it_is(name, tmp_path):
    path = tmp_path / f"{name}.toml"
    path.write_text(template_text(name))
    result = compare(read_section(path), 1e-3)
    assert all(check.passed for check in result.checks), [c for c in result.checks if not c.passed]
    assert result.accuracy_met
    area = result.quantity("area")
    assert area.judged_difference == pytest.approx(0, abs=0.05)


@pytest.mark.parametrize("name", template_names())
def test_it_has_the_graph_of_its_name(name, tmp_path):
    path = tmp_path / f"{name}.toml"
    path.write_text(template_text(name))
    section = read_section(path)
    ends = [point for wall in section.walls for point in (wall.start, wall.end)]
    meeting = [ends.count(point) for point in dict.fromkeys(ends)]
    cells = len(section.walls) - len(meeting) + 1
    assert (meeting.count(1), cells, sum(n > 2 for n in meeting)) == GRAPHS[name]


@pytest.mark.parametrize("name", template_names())
def test_its_parameters_are_whole_words_and_it_explains_itself(name):
    text = template_text(name)
    assert text.startswith("# ")
    for parameter in tomllib.loads(text)["parameters"]:
        words = parameter.split("_")
        assert all(
            len(word) > 2 or word.isdigit() or (word == "x" and name == "aerofoil_wing_box") for word in words
        )
    assert "[[loads]]" in text


@pytest.mark.parametrize(
    ("camber", "position", "thickness"), [(0.02, 0.4, 0.14), (0, 0.4, 0.12), (0.06, 0.3, 0.1)]
)
def test_the_aerofoil_follows_the_published_equation(camber, position, thickness, tmp_path):
    # NACA Report 460 (1933): written here branch by branch, with the slope as an angle.
    path = tmp_path / "box.toml"
    path.write_text(template_text("aerofoil_wing_box"))
    settings = {"maximum_camber": camber, "camber_position": position, "maximum_thickness": thickness}
    section = read_section(path, settings)
    for i, x in enumerate((0.15, 0.2625, 0.375, 0.4875, 0.6), start=1):
        half = thickness / 0.2 * (0.2969 * x**0.5 - 0.126 * x - 0.3516 * x**2 + 0.2843 * x**3 - 0.1015 * x**4)
        if x < position:
            line = camber / position**2 * (2 * position * x - x**2)
            angle = math.atan(2 * camber / position**2 * (position - x))
        else:
            line = camber / (1 - position) ** 2 * (1 - 2 * position + 2 * position * x - x**2)
            angle = math.atan(2 * camber / (1 - position) ** 2 * (position - x))
        for side, sign in (("upper", 1), ("lower", -1)):
            place = (
                1200 * (x - sign * half * math.sin(angle)),
                1200 * (line + sign * half * math.cos(angle)),
            )
            assert section.points[f"{side}_{i}"] == pytest.approx(place, rel=1e-12, abs=1e-9)


def test_the_number_of_cells_is_free(tmp_path):
    path = tmp_path / "box.toml"
    path.write_text(template_text("n cell-box", 7))
    assert len(read_section(path).walls) == 7 * 2 + 8


def test_the_command_prints_lists_writes_once_and_refuses(tmp_path, capsys):
    assert main(["template", "hat"]) == 0
    assert capsys.readouterr().out == template_text("hat")
    assert main(["template"]) == 0
    assert re.findall(r"^(\w+) ", capsys.readouterr().out, flags=re.MULTILINE) == list(template_names())
    out = tmp_path / "hat.toml"
    assert main(["template", "hat", "--out", str(out)]) == 0
    assert main(["template", "hat", "--out", str(out)]) == 2
    assert main(["template", "hut"]) == 2
    assert main(["template", "hat", "--cells", "3"]) == 2
    assert main(["template", "n_cell_box", "--cells", "0"]) == 2
    assert len(capsys.readouterr().err.splitlines()) == 4
