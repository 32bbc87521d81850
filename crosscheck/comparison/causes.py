"""Where a difference comes from: steps between the midline theory and the solid, one assumption at a time.

    midline [-> midline theory of the real walls, where the file gives each side its own]
            -> own thickness, free ends and joints -> bends and fillets by theory -> FE as drawn, nu = 0
            -> FE of the given outline, nu = 0, where the file gives one beside its walls

Where theory has no corrected value the corners' share is FE's: midline -> FE with sharp corners -> FE as
drawn. FE with sharp corners after theory's bends would only put back what they took away.
The steps of a quantity add up to its difference. The order is fixed, and the split depends on it. A step that
cannot be made is merged into the next one, which says so. Poisson's ratio stands beside.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

import beam_theory
import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.levels import Levels
from crosscheck.comparison.result import CauseStep, QuantityResult
from crosscheck.section_file.model import SectionFile

MODELS = "theory's idealised model in place of the real walls"
OWN_THICKNESS = "own thickness, free ends and joints, published"
BENDS = "bends and fillets, by theory"
SOLID = "FE in place of theory"
SHARP = "FE in place of theory, corners sharp"
GIVEN = "FE of the given outline in place of theory"
ROUNDING = "FE as drawn, corners rounded"
TRACED = "the given outline in place of the walls' own solid"
UNDRAWN = "includes what the walls' own solid would show: it cannot be built"
MERGED = "includes what the level corrected would show: {reason}"
NU = "with the material's nu FE would change by {change:+.2g} %"


@dataclass(frozen=True)
class Stations:
    """What every step starts and ends at.

    Parameters
    ----------
    midline, corrected : mapping of name to beam_theory.Quantity
        Theory without and with its corrections.
    unrounded : mapping of name to beam_theory.Quantity, optional
        Level corrected with sharp corners; None where the section has no rounding.
    sharp : mapping of name to fe_models.Interval, optional
        FE with sharp corners; None where no quantity needs it or the sharp solid cannot be built.
    drawn : mapping of name to fe_models.Interval
        FE as drawn; of the walls' own solid where the file gives an outline beside them.
    given : mapping of name to fe_models.Interval, optional
        FE of the outline that the file gives; None where FE takes the walls.
    built : bool
        False where an outline is given and the walls' own solid cannot be built: ``drawn`` is the given one.
    ideal : mapping of name to beam_theory.Quantity, optional
        Midline theory of its own model where FE sees another; all of the above is then of FE's walls.
    """

    midline: Mapping[str, beam_theory.Quantity]
    corrected: Mapping[str, beam_theory.Quantity]
    unrounded: Mapping[str, beam_theory.Quantity] | None
    sharp: Mapping[str, fe_models.Interval] | None
    drawn: Mapping[str, fe_models.Interval]
    given: Mapping[str, fe_models.Interval] | None = None
    built: bool = True
    ideal: Mapping[str, beam_theory.Quantity] | None = None


def stations(
    section: SectionFile,
    solved: Mapping[str, beam_theory.Solution],
    fe: fe_models.Solution,
    accuracy: float,
    real: Levels | None = None,
) -> Stations:
    """Solve what the breakdown needs beside the levels and the FE solution at hand.

    ``real``: theory of the walls that FE sees, where those are others than theory's.
    """
    if not solved:
        return Stations({}, {}, None, None, fe.quantities)
    theory, ideal = models.theory_section(section), None
    if real is not None:
        ideal, solved = solved["midline"].quantities, real.solutions
        theory = models.real_section(section) or theory
    midline = solved["midline"].quantities
    corrected = solved["corrected"].quantities if "corrected" in solved else {}
    unrounded, sharp = None, None
    if theory.corners and corrected:
        unrounded = beam_theory.solve(replace(theory, corners=()), level="corrected").quantities
    solid, drawn = models.fe_section(section), fe.quantities
    built = bool(solid.walls)
    given = None if section.outline is None else fe.quantities
    if given is not None and built:
        try:
            drawn = fe_models.solve(solid, accuracy).quantities
        except fe_models.OutlineError:
            built = False
    # Theory's own bends make the step of the corners wherever its corrected level has a value.
    lacking = any(value.value is not None and _missing(corrected, name) for name, value in midline.items())
    if solid.corners and built and lacking:
        try:
            sharp = fe_models.solve(replace(solid, corners={}), accuracy).quantities
        except fe_models.OutlineError:
            sharp = None
    return Stations(midline, corrected, unrounded, sharp, drawn, given, built, ideal)


def causes(at: Stations, rows: Sequence[QuantityResult]) -> tuple[CauseStep, ...]:
    """Steps of every quantity of the section that both sides define, in the order of the rows."""
    return tuple(step for row in rows if row.load is None for step in _steps(at, row))


def _steps(at: Stations, row: QuantityResult) -> Iterator[CauseStep]:
    """Steps of one quantity; none where a side has no value."""
    start = at.midline.get(row.name)
    end = at.drawn.get(row.name)
    if start is None or start.value is None or end is None or end.value is None or not row.normaliser:
        return
    scale = row.normaliser
    value, note = start.value, None
    ideal = None if at.ideal is None else at.ideal[row.name].value
    if ideal is not None:
        yield CauseStep(row.name, None, MODELS, (ideal - value) / scale, 0.0)
    better = at.corrected.get(row.name)
    if better is None or better.value is None:
        reason = "no such level" if better is None else better.reason
        note = MERGED.format(reason=reason)
    else:
        plain = None if at.unrounded is None else at.unrounded[row.name].value
        if at.unrounded is not None and plain is not None:
            yield CauseStep(row.name, None, OWN_THICKNESS, (value - plain) / scale, 0.0)
            yield CauseStep(row.name, None, BENDS, (plain - better.value) / scale, 0.0)
        else:
            yield CauseStep(row.name, None, OWN_THICKNESS, (value - better.value) / scale, 0.0)
        value = better.value
    last = end if at.given is None or not at.built else at.given.get(row.name, end)
    beside = None
    if last.with_nu is not None and last.value is not None:
        beside = NU.format(change=100.0 * (last.with_nu - last.value) / scale)
    traced = last is not end and last.value is not None
    own = None if traced else beside
    sharp = at.sharp.get(row.name) if at.sharp is not None and _missing(at.corrected, row.name) else None
    if sharp is None or sharp.value is None:
        step, merged = (SOLID, None) if at.built else (GIVEN, UNDRAWN)
        change, doubt = (value - end.value) / scale, end.half_width / scale
        yield CauseStep(row.name, None, step, change, doubt, _both(note, merged, own))
    else:
        yield CauseStep(row.name, None, SHARP, (value - sharp.value) / scale, sharp.half_width / scale, note)
        doubt = (sharp.half_width + end.half_width) / scale
        yield CauseStep(row.name, None, ROUNDING, (sharp.value - end.value) / scale, doubt, own)
    if traced and last.value is not None:
        doubt = (end.half_width + last.half_width) / scale
        yield CauseStep(row.name, None, TRACED, (end.value - last.value) / scale, doubt, beside)


def _missing(level: Mapping[str, beam_theory.Quantity], name: str) -> bool:
    """Whether a level of theory has no value of a quantity."""
    found = level.get(name)
    return found is None or found.value is None


def _both(*notes: str | None) -> str | None:
    """Notes that are there, in one line."""
    return "; ".join(note for note in notes if note) or None
