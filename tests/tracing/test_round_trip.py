"""Every shipped section as a drawing, its walls found again: the same walls, joints, cells and numbers."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from drawn_parts import drawn
from numpy.testing import assert_allclose
from wall_graph import counts

import beam_theory
import fe_models
from crosscheck.case_files import case_folder
from crosscheck.comparison.models import fe_section, theory_section
from crosscheck.section_file.model import SectionFile
from crosscheck.section_file.reader import read_section
from crosscheck.tracing.drawing_source import DrawingSource
from crosscheck.tracing.idealising import Idealisation, idealise

FILES = sorted(p for name in ("sections", "templates") for p in (case_folder() / name).glob("*.toml"))
UNITS = {("mm", "N"): "mm N", ("in", "lbf"): "in lbf", ("m", "N"): "m N", ("m", "kN"): "m kN"}


def plain(section: SectionFile) -> SectionFile:
    """Of one material, without booms: what a drawing tells, for both sides."""
    walls = tuple(
        replace(w, material=None, direct_share=1.0, theory_share=None, seen_by="both")
        for w in section.walls
        if w.seen_by != "theory"
    )
    return replace(section, walls=walls, booms=(), cuts=(), materials={}, base_material=None)


def traced(section: SectionFile) -> Idealisation:
    units = UNITS[section.length_unit, section.force_unit]
    return idealise(DrawingSource(Path("part.dxf"), drawn(section), "part", units, {"file": "part.dxf"}))


@pytest.mark.parametrize("path", FILES, ids=lambda p: f"{p.parent.name}-{p.stem}")
def test_walls_come_back(path: Path) -> None:
    section = read_section(path)
    if section.outline is not None:
        assert path.parent.name == "sections", "templates are given by walls"
        return
    section = plain(section)
    found = traced(section)
    assert counts(found.section) == counts(section)
    before, after = (fe_models.outline_of_walls(fe_section(s)) for s in (section, found.section))
    assert_allclose(after.moments(np.zeros(2)).area, before.moments(np.zeros(2)).area, rtol=5e-3)
    mine, theirs = (beam_theory.solve(theory_section(s)).quantities for s in (found.section, section))
    assert_allclose(mine["torsion_constant"].value, theirs["torsion_constant"].value, rtol=1e-2)
    assert_allclose(mine["area"].value, theirs["area"].value, rtol=5e-3)
    for name in ("shear_centre_x", "shear_centre_y"):
        if theirs[name].value is None:
            assert mine[name].value is None
        else:
            assert_allclose(mine[name].value, theirs[name].value, rtol=0, atol=5e-3 * before.extent)
    assert found.quality.distance is not None
    assert found.quality.distance < 0.05 * found.quality.thickness
