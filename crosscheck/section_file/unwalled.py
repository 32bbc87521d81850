"""A section file with an outline: its material, and without walls what cannot stand in it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from crosscheck.faults import quoted
from crosscheck.section_file.model import MIDLINE_SHEAR_CENTRE, NU_WITHOUT_MATERIAL, LoadSpec, Material
from crosscheck.section_file.numbers import Numbers

if TYPE_CHECKING:
    from crosscheck.section_file.outline import ReadOutline

ON_WALLS = ("booms", "corners", "cuts", "probes", "placed", "mirror")


def section_outline(
    document: Mapping[str, Any],
    folder: Path,
    length_unit: str,
    numbers: Numbers,
    materials: Mapping[str, Material],
    loads: Sequence[LoadSpec],
) -> ReadOutline | None:
    """The outline of a document; None without one or where it has a fault, which is noted.

    Parameters
    ----------
    document : well-formed document
    folder : of the section file
    length_unit : of the section file; empty where its unit has a fault
    numbers : resolves numbers and takes faults
    materials : all materials of the file
    loads : as read
    """
    if "outline" not in document:
        return None
    from crosscheck.section_file.outline import noted_outline

    faults = numbers.faults
    if len(materials) > 1:
        found = f"{len(materials)} materials: {', '.join(map(quoted, materials))}"
        faults.add(("materials",), found, "one with [outline], which is a solid of one material")
    if "walls" not in document:
        for key in ON_WALLS:
            if key in document:
                faults.add((key,), "given without walls", "left out: it belongs to walls")
        for index, load in enumerate(loads):
            if load.through == MIDLINE_SHEAR_CENTRE:
                words = "coordinates [x, y] or a point: without walls there is no midline"
                faults.add(("loads", index, "through"), quoted(MIDLINE_SHEAR_CENTRE), words)
    nu = next((material.nu for material in materials.values()), NU_WITHOUT_MATERIAL)
    return noted_outline(document["outline"], folder, length_unit or "mm", numbers, nu)
