"""A folder in worker processes: the same as one after another, with a summary at the end."""

from __future__ import annotations

import json
import re

import pytest


@pytest.fixture
def folder(tmp_path, channel):
    text = channel.read_text()
    inside = tmp_path / "sections"
    inside.mkdir()
    for name, thickness in (("thin", 1), ("thick", 20)):
        (inside / f"{name}.toml").write_text(text.replace("t = 4", f"t = {thickness}"))
    (inside / "faulty.toml").write_text(text.replace("t = 4", "t = 0"))
    return inside


def without_times(text):
    return re.sub(r"[0-9.]+\s+s\.", "", text)


def test_workers_tell_the_same_in_the_same_order(run, folder, tmp_path):
    one, two = tmp_path / "one.json", tmp_path / "two.json"
    alone = run("compare", folder, "--json", one)
    shared = run("compare", folder, "--json", two, "--workers", 2)
    assert alone.status == shared.status == 2
    assert without_times(alone.out) == without_times(shared.out)
    assert alone.err == shared.err
    assert "faulty.toml: walls[0].thickness: must be > 0, got 0" in shared.err
    results = [json.loads(path.read_text())["results"] for path in (one, two)]
    for each in (*results[0], *results[1]):
        del each["provenance"]["seconds"]
    assert results[0] == results[1]


def test_summary_has_a_row_for_every_section(run, folder):
    ran = run("compare", folder)
    summary = ran.out[ran.out.index("Summary:") :]
    assert summary.startswith("Summary: 1 of 3 sections within")
    words = [(line.split()[0], " ".join(line.split()[1:3])) for line in summary.splitlines()[2:5]]
    assert words == [("faulty", "bad input"), ("thick", "not within"), ("thin", "within 22")]


def test_one_section_has_no_summary(run, folder):
    assert "Summary" not in run("compare", folder / "thin.toml").out


def test_an_envelope_that_is_none_is_one_line(run, folder):
    ran = run("compare", folder / "thin.toml", "--envelope", folder / "thin.toml")
    assert ran.status == 2
    assert "must be an envelope as the command threshold writes it" in ran.err
    assert ran.err.count("\n") == 1
