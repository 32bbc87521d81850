"""Where a difference crosses a criterion: brackets with a definite verdict at both ends, and their narrowing.

The size of a difference has a kink where the difference changes sign, so the roots sought are those of d - c
and of d + c, d the difference and c the criterion. A sample is definite where its verdict does not hang on
the FE error: then the exact difference crosses between two definite samples of opposite verdict, whatever the
error in between (given that it is continuous and FE's interval holds).
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import groupby, pairwise

# A bracket is narrowed to this share of the scanned range, or to what the FE error allows.
FINEST = 1e-7
# Distance of the ends from the estimate over what the FE error alone makes of it.
CLEAR = 1.5


@dataclass(frozen=True)
class Sample:
    """One member: value of the parameter, difference and uncertainty [-]; None where there is no number."""

    at: float
    difference: float | None
    uncertainty: float = 0.0


@dataclass(frozen=True)
class Crossing:
    """A threshold: the parameter's value, the interval that holds the exact one, and what lies above it."""

    value: float
    low: float
    high: float
    outside_above: bool


@dataclass(frozen=True)
class Piece:
    """A stretch of the range in which the criterion holds, or fails, and the thresholds at its ends.

    None where it ends otherwise: with the range, at a gap, or where verdicts become inconclusive.
    """

    start: float
    end: float
    start_crossing: Crossing | None
    end_crossing: Crossing | None


@dataclass(frozen=True)
class _Bracket:
    """Two definite samples with a change between them, as (value, f, slack): f = sign * d - c."""

    low: tuple[float, float, float]
    high: tuple[float, float, float]
    beside: tuple[float, float] | None
    unsure: tuple[float, ...]

    @property
    def estimate(self) -> float:
        """Root of the line through both ends."""
        (a, fa, _), (b, fb, _) = self.low, self.high
        return a - fa * (b - a) / (fb - fa)

    @property
    def slope(self) -> float:
        return (self.high[1] - self.low[1]) / (self.high[0] - self.low[0])

    @property
    def curved(self) -> float:
        """Root by inverse quadratic interpolation where that lies inside, else the line's."""
        line = self.estimate
        if self.beside is None:
            return line
        (a, fa, _), (b, fb, _), (c, fc) = self.low, self.high, self.beside
        if len({fa, fb, fc}) < 3:
            return line
        root = (
            a * fb * fc / ((fa - fb) * (fa - fc))
            + b * fa * fc / ((fb - fa) * (fb - fc))
            + c * fa * fb / ((fc - fa) * (fc - fb))
        )
        return root if a < root < b else line


def crossings(samples: Sequence[Sample], criterion: float) -> tuple[Crossing, ...]:
    """Thresholds that samples in rising order show."""
    found = [
        Crossing(bracket.estimate, bracket.low[0], bracket.high[0], bracket.high[1] > 0)
        for bracket in _brackets(samples, criterion)
    ]
    return tuple(sorted(found, key=lambda each: each.value))


def wanted(samples: Sequence[Sample], criterion: float, span: float) -> list[float]:
    """Values at which to solve next; none where every threshold is as narrow as the FE error allows.

    Parameters
    ----------
    samples : sequence of Sample
        In rising order.
    criterion : float
        [-]
    span : float
        Length of the scanned range, in the parameter's unit.
    """
    values = [value for bracket in _brackets(samples, criterion) for value in _narrowing(bracket, span)]
    return sorted(set(values))


def _narrowing(bracket: _Bracket, span: float) -> list[float]:
    """Where to look to narrow one bracket."""
    (a, _, slack_a), (b, _, slack_b) = bracket.low, bracket.high
    finest = FINEST * span
    floor = CLEAR * max(slack_a, slack_b) / abs(bracket.slope) + finest
    if b - a <= 4 * finest:
        return []
    root = bracket.curved
    # Without a third sample the line's own error is not known.
    error = abs(root - bracket.estimate) if bracket.beside is not None else 0.25 * (b - a)
    reach = max(floor, error)
    values: list[float] = []
    for end, way in ((a, -1.0), (b, 1.0)):
        # Samples on this side that the FE error leaves unsure: go beyond them.
        tried = [abs(each - root) for each in bracket.unsure if (each - root) * way > 0]
        step = 2 * max(tried) if tried and max(tried) >= 0.8 * reach else reach
        if abs(end - root) > 1.5 * step:
            values.append(root + way * step)
    if not values and reach > 2 * floor:
        return [(a + b) / 2]
    return values


def _brackets(samples: Sequence[Sample], criterion: float) -> Iterator[_Bracket]:
    """Changes between definite samples; a gap ends a row."""
    for known, row in groupby(samples, key=lambda each: each.difference is not None):
        if not known:
            continue
        group = list(row)
        for sign in (1.0, -1.0):
            told = [
                (each.at, sign * (each.difference or 0.0) - criterion, each.uncertainty) for each in group
            ]
            # Slack: at least a round-off, so that an exact hit on the criterion counts as unsure.
            sure = [each for each in told if abs(each[1]) > each[2]]
            unsure = [each[0] for each in told if abs(each[1]) <= each[2]]
            for i, (low, high) in enumerate(pairwise(sure)):
                if (low[1] > 0) == (high[1] > 0):
                    continue
                near = [sure[j] for j in (i - 1, i + 2) if 0 <= j < len(sure)]
                beside = min(near, key=lambda each: abs(each[1]), default=None)
                inside = tuple(each for each in unsure if low[0] < each < high[0])
                yield _Bracket(low, high, beside and (beside[0], beside[1]), inside)


def pieces(samples: Sequence[Sample], criterion: float, holding: bool = True) -> tuple[Piece, ...]:
    """Stretches in which the criterion holds (or fails), as far as definite samples show it.

    What lies in neither kind is undecided: nothing is known there, or the FE error is too large to say.
    """
    found: list[Piece] = []
    for known, row in groupby(samples, key=lambda each: each.difference is not None):
        if not known:
            continue
        group = list(row)
        ends: list[Crossing | None] = [None, *crossings(group, criterion), None]
        for start, end in pairwise(ends):
            side = start.outside_above if start is not None else end is not None and not end.outside_above
            if (start is not None or end is not None) and side == holding:
                continue
            found += _shown(group, criterion, holding, start, end)
    return tuple(found)


def _shown(
    group: Sequence[Sample], criterion: float, holding: bool, start: Crossing | None, end: Crossing | None
) -> Iterator[Piece]:
    """What of the stretch between two thresholds is shown by definite samples."""
    if start is not None and end is not None and start.high >= end.low:
        # The difference leaps over the whole stretch from one sample to the next.
        yield Piece(start.value, end.value, start, end)
        return
    low = group[0].at if start is None else start.high
    high = group[-1].at if end is None else end.low
    inside = [each for each in group if low <= each.at <= high]
    for shown, row in groupby(inside, key=lambda each: _definite(each, criterion) is holding):
        if not shown:
            continue
        run = [each.at for each in row]
        begins = start if start is not None and run[0] == low else None
        stops = end if end is not None and run[-1] == high else None
        first, last = begins.value if begins else run[0], stops.value if stops else run[-1]
        if first < last or len(group) == 1:
            yield Piece(first, last, begins, stops)


def undecided(samples: Sequence[Sample], criterion: float) -> bool:
    """Whether verdicts hang on the FE error beyond what the intervals of the thresholds say."""
    told = [(each.low, each.high) for each in crossings(samples, criterion)]
    return any(
        each.difference is not None
        and _definite(each, criterion) is None
        and not any(low <= each.at <= high for low, high in told)
        for each in samples
    )


def _definite(sample: Sample, criterion: float) -> bool | None:
    """Whether the criterion holds at a sample; None where that hangs on the FE error."""
    size = abs(sample.difference or 0.0)
    if size + sample.uncertainty <= criterion:
        return True
    return False if size - sample.uncertainty > criterion else None
