"""Strips and clusters: cuts, short walls, unions, and the shapes that are refused."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pytest
import shapely
from fe_sections import box, channel, four_cells, joined, polyline, shape
from numpy.testing import assert_allclose
from shapely.geometry import LineString, Polygon

from fe_models import OutlineError, Section, Wall
from fe_models.outline import Outline, outline


def area_of_loops(solid: Outline) -> float:
    """Area inside the outer loop less the holes, by shapely."""
    return float(Polygon(solid.loops[0], list(solid.loops[1:])).area)


def test_cuts_of_a_channel() -> None:
    """t = 4: inner corners 2 along each wall, cut one thickness beyond; free ends cut one thickness in."""
    parts = outline(channel(50.0, 100.0, 4.0)).parts
    assert {n: s.span for n, s in parts.strips.items()}.keys() == {"w0", "w1", "w2"}
    assert_allclose(parts.strips["w1"].span, (6.0, 94.0), rtol=1e-12)
    assert_allclose(parts.strips["w0"].span, (4.0, 44.0), rtol=1e-12)
    assert sorted(c.points for c in parts.clusters) == [("p0",), ("p1",), ("p2",), ("p3",)]
    assert all(c.walls == () and not c.united for c in parts.clusters)


def test_strips_and_clusters_fill_the_solid_once() -> None:
    for section in (channel(50.0, 100.0, 4.0), four_cells(), shape("box with two fins", 8.0)):
        solid = outline(section)
        total = sum(c.polygon().area for c in solid.parts.clusters)
        total += sum((s.span[1] - s.span[0]) * 2 * s.band.half(0.0) for s in solid.parts.strips.values())
        assert_allclose(total, area_of_loops(solid), rtol=1e-9)
        shapes = [c.polygon() for c in solid.parts.clusters]
        for i, one in enumerate(shapes):
            for other in shapes[:i]:
                assert one.intersection(other).area < 1e-9


@pytest.mark.parametrize(("length", "merged"), [(24.0, False), (12.0, True)])
def test_short_walls_merge_with_both_their_joints(length: float, merged: bool) -> None:
    """t = 4: a web needs 2 x (2 + 4) for its cuts and half a thickness for its strip."""
    parts = outline(channel(50.0, length, 4.0)).parts
    assert ("w1" not in parts.strips) == merged
    assert ((("p1", "p2"), ("w1",)) in [(c.points, c.walls) for c in parts.clusters]) == merged


@pytest.mark.parametrize("lip", [1.0, 0.8, 1.5])
def test_lips_about_as_long_as_thick(lip: float) -> None:
    """Lipped channel, lips ``lip`` t long from the midline: solved on the mitred outline."""
    t = 3.0
    c = lip * t
    section = polyline([(40.0, 60.0 - c), (40.0, 60.0), (0.0, 60.0), (0.0, 0.0), (40.0, 0.0), (40.0, c)], t)
    solid = outline(section)
    assert_allclose(area_of_loops(solid), t * (60.0 + 80.0 + 2 * c), rtol=1e-12)
    assert any("without a strip: w0" in note for note in solid.notes)
    assert len(solid.loops) == 1


def test_jog_shorter_than_its_walls() -> None:
    """A wall that steps aside by half a thickness."""
    section = polyline([(0.0, 0.0), (40.0, 0.0), (40.0, 1.0), (80.0, 1.0)], 2.0)
    solid = outline(section)
    # bands [0, 40] x [-1, 1], [39, 41] x [0, 1], [40, 80] x [0, 2] and the outer squares of both bends
    by_hand = shapely.union_all(
        [shapely.box(0, -1, 41, 1), shapely.box(39, 0, 80, 2), shapely.box(39, -1, 41, 2)]
    )
    assert_allclose(area_of_loops(solid), by_hand.area, rtol=1e-7)
    assert Polygon(solid.loops[0]).symmetric_difference(by_hand).area < 1e-6


@pytest.mark.parametrize(("link", "united"), [(1.0, False), (0.7, True), (0.2, True)])
def test_link_eaten_up_from_both_ends_is_united(link: float, united: bool) -> None:
    """Two bends of 45 degrees the same way, t = 2: inner corners eat tan(22.5) = 0.414 from either end."""
    places = [(-30.0, 30.0), (0.0, 0.0), (link, 0.0), (30.0 + link, 30.0)]
    solid = outline(polyline(places, 2.0))
    (cluster,) = [c for c in solid.parts.clusters if c.walls]
    assert cluster.walls == ("w1",)
    assert cluster.united == united
    drawn = LineString(places).buffer(1.0, cap_style="flat", join_style="mitre", mitre_limit=8.0)
    assert_allclose(area_of_loops(solid), drawn.area, rtol=1e-7)
    assert Polygon(solid.loops[0]).symmetric_difference(drawn).area < 1e-5


def test_zig_zag_of_short_walls_against_a_union() -> None:
    """Walls hardly longer than thick, bent to and fro: the flat-ended mitred buffer of the midline."""
    places = [(0.0, 0.0), (30.0, 0.0), (33.0, 2.5), (36.0, 0.0), (39.0, 2.5), (70.0, 2.5)]
    solid = outline(polyline(places, 2.0))
    drawn = LineString(places).buffer(1.0, cap_style="flat", join_style="mitre", mitre_limit=8.0)
    assert_allclose(area_of_loops(solid), drawn.area, rtol=1e-7)


def refused(section: Section, kind: str, walls: Sequence[str]) -> None:
    """The outline is refused for the reason ``kind`` and names the walls."""
    with pytest.raises(OutlineError) as fault:
        outline(section)
    assert fault.value.kind == kind, fault.value
    assert set(walls) <= set(fault.value.walls)
    assert fault.value.found in str(fault.value)


def test_walls_that_fill_their_cell() -> None:
    """A triangle of side 20 has an inscribed circle of 5.8; opposite walls of a box overlap besides."""
    triangle = polyline([(0.0, 0.0), (20.0, 0.0), (10.0, 10.0 * np.sqrt(3.0))], 14.0, closed=True)
    refused(triangle, "lost cell", ["w0", "w1", "w2"])
    refused(box(20.0, 10.0, 12.0), "overlap", ["w0", "w2"])


def test_lost_cell_beside_a_sound_one() -> None:
    """Two cells, the right one narrower than its walls."""
    points = {"a": (0.0, 0.0), "b": (60.0, 0.0), "c": (65.0, 0.0), "d": (65.0, 60.0), "e": (60.0, 60.0)}
    points |= {"f": (0.0, 60.0)}
    section = joined(points, [(p, q, 6.0) for p, q in ("ab", "bc", "cd", "de", "ef", "fa", "be")])
    with pytest.raises(OutlineError) as fault:
        outline(section)
    assert fault.value.kind in ("lost cell", "overlap")
    assert {"b-e", "c-d"} & set(fault.value.walls)


def test_wall_inside_its_neighbour_is_swallowed() -> None:
    """A stub of length 2 on a wall of half thickness 4."""
    points = {"a": (0.0, 0.0), "m": (50.0, 0.0), "b": (100.0, 0.0), "stub": (50.0, 2.0)}
    section = joined(points, [("a", "m", 8.0), ("m", "b", 8.0), ("m", "stub", 3.0)])
    refused(section, "swallowed", ["m-stub"])


def test_flanges_closer_than_thick_overlap() -> None:
    """A channel 20 deep at its mouth 2: flange ends of t = 4 run into each other."""
    section = polyline([(80.0, 11.0), (0.0, 20.0), (0.0, 0.0), (80.0, 9.0)], 4.0)
    refused(section, "overlap", ["w0", "w2"])


def test_crossing_walls_overlap() -> None:
    section = polyline([(0.0, 0.0), (80.0, 0.0), (80.0, 40.0), (40.0, 40.0), (40.0, -40.0)], 2.0)
    refused(section, "overlap", ["w0", "w3"])


def test_wall_ending_on_anothers_middle_overlaps() -> None:
    section = polyline([(0.0, 0.0), (80.0, 0.0), (80.0, 40.0), (40.0, 40.0), (40.0, 0.0)], 2.0)
    refused(section, "overlap", ["w0", "w3"])


def test_parallel_walls_side_by_side_overlap() -> None:
    section = polyline([(0.0, 0.0), (80.0, 0.0), (80.0, 40.0), (-30.0, 40.0), (-30.0, 0.5), (70.0, 0.5)], 2.0)
    refused(section, "overlap", ["w0", "w4"])


def test_mitre_that_reaches_into_another_wall_overlaps() -> None:
    """A sharp turn whose tip, 3.8 thicknesses beyond its point, ends inside a wall standing there."""
    walls = [("tip", "up", 4.0), ("tip", "low", 4.0), ("up", "post", 4.0), ("post", "foot", 4.0)]
    points = {"tip": (0.0, 0.0), "up": (100.0, 14.0), "low": (100.0, -14.0)}
    points |= {"post": (-10.0, 60.0), "foot": (-10.0, -60.0)}
    assert outline(joined(points | {"post": (-30.0, 60.0), "foot": (-30.0, -60.0)}, walls)).loops
    refused(joined(points, walls), "overlap", ["post-foot"])


def test_two_parts_without_a_shared_point_are_refused() -> None:
    points = {"a": (0.0, 0.0), "b": (50.0, 0.0), "c": (0.0, 40.0), "d": (50.0, 40.0)}
    section = joined(points, [("a", "b", 2.0), ("c", "d", 2.0)])
    with pytest.raises(OutlineError):
        outline(section)


def test_more_walls_than_are_meshed_are_refused() -> None:
    n = 2001
    walls = tuple(Wall(f"w{i}", f"p{i}", f"p{i + 1}", (0.1, 0.1)) for i in range(n))
    points = {f"p{i}": (float(i), 0.01 * i * i) for i in range(n + 1)}
    with pytest.raises(OutlineError, match=r"at most 2000 walls, got 2001") as fault:
        outline(Section(points, walls))
    assert fault.value.kind == "limit"


def test_neighbours_that_do_not_overlap_are_kept() -> None:
    """The limit case beside the refusals: faces 0.2 apart are two faces."""
    section = polyline([(80.0, 14.2), (0.0, 14.2), (0.0, 10.0), (80.0, 10.0)], 4.0)
    solid = outline(section)
    assert_allclose(area_of_loops(solid), 4.0 * (80.0 + 80.0 + 4.2), rtol=1e-7)
    assert np.ptp(solid.loops[0], axis=0).max() == pytest.approx(82.0, rel=1e-9)
