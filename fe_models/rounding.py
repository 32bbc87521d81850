"""Fillets of re-entrant corners and rounded outer sides of bends."""

from __future__ import annotations

import numpy as np

from .band import Array, WallEnd
from .boundary import Arc, Piece
from .chain import Chain
from .errors import OutlineError
from .section import Rounding


def rounded(chain: Chain, rounding: Rounding, *, bend: bool) -> Chain:
    """A chain with its re-entrant corner filleted, or the outer side of a bend rounded.

    The centre of a fillet of radius r lies where both faces, moved r out of the material, meet; that of an
    outer rounding where they meet when moved r into it. A free end has the outer radius at both its corners.
    """
    if chain.kind == "free end" and rounding.outer:
        return _rounded_end(chain, rounding.outer)
    if chain.kind == "corner" and rounding.inner > 0.0:
        return _arc(chain, rounding.inner, out=1.0, kind="fillet")
    if chain.kind == "mitre" and bend:
        thickness = 2.0 * min(chain.first.half(), chain.second.half())
        radius = rounding.inner + thickness if rounding.outer is None else rounding.outer
        if radius > 0.0:
            return _arc(chain, radius, out=-1.0, kind="rounding")
    return chain


def _rounded_end(chain: Chain, radius: float) -> Chain:
    """A free end with both corners rounded; a radius of half the thickness makes a half circle."""
    end = chain.first
    half = end.half()
    if radius > half * (1.0 + 1e-9):
        raise OutlineError(
            "radius", (end.band.name,), f"{radius:g} at a free end of thickness {2.0 * half:g}"
        )
    radius = min(radius, half)
    # along the outline: in along the left face, round its corner, across the end, round the right corner
    left, right, outward = end.side(0.0, 1.0), end.side(0.0, -1.0), -end.direction
    across = (left - right) / (2.0 * half)
    first, last = left - radius * (across + outward), right + radius * (across - outward)
    bearing = float(np.arctan2(across[1], across[0]))
    arcs = [
        Arc(first, radius, bearing, bearing + 0.5 * np.pi),
        Arc(last, radius, bearing + 0.5 * np.pi, bearing + np.pi),
    ]
    pieces = [_piece(a) for a in arcs]
    if radius < half * (1.0 - 1e-9):
        pieces.insert(1, Piece("closing", pieces[0].end, pieces[1].start))
    return Chain(end, end, tuple(pieces), (radius, radius), "free end")


def _piece(arc: Arc) -> Piece:
    """An arc as a piece of a boundary."""
    angles = np.array([arc.first, arc.last])
    ends = arc.centre + arc.radius * np.stack([np.cos(angles), np.sin(angles)], axis=-1)
    return Piece("arc", ends[0], ends[1], arc=arc)


def _arc(chain: Chain, radius: float, *, out: float, kind: str) -> Chain:
    """The arc of a radius that touches both faces of a chain, outside (+1) or inside (-1) the material."""
    first, second = chain.first, chain.second
    names = (first.band.name, second.band.name)

    def moved(end: WallEnd, s: float, sign: float) -> tuple[Array, Array]:
        """Foot on the face and the point ``radius`` off it on the side of the centre."""
        foot, slope = end.side(s, sign), end.side_slope(s, sign)
        normal = sign * np.array([-slope[1], slope[0]]) / np.hypot(*slope)
        return foot, foot + out * radius * normal

    # the tangent length of a corner between straight faces starts the iteration
    a, b = first.side_slope(chain.reach[0], 1.0), second.side_slope(chain.reach[1], -1.0)
    angle = float(np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b)) % (2.0 * np.pi)
    opening = angle if out > 0.0 else 2.0 * np.pi - angle
    tangent = radius / np.tan(0.5 * opening)
    s = np.array(chain.reach) + tangent
    size = first.half() + second.half() + radius
    for _ in range(60):
        miss = moved(first, s[0], 1.0)[1] - moved(second, s[1], -1.0)[1]
        if np.hypot(*miss) <= 1e-13 * size:
            break
        h = 1e-6 * size
        columns = [
            (moved(first, s[0] + h, 1.0)[1] - moved(first, s[0] - h, 1.0)[1]) / (2.0 * h),
            -(moved(second, s[1] + h, -1.0)[1] - moved(second, s[1] - h, -1.0)[1]) / (2.0 * h),
        ]
        s = s - np.linalg.solve(np.column_stack(columns), miss)
    else:
        if np.hypot(*miss) > 1e-9 * size:
            raise OutlineError("radius", names, f"{radius:g}, which touches both faces nowhere")
    for end, reach in ((first, s[0]), (second, s[1])):
        if reach > end.band.length:
            found = f"{reach:.4g} of wall {end.band.name}, it has {end.band.length:.4g}"
            raise OutlineError("radius", names, f"{radius:g}, which needs {found}")
    start, centre = moved(first, s[0], 1.0)
    finish = second.side(s[1], -1.0)
    from_angle = float(np.arctan2(*(start - centre)[::-1]))
    to_angle = float(np.arctan2(*(finish - centre)[::-1]))
    sweep = (to_angle - from_angle + np.pi) % (2.0 * np.pi) - np.pi
    piece = Piece("arc", start, finish, arc=Arc(centre, radius, from_angle, from_angle + sweep))
    return Chain(first, second, (piece,), (float(s[0]), float(s[1])), kind)
