"""``crosscheck threshold``: the answer in words, its table and chart, and the envelope for compare."""

from __future__ import annotations

import csv
import json
from xml.etree import ElementTree

import pytest

from crosscheck import compare, read_section
from crosscheck.family.validity import _word as standing_word
from crosscheck.family.validity import read_envelope, standings
from crosscheck.section_file.source import read_source

ARGUMENTS = ("--quantity", "shear_centre_x", "--quantity", "warping_constant", "--quantity", "area")


@pytest.fixture(scope="module")
def studied(tmp_path_factory, channel_text, command_started):
    """One run for all tests: status, screen, folder."""
    folder = tmp_path_factory.mktemp("threshold")
    path, out = folder / "channel.toml", folder / "out"
    path.write_text(channel_text)
    with command_started(
        "threshold", path, "--vary", "t from 1 to 25 in 9", "--out", out, *ARGUMENTS
    ) as running:
        screen, err = running.communicate(timeout=600)
    assert err == ""
    return running.returncode, screen, out


def test_which_method_up_to_where(studied):
    status, screen, out = studied
    assert status == 0
    assert "Theory, level midline, holds for all 3 quantities up to t = 10.68 (warping constant)" in screen
    assert "today's t = 2.500 is inside" in " ".join(screen.split())
    assert "Two thresholds within one step can be missed" in " ".join(screen.split())
    rows = [line.split()[0] for line in screen.splitlines() if line.startswith(("warping", "shear", "area"))]
    assert rows[:3] == ["warping", "shear", "area"]
    with (out / "thresholds.csv").open(newline="") as stream:
        lines = list(csv.DictReader(stream))
    found = [line for line in lines if line["quantity"] == "shear_centre_x" and line["level"] == "midline"]
    (line,) = found
    assert float(line["low"]) < float(line["threshold of t"]) < float(line["high"])
    assert float(line["today / threshold"]) == pytest.approx(2.5 / float(line["threshold of t"]), rel=1e-12)
    twice = [x for x in lines if x["quantity"] == "warping_constant" and x["level"] == "midline"]
    assert [x["above it"] for x in twice] == ["outside", "within"]
    assert {x["holds"] for x in lines if x["quantity"] == "area"} == {"throughout"}
    ElementTree.parse(out / "validity.svg")


def test_a_threshold_is_where_the_verdict_turns(studied, channel):
    _, _, out = studied
    envelope = read_envelope(str(out / "envelope.json"))
    rows = envelope["lines"][0]["quantities"]
    row = next(each for each in rows if (each["name"], each["level"]) == ("shear_centre_x", "midline"))
    (threshold,) = row["thresholds"]
    verdicts = [
        compare(read_section(channel, {"t": threshold[end]})).quantity("shear_centre_x").verdict
        for end in ("low", "high")
    ]
    assert verdicts == ["within", "outside"]


@pytest.mark.parametrize(
    ("value", "word"), [(5, "inside"), (12.3, "at the edge"), (20, "outside"), (25.5, "not covered")]
)
def test_where_a_section_stands_to_an_envelope(studied, channel, value, word):
    _, _, out = studied
    envelope = read_envelope(str(out / "envelope.json"))
    section = read_section(channel, {"t": value})
    found = standings(envelope, read_source(channel), section, compare(section))
    words = {each.name: each.word for each in found}
    assert words["shear_centre_x"] == word
    assert words["area"] == ("not covered" if word == "not covered" else "inside")
    assert words["torsion_constant"] == "not covered"


def test_an_envelope_of_another_shape_says_nothing(studied, channel, run):
    _, _, out = studied
    text = channel.read_text()
    for new, word in (
        (text.replace("depth = 100", "depth = 90"), None),
        (text.replace("Batt", "Butt"), 1),
    ):
        channel.write_text(new)
        section = read_section(channel)
        found = standings(
            read_envelope(str(out / "envelope.json")), read_source(channel), section, compare(section)
        )
        words = {each.word for each in found}
        assert ("inside" in words) == (word is not None)
        channel.write_text(text)
    changed = read_section(channel, {"depth": 90})
    found = standings(
        read_envelope(str(out / "envelope.json")), read_source(channel), changed, compare(changed)
    )
    assert {each.reason for each in found} == {"the envelope was made with other parameters set"}


def test_two_parameters(run, channel, tmp_path):
    out = tmp_path / "out"
    status, screen, _ = run(
        "threshold", channel, "--vary", "t from 1 to 25 in 6", "--vary", "flange in 30, 50", "--out", out,
        "--quantity", "shear_centre_x", "--level", "midline",
    )  # fmt: skip
    assert status == 0
    assert "flange 30.00: Theory, level midline, holds for 1 quantity up to t = " in screen
    envelope = json.loads((out / "envelope.json").read_text())
    ends = [line["quantities"][0]["thresholds"][0]["value"] for line in envelope["lines"]]
    words = []
    for t in (min(ends) - 1, sum(ends) / 2, max(ends) + 1):
        section = read_section(channel, {"t": t, "flange": 40})
        found = standings(envelope, read_source(channel), section, compare(section))
        words.append({each.name: each.word for each in found}["shear_centre_x"])
    assert words == ["inside", "at the edge", "outside"]
    ElementTree.parse(out / "validity.svg")


def test_nothing_is_said_where_nothing_is_known():
    """Between a gap and what was solved, and where verdicts hang on the FE error."""
    piece = {"from_is": "end of what is known", "to_is": "end of what is known"}
    row = {
        "thresholds": [],
        "holds": [{"from": 1, "to": 2, **piece}],
        "fails": [{"from": 3, "to": 4, **piece}],
    }
    words = {at: standing_word(row, at, 0.01) for at in (1.5, 2.5, 3.5, 4.5)}
    assert words == {1.5: "inside", 2.5: "not covered", 3.5: "outside", 4.5: "not covered"}


def test_a_quantity_that_the_file_does_not_have(run, channel, tmp_path):
    """No load, no direct stress: an answer in words, not a fault of ours."""
    channel.write_text(channel.read_text().partition("[[loads]]")[0])
    status, out, err = run(
        "threshold",
        channel,
        "--vary",
        "t from 2 to 3 in 2",
        "--quantity",
        "direct_stress",
        "--out",
        tmp_path / "o",
    )
    assert (status, err) == (2, "")
    assert "Nothing of what is asked for is compared" in out


def test_the_file_as_it_stands_is_not_judged_outside_the_range(run, channel):
    status, out, _ = run("threshold", channel, "--vary", "t from 3 to 4 in 2", "--quantity", "area")
    assert status == 1
    assert "throughout" in out
