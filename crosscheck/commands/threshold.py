"""``crosscheck threshold``: up to which value of a parameter each hand method holds."""

from __future__ import annotations

import argparse
import json
from pathlib import Path
from typing import TYPE_CHECKING

from crosscheck.commands.arguments import complain, told_progress
from crosscheck.commands.batch_arguments import add_family_arguments, family_of, hands_of
from crosscheck.commands.tracing_cost import tell_tracing_cost
from crosscheck.exit_status import ExitStatus

if TYPE_CHECKING:
    from crosscheck.family.threshold import Study

DESCRIPTION = """\
Find where the difference of each quantity crosses its criterion as one parameter of the section file varies,
at every level of theory. A second parameter gives a chart of where theory holds. The envelope written into
DIR is what compare takes with --envelope."""
EPILOG = """\
examples:
  crosscheck threshold cases/sections/stout_channel_hitch.toml --vary "thickness from 1 to 12"
  crosscheck threshold FILE --vary "t from 1 to 12 in 40 log" --quantity torsion_constant --criterion 0.05
  crosscheck threshold FILE --vary "t from 1 to 12" --vary "flange from 20 to 80 in 7" --out out"""
# crosscheck.comparison.result.LEVELS, which help must not load.
LEVELS = ("midline", "corrected", "lumped")


def add(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    """Declare the sub-command."""
    command = commands.add_parser(
        "threshold",
        help="up to where each hand method holds",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    add_family_arguments(command, ratio=False)
    command.add_argument(
        "--quantity",
        dest="quantities",
        action="append",
        default=[],
        metavar="NAME",
        help="only this quantity; several may be given (default: all)",
    )
    command.add_argument(
        "--level",
        dest="levels",
        action="append",
        default=[],
        choices=LEVELS,
        metavar="LEVEL",
        help=f"only this level of theory: {', '.join(LEVELS)} (default: all)",
    )
    command.add_argument(
        "--criterion", type=_share, metavar="0.05", help="criterion for every quantity, instead of the file's"
    )
    command.set_defaults(run=run, ratio=None)


def run(arguments: argparse.Namespace) -> int:
    """Scan, refine, show, write."""
    from rich.console import Console

    from crosscheck.batch.task import BatchError
    from crosscheck.commands.sweep import unknown_quantities
    from crosscheck.family.threshold import Choice, study
    from crosscheck.faults import SectionFaults
    from crosscheck.reports.threshold_screen import threshold_screen

    unknown = unknown_quantities(arguments.quantities)
    if unknown:
        complain(unknown)
        return ExitStatus.BAD_INPUT
    try:
        family = family_of(arguments)
        choice = Choice(tuple(arguments.quantities), tuple(arguments.levels), arguments.criterion)
        with told_progress() as tell:
            found = study(family, hands_of(arguments), choice, tell)
            if arguments.out is not None:
                tell("pictures")
                write_study(found, Path(arguments.out))
    except SectionFaults as faults:
        complain(faults.lines)
        return ExitStatus.BAD_INPUT
    except BatchError as fault:
        complain([str(fault)])
        return ExitStatus.BAD_INPUT
    except OSError as fault:
        complain([f"{arguments.out}: must be a folder that can be written, got: {fault.strerror or fault}"])
        return ExitStatus.BAD_INPUT
    console = Console(highlight=False, markup=False, emoji=False)
    console.print(threshold_screen(found, console.width, arguments.out))
    tell_tracing_cost(arguments)
    return study_status(found)


def write_study(found: Study, folder: Path) -> None:
    """Table, envelope, chart; all made before the first is written."""
    from crosscheck.family.validity import envelope_document
    from crosscheck.pictures.validity import validity_pictures
    from crosscheck.reports.threshold_screen import threshold_csv
    from crosscheck.whole_files import write_folder

    files = {
        "thresholds.csv": threshold_csv(found),
        "envelope.json": (json.dumps(envelope_document(found), indent=1, allow_nan=False) + "\n").encode(),
        **validity_pictures(found),
    }
    write_folder(folder, files)


def study_status(found: Study) -> ExitStatus:
    """0 when everything asked for holds for the file as it stands, at the level judged; no less is shown."""
    from crosscheck.family.validity import level_shown_first, levels_of

    if found.failed:
        return ExitStatus.FAILED
    if not levels_of(found):
        return ExitStatus.BAD_INPUT
    if len(found.lines) > 1:
        return ExitStatus.WITHIN
    today = [each for each in found.lines[0].of_level(level_shown_first(found)) if each.today is not None]
    held = bool(today) and all(each.holds_today for each in today)
    return ExitStatus.WITHIN if held else ExitStatus.NOT_WITHIN


def _share(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        value = 0.0
    if not 0.0 < value < 1.0:
        raise argparse.ArgumentTypeError(f"must be a number above 0 and below 1, got {text!r}")
    return value
