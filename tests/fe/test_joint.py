"""Corners, mitres, bevels, steps and free ends against coordinates worked out by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest
from fe_sections import Place, polyline
from numpy.testing import assert_allclose

from fe_models import OutlineError, Section, Wall
from fe_models.band import WallEnd, band
from fe_models.chain import Chain
from fe_models.joint import Joint, joints


def star(*walls: tuple[float, float, float], start_here: bool = True) -> Joint:
    """The joint at the origin of straight walls (bearing in degrees, thickness, length)."""
    points: dict[str, Place] = {"o": (0.0, 0.0)}
    made = []
    for i, (bearing, t, length) in enumerate(walls):
        a = math.radians(bearing)
        points[f"p{i}"] = (length * math.cos(a), length * math.sin(a))
        ends = ("o", f"p{i}") if start_here else (f"p{i}", "o")
        made.append(Wall(f"w{i}", *ends, (t, t)))
    section = Section(points, tuple(made))
    places = {n: np.array(p) for n, p in points.items()}
    return joints(places, [band(w, section) for w in made])["o"]


def between(joint: Joint, first: int, second: int) -> Chain:
    """The chain from wall ``first`` anticlockwise to wall ``second``."""
    (found,) = [
        c for c in joint.chains if (c.first.band.name, c.second.band.name) == (f"w{first}", f"w{second}")
    ]
    return found


def vertices(chain: Chain) -> np.ndarray:
    """Corners of a chain: end of the first wall's left face to start of the second's right face, (k, 2)."""
    ends = [chain.first.side(chain.reach[0], 1.0), chain.second.side(chain.reach[1], -1.0)]
    if not chain.pieces:
        assert_allclose(ends[0], ends[1], rtol=0, atol=1e-12)
        return np.array(ends[:1])
    assert_allclose([chain.pieces[0].start, chain.pieces[-1].end], ends, rtol=0, atol=1e-12)
    return np.array([ends[0], *[p.start for p in chain.pieces[1:]], ends[1]])


@pytest.mark.parametrize("start_here", [True, False])
def test_right_angle_of_unequal_walls(start_here: bool) -> None:
    """Walls t = 4 along x and t = 6 along y: faces meet at (3, 2) inside and (-3, -2) outside."""
    joint = star((0.0, 4.0, 50.0), (90.0, 6.0, 50.0), start_here=start_here)
    inner, outer = between(joint, 0, 1), between(joint, 1, 0)
    assert (inner.kind, outer.kind) == ("corner", "mitre")
    assert_allclose(vertices(inner), [[3.0, 2.0]], rtol=0, atol=1e-12)
    assert_allclose(vertices(outer), [[-3.0, -2.0]], rtol=0, atol=1e-12)
    assert_allclose(inner.reach, (3.0, 2.0), rtol=0, atol=1e-12)
    assert_allclose(outer.reach, (-2.0, -3.0), rtol=0, atol=1e-12)
    # clear of its neighbours: beyond the inner corner
    assert_allclose([joint.clear_of(e) for e in joint.ends], [3.0, 2.0], rtol=0, atol=1e-12)


@pytest.mark.parametrize("degrees", [20.0, 45.0, 60.0, 90.0, 120.0, 150.0])
@pytest.mark.parametrize(("t1", "t2"), [(4.0, 4.0), (4.5, 5.0), (5.0, 4.5)])
def test_corner_formula(degrees: float, t1: float, t2: float) -> None:
    """s1 = (h2 + h1 cos) / sin, s2 = (h1 + h2 cos) / sin; the vertex lies on both offset lines."""
    joint = star((10.0, t1, 200.0), (10.0 + degrees, t2, 200.0))
    theta, h1, h2 = math.radians(degrees), 0.5 * t1, 0.5 * t2
    s1 = (h2 + h1 * math.cos(theta)) / math.sin(theta)
    s2 = (h1 + h2 * math.cos(theta)) / math.sin(theta)
    inner, outer = between(joint, 0, 1), between(joint, 1, 0)
    assert_allclose(inner.reach, (s1, s2), rtol=1e-12)
    d1 = np.array([math.cos(math.radians(10)), math.sin(math.radians(10))])
    left1 = np.array([-d1[1], d1[0]])
    assert_allclose(vertices(inner), [s1 * d1 + h1 * left1], rtol=0, atol=1e-11)
    assert outer.kind == "mitre"
    assert_allclose(vertices(outer), -vertices(inner), rtol=0, atol=1e-11)


def test_tee_has_two_corners_and_a_smooth_face() -> None:
    joint = star((0.0, 4.0, 50.0), (180.0, 4.0, 50.0), (270.0, 6.0, 50.0))
    assert [between(joint, *p).kind for p in ((0, 1), (1, 2), (2, 0))] == ["smooth", "corner", "corner"]
    assert_allclose(vertices(between(joint, 0, 1)), [[0.0, 2.0]], rtol=0, atol=1e-13)
    assert_allclose(vertices(between(joint, 1, 2)), [[-3.0, -2.0]], rtol=0, atol=1e-12)
    assert_allclose(vertices(between(joint, 2, 0)), [[3.0, -2.0]], rtol=0, atol=1e-12)


def test_walls_are_sorted_anticlockwise() -> None:
    joint = star((200.0, 1.0, 9.0), (-30.0, 1.0, 9.0), (95.0, 1.0, 9.0), (10.0, 1.0, 9.0))
    assert [e.band.name for e in joint.ends] == ["w0", "w1", "w3", "w2"]
    for chain, end, following in zip(joint.chains, joint.ends, [*joint.ends[1:], joint.ends[0]], strict=True):
        assert joint.chain_after(end) is chain
        assert joint.chain_before(following) is chain


def test_free_end_is_square() -> None:
    """A wall of t = 4 that begins at the origin along +x: (0, 2) and (0, -2)."""
    joint = star((0.0, 4.0, 50.0))
    (chain,) = joint.chains
    assert chain.kind == "free end"
    assert_allclose(vertices(chain), [[0.0, 2.0], [0.0, -2.0]], rtol=0, atol=1e-14)
    assert joint.clear_of(joint.ends[0]) == 0.0


# A mitre of equal walls lies h / sin(theta/2) from the point, beyond 4 t = 8 h where sin(theta/2) < 1/8.
LIMIT = 2.0 * math.degrees(math.asin(0.125))


@pytest.mark.parametrize(
    ("degrees", "kind"), [(LIMIT + 0.01, "mitre"), (LIMIT - 0.01, "bevel"), (10.0, "bevel"), (5.0, "bevel")]
)
def test_bevel_beyond_four_times_the_thickness(degrees: float, kind: str) -> None:
    """Equal walls t = 2 at +-theta/2 about +x: a bevel is the line x = -8 between the extended faces."""
    joint = star((-0.5 * degrees, 2.0, 100.0), (0.5 * degrees, 2.0, 100.0))
    outer = between(joint, 1, 0)
    half = math.radians(0.5 * degrees)
    assert outer.kind == kind
    if kind == "mitre":
        assert_allclose(vertices(outer), [[-1.0 / math.sin(half), 0.0]], rtol=0, atol=1e-9)
        return
    # the left face of the upper wall passes through (-sin, cos) with the wall's slope
    y = math.cos(half) + (-8.0 + math.sin(half)) * math.tan(half)
    assert 0.0 < y < 1.0
    assert_allclose(vertices(outer), [[-8.0, y], [-8.0, -y]], rtol=0, atol=1e-10)


def test_bevel_of_unequal_walls_stands_at_four_times_the_larger() -> None:
    """t = 2 and 3 at 8 degrees: both ends of the bevel lie 12 from the point along the mitre."""
    joint = star((0.0, 2.0, 200.0), (8.0, 3.0, 200.0))
    outer, inner = between(joint, 1, 0), between(joint, 0, 1)
    tip = -vertices(inner)[0]
    assert np.hypot(*tip) > 12.0
    assert outer.kind == "bevel"
    assert_allclose(vertices(outer) @ (tip / np.hypot(*tip)), [12.0, 12.0], rtol=0, atol=1e-9)
    assert_allclose(vertices(outer)[1, 1], -1.0, rtol=0, atol=1e-12)


def test_step_of_an_obtuse_bend() -> None:
    """t = 10 along +x, t = 2 at 150 degrees: 2/10 < |cos 150|, so the thin wall runs on to the end x = 0.

    Its faces pass through +-(0.5, 0.8660) and reach x = 0 at y = 0.8660 + 0.5 tan 30 = 2/sqrt 3 = 1.1547.
    """
    joint = star((0.0, 10.0, 100.0), (150.0, 2.0, 100.0))
    upper, lower = between(joint, 0, 1), between(joint, 1, 0)
    y = 2.0 / math.sqrt(3.0)
    assert (upper.kind, lower.kind) == ("step", "step")
    assert_allclose(vertices(upper), [[0.0, 5.0], [0.0, y]], rtol=0, atol=1e-12)
    assert_allclose(vertices(lower), [[0.0, -y], [0.0, -5.0]], rtol=0, atol=1e-12)
    # s from the point: 0.5 / cos 30 beyond the foot of the upper face, before the point on the lower
    assert_allclose(upper.reach, (0.0, 1.0 / math.sqrt(3.0)), rtol=0, atol=1e-12)
    assert_allclose(lower.reach, (-1.0 / math.sqrt(3.0), 0.0), rtol=0, atol=1e-12)


@pytest.mark.parametrize(("degrees", "kind"), [(150.0, "step"), (140.0, "step"), (136.0, "mitre")])
def test_where_steps_begin(degrees: float, kind: str) -> None:
    """t2/t1 = 0.74 < |cos theta| makes a step: beyond 137.7 degrees."""
    joint = star((0.0, 10.0, 100.0), (degrees, 7.4, 100.0))
    assert between(joint, 1, 0).kind == kind


@pytest.mark.parametrize("order", [(0.0, 180.0), (180.0, 0.0)])
def test_step_in_line(order: tuple[float, float]) -> None:
    """Two walls in line, t = 6 and 4: faces step from 3 to 2 at the point."""
    joint = star((order[0], 6.0, 50.0), (order[1], 4.0, 50.0))
    for first, second in ((0, 1), (1, 0)):
        chain = between(joint, first, second)
        assert chain.kind == "step"
        assert_allclose(vertices(chain)[:, 0], 0.0, rtol=0, atol=1e-13)
        assert_allclose(sorted(np.abs(vertices(chain)[:, 1])), [2.0, 3.0], rtol=0, atol=1e-12)
        assert_allclose(chain.reach, (0.0, 0.0), rtol=0, atol=1e-13)


def test_smooth_needs_equal_thickness() -> None:
    joint = star((30.0, 4.0, 50.0), (210.0, 4.0, 50.0))
    assert [c.kind for c in joint.chains] == ["smooth", "smooth"]
    assert joint.clear_of(joint.ends[0]) == 0.0


def test_taper_moves_the_corner() -> None:
    """Wall along x tapering from t = 2 at the origin to 4 at 20: y = 1 + s/20 meets x = 2 at y = 1.1."""
    points = {"o": (0.0, 0.0), "e": (20.0, 0.0), "n": (0.0, 30.0)}
    section = Section(points, (Wall("a", "o", "e", (2.0, 4.0)), Wall("b", "o", "n", (4.0, 4.0))))
    places = {n: np.array(p) for n, p in points.items()}
    joint = joints(places, [band(w, section) for w in section.walls])["o"]
    corner = joint.chain_after(WallEnd(band(section.walls[0], section), False))
    assert corner.kind == "corner"
    assert_allclose(vertices(corner), [[2.0, 1.1]], rtol=0, atol=1e-12)
    assert_allclose(corner.reach, (2.0, 1.1), rtol=0, atol=1e-12)
    # outside the faces run on: y = -(1 + s/20) meets x = -2 at y = -0.9
    outer = joint.chain_before(WallEnd(band(section.walls[0], section), False))
    assert_allclose(vertices(outer), [[-2.0, -0.9]], rtol=0, atol=1e-12)


def test_arc_meets_a_wall_on_its_circle() -> None:
    """Arc of radius 10 about the origin from (10, 0), wall along +x from there, both t = 2.

    Outside the arc (radius 11) the upper face y = 1 of the wall meets it at x = sqrt(120).
    """
    a = math.pi / 4
    points = {"o": (10.0, 0.0), "n": (0.0, 10.0), "e": (40.0, 0.0)}
    section = Section(
        points,
        (
            Wall("arc", "o", "n", (2.0, 2.0), arc_through=(10 * math.cos(a), 10 * math.sin(a))),
            Wall("fin", "o", "e", (2.0, 2.0)),
        ),
    )
    places = {n: np.array(p) for n, p in points.items()}
    bands = {w.name: band(w, section) for w in section.walls}
    joint = joints(places, bands.values())["o"]
    corner = joint.chain_after(WallEnd(bands["fin"], False))
    assert corner.kind == "corner"
    assert_allclose(vertices(corner), [[math.sqrt(120.0), 1.0]], rtol=0, atol=1e-10)


def test_walls_that_leave_in_one_direction_are_refused() -> None:
    section = polyline([(50.0, 0.0), (0.0, 0.0), (80.0, 0.0)], 3.0)
    places = {n: np.array(p) for n, p in section.points.items()}
    with pytest.raises(OutlineError, match="one direction") as fault:
        joints(places, [band(w, section) for w in section.walls])
    assert fault.value.kind == "overlap"
    assert set(fault.value.walls) == {"w0", "w1"}
