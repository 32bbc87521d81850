"""The screen of a sweep: what each quantity did over the family, worst first."""

from __future__ import annotations

from collections.abc import Iterator

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.family.members import Family
from crosscheck.family.sweep import KeySummary, Sweep
from crosscheck.faults import one_line
from crosscheck.reports.wording import SAFETY, SHARED_ASSUMPTIONS, number_text, percent_text

WIDE = 100
ROWS_SHOWN = 24
REASONS_SHOWN = 6


def sweep_screen(sweep: Sweep, width: int = 80, folder: str | None = None) -> RenderableType:
    """What the terminal shows of a sweep.

    Parameters
    ----------
    sweep : Sweep
        What was found.
    width : int
        Columns.
    folder : str or None
        Where tables and pictures are.
    """
    parts: list[RenderableType] = [Text(one_line(sweep.title), style="bold"), Text(sentence(sweep)), Text()]
    shown = [each for each in sweep.summaries if each.compared]
    if shown:
        parts.append(_table(shown[:ROWS_SHOWN], sweep, width))
    if len(shown) > ROWS_SHOWN:
        rest = shown[ROWS_SHOWN:]
        most = percent_text(max(each.worst_share for each in rest))
        parts.append(Text(f"and {len(rest)} more, using at most {most} of their criterion", style="dim"))
    parts += [Text(line, style=style) for line, style in _notes(sweep, folder)]
    return Group(*parts)


def sentence(sweep: Sweep) -> str:
    """What was varied, how much of it could be solved, and how it came out."""
    varied = " and ".join(each.words for each in sweep.family.ranges)
    compared = [each for each in sweep.summaries if each.compared]
    held = sum(each.counts["within"] == each.compared for each in compared)
    start = f"{varied}: {sweep.solved} of {len(sweep.family)} members solved. "
    if not compared:
        return f"{start}Nothing could be compared."
    if held == len(compared):
        return f"{start}Hand methods ({sweep.judged}) hold throughout for all {held} quantities."
    return f"{start}Hand methods ({sweep.judged}) hold throughout for {held} of {len(compared)} quantities."


def _table(rows: list[KeySummary], sweep: Sweep, width: int) -> Table:
    table = Table(box=None, padding=(0, 2, 0, 0), header_style="dim", pad_edge=False)
    table.add_column("quantity", max_width=34 if width >= WIDE else 24)
    for name in ("first", "last", "worst"):
        table.add_column(name, justify="right", no_wrap=True)
    table.add_column("worst at", max_width=30 if width >= WIDE else 20)
    table.add_column("within", justify="right", no_wrap=True)
    for row in rows:
        held = row.counts["within"] == row.compared
        table.add_row(
            Text(one_line(name_of(row.name, row.load)), style="" if held else "bold red"),
            *(Text(signed_percent(value)) for value in (row.first, row.last, row.worst)),
            Text(values_text(sweep.family, row.worst_at)),
            Text(f"{row.counts['within']} of {row.compared}", style="green" if held else "bold red"),
        )
    return table


def name_of(name: str, load: str | None) -> str:
    """What people call a quantity, with its load."""
    words = QUANTITIES[name].words
    return words if load is None else f"{words}, {load}"


def signed_percent(difference: float | None) -> str:
    """A difference in per cent with its sign."""
    if difference is None:
        return "-"
    text = percent_text(difference)
    return text if text.startswith("<") else f"{'-' if difference < 0 else '+'}{text}"


def values_text(family: Family, values: tuple[float, ...]) -> str:
    """Values of the varied parameters."""
    return ", ".join(
        f"{one_line(name, 20)} {number_text(value, 4)}"
        for name, value in zip(family.names, values, strict=True)
    )


def _notes(sweep: Sweep, folder: str | None) -> Iterator[tuple[str, str]]:
    """Lines under the table with their style."""
    undefined = [each for each in sweep.summaries if not each.compared]
    if undefined:
        names = ", ".join(name_of(each.name, each.load) for each in undefined)
        yield one_line(f"not compared anywhere: {names}", 600), "dim"
    reasons = list(sweep.reasons.items())
    for (status, reason), (count, first) in reasons[:REASONS_SHOWN]:
        at = values_text(sweep.family, first)
        what = "cannot be built" if status == "refused" else "failed"
        yield one_line(f"{count} {what}, first at {at}: {reason}", 300), "yellow"
    if len(reasons) > REASONS_SHOWN:
        yield f"and {len(reasons) - REASONS_SHOWN} more reasons: in the table", "yellow"
    if sweep.failed_checks:
        yield f"SELF-CHECKS FAILED at {sweep.failed_checks} members: in the JSON", "bold red"
    if sweep.not_met:
        yield f"accuracy {sweep.family.accuracy:g} was not reached at {sweep.not_met} members", "yellow"
    yield (
        "Differences: theory minus FE over the normaliser of each quantity, at the level judged; all levels "
        "are in the table.",
        "dim",
    )
    yield (
        (f"Tables and pictures: {one_line(folder, 300)}" if folder else "Tables, pictures: add --out DIR."),
        "",
    )
    yield f"{SHARED_ASSUMPTIONS} {SAFETY}", "dim"
