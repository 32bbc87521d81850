"""From the evidence of every section to the document: a pure function of what was gathered."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping, Sequence

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import Result
from crosscheck.dossier.content import Dossier, Part
from crosscheck.dossier.convergence import FOLLOWED, Convergence
from crosscheck.dossier.diagram import section_diagram
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.dossier.opening import changes, document_title, front_fields, outcome
from crosscheck.dossier.section_chapters import section_chapters
from crosscheck.dossier.shared_chapters import shared_chapters
from crosscheck.dossier.suite import SuiteEvidence
from crosscheck.faults import one_line
from crosscheck.pictures.holding import Curve
from crosscheck.pictures.intervals import Line
from crosscheck.pictures.plates import Extras, Plate
from crosscheck.pictures.shares import Share
from crosscheck.reports.wording import name_of, one_row_a_family, worst_first

NOTICE = (
    "Verification and model comparison: neither test evidence nor an approval. The applicable code and a "
    "licensed engineer decide."
)
NOT_ATTACHED = "No evidence of the verification suite is attached to this dossier."


def run_id(evidence: Sequence[SectionEvidence], suite: SuiteEvidence | None) -> str:
    """Twelve digits that follow from inputs, options and versions alone."""
    parts = {
        "sections": [
            {
                "files": {name: hashlib.sha256(data).hexdigest() for name, data in each.files.items()},
                "overrides": dict(each.section.overrides),
                "accuracy": each.result.accuracy,
                "version": each.result.provenance.version,
                "packages": dict(each.result.provenance.packages),
                "python": each.result.provenance.python,
            }
            for each in evidence
        ],
        "suite": None if suite is None else suite.sha256,
    }
    return hashlib.sha256(json.dumps(parts, sort_keys=True).encode()).hexdigest()[:12]


def plate_extras(evidence: SectionEvidence, suite: SuiteEvidence | None) -> Extras:
    """What the plates show beside the result."""
    return Extras(
        intervals=interval_lines(evidence.result, evidence.convergence),
        corner_order=evidence.convergence.corner_order,
        suite=[]
        if suite is None
        else [Share(c.name, c.share, c.passed) for c in suite.checks if c.share is not None],
        suite_words=NOT_ATTACHED if suite is None else suite.words,
        factors=() if evidence.holding is None else evidence.holding.factors,
        curves=holding_curves(evidence),
        holding_words=holding_words(evidence),
    )


def holding_words(evidence: SectionEvidence) -> str:
    """How far the hand method reaches around this section, in a sentence."""
    found = evidence.holding
    if found is None:
        return "The solid is given by its outline, so its thicknesses were not varied."
    used = [[track.used[i] for track in found.tracks] for i in range(len(found.factors))]
    held = [
        factor
        for factor, values in zip(found.factors, used, strict=True)
        if any(v is not None for v in values) and all(v is None or v <= 1.0 for v in values)
    ]
    if not held:
        return "At no thickness solved do the hand methods hold for every quantity."
    if len(held) == len(found.factors):
        return f"Hand methods hold for every quantity at {held[0]:.3g} to {held[-1]:.3g} times the thickness."
    told = ", ".join(f"{factor:.3g}" for factor in held)
    return (
        f"Of the thicknesses solved, hand methods hold for every quantity at {told} times that of the file."
    )


def holding_curves(evidence: SectionEvidence) -> list[Curve]:
    """One row of each family over the factors of thickness, those that use most of their criterion first."""
    found = evidence.holding
    if found is None:
        return []
    told = one_row_a_family(worst_first(evidence.result.quantities))
    tracks = {(track.quantity, track.load): track.used for track in found.tracks}
    rows = [row for row in told if row.verdict is not None]
    curves = [Curve(one_line(name_of(row), 34), tracks[row.name, row.load]) for row in rows]
    return sorted(
        curves, key=lambda curve: -max((used for used in curve.used if used is not None), default=0.0)
    )


def interval_lines(result: Result, convergence: Convergence) -> list[Line]:
    """Half intervals of the followed quantities, over their normalisers."""
    lines = []
    for name in FOLLOWED:
        row = result.quantity(name)
        if row.fe.value is None or not row.normaliser:
            continue
        runs = [run for run in convergence.runs if run.values[name].half_width is not None]
        halves = tuple((run.values[name].half_width or 0.0) / row.normaliser for run in runs)
        unknowns = tuple(run.unknowns for run in runs)
        lines.append(Line(QUANTITIES[name].words, unknowns, halves, row.fe.basis))
    return lines


def compose(
    evidence: Sequence[SectionEvidence],
    plates: Sequence[Mapping[str, Plate]],
    suite: SuiteEvidence | None,
    made: str,
    command: str,
    hand_sheets: Sequence[str] = (),
) -> Dossier:
    """The document.

    Parameters
    ----------
    evidence : sequence
        One entry a section.
    plates : sequence of mapping
        Plates of each section by name.
    suite : SuiteEvidence, optional
        Stored evidence of the suite.
    made : str
        Day on which it was made.
    command : str
        Command that makes it again.
    hand_sheets : sequence of str
        Loads whose hand sheets are wanted; none: the load that governs most walls.
    """
    number = run_id(evidence, suite)
    several = len(evidence) > 1
    parts = [Part("shared", "", shared_chapters(evidence, suite, number, made, command))]
    for at, (each, own) in enumerate(zip(evidence, plates, strict=True), start=1):
        key = f"s{at}-" if several else ""
        title = f"Section {at}: {each.result.title}" if several else ""
        chapters = section_chapters(each, own, key, section_diagram(each.result, key), hand_sheets)
        parts.append(Part(f"s{at}", title, chapters))
    return Dossier(
        title=document_title(evidence),
        run_id=number,
        made=made,
        fields=front_fields(evidence),
        outcome=outcome(evidence),
        changes=changes(evidence),
        parts=tuple(parts),
        notice=NOTICE,
        keywords=("thin-walled section", "verification", f"run {number}"),
    )
