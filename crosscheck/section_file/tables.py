"""CSV tables beside a section file: loads, one a row, as [[loads]] would have them.

Columns are separated by semicolons where the first line has one, by commas otherwise. With semicolons a
decimal comma is understood, and said in a note. A cell may hold arithmetic on parameters; an empty one is
absent.
"""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Mapping
from typing import Any

from crosscheck.faults import FaultList, KeyPath, quoted
from crosscheck.section_file.source import SectionSource, TableSource

# Column of a table of loads: the key of [[loads]] and the place in it, None where the key holds one value.
LOAD_COLUMNS: Mapping[str, tuple[str, int | None]] = {
    "name": ("name", None),
    "shear_x": ("shear", 0),
    "shear_y": ("shear", 1),
    "through": ("through", None),
    "through_x": ("through", 0),
    "through_y": ("through", 1),
    "torque": ("torque", None),
    "axial": ("axial", None),
    "moment_x": ("moment", 0),
    "moment_y": ("moment", 1),
    "bimoment": ("bimoment", None),
}
_DECIMAL_COMMA = re.compile(r"[+-]?\d*,\d+(?:[eE][+-]?\d+)?\Z|[+-]?\d+,\Z")
_DECIMAL_POINT = re.compile(r"[+-]?\d*\.\d+(?:[eE][+-]?\d+)?\Z|[+-]?\d+\.\Z")


def with_tables(source: SectionSource, faults: FaultList, notes: list[str]) -> dict[str, Any]:
    """The document with the loads of its table after those of the file.

    Parameters
    ----------
    source : the file and its tables, left as they are
    faults : receives faults; those of a row are named by the table's file and line
    notes : receives what was understood

    Returns
    -------
    A copy, shallow but for what is added.
    """
    document = dict(source.document)
    table = source.tables.get("loads")
    if table is None:
        return document
    if table.fault is not None:
        found, allowed, remedy = table.fault
        faults.add(("tables", "loads"), found, allowed, remedy)
        return document
    own = document.get("loads", [])
    if not isinstance(own, list):
        return document  # noted with the other forms
    rows = _rows(table, faults, notes)
    for number, (line, _) in enumerate(rows, start=len(own)):
        faults.alias(("loads", number), f"{table.name} line {line}")
    document["loads"] = [*own, *(row for _, row in rows)]
    return document


def _rows(table: TableSource, faults: FaultList, notes: list[str]) -> list[tuple[int, dict[str, Any]]]:
    """Line number and load table of every row."""
    path: KeyPath = ("tables", "loads")
    lines = table.text.split("\n")
    separator = ";" if ";" in next((line for line in lines if line.strip()), "") else ","
    reader = csv.reader(io.StringIO(table.text), delimiter=separator, skipinitialspace=True)
    try:
        cells = [
            (reader.line_num, [cell.strip() for cell in row])
            for row in reader
            if any(cell.strip() for cell in row)
        ]
    except csv.Error as error:
        faults.add(path, f"{table.name} line {reader.line_num}: {error}", "a CSV table")
        return []
    header = [name.lower() for name in cells[0][1]]
    if not _header_holds(table.name, header, faults):
        return []
    body = cells[1:]
    if not body:
        faults.add(path, f"{table.name} with no row below its header", "a table of at least one load")
        return []
    columns = list(zip(*(row for _, row in body if len(row) == len(header)), strict=True))
    numbers = [
        cell for name, column in zip(header, columns, strict=False) if name != "name" for cell in column
    ]
    comma = separator == ";" and any(_DECIMAL_COMMA.match(cell) for cell in numbers)
    if comma and any(_DECIMAL_POINT.match(cell) for cell in numbers):
        words = "a table with one decimal mark throughout"
        faults.add(path, f"{table.name} with decimal commas and decimal points", words)
        return []
    marks = f"{'semicolons' if separator == ';' else 'commas'} between columns, decimal "
    loads = "load" if len(body) == 1 else "loads"
    notes.append(f"{table.name}: {len(body)} {loads}, {marks}{'comma' if comma else 'point'}")
    return [(line, _load(table, line, header, row, comma, faults)) for line, row in body]


def _header_holds(table: str, header: list[str], faults: FaultList) -> bool:
    """Whether the first line names known columns, each once."""
    path: KeyPath = ("tables", "loads")
    before = len(faults) + faults.left_out
    for name in dict.fromkeys(header):
        if name not in LOAD_COLUMNS:
            words = f"a table with the columns {', '.join(LOAD_COLUMNS)}"
            faults.add(path, f"the column {quoted(name)} in {table}", words, near=(name, LOAD_COLUMNS))
        elif header.count(name) > 1:
            faults.add(path, f"the column {quoted(name)} twice in {table}", "a table with each column once")
    if "name" not in header and len(faults) + faults.left_out == before:
        faults.add(path, f"{table} without the column name", "a table with a name for each load")
    return len(faults) + faults.left_out == before


def _load(
    table: TableSource, line: int, header: list[str], row: list[str], comma: bool, faults: FaultList
) -> dict[str, Any]:
    """One row as a table of [[loads]]; parts of a pair that are empty are 0."""
    path: KeyPath = ("tables", "loads")
    where = f"{table.name} line {line}"
    if len(row) != len(header):
        found = f"{len(row)} columns at {where}"
        faults.add(path, found, f"a table with the {len(header)} columns of its first line in every row")
        return {"name": where, "torque": 1.0}  # stands for the row, so that no further fault is made of it
    load: dict[str, Any] = {}
    for name, cell in zip(header, row, strict=True):
        if not cell:
            continue
        key, part = LOAD_COLUMNS[name]
        if key in load and isinstance(load[key], list) == (part is None):
            faults.add(path, f"{quoted(name)} besides {key} at {where}", "a table with one of them in a row")
        elif part is None:
            load[key] = cell if key in ("name", "through") else _number(cell, comma)
        else:
            load.setdefault(key, [0.0, 0.0])[part] = _number(cell, comma)
    given = {name for name, cell in zip(header, row, strict=True) if cell}
    if len(given & {"through_x", "through_y"}) == 1:
        faults.add(path, f"one of through_x and through_y at {where}", "a table with both or none in a row")
    return load


def _number(cell: str, comma: bool) -> float | str:
    """The number in a cell, or the text for arithmetic."""
    text = cell.replace(",", ".") if comma and _DECIMAL_COMMA.match(cell) else cell
    try:
        return float(text)
    except ValueError:
        return text
