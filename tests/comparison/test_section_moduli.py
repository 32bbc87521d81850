"""Section moduli of the FE side against exact ones."""

from __future__ import annotations

import math

import pytest
from numpy.testing import assert_allclose

from .solved import compared

SIDES = ("x_top", "x_bottom", "y_right", "y_left", "u_plus", "u_minus", "v_plus", "v_minus")


def moduli(text):
    result = compared(text)
    return {side: result.quantity(f"section_modulus_{side}") for side in SIDES}


def test_rectangular_tube_is_exact():
    text = 'units = "mm N"\n[points]\na = [0, 0]\nb = [60, 0]\nc = [60, 40]\nd = [0, 40]\n'
    text += '[[walls]]\npath = ["a", "b", "c", "d", "a"]\nthickness = 4\n'
    xx = (64 * 44**3 - 56 * 36**3) / 12
    yy = (44 * 64**3 - 36 * 56**3) / 12
    found = moduli(text)
    for side, want in {"x_top": xx / 22, "x_bottom": xx / 22, "y_right": yy / 32, "y_left": yy / 32}.items():
        assert_allclose(found[side].fe.value, want, rtol=1e-12, atol=0)
        assert found[side].fe.basis == "exact"
    # The larger axis u is y here: a moment about it is carried at the sides.
    assert_allclose([found["u_plus"].fe.value, found["v_plus"].fe.value], [yy / 32, xx / 22], rtol=1e-12)


def test_solid_rectangle_has_moduli_about_the_stiff_axis_where_theory_has_none_about_the_other():
    text = 'units = "mm N"\n[points]\na = [0, 0]\nb = [0, 90]\n[[walls]]\npath = ["a", "b"]\nthickness = 10\n'
    found = moduli(text)
    assert_allclose(found["x_top"].fe.value, 10 * 90**2 / 6, rtol=1e-12, atol=0)
    assert_allclose(found["x_top"].theory["midline"], 10 * 90**2 / 6, rtol=1e-12, atol=0)
    assert_allclose(found["y_left"].fe.value, 90 * 10**2 / 6, rtol=1e-12, atol=0)
    assert found["y_left"].theory["midline"] is None
    assert found["y_left"].verdict is None


def test_circular_tube_is_within_its_interval():
    text = 'units = "mm N"\n[points]\na = [-50, 0]\nb = [50, 0]\n'
    text += '[[walls]]\nname = "tube"\npath = ["a", "b", "a"]\nthickness = 6\nsmooth = true\n'
    want = math.pi / 4 * (53**4 - 47**4) / 53
    found = moduli(text)
    for side in ("x_top", "x_bottom", "y_right", "y_left"):
        assert found[side].fe.low <= want <= found[side].fe.high
        assert_allclose(found[side].fe.value, want, rtol=2e-5, atol=0)
    assert found["u_plus"].verdict is None
    assert "every axis is principal" in found["u_plus"].reason


@pytest.mark.parametrize("turn", [0.0, 30.0, 90.0])
def test_principal_moduli_do_not_depend_on_the_axes_of_the_file(turn):
    places = {"a": (45, 0), "b": (0, 0), "c": (0, 100), "d": (-25, 100)}
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))
    text = 'units = "mm N"\n[points]\n'
    text += "".join(f"{k} = [{c * x - s * y!r}, {s * x + c * y!r}]\n" for k, (x, y) in places.items())
    text += '[[walls]]\npath = ["a", "b", "c", "d"]\nthickness = [6, 4, 5]\n'
    found = moduli(text)
    plain = moduli(text if turn == 0 else text_of_plain())
    for pair in (("u_plus", "u_minus"), ("v_plus", "v_minus")):
        for side in ("theory", "fe"):
            here = sorted(value(found[name], side) for name in pair)
            there = sorted(value(plain[name], side) for name in pair)
            assert_allclose(here, there, rtol=1e-9, atol=0)
    # Plus and minus mean the same on both sides, whatever sense either gave its axis.
    for row in found.values():
        assert abs(row.difference["midline"]) < 0.05


def text_of_plain():
    text = 'units = "mm N"\n[points]\na = [45, 0]\nb = [0, 0]\nc = [0, 100]\nd = [-25, 100]\n'
    return text + '[[walls]]\npath = ["a", "b", "c", "d"]\nthickness = [6, 4, 5]\n'


def value(row, side):
    return row.theory["midline"] if side == "theory" else row.fe.value


def test_fibres_count_with_their_modulus_and_booms_at_their_point():
    text = 'units = "mm N"\nbase_material = "sheet"\n[points]\na = [0, 0]\nb = [0, 100]\nc = [80, 0]\n'
    text += '[[walls]]\npath = ["a", "b"]\nthickness = 4\n[[walls]]\npath = ["a", "c"]\nthickness = 4\n'
    text += 'material = "steel"\n[[booms]]\nat = "b"\narea = 100\nmaterial = "steel"\n'
    text += "[materials.sheet]\nE = 70000\nnu = 0.3\n[materials.steel]\nE = 210000\nnu = 0.3\n"
    result = compared(text)
    y, xx = result.quantity("centroid_y").fe.value, result.quantity("second_moment_xx").fe.value
    top = result.quantity("section_modulus_x_top").fe.value
    bottom = result.quantity("section_modulus_x_bottom").fe.value
    # The boom of e = 3 at y = 100 outdoes the sheet's end there; below, steel at y = -2.
    assert_allclose(top, xx / (3 * (100 - y)), rtol=1e-9, atol=0)
    assert_allclose(bottom, xx / (3 * (y + 2)), rtol=1e-9, atol=0)
