"""The hand sheet: every number of the classical calculation of one load, in the order of the calculation.

Nothing here is computed another way than in the solution; the rows only lay it open, so that a checker can
redo each line with a calculator. Coordinates are from the centroid unless a name says otherwise.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Complexes, Floats
from beam_theory.errors import LoadError, UndefinedQuantity
from beam_theory.flow import Flow
from beam_theory.section import Load
from beam_theory.solution import Solution
from beam_theory.torsion import flexibility_matrix
from beam_theory.wall_flow import WallFlow, wall_flows

__all__ = [
    "BoomRow",
    "CellRow",
    "CutRow",
    "ForceRow",
    "ShearCentreRow",
    "TorqueWorking",
    "WallRow",
    "Working",
    "working",
]


@dataclass(frozen=True)
class WallRow:
    """A stretch of wall between booms: fractions, places of its ends, length, thickness, weights.

    radius, sweep: of an arc, sweep anticlockwise positive; 0 for a straight wall. first_moment: integrals of
    e t x ds and e t y ds [L^3]. flexibility: integral of ds/(g t) [-]. torsion: g t^3/3 integrated, for walls
    in no cell [L^4]. left, right: number of the cell beside it, from 1; 0 for none.
    """

    wall: str
    first: float
    last: float
    start: tuple[float, float]
    end: tuple[float, float]
    length: float
    thickness: tuple[float, float]
    e: float
    g: float
    direct_share: float
    radius: float
    sweep: float
    first_moment: tuple[float, float]
    flexibility: float
    torsion: float
    left: int
    right: int


@dataclass(frozen=True)
class BoomRow:
    """Boom area times e at a place, and the step - e A (a x + b y) it makes in the flow [F/L]."""

    place: tuple[float, float]
    stiffness: float
    step: float


@dataclass(frozen=True)
class CutRow:
    """Where the walls are cut open for the basic flow; chosen: not one of the user's cuts.

    stretch: number of the row of `walls` that is cut, from 0 (it tells the two sides of a boom apart).
    """

    stretch: int
    wall: str
    at: float
    chosen: bool


@dataclass(frozen=True)
class CellRow:
    """One cell: walls anticlockwise with signs, area, row of the flexibility matrix.

    gap: integral of the basic flow ds/(g t) anticlockwise [F/L]; closing: its closing flow for the shear;
    twist_flow: flow per unit rate of twist with G_base = 1 [L^2]; torque_flow: flow of this load's torque.
    """

    number: int
    walls: tuple[tuple[str, int], ...]
    area: float
    flexibility: tuple[float, ...]
    gap: float
    closing: float
    twist_flow: float
    torque_flow: float


@dataclass(frozen=True)
class TorqueWorking:
    """T_sc = T + (x_p - x_s) Vy - (y_p - y_s) Vx and what it is carried by; positions in the file's axes."""

    torque: float
    through: tuple[float, float] | None
    shear_centre: tuple[float, float] | None
    torque_about_shear_centre: float
    torsion_constant_cells: float
    torsion_constant_open: float
    torsion_constant: float
    twist: float
    cell_torque: float
    open_torque: float


@dataclass(frozen=True)
class ForceRow:
    """Resultant of the final flow of a stretch: integrals of q dx, q dy, q p ds, p about the centroid."""

    wall: str
    first: float
    last: float
    x: float
    y: float
    torque: float


@dataclass(frozen=True)
class ShearCentreRow:
    """Unit shear "Vx" or "Vy": its a and b, the moment of its flow about the centroid stretch by stretch."""

    unit: str
    a: float
    b: float
    moments: tuple[float, ...]
    moment: float


@dataclass(frozen=True)
class Working:
    """The whole calculation of one load at one level.

    Attributes
    ----------
    load, level : what it is of
    area, centroid : e-weighted [L^2], [L]
    second_moment_xx, second_moment_yy, product_moment_xy : about the centroid [L^4]
    determinant : Ixx Iyy - Ixy^2 [L^8]
    a, b : from [Iyy Ixy; Ixy Ixx][a b] = [Vx Vy] [F/L^4]
    walls, booms, cuts, cells : a row for each
    basic, shear, total : flow of every stretch with the cells cut, closed at zero twist, and with the torque
    shear_centre, torque : a row for each coordinate; how the torque is shared
    forces : a row for each stretch
    resultant, applied : (Vx, Vy, T) of `forces` and of the load [F], [F], [F L]; T about the origin of the
        file's axes, with what open walls carry
    basic_torque : moment of the basic flow about the centroid [F L]
    closing_by_moments : of a single cell, (moment of the load about the centroid - basic_torque - what open
        walls carry)/(2 A) [F/L], to be compared with closing + torque_flow; None for other sections
    """

    load: Load
    level: str
    area: float
    centroid: tuple[float, float]
    second_moment_xx: float
    second_moment_yy: float
    product_moment_xy: float
    determinant: float
    a: float
    b: float
    walls: tuple[WallRow, ...]
    booms: tuple[BoomRow, ...]
    cuts: tuple[CutRow, ...]
    basic: tuple[WallFlow, ...]
    cells: tuple[CellRow, ...]
    shear: tuple[WallFlow, ...]
    shear_centre: tuple[ShearCentreRow, ...]
    torque: TorqueWorking
    total: tuple[WallFlow, ...]
    forces: tuple[ForceRow, ...]
    resultant: tuple[float, float, float]
    applied: tuple[float, float, float]
    basic_torque: float
    closing_by_moments: float | None


def working(solution: Solution, load: Load) -> Working:
    """Lay open the calculation of a load.

    Parameters
    ----------
    solution : Solution
    load : Load
        Shear and torque count here; N, M and B make no flow.

    Returns
    -------
    Working
        Flows [F/L] and all that they come from.

    Raises
    ------
    UndefinedQuantity
        Where theory defines no shear flow and the load has a shear.
    LoadError
        At level "corrected", whose terms are no part of the hand method.
    """
    if solution.level == "corrected":
        raise LoadError("hand sheet: levels 'midline' and 'lumped' only, not 'corrected'")
    solved = solution.for_load(load)
    flow = solved.flow(load)
    graph, mass = solved.graph, solved.mass
    k = flow.slope
    basic = np.zeros(len(graph.pieces.t0))
    closing = np.zeros(graph.cells.count)
    if solved.shear is not None:
        basic = (np.conj(k) * solved.shear.basic).real
        closing = (np.conj(k) * solved.shear.closing).real
    boom_step = -(np.conj(k) * (graph.node - mass.centroid)).real * graph.boom
    has = np.flatnonzero(graph.boom)
    booms = tuple(
        BoomRow(_pair(graph.node[i] - mass.centroid), float(graph.boom[i]), float(boom_step[i])) for i in has
    )
    forces, resultant = _forces(solved, flow)
    applied = _applied(solved, load)
    basic_torque = sum(row.torque for row in forces) - _closing_torque(solved, flow, basic)
    by_moments = None
    if graph.cells.count == 1:
        about_centroid = applied[2] - mass.centroid.real * applied[1] + mass.centroid.imag * applied[0]
        rest = about_centroid - basic_torque - flow.open_torque
        by_moments = rest / (2.0 * float(graph.cell_area[0]))
    return Working(
        load,
        solved.level,
        mass.area,
        _pair(mass.centroid),
        mass.xx,
        mass.yy,
        mass.xy,
        mass.xx * mass.yy - mass.xy**2,
        k.real,
        k.imag,
        _walls(solved),
        booms,
        _cuts(solved),
        wall_flows(flow, basic),
        _cells(solved, flow, basic, closing),
        wall_flows(flow, flow.shear_start),
        _shear_centre(solved),
        _torque(solved, flow, load),
        wall_flows(flow, flow.shear_start + flow.torque_flow),
        forces,
        resultant,
        applied,
        basic_torque,
        by_moments,
    )


def _pair(z: complex) -> tuple[float, float]:
    """x and y."""
    return float(z.real), float(z.imag)


def _walls(solved: Solution) -> tuple[WallRow, ...]:
    """Rows of every stretch."""
    graph, mass = solved.graph, solved.mass
    p, section = graph.pieces, graph.section
    one = np.ones((len(p.t0), 1))
    curves = p.curves.moved(-mass.centroid)
    ends = curves.position(one)[:, 0]
    moment = curves.first_moment(one, p.e * p.t0, p.e * (p.t1 - p.t0))[:, 0]
    rows = []
    for i, number in enumerate(p.wall.tolist()):
        wall = section.walls[number]
        sweep = float(p.curves.sweep[i])
        length = float(p.length[i])
        rows.append(
            WallRow(
                wall.name, float(p.first[i]), float(p.last[i]), _pair(curves.start[i]), _pair(ends[i]),
                length,
                (float(p.t0[i]), float(p.t1[i])), wall.e, wall.g, wall.direct_share,
                abs(length / sweep) if sweep != 0.0 else 0.0, sweep, _pair(moment[i]),
                float(p.flexibility[i]),
                float(solved.twist.open_piece[i]), int(graph.left[i]) + 1, int(graph.right[i]) + 1,
            )
        )  # fmt: skip
    return tuple(rows)


def _cuts(solved: Solution) -> tuple[CutRow, ...]:
    """Cuts in wall fractions."""
    graph = solved.graph
    p, section = graph.pieces, graph.section
    own = {cut.wall for cut in section.cuts}
    rows = []
    for piece, at in zip(graph.chord.tolist(), graph.chord_at.tolist(), strict=True):
        wall = section.walls[int(p.wall[piece])].name
        first, last = float(p.first[piece]), float(p.last[piece])
        rows.append(CutRow(piece, wall, first + (last - first) * at, wall not in own))
    return tuple(rows)


def _cells(solved: Solution, flow: Flow, basic: Floats, closing: Floats) -> tuple[CellRow, ...]:
    """Rows of every cell."""
    graph = solved.graph
    if graph.cells.count == 0:
        return ()
    p = graph.pieces
    run = flow.at_quadrature() - (flow.shear_start + flow.torque_flow)[:, None]
    gap = graph.round_cells(p.flexibility * basic + p.over_gt(run))
    matrix = flexibility_matrix(graph, p.flexibility)
    twist = solved.twist.cell_flow
    return tuple(
        CellRow(
            i + 1, loop, float(graph.cell_area[i]), tuple(matrix[i].tolist()), float(gap[i]),
            float(closing[i]),
            float(twist[i]), float(twist[i] * flow.twist),
        )
        for i, loop in enumerate(solved.cells)
    )  # fmt: skip


def _shear_centre(solved: Solution) -> tuple[ShearCentreRow, ...]:
    """Moments of the flows of unit Vx and Vy about the centroid: -y_s and x_s from there."""
    if solved.shear is None:
        return ()
    p, mass = solved.graph.pieces, solved.mass
    arm = p.curves.moved(-mass.centroid).arm(p.u)
    moment: Complexes = (p.ds * arm * solved.shear.flow).sum(axis=1)
    rows = []
    for unit, k in (("Vx", mass.slope(1.0, 0.0)), ("Vy", mass.slope(0.0, 1.0))):
        parts = (np.conj(k) * moment).real
        rows.append(ShearCentreRow(unit, k.real, k.imag, tuple(parts.tolist()), float(parts.sum())))
    return tuple(rows)


def _torque(solved: Solution, flow: Flow, load: Load) -> TorqueWorking:
    """How the torque about the shear centre comes about and is shared."""
    twist = solved.twist
    pole = solved.shear_centre
    return TorqueWorking(
        load.torque,
        load.through,
        None if pole is None else _pair(pole),
        flow.torque_about_shear_centre,
        twist.cell_part,
        twist.open_part,
        twist.constant,
        flow.twist,
        flow.torque_about_shear_centre - flow.open_torque,
        flow.open_torque,
    )


def _forces(solved: Solution, flow: Flow) -> tuple[tuple[ForceRow, ...], tuple[float, float, float]]:
    """Resultant of every stretch and their sum."""
    p, section = solved.graph.pieces, solved.graph.section
    q = p.ds * flow.at_quadrature()
    force = (q * p.curves.tangent(p.u)).sum(axis=1)
    torque = (q * p.curves.moved(-solved.mass.centroid).arm(p.u)).sum(axis=1)
    rows = tuple(
        ForceRow(
            section.walls[number].name, float(p.first[i]), float(p.last[i]), float(force[i].real),
            float(force[i].imag), float(torque[i]),
        )
        for i, number in enumerate(p.wall.tolist())
    )  # fmt: skip
    return rows, flow.resultant()


def _closing_torque(solved: Solution, flow: Flow, basic: Floats) -> float:
    """Moment about the centroid of what the final flow has more than the basic one."""
    p = solved.graph.pieces
    more = flow.shear_start + flow.torque_flow - basic
    return float((p.ds * p.curves.moved(-solved.mass.centroid).arm(p.u) * more[:, None]).sum())


def _applied(solved: Solution, load: Load) -> tuple[float, float, float]:
    """Vx, Vy and the torque about the origin that the load makes."""
    vx, vy = load.shear
    place = load.through
    if place is None:
        if solved.shear_centre is None and (vx != 0.0 or vy != 0.0):
            raise UndefinedQuantity(f"load {load.name!r}: no shear centre: {solved.mass.reason}")
        place = _pair(solved.shear_centre or 0.0j)
    return vx, vy, load.torque + place[0] * vy - place[1] * vx
