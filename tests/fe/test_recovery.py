"""Flows in strips against statics: what a part of the solid cut off by section lines needs, exactly."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from fe_sections import (
    bow_tie,
    channel,
    four_cells,
    lopsided_cell,
    moved,
    quarter_turn,
    rewritten,
    shape,
    triangular_cell,
    two_cell,
)
from numpy.testing import assert_allclose
from shapely.geometry import LineString, Point, Polygon
from shapely.ops import polygonize, unary_union

from fe_models import Section, Solution, solve

SECTIONS = {
    "channel": channel(50.0, 100.0, 6.0),
    "stout channel": channel(50.0, 100.0, 12.0),
    "slanted channel": moved(channel(50.0, 100.0, 6.0), quarter_turn(), 20 - 10j),
    "zed": shape("zed, three thicknesses", 20.0),
    "unequal I": shape("unequal I", 30.0),
    "lopsided cell": lopsided_cell(),
    "triangular cell": triangular_cell(),
    "two cells": two_cell(60.0, 40.0, 50.0, 3.0),
    "finned box": shape("box with two fins", 20.0),
    "bow tie": bow_tie(),
    "four cells": four_cells(),
    "three cells": shape("tapering three-cell box", 20.0),
}
OPEN = {
    "channel": ("w0", "w1", "w2"),
    "stout channel": ("w0", "w1", "w2"),
    "slanted channel": ("w0", "w1", "w2"),
    "zed": ("w0", "w1", "w2"),
    "unequal I": ("a-m", "m-b", "m-n", "c-n", "n-d"),
    "finned box": ("c-f", "g-a"),
    "four cells": ("e-fin",),
}
# Walls that together cut the section in two.
SEPARATING = {
    "lopsided cell": [("w0", "w1"), ("w1", "w3"), ("w2", "w3"), ("w0", "w3")],
    "triangular cell": [("w0", "w1"), ("w1", "w2"), ("w2", "w0")],
    "two cells": [("a-b", "e-f"), ("b-c", "d-e"), ("a-b", "b-e", "b-c"), ("f-a", "a-b")],
    "bow tie": [("m-a", "b-m"), ("c-d", "d-m"), ("a-b", "m-a")],
    "four cells": [
        ("m-e", "m-n", "m-w", "m-s"), ("e-ne", "m-e", "se-e"), ("e-ne", "ne-n"), ("ne-n", "m-n", "n-nw"),
        ("n-nw", "m-n", "m-e", "se-e"),
    ],
    "three cells": [("a-b", "g-h"), ("b-c", "f-g"), ("c-d", "e-f"), ("a-b", "b-g", "b-c"), ("h-a", "g-h")],
}  # fmt: skip


@cache
def solved(name: str, accuracy: float = 1e-4) -> Solution:
    return solve(SECTIONS[name], accuracy)


def middle(solution: Solution, wall: str, share: float) -> float:
    """A fraction of the wall inside its strip, ``share`` of the way through."""
    a, b = solution.strips[wall]
    return a + share * (b - a)


def cut_off(solution: Solution, cuts: list[tuple[str, float]]) -> list[Polygon]:
    """Parts of the solid between section lines square to the walls, in the file's axes."""
    solid = Polygon(solution.outline.loops[0], list(solution.outline.loops[1:]))
    lines = []
    for wall, fraction in cuts:
        band = solution.outline.bands[wall]
        s, half = fraction * band.length, 1.001 * float(band.half(fraction * band.length))
        lines.append(LineString([band.place(s, -half), band.place(s, half)]))
    pieces = polygonize(unary_union([solid.boundary, *lines]))
    return [p for p in pieces if solid.contains(p.representative_point())]


def needed(solution: Solution, part: Polygon) -> np.ndarray:
    """Minus the integral of a x + b y over a part, for unit Vx and Vy, (2,)."""
    on = solution.fields.inertia
    moment = part.area * (np.array(part.centroid.coords[0]) - on.centroid)
    return -np.array([on.slopes(1.0, 0.0) @ moment, on.slopes(0.0, 1.0) @ moment])


def leaving(solution: Solution, part: Polygon, cuts: list[tuple[str, float]]) -> np.ndarray:
    """Sum of the flows that leave a part through its section lines, for Vx, Vy and T, (3,)."""
    total = np.zeros(3)
    for wall, fraction in cuts:
        band = solution.outline.bands[wall]
        step = 1e-3 * band.length
        s = fraction * band.length
        before, after = (part.buffer(1e-9).contains(Point(band.midline(s + d))) for d in (-step, step))
        if before != after:
            total += (1.0 if before else -1.0) * solution.flow_at(wall, fraction).values[:, 0]
    return total


@pytest.mark.parametrize("share", [0.0, 0.37, 1.0])
@pytest.mark.parametrize(("name", "wall"), [(n, w) for n, walls in OPEN.items() for w in walls])
def test_open_walls_follow_from_statics(name: str, wall: str, share: float) -> None:
    """q = minus the integral of f over the part beyond, exactly whatever the mesh; no flow from torsion."""
    solution = solved(name)
    cuts = [(wall, middle(solution, wall, share))]
    parts = cut_off(solution, cuts)
    assert len(parts) == 2
    for part in parts:
        assert_allclose(leaving(solution, part, cuts)[:2], needed(solution, part), rtol=0, atol=1e-11)
    flows = solution.flow_at(*cuts[0])
    # round-off goes with the section's flow, not with that of a wall that carries none
    ranges = {w: np.linspace(*strip, 9) for w, strip in solution.strips.items() if strip is not None}
    peak = np.max([np.abs(solution.flow_at(w, at).values).max(axis=1) for w, at in ranges.items()], axis=0)
    assert (flows.errors[:2, 0] <= 1e-9 * peak[:2]).all()
    assert abs(flows.values[2, 0]) <= 1e-12 * 6.0 / solution.quantities["torsion_constant"].value * 1e4


@pytest.mark.parametrize("share", [0.3, 0.8])
@pytest.mark.parametrize(("name", "walls"), [(n, w) for n, sets in SEPARATING.items() for w in sets])
def test_cells_are_in_balance(name: str, walls: tuple[str, ...], share: float) -> None:
    """Through all walls that hold a part: its load, exactly; in torsion nothing."""
    solution = solved(name)
    cuts = [(w, middle(solution, w, share)) for w in walls]
    parts = cut_off(solution, cuts)
    assert len(parts) >= 2
    unit = float(np.abs(solution.flow_at(*cuts[0]).values[2]).max())
    for part in parts:
        found = leaving(solution, part, cuts)
        assert_allclose(found[:2], needed(solution, part), rtol=0, atol=1e-11)
        assert_allclose(found[2], 0.0, rtol=0, atol=1e-10 * unit)
        assert np.abs(needed(solution, part)).max() > 1e-4


@pytest.mark.parametrize("name", SEPARATING)
def test_torsion_flow_is_the_difference_of_hole_constants(name: str) -> None:
    """In a wall: the constant of the hole on its left less that on its right (zero outside), over J.

    One J for all walls to round-off, within its interval.
    """
    solution = solved(name)
    on = solution.fields
    holes = []
    for loop in on.contours.loops[1:]:
        corner = int(np.flatnonzero(on.space.mesh.triangles[loop.elements[0]] == loop.vertices[0])[0])
        place = Polygon(on.space.mesh.vertices[loop.vertices])
        holes.append((place, float(on.torsion.function[loop.elements[0], corner])))
    largest = max(c for _, c in holes)
    found = []
    for wall, strip in solution.strips.items():
        if strip is None or wall in OPEN.get(name, ()):
            continue
        band = solution.outline.bands[wall]
        s = 0.5 * sum(strip) * band.length
        left, right = (band.place(s, side * 1.01 * float(band.half(s))) for side in (1.0, -1.0))
        constant = [sum(c for p, c in holes if p.contains(Point(at))) for at in (left, right)]
        flow = solution.flow_at(wall, np.linspace(*strip, 4)).values[2]
        found += [(constant[0] - constant[1], q) for q in flow.tolist()]
    assert len(found) >= 12
    rise, flow = np.array(found).T
    big = np.abs(rise) > 0.01 * largest
    j = rise[big] / flow[big]
    assert_allclose(j, j[0], rtol=1e-9)
    assert_allclose(flow * j[0], rise, rtol=0, atol=1e-9 * largest)
    q = solution.quantities["torsion_constant"]
    assert q.low * (1 - 1e-9) <= j[0] <= q.high * (1 + 1e-9)


@pytest.mark.parametrize("name", SECTIONS)
def test_flow_does_not_depend_on_the_walls_direction(name: str) -> None:
    """Turned round, the same flow with the other sign."""
    one, two = solved(name), solve(rewritten(SECTIONS[name]), 1e-4)
    for wall, strip in one.strips.items():
        if strip is None:
            assert two.strips[wall] is None
            continue
        at = np.linspace(strip[0], strip[1], 5)
        assert_allclose(two.strips[wall], (1 - strip[1], 1 - strip[0]), rtol=0, atol=1e-12)
        a, b = one.flow_at(wall, at), two.flow_at(wall, np.clip(1 - at, *two.strips[wall]))
        # two meshes: the error bars are looked at by themselves below
        peak = np.abs(a.values).max(axis=1, keepdims=True)
        assert (np.abs(a.values + b.values) <= 3 * (a.errors + b.errors) + 1e-4 * peak + 1e-13).all()


def flows(solution: Solution, wall: str, at: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    found = solution.flow_at(wall, at)
    return found.values, found.errors


@pytest.mark.parametrize("load", [0, 1, 2])
@pytest.mark.parametrize("name", [*SEPARATING, "finned box"])
def test_error_of_flows_in_cells_covers_a_finer_answer(name: str, load: int) -> None:
    """On refinement flows move by no more than their (estimated) error at the default accuracy."""
    coarse, fine = solved(name, 1e-5), solved(name, 1e-7)
    ratios, peak = {}, 0.0
    for wall, strip in coarse.strips.items():
        if strip is None or wall in OPEN.get(name, ()):
            continue
        other = fine.strips[wall]
        at = np.linspace(max(strip[0], other[0]), min(strip[1], other[1]), 5)
        (one, error), (two, _) = flows(coarse, wall, at), flows(fine, wall, at)
        peak = max(peak, float(np.abs(two[load]).max()))
        ratios[wall] = np.abs(one - two)[load] / (error[load] + 1e-10 * peak)
        assert error[load].max() <= 2e-4 * peak
    assert {w: float(r.max()) for w, r in ratios.items() if r.max() > 1.0} == {}


@pytest.mark.parametrize("name", OPEN)
def test_torsion_flow_of_open_walls_is_zero_within_its_error(name: str) -> None:
    """Saint-Venant shear has no resultant along an open wall; what round-off leaves must be covered."""
    solution = solved(name)
    j = solution.quantities["torsion_constant"].value
    for wall in OPEN[name]:
        value, error = flows(solution, wall, np.linspace(*solution.strips[wall], 5))
        t = solution.outline.bands[wall].thickness[0]
        assert (error[2] <= 1e-8 * t**2 / j).all()
        assert (np.abs(value[2]) <= error[2]).all()


def test_flow_varies_along_a_wall_by_its_load() -> None:
    """dq/ds = -t f on the midline (f linear across, so its mean through the thickness)."""
    solution = solved("lopsided cell")
    for wall in ("w0", "w1", "w2", "w3"):
        band = solution.outline.bands[wall]
        at = np.linspace(*solution.strips[wall], 7)
        q = solution.flow_at(wall, at).values
        f = (band.midline(at * band.length) - solution.fields.inertia.centroid) @ np.array(
            [solution.fields.inertia.slopes(1.0, 0.0), solution.fields.inertia.slopes(0.0, 1.0)]
        ).T
        # f is linear along the wall, so the trapezium is exact
        gained = -band.thickness[0] * np.diff(at)[:, None] * band.length * 0.5 * (f[1:] + f[:-1])
        assert_allclose(np.diff(q[:2], axis=1).T, gained, rtol=0, atol=1e-12)
        assert_allclose(np.diff(q[2]), 0.0, rtol=0, atol=1e-10 * abs(q[2, 0]))


def test_places_outside_strips_are_refused() -> None:
    solution = solved("channel")
    low, high = solution.strips["w1"]
    assert 0.0 < low < high < 1.0
    for bad in (0.5 * low, 0.5 * (1 + high), [0.5, 1.0]):
        with pytest.raises(ValueError, match="w1"):
            solution.flow_at("w1", bad)
    short: Section = channel(50.0, 10.0, 6.0)
    stout = solve(short, 1e-3)
    assert stout.strips["w1"] is None
    with pytest.raises(ValueError, match="w1"):
        stout.flow_at("w1", 0.5)
