"""Joints magnified: the mesh and the shear stress of a unit torque."""

from __future__ import annotations

import matplotlib as mpl
import numpy as np
from matplotlib.axes import Axes
from matplotlib.cm import ScalarMappable
from matplotlib.collections import LineCollection
from matplotlib.colors import Normalize
from matplotlib.figure import Figure
from matplotlib.tri import Triangulation

from crosscheck.comparison.drawn import Array, Drawing, PictureMesh
from crosscheck.comparison.quantities import unit_text
from crosscheck.comparison.result import Result
from crosscheck.faults import one_line
from crosscheck.pictures.canvas import (
    FONT,
    INK,
    SOFT,
    STYLE,
    WIDE_PAPER,
    caption_in_lines,
    plain_unit,
    sheet,
    title_in_lines,
    write_caption,
    write_title,
)
from crosscheck.pictures.walls import centre_of

Place = tuple[float, float]
SHADES = "cividis"


def joints_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Up to four joints with mesh and torsional shear stress; None where there is no mesh to show.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width_mm : int
        Width of the paper.

    Returns
    -------
    Figure or None
    """
    mesh = result.require_drawing().mesh
    places = named_joints(result.require_drawing(), 4) or [whole_section(result.require_drawing())]
    torsion = result.quantity("torsion_constant").fe.value
    if mesh is None or not torsion:
        return None
    stress = stress_at_nodes(mesh) / torsion
    unit = plain_unit(unit_text(-3, 0, result.length_unit, result.force_unit))
    where = " at joints" if result.require_drawing().walls else ""
    columns = min(len(places), 4 if width_mm >= WIDE_PAPER else 2)
    rows = -(-len(places) // columns)
    title_lines = title_in_lines(f"Mesh and shear stress of a unit torque{where} [{unit}]", width_mm)
    caption_lines = caption_in_lines(
        "Shading is cut at the largest stress a little way from the corners: a sharp re-entrant corner has "
        "no peak stress, and none is reported. Under each window: what it shows and its width.",
        width_mm,
    )
    above, below = 3.0 + 4.2 * len(title_lines), 5.0 + 3.2 * len(caption_lines)
    bar = 16.0
    cell = (width_mm - 4.0 - bar) / columns
    height = above + below + rows * (cell + 3.0)
    with mpl.rc_context(STYLE):
        figure = sheet(width_mm, height)
        top = _largest_shown(mesh, stress, [(place, reach) for _, place, reach in places])
        shades = Normalize(0.0, top)
        for number, (name, place, reach) in enumerate(places):
            column, row = number % columns, number // columns
            axes = figure.add_axes(
                (
                    (3.0 + column * cell) / width_mm,
                    (height - above - (row + 1) * (cell + 3.0) + 4.0) / height,
                    (cell - 3.0) / width_mm,
                    (cell - 3.0) / height,
                )
            )
            _draw_joint(axes, mesh, stress, shades, place, reach)
            label = f"{one_line(name, 20)}, {2 * reach:.3g} {result.length_unit} wide"
            axes.set_xlabel(label, fontsize=FONT - 0.5, color=INK, labelpad=2)
        scale = figure.add_axes(
            ((width_mm - bar + 2.0) / width_mm, (below + 4.0) / height, 2.5 / width_mm, (cell - 6.0) / height)
        )
        figure.colorbar(ScalarMappable(shades, SHADES), cax=scale, extend="max")
        scale.tick_params(length=2, pad=1.5, labelsize=FONT - 1, labelcolor=SOFT)
        scale.set_title(unit, fontsize=FONT - 0.5, color=SOFT, pad=3)
        write_title(figure, title_lines)
        write_caption(figure, caption_lines)
    return figure


def whole_section(drawing: Drawing) -> tuple[str, Place, float]:
    """One window over all of a section without walls."""
    return "whole section", centre_of(drawing), 0.53 * drawing.extent


def named_joints(drawing: Drawing, most: int) -> list[tuple[str, Place, float]]:
    """Points with name, place and half the window [L]: where most walls meet, then corners, then ends."""
    found = []
    for order, (name, place) in enumerate(drawing.points.items()):
        meeting = [wall for wall in drawing.walls if _ends_at(wall.points, place)]
        if meeting:
            thick = max(float(wall.thickness.max()) for wall in meeting)
            found.append((-len(meeting), order, name, place, 2.0 * thick))
    found.sort()
    return [(name, place, reach) for _, _, name, place, reach in found[:most]]


def joint_places(drawing: Drawing, most: int) -> list[tuple[Place, float]]:
    """Places and half windows [L] of :func:`named_joints`, only where at least two walls meet."""
    return [
        (place, reach)
        for _, place, reach in named_joints(drawing, most)
        if sum(_ends_at(wall.points, place) for wall in drawing.walls) > 1
    ]


def _ends_at(points: Array, place: Place) -> bool:
    """Whether a midline starts or ends at a place."""
    return bool(np.isclose(points[[0, -1]], place, rtol=0, atol=1e-9).all(axis=1).any())


def torsion_stress(mesh: PictureMesh) -> Array:
    """grad omega + R in each triangle (m, 2) [L], per unit G and rate of twist, linear between nodes.

    R = (-y, x) about ``mesh.pole``, that of the warping function.
    """
    a, b, c = (mesh.nodes[mesh.triangles[:, i]] for i in range(3))
    first, second = b - a, c - a
    twice = first[:, 0] * second[:, 1] - first[:, 1] * second[:, 0]
    w = mesh.warping[mesh.triangles]
    rise_1, rise_2 = w[:, 1] - w[:, 0], w[:, 2] - w[:, 0]
    gradient_x = (rise_1 * second[:, 1] - rise_2 * first[:, 1]) / twice
    gradient_y = (rise_2 * first[:, 0] - rise_1 * second[:, 0]) / twice
    middle = (a + b + c) / 3 - np.asarray(mesh.pole)
    return np.column_stack((gradient_x - middle[:, 1], gradient_y + middle[:, 0]))


def stress_at_nodes(mesh: PictureMesh) -> Array:
    """Magnitude (n,) of the stress of :func:`torsion_stress` at the nodes, from the triangles round each.

    For shading only: at a face it lags behind by a part of the small triangles there.
    """
    stress = torsion_stress(mesh)
    total = np.zeros((len(mesh.nodes), 2))
    count = np.zeros(len(mesh.nodes))
    for corner in range(3):
        np.add.at(total, mesh.triangles[:, corner], stress)
        np.add.at(count, mesh.triangles[:, corner], 1.0)
    return np.asarray(np.hypot(*(total / np.maximum(count, 1.0)[:, None]).T))


def _largest_shown(mesh: PictureMesh, stress: Array, windows: list[tuple[Place, float]]) -> float:
    """Stress at which shading is full: that of all but the hottest hundredth of the area in the windows."""
    corners = mesh.nodes[mesh.triangles]
    first, second = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
    area = np.abs(first[:, 0] * second[:, 1] - first[:, 1] * second[:, 0])
    seen = np.zeros(len(area), dtype=bool)
    for place, reach in windows:
        seen |= (np.abs(corners.mean(axis=1) - place) < reach).all(axis=1)
    if not seen.any():
        seen[:] = True
    values = stress[mesh.triangles[seen]].mean(axis=1)
    order = np.argsort(values)
    share = np.cumsum(area[seen][order]) / area[seen].sum()
    return float(values[order][min(int(np.searchsorted(share, 0.99)), order.size - 1)])


def _draw_joint(
    axes: Axes, mesh: PictureMesh, stress: Array, shades: Normalize, place: Place, reach: float
) -> None:
    """Triangles of one window, shaded, with their edges."""
    corners = mesh.nodes[mesh.triangles]
    near = (np.abs(corners - place).min(axis=1) < 1.2 * reach).all(axis=1)
    triangulation = Triangulation(mesh.nodes[:, 0], mesh.nodes[:, 1], mesh.triangles[near])
    axes.tripcolor(triangulation, stress, norm=shades, cmap=SHADES, shading="gouraud", rasterized=True)
    lines = mesh.nodes[mesh.edges]
    ends_inside = np.asarray((np.abs(lines - place) < 1.2 * reach).all(axis=2))
    inside = ends_inside.any(axis=1)
    axes.add_collection(LineCollection(list(lines[inside]), colors="white", linewidths=0.35, alpha=0.9))
    axes.set_xlim(place[0] - reach, place[0] + reach)
    axes.set_ylim(place[1] - reach, place[1] + reach)
    axes.set_aspect("equal")
    axes.set_xticks([])
    axes.set_yticks([])
    for spine in axes.spines.values():
        spine.set_edgecolor(SOFT)
