"""Arguments, progress and complaints that the commands of families share."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING

from crosscheck.commands.arguments import add_model_arguments, worker_count

if TYPE_CHECKING:
    from crosscheck.batch.running import Hands, Told
    from crosscheck.batch.task import Outcome
    from crosscheck.family.members import Family


def add_workers(command: argparse.ArgumentParser) -> None:
    """Who solves."""
    command.add_argument(
        "--workers", type=worker_count, metavar="N", help="worker processes (default: one for each core)"
    )


def add_family_arguments(command: argparse.ArgumentParser, *, ratio: bool = True) -> None:
    """The file, what varies, who solves."""
    command.add_argument("path", metavar="FILE", help="section file")
    command.add_argument(
        "--vary",
        dest="varied",
        action="append",
        required=True,
        metavar='"t from 1 to 12 in 23"',
        help='one parameter, or two by giving it twice; also "t from 1 to 12 in 23 log" and "t in 1, 1.5, 2"',
    )
    if ratio:
        command.add_argument(
            "--ratio",
            metavar='"t / depth"',
            help="arithmetic on parameters to tell beside the first parameter, and to draw as a second axis",
        )
    command.add_argument("--out", metavar="DIR", help="folder for tables, pictures and the journal")
    add_workers(command)
    command.add_argument(
        "--cluster", metavar="ADDRESS", help="solve on a Dask cluster instead, such as tcp://host:8786"
    )
    command.add_argument(
        "--time-limit",
        type=_seconds,
        default=300.0,
        metavar="S",
        help="longest time for one member in seconds (default 300)",
    )
    add_model_arguments(command)


def family_of(arguments: argparse.Namespace) -> Family:
    """The family that the arguments mean.

    Raises
    ------
    SectionFaults
        Where the file, a range or the ratio is faulty.
    """
    from crosscheck.family.members import Family
    from crosscheck.family.ranges import ranges_of
    from crosscheck.section_file.reader import read_source

    source = read_source(arguments.path)
    ranges = ranges_of(arguments.varied, source, arguments.overrides)
    family = Family(source, tuple(arguments.overrides), ranges, arguments.accuracy, arguments.ratio)
    # What is wrong with the file as it stands is said before anything is solved.
    family.ratio_of(family.section().parameters)
    return family


def hands_of(arguments: argparse.Namespace) -> Hands:
    """Who solves."""
    from crosscheck.batch.running import Hands

    return Hands(arguments.workers, arguments.cluster, arguments.time_limit)


@contextmanager
def told_batch(total: int, done: int = 0) -> Iterator[Told]:
    """Points done, how many gave nothing, and the time left, on the error stream where that is a terminal."""
    if not sys.stderr.isatty():
        yield lambda _: None
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    columns = (
        TextColumn("solving"),
        BarColumn(30),
        MofNCompleteColumn(),
        TimeRemainingColumn(),
        TextColumn("left{task.fields[lost]}"),
    )
    with Progress(*columns, console=Console(stderr=True), transient=True) as progress:
        bar = progress.add_task("", total=total, completed=done, lost="")
        lost = 0

        def tell(outcome: Outcome) -> None:
            nonlocal lost
            lost += outcome.failure is not None or outcome.found.get("status") != "solved"
            progress.update(bar, advance=1, lost=f", {lost} without a result" if lost else "")

        yield tell


def _seconds(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = 0.0
    if not 0.0 < value < 1e7:
        raise argparse.ArgumentTypeError(f"must be a number of seconds above 0, got {text!r}")
    return value
