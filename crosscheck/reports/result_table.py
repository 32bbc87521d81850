"""A table of a result, and its text as CSV, Markdown and HTML; one function says how a number looks."""

from __future__ import annotations

import csv
import html
import io
import re
from collections.abc import Iterable
from dataclasses import dataclass

from crosscheck.faults import one_line
from crosscheck.reports.wording import number_text

Cell = str | float | None
# Characters that Markdown would take for its own.
MARKDOWN = re.compile(r"([\\`*_{}\[\]<>#|~$&])")
# Inline, so that a word processor keeps it when the table is pasted.
CELL_STYLE = "border:1px solid #808080;padding:2px 6px"
FORMATS = ("csv", "md", "html")


@dataclass(frozen=True)
class ResultTable:
    """Rows of words and numbers under their headings; None is an empty cell.

    ``shown``: the columns that a screen, or a page, has room for; CSV has all. ``told``: how many of the
    rows, from the first, readers see; None for all.
    """

    name: str
    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]
    shown: tuple[str, ...]
    told: int | None = None


@dataclass(frozen=True)
class TableText:
    """A table as readers see it: the columns shown that are not empty, every cell as text."""

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    numeric: tuple[bool, ...]


def cell_text(cell: Cell, column: str = "") -> str:
    """A cell as text, the same on screen, in Markdown and in HTML: five digits, per cent three."""
    if cell is None:
        return ""
    if isinstance(cell, str):
        return one_line(cell, 1000)
    return number_text(cell, 3 if column.endswith("[%]") else 5)


def table_text(table: ResultTable) -> TableText:
    """The rows and columns shown, without columns that are empty throughout."""
    rows = table.rows[: table.told]
    places = [
        table.columns.index(name)
        for name in table.shown
        if any(row[table.columns.index(name)] is not None for row in rows)
    ]
    return TableText(
        table.title,
        tuple(table.columns[i] for i in places),
        tuple(tuple(cell_text(row[i], table.columns[i]) for i in places) for row in rows),
        tuple(any(isinstance(row[i], float) for row in rows) for i in places),
    )


def table_bytes(table: ResultTable) -> dict[str, bytes]:
    """A table as files to paste from, by name: all columns as CSV, those shown as Markdown and HTML."""
    made = {
        "csv": csv_text(table),
        "md": markdown_text(table),
        "html": html_text(table),
    }
    return {f"{table.name}.{kind}": text.encode() for kind, text in made.items()}


def csv_text(table: ResultTable) -> str:
    """CSV: commas, decimal points, full precision, a heading line."""
    return b"".join(csv_line(cells) for cells in (table.columns, *table.rows)).decode()


def csv_line(cells: Iterable[Cell]) -> bytes:
    """One line of CSV, UTF-8; None is an empty cell."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(["" if cell is None else _csv_cell(cell) for cell in cells])
    return stream.getvalue().encode()


def _csv_cell(cell: str | float) -> str | float:
    """A cell; text that a spreadsheet would take for a formula gets an apostrophe in front."""
    return f"'{cell}" if isinstance(cell, str) and cell[:1] in ("=", "+", "-", "@", "\t") else cell


def markdown_text(table: ResultTable) -> str:
    """A Markdown table under its title, numbers to the right; text that looks like Markdown is escaped."""
    text = table_text(table)
    marks = ["---:" if numeric else "---" for numeric in text.numeric]
    rows = [text.columns, *text.rows]
    head, *lines = (f"| {' | '.join(markdown_escaped(cell) for cell in row)} |" for row in rows)
    return "\n".join(
        (f"**{markdown_escaped(text.title)}**", "", head, f"| {' | '.join(marks)} |", *lines, "")
    )


def markdown_escaped(text: str) -> str:
    """Text that Markdown shows as it is."""
    return MARKDOWN.sub(r"\\\1", text)


def html_text(table: ResultTable) -> str:
    """An HTML fragment: one plain table with inline borders, no script, no style sheet."""
    text = table_text(table)
    lines = [
        '<table style="border-collapse:collapse">',
        f"<caption>{html.escape(text.title)}</caption>",
        _html_row(text.columns, text.numeric, "th"),
    ]
    lines += [_html_row(row, text.numeric, "td") for row in text.rows]
    return "\n".join((*lines, "</table>", ""))


def _html_row(cells: tuple[str, ...], numeric: tuple[bool, ...], tag: str) -> str:
    """One row of an HTML table."""
    made = (
        f'<{tag} style="{CELL_STYLE};text-align:{"right" if right else "left"}">{html.escape(cell)}</{tag}>'
        for cell, right in zip(cells, numeric, strict=True)
    )
    return f"<tr>{''.join(made)}</tr>"
