"""Mutated section files: always a section or a list of faults, never anything else."""

from __future__ import annotations

import copy
import datetime
import math
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from crosscheck.section_file.reader import (
    SectionFaults,
    SectionFile,
    SectionSource,
    read_source,
    section_from,
)

SHIPPED = sorted((Path(__file__).parents[2] / "cases" / "sections").glob("*.toml"))
SOURCES = [read_source(path) for path in SHIPPED]
TEXTS = [path.read_text(encoding="utf-8") for path in SHIPPED]

DELETE = object()
# What a TOML file can hold: no null, no lone surrogates.
ODD_VALUES: list[Any] = [
    DELETE,
    True,
    0,
    -1,
    10**400,
    1e-300,
    1e308,
    5e-324,
    math.nan,
    -math.inf,
    "",
    "t",
    "1 / 0",
    "9 ** 64 ** 9",
    "\x1b[31m",
    "midline shear centre",
    "every_bend",
    [],
    {},
    [[]],
    [1, [2, [3]]],
    ["a", "a"],
    {"from": 1, "to": 2},
    {"through": [1, 2]},
    {"a": {"b": {"c": {}}}},
    datetime.date(2001, 2, 3),
]
ODD_KEYS = ["", "a b", "\n", "walls", "sqrt", "units", "thickness", "[key]", "*", "x" * 500]


def fit_to_show(faults: SectionFaults) -> tuple[str, ...]:
    """The lines of faults, each of them printable and bounded."""
    assert faults.lines
    for line in faults.lines:
        assert line.isprintable()
        assert len(line) < 2000
    return faults.lines


def outcome(source: SectionSource, overrides: Any = ()) -> SectionFile | tuple[str, ...]:
    """The section, or the lines of its faults."""
    try:
        return section_from(source, overrides)
    except SectionFaults as faults:
        return fit_to_show(faults)


def tables(node: Any) -> list[Any]:
    """All lists and tables in a document."""
    inner = node.values() if isinstance(node, dict) else node if isinstance(node, list) else ()
    found = [node] if isinstance(node, (dict, list)) and node else []
    for child in inner:
        found += tables(child)
    return found


@settings(max_examples=300, deadline=None, derandomize=True)
@given(st.data())
def test_mutated_documents(data: st.DataObject) -> None:
    source = data.draw(st.sampled_from(SOURCES))
    document = copy.deepcopy(source.document)
    for _ in range(data.draw(st.integers(1, 4))):
        choices = tables(document)
        if not choices:
            break
        table = data.draw(st.sampled_from(choices))
        keys: list[Any] = list(range(len(table))) if isinstance(table, list) else list(table)
        if isinstance(table, dict) and data.draw(st.booleans()):
            keys = ODD_KEYS
        key = data.draw(st.sampled_from(keys))
        value = data.draw(st.sampled_from(ODD_VALUES))
        if value is not DELETE:
            table[key] = copy.deepcopy(value)
        elif isinstance(table, list) or key in table:
            del table[key]
    first = outcome(SectionSource("x.toml", "", document))
    assert outcome(SectionSource("x.toml", "", copy.deepcopy(document))) == first
    if isinstance(first, SectionFile):
        numbers = [t for wall in first.walls for t in wall.thickness]
        numbers += [x for place in first.points.values() for x in place]
        assert all(math.isfinite(number) for number in numbers)
        assert all(t > 0 for wall in first.walls for t in wall.thickness)


@settings(max_examples=200, deadline=None, derandomize=True)
@given(st.data())
def test_mutated_texts(tmp_path_factory: pytest.TempPathFactory, data: st.DataObject) -> None:
    text = data.draw(st.sampled_from(TEXTS))
    for _ in range(data.draw(st.integers(1, 5))):
        at = data.draw(st.integers(0, len(text)))
        cut = data.draw(st.sampled_from([0, 0, 1, 2, 7, 60]))
        put = data.draw(
            st.sampled_from(["", "[", "]", '"', "'''", "=", "\n", ".", ",", "-", "nan", "#", "\0", "e"])
        )
        text = text[:at] + put + text[at + cut :]
    path = tmp_path_factory.getbasetemp() / "mutated.toml"
    path.write_text(text, encoding="utf-8")
    try:
        source = read_source(path)
    except SectionFaults as faults:
        fit_to_show(faults)
        return
    outcome(source)


@settings(max_examples=200, deadline=None, derandomize=True)
@given(st.one_of(st.text(max_size=30), st.text(max_size=20).map("thickness = {}".format)))
def test_any_override(text: str) -> None:
    """The file's own section with other numbers, or faults that all name the override."""
    plain, found = section_from(SOURCES[0]), outcome(SOURCES[0], [text])
    if isinstance(found, SectionFile):
        assert "=" in text
        assert [wall.name for wall in found.walls] == [wall.name for wall in plain.walls]
        assert all(0 < t < math.inf for wall in found.walls for t in wall.thickness)
    else:
        # Without "=" one line says so; with it, a number may also be refused where the file uses it.
        assert "=" in text or (len(found) == 1 and 'must be of the form "name = value"' in found[0])
        assert any(": set " in line or "thickness" in line for line in found)
