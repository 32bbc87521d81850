"""The chapter on the reach of the hand method around a section."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Callable

from crosscheck.dossier.content import Block, Chapter, Column, Figure, Paragraph, Table, Tone
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.reports.wording import name_of

STANDING_ORDER = ("outside", "at the edge", "inside")


def holding_chapter(evidence: SectionEvidence, figure: Callable[[str], Figure]) -> Chapter:
    """The reach of the hand method around this section, and where each quantity crosses its criterion."""
    title = "Where the hand method stops holding"
    found = evidence.holding
    if found is None:
        words = "The solid is given by its outline, so its thicknesses were not varied."
        return Chapter("holding", title, (Paragraph(words), figure("holding")))
    names = {(row.name, row.load): name_of(row) for row in evidence.result.quantities}
    blocks: list[Block] = [
        Paragraph(
            "All thicknesses of the section were multiplied by one factor, and the section solved "
            "again on both sides. Between two factors the place of a crossing is interpolated, an estimate."
            + (" Booms keep their areas." if evidence.section.booms else "")
        ),
        figure("holding"),
    ]
    if found.crossings:
        columns = (
            Column("quantity", "text", 1.6),
            Column("crosses between", "word"),
            Column("about", "number"),
            Column("holds", "word"),
        )
        rows = tuple(
            (
                names[c.quantity, c.load],
                f"{c.low:.3g} and {c.high:.3g}",
                f"{c.about:.2g}",
                "below" if c.within_below else "above",
            )
            for c in sorted(found.crossings, key=lambda c: abs(math.log(c.about)))
        )
        caption = "Factors on all thicknesses at which a quantity crosses its criterion, nearest first"
        blocks.append(Table(caption, columns, rows))
    else:
        blocks.append(Paragraph("No quantity crosses its criterion within the factors solved."))
    blocks += [
        Paragraph(f"At {factor:.3g} times the thickness there is no comparison: {reason}", "doubt")
        for factor, reason in zip(found.factors, found.reasons, strict=True)
        if reason
    ]
    return Chapter("holding", title, (*blocks, *_standings(evidence)))


def _standings(evidence: SectionEvidence) -> tuple[Block, ...]:
    """Where the section stands to the envelope given with the run."""
    if evidence.standings is None:
        return (
            Paragraph("No envelope of a family of sections was given with this run (--envelope).", "quiet"),
        )
    names = {(row.name, row.load): name_of(row) for row in evidence.result.quantities}
    columns = (Column("standing", "word"), Column("quantity", "text", 1.0), Column("reason", "text", 2.2))
    told = [each for each in evidence.standings if each.word != "not covered"]
    told.sort(key=lambda each: STANDING_ORDER.index(each.word))
    tones: dict[str, Tone] = {"outside": "bad", "at the edge": "doubt"}
    blocks: list[Block] = []
    if told:
        blocks.append(
            Table(
                "Standing of this section to the envelope attached to the package",
                columns,
                tuple((each.word, names[each.name, each.load], each.reason) for each in told),
                tuple(tones.get(each.word, "plain") for each in told),
            )
        )
    reasons = Counter(each.reason for each in evidence.standings if each.word == "not covered")
    for reason, count in reasons.items():
        words = f"Not covered by the envelope attached to the package, {count} quantities: {reason}."
        blocks.append(Paragraph(words, "doubt"))
    return tuple(blocks)
