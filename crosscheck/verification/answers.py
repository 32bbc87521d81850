"""What each side says to a row: names of the row's quantity looked up on theory or on finite elements."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

import beam_theory
import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.load_case import UNIT_CASES, LoadCase
from crosscheck.faults import CrosscheckError
from crosscheck.section_file.arithmetic import evaluate, names_in
from crosscheck.section_file.model import MIDLINE_SHEAR_CENTRE, SectionFile
from crosscheck.verification.reference import ReferenceRow

FACES = ("left", "right")


class NoAnswer(CrosscheckError):
    """A side has no value for what a row asks, with the reason."""


@dataclass(frozen=True)
class Answer:
    """A side's number with half its interval [the row's unit]; basis as in the FE side's intervals."""

    value: float
    half: float = 0.0
    basis: str = "exact"


Lookup = Callable[[str, ReferenceRow], Answer]


class Answers:
    """Both sides of one section, each solved when first asked."""

    def __init__(self, section: SectionFile, accuracy: float) -> None:
        self.section = section
        self.accuracy = accuracy
        self._levels: dict[str, beam_theory.Solution] = {}
        self._fe: fe_models.Solution | None = None

    def theory(self, level: str = "midline") -> beam_theory.Solution:
        """Classical theory at a level."""
        if level not in self._levels:
            self._levels[level] = beam_theory.solve(models.theory_section(self.section), level)
        return self._levels[level]

    def fe(self) -> fe_models.Solution:
        """The finite-element solution, of the outline where the file gives one."""
        if self._fe is None:
            self._fe = models.fe_solution(self.section, self.accuracy)
        return self._fe

    def of(self, row: ReferenceRow, side: str) -> Answer:
        """The row's quantity on one side.

        Raises
        ------
        NoAnswer
            Where the side does not define it.
        """
        lookup: Lookup = self._theory_value if side == "theory" else self._fe_value
        found = {
            name: lookup(name, row) for name in names_in(row.quantity) if name not in self.section.parameters
        }
        values = {name: answer.value for name, answer in found.items()}
        parameters = dict(self.section.parameters)
        value = evaluate(row.quantity, {**parameters, **values})
        half, basis = 0.0, "exact"
        for name, answer in found.items():
            if answer.half > 0.0:
                ends = [
                    evaluate(row.quantity, {**parameters, **values, name: answer.value + step})
                    for step in (-answer.half, answer.half)
                ]
                half += 0.5 * abs(ends[1] - ends[0])
            if answer.basis != "exact":
                basis = answer.basis
        return Answer(value, half, basis)

    # -- theory

    def _theory_value(self, name: str, row: ReferenceRow) -> Answer:
        solution = self.theory(row.level)
        try:
            return Answer(self._theory_number(solution, name, row))
        except beam_theory.UndefinedQuantity as undefined:
            raise NoAnswer(f"theory: {undefined}") from undefined

    def _theory_number(self, solution: beam_theory.Solution, name: str, row: ReferenceRow) -> float:
        if name in solution.quantities:
            return solution.require(name)
        at = np.array([row.at])
        if name == "cell_area":
            return float(solution.cell_areas[0])
        if name == "warping_function":
            return float(solution.warping_at(self._wall(row), at)[0])
        load = models.theory_load(self.case(row))
        solution = solution.for_load(load)
        if name == "flow":
            return float(solution.flow(load).at(self._wall(row), at)[0])
        if name == "peak_flow":
            return float(solution.flow(load).peak().flow)
        if name == "rate_of_twist":
            return solution.flow(load).twist / (models.shear_modulus(self.section) or 1.0)
        if name in ("direct_stress", "shear_stress"):
            found = beam_theory.stress(solution, load)
            along = found.direct if name == "direct_stress" else found.shear
            return float(along(self._wall(row), at)[0, self._face(row)])
        raise NoAnswer(f"theory has no {name}")

    # -- finite elements

    def _fe_value(self, name: str, row: ReferenceRow) -> Answer:
        fe = self.fe()
        if name in fe.quantities:
            interval = fe.quantities[name]
            if interval.value is None:
                raise NoAnswer(f"FE: {interval.reason}")
            if row.nu and interval.with_nu is not None:
                return Answer(interval.with_nu, 0.0, "estimate")
            return Answer(interval.value, interval.half_width, interval.basis)
        kind, _, axis = name.rpartition("_")
        if kind in ("mean_coefficient", "energy_coefficient"):
            if fe.poisson is None:
                raise NoAnswer("FE: no Poisson's ratio that all walls share")
            return Answer(float(getattr(fe.poisson, kind)["xy".index(axis)]), 0.0, "estimate")
        if name == "rate_of_twist":
            return self._twist(row)
        actions = self._actions(row)
        if name == "flow":
            unit = fe.flow_at(self._wall(row), [row.at])
            weights = np.array([*actions.shear, actions.torque])
            half = float(np.abs(weights) @ unit.errors[:, 0])
            return Answer(float(weights @ unit.values[:, 0]), half, "estimate")
        if name in ("direct_stress", "shear_stress"):
            faces = fe.face_stress(self._wall(row), [row.at], actions)
            on = self._face(row)
            if name == "direct_stress":
                return Answer(float(faces.direct[on, 0]), 0.0, "estimate")
            return Answer(float(faces.shear[on, 0]), float(faces.error[on, 0]), "estimate")
        if name == "fillet_stress":
            peaks = fe.boundary_peaks(actions)
            if not peaks:
                raise NoAnswer("FE: no filleted or curved boundary")
            return Answer(peaks[0].value, peaks[0].error, "estimate")
        if name in ("stress", "stress_x", "stress_y"):
            if row.point is None:
                raise NoAnswer(f"{name} needs point = [x, y]")
            found = fe.stress_at([row.point], actions, with_nu=row.nu)
            value = {"stress": found.magnitude[0], "stress_x": found.shear[0, 0]}.get(name, found.shear[0, 1])
            return Answer(float(value), float(found.error[0]), "estimate")
        raise NoAnswer(f"FE has no {name}")

    def _twist(self, row: ReferenceRow) -> Answer:
        torsion = self.fe().quantities["torsion_constant"]
        modulus = models.shear_modulus(self.section) or 1.0
        value = self._actions(row).torque / (modulus * torsion.known)
        return Answer(value, abs(value) * torsion.half_width / torsion.known, torsion.basis)

    def _actions(self, row: ReferenceRow) -> fe_models.Actions:
        """The load as resultants about FE's own shear centre."""
        case = self.case(row)
        torque = case.torque
        if case.through is not None:
            x, y = self.fe().shear_centre
            torque += (case.through[0] - x) * case.shear[1] - (case.through[1] - y) * case.shear[0]
        return fe_models.Actions(case.shear, float(torque), case.axial, case.moment, case.bimoment)

    # -- both

    def case(self, row: ReferenceRow) -> LoadCase:
        """The row's load with its line of action in coordinates."""
        for unit in UNIT_CASES:
            if unit.name == row.load:
                return unit
        for load in self.section.loads:
            if load.name == row.load:
                centre = None
                if load.through == MIDLINE_SHEAR_CENTRE:
                    middle = self.theory()
                    centre = (middle.require("shear_centre_x"), middle.require("shear_centre_y"))
                return models.load_case(load, centre)
        raise NoAnswer(f"the section file has no load {row.load!r}")

    def _wall(self, row: ReferenceRow) -> str:
        if row.wall is None:
            raise NoAnswer(f"{row.quantity} needs a wall")
        return row.wall

    def _face(self, row: ReferenceRow) -> int:
        return FACES.index(row.face or "left")


def spread(answer: Answer) -> str:
    """An answer in words: the number and half its interval."""
    if answer.half == 0.0 or math.isnan(answer.half):
        return f"{answer.value:.9g}"
    mark = "~" if answer.basis == "estimate" else "+-"
    return f"{answer.value:.9g} {mark}{answer.half:.1e}"
