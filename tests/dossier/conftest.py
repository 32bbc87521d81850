"""A package of a small section, made once, and a page of hostile words."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path

import pytest

from crosscheck.command_line import main
from crosscheck.dossier.evidence import SectionEvidence, gather
from crosscheck.section_file.reader import read_section
from crosscheck.verification.check import CheckOutcome
from crosscheck.verification.evidence_files import outcome_keys

from .sections import RAIL, hostile_file

# One day, in seconds since 1970, as reproducible builds name it.
DAY = 1_767_225_600


@dataclass(frozen=True)
class Made:
    """A package with its section file and what the command printed."""

    folder: Path
    section: Path
    evidence: Path

    def text(self, name: str) -> str:
        """A file of the package as text."""
        return (self.folder / name).read_text(encoding="utf-8")

    @property
    def result(self) -> dict:
        """The result of its section."""
        return json.loads(self.text("rail/result.json"))


def suite_file(path: Path, *, failed: bool = False) -> Path:
    """Evidence as ``verify --json`` writes it, of two checks."""
    outcomes = [
        CheckOutcome("circle, J", "closed formulas", "both", True, 2e-7, 1e-6, "found 2e-7, allowed 1e-6"),
        CheckOutcome(
            "patch", "exactness", "fe", not failed, 3e-9 if failed else 1e-10, 1e-9, "a linear field"
        ),
    ]
    keys = {
        "schema": "crosscheck.verification/1",
        "version": "0.1.0",
        "quick": False,
        "whole": True,
        "obtained": {"exact": 2},
        "outcomes": [outcome_keys(outcome) for outcome in outcomes],
    }
    path.write_text(json.dumps(keys), encoding="utf-8")
    return path


@pytest.fixture(scope="session")
def package(tmp_path_factory) -> Made:
    """The package of the winch rail, made by the command on a fixed day."""
    home = tmp_path_factory.mktemp("dossier")
    section = home / "rail.toml"
    section.write_text(RAIL, encoding="utf-8")
    evidence = suite_file(home / "evidence.json")
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("SOURCE_DATE_EPOCH", str(DAY))
        status = main(["dossier", str(section), "--evidence", str(evidence), "--out", str(home / "package")])
    assert status in (0, 1)
    return Made(home / "package", section, evidence)


@pytest.fixture(scope="session")
def rail(package) -> SectionEvidence:
    """Evidence of the winch rail."""
    return gather(read_section(str(package.section)), 1e-5, lambda _: None)


@pytest.fixture(scope="session")
def hostile_evidence(tmp_path_factory) -> SectionEvidence:
    """Evidence of a section whose words a careless writer would run."""
    path = tmp_path_factory.mktemp("hostile") / "rail.toml"
    path.write_text(hostile_file(), encoding="utf-8")
    return gather(read_section(str(path)), 1e-5, lambda _: None)
