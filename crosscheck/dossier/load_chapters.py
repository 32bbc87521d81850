"""Chapters on loads: walls by loads, flows at probes, margins."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from crosscheck.comparison.load_results import Margin
from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import ProbeResult, Result, WallFlow
from crosscheck.dossier.content import Block, Chapter, Column, Figure, Paragraph, Table, Tone
from crosscheck.dossier.texts import plain_unit, share_text
from crosscheck.reports.load_tables import margins_table, places_table, walls_table
from crosscheck.reports.result_table import ResultTable, table_text
from crosscheck.reports.screen_blocks import KIND_WORDS
from crosscheck.reports.wording import number_text

# Rows of the walls by loads that paper has; all are in the result.
MOST_ROWS = 30
Figures = Callable[[str], Figure]


def walls_by_loads_chapter(result: Result, figure: Figures) -> Chapter:
    """Governing loads of every wall, and how far flows are off, wall by wall and load by load."""
    title = "Walls by loads"
    blocks: list[Block] = [figure("walls_by_loads"), figure("governing_load")]
    rows: list[tuple[str, ...]] = []
    tones: list[Tone] = []
    for entry in result.wall_envelopes:
        if entry.theory is None or entry.fe is None:
            continue
        same = entry.theory.load == entry.fe.load
        rows.append(
            (
                KIND_WORDS.get(entry.kind, entry.kind),
                entry.wall,
                number_text(entry.theory.value),
                entry.theory.load,
                number_text(entry.fe.value),
                entry.fe.load,
                plain_unit(entry.unit),
                share_text(None if entry.difference is None else abs(entry.difference)),
            )
        )
        tones.append("plain" if same else "doubt")
    if result.walls_by_loads:
        blocks.append(block_of(walls_table(result), MOST_ROWS))
    if not rows:
        words = "No load has a flow that both sides report, so none governs a wall."
        blocks.append(Paragraph(words))
        return Chapter("walls", title, tuple(blocks))
    columns = (
        Column("kind"),
        Column("wall", "text", 1.2),
        Column("hand", "number"),
        Column("of load", "text", 1.0),
        Column("FE", "number"),
        Column("of load", "text", 1.0),
        Column("unit"),
        Column("apart", "number"),
    )
    caption = "Largest over all loads at the probes; marked where the sides name different loads"
    blocks.append(Table(caption, columns, tuple(rows), tuple(tones)))
    return Chapter("walls", title, tuple(blocks))


def flows_chapter(result: Result, figure: Figures) -> Chapter:
    """Flows of every load at the named probes, and the worst probe of every wall."""
    columns = (
        Column("load", "text", 1.0),
        Column("place", "text", 1.2),
        Column("s", "number"),
        Column("hand", "number"),
        Column("FE", "number"),
        Column("FE error", "number"),
        Column("unit"),
    )
    unit, worst = [], []
    alone: dict[str, None] = {}
    for flow in result.flows:
        for probe in flow.probes:
            if probe.label is not None and flow.load in UNIT_LOADS:
                unit.append(_row(flow, probe, f"{probe.label} ({flow.wall})"))
        if flow.load not in UNIT_LOADS and (most := _largest(flow)) is not None:
            if most.theory is None:
                alone[flow.wall] = None
                continue
            worst.append(_row(flow, most, flow.wall))
    blocks: list[Block] = [figure("unit_flows")]
    if result.named_probes:
        blocks.append(block_of(places_table(result)))
    if unit:
        blocks.append(Table("Shear flow of the unit loads at the named places", columns, tuple(unit)))
    else:
        blocks.append(Paragraph("The file names no places on walls ([[probes]])."))
    if worst:
        blocks.append(
            Table("Shear flow of every load where FE's is largest in each wall", columns, tuple(worst))
        )
    else:
        blocks.append(Paragraph("No load of the file has a flow that both sides report."))
    if alone:
        words = f"Flows of {len(alone)} walls that only FE sees are in result.json."
        blocks.append(Paragraph(words, "quiet"))
    return Chapter("flows", "Shear flows at probes", tuple(blocks))


def _largest(flow: WallFlow) -> ProbeResult | None:
    known = [probe for probe in flow.probes if probe.fe is not None]
    return max(known, key=lambda probe: abs(probe.fe or 0.0), default=None)


def _row(flow: WallFlow, probe: ProbeResult, place: str) -> tuple[str, ...]:
    return (
        flow.load,
        place,
        number_text(probe.s, 4),
        number_text(probe.theory),
        number_text(probe.fe),
        number_text(probe.fe_error, 2),
        plain_unit(flow.unit),
    )


def margins_chapter(result: Result) -> Chapter:
    """Margins against the allowables of the file."""
    if not result.margins:
        words = "The section file gives no allowables, so no margins are formed."
        return Chapter("margins", "Margins", (Paragraph(words),))
    tones: tuple[Tone, ...] = tuple(
        "bad" if _negative(row) else "doubt" if row.changes_sign else "plain" for row in result.margins
    )
    table = replace(block_of(margins_table(result)), tones=tones)
    words = "A negative margin is marked; so is one whose sign depends on the side."
    return Chapter("margins", "Margins", (Paragraph(words), table))


def _negative(row: Margin) -> bool:
    """Whether both sides find the wall too weak."""
    return row.theory is not None and row.fe is not None and row.theory < 0.0 and row.fe < 0.0


def block_of(table: ResultTable, most: int | None = None) -> Table:
    """A table of the result as a block: the columns that a page has room for, the first rows of many."""
    text = table_text(table)
    kinds = zip(text.columns, text.numeric, strict=True)
    columns = tuple(Column(name, "number" if numeric else "text") for name, numeric in kinds)
    count = len(text.rows)
    rows = tuple(tuple(plain_unit(cell) for cell in row) for row in text.rows[:most])
    told = f"; the first {most} of {count}, all in result.json" if most is not None and count > most else ""
    return Table(f"{text.title}{told}", columns, rows)
