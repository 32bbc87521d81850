"""Chapters that all sections of a dossier share: use, criteria, configuration, code verification, limits."""

from __future__ import annotations

import platform
from collections.abc import Sequence

from crosscheck.comparison.provenance import installed_version
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.dossier.content import (
    Block,
    Chapter,
    Column,
    Fields,
    Listing,
    Paragraph,
    Table,
    Tone,
    Verbatim,
)
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.dossier.method import method_chapter
from crosscheck.dossier.suite import SuiteEvidence
from crosscheck.dossier.texts import share_text
from crosscheck.verification.statements import COMMON_CAUSES, DOMAIN_OF_USE

WRITERS = ("typst", "jinja2")
MOST_CHECKS = 60
BAD: Tone = "bad"
KNOWN = (
    "Near a joint theory's own peak has no FE counterpart: peaks are compared at the probes of the strips.",
    "At a sharp re-entrant corner the model's stress grows without limit; no value is given there.",
    "The level corrected has no published term for some joints; it then says not available, and why.",
    "Warping constant, flows at probes and stresses are estimates and no bounds.",
    "Section moduli are for bending about x or y alone and about the principal axes.",
    "A bimoment is entered, not computed: how it comes about is for the beam model.",
)


def shared_chapters(
    evidence: Sequence[SectionEvidence], suite: SuiteEvidence | None, run_id: str, made: str, command: str
) -> tuple[Chapter, ...]:
    """Chapters in front of those of the sections."""
    return (
        _use(evidence),
        _criteria(evidence),
        method_chapter(),
        _configuration(evidence, run_id, made, command),
        _code_verification(suite),
        _limits(),
    )


def _use(evidence: Sequence[SectionEvidence]) -> Chapter:
    uses = dict.fromkeys(str(each.section.document.get("intended_use", "")) for each in evidence)
    stated = [use for use in uses if use]
    first: list[Block] = [Paragraph(use) for use in stated]
    if not stated:
        first = [Paragraph("The section file states no intended use ([document] intended_use).", "quiet")]
    return Chapter(
        "use",
        "Intended use",
        (
            *first,
            Paragraph(
                "This dossier is verification and model comparison: it shows how far the numbers of "
                "hand methods are from those of a finite-element model of the same section. It is "
                "neither test evidence nor an approval. The applicable code and a licensed engineer decide."
            ),
        ),
    )


def _criteria(evidence: Sequence[SectionEvidence]) -> Chapter:
    found: dict[tuple[str, float, str], list[str]] = {}
    for each in evidence:
        for row in each.result.quantities:
            titles = found.setdefault((row.name, row.criterion, row.criterion_source), [])
            if each.result.title not in titles:
                titles.append(each.result.title)
    several = len(evidence) > 1
    rows = []
    for (name, criterion, source), titles in found.items():
        who = "default" if source == "default" else "section file"
        where = ["all sections" if len(titles) == len(evidence) else "; ".join(titles)] if several else []
        of = "larger overall dimension" if QUANTITIES[name].axis else "normaliser"
        rows.append((QUANTITIES[name].words, share_text(criterion), of, who, *where))
    columns = [
        Column("quantity", "text", 1.5),
        Column("criterion", "number"),
        Column("of", "text", 1.0),
        Column("set by", "word"),
    ]
    if several:
        columns.append(Column("sections", "text", 1.5))
    return Chapter(
        "criteria",
        "Criteria and who set them",
        (
            Paragraph(
                "A criterion is the largest accepted difference. Those marked section file were set "
                "there by its author before the run; the others are defaults of the program, 5 % and 1 % for "
                "positions (common practice, no standard)."
            ),
            Table("Criteria", tuple(columns), tuple(rows)),
        ),
    )


def _configuration(evidence: Sequence[SectionEvidence], run_id: str, made: str, command: str) -> Chapter:
    origin = evidence[0].result.provenance
    packages = {**origin.packages, **{name: installed_version(name) for name in WRITERS}}
    rows = (
        ("Run", run_id),
        ("Made on", made),
        ("crosscheck", origin.version),
        ("Python", origin.python),
        ("Platform", f"{platform.system()} {platform.machine()}"),
        ("Accuracy asked", ", ".join(dict.fromkeys(f"{each.result.accuracy:g}" for each in evidence))),
    )
    return Chapter(
        "configuration",
        "Configuration",
        (
            Paragraph(
                "The run number follows from inputs, options and versions alone; the same ones give the same "
                "numbers. The date is the only thing here that changes from day to day."
            ),
            Fields(rows),
            Table(
                "Libraries",
                (Column("package", "text"), Column("version", "text")),
                tuple((name, version) for name, version in packages.items()),
            ),
            Verbatim(command, "Command to run again, from the folder of this package"),
        ),
    )


def _code_verification(suite: SuiteEvidence | None) -> Chapter:
    title = "Code verification"
    if suite is None:
        return Chapter(
            "code",
            title,
            (
                Paragraph(
                    "NOT ATTACHED: no evidence of the verification suite stands behind this dossier. Run "
                    "'crosscheck verify --json evidence.json' and make the dossier again with --evidence.",
                    "bad",
                    True,
                ),
            ),
        )
    groups: dict[str, list[float]] = {}
    for check in suite.checks:
        entry = groups.setdefault(check.group or "without a group", [0, 0, 0.0])
        entry[0] += 1
        entry[1] += check.passed
        if check.passed and not check.known_problem:
            entry[2] = max(entry[2], check.share or 0.0)
    failures = [check for check in suite.checks if not check.passed]
    blocks: list[Block] = [
        Paragraph(suite.words, "bad" if failures else "good", True),
        Fields(
            (
                ("Evidence", suite.name),
                ("SHA-256", suite.sha256),
                ("Made by version", suite.version),
                (
                    "Extent",
                    "everything that ships" if suite.whole and not suite.quick else "a part of the suite",
                ),
                ("Values by how they were obtained", _obtained(suite)),
                ("Known differences of references", str(sum(check.known_problem for check in suite.checks))),
            )
        ),
        Table(
            "Checks of the suite by group",
            (
                Column("group", "text", 2.0),
                Column("checks", "number"),
                Column("passed", "number"),
                Column("largest share\nof allowed", "number"),
            ),
            tuple((g, f"{n:.0f}", f"{ok:.0f}", share_text(most)) for g, (n, ok, most) in groups.items()),
            _tones(groups),
        ),
    ]
    if failures:
        blocks.append(
            Table(
                "Checks that failed",
                (Column("check", "text", 1.5), Column("side"), Column("detail", "text", 2.5)),
                tuple((c.name, c.side, c.detail) for c in failures[:MOST_CHECKS]),
                tuple(BAD for _ in failures[:MOST_CHECKS]),
            )
        )
    return Chapter("code", title, tuple(blocks))


def _obtained(suite: SuiteEvidence) -> str:
    return ", ".join(f"{way} {count}" for way, count in suite.obtained.items()) or "none"


def _tones(groups: dict[str, list[float]]) -> tuple[Tone, ...]:
    """Groups with failures stand out."""
    return tuple("plain" if count == passed else "bad" for count, passed, _ in groups.values())


def _limits() -> Chapter:
    return Chapter(
        "limits",
        "Limits of operation, known problems and common causes",
        (
            Listing(DOMAIN_OF_USE),
            Paragraph("Known problems and limits of the program:"),
            Listing(KNOWN),
            Paragraph("Common causes, about which agreement of the two sides says nothing:"),
            Listing(COMMON_CAUSES),
        ),
    )
