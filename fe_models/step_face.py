"""Outline of a plane face in a STEP file (ISO 10303), read through the mesh generator's geometry kernel."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from .band import Array
from .edges import Edge, circle_edges, closed_lines, fitted_edges
from .errors import OutlineError, SolveError
from .fill import generator
from .solid import ClosedLine

# Names of the units in which the kernel can hand out a file.
UNITS = {"mm": "MM", "m": "M", "in": "INCH"}
# Deviation from a plane, and gaps between edges, over the overall dimension.
FLAT = 1e-7
# Distance of arcs from other curves over the overall dimension, unless it is given.
CHORD_ERROR = 1e-5
UNIT_OPTION = "Geometry.OCCTargetUnit"
PIECES = 4


def rings_of_step(path: Path, length_unit: str, chord_error: float | None = None) -> tuple[ClosedLine, ...]:
    """Boundary and openings of the one plane face of a STEP file.

    Parameters
    ----------
    path : Path
    length_unit : str
        ``mm``, ``m`` or ``in``: the file, which states its own unit, is converted to this one.
    chord_error : float, optional
        Largest distance of arcs from curves that are neither lines nor circles [L]; CHORD_ERROR times the
        overall dimension without.

    Returns
    -------
    tuple of ClosedLine
        Places in ``length_unit`` [L].

    Raises
    ------
    OutlineError
        Not readable, no face or more than one, a face that is not plane, or is oblique.
    SolveError
        The geometry kernel is missing.

    Notes
    -----
    Lines and circles are kept as they are. A face across z is seen with x right and y up, one across y with x
    right and z up, one across x with y right and z up.
    """
    try:
        with generator() as gmsh:
            gmsh.model.add("face")
            before = gmsh.option.getString(UNIT_OPTION)
            try:
                gmsh.option.setString(UNIT_OPTION, UNITS[length_unit])
                return _rings(gmsh, path, chord_error)
            finally:
                gmsh.option.setString(UNIT_OPTION, before)
                gmsh.model.remove()
    except (OutlineError, SolveError):
        raise
    except Exception as fault:  # the kernel raises bare Exception
        raise OutlineError("step", (path.name,), f"a file that cannot be read ({fault})") from None


def _rings(gmsh: Any, path: Path, chord_error: float | None) -> tuple[ClosedLine, ...]:
    gmsh.model.occ.importShapes(str(path))
    gmsh.model.occ.synchronize()
    faces = [tag for _, tag in gmsh.model.getEntities(2)]
    if len(faces) != 1:
        raise OutlineError("step", (path.name,), f"{len(faces)} faces")
    if (kind := gmsh.model.getType(2, faces[0])) != "Plane":
        raise OutlineError("step", (path.name,), f"a face of the kind {kind.lower()}")
    curves = [abs(tag) for _, tag in gmsh.model.getBoundary([(2, faces[0])], oriented=False)]
    bounds = np.array(gmsh.model.getBoundingBox(2, faces[0])).reshape(2, 3)
    size = float(np.ptp(bounds, axis=0).max())
    axes = _axes(gmsh, curves, size, path)
    error = CHORD_ERROR * size if chord_error is None else chord_error
    edges = [e for c in curves for e in _edges(gmsh, c, axes, error)]
    return closed_lines(edges, FLAT * size).lines


def _axes(gmsh: Any, curves: list[int], size: float, path: Path) -> tuple[int, int]:
    """The two coordinates that span the face's plane."""
    places = []
    for c in curves:
        low, high = (float(v[0]) for v in gmsh.model.getParametrizationBounds(1, c))
        places.append(_at(gmsh, c, np.linspace(low, high, 9)))
    spread = np.ptp(np.concatenate(places), axis=0)
    flat = int(np.argmin(spread))
    if spread[flat] > FLAT * size:
        raise OutlineError("step", (path.name,), "a face oblique to x, y and z")
    return ((1, 2), (0, 2), (0, 1))[flat]


def _at(gmsh: Any, curve: int, u: Array) -> Array:
    """Places of a curve, (n, 3)."""
    return np.asarray(gmsh.model.getValue(1, curve, u.tolist()), dtype=float).reshape(-1, 3)


def _edges(gmsh: Any, curve: int, axes: tuple[int, int], chord_error: float) -> list[Edge]:
    """A curve as lines and arcs."""
    low, high = (float(v[0]) for v in gmsh.model.getParametrizationBounds(1, curve))

    def place(u: Array) -> Array:
        return _at(gmsh, curve, u)[:, axes]

    kind = gmsh.model.getType(1, curve)
    start, middle, end = place(np.array([low, 0.5 * (low + high), high]))
    first, last = (float(start[0]), float(start[1])), (float(end[0]), float(end[1]))
    if kind == "Line":
        return [Edge(first, last)]
    if kind == "Circle":
        if high - low >= 2.0 * np.pi * (1.0 - 1e-9):
            centre = 0.5 * (start + middle)
            radius = float(np.hypot(*(start - centre)))
            return circle_edges((float(centre[0]), float(centre[1])), radius)
        return [Edge(first, last, (float(middle[0]), float(middle[1])))]
    return fitted_edges(place, low, high, chord_error, PIECES)
