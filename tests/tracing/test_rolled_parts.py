"""Rolled and cold-formed sections with fillets, toe radii and slopes: their walls and radii come out."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any

import pytest
from drawn_parts import drawn
from numpy.testing import assert_allclose

from crosscheck.case_files import case_folder
from crosscheck.section_file.reader import read_section
from crosscheck.tracing.drawing_source import DrawingSource
from crosscheck.tracing.idealising import Idealisation, idealise

REFERENCE = case_folder() / "reference"
ROWS = tomllib.loads((REFERENCE / "rolled_sections.toml").read_text(encoding="utf-8"))["cases"]
# By the first word that the name of the section file holds.
WALLS = {"cold": 5, "lipped": 5, "channel": 3, "angle": 2, "tee": 3, "hollow": 4, "tube": 2, "i": 5}
CASES = {str((row["section"], row.get("set"))): row for row in ROWS}


def found_in(row: dict[str, Any]) -> Idealisation:
    section = read_section(REFERENCE / row["section"], row.get("set", {}))
    solid = section.outline or drawn(section)
    return idealise(DrawingSource(Path("part.dxf"), solid, row["name"], "mm N", {"file": "part.dxf"}))


@pytest.mark.parametrize("row", CASES.values(), ids=lambda row: row["name"])
def test_walls_of_rolled_sections(row: dict[str, Any]) -> None:
    found, given = found_in(row), row.get("set", {})
    kind = next(k for k in WALLS if k in Path(row["section"]).stem)
    assert len(found.model.walls) == WALLS[kind]
    assert found.quality.good
    assert found.quality.apart is not None
    assert_allclose(found.quality.apart, 0.0, atol=5e-3)
    if "tw" in given:
        values = [t.value for t in found.names.thicknesses]
        assert min(abs(t - given["tw"]) for t in values) < 1e-3 * given["tw"]
    if "r" in given and "outline" in (REFERENCE / row["section"]).read_text(encoding="utf-8"):
        inner = [p.inner for p in found.model.points if p.inner]
        assert_allclose(inner, given["r"], rtol=1e-4)
