"""One bad or borderline input: its files, the command, and what must come of it."""

from __future__ import annotations

import signal
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

Content = str | bytes | Callable[[Path], Any]

CHANNEL = """\
units = "mm N"
[parameters]
t = 2
[points]
a = [30, 0]
b = [0, 0]
c = [0, 60]
d = [30, 60]
[[walls]]
name = "low"
path = ["a", "b"]
thickness = "t"
[[walls]]
name = "web"
path = ["b", "c"]
thickness = "t"
[[walls]]
name = "top"
path = ["c", "d"]
thickness = "t"
"""
BOX = """\
units = "mm N"
[points]
a = [0, 0]
b = [60, 0]
c = [60, 40]
d = [0, 40]
[[walls]]
name = "box"
path = ["a", "b", "c", "d", "a"]
thickness = 2
"""
COMPARE = ("compare", "given.toml", "--accuracy", "1e-2")
# Lies outside the folder that a trial's files are in; its text must turn up nowhere.
SECRET = "the text that nobody named"


@dataclass(frozen=True)
class Trial:
    """A row of the corpus.

    ``files``: by name, content or a function that makes the file; ``status``: the exit status; ``words``: all
    of them stand in what is said on the error stream, or on both where the status is 0 or 1; ``long``: takes
    more than a few seconds.
    """

    name: str
    files: dict[str, Content]
    status: int
    words: tuple[str, ...] = ()
    command: tuple[str, ...] = COMPARE
    never: tuple[str, ...] = field(default=())
    long: bool = False

    def lay(self, folder: Path) -> None:
        """Write the files."""
        for name, content in self.files.items():
            path = folder / name
            path.parent.mkdir(parents=True, exist_ok=True)
            if callable(content):
                content(path)
            else:
                path.write_bytes(content.encode() if isinstance(content, str) else content)


def section(
    name: str,
    content: Content,
    status: int,
    *words: str,
    command: tuple[str, ...] = COMPARE,
    long: bool = False,
    **files: Content,
) -> Trial:
    """A trial of one section file; others beside it by keyword, ``_csv`` for ``.csv`` and so on."""
    beside = {key.replace("_", "."): value for key, value in files.items()}
    return Trial(name, {"given.toml": content, **beside}, status, words, command, long=long)


def channel(old: str, new: str) -> str:
    """The channel with something replaced."""
    assert old in CHANNEL, old
    return CHANNEL.replace(old, new)


def outlined(**keys: str) -> str:
    """A section file of an outline alone."""
    return 'units = "mm N"\n[outline]\n' + "".join(f"{key} = {value}\n" for key, value in keys.items())


class TookTooLong(BaseException):
    """No Exception: nothing that a command catches may catch it."""


@contextmanager
def time_limit(seconds: float) -> Iterator[None]:
    """Raises TookTooLong in the main thread after so much processor time, or five times that on the clock.

    A loaded machine must not fail a test.
    """

    def late(*_: object) -> None:
        raise TookTooLong(f"more than {seconds:g} s")

    timers = {signal.SIGPROF: signal.ITIMER_PROF, signal.SIGALRM: signal.ITIMER_REAL}
    before = {number: signal.signal(number, late) for number in timers}
    signal.setitimer(signal.ITIMER_PROF, seconds)
    signal.setitimer(signal.ITIMER_REAL, 5.0 * seconds)
    try:
        yield
    finally:
        for number, timer in timers.items():
            signal.setitimer(timer, 0.0)
            signal.signal(number, before[number])
