"""Chapters of one section, in the order of the dossier."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence

from crosscheck.comparison.result import Result
from crosscheck.dossier.assumptions import register
from crosscheck.dossier.content import (
    Block,
    Chapter,
    Column,
    Diagram,
    Figure,
    Listing,
    Paragraph,
    Table,
    Tone,
)
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.dossier.hand_sheets import sheet_blocks
from crosscheck.dossier.holding_chapter import holding_chapter
from crosscheck.dossier.input_chapters import inputs_chapter
from crosscheck.dossier.load_chapters import flows_chapter, margins_chapter, walls_by_loads_chapter
from crosscheck.dossier.opening import fe_table
from crosscheck.dossier.texts import (
    TONES,
    bare_value,
    conclusion,
    fe_error,
    interval_text,
    plain_unit,
    share_text,
    signed_text,
    unit_of,
)
from crosscheck.dossier.verification_chapters import solution_chapter, uncertainty_chapter
from crosscheck.pictures.plates import Plate, governing_load
from crosscheck.reports.screen_blocks import level_text
from crosscheck.reports.stated import STANDS, method_text, stated_difference, stated_heading, stated_name
from crosscheck.reports.wording import (
    STARRED,
    difference_text,
    effect_text,
    has_own_normaliser,
    name_of,
    number_text,
    one_row_a_family,
    verdict_sentence,
    worst_first,
)

MOST_CAUSES = 12
QUIET: Tone = "quiet"
# Differences smaller than this have no causes told [-].
LEAST_CAUSE = 5e-4

Figures = Callable[[str], Figure]


def section_chapters(
    evidence: SectionEvidence,
    plates: Mapping[str, Plate],
    key: str,
    diagram: Diagram,
    hand_sheets: Sequence[str],
) -> tuple[Chapter, ...]:
    """All chapters of a section; ``key`` makes their names unique in a dossier of several."""

    def figure(name: str) -> Figure:
        plate = plates[name]
        return Figure(
            f"{key}{name}", plate.files["svg"], f"Plate {plate.number}: {plate.message}", plate.message
        )

    chapters = (
        inputs_chapter(evidence, figure),
        _assumptions(evidence),
        solution_chapter(evidence, figure),
        _comparison(evidence.result, figure, diagram),
        _causes(evidence.result, figure),
        walls_by_loads_chapter(evidence.result, figure),
        flows_chapter(evidence.result, figure),
        _stated(evidence.result),
        holding_chapter(evidence, figure),
        uncertainty_chapter(evidence),
        margins_chapter(evidence.result),
        _warnings(evidence, figure),
        _conclusion(evidence.result),
        *_hand_sheets(evidence.result, hand_sheets),
    )
    return tuple(Chapter(f"{key}{c.key}", c.title, c.blocks, c.wide) for c in chapters)


def _assumptions(evidence: SectionEvidence) -> Chapter:
    entries = register(evidence.section, evidence.result, evidence.convergence)
    columns = (
        Column("assumption", "text", 1.2),
        Column("here", "text", 0.6),
        Column("evidence", "text", 2.2),
        Column("effect when violated", "text", 2.0),
    )
    return Chapter(
        "assumptions",
        "Register of assumptions",
        (
            Paragraph(
                "Assumed: made by both sides and not checkable from the file, so agreement says "
                "nothing about it. Holds, applies, counts: what this section shows."
            ),
            Table(
                "Assumptions, what this section says about them, and what follows when they are violated",
                columns,
                tuple((a.name, a.applies, a.evidence, a.effect) for a in entries),
            ),
        ),
    )


def _comparison(result: Result, figure: Figures, diagram: Diagram) -> Chapter:
    columns = (
        Column("verdict"),
        Column("quantity", "text", 1.6),
        Column("hand", "number"),
        Column("FE", "number"),
        Column("error", "number"),
        Column("unit"),
        Column("hand is"),
        Column("used", "number"),
        Column("factor", "number"),
        Column("effect", "text", 1.5),
    )
    judged = [row for row in worst_first(result.quantities) if row.verdict is not None]
    if not judged:
        # Without walls there is nothing to point at, and the sentence has the one reason of every row.
        pointed, told = ((), ()) if result.outline_alone else ((diagram,), _undefined(result))
        alone = (*pointed, Paragraph(verdict_sentence(result)), fe_table(result), *told)
        return Chapter("comparison", "Comparison", (*alone, figure("both_sides"), figure("criteria")))
    rows = tuple(
        (
            row.verdict or "",
            name_of(row),
            bare_value(row, row.judged_theory),
            bare_value(row, row.fe.value),
            fe_error(row),
            unit_of(row),
            difference_text(row, result.length_unit),
            share_text(row.criterion_used),
            number_text(row.factor, 4),
            effect_text(row),
        )
        for row in judged
    )
    blocks: list[Block] = [
        diagram,
        Paragraph(
            f"Every judged value at level {result.judged}, worst first. Error: half of FE's interval, "
            "± before a bound, ~ before an estimate. Used: share of the criterion that difference and "
            "FE error use together. Factor: what the hand value is multiplied by to get FE's."
        ),
        Table("Comparison of both sides", columns, rows, tuple(TONES[row.verdict] for row in judged)),
    ]
    if any(has_own_normaliser(row) for row in judged):
        blocks.append(Paragraph(STARRED, "quiet"))
    if any(row.load is None for row in judged):
        blocks.append(_levels(result))
    blocks += [*_undefined(result), figure("both_sides"), figure("criteria")]
    return Chapter("comparison", "Comparison", tuple(blocks))


def _undefined(result: Result) -> tuple[Block, ...]:
    rows = [row for row in result.quantities if row.verdict is None]
    if not rows:
        return ()
    columns = (Column("quantity", "text", 1.0), Column("reason", "text", 2.0))
    return (
        Table(
            "Not compared",
            columns,
            tuple((name_of(row), row.reason or "undefined on a side") for row in rows),
            tuple(QUIET for _ in rows),
        ),
    )


def _levels(result: Result) -> Table:
    """Every quantity of the section at every level of theory."""
    rows = [row for row in result.quantities if row.load is None and row.verdict is not None]
    columns = (
        Column("quantity", "text", 1.4),
        *(Column(f"{level}{' (judged)' if level == result.judged else ''}") for level in rows[0].theory),
    )
    return Table(
        "Levels of theory: how far each is from FE",
        columns,
        tuple(
            (name_of(row), *(level_text(row, level, result.length_unit) for level in rows[0].theory))
            for row in rows
        ),
    )


def _causes(result: Result, figure: Figures) -> Chapter:
    rows = []
    for row in worst_first(result.quantities):
        steps = [c for c in result.causes if (c.quantity, c.load) == (row.name, row.load)]
        if not steps or abs(row.judged_difference or 0.0) < LEAST_CAUSE:
            continue
        for number, step in enumerate(steps):
            rows.append(
                (
                    name_of(row) if number == 0 else "",
                    step.step,
                    signed_text(step.change),
                    share_text(step.uncertainty) if step.uncertainty else "none",
                    step.note or "",
                )
            )
        if sum(1 for entry in rows if entry[0]) >= MOST_CAUSES:
            break
    if not rows:
        judged = any(row.verdict is not None for row in result.quantities)
        words = (
            "No difference reaches 0.05 %, so no causes are told apart."
            if judged
            else "Nothing is compared here, so no difference has causes."
        )
        return Chapter("causes", "Causes of the differences", (Paragraph(words),))
    columns = (
        Column("quantity", "text", 1.2),
        Column("step", "text", 2.0),
        Column("change", "number"),
        Column("FE error", "number"),
        Column("remark", "text", 1.8),
    )
    return Chapter(
        "causes",
        "Causes of the differences",
        (
            Paragraph(
                "From theory's midline to FE as drawn one assumption changes at a time. The steps of a "
                "quantity add up to its difference; their order is fixed, and the split depends on it."
            ),
            Table("Steps of the largest differences", columns, tuple(rows)),
            figure("causes"),
        ),
    )


def _stated(result: Result) -> Chapter:
    title = "Stated values"
    if not result.stated:
        return Chapter("stated", title, (Paragraph("The section file states no values to be judged."),))
    columns = (
        Column("verdict", "text", 0.9),
        Column("quantity", "text", 1.2),
        Column("stated", "number"),
        Column("FE", "number"),
        Column("error", "number"),
        Column("unit"),
        Column("stated is", "text", 1.1),
        Column("allowed", "number"),
        Column("which hand method has it", "text", 1.4),
        Column("source", "text", 1.3),
    )
    rows = tuple(
        (
            STANDS[s.verdict].partition(":")[0],
            stated_name(s) + (f", from {s.measured_from}" if s.measured_from else ""),
            number_text(s.value),
            number_text(s.fe.value),
            interval_text(s.fe, s.fe.half_width),
            "" if s.unit == "1" else plain_unit(s.unit),
            stated_difference(result, s) or s.reason or "",
            share_text(s.tolerance),
            method_text(s),
            s.source,
        )
        for s in result.stated
    )
    heading = (stated_heading(result) or "").rstrip(":")
    bad = any(s.verdict == "outside" for s in result.stated)
    held = all(s.verdict == "within" for s in result.stated)
    return Chapter(
        "stated",
        title,
        (
            Paragraph(f"{heading}.", "bad" if bad else "good" if held else "doubt", True),
            Paragraph(
                "Numbers of other documents, judged against FE with the tolerance of the file, and "
                "against every level of theory to see where they may come from."
            ),
            Table("Stated values", columns, rows, tuple(TONES[s.verdict] for s in result.stated)),
        ),
    )


def _warnings(evidence: SectionEvidence, figure: Figures) -> Chapter:
    result = evidence.result
    items = [f"Section file: {note}" for note in result.section_notes]
    items += [f"Outline: {note}" for note in result.outline_notes]
    items += [f"Level {level}: {note}" for level, notes in result.theory_notes.items() for note in notes]
    if not result.accuracy_met:
        items.append(f"Accuracy {result.accuracy:g} was not reached: {result.accuracy_note}")
    items += [f"Budget: {note}" for note in evidence.uncertainty.notes]
    items = list(dict.fromkeys(items))
    blocks: list[Block] = (
        [Listing(tuple(items))] if items else [Paragraph("This run gave no warnings or remarks.")]
    )
    return Chapter("warnings", "Warnings and remarks of this run", tuple(blocks))


def _conclusion(result: Result) -> Chapter:
    rows = one_row_a_family(worst_first(result.quantities))
    blocks = tuple(
        Paragraph(conclusion(row, result.length_unit), TONES[row.verdict], row.verdict == "outside")
        for row in rows
    )
    note = (Paragraph(STARRED, "quiet"),) if any("*" in block.text for block in blocks) else ()
    return Chapter("conclusion", "Conclusion, one sentence for every quantity", (*blocks, *note))


def _hand_sheets(result: Result, asked: Sequence[str]) -> Iterator[Chapter]:
    """The hand sheets asked for, or that of the load that governs most walls, a chapter each."""
    working = result.working or {}
    governing, _ = governing_load(result)
    chosen = [load for load in working if load in asked]
    if not chosen:
        chosen = [load for load in working if load == governing] or list(working)[:1]
    for number, load in enumerate(chosen, start=1):
        blocks = sheet_blocks(working[load])
        yield Chapter(f"working{number}", f"Hand sheet, {load}", tuple(blocks[1:]), wide=True)
    if not chosen:
        yield Chapter("working", "Hand sheets", (Paragraph("No load has a hand calculation."),))
