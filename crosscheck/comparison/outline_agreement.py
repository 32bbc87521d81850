"""Walls and outline in one file: both must be the same section, unless the file says that they are not."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.levels import Levels

if TYPE_CHECKING:
    from crosscheck.section_file.model import SectionFile

# Largest difference of area over the outline's, and of a centroid's coordinate over the overall size.
TOLERANCE = 0.005


def outline_agreement(section: SectionFile, levels: Levels) -> str | None:
    """How far the walls are from the outline, in words; None where only one of them is given.

    The solid that the walls make is held against the outline, booms added as theory has them. Where the
    walls make none, or not all of it carries direct stress, theory's own area and centroid are.

    Raises
    ------
    fe_models.OutlineError
        Where they are apart by more than the tolerance and no wall or boom is marked with seen_by.
    """
    if section.outline is None or not section.walls:
        return None
    outline = fe_models.outline_of_solid(section.outline)
    moments = outline.moments(np.zeros(2))
    area, centroid = moments.area, moments.first / moments.area
    own, place = _of_walls(section, levels)
    if own is None or place is None:
        return None
    off = (own - area) / area
    x, y = (place - centroid) / outline.extent
    unit = section.length_unit
    found = (
        f"walls of area {own:.5g} {unit}^2 with the centroid at ({place[0]:.5g}, {place[1]:.5g}) {unit}, "
        f"outline of {area:.5g} at ({centroid[0]:.5g}, {centroid[1]:.5g}): {100 * abs(off):.2g} % of area, "
        f"{100 * abs(x):.2g} % and {100 * abs(y):.2g} % of the overall size apart"
    )
    if max(abs(off), abs(x), abs(y)) <= TOLERANCE:
        return f"FE takes the outline, theory the walls: {100 * abs(off):.2g} % of area apart"
    seen = {*(wall.seen_by for wall in section.walls), *(boom.seen_by for boom in section.booms)}
    if seen == {"both"}:
        raise fe_models.OutlineError("agreement", (), found)
    return f"FE takes the outline, theory the walls, which idealise (seen_by): {found}"


def _with_solid(section: SectionFile) -> SectionFile:
    """The section with walls for FE: theory's own where FE sees none."""
    if any(wall.seen_by != "theory" for wall in section.walls):
        return section
    return replace(section, walls=tuple(replace(w, seen_by="both") for w in section.walls), booms=())


def _of_walls(section: SectionFile, levels: Levels) -> tuple[float | None, np.ndarray | None]:
    """Area [L^2] and centroid (2,) [L] of the walls and booms."""
    plain = all(wall.direct_share == 1.0 for wall in section.walls)
    if plain:
        try:
            solid = fe_models.outline_of_walls(models.fe_section(_with_solid(section))).moments(np.zeros(2))
        except fe_models.OutlineError:
            plain = False
    if plain:
        area, first = solid.area, solid.first
        for boom in section.booms:
            if boom.seen_by != "fe":
                area += boom.area
                first = first + boom.area * np.array(models.boom_place(section, boom))
        return area, first / area
    values = levels.judged_values
    x, y = values["centroid_x"], values["centroid_y"]
    return values["area"], None if x is None or y is None else np.array([x, y])
