"""The summary of a verification run on screen: read in a minute."""

from __future__ import annotations

from rich.console import Group as Blocks
from rich.console import RenderableType
from rich.table import Table
from rich.text import Text

from crosscheck.verification.evidence import FIRM, by_source, groups, headline, known, obtained_counts
from crosscheck.verification.page import share_text
from crosscheck.verification.suite import SuiteResult

FAILURES_SHOWN = 20


def verify_screen(result: SuiteResult, written: str | None = None) -> RenderableType:
    """Headline, failures, groups, how values were obtained, coverage, and where the evidence is."""
    style = "bold red" if result.failures else "bold"
    blocks: list[RenderableType] = [Text(headline(result), style=style), Text()]
    if result.failures:
        blocks += [*_failures(result), Text()]
    blocks += [_groups(result), Text()]
    rows = result.rows
    if rows:
        counts = obtained_counts(rows)
        firm = sum(counts.get(way, 0) for way in FIRM)
        sources = f"{len(by_source(rows))} sources" if len(by_source(rows)) > 1 else "one source"
        words = ", ".join(f"{count} {way}" for way, count in counts.items())
        blocks.append(
            Text(
                f"{len(rows)} comparisons with values from {sources}; {firm} rest on "
                f"values that were read or are exact. Obtained: {words}."
            )
        )
    if result.whole:
        blocks += [Text(), _coverage(result)]
    problems = [row for row in rows if known(row)]
    for row in problems:
        blocks += [Text(), Text(f"Known problem of a reference: {row.name}, {row.known_problem}.")]
    kind = "Quick run" if result.quick else "The whole suite" if result.whole else "Not the whole suite"
    blocks += [Text(), Text(f"{kind}, {result.seconds:.0f} s.")]
    if written is not None:
        blocks.append(Text(f"Evidence: {written}"))
    return Blocks(*blocks)


def _failures(result: SuiteResult) -> list[RenderableType]:
    """Failed checks, one paragraph each."""
    made: list[RenderableType] = [
        Text.assemble((outcome.name, "red"), f" [{outcome.group}]: {outcome.detail}")
        for outcome in result.failures[:FAILURES_SHOWN]
    ]
    left = len(result.failures) - FAILURES_SHOWN
    return [*made, Text(f"and {left} more failures: see the evidence")] if left > 0 else made


def _groups(result: SuiteResult) -> Table:
    table = Table(box=None, pad_edge=False)
    table.add_column("group")
    table.add_column("passed", justify="right")
    table.add_column("of", justify="right")
    table.add_column("uses most of its tolerance")
    for group in groups(result):
        worst = "" if group.worst is None else f"{share_text(group.worst)}: {group.worst.name}"
        table.add_row(group.name, str(group.passed), str(group.count), worst)
    return table


def _coverage(result: SuiteResult) -> Table:
    """Two features a line: how many rows and code checks exercise each."""
    table = Table(box=None, pad_edge=False)
    for _ in range(2):
        table.add_column("feature")
        for head in ("theory", "FE", "diff.", "checks"):
            table.add_column(head, justify="right")
    cells = [
        (name, *(str(n or "-") for n in (c.theory, c.fe, c.difference, c.checks)))
        for name, c in result.coverage.items()
    ]
    half = (len(cells) + 1) // 2
    for i in range(half):
        right = cells[half + i] if half + i < len(cells) else ("",) * 5
        table.add_row(*cells[i], *right)
    return table
