"""Several sections in worker processes, told in their order, with one summary table at the end."""

from __future__ import annotations

import argparse
import io
import os
import sys
from collections.abc import Iterator, Sequence
from contextlib import redirect_stderr, redirect_stdout
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import Any

from crosscheck.commands.arguments import complain, told_progress
from crosscheck.exit_status import ExitStatus

# Longest time for one section with its pictures [s]; what takes longer hangs.
TIME_LIMIT = 1800.0


@dataclass(frozen=True)
class Reported:
    """What is left of one section when its screen is told: status, JSON, a row of the summary."""

    path: str
    status: int
    document: dict[str, Any] | None = None
    sentence: str = ""
    held: tuple[int, int] = (0, 0)
    worst: str = ""


def reported_by_workers(
    arguments: argparse.Namespace, paths: Sequence[str], folders: Sequence[Path | None]
) -> Iterator[Reported]:
    """Reports of all sections in their order; what each writes to the streams is passed on in that order."""
    from crosscheck.batch.running import Hands
    from crosscheck.batch.task import Outcome, Point, Task

    plain = {name: value for name, value in vars(arguments).items() if name != "run"}
    context = {"arguments": plain, "paper": _paper()}
    points = [
        Point(number, [path, None if folder is None else str(folder)])
        for number, (path, folder) in enumerate(zip(paths, folders, strict=True))
    ]
    waiting: dict[int, Outcome] = {}
    following = 0
    with Hands(arguments.workers, time_limit=TIME_LIMIT).ready_for(Task(report_in_worker, context)) as crew:
        outcomes = crew.solve(points)
        while following < len(points):
            with told_progress() as tell:
                while following not in waiting:
                    tell(f"{following + len(waiting)} of {len(points)} sections")
                    outcome = next(outcomes)
                    waiting[outcome.number] = outcome
            outcome = waiting.pop(following)
            following += 1
            if outcome.failure is not None:
                path = paths[outcome.number]
                complain([f"{path}: {outcome.failure.kind}: {outcome.failure.text}"])
                yield Reported(path, ExitStatus.FAILED)
                continue
            found = dict(outcome.found)
            sys.stderr.write(found.pop("err"))
            sys.stdout.write(found.pop("out"))
            found["held"] = tuple(found["held"])
            yield Reported(**found)


def _paper() -> dict[str, str]:
    """Width, encoding and colour of this process's streams, for those that stand in for them."""
    from rich.console import Console

    console = Console()
    paper = {"COLUMNS": str(console.width), "encoding": console.encoding}
    return paper | ({"FORCE_COLOR": "1"} if console.is_terminal else {})


def report_in_worker(context: dict[str, Any], what: Sequence[str | None]) -> dict[str, Any]:
    """One section as :func:`crosscheck.commands.compare.report` does it, its streams caught."""
    from crosscheck.commands.compare import report

    paper = dict(context["paper"])
    encoding = paper.pop("encoding")
    os.environ.update(paper)
    out, err = (io.TextIOWrapper(io.BytesIO(), encoding=encoding, write_through=True) for _ in range(2))
    path, folder = what
    with redirect_stdout(out), redirect_stderr(err):
        found = report(
            str(path), None if folder is None else Path(folder), argparse.Namespace(**context["arguments"])
        )
    caught = {
        name: stream.buffer.getvalue().decode(encoding) for name, stream in (("out", out), ("err", err))
    }
    return {**asdict(found), **caught}


def show_summary(reports: Sequence[Reported], *, error_stream: bool) -> None:
    """One row a section, in their order."""
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    from crosscheck.faults import one_line

    words = {
        ExitStatus.WITHIN: ("within", "green"),
        ExitStatus.NOT_WITHIN: ("not within", "bold red"),
        ExitStatus.BAD_INPUT: ("bad input", "bold red"),
        ExitStatus.FAILED: ("failed", "bold red"),
    }
    table = Table(box=None, padding=(0, 2, 0, 0), header_style="dim", pad_edge=False)
    for name in ("section", "verdict", "held", "worst"):
        table.add_column(name)
    for each in reports:
        word, style = words[ExitStatus(each.status)]
        held = f"{each.held[0]} of {each.held[1]}" if each.held[1] else "-"
        name = one_line(Path(each.path).stem, 40)
        table.add_row(Text(name), Text(word, style=style), Text(held), Text(one_line(each.worst, 100)))
    console = Console(stderr=error_stream, highlight=False, markup=False, emoji=False)
    within = sum(each.status == ExitStatus.WITHIN for each in reports)
    console.print()
    console.print(Text(f"Summary: {within} of {len(reports)} sections within", style="bold"))
    console.print(table)
