"""The hand sheet: every line redone from its own numbers, as a checker with a calculator would."""

from __future__ import annotations

from functools import partial

import numpy as np

import beam_theory
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import SHAPES, Shape, Wall

GROUP = "hand sheet"
ROUND_OFF = 1e-9


def tapered_nose() -> Shape:
    """The curved nose with its arc tapered, so that the flow's closed form has all its terms."""
    shape = SHAPES["curved nose"]()
    first = shape.walls[0]
    arc = Wall(first.start, first.end, (1.0, 2.2), first.through)
    return Shape(shape.points, (arc, *shape.walls[1:]), shape.booms)


SHEETS = {name: make for name, make in SHAPES.items() if name != "curved nose"} | {
    "tapered nose": tapered_nose
}


class _Misses:
    """The largest miss so far, and where."""

    def __init__(self) -> None:
        self.worst, self.where = 0.0, "none"

    def see(self, where: str, got: float, want: float, scale: float) -> None:
        miss = abs(got - want) / scale
        if not miss <= self.worst:
            self.worst, self.where = miss, where


def sheet(name: str) -> Finding:
    """Slopes, flows, steps, closing, torque, forces and moments."""
    shape = SHEETS[name]()
    theory = beam_theory.solve(shape.theory())
    place = next(iter(shape.points.values()))
    load = beam_theory.Load("gust", (0.8, -1.2), place, torque=40.0)
    found = beam_theory.working(theory, load)
    flow = theory.flow(load)
    seen = _Misses()
    ixx, iyy, ixy = found.second_moment_xx, found.second_moment_yy, found.product_moment_xy
    seen.see("a", found.a * iyy + found.b * ixy, load.shear[0], 1.0)
    seen.see("b", found.a * ixy + found.b * ixx, load.shear[1], 1.0)
    seen.see("determinant", found.determinant, ixx * iyy - ixy**2, ixx * iyy)
    peak = abs(flow.peak().flow)
    v = np.linspace(0.0, 1.0, 7)
    closing = np.array([0.0, *(c.closing for c in found.cells)])
    torsion = np.array([0.0, *(c.torque_flow for c in found.cells)])
    walls = {w.name: w for w in shape.walls}
    twisted = 0.0
    for wall, basic, shear, total in zip(found.walls, found.basic, found.shear, found.total, strict=True):
        at = wall.first + (wall.last - wall.first) * v
        final = flow.at(wall.wall, at)
        for i, got in enumerate(total.at(v).tolist()):
            seen.see(f"total flow of {wall.wall}", got, float(final[i]), peak)
        for row in (basic, shear, total):
            got = row.at(np.array([0.0, 0.5, 1.0])).tolist()
            for one, two in zip(got, (row.start, row.middle, row.end), strict=True):
                seen.see(f"flow of {wall.wall}", one, two, peak)
        seen.see("closing", shear.start - basic.start, closing[wall.left] - closing[wall.right], peak)
        seen.see("torque flow", total.start - shear.start, torsion[wall.left] - torsion[wall.right], peak)
        fall = found.a * wall.first_moment[0] + found.b * wall.first_moment[1]
        seen.see(f"first moment of {wall.wall}", basic.start - fall, basic.end, peak)
        line, own = shape.line(walls[wall.wall]), walls[wall.wall]
        seen.see(f"length of {wall.wall}", wall.length, float(line.weight.sum()), wall.length)
        flexibility = float((1.0 / (own.g * line.thickness)) @ line.weight)
        seen.see(f"flexibility of {wall.wall}", wall.flexibility, flexibility, flexibility)
        stiff = (
            own.g * float((line.thickness**3 / 3.0) @ line.weight) if wall.left == wall.right == 0 else 0.0
        )
        seen.see(f"torsion of {wall.wall}", wall.torsion, stiff, found.torque.torsion_constant)
        if own.through is not None:
            seen.see(f"radius of {wall.wall}", wall.radius * abs(wall.sweep), wall.length, wall.length)
        arm = line.place - np.array(found.centroid)
        moment = arm[:, 0] * line.step[:, 1] - arm[:, 1] * line.step[:, 0]
        twisted += float(basic.at(line.fraction) @ moment)
    seen.see("torque of the basic flow", found.basic_torque, twisted, peak * float(np.abs(moment).sum()))
    for boom in found.booms:
        want = -boom.stiffness * (found.a * boom.place[0] + found.b * boom.place[1])
        seen.see("boom", boom.step, want, peak)
    for cut in found.cuts:
        wall = found.walls[cut.stretch]
        u = (cut.at - wall.first) / (wall.last - wall.first)
        seen.see(f"cut of {cut.wall}", float(found.basic[cut.stretch].at(np.array([u]))[0]), 0.0, peak)
    for cell in found.cells:
        weights = np.array(cell.flexibility)
        seen.see("gap", float(weights @ closing[1:]), -cell.gap, float(np.abs(weights).max()) * peak)
        twice = float(weights @ [c.twist_flow for c in found.cells])
        seen.see("twist flow", twice, 2.0 * cell.area, cell.area)
    _torque(seen, found, load)
    return Finding(seen.worst, ROUND_OFF, f"Largest miss {seen.worst:.1e} ({seen.where}).")


def _torque(seen: _Misses, found: beam_theory.Working, load: beam_theory.Load) -> None:
    t = found.torque
    assert load.through is not None
    assert t.shear_centre is not None
    size = sum(w.length for w in found.walls)
    unit = {row.unit: row for row in found.shear_centre}
    seen.see("x_s", found.centroid[0] + unit["Vy"].moment, t.shear_centre[0], size)
    seen.see("y_s", found.centroid[1] - unit["Vx"].moment, t.shear_centre[1], size)
    for row in unit.values():
        seen.see("moments", sum(row.moments), row.moment, size)
    arm = (load.through[0] - t.shear_centre[0], load.through[1] - t.shear_centre[1])
    about = load.torque + arm[0] * load.shear[1] - arm[1] * load.shear[0]
    seen.see("T_sc", t.torque_about_shear_centre, about, size)
    cells = sum(2.0 * c.area * c.twist_flow for c in found.cells)
    opened = sum(w.torsion for w in found.walls)
    seen.see("J", t.torsion_constant, cells + opened, t.torsion_constant)
    seen.see("J of cells", t.torsion_constant_cells, cells, t.torsion_constant)
    seen.see("J of open walls", t.torsion_constant_open, opened, t.torsion_constant)
    seen.see("twist", t.twist * t.torsion_constant, about, abs(about))
    seen.see("torque of open walls", t.open_torque, t.twist * opened, abs(about))
    seen.see("torque of cells", t.cell_torque, t.twist * cells, abs(about))
    for c in found.cells:
        seen.see("flow of the torque", c.torque_flow, t.twist * c.twist_flow, abs(t.twist * c.twist_flow))
    x, y, moment = np.array([[r.x, r.y, r.torque] for r in found.forces]).sum(axis=0).tolist()
    origin = moment + found.centroid[0] * y - found.centroid[1] * x + t.open_torque
    want = load.torque + load.through[0] * load.shear[1] - load.through[1] * load.shear[0]
    for name, forces in (
        ("forces", (x, y, origin)),
        ("resultant", found.resultant),
        ("applied", found.applied),
    ):
        seen.see(f"{name}, x", forces[0], load.shear[0], 1.0)
        seen.see(f"{name}, y", forces[1], load.shear[1], 1.0)
        seen.see(f"{name}, torque", forces[2], want, size)
    if len(found.cells) == 1:
        (cell,) = found.cells
        assert found.closing_by_moments is not None
        both = cell.closing + cell.torque_flow
        seen.see(
            "closing by moments", found.closing_by_moments, both, abs(cell.closing) + abs(cell.torque_flow)
        )


CHECKS = tuple(
    code_check(
        f"hand sheet redone, {name}",
        GROUP,
        "theory",
        partial(sheet, name),
        quick=True,
        features={"load on a line", "torque", *({"taper", "boom"} if "nose" in name else ())},
    )
    for name in SHEETS
)
