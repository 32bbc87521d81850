"""The two models of one section file: the same walls, built anew for each side, and the loads."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable

import numpy as np

import beam_theory
import fe_models
from crosscheck.comparison.load_case import LoadCase
from crosscheck.comparison.midline import Midline
from crosscheck.section_file.model import (
    EVERY_BEND,
    MIDLINE_SHEAR_CENTRE,
    NU_WITHOUT_MATERIAL,
    BoomSpec,
    CornerSpec,
    LoadSpec,
    Material,
    SectionFile,
)


def base_material(section: SectionFile) -> Material | None:
    """The material with e = g = 1; None where the file names none."""
    return None if section.base_material is None else section.materials[section.base_material]


def modulus_ratios(section: SectionFile, material: str | None) -> tuple[float, float]:
    """E and G of a material over those of the base material [-]; 1 where the file names none."""
    base = base_material(section)
    if base is None or material is None:
        return 1.0, 1.0
    own = section.materials[material]
    return own.E / base.E, own.G / base.G


def shear_modulus(section: SectionFile) -> float | None:
    """G of the base material [F/L^2]; None where the file names no material: results are per unit modulus."""
    base = base_material(section)
    return None if base is None else base.G


def young_modulus(section: SectionFile) -> float | None:
    """E of the base material [F/L^2]; None where the file names no material."""
    base = base_material(section)
    return None if base is None else base.E


def theory_section(section: SectionFile) -> beam_theory.Section:
    """Classical theory's model: every wall it sees, booms and cuts."""
    return _lines(section, "theory")


def real_section(section: SectionFile) -> beam_theory.Section | None:
    """The walls and booms that FE sees as a model of theory; None where they are theory's own."""
    sides = {*(wall.seen_by for wall in section.walls), *(boom.seen_by for boom in section.booms)}
    same = sides == {"both"} and all(w.share_in_theory == w.direct_share for w in section.walls)
    if same or section.outline is not None:
        return None
    return _lines(section, "fe")


def has_two_models(section: SectionFile) -> bool:
    """Whether the two sides see other walls, booms or shares."""
    return real_section(section) is not None


def _lines(section: SectionFile, side: str) -> beam_theory.Section:
    """Walls, booms and corners that a side sees as a model of theory; cuts where they are theory's."""
    walls = tuple(
        beam_theory.Wall(
            name=wall.name,
            start=wall.start,
            end=wall.end,
            thickness=wall.thickness,
            arc_through=wall.arc_through,
            e=ratios[0],
            g=ratios[1],
            direct_share=wall.share_in_theory if side == "theory" else wall.direct_share,
        )
        for wall in section.walls
        if wall.seen_by in ("both", side)
        for ratios in (modulus_ratios(section, wall.material),)
    )
    booms = tuple(
        beam_theory.Boom(
            area=boom.area,
            point=boom.point,
            wall=boom.wall,
            at=boom.at,
            e=modulus_ratios(section, boom.material)[0],
        )
        for boom in section.booms
        if boom.seen_by in ("both", side)
    )
    cuts = tuple(beam_theory.Cut(cut.wall, cut.at) for cut in section.cuts if side == "theory")
    corners = tuple(
        beam_theory.Corner(point, corner.inner_radius, corner.outer_radius)
        for point, corner in rounded_points(section, walls).items()
    )
    return beam_theory.Section(_used_points(section, walls), walls, booms, cuts, corners)


def fe_section(section: SectionFile) -> fe_models.Section:
    """The finite-element side's model: every wall it sees, with its real thickness."""
    walls = tuple(
        fe_models.Wall(
            name=wall.name,
            start=wall.start,
            end=wall.end,
            thickness=wall.thickness,
            arc_through=wall.arc_through,
            e=ratios[0],
            g=ratios[1],
            direct_share=wall.direct_share,
        )
        for wall in section.walls
        if wall.seen_by != "theory"
        for ratios in (modulus_ratios(section, wall.material),)
    )
    corners = {
        point: fe_models.Rounding(corner.inner_radius, corner.outer_radius)
        for point, corner in rounded_points(section, walls).items()
    }
    booms = tuple(
        fe_models.Boom(
            modulus_ratios(section, boom.material)[0] * boom.area, boom.point, boom.wall, boom.at or 0.0
        )
        for boom in section.booms
        if boom.seen_by != "theory"
    )
    return fe_models.Section(_used_points(section, walls), walls, corners, booms, _shared_nu(section, walls))


def fe_solution(
    section: SectionFile, accuracy: float, progress: Callable[[str], None] | None = None
) -> fe_models.Solution:
    """The finite-element side solved: of the outline where the file gives one, else of the walls' solid."""
    if section.outline is None:
        return fe_models.solve(fe_section(section), accuracy, progress)
    walls = fe_section(section) if section.walls else None
    return fe_models.solve_solid(section.outline, accuracy, progress, walls)


def reason_without_nu(section: SectionFile, fe: fe_models.Solution) -> str | None:
    """Why FE has nothing with Poisson's ratio; None where it has."""
    if fe.poisson is not None:
        return None
    seen = [wall for wall in section.walls if wall.seen_by != "theory"]
    if len({wall.material for wall in seen}) > 1:
        return "not available: walls of different materials have no one Poisson's ratio"
    return "not available: booms, or walls that carry only a share of direct stress, are of no one material"


def _shared_nu(section: SectionFile, walls: tuple[fe_models.Wall, ...]) -> float | None:
    """Poisson's ratio of the material of all FE walls [-]; None where they differ."""
    names = {wall.name for wall in walls}
    materials = {wall.material for wall in section.walls if wall.name in names and wall.seen_by != "theory"}
    if len(materials) != 1:
        return None
    (name,) = materials
    return NU_WITHOUT_MATERIAL if name is None else section.materials[name].nu


def rounded_points(
    section: SectionFile, walls: tuple[beam_theory.Wall, ...] | tuple[fe_models.Wall, ...]
) -> dict[str, CornerSpec]:
    """Rounding of each point: its own, or that of every bend where exactly two walls of a side meet."""
    meeting = Counter(name for wall in walls for name in (wall.start, wall.end))
    every_bend = next((corner for corner in section.corners if corner.point == EVERY_BEND), None)
    rounded = {} if every_bend is None else {name: every_bend for name, n in meeting.items() if n == 2}
    own = {corner.point: corner for corner in section.corners if corner.point in meeting}
    return {**rounded, **own}


def load_case(load: LoadSpec, theory_shear_centre: tuple[float, float] | None) -> LoadCase:
    """A load of the file with its line of action in coordinates.

    Parameters
    ----------
    load : LoadSpec
        As read.
    theory_shear_centre : (float, float) or None
        Where theory puts the shear centre [L], for loads put through it; None where theory gives none.

    Returns
    -------
    LoadCase
        With ``through`` None where the file names theory's shear centre and theory has none.
    """
    through = theory_shear_centre if load.through == MIDLINE_SHEAR_CENTRE else load.through
    assert not isinstance(through, str)
    return LoadCase(
        load.name,
        load.shear,
        through,
        load.torque,
        axial=load.axial,
        moment=load.moment,
        bimoment=load.bimoment,
    )


def theory_load(case: LoadCase) -> beam_theory.Load:
    """A load as classical theory takes it."""
    return beam_theory.Load(
        name=case.name,
        shear=case.shear,
        through=case.through,
        torque=case.torque,
        axial=case.axial,
        moment=case.moment,
        bimoment=case.bimoment,
    )


def boom_place(section: SectionFile, boom: BoomSpec) -> tuple[float, float]:
    """Where a boom sits, on the midline [L]."""
    if boom.point is not None:
        return section.points[boom.point]
    assert boom.wall is not None
    assert boom.at is not None
    wall = section.wall(boom.wall, None if boom.seen_by == "both" else boom.seen_by)
    line = Midline(section.points[wall.start], section.points[wall.end], wall.arc_through)
    x, y = line.places(np.array([boom.at]))[0]
    return float(x), float(y)


def _used_points(
    section: SectionFile, walls: tuple[beam_theory.Wall, ...] | tuple[fe_models.Wall, ...]
) -> dict[str, tuple[float, float]]:
    """Points that a side's walls join."""
    used = {name for wall in walls for name in (wall.start, wall.end)}
    return {name: place for name, place in section.points.items() if name in used}
