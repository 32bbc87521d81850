"""The limits that the page of the section file states are those that the code keeps."""

from __future__ import annotations

import re
from pathlib import Path

from crosscheck.drawings import dxf
from crosscheck.section_file import arithmetic, keys, outline
from fe_models import apart, boundary_points, errors, mesh_file, solution

PAGE = Path(__file__).parents[2] / "cases" / "sections" / "README.md"


def stated() -> dict[str, list[float]]:
    """Numbers of each row of the table of limits."""
    text = PAGE.read_text(encoding="utf-8").partition("\n## Limits\n")[2].partition("\n## ")[0]
    rows = re.findall(r"^\| ([^|]+) \| ([^|]+) \|$", text, re.MULTILINE)
    return {
        name: [float(n.replace(",", "")) for n in re.findall(r"-?\d[\d,]*(?:e-?\d+)?", limits)]
        for name, limits in rows
    }


def test_page_states_what_the_code_keeps():
    entries = keys.ENTRY_LIMITS
    assert list(stated().values())[1:] == [
        [keys.FILE_LIMIT / 1e6, keys.FILE_LIMIT / 1e6, outline.DRAWING_LIMIT / 1e6],
        [keys.WALL_LIMIT],
        [entries[name] for name in ("parameters", "booms", "loads", "probes", "cuts")],
        [arithmetic.TEXT_LIMIT, arithmetic.NESTING_LIMIT, arithmetic.EXPONENT_LIMIT],
        [keys.KEY_PARTS_LIMIT],
        [0, float(f"{1 / keys.NUMBER_LIMIT:g}"), keys.NUMBER_LIMIT],
        [keys.OFFSET_LIMIT],
        [keys.SLENDERNESS_LIMIT],
        [outline.PLACE_LIMIT, outline.RING_LIMIT],
        [dxf.ENTITY_LIMIT, dxf.VISIT_LIMIT, dxf.NESTING_LIMIT],
        [mesh_file.MOST_PLACES],
        [boundary_points.MOST_POINTS, solution.MOST_UNKNOWNS],
    ]
    text = PAGE.read_text(encoding="utf-8")
    assert f"within {apart.SECONDS:g} s and {apart.MEMORY / 1e9:g} GB" in text


def test_refusals_state_them_too():
    assert f"at most {boundary_points.MOST_POINTS} points" in errors.ALLOWED["points"]
    assert f"at most {solution.MOST_UNKNOWNS} unknowns" in errors.ALLOWED["unknowns"]
