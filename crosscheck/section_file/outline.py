"""The table [outline] of a section file: a solid given by its outline instead of walls.

    [outline]
    boundary = [[0, 0], [60, 0], { through = [67, 3], to = [70, 10] }, [70, 40], [0, 40]]
    openings = [ [[10, 10], [20, 10], [20, 20]], { centre = [50, 20], radius = 8 } ]

A ring is a list of corners in order, either way round. An entry [x, y] is the next corner by a straight line;
{ through = [x, y], to = [x, y] } is the next corner by the arc through a third place; the line back to the
first corner closes the ring unless the last arc already ends there. { centre, radius } is a full circle. Or

    [outline]
    file = "part.dxf"            # .dxf; .step, .stp; a triangle mesh: .msh .vtu .vtk .stl .obj .off .ply ...
    drawing_unit = "mm"          # DXF that states none; mesh files, where not in the section file's own unit
    layers = ["OUTLINE"]         # DXF: layers that hold the outline; all that are shown without
    gap = 0.01                   # DXF: ends no farther apart than this are joined
    chord_error = 0.001          # DXF, STEP: largest distance of arcs from curves that are no circles
"""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

import fe_models
from crosscheck.drawings.dxf import MILLIMETRES, DrawingRefused, dxf_outline
from crosscheck.faults import FaultList, KeyPath, quoted, shown
from crosscheck.section_file.keys import OFFSET_LIMIT
from crosscheck.section_file.numbers import POSITIVE, Numbers

KEYS = ("boundary", "openings", "file", "drawing_unit", "layers", "gap", "chord_error")
FILE_KEYS = ("drawing_unit", "layers", "gap", "chord_error")
STEP_ENDINGS = (".step", ".stp")
MESH_ENDINGS = (".msh", ".vtu", ".vtk", ".stl", ".obj", ".off", ".ply", ".inp", ".bdf", ".mesh")
# Of all rings together: the width of a solid is sought from every place to every edge.
PLACE_LIMIT = 8_000
RING_LIMIT = 500
DRAWING_LIMIT = 20_000_000  # bytes
PLACE_WORDS = "a place [x, y]"
RING_WORDS = "a list of places [x, y] and arcs { through, to }, or { centre, radius }"


@dataclass(frozen=True)
class ReadOutline:
    """A solid as read: the solid, notes on how, name and SHA-256 of the drawing where there is one."""

    solid: fe_models.Solid
    notes: tuple[str, ...]
    file: str | None = None
    sha256: str | None = None


def outline_of(
    table: Mapping[str, Any],
    folder: Path,
    *,
    length_unit: str = "mm",
    name: str = "section file",
    numbers: Numbers | None = None,
    nu: float | None = None,
) -> fe_models.Solid:
    """The solid of an [outline] table; as ``read_outline`` without what it says about the reading."""
    return read_outline(table, folder, length_unit=length_unit, name=name, numbers=numbers, nu=nu).solid


def read_outline(
    table: Mapping[str, Any],
    folder: Path,
    *,
    length_unit: str = "mm",
    name: str = "section file",
    numbers: Numbers | None = None,
    nu: float | None = None,
) -> ReadOutline:
    """Read an [outline] table.

    Parameters
    ----------
    table : mapping
        As parsed.
    folder : Path
        Of the section file: drawings lie in it or below it.
    length_unit : str
        Unit of length of the section file.
    name : str
        The section file, for faults.
    numbers : Numbers, optional
        Resolves arithmetic on the file's parameters; its faults are added to its own list.
    nu : float, optional
        Poisson's ratio of the material.

    Raises
    ------
    SectionFaults
        All faults of the table; geometry is judged where its form is without fault.
    """
    numbers = numbers or Numbers(FaultList(name), {})
    read = noted_outline(table, folder, length_unit, numbers, nu)
    numbers.faults.raise_any({"outline": dict(table)})
    assert read is not None
    return read


def noted_outline(
    table: Mapping[str, Any], folder: Path, length_unit: str, numbers: Numbers, nu: float | None
) -> ReadOutline | None:
    """As ``read_outline``, with faults only noted in those of ``numbers``: None where there is one."""
    faults = numbers.faults
    for key in table:
        if key not in KEYS:
            faults.add(("outline", key), quoted(str(key)), "a known key of [outline]", near=(str(key), KEYS))
    if "file" in table:
        return _from_file(table, folder, length_unit, numbers, nu)
    return _from_places(table, numbers, nu)


def _judged(
    solid: fe_models.Solid, keys: list[KeyPath], faults: FaultList, made: ReadOutline
) -> ReadOutline | None:
    """What was read, if its rings bound one solid."""
    places = sum(len(ring.points) for ring in solid.rings)
    if places > PLACE_LIMIT or len(solid.rings) > RING_LIMIT:
        words = f"an outline of at most {PLACE_LIMIT} places on at most {RING_LIMIT} rings"
        remedy = "leave out what is smaller than the accuracy needs"
        faults.add(keys[0], f"{places} places on {len(solid.rings)} rings", words, remedy)
        return None
    corners = np.array([place for ring in solid.rings for place in ring.points])
    size, far = float(np.ptp(corners, axis=0).max()), float(np.abs(corners).max())
    if far > OFFSET_LIMIT * size:
        found = f"an outline {size:.4g} wide or high at a distance of {far:.4g}"
        words = f"within {OFFSET_LIMIT:g} times the section's size from the origin"
        faults.add(keys[0], found, words, "move the origin to the section")
        return None
    try:
        fe_models.loops_of_solid(solid)
    except fe_models.OutlineError as fault:
        which = [
            int(w.removeprefix("rings[").removesuffix("]")) for w in fault.walls if w.startswith("rings[")
        ]
        key = keys[which[0]] if which else keys[0]
        found = fault.found
        for i in sorted(set(range(len(keys))), reverse=True):
            found = found.replace(f"rings[{i}]", _named(keys[i]))
        faults.add(key, found, fault.allowed)
        return None
    return made


def _named(key: KeyPath) -> str:
    return "the boundary" if key[-1] == "boundary" else f"opening {key[-1]}" if len(key) > 2 else "a ring"


def _from_places(table: Mapping[str, Any], numbers: Numbers, nu: float | None) -> ReadOutline | None:
    """Boundary and openings written out."""
    faults = numbers.faults
    for key in FILE_KEYS:
        if key in table:
            faults.add(("outline", key), shown(table[key]), "left out without a file")
    if "boundary" not in table:
        faults.add(
            ("outline", "boundary"), "nothing", "given", "write boundary = [[0, 0], ...] or file = ..."
        )
        return None
    openings = table.get("openings", [])
    if not isinstance(openings, list):
        faults.add(("outline", "openings"), shown(openings), f"a list of rings, each {RING_WORDS}")
        return None
    keys: list[KeyPath] = [("outline", "boundary")]
    keys += [("outline", "openings", i) for i in range(len(openings))]
    before = len(faults) + faults.left_out
    rings = [_ring(raw, key, numbers) for raw, key in zip([table["boundary"], *openings], keys, strict=True)]
    if None in rings or len(faults) + faults.left_out > before:
        return None
    solid = fe_models.Solid(tuple(r for r in rings if r is not None), nu=nu)
    made = _judged(solid, keys, faults, ReadOutline(solid, ()))
    outer = None if made is None else fe_models.loops_of_solid(solid)[0]
    if outer is not None and not np.isclose(outer, solid.rings[0].points[0], rtol=1e-9).all(axis=1).any():
        faults.add(keys[0], "a boundary inside an opening", "the ring round all openings")
    return made


def _ring(raw: Any, key: KeyPath, numbers: Numbers) -> fe_models.ClosedLine | None:
    """One ring of [outline]; None where it has a fault."""
    faults = numbers.faults
    if isinstance(raw, dict):
        return _circle(raw, key, numbers)
    if not isinstance(raw, list) or not 2 <= len(raw) <= PLACE_LIMIT:
        found = f"a list of {len(raw)}" if isinstance(raw, list) else shown(raw)
        faults.add(key, found, f"{RING_WORDS}, of 2 to {PLACE_LIMIT} entries")
        return None
    before = len(faults) + faults.left_out
    points: list[fe_models.Place] = []
    through: list[fe_models.Place | None] = []
    sound = True  # a number may be missing for a fault of a parameter, which is noted there
    for i, entry in enumerate(raw):
        if isinstance(entry, dict):
            for unknown in entry.keys() - {"through", "to"}:
                faults.add((*key, i, unknown), quoted(str(unknown)), "through or to")
            to = _place(entry.get("to"), (*key, i, "to"), numbers)
            middle = _place(entry.get("through"), (*key, i, "through"), numbers)
            if i == 0:
                faults.add((*key, 0), shown(entry), f"{PLACE_WORDS}: a ring begins at a corner")
            sound = sound and middle is not None
        else:
            to, middle = _place(entry, (*key, i), numbers), None
        if to is None:
            sound = False
            continue
        if i > 0:
            through.append(middle)
        points.append(to)
    if not sound or len(faults) + faults.left_out > before:
        return None
    if points[-1] == points[0]:
        points.pop()
    else:
        through.append(None)
    return fe_models.ClosedLine(tuple(points), tuple(through))


def _circle(raw: dict[str, Any], key: KeyPath, numbers: Numbers) -> fe_models.ClosedLine | None:
    for unknown in raw.keys() - {"centre", "radius"}:
        numbers.faults.add((*key, unknown), quoted(str(unknown)), "centre or radius")
    centre = _place(raw.get("centre"), (*key, "centre"), numbers)
    radius = _number(raw.get("radius"), (*key, "radius"), numbers, positive=True)
    return None if centre is None or radius is None else fe_models.ClosedLine.circle(centre, radius)


def _place(raw: Any, key: KeyPath, numbers: Numbers) -> fe_models.Place | None:
    if not isinstance(raw, list) or len(raw) != 2:
        numbers.faults.add(key, shown(raw), PLACE_WORDS)
        return None
    x, y = (_number(v, (*key, i), numbers) for i, v in enumerate(raw))
    return None if x is None or y is None else (x, y)


def _number(raw: Any, key: KeyPath, numbers: Numbers, *, positive: bool = False) -> float | None:
    if isinstance(raw, bool) or not isinstance(raw, (int, float, str)):
        numbers.faults.add(key, shown(raw), "a number or arithmetic in quotes")
        return None
    return numbers.number(key, raw, POSITIVE) if positive else numbers.number(key, raw)


def _from_file(
    table: Mapping[str, Any], folder: Path, length_unit: str, numbers: Numbers, nu: float | None
) -> ReadOutline | None:
    """Boundary and openings of a drawing."""
    faults, key = numbers.faults, ("outline", "file")
    for other in ("boundary", "openings"):
        if other in table:
            faults.add(("outline", other), shown(table[other], 1), "left out beside file")
    path = _path(table["file"], folder, faults)
    options = _options(table, numbers)
    if path is None or options is None:
        return None
    try:
        content = path.read_bytes()
    except OSError as error:
        faults.add(key, f"{path.name}: {error.strerror or error}", "a file that can be read")
        return None
    before = len(faults) + faults.left_out
    rings, notes = _drawn(path, length_unit, options, faults)
    if len(faults) + faults.left_out > before:
        return None
    solid = fe_models.Solid(rings, nu=nu)
    made = ReadOutline(solid, notes, path.relative_to(folder).as_posix(), hashlib.sha256(content).hexdigest())
    return _judged(solid, [key] * len(rings), faults, made)


def _path(raw: Any, folder: Path, faults: FaultList) -> Path | None:
    key = ("outline", "file")
    endings = (".dxf", *STEP_ENDINGS, *MESH_ENDINGS)
    if not isinstance(raw, str) or not raw.isprintable() or len(raw) > 300:
        faults.add(key, shown(raw), "the name of a drawing in quotes")
        return None
    path = folder / raw
    try:
        inside = path.resolve().is_relative_to(folder.resolve())
    except (OSError, RuntimeError):  # a link to itself
        inside = False
    if Path(raw).is_absolute() or ".." in Path(raw).parts or not inside:
        faults.add(key, quoted(raw), "a file in the section file's folder or below it")
        return None
    if path.suffix.lower() not in endings:
        faults.add(key, quoted(raw), f"a file that ends in {', '.join(endings)}")
        return None
    if not path.is_file():
        faults.add(key, quoted(raw), "a file that is there", f"looked in {quoted(str(folder))}")
        return None
    if path.stat().st_size > DRAWING_LIMIT:
        faults.add(key, f"{path.stat().st_size / 1e6:.0f} MB", f"at most {DRAWING_LIMIT / 1e6:.0f} MB")
        return None
    return path


def _options(table: Mapping[str, Any], numbers: Numbers) -> dict[str, Any] | None:
    """Keys that go with a file, checked; None where one has a fault."""
    faults = numbers.faults
    before = len(faults) + faults.left_out
    made: dict[str, Any] = {}
    for key in ("gap", "chord_error"):
        if key in table:
            made[key] = _number(table[key], ("outline", key), numbers, positive=True)
    unit = table.get("drawing_unit")
    if unit is not None and (not isinstance(unit, str) or unit not in MILLIMETRES):
        faults.add(("outline", "drawing_unit"), shown(unit), f"one of {', '.join(map(quoted, MILLIMETRES))}")
    layers = table.get("layers", [])
    layers = [layers] if isinstance(layers, str) else layers
    if not isinstance(layers, list) or not all(isinstance(n, str) for n in layers):
        faults.add(("outline", "layers"), shown(layers), "a list of layer names")
    ending = Path(str(table["file"])).suffix.lower()
    meant_for = {"layers": (".dxf",), "gap": (".dxf",), "chord_error": (".dxf", *STEP_ENDINGS)}
    for key, endings in {**meant_for, "drawing_unit": (".dxf", *MESH_ENDINGS)}.items():
        if key in table and ending not in endings:
            faults.add(("outline", key), shown(table[key]), f"left out with a file that ends in {ending}")
    return (
        None if len(faults) + faults.left_out > before else {**made, "drawing_unit": unit, "layers": layers}
    )


def _drawn(
    path: Path, length_unit: str, options: dict[str, Any], faults: FaultList
) -> tuple[tuple[fe_models.ClosedLine, ...], tuple[str, ...]]:
    """Rings of a drawing in the section file's unit, and notes; none where there is a fault."""
    ending, error = path.suffix.lower(), options.get("chord_error")
    try:
        if ending == ".dxf":
            drawn = dxf_outline(path, length_unit, **options)
            return drawn.rings, drawn.notes
        if ending in STEP_ENDINGS:
            rings = fe_models.rings_apart(path, length_unit, error)
            return rings, (f"STEP face in {length_unit}; circles exact, other curves as arcs",)
        factor = MILLIMETRES[options["drawing_unit"] or length_unit] / MILLIMETRES[length_unit]
        rings = tuple(_times(r, factor) for r in fe_models.rings_apart(path))
        edges = sum(len(r.points) for r in rings)
        return rings, (f"boundary of a triangle mesh: {edges} straight edges",)
    except DrawingRefused as fault:
        faults.add(("outline", fault.key), fault.found, fault.allowed, fault.remedy)
    except fe_models.OutlineError as fault:
        faults.add(("outline", "file"), f"{path.name}: {fault.found}", fault.allowed)
    except fe_models.FeError as fault:
        faults.add(("outline", "file"), f"{path.name}: {fault}", "readable")
    return (), ()


def _times(ring: fe_models.ClosedLine, factor: float) -> fe_models.ClosedLine:
    """A ring of straight edges in another unit."""
    return fe_models.ClosedLine(tuple((x * factor, y * factor) for x, y in ring.points))
