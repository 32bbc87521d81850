"""A point of the section, the walls that leave it anticlockwise, and what closes the gaps between them."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field

from .band import Array, Band, WallEnd
from .chain import Chain, chain, free_end
from .rounding import rounded
from .section import Rounding


@dataclass(frozen=True)
class Joint:
    """A point, the walls that leave it in anticlockwise order, and the chain that follows each of them."""

    point: str
    place: Array
    ends: tuple[WallEnd, ...]
    chains: tuple[Chain, ...] = field(repr=False)

    def chain_after(self, end: WallEnd) -> Chain:
        """The chain that begins on the left face of ``end``."""
        return self.chains[[e.key for e in self.ends].index(end.key)]

    def chain_before(self, end: WallEnd) -> Chain:
        """The chain that ends on the right face of ``end``."""
        return self.chains[[e.key for e in self.ends].index(end.key) - 1]

    def position(self, chain: Chain) -> int:
        """Index of one of this joint's chains."""
        return next(i for i, c in enumerate(self.chains) if c is chain)

    def clear_of(self, end: WallEnd) -> float:
        """Distance from the point beyond which both faces of ``end`` are its own [L]."""
        return max(0.0, self.chain_after(end).reach[0], self.chain_before(end).reach[1])


def joints(
    points: Mapping[str, Array], bands: Iterable[Band], corners: Mapping[str, Rounding] | None = None
) -> dict[str, Joint]:
    """The joint at every point where a wall begins or ends, its corners rounded where asked."""
    corners = corners or {}
    leaving: dict[str, list[WallEnd]] = {}
    for b in bands:
        leaving.setdefault(b.start, []).append(WallEnd(b, False))
        leaving.setdefault(b.end, []).append(WallEnd(b, True))
    return {name: _joint(name, points[name], ends, corners.get(name)) for name, ends in leaving.items()}


def _joint(name: str, place: Array, ends: list[WallEnd], rounding: Rounding | None) -> Joint:
    order = sorted(ends, key=_bearing_order())
    chains = []
    for i, first in enumerate(order):
        second = order[(i + 1) % len(order)]
        if len(order) == 1:
            square = free_end(first)
            chains.append(rounded(square, rounding, bend=False) if rounding else square)
        else:
            sharp = chain(place, first, second)
            chains.append(rounded(sharp, rounding, bend=len(order) == 2) if rounding else sharp)
    return Joint(name, place, tuple(order), tuple(chains))


def _bearing_order() -> Callable[[WallEnd], tuple[float, float]]:
    """Sort key: bearing; walls that leave alike (tangent arcs) by the side they bend to."""

    def key(end: WallEnd) -> tuple[float, float]:
        bend = -end.band.curvature if end.reverse else end.band.curvature
        return round(end.bearing, 9), bend

    return key
