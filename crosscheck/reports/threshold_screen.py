"""The screen and the table of thresholds: which hand method holds up to where, governing quantity first."""

from __future__ import annotations

from collections.abc import Iterator

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.family.crossings import Piece
from crosscheck.family.ranges import Range
from crosscheck.family.threshold import Key, Line, Study, Threshold
from crosscheck.family.validity import Stretch, common_stretches, level_shown_first, levels_of
from crosscheck.faults import one_line
from crosscheck.reports.family_screen import name_of
from crosscheck.reports.result_table import Cell, csv_line
from crosscheck.reports.wording import SAFETY, SHARED_ASSUMPTIONS, number_text

ROWS_SHOWN = 24
# Behind where a criterion holds, when verdicts elsewhere hang on the FE error.
UNDECIDED = " (?)"
LINES_SHOWN = 12


def threshold_screen(study: Study, width: int = 80, folder: str | None = None) -> RenderableType:
    """What the terminal shows of a study.

    Parameters
    ----------
    study : Study
        What was found.
    width : int
        Columns.
    folder : str or None
        Where table, chart and envelope are.
    """
    first = study.family.ranges[0]
    parts: list[RenderableType] = [Text(one_line(study.title), style="bold")]
    if len(study.lines) == 1:
        line = study.lines[0]
        parts += [Text(one_line(sentence(study, line, level), 400)) for level in levels_of(study)]
        if not line.thresholds:
            parts.append(Text("Nothing of what is asked for is compared in any section solved."))
        parts += [Text(), _table(study, line)]
    else:
        second = study.family.ranges[1].name
        for line in study.lines[:LINES_SHOWN]:
            words = sentence(study, line, study.judged)
            parts.append(Text(one_line(f"{second} {number_text(line.second, 4)}: {words}", 400)))
        if len(study.lines) > LINES_SHOWN:
            parts.append(Text(f"and {len(study.lines) - LINES_SHOWN} more lines: in the table", style="dim"))
    gaps = [gap for line in study.lines for gap in line.gaps]
    if gaps:
        at, reason = gaps[0]
        words = f"{len(gaps)} without a result, first at {first.name} {number_text(at, 4)}: {reason}"
        parts.append(Text(one_line(words, 300), style="yellow"))
    parts += [Text(line, style=style) for line, style in _notes(study, folder)]
    return Group(*parts)


def sentence(study: Study, line: Line, level: str) -> str:
    """Which hand method, up to where."""
    name = study.family.ranges[0].name
    rows = line.of_level(level)
    compared = [each for each in rows if each.known is not None]
    if not compared:
        return f"Theory, level {level}: nothing can be compared."
    start = f"Theory, level {level}, "
    quantities = "1 quantity" if len(compared) == 1 else f"all {len(compared)} quantities"
    common = common_stretches(compared)
    today = compared[0].today_value
    here = [each for each in common if today is not None and each.start <= today <= each.end]
    told = (here or common)[:1]
    if not told:
        nowhere = next((each for each in compared if not each.pieces), compared[0])
        if nowhere.pieces or nowhere.fails:
            return f"{start}holds nowhere for {quantities} at once; governs: {name_of(*nowhere.key)}."
        words = f"is shown to hold nowhere for {quantities} at once; inconclusive"
        return f"{start}{words}: {name_of(*nowhere.key)}."
    text = f"{start}holds for {quantities} {_stretch(told[0], study.family.ranges[0])}"
    if len(common) > 1:
        noun = "stretch" if len(common) == 2 else "stretches"
        text += f" (and in {len(common) - 1} more {noun})"
    if today is not None:
        fails = [each for each in compared if each.holds_today is False]
        text += f"; today's {name} = {number_text(today, 4)} is {'inside' if here else 'not inside'}"
        if fails and not here:
            text += f" ({', '.join(name_of(*each.key) for each in fails[:3])})"
    return f"{text}."


def _stretch(stretch: Stretch, first: Range) -> str:
    """Such as ``up to t = 3.21 (shear centre, x)``."""
    start, end = _end(stretch.start, stretch.start_key), _end(stretch.end, stretch.end_key)
    if stretch.start_key is None and stretch.end_key is None:
        return f"over {first.name} {start} to {end}"
    if stretch.start == first.low:
        return f"up to {first.name} = {end}"
    if stretch.end == first.high:
        return f"from {first.name} = {start} on"
    return f"from {first.name} = {start} to {end}"


def _end(value: float, key: Key | None) -> str:
    return number_text(value, 4) + (f" ({name_of(*key)})" if key else "")


def _table(study: Study, line: Line) -> Table:
    """A row a quantity, governing first; where each level holds, and today's value over the threshold."""
    levels = levels_of(study)
    judged = level_shown_first(study)
    table = Table(box=None, padding=(0, 2, 0, 0), header_style="dim", pad_edge=False)
    table.add_column("quantity", max_width=26)
    for level in levels:
        table.add_column(f"{level} holds")
    table.add_column("today over", justify="right", no_wrap=True)
    by_key = {(each.key, each.level): each for each in line.thresholds}
    rows = [each for each in line.of_level(judged) if each.known is not None or each.reason is None]
    for each in rows[:ROWS_SHOWN]:
        cells = [Text(holds_text(by_key[each.key, level])) for level in levels]
        fails = each.holds_today is False
        share = "-" if each.share is None else number_text(each.share, 3)
        table.add_row(
            Text(one_line(name_of(*each.key)), style="bold red" if fails else ""), *cells, Text(share)
        )
    if len(rows) > ROWS_SHOWN:
        rest = rows[ROWS_SHOWN:]
        words = "hold throughout" if all(each.throughout for each in rest) else "in the table"
        table.add_row(Text(f"and {len(rest)} more", style="dim"), Text(words, style="dim"))
    return table


def holds_text(each: Threshold) -> str:
    """Where a criterion holds, in words."""
    if each.known is None:
        return "not compared"
    if not each.pieces:
        if not each.inconclusive:
            return "nowhere"
        return f"nowhere{UNDECIDED}" if each.fails else "inconclusive"
    if each.throughout:
        return "throughout" if each.complete else "where solved"
    told = "; ".join(_piece(piece, each) for piece in each.pieces)
    return told + (UNDECIDED if each.inconclusive else "")


def _piece(piece: Piece, each: Threshold) -> str:
    mark = "~" if each.basis == "estimate" else ""
    start = f"{mark if piece.start_crossing else ''}{number_text(piece.start, 4)}"
    end = f"{mark if piece.end_crossing else ''}{number_text(piece.end, 4)}"
    if piece.start == each.scanned[0]:
        return f"up to {end}"
    return f"from {start}" if piece.end == each.scanned[1] else f"{start} to {end}"


def _notes(study: Study, folder: str | None) -> Iterator[tuple[str, str]]:
    """Lines under the table."""
    first = study.family.ranges[0]
    criteria = {each.criterion for line in study.lines for each in line.thresholds}
    told = ", ".join(f"{100 * criterion:g} %" for criterion in sorted(criteria))
    yield (
        f"Criteria: {told}. today over: the file's {one_line(first.name, 30)} over the nearest threshold of "
        "the level judged. ~: the FE side is an estimate, not a bound.",
        "dim",
    )
    if any(each.inconclusive for line in study.lines for each in line.thresholds):
        words = f"{UNDECIDED.strip()}: elsewhere verdicts are inconclusive, at least in part: the FE error is"
        yield f"{words} too large to say, ask for a finer --accuracy.", "dim"
    yield (
        f"Scanned at {len(first.values)} values from {first.low:g} to {first.high:g}, largest step "
        f"{study.step:.3g}; each threshold refined on sections solved anew ({study.solved} solved). Two "
        'thresholds within one step can be missed: scan finer with "in N".',
        "dim",
    )
    for fault in study.failed[:3]:
        yield one_line(f"FAILED: {fault}", 300), "bold red"
    yield (
        (f"Table, chart, envelope: {one_line(folder, 300)}" if folder else "Table, chart: add --out DIR."),
        "",
    )
    yield f"{SHARED_ASSUMPTIONS} {SAFETY}", "dim"


def threshold_csv(study: Study) -> bytes:
    """A row for each threshold; one row with its words for what has none."""
    first, *second = study.family.names
    lines = [
        csv_line(
            (
                *second, "quantity", "words", "load", "level", "criterion", "holds", "threshold of " + first,
                "low", "high", "FE basis", "above it", "today", "today / threshold", "remark",
            )
        )
    ]  # fmt: skip
    for line in study.lines:
        place: tuple[Cell, ...] = (line.second,) if second else ()
        for level in levels_of(study):
            for each in line.of_level(level):
                start = (
                    *place, each.name, QUANTITIES[each.name].words, each.load, level, each.criterion,
                    holds_text(each),
                )  # fmt: skip
                today = each.today_value
                for crossing in each.crossings:
                    above = "outside" if crossing.outside_above else "within"
                    share = today / crossing.value if today is not None and crossing.value else None
                    ends = (crossing.value, crossing.low, crossing.high, each.basis, above, today, share)
                    lines.append(csv_line((*start, *ends, None)))
                if not each.crossings:
                    lines.append(
                        csv_line((*start, None, None, None, each.basis, None, today, None, each.reason))
                    )
    return b"".join(lines)
