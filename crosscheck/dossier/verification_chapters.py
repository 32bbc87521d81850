"""Chapters on the numbers' own error: solution verification, and the uncertainty budget."""

from __future__ import annotations

import math
from collections.abc import Callable

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import Result
from crosscheck.dossier.content import (
    Block,
    Chapter,
    Column,
    Equation,
    Figure,
    Heading,
    Paragraph,
    Table,
    Tone,
)
from crosscheck.dossier.convergence import FOLLOWED, Index
from crosscheck.dossier.evidence import SectionEvidence
from crosscheck.dossier.texts import TONES, interval_text, plain_unit, share_text
from crosscheck.dossier.uncertainty import Budget
from crosscheck.reports.wording import name_of, number_text, one_row_a_family, worst_first

NOTHING_JUDGED = (
    "Nothing is judged here, so no difference has a budget; FE's own error stands beside its values in the "
    "comparison."
)
SHORT = {"thickness": "thickness", "dimension": "dimensions", "material": "material"}


def solution_chapter(evidence: SectionEvidence, figure: Callable[[str], Figure]) -> Chapter:
    """Intervals against unknowns, orders, index, residuals and equilibrium."""
    convergence, result = evidence.convergence, evidence.result
    if convergence.corner_order is None:
        corner = "The outline has no sharp re-entrant corner, which would limit the order on uniform meshes."
    else:
        corner = (
            f"The sharpest re-entrant corner has {math.degrees(convergence.corner_angle or 0.0):.0f} degrees "
            f"of solid. On uniform meshes it limits the order of energies to 2π/α = "
            f"{convergence.corner_order:.2f} in the mesh size h; meshes graded towards the corner may "
            "do better."
        )
    blocks: list[Block] = [
        Paragraph(
            "The section was solved for accuracies from 1e-3 to 1e-7; several accuracies may be "
            f"answered by one mesh. With N unknowns the mesh size goes as 1/√N. {corner}"
        ),
        figure("numerical_error"),
        _runs(evidence),
        Heading("Grid convergence index"),
        Equation("index"),
        Paragraph(
            "f_1 is the value on the finest mesh of one element order, f_2 that on the next, N their "
            "unknowns, p the order: observed with F_s = 1.25 where three meshes show it (at most twice the "
            "element's order), else the order that the sharpest corner allows, or two without corners, with "
            "F_s = 3. P. J. Roache, Verification and "
            "Validation in Computational Science and Engineering, 1998; ASME V&V 20, 2009, with the "
            "effective ratio r for meshes that are not similar. The interval of the run at hand, where "
            "it is a bound, is the stronger statement."
        ),
        _indices(evidence),
        Heading("Residuals and equilibrium"),
        _checks(result),
    ]
    return Chapter("solution", "Solution verification", tuple(blocks))


def _runs(evidence: SectionEvidence) -> Table:
    """A mesh a row: half intervals of the followed quantities."""
    result = evidence.result
    names = [name for name in FOLLOWED if result.quantity(name).fe.value is not None]
    columns = (
        Column("accuracies asked", "text", 1.2),
        Column("order", "number"),
        Column("unknowns", "number"),
        *(Column(f"{QUANTITIES[n].symbol} [{plain_unit(result.quantity(n).unit)}]", "number") for n in names),
    )
    rows = tuple(
        (
            ", ".join(f"{a:g}" for a in run.accuracies),
            str(run.order),
            f"{run.unknowns:,}",
            *(interval_text(run.values[name], run.values[name].half_width) for name in names),
        )
        for run in evidence.convergence.runs
    )
    return Table("Half of FE's interval on every mesh (± bound, ~ estimate)", columns, rows)


def _indices(evidence: SectionEvidence) -> Table:
    columns = (
        Column("quantity", "text", 1.2),
        Column("order of\ninterval", "number"),
        Column("order p", "number"),
        Column("r", "number"),
        Column("F_s", "number"),
        Column("meshes", "number"),
        Column("GCI", "number"),
        Column("remark", "text", 1.4),
    )
    cornered = evidence.convergence.corner_order is not None
    return Table(
        "Orders in h and index, over each normaliser",
        columns,
        tuple(_index(index, cornered) for index in evidence.convergence.indices),
    )


def _index(index: Index, cornered: bool) -> tuple[str, ...]:
    assumed = "order that the corner allows, not observed" if cornered else "order two assumed, not observed"
    remark = index.reason or ("order observed" if index.grids == 3 else assumed)
    return (
        QUANTITIES[index.quantity].words,
        number_text(index.interval_order, 2),
        number_text(index.order, 3),
        number_text(index.ratio, 3),
        number_text(index.factor, 3),
        str(index.grids),
        share_text(index.index),
        remark,
    )


def _checks(result: Result) -> Table:
    columns = (
        Column("self-check", "text", 3.0),
        Column("found", "number"),
        Column("allowed", "number"),
        Column("passed"),
    )
    rows = tuple(
        (check.name, f"{check.value:.2g}", f"{check.allowed:.2g}", "yes" if check.passed else "NO")
        for check in result.checks
    )
    tones: tuple[Tone, ...] = tuple("plain" if check.passed else "bad" for check in result.checks)
    return Table("Self-checks of this run, both sides", columns, rows, tones)


def uncertainty_chapter(evidence: SectionEvidence) -> Chapter:
    """The budget row by row, and both verdicts."""
    found, result = evidence.uncertainty, evidence.result
    if not found.budgets:
        return Chapter("uncertainty", "Uncertainty budget", (Paragraph(NOTHING_JUDGED),))
    budgets = {(b.quantity, b.load): b for b in found.budgets}
    rows = [
        row for row in one_row_a_family(worst_first(result.quantities)) if (row.name, row.load) in budgets
    ]
    stated = [f"{SHORT[name]} ±{_size(name, value, result)}" for name, value in found.tolerances.items()]
    missing = [SHORT[name] for name in SHORT if name not in found.tolerances]
    told = f"Tolerances of the file: {', '.join(stated)}. " if stated else ""
    if missing:
        told += f"Not stated in the file, so not in the budget: {', '.join(missing)}. "
    columns = (
        Column("quantity", "text", 1.5),
        Column("difference", "number"),
        Column("numerical", "number"),
        Column("curves", "number"),
        Column("thickness", "number"),
        Column("dimensions", "number"),
        Column("material", "number"),
        Column("model\nform: nu", "number"),
        Column("total", "number"),
        Column("verdict,\nnumerical", "word"),
        Column("verdict,\ntotal", "word"),
        Column("value\nmoves", "number"),
    )
    cells = tuple(
        _budget_row(name_of(row), row.judged_difference, budgets[row.name, row.load]) for row in rows
    )
    tones = tuple(TONES[budgets[row.name, row.load].total_verdict] for row in rows)
    notes = [Paragraph(f"{note[0].upper()}{note[1:]}.", "doubt") for note in found.notes]
    return Chapter(
        "uncertainty",
        "Uncertainty budget",
        (
            Paragraph(
                f"{told}{_solved(found.runs)}Both sides take the same part, so what counts for a "
                "verdict is how far a tolerance moves the difference; the last column has how far all "
                "tolerances together move FE's value itself."
            ),
            Paragraph(
                "Numerical: half of FE's interval. Curves: error of the outline's area where curved "
                "sides are interpolated. Model form: what Poisson's ratio changes on the FE side, "
                "which theory does not know; the rest of the model form (see the register of "
                "assumptions) is shared by both sides and is not quantified here. Shares are limits "
                "and no standard deviations: they are added up."
            ),
            *notes,
            Table(
                "Uncertainty of each difference over its normaliser, and the verdict with it",
                columns,
                cells,
                tones,
            ),
        ),
    )


def _solved(runs: int) -> str:
    if runs == 0:
        return "Without tolerances in the file nothing was solved again. "
    return (
        f"The section was solved {runs} more times on both sides, at the ends of its tolerances: all "
        "thicknesses together, overall width and height one after the other, moduli of each material "
        "but the base. "
    )


def _size(name: str, value: float, result: Result) -> str:
    return f"{number_text(value, 3)} {result.length_unit}" if name == "dimension" else share_text(value)


def _budget_row(name: str, difference: float | None, budget: Budget) -> tuple[str, ...]:
    moves = [value for value in budget.moves.values() if value is not None]
    return (
        name,
        share_text(None if difference is None else abs(difference)),
        share_text(budget.numerical),
        share_text(budget.curves),
        *(share_text(budget.shares[source]) for source in SHORT),
        share_text(budget.poisson),
        share_text(budget.total),
        budget.verdict,
        budget.total_verdict,
        share_text(sum(moves) if moves else None),
    )
