"""The journal of a batch: one line a point, checked and on disk before the next; exact after any end.

    checksum {"journal": 1, "points": 23, "inputs": {...}}
    checksum {"number": 0, "found": ...}
    checksum {"number": 2, "failure": ["crash", "..."]}

The checksum is the first 16 hexadecimal digits of the SHA-256 of the rest of the line.
"""

from __future__ import annotations

import hashlib
import json
import os
from array import array
from collections.abc import Iterator, Mapping
from contextlib import suppress
from pathlib import Path
from typing import Any, BinaryIO

from crosscheck.batch.task import BatchError, Outcome, outcome_from

FORMAT = 1
ABSENT = -1


class JournalMismatch(BatchError):
    """A journal that is there already and cannot be used as asked."""


class Journal:
    """Outcomes on disk, found again by the number of their point.

    Parameters
    ----------
    path : Path
        The file; its folder must exist.
    inputs : mapping
        What the outcomes depend on; plain JSON. A journal belongs to its inputs.
    points : int
        How many points the batch has.
    resume : bool
        True to go on with a journal that is there; without one a new one is begun.
    durable : bool
        False where the journal need not outlive a loss of power.

    Raises
    ------
    JournalMismatch
        Where the journal there belongs to other inputs, is in use, or is unfinished and not to be resumed.
    BatchError
        Where the file cannot be written.
    """

    def __init__(
        self, path: Path, inputs: Mapping[str, Any], points: int, *, resume: bool, durable: bool = True
    ) -> None:
        self.path = path
        self.points = points
        self.durable = durable
        self.places = array("q", [ABSENT]) * points
        self.done = 0
        self.end = 0
        header = {"journal": FORMAT, "points": points, "inputs": json.loads(json.dumps(inputs))}
        try:
            self.file: BinaryIO = open(path, "a+b", buffering=0)  # noqa: SIM115 - closed by close()
        except OSError as fault:
            raise self._unwritable(fault) from None
        try:
            self._lock()
            self._open(header, resume)
        except BaseException:
            self.file.close()
            raise

    def __enter__(self) -> Journal:
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    def __contains__(self, number: int) -> bool:
        """Whether the outcome of a point is there."""
        return self.places[number] != ABSENT

    def add(self, outcome: Outcome) -> None:
        """Write one outcome; it is on disk when this returns.

        Raises
        ------
        BatchError
            Where the disk is full or gone; what was written before stays usable.
        """
        place = self.end
        self._append(outcome.text)
        if outcome.number not in self:
            self.done += 1
        self.places[outcome.number] = place

    def outcomes(self) -> Iterator[Outcome]:
        """Outcomes in the order of the points, read one at a time; points without one are passed over."""
        with open(self.path, "rb") as stream:
            for place in self.places:
                if place != ABSENT:
                    stream.seek(place)
                    text = _checked(stream.readline())
                    if text is None:
                        raise BatchError(f"{self.path}: changed by something else while it was in use")
                    yield outcome_from(text)

    def close(self) -> None:
        """Let go of the file."""
        self.file.close()

    def _open(self, header: Mapping[str, Any], resume: bool) -> None:
        """Take up what is there, or begin."""
        text = json.dumps(header, ensure_ascii=False, sort_keys=True)
        found = self._header()
        if found is not None:
            if resume and found != text:
                raise JournalMismatch(self._differences(json.loads(found), header))
            self._read()
            if resume:
                # An unfinished last line goes, or the next one would be glued to it.
                self.file.truncate(self.end)
                return
            if self.done < int(json.loads(found)["points"]):
                raise JournalMismatch(
                    f"{self.path}: holds {self.done} of {json.loads(found)['points']} points of a run that "
                    "was stopped; add --resume to go on with it, remove it, or name another folder"
                )
        self.file.truncate(0)
        self.end, self.done = 0, 0
        self.places = array("q", [ABSENT]) * self.points
        self._append(text)

    def _header(self) -> str | None:
        """First line of the file; None where it has none."""
        self.file.seek(0)
        with open(self.path, "rb") as stream:
            line = stream.readline()
        if not line:
            return None
        text = _checked(line)
        if text is None and line.endswith(b"\n"):
            raise JournalMismatch(f"{self.path}: not a journal; remove it, or name another folder")
        return text

    def _read(self) -> None:
        """Find the outcomes that are there; a line that is not whole is as good as not written."""
        self.end = 0
        with open(self.path, "rb") as stream:
            for number, line in enumerate(iter(stream.readline, b"")):
                place = self.end
                if not line.endswith(b"\n"):
                    break
                self.end += len(line)
                text = _checked(line)
                if number == 0 or text is None:
                    continue
                outcome = outcome_from(text)
                if outcome.number >= len(self.places):
                    self.places.extend([ABSENT] * (outcome.number + 1 - len(self.places)))
                if outcome.number not in self:
                    self.done += 1
                self.places[outcome.number] = place

    def _append(self, text: str) -> None:
        """One line at the end, all of it or none."""
        content = text.encode()
        line = b"%s %s\n" % (_checksum(content), content)
        try:
            written = 0
            while written < len(line):
                written += self.file.write(line[written:])
            if self.durable:
                os.fsync(self.file.fileno())
        except OSError as fault:
            with suppress(OSError):
                self.file.truncate(self.end)
            raise self._unwritable(fault) from None
        self.end += len(line)

    def _unwritable(self, fault: OSError) -> BatchError:
        return BatchError(
            f"{self.path}: cannot be written ({fault.strerror or fault}): "
            f"{self.done} of {self.points} points are safe in it; make room and go on with --resume"
        )

    def _differences(self, found: Mapping[str, Any], header: Mapping[str, Any]) -> str:
        """What a journal was made with and what is asked now."""
        before, now = ({**each, **each["inputs"]} for each in (found, header))
        names = [name for name in (*now, *before) if name != "inputs" and before.get(name) != now.get(name)]
        told = "; ".join(
            f"{name} {json.dumps(before.get(name))[:60]}, now {json.dumps(now.get(name))[:60]}"
            for name in dict.fromkeys(names)
        )
        return (
            f"{self.path}: belongs to another run ({told}); leave the inputs as they were, remove it, or "
            "name another folder"
        )

    def _lock(self) -> None:
        """Two runs must not write to one journal; where the system has no such lock, none is taken."""
        try:
            import fcntl
        except ImportError:
            return
        try:
            fcntl.flock(self.file, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except OSError:
            raise JournalMismatch(f"{self.path}: in use by another run; wait for it to end") from None


def _checksum(content: bytes) -> bytes:
    return hashlib.sha256(content).hexdigest()[:16].encode()


def _checked(line: bytes) -> str | None:
    """Text of a line whose checksum is right, else None."""
    checksum, _, content = line.removesuffix(b"\n").partition(b" ")
    if not line.endswith(b"\n") or checksum != _checksum(content):
        return None
    return content.decode()
