"""Parts as they come from a drawing office, and DXF files of them."""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path

import ezdxf
import numpy as np
import shapely
from shapely.geometry import LineString, Point, Polygon

from crosscheck.comparison.models import fe_section
from crosscheck.section_file.model import SectionFile
from fe_models import ClosedLine, Place, Solid
from fe_models.outline import outline
from fe_models.rings import rings


def drawn(section: SectionFile) -> Solid:
    """The solid that a section's walls make, as a drawing of lines and arcs."""
    walls = outline(fe_section(section))
    found, _ = rings(walls.joints, {}, list(walls.joints))
    lines = []
    for ring in found:
        points: list[Place] = []
        through: list[Place | None] = []
        for piece in ring:
            if piece.length < 1e-9 * walls.extent:
                continue
            step = 3.0 if piece.arc is not None else 0.15
            count = 1 if piece.straight else max(1, math.ceil(piece.turn / step))
            at = [(float(x), float(y)) for x, y in piece.at(np.linspace(0.0, 1.0, 2 * count + 1))]
            points += at[:-1:2]
            through += [None if piece.straight else p for p in at[1::2]]
        lines.append(ClosedLine(tuple(points), tuple(through)))
    return Solid(tuple(lines))


def save_dxf(solid: Solid, path: Path, units: int = 4) -> Path:
    """A DXF of closed polylines, arcs as bulges."""
    document = ezdxf.new(units=units)
    for ring in solid.rings:
        through = ring.through or (None,) * len(ring.points)
        corners = []
        for i, (a, m) in enumerate(zip(ring.points, through, strict=True)):
            b = ring.points[(i + 1) % len(ring.points)]
            corners.append((*a, 0.0 if m is None else _bulge(np.array(a), np.array(m), np.array(b))))
        document.modelspace().add_lwpolyline(corners, format="xyb", close=True)
    document.saveas(path)
    return path


def _bulge(a: np.ndarray, m: np.ndarray, b: np.ndarray) -> float:
    """Tangent of a quarter of the arc's angle, positive anticlockwise: half its rise over half the chord."""
    # the angle at m is half of what is left of the full turn
    u, v = a - m, b - m
    angle = math.atan2(u[0] * v[1] - u[1] * v[0], u @ v)
    return math.tan(0.5 * (math.copysign(math.pi, angle) - angle)) * -1.0


def of_polygon(polygon: Polygon) -> Solid:
    """A polygon as a solid."""
    loops = [polygon.exterior, *polygon.interiors]
    return Solid(tuple(ClosedLine(tuple((float(x), float(y)) for x, y in r.coords[:-1])) for r in loops))


def block(width: float = 60.0, height: float = 45.0) -> Solid:
    return of_polygon(shapely.box(0, 0, width, height))


def thick_ring() -> Solid:
    return Solid((ClosedLine.circle((0, 0), 50), ClosedLine.circle((0, 0), 22)))


def star(points: int = 5) -> Solid:
    a = np.pi * np.arange(2 * points) / points
    r = np.where(np.arange(2 * points) % 2, 18.0, 50.0)
    return of_polygon(Polygon(np.column_stack([r * np.sin(a), r * np.cos(a)])))


def bulb_extrusion() -> Solid:
    """Two stems with bulbs on a base that tapers to the right; a screw boss."""
    base = Polygon([(-60, -1.5), (-20, -1.5), (60, -1.0), (60, 1.0), (-20, 1.5), (-60, 1.5)])
    stems = [shapely.box(-21.2, 0, -18.8, 38), shapely.box(33.4, 0, 36.6, 30)]
    bulbs = [Point(-20, 38).buffer(4.5, quad_segs=32), shapely.box(31, 27, 39, 33)]
    boss = Point(5, 0).buffer(4.0, quad_segs=32)
    return of_polygon(shapely.union_all([base, *stems, *bulbs, boss]))


def filleted_extrusion() -> Solid:
    """A channel with a middle rib, walls of three thicknesses, fillets of 1.5 in all inner corners."""
    part = shapely.union_all(
        [
            shapely.box(0, 0, 90, 3.0),
            shapely.box(0, 0, 2.5, 44),
            shapely.box(87.0, 0, 90, 52),
            shapely.box(44, 0, 46, 30),
            shapely.box(0, 42, 18, 44),
        ]
    )
    # closing fills inner corners with fillets
    return of_polygon(part.buffer(1.5, join_style="mitre").buffer(-1.5, quad_segs=24))


def scanned(polygon: Polygon, segments: int, noise: float, seed: int = 7) -> Solid:
    """A boundary as a scanner gives it: many short segments, each place off by up to ``noise`` [L]."""
    chance = np.random.default_rng(seed)
    lengths = [r.length for r in (polygon.exterior, *polygon.interiors)]
    loops = []
    for ring, length in zip((polygon.exterior, *polygon.interiors), lengths, strict=True):
        count = round(segments * length / sum(lengths))
        line = LineString(ring.coords)
        places = np.array([line.interpolate(s).coords[0] for s in np.arange(count) * length / count])
        places += chance.uniform(-noise, noise, places.shape)
        loops.append(ClosedLine(tuple((float(x), float(y)) for x, y in places)))
    return Solid(tuple(loops))


def channel_polygon() -> Polygon:
    """A channel 90 deep, 2.4 thick, with a lip."""
    return shapely.union_all(
        [
            shapely.box(0, 0, 2.4, 90),
            shapely.box(0, 0, 48, 2.4),
            shapely.box(0, 87.6, 48, 90),
            shapely.box(45.6, 72, 48, 90),
        ]
    )


def rounded_box_polygon() -> Polygon:
    """A hollow section with rounded corners."""
    outer = shapely.box(0, 0, 80, 50).buffer(-8).buffer(8, quad_segs=48)
    return outer.difference(shapely.box(3, 3, 77, 47).buffer(-5).buffer(5, quad_segs=48))


Places = Sequence[Place]
