"""``crosscheck sweep``: tables, pictures, gaps, resuming after a kill."""

from __future__ import annotations

import csv
import json
import random
import signal
import time
from xml.etree import ElementTree

import numpy as np
import pytest

from crosscheck import compare, read_section
from crosscheck.family.members import Family
from crosscheck.family.ranges import ranges_of
from crosscheck.family.sweep import Series, Sweep
from crosscheck.pictures.family import difference_picture
from crosscheck.section_file.source import read_source

TABLES = ("sweep.csv", "sweep.json")


def tables(folder):
    return [(folder / name).read_bytes() for name in TABLES]


@pytest.mark.long
def test_every_quantity_at_every_level_on_both_sides(run, channel, tmp_path):
    out = tmp_path / "out"
    status, screen, err = run(
        "sweep", channel, "--vary", "slenderness from 200 to 5 in 4 log", "--ratio", "t / flange",
        "--out", out, "--quantity", "torsion_constant",
    )  # fmt: skip
    assert (status, err) == (1, "")
    assert "4 of 4 members solved" in screen
    assert "not approval" in screen
    document = json.loads((out / "sweep.json").read_text())
    with (out / "sweep.csv").open(newline="") as stream:
        lines = list(csv.DictReader(stream))
    assert document["schema"] == "crosscheck.sweep/1"
    for member in (document["members"][0], document["members"][2]):
        value = member["values"]["slenderness"]
        own = compare(read_section(channel, {"slenderness": value}))
        assert member["ratio"] == pytest.approx(2 / value, rel=1e-15)
        assert [(row["name"], row["load"]) for row in member["quantities"]] == [
            (row.name, row.load) for row in own.quantities
        ]
        for row, expected in zip(member["quantities"], own.quantities, strict=True):
            assert row["theory"] == expected.theory
            assert row["difference"] == expected.difference
            assert row["fe"]["low"] == expected.fe.low
            assert row["verdict"] == expected.verdict
        written = [line for line in lines if float(line["slenderness"]) == value]
        assert [float(line["FE"]) for line in written if line["FE"]] == [
            row.fe.value for row in own.quantities if row.fe.value is not None
        ]
    names = {path.name for path in out.iterdir()} - {*TABLES, "journal.jsonl"}
    stem = "difference_torsion_constant"
    assert names == {f"{stem}{size}.{kind}" for size in ("", "_80mm") for kind in ("svg", "png")}
    ElementTree.parse(out / f"{stem}.svg")


@pytest.mark.long
def test_the_number_of_workers_changes_nothing(run, angle, tmp_path):
    for workers in (1, 2, 3):
        run(
            "sweep", angle, "--vary", "t from 0.1 to 9 in 10 log", "--out", tmp_path / str(workers),
            "--workers", workers, "--accuracy", "1e-3", "--quantity", "area",
        )  # fmt: skip
    assert tables(tmp_path / "1") == tables(tmp_path / "2") == tables(tmp_path / "3")


def test_a_section_that_cannot_be_built_is_a_member_with_its_reason(run, channel, tmp_path):
    out = tmp_path / "out"
    status, screen, _ = run(
        "sweep", channel, "--vary", "t in 2, 0, -1, 3", "--out", out, "--quantity", "torsion_constant"
    )
    assert status == 0
    assert "2 of 4 members solved" in screen
    assert "cannot be built, first at t 0" in screen
    members = json.loads((out / "sweep.json").read_text())["members"]
    assert [member["status"] for member in members] == ["solved", "refused", "refused", "solved"]
    assert "must be > 0, got -1" in members[2]["reason"]
    assert all(member["reason"] for member in members[1:3])


@pytest.mark.long
def test_two_parameters_make_a_map(run, angle, tmp_path):
    out = tmp_path / "out"
    status, screen, _ = run(
        "sweep", angle, "--vary", "t from 1 to 10 in 4", "--vary", "leg in 40, 20, 30", "--out", out,
        "--accuracy", "1e-3", "--quantity", "torsion_constant",
    )  # fmt: skip
    assert status == 1
    assert "12 of 12 members solved" in screen
    members = json.loads((out / "sweep.json").read_text())["members"]
    assert [list(member["values"].values()) for member in members[:4]] == [[1, 40], [1, 20], [1, 30], [4, 40]]
    ElementTree.parse(out / "map_torsion_constant.svg")


@pytest.mark.parametrize(
    ("arguments", "told"),
    [
        (("--vary", "thick from 1 to 2"), "parameter of [parameters]"),
        (("--vary", "t from 1 to 2", "--ratio", "t / height"), 'ratio "t / height"'),
        (("--vary", "t from 1 to 2", "--resume"), "must be given with --out"),
        (("--vary", "t from 1 to 2", "--workers", "0"), "whole number from 1 to 256"),
        (("--vary", "t from 1 to 2", "--quantity", "weight"), "--quantity: must be one of area"),
        ((), "--vary"),
    ],
)
def test_bad_arguments_are_one_line(run, angle, arguments, told):
    status, out, err = run("sweep", angle, *arguments)
    assert (status, out) == (2, "")
    assert told in err
    assert err.count("\n") == 1


def test_a_journal_of_another_run_is_refused(run, angle, tmp_path):
    arguments = ("sweep", angle, "--vary", "t in 1, 2", "--out", tmp_path / "out", "--accuracy", "1e-2")
    assert run(*arguments)[0] in (0, 1)
    angle.write_text(angle.read_text().replace("leg = 30", "leg = 31"))
    status, _, err = run(*arguments, "--resume")
    assert status == 2
    assert "belongs to another run (sha256" in err
    assert "name another folder" in err


def killed_and_resumed(process, arguments, out, kills, total, chance):
    """Start, kill with SIGKILL when the journal has grown to a random size, and so on; then to the end."""
    journal = out / "journal.jsonl"
    at = sorted(chance.sample(range(2, total - 2), kills))
    for members in at:
        running = process(*arguments, "--resume")
        while not journal.exists() or journal.read_bytes().count(b"\n") < members:
            assert running.poll() is None
            time.sleep(0.002)
        time.sleep(chance.random() * 0.05)
        running.send_signal(signal.SIGKILL)
        running.communicate()
        assert not (out / "sweep.csv").exists()
    return at


@pytest.mark.parametrize(("count", "kills"), [(60, 3), pytest.param(1000, 3, marks=pytest.mark.long)])
def test_killed_at_any_moment_and_resumed_it_ends_the_same(run, process, angle, tmp_path, count, kills):
    chance = random.Random(20)
    arguments = (
        "sweep", angle, "--vary", f"t from 0.5 to 9 in {count}", "--accuracy", "1e-2", "--quantity", "area",
        "--workers", 2,
    )  # fmt: skip
    whole, parts = tmp_path / "whole", tmp_path / "parts"
    assert run(*arguments, "--out", whole)[0] == 1
    killed_and_resumed(process, (*arguments, "--out", parts), parts, kills, count, chance)
    assert run(*arguments, "--out", parts, "--resume")[0] == 1
    assert tables(parts) == tables(whole)
    assert (parts / "journal.jsonl").read_bytes().count(b"\n") == count + 1


def test_without_resume_a_stopped_run_is_not_thrown_away(run, process, angle, tmp_path):
    out = tmp_path / "out"
    arguments = ("sweep", angle, "--vary", "t from 1 to 9 in 50", "--out", out, "--accuracy", "1e-2")
    killed_and_resumed(process, arguments, out, 1, 20, random.Random(1))
    status, _, err = run(*arguments)
    assert status == 2
    assert "of 50 points of a run that was stopped; add --resume" in err


def test_ctrl_c_stops_at_once_and_says_how_to_go_on(process, angle, tmp_path):
    out = tmp_path / "out"
    running = process(
        "sweep", angle, "--vary", "t from 1 to 9 in 5000", "--out", out, "--accuracy", "1e-2",
        start_new_session=True,
    )  # fmt: skip
    journal = out / "journal.jsonl"
    while not journal.exists() or journal.read_bytes().count(b"\n") < 5:
        assert running.poll() is None
        time.sleep(0.01)
    before = time.monotonic()
    running.send_signal(signal.SIGINT)
    _, err = running.communicate(timeout=60)
    assert time.monotonic() - before < 5
    assert running.returncode == 130
    assert "of 5000 members; go on with --resume" in err
    assert err.splitlines()[-1] == "crosscheck: stopped"
    assert err.count("\n") == 2


@pytest.mark.parametrize("width", [80, 160])
def test_long_axis_labels_stay_clear_of_the_title(angle, width):
    source = read_source(angle)
    family = Family(source, (), ranges_of(["t in 1, 2"], source), 1e-2)
    sweep = Sweep(family, "Hatch edge, angle", "mm", "N", "midline", (2.0,), None, 2, (), {}, 0, 0)
    off = np.array([[0.01, 0.01, 0.01], [0.02, 0.02, 0.02]])
    series = Series(
        "surface_shear", "gust", 0.05, np.array([[1.0], [2.0]]), np.full(2, np.nan), off, np.zeros(2)
    )
    figure = difference_picture(sweep, series, width)
    figure.draw_without_rendering()
    (axes,) = figure.axes
    label, area = axes.yaxis.label.get_window_extent(), axes.get_window_extent()
    assert label.y0 >= area.y0 - 1
    assert label.y1 <= area.y1 + 1
