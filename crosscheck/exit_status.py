"""Exit statuses of the command line."""

from __future__ import annotations

from enum import IntEnum


class ExitStatus(IntEnum):
    """What a command found: the larger number wins where several sections were given."""

    WITHIN = 0
    NOT_WITHIN = 1
    BAD_INPUT = 2
    FAILED = 3
    INTERRUPTED = 130
