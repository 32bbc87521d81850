"""Mesh files: outline of a flat triangle mesh, and mesh and fields of a solution to VTU or MSH.

The one place that uses the library for mesh files, which is optional.
"""

from __future__ import annotations

import contextlib
import io
import os
import re
import tempfile
import warnings
from collections.abc import Mapping
from pathlib import Path
from types import ModuleType
from typing import Any

import numpy as np
from scipy.spatial import cKDTree

from .band import Array
from .errors import LibraryError, OutlineError
from .field_table import FieldTable, field_table
from .mesh import Index
from .solid import ClosedLine
from .solution import Solution

READ_FORMATS = {
    ".msh": "gmsh",
    ".vtu": "vtu",
    ".vtk": "vtk",
    ".stl": "stl",
    ".obj": "obj",
    ".off": "off",
    ".ply": "ply",
    ".inp": "abaqus",
    ".bdf": "nastran",
    ".mesh": "medit",
}
WRITE_FORMATS = {".vtu": "vtu", ".msh": "gmsh22"}
# Vertices this close over the overall dimension are one; as much is allowed out of the plane or off a line.
SAME_PLACE = 1e-7
# Vertices of one file.
MOST_PLACES = 1_000_000


def require_mesh_library() -> None:
    """Nothing, where the library for mesh files is there.

    Raises
    ------
    LibraryError
        It is missing.
    """
    _library()


def _library() -> ModuleType:
    try:
        import meshio
    except ImportError:
        raise LibraryError('mesh files need the library meshio: pip install "crosscheck[mesh]"') from None
    return meshio


def rings_of_mesh(path: Path) -> tuple[ClosedLine, ...]:
    """Boundary loops of a flat triangle mesh as rings of straight edges.

    Parameters
    ----------
    path : Path
        Its ending tells the format.

    Returns
    -------
    tuple of ClosedLine
        Places as the file has them [L].

    Raises
    ------
    OutlineError
        Not readable, no triangles, other faces, not flat across z, edges of more than two triangles.
    LibraryError
        The library for mesh files is missing.
    """
    kind = READ_FORMATS.get(path.suffix.lower())
    if kind is None:
        allowed = ", ".join(READ_FORMATS)
        raise OutlineError("mesh", (path.name,), f"an ending other than {allowed}")
    library = _library()
    if kind == "abaqus" and re.search(rb"^\s*\*\s*include", path.read_bytes(), re.I | re.M):
        raise OutlineError("mesh", (path.name,), "a file that brings in another one (*INCLUDE)")
    said = io.StringIO()
    try:
        # the library prints what it does not like, and may leave by SystemExit
        with (
            contextlib.redirect_stdout(said),
            contextlib.redirect_stderr(said),
            warnings.catch_warnings(),
        ):
            # text files are first tried as binary ones, with numbers that overflow
            warnings.simplefilter("ignore")
            read = library.read(path, kind)
    except SystemExit:
        raise OutlineError("mesh", (path.name,), f"a file that is not of the format {kind}") from None
    except Exception as fault:
        raise OutlineError("mesh", (path.name,), f"a file that cannot be read ({fault})") from None
    places, triangles = _sheet(read, path)
    rings = [places[row] for row in _loops(triangles, path)]
    size = float(np.ptp(places, axis=0).max())
    return tuple(ClosedLine(tuple((float(x), float(y)) for x, y in _corners(r, size))) for r in rings)


def _sheet(read: Any, path: Path) -> tuple[Array, Index]:
    """Places (n, 2) without repetition and triangles (m, 3), anticlockwise."""
    blocks = [np.asarray(c.data)[:, :3] for c in read.cells if c.type in ("triangle", "triangle6")]
    others = {c.type for c in read.cells} - {"triangle", "triangle6", "line", "line3", "vertex"}
    if others or not blocks:
        raise OutlineError("mesh", (path.name,), f"cells of the kind {', '.join(sorted(others)) or 'none'}")
    points = np.asarray(read.points, dtype=float)
    triangles = np.concatenate(blocks).astype(np.int64)
    if len(points) > MOST_PLACES:
        raise OutlineError("mesh", (path.name,), f"{len(points)} places, more than {MOST_PLACES}")
    if triangles.min() < 0 or triangles.max() >= len(points):
        raise OutlineError("mesh", (path.name,), "a triangle with a corner that is not there")
    used = points[np.unique(triangles)]
    if not np.isfinite(used).all():
        raise OutlineError("mesh", (path.name,), "a place that is not finite")
    size = float(np.ptp(used[:, :2], axis=0).max())
    if points.shape[1] == 3 and np.ptp(used[:, 2]) > SAME_PLACE * size:
        raise OutlineError("mesh", (path.name,), "a sheet that is not flat across z")
    places = points[:, :2]
    first = np.arange(len(places))
    for a, b in sorted(cKDTree(places).query_pairs(SAME_PLACE * size)):
        first[b] = min(first[b], first[a])
    triangles = first[triangles]
    a, b, c = (places[triangles[:, i]] for i in range(3))
    area = (b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0]
    triangles = triangles[np.abs(area) > (SAME_PLACE * size) ** 2]
    if not len(triangles):
        raise OutlineError("mesh", (path.name,), "no triangle with an area")
    turned = area[np.abs(area) > (SAME_PLACE * size) ** 2] < 0.0
    triangles[turned] = triangles[turned][:, [0, 2, 1]]
    return places, triangles


def _loops(triangles: Index, path: Path) -> list[list[int]]:
    """Vertices of the boundary loops: edges of one triangle only."""
    pairs = {(a, b) for t in triangles.tolist() for a, b in zip(t, (*t[1:], t[0]), strict=True)}
    if len(pairs) != 3 * len(triangles):
        raise OutlineError("mesh", (path.name,), "triangles that overlap")
    outside = [(a, b) for a, b in sorted(pairs) if (b, a) not in pairs]
    following = dict(outside)
    if len(following) != len(outside):
        raise OutlineError("mesh", (path.name,), "a boundary that touches itself at a point")
    loops = []
    while following:
        first = next(iter(following))
        row, here = [first], following.pop(first)
        while here != first:
            row.append(here)
            here = following.pop(here)
        loops.append(row)
    return loops


def _corners(ring: Array, size: float) -> Array:
    """The ring without vertices on straight runs."""
    before, after = np.roll(ring, 1, axis=0), np.roll(ring, -1, axis=0)
    a, b = ring - before, after - ring
    off = np.abs(a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0]) / np.hypot(*(after - before).T)
    kept = ring[off > 1e-9 * size]
    return kept if len(kept) >= 3 else ring


def write_fields(solution: Solution, path: Path | str, length_unit: str = "L") -> None:
    """Write mesh and fields of a solution to a VTU or MSH file, whole or not at all.

    Parameters
    ----------
    solution : Solution
    path : Path or str
        Ends in .vtu or .msh (format 2.2).
    length_unit : str
        Name of the unit of length for the fields' names.

    Raises
    ------
    ValueError
        Another ending.
    LibraryError
        The library for mesh files is missing.
    OSError
        The folder cannot be written; nothing is left behind.

    Notes
    -----
    Elements of order p are cut into p^2 linear triangles through all their nodes. Every element keeps nodes
    of its own, so that what jumps from one element to the next is not averaged. In VTU files the names of
    walls are a field array, in MSH files they are physical groups.
    """
    path = Path(path)
    kind = WRITE_FORMATS.get(path.suffix.lower())
    if kind is None:
        raise ValueError(f"{path.name}: must end in .vtu or .msh, got {path.suffix or 'no ending'}")
    library = _library()
    table = field_table(solution, length_unit)
    descriptor, name = tempfile.mkstemp(prefix=f".{path.name}.", suffix=path.suffix, dir=path.parent)
    os.close(descriptor)
    temporary = Path(name)
    try:
        # the format's own warnings about data shapes do not concern the reader
        with contextlib.redirect_stdout(io.StringIO()):
            _written(library, table, temporary, kind)
        temporary.chmod(0o644)
        temporary.replace(path)
    except BaseException:
        temporary.unlink(missing_ok=True)
        raise


def _written(library: ModuleType, table: FieldTable, path: Path, kind: str) -> None:
    points = np.column_stack([table.places, np.zeros(len(table.places))])
    cells: dict[str, list[Any]] = {name: [values] for name, values in table.cells.items()}
    names: Mapping[str, Any] = {}
    if kind == "gmsh22":
        wall = table.wall + 1
        cells |= {"gmsh:physical": [wall], "gmsh:geometrical": [wall]}
        names = {n: np.array([i + 1, 2]) for i, n in enumerate(table.walls)}
    mesh = library.Mesh(
        points, [("triangle", table.triangles)], point_data=table.points, cell_data=cells, field_data=names
    )
    library.write(path, mesh, kind, binary=True)
    if kind == "vtu":
        _name_walls(path, table.walls)


def _name_walls(path: Path, walls: tuple[str, ...]) -> None:
    """Add the walls' names, which the library cannot write, as a field array of zero-ended texts."""
    codes = " ".join(str(b) for n in walls for b in (*n.encode("utf-8"), 0))
    array = (
        f'<FieldData><DataArray type="String" Name="wall names" NumberOfTuples="{len(walls)}" '
        f'format="ascii">{codes}</DataArray></FieldData>'
    )
    content = path.read_bytes()
    head = b"<UnstructuredGrid>"
    at = content.index(head) + len(head)
    path.write_bytes(content[:at] + array.encode("ascii") + content[at:])
