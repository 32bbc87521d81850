"""Self-checks of a solution: what must come out again if every step was right."""

from __future__ import annotations

import numpy as np

from beam_theory.flow import Flow
from beam_theory.quantity import Check
from beam_theory.solution import Solution

__all__ = ["checks"]

_ALLOWED = 1e-9


def checks(solution: Solution, sectorial: complex) -> tuple[Check, ...]:
    """Resultants, balance, compatibility, two shear centres, two ways of closing, warping.

    sectorial: shear centre from sectorial moments, complex from the centroid [L].
    """
    graph, mass = solution.graph, solution.mass
    assert solution.shear is not None
    assert solution.warp is not None
    size = float(np.ptp(graph.node.real) + np.ptp(graph.node.imag))
    size = max(size, float(graph.pieces.length.max()) / 4.0)
    flows = {name: solution.unit_flow(name) for name in ("Vx", "Vy", "T")}
    out = [Check("node balance", solution.shear.imbalance, _ALLOWED)]
    for name, flow in flows.items():
        out.append(Check(f"resultant of unit {name}", _resultant_error(solution, name, flow, size), _ALLOWED))
    out.append(Check("no gap in warping round the cells", _gap(solution, flows), _ALLOWED))
    apart = abs(sectorial - solution.warp.pole) / size
    out.append(Check("shear centre from flow moments and from sectorial moments", apart, _ALLOWED))
    out.append(Check("warping function closes round the cells", solution.warp.gap, _ALLOWED))
    if graph.cells.count == 1:
        error = _moment_closing_error(solution, sectorial, size)
        out.append(Check("single cell closed by moment equilibrium", error, _ALLOWED))
    weight = graph.pieces.eta * solution.warp.at_quadrature
    force = graph.boom * solution.warp.node
    place = graph.pieces.curves.moved(-mass.centroid).position(graph.pieces.u)
    moment = complex((weight * place).sum() + (force * (graph.node - mass.centroid)).sum())
    scale = mass.area * size * (size**2)
    out.append(Check("warping makes no bending moment", abs(moment) / scale, _ALLOWED))
    return tuple(out)


def _resultant_error(solution: Solution, name: str, flow: Flow, size: float) -> float:
    """Largest miss of a unit flow's resultants, torque over a unit force times the size."""
    vx, vy, torque = flow.resultant()
    want = {"Vx": (1.0, 0.0), "Vy": (0.0, 1.0), "T": (0.0, 0.0)}[name]
    pole = solution.shear_centre
    assert pole is not None
    if name == "T":
        return max(abs(torque - 1.0), abs(vx) * size, abs(vy) * size)
    moment = pole.real * want[1] - pole.imag * want[0]
    reach = size + abs(pole)
    return max(abs(vx - want[0]), abs(vy - want[1]), abs(torque - moment) / reach)


def _gap(solution: Solution, flows: dict[str, Flow]) -> float:
    """Largest integral of q ds/(g t) round a cell minus that due to twist, over the sum of its parts."""
    graph = solution.graph
    if graph.cells.count == 0:
        return 0.0
    worst = 0.0
    for flow in flows.values():
        q = flow.at_quadrature()
        gap = graph.round_cells(graph.pieces.over_gt(q)) - 2.0 * flow.twist * graph.cell_area
        scale = float(graph.pieces.over_gt(np.abs(q)).sum())
        worst = max(worst, float(np.abs(gap).max()) / scale if scale > 0.0 else 0.0)
    return worst


def _moment_closing_error(solution: Solution, sectorial: complex, size: float) -> float:
    """Single cell: closing flow from moments about the centroid against that from zero twist, unit Vx and Vy.

    The sectorial shear centre is used, which knows nothing of the flows: 2 A_m c = M_V - M_basic.
    """
    graph, mass, found = solution.graph, solution.mass, solution.shear
    assert found is not None
    p = graph.pieces
    arm = p.curves.moved(-mass.centroid).arm(p.u)
    basic = found.flow - found.start[:, None] + found.basic[:, None]
    moment = complex((p.ds * arm * basic).sum())
    worst = 0.0
    for vx, vy in ((1.0, 0.0), (0.0, 1.0)):
        k = mass.slope(vx, vy).conjugate()
        wanted = sectorial.real * vy - sectorial.imag * vx - (k * moment).real
        by_moment = wanted / (2.0 * float(graph.cell_area[0]))
        by_twist = float((k * found.closing[0]).real)
        worst = max(worst, abs(by_moment - by_twist) * size)
    return worst
