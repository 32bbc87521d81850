"""The hand sheet is redone from its printed numbers alone, line by line, to the digits it prints."""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest
from numpy.testing import assert_allclose

from crosscheck.comparison.levels import solve_levels
from crosscheck.comparison.load_comparison import load_cases
from crosscheck.hand_sheet.sheet import hand_sheet, hand_sheets
from crosscheck.hand_sheet.text import DIGITS, number
from crosscheck.section_file.model import LoadSpec
from crosscheck.section_file.reader import read_section

from .sheet_reader import Sheet, tables_of
from .stand_in import channel_file

CASES = Path(__file__).parents[2] / "cases" / "sections"
# Digits lost where a handful of printed numbers is added up.
DIGIT = 20.0 * 10.0 ** (1 - DIGITS)
THREE = np.array([0.0, 0.5, 1.0])


def sheets_of(name: str) -> dict[str, str]:
    section = read_section(CASES / f"{name}.toml")
    levels = solve_levels(section)
    return hand_sheets(section, levels, load_cases(section, levels))


def numbers(rows: list[dict[str, str]], *keys: str) -> np.ndarray:
    return np.array([[float(row[key]) for key in keys] for row in rows])


def near(got, want, scale=0.0) -> None:
    """Equal to the printed digits, of the numbers or of the scale they were made from."""
    scale = max(float(np.abs(want).max(initial=0.0)), scale)
    assert_allclose(got, want, rtol=0, atol=DIGIT * scale)


def redo(text: str) -> None:
    """Every step of a sheet with shear."""
    sheet = Sheet(text)
    vx, vy = (float(sheet.load[key]) for key in ("Vx", "Vy"))
    area, first, xx, yy, xy = sheet.moments()
    found = sheet.properties
    near(found["A"], area)
    near(abs(first), 0.0, area * sheet.size)
    near([found["Ixx"], found["Iyy"], found["Ixy"]], [xx, yy, xy], xx + yy)
    near(found["D = Ixx Iyy - Ixy^2"], xx * yy - xy**2, xx * yy)
    moments = np.array([s.first_moment() for s in sheet.stretches])
    near(numbers(sheet.tables["3"][0], "Q_x", "Q_y"), np.column_stack((moments.real, moments.imag)))
    near(numbers(sheet.tables["3"][0], "d")[:, 0], [s.flexibility for s in sheet.stretches])
    slope = sheet.slope(vx, vy)
    printed = [float(v) for v in re.findall(r"^[ab] = .* = (\S+)$", text, re.M)[:2]]
    near(printed, [slope.real, slope.imag])

    basic = sheet.basic(slope)
    gap, c, shear = sheet.closed(slope)
    redo_flows(sheet, sheet.tables["5"][1 if "by" in sheet.tables["5"][0][0] else 0], basic, slope)
    if sheet.cells:
        cells, matrix = sheet.tables["6"][0], sheet.tables["6"][1]
        near(numbers(cells, "A_m")[:, 0], sheet.areas)
        most = np.abs(sheet.flexibility).max() * max(np.abs(basic).max(), 1e-300)
        near(numbers(cells, next(k for k in cells[0] if k.startswith("gap")))[:, 0], gap, most)
        heads = [f"F{i + 1}" for i in range(len(cells))]
        near(numbers(matrix, *heads), sheet.flexibility)
        near(numbers(matrix, next(k for k in matrix[0] if k.startswith("c ")))[:, 0], c, np.abs(basic).max())
        redo_flows(sheet, sheet.tables["6"][2], shear, slope)
    redo_torque(sheet, text, shear, slope)


def redo_flows(sheet: Sheet, rows, starts: np.ndarray, slope: complex) -> None:
    """A table of flows: values at the ends and the middle, and the closed form beside them."""
    q1 = next(key for key in rows[0] if key.startswith("q1"))
    values = numbers(rows, q1, "q middle", "q2")
    scale = float(np.abs(values).max()) + float(np.abs(numbers(rows, "c0", "c1", "c2", "c3")).max())
    near(values, sheet.along(starts, slope, THREE), scale)
    for row, stretch, three in zip(rows, sheet.stretches, values, strict=True):
        q = sum(float(row[f"c{k}"]) * THREE**k for k in range(4))
        own = scale
        if "C" in row:
            phi = float(row["p1"]) + stretch.number("sweep") * THREE
            c, s, c1, s1 = (float(row[key]) for key in ("C", "S", "C1", "S1"))
            q = q + (c + THREE * c1) * np.cos(phi) + (s + THREE * s1) * np.sin(phi)
            own += max(abs(v) for v in (c, s, c1, s1))
        near(q, three, own)


def redo_torque(sheet: Sheet, text: str, shear: np.ndarray, slope: complex) -> None:
    """Shear centre, torque, final flows and resultants."""
    vx, vy = (float(sheet.load[key]) for key in ("Vx", "Vy"))
    moment = {}
    for unit, pair in (("Vx", (1.0, 0.0)), ("Vy", (0.0, 1.0))):
        own = sheet.slope(*pair)
        parts = sheet.resultants(sheet.closed(own)[2], own)
        near(numbers(sheet.tables["7"][1], f"moment of 1 {unit}")[:, 0], parts[:, 2], sheet.size)
        near(parts[:, :2].sum(axis=0), pair, 1.0)
        moment[unit] = float(parts[:, 2].sum())
    x_c, y_c = sheet.properties["x_c (file's axes)"], sheet.properties["y_c (file's axes)"]
    x_s, y_s = (float(v) for v in re.findall(r"^[xy]_s = .* = (\S+)$", text, re.M))
    place = sheet.size + abs(x_c) + abs(y_c)
    near([x_s, y_s], [x_c + moment["Vy"], y_c - moment["Vx"]], place)
    x_p, y_p = (float(v) for v in sheet.load["line of action through (file's axes)"].split(", "))
    couple = float(sheet.load["T, a couple besides"])
    torque = couple + (x_p - x_s) * vy - (y_p - y_s) * vx
    reach = abs(couple) + place * (abs(vx) + abs(vy))
    (printed,) = re.findall(r"^T_sc = .* = (\S+) ", text, re.M)
    near(float(printed), torque, reach)
    torque = float(printed)
    torsion = {row["torsion"]: float(row["value"]) for row in sheet.tables["8"][0]}
    inside = {k for cell in sheet.cells for _, k, _ in cell}
    opened = sum(
        s.number("g") * float((s.ds * s.t**3).sum()) / 3.0
        for k, s in enumerate(sheet.stretches)
        if k not in inside
    )
    h = np.linalg.solve(sheet.flexibility, 2.0 * sheet.areas) if sheet.cells else np.zeros(0)
    cells = float(2.0 * sheet.areas @ h) if sheet.cells else 0.0
    near(torsion["J of cells, sum of 2 A_m h"], cells)
    near(torsion["J of open walls, sum of j"], opened)
    near(torsion["J"], cells + opened)
    twist = torque / torsion["J"]
    near(torsion["rate of twist times G, T_sc/J"], twist)
    near(torsion["torque of the open walls"], twist * opened)
    final = shear + sheet.spread(h * twist)
    rows = sheet.tables["9"][0]
    redo_flows(sheet, rows, final, slope)
    parts = sheet.resultants(final, slope)
    forces = numbers(sheet.tables["10"][0], "force x", "force y", "moment")
    near(forces[:, :2], parts[:, :2])
    near(forces[:, 2], parts[:, 2], sheet.size * float(np.abs(parts[:, :2]).max()))
    about = parts[:, 2].sum() + x_c * vy - y_c * vx + torsion["torque of the open walls"]
    compared = {row["resultant"]: row for row in sheet.tables["10"][1]}
    for key, want, scale in (
        ("Vx", vx, abs(vx) + abs(vy)),
        ("Vy", vy, abs(vx) + abs(vy)),
        ("torque about the file's origin", couple + x_p * vy - y_p * vx, reach),
    ):
        near(float(compared[key]["of the load"]), want, scale)
        near(float(compared[key]["of the flows"]), want, scale)
    near(about, couple + x_p * vy - y_p * vx, reach)


NAMES = [
    "lipped_channel_floor_beam",
    "two_cell_tail_boom",
    "three_cell_wing_box",
    "finned_box_skid",
    "d_nose_cell_leading_edge",
    "tapered_channel_ramp_beam",
    "boom_box_wing_root",
    "two_material_hat_battery_tray",
    "bent_zed_seat_rail",
    "smooth_gutter_cable_fairing",
    "oval_cell_towing_strut",
    "many_loads_floor_frame",
]


@pytest.mark.parametrize("name", NAMES)
def test_a_checker_gets_from_the_printed_numbers_to_the_results(name: str) -> None:
    for text in sheets_of(name).values():
        redo(text)


@pytest.mark.parametrize("digit", ["q2", "A_m", "moment", "d"])
def test_the_checker_notices_a_wrong_number(digit: str) -> None:
    """Each kind of table with one number off by a tenth of a per mille fails."""
    (text, *_) = sheets_of("two_cell_tail_boom").values()
    lines = text.split("\n")
    head = next(
        i
        for i, line in enumerate(lines)
        if lines[i + 1].startswith("|---") and re.search(rf"\| {digit}( \[.*\])? \|", line)
    )
    column = next(
        k for k, cell in enumerate(lines[head].strip("|").split("|")) if cell.strip().split(" [")[0] == digit
    )
    stop = next(i for i in range(head, len(lines)) if not lines[i].startswith("|"))
    target = max(
        range(head + 2, stop),
        key=lambda i: abs(float(lines[i].strip("|").split("|")[column])),
    )
    cells = lines[target].strip("|").split("|")
    cells[column] = f" {float(cells[column]) * 1.0001:.7g} "
    lines[target] = "|" + "|".join(cells) + "|"
    with pytest.raises(AssertionError):
        redo("\n".join(lines))


def test_direct_stress_is_redone() -> None:
    text = sheets_of("d_nose_cell_leading_edge")["dive"]
    sheet = Sheet(text)
    area, _, xx, yy, xy = sheet.moments()
    n, mx, my = (float(sheet.load[k]) for k in ("N", "Mx (tension at +y)", "My (tension at +x)"))
    d = xx * yy - xy**2
    a, b = (xx * my - xy * mx) / d, (yy * mx - xy * my) / d
    rows = sheet.tables["11"][0]
    places = numbers(rows, "x", "y")
    sigma = numbers(rows, next(key for key in rows[0] if key.startswith("sigma")))[:, 0]
    near(sigma, n / area + places @ (a, b))


def test_direct_stress_with_a_bimoment_has_the_warping_function() -> None:
    section = channel_file(loads=(LoadSpec("held", bimoment=2e6),))
    levels = solve_levels(section)
    text = hand_sheet(section, levels, load_cases(section, levels)[-1])
    rows = tables_of(text)["11"][0]
    omega = numbers(rows, "omega")[:, 0]
    sigma = numbers(rows, next(key for key in rows[0] if key.startswith("sigma")))[:, 0]
    constant = levels.solutions["midline"].quantities["warping_constant"].value
    near(sigma, 2e6 * omega / constant)
    assert np.abs(omega).max() > 0
    assert "## 5" not in text


def test_unit_loads_where_the_file_has_none() -> None:
    section = channel_file(loads=())
    levels = solve_levels(section)
    assert list(hand_sheets(section, levels, load_cases(section, levels))) == ["unit Vx", "unit Vy", "unit T"]


def test_the_sheet_is_at_the_judged_level_and_says_so() -> None:
    for level, told in (("midline", "midline"), ("lumped", "lumped"), ("corrected", "midline")):
        section = channel_file(judged=level)
        levels = solve_levels(section)
        text = hand_sheet(section, levels, load_cases(section, levels)[-1])
        assert f"Level of theory: {told}." in text
        assert ("is no hand method" in text) == (level == "corrected")
        assert ("Booms, e A_b:" in text) == (level == "lumped")


def test_a_section_without_shear_flow_says_why() -> None:
    section = channel_file(walls=channel_file().walls[1:2], probes=())
    levels = solve_levels(section)
    text = hand_sheet(section, levels, load_cases(section, levels)[-1])
    assert "## 2 Not available" in text


def test_names_of_a_file_cannot_break_the_markdown() -> None:
    section = channel_file(loads=(LoadSpec("<b>a|b", (0.0, 1.0), (0.0, 0.0)),), title="<script>")
    levels = solve_levels(section)
    text = hand_sheet(section, levels, load_cases(section, levels)[-1])
    assert "<b>" not in text
    assert "<script>" not in text


def test_small_picture_has_every_wall_and_both_centres() -> None:
    (text, *_) = sheets_of("lipped_channel_floor_beam").values()
    picture = text.split("```text\n")[2].split("```")[0]
    assert set("12345CS+.") <= set(picture)
    assert max(map(len, picture.split("\n"))) <= 64


def test_numbers_have_the_promised_digits() -> None:
    assert number(1234567.89) == "1234568"
    assert number(-0.0) == "0"
    assert number(1 / 3) == "0.3333333"


def test_named_probes_with_their_fasteners_close_the_sheet():
    from dataclasses import replace

    from crosscheck.comparison.comparing import join
    from crosscheck.section_file.model import ProbeSpec

    from .stand_in import both_sides, channel_file

    section = channel_file()
    section = replace(section, probes=(ProbeSpec("rivets", "web", 0.3, 25.0), ProbeSpec("bond", "top", 0.5)))
    result = join(section, *both_sides(section), working=True)
    last = result.working["gust"].split("## Named probes")[1]
    rows = [
        [cell.strip() for cell in line.split("|")[1:-1]] for line in last.split("\n") if line.startswith("| ")
    ]
    assert [row[0] for row in rows] == ["probe", "rivets", "bond"]
    (rivets,) = [probe for probe in result.named_probes if probe.label == "rivets"]
    assert float(rows[1][3]) == pytest.approx(rivets.theory, rel=1e-6)
    assert float(rows[1][5]) == pytest.approx(25.0 * rivets.theory, rel=1e-6)
    assert rows[2][4:] == ["", ""]
