"""``crosscheck verify``: the verification suite and its evidence."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from crosscheck.commands.arguments import complain
from crosscheck.exit_status import ExitStatus
from crosscheck.verification.check import FEATURES

if TYPE_CHECKING:
    from crosscheck.verification.suite import Plan, SuiteResult, Told

DESCRIPTION = """\
Run reference values with their sources and checks of the code against both sides, and write the evidence.
Without CASE everything that ships runs, which also tests the installation; with it, rows of your own."""
EPILOG = """\
examples:
  crosscheck verify --quick
  crosscheck verify --out evidence
  crosscheck verify --source Megson --feature boom
  crosscheck verify my_rows.toml"""
PAGE, JSON, JUNIT = "verification.html", "verification.json", "verification.xml"


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "verify",
        help="why the numbers may be believed: reference values and code checks",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    command.add_argument("cases", nargs="*", metavar="CASE", help="file of rows, or a folder of them")
    command.add_argument("--quick", action="store_true", help="a part that covers every feature, in seconds")
    command.add_argument("--out", metavar="DIR", help=f"write {PAGE}, {JSON} and {JUNIT} into this folder")
    command.add_argument("--junit", metavar="PATH", help="write the outcome as JUnit XML")
    command.add_argument(
        "--json", dest="json_path", metavar="PATH", help="write the outcome as JSON; - for standard output"
    )
    for option, words in (
        ("name", "a part of the name of a row, its case or a code check"),
        ("source", "a part of the source of a row"),
    ):
        command.add_argument(
            f"--{option}", action="append", default=[], metavar="TEXT", help=f"only what has {words}"
        )
    command.add_argument(
        "--feature",
        action="append",
        default=[],
        choices=FEATURES,
        metavar="FEATURE",
        help=f"only what exercises a feature: {', '.join(FEATURES)}",
    )
    command.add_argument(
        "--workers",
        type=_workers,
        default=None,
        metavar="N",
        help="processes of one numerical thread each (default: the cores that may be used, at most 8)",
    )
    command.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Plan, run, show, write."""
    planned = _planned(arguments)
    if planned is None:
        return ExitStatus.BAD_INPUT
    from crosscheck.batch.task import BatchError
    from crosscheck.batch.workers import usable_cores
    from crosscheck.verification.suite import run as run_plan

    try:
        with _progress() as tell:
            result = run_plan(planned, arguments.workers or min(usable_cores(), 8), tell)
    except BatchError as fault:
        complain([f"verify: {fault}"])
        return ExitStatus.FAILED
    status = ExitStatus.NOT_WITHIN if result.failures else ExitStatus.WITHIN
    written = _write(result, arguments)
    _show(result, written[0] if written else None, sys.stderr if arguments.json_path == "-" else sys.stdout)
    return status if written is not None else max(status, ExitStatus.BAD_INPUT)


def _planned(arguments: argparse.Namespace) -> Plan | None:
    """What runs; None where there is nothing or the rows have faults, which are told."""
    from crosscheck.faults import SectionFaults
    from crosscheck.verification.suite import Selection, plan

    selection = Selection(tuple(arguments.name), tuple(arguments.source), tuple(arguments.feature))
    try:
        planned = plan([Path(p) for p in arguments.cases], quick=arguments.quick, selection=selection)
    except SectionFaults as faults:
        complain(faults.lines)
        return None
    if not planned.jobs:
        words = "must name rows or checks that there are" if selection else "must be a file or folder of rows"
        given = " ".join(arguments.cases) or "verify"
        complain([f"{given}: {words}, got none"])
        return None
    return planned


def _write(result: SuiteResult, arguments: argparse.Namespace) -> tuple[str | None] | None:
    """Files asked for, all made before the first is written; where the page is, None where one failed."""
    from crosscheck.verification.evidence_files import json_bytes, junit_bytes
    from crosscheck.whole_files import write_folder, write_whole

    files: list[tuple[Path, bytes]] = []
    if arguments.junit is not None:
        files.append((Path(arguments.junit), junit_bytes(result)))
    if arguments.json_path is not None and arguments.json_path != "-":
        files.append((Path(arguments.json_path), json_bytes(result)))
    page: str | None = None
    target = arguments.out
    try:
        if arguments.out is not None:
            from crosscheck.verification.page import page_bytes

            made = {PAGE: page_bytes(result), JSON: json_bytes(result), JUNIT: junit_bytes(result)}
            write_folder(Path(arguments.out), made)
            page = str(Path(arguments.out) / PAGE)
        for path, content in files:
            target = str(path)
            write_whole(path, content)
    except OSError as fault:
        complain([f"{target}: must be a place that can be written, got: {fault.strerror or fault}"])
        return None
    if arguments.json_path == "-":
        sys.stdout.write(json_bytes(result).decode())
    return (page,)


def _show(result: SuiteResult, page: str | None, stream: object) -> None:
    from rich.console import Console

    from crosscheck.reports.verify_screen import verify_screen

    console = Console(stderr=stream is sys.stderr, highlight=False, markup=False, emoji=False)
    console.print(verify_screen(result, page))


@contextmanager
def _progress() -> Iterator[Told | None]:
    """A bar with the time left on the error stream where that is a terminal; silent otherwise."""
    if not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    columns: Sequence[object] = (
        BarColumn(), MofNCompleteColumn(), TimeRemainingColumn(), TextColumn("{task.description}")
    )  # fmt: skip
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:  # type: ignore[arg-type]
        task = bar.add_task("starting", total=None)

        def tell(done: int, count: int, name: str) -> None:
            bar.update(task, completed=done, total=count, description=name[:50])

        yield tell


def _workers(text: str) -> int:
    """A number of processes."""
    try:
        value = int(text)
    except ValueError:
        value = 0
    if not 1 <= value <= 256:
        raise argparse.ArgumentTypeError(f"must be a whole number from 1 to 256, got {text!r}")
    return value
