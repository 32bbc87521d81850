"""``crosscheck compare`` from files to screen, JSON, pictures and exit status."""

from __future__ import annotations

import json
import shutil

import pytest
from numpy.testing import assert_allclose

import crosscheck.comparison
import fe_models

from .conftest import CHANNEL


def test_one_section_on_screen(run, channel):
    ran = run("compare", channel)
    assert ran.err == ""
    lines = ran.out.splitlines()
    assert lines[0].startswith("Winch rail, plain channel")
    assert lines[1].startswith("Hand methods hold for")
    assert max(map(len, lines)) <= 80
    for word in ("torsion constant", "shear centre, x", "peak flow, gust", "warping constant"):
        assert word in " ".join(ran.out.split())


def test_status_is_0_when_every_verdict_is_within_and_1_otherwise(run, tmp_path):
    wide = tmp_path / "wide.toml"
    wide.write_text(CHANNEL + "[criteria]\nshear_area_x = 0.5\nshear_area_y = 0.5\nwarping_constant = 0.5\n")
    assert run("compare", wide).status == 0
    tight = tmp_path / "tight.toml"
    tight.write_text(CHANNEL + "[criteria]\ntorsion_constant = 0.0001\n")
    ran = run("compare", tight)
    assert ran.status == 1
    assert "not for the torsion constant" in " ".join(ran.out.split())


def test_json_on_standard_output_alone(run, channel):
    ran = run("compare", channel, "--json", "-")
    read = json.loads(ran.out)
    assert read["schema"] == "crosscheck.result/1"
    assert "Hand methods hold" in ran.err


def test_json_file_of_several_sections(run, channel, tmp_path):
    shutil.copy(channel, tmp_path / "other.toml")
    ran = run("compare", tmp_path, "--json", tmp_path / "results.json")
    read = json.loads((tmp_path / "results.json").read_text())
    assert read["schema"] == "crosscheck.results/1"
    files = [result["provenance"]["section_file"] for result in read["results"]]
    assert [name.rsplit("/", 1)[-1] for name in files] == ["channel.toml", "other.toml"]
    assert ran.out.count("Hand methods hold") == 2


def test_two_runs_give_the_same_json_but_for_provenance(run, channel):
    first, second = (json.loads(run("compare", channel, "--json", "-").out) for _ in range(2))
    assert first.pop("provenance")["sha256"] == second.pop("provenance")["sha256"]
    assert first == second


def test_set_replaces_a_parameter(run, channel):
    read = json.loads(run("compare", channel, "--set", "t = 2", "--json", "-").out)
    area = next(row for row in read["quantities"] if row["name"] == "area")
    assert_allclose(area["theory"]["midline"], 2 * (80 + 2 * 35), rtol=1e-12, atol=0)


def test_pictures_and_result_in_a_folder(run, channel, tmp_path):
    out = tmp_path / "report"
    ran = run("compare", channel, "--out", out)
    names = {entry.name for entry in out.iterdir()}
    assert {"section.svg", "section.png", "section_80mm.svg", "flow_gust.png", "joints.svg"} <= names
    assert not any(name.endswith(".part") for name in names)
    assert json.loads((out / "result.json").read_text())["schema"] == "crosscheck.result/1"
    assert "report" in ran.out.replace("\n", "")


def test_several_sections_get_a_folder_each(run, channel, tmp_path):
    other = tmp_path / "sub" / "channel.toml"
    other.parent.mkdir()
    shutil.copy(channel, other)
    run("compare", channel, other, "--out", tmp_path / "report")
    assert (tmp_path / "report" / "channel" / "section.svg").is_file()
    assert (tmp_path / "report" / "channel_2" / "section.svg").is_file()


def test_without_out_nothing_is_written(run, channel, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    run("compare", channel)
    assert [entry.name for entry in tmp_path.iterdir()] == ["channel.toml"]


def test_out_that_is_a_file_is_bad_input_and_stays_as_it_was(run, channel, tmp_path):
    out = tmp_path / "taken"
    out.write_text("mine")
    ran = run("compare", channel, "--out", out)
    assert ran.status == 2
    assert ran.err.startswith(f"{out}: must be a folder that can be written")
    assert len(ran.err.splitlines()) == 1
    assert out.read_text() == "mine"


@pytest.mark.parametrize("target", ["no/such/folder/result.json", "."])
def test_json_that_cannot_be_written(run, channel, tmp_path, monkeypatch, target):
    monkeypatch.chdir(tmp_path)
    ran = run("compare", channel, "--json", target)
    assert ran.status == 2
    assert ran.err.startswith(f"{target}: must be a file that can be written")


def test_a_bad_file_does_not_stop_the_others(run, channel, tmp_path):
    bad = tmp_path / "bad.toml"
    bad.write_text(CHANNEL.replace("units", "unit"))
    ran = run("compare", bad, channel)
    assert ran.status == 2
    assert ran.out.count("Hand methods hold") == 1
    assert all(line.startswith(f"{bad}: ") for line in ran.err.splitlines())


@pytest.mark.parametrize(
    ("old", "new", "key"),
    [
        ('units = "mm N"', "", "units"),
        ('thickness = "t"', "thickness = -1", "thickness"),
        ('through = "b"', 'through = "nowhere"', "through"),
        ("[points]", "[points]\nq = [nan, 0]", "points"),
        ("t = 4", 't = "9 ** 9 ** 9"', "parameters.t"),
        ('title = "', 'titel = "', "titel"),
    ],
)
def test_each_fault_is_one_line_with_file_and_key(run, tmp_path, old, new, key):
    path = tmp_path / "bad.toml"
    path.write_text(CHANNEL.replace(old, new))
    ran = run("compare", path)
    assert ran.status == 2
    assert ran.out == ""
    assert any(line.startswith(f"{path}: ") and key in line for line in ran.err.splitlines())
    assert "Traceback" not in ran.err


def test_missing_file_and_empty_folder(run, tmp_path):
    (tmp_path / "empty").mkdir()
    ran = run("compare", tmp_path / "missing.toml", tmp_path / "empty")
    assert ran.status == 2
    assert len(ran.err.splitlines()) == 2
    assert "folder with none" in ran.err


def test_walls_that_cross_are_bad_input(run, tmp_path):
    path = tmp_path / "crossing.toml"
    extra = '[[walls]]\nname = "brace"\npath = ["a", "c"]\nthickness = 4\n'
    other = '[[walls]]\nname = "other"\npath = ["b", "d"]\nthickness = 4\n'
    path.write_text(CHANNEL.replace("[[loads]]", f"{extra}{other}[[loads]]"))
    ran = run("compare", path)
    assert ran.status == 2
    assert "brace" in ran.err
    assert "other" in ran.err


@pytest.mark.parametrize("accuracy", ["0", "-1", "nan", "1e-9", "0.1", "fine"])
def test_accuracy_out_of_range(run, channel, accuracy):
    ran = run("compare", channel, f"--accuracy={accuracy}")
    assert ran.status == 2
    assert "must be a number from 1e-7 to 1e-3" in ran.err


def test_solver_failure_is_status_3_and_one_line(run, channel, monkeypatch):
    def fail(*_args, **_kwargs):
        raise fe_models.SolveError("joint b: the mesh generator left a hole")

    monkeypatch.setattr(fe_models, "solve", fail)
    ran = run("compare", channel)
    assert ran.status == 3
    assert ran.err == f"{channel}: finite elements: joint b: the mesh generator left a hole\n"


def test_unexpected_fault_is_one_line_and_status_3(run, channel, monkeypatch):
    def fail(*_args, **_kwargs):
        raise ZeroDivisionError("division\nby\x1b[2Jzero")

    monkeypatch.setattr(crosscheck.comparison, "join", fail)
    ran = run("compare", channel)
    assert ran.status == 3
    assert ran.err.startswith("crosscheck: internal fault: ZeroDivisionError: division by")
    assert len(ran.err.splitlines()) == 1
    assert "\x1b" not in ran.err


def test_interrupt_is_one_line(run, channel, monkeypatch):
    def stop(*_args, **_kwargs):
        raise KeyboardInterrupt

    monkeypatch.setattr(crosscheck.comparison, "join", stop)
    ran = run("compare", channel)
    assert ran.status == 130
    assert ran.err == "crosscheck: stopped\n"


def test_failed_self_check_is_never_status_0(run, tmp_path, monkeypatch):
    from dataclasses import replace

    from crosscheck.result import CheckResult

    wide = tmp_path / "wide.toml"
    wide.write_text(CHANNEL + "[criteria]\nshear_area_x = 0.5\nshear_area_y = 0.5\nwarping_constant = 0.5\n")
    real = crosscheck.comparison.join

    def with_failed_check(*args, **kwargs):
        return replace(real(*args, **kwargs), checks=(CheckResult("FE: resultants", 1.0, 1e-9, False),))

    monkeypatch.setattr(crosscheck.comparison, "join", with_failed_check)
    ran = run("compare", wide)
    assert ran.status == 1
    assert "CHECK FAILED: FE: resultants" in ran.out
