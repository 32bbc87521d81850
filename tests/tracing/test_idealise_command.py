"""``crosscheck idealise`` as its user runs it, and what compare and sweep make of its section file."""

from __future__ import annotations

import json
import math
from pathlib import Path

import meshio
import numpy as np
import pytest
from drawn_parts import (
    block,
    channel_polygon,
    filleted_extrusion,
    of_polygon,
    save_dxf,
    scanned,
    star,
    thick_ring,
)
from numpy.testing import assert_allclose
from shapely.geometry import LineString, box

import fe_models
from crosscheck.command_line import main
from crosscheck.comparison.causes import TRACED
from crosscheck.comparison.comparing import compare
from crosscheck.comparison.models import fe_section
from crosscheck.family.members import Family
from crosscheck.family.ranges import ranges_of
from crosscheck.section_file.reader import read_section
from crosscheck.section_file.source import read_source
from fe_models import Solid


@pytest.fixture
def extrusion(tmp_path: Path) -> Path:
    return save_dxf(filleted_extrusion(), tmp_path / "extrusion.dxf")


@pytest.fixture
def channel(tmp_path: Path) -> Path:
    return save_dxf(of_polygon(channel_polygon()), tmp_path / "channel.dxf")


def test_from_drawing_to_comparison(channel: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["idealise", str(channel)]) == 0
    screen = capsys.readouterr().out
    assert "Found: 4 walls, 5 points, 0 cells, 0 lumps." in screen
    written = channel.with_suffix(".toml")
    assert main(["compare", str(written), "--accuracy", "1e-2"]) == 0
    section = read_section(written)
    assert section.outline is not None
    result = compare(section, 1e-2)
    last = [step for step in result.causes if step.quantity == "torsion_constant"][-1]
    assert last.step == TRACED
    assert abs(last.change) < 1e-3
    assert {p.name for p in channel.parent.iterdir()} == {
        "channel.dxf", "channel.toml", "channel_walls.svg", "channel_walls.png",
        "channel_walls_80mm.svg", "channel_walls_80mm.png",
    }  # fmt: skip


def test_other_thicknesses_leave_the_drawing_and_hold_the_outer_faces(extrusion: Path) -> None:
    assert main(["idealise", str(extrusion)]) == 0
    path = extrusion.with_suffix(".toml")
    for factor in (0.5, 1.5):
        section = read_section(path, {"thickness_factor": factor})
        assert section.outline is None
        assert any("outline is of other walls" in note for note in section.notes)
        loops = fe_models.outline_of_walls(fe_section(section)).loops
        low, high = loops[0].min(axis=0), loops[0].max(axis=0)
        assert_allclose([*low, *high], [0, 0, 90, 52], atol=2e-3)
    assert read_section(path, {"thickness_factor": 1}).outline is not None


def test_sweep_says_what_the_tracing_costs(channel: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["idealise", str(channel)]) == 0
    path = str(channel.with_suffix(".toml"))
    vary = "thickness_factor in 1, 1.2"
    assert main(["sweep", path, "--vary", vary, "--workers", "1", "--accuracy", "1e-2"]) in (0, 1)
    out = " ".join(capsys.readouterr().out.split())
    assert "takes the solid they make. For the file as it stands that changes FE by at most" in out


def test_every_member_of_a_family_takes_the_solid_of_its_walls(channel: Path) -> None:
    """The file's own value among others would else be the only one on the drawing."""
    assert main(["idealise", str(channel)]) == 0
    source = read_source(channel.with_suffix(".toml"))
    for text, drawn_at_one in (("thickness_factor from 0.5 to 2", False), ("thickness_factor in 1", True)):
        family = Family(source, (), ranges_of([text], source), 1e-2)
        assert (family.section([1.0]).outline is not None) == drawn_at_one


def test_thinner_walls_have_room_for_their_round_ends(tmp_path: Path) -> None:
    bar = LineString([(0, 0), (0, 60), (40, 60)]).buffer(1.5, quad_segs=64, join_style="mitre")
    path = save_dxf(of_polygon(bar), tmp_path / "hook.dxf")
    assert main(["idealise", str(path)]) == 0
    assert "outer_radius" in path.with_suffix(".toml").read_text()
    for factor in (0.3, 1.0, 2.0):
        read_section(path.with_suffix(".toml"), {"thickness_factor": factor})


def test_a_section_file_that_is_there_stays(extrusion: Path, capsys: pytest.CaptureFixture[str]) -> None:
    there = extrusion.with_suffix(".toml")
    there.write_text("mine", encoding="utf-8")
    assert main(["idealise", str(extrusion)]) == 2
    assert there.read_text(encoding="utf-8") == "mine"
    assert "--replace" in capsys.readouterr().err
    assert main(["idealise", str(extrusion), "--replace"]) == 0


def test_elsewhere_the_drawing_comes_along(extrusion: Path, tmp_path: Path) -> None:
    out = tmp_path / "walls"
    assert main(["idealise", str(extrusion), "--out", str(out), "--json", str(tmp_path / "found.json")]) == 0
    assert (out / "extrusion.dxf").read_bytes() == extrusion.read_bytes()
    found = json.loads((tmp_path / "found.json").read_text(encoding="utf-8"))
    assert found["quality"]["good"]
    assert_allclose(found["quality"]["rebuilt"]["area"], found["quality"]["drawn"]["area"], rtol=1e-4)


@pytest.mark.parametrize(
    ("solid", "reason"),
    [(block(), "times as long as thick"), (thick_ring(), "as thick as its own radius"), (star(), "only 0 %")],
    ids=["block", "ring", "star"],
)
def test_no_thin_wall_is_said_and_still_compared(
    solid: Solid, reason: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = save_dxf(solid, tmp_path / "part.dxf")
    assert main(["idealise", str(path)]) == 1
    screen = capsys.readouterr().out
    assert "Thin-walled theory has no business here" in screen
    assert reason in " ".join(screen.split())
    assert main(["compare", str(path.with_suffix(".toml")), "--accuracy", "1e-3"]) == 1


def test_walls_of_an_outline_section_file_keep_its_loads(tmp_path: Path) -> None:
    text = """\
title = "strip"
units = "mm N"
[materials.sheet]
E = 72000
nu = 0.33
[outline]
boundary = [[0, 0], ["width", 0], ["width", 3], [0, 3]]
[parameters]
width = 60
[[loads]]
name = "push"
torque = 500
"""
    (tmp_path / "strip.toml").write_text(text, encoding="utf-8")
    assert main(["idealise", str(tmp_path / "strip.toml")]) == 0
    section = read_section(tmp_path / "strip_walls.toml")
    assert [load.name for load in section.loads] == ["push"]
    assert section.materials["sheet"].E == 72000
    assert [wall.thickness for wall in section.walls] == [(3.0, 3.0)]


def test_even_gives_fe_the_evened_outline(tmp_path: Path) -> None:
    path = save_dxf(scanned(box(0, 0, 40, 2).union(box(0, 0, 2, 30)), 600, 0.03), tmp_path / "scan.dxf")
    assert main(["idealise", str(path), "--even"]) == 0
    section = read_section(path.with_suffix(".toml"))
    assert section.outline is not None
    assert len(section.outline.rings[0].points) == 6
    assert math.isclose(section.walls[0].thickness[0], 2.0, rel_tol=0.02)


@pytest.mark.parametrize(
    ("arguments", "told"),
    [
        (["nothing.dxf"], "no such file"),
        (["part.dxf", "--tolerance", "0.5"], "at most 0.2"),
        (["part.dxf", "--gap", "0"], "must be a number > 0"),
        (["unitless.dxf"], "--drawing-unit"),
    ],
)
def test_bad_input_in_one_line(
    arguments: list[str],
    told: str,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    monkeypatch.chdir(tmp_path)
    save_dxf(block(), tmp_path / "part.dxf")
    save_dxf(block(), tmp_path / "unitless.dxf", units=0)
    assert main(["idealise", *arguments]) == 2
    said = capsys.readouterr().err.strip()
    assert told in said
    assert "\n" not in said


def test_a_triangle_mesh_is_a_drawing_too(tmp_path: Path) -> None:
    places = [[0, 0, 0], [40, 0, 0], [40, 2, 0], [2, 2, 0], [2, 30, 0], [0, 30, 0]]
    triangles = [[0, 1, 2], [0, 2, 3], [0, 3, 4], [0, 4, 5]]
    path = tmp_path / "angle.vtu"
    meshio.Mesh(np.array(places, dtype=float), [("triangle", np.array(triangles))]).write(path)
    assert main(["idealise", str(path)]) == 0
    section = read_section(tmp_path / "angle.toml")
    assert [wall.thickness for wall in section.walls] == [(2.0, 2.0), (2.0, 2.0)]
    assert main(["compare", str(tmp_path / "angle.toml")]) in (0, 1)
