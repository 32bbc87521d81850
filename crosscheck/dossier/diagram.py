"""The section that answers to pointing: a drawing for the page, with both sides' values of every wall."""

from __future__ import annotations

from collections.abc import Iterator
from html import escape
from typing import Any

import numpy as np

from crosscheck.comparison.drawn import Array, Drawing, WallShape
from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import Result, WallFlow
from crosscheck.dossier.content import Diagram
from crosscheck.dossier.texts import plain_unit, share_text
from crosscheck.reports.wording import number_text

WIDTH = 720.0
# Largest ordinate of a flow over the larger and over the smaller overall dimension.
HEIGHT, LOW_HEIGHT = 0.15, 0.36
Stresses = dict[tuple[str, str], dict[str, float]]


def section_diagram(result: Result, key: str) -> Diagram:
    """Drawing and values of one section; ``key`` makes its names unique on the page."""
    drawing = result.require_drawing()
    own = [line.name for line in drawing.loads if line.has_shear]
    loads = tuple(load for load in (*own, *UNIT_LOADS) if any(f.load == load for f in result.flows))
    return Diagram(
        f"{key}diagram",
        _svg(result, loads, key),
        {"walls": [wall.name for wall in drawing.walls], "values": _values(result, drawing, loads)},
        loads,
        "Point at a wall, or move to it with the tab key, to see what both sides say of it under the "
        "chosen load. Filled: flow by hand; circles: FE's at the probes; drawn on the right-hand side "
        "of the wall as one follows it, at the scale of each load's own peak.",
    )


def _values(result: Result, drawing: Drawing, loads: tuple[str, ...]) -> list[list[list[str]]]:
    """By load and wall: lines of label, hand, FE, difference."""
    flows = {(flow.load, flow.wall): flow for flow in result.flows}
    stresses = _stresses(result)
    units = {stress.load: plain_unit(stress.unit) for stress in result.stresses}
    found: list[list[Any]] = []
    for load in loads:
        row: list[list[list[str]]] = []
        for wall in drawing.walls:
            lines = list(_flow_lines(flows.get((load, wall.name))))
            most = stresses.get((load, wall.name), {})
            for name, words in (
                ("direct", "direct stress"),
                ("shear", "shear stress"),
                ("von_mises", "von Mises"),
            ):
                if name in most or f"fe_{name}" in most:
                    hand, fe = most.get(name), most.get(f"fe_{name}")
                    lines.append([f"largest {words} [{units[load]}]", number_text(hand), number_text(fe), ""])
            row.append(lines or [["no value at a probe of this wall", "-", "-", ""]])
        found.append(row)
    return found


def _flow_lines(flow: WallFlow | None) -> Iterator[list[str]]:
    """Largest flow of a wall on both sides, and its named probes."""
    if flow is None:
        return
    known = [probe for probe in flow.probes if probe.fe is not None]
    unit = plain_unit(flow.unit)
    if known:
        most = max(known, key=lambda probe: abs(probe.fe or 0.0))
        apart = (
            "" if flow.difference is None else f"{share_text(abs(flow.difference))} of its peak apart at most"
        )
        yield [
            f"flow at s = {number_text(most.s, 3)} [{unit}]",
            number_text(most.theory),
            number_text(most.fe),
            apart,
        ]
    for probe in flow.probes:
        if probe.label is not None:
            yield [f"{probe.label} [{unit}]", number_text(probe.theory), number_text(probe.fe), ""]


def _stresses(result: Result) -> Stresses:
    """Largest magnitudes of every stress by load and wall, both sides."""
    found: Stresses = {}
    for stress in result.stresses:
        most = found.setdefault((stress.load, stress.wall), {})
        for series in stress.faces.values():
            for name in ("direct", "shear", "von_mises", "fe_direct", "fe_shear", "fe_von_mises"):
                for value in getattr(series, name):
                    if value is not None and abs(value) >= abs(most.get(name, 0.0)):
                        most[name] = value
    return found


def _svg(result: Result, loads: tuple[str, ...], key: str) -> str:
    """The drawing as text: outline, flows of each load, walls to point at."""
    drawing = result.require_drawing()
    loop = drawing.loops[0]
    low, high = loop.min(axis=0), loop.max(axis=0)
    size = high - low
    margin = min(HEIGHT * size.max(), LOW_HEIGHT * size.min()) + 0.04 * drawing.extent
    scale = WIDTH / (size[0] + 2 * margin)
    if (size[1] + 2 * margin) * scale > WIDTH * 0.8:
        scale = WIDTH * 0.8 / (size[1] + 2 * margin)
    wide, tall = (size + 2 * margin) * scale

    def shown(places: Array) -> str:
        x = (places[:, 0] - low[0] + margin) * scale
        y = (high[1] - places[:, 1] + margin) * scale
        return " ".join(f"{a:.2f},{b:.2f}" for a, b in zip(x, y, strict=True))

    parts = [
        f'<svg viewBox="0 0 {wide:.1f} {tall:.1f}" class="section" role="group" '
        f'aria-label="Section with its walls; each tells its values" id="{key}svg">'
    ]
    outline = " ".join(f"M {shown(each).replace(' ', ' L ')} Z" for each in drawing.loops)
    parts.append(f'<path class="solid" fill-rule="evenodd" d="{outline}"/>')
    for number, load in enumerate(loads):
        hidden = "" if number == 0 else " hidden-flow"
        parts.append(f'<g class="flow{hidden}" data-load="{number}">')
        size = _ordinate(drawing, load)
        parts += [f'<polygon points="{shown(ring)}"/>' for ring in _flow_rings(drawing, load, size)]
        parts += [_mark(shown(tip[None, :])) for tip in _tips(result, load, size)]
        parts.append("</g>")
    for number, wall in enumerate(drawing.walls):
        parts.append(_wall(wall, number, shown(wall.points)))
    parts.append("</svg>")
    return "".join(parts)


def _flow_rings(drawing: Drawing, load: str, scale: float) -> Iterator[Array]:
    """The filled flow of a load along each wall (2 n, 2)."""
    flows = drawing.flows.get(load, {})
    for wall in drawing.walls:
        values = flows.get(wall.name)
        if values is not None:
            yield np.vstack((wall.points, (wall.points - wall.normals * (scale * values)[:, None])[::-1]))


def _ordinate(drawing: Drawing, load: str) -> float:
    """Length of a unit of flow under a load: its peak by hand has the largest ordinate."""
    flows = drawing.flows.get(load, {})
    peak = max((float(np.abs(values).max()) for values in flows.values()), default=0.0)
    size = drawing.loops[0].max(axis=0) - drawing.loops[0].min(axis=0)
    return float(min(HEIGHT * size.max(), LOW_HEIGHT * size.min())) / peak if peak else 0.0


def _tips(result: Result, load: str, scale: float) -> Iterator[Array]:
    """Where FE's flow at every probe comes to (2,) [L]."""
    walls = {wall.name: wall for wall in result.require_drawing().walls}
    for flow in result.flows:
        if flow.load != load or flow.wall not in walls:
            continue
        wall = walls[flow.wall]
        for probe in flow.probes:
            if probe.fe is not None:
                foot, normal = (
                    np.array([np.interp(probe.s, wall.s, values[:, axis]) for axis in (0, 1)])
                    for values in (wall.points, wall.normals)
                )
                yield foot - scale * probe.fe * normal


def _mark(place: str) -> str:
    """A small open circle."""
    x, y = place.split(",")
    return f'<circle cx="{x}" cy="{y}" r="2.6"/>'


def _wall(wall: WallShape, number: int, points: str) -> str:
    """A wall to point at: its midline, and a wide clear one that is easy to hit."""
    label = escape(f"wall {wall.name}", quote=True)
    return (
        f'<g class="wall" tabindex="0" role="button" data-wall="{number}" aria-label="{label}">'
        f'<polyline class="hit" points="{points}"/><polyline class="line" points="{points}"/></g>'
    )
