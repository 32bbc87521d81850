"""Booms: concentrated areas spread over the joint they sit in, or over a patch of their wall."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace

from .band import Band
from .partition import Cluster, Partition, Patch, Strip
from .section import Boom

# Half the length of a patch over the wall's thickness.
HALF_PATCH = 1.0


def with_booms(parts: Partition, booms: Iterable[Boom], bands: Mapping[str, Band]) -> Partition:
    """The partition with each boom's stiffness in a cluster or in a patch of a strip.

    Notes
    -----
    The size of what a boom is spread over follows from the geometry alone, never from the mesh.
    """
    strips = dict(parts.strips)
    added = [0.0] * len(parts.clusters)
    of_point = {p: i for i, c in enumerate(parts.clusters) for p in c.points}
    for boom in booms:
        if boom.point is not None:
            added[of_point[boom.point]] += boom.area
            continue
        band = bands[boom.wall or ""]
        s = boom.at * band.length
        strip = strips.get(band.name)
        if strip is None or not strip.span[0] < s < strip.span[1]:
            near = band.start if s < 0.5 * band.length else band.end
            added[of_point[near]] += boom.area
            continue
        reach = HALF_PATCH * 2.0 * float(band.half(s))
        low, high = max(strip.span[0], s - reach), min(strip.span[1], s + reach)
        strips[band.name] = replace(strip, patches=(*strip.patches, Patch((low, high), boom.area)))
    clusters: tuple[Cluster, ...] = tuple(
        replace(c, boom=a) for c, a in zip(parts.clusters, added, strict=True)
    )
    return Partition(strips, clusters)


def breaks(strip: Strip) -> list[float]:
    """Bounds of a strip's patches that must be bounds of its columns, with the strip's own ends [L]."""
    least = 1e-3 * min(strip.band.thickness)
    inside = sorted(b for p in strip.patches for b in p.span)
    made = [strip.span[0]]
    for b in inside:
        if b - made[-1] > least and strip.span[1] - b > least:
            made.append(b)
    return [*made, strip.span[1]]
