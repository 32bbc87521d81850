"""Sections that are not the common one: without walls, with two models, large ones in worker processes."""

from __future__ import annotations

from pathlib import Path

import pytest

from crosscheck.batch.task import BatchError
from crosscheck.dossier.assumptions import register
from crosscheck.dossier.bench import Bench, comparison_of
from crosscheck.dossier.composing import compose
from crosscheck.dossier.content import Diagram, Paragraph, Table
from crosscheck.dossier.convergence import answers
from crosscheck.dossier.evidence import gather
from crosscheck.dossier.texts import conclusion
from crosscheck.reports.wording import difference_text
from crosscheck.section_file.reader import read_section

from .test_writers import all_words, chapters, plain_plates

SECTIONS = Path(__file__).parents[2] / "cases" / "sections"


@pytest.fixture(scope="module")
def knuckle():
    return gather(read_section(str(SECTIONS / "solid_ramp_hinge_knuckle.toml")), 1e-4, lambda _: None)


def test_a_section_without_walls_shows_the_values_of_fe_and_no_empty_table(knuckle):
    document = compose([knuckle], [plain_plates()], None, "2026-01-01", "crosscheck dossier")
    for chapter in chapters(document):
        assert all_words(chapter), chapter.title
        assert not any(isinstance(block, Diagram) for block in chapter.blocks), "no wall to point at"
    tables = [block for block in document.outcome if isinstance(block, Table)]
    shown = {row[0] for row in tables[0].rows}
    assert {"area", "torsion constant", "shear centre, x"} <= shown
    first = document.outcome[0]
    assert isinstance(first, Paragraph)
    assert first.tone != "good"
    assert not first.text.endswith(":")


def test_a_section_without_walls_counts_neither_as_held_nor_as_failed(knuckle, rail):
    document = compose([rail, knuckle], [plain_plates()] * 2, None, "2026-01-01", "crosscheck dossier")
    first = document.outcome[0]
    assert isinstance(first, Paragraph)
    assert f"No hand method to judge: {knuckle.result.title}" in first.text


def test_per_cent_of_something_else_than_the_value_say_of_what(rail):
    starred = [row for row in rail.result.quantities if difference_text(row, "mm").endswith("*")]
    assert starred
    for row in starred:
        told = conclusion(row, "mm")
        assert "(of " in told or "*" in told, told


def test_no_order_of_a_corner_where_there_is_none(knuckle):
    assert knuckle.convergence.corner_order is None
    document = compose([knuckle], [plain_plates()], None, "2026-01-01", "crosscheck dossier")
    solution = next(chapter for chapter in chapters(document) if chapter.key == "solution")
    assert not any("corner allows, not observed" in words for words in all_words(solution))
    most = 2 * max(run.order for run in knuckle.convergence.runs)
    assert all(index.order is None or index.order <= most for index in knuckle.convergence.indices)


def test_what_only_one_side_sees_is_not_said_of_both(rail):
    section = read_section(str(SECTIONS / "two_models_floor_box.toml"))
    told = {entry.name: entry for entry in register(section, rail.result, rail.convergence)}
    idealised = told["Booms and shear-only skins (theory)"]
    skins = [wall for wall in section.walls if wall.seen_by != "fe" and wall.share_in_theory < 1.0]
    assert skins
    assert f"{len(skins)} walls" in idealised.evidence
    assert "in neither" not in idealised.effect
    blades = [wall.name for wall in section.walls if wall.seen_by == "fe"]
    assert blades
    assert not any(name in told["Thin walls (theory)"].evidence for name in blades)


def test_worker_processes_give_the_same_result(rail):
    trials = [(rail.section, 1e-3), (rail.section, 1e-4)]
    told: list[str] = []
    with Bench(comparison_of, None, beside=True) as bench:
        beside = bench.work(trials, "solved", told.append)
    with Bench(comparison_of, None, beside=False) as bench:
        here = bench.work(trials, "solved", lambda _: None)
    assert [len(each.quantities) for each in beside] == [len(each.quantities) for each in here]
    for one, other in zip(beside, here, strict=True):
        for a, b in zip(one.quantities, other.quantities, strict=True):
            if b.fe.value is None:
                assert a.fe.value is None
                continue
            assert a.fe.value == pytest.approx(b.fe.value, rel=1e-9, abs=1e-9 * (b.normaliser or 1.0))
    assert told[-1] == "solved, 2 of 2"
    assert not answers(here[0], 1e-12)
    assert answers(here[1], 1e-3)


def test_a_fault_in_a_worker_is_told():
    with Bench(_refuse, None, beside=True) as bench, pytest.raises(BatchError, match=r"plates: .*no paper"):
        bench.work([1], "plates", lambda _: None)


def _refuse(_: None, what: int) -> int:
    raise RuntimeError("no paper")
