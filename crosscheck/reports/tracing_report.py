"""What was found in a drawing, for the screen and as JSON."""

from __future__ import annotations

import json
from collections.abc import Sequence

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from crosscheck.reports.wording import counted, number_text
from crosscheck.tracing.idealising import Idealisation

SCHEMA = "crosscheck.tracing/1"
WALLS_SHOWN = 24
MOMENTS = ("area", "Ixx", "Iyy")


def tracing_screen(found: Idealisation, written: Sequence[str]) -> RenderableType:
    """What the terminal shows of walls found in a drawing.

    Parameters
    ----------
    found : Idealisation
    written : sequence of str
        Files that were written, the section file first; empty where none was.
    """
    model, quality = found.model, found.quality
    unit = found.source.length_unit
    lines = [Text(f"{found.source.title}    units {', '.join(found.source.units.split())}", style="bold")]
    counts = [
        counted(len(model.walls), "wall"),
        counted(len(model.points), "point"),
        counted(model.cells, "cell"),
        counted(len(model.lumps), "lump"),
    ]
    lines.append(Text(f"Found: {', '.join(counts)}."))
    if quality.unsuited:
        lines.append(Text("Thin-walled theory has no business here:", style="bold red"))
        lines += [Text(f"  {reason}") for reason in quality.unsuited]
    parts: list[RenderableType] = [*lines, Text(""), _walls(found), Text("")]
    parts.append(_beside(found))
    if quality.distance is not None and quality.place is not None:
        x, y = quality.place
        parts.append(
            Text(
                f"Outlines{' clear of lumps' if model.lumps else ''} at most "
                f"{number_text(quality.distance, 3)} {unit} apart, at "
                f"({number_text(float(x), 4)}, {number_text(float(y), 4)})."
            )
        )
    if found.remarks:
        parts += [Text(""), Text("Not represented:")]
        parts += [Text(f"  [{n}] {remark.text}") for n, remark in enumerate(found.remarks, 1)]
    parts += [Text(f"Drawing: {note}") for note in found.source.notes]
    if written:
        parts += [Text(""), Text(f"Written: {', '.join(written)}")]
        parts.append(Text(f"Next: crosscheck compare {written[0]}"))
    return Group(*parts)


def _walls(found: Idealisation) -> Table:
    """Walls with their length and thickness."""
    unit = found.source.length_unit
    table = Table(box=None, pad_edge=False, header_style="")
    table.add_column("wall")
    for head in (f"length, {unit}", f"thickness, {unit}", "length/thickness"):
        table.add_column(head, justify="right")
    values = found.names.thicknesses
    rows = list(zip(found.model.walls, found.names.walls, found.names.thickness_of, strict=True))
    for wall, name, numbers in rows[:WALLS_SHOWN]:
        ends = [number_text(values[n].value, 4) for n in numbers]
        thickness = ends[0] if ends[0] == ends[1] else f"{ends[0]} to {ends[1]}"
        shape = "" if wall.through is None else ", arc"
        table.add_row(
            name + shape,
            number_text(wall.length, 4),
            thickness,
            number_text(wall.length / max(wall.thickness), 3),
        )
    if len(rows) > WALLS_SHOWN:
        table.add_row(f"and {len(rows) - WALLS_SHOWN} more", "", "", "")
    return table


def _beside(found: Idealisation) -> RenderableType:
    """Area and second moments of drawing and walls."""
    quality = found.quality
    if quality.rebuilt is None or quality.apart is None:
        return Text(f"The walls make no outline of their own: {quality.refused}")
    unit = found.source.length_unit
    table = Table(box=None, pad_edge=False, header_style="")
    for head in ("", "drawing", "walls and lumps", "apart"):
        table.add_column(head, justify="right" if head else "left")
    for name, power, drawn, rebuilt, apart in zip(
        MOMENTS, (2, 4, 4), quality.drawn, quality.rebuilt, quality.apart, strict=False
    ):
        table.add_row(
            f"{name}, {unit}^{power}",
            number_text(drawn, 5),
            number_text(rebuilt, 5),
            f"{number_text(100 * apart, 2)} %" if abs(apart) >= 5e-6 else "< 0.001 %",
        )
    return table


def tracing_json(found: Idealisation) -> str:
    """Everything in full precision."""
    model, quality, names = found.model, found.quality, found.names
    unit = found.source.length_unit
    points = zip(names.points, model.points, strict=True)
    walls = zip(names.walls, model.walls, strict=True)
    document = {
        "schema": SCHEMA,
        "drawing": found.source.name,
        "title": found.source.title,
        "units": {"length": unit},
        "tolerance": model.tolerance,
        "unevenness": model.noise,
        "clear_share": model.clear_share,
        "cells": model.cells,
        "openings": model.holes,
        "points": {
            name: {
                "place": p.place.tolist(),
                "kind": p.kind,
                "inner_radius": p.inner,
                "outer_radius": p.outer,
            }
            for name, p in points
        },
        "walls": [
            {
                "name": name,
                "start": names.points[w.start],
                "end": names.points[w.end],
                "thickness": list(map(float, w.thickness)),
                "length": w.length,
                "through": None if w.through is None else w.through.tolist(),
                "largest_distance_of_faces": w.fitted.residual,
            }
            for name, w in walls
        ],
        "lumps": [
            {
                "area": lump.area,
                "place": lump.place.tolist(),
                "point": None if lump.point is None else names.points[lump.point],
                "wall": None if lump.wall is None else names.walls[lump.wall],
                "at": lump.at,
            }
            for lump in model.lumps
        ],
        "quality": {
            "drawn": dict(zip(("area", "Ixx", "Iyy", "Ixy"), quality.drawn, strict=True)),
            "rebuilt": None
            if quality.rebuilt is None
            else dict(zip(("area", "Ixx", "Iyy", "Ixy"), quality.rebuilt, strict=True)),
            "largest_distance": quality.distance,
            "largest_distance_at": None if quality.place is None else quality.place.tolist(),
            "no_outline": quality.refused or None,
            "unsuited": list(quality.unsuited),
            "good": quality.good,
        },
        "not_represented": [
            {"text": r.text, "place": None if r.place is None else r.place.tolist()} for r in found.remarks
        ],
    }
    return json.dumps(document, indent=2, ensure_ascii=False) + "\n"
