"""The suite: it can fail, it can be narrowed, and its evidence holds what happened."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from pathlib import Path
from xml.etree import ElementTree

import pytest
from test_row_file import ROW, written

from crosscheck.command_line import main
from crosscheck.verification.charts import order_chart
from crosscheck.verification.check import FEATURES, CheckOutcome, CodeCheck, Series
from crosscheck.verification.evidence_files import json_bytes, junit_bytes
from crosscheck.verification.judging import RowOutcome, run_case
from crosscheck.verification.page import page_bytes, share_text
from crosscheck.verification.reference import ReferenceCase
from crosscheck.verification.row_file import read_rows
from crosscheck.verification.suite import Plan, Selection, plan, run, run_job


def case_of(folder: Path, text: str = ROW) -> ReferenceCase:
    (case,) = read_rows(written(folder, text))
    return case


def outcome_of(case: ReferenceCase) -> RowOutcome:
    (outcome,) = run_case(case)
    return outcome


def fails() -> CheckOutcome:
    raise ZeroDivisionError("nothing there")


def orders() -> CheckOutcome:
    series = {
        "error <of J>": Series((1.0, 10.0, 100.0), (1e-1, 1e-3, 1e-5), "unknowns", "error <of J>", -2.0, -2.0)
    }
    return CheckOutcome("orders", "manufactured", "fe", True, 0.01, 0.1, "as it should", series=series)


def test_a_wrong_value_fails(tmp_path: Path) -> None:
    case = case_of(tmp_path)
    assert outcome_of(case).passed
    row = replace(case.rows[0], value=case.rows[0].value * (1 + 2e-9))
    outcome = outcome_of(replace(case, rows=(row,)))
    assert not outcome.passed
    assert outcome.share == pytest.approx(2.0, rel=1e-4)
    assert "off" in outcome.detail


def test_a_known_problem_must_go_on_disagreeing(tmp_path: Path) -> None:
    case = case_of(tmp_path)
    row = replace(case.rows[0], known_problem="a misprint")
    assert not outcome_of(replace(case, rows=(row,))).passed
    assert outcome_of(replace(case, rows=(replace(row, value=50.0),))).passed


def test_finite_elements_must_be_accurate_enough_and_bounds_must_hold(tmp_path: Path) -> None:
    """Rectangle 40 x 1.5 by b t^3/3: 2.4 % off; a wide tolerance does not excuse a bound that is missed."""
    case = replace(case_of(tmp_path), accuracy=1e-3)
    row = replace(case.rows[0], side="fe", tolerance=replace(case.rows[0].tolerance, size=0.05))
    outcome = outcome_of(replace(case, rows=(row,)))
    assert not outcome.passed
    assert "outside FE's bounds" in outcome.detail
    assert outcome_of(replace(case, rows=(replace(row, obtained="from memory"),))).passed
    narrow = replace(row, value=outcome.found, tolerance=replace(row.tolerance, size=1e-12))
    assert "not accurate enough" in outcome_of(replace(case, rows=(narrow,))).detail


def test_a_quantity_that_is_not_defined_fails_with_its_reason(tmp_path: Path) -> None:
    case = case_of(tmp_path)
    outcome = outcome_of(replace(case, rows=(replace(case.rows[0], quantity="shear_centre_x"),)))
    assert not outcome.passed
    assert outcome.detail.startswith("no value: theory:")


def test_a_feature_without_a_row_fails_the_whole_suite(tmp_path: Path) -> None:
    result = run(Plan((case_of(tmp_path),), (), quick=False, whole=True), workers=0)
    missing = {o.name.removeprefix("coverage: ") for o in result.failures}
    assert missing == set(FEATURES) - {"open walls"}


def test_a_check_that_stops_is_a_failure() -> None:
    (outcome,) = run_job(CodeCheck("stops", "redundancy", "fe", fails))
    assert not outcome.passed
    assert "ZeroDivisionError: nothing there" in outcome.detail


def test_selection(tmp_path: Path) -> None:
    path = written(tmp_path)
    for chosen, count in (
        (Selection(names=("TORSION",)), 1),
        (Selection(names=("bending",)), 0),
        (Selection(sources=("stress office",)), 1),
        (Selection(features=("open walls",)), 1),
        (Selection(features=("boom",)), 0),
    ):
        assert len(plan([path], selection=chosen).cases) == count, chosen
    assert not plan(selection=Selection(sources=("Cowper",))).checks


def test_worker_processes_give_what_one_process_gives(tmp_path: Path) -> None:
    case = case_of(tmp_path)
    planned = Plan((case, replace(case, name="again")), (), quick=False, whole=False)
    told: list[tuple[int, int]] = []
    many = run(planned, workers=2, tell=lambda done, count, name: told.append((done, count)))
    one = run(planned, workers=0)
    assert [replace(o, seconds=0.0) for o in many.outcomes] == [replace(o, seconds=0.0) for o in one.outcomes]
    assert told == [(1, 2), (2, 2)]


@pytest.fixture(scope="module")
def mixed(tmp_path_factory: pytest.TempPathFactory) -> Plan:
    """A row that passes, one that fails, a known problem, a code check with a plot and one that stops."""
    case = case_of(tmp_path_factory.mktemp("rows"))
    row = case.rows[0]
    rows = (
        row,
        replace(row, name="wrong & <odd>", value=46.0),
        replace(row, name="misprint", value=54.0, known_problem="digits exchanged"),
    )
    checks = (
        CodeCheck("orders", "manufactured", "fe", orders),
        CodeCheck("stops", "manufactured", "fe", fails),
    )
    return Plan((replace(case, rows=rows),), checks, quick=False, whole=True)


def test_json(mixed: Plan) -> None:
    result = run(mixed, workers=0)
    document = json.loads(json_bytes(result))
    assert document["schema"] == "crosscheck.verification/1"
    assert document["passed"] is False
    assert len(document["outcomes"]) == len(result.outcomes)
    wrong = next(o for o in document["outcomes"] if o["name"] == "wrong & <odd>")
    assert (wrong["expected"], wrong["found"]) == (46.0, pytest.approx(45.0))
    assert wrong["source"] == "Stress office notes, issue 3"
    assert document["obtained"] == {"exact": 3}


def test_junit(mixed: Plan) -> None:
    result = run(mixed, workers=0)
    top = ElementTree.fromstring(junit_bytes(result))
    cases = top.findall("testsuite/testcase")
    assert len(cases) == int(top.attrib["tests"]) == len(result.outcomes)
    failed = {case.attrib["name"] for case in cases if case.find("failure") is not None}
    assert failed == {o.name for o in result.failures}
    assert {"wrong & <odd>", "stops", "coverage: boom"} <= failed


def test_page_stands_alone_and_begins_with_failures(mixed: Plan) -> None:
    text = page_bytes(run(mixed, workers=0)).decode()
    assert not re.search(r"(src|href)=\"(?!#)", text)
    assert "@import" not in text
    assert "wrong &amp; &lt;odd&gt;" in text
    assert "<odd>" not in text
    assert "error &lt;of J&gt;" in text
    assert text.index('id="failures"') < text.index("What was checked") < text.index("Every row, by source")
    for words in (
        "digits exchanged",
        "Stress office notes, issue 3",
        "page 4",
        "no reference row exercises it",
        "not test evidence, not approval",
        "What both sides share",
        "length * t**3 / 3",
    ):
        assert words in text, words


def test_order_plot_without_points_is_none() -> None:
    assert order_chart("empty", {"none": Series((1.0,), (0.0,), "h", "error")}) == ""


def test_share_in_words() -> None:
    def share(value: float, allowed: float) -> str:
        return share_text(CheckOutcome("n", "g", "fe", True, value, allowed, ""))

    assert [share(v, 1.0) for v in (0.0, 3e-5, 0.0957, 0.5, 1.2, 40.0)] == [
        "0", "0.003 %", "10 %", "50 %", "120 %", "40 times",
    ]  # fmt: skip
    assert share(1.0, 0.0) == "-"


def test_command(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = written(tmp_path)
    out = tmp_path / "evidence"
    assert main(["verify", str(path), "--out", str(out), "--junit", str(tmp_path / "j.xml")]) == 0
    assert {p.name for p in out.iterdir()} == {"verification.html", "verification.json", "verification.xml"}
    assert (tmp_path / "j.xml").is_file()
    shown = capsys.readouterr().out
    assert "The one check passed." in shown
    assert "verification.html" in shown.replace("\n", "")  # long paths are wrapped
    wrong = written(tmp_path, ROW.replace('"length * t**3 / 3"', '"46"'), "wrong.toml")
    assert main(["verify", str(wrong), "--json", "-"]) == 1
    captured = capsys.readouterr()
    assert json.loads(captured.out)["passed"] is False
    assert "1 of 1 checks failed." in captured.err


def test_command_refuses(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = written(tmp_path, ROW.replace('place = "page 4"', ""))
    assert main(["verify", str(path)]) == 2
    assert "rows[0].place: must be given" in capsys.readouterr().err
    assert main(["verify", str(written(tmp_path)), "--name", "no such"]) == 2
    assert "must name rows or checks that there are" in capsys.readouterr().err
    assert main(["verify", "--feature", "wings"]) == 2
    assert main(["verify", str(tmp_path / "missing.toml")]) == 2
    capsys.readouterr()
    (tmp_path / "file").write_text("", encoding="utf-8")
    assert main(["verify", str(written(tmp_path)), "--out", str(tmp_path / "file")]) == 2
    assert "must be a place that can be written" in capsys.readouterr().err
