"""What walls are found in: a drawing, a mesh, or the outline of a section file."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import fe_models
from crosscheck.faults import FaultList, SectionFaults, quoted
from crosscheck.section_file.numbers import Numbers
from crosscheck.section_file.outline import FILE_KEYS, read_outline
from crosscheck.section_file.source import read_source
from crosscheck.units import UNIT_SYSTEMS

# Tables of a section file that walls replace.
REPLACED = (
    "schema",
    "title",
    "units",
    "outline",
    "parameters",
    "points",
    "walls",
    "booms",
    "corners",
    "cuts",
    "probes",
)


@dataclass(frozen=True)
class DrawingSource:
    """An outline to find walls in, and what stays of where it came from.

    Attributes
    ----------
    path : the file
    solid : as drawn
    title, units : for the section file
    outline : table [outline] of the section file
    notes : on how the drawing was read
    parameters : of a section file, which its outline may use
    kept : other tables of a section file
    """

    path: Path
    solid: fe_models.Solid
    title: str
    units: str
    outline: Mapping[str, Any]
    notes: tuple[str, ...] = ()
    parameters: Mapping[str, Any] = field(default_factory=dict)
    kept: Mapping[str, Any] = field(default_factory=dict)

    @property
    def name(self) -> str:
        return self.path.name

    @property
    def drawing(self) -> Path | None:
        """The drawing that stays attached; None where the outline is written out."""
        file = self.outline.get("file")
        return None if file is None else self.path.parent / file

    @property
    def length_unit(self) -> str:
        return UNIT_SYSTEMS[self.units].length


def outline_table(solid: fe_models.Solid) -> dict[str, Any]:
    """A solid as a table [outline], places to nine digits."""
    rings = [_entries(ring) for ring in solid.rings]
    outer = max(range(len(rings)), key=lambda k: _reach(solid.rings[k]))
    openings = [ring for k, ring in enumerate(rings) if k != outer]
    return {"boundary": rings[outer], "openings": openings} if openings else {"boundary": rings[outer]}


def _entries(ring: fe_models.ClosedLine) -> list[Any]:
    """Corners and arcs of a ring, in order."""

    def rounded(place: fe_models.Place) -> list[float]:
        return [float(f"{v:.9g}") for v in place]

    through = ring.through or (None,) * len(ring.points)
    entries: list[Any] = [rounded(ring.points[0])]
    for k, middle in enumerate(through):
        to = rounded(ring.points[(k + 1) % len(ring.points)])
        if middle is not None:
            entries.append({"through": rounded(middle), "to": to})
        elif k + 1 < len(through):
            entries.append(to)
    return entries


def _reach(ring: fe_models.ClosedLine) -> float:
    """Overall size of a ring's places [L]."""
    places = [*ring.points, *(p for p in ring.through if p is not None)]
    xs, ys = zip(*places, strict=True)
    return (max(xs) - min(xs)) * (max(ys) - min(ys))


def drawing_source(path: Path, units: str, options: Mapping[str, Any]) -> DrawingSource:
    """Read a drawing, or the outline of a section file.

    Parameters
    ----------
    path : Path
        A drawing or a section file with [outline].
    units : str
        Of the section file to be written; that of a section file is its own.
    options : mapping
        Keys of [outline] that go with a drawing.

    Raises
    ------
    SectionFaults
        All faults at once.
    """
    if path.suffix.lower() == ".toml":
        return _from_section_file(path, options)
    faults = FaultList(str(path))
    if not path.is_file():
        faults.add((), "no such file", "a drawing, a mesh or a section file with [outline]", "check the path")
        faults.raise_any()
    outline = {"file": path.name, **options}
    read = read_outline(outline, path.parent, length_unit=UNIT_SYSTEMS[units].length, name=str(path))
    return DrawingSource(path, read.solid, f"Section drawn in {path.name}", units, outline, read.notes)


def _from_section_file(path: Path, options: Mapping[str, Any]) -> DrawingSource:
    document = read_source(path).document
    faults = FaultList(str(path))
    outline, units = document.get("outline"), document.get("units")
    if not isinstance(outline, dict):
        faults.add(("outline",), "nothing", "a table: walls are found in an outline")
    if units not in UNIT_SYSTEMS:
        faults.add(("units",), quoted(str(units)), f"one of {', '.join(map(quoted, UNIT_SYSTEMS))}")
    for key in options:
        faults.add(
            (key,), "given for a section file", "left out: [outline] has it", f"keys: {', '.join(FILE_KEYS)}"
        )
    faults.raise_any()
    assert isinstance(outline, dict)
    assert isinstance(units, str)
    parameters = document.get("parameters", {})
    numbers = Numbers(faults, parameters)
    read = read_outline(
        outline, path.parent, length_unit=UNIT_SYSTEMS[units].length, name=str(path), numbers=numbers
    )
    kept = {key: value for key, value in document.items() if key not in REPLACED}
    title = str(document.get("title", path.stem))
    return DrawingSource(path, read.solid, title, units, outline, read.notes, parameters, kept)


__all__ = ["DrawingSource", "SectionFaults", "drawing_source"]
