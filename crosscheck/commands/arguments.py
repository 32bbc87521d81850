"""Arguments and steps that several sub-commands share."""

from __future__ import annotations

import argparse
import math
import sys
from collections.abc import Iterable
from contextlib import contextmanager
from typing import TYPE_CHECKING, NoReturn

if TYPE_CHECKING:
    from collections.abc import Iterator

    from crosscheck.comparison.comparing import Progress

# fe_models.ACCURACY_RANGE in words, which help must not load.
ACCURACY_WORDS = "from 1e-08 to 0.01"


class OneLineParser(argparse.ArgumentParser):
    """Parser that tells a bad argument in one line, without the usage block; ``-h`` has that."""

    def error(self, message: str) -> NoReturn:
        self.exit(2, f"{self.prog}: {plain_line(message)}\n")


def accuracy(text: str) -> float:
    """Accuracy asked for, within fe_models.ACCURACY_RANGE."""
    from fe_models import ACCURACY_RANGE

    low, high = ACCURACY_RANGE
    try:
        value = float(text)
    except ValueError:
        value = math.nan
    if not low <= value <= high:
        raise argparse.ArgumentTypeError(f"must be a number from {low:g} to {high:g}, got {text!r}")
    return value


def worker_count(text: str) -> int:
    """Number of worker processes."""
    if not text.isdecimal() or not 1 <= int(text) <= 256:
        raise argparse.ArgumentTypeError(f"must be a whole number from 1 to 256, got {text!r}")
    return int(text)


def add_model_arguments(command: argparse.ArgumentParser) -> None:
    """Accuracy and overriding of parameters."""
    command.add_argument(
        "--accuracy",
        type=accuracy,
        default=1e-5,
        metavar="1e-5",
        help="half-width asked of FE's intervals, of J and of the larger overall dimension, "
        f"{ACCURACY_WORDS} (default 1e-5)",
    )
    command.add_argument(
        "--set",
        dest="overrides",
        action="append",
        default=[],
        metavar='"t = 2.5"',
        help="replace a parameter of the section file; may be given several times",
    )


def complain(lines: Iterable[str]) -> None:
    """Faults, one line each, on the error stream."""
    for line in lines:
        sys.stderr.write(plain_line(str(line)) + "\n")


def plain_line(text: str) -> str:
    """Text on one line of bounded length that sends nothing but letters to a terminal."""
    line = " ".join(text.split())[:1900]
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in line)


@contextmanager
def told_progress() -> Iterator[Progress]:
    """Progress on the error stream where that is a terminal; silent otherwise."""
    if not sys.stderr.isatty():
        yield lambda _: None
        return
    from rich.console import Console

    console = Console(stderr=True, highlight=False, markup=False)
    with console.status("starting") as status:
        yield lambda text: status.update(text)
