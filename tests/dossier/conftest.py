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

# One day, in seconds since 1970, as reproducible builds name it.
DAY = 1_767_225_600

RAIL = """\
schema = 1
title = "Winch rail, plain channel"
units = "mm N"
[parameters]
t = 4
[materials.sheet]
E = 72000
nu = 0.33
[points]
a = [35, 0]
b = [0, 0]
c = [0, 80]
d = [35, 80]
[[walls]]
name = "lower flange"
path = ["a", "b"]
thickness = "t"
[[walls]]
name = "web"
path = ["b", "c"]
thickness = "t"
[[walls]]
name = "upper flange"
path = ["c", "d"]
thickness = "t"
[[loads]]
name = "pull"
shear = [0, -1200]
through = "b"
[[loads]]
name = "jerk"
shear = [300, -2100]
through = "c"
torque = 9000
[[probes]]
label = "rivets"
wall = "web"
at = 0.3
[[stated]]
quantity = "torsion_constant"
value = 3200
source = "data sheet"
[tolerances]
thickness = 0.04
dimension = 0.5
[document]
number = "WR-17"
issue = "B"
date = "2 March"
part = "winch rail"
prepared = "A. Nother"
intended_use = "Sizing of the winch rail of the cargo glider."
changes = [
  { issue = "A", date = "1 March", text = "first issue" },
  { issue = "B", date = "2 March", text = "jerk" },
]
"""


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
