"""Tables to paste: one set of digits on screen, in Markdown and in HTML, full precision in CSV, escapes."""

from __future__ import annotations

import csv
import io
from dataclasses import replace
from html.parser import HTMLParser

import pytest
from rich.console import Console

from crosscheck.comparison.comparing import join
from crosscheck.reports.result_table import (
    ResultTable,
    csv_text,
    html_text,
    markdown_text,
    table_bytes,
    table_text,
)
from crosscheck.reports.screen_blocks import table_block
from crosscheck.reports.tables import TABLES
from crosscheck.section_file.model import AllowableSpec, StatedSpec

from .stand_in import both_sides, channel_file

NASTY = '<script>alert("1")</script> a|b *c* [d](e) `f` \\ & _g_'


class Cells(HTMLParser):
    """Rows of an HTML table as text, and every tag seen."""

    def __init__(self) -> None:
        super().__init__()
        self.rows: list[list[str]] = []
        self.tags: set[str] = set()
        self.inside = False

    def handle_starttag(self, tag, attrs):
        self.tags.add(tag)
        if tag == "tr":
            self.rows.append([])
        elif tag in ("td", "th"):
            self.rows[-1].append("")
            self.inside = True

    def handle_endtag(self, tag):
        if tag in ("td", "th"):
            self.inside = False

    def handle_data(self, data):
        if self.inside:
            self.rows[-1][-1] += data


def html_cells(text):
    parser = Cells()
    parser.feed(text)
    return parser


def markdown_cells(text):
    lines = [line for line in text.split("\n") if line.startswith("| ")]
    rows = []
    for line in lines:
        plain, cells, i = "", [], 2
        while i < len(line):
            if line[i] == "\\":
                plain, i = plain + line[i + 1], i + 2
            elif line[i] == "|":
                cells, plain, i = [*cells, plain.strip()], "", i + 1
            else:
                plain, i = plain + line[i], i + 1
        rows.append(cells)
    return [rows[0], *rows[2:]]


@pytest.fixture(scope="module")
def full():
    section = channel_file(
        allowables=(AllowableSpec(None, "shear_flow", 30.0, NASTY),),
        stated=(StatedSpec("torsion_constant", 8123.456, NASTY),),
    )
    return join(section, *both_sides(section))


@pytest.mark.parametrize("name", list(TABLES))
def test_the_same_digits_everywhere(full, name):
    table = TABLES[name](full)
    text = table_text(table)
    assert [list(row) for row in (text.columns, *text.rows)] == html_cells(html_text(table)).rows
    assert [[" ".join(cell.split()) for cell in row] for row in (text.columns, *text.rows)] == markdown_cells(
        markdown_text(table)
    )
    console = Console(width=400, file=io.StringIO(), markup=False, emoji=False, highlight=False)
    console.print(table_block(table, 400))
    shown = console.file.getvalue()
    rows = list(csv.reader(io.StringIO(csv_text(table))))
    assert rows[0] == list(table.columns)
    for given, row, printed in zip(table.rows, rows[1:], text.rows, strict=True):
        for column, cell in zip(text.columns, printed, strict=True):
            value = given[table.columns.index(column)]
            if isinstance(value, float):
                assert cell in shown.split(), (column, cell)
                # Full precision: the very number.
                assert float(row[table.columns.index(column)]) == value
                assert float(cell) == pytest.approx(value, rel=0.006, abs=1e-300)


def test_text_is_escaped():
    table = ResultTable("t", NASTY, (NASTY, "n"), ((NASTY, 1.5), ("=cmd()", 2.0)), (NASTY, "n"))
    found = html_cells(html_text(table))
    assert found.tags == {"table", "caption", "tr", "th", "td"}
    assert found.rows == [[NASTY, "n"], [NASTY, "1.5000"], ["=cmd()", "2.0000"]]
    assert "<script" not in html_text(table)
    assert markdown_cells(markdown_text(table))[0] == [NASTY, "n"]
    assert "<script" not in markdown_text(table).replace("\\<", "")
    assert "'=cmd()" in csv_text(table)


def test_a_table_is_written_three_times(full):
    assert set(table_bytes(TABLES["stated"](full))) == {"stated.csv", "stated.md", "stated.html"}


@pytest.mark.parametrize("width", [80, 120])
def test_tables_fit_the_screen(full, width):
    for name, made in TABLES.items():
        console = Console(width=width, file=io.StringIO(), markup=False, emoji=False, highlight=False)
        console.print(table_block(made(full), width))
        assert max(map(len, console.file.getvalue().splitlines())) <= width, name


def test_an_empty_table_says_so(full):
    console = Console(width=80, file=io.StringIO())
    console.print(table_block(TABLES["margins"](replace(full, margins=())), 80))
    assert "nothing to show" in console.file.getvalue()
