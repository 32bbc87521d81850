"""compare --fields: FE's mesh and fields beside the pictures."""

from __future__ import annotations

import sys

import meshio
import numpy as np
from numpy.testing import assert_allclose


def test_fields_are_written_beside_the_pictures(run, channel, tmp_path):
    out = tmp_path / "report"
    ran = run("compare", channel, "--out", out, "--fields", "vtu", "--fields", "msh")
    assert ran.status in (0, 1)
    read = meshio.read(out / "fields.msh")
    names = set(read.point_data)
    assert "warping function about the shear centre [mm^2]" in names
    assert "shear stress of unit Vy, static field [1/mm^2]" in names
    assert "shear stress of unit Vy with nu = 0.3, static field [1/mm^2]" in names
    # the static field of unit Vy carries a unit force: its integral over the triangles
    cells = read.cells_dict["triangle"]
    corners = read.points[cells][:, :, :2]
    a, b = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
    area = 0.5 * np.abs(a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0])
    stress = read.point_data["shear stress of unit Vy, static field [1/mm^2]"][cells].mean(axis=1)
    assert_allclose(area @ stress, (0.0, 1.0, 0.0), rtol=0, atol=0.05)
    assert b"shear stress of unit Vy with nu = 0.3" in (out / "fields.vtu").read_bytes()
    assert (out / "result.json").exists()


def test_fields_of_an_outline_alone(run, tmp_path):
    path = tmp_path / "rod.toml"
    path.write_text('units = "in lbf"\n[outline]\nboundary = { centre = [0, 0], radius = 2 }\n')
    assert run("compare", path, "--out", tmp_path / "out", "--fields", "msh").status == 0
    read = meshio.read(tmp_path / "out" / "fields.msh")
    assert "shear stress of unit T, kinematic field [1/in^3]" in read.point_data


def test_fields_need_a_folder(run, channel):
    ran = run("compare", channel, "--fields", "vtu")
    assert ran.status == 2
    assert ran.out == ""
    assert ran.err == "--fields: must be given with --out DIR, into which the files go, got no --out\n"


def test_fields_need_their_library(run, channel, tmp_path, monkeypatch):
    monkeypatch.setitem(sys.modules, "meshio", None)
    ran = run("compare", channel, "--out", tmp_path / "out", "--fields", "vtu")
    assert ran.status == 2
    assert ran.err == '--fields: mesh files need the library meshio: pip install "crosscheck[mesh]"\n'
    assert not (tmp_path / "out").exists()


def test_outline_that_is_not_the_walls_is_told_in_one_line(run, channel):
    outline = "[outline]\nboundary = [[0, 0], [35, 0], [35, 80], [0, 80]]\n"
    channel.write_text(channel.read_text() + outline)
    ran = run("compare", channel)
    assert ran.status == 2
    (line,) = ran.err.splitlines()
    assert "channel.toml: outline: must be in agreement with the walls" in line
    assert line.endswith("mend the one that is wrong, or mark the walls and booms that idealise with seen_by")


def test_outline_alone_is_drawn_and_told(run, tmp_path):
    path = tmp_path / "rod.toml"
    path.write_text('units = "mm N"\n[outline]\nboundary = { centre = [0, 0], radius = 2 }\n')
    assert run("draw", path, "--out", tmp_path / "rod.svg").status == 0
    assert (tmp_path / "rod.svg").stat().st_size > 1000
    ran = run("compare", path, "--working", "--json", tmp_path / "rod.json")
    assert ran.status == 0
    assert "No hand method: the section is given by its outline alone." in ran.out
    assert "torsion constant" in ran.out
    assert "FE assumes: prismatic" in ran.out
    assert "Both sides" not in ran.out
    assert "Criteria" not in ran.out
