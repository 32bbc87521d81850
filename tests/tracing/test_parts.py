"""Parts as drawing offices and scanners give them: sensible walls, and what was lost is said."""

from __future__ import annotations

import math
import time
from pathlib import Path

import pytest
import shapely
import shapely.affinity
from drawn_parts import (
    block,
    bulb_extrusion,
    channel_polygon,
    drawn,
    filleted_extrusion,
    of_polygon,
    rounded_box_polygon,
    scanned,
    star,
    thick_ring,
)
from numpy.testing import assert_allclose
from shapely.geometry import box

from crosscheck.case_files import case_folder
from crosscheck.section_file.reader import read_section
from crosscheck.tracing.drawing_source import DrawingSource
from crosscheck.tracing.idealising import Idealisation, idealise
from fe_models import Solid


def found_in(solid: Solid) -> Idealisation:
    start = time.process_time()
    found = idealise(DrawingSource(Path("part.dxf"), solid, "part", "mm N", {"file": "part.dxf"}))
    assert time.process_time() - start < 5.0
    return found


def thicknesses(found: Idealisation) -> list[float]:
    return sorted(t.value for t in found.names.thicknesses)


def test_extrusion_with_bulbs_and_varying_walls() -> None:
    found = found_in(bulb_extrusion())
    assert (len(found.model.walls), len(found.model.points), found.model.cells) == (5, 6, 0)
    # a round bulb, a square one, and a boss on the base
    areas = sorted(lump.area for lump in found.model.lumps)
    assert len(areas) == 3
    bulb, square = math.pi * 4.5**2, 8 * 6
    assert bulb - 2.4 * 9 < areas[2] < bulb
    assert square - 3.2 * 6 < areas[1] < square
    assert {lump.point is None for lump in found.model.lumps} == {True, False}
    apart = found.quality.apart
    assert apart is not None
    assert_allclose(apart, 0.0, atol=5e-3)
    tapered = [w for w in found.model.walls if w.thickness[0] != w.thickness[1]]
    assert len(tapered) == 2


def test_fillets_drawn_in_chords_become_corners() -> None:
    found = found_in(filleted_extrusion())
    assert_allclose(thicknesses(found), [2.0, 2.5, 3.0], rtol=1e-3)
    inner = [p.inner for p in found.model.points if p.kind != "free end"]
    assert_allclose(inner, 1.5, rtol=2e-3)
    assert found.quality.distance is not None
    assert found.quality.distance < 0.01
    assert "lines and arcs" in found.text


def test_three_cell_box_and_hat_with_bends() -> None:
    box = found_in(drawn(read_section(case_folder() / "sections" / "three_cell_wing_box.toml")))
    assert (len(box.model.walls), box.model.cells, len(box.remarks)) == (10, 3, 0)
    hat = found_in(drawn(read_section(case_folder() / "templates" / "hat.toml")))
    assert len(hat.model.walls) == 5
    bends = [p for p in hat.model.points if p.kind == "corner"]
    assert all(p.inner is not None and p.outer is None for p in bends)


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_scan_like_channel(seed: int) -> None:
    """2,000 segments, every place off by up to 2 % of the thickness."""
    found = found_in(scanned(channel_polygon(), 2000, 0.02 * 2.4, seed))
    assert (len(found.model.walls), len(found.model.points)) == (4, 5)
    assert_allclose(thicknesses(found), 2.4, rtol=0.01)
    assert found.model.noise == pytest.approx(0.02 * 2.4 / math.sqrt(3), rel=0.3)
    assert "the boundary is uneven" in found.text
    assert found.quality.good


def test_scan_like_box_with_round_corners() -> None:
    found = found_in(scanned(rounded_box_polygon(), 2000, 0.02 * 3.0))
    assert (len(found.model.walls), found.model.cells) == (4, 1)
    assert_allclose(thicknesses(found), 3.0, rtol=0.01)
    assert_allclose([p.inner for p in found.model.points], 5.0, rtol=0.05)


@pytest.mark.parametrize(
    ("solid", "number"),
    [(block(), "1.3 times as long as thick"), (thick_ring(), "0.78 times"), (star(), "only 0 %")],
    ids=["block", "ring", "star"],
)
def test_solid_parts_are_said_to_be_no_thin_walls(solid: Solid, number: str) -> None:
    found = found_in(solid)
    assert not found.quality.good
    assert any(number in reason for reason in found.quality.unsuited)
    assert "thin-walled theory has no business here" in found.text


def test_webs_close_together_keep_their_places() -> None:
    """Two webs nearer than a joint on one flange: two joints and the flange between them."""
    found = found_in(
        of_polygon(shapely.union_all([box(0, 0, 80, 2), box(30, 0, 32, 40), box(35, 0, 37, 40)]))
    )
    assert (len(found.model.walls), len(found.model.points)) == (5, 6)
    joints = sorted(float(p.place[0]) for p in found.model.points if p.kind == "joint")
    assert_allclose(joints, [31.0, 36.0], atol=1e-6)
    assert found.quality.apart is not None
    assert_allclose(found.quality.apart, 0.0, atol=1e-6)


def test_step_of_thickness_is_where_it_is_drawn() -> None:
    found = found_in(
        of_polygon(shapely.union_all([box(0, -2, 40, 2), box(40, -1, 90, 1), box(88, -1, 90, 30)]))
    )
    assert any(abs(p.place[0] - 40.0) < 1e-6 and abs(p.place[1]) < 1e-6 for p in found.model.points)
    assert_allclose(thicknesses(found), [2.0, 4.0], rtol=1e-6)


def test_walls_off_each_other_s_midline_are_moved_and_said_to_be() -> None:
    found = found_in(of_polygon(shapely.union_all([box(0, 0, 40, 4), box(40, 0, 90, 2), box(88, 0, 90, 30)])))
    assert any("moved by 0.5" in remark.text for remark in found.remarks)
    assert "[1]" in found.text


@pytest.mark.parametrize("degrees", [17.0, 33.0, 90.0])
def test_walls_do_not_depend_on_how_the_drawing_lies(degrees: float) -> None:
    turned = shapely.affinity.rotate(channel_polygon(), degrees)
    found = found_in(of_polygon(turned))
    assert (len(found.model.walls), len(found.model.points)) == (4, 5)
    assert_allclose(thicknesses(found), 2.4, rtol=1e-6)
