"""Numbers stated elsewhere (handbook, supplier, stress report) judged against both sides.

A stated value is judged like theory's: its difference from FE over the quantity's own normaliser, with the
FE error, against its own tolerance. Positions are turned into the terms of their datum: coordinates from a
place, or the distance from a wall's midline.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

import numpy as np

from crosscheck.comparison import verdicts
from crosscheck.comparison.named_probes import IN_JOINT
from crosscheck.comparison.panels import line_of
from crosscheck.comparison.quantities import OF_A_LOAD, QUANTITIES, QuantityKind
from crosscheck.comparison.result import LEVELS, FeValue, QuantityResult, StatedJudgement, WallFlow
from crosscheck.section_file.model import Place, SectionFile, StatedSpec

# A stated value this near to a level of theory [share of the normaliser] comes from that method: half a unit
# of the third digit, as handbooks print.
NEAR = 5e-3
# Behind the name of a wall that a position is measured from, whichever line of it the file gives.
ITS_MIDLINE = "its midline"


def judge_stated(
    section: SectionFile, rows: Sequence[QuantityResult], flows: Sequence[WallFlow] = ()
) -> tuple[StatedJudgement, ...]:
    """Judgement of every stated value, in file order.

    Parameters
    ----------
    section : SectionFile
        Stated values, points and walls.
    rows : sequence of QuantityResult
        Every row of the comparison.
    flows : sequence of WallFlow
        Every wall under every load, for flows stated at named probes.
    """
    by_name = {(row.name, row.load): row for row in rows}
    return tuple(_judge(section, stated, by_name, flows) for stated in section.stated)


def _judge(
    section: SectionFile,
    stated: StatedSpec,
    rows: Mapping[tuple[str, str | None], QuantityResult],
    flows: Sequence[WallFlow],
) -> StatedJudgement:
    """Judgement of one stated value."""
    kind = QUANTITIES[stated.quantity]
    row = rows.get((stated.quantity, _load_of(section, stated)))
    if row is None:
        return _unjudged(section, stated, kind, None, "the result has no such quantity for this load")
    if kind.axis is not None and stated.measured_from is not None:
        return _position(section, stated, kind, row, rows)
    if stated.probe is not None:
        return _at_probe(section, stated, kind, row, flows)
    scale = math.degrees(1.0) if row.unit == "rad" else 1.0
    theory = {level: None if value is None else scale * value for level, value in row.theory.items()}
    fe = _scaled(row.fe, scale)
    normaliser = None if row.normaliser is None else scale * row.normaliser
    place = _plain_place(stated, kind, rows)
    return _judgement(section, stated, kind, row, theory, fe, normaliser, None, place)


def _at_probe(
    section: SectionFile,
    stated: StatedSpec,
    kind: QuantityKind,
    row: QuantityResult,
    flows: Sequence[WallFlow],
) -> StatedJudgement:
    """Judgement of a flow at a named probe, over FE's flow there."""
    wall, found = next(
        (wall, probe)
        for wall in flows
        for probe in wall.probes
        if wall.load == row.load and probe.label == stated.probe
    )
    if not found.fe or found.fe_error is None:
        reason = wall.reason or (IN_JOINT if found.fe is None else "FE has no flow there")
        return _unjudged(section, stated, kind, row, reason)
    fe = FeValue(found.fe, found.fe - found.fe_error, found.fe + found.fe_error, "estimate")
    return _judgement(section, stated, kind, row, found.levels, fe, abs(found.fe), None, None)


def _load_of(section: SectionFile, stated: StatedSpec) -> str | None:
    """Load that a stated value belongs to: the file's only one where none is given."""
    if stated.quantity not in OF_A_LOAD:
        return None
    if stated.load is None and len(section.loads) == 1:
        return section.loads[0].name
    return stated.load


def _scaled(fe: FeValue, scale: float) -> FeValue:
    """FE's value in another unit."""
    value, low, high = (None if end is None else scale * end for end in (fe.value, fe.low, fe.high))
    return FeValue(value, low, high, fe.basis, reason=fe.reason)


def _plain_place(
    stated: StatedSpec, kind: QuantityKind, rows: Mapping[tuple[str, str | None], QuantityResult]
) -> Place | None:
    """Where a stated position lies: its own coordinate, and FE's across [L]; None for anything else."""
    if kind.axis is None:
        return None
    other = rows[_partner(kind), None].fe.value
    if other is None:
        return None
    return (stated.value, other) if kind.axis == "right" else (other, stated.value)


def _partner(kind: QuantityKind) -> str:
    """Name of the other coordinate of a position."""
    return f"{kind.name[:-1]}{'y' if kind.axis == 'right' else 'x'}"


def _position(
    section: SectionFile,
    stated: StatedSpec,
    kind: QuantityKind,
    row: QuantityResult,
    rows: Mapping[tuple[str, str | None], QuantityResult],
) -> StatedJudgement:
    """Judgement of a position that is measured from a datum."""
    datum = stated.measured_from
    along = 0 if kind.axis == "right" else 1
    if isinstance(datum, str) and datum not in section.points:
        return _from_wall(section, stated, kind, row, rows)
    if isinstance(datum, str):
        origin, words = section.points[datum], datum
    else:
        assert datum is not None
        origin, words = datum, f"({datum[0]:g}, {datum[1]:g})"
    shift = origin[along]
    theory = {level: None if value is None else value - shift for level, value in row.theory.items()}
    fe = row.fe
    if fe.value is not None and fe.low is not None and fe.high is not None:
        fe = FeValue(fe.value - shift, fe.low - shift, fe.high - shift, fe.basis)
    other = rows[_partner(kind), None].fe.value
    place = None
    if other is not None:
        own = stated.value + shift
        place = (own, other) if along == 0 else (other, own)
    return _judgement(section, stated, kind, row, theory, fe, row.normaliser, words, place)


def _from_wall(
    section: SectionFile,
    stated: StatedSpec,
    kind: QuantityKind,
    row: QuantityResult,
    rows: Mapping[tuple[str, str | None], QuantityResult],
) -> StatedJudgement:
    """Judgement of a distance from a wall's midline, either side; negative: on the left (x), below (y)."""
    assert isinstance(stated.measured_from, str)
    wall = section.wall(stated.measured_from)
    line = line_of(section, wall)
    if line.arc_through is not None:
        reason = f"wall {wall.name} is curved: a distance is measured from a straight wall, or from a point"
        return _unjudged(section, stated, kind, row, reason)
    normal = line.left_normals(np.array([0.5]))[0]
    along = 0 if kind.axis == "right" else 1
    if abs(normal[along]) < 1e-9:
        axis = "x" if along == 0 else "y"
        reason = f"wall {wall.name} runs along {axis}: no {axis} can be measured from its midline"
        return _unjudged(section, stated, kind, row, reason)
    # Positive to the right, or up.
    normal = normal * math.copysign(1.0, normal[along])
    first, second = rows[_partner(kind), None], row
    pair = (second, first) if along == 0 else (first, second)

    def distance(values: Sequence[float | None]) -> float | None:
        if values[0] is None or values[1] is None:
            return None
        return float(normal @ (np.array(values, dtype=float) - np.array(line.start)))

    centre = distance([entry.fe.value for entry in pair])
    side = math.copysign(1.0, centre or 1.0) if stated.value >= 0.0 else 1.0

    def own_terms(values: Sequence[float | None]) -> float | None:
        found = distance(values)
        return None if found is None else side * found

    theory = {level: own_terms([entry.theory.get(level) for entry in pair]) for level in LEVELS}
    half = sum(abs(n) * (entry.fe.half_width or 0.0) for n, entry in zip(normal, pair, strict=True))
    fe, place = FeValue(None, None, None, row.fe.basis, reason=row.fe.reason), None
    if centre is not None:
        value = side * centre
        basis = next((e.fe.basis for e in pair if e.fe.basis == "estimate"), row.fe.basis)
        fe = FeValue(value, value - half, value + half, basis)
        x, y = (entry.fe.value or 0.0 for entry in pair)
        move = side * stated.value - centre
        place = (float(x + move * normal[0]), float(y + move * normal[1]))
    words = f"{wall.name} ({ITS_MIDLINE})"
    return _judgement(section, stated, kind, row, theory, fe, row.normaliser, words, place)


def _tolerance(stated: StatedSpec, row: QuantityResult | None, kind: QuantityKind) -> tuple[float, str]:
    """Tolerance of a stated value [-], and where it comes from."""
    if stated.tolerance is not None:
        return stated.tolerance, "stated"
    return (kind.default_criterion, "default") if row is None else (row.criterion, row.criterion_source)


def _judgement(
    section: SectionFile,
    stated: StatedSpec,
    kind: QuantityKind,
    row: QuantityResult,
    theory: Mapping[str, float | None],
    fe: FeValue,
    normaliser: float | None,
    datum: str | None,
    place: Place | None,
) -> StatedJudgement:
    """Judgement of a value in the terms of its statement."""
    half = fe.half_width
    if fe.value is None or half is None or not normaliser:
        return _unjudged(section, stated, kind, row, row.reason or fe.reason or "FE gives no value")
    tolerance, source = _tolerance(stated, row, kind)
    difference = _difference(kind, stated.value, fe.value, normaliser)
    gaps = {
        level: _difference(kind, stated.value, value, normaliser)
        for level, value in theory.items()
        if value is not None
    }
    held = stated.level or min(gaps, key=lambda level: abs(gaps[level]), default=None)
    of_theory = None if held is None else gaps.get(held)
    uncertainty = half / normaliser
    return StatedJudgement(
        quantity=stated.quantity,
        symbol=kind.symbol,
        unit="deg" if row.unit == "rad" else row.unit,
        load=row.load,
        value=stated.value,
        source=stated.source,
        measured_from=datum,
        theory=theory,
        fe=fe,
        normaliser=normaliser,
        uncertainty=uncertainty,
        difference_fe=difference,
        difference_theory=of_theory,
        level=held,
        near=tuple(level for level in LEVELS if level in gaps and abs(gaps[level]) <= NEAR),
        tolerance=tolerance,
        tolerance_source=source,
        verdict=verdicts.verdict(difference, uncertainty, tolerance),
        theory_verdict=None if of_theory is None else verdicts.verdict(of_theory, 0.0, tolerance),
        effect=verdicts.effect(kind, stated.value, fe.value, difference, uncertainty),
        reason=None,
        place=place,
        probe=stated.probe,
    )


def _difference(kind: QuantityKind, value: float, known: float, normaliser: float) -> float:
    """Stated minus known over the normaliser, both in the terms of the statement."""
    if kind.normaliser == "angle":
        turn = verdicts.angle_between(math.radians(value), math.radians(known))
        return math.degrees(turn) / normaliser
    return (value - known) / normaliser


def _unjudged(
    section: SectionFile, stated: StatedSpec, kind: QuantityKind, row: QuantityResult | None, reason: str
) -> StatedJudgement:
    """A stated value that nothing can be said about, and why."""
    tolerance, source = _tolerance(stated, row, kind)
    datum = stated.measured_from
    return StatedJudgement(
        quantity=stated.quantity,
        symbol=kind.symbol,
        unit="" if row is None else "deg" if row.unit == "rad" else row.unit,
        load=stated.load if row is None else row.load,
        value=stated.value,
        source=stated.source,
        measured_from=datum if datum is None or isinstance(datum, str) else f"({datum[0]:g}, {datum[1]:g})",
        theory=dict.fromkeys(LEVELS),
        fe=FeValue(None, None, None, "estimate", reason=reason),
        normaliser=None,
        uncertainty=None,
        difference_fe=None,
        difference_theory=None,
        level=stated.level,
        near=(),
        tolerance=tolerance,
        tolerance_source=source,
        verdict=None,
        theory_verdict=None,
        effect=None,
        reason=reason,
        place=None,
        probe=stated.probe,
    )
