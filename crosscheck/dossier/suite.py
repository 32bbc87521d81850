"""Stored evidence of ``verify``: read, hashed and summed up; never run from here."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from crosscheck.faults import Fault, FaultList, SectionFaults
from crosscheck.reports.wording import percent_text
from crosscheck.section_file.source import plain_content

LIMIT = 50_000_000


@dataclass(frozen=True)
class SuiteCheck:
    """One check of the suite: what it found over what it allows, and whether it passed."""

    name: str
    group: str
    side: str
    share: float | None
    passed: bool
    detail: str
    known_problem: bool


@dataclass(frozen=True)
class SuiteEvidence:
    """The evidence file with its hash, its checks and what it says of itself.

    ``whole``: all that ships was to run; ``obtained``: comparisons by how their value was obtained.
    """

    name: str
    content: bytes
    sha256: str
    version: str
    whole: bool
    quick: bool
    obtained: Mapping[str, int]
    checks: tuple[SuiteCheck, ...]

    @property
    def passed(self) -> int:
        """Number of checks that passed."""
        return sum(check.passed for check in self.checks)

    @property
    def words(self) -> str:
        """The outcome in a sentence."""
        judged = [c for c in self.checks if c.passed and c.share is not None and not c.known_problem]
        worst = max(judged, key=lambda c: c.share or 0.0, default=None)
        part = "" if self.whole and not self.quick else " of a part of the suite"
        text = f"Verification suite: {self.passed} of {len(self.checks)} checks{part} passed"
        return (
            f"{text}; the tightest uses {percent_text(worst.share or 0.0)} of what it allows."
            if worst
            else f"{text}."
        )


def read_suite(path: str) -> SuiteEvidence:
    """Evidence that ``verify --json`` wrote.

    Raises
    ------
    SectionFaults
        Where the file cannot be read or holds no checks.
    """
    allowed = "evidence that 'crosscheck verify --json PATH' wrote"
    content = plain_content(path, FaultList(path), allowed, LIMIT)
    try:
        data = json.loads(content)
        checks = tuple(_check(entry) for entry in data["outcomes"])
        obtained = {str(way): int(count) for way, count in data["obtained"].items()}
        version, whole, quick = str(data["version"]), bool(data["whole"]), bool(data["quick"])
    except (ValueError, KeyError, TypeError, AttributeError, RecursionError):
        raise SectionFaults([Fault(path, "outcomes", "no list of outcomes", allowed)]) from None
    if not checks:
        raise SectionFaults([Fault(path, "outcomes", "an empty list", allowed)])
    digest = hashlib.sha256(content).hexdigest()
    return SuiteEvidence(Path(path).name, content, digest, version, whole, quick, obtained, checks)


def _check(entry: Mapping[str, Any]) -> SuiteCheck:
    """One outcome of the file."""
    share = entry["share"]
    return SuiteCheck(
        str(entry["name"]),
        str(entry["group"]),
        str(entry["side"]),
        None if share is None else float(share),
        bool(entry["passed"]),
        str(entry["detail"]),
        bool(entry.get("known_problem")),
    )
