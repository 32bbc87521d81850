"""CSV tables beside a section file: points, walls, booms or loads, one a row, as the file would have them.

Columns are separated by semicolons where the first line has one, by commas otherwise. With semicolons a
decimal comma is understood, and said in a note. A cell may hold arithmetic on parameters; an empty one is
absent. A column's name may be followed by its unit in brackets, which must be that of the file.
"""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from crosscheck.faults import FaultList, KeyPath, quoted
from crosscheck.section_file.source import SectionSource, TableSource
from crosscheck.section_file.table_columns import COLUMNS, TOGETHER, Column
from crosscheck.units import UNIT_SYSTEMS, UnitSystem, unit_powers

_DECIMAL_COMMA = re.compile(r"[+-]?\d*,\d+(?:[eE][+-]?\d+)?\Z|[+-]?\d+,\Z")
_DECIMAL_POINT = re.compile(r"[+-]?\d*\.\d+(?:[eE][+-]?\d+)?\Z|[+-]?\d+\.\Z")
_PLAIN_NUMBER = re.compile(r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?\Z")
_WITH_UNIT = re.compile(r"(?P<name>[^\[(]*?)\s*[\[(](?P<unit>[^\])]*)[\])]\Z")


@dataclass(frozen=True)
class _Row:
    """One row below the header: its line in the table and its cells."""

    line: int
    cells: list[str]


def with_tables(source: SectionSource, faults: FaultList, notes: list[str]) -> dict[str, Any]:
    """The document with the rows of its tables after those of the file.

    Parameters
    ----------
    source : the file and its tables, left as they are
    faults : receives faults; those of a cell are named by the table's file, line and column
    notes : receives what was understood

    Returns
    -------
    A copy, shallow but for what is added.
    """
    document = dict(source.document)
    units = document.get("units")
    system = UNIT_SYSTEMS.get(units) if isinstance(units, str) else None
    for kind, columns in COLUMNS.items():
        table = source.tables.get(kind)
        if table is None:
            continue
        if table.fault is not None:
            found, allowed, remedy = table.fault
            faults.add(("tables", kind), found, allowed, remedy)
            continue
        own = document.get(kind)
        reading = _Reading(kind, table, columns, system, faults, notes)
        if kind == "points" and (own is None or isinstance(own, dict)):
            document[kind] = reading.points(own or {})
        elif kind != "points" and (own is None or isinstance(own, list)):
            document[kind] = reading.entries(own or [])
        # What is of another form is noted with the other forms.
    return document


class _Reading:
    """Reads one table."""

    def __init__(
        self,
        kind: str,
        table: TableSource,
        columns: Mapping[str, Column],
        system: UnitSystem | None,
        faults: FaultList,
        notes: list[str],
    ) -> None:
        self.kind = kind
        self.table = table
        self.columns = columns
        self.system = system
        self.faults = faults
        self.notes = notes
        self.path: KeyPath = ("tables", kind)
        self.header: list[str] = []
        self.comma = False

    def entries(self, own: Sequence[Any]) -> list[Any]:
        """The file's own entries of a list of tables, and those of the rows."""
        entries = list(own)
        for row in self._rows():
            where: KeyPath = (self.kind, len(entries))
            entries.append(self._entry(row, where))
        return entries

    def points(self, own: Mapping[str, Any]) -> dict[str, Any]:
        """The file's own points, and those of the rows."""
        points = dict(own)
        for row in self._rows():
            name = dict(zip(self.header, row.cells, strict=False)).get("name", "")
            entry = self._entry(row, ("points", name))
            if not name:
                self.faults.add(
                    self.path, f"no name at {self._at(row)}", "a table with a name for each point"
                )
            elif name in points:
                found = f"{quoted(name)} again at {self._at(row)}"
                self.faults.add(self.path, found, "a table of points that have no place yet")
            elif "place" in entry:
                points[name] = entry["place"]
        return points

    def _at(self, row: _Row) -> str:
        return f"{self.table.name} line {row.line}"

    def _rows(self) -> list[_Row]:
        """Rows below a header that holds; none where the table has a fault as a whole."""
        lines = self.table.text.split("\n")
        separator = ";" if ";" in next((line for line in lines if line.strip()), "") else ","
        reader = csv.reader(io.StringIO(self.table.text), delimiter=separator, skipinitialspace=True)
        try:
            rows = [
                _Row(reader.line_num, [cell.strip() for cell in row])
                for row in reader
                if any(cell.strip() for cell in row)
            ]
        except csv.Error as error:
            self.faults.add(self.path, f"{self.table.name} line {reader.line_num}: {error}", "a CSV table")
            return []
        if not self._header_holds(rows[0].cells):
            return []
        body = rows[1:]
        noun = self.kind if len(body) != 1 else self.kind[:-1]
        if not body:
            found = f"{self.table.name} with no row below its header"
            self.faults.add(self.path, found, f"a table of at least one {self.kind[:-1]}")
            return []
        numbers = [
            cell
            for row in body
            for name, cell in zip(self.header, row.cells, strict=False)
            if self.columns[name].powers is not None
        ]
        self.comma = separator == ";" and any(_DECIMAL_COMMA.match(cell) for cell in numbers)
        if self.comma and any(_DECIMAL_POINT.match(cell) for cell in numbers):
            found = f"{self.table.name} with decimal commas and decimal points"
            self.faults.add(self.path, found, "a table with one decimal mark throughout")
            return []
        marks = f"{'semicolons' if separator == ';' else 'commas'} between columns"
        mark = "comma" if self.comma else "point"
        self.notes.append(f"{self.table.name}: {len(body)} {noun}, {marks}, decimal {mark}")
        return body

    def _header_holds(self, cells: list[str]) -> bool:
        """Whether the first line names known columns, each once, in the units of the file."""
        before = len(self.faults) + self.faults.left_out
        name = self.table.name
        for cell in cells:
            match = _WITH_UNIT.match(cell)
            column = (match["name"] if match else cell).strip().lower()
            if column not in self.columns:
                words = f"a table with the columns {', '.join(self.columns)}"
                near = (column, self.columns)
                self.faults.add(self.path, f"the column {quoted(column)} in {name}", words, near=near)
            elif column in self.header:
                words = "a table with each column once"
                self.faults.add(self.path, f"the column {quoted(column)} twice in {name}", words)
            elif match:
                self._check_unit(cell, column, match["unit"])
            self.header.append(column)
        required = [each for each, column in self.columns.items() if column.required]
        for each in required:
            if each not in self.header and len(self.faults) + self.faults.left_out == before:
                words = f"a table with the columns {', '.join(required)}"
                self.faults.add(self.path, f"{name} without the column {each}", words)
        return len(self.faults) + self.faults.left_out == before

    def _check_unit(self, cell: str, column: str, unit: str) -> None:
        """Note a unit in the header that is not that of the file: nothing is converted."""
        powers = self.columns[column].powers
        found = f"the column {quoted(cell)} in {self.table.name}"
        if powers is None:
            self.faults.add(self.path, found, "a table without units on names and words")
            return
        if self.system is None:
            return  # the file's units are faulty or absent, which is noted
        if unit_powers(unit) != self.system.powers(*powers):
            expected = self.system.text(*powers)
            remedy = f"nothing is converted: write it as {column} [{expected}], with its numbers in that unit"
            self.faults.add(self.path, found, f"a table in the units of the file ({expected} here)", remedy)

    def _entry(self, row: _Row, where: KeyPath) -> dict[str, Any]:
        """One row as the table of the file that it stands for."""
        at = self._at(row)
        self.faults.alias(where, at)
        if len(row.cells) != len(self.header):
            found = f"{len(row.cells)} columns at {at}"
            words = f"a table with the {len(self.header)} columns of its first line in every row"
            self.faults.add(self.path, found, words)
            return {}
        entry: dict[str, Any] = {}
        cells = dict(zip(self.header, row.cells, strict=True))
        for name, cell in cells.items():
            column = self.columns[name]
            if not cell:
                continue
            key = column.key[1:] if self.kind == "points" else column.key  # a point's place has no key
            if key:
                self.faults.alias((*where, *key), f"{at}, column {name}")
            value = cell if column.powers is None else self._number(cell)
            self._put(entry, column.key, value, name, at)
        for pair in TOGETHER[self.kind]:
            if sum(bool(cells.get(name)) for name in pair) == 1:
                words = "a table with both or none in a row"
                self.faults.add(self.path, f"one of {' and '.join(pair)} at {at}", words)
        return entry

    def _put(self, entry: dict[str, Any], key: KeyPath, value: Any, name: str, at: str) -> None:
        """Set the value at a key path within an entry; the other place of a pair is 0 until it is set."""
        node: Any = entry
        for part, following in pairwise(key):
            made = node.setdefault(part, [0.0, 0.0] if isinstance(following, int) else {})
            if not isinstance(made, list if isinstance(following, int) else dict):
                words = "a table with one of them in a row"
                self.faults.add(self.path, f"{quoted(name)} besides {part} at {at}", words)
                return
            node = made
        if isinstance(node, dict) and key[-1] in node:
            words = "a table with one of them in a row"
            self.faults.add(self.path, f"{quoted(name)} besides {key[-1]} at {at}", words)
            return
        node[key[-1]] = value

    def _number(self, cell: str) -> float | str:
        """The number in a cell, or the text for arithmetic."""
        text = cell.replace(",", ".") if self.comma and _DECIMAL_COMMA.match(cell) else cell
        # float() alone would take digits of other scripts and 1_000 as well
        return float(text) if _PLAIN_NUMBER.match(text) else text
