"""Direct, shear and von Mises stress at the real faces on both sides, and the largest of each."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.comparing import compare, join
from crosscheck.comparison.flow_comparison import Probe
from crosscheck.comparison.stress_comparison import WallFaces, fe_peak
from crosscheck.reports.result_json import json_text
from crosscheck.section_file.model import LoadSpec

from .solved import compared, section_of
from .stand_in import both_sides, channel_file

HEAD = """\
units = "mm N"
[points]
a = [50, 0]
b = [0, 0]
c = [0, 100]
d = [50, 100]
[[walls]]
name = "bottom"
path = ["a", "b"]
thickness = 4
{bottom}
[[walls]]
name = "web"
path = ["b", "c"]
thickness = 4
[[walls]]
name = "top"
path = ["c", "d"]
thickness = 4
{top}
"""
CHANNEL = HEAD.format(bottom="", top="")
BENT = '[[loads]]\nname = "bent"\naxial = 900\nmoment = [250000, -31000]\n'


def wall(result, load, name):
    return next(w for w in result.stresses if w.load == load and w.wall == name)


def test_direct_stress_of_both_sides_is_the_formula_of_each():
    result = compared(CHANNEL + BENT)
    fe = {row.name: row.fe.value for row in result.quantities if row.load is None}
    theory = {row.name: row.theory["midline"] for row in result.quantities if row.load is None}
    found = wall(result, "bent", "top")
    for own, name in ((theory, "direct"), (fe, "fe_direct")):
        matrix = [
            [own["second_moment_yy"], own["product_moment_xy"]],
            [own["product_moment_xy"], own["second_moment_xx"]],
        ]
        a, b = np.linalg.solve(matrix, [-31000.0, 250000.0])
        for face, y in (("left", 102.0), ("right", 98.0)):
            want = [
                900 / own["area"] + a * (s - own["centroid_x"]) + b * (y - own["centroid_y"]) for s in found.s
            ]
            assert_allclose(getattr(found.faces[face], name), want, rtol=1e-9, atol=1e-9)


def test_von_mises_is_made_of_direct_and_shear():
    text = CHANNEL + BENT.replace("axial", 'shear = [0, 700]\nthrough = "b"\ntorque = 4000\naxial')
    series = wall(compared(text), "bent", "web").faces["left"]
    for side in ("", "fe_"):
        direct = np.array(getattr(series, f"{side}direct"))
        shear = np.array(getattr(series, f"{side}shear"))
        want = np.sqrt(direct**2 + 3 * shear**2)
        assert_allclose(getattr(series, f"{side}von_mises"), want, rtol=1e-12, atol=0)


def test_largest_stress_is_over_the_probes_and_names_its_place():
    result = compared(CHANNEL + BENT)
    row = result.quantity("direct_stress", "bent")
    every = [
        (abs(v), w.wall, face, s)
        for w in result.stresses
        for face, f in w.faces.items()
        for s, v in zip(w.s, f.fe_direct, strict=True)
    ]
    most, name, face, s = max(every)
    assert_allclose(row.fe.value, most, rtol=1e-12, atol=0)
    assert row.note == f"FE's largest at wall {name}, {face} face, s = {s:.4g}"
    assert row.verdict == "within"
    assert row.effect is not None
    peak = next(p for p in result.theory_peaks if p.kind == "direct")
    assert (peak.wall, peak.has_fe) == (name, False)
    assert abs(peak.value) > row.theory["midline"]


def test_loads_of_direct_resultants_alone_have_no_flow_rows():
    result = compared(CHANNEL + BENT)
    names = {row.name for row in result.quantities if row.load == "bent"}
    assert names == {"direct_stress", "von_mises_stress"}
    assert not [flow for flow in result.flows if flow.load == "bent"]


def test_surface_shear_is_the_open_walls_twist_alone():
    result = compared(CHANNEL + '[[loads]]\nname = "v"\nshear = [0, 1000]\nthrough = [60, 0]\n')
    row, twist = result.quantity("surface_shear", "v"), result.quantity("rate_of_twist", "v")
    # tau = G t phi'; per unit modulus the rate of twist is phi' times G.
    assert_allclose(row.theory["midline"], 4 * abs(twist.theory["midline"]), rtol=1e-12, atol=0)
    assert_allclose(row.fe.value, 4 * abs(twist.fe.value), rtol=0.01, atol=0)
    unit = result.quantity("surface_shear", "unit T")
    assert unit.unit == "1/mm^3"
    modulus = result.quantity("torsion_modulus")
    assert_allclose(modulus.theory["midline"], 1 / unit.theory["midline"], rtol=1e-12, atol=0)


def test_a_load_through_the_shear_centre_makes_no_surface_shear():
    section = channel_file(loads=(LoadSpec("lift", (0.0, 1000.0), "midline shear centre"),))
    row = join(section, *both_sides(section)).quantity("surface_shear", "lift")
    assert row.theory["midline"] == pytest.approx(0.0, abs=1e-12)
    # FE's arm of 0.2 of D = 100 is measured on 5 % of V D: 0.2/5.
    assert_allclose(row.difference["midline"], -0.04, rtol=1e-9, atol=0)


def test_closed_sections_have_no_surface_shear_row():
    box = 'units = "mm N"\n[points]\na = [0, 0]\nb = [60, 0]\nc = [60, 40]\nd = [0, 40]\n'
    result = compared(box + '[[walls]]\npath = ["a", "b", "c", "d", "a"]\nthickness = 2\n')
    assert not [row for row in result.quantities if row.name == "surface_shear"]
    assert result.quantity("torsion_modulus").verdict is not None


def test_a_shear_only_wall_has_no_direct_stress_on_either_side():
    text = HEAD.format(bottom="", top="direct_share = 0") + BENT
    series = wall(compared(text), "bent", "top").faces["left"]
    assert set(series.direct) == set(series.fe_direct) == {0.0}


def test_a_part_share_carries_the_walls_own_stress_not_the_smeared_one():
    text = HEAD.format(bottom="direct_share = 0.5", top="") + BENT
    series = wall(compared(text), "bent", "bottom").faces["left"]
    assert_allclose(series.fe_direct, series.direct, rtol=0.03, atol=0.3)


def test_a_boom_on_a_wall_leaves_the_walls_own_stress():
    boom = '[[booms]]\nwall = "web"\nat = 0.5\narea = 200\n[[probes]]\nlabel = "p"\nwall = "web"\nat = 0.5\n'
    result = compared(CHANNEL + BENT + boom)
    found = wall(result, "bent", "web")
    at = found.labels.index("p")
    series = found.faces["left"]
    assert_allclose(series.fe_direct[at], series.direct[at], rtol=0.02, atol=0)
    fibre = result.boom_fibres[0]
    assert (fibre.load, fibre.place) == ("bent", "web at 0.5")
    assert_allclose(fibre.theory, fibre.fe, rtol=0.01, atol=0)


def test_bimoment_stress_agrees_and_integrates_to_the_bimoment():
    text = CHANNEL + '[[loads]]\nname = "held"\nbimoment = 5e6\n'
    result = compared(text)
    row = result.quantity("direct_stress", "held")
    assert_allclose(row.theory["corrected"], row.fe.value, rtol=0.02, atol=0)
    assert row.fe.half_width is not None
    assert row.fe.half_width > 0.0


def test_two_materials_have_their_own_stress():
    steel = HEAD.format(bottom='material = "steel"', top="") + BENT
    steel = steel.replace('units = "mm N"', 'units = "mm N"\nbase_material = "sheet"')
    steel += "[materials.sheet]\nE = 70000\nnu = 0.3\n[materials.steel]\nE = 210000\nnu = 0.3\n"
    result = compared(steel)
    for name in ("bottom", "web", "top"):
        series = wall(result, "bent", name).faces["right"]
        assert_allclose(series.fe_direct, series.direct, rtol=0.03, atol=0.3)
    # The corner belongs to both walls; strain is one, stress as E.
    bottom, web = wall(result, "bent", "bottom"), wall(result, "bent", "web")
    assert abs(bottom.faces["right"].direct[-1] / web.faces["right"].direct[0]) > 2.0


def test_fillets_have_a_peak_and_sharp_corners_none():
    load = '[[loads]]\nname = "v"\ntorque = 4000\n'
    assert compared(CHANNEL + load).fillet_peaks == ()
    rounded = compared(CHANNEL + load + "[corners]\nevery_bend = { inner_radius = 4 }\n")
    peaks = [peak for peak in rounded.fillet_peaks if peak.load == "v"]
    row = rounded.quantity("surface_shear", "v")
    assert peaks[0].value > 1.05 * row.fe.value


def test_stresses_of_the_stand_in_reach_the_json(result):
    text = json_text([result])
    assert '"stresses"' in text
    weld = next(w for w in result.stresses if w.wall == "web")
    series = weld.faces["left"]
    at = weld.labels.index("corner weld")
    assert series.fe_shear[at] is None
    assert series.shear[at] is not None
    # FE's shear stress of Vy is 3 % above theory's, that of T equal.
    assert_allclose(np.mean([series.fe_shear[i] for i in range(1, 5)]), np.mean(series.shear[1:5]), rtol=0.05)


PEAKS = {
    "cruciform": (
        "m = [0, 0]\ne = [50, 0]\nn = [0, 50]\nw = [-50, 0]\ns = [0, -50]\n",
        ("me", "mn", "mw", "ms"),
    ),
    "tee": ("l = [-40, 100]\nm = [0, 100]\nr = [40, 100]\ns = [0, 0]\n", ("lm", "mr", "ms")),
    "channel": ("a = [50, 100]\nb = [0, 100]\nc = [0, 0]\nd = [50, 0]\n", ("ab", "bc", "cd")),
}


@pytest.mark.parametrize("shape", PEAKS)
def test_a_largest_stress_found_more_finely_lies_in_the_interval(shape: str) -> None:
    """The largest of many places is another one on a finer mesh."""
    points, walls = PEAKS[shape]
    text = f'units = "mm N"\n[points]\n{points}'
    text += "".join(f'[[walls]]\npath = ["{a}", "{b}"]\nthickness = "100 / 12"\n' for a, b in walls)
    text += '[[loads]]\nname = "mix"\nshear = [300, 1000]\nthrough = [10, 20]\nmoment = [20000, 7000]\n'
    section = section_of(text)
    coarse, fine = compare(section, 1e-5), compare(section, 1e-7)
    finer = {(row.name, row.load): row.fe.value for row in fine.quantities}
    names = {"torsion_modulus", "surface_shear", "direct_stress", "von_mises_stress"}
    rows = [row for row in coarse.quantities if row.name in names]
    assert {row.name for row in rows} == names
    for row in rows:
        value = finer[row.name, row.load]
        assert row.fe.low is not None
        assert row.fe.high is not None
        assert value is not None
        assert row.fe.low <= value <= row.fe.high, (row.name, row.load)


def test_interval_of_a_largest_stress_covers_every_place() -> None:
    """A lower stress with a larger error may be the larger one; the largest error counts both ways, twice."""
    probes = tuple(Probe(at, None, True, True) for at in (0.25, 0.75))
    stress, error = np.zeros((2, 2, 2)), np.zeros((2, 2, 2))
    stress[1], error[1] = [[10.0, 9.0], [1.0, 1.0]], [[0.1, 3.0], [0.0, 0.0]]
    wall = WallFaces("w", probes, np.array([1.0, 3.0]), {}, stress, error)
    peak = fe_peak("shear", [wall])
    assert peak is not None
    assert (peak.value, peak.low, peak.high, peak.s) == (10.0, 4.0, 16.0, 1.0)
