"""One file with a model of its own for each side: walls matched by name, and what only one side sees."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from crosscheck.comparison.comparing import compare
from crosscheck.comparison.panels import panels_of
from crosscheck.section_file.model import ProbeSpec, WallSpec
from crosscheck.section_file.reader import read_section

from .stand_in import channel_file

CASES = Path(__file__).parents[2] / "cases" / "sections"


def doubled(section, theory=lambda wall: wall, fe=lambda wall: (wall,)):
    """Every wall once for theory and once for FE."""
    walls = [theory(replace(wall, seen_by="theory")) for wall in section.walls]
    walls += [part for wall in section.walls for part in fe(replace(wall, seen_by="fe"))]
    return replace(section, walls=tuple(walls))


def turned(wall: WallSpec) -> WallSpec:
    return replace(wall, start=wall.end, end=wall.start, thickness=wall.thickness[::-1])


def halves(wall: WallSpec) -> tuple[WallSpec, ...]:
    if wall.name != "web":
        return (wall,)
    return (replace(wall, name="web 1", end="m"), replace(wall, name="web 2", start="m"))


@pytest.fixture(scope="module")
def plain():
    return compare(channel_file())


def test_two_equal_models_are_one(plain):
    twice = compare(doubled(channel_file()))
    assert [row.name for row in twice.quantities] == [row.name for row in plain.quantities]
    for row, other in zip(twice.quantities, plain.quantities, strict=True):
        assert row.theory == other.theory, row.name
        assert row.fe == other.fe, row.name
        assert row.difference == other.difference, row.name
    assert twice.flows == plain.flows
    assert twice.wall_envelopes == plain.wall_envelopes


def test_walls_of_theory_may_run_against_those_of_fe(plain):
    against = compare(doubled(channel_file(), turned))
    for flow, other in zip(against.flows, plain.flows, strict=True):
        own, known = ([p.theory for p in f.probes] for f in (flow, other))
        np.testing.assert_allclose(own, known, rtol=1e-9, atol=1e-12)
    for found, other in zip(against.stresses, plain.stresses, strict=True):
        for face in ("left", "right"):
            np.testing.assert_allclose(found.faces[face].shear, other.faces[face].shear, rtol=1e-9, atol=1e-9)


def test_a_wall_split_on_one_side_only_is_compared_part_by_part(plain):
    section = doubled(channel_file(), fe=halves)
    section = replace(section, points={**section.points, "m": (0.0, 40.0)})
    assert [(p.name, p.seen_by) for p in panels_of(section).values()] == [
        ("bottom", "both"), ("web 1", "both"), ("web 2", "both"), ("top", "both"),
    ]  # fmt: skip
    split = compare(section)
    web = {flow.load: flow for flow in plain.flows if flow.wall == "web"}
    for flow in split.flows:
        if flow.wall not in ("web 1", "web 2"):
            continue
        offset = 40.0 if flow.wall == "web 2" else 0.0
        known = sorted((p.s, p.theory) for p in web[flow.load].probes)
        for probe in flow.probes:
            if probe.theory is None:
                continue
            # The web's flow is a parabola in s: three of its probes say what it is anywhere.
            s, q = zip(*known[:: len(known) // 2][:3], strict=True)
            assert probe.theory == pytest.approx(np.polyval(np.polyfit(s, q, 2), probe.s + offset), rel=1e-6)
            assert (probe.x, probe.y) == pytest.approx((0.0, probe.s + offset), abs=1e-9)
    # The user's probe at 0.3 of theory's web is on the first half.
    (named,) = [p for f in split.flows for p in f.probes if p.label == "rivet line" and f.load == "gust"]
    assert named.y == pytest.approx(30.0)


def test_the_shipped_box_compares_what_both_sides_see():
    section = read_section(CASES / "two_models_floor_box.toml")
    kinds = {name: panel.seen_by for name, panel in panels_of(section).items()}
    assert kinds["upper skin 2"] == "both"
    assert kinds["lower blade"] == "fe"
    result = compare(section)
    assert all(check.passed for check in result.checks)
    assert result.quantity("area").verdict == "outside"
    blade = next(f for f in result.flows if f.wall == "lower blade" and f.load == "freight")
    assert blade.difference is None
    assert blade.reason == "only FE sees this wall"
    assert any(p.label == "blade weld" and p.fe is not None and p.theory is None for p in blade.probes)
    # Between booms theory's flow is the mean of FE's: the middle of a panel agrees where its ends do not.
    skin = next(f for f in result.flows if f.wall == "upper skin 2" and f.load == "freight")
    middle = min(skin.probes, key=lambda p: abs(p.s - 45.0))
    assert middle.theory == pytest.approx(middle.fe, rel=0.05)
    assert abs(skin.difference) > 0.5


def test_direct_stress_is_compared_at_the_booms_where_theorys_walls_carry_none():
    result = compare(read_section(CASES / "two_models_floor_box.toml"))
    row = result.quantity("direct_stress", "freight")
    fibres = [fibre for fibre in result.boom_fibres if fibre.load == "freight"]
    assert len(fibres) == 7
    assert row.judged_theory == pytest.approx(max(abs(fibre.theory) for fibre in fibres))
    assert row.fe.value == pytest.approx(max(abs(fibre.fe) for fibre in fibres))
    assert result.quantity("von_mises_stress", "freight").verdict is None
    kinds = {entry.kind for entry in result.wall_envelopes if entry.theory is not None}
    assert kinds == {"flow"}
    assert {entry.kind for entry in result.wall_envelopes if entry.fe is not None} == {
        "flow", "direct", "von_mises",
    }  # fmt: skip


def test_a_probe_on_a_wall_that_only_theory_sees_has_theorys_value():
    section = channel_file(probes=(ProbeSpec("bond", "top", 0.5),))
    walls = tuple(replace(w, seen_by="theory") if w.name == "top" else w for w in section.walls)
    result = compare(replace(section, walls=walls))
    (flow,) = [f for f in result.flows if f.wall == "top" and f.load == "gust"]
    (probe,) = [p for p in flow.probes if p.label == "bond"]
    assert probe.fe is None
    assert probe.theory is not None
    assert flow.reason == "only theory sees this wall"
