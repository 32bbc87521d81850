"""Where the hand method stops holding: the section with all its thicknesses multiplied, solved again."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

from crosscheck.comparison.result import Result
from crosscheck.dossier.bench import Bench
from crosscheck.dossier.uncertainty import thickened
from crosscheck.section_file.model import SectionFile

FACTORS = (0.25, 0.5, 1.0 / math.sqrt(2.0), 1.0, math.sqrt(2.0), 2.0, 2.0 * math.sqrt(2.0), 4.0)


@dataclass(frozen=True)
class Track:
    """Share of its criterion that one quantity uses at every factor [-]; None where it is not compared."""

    quantity: str
    load: str | None
    used: tuple[float | None, ...]


@dataclass(frozen=True)
class Crossing:
    """Where a quantity crosses its criterion: between two factors, and about where between them."""

    quantity: str
    load: str | None
    low: float
    high: float
    about: float
    within_below: bool


@dataclass(frozen=True)
class Holding:
    """Tracks over the factors; ``reasons``: why a factor has no section or no solution (empty: it has)."""

    factors: tuple[float, ...]
    reasons: tuple[str, ...]
    tracks: tuple[Track, ...]
    crossings: tuple[Crossing, ...]


def holding(
    section: SectionFile, nominal: Result, bench: Bench, tell: Callable[[str], None]
) -> Holding | None:
    """Solve the section at every factor; None where its solid is not made of its walls.

    Parameters
    ----------
    section : SectionFile
        As read.
    nominal : Result
        Its comparison, which stands for the factor 1.
    bench : Bench
        Compares.
    tell : callable
        Told in words what is being done.
    """
    if section.outline is not None:
        return None
    others = [factor for factor in FACTORS if factor != 1.0]
    trials = [(thickened(section, factor), nominal.accuracy) for factor in others]
    solved = {1.0: nominal, **dict(zip(others, bench.work(trials, "thicknesses", tell), strict=True))}
    found = [None if isinstance(solved[factor], str) else solved[factor] for factor in FACTORS]
    reasons = [solved[factor] if isinstance(solved[factor], str) else "" for factor in FACTORS]
    judged = [(row.name, row.load) for row in nominal.quantities if row.verdict is not None]
    tracks = tuple(
        Track(name, load, tuple(_used(made, name, load) for made in found)) for name, load in judged
    )
    crossings = tuple(crossing for track in tracks for crossing in crossings_of(track, FACTORS))
    return Holding(FACTORS, tuple(reasons), tracks, crossings)


def _used(result: Result | None, name: str, load: str | None) -> float | None:
    """Share of its criterion that a row uses."""
    return None if result is None else result.quantity(name, load).criterion_used


def crossings_of(track: Track, factors: tuple[float, ...]) -> list[Crossing]:
    """Every pair of neighbouring factors between which a track crosses its criterion."""
    found = []
    pairs = list(zip(factors, track.used, strict=True))
    for (low, before), (high, after) in pairwise(pairs):
        if before is None or after is None or (before <= 1.0) == (after <= 1.0):
            continue
        # Shares go about as a power of the factor, so the place is taken between logarithms.
        a, b = (math.log(max(value, 1e-12)) for value in (before, after))
        about = math.exp(math.log(low) - a / (b - a) * math.log(high / low))
        found.append(Crossing(track.quantity, track.load, low, high, about, before <= 1.0))
    return found
