"""Chapters on loads: walls by loads, flows at probes, margins."""

from __future__ import annotations

from collections.abc import Callable

from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import ProbeResult, Result, WallFlow
from crosscheck.dossier.content import Block, Chapter, Column, Figure, Paragraph, Table, Tone
from crosscheck.dossier.texts import plain_unit, share_text
from crosscheck.reports.load_tables import margins_table
from crosscheck.reports.result_table import table_text
from crosscheck.reports.screen_blocks import KIND_WORDS
from crosscheck.reports.wording import number_text

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
    if not rows:
        blocks.append(Paragraph("The file has no loads, so no load governs a wall."))
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
    named, worst = [], []
    for flow in result.flows:
        for probe in flow.probes:
            if probe.label is not None:
                named.append(_row(flow, probe, f"{probe.label} ({flow.wall})"))
        if flow.load not in UNIT_LOADS and (most := _largest(flow)) is not None:
            worst.append(_row(flow, most, flow.wall))
    blocks: list[Block] = [figure("unit_flows")]
    if named:
        blocks.append(Table("Shear flow at the named places", columns, tuple(named)))
    else:
        blocks.append(Paragraph("The file names no places on walls ([[probes]])."))
    if worst:
        blocks.append(
            Table("Shear flow of every load where FE's is largest in each wall", columns, tuple(worst))
        )
    else:
        blocks.append(
            Paragraph("No load of the file makes a flow; those of the unit loads are in the figure.")
        )
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
    text = table_text(margins_table(result))
    kinds = zip(text.columns, text.numeric, strict=True)
    columns = tuple(Column(name, "number" if numeric else "text") for name, numeric in kinds)
    tones: tuple[Tone, ...] = tuple("doubt" if row.changes_sign else "plain" for row in result.margins)
    caption = f"{text.title}; marked where it changes its sign"
    return Chapter("margins", "Margins", (Table(caption, columns, text.rows, tones),))
