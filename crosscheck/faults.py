"""Faults of an input, one line each, and the package's error tree.

CrosscheckError
    ExpressionError     arithmetic that cannot be evaluated
    SectionFaults       everything wrong with one section file (exit status 2)
    SolverFailure       one side could not solve the section (exit status 3)
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from itertools import islice
from typing import Any

KeyPath = tuple[str | int, ...]

_SHOWN_CHARACTERS = 80
_SHOWN_ENTRIES = 6
_NEAREST_SEARCHED = 2000
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+\Z")


class CrosscheckError(Exception):
    """Root of every error that this package raises on purpose."""


class ExpressionError(CrosscheckError):
    """Arithmetic that cannot be evaluated.

    Parameters
    ----------
    reason : what is wrong, in words
    name : the unknown name, when that is what is wrong
    """

    def __init__(self, reason: str, name: str | None = None) -> None:
        super().__init__(reason, name)
        self.reason = reason
        self.name = name

    def __str__(self) -> str:
        return self.reason


@dataclass(frozen=True)
class Fault:
    """One thing wrong with an input: where, what was found, what is allowed, what to do.

    `allowed` completes the sentence "must be ..."; `found` completes "got ...".
    """

    file: str
    key: str
    found: str
    allowed: str
    remedy: str = ""

    @property
    def text(self) -> str:
        """The fault as one line: `lipped.toml: walls[2].thickness: must be > 0, got -1.2`."""
        place = ": ".join(part for part in (self.file, self.key) if part)
        line = f"{place}: must be {self.allowed}, got {self.found}"
        return f"{line}; {self.remedy}" if self.remedy else line

    def __str__(self) -> str:
        return self.text


class SectionFaults(CrosscheckError):
    """Everything found wrong with one section file, in the order of the file.

    Parameters
    ----------
    faults : the faults
    left_out : how many more were found than are listed
    """

    def __init__(self, faults: Sequence[Fault], left_out: int = 0) -> None:
        super().__init__(tuple(faults), left_out)
        self.faults = tuple(faults)
        self.left_out = left_out

    @property
    def lines(self) -> tuple[str, ...]:
        """One line per fault, and a last one for those left out."""
        lines = [fault.text for fault in self.faults]
        if self.left_out:
            lines.append(f"{self.faults[0].file}: and {self.left_out} more faults")
        return tuple(lines)

    def __str__(self) -> str:
        return "\n".join(self.lines)


class SolverFailure(CrosscheckError):
    """One side could not solve a section that was read without fault.

    Parameters
    ----------
    side : "theory" or "fe"
    where : stage, wall or load at which it failed
    reason : what happened, and what to try
    """

    def __init__(self, side: str, where: str, reason: str) -> None:
        super().__init__(side, where, reason)
        self.side = side
        self.where = where
        self.reason = reason

    def __str__(self) -> str:
        return f"{self.side}: {self.where}: {self.reason}"


def one_line(text: str, limit: int = _SHOWN_CHARACTERS) -> str:
    """Text on one line, at most `limit` characters, with unprintable characters escaped.

    A section file is not trusted: nothing in it may send control sequences to a terminal.
    """
    cut = text[:limit]
    safe = "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in cut)
    return safe + ("..." if len(text) > limit else "")


def quoted(text: str) -> str:
    """Text on one line, in double quotes."""
    return f'"{one_line(text)}"'


def shown(value: Any, depth: int = 2) -> str:
    """A value as it would be written in a section file, cut to a bounded length."""
    if value is None:
        return "nothing"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return quoted(value)
    if isinstance(value, int) and value.bit_length() > 100:
        return f"an integer of about {int(value.bit_length() * 0.30103) + 1} digits"
    if isinstance(value, dict):
        if depth == 0:
            return "{...}" if value else "{}"
        entries = [
            f"{key_text((k,))} = {shown(v, depth - 1)}" for k, v in islice(value.items(), _SHOWN_ENTRIES)
        ]
        more = ", ..." if len(value) > _SHOWN_ENTRIES else ""
        return one_line("{ " + ", ".join(entries) + more + " }") if value else "{}"
    if isinstance(value, (list, tuple)):
        if depth == 0:
            return "[...]" if value else "[]"
        entries = [shown(v, depth - 1) for v in value[:_SHOWN_ENTRIES]]
        return one_line("[" + ", ".join(entries) + (", ..." if len(value) > _SHOWN_ENTRIES else "") + "]")
    return one_line(str(value))


def key_text(path: KeyPath) -> str:
    """A path of keys and indices (from 0) as text: ("walls", 2, "thickness") is walls[2].thickness."""
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part}]"
        else:
            key = part if _BARE_KEY.match(part) and len(part) <= _SHOWN_CHARACTERS else quoted(part)
            text += f".{key}" if text else key
    return text


def nearest(name: str, known: Iterable[str]) -> str | None:
    """The known name most like the given one, or None when nothing is like it."""
    by_lower: dict[str, str] = {}
    for candidate in islice(known, _NEAREST_SEARCHED):
        by_lower.setdefault(candidate.lower(), candidate)
    close = get_close_matches(name[:_SHOWN_CHARACTERS].lower(), by_lower, n=1, cutoff=0.6)
    return by_lower[close[0]] if close else None


class FaultList:
    """Collects the faults of one file while reading goes on, up to a limit.

    Parameters
    ----------
    file : the file as the user named it
    limit : how many faults are kept; more are counted only
    """

    def __init__(self, file: str, limit: int = 100) -> None:
        self.file = one_line(file, 300)
        self.limit = limit
        self.left_out = 0
        self._faults: list[tuple[KeyPath, Fault]] = []
        self._aliases: dict[KeyPath, str] = {}

    def alias(self, path: KeyPath, text: str) -> None:
        """Name an entry, or what is below it, by where it really stands, such as a line of a table."""
        self._aliases[path] = one_line(text, 200)

    def __len__(self) -> int:
        return len(self._faults)

    @property
    def full(self) -> bool:
        """True when further faults are only counted."""
        return len(self._faults) >= self.limit

    def any_at(self, path: KeyPath) -> bool:
        """True when a fault is noted at a key path or below it."""
        return any(where[: len(path)] == path for where, _ in self._faults)

    def add(
        self,
        path: KeyPath,
        found: str,
        allowed: str,
        remedy: str = "",
        *,
        near: tuple[str, Iterable[str]] | None = None,
        key: str | None = None,
    ) -> None:
        """Note a fault at a key path; `near` = (name, known names) adds "did you mean ...?"."""
        if self.full:
            self.left_out += 1
            return
        if near is not None and (match := nearest(*near)) is not None:
            hint = f"did you mean {quoted(match)}?"
            remedy = f"{remedy}; {hint}" if remedy else hint
        text = self.key(path) if key is None else one_line(key)
        self._faults.append((path, Fault(self.file, text, found, allowed, remedy)))

    def key(self, path: KeyPath) -> str:
        """A key path as text, the alias of its longest part in front of what follows it."""
        for length in range(len(path) if self._aliases else 0, 1, -1):
            if path[:length] in self._aliases:
                alias, rest = self._aliases[path[:length]], path[length:]
                return f"{alias}: {key_text(rest)}" if rest else alias
        return key_text(path)

    def raise_any(self, document: Any = None) -> None:
        """Raise SectionFaults with all faults in the order of the document's keys, if there are any."""
        if not self._faults:
            return
        order = _key_order(document)

        def position(path: KeyPath) -> int:
            while path not in order:
                path = path[:-1]
            return order[path]

        ordered = sorted(self._faults, key=lambda item: position(item[0]))
        raise SectionFaults([fault for _, fault in ordered], self.left_out)


def _key_order(document: Any, depth: int = 4) -> dict[KeyPath, int]:
    """Number of every key path down to a depth, in reading order; () is 0."""
    order: dict[KeyPath, int] = {}

    def visit(path: KeyPath, node: Any) -> None:
        order[path] = len(order)
        if len(path) == depth:
            return
        if isinstance(node, dict):
            for key, child in node.items():
                visit((*path, key), child)
        elif isinstance(node, list):
            for index, child in enumerate(node):
                visit((*path, index), child)

    visit((), document)
    return order
