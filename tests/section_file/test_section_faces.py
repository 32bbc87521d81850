"""Walls given by their faces: the same section as by midlines, at every kind of corner."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from crosscheck.comparison.comparing import compare
from crosscheck.section_file.model import Place, SectionFile, WallSpec, arc_angle
from crosscheck.section_file.reader import SectionSource, section_from

Lines = Callable[..., list[str]]
Floats = np.ndarray

# Points by name, and walls as keys of [[walls]].
Drawn = tuple[dict[str, Place], list[dict[str, object]]]


def read(drawn: Drawn) -> SectionFile:
    """A section of points and walls."""
    points, walls = drawn
    document = {
        "units": "mm N",
        "points": {name: [float(x), float(y)] for name, (x, y) in points.items()},
        "walls": walls,
    }
    return section_from(SectionSource("part.toml", "", document))


def numbers(section: SectionFile, wall: WallSpec) -> list[float]:
    """Ends, thicknesses and centre of a wall."""
    start, end = section.points[wall.start], section.points[wall.end]
    if wall.arc_through is None:
        return [*start, *end, *wall.thickness]
    # The third place may lie anywhere on the arc: its centre and sweep are what counts.
    centre, first, sweep = arc_angle(start, wall.arc_through, end)
    return [*start, *end, *wall.thickness, *centre, math.cos(first), math.sin(first), sweep]


def assert_same(faces: SectionFile, midlines: SectionFile) -> None:
    """Both have the same walls to 1e-12 of the section's size."""
    assert [wall.name for wall in faces.walls] == [wall.name for wall in midlines.walls]
    for own, other in zip(faces.walls, midlines.walls, strict=True):
        own_numbers, other_numbers = numbers(faces, own), numbers(midlines, other)
        np.testing.assert_allclose(own_numbers, other_numbers, rtol=0.0, atol=1e-12 * midlines.extent)


def path(
    name: str, points: str, thickness: object, line: str = "midline", **more: object
) -> dict[str, object]:
    return {"name": name, "path": points.split(), "thickness": thickness, "line": line, **more}


OUTER_BOX = {"a": (0, 0), "b": (80, 0), "c": (80, 50), "d": (0, 50)}
MIDDLE_BOX = {"a": (2.5, 1), "b": (78.5, 1), "c": (78.5, 48), "d": (2.5, 48)}
BOX_THICKNESS = [2, 3, 4, 5]

ROOT_2 = math.sqrt(2.0)

SAME: dict[str, tuple[Drawn, Drawn]] = {
    "box, outer faces": (
        (OUTER_BOX, [path("box", "a b c d a", BOX_THICKNESS, "right face")]),
        (MIDDLE_BOX, [path("box", "a b c d a", BOX_THICKNESS)]),
    ),
    "box, outer faces the other way round": (
        (OUTER_BOX, [path("box", "a d c b a", BOX_THICKNESS[::-1], "left face")]),
        (MIDDLE_BOX, [path("box", "a d c b a", BOX_THICKNESS[::-1])]),
    ),
    "box, inner faces": (
        (
            {"a": (5, 2), "b": (77, 2), "c": (77, 46), "d": (5, 46)},
            [path("box", "a b c d a", BOX_THICKNESS, "left face")],
        ),
        (MIDDLE_BOX, [path("box", "a b c d a", BOX_THICKNESS)]),
    ),
    "angle, heel": (
        ({"a": (0, 45), "b": (0, 0), "c": (60, 0)}, [path("angle", "a b c", [5, 3], "right face")]),
        ({"a": (2.5, 45), "b": (2.5, 1.5), "c": (60, 1.5)}, [path("angle", "a b c", [5, 3])]),
    ),
    "angle, one leg by its midline": (
        (
            {"a": (0, 45), "b": (0, 0), "c": (60, 0)},
            [path("web", "a b", 5, "right face"), path("foot", "b c", 3)],
        ),
        ({"a": (2.5, 45), "b": (2.5, 0), "c": (60, 0)}, [path("web", "a b", 5), path("foot", "b c", 3)]),
    ),
    "zed": (
        (
            {"a": (-30, 60), "b": (0, 60), "c": (0, 0), "d": (36, 0)},
            [path("zed", "a b c d", [2, 3, 4], "left face")],
        ),
        (
            {"a": (-30, 59), "b": (-1.5, 59), "c": (-1.5, -2), "d": (36, -2)},
            [path("zed", "a b c d", [2, 3, 4])],
        ),
    ),
    "zed, outermost faces": (
        (
            {"a": (-30, 60), "b": (0, 60), "c": (0, 0), "d": (36, 0)},
            [
                path("cap", "a b", 2, "left face"),
                path("web", "b c", 3, "right face"),
                path("foot", "c d", 4, "right face"),
            ],
        ),
        (
            {"a": (-30, 59), "b": (1.5, 59), "c": (1.5, 2), "d": (36, 2)},
            [path("cap", "a b", 2), path("web", "b c", 3), path("foot", "c d", 4)],
        ),
    ),
    "tee: three walls, faces of two paths": (
        (
            {"a": (-40, 0), "o": (0, 0), "b": (44, 0), "d": (0, 50)},
            [path("skin", "a o b", 2, "right face"), path("web", "o d", 3, "left face")],
        ),
        (
            {"a": (-40, 1), "o": (1.5, 1), "b": (44, 1), "d": (1.5, 50)},
            [path("skin", "a o b", 2), path("web", "o d", 3)],
        ),
    ),
    "obtuse bend of one thickness": (
        ({"a": (-30, 0), "b": (0, 0), "c": (40, 40)}, [path("w", "a b c", 2, "left face")]),
        (
            {"a": (-30, -1), "b": (ROOT_2 - 1, -1), "c": (40 + ROOT_2 / 2, 40 - ROOT_2 / 2)},
            [path("w", "a b c", 2)],
        ),
    ),
    "straight on": (
        ({"a": (-30, 0), "b": (0, 0), "c": (40, 0)}, [path("w", "a b c", 2, "left face")]),
        ({"a": (-30, -1), "b": (0, -1), "c": (40, -1)}, [path("w", "a b c", 2)]),
    ),
    "nose: arc tangent to straight walls, closed": (
        (
            {"a": (60, 20), "b": (0, 20), "c": (0, -20), "d": (60, -20)},
            [
                path("top", "a b", 2, "right face"),
                path("nose", "b c", 2, "right face", arc={"through": [-20, 0]}),
                path("rest", "c d a", [2, 3], "right face"),
            ],
        ),
        (
            {"a": (58.5, 19), "b": (0, 19), "c": (0, -19), "d": (58.5, -19)},
            [
                path("top", "a b", 2),
                path("nose", "b c", 2, arc={"through": [-19, 0]}),
                path("rest", "c d a", [2, 3]),
            ],
        ),
    ),
    "arc meeting a web at an angle, both by faces": (
        (
            {"a": (0, 24), "b": (0, -24)},
            [
                path("nose", "a b", 2, "right face", arc={"through": [-18, 0]}),
                path("web", "b a", 3, "right face"),
            ],
        ),
        # Circle through a, b and (-18, 0): centre (7, 0), radius 25; midline radius 24 meets x = -1.5.
        (
            {"a": (-1.5, math.sqrt(24**2 - 8.5**2)), "b": (-1.5, -math.sqrt(24**2 - 8.5**2))},
            [path("nose", "a b", 2, arc={"through": [-17, 0]}), path("web", "b a", 3)],
        ),
    ),
    "arc with free ends, inner face": (
        (
            {"a": (20, 0), "b": (0, 20)},
            [path("bend", "a b", 3, "left face", arc={"through": [10 * ROOT_2] * 2})],
        ),
        ({"a": (21.5, 0), "b": (0, 21.5)}, [path("bend", "a b", 3, arc={"through": [10.75 * ROOT_2] * 2})]),
    ),
    "smooth tube": (
        (
            {"a": (30, 0), "b": (0, 30), "c": (-30, 0), "d": (0, -30)},
            [path("tube", "a b c d a", 2, "right face", smooth=True)],
        ),
        (
            {"a": (29, 0), "b": (0, 29), "c": (-29, 0), "d": (0, -29)},
            [path("tube", "a b c d a", 2, smooth=True)],
        ),
    ),
}


@pytest.mark.parametrize("case", SAME)
def test_same_as_by_midlines(case: str) -> None:
    faces, midlines = SAME[case]
    section = read(faces)
    assert_same(section, read(midlines))
    assert section.notes == ()


@pytest.mark.parametrize(
    "case", ["box, outer faces", "angle, heel", "zed", "tee: three walls, faces of two paths"]
)
def test_both_sides_give_the_same_numbers(case: str) -> None:
    faces, midlines = (compare(read(drawn)) for drawn in SAME[case])
    compared = 0
    for own, other in zip(faces.quantities, midlines.quantities, strict=True):
        for value, expected in (
            (own.theory["midline"], other.theory["midline"]),
            (own.fe.value, other.fe.value),
        ):
            assert (value is None) == (expected is None)
            if value is not None:
                compared += 1
                assert value == pytest.approx(expected, rel=1e-12, abs=0.0)
    assert compared > 40


def test_three_walls_at_any_angles() -> None:
    # The written point lies at v from the joint; a face runs through it where its wall is 2 |n . v| thick.
    joint, v = np.array((12.0, -7.0)), np.array((1.3, 0.8))
    faces, midlines = {"o": tuple(joint + v)}, {"o": tuple(joint)}
    walls = []
    for name, angle in (("a", 12.0), ("b", 131.0), ("c", 255.0)):
        d = np.array((math.cos(math.radians(angle)), math.sin(math.radians(angle))))
        n = np.array((-d[1], d[0]))
        faces[name], midlines[name] = tuple(joint + 50.0 * d + n * (n @ v)), tuple(joint + 50.0 * d)
        walls.append((name, 2.0 * abs(n @ v), "left face" if n @ v > 0.0 else "right face"))
    section = read((faces, [path(f"wall {n}", f"o {n}", t, line) for n, t, line in walls]))
    assert_same(section, read((midlines, [path(f"wall {n}", f"o {n}", t) for n, t, _ in walls])))
    assert section.notes == ()


def face_places(
    places: Sequence[Floats], halves: Sequence[tuple[float, float]], closed: bool
) -> list[Floats]:
    """Corners of the left faces of a midline path with linear half thicknesses, from the lines' equations."""
    lines = []
    for (a, b), (t, u) in zip(pairwise(places), halves, strict=True):
        d = (b - a) / np.linalg.norm(b - a)
        n = np.array((-d[1], d[0]))
        lines.append((a + n * t, b + n * u))
    corners = []
    for (a, b), (c, d) in pairwise([*lines, lines[0]] if closed else lines):
        s = np.linalg.solve(np.column_stack((b - a, c - d)), c - a)
        corners.append(a + s[0] * (b - a))
    return [corners[-1], *corners] if closed else [lines[0][0], *corners, lines[-1][1]]


@settings(max_examples=40, deadline=None)
@given(
    st.lists(st.tuples(st.floats(20.0, 90.0), st.floats(25.0, 120.0), st.booleans()), min_size=2, max_size=6),
    st.floats(1.0, 4.0),
    st.floats(1.0, 4.0),
)
def test_tapered_paths_with_any_corners(
    legs: list[tuple[float, float, bool]], first: float, last: float
) -> None:
    # A staircase that turns left and right about +x never meets itself.
    places, x, y = [np.zeros(2)], 0.0, 0.0
    for k, (length, turn, _) in enumerate(legs):
        angle = math.radians(turn / 2.0) * (-1) ** k
        x, y = x + length * math.cos(angle), y + length * math.sin(angle)
        places.append(np.array((x, y)))
    along = np.concatenate(([0.0], np.cumsum([np.linalg.norm(b - a) for a, b in pairwise(places)])))
    values = first + (last - first) * along / along[-1]
    corners = face_places(places, list(pairwise(0.5 * values)), closed=False)
    names = [f"p{k}" for k in range(len(places))]
    taper = {"from": first, "to": last}
    faces = read(
        (
            {n: tuple(p) for n, p in zip(names, corners, strict=True)},
            [path("w", " ".join(names), taper, "left face")],
        )
    )
    midlines = read(
        ({n: tuple(p) for n, p in zip(names, places, strict=True)}, [path("w", " ".join(names), taper)])
    )
    assert_same(faces, midlines)


def test_tapered_box_by_outer_faces() -> None:
    middle = [np.array(p) for p in ((0.0, 0.0), (0.0, 60.0), (90.0, 75.0), (90.0, -5.0))]
    ends = [(2.0, 3.0), (3.0, 1.5), (1.5, 4.0), (4.0, 2.5)]
    corners = face_places([*middle, middle[0]], [(0.5 * t, 0.5 * u) for t, u in ends], closed=True)
    names = ("a", "b", "c", "d")
    legs = [
        (f"{p} {q}", {"from": t, "to": u})
        for (p, q), (t, u) in zip(pairwise([*names, "a"]), ends, strict=True)
    ]
    faces = [path(f"wall {leg}", leg, taper, "left face") for leg, taper in legs]
    midlines = [path(f"wall {leg}", leg, taper) for leg, taper in legs]
    assert_same(
        read(({n: tuple(p) for n, p in zip(names, corners, strict=False)}, faces)),
        read(({n: tuple(p) for n, p in zip(names, middle, strict=True)}, midlines)),
    )


def test_smooth_arcs_stay_tangent_and_keep_their_centres() -> None:
    points = {"a": (-52, 33), "b": (-41, 4), "c": (3, -14), "d": (45, 7), "e": (55, 36)}
    by_line = {
        line: read((points, [path("gutter", "a b c d e", 1.5, line, smooth=True)]))
        for line in ("midline", "left face")
    }
    circles = {
        line: [arc_angle(s.points[w.start], w.arc_through, s.points[w.end]) for w in s.walls if w.arc_through]
        for line, s in by_line.items()
    }
    for (centre, first, sweep), (moved, first_moved, sweep_moved) in zip(*circles.values(), strict=True):
        np.testing.assert_allclose(moved, centre, rtol=0.0, atol=1e-10)
        np.testing.assert_allclose((first_moved, sweep_moved), (first, sweep), rtol=0.0, atol=1e-12)
    radius = {
        line: [math.dist(s.points[w.start], c[0]) for w, c in zip(s.walls, circles[line], strict=True)]
        for line, s in by_line.items()
    }
    # The gutter turns anticlockwise all along: its left face is the inner one.
    np.testing.assert_allclose(np.subtract(radius["left face"], radius["midline"]), 0.75, atol=1e-10)


def test_flush_walls_of_two_thicknesses_meet_half_way() -> None:
    section = read(
        ({"a": (-40, 0), "o": (0, 0), "b": (50, 0)}, [path("skin", "a o b", [2, 3], "right face")])
    )
    assert section.points["o"] == pytest.approx((0.0, 1.25), abs=1e-12)
    assert section.points["a"] == pytest.approx((-40.0, 1.0), abs=1e-12)
    (note,) = section.notes
    assert note == (
        'point "o": the midlines beside the faces do not meet in one point; it is put at the place '
        "nearest to them all, and faces there are up to 0.25 off, as where walls of two thicknesses are "
        "flush; draw the solid under [outline] where FE must have them exactly"
    )


def test_loads_through_a_point_keep_its_place() -> None:
    points, walls = SAME["angle, heel"][0]
    document = {
        "units": "mm N",
        "points": {n: list(p) for n, p in points.items()},
        "walls": walls,
        "loads": [{"name": "pull", "shear": [1, 0], "through": "b"}],
    }
    assert section_from(SectionSource("part.toml", "", document)).loads[0].through == (0.0, 0.0)


POINTS = (
    'units = "mm N"\n[points]\na = [0, 0]\nb = [50, 0]\nc = [50, 3]\nd = [50, 60]\ne = [0, 3]\nf = [-50, 0]\n'
)
ONE_FAULT = [
    (
        "a tapered arc",
        '[[walls]]\npath = ["a", "b"]\nline = "left face"\nthickness = { from = 1, to = 2 }\n'
        "arc = { through = [20, 9] }\n",
        'walls[0].line: must be line = "midline" where an arc tapers',
    ),
    (
        "an arc inside its own thickness",
        '[[walls]]\npath = ["b", "c"]\nline = "right face"\nthickness = 4\narc = { through = [51.5, 1.5] }\n'
        '[[walls]]\npath = ["c", "d"]\nthickness = 4\n',
        "walls[0].line: must be a radius of more than half the thickness",
    ),
    (
        "a wall that its corners use up",
        '[[walls]]\npath = ["a", "b", "c", "e"]\nline = "right face"\nthickness = 8\n',
        "walls[0].line: must be a wall whose midline has a length",
    ),
    (
        "flush walls too far apart",
        '[[walls]]\npath = ["f", "a", "b"]\nline = "left face"\nthickness = [1, 9]\n',
        "walls[0].line: must be faces whose midlines meet in one point, within half the thinnest wall there, "
        'got midlines that pass "a" at distances up to 2; give the walls there by their midlines',
    ),
]


@pytest.mark.parametrize(("text", "start"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT])
def test_one_fault(fault_lines: Lines, text: str, start: str) -> None:
    (line, *_) = fault_lines(POINTS + text)
    assert line.startswith(start)
