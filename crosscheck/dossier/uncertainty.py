"""The uncertainty budget of the differences: numerical, curves, tolerances re-solved, material, model form.

Both sides take the same part: a tolerance moves both, and what counts for a verdict is how far it moves their
difference. How far it moves the value itself stands beside. Shares are limits and no standard deviations, so
they are added up.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

from crosscheck.comparison.result import QuantityResult, Result, Verdict
from crosscheck.comparison.verdicts import verdict
from crosscheck.dossier.bench import Bench
from crosscheck.section_file.model import SectionFile

CURVES = "bound on the interpolated outline"
AREA_CHECK = "FE: mesh area and second moments against outline"
SOURCES = ("thickness", "dimension", "material")


@dataclass(frozen=True)
class Budget:
    """Uncertainty of one row's difference, over its normaliser [-]; None: nothing is stated to take it from.

    ``moves``: how far each tolerance moves FE's value itself, over the normaliser.
    """

    quantity: str
    load: str | None
    numerical: float
    curves: float
    shares: Mapping[str, float | None]
    poisson: float | None
    moves: Mapping[str, float | None]
    total: float
    verdict: Verdict
    total_verdict: Verdict


@dataclass(frozen=True)
class Uncertainty:
    """Budgets of all judged rows, tolerances as stated, and what could not be re-solved and why."""

    tolerances: Mapping[str, float]
    budgets: tuple[Budget, ...]
    runs: int
    notes: tuple[str, ...]


def uncertainty(
    section: SectionFile, nominal: Result, bench: Bench, tell: Callable[[str], None]
) -> Uncertainty:
    """Re-solve the section at the ends of its tolerances and budget every judged row.

    Parameters
    ----------
    section : SectionFile
        As read.
    nominal : Result
        Its comparison.
    bench : Bench
        Compares.
    tell : callable
        Told in words what is being done.
    """
    tolerances = dict(section.tolerances)
    varied: dict[str, list[list[Result]]] = {}
    notes: list[str] = []
    for source, ways in variations(section, tolerances).items():
        trials = [(each, nominal.accuracy) for way in ways for each in way]
        solved = bench.work(trials, f"uncertainty, {source}", tell)
        fault = next((each for each in solved if isinstance(each, str)), None)
        if fault is None:
            varied[source] = [solved[at : at + 2] for at in range(0, len(solved), 2)]
        else:
            notes.append(f"{source} was not re-solved: {fault}")
    if section.outline is not None:
        notes.append("the solid is given by its outline, which tolerances of the walls do not move")
    budgets = tuple(
        _budget(row, nominal, varied, tolerances) for row in nominal.quantities if row.verdict is not None
    )
    runs = sum(len(way) for ways in varied.values() for way in ways)
    return Uncertainty(tolerances, budgets, runs, tuple(notes))


def variations(
    section: SectionFile, tolerances: Mapping[str, float]
) -> dict[str, tuple[tuple[SectionFile, SectionFile], ...]]:
    """Sections at the lower and upper end of every tolerance, by its name; pairs add up.

    Thickness: all walls together. Dimension: overall width, then overall height, every place moving with
    them. Material: E and G of each material but the base, whose moduli leave e and g of the others.
    """
    found: dict[str, tuple[tuple[SectionFile, SectionFile], ...]] = {}
    if thickness := tolerances.get("thickness"):
        found["thickness"] = ((thickened(section, 1.0 - thickness), thickened(section, 1.0 + thickness)),)
    if dimension := tolerances.get("dimension"):
        xs, ys = zip(*section.points.values(), strict=True)
        pairs = []
        for axis, size in enumerate((max(xs) - min(xs), max(ys) - min(ys))):
            if size > 0.0:
                low, high = ((size + sign * dimension) / size for sign in (-1.0, 1.0))
                pairs.append((_stretched(section, axis, low), _stretched(section, axis, high)))
        found["dimension"] = tuple(pairs)
    share = tolerances.get("material")
    others = [name for name in section.materials if name != section.base_material]
    if share and len(section.materials) > 1:
        found["material"] = tuple(
            (_stiffer(section, name, 1.0 - share), _stiffer(section, name, 1.0 + share)) for name in others
        )
    return found


def thickened(section: SectionFile, factor: float) -> SectionFile:
    """A section with the thickness of all its walls multiplied."""
    walls = (
        replace(wall, thickness=(wall.thickness[0] * factor, wall.thickness[1] * factor))
        for wall in section.walls
    )
    return replace(section, walls=tuple(walls))


def _stretched(section: SectionFile, axis: int, factor: float) -> SectionFile:
    """All places of a section stretched along x (0) or y (1)."""

    def moved(place: tuple[float, float]) -> tuple[float, float]:
        return (place[0] * factor, place[1]) if axis == 0 else (place[0], place[1] * factor)

    walls = (
        wall if wall.arc_through is None else replace(wall, arc_through=moved(wall.arc_through))
        for wall in section.walls
    )
    return replace(
        section, points={name: moved(place) for name, place in section.points.items()}, walls=tuple(walls)
    )


def _stiffer(section: SectionFile, name: str, factor: float) -> SectionFile:
    """One material's moduli multiplied."""
    material = section.materials[name]
    changed = replace(material, E=material.E * factor, G=material.G * factor)
    return replace(section, materials={**section.materials, name: changed})


def _budget(
    row: QuantityResult,
    nominal: Result,
    varied: Mapping[str, list[list[Result]]],
    tolerances: Mapping[str, float],
) -> Budget:
    """Budget of one row."""
    scale = row.normaliser or 1.0
    shares: dict[str, float | None] = {}
    moves: dict[str, float | None] = {}
    for source in SOURCES:
        ways = varied.get(source)
        if ways is None:
            alone = source == "material" and source in tolerances
            # One material: the moduli cancel from the difference, and from the value but for the twist.
            shares[source] = 0.0 if alone else None
            twist = row.name == "rate_of_twist" and row.fe.value is not None
            size = abs(row.fe.value or 0.0) / scale * tolerances.get(source, 0.0) if twist else 0.0
            moves[source] = size if alone else None
            continue
        shares[source] = sum(max(_moved(row, other) for other in way) for way in ways)
        moves[source] = sum(max(_moved_value(row, other) for other in way) for way in ways) / scale
    numerical = row.uncertainty or 0.0
    curves = 0.0
    if row.fe.basis == CURVES:
        curves = next((check.value for check in nominal.checks if check.name == AREA_CHECK), 0.0)
    poisson = None
    if row.fe.with_nu is not None and row.fe.value is not None:
        poisson = abs(row.fe.with_nu - row.fe.value) / scale
    total = numerical + curves + sum(share or 0.0 for share in shares.values()) + (poisson or 0.0)
    difference = row.judged_difference or 0.0
    return Budget(
        row.name,
        row.load,
        numerical,
        curves,
        shares,
        poisson,
        moves,
        total,
        verdict(difference, numerical, row.criterion),
        verdict(difference, total, row.criterion),
    )


def _moved(row: QuantityResult, other: Result) -> float:
    """How far another solution moves the difference of a row [-]."""
    moved = other.quantity(row.name, row.load).judged_difference
    return 0.0 if moved is None else abs(moved - (row.judged_difference or 0.0))


def _moved_value(row: QuantityResult, other: Result) -> float:
    """How far another solution moves FE's value of a row, in its unit."""
    moved = other.quantity(row.name, row.load).fe.value
    return 0.0 if moved is None or row.fe.value is None else abs(moved - row.fe.value)
