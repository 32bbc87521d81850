"""From a drawing to a section file: walls found, written, read again and held against the drawing."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Sequence
from dataclasses import dataclass, replace

import fe_models
from crosscheck.faults import Fault, SectionFaults
from crosscheck.section_file.model import SectionFile
from crosscheck.section_file.reader import SectionSource, section_from
from crosscheck.tracing.drawing_source import DrawingSource, outline_table
from crosscheck.tracing.lumps import with_lumps
from crosscheck.tracing.model import Remark, WallModel
from crosscheck.tracing.naming import Names, names
from crosscheck.tracing.quality import Quality, polygon_of, quality, rebuilt_outline
from crosscheck.tracing.section_text import section_text
from crosscheck.tracing.wall_model import wall_model


@dataclass(frozen=True)
class Idealisation:
    """Walls found in a drawing.

    Attributes
    ----------
    source : what they were found in
    model, names : the walls
    text : the section file
    section : the same as read, on its walls alone
    quality : the walls' outline beside the drawing
    remarks : what could not be represented
    """

    source: DrawingSource
    model: WallModel
    names: Names
    text: str
    section: SectionFile
    quality: Quality
    remarks: tuple[Remark, ...]


def idealise(source: DrawingSource, tolerance: float | None = None, *, even: bool = False) -> Idealisation:
    """Find the walls of a drawing and write them as a section file.

    Parameters
    ----------
    source : DrawingSource
    tolerance : float, optional
        Largest distance of a drawn face from its wall's over the thickness [-].
    even : bool
        True to write out the evened outline instead of attaching the drawing.
    """
    model, section = _readable(source, tolerance)
    if even:
        source = replace(source, outline=outline_table(model.even))
    rebuilt = rebuilt_outline(section)
    while isinstance(rebuilt, fe_models.OutlineError) and rebuilt.kind == "radius":
        model = _less_rounded(model, rebuilt.walls)
        section = _read(section_text(model, source, ()), source)
        rebuilt = rebuilt_outline(section)
    if isinstance(rebuilt, fe_models.Outline) and model.clear_share > 0.0:
        model = with_lumps(model, polygon_of(rebuilt, model.outline.thickness))
        section = _read(section_text(model, source, ()), source)
    found = quality(model, section)
    remarks = [*model.remarks]
    if found.refused:
        remarks.append(Remark(f"the walls make no outline of their own: {found.refused}"))
    if model.cells != model.holes:
        openings = "1 opening" if model.holes == 1 else f"{model.holes} openings"
        cells = "1 cell" if model.cells == 1 else f"{model.cells} cells"
        text = f"the drawing has {openings}, the walls make {cells}"
        remarks.append(Remark(text))
    model = replace(model, remarks=tuple(remarks))
    text = section_text(model, source, _sentences(model, found), apart=not found.agrees)
    return Idealisation(source, model, names(model), text, section, found, tuple(remarks))


def _readable(source: DrawingSource, tolerance: float | None) -> tuple[WallModel, SectionFile]:
    """The walls as found, or more plainly joined where a section file of them would have faults."""
    faults: Sequence[Fault] = ()
    for caution in (0, 1):
        model = wall_model(source.solid, tolerance, caution)
        try:
            return model, _read(section_text(model, source, ()), source)
        except SectionFaults as error:
            faults = error.faults
    model = wall_model(source.solid, tolerance, 2)
    first = faults[0]
    lost = Remark(f"walls that were found make no section: {first.key}: must be {first.allowed}")
    model = replace(model, remarks=(*model.remarks, lost), clear_share=0.0)
    return model, _read(section_text(model, source, ()), source)


def _less_rounded(model: WallModel, walls: Sequence[str]) -> WallModel:
    """The model without the rounding at the points that walls of these names share."""
    known = names(model).walls
    ends = [{w.start, w.end} for w, name in zip(model.walls, known, strict=True) if name in walls]
    shared = set.intersection(*ends) if ends else set()
    rounded = {n for n, p in enumerate(model.points) if p.inner is not None}
    gone = (shared & rounded) or rounded
    points = [replace(p, inner=None, outer=None) if n in gone else p for n, p in enumerate(model.points)]
    lost = [Remark("radii that the walls have no room for", model.points[n].place) for n in sorted(gone)]
    return replace(model, points=tuple(points), remarks=(*model.remarks, *lost))


def _sentences(model: WallModel, found: Quality) -> list[str]:
    """Remarks as comments of the section file, with their places."""
    made = [f"thin-walled theory has no business here: {reason}" for reason in found.unsuited]
    for number, remark in enumerate(model.remarks, 1):
        where = "" if remark.place is None else f" at ({remark.place[0]:.5g}, {remark.place[1]:.5g})"
        made.append(f"[{number}] {remark.text}{where}")
    return made


def _read(text: str, source: DrawingSource) -> SectionFile:
    """The walls of a section file's text, without its outline."""
    document = tomllib.loads(text)
    del document["outline"]
    digest = hashlib.sha256(text.encode()).hexdigest()
    return section_from(SectionSource(f"{source.path.stem}.toml", digest, document))


__all__ = ["Idealisation", "idealise"]
