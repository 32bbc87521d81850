"""Sections 4 to 10 of the hand sheet: coefficients, basic and closing flows, shear centre, torque, checks."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import beam_theory
from crosscheck.comparison.load_case import LoadCase
from crosscheck.hand_sheet.text import heading, number, snapped, table, term
from crosscheck.section_file.model import SectionFile

if TYPE_CHECKING:
    from beam_theory.working import CellRow


def flow_sections(section: SectionFile, sheet: beam_theory.Working, case: LoadCase) -> list[str]:
    """Sections 4 to 10.

    Parameters
    ----------
    section : SectionFile
        Units.
    sheet : beam_theory.Working
        The calculation.
    case : LoadCase
        The load.
    """
    flow = f"{section.force_unit}/{section.length_unit}"
    return [
        *_coefficients(sheet),
        *_basic(sheet, flow),
        *_closing(sheet, flow),
        *_shear_centre(sheet),
        *_torque(section, sheet, case),
        *_final(sheet, flow),
        *_checks(section, sheet),
    ]


def stretch_numbers(sheet: beam_theory.Working) -> list[str]:
    """Number of every stretch: that of its wall, and .1, .2 ... where booms divide the wall."""
    order: dict[str, list[int]] = {}
    for index, row in enumerate(sheet.walls):
        order.setdefault(row.wall, []).append(index)
    names = [""] * len(sheet.walls)
    for number_, places in enumerate(order.values(), start=1):
        for part, index in enumerate(places, start=1):
            names[index] = f"{number_}.{part}" if len(places) > 1 else str(number_)
    return names


def product_moment(sheet: beam_theory.Working) -> float:
    """Ixy, zero where it is round-off [L^4]."""
    return snapped(sheet.product_moment_xy, (sheet.second_moment_xx * sheet.second_moment_yy) ** 0.5)


def flow_scale(sheet: beam_theory.Working) -> float:
    """Largest flow on the sheet, beside which round-off is nothing [F/L]."""
    rows = (*sheet.basic, *sheet.shear, *sheet.total)
    return max((abs(value) for row in rows for value in (row.start, row.middle, row.end)), default=0.0)


def _coefficients(sheet: beam_theory.Working) -> list[str]:
    vx, vy = (term(value) for value in sheet.load.shear)
    xx, yy = number(sheet.second_moment_xx), number(sheet.second_moment_yy)
    xy = term(product_moment(sheet))
    d = number(sheet.determinant)
    return [
        *heading("4 Coefficients a and b"),
        "From [Iyy Ixy; Ixy Ixx][a b] = [Vx Vy]; f = a x + b y is how fast the direct stress over e grows "
        "along "
        "the beam, and dq/ds = - k t f.",
        "",
        f"a = (Ixx Vx - Ixy Vy)/D = ({xx} x {vx} - {xy} x {vy}) / {d} = {number(sheet.a)}",
        "",
        f"b = (Iyy Vy - Ixy Vx)/D = ({yy} x {vy} - {xy} x {vx}) / {d} = {number(sheet.b)}",
    ]


def _basic(sheet: beam_theory.Working, unit: str) -> list[str]:
    """Cuts, and the flow with every cell cut."""
    names = stretch_numbers(sheet)
    lines = [*heading("5 Cuts and basic flow")]
    if sheet.cuts:
        cuts = [
            (names[cut.stretch], cut.wall, number(cut.at), "chosen here" if cut.chosen else "the file's")
            for cut in sheet.cuts
        ]
        lines += ["Each cell is opened once; the basic flow is zero at its cut.", ""]
        lines += [*table(("no", "wall", "at fraction of the wall", "by"), cuts), ""]
    else:
        lines += ["No cell, so no cut: the flow starts at the free ends.", ""]
    lines += [
        "q2 = q1 - (a Q_x + b Q_y) along a stretch; at every point what arrives leaves again, and a boom "
        "takes "
        "e A_b (a x + b y) from it. With v from 0 at end 1 to 1 at end 2, q = c0 + c1 v + c2 v^2 + c3 v^3; "
        "on an arc "
        "(C + v C1) cos(p) + (S + v S1) sin(p) comes on top, p = p1 + sweep v the polar angle from its "
        "centre.",
        "",
        *_flow_table(sheet, sheet.basic, unit),
    ]
    if sheet.booms:
        steps = [
            (str(i), *map(number, (*boom.place, boom.stiffness, snapped(boom.step, flow_scale(sheet)))))
            for i, boom in enumerate(sheet.booms, start=1)
        ]
        lines += [
            "", "Steps at the booms:", "",
            *table(("boom", "x", "y", "e A_b", f"step [{unit}]"), steps),
        ]  # fmt: skip
    return lines


def _flow_table(sheet: beam_theory.Working, rows: Sequence[beam_theory.WallFlow], unit: str) -> list[str]:
    """Start, middle, end and closed form of the flow of every stretch."""
    scale, names = flow_scale(sheet), stretch_numbers(sheet)
    arcs = any(row.trigonometric for row in rows)
    head = ["no", "wall", f"q1 [{unit}]", "q middle", "q2", "c0", "c1", "c2", "c3"]
    head += ["C", "S", "C1", "S1", "p1"] if arcs else []
    lines = []
    for name, row in zip(names, rows, strict=True):
        cells = [row.start, row.middle, row.end, *row.polynomial, *(0.0,) * (4 - len(row.polynomial))]
        if arcs:
            cells += [*(row.trigonometric or (0.0,) * 4)]
        shown = [number(snapped(cell, scale)) for cell in cells]
        lines.append([name, row.wall, *shown, *([number(row.phi_start)] if arcs else [])])
    return table(head, lines)


def _closing(sheet: beam_theory.Working, unit: str) -> list[str]:
    """Cells and the closing flow of the shear."""
    if not sheet.cells:
        return [*heading("6 Closing flows"), "No cell: the basic flow is the flow of the shear."]
    scale = flow_scale(sheet)
    cells = [
        (
            str(cell.number),
            ", ".join(f"{'+' if sign > 0 else '-'}{wall}" for wall, sign in cell.walls),
            number(cell.area),
            number(snapped(cell.gap, scale * max(cell.flexibility))),
        )
        for cell in sheet.cells
    ]
    count = len(sheet.cells)
    matrix = [
        (str(cell.number), *map(number, cell.flexibility), number(snapped(cell.closing, scale)))
        for cell in sheet.cells
    ]
    lines = [
        *heading("6 Closing flows"),
        "Cells with their walls anticlockwise (+ along a wall, - against it), area A_m, and gap: the "
        "integral of the "
        "basic q ds/(g t) anticlockwise.",
        "",
        *table(("cell", "walls", "A_m", f"gap [{unit}]"), cells),
        "",
        "No twist: for every cell F c = - gap. F has the sum of d round a cell, and minus the d of shared "
        "walls.",
        "",
        *table(("cell", *(f"F{i + 1}" for i in range(count)), f"c [{unit}]"), matrix),
        "",
        *(line for cell in sheet.cells for line in (_equation(sheet, cell), "")),
        "The flow of the shear is the basic flow plus c of the cell on the wall's left, minus c of that on "
        "its right:",
        "",
        *_flow_table(sheet, sheet.shear, unit),
    ]
    if sheet.closing_by_moments is not None:
        (cell,) = sheet.cells
        lines += [
            "",
            "The other way to close a single cell, by moments about the centroid: (moment of the load - "
            "moment of the "
            "basic flow - what open walls carry) / (2 A_m) = "
            f"{number(sheet.closing_by_moments)}, to be compared with the closing flow plus the torque's "
            f"{number(cell.closing)} + {number(cell.torque_flow)} = "
            f"{number(cell.closing + cell.torque_flow)}. "
            f"Moment of the basic flow: {number(sheet.basic_torque)}.",
        ]
    return lines


def _equation(sheet: beam_theory.Working, cell: CellRow) -> str:
    """The closing equation of one cell with its numbers."""
    terms = [
        f"{term(factor)} x {term(other.closing)}"
        for factor, other in zip(cell.flexibility, sheet.cells, strict=True)
        if factor != 0.0
    ]
    return f"Cell {cell.number}: {' + '.join(terms)} = {number(-cell.gap)}"


def _shear_centre(sheet: beam_theory.Working) -> list[str]:
    """Moments of the unit flows about the centroid."""
    if not sheet.shear_centre or sheet.torque.shear_centre is None:
        return [*heading("7 Shear centre"), "Not defined for this section."]
    names = stretch_numbers(sheet)
    scale = max(abs(moment) for unit in sheet.shear_centre for moment in unit.moments)
    rows = [
        (name, wall.wall, *(number(snapped(unit.moments[i], scale)) for unit in sheet.shear_centre))
        for i, (name, wall) in enumerate(zip(names, sheet.walls, strict=True))
    ]
    by_unit = {unit.unit: unit for unit in sheet.shear_centre}
    x_c, y_c = sheet.centroid
    x_s, y_s = sheet.torque.shear_centre
    m_x, m_y = (snapped(by_unit[unit].moment, scale) for unit in ("Vx", "Vy"))
    coefficients = [(f"1 {unit.unit}", number(unit.a), number(unit.b)) for unit in sheet.shear_centre]
    return [
        *heading("7 Shear centre"),
        "The steps 4 to 6 for a unit Vx and a unit Vy; moments of these flows (without twist) about the "
        "centroid, "
        "integral of q p ds with p the arm:",
        "",
        *table(("load", "a", "b"), coefficients),
        "",
        *table(("no", "wall", "moment of 1 Vx", "moment of 1 Vy"), rows),
        "",
        f"Sums: {number(m_x)} for Vx, {number(m_y)} for Vy. In the file's axes:",
        "",
        f"x_s = x_c + moment of 1 Vy = {number(x_c)} + {term(m_y)} = {number(x_s)}",
        "",
        f"y_s = y_c - moment of 1 Vx = {number(y_c)} - {term(m_x)} = {number(y_s)}",
    ]


def _torque(section: SectionFile, sheet: beam_theory.Working, case: LoadCase) -> list[str]:
    """Torque about the shear centre and what carries it."""
    t = sheet.torque
    unit = f"{section.force_unit} {section.length_unit}"
    lines = [*heading("8 Torque")]
    if t.through is None or t.shear_centre is None:
        lines.append(f"T_sc = {number(t.torque_about_shear_centre)} {unit}: no shear off the shear centre.")
    else:
        (x_p, y_p), (x_s, y_s), (vx, vy) = t.through, t.shear_centre, case.shear
        lines.append(
            f"T_sc = T + (x_p - x_s) Vy - (y_p - y_s) Vx = {number(t.torque)} + ({number(x_p)} - "
            f"{term(x_s)}) x "
            f"{term(vy)} - ({number(y_p)} - {term(y_s)}) x {term(vx)} = "
            f"{number(t.torque_about_shear_centre)} {unit}"
        )
    rows = [
        ("J of cells, sum of 2 A_m h", number(t.torsion_constant_cells)),
        ("J of open walls, sum of j", number(t.torsion_constant_open)),
        ("J", number(t.torsion_constant)),
        ("rate of twist times G, T_sc/J", number(t.twist)),
        ("torque of the cells", number(t.cell_torque)),
        ("torque of the open walls", number(t.open_torque)),
    ]
    lines += ["", *table(("torsion", "value"), rows)]
    if sheet.cells:
        cells = [
            (str(cell.number), number(2.0 * cell.area), number(cell.twist_flow), number(cell.torque_flow))
            for cell in sheet.cells
        ]
        lines += [
            "",
            "F h = 2 A_m gives the cell flows h per unit rate of twist times G; the torque's are h T_sc/J:",
            "",
            *table(("cell", "2 A_m", "h", "h T_sc/J"), cells),
        ]
    names = stretch_numbers(sheet)
    shear = [
        (name, row.wall, *(number(row.g * t.twist * thickness) for thickness in row.thickness))
        for name, row in zip(names, sheet.walls, strict=True)
        if row.left == 0 and row.right == 0
    ]
    if shear:
        lines += [
            "",
            "Surface shear g t T_sc/J of the open walls, along the wall on its right face, against it on "
            "the left:",
            "",
            *table(("no", "wall", "at 1", "at 2"), shear),
        ]
    return lines


def _final(sheet: beam_theory.Working, unit: str) -> list[str]:
    """The final flows."""
    if sheet.cells:
        words = "The flow of the shear (6) plus that of the torque in the cells (8):"
    else:
        words = "Open walls carry torque without a flow: the basic flow (5) is final."
    return [*heading("9 Final flows"), words, "", *_flow_table(sheet, sheet.total, unit)]


def _checks(section: SectionFile, sheet: beam_theory.Working) -> list[str]:
    """Resultants of the final flows against the load."""
    force, length = section.force_unit, section.length_unit
    most = max((abs(v) for row in sheet.forces for v in (row.x, row.y)), default=0.0)
    arm = max((abs(row.torque) for row in sheet.forces), default=0.0)
    rows = [
        (
            name, row.wall, number(snapped(row.x, most)), number(snapped(row.y, most)),
            number(snapped(row.torque, arm)),
        )
        for name, row in zip(stretch_numbers(sheet), sheet.forces, strict=True)
    ]  # fmt: skip
    torque = sum(row.torque for row in sheet.forces)
    x_c, y_c = sheet.centroid
    vx, vy, about = sheet.resultant
    compared = [
        ("Vx", number(snapped(vx, most)), number(sheet.applied[0])),
        ("Vy", number(snapped(vy, most)), number(sheet.applied[1])),
        ("torque about the file's origin", number(about), number(sheet.applied[2])),
    ]
    return [
        *heading("10 Resultant and moment checks"),
        f"Integrals of the final flow over each stretch: q dx and q dy [{force}], q p ds about the centroid "
        f"[{force} {length}].",
        "",
        *table(("no", "wall", "force x", "force y", "moment"), rows),
        "",
        f"Torque about the origin: moments {number(torque)} + x_c Vy - y_c Vx, with x_c = {number(x_c)} and "
        f"y_c = {number(y_c)}, + what open walls carry, {number(sheet.torque.open_torque)}.",
        "",
        *table(("resultant", "of the flows", "of the load"), compared),
    ]
