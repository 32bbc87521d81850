"""The command line: reads arguments, calls, prints, returns a status. Nothing heavy is imported for help."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence

from crosscheck.commands import compare, dossier, draw, idealise, sweep, template, threshold, verify
from crosscheck.commands.arguments import OneLineParser, plain_line
from crosscheck.exit_status import ExitStatus
from crosscheck.stopping import prompt_stop

DESCRIPTION = """\
Classical thin-walled beam theory beside a warping finite-element model of the real outline: every difference
with an error bar, a verdict and a factor."""
EPILOG = """\
exit status: 0 all verdicts within; 1 some verdict is not, or a self-check failed; 2 bad input; 3 a solver
failed. Verification and model comparison: not test evidence, not approval. The applicable code and a licensed
engineer decide."""


def parser() -> argparse.ArgumentParser:
    """Parser of the whole command line."""
    top = OneLineParser(
        prog="crosscheck",
        description=DESCRIPTION,
        epilog=EPILOG,
        formatter_class=argparse.RawDescriptionHelpFormatter,
        allow_abbrev=False,
    )
    top.add_argument("--version", action="store_true", help="print the version and stop")
    commands = top.add_subparsers(dest="command", metavar="COMMAND", title="commands")
    for command in (compare, draw, idealise, sweep, template, threshold, verify, dossier):
        command.add(commands)
    return top


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command.

    Parameters
    ----------
    argv : sequence of str, optional
        Arguments without the program's name; those of the process when left out.

    Returns
    -------
    int
        Exit status, see :class:`crosscheck.exit_status.ExitStatus`.
    """
    try:
        with prompt_stop():
            return _run(argv)
    except BrokenPipeError:
        # The reader of a pipe went away (head, less): what is left has nowhere to go.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return ExitStatus.FAILED
    except KeyboardInterrupt:
        _complain("crosscheck: stopped")
        return ExitStatus.INTERRUPTED
    except Exception as fault:  # No traceback reaches a user, whatever goes wrong.
        _complain(f"crosscheck: internal fault: {type(fault).__name__}: {fault}")
        return ExitStatus.FAILED


def _run(argv: Sequence[str] | None) -> int:
    """Parse and run; argparse's own exits become statuses."""
    top = parser()
    try:
        arguments = top.parse_args(argv)
    except SystemExit as stop:
        return int(stop.code or 0)
    if arguments.version:
        from crosscheck.comparison.provenance import installed_version

        sys.stdout.write(f"crosscheck {installed_version('crosscheck')}\n")
        return ExitStatus.WITHIN
    if arguments.command is None:
        top.print_help(sys.stderr)
        return ExitStatus.BAD_INPUT
    status = int(arguments.run(arguments))
    sys.stdout.flush()
    return status


def _complain(text: str) -> None:
    """One line on the error stream."""
    sys.stderr.write(f"{plain_line(text)}\n")
