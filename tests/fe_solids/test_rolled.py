"""Rolled and cold-formed sections entered twice, as outlines and as walls with fillets: one solid.

Their printed properties are rows of cases/reference/rolled_sections.toml.
"""

from __future__ import annotations

import itertools
from typing import Any

import pytest
from solid_shapes import Place, holds, rolled, rounded

from fe_models import ClosedLine, Rounding, Section, Solid, Solution, Wall, solve, solve_solid

Rings = tuple[ClosedLine, ...]


def i_section(d: dict[str, Any]) -> Rings:
    """Flanges whose inner face may slope; root fillets r, toe radii r2."""
    h, b, tw, tf = d["h"], d["b"], d["tw"], d["tf"]
    slope, overhang = d.get("flange_slope", 0.0), (d["b"] - d["tw"]) / 2
    tip, root = tf - slope * overhang / 2, tf + slope * overhang / 2
    quarter = [(b / 2, h), (b / 2, h - tip), (tw / 2, h - root)]
    radii = [0.0, d.get("r2", 0.0), d["r"]]
    right = quarter + [(x, h - y) for x, y in reversed(quarter)]
    corners = right + [(-x, y) for x, y in reversed(right)]
    return (rounded(corners, [*radii, *radii[::-1]] * 2),)


def lipped(d: dict[str, Any]) -> Rings:
    """Web's outer face on x = 0."""
    h, b, c, t, r = d["h"], d["b"], d["c"], d["t"], d["r_inside"]
    upper: list[Place] = [(0, h), (b, h), (b, h - c), (b - t, h - c), (b - t, h - t), (t, h - t)]
    radii = [r + t, r + t, 0, 0, r, r]
    corners = upper + [(x, h - y) for x, y in reversed(upper)]
    return (rounded(corners, radii + radii[::-1]),)


@pytest.mark.parametrize("name", ["IPE 300", "W14X90"])
def test_the_same_as_walls(name: str) -> None:
    """Outline and walls with fillets are one solid: their intervals overlap."""
    d = rolled(name)["dimensions_mm"]
    h, b, tw, tf = d["h"], d["b"], d["tw"], d["tf"]
    points = {"a": (-b / 2, tf / 2), "m": (0.0, tf / 2), "b": (b / 2, tf / 2)}
    points |= {"c": (-b / 2, h - tf / 2), "n": (0.0, h - tf / 2), "d": (b / 2, h - tf / 2)}
    walls = [("am", tf), ("mb", tf), ("mn", tw), ("cn", tf), ("nd", tf)]
    section = Section(
        points,
        tuple(Wall(n, n[0], n[1], (t, t)) for n, t in walls),
        {"m": Rounding(d["r"]), "n": Rounding(d["r"])},
    )
    compare_with_walls(solve_solid(Solid(i_section(d))), section)


def test_cold_formed_channel_as_walls() -> None:
    d = rolled("9CS2.5x059")["dimensions_mm"]
    h, b, c, t = d["h"], d["b"], d["c"], d["t"]
    e = t / 2
    places = [(b - e, h - c), (b - e, h - e), (e, h - e), (e, e), (b - e, e), (b - e, c)]
    names = "abcdef"
    walls = tuple(Wall(p + q, p, q, (t, t)) for p, q in itertools.pairwise(names))
    corners = {n: Rounding(d["r_inside"]) for n in "bcde"}
    compare_with_walls(
        solve_solid(Solid(lipped(d))), Section(dict(zip(names, places, strict=True)), walls, corners)
    )


def compare_with_walls(solid: Solution, section: Section) -> None:
    walls = solve(section).quantities
    for name in ("torsion_constant", "shear_area_x", "shear_area_y", "shear_centre_x", "shear_centre_y"):
        mine, other = solid.quantities[name], walls[name]
        # both are bounds for the outline up to its interpolation
        assert holds(mine, other.known, other.half_width + 1e-8 * abs(other.known) + 1e-9), name
    for name in ("area", "second_moment_xx", "second_moment_yy"):
        assert abs(solid.quantities[name].known / walls[name].known - 1) < 1e-9, name
    iw = solid.quantities["warping_constant"].known
    assert abs(iw / walls["warping_constant"].known - 1) < 1e-5
