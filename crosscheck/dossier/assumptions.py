"""The register of assumptions: does each apply here, on what evidence, what if violated."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass

from crosscheck.comparison.quantities import unit_text
from crosscheck.comparison.result import Result
from crosscheck.dossier.convergence import Convergence
from crosscheck.dossier.texts import plain_unit
from crosscheck.reports.wording import name_of, number_text, percent_text
from crosscheck.section_file.model import SectionFile

# Plate coefficients of a long wall under even compression, both edges held or one free (common practice).
HELD, FREE = 4.0, 0.425
# A wall shorter than this many thicknesses is hardly thin (common practice).
THIN = 10.0


@dataclass(frozen=True)
class Assumption:
    """One assumption of both sides: ``applies`` in a word or two, the rest in a sentence each."""

    name: str
    applies: str
    evidence: str
    effect: str


def register(section: SectionFile, result: Result, convergence: Convergence) -> tuple[Assumption, ...]:
    """All assumptions with what this section says about them."""
    return (*_of_the_part(section, result), *_of_the_model(section, result, convergence))


def _of_the_part(section: SectionFile, result: Result) -> Iterator[Assumption]:
    """Assumptions that the part must keep."""
    yield Assumption(
        "Prismatic",
        "assumed",
        "The file describes one section; whether it stays the same along the beam is for the drawing.",
        "In a tapered beam the inclined walls carry part of the shear: flows are wrong in either sense.",
    )
    yield Assumption(
        "Linear elastic, small displacements",
        "assumed",
        "Only moduli enter; compare the largest stresses of this dossier with the limit of proportionality.",
        "Beyond it stress is redistributed; stiffness is lower than stated.",
    )
    yield Assumption(
        "Undistorted cross-section",
        "assumed",
        "No frame or diaphragm is in the model.",
        "Without frames close enough a section distorts: stiffness in torsion is overstated, and "
        "distortional stress is missing.",
    )
    yield _warping(result)
    yield Assumption(
        "No shear lag",
        "assumed",
        f"{_widest(section)} Compare with the span and the distance to the load introduction.",
        "Direct stress concentrates near the webs: its peak is understated and bending stiffness overstated.",
    )
    yield from _gross(section, result)
    yield _attachment(section)
    yield Assumption(
        "No local load introduction",
        "assumed",
        "Loads are resultants on the section.",
        "Near a concentrated load or a support local bending of the walls comes on top.",
    )
    if len(section.materials) > 1:
        names = ", ".join(section.materials)
        yield Assumption(
            "Materials bonded along their joints",
            "applies",
            f"Materials of the file: {names}.",
            "Slip between them lowers stiffness; flows of the joint are then those of the fasteners.",
        )


def _warping(result: Result) -> Assumption:
    row = next((row for row in result.indicators if row.name == "characteristic_length"), None)
    if row is None or row.fe.value is None:
        evidence = "No characteristic length: " + ((row.fe.reason if row else None) or "no warping constant.")
    else:
        evidence = (
            f"Characteristic length sqrt(E I_w/(G J)) = {number_text(row.fe.value, 3)} {row.unit}. A span of "
            "many times this length, loaded away from its held ends, twists freely over most of it."
        )
    return Assumption(
        "Unrestrained warping",
        "assumed",
        evidence,
        "Where warping is held, direct stress by bimoment appears and twist is less: within about this "
        "length stress is understated.",
    )


def _widest(section: SectionFile) -> str:
    if not section.walls:
        return "The solid is given by its outline and has no named walls."
    wall, length = max(_lengths(section).items(), key=lambda item: item[1])
    return f"Widest wall: {wall}, {number_text(length, 4)} {section.length_unit}."


def _lengths(section: SectionFile) -> dict[str, float]:
    """Chord of every wall [L]."""
    return {
        wall.name: math.dist(section.points[wall.start], section.points[wall.end]) for wall in section.walls
    }


def _gross(section: SectionFile, result: Result) -> Iterator[Assumption]:
    """Gross section: slenderest walls and, with a material, their lowest elastic plate stress."""
    ends = Counter(point for wall in section.walls for point in (wall.start, wall.end))
    lengths = _lengths(section)
    flat = [wall for wall in section.walls if wall.arc_through is None]
    if not flat:
        evidence = "The file has no flat wall."
    else:
        found = []
        for wall in flat:
            free = ends[wall.start] == 1 or ends[wall.end] == 1
            thin = min(wall.thickness)
            ratio = lengths[wall.name] / thin
            found.append((ratio / math.sqrt(FREE if free else HELD), ratio, wall, free))
        _, ratio, wall, free = max(found, key=lambda entry: entry[0])
        kind = "one edge free" if free else "both edges held"
        evidence = (
            f"Most slender flat wall: {wall.name}, width over thickness {number_text(ratio, 3)}, {kind}"
        )
        material = section.materials.get(wall.material or section.base_material or "")
        if material is None and len(section.materials) == 1:
            material = next(iter(section.materials.values()))
        if material is not None:
            k = FREE if free else HELD
            stress = k * math.pi**2 * material.E / (12.0 * (1.0 - material.nu**2)) / ratio**2
            unit = plain_unit(unit_text(-2, 1, result.length_unit, result.force_unit))
            evidence += (
                f"; elastic plate stress in even compression {number_text(stress, 3)} {unit} (k = "
                f"{k:g}, simply supported edges, common practice; an indicator, no buckling check)"
            )
        evidence += "."
    yield Assumption(
        "Gross section, no buckling, no holes",
        "assumed",
        evidence,
        "A buckled wall sheds load to its edges: stress there, and deflection, are understated.",
    )


def _attachment(section: SectionFile) -> Assumption:
    pitched = [probe.label for probe in section.probes if getattr(probe, "pitch", None) is not None]
    labels = [probe.label for probe in section.probes]
    if pitched:
        evidence = f"Fastener pitch is given at: {', '.join(pitched)}."
    elif labels:
        evidence = f"Named places on walls: {', '.join(labels)}; no pitch is given."
    else:
        evidence = "No joint of fasteners is named in the file."
    return Assumption(
        "Continuous attachment",
        "assumed",
        evidence,
        "Slip and gaps between fasteners lower stiffness in torsion, of closed cells above all.",
    )


def _of_the_model(section: SectionFile, result: Result, convergence: Convergence) -> Iterator[Assumption]:
    """Assumptions of theory or FE that this section shows to matter or not."""
    if any(wall.seen_by != "fe" for wall in section.walls):
        yield _thin(section)
    yield _poisson(result)
    yield from _idealised(section)
    yield _corners(convergence)


def _thin(section: SectionFile) -> Assumption:
    lengths = _lengths(section)
    seen = [wall for wall in section.walls if wall.seen_by != "fe"]
    wall = min(seen, key=lambda wall: lengths[wall.name] / max(wall.thickness))
    ratio = lengths[wall.name] / max(wall.thickness)
    return Assumption(
        "Thin walls (theory)",
        "holds" if ratio >= THIN else "stout wall",
        f"Least length over thickness of the walls that theory sees: {wall.name}, {number_text(ratio, 3)}. "
        "FE has no such assumption, so its effect is in every difference of this dossier.",
        "Own thickness, corners and ends count: torsion constant and positions are off.",
    )


def _idealised(section: SectionFile) -> Iterator[Assumption]:
    """Idealisations that the file makes."""
    booms = [boom for boom in section.booms if boom.seen_by != "fe"]
    skins = [wall for wall in section.walls if wall.seen_by != "fe" and wall.share_in_theory < 1.0]
    if booms or skins:
        alike = all(boom.seen_by == "both" for boom in booms) and all(
            wall.seen_by == "both" and wall.share_in_theory == wall.direct_share for wall in skins
        )
        yield Assumption(
            "Booms and shear-only skins (theory)",
            "applies",
            f"{len(booms)} booms, {len(skins)} walls that carry less than their full direct stress.",
            "Both sides take the same idealisation: its error against the real part is in neither."
            if alike
            else "FE sees other walls, shares or booms: as far as those are the part's own, the error of the "
            "idealisation is in the differences.",
        )
    one_sided = [wall.name for wall in section.walls if wall.seen_by != "both"]
    if one_sided:
        yield Assumption(
            "Walls seen by one side only",
            "applies",
            f"{', '.join(one_sided[:6])}{' and more' if len(one_sided) > 6 else ''}.",
            "Differences then include the idealisation of the part, as intended.",
        )


def _corners(convergence: Convergence) -> Assumption:
    """Sharp re-entrant corners."""
    if convergence.corner_angle is None:
        applies, evidence = "no sharp corner", "No re-entrant corner of the outline is sharp."
    else:
        applies = "applies"
        evidence = (
            f"Sharpest re-entrant corner: {math.degrees(convergence.corner_angle):.0f} degrees of solid."
        )
    return Assumption(
        "No peak stress at sharp re-entrant corners",
        applies,
        evidence,
        "Stress there grows without limit in the model; the real radius decides, and a fillet has to "
        "be drawn.",
    )


def _poisson(result: Result) -> Assumption:
    """Poisson's ratio, with the row it moves most."""
    found = [
        (abs(row.fe.with_nu - row.fe.value) / row.normaliser, row)
        for row in result.quantities
        if row.fe.with_nu is not None and row.fe.value is not None and row.normaliser
    ]
    if not found:
        applies, evidence = (
            "assumed",
            "FE with the materials' Poisson's ratio is not available for this section.",
        )
    else:
        most, row = max(found, key=lambda entry: entry[0])
        applies = "holds" if most < row.criterion / 10.0 else "counts"
        evidence = (
            f"With the material's own ratio FE changes most in {name_of(row)}: {percent_text(most)} of its "
            "normaliser."
        )
    return Assumption(
        "Poisson's ratio zero in flexure (theory)",
        applies,
        evidence,
        "Anticlastic bending shifts the shear centre and shear areas of stout sections.",
    )
