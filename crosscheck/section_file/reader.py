"""Reading a section file: from a path to a checked, frozen SectionFile, or all its faults at once.

bytes -> document (source, tables) -> forms (forms, schema) -> numbers and walls (numbers, walls) -> midlines
of faces, placed profiles, mirror (faces, profiles, mirror) -> what refers to them (loads, attachments) ->
geometry (geometry) -> SectionFile (model)
"""

from __future__ import annotations

import os
from collections.abc import Iterable, Mapping
from dataclasses import replace
from pathlib import Path, PurePath
from typing import Any

from crosscheck.faults import Fault, FaultList, SectionFaults, one_line, quoted
from crosscheck.section_file.model import (
    AllowableSpec,
    BoomSpec,
    CornerSpec,
    CutSpec,
    LoadSpec,
    Material,
    ProbeSpec,
    SectionFile,
    StatedSpec,
    WallSpec,
)
from crosscheck.section_file.source import SectionSource, read_source
from crosscheck.units import UNIT_SYSTEMS

__all__ = [
    "AllowableSpec",
    "BoomSpec",
    "CornerSpec",
    "CutSpec",
    "Fault",
    "LoadSpec",
    "Material",
    "ProbeSpec",
    "SectionFaults",
    "SectionFile",
    "SectionSource",
    "StatedSpec",
    "WallSpec",
    "read_section",
    "read_source",
    "section_from",
]


def read_section(
    path: str | os.PathLike[str], overrides: Iterable[str] | Mapping[str, float | str] = ()
) -> SectionFile:
    """Read and check a section file.

    Parameters
    ----------
    path : the file
    overrides : parameters set anew, as texts ("t = 2.5") or as a mapping of names to values

    Returns
    -------
    SectionFile
        Numbers in the file's own units of length [L] and force [F].

    Raises
    ------
    SectionFaults : all faults of the file at once, in its order
    """
    return section_from(read_source(path), overrides)


def section_from(
    source: SectionSource, overrides: Iterable[str] | Mapping[str, float | str] = ()
) -> SectionFile:
    """Check a section file that was read before, with parameters set anew.

    Parameters
    ----------
    source : from `read_source`; left as it is, so that one source serves a whole sweep
    overrides : as for `read_section`

    Returns
    -------
    SectionFile

    Raises
    ------
    SectionFaults : all faults at once, in the file's order
    """
    # pydantic and numpy load here, so that help and faults of the command line stay quick.
    from crosscheck.section_file.allowables import read_allowables
    from crosscheck.section_file.attachments import AttachmentReader
    from crosscheck.section_file.faces import midlines_from_faces
    from crosscheck.section_file.forms import well_formed
    from crosscheck.section_file.geometry import GeometryCheck, seen_by
    from crosscheck.section_file.graph import WallGraph
    from crosscheck.section_file.loads import LoadReader
    from crosscheck.section_file.materials import read_materials
    from crosscheck.section_file.mirror import Mirror, mirror_axes
    from crosscheck.section_file.numbers import Numbers
    from crosscheck.section_file.points import read_points
    from crosscheck.section_file.profiles import ProfilePlacer, read_profiles
    from crosscheck.section_file.tables import with_tables
    from crosscheck.section_file.tolerances import read_tolerances
    from crosscheck.section_file.unwalled import section_outline
    from crosscheck.section_file.walls import WallReader

    faults = FaultList(source.path)
    notes: list[str] = []
    given = with_tables(source, faults, notes)
    document = well_formed(given, faults)
    units = _units(document, faults)
    numbers = Numbers(faults, document.get("parameters", {}), overrides, _names(given, "parameters"))
    material_names, point_names = _names(given, "materials"), _names(given, "points")
    materials, base_material = read_materials(document, material_names, numbers, notes)
    points = read_points(document.get("points", {}), numbers)
    reader = WallReader(numbers, points, point_names, material_names, base_material)
    graph = WallGraph(points, *reader.read(document.get("walls", [])), reader.paths)
    complete = reader.complete and ("walls" in document or "outline" in document)
    written = dict(points)  # as the file has them, before faces are turned into midlines
    before = len(faults) + faults.left_out
    axes = mirror_axes(document.get("mirror", {}).get("about", ()))
    notes += midlines_from_faces(graph, reader.faces, reader.tapers, axes, faults)
    profiles = read_profiles(document, numbers, material_names, base_material)
    placer = ProfilePlacer(graph, numbers, profiles, _names(given, "profiles"), base_material)
    placer.place(document.get("placed", []))
    mirrors = [Mirror(axis, len(axes) == 1) for axis in axes]
    for mirror in mirrors:
        mirror.double(graph, faults)
    complete = complete and len(faults) + faults.left_out == before
    places, all_points = {**graph.points, **written}, {**point_names, **dict.fromkeys(graph.points)}
    loads = LoadReader(document, numbers, places, all_points).loads()
    attachments = AttachmentReader(
        document, numbers, places, all_points, graph if complete else None, base_material, material_names
    )
    cuts, probes, corners = attachments.cuts(), attachments.probes(), attachments.corners()
    booms = (*attachments.booms(), *placer.booms)
    criteria = attachments.criteria(notes)
    allowables = read_allowables(document, numbers, graph if complete else None)
    for mirror in mirrors:
        booms, corners = mirror.booms(booms, graph), mirror.corners(corners)
        allowables = mirror.allowables(allowables)
        cuts, probes = mirror.cuts(cuts, seen_by(graph.walls, "theory")), mirror.probes(probes, faults)
    stated = attachments.stated(probes)
    load_points = [load.through_point for load in loads if load.through_point is not None]
    notes += GeometryCheck(graph.walls, graph.named, points, faults).run(
        cuts, complete, load_points, outlined="outline" in document
    )
    folder = Path(source.path).parent
    outline = section_outline(document, folder, units[0], numbers, materials, loads)
    tolerances = read_tolerances(document, numbers)
    faults.raise_any(given)
    tables = {table.name: table.sha256 for table in source.tables.values()}
    if outline is not None:
        if outline.notes:
            notes.append(f"{outline.file}: {'; '.join(outline.notes)}")
        if outline.file is not None and outline.sha256 is not None:
            tables[outline.file] = outline.sha256
    section = SectionFile(
        path=source.path,
        sha256=source.sha256,
        title=document.get("title") or one_line(PurePath(source.path).stem),
        length_unit=units[0],
        force_unit=units[1],
        points=points,
        walls=tuple(graph.walls),
        judged=document.get("judged", "midline"),
        parameters=numbers.values,
        overrides={name: str(value) for name, value in numbers.overrides.items()},
        materials=materials,
        base_material=base_material,
        booms=booms,
        corners=corners,
        loads=loads,
        cuts=cuts,
        probes=probes,
        stated=stated,
        criteria=criteria,
        allowables=allowables,
        tolerances=tolerances,
        document=document.get("document", {}),
        notes=tuple(notes),
        tables=tables,
        outline=None if outline is None else outline.solid,
    )
    return _with_outline_that_applies(section, source)


def _with_outline_that_applies(section: SectionFile, source: SectionSource) -> SectionFile:
    """The section without its outline, where parameters set anew have changed its walls but not the outline.

    A drawing is of the walls as the file has them; other walls make their own solid.
    """
    if section.outline is None or not section.walls or not section.overrides:
        return section
    try:
        plain = section_from(source)
    except SectionFaults:
        return section
    same_walls = all(
        getattr(plain, name) == getattr(section, name) for name in ("points", "walls", "booms", "corners")
    )
    if same_walls or plain.outline != section.outline:
        return section
    return with_own_solid(section, "the outline is of other walls than these")


def with_own_solid(section: SectionFile, why: str) -> SectionFile:
    """The section without its outline; FE sees the walls and booms that only theory had beside it."""
    return replace(
        section,
        outline=None,
        walls=tuple(replace(wall, seen_by="both") for wall in section.walls),
        booms=tuple(replace(boom, seen_by="both") for boom in section.booms),
        notes=(*section.notes, f"{why}: FE takes the solid that the walls make"),
    )


def _units(document: Mapping[str, Any], faults: FaultList) -> tuple[str, str]:
    """Units of length and force; empty when absent or unknown."""
    name = document.get("units")
    if name is None:
        return "", ""
    if name not in UNIT_SYSTEMS:
        words = f"one of {', '.join(quoted(known) for known in UNIT_SYSTEMS)}"
        faults.add(("units",), quoted(name), words, near=(name, UNIT_SYSTEMS))
        return "", ""
    system = UNIT_SYSTEMS[name]
    return system.length, system.force


def _names(document: Mapping[str, Any], table: str) -> dict[str, None]:
    """Names in a table as the file gives them, in order, faulty entries too."""
    entries = document.get(table)
    return dict.fromkeys(entries) if isinstance(entries, dict) else {}
