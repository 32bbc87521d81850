"""One case entered twice: from its drawing, and from the midline that an engineer writes down.

The drawing is a DXF made here corner by corner and arc by arc; the midline is a section file. Both go through
the reader, and FE solves a solid without walls against strips and joints.
"""

from __future__ import annotations

import math
from pathlib import Path

import ezdxf
import numpy as np

from crosscheck import read_section
from crosscheck.comparison.models import fe_solution

HEAD = 'schema = 1\ntitle = "Bracket"\nunits = "mm N"\n'
MIDLINE = (
    HEAD
    + """
[points]
a = [50, 100]
b = [0, 100]
c = [0, 0]
d = [70, 0]
[[walls]]
path = ["a", "b", "c", "d"]
thickness = 4
[corners]
every_bend = { inner_radius = 5 }
"""
)
DRAWING = HEAD + '[outline]\nfile = "bracket.dxf"\ndrawing_unit = "mm"\n'

# Bulge of a quarter circle, anticlockwise.
QUARTER = math.tan(math.pi / 8)


def draw(folder: Path) -> None:
    """Corners by hand: faces 2 off the midline, bends 5 inside and 9 outside."""
    document = ezdxf.new()
    outline = [
        (50, 102, 0), (7, 102, QUARTER), (-2, 93, 0), (-2, 7, QUARTER), (7, -2, 0), (70, -2, 0),
        (70, 2, 0), (7, 2, -QUARTER), (2, 7, 0), (2, 93, -QUARTER), (7, 98, 0), (50, 98, 0),
    ]  # fmt: skip
    document.modelspace().add_lwpolyline(outline, format="xyb", close=True)
    document.saveas(folder / "bracket.dxf")


def test_drawing_and_midline(tmp_path: Path) -> None:
    draw(tmp_path)
    found = {}
    for name, text in (("drawing", DRAWING), ("midline", MIDLINE)):
        path = tmp_path / f"{name}.toml"
        path.write_text(text, encoding="utf-8")
        section = read_section(path)
        assert (section.outline is not None) == (name == "drawing")
        found[name] = fe_solution(section, 1e-6).quantities
    one, two = found["drawing"], found["midline"]
    assert set(one) == set(two)
    for name, q in one.items():
        other = two[name]
        size = 104.0 if name.endswith(("_x", "_y")) and "area" not in name else abs(other.known)
        allowed = q.half_width + other.half_width + 1e-9 * size
        assert abs(q.known - other.known) <= allowed, (name, q, other)
    area = 4 * (50 - 7 + 100 - 14 + 70 - 7) + 2 * math.pi * (9**2 - 5**2) / 4
    np.testing.assert_allclose(one["area"].known, area, rtol=1e-12)


def test_a_slip_would_show(tmp_path: Path) -> None:
    """A bend drawn with the wrong radius is no longer the section that was written down."""
    draw(tmp_path)
    path = tmp_path / "slip.toml"
    path.write_text(MIDLINE.replace("inner_radius = 5", "inner_radius = 4.9"), encoding="utf-8")
    (tmp_path / "drawing.toml").write_text(DRAWING, encoding="utf-8")
    one = fe_solution(read_section(tmp_path / "drawing.toml"), 1e-5).quantities["torsion_constant"]
    two = fe_solution(read_section(path), 1e-5).quantities["torsion_constant"]
    assert abs(one.known - two.known) > one.half_width + two.half_width
