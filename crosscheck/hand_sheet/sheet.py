"""The hand sheet: the classical calculation of one load as Markdown, for a checker with a calculator.

It lays out ``beam_theory.working`` in the order of the calculation. Every number is printed with the same
digits (``DIGITS``); what follows from printed numbers follows from them to those digits.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

import beam_theory
from crosscheck.comparison import models
from crosscheck.comparison.levels import Levels
from crosscheck.comparison.load_case import UNIT_CASES, LoadCase
from crosscheck.hand_sheet.flows import flow_sections, product_moment, stretch_numbers
from crosscheck.hand_sheet.picture import AXES, section_sketch
from crosscheck.hand_sheet.text import DIGITS, escaped, heading, number, table, term
from crosscheck.reports.wording import SAFETY
from crosscheck.section_file.model import SectionFile

if TYPE_CHECKING:
    from beam_theory.working import WallRow


def hand_sheets(section: SectionFile, levels: Levels, cases: Sequence[LoadCase]) -> dict[str, str]:
    """Hand sheets by load: of the file's loads, of the unit loads where it has none.

    Parameters
    ----------
    section : SectionFile
        Names, units, materials.
    levels : Levels
        Theory; the sheet is at the judged level, at ``midline`` where ``corrected`` is judged.
    cases : sequence of LoadCase
        Unit loads and loads.
    """
    chosen = [case for case in cases if not case.unit] or list(UNIT_CASES)
    return {case.name: hand_sheet(section, levels, case) for case in chosen}


def hand_sheet(section: SectionFile, levels: Levels, case: LoadCase) -> str:
    """The sheet of one load, Markdown."""
    level = "midline" if levels.judged == "corrected" else levels.judged
    solution, load = levels.solutions[level], models.theory_load(case)
    units = f"{section.length_unit}, {section.force_unit}"
    lines = [
        f"# Hand sheet: {escaped(case.name)}",
        "",
        f"{escaped(section.title)}. Units {units}. Level of theory: {level}.",
    ]
    if levels.judged == "corrected":
        lines.append("The level `corrected` is no hand method; this is the midline calculation beneath it.")
    lines += [
        f"Every number has {DIGITS} digits, so a line redone from printed numbers agrees to those. "
        "Coordinates x, y are from the centroid unless a line says otherwise.",
        SAFETY,
        *heading("1 Axes and signs"),
        *AXES,
        *section_sketch(section, solution),
        *_load_lines(section, case),
    ]
    try:
        sheet = beam_theory.working(solution, load)
    except beam_theory.TheoryError as undefined:
        return "\n".join([*lines, *heading("2 Not available"), str(undefined), ""])
    lines += _properties(section, sheet)
    if case.has_shear:
        lines += flow_sections(section, sheet, case)
    if case.has_direct:
        lines += _direct(section, solution, case, sheet)
    if case.has_shear:
        lines += _named_probes(section, solution, load)
    return "\n".join([*lines, ""])


def _named_probes(section: SectionFile, solution: beam_theory.Solution, load: beam_theory.Load) -> list[str]:
    """Final flow at the file's probes, and the load of one fastener where a pitch is given."""
    flow, rows = solution.flow(load), []
    known = {wall.name for wall in section.walls if wall.seen_by != "fe"}
    for probe in section.probes:
        if probe.wall in known:
            q = float(flow.at(probe.wall, np.array([probe.at]))[0])
            parts = ("", "") if probe.pitch is None else (number(probe.pitch), number(q * probe.pitch))
            rows.append((probe.label, probe.wall, number(probe.at), number(q), *parts))
    if not rows:
        return []
    length, force = section.length_unit, section.force_unit
    head = ("probe", "wall", "at", f"q [{force}/{length}]", f"pitch [{length}]", f"q x pitch [{force}]")
    words = "The final flow along the wall at a fraction of its length, and what one fastener carries:"
    return [*heading("Named probes"), words, "", *table(head, rows)]


def _load_lines(section: SectionFile, case: LoadCase) -> list[str]:
    """The load in numbers."""
    force, length = section.force_unit, section.length_unit
    place = "own shear centre" if case.through is None else ", ".join(number(v) for v in case.through)
    rows = [
        ("Vx", number(case.shear[0]), force),
        ("Vy", number(case.shear[1]), force),
        ("line of action through (file's axes)", place, length),
        ("T, a couple besides", number(case.torque), f"{force} {length}"),
        ("N", number(case.axial), force),
        ("Mx (tension at +y)", number(case.moment[0]), f"{force} {length}"),
        ("My (tension at +x)", number(case.moment[1]), f"{force} {length}"),
        ("B", number(case.bimoment), f"{force} {length}^2"),
    ]
    return ["", "The load:", "", *table(("part", "value", "unit"), rows)]


def _properties(section: SectionFile, sheet: beam_theory.Working) -> list[str]:
    """Walls, booms, sums and section properties."""
    ends = end_names(section, sheet)
    walls = [
        (
            name, row.wall, *ends[i], *map(number, (*row.start, *row.end, row.length, *row.thickness)),
            number(row.e), number(row.g), number(row.direct_share), number(row.radius), number(row.sweep),
        )
        for i, (name, row) in enumerate(zip(stretch_numbers(sheet), sheet.walls, strict=True))
    ]  # fmt: skip
    head = (
        "no", "wall", "from", "to", "x1", "y1", "x2", "y2", "length", "t1", "t2", "e", "g", "share", "radius",
        "sweep",
    )  # fmt: skip
    lines = [
        *heading("2 Walls"),
        "Walls run from 1 to 2; those with a boom on them count as stretches of their own. e and g: moduli "
        "over "
        "the base material; share: part that carries direct stress; radius and sweep (rad, anticlockwise "
        "positive) "
        "of an arc, 0 for a straight wall.",
        "",
        *table(head, walls),
    ]
    if sheet.booms:
        booms = [
            (str(i), *map(number, (*boom.place, boom.stiffness)))
            for i, boom in enumerate(sheet.booms, start=1)
        ]
        lines += ["", "Booms, e A_b:", "", *table(("boom", "x", "y", "e A_b"), booms)]
    return [*lines, *_sums(section, sheet)]


def _sums(section: SectionFile, sheet: beam_theory.Working) -> list[str]:
    """Integrals of every stretch, their sums, and what follows."""
    rows = [
        (name, row.wall, *map(number, (*row.first_moment, row.flexibility, row.torsion)))
        for name, row in zip(stretch_numbers(sheet), sheet.walls, strict=True)
    ]
    length = section.length_unit
    properties = [
        ("A", number(sheet.area), f"{length}^2"),
        ("x_c (file's axes)", number(sheet.centroid[0]), length),
        ("y_c (file's axes)", number(sheet.centroid[1]), length),
        ("Ixx", number(sheet.second_moment_xx), f"{length}^4"),
        ("Iyy", number(sheet.second_moment_yy), f"{length}^4"),
        ("Ixy", number(product_moment(sheet)), f"{length}^4"),
        ("D = Ixx Iyy - Ixy^2", number(sheet.determinant), f"{length}^8"),
    ]
    return [
        *heading("3 Section properties"),
        "Integrals over each stretch, with k = share times e and t linear along it. Straight: "
        "Q_x = k L (t1 (2 x1 + x2) + t2 (x1 + 2 x2))/6 is the integral of k t x ds, Q_y alike; "
        "d = L ln(t2/t1)/(g (t2 - t1)), or L/(g t), that of ds/(g t); "
        "j = g L (t1 + t2)(t1^2 + t2^2)/12 that of g t^3/3 ds, for walls in no cell.",
        "",
        *table(("no", "wall", "Q_x", "Q_y", "d", "j"), rows),
        "",
        "Sums over stretches and booms: A = sum of k L (t1 + t2)/2 + e A_b. Q_x and Q_y with booms add up "
        "to zero, "
        "as the axes pass through the centroid. Straight: "
        "Ixx = k L (t1 (3 y1^2 + 2 y1 y2 + y2^2) + t2 (y1^2 + 2 y1 y2 + 3 y2^2))/12, Iyy with x alike, Ixy = "
        "k L (t1 (3 x1 y1 + x1 y2 + x2 y1 + x2 y2) + t2 (x1 y1 + x1 y2 + x2 y1 + 3 x2 y2))/12; booms e A_b "
        "y^2 "
        "and so on.",
        "",
        *table(("property", "value", "unit"), properties),
    ]


def _direct(
    section: SectionFile, solution: beam_theory.Solution, case: LoadCase, sheet: beam_theory.Working
) -> list[str]:
    """Direct stress at the ends of every stretch, on the midline."""
    mx, my = case.moment
    d = sheet.determinant
    lines = [
        *heading("11 Direct stress"),
        "sigma = e (N/A + a x + b y + B omega/I_w) on the midline, with [Iyy Ixy; Ixy Ixx][a b] = [My Mx].",
    ]
    try:
        stress = beam_theory.stress(solution, models.theory_load(case))
    except beam_theory.TheoryError as undefined:
        return [*lines, "", f"Not available: {undefined}"]
    a, b = stress.slope.real, stress.slope.imag
    lines += ["", f"N/A = {number(case.axial)} / {number(sheet.area)} = {number(stress.axial)}"]
    if d != 0.0 and case.moment != (0.0, 0.0):
        xx, yy = number(sheet.second_moment_xx), number(sheet.second_moment_yy)
        xy = term(product_moment(sheet))
        lines += [
            "",
            f"a = (Ixx My - Ixy Mx)/D = ({xx} x {term(my)} - {xy} x {term(mx)}) / {number(d)} = {number(a)}",
            "",
            f"b = (Iyy Mx - Ixy My)/D = ({yy} x {term(mx)} - {xy} x {term(my)}) / {number(d)} = {number(b)}",
        ]
    if case.bimoment:
        constant = solution.require("warping_constant")
        lines += ["", f"B/I_w = {number(case.bimoment)} / {number(constant)} = {number(stress.warping)}"]
    rows = []
    for name, row in zip(stretch_numbers(sheet), sheet.walls, strict=True):
        omega = _warping(solution, row) if case.bimoment else (0.0, 0.0)
        for (x, y), w in zip((row.start, row.end), omega, strict=True):
            e = row.e if row.direct_share > 0.0 else 0.0
            sigma = e * (stress.axial + a * x + b * y + stress.warping * float(w))
            rows.append((name, row.wall, *map(number, (x, y, float(w), sigma))))
    unit = f"{section.force_unit}/{section.length_unit}^2"
    lines += ["", *table(("no", "wall", "x", "y", "omega", f"sigma [{unit}]"), rows)]
    return lines


def _warping(solution: beam_theory.Solution, row: WallRow) -> tuple[float, float]:
    """Warping function at both ends of a stretch [L^2]."""
    first, last = solution.warping_at(row.wall, np.array([row.first, row.last]))
    return float(first), float(last)


def end_names(section: SectionFile, sheet: beam_theory.Working) -> list[tuple[str, str]]:
    """What the two ends of every stretch are called: a point, or a place on the wall."""
    named = []
    for row in sheet.walls:
        wall = section.wall(row.wall, "theory")
        first = wall.start if row.first <= 0.0 else f"{row.wall} at {row.first:.7g}"
        last = wall.end if row.last >= 1.0 else f"{row.wall} at {row.last:.7g}"
        named.append((first, last))
    return named
