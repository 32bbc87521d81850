"""Outline of a DXF drawing: lines, arcs, circles, polylines with bulges, splines, ellipses, blocks.

Lines and circular arcs are kept as they are; splines and ellipses become arcs within a stated chord error.
Notes, texts and dimensions are passed over with a note; anything else that could be part of the outline and
is not understood is refused by name.
"""

from __future__ import annotations

import io
from collections import Counter
from collections.abc import Callable, Iterable, Iterator, Sequence
from contextlib import redirect_stderr, redirect_stdout
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fe_models import Chained, ClosedLine, Edge, OutlineError, circle_edges, closed_lines, fitted_edges

Array = NDArray[np.float64]

# Millimetres in the units that a drawing may state ($INSUNITS, DXF reference: header variables).
STATED_UNITS = {1: "in", 2: "ft", 4: "mm", 5: "cm", 6: "m"}
MILLIMETRES = {"mm": 1.0, "cm": 10.0, "m": 1000.0, "in": 25.4, "ft": 304.8}
# Entities that never bound a solid.
PASSED_OVER = frozenset(
    (
        *("TEXT", "MTEXT", "ATTDEF", "ATTRIB", "TOLERANCE", "LEADER", "MULTILEADER", "MLEADER"),
        *("DIMENSION", "ARC_DIMENSION", "LARGE_RADIAL_DIMENSION", "ACAD_TABLE", "POINT", "XLINE", "RAY"),
        *("HATCH", "MPOLYGON", "VIEWPORT", "IMAGE", "WIPEOUT", "PDFUNDERLAY", "DGNUNDERLAY", "DWFUNDERLAY"),
        *("LIGHT", "SUN", "OLE2FRAME", "OLEFRAME"),
    )
)
# Gap and chord error over the overall dimension, where they are not given.
GAP_SHARE = 1e-6
CHORD_SHARE = 1e-5
ENTITY_LIMIT = 50_000
# Entities looked at, in blocks and on layers that are left out too.
VISIT_LIMIT = 100_000
NESTING_LIMIT = 16
# Extrusions off the view direction by less than this keep a flat drawing flat.
FLAT = 1e-9


class DrawingRefused(Exception):
    """A drawing that cannot be used.

    Parameters
    ----------
    found, allowed, remedy : what was found, what must be, what to do
    key : key of [outline] that is concerned
    """

    def __init__(self, found: str, allowed: str, remedy: str = "", key: str = "file") -> None:
        super().__init__(found, allowed, remedy, key)
        self.found, self.allowed, self.remedy, self.key = found, allowed, remedy, key


@dataclass(frozen=True)
class DrawnOutline:
    """Rings in the units asked for, and what a reader should know about how they were read."""

    rings: tuple[ClosedLine, ...]
    notes: tuple[str, ...]


@dataclass
class _Collected:
    """Edges, curves still to be fitted, heights, and what was passed over or is not understood."""

    edges: list[Edge] = field(default_factory=list)
    curves: list[tuple[Callable[[Array], Array], float, float, int]] = field(default_factory=list)
    heights: list[float] = field(default_factory=list)
    layers: Counter[str] = field(default_factory=Counter)
    passed: Counter[str] = field(default_factory=Counter)
    hidden: Counter[str] = field(default_factory=Counter)
    refused: Counter[str] = field(default_factory=Counter)


def dxf_outline(
    path: Path,
    length_unit: str,
    *,
    drawing_unit: str | None = None,
    layers: Sequence[str] = (),
    gap: float | None = None,
    chord_error: float | None = None,
) -> DrawnOutline:
    """Boundary and openings of a DXF drawing's model space.

    Parameters
    ----------
    path : Path
    length_unit : str
        Unit of the answer: a key of ``MILLIMETRES``.
    drawing_unit : str, optional
        Unit of the drawing; required where the drawing states none, and stronger than what it states.
    layers : sequence of str
        Layers that hold the outline; all that are shown without.
    gap : float, optional
        Ends apart by no more than this are joined [L of the answer].
    chord_error : float, optional
        Largest distance of arcs from splines and ellipses [L of the answer].

    Raises
    ------
    DrawingRefused
        Not readable, without unit, without closed outline, or with entities that are not understood.
    """
    document = _document(path)
    try:
        unit, notes = _unit(document, drawing_unit)
        scale = MILLIMETRES[unit] / MILLIMETRES[length_unit]
        found = _collected(document, layers)
        return _outline(found, scale, length_unit, gap, chord_error, notes)
    except DrawingRefused:
        raise
    except Exception as fault:  # the library looks at an entity only when it is asked for
        raise DrawingRefused(f"a drawing with a faulty entity ({fault})", "a DXF drawing") from None


def _collected(document: Any, layers: Sequence[str]) -> _Collected:
    """What the wanted layers of model space hold."""
    found = _Collected()
    wanted = _wanted_layers(document, layers)
    hidden = {layer.dxf.name.casefold() for layer in document.layers if layer.is_off() or layer.is_frozen()}
    for number, (entity, layer) in enumerate(_entities(document.modelspace(), None, 0)):
        if number > VISIT_LIMIT:
            raise DrawingRefused(f"more than {VISIT_LIMIT} entities and blocks", "a drawing of one section")
        key = layer.casefold()
        if entity is None:
            continue
        if key in wanted if wanted else key not in hidden:
            _collect(entity, layer, found)
        else:
            found.hidden[layer] += 1
    return found


def _document(path: Path) -> Any:
    try:
        from ezdxf.filemanagement import readfile
    except ImportError:
        raise DrawingRefused(
            "a DXF file without the library that reads it", "readable", 'pip install "crosscheck[dxf]"'
        ) from None
    said = io.StringIO()
    try:
        with redirect_stdout(said), redirect_stderr(said):
            return readfile(path)
    except Exception as fault:  # besides its own errors, whatever a bad file makes of its parts
        raise DrawingRefused(f"a file that cannot be read ({fault})", "a DXF drawing") from None


def _unit(document: Any, stated_by_user: str | None) -> tuple[str, list[str]]:
    """Unit of the drawing, and a note on where it comes from."""
    own = STATED_UNITS.get(int(document.header.get("$INSUNITS", 0)))
    unit = stated_by_user or own
    if unit is None:
        number = int(document.header.get("$INSUNITS", 0))
        found = "a drawing that states no unit" if number == 0 else f"a drawing in $INSUNITS {number}"
        raise DrawingRefused(
            found, "given", 'write drawing_unit = "mm" (or "cm", "m", "in", "ft")', "drawing_unit"
        )
    if own is not None and unit != own:
        return unit, [f"drawing taken in {unit} as stated in the section file; it states {own} itself"]
    source = "as stated in the section file" if own is None else "as the drawing states"
    return unit, [f"drawing in {unit}, {source}"]


def _wanted_layers(document: Any, layers: Sequence[str]) -> set[str]:
    known = {layer.dxf.name.casefold(): layer.dxf.name for layer in document.layers}
    for name in layers:
        if name.casefold() not in known:
            have = ", ".join(sorted(known.values())[:12])
            raise DrawingRefused(f'"{name}"', f"layers of the drawing ({have})", key="layers")
    return {name.casefold() for name in layers}


def _entities(entities: Iterable[Any], outer_layer: str | None, depth: int) -> Iterator[tuple[Any, str]]:
    """All entities with their layer, blocks taken apart: layer 0 in a block is the layer of its insert.

    Every insert comes as None first, so that blocks of nothing but blocks are counted.
    """
    for entity in entities:
        layer = str(entity.dxf.layer)
        if layer == "0" and outer_layer is not None:
            layer = outer_layer
        if entity.dxftype() == "INSERT":
            if depth == NESTING_LIMIT:
                raise DrawingRefused(f"blocks nested more than {NESTING_LIMIT} deep", "a plain drawing")
            parts = entity.multi_insert() if entity.mcount > 1 else [entity]
            for part in parts:
                yield None, layer
                yield from _entities(part.virtual_entities(), layer, depth + 1)
        elif entity.dxftype() in ("LWPOLYLINE", "POLYLINE") and not _is_surface(entity):
            for part in entity.virtual_entities():
                yield part, layer
        else:
            yield entity, layer


def _is_surface(entity: Any) -> bool:
    """True for polylines that are meshes."""
    return bool(entity.dxftype() == "POLYLINE" and not (entity.is_2d_polyline or entity.is_3d_polyline))


def _collect(entity: Any, layer: str, found: _Collected) -> None:
    """Add one entity to what was found."""
    kind = entity.dxftype()
    if kind in PASSED_OVER:
        found.passed[kind] += 1
        return
    if kind not in ("LINE", "ARC", "CIRCLE", "ELLIPSE", "SPLINE"):
        found.refused[kind] += 1
        return
    if entity.dxf.get("invisible", 0):
        found.hidden[layer] += 1
        return
    found.layers[layer] += 1
    if sum(found.layers.values()) > ENTITY_LIMIT:
        raise DrawingRefused(f"more than {ENTITY_LIMIT} entities", "a drawing of one section")
    if kind == "LINE":
        (a, b), heights = _flat([entity.dxf.start, entity.dxf.end])
        found.heights += heights
        if a != b:
            found.edges.append(Edge(a, b))
    elif kind in ("ARC", "CIRCLE"):
        _collect_arc(entity, found)
    else:
        _collect_curve(entity, found)


def _flat(vectors: Iterable[Any]) -> tuple[list[tuple[float, float]], list[float]]:
    vectors = list(vectors)
    return [(float(v.x), float(v.y)) for v in vectors], [float(v.z) for v in vectors]


def _collect_arc(entity: Any, found: _Collected) -> None:
    """A circular arc or a full circle; its own axes may be mirrored."""
    axis = entity.dxf.extrusion
    if abs(axis.x) > FLAT or abs(axis.y) > FLAT:
        found.refused[f"oblique {entity.dxftype()}"] += 1
        return
    radius = float(entity.dxf.radius)
    ocs = entity.ocs()
    (centre,), heights = _flat([ocs.to_wcs(entity.dxf.center)])
    found.heights += heights
    if radius <= 0.0:
        found.refused["circle of radius 0"] += 1
    elif entity.dxftype() == "CIRCLE":
        found.edges += circle_edges(centre, radius)
    else:
        first = float(np.radians(entity.dxf.start_angle))
        sweep = float(np.radians(entity.dxf.end_angle) - first) % (2.0 * np.pi)
        if sweep == 0.0:
            found.edges += circle_edges(centre, radius)
            return
        sign = -1.0 if axis.z < 0.0 else 1.0
        a, m, b = (
            (centre[0] + sign * radius * np.cos(v), centre[1] + radius * np.sin(v))
            for v in (first, first + 0.5 * sweep, first + sweep)
        )
        found.edges.append(Edge(*((float(p[0]), float(p[1])) for p in (a, b, m))))


def _collect_curve(entity: Any, found: _Collected) -> None:
    """An ellipse or a spline as a curve to be fitted."""
    tool = entity.construction_tool()
    if entity.dxftype() == "ELLIPSE":
        first = float(tool.start_param)
        sweep = float(tool.end_param - first) % (2.0 * np.pi) or 2.0 * np.pi

        def place(u: Array) -> Array:
            return np.array([(v.x, v.y) for v in tool.vertices(u.tolist())])

        _, heights = _flat(tool.vertices([first, first + 0.5 * sweep, first + 0.8 * sweep]))
        found.curves.append((place, first, first + sweep, 4))
    else:
        # the curve's own range leaves out the outer knots, as many as its degree at each end
        knots = np.unique(np.asarray(tool.knots()[tool.degree : tool.count + 1], dtype=float))
        low, high = float(knots[0]), float(knots[-1])
        spans = len(knots) - 1

        def place(u: Array) -> Array:
            return np.array([(v.x, v.y) for v in tool.points(np.clip(u, low, high).tolist())])

        _, heights = _flat(tool.points(np.linspace(low, high, 9).tolist()))
        uniform = np.allclose(np.diff(knots), (high - low) / spans)
        found.curves.append((place, low, high, spans if uniform else 2 * spans))
    found.heights += heights


def _outline(
    found: _Collected,
    scale: float,
    length_unit: str,
    gap: float | None,
    chord_error: float | None,
    notes: list[str],
) -> DrawnOutline:
    """Rings of what was collected, scaled."""
    if found.refused:
        words = _counted(found.refused)
        remedy = "choose the outline's layers with layers = [...], or draw it in lines, arcs, circles,"
        raise DrawingRefused(
            words, "of entities that bound a flat section", f"{remedy} polylines, splines or ellipses"
        )
    ends = [p for e in found.edges for p in (e.start, e.end)]
    ends += [tuple(p) for c, a, b, _ in found.curves for p in c(np.linspace(a, b, 9)).tolist()]
    if not ends:
        raise DrawingRefused("no line, arc or curve in model space", "a drawing of an outline")
    size = float(np.ptp(np.array(ends), axis=0).max()) * scale
    if max(found.heights) - min(found.heights) > GAP_SHARE * size / scale:
        raise DrawingRefused("entities at different heights z", "a flat drawing")
    gap = GAP_SHARE * size if gap is None else gap
    error = CHORD_SHARE * size if chord_error is None else chord_error
    edges = list(found.edges)
    try:
        for curve, first, last, pieces in found.curves:
            edges += fitted_edges(curve, first, last, error / scale, pieces)
        chained = closed_lines([_scaled(e, scale) for e in edges], gap)
    except OutlineError as fault:
        remedy = f"gaps up to {gap:.3g} {length_unit} are closed: state a larger gap, or mend the drawing"
        raise DrawingRefused(fault.found, fault.allowed, remedy if fault.kind == "gap" else "") from None
    return DrawnOutline(chained.lines, tuple(notes + _notes(found, chained, gap, error, length_unit)))


def _scaled(edge: Edge, scale: float) -> Edge:
    a, b, m = edge.start, edge.end, edge.through
    through = None if m is None else (m[0] * scale, m[1] * scale)
    return Edge((a[0] * scale, a[1] * scale), (b[0] * scale, b[1] * scale), through)


def _notes(found: _Collected, chained: Chained, gap: float, error: float, unit: str) -> list[str]:
    """What a reader should know about how the drawing was read."""
    made = [f"outline from layers {', '.join(sorted(found.layers))}"]
    if chained.widest_gap > 0.0:
        made.append(f"gaps up to {chained.widest_gap:.3g} {unit} closed (allowed: {gap:.3g} {unit})")
    if found.curves:
        made.append(f"{len(found.curves)} splines or ellipses taken as arcs within {error:.3g} {unit}")
    if chained.short:
        made.append(f"{chained.short} edges shorter than the gap left out")
    if chained.twice:
        made.append(f"{chained.twice} edges drawn twice, taken once")
    if found.passed:
        made.append(f"passed over: {_counted(found.passed)}")
    if found.hidden:
        made.append(f"left out by layer: {_counted(found.hidden)}")
    return made


def _counted(what: Counter[str]) -> str:
    return ", ".join(f"{n} {name}" for name, n in sorted(what.items()))
