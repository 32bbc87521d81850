"""``crosscheck sweep``: every quantity of a section over a range of one or two of its parameters."""

from __future__ import annotations

import argparse
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from crosscheck.commands.arguments import complain, told_progress
from crosscheck.commands.batch_arguments import add_family_arguments, family_of, hands_of, told_batch
from crosscheck.commands.tracing_cost import tell_tracing_cost
from crosscheck.exit_status import ExitStatus

if TYPE_CHECKING:
    from crosscheck.batch.journal import Journal
    from crosscheck.comparison.comparing import Progress
    from crosscheck.family.members import Family
    from crosscheck.family.sweep import Sweep

DESCRIPTION = """\
Compare both sides at every value of one parameter of the section file, or of two, at every level of
theory."""
EPILOG = """\
examples:
  crosscheck sweep cases/sections/stout_channel_hitch.toml --vary "thickness from 1 to 12 in 23" --out out
  crosscheck sweep FILE --vary "t from 1 to 10 log" --vary "depth in 40, 60, 80" --out out --workers 4
  crosscheck sweep FILE --vary "t from 1 to 10 in 1000" --out out --resume
The folder gets sweep.csv, sweep.json, pictures, and the journal that --resume goes on with."""
# Pictures drawn unless quantities are named: the worst of each kind.
MOST_PICTURES = 6
JOURNAL = "journal.jsonl"


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "sweep",
        help="differences over a range of one or two parameters",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    add_family_arguments(command)
    command.add_argument(
        "--resume",
        action="store_true",
        help="go on with the journal in DIR where a run was stopped; begins where there is none",
    )
    command.add_argument(
        "--quantity",
        dest="quantities",
        action="append",
        default=[],
        metavar="NAME",
        help=f"draw this quantity; several may be given (default: the worst of each kind, {MOST_PICTURES} "
        "kinds)",
    )
    command.set_defaults(run=run)


def run(arguments: argparse.Namespace) -> int:
    """Solve every member, then tables and pictures."""
    from crosscheck.batch.running import run_points
    from crosscheck.batch.task import BatchError
    from crosscheck.family.sweep import summarised
    from crosscheck.faults import SectionFaults

    unknown = unknown_quantities(arguments.quantities)
    if unknown:
        complain(unknown)
        return ExitStatus.BAD_INPUT
    if arguments.resume and arguments.out is None:
        complain(["--resume: must be given with --out, whose folder has the journal, got no --out"])
        return ExitStatus.BAD_INPUT
    try:
        family = family_of(arguments)
    except SectionFaults as faults:
        complain(faults.lines)
        return ExitStatus.BAD_INPUT
    try:
        with journal_of(family, arguments) as journal:
            try:
                with told_batch(len(family), journal.done) as told:
                    run_points(family.task, family.points(), journal, hands_of(arguments), told)
            except KeyboardInterrupt:
                if arguments.out is not None:
                    complain(
                        [f"{journal.path}: has {journal.done} of {len(family)} members; go on with --resume"]
                    )
                raise
            sweep = summarised(family, journal)
            if arguments.out is not None:
                with told_progress() as tell:
                    write_sweep(sweep, journal, Path(arguments.out), arguments.quantities, tell)
    except BatchError as fault:
        complain([str(fault)])
        return ExitStatus.BAD_INPUT
    except OSError as fault:
        complain(
            [
                f"{arguments.out}: must be a folder that can be written, got: {fault.strerror or fault}; "
                "what was solved is in the journal: go on with --resume"
            ]
        )
        return ExitStatus.BAD_INPUT
    show(sweep, arguments.out)
    tell_tracing_cost(arguments)
    return sweep_status(sweep)


def unknown_quantities(names: list[str]) -> list[str]:
    """A line for each name that is no quantity."""
    from crosscheck.comparison.quantities import QUANTITIES

    unknown = [name for name in names if name not in QUANTITIES]
    return [f"--quantity: must be one of {', '.join(QUANTITIES)}, got {name!r}" for name in unknown]


@contextmanager
def journal_of(family: Family, arguments: argparse.Namespace) -> Iterator[Journal]:
    """The journal in the folder, or one that goes with the run where there is no folder."""
    from crosscheck.batch.journal import Journal

    if arguments.out is None:
        with (
            tempfile.TemporaryDirectory() as passing,
            Journal(Path(passing) / JOURNAL, {}, len(family), resume=False, durable=False) as journal,
        ):
            yield journal
        return
    folder = Path(arguments.out)
    folder.mkdir(parents=True, exist_ok=True)
    with Journal(folder / JOURNAL, family.inputs, len(family), resume=arguments.resume) as journal:
        yield journal


def write_sweep(sweep: Sweep, journal: Journal, folder: Path, quantities: list[str], tell: Progress) -> None:
    """Tables, then pictures; each file whole or not at all."""
    from crosscheck.family.sweep import series_of
    from crosscheck.pictures.family import family_pictures
    from crosscheck.reports.family_tables import csv_pieces, json_pieces
    from crosscheck.whole_files import write_folder, write_whole

    tell("tables")
    write_whole(folder / "sweep.csv", csv_pieces(sweep, journal))
    write_whole(folder / "sweep.json", json_pieces(sweep, journal))
    tell("pictures")
    keys = [(each.name, each.load) for each in sweep.summaries if each.compared and each.name in quantities]
    drawn = keys or sweep.worst_families(MOST_PICTURES)
    write_folder(folder, family_pictures(sweep, series_of(sweep.family, journal, drawn)))


def show(sweep: Sweep, folder: str | None) -> None:
    """The screen."""
    from rich.console import Console

    from crosscheck.reports.family_screen import sweep_screen

    console = Console(highlight=False, markup=False, emoji=False)
    console.print(sweep_screen(sweep, console.width, folder))


def sweep_status(sweep: Sweep) -> ExitStatus:
    """0 when all verdicts are within; refused members are no verdicts, unless all are."""
    if sweep.failed:
        return ExitStatus.FAILED
    if not sweep.solved:
        return ExitStatus.BAD_INPUT
    return ExitStatus.WITHIN if sweep.held else ExitStatus.NOT_WITHIN
