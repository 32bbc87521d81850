"""Row files: a user's own rows outside the project, and everything wrong with a file told at once."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from crosscheck.faults import SectionFaults
from crosscheck.verification.row_file import printed_half_unit, read_rows, row_files
from crosscheck.verification.value_tables import published_keys, rolled_keys

STRIP = """schema = 1
units = "mm N"
[parameters]
length = 40
t = 2
[points]
a = [0, 0]
b = ["length", 0]
[[walls]]
name = "strip"
path = ["a", "b"]
thickness = "t"
"""
ROW = """
[sources.notes]
work = "Stress office notes"
edition = "issue 3"

[[cases]]
name = "strip"
section = "strip.toml"
set = { t = 1.5 }
source = "notes"
obtained = "exact"

    [[cases.rows]]
    name = "torsion of the strip"
    quantity = "torsion_constant"
    side = "theory"
    value = "length * t**3 / 3"
    tolerance = { relative = 1e-9 }
    why = "arithmetic alone"
    place = "page 4"
"""


def written(folder: Path, text: str = ROW, name: str = "rows.toml") -> Path:
    (folder / "strip.toml").write_text(STRIP, encoding="utf-8")
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path


def faults_of(folder: Path, text: str) -> list[str]:
    with pytest.raises(SectionFaults) as caught:
        read_rows(written(folder, text))
    return list(caught.value.lines)


def test_a_users_own_row(tmp_path: Path) -> None:
    (case,) = read_rows(written(tmp_path))
    (row,) = case.rows
    assert case.section.parameters["t"] == 1.5
    assert row.value == 45.0
    assert row.source.text == "Stress office notes, issue 3"
    assert not case.needs_fe


@pytest.mark.parametrize("key", ["tolerance", "place", "value", "quantity"])
def test_a_row_without_what_makes_it_evidence_is_refused(tmp_path: Path, key: str) -> None:
    lines = [line for line in ROW.splitlines() if not line.strip().startswith(f"{key} =")]
    (fault,) = faults_of(tmp_path, "\n".join(lines))
    assert f"cases[0].rows[0].{key}: must be" in fault
    assert "got nothing" in fault


def test_a_row_without_source_is_refused(tmp_path: Path) -> None:
    (fault,) = faults_of(tmp_path, ROW.replace('source = "notes"\n', ""))
    assert "rows[0].source: must be given: the key of a source, got nothing" in fault


def test_all_faults_at_once(tmp_path: Path) -> None:
    text = ROW.replace('source = "notes"', 'source = "note"').replace("{ t = 1.5 }", "{ thickness = 1.5 }")
    text = text.replace('"torsion_constant"', '"torsion_constnt"').replace(
        "page 4", 'page 4"\nat = 3\ncolour = "x'
    )
    text = text.replace("{ relative = 1e-9 }", "{ relative = -1 }").replace(
        'side = "theory"', 'side = "thery"'
    )
    faults = faults_of(tmp_path, text)
    for words in (
        "cases[0].section: must be a section file without fault",
        'rows[0].source: must be a key of [sources], here or in sources.toml, got "note"; did you mean',
        'rows[0].side: must be one of "theory", "fe", "both", got "thery"',
        "rows[0].tolerance: must be { relative = 1e-3 }",
        "rows[0].at: must be a fraction of the wall from 0 to 1, got 3",
        'rows[0].colour: must be a known key of a row, got "colour"',
    ):
        assert any(words in fault for fault in faults), (words, faults)


def test_unknown_names_walls_and_loads(tmp_path: Path) -> None:
    text = ROW.replace('"torsion_constant"', '"torsion_constnt"').replace(
        "page 4", 'page 4"\n    wall = "stripe"\n    load = "unit V'
    )
    faults = faults_of(tmp_path, text)
    assert len(faults) == 3
    assert 'did you mean "torsion_constant"?' in faults[0]
    assert 'did you mean "strip"?' in "".join(faults)


def test_tolerance_as_printed_needs_a_number(tmp_path: Path) -> None:
    (fault,) = faults_of(tmp_path, ROW.replace("{ relative = 1e-9 }", '"printed"'))
    assert "a number where the value is arithmetic" in fault
    (case,) = read_rows(
        written(
            tmp_path,
            ROW.replace("{ relative = 1e-9 }", '"printed"').replace('"length * t**3 / 3"', '"45.0"'),
        )
    )
    assert case.rows[0].tolerance.size == pytest.approx(0.05)


def test_relative_tolerance_of_zero_is_refused(tmp_path: Path) -> None:
    (fault,) = faults_of(tmp_path, ROW.replace('"length * t**3 / 3"', '"0.0"'))
    assert "absolute where the value is 0" in fault


def test_two_rows_of_one_name(tmp_path: Path) -> None:
    (fault,) = faults_of(tmp_path, ROW + ROW[ROW.index("    [[cases.rows]]") :])
    assert "a name that no other row has" in fault


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "a row file, got an empty file"),
        ("cases = [", "valid TOML"),
        ("[[cases]]\nname = 1", "name of the case"),
    ],
)
def test_files_that_are_none(tmp_path: Path, text: str, words: str) -> None:
    assert any(words in fault for fault in faults_of(tmp_path, text))


def test_missing_file(tmp_path: Path) -> None:
    with pytest.raises(SectionFaults, match="a row file, got no such file"):
        read_rows(tmp_path / "none.toml")


@pytest.mark.parametrize(
    ("text", "half"),
    [
        ("0.1406", 0.5e-4),
        ("18", 0.5),
        ("7.1", 0.05),
        ("1.20e4", 50.0),
        ("-3.", 0.5),
        (".25", 0.005),
        ("t / 2", None),
    ],
)
def test_half_a_unit_of_the_last_digit(text: str, half: float | None) -> None:
    assert printed_half_unit(text) == (None if half is None else pytest.approx(half))


def test_row_files_of_a_folder(tmp_path: Path) -> None:
    """Section files beside the rows are no row files."""
    path = written(tmp_path)
    assert row_files(tmp_path) == (path,)
    assert row_files(path) == (path,)


PUBLISHED = {
    "id": "X1", "kind": "value_check", "title": "A square", "quantity": "k1", "value": 0.1406, "unit": "-",
    "tolerance": 0.004, "source": "A book, p. 3", "provenance": "read", "independent_value": 0.140577014955,
    "independent_method": "exact series, mpmath 30 digits", "agrees": True, "notes": "",
}  # fmt: skip


def test_entry_of_published_values() -> None:
    own, again = published_keys(PUBLISHED, False), published_keys(PUBLISHED, True)
    assert (own["value"], own["tolerance"], own["obtained"]) == ("0.1406", {"relative": 0.004}, "read")
    assert own["place"] == "A book, p. 3"
    assert (again["value"], again["obtained"]) == ("0.140577014955", "exact")
    assert "tolerance" not in again
    recomputed = PUBLISHED | {"kind": "solid_reference", "provenance": "derived"}
    assert published_keys(recomputed, False)["obtained"] == "recomputed"
    assert published_keys(PUBLISHED | {"provenance": "from memory"}, False)["obtained"] == "from memory"


def test_entry_of_rolled_sections() -> None:
    entry = {
        "id": "I 1", "published": {"Iw_mm6": 3.5e8}, "as_printed": {"Iw_mm6": "350 cm^6"},
        "source": "A table", "provenance": "read in a table of the named source",
        "use": {"Iw_mm6": {"fe_tolerance_percent": 4.5, "classical_formula_tolerance_percent": 0.5,
                           "remark": "by tf b^3"}},
    }  # fmt: skip
    fe, theory = rolled_keys(entry, "Iw_mm6", "fe"), rolled_keys(entry, "Iw_mm6", "theory")
    assert (fe["quantity"], fe["unit"], fe["obtained"]) == ("warping_constant", "mm^6", "read")
    assert (fe["tolerance"], theory["tolerance"]) == ({"relative": 0.045}, {"relative": 0.005})
    assert fe["why"].endswith("by tf b^3")


def test_rows_from_a_table_beside_the_file(tmp_path: Path) -> None:
    (tmp_path / "published.json").write_text(json.dumps([PUBLISHED]), encoding="utf-8")
    text = ROW[: ROW.index("    [[cases.rows]]")].replace('obtained = "exact"\n', "") + (
        '    [[cases.rows]]\n    name = "table"\n    published = "X1"\n    side = "fe"\n'
        '    quantity = "torsion_constant / (length * t**3)"\n'
    )
    (case,) = read_rows(written(tmp_path, text))
    assert case.rows[0].value == 0.1406
    assert case.rows[0].obtained == "read"
    (fault,) = [f for f in faults_of(tmp_path, text.replace('"X1"', '"X2"')) if "X2" in f]
    assert "the id of an entry of published.json" in fault
    (tmp_path / "published.json").write_text("[1]", encoding="utf-8")
