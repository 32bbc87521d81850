"""Title page and outcome: what a reviewer sees first, failures as visible as success."""

from __future__ import annotations

from collections.abc import Sequence

from crosscheck.comparison.result import Result
from crosscheck.dossier.content import Block, Column, Paragraph, Table
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.dossier.texts import TONES, bare_value, fe_error, share_text, unit_of
from crosscheck.reports.stated import stated_heading, stated_lines
from crosscheck.reports.wording import (
    STARRED,
    difference_text,
    effect_text,
    name_of,
    one_row_a_family,
    verdict_sentence,
    worst_first,
)

# Label of every field of the front matter, in order.
FIELDS = {
    "number": "Document number",
    "issue": "Issue",
    "date": "Date",
    "part": "Part",
    "drawing": "Drawing",
    "requirement": "Requirement",
    "prepared": "Prepared",
    "checked": "Checked",
    "approved": "Approved",
    "authorised": "Authorised",
}
MOST_FAILURES = 12
NEAREST = 5


def front_fields(evidence: Sequence[SectionEvidence]) -> tuple[tuple[str, str], ...]:
    """Fields of the title page; where sections name different values all are shown."""
    rows = []
    for key, label in FIELDS.items():
        values = [str(each.section.document.get(key, "")) for each in evidence]
        rows.append((label, "; ".join(dict.fromkeys(value for value in values if value))))
    return tuple(rows)


def changes(evidence: Sequence[SectionEvidence]) -> tuple[tuple[str, str, str], ...]:
    """Change log: issue, date and text of each entry, every entry once."""
    found: dict[tuple[str, str, str], None] = {}
    for each in evidence:
        for entry in each.section.document.get("changes", ()):
            issue, date, text = (str(entry.get(key, "")) for key in ("issue", "date", "text"))
            found[(issue, date, text)] = None
    return tuple(found)


def document_title(evidence: Sequence[SectionEvidence]) -> str:
    """Title of the document: that of its section, or how many there are."""
    if len(evidence) == 1:
        return evidence[0].result.title
    return f"{len(evidence)} sections"


def outcome(evidence: Sequence[SectionEvidence]) -> tuple[Block, ...]:
    """The first page: the verdict in a sentence and what failed, or a matrix of several sections."""
    if len(evidence) == 1:
        return _of_one(evidence[0])
    return (_sentence_of_all(evidence), _matrix(evidence), *_sentences(evidence))


def failed(result: Result) -> bool:
    """Whether a verdict is not within, of a stated value too, or a check failed."""
    verdicts = [row.verdict for row in result.quantities] + [stated.verdict for stated in result.stated]
    held = all(verdict in ("within", None) for verdict in verdicts)
    return not (held and all(check.passed for check in result.checks))


def counts(result: Result) -> tuple[int, int, int, int]:
    """Rows outside, inconclusive, within, and self-checks that failed."""
    verdicts = [row.verdict for row in result.quantities]
    bad = sum(not check.passed for check in result.checks)
    return verdicts.count("outside"), verdicts.count("inconclusive"), verdicts.count("within"), bad


def _of_one(evidence: SectionEvidence) -> tuple[Block, ...]:
    result = evidence.result
    outside, undecided, within, bad = counts(result)
    passed = f"Self-checks: {len(result.checks) - bad} of {len(result.checks)} passed."
    judged = outside + undecided + within
    changed = sum(b.verdict != b.total_verdict for b in evidence.uncertainty.budgets)
    blocks: list[Block] = [
        Paragraph(
            verdict_sentence(result),
            "bad" if outside or bad else "doubt" if undecided or not judged else "good",
            strong=True,
        ),
        Paragraph(
            f"Of {judged} judged values, each of a kind counted, {within} are within their criterion, "
            f"{outside} outside, {undecided} inconclusive. {passed} {_total_words(changed)}"
            if judged
            else f"Nothing is judged. {passed}"
        ),
    ]
    blocks += [
        Paragraph(f"Stated: {line}", "bad" if verdict == "outside" else "doubt")
        for line, verdict in stated_lines(result)
        if verdict != "within"
    ]
    if result.stated and all(stated.verdict == "within" for stated in result.stated):
        blocks.append(Paragraph((stated_heading(result) or "").rstrip(":") + ".", "good"))
    table = nearest_table(result) if judged else fe_table(result)
    blocks.append(table)
    if any(str(cell).endswith("*") for row in table.rows for cell in row):
        blocks.append(Paragraph(STARRED, "quiet"))
    blocks += [
        Paragraph(
            f"Self-check failed: {check.name}, {check.value:.3g}, allowed {check.allowed:.3g}.", "bad", True
        )
        for check in result.checks
        if not check.passed
    ]
    return tuple(blocks)


def _total_words(changed: int) -> str:
    told = {0: "no verdict changes", 1: "one verdict changes"}.get(changed, f"{changed} verdicts change")
    return f"With the total uncertainty of the budget in place of the numerical one, {told}."


def nearest_table(result: Result) -> Table:
    """Rows that are not within, the worst of each family; where all are, those nearest to their criterion."""
    judged = [row for row in one_row_a_family(worst_first(result.quantities)) if row.verdict is not None]
    rows = [row for row in judged if row.verdict != "within"]
    heading = "Not within the criterion, the worst of each kind" if rows else "Nearest to their criterion"
    rows = rows or judged[:NEAREST]
    columns = (
        Column("verdict"),
        Column("quantity", "text", 1.4),
        Column("hand", "number"),
        Column("FE", "number"),
        Column("error", "number"),
        Column("unit"),
        Column("hand is"),
        Column("criterion", "number"),
        Column("effect", "text", 1.6),
    )
    more = f" The worst {MOST_FAILURES} of {len(rows)}." if len(rows) > MOST_FAILURES else ""
    cells = tuple(
        (
            row.verdict or "",
            name_of(row),
            bare_value(row, row.judged_theory),
            bare_value(row, row.fe.value),
            fe_error(row),
            unit_of(row),
            difference_text(row, result.length_unit),
            share_text(row.criterion),
            effect_text(row),
        )
        for row in rows[:MOST_FAILURES]
    )
    tones = tuple(TONES[row.verdict] for row in rows[:MOST_FAILURES])
    return Table(f"{heading}.{more}", columns, cells, tones)


def fe_table(result: Result) -> Table:
    """FE's values with their error, where there is nothing to compare them with."""
    columns = (
        Column("quantity", "text", 1.4),
        Column("FE", "number"),
        Column("error", "number"),
        Column("unit"),
        Column("basis", "text", 1.4),
    )
    rows = tuple(
        (name_of(row), bare_value(row, row.fe.value), fe_error(row), unit_of(row), row.fe.basis)
        for row in result.quantities
        if row.fe.value is not None
    )
    return Table("FE's values and half of their intervals (± bound, ~ estimate)", columns, rows)


def _sentence_of_all(evidence: Sequence[SectionEvidence]) -> Paragraph:
    bad = [each.result.title for each in evidence if failed(each.result)]
    alone = [each.result.title for each in evidence if each.result.outline_alone]
    beside = f" No hand method to judge: {'; '.join(alone)}." if alone else ""
    if bad:
        words = (
            f"Hand methods do not hold throughout for {len(bad)} of {len(evidence)} sections: "
            f"{'; '.join(bad)}."
        )
        return Paragraph(words + beside, "bad", True)
    compared = len(evidence) - len(alone)
    words = f"Hand methods hold for every quantity compared, of {compared} of {len(evidence)} sections."
    return Paragraph(words + beside, "doubt" if alone else "good", True)


def _matrix(evidence: Sequence[SectionEvidence]) -> Table:
    """Sections down, counts and the worst row across."""
    columns = (
        Column("section", "text", 1.3),
        Column("within", "number"),
        Column("outside", "number"),
        Column("inconclusive", "number"),
        Column("checks failed", "number"),
        Column("with total uncertainty", "text", 1.0),
        Column("worst", "text", 1.8),
    )
    rows, tones = [], []
    for each in evidence:
        outside, undecided, within, bad = counts(each.result)
        worst = next(row for row in worst_first(each.result.quantities))
        changed = sum(b.verdict != b.total_verdict for b in each.uncertainty.budgets)
        rows.append(
            (
                each.result.title, str(within), str(outside), str(undecided), str(bad),
                {0: "no verdict changes", 1: "1 verdict changes"}.get(changed, f"{changed} verdicts change"),
                f"{name_of(worst)}: {difference_text(worst, each.result.length_unit)}"
                if worst.verdict is not None
                else "nothing compared",
            )
        )  # fmt: skip
        tones.append(TONES["outside" if outside or bad else "inconclusive" if undecided else "within"])
    return Table("Summary of all sections, judged values by verdict", columns, tuple(rows), tuple(tones))


def _sentences(evidence: Sequence[SectionEvidence]) -> tuple[Paragraph, ...]:
    return tuple(
        Paragraph(
            f"{each.result.title}: {verdict_sentence(each.result)}", "bad" if failed(each.result) else "plain"
        )
        for each in evidence
    )
