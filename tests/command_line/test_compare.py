"""``crosscheck compare`` from files to screen, JSON, pictures and exit status."""

from __future__ import annotations

import csv
import hashlib
import json
import shutil

import pytest
from numpy.testing import assert_allclose

import crosscheck.comparison.comparing
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


@pytest.mark.parametrize("accuracy", ["0", "-1", "nan", "0.9e-8", "0.011", "fine"])
def test_accuracy_out_of_range(run, channel, accuracy):
    ran = run("compare", channel, f"--accuracy={accuracy}")
    assert ran.status == 2
    line = f"argument --accuracy: must be a number from 1e-08 to 0.01, got {accuracy!r}"
    assert ran.err == f"crosscheck compare: {line}\n"


def test_accuracy_takes_the_range_of_fe():
    """The words of the help, which must not load FE, and what the argument takes."""
    from crosscheck.commands.arguments import ACCURACY_WORDS, accuracy

    low, high = fe_models.ACCURACY_RANGE
    assert f"from {low:g} to {high:g}" == ACCURACY_WORDS
    assert [accuracy(f"{low:g}"), accuracy(f"{high:g}")] == [low, high]


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

    monkeypatch.setattr(crosscheck.comparison.comparing, "join", fail)
    ran = run("compare", channel)
    assert ran.status == 3
    assert ran.err.startswith("crosscheck: internal fault: ZeroDivisionError: division by")
    assert len(ran.err.splitlines()) == 1
    assert "\x1b" not in ran.err


def test_interrupt_is_one_line(run, channel, monkeypatch):
    def stop(*_args, **_kwargs):
        raise KeyboardInterrupt

    monkeypatch.setattr(crosscheck.comparison.comparing, "join", stop)
    ran = run("compare", channel)
    assert ran.status == 130
    assert ran.err == "crosscheck: stopped\n"


def test_failed_self_check_is_never_status_0(run, tmp_path, monkeypatch):
    from dataclasses import replace

    from crosscheck.comparison.result import CheckResult

    wide = tmp_path / "wide.toml"
    wide.write_text(CHANNEL + "[criteria]\nshear_area_x = 0.5\nshear_area_y = 0.5\nwarping_constant = 0.5\n")
    real = crosscheck.comparison.comparing.join

    def with_failed_check(*args, **kwargs):
        return replace(real(*args, **kwargs), checks=(CheckResult("FE: resultants", 1.0, 1e-9, False),))

    monkeypatch.setattr(crosscheck.comparison.comparing, "join", with_failed_check)
    ran = run("compare", wide)
    assert ran.status == 1
    assert "CHECK FAILED: FE: resultants" in ran.out


LOADS = "name;shear_y;through;moment_x\nup;900,5;b;30000\ndown;-1400;b;-41000\n"


def with_table(tmp_path, table=LOADS):
    """The channel with its loads from a table."""
    path = tmp_path / "channel.toml"
    path.write_text(CHANNEL + '[tables]\nloads = "loads.csv"\n')
    (tmp_path / "loads.csv").write_text(table)
    return path


def test_loads_from_a_table_are_hashed_and_said(run, tmp_path):
    path = with_table(tmp_path)
    ran = run("compare", path, "--json", "-")
    read = json.loads(ran.out)
    digest = hashlib.sha256((tmp_path / "loads.csv").read_bytes()).hexdigest()
    assert read["provenance"]["tables"] == {"loads.csv": digest}
    assert read["notes"] == ["loads.csv: 2 loads, semicolons between columns, decimal comma"]
    assert "2 loads, semicolons between columns, decimal comma" in " ".join(ran.err.split())
    assert {row["load"] for row in read["quantities"]} == {
        None, "unit Vx", "unit Vy", "unit T", "gust", "up", "down"
    }  # fmt: skip


def test_fault_in_a_table_is_one_line_with_both_files(run, tmp_path):
    ran = run("compare", with_table(tmp_path, LOADS.replace("900,5", "many")))
    assert ran.status == 2
    (line,) = ran.err.splitlines()
    assert "channel.toml: loads.csv line 2, column shear_y: must be a number" in line


def test_envelope_and_governing_load_reach_json_and_screen(run, tmp_path):
    ran = run("compare", with_table(tmp_path), "--json", "-")
    envelope = json.loads(ran.out)["envelope"]
    web = next(e for e in envelope["walls"] if e["kind"] == "flow" and e["wall"] == "web")
    assert web["theory"]["load"] == web["fe"]["load"] == "down"
    assert envelope["probes"][0]["theory_low"]["load"] in ("gust", "up", "down")
    assert "Governs, flow: down (all 3 walls)" in " ".join(ran.err.split())


def test_many_loads_show_the_worst_only(run, tmp_path):
    rows = "".join(f"case {i};{100 + i};b;{i}000\n" for i in range(1, 8))
    ran = run("compare", with_table(tmp_path, LOADS + rows))
    text = " ".join(ran.out.split())
    assert "10 loads: each quantity is shown for its worst load" in text
    assert text.count("peak flow, case") + text.count("probe flow, case") <= 1


def test_hand_sheets_in_the_folder_and_in_the_json(run, channel, tmp_path):
    out = tmp_path / "report"
    ran = run("compare", channel, "--working", "--out", out, "--json", tmp_path / "r.json")
    sheet = (out / "working_gust.md").read_text()
    assert sheet.startswith("# Hand sheet: gust\n")
    assert json.loads((tmp_path / "r.json").read_text())["working"] == {"gust": sheet}
    assert json.loads((out / "result.json").read_text())["working"] == {"gust": sheet}
    assert "# Hand sheet" not in ran.out


def test_hand_sheets_on_screen_without_a_folder(run, channel):
    ran = run("compare", channel, "--working")
    assert ran.out.index("Hand methods hold") < ran.out.index("# Hand sheet: gust")
    assert "# Hand sheet" not in run("compare", channel).out


def test_hand_sheets_of_unit_loads_where_there_are_no_others(run, tmp_path):
    path = tmp_path / "bare.toml"
    path.write_text(CHANNEL[: CHANNEL.index("[[loads]]")])
    run("compare", path, "--working", "--out", tmp_path / "report")
    names = {entry.name for entry in (tmp_path / "report").glob("working_*.md")}
    assert names == {"working_unit_Vx.md", "working_unit_Vy.md", "working_unit_T.md"}


def test_tables_on_request_on_screen_and_as_csv(run, channel, tmp_path):
    out = tmp_path / "report"
    ran = run("compare", channel, "--table", "stiffness", "--table", "levels", "--out", out)
    assert "Stiffness for a beam model per unit modulus" in " ".join(ran.out.split())
    rows = list(csv.reader((out / "stiffness.csv").read_text().splitlines()))
    assert rows[1][0] == "EA"
    assert_allclose(float(rows[1][4]), 4 * (80 + 2 * 35), rtol=1e-12, atol=0)
    assert (out / "levels.csv").is_file()
    assert not (out / "envelope.csv").exists()
    assert max(map(len, ran.out.splitlines())) <= 80


def test_unknown_table_is_bad_input(run, channel):
    ran = run("compare", channel, "--table", "everything")
    assert ran.status == 2
    assert "stiffness" in ran.err
    assert ran.err.startswith("crosscheck compare: argument --table: ")
    assert len(ran.err.splitlines()) == 1


def test_table_names_of_the_help_are_those_there_are():
    from crosscheck.commands.compare import TABLE_NAMES
    from crosscheck.reports.tables import TABLES

    assert list(TABLES) == list(TABLE_NAMES)


@pytest.mark.parametrize("level", ["corrected", "lumped"])
def test_judged_level_decides_the_verdicts(run, tmp_path, level):
    path = tmp_path / "judged.toml"
    path.write_text(f'judged = "{level}"\n' + CHANNEL + "[criteria]\ntorsion_constant = 0.004\n")
    row = next(
        row
        for row in json.loads(run("compare", path, "--json", "-").out)["quantities"]
        if row["name"] == "torsion_constant"
    )
    # The corrected level meets 0.4 %, the lumped one has the midline's constant and does not.
    assert row["verdict"] == {"corrected": "within", "lumped": "outside"}[level]


def test_a_stated_value_that_does_not_stand_decides_the_status(run, tmp_path):
    path = tmp_path / "stated.toml"
    # Wide enough for the hand method itself, so that only the stated value decides.
    held = CHANNEL + "[criteria]\nwarping_constant = 0.2\nshear_area_x = 0.2\n"
    path.write_text(held)
    assert run("compare", path).status == 0
    for value, told, status in ((600, "stands", 0), (640, "does not stand", 1)):
        stated = f"quantity = 'area'\nvalue = {value}\nsource = 'sheet 3'\ntolerance = 0.02\n"
        path.write_text(f"{held}[[stated]]\n{stated}")
        ran = run("compare", path)
        assert f"(sheet 3) {told}: FE 600.00" in " ".join(ran.out.split())
        assert ran.status == status


def test_a_stated_quantity_of_a_load_names_its_load(run, tmp_path):
    path = tmp_path / "stated.toml"
    more = '[[loads]]\nname = "two"\ntorque = 3\n[[stated]]\nquantity = "peak_flow"\nvalue = 3\n'
    path.write_text(CHANNEL + more)
    ran = run("compare", path)
    assert ran.status == 2
    assert "stated[0].load: must be given for peak_flow" in ran.err


def test_tables_are_written_to_paste_from(run, channel, tmp_path):
    ran = run("compare", channel, "--table", "walls", "--out", tmp_path / "report")
    assert ran.status in (0, 1)
    names = {entry.name for entry in (tmp_path / "report").iterdir() if entry.stem == "walls"}
    assert names == {"walls.csv", "walls.md", "walls.html"}
    assert "<script" not in (tmp_path / "report" / "walls.html").read_text()
