"""Textbook formulas that thin-walled theory must reproduce to round-off. Sources beside each."""

from __future__ import annotations

import math

import numpy as np
import pytest
from numpy.testing import assert_allclose
from theory_sections import arc_section, channel, d_cell, joined, polyline

from beam_theory import Section, Solution, Wall, solve

TIGHT = 1e-10


def value(solution: Solution, name: str) -> float:
    return solution.require(name)


@pytest.mark.parametrize(("b", "h", "t"), [(50.0, 100.0, 2.0), (30.0, 200.0, 1.0), (80.0, 40.0, 3.0)])
def test_channel(b: float, h: float, t: float) -> None:
    """Roark's Formulas, 7th ed., table 10.2 case 1: e, I_w, J; peak flow V Q/I at mid-web."""
    solution = solve(channel(b, h, t))
    inertia = t * h**3 / 12 + b * t * h**2 / 2
    assert_allclose(value(solution, "second_moment_xx"), inertia, rtol=TIGHT)
    assert_allclose(value(solution, "shear_centre_x"), -3 * b**2 / (6 * b + h), rtol=TIGHT)
    assert_allclose(value(solution, "shear_centre_y"), 0.0, atol=TIGHT * h)
    warping = t * b**3 * h**2 * (3 * b + 2 * h) / (12 * (6 * b + h))
    assert_allclose(value(solution, "warping_constant"), warping, rtol=TIGHT)
    assert_allclose(value(solution, "torsion_constant"), t**3 * (2 * b + h) / 3, rtol=TIGHT)
    peak = (b * h / 2 + h**2 / 8) * t / inertia
    flow = solution.unit_flow("Vy")
    assert_allclose(flow.at("w1", np.array([0.5])), [peak], rtol=TIGHT)
    assert_allclose(flow.stationary("w1"), [0.5], rtol=TIGHT)
    assert_allclose([flow.peak().flow, flow.peak().at], [peak, 0.5], rtol=TIGHT)
    # Own energy of the unit flow: flanges q = t h s/(2 I), web parabola on top of t b h/(2 I).
    flange = 2 * (t * h / (2 * inertia)) ** 2 * b**3 / 3
    web = t**2 / inertia**2 * ((b * h / 2) ** 2 * h + 2 * (b * h / 2) * h**3 / 12 + h**5 / 120)
    assert_allclose(value(solution, "shear_area_y"), t / (flange + web), rtol=TIGHT)


def test_unequal_i() -> None:
    """Timoshenko and Gere, Theory of Elastic Stability, table A-3: shear centre h I2/(I1 + I2)."""
    points = {"a": (-40.0, 0.0), "m": (0.0, 0.0), "b": (40.0, 0.0)}
    points |= {"c": (-25.0, 100.0), "n": (0.0, 100.0), "d": (25.0, 100.0)}
    walls = [("a", "m", 4), ("m", "b", 4), ("m", "n", 2), ("c", "n", 3), ("n", "d", 3)]
    solution = solve(joined(points, walls))
    i1, i2 = 4 * 80**3 / 12, 3 * 50**3 / 12
    assert_allclose(value(solution, "shear_centre_y"), 100 * i2 / (i1 + i2), rtol=TIGHT)
    assert_allclose(value(solution, "warping_constant"), 100**2 * i1 * i2 / (i1 + i2), rtol=TIGHT)


@pytest.mark.parametrize("pieces", [1, 3])
@pytest.mark.parametrize("half", [0.05, 0.4, 1.0, math.pi / 2, 2.0, 3.0, 3.14])
def test_open_arc(half: float, pieces: int) -> None:
    """Roark's Formulas, 7th ed., table 10.2 (circular arc): e and I_w at any angle.

    Shallow arcs lose digits in the formula itself, so both are compared over R and t R^5.
    """
    radius, t = 3.0, 0.01
    solution = solve(arc_section(radius, half, t, pieces))
    s, c = math.sin(half), math.cos(half)
    e = 2 * radius * (s - half * c) / (half - s * c)
    assert_allclose(value(solution, "shear_centre_x"), e, rtol=TIGHT)
    assert_allclose(value(solution, "shear_centre_y"), 0.0, atol=TIGHT * radius)
    warping = 2 * t * radius**5 / 3 * (half**3 - 6 * (s - half * c) ** 2 / (half - s * c))
    assert_allclose(value(solution, "warping_constant"), warping, rtol=TIGHT, atol=1e-14 * t * radius**5)
    assert_allclose(value(solution, "torsion_constant"), 2 * half * radius * t**3 / 3, rtol=TIGHT)


def test_semicircle_and_slit_tube() -> None:
    """Shear centres 4 R/pi and 2 R (any text); the slit tube with its two ends on one place."""
    assert_allclose(
        value(solve(arc_section(1.0, math.pi / 2, 0.01)), "shear_centre_x"), 4 / math.pi, rtol=TIGHT
    )
    slit = solve(arc_section(1.0, math.pi, 0.01, pieces=2))
    assert_allclose(value(slit, "shear_centre_x"), 2.0, rtol=TIGHT)
    assert_allclose(slit.unit_flow("Vy").at("w0", np.array([1.0])), [2 / math.pi], rtol=TIGHT)


@pytest.mark.parametrize("gap", [1e-1, 1e-2, 1e-3, 1e-4])
def test_slit_tube_closing(gap: float) -> None:
    """The one-arc tube with a gap tends to e = 2 R as gap^2 does."""
    e = value(solve(arc_section(1.0, math.pi - gap, 0.01)), "shear_centre_x")
    a = math.pi - gap
    assert_allclose(e, 2 * (math.sin(a) - a * math.cos(a)) / (a - math.sin(a) * math.cos(a)), rtol=TIGHT)
    assert abs(e - 2.0) < 2.0 * gap**2 + 1e-11


@pytest.mark.parametrize("turn", [0.0, 0.3, 2.0])
def test_circular_tube(turn: float) -> None:
    """J = 2 pi R^3 t, shear area A/2, peak flow V/(pi R), no warping, shear centre in the middle."""
    radius, t = 2.0, 0.05
    at = [(radius * math.cos(a), radius * math.sin(a)) for a in turn + np.array([0.0, 1.0, 2.4, 4.0])]
    points = {"a": at[0], "b": at[2]}
    walls = (Wall("one", "a", "b", (t, t), at[1]), Wall("two", "b", "a", (t, t), at[3]))
    solution = solve(Section(points, walls))
    assert_allclose(value(solution, "torsion_constant"), 2 * math.pi * radius**3 * t, rtol=TIGHT)
    assert_allclose(value(solution, "shear_area_x"), math.pi * radius * t, rtol=TIGHT)
    assert_allclose(value(solution, "shear_area_y"), math.pi * radius * t, rtol=TIGHT)
    for name in ("shear_centre_x", "shear_centre_y", "centroid_x", "centroid_y"):
        assert_allclose(value(solution, name), 0.0, atol=TIGHT * radius)
    assert value(solution, "warping_constant") < 1e-20 * value(solution, "torsion_constant") * radius**2
    assert_allclose(abs(solution.unit_flow("Vy").peak().flow), 1 / (math.pi * radius), rtol=TIGHT)
    (cell,) = solution.cells
    assert {name for name, _ in cell} == {"one", "two"}
    assert all(sign == 1 for _, sign in cell)


@pytest.mark.parametrize(("t_arc", "t_web"), [(0.02, 0.02), (0.01, 0.05)])
def test_d_cell(t_arc: float, t_web: float) -> None:
    """Nose cell closed by hand: basic flow from the corners, one compatibility equation, moments."""
    r = 1.5
    solution = solve(d_cell(r, t_arc, t_web))
    inertia = math.pi * r**3 * t_arc / 2 + t_web * (2 * r) ** 3 / 12
    flex = math.pi * r / t_arc + 2 * r / t_web
    closing = -(2 - 2 / 3) * r**3 / (inertia * flex)
    x_s = 2 * t_arc * r**4 / inertia + closing * math.pi * r**2
    assert_allclose(value(solution, "shear_centre_x"), x_s, rtol=TIGHT)
    assert_allclose(value(solution, "torsion_constant"), (math.pi * r**2) ** 2 / flex, rtol=TIGHT)
    assert_allclose(solution.cell_areas, [math.pi * r**2 / 2], rtol=TIGHT)


def test_triangular_cell() -> None:
    """Shear centre worked by hand (basic flow, closing, moments) and independently: (31.788, 52.980)."""
    solution = solve(polyline([(0, 0), (300, 0), (0, 160)], [3, 2, 5], closed=True))
    assert_allclose(value(solution, "shear_centre_x"), 4800 / 151, rtol=TIGHT)
    assert_allclose(value(solution, "shear_centre_y"), 8000 / 151, rtol=TIGHT)


def test_two_cells_bredt_batho() -> None:
    """Two cells in torsion, the 2 x 2 equations solved by hand (Timoshenko and Goodier, art. 118)."""
    points = {"a": (0.0, 0.0), "b": (100.0, 0.0), "c": (160.0, 0.0)}
    points |= {"f": (0.0, 80.0), "e": (100.0, 80.0), "d": (160.0, 80.0)}
    walls = [
        ("a", "b", 2),
        ("b", "c", 3),
        ("c", "d", 3),
        ("d", "e", 3),
        ("e", "f", 2),
        ("f", "a", 2),
        ("b", "e", 1.5),
    ]
    solution = solve(joined(points, walls))
    f11, f22, f12 = 280 / 2 + 80 / 1.5, 200 / 3 + 80 / 1.5, 80 / 1.5
    a1, a2 = 16000.0, 9600.0
    det = f11 * f22 - f12**2
    c1, c2 = (f22 * a1 + f12 * a2) / det, (f12 * a1 + f11 * a2) / det
    j = a1 * c1 + a2 * c2
    assert_allclose(value(solution, "torsion_constant"), j, rtol=TIGHT)
    flow = solution.unit_flow("T")
    assert_allclose(flow.at("a-b", np.array([0.3])), [c1 / j], rtol=TIGHT)
    assert_allclose(flow.at("b-e", np.array([0.3])), [(c1 - c2) / j], rtol=TIGHT)
    assert_allclose(flow.twist, 1 / j, rtol=TIGHT)


def test_box_with_fins_shares_torque() -> None:
    """Cell and fins in parallel: J adds up, fins carry g T t/J at their faces and no flow."""
    points = {"a": (0.0, 0.0), "b": (60.0, 0.0), "c": (60.0, 40.0), "d": (0.0, 40.0), "e": (90.0, 0.0)}
    walls = [("a", "b", 2), ("b", "c", 2), ("c", "d", 2), ("d", "a", 2), ("b", "e", 6)]
    solution = solve(joined(points, walls))
    cell, fin = 4 * 2400.0**2 / (200 / 2), 30 * 6**3 / 3
    assert_allclose(value(solution, "torsion_constant"), cell + fin, rtol=TIGHT)
    torque = 1000.0
    shear = solution.surface_shear(torque, "b-e", np.array([0.0, 1.0]))
    assert_allclose(shear, [torque * 6 / (cell + fin)] * 2, rtol=TIGHT)
    assert_allclose(solution.surface_shear(torque, "a-b", np.array([0.5])), [0.0], atol=0.0)
    assert_allclose(solution.unit_flow("T").at("b-e", np.array([0.5])), [0.0], atol=0.0)
    assert not solution.in_cell("b-e")


@pytest.mark.parametrize("ratio", [1.0001, 1.5, 4.0, 50.0, 1e4])
def test_taper(ratio: float) -> None:
    """One tapered flange: area, cubic flow, cell flexibility L ln(r)/(t1 - t0)."""
    t0 = 0.5
    t1 = ratio * t0
    points = {"a": (0.0, 0.0), "b": (10.0, 0.0), "c": (10.0, 8.0), "d": (0.0, 8.0)}
    walls = (
        Wall("ab", "a", "b", (t0, t1)),
        Wall("bc", "b", "c", (1.0, 1.0)),
        Wall("cd", "c", "d", (1.0, 1.0)),
        Wall("da", "d", "a", (1.0, 1.0)),
    )
    solution = solve(Section(points, walls))
    assert_allclose(value(solution, "area"), 10 * (t0 + t1) / 2 + 26, rtol=TIGHT)
    flex = 26 + 10 * math.log(ratio) / (t1 - t0)
    assert_allclose(value(solution, "torsion_constant"), 4 * 80**2 / flex, rtol=TIGHT)
    flow = solution.unit_flow("Vx")
    (poly,) = flow.polynomial("ab")
    u = np.linspace(0.0, 1.0, 7)
    assert_allclose(flow.at("ab", u), np.polyval(poly.coefficients[::-1], u), rtol=1e-12, atol=1e-14)
    assert all(check.passed for check in solution.checks)


@pytest.mark.parametrize(
    ("places", "thickness", "closed"),
    [
        ([(0, 0), (70, 0), (70 + 40, 90)], 4.0, False),
        ([(0, 0), (50, 0), (50, 50), (0, 50)], 2.0, True),
        ([(0, 0), (100, 0), (100, 60), (0, 60)], [2.5, 1.5, 2.5, 1.5], True),
        ([(0, 0), (300, 0), (0, 160)], [3, 2, 5], True),
    ],
)
def test_no_midline_warping(places: list[tuple[float, float]], thickness: list[float], closed: bool) -> None:
    """Angle, square box, box with b/t_b = h/t_h (Neuber), triangle: midline I_w is zero."""
    solution = solve(polyline(places, thickness, closed))
    size = value(solution, "torsion_constant") * 300.0**2
    assert abs(value(solution, "warping_constant")) < 1e-20 * size


@pytest.mark.parametrize("arms", [3, 4])
def test_star_has_no_midline_warping(arms: int) -> None:
    """Tee and cruciform: every arm passes through the shear centre."""
    ends = [(50.0, 0.0), (-50.0, 0.0), (0.0, -80.0), (0.0, 60.0)][:arms]
    points = {"m": (0.0, 0.0)} | {f"p{i}": xy for i, xy in enumerate(ends)}
    solution = solve(joined(points, [("m", f"p{i}", 3.0 + i) for i in range(arms)]))
    assert_allclose([value(solution, "shear_centre_x"), value(solution, "shear_centre_y")], 0.0, atol=1e-12)
    assert abs(value(solution, "warping_constant")) < 1e-20 * value(solution, "torsion_constant") * 140**2


def test_shear_only_skins_give_steps() -> None:
    """Skins with direct_share 0: the flow is constant between booms (Megson, boom and skin idealisation)."""
    from beam_theory import Boom

    points = {"a": (0.0, 200.0), "b": (-100.0, 200.0), "c": (-100.0, -200.0), "d": (0.0, -200.0)}
    walls = tuple(
        Wall(f"{s}{e}", s, e, (2.0, 2.0), direct_share=0.0) for s, e in (("a", "b"), ("b", "c"), ("c", "d"))
    )
    section = Section(points, walls, tuple(Boom(300.0, point=p) for p in points))
    flow = solve(section).unit_flow("Vy")
    for wall, want in (("ab", 1 / 800), ("bc", 1 / 400), ("cd", 1 / 800)):
        q = flow.at(wall, np.linspace(0.0, 1.0, 5))
        assert_allclose(np.abs(q), want, rtol=TIGHT)
        assert len(flow.stationary(wall)) == 0


def test_surface_shear_follows_the_shear_modulus() -> None:
    """g T t/J in each wall of its own material, linear in t along a taper."""
    points = {"a": (0.0, 0.0), "b": (60.0, 0.0), "c": (60.0, 80.0)}
    walls = (Wall("ab", "a", "b", (2.0, 4.0), g=3.0), Wall("bc", "b", "c", (5.0, 5.0)))
    solution = solve(Section(points, walls))
    j = 3.0 * 60 * (8 + 16 + 32 + 64) / 4 / 3 + 80 * 125 / 3
    assert_allclose(value(solution, "torsion_constant"), j, rtol=TIGHT)
    assert_allclose(
        solution.surface_shear(7.0, "ab", np.array([0.0, 0.5, 1.0])), 21.0 * np.array([2, 3, 4]) / j
    )
    assert_allclose(solution.surface_shear(7.0, "bc", np.array([0.5])), [35.0 / j], rtol=TIGHT)


@pytest.mark.parametrize("order", [(0, 1, 2, 3), (1, 0, 2, 3), (3, 2, 1, 0), (2, 3, 0, 1)])
@pytest.mark.parametrize("turned", [False, True])
def test_walls_that_leave_along_one_tangent(order: tuple[int, ...], turned: bool) -> None:
    """Two arcs and a straight wall leave a point along x; a web closes two cells between them."""
    half = math.sqrt(0.5)
    points = {"a": (0.0, 0.0), "b": (1.0, 1.0), "c": (2.0, 0.0), "d": (1.5, -1.5)}
    walls = [
        Wall("tight", "a", "b", (0.01, 0.01), (half, 1.0 - half)),
        Wall("flat", "a", "c", (0.01, 0.01)),
        Wall("down", "a", "d", (0.01, 0.01), (1.5 * half, -1.5 * (1.0 - half))),
        Wall("web", "b", "c", (0.01, 0.01)),
    ]
    if turned:
        walls = [Wall(w.name, w.end, w.start, w.thickness, w.arc_through) for w in walls]
    section = Section(points, (*(walls[i] for i in order), Wall("edge", "d", "c", (0.01, 0.01))))
    solution = solve(section)
    # Under the tight arc: a - (2,0) - (1,1) less the arc's side; and the one below the straight wall.
    above = 1.0 - math.pi / 4 + 0.5
    below = 1.5**2 * (1.0 - math.pi / 4) + 0.5 * 0.5 * 1.5
    assert_allclose(sorted(solution.cell_areas), sorted([above, below]), rtol=TIGHT)
    assert all(check.passed for check in solution.checks)


def test_stationary_places_of_a_long_arc() -> None:
    """Circular tube: under Vy the flow is stationary where the wall crosses the x axis, twice on one arc."""
    at = {name: (math.cos(a), math.sin(a)) for name, a in (("p", -0.3), ("m", 1.6), ("q", 3.5), ("n", 4.7))}
    points = {"p": at["p"], "q": at["q"]}
    walls = (Wall("long", "p", "q", (0.01, 0.01), at["m"]), Wall("short", "q", "p", (0.01, 0.01), at["n"]))
    flow = solve(Section(points, walls)).unit_flow("Vy")
    assert_allclose(flow.stationary("long"), [0.3 / 3.8, (math.pi + 0.3) / 3.8], rtol=1e-9)
    assert len(flow.stationary("short")) == 0
    peaks = flow.at("long", flow.stationary("long"))
    assert_allclose(np.abs(peaks), 1 / math.pi, rtol=TIGHT)
    assert_allclose(abs(flow.peak("long").flow), 1 / math.pi, rtol=TIGHT)


@pytest.mark.parametrize("turn", [0.0, 0.3])
def test_midline_warping_constant_is_exactly_zero(turn):
    """Walls through one point, the square box and a triangle do not warp (common practice)."""
    shapes = {
        "angle": ([(0, 100), (0, 0), (60, 0)], "01 12"),
        "tee": ([(-40, 0), (0, 0), (40, 0), (0, -100)], "01 12 13"),
        "cruciform": ([(-40, 0), (0, 0), (50, 0), (0, -50), (0, 50)], "01 12 13 14"),
        "square box": ([(0, 0), (80, 0), (80, 80), (0, 80)], "01 12 23 30"),
        "triangle": ([(0, 0), (300, 0), (0, 160)], "01 12 20"),
    }
    thickness = {"triangle": (3.0, 2.0, 5.0)}
    for name, (places, lines) in shapes.items():
        points = {str(i): (x * np.cos(turn) - y * np.sin(turn), x * np.sin(turn) + y * np.cos(turn))
                  for i, (x, y) in enumerate(places)}  # fmt: skip
        given = thickness.get(name, (3.0,) * 4)
        walls = tuple(Wall(w, w[0], w[1], (t, t)) for w, t in zip(lines.split(), given, strict=False))
        solution = solve(Section(points, walls))
        assert solution.quantities["warping_constant"].value == 0.0, name
        assert all(check.passed for check in solution.checks), name
