"""The levels of theory and the one entry that solves a section at any of them."""

from __future__ import annotations

from dataclasses import replace

from beam_theory.corrected import corrected
from beam_theory.errors import LoadError
from beam_theory.faces import face_quantities
from beam_theory.lumped import lumped
from beam_theory.midline import midline
from beam_theory.section import Section
from beam_theory.solution import Solution, frozen

__all__ = ["LEVELS", "solve"]

LEVELS = ("midline", "corrected", "lumped")


def solve(section: Section, level: str = "midline", parts: int = 1) -> Solution:
    """Solve a section by classical thin-walled theory.

    Parameters
    ----------
    section : Section
    level : str
        One of LEVELS.
    parts : int
        Level "lumped" only: parts of each wall that booms are made from.

    Returns
    -------
    Solution
        Lengths in the unit of the points [L]; moduli are ratios [-].

    Raises
    ------
    SectionError
        With every fault of the section.
    LoadError
        For an unknown level or number of parts.
    """
    if level not in LEVELS:
        raise LoadError(f"level: one of {LEVELS}, got {level!r}")
    solution: Solution
    if level == "midline":
        solution = midline(section)
    elif level == "corrected":
        solution = corrected(section)
    else:
        solution = lumped(section, parts)
    return replace(solution, quantities=frozen({**solution.quantities, **face_quantities(solution)}))
