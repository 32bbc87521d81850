"""Classical theory at its three levels: what each says, and why one says nothing."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass, field

import beam_theory
from crosscheck.comparison import models
from crosscheck.comparison.load_case import LoadCase
from crosscheck.comparison.result import LEVELS
from crosscheck.section_file.model import SectionFile

NOT_HERE = "not available here: "
OUTLINE_ALONE = "no hand method: the section is given by its outline alone"


@dataclass(frozen=True)
class TheoryFlow:
    """Theory's flow of one load at one level, or the reason why there is none."""

    flow: beam_theory.Flow | None
    reason: str | None


@dataclass(frozen=True)
class TheoryStress:
    """Theory's stress of one load at one level, or the reason why there is none."""

    stress: beam_theory.Stress | None
    reason: str | None


@dataclass(frozen=True)
class Levels:
    """Solutions of one section by level.

    Attributes
    ----------
    judged : str
        Level that verdicts judge; it has a solution where the section has walls.
    solutions : mapping of level to beam_theory.Solution
        Those that could be solved.
    refused : mapping of level to str
        Why the others could not.
    """

    judged: str
    solutions: Mapping[str, beam_theory.Solution]
    refused: Mapping[str, str] = field(default_factory=dict)

    @property
    def judged_solution(self) -> beam_theory.Solution | None:
        """Solution of the judged level; None without walls."""
        return self.solutions.get(self.judged)

    @property
    def judged_values(self) -> dict[str, float | None]:
        """Every quantity of the judged level; none without walls."""
        solution = self.judged_solution
        return {} if solution is None else {name: q.value for name, q in solution.quantities.items()}

    def values(self, name: str) -> dict[str, float | None]:
        """A quantity at every level, in its own unit."""
        return {level: self._quantity(level, name).value for level in LEVELS}

    def reasons(self, name: str) -> dict[str, str]:
        """Why a quantity has no value at a level, for those that have none."""
        found = {level: self._quantity(level, name) for level in LEVELS}
        return {
            level: reason_at(level, quantity.reason)
            for level, quantity in found.items()
            if quantity.value is None
        }

    def flows(self, case: LoadCase) -> dict[str, TheoryFlow]:
        """Shear flow of a load at every level."""
        return {level: self._flow(level, case) for level in LEVELS}

    def stresses(self, case: LoadCase) -> dict[str, TheoryStress]:
        """Direct and shear stress of a load at every level."""
        return {level: self._stress(level, case) for level in LEVELS}

    def _quantity(self, level: str, name: str) -> beam_theory.Quantity:
        solution = self.solutions.get(level)
        if solution is None:
            return beam_theory.Quantity(None, self.refused.get(level))
        return solution.quantities.get(name) or beam_theory.Quantity(None, "theory does not define it")

    def _flow(self, level: str, case: LoadCase) -> TheoryFlow:
        solution = self.solutions.get(level)
        if solution is None:
            return TheoryFlow(None, reason_at(level, self.refused.get(level)))
        try:
            return TheoryFlow(solution.flow(models.theory_load(case)), None)
        except beam_theory.TheoryError as undefined:
            # Without a shear centre there is no shear flow for the same reason, said without a load's name.
            reason = solution.quantities["shear_centre_x"].reason or str(undefined)
            return TheoryFlow(None, reason_at(level, reason))

    def _stress(self, level: str, case: LoadCase) -> TheoryStress:
        solution = self.solutions.get(level)
        if solution is None:
            return TheoryStress(None, reason_at(level, self.refused.get(level)))
        try:
            return TheoryStress(beam_theory.stress(solution, models.theory_load(case)), None)
        except beam_theory.TheoryError as undefined:
            return TheoryStress(None, reason_at(level, str(undefined)))


def reason_at(level: str, reason: str | None) -> str:
    """A reason as results give it: of a level beyond the midline it says that the level ends here."""
    text = reason or "theory does not define it"
    return text if level == "midline" or text.startswith((NOT_HERE, OUTLINE_ALONE)) else f"{NOT_HERE}{text}"


def solve_levels(section: SectionFile) -> Levels:
    """Classical theory at every level.

    Raises
    ------
    beam_theory.TheoryError
        Where the midline level or the judged one cannot take the section; others are left out with the
        reason. A section without walls has no level at all.
    """
    if not section.walls:
        return Levels(section.judged, {}, dict.fromkeys(LEVELS, OUTLINE_ALONE))
    return _solved(models.theory_section(section), section.judged, ("midline", section.judged))


def solve_real_walls(section: SectionFile) -> Levels | None:
    """Theory of the walls and booms that FE sees; None where those are theory's own, or theory cannot."""
    model = models.real_section(section)
    if model is None:
        return None
    try:
        return _solved(model, "midline", ("midline",))
    except beam_theory.TheoryError:
        return None


def _solved(model: beam_theory.Section, judged: str, needed: Collection[str]) -> Levels:
    """Every level of a model; those needed must have a solution."""
    solutions: dict[str, beam_theory.Solution] = {}
    refused: dict[str, str] = {}
    for level in LEVELS:
        try:
            solutions[level] = beam_theory.solve(model, level)
        except beam_theory.TheoryError as fault:
            if level in needed:
                raise
            refused[level] = str(fault)
    return Levels(judged, solutions, refused)
