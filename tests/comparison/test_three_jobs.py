"""Three jobs of a stress office, each one shipped file: their outcomes against calculations made here."""

from __future__ import annotations

import math
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from rich.console import Console

from crosscheck.comparison.comparing import compare
from crosscheck.reports.result_table import csv_text, markdown_text
from crosscheck.reports.screen import first_screen
from crosscheck.reports.tables import TABLES
from crosscheck.section_file.reader import read_section

CASES = Path(__file__).parents[2] / "cases" / "sections"


def words(result) -> str:
    """The first screen at 80 columns, its line breaks taken out."""
    console = Console(width=80, no_color=True)
    with console.capture() as shown:
        console.print(first_screen(result, 80))
    return " ".join(shown.get().split())


@pytest.fixture(scope="module")
def beam():
    return compare(read_section(CASES / "stated_floor_beam.toml"))


@pytest.fixture(scope="module")
def box_file():
    return read_section(CASES / "three_cell_stringer_box.toml")


@pytest.fixture(scope="module")
def box(box_file):
    return compare(box_file, 1e-3)


@pytest.fixture(scope="module")
def rail():
    return compare(read_section(CASES / "faces_cell_ramp_rail.toml"))


# 1: a lipped floor beam, 150 x 60 x 18 over all, 2 thick, bends of 4 inside.
H, B, LIP, T, BEND = 148.0, 58.0, 17.0, 2.0, 5.0  # midline lengths of the sharp polygon, midline radius


def bent_midline(n: int = 4000) -> np.ndarray:
    """Midline of the beam with its bends, from the lower lip's end to the upper one's, web on x = 0."""
    centres = [
        (B - BEND, -H / 2 + BEND),
        (BEND, -H / 2 + BEND),
        (BEND, H / 2 - BEND),
        (B - BEND, H / 2 - BEND),
    ]
    places = [(B, LIP - H / 2)]
    for (x, y), start in zip(centres, (0.0, -90.0, 180.0, 90.0), strict=True):
        turn = np.radians(np.linspace(start, start - 90.0, n))
        places += list(zip(x + BEND * np.cos(turn), y + BEND * np.sin(turn), strict=True))
    return np.array([*places, (B, H / 2 - LIP)])


def shear_centre_left_of_web(line: np.ndarray) -> float:
    """Moment about the web's middle of the flow of a unit Vy along the midline [L]."""
    steps = np.diff(line, axis=0)
    length = np.hypot(*steps.T)
    y = line[:, 1]
    inertia = float(np.sum(length * (y[:-1] ** 2 + y[:-1] * y[1:] + y[1:] ** 2) / 3.0))
    flow = -np.concatenate(([0.0], np.cumsum(length * (y[:-1] + y[1:]) / 2.0))) / inertia
    # Of a straight piece the flow is a parabola: Simpson's rule with its middle is exact.
    middle = flow[:-1] - length * (3.0 * y[:-1] + y[1:]) / 8.0 / inertia
    force = (flow[:-1] + 4.0 * middle + flow[1:]) / 6.0
    return float(np.sum(force * (line[:-1, 0] * steps[:, 1] - line[:-1, 1] * steps[:, 0])))


def test_the_handbook_torsion_constant_without_bends_does_not_stand(beam):
    stated = beam.stated[0]
    flats = (H - 2 * BEND) + 2 * (B - 2 * BEND) + 2 * (LIP - BEND)
    assert stated.value == pytest.approx(flats * T**3 / 3)
    # With the bends, less what two free ends take away: 0.105 t^4 each.
    whole = (flats + 4 * math.pi / 2 * BEND) * T**3 / 3 - 2 * 0.105 * T**4
    assert stated.fe.value == pytest.approx(whole, rel=1e-3)
    assert stated.verdict == "outside"
    assert stated.difference_fe == pytest.approx(stated.value / whole - 1, abs=2e-3)
    assert "does not stand: FE 768.63" in words(beam)
    assert "use FE's 768.63 (stated x 1.117; level corrected: 768.64)" in words(beam)
    assert "Why, warping constant: bends and fillets, by theory +7 %" in words(beam)


def test_the_handbook_shear_centre_stands(beam):
    stated = beam.stated[1]
    sharp = np.array([(B, LIP - H / 2), (B, -H / 2), (0, -H / 2), (0, H / 2), (B, H / 2), (B, H / 2 - LIP)])
    # Classical formula for a channel with lips turned in (from memory).
    h, b, c = H, B, LIP
    classical = b * (3 * h**2 * b + 6 * h**2 * c - 8 * c**3)
    classical /= h**3 + 6 * h**2 * b + 6 * h**2 * c + 8 * c**3 - 12 * h * c**2
    assert shear_centre_left_of_web(sharp) == pytest.approx(-classical, rel=1e-12)
    assert stated.theory["midline"] == pytest.approx(classical, rel=1e-9)
    bent = -shear_centre_left_of_web(bent_midline())
    assert stated.fe.value == pytest.approx(bent, rel=1e-3)
    assert stated.theory["corrected"] == pytest.approx(bent, rel=1e-3)
    assert stated.verdict == "within"
    assert "shear centre, x 27.600 mm from web (its midline) (handbook, lipped channels) stands" in words(
        beam
    )
    assert beam.overall == pytest.approx((60.0, 150.0))


# 2: a wing box on 24 booms, calculated here as a network of flows.
SKIN, STRINGER = 1.6, 1.6 * 44
TOP = [(0, 80), (350, 95), (650, 85), (900, 60)]
SPARS = {"front spar": 2.4, "mid spar": 1.6, "aft spar": 1.4, "rear spar": 1.8}
SKINS = (SKIN, SKIN, 1.2)
COUNTS = (4, 4, 3)
BOOM = (STRINGER + 315 / 4 * SKIN, STRINGER + 300 / 4 * SKIN, STRINGER + (250 * 1.2 + 120 * 1.8 / 6) / 3)
CAP = 420 + 35 * SKIN + 160 * 2.4 / 6


def network():
    """Booms (x, y, area) and panels (name, start, end, thickness) of the idealised box."""
    booms, panels = {(0.0, 80.0): CAP, (0.0, -80.0): CAP}, []
    for cell, (start, end) in enumerate(pairwise(TOP)):
        places = np.linspace(start, end, COUNTS[cell] + 2)
        for sign in (1, -1):
            booms |= {(x, sign * y): BOOM[cell] for x, y in places[1:-1].tolist()}
        for i, (a, b) in enumerate(zip(places[:-1].tolist(), places[1:].tolist(), strict=True)):
            panels.append((f"top skin {cell + 1}.{i + 1}", tuple(a), tuple(b), SKINS[cell]))
            low = f"low skin {3 - cell}.{COUNTS[cell] + 1 - i}"
            panels.append((low, (b[0], -b[1]), (a[0], -a[1]), SKINS[cell]))
    for (name, t), (x, y) in zip(SPARS.items(), TOP, strict=True):
        panels.append((name, (float(x), float(-y)), (float(x), float(y)), t))
    return booms, panels


def flows_by_hand(force, torque, at):
    """Flow of every panel: balance at every joint, one twist of all cells, moment about a place."""
    booms, panels = network()
    area, xs, ys = np.array(list(booms.values())), *np.array(list(booms)).T
    x_c = float(area @ xs / area.sum())
    ixx, iyy = float(area @ ys**2), float(area @ (xs - x_c) ** 2)  # symmetric about y = 0
    joints = sorted({end for _, a, b, _ in panels for end in (a, b)})
    rows, right = [], []
    for joint in joints[:-1]:
        # What arrives less what leaves is the boom's change of force along z.
        rows.append([*((b == joint) - (a == joint) for _, a, b, _ in panels), 0.0])
        gain = booms.get(joint, 0.0) * (force[1] * joint[1] / ixx + force[0] * (joint[0] - x_c) / iyy)
        right.append(gain)
    spars = list(SPARS)
    for cell in range(3):
        row = []
        for name, a, b, t in panels:
            length = math.dist(a, b) / t
            # Anticlockwise round the cell: top skins and the spar on its left against their direction.
            skin = name.startswith((f"top skin {cell + 1}.", f"low skin {3 - cell}."))
            row.append(-length if skin or name == spars[cell] else length if name == spars[cell + 1] else 0.0)
        (x0, y0), (x1, y1) = TOP[cell : cell + 2]
        rows.append([*row, -2.0 * (x1 - x0) * (y0 + y1)])
        right.append(0.0)
    moment = [(a[0] - at[0]) * (b[1] - at[1]) - (a[1] - at[1]) * (b[0] - at[0]) for _, a, b, _ in panels]
    rows.append([*moment, 0.0])
    right.append(torque)
    *flows, twist = np.linalg.solve(np.array(rows), np.array(right))
    return dict(zip((name for name, *_ in panels), flows, strict=True)), twist


def test_loads_about_the_loads_offices_axis_are_turned_into_the_files(box_file):
    loads = {load.name: load for load in box_file.loads}
    assert len(loads) == 5
    pull_up, gust = loads["pull-up"], loads["gust"]
    # Their x points forward, so Vx, My and the torque change sign; the place is theirs, not the origin.
    assert pull_up.shear == (900.0, 14500.0)
    assert pull_up.torque == 620000.0
    assert pull_up.moment == (38500000.0, -1800000.0)
    assert pull_up.through == (380.0, 12.0)
    assert gust.shear == (400.0, 11900.5)
    assert loads["landing"].axial == -2500.0
    assert loads["aileron"].kind == "ultimate"


def test_flows_of_the_booms_are_those_of_a_network(box, box_file):
    for load in box_file.loads:
        known, _ = flows_by_hand(load.shear, load.torque, load.through)
        scale = max(map(abs, known.values()))
        found = {
            flow.wall: flow.probes[len(flow.probes) // 2].theory
            for flow in box.flows
            if flow.load == load.name and flow.wall in known
        }
        assert found.keys() == known.keys()
        assert len(found) == 32
        for wall, value in known.items():
            assert found[wall] == pytest.approx(value, abs=1e-9 * scale), (load.name, wall)


def test_both_models_of_the_box_are_the_ones_meant(box):
    assert (box.models.theory_walls, box.models.theory_booms, box.models.panels) == (32, 24, 32)
    assert (box.models.fe_walls, box.models.fe_booms) == (32 + 2 * 22, 2)
    booms, panels = network()
    assert box.quantity("area").judged_theory == pytest.approx(sum(booms.values()))
    real = 2 * 420 + 22 * STRINGER + sum(math.dist(a, b) * t for _, a, b, t in panels)
    assert box.quantity("area").fe.value == pytest.approx(real, rel=0.01)
    _, twist = flows_by_hand((0.0, 0.0), 1.0, (0.0, 0.0))
    constant = box.quantity("torsion_constant")
    assert constant.judged_theory == pytest.approx(1.0 / twist, rel=1e-9)
    assert constant.fe.value == pytest.approx(1.0 / twist, rel=0.01)
    assert all(check.passed for check in box.checks)


def test_panels_differ_because_skins_take_direct_stress_along_their_length(box, box_file):
    """Theory's flow is constant between booms; FE's changes by the skin's own t * integral of sigma'."""
    ixx, iyy, x_c = (box.quantity(n).fe.value for n in ("second_moment_xx", "second_moment_yy", "centroid_x"))
    load = next(load for load in box_file.loads if load.name == "pull-up")
    for name, *_, t in network()[1]:
        if not name.startswith("top skin"):
            continue
        flow = next(f for f in box.flows if (f.load, f.wall) == ("pull-up", name))
        seen = [probe for probe in flow.probes if probe.fe is not None]
        first, last = seen[0], seen[-1]
        x, y = (first.x + last.x) / 2, (first.y + last.y) / 2
        gain = -(last.s - first.s) * t * (load.shear[1] * y / ixx + load.shear[0] * (x - x_c) / iyy)
        assert last.fe - first.fe == pytest.approx(gain, rel=0.03), name
        assert max(p.theory for p in seen) == pytest.approx(min(p.theory for p in seen), abs=1e-9)


def test_the_report_of_the_box_says_which_panels_and_why(box):
    rows = [row for row in box.walls_by_loads if row.difference is not None]
    assert len(rows) == 5 * 32
    over = {row.wall for row in rows if row.verdict == "outside"}
    means = {row.wall for row in rows if abs(row.mean_difference) > row.criterion}
    assert {row.cause.step for row in rows if row.verdict == "outside"} == {"boom idealisation"}
    text = words(box)
    rest = ", ".join(sorted({row.wall for row in rows} - means))
    assert f"flow off by more than 5 % of the wall's own peak in {len(over)} of 32" in text
    assert f"Mean flow off by more: in {len(means)} of 32 (all but {rest})" in text
    assert "mostly boom idealisation" in text
    assert "Governs, direct stress at theory's booms: pull-up (all 24 booms)" in text
    table = TABLES["walls"](box)
    assert "stringer" not in markdown_text(table)
    assert "44" in table.title
    assert csv_text(table).count("only FE sees this wall") == 5 * 44


def test_the_margin_of_the_front_spar_changes_its_sign(box, box_file):
    hand = max(
        abs(flows_by_hand(load.shear, load.torque, load.through)[0]["front spar"]) for load in box_file.loads
    )
    margin = next(row for row in box.margins if row.wall == "front spar")
    assert margin.theory == pytest.approx(29.5 / hand - 1.0, rel=1e-9)
    assert margin.theory > 0 > margin.fe
    assert margin.changes_sign
    assert "Margin of front spar, shear flow: 0.0337 by hand but -0.0290 with FE" in words(box)


def test_no_direct_stress_is_told_as_none_and_not_as_zero(box):
    stress = next(s for s in box.stresses if (s.load, s.wall) == ("pull-up", "mid spar"))
    assert stress.reason == "theory's wall carries shear only: its direct stress is in the booms"
    face = stress.faces["left"]
    assert face.direct == face.von_mises == ()
    assert any(face.shear)
    assert any(face.fe_direct)
    assert any(face.fe_von_mises)
    line = next(
        row for row in csv_text(TABLES["stresses"](box)).splitlines() if "pull-up,mid spar,left" in row
    )
    assert line.split(",")[6] == ""
    assert stress.reason in line


# 3: a rail by its outer faces: rectangles (x0, y0, x1, y1), the opening of the cell taken away.
RECTANGLES = [(0, 0, 60, 42, 1), (5, 4, 57.5, 39, -1), (60, 0, 95, 4, 1), (0, 42, 5, 66, 1)]


def rail_moments() -> tuple[float, float, float, float, float, float]:
    """Area, centroid, Ixx, Iyy, Ixy of the rectangles [L^2, L, L, L^4 ...]."""
    x0, y0, x1, y1, sign = np.array(RECTANGLES, dtype=float).T
    area = sign * (x1 - x0) * (y1 - y0)
    x, y = (x0 + x1) / 2, (y0 + y1) / 2
    x_c, y_c = area @ x / area.sum(), area @ y / area.sum()
    ixx = area @ ((y1 - y0) ** 2 / 12 + (y - y_c) ** 2)
    iyy = area @ ((x1 - x0) ** 2 / 12 + (x - x_c) ** 2)
    return float(area.sum()), x_c, y_c, ixx, iyy, float(area @ ((x - x_c) * (y - y_c)))


def test_the_solid_of_the_rail_is_that_of_its_faces(rail):
    names = (
        "area", "centroid_x", "centroid_y", "second_moment_xx", "second_moment_yy", "product_moment_xy",
    )  # fmt: skip
    for name, value in zip(names, rail_moments(), strict=True):
        assert rail.quantity(name).fe.value == pytest.approx(value, rel=1e-10), name
    assert rail.overall == pytest.approx((95.0, 66.0))
    # Bredt's cell on the midlines with a third of b t^3 of foot and lip.
    width, height = 60 - 2.5 - 1.25, 42 - 2 - 1.5
    cell = 4 * (width * height) ** 2 / (width / 4 + height / 2.5 + width / 3 + height / 5)
    fins = ((95 - 58.75) * 4**3 + (66 - 40.5) * 5**3) / 3
    assert rail.quantity("torsion_constant").judged_theory == pytest.approx(cell + fins, rel=1e-9)


def test_the_rivets_take_flow_times_pitch(rail):
    _, x_c, y_c, ixx, iyy, ixy = rail_moments()
    vx, vy = 1400.0, -5200.0
    a, b = np.linalg.solve([[iyy, ixy], [ixy, ixx]], [vx, vy])
    # What lies outside of each line of rivets, as a rectangle of the solid; flow is positive along the wall.
    lip = 0.4 * (66 - 40.5)
    foot = 0.5 * (95 - 58.75)
    outside = {
        "side wall rivets": (5 * lip, 2.5, 66 - lip / 2, -1.0, 25.0),
        "floor rivets": (4 * foot, 95 - foot / 2, 2.0, 1.0, 18.0),
    }
    for label, (area, x, y, along, pitch) in outside.items():
        flow = along * area * (a * (x - x_c) + b * (y - y_c))
        probe = next(p for p in rail.named_probes if (p.label, p.load) == (label, "cargo roller"))
        assert probe.fe == pytest.approx(flow, rel=1e-3), label
        assert probe.theory == pytest.approx(flow, rel=0.05), label
        assert probe.fe_fastener == pytest.approx(flow * pitch, rel=1e-3), label
        assert probe.theory_fastener == pytest.approx(probe.theory * pitch), label
    text = words(rail)
    assert (
        "side wall rivets: largest flow 27.589 N/mm (cargo roller), FE 27.811; one fastener, pitch 25:"
        in text
    )


def test_a_flow_stated_at_the_rivets_is_judged_over_the_flow_there(rail):
    (stated,) = rail.stated
    probe = next(p for p in rail.named_probes if (p.label, p.load) == ("side wall rivets", "cargo roller"))
    assert stated.probe == "side wall rivets"
    assert stated.unit == "N/mm"
    assert stated.fe.value == probe.fe
    assert stated.theory["midline"] == probe.theory
    assert stated.difference_fe == pytest.approx(27.6 / probe.fe - 1.0)
    assert stated.verdict == "within"
    assert "flow at side wall rivets, cargo roller 27.600 N/mm (stress note) stands: FE 27.811" in words(rail)
