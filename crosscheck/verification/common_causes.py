"""What both sides share: faults and assumptions that their agreement says nothing about."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class CommonCause:
    """name, text: what is shared. shows: how it would show, or by what it is watched."""

    name: str
    text: str
    shows: str


COMMON_CAUSES: tuple[CommonCause, ...] = (
    CommonCause(
        "section file",
        "Both models are built from one file: a wrong coordinate, thickness, unit or material is "
        "wrong on both sides alike.",
        "The picture both_sides and the overall dimensions; stated values from another source; a "
        "case entered twice, from its drawing as an outline and from its midline.",
    ),
    CommonCause(
        "reader",
        "One reader works out parameters, smooth paths, faces, mirrors and tables for both sides.",
        "Its own tests against numbers by hand; reference rows whose section is simple enough to "
        "be checked by eye.",
    ),
    CommonCause(
        "prismatic beam",
        "Sections do not change along the beam; no taper, no cut-outs, no ends.",
        "Not in any number here: by a model of the whole part or a test.",
    ),
    CommonCause(
        "linear elasticity",
        "Small strains, linear isotropic materials, each wall of one material.",
        "Stresses beyond the material's limit; laminates and orthotropic sheet are outside the "
        "domain of use.",
    ),
    CommonCause(
        "undistorted cross-section",
        "The section keeps its shape: no distortion, no bending of walls across their thickness, "
        "no crushing under local loads.",
        "Boxes without frames and thin lips: by a shell model or a distortional calculation.",
    ),
    CommonCause(
        "no buckling",
        "Walls stay flat under compression and shear.",
        "By the stability rules of the applicable code; effective widths are not in either side.",
    ),
    CommonCause(
        "Saint-Venant torsion and flexure",
        "Warping is free and shear does not vary along the beam: no restrained warping beyond the "
        "warping constant itself, no shear lag.",
        "Over the characteristic length sqrt(E I_w/(G J)) from a restraint; wide flanges of short beams.",
    ),
    CommonCause(
        "shear at nu = 0",
        "The comparison takes Poisson's ratio as zero on the finite-element side, as theory does.",
        "The values with nu beside the comparison; they move the shear centre of stout sections most.",
    ),
    CommonCause(
        "point booms and bonded joints",
        "Walls and booms are joined without slip; fasteners, gaps and eccentric laps are not modelled.",
        "By the joint's own calculation from the flows at the probes.",
    ),
    CommonCause(
        "loads and their axes",
        "One reading of signs, of the line of action and of moments serves both sides.",
        "The load arrows in the picture of the section, and the resultants on the hand sheet.",
    ),
    CommonCause(
        "textbook formulas",
        "The reference rows of some quantities come from the same literature that both sides were "
        "written from.",
        "Rows that are exact or were read in full beside those that are recalled; the network of "
        "wall stiffnesses and the general-purpose finite-element library of the tests.",
    ),
    CommonCause(
        "numerical libraries",
        "Both sides use the same array and linear-algebra libraries and the same machine arithmetic.",
        "Residuals and balances that each side checks on every solve; the suite run on the user's machine.",
    ),
)
