"""Rolled and cold-formed sections as outlines with fillets, toe radii and slopes, against printed properties.

Every property of cases/reference/rolled_sections.json with an ``fe_tolerance_percent`` is held to it.
"""

from __future__ import annotations

import itertools
import json
import math
from collections.abc import Callable
from functools import cache
from typing import Any

import numpy as np
import pytest
from solid_shapes import REFERENCE, Place, holds, rectangle, rolled, rounded

from fe_models import ClosedLine, Rounding, Section, Solid, Solution, Wall, solve, solve_solid

NAMES = [r["id"] for r in json.loads((REFERENCE / "rolled_sections.json").read_text(encoding="utf-8"))]
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


def channel(d: dict[str, Any]) -> Rings:
    """Web's outer face on x = 0."""
    h, b, tw, tf, slope = d["h"], d["b"], d["tw"], d["tf"], d.get("flange_slope", 0.0)
    at = b / 2 if "b/2" in d.get("tf_measured_at", "") else (b + tw) / 2
    upper = [(0.0, h), (b, h), (b, h - tf + slope * (b - at)), (tw, h - tf - slope * (at - tw))]
    radii = [0.0, 0.0, d.get("r2", 0.0), d["r"]]
    corners = upper + [(x, h - y) for x, y in reversed(upper)]
    return (rounded(corners, radii + radii[::-1]),)


def angle(d: dict[str, Any]) -> Rings:
    b, t, toe = d["b"], d["t"], d["r2"]
    corners = [(0, 0), (b, 0), (b, t), (t, t), (t, b), (0, b)]
    return (rounded(corners, [0, 0, toe, d["r"], toe, 0]),)


def tee(d: dict[str, Any]) -> Rings:
    """Flange face on y = 0, stem downwards."""
    h, b, tw, tf = d["h"], d["b"], d["tw"], d["tf"]
    right = [(b / 2, 0.0), (b / 2, -tf), (tw / 2, -tf), (tw / 2, -h)]
    corners = right + [(-x, y) for x, y in reversed(right)]
    return (rounded(corners, [0, 0, d["r"], 0, 0, d["r"], 0, 0]),)


def hollow(d: dict[str, Any]) -> Rings:
    t = d["t"]
    outer, inner = rectangle(d["b"], d["h"]), rectangle(d["b"] - 2 * t, d["h"] - 2 * t)
    return rounded(outer.points, [d["ro"]] * 4), rounded(inner.points, [d["ri"]] * 4)


def pipe(d: dict[str, Any]) -> Rings:
    r = d["d"] / 2
    return ClosedLine.circle((0, 0), r), ClosedLine.circle((0, 0), r - d["t"])


def lipped(d: dict[str, Any]) -> Rings:
    """Web's outer face on x = 0."""
    h, b, c, t, r = d["h"], d["b"], d["c"], d["t"], d["r_inside"]
    upper: list[Place] = [(0, h), (b, h), (b, h - c), (b - t, h - c), (b - t, h - t), (t, h - t)]
    radii = [r + t, r + t, 0, 0, r, r]
    corners = upper + [(x, h - y) for x, y in reversed(upper)]
    return (rounded(corners, radii + radii[::-1]),)


FAMILIES: dict[str, Callable[[dict[str, Any]], Rings]] = {
    "I parallel flange": i_section,
    "I taper flange": i_section,
    "channel parallel flange": channel,
    "channel taper flange": channel,
    "equal angle": angle,
    "tee": tee,
    "rectangular hollow": hollow,
    "circular hollow": pipe,
    "lipped channel": lipped,
}


@cache
def answer(name: str) -> Solution:
    row = rolled(name)
    return solve_solid(Solid(FAMILIES[row["shape_family"]](row["dimensions_mm"])))


def measured(name: str) -> dict[str, float]:
    """The printed properties from a solution."""
    q = answer(name).quantities
    d = rolled(name)["dimensions_mm"]
    x, y = q["centroid_x"].known, q["centroid_y"].known
    off = np.hypot(q["shear_centre_x"].known - x, q["shear_centre_y"].known - y)
    xx, yy, area = (q[n].known for n in ("second_moment_xx", "second_moment_yy", "area"))
    return {
        "A_mm2": area,
        "Iy_mm4": xx,
        "Iz_mm4": yy,
        "Iu_mm4": q["principal_moment_u"].known,
        "Iv_mm4": q["principal_moment_v"].known,
        "It_mm4": q["torsion_constant"].known,
        "Iw_mm6": q["warping_constant"].known,
        "y_centroid_from_web_face_mm": x,
        "y_centroid_from_web_midplane_mm": x - d.get("t", 0.0) / 2,
        "z_centroid_from_flange_face_mm": -y,
        "y_shear_centre_from_centroid_mm": float(off),
        "r0_polar_about_shear_centre_mm": math.sqrt((xx + yy) / area + off**2),
    }


@pytest.mark.parametrize("name", NAMES)
def test_printed_properties(name: str) -> None:
    row, got = rolled(name), measured(name)
    wrong = {}
    judged = 0
    for key, use in row["use"].items():
        if use["fe_tolerance_percent"] is None:
            continue
        judged += 1
        off = 100 * (got[key] / row["published"][key] - 1)
        if abs(off) > use["fe_tolerance_percent"]:
            wrong[key] = (off, use["fe_tolerance_percent"])
    assert judged >= 4
    assert not wrong
    assert answer(name).met


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
    compare_with_walls(answer(name), section)


def test_cold_formed_channel_as_walls() -> None:
    d = rolled("9CS2.5x059")["dimensions_mm"]
    h, b, c, t = d["h"], d["b"], d["c"], d["t"]
    e = t / 2
    places = [(b - e, h - c), (b - e, h - e), (e, h - e), (e, e), (b - e, e), (b - e, c)]
    names = "abcdef"
    walls = tuple(Wall(p + q, p, q, (t, t)) for p, q in itertools.pairwise(names))
    corners = {n: Rounding(d["r_inside"]) for n in "bcde"}
    compare_with_walls(answer("9CS2.5x059"), Section(dict(zip(names, places, strict=True)), walls, corners))


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
