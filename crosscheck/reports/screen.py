"""The first screen of a comparison: the verdict in a sentence, then one row a quantity, worst first."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from rich.console import Console, Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from crosscheck.comparison.flow_comparison import NO_FLOW_REASON as NO_FLOW
from crosscheck.comparison.result import FeValue, QuantityResult, Result, Verdict
from crosscheck.faults import one_line
from crosscheck.reports.result_table import ResultTable
from crosscheck.reports.screen_blocks import (
    cause_lines,
    curved_boundary_lines,
    governing_lines,
    level_lines,
    levels_block,
    margin_lines,
    model_lines,
    poisson_line,
    probe_lines,
    restrained_line,
    table_block,
    wall_line,
)
from crosscheck.reports.stated import stated_heading, stated_lines
from crosscheck.reports.wording import (
    FE_ASSUMPTIONS,
    FEW_LOADS,
    SAFETY,
    SHARED_ASSUMPTIONS,
    STARRED,
    UNDECIDED,
    criteria_note,
    difference_text,
    error_mark,
    error_text,
    has_own_normaliser,
    name_of,
    number_text,
    one_row_a_family,
    percent_text,
    value_text,
    verdict_sentence,
    worst_first,
)

WIDE = 120
# Factors to use told at most; one more is told rather than counted.
SHOWN_FACTORS = 6
ROWS_SHOWN = 22
BAR = 8
FE_WIDTH = 15
STYLES: dict[Verdict | None, str] = {
    "outside": "bold red",
    "inconclusive": "bold yellow",
    "within": "green",
    None: "dim",
}


def first_screen(
    result: Result,
    width: int = 80,
    *,
    unicode: bool = True,
    pictures: str | None = None,
    tables: Sequence[ResultTable] = (),
) -> RenderableType:
    """What the terminal shows of a result.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width : int
        Columns; below 120 the bar and the column of verdicts go (the rows stand under their verdict instead).
    unicode : bool
        False where the stream has no block characters or plus-minus sign.
    pictures : str or None
        Where the pictures are.
    tables : sequence of ResultTable
        Shown below.

    Returns
    -------
    RenderableType
        For :meth:`rich.console.Console.print`.
    """
    rows = one_row_a_family(worst_first(result.quantities))
    judged = [row for row in rows if row.verdict is not None]
    shown = judged[:ROWS_SHOWN] + [row for row in judged[ROWS_SHOWN:] if row.verdict != "within"]
    folded = [row for row in judged[ROWS_SHOWN:] if row.verdict == "within"]
    parts: list[RenderableType] = [_title(result, width), _sentence(result)]
    heading = stated_heading(result)
    if heading is not None:
        parts.append(Text(heading))
        parts += [
            Padding(Text(line, style=STYLES[verdict]), (0, 0, 0, 2))
            for line, verdict in stated_lines(result, unicode=unicode)
        ]
    parts.append(Text())
    if result.outline_alone:
        parts.append(_fe_table(result, unicode))
        parts.append(Text())
        parts += [Text(line, style=style) for line, style in _notes(result, [], unicode, pictures)]
        return Group(*parts, *(table_block(table, width) for table in tables))
    if width >= WIDE:
        parts.append(_table(shown, result, wide=True, unicode=unicode))
    else:
        parts += _groups(shown, judged, result, unicode)
    if folded:
        parts.append(Text(_folded_line(folded), style="dim"))
    parts += _null_lines([row for row in rows if row.verdict is None])
    levels = levels_block(result)
    parts += [] if levels is None else [Text(), levels]
    parts.append(Text())
    parts += [Text(line, style=style) for line, style in _notes(result, rows, unicode, pictures)]
    return Group(*parts, *(table_block(table, width) for table in tables))


def console_for(console: Console) -> tuple[int, bool]:
    """Width of a console and whether its encoding has the block and plus-minus characters."""
    try:
        "█░▶±".encode(console.encoding)
    except (UnicodeEncodeError, LookupError):
        return console.width, False
    return console.width, True


def _title(result: Result, width: int) -> RenderableType:
    """Title on the left, units on the right."""
    grid = Table.grid(expand=False, padding=(0, 2, 0, 0))
    grid.width = width
    grid.add_column(ratio=1)
    grid.add_column(justify="right", no_wrap=True)
    units = f"units {result.length_unit}, {result.force_unit}" + (
        "; per unit modulus" if result.per_modulus else ""
    )
    grid.add_row(Text(one_line(result.title, 200), style="bold"), Text(units))
    return grid


def _sentence(result: Result) -> Text:
    """The verdict sentence in the colour of the worst verdict."""
    found = {row.verdict for row in result.quantities}
    order: tuple[Verdict | None, ...] = ("outside", "inconclusive", "within", None)
    worst = next(verdict for verdict in order if verdict in found | {None})
    follows = " FE's values:" if result.outline_alone else ""
    return Text(one_line(verdict_sentence(result), 1000) + follows, style=STYLES[worst])


def _groups(
    shown: Sequence[QuantityResult], rows: Sequence[QuantityResult], result: Result, unicode: bool
) -> Iterator[RenderableType]:
    """Rows under a heading for each verdict, columns aligned throughout."""
    verdicts: tuple[Verdict, ...] = ("outside", "inconclusive", "within")
    header = True
    for verdict in verdicts:
        group = [row for row in shown if row.verdict == verdict]
        if not group:
            continue
        total = sum(row.verdict == verdict for row in rows)
        if header:
            yield _table([], result, wide=False, unicode=unicode)
        yield Text(f"{verdict} ({total} of {len(rows)})", style=STYLES[verdict])
        yield _table(group, result, wide=False, unicode=unicode, header=False)
        header = False


def _null_lines(rows: Sequence[QuantityResult]) -> Iterator[RenderableType]:
    """Rows without a verdict, by their reason, with what one side still says."""
    reasons: dict[str, list[str]] = {}
    for row in rows:
        values = [
            f"{side} {value_text(row, value)}"
            for side, value in (("hand", row.judged_theory), ("FE", row.fe.value))
            if value and row.reason != NO_FLOW
        ]
        found = f" ({', '.join(values)})" if values else ""
        reasons.setdefault(row.reason or "not compared", []).append(f"{name_of(row)}{found}")
    for reason, names in reasons.items():
        yield Text(f"not compared: {one_line(', '.join(names), 400)}: {one_line(reason, 300)}", style="dim")


def _table(
    rows: Sequence[QuantityResult], result: Result, *, wide: bool, unicode: bool, header: bool = True
) -> Table:
    """Rows in columns of fixed width: groups stand under each other and just fill 80 or 120 columns."""
    table = Table(box=None, padding=(0, 1, 0, 0), show_header=header, header_style="dim", pad_edge=False)
    if wide:
        table.add_column("verdict", width=12, no_wrap=True)
    table.add_column("quantity", width=24 if wide else 16)
    table.add_column("hand", width=9, justify="right", no_wrap=True)
    table.add_column("FE, error", width=FE_WIDTH, no_wrap=True)
    table.add_column("hand is", width=13 if wide else 11)
    if wide:
        table.add_column("of criterion", width=BAR + 7, no_wrap=True)
    table.add_column("effect", width=14, no_wrap=True)
    table.add_column("for", width=10, no_wrap=True)
    for row in rows:
        effects = row.effect or {}
        name = Text(one_line(name_of(row)))
        if row.verdict != "within":
            name.stylize(STYLES[row.verdict])
        difference = difference_text(row, result.length_unit)
        effect = "\n".join(effects.values())
        if not effects and len(difference) > (13 if wide else 11):
            # A distance and its direction share the two columns.
            difference, _, effect = difference.rpartition(" ")
        cells = [
            name,
            Text(value_text(row, row.judged_theory).removesuffix(" deg")),
            Text(_fe_text(row, unicode)),
            Text(difference),
        ]
        if wide:
            cells = [Text(row.verdict or "", style=STYLES[row.verdict]), *cells, _bar(row, unicode)]
        table.add_row(*cells, Text(effect), Text("\n".join(effects)))
    return table


def _fe_table(result: Result, unicode: bool) -> Table:
    """FE's values alone, for a section without walls."""
    table = Table(box=None, padding=(0, 2, 0, 0), header_style="dim", pad_edge=False)
    table.add_column("quantity")
    table.add_column("FE, error", no_wrap=True)
    table.add_column("unit", no_wrap=True)
    for row in result.quantities:
        if row.fe.value is not None:
            unit = "" if row.unit == "rad" else row.unit
            table.add_row(Text(one_line(name_of(row))), Text(_fe_text(row, unicode)), Text(unit))
    return table


def _fe_text(row: QuantityResult, unicode: bool) -> str:
    """FE's value with its error: plus-minus before a bound, a tilde before an estimate, nothing if exact."""
    fe: FeValue = row.fe
    half = fe.half_width
    text = value_text(row, fe.value)
    if fe.value is None or half is None or fe.basis == "exact":
        return text
    if row.unit == "rad":
        half = math.degrees(half)
    error = f"{error_mark(fe, unicode)}{error_text(half)}"
    for digits in (5, 4, 3, 2):
        text = value_text(row, fe.value, digits)
        if len(text) + 1 + len(error) <= FE_WIDTH:
            break
    return f"{text} {error}"


def _bar(row: QuantityResult, unicode: bool) -> Text:
    """Share of the criterion used, as a bar that is full at the criterion, and in per cent."""
    used = row.criterion_used
    if used is None:
        return Text("")
    full, empty, over = ("█", "░", "▶") if unicode else ("#", ".", ">")
    cells = min(round(used * BAR), BAR)
    bar = full * cells + empty * (BAR - cells)
    if used > 1:
        bar = bar[:-1] + over
    percent = f"{used * 100:.0f} %" if used < 10 else ">999 %"
    return Text(f"{bar} {percent}", style=STYLES[row.verdict])


def _folded_line(folded: Sequence[QuantityResult]) -> str:
    """What was left out to keep the screen one screen."""
    used = percent_text(max((row.criterion_used or 0.0 for row in folded), default=0.0))
    return one_line(
        f"and {len(folded)} more within, each using at most {used} of its criterion "
        f"({', '.join(name_of(row) for row in folded)}): --table levels",
        600,
    )


def _notes(
    result: Result, rows: Sequence[QuantityResult], unicode: bool, pictures: str | None
) -> Iterator[tuple[str, str]]:
    """Lines under the table with their style."""
    yield from _factor_notes(rows)
    yield from ((line, "") for line in cause_lines(result))
    yield from ((line, "") for line in model_lines(result))
    flows_off = wall_line(result)
    if flows_off is not None:
        yield flows_off, ""
    if not result.outline_alone:
        yield from ((line, "dim") for line in level_lines(result))
    if result.load_kinds:
        kinds = ", ".join(f"{load} ({kind})" for load, kind in result.load_kinds.items())
        yield one_line(f"Loads: {kinds}", 400), ""
    for lines in (governing_lines, margin_lines, probe_lines):
        yield from ((line, "") for line in lines(result))
    yield from ((line, "") for line in curved_boundary_lines(result))
    loads = {row.load for row in result.quantities if row.name == "von_mises_stress"}
    if len(loads) > FEW_LOADS:
        yield f"{len(loads)} loads: each quantity is shown for its worst load; all are in the result.", ""
    for row in rows:
        if row.note is not None and row.verdict in ("outside", "inconclusive"):
            yield one_line(f"{name_of(row)}: {row.note}", 300), ""
    if any(row.verdict == "inconclusive" for row in rows):
        yield UNDECIDED, "yellow"
    if not result.accuracy_met:
        yield one_line(f"Accuracy {result.accuracy:g} was not reached: {result.accuracy_note}", 300), "yellow"
    for note in result.section_notes:
        yield one_line(f"Section file: {note}", 300), ""
    for note in result.outline_notes:
        yield one_line(f"Outline: {note}", 300), ""
    failed = [check for check in result.checks if not check.passed]
    for check in failed:
        yield (
            one_line(f"CHECK FAILED: {check.name}: {check.value:.3g}, allowed {check.allowed:.3g}", 300),
            "bold red",
        )
    seconds = sum(result.provenance.seconds.values())
    passed = len(result.checks) - len(failed)
    mark = "±" if unicode else "+-"
    if any(row.judged_difference is not None and has_own_normaliser(row) for row in rows):
        yield STARRED, "dim"
    yield f"FE error (half an interval): {mark} bound, ~ estimate, none: exact.", "dim"
    if not result.outline_alone:
        yield criteria_note(result), "dim"
    yield (
        f"Checks: {passed} of {len(result.checks)} passed. FE: {_overall_text(result)}"
        f"order {result.mesh.order}, {result.mesh.unknowns:,} unknowns, "
        f"accuracy {one_line(result.accuracy_note, 200)}. {seconds:.2f} s.",
        "dim",
    )
    yield from ((line, "dim") for line in (restrained_line(result), poisson_line(result)) if line)
    yield (f"Pictures and result: {pictures}" if pictures else "Pictures: add --out FOLDER."), ""
    shared = FE_ASSUMPTIONS if result.outline_alone else SHARED_ASSUMPTIONS
    yield f"{shared} {SAFETY}", "dim"


def _overall_text(result: Result) -> str:
    """Overall size of the solid: it tells a face on the wrong side, or a slip in a coordinate."""
    if result.overall is None:
        return ""
    width, height = result.overall
    return f"solid {width:.4g} x {height:.4g} {result.length_unit}, "


def _factor_notes(rows: Sequence[QuantityResult]) -> Iterator[tuple[str, str]]:
    """Factors to use where a criterion is not kept."""
    told = [
        f"{name_of(row)} x {number_text(row.factor, 4)}"
        for row in rows
        if row.verdict == "outside" and row.factor is not None
    ]
    if told:
        # "and 1 more" would take the place of the one it hides.
        most = SHOWN_FACTORS + 1 if len(told) == SHOWN_FACTORS + 1 else SHOWN_FACTORS
        more = f" and {len(told) - most} more" if len(told) > most else ""
        yield f"To use the FE value instead, multiply the hand value: {', '.join(told[:most])}{more}.", ""
