"""Every shipped reference row, as `crosscheck verify` runs it, and what the rows must amount to."""

from __future__ import annotations

import json
import tomllib
from functools import cache
from pathlib import Path

import pytest
from midline_procedure import closed_part, open_section

from crosscheck.case_files import case_folder
from crosscheck.verification.judging import RowOutcome, run_case
from crosscheck.verification.reference import ReferenceCase
from crosscheck.verification.row_file import read_rows, row_files
from crosscheck.verification.suite import coverage

FOLDER = case_folder() / "reference"

# Entries of the tables that no row uses, each with its reason.
UNUSED = {
    "B31": "load position for no rotation at the circle's centre: another definition than Trefftz's",
    "B50": "Cowper's coefficient as t tends to zero: no section has it",
    "B51": "Cowper's coefficient as t tends to zero: no section has it",
    "B52": "Cowper's coefficient as t tends to zero: no section has it",
    "C36I": "geometry given only by reference to an entry that is not in the table",
    "C42J": "geometry given only by reference to an entry that is not in the table",
    "C49": "geometry given only by reference to an entry that is not in the table",
}


@cache
def cases() -> tuple[ReferenceCase, ...]:
    return tuple(case for path in row_files(FOLDER) for case in read_rows(path))


@cache
def outcomes(number: int) -> tuple[RowOutcome, ...]:
    return run_case(cases()[number])


@pytest.mark.parametrize("number", range(len(cases())), ids=lambda i: cases()[i].name)
def test_case(number: int) -> None:
    wrong = [f"{o.name}: {o.detail}" for o in outcomes(number) if not o.passed]
    assert not wrong


def test_rows_are_enough_and_cover_every_feature() -> None:
    rows = [row for case in cases() for row in case.rows]
    firm = {row.name for row in rows if row.obtained in ("read", "exact")}
    assert len(firm) >= 100
    assert len({row.source.key for row in rows}) >= 15
    found = coverage([o for i in range(len(cases())) for o in outcomes(i)])
    assert not [feature for feature, counts in found.items() if counts.rows == 0]
    quick = coverage([o for i, c in enumerate(cases()) if c.quick or not c.needs_fe for o in outcomes(i)])
    assert not [feature for feature, counts in quick.items() if counts.rows == 0]


def test_names_are_unique_and_every_source_is_used() -> None:
    names = [row.name for case in cases() for row in case.rows]
    assert len(names) == len(set(names))
    used = {row.source.key for case in cases() for row in case.rows}
    assert used == set(tomllib.loads((FOLDER / "sources.toml").read_text(encoding="utf-8"))["sources"])
    sections = {Path(case.section.path).name for case in cases()}
    assert sections == {path.name for path in (FOLDER / "sections").glob("*.toml")}


def test_every_entry_of_the_tables_is_used_or_has_its_reason() -> None:
    """published.json entry by entry; of rolled_sections.json every value that says a side may be judged."""
    written = [
        row
        for path in row_files(FOLDER)
        for case in tomllib.loads(path.read_text(encoding="utf-8"))["cases"]
        for row in case["rows"]
    ]
    published = {entry["id"] for entry in json.loads((FOLDER / "published.json").read_text(encoding="utf-8"))}
    assert {row["published"] for row in written if "published" in row} == published - set(UNUSED)
    used = {(row["rolled"], row["property"]) for row in written if "rolled" in row}
    for entry in json.loads((FOLDER / "rolled_sections.json").read_text(encoding="utf-8")):
        for name, use in entry["use"].items():
            tolerances = (use["fe_tolerance_percent"], use["classical_formula_tolerance_percent"])
            assert ((entry["id"], name) in used) == any(t is not None for t in tolerances), (
                entry["id"],
                name,
            )


def test_procedure_rows_are_what_the_procedure_gives() -> None:
    """Section constants by the standards' own steps, from nodes written down again here."""
    made = {
        "hat purlin": open_section([(-70, 0), (-40, 0), (-25, 60), (25, 60), (40, 0), (62, 0)], [1.5] * 5),
        "zed purlin": open_section(
            [(48, 82), (60, 100), (0, 100), (0, -100), (-65, -100), (-50, -85)], [2] * 5
        ),
        "channel with unequal flanges by procedure": open_section(
            [(100, 0), (0, 0), (0, 100), (50, 100)], [4] * 3
        ),
        "extruded profile with a rib": open_section(
            [(55, 18), (55, 0), (0, 0), (0, 45), (24, 45), (0, 45), (0, 100), (40, 100)],
            [2, 4, 3, 2.5, 0, 3, 4],
        ),
        "trapezoidal box by procedure": {
            "torsion_constant": closed_part([(0, 0), (300, -30), (300, 130), (0, 100)], [1.2, 2.0, 1.2, 3.0])
        },
    }
    found = [case for case in cases() if any(row.obtained == "procedure" for row in case.rows)]
    assert {case.name for case in found} == set(made)
    for case in found:
        for row in case.rows:
            assert row.value == pytest.approx(made[case.name][row.quantity], rel=1e-10), row.name
