"""Geometry and curves that pictures need, taken from both sides once."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np

from crosscheck.comparison import models
from crosscheck.comparison.drawn import Array, BoomMark, Drawing, LoadLine, PictureMesh, WallShape
from crosscheck.comparison.flow_comparison import flow_on
from crosscheck.comparison.midline import Midline
from crosscheck.comparison.panels import Panel, Stretch, line_of, panels_of

if TYPE_CHECKING:
    import beam_theory
    import fe_models
    from crosscheck.comparison.levels import TheoryFlow
    from crosscheck.comparison.load_case import LoadCase
    from crosscheck.section_file.model import SectionFile

# Samples along a wall: parabolas and cubics look smooth at this number.
SAMPLES = 41


def drawing_of(
    section: SectionFile,
    theory: beam_theory.Solution | None,
    fe: fe_models.Solution,
    cases: Sequence[LoadCase],
    flows: Sequence[TheoryFlow],
) -> Drawing:
    """Drawing of a solved section.

    Parameters
    ----------
    section : SectionFile
        Points, walls and their names.
    theory, fe
        Both solutions; theory None without walls.
    cases, flows : sequence
        Loads and theory's flow of each, in one order.

    Returns
    -------
    Drawing
    """
    at = np.linspace(0.0, 1.0, SAMPLES)
    cells = () if theory is None else theory.cells
    turns = {name: sign for cell in reversed(cells) for name, sign in cell}
    panels = panels_of(section)
    shapes = [_shape(panel, at, turns, fe) for panel in panels.values()]
    hand = [
        _shape(Panel(wall.name, line_of(section, wall), Stretch(wall), None), at, turns, fe)
        for wall in section.walls
        if wall.seen_by != "fe"
    ]
    mesh = _mesh(fe)
    seen = [panel for panel in panels.values() if panel.theory is not None]
    return Drawing(
        points=dict(section.points),
        walls=tuple(shapes),
        loops=tuple(np.asarray(loop, dtype=float) for loop in fe.outline.loops),
        extent=float(fe.outline.extent),
        loads=tuple(
            LoadLine(case.name, case.shear, case.through, case.torque) for case in cases if not case.unit
        ),
        flows={
            case.name: {panel.name: flow_on(panel, entry.flow, at) for panel in seen}
            for case, entry in zip(cases, flows, strict=True)
            if entry.flow is not None
        },
        warping={} if theory is None else _warping(theory, seen, at),
        fe_warping={} if mesh is None else {shape.name: warping_on(mesh, shape) for shape in shapes},
        mesh=mesh,
        hand_walls=tuple(hand),
        booms=tuple(
            BoomMark(*models.boom_place(section, boom), boom.area, boom.seen_by) for boom in section.booms
        ),
    )


def _shape(panel: Panel, at: Array, turns: Mapping[str, int], fe: fe_models.Solution) -> WallShape:
    """A panel as drawn."""
    line, stretch = panel.line, panel.fe or panel.theory
    assert stretch is not None
    on_wall = stretch.on_wall(at)
    turn = None if panel.theory is None else turns.get(panel.theory.wall.name)
    if panel.theory is not None and turn is not None and panel.theory.sign < 0:
        turn = -turn
    return WallShape(
        name=panel.name,
        points=line.places(at),
        normals=line.left_normals(at),
        thickness=panel.spec.thickness[0] * (1 - on_wall) + panel.spec.thickness[1] * on_wall,
        s=at * line.length,
        strip=panel.strip(fe.strips),
        seen_by=panel.seen_by,
        turn=turn or (1 if _goes_up_or_right(line) else -1),
    )


def warping_on(mesh: PictureMesh, shape: WallShape) -> Array:
    """FE's warping function at five places of a wall's strip: distance [L] and omega [L^2], (k, 2)."""
    if shape.strip is None:
        return np.zeros((0, 2))
    low, high = shape.strip
    s = shape.s[-1] * (low + (high - low) * np.array((0.02, 0.25, 0.5, 0.75, 0.98)))
    xy = np.column_stack([np.interp(s, shape.s, shape.points[:, axis]) for axis in (0, 1)])
    return np.column_stack((s, mesh_values(mesh, xy)))


def mesh_values(mesh: PictureMesh, places: Array) -> Array:
    """The warping function (k,) [L^2] at places (k, 2) [L], linear in each triangle; NaN outside the mesh."""
    a, b, c = (mesh.nodes[mesh.triangles[:, i]] for i in range(3))
    twice = _cross(b - a, c - a)
    values = np.full(len(places), np.nan)
    for i, place in enumerate(places):
        shares = (
            np.column_stack(
                (_cross(b - place, c - place), _cross(c - place, a - place), _cross(a - place, b - place))
            )
            / twice[:, None]
        )
        best = int(np.argmax(shares.min(axis=1)))
        if shares[best].min() > -1e-6:
            values[i] = float(shares[best] @ mesh.warping[mesh.triangles[best]])
    return values


def _cross(a: Array, b: Array) -> Array:
    """z component of the cross product of plane vectors (n, 2)."""
    return np.asarray(a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0])


def _goes_up_or_right(line: Midline) -> bool:
    """Whether a wall's own direction is the one reports show."""
    dx, dy = line.end[0] - line.start[0], line.end[1] - line.start[1]
    return dy > 0 if abs(dy) > abs(dx) else dx > 0


def _warping(theory: beam_theory.Solution, panels: Sequence[Panel], at: Array) -> dict[str, Array]:
    """Theory's warping function along each panel; empty where the section has no shear centre."""
    if theory.quantities["shear_centre_x"].value is None or theory.quantities["shear_centre_y"].value is None:
        return {}
    return {
        panel.name: np.asarray(theory.warping_at(panel.theory.wall.name, panel.theory.on_wall(at)))
        for panel in panels
        if panel.theory is not None
    }


def _mesh(fe: fe_models.Solution) -> PictureMesh | None:
    """The mesh as pictures use it."""
    mesh = fe.picture_mesh()
    return PictureMesh(
        np.asarray(mesh.nodes),
        np.asarray(mesh.triangles),
        np.asarray(mesh.warping),
        (float(mesh.pole[0]), float(mesh.pole[1])),
        np.asarray(mesh.edges),
    )
