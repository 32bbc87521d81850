"""Area, centroid and second moments of a wall graph, weighted with e and direct_share."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from beam_theory.network import Network

__all__ = ["FLAT", "Inertia", "inertia"]

FLAT = 1e-11
_ROUND = 1e-10


@dataclass(frozen=True)
class Inertia:
    """Midline integrals of e t ds and e A_b, own-axis terms of the walls left out.

    area [L^2] weighted; plain_area [L^2] unweighted, full walls and booms; centroid complex [L] in the file's
    axes; xx of y^2, yy of x^2, xy [L^4] about the centroid; reason: why shear and
    bending are undefined, None where they are defined.

    frame: unit vector of axes close to the principal ones, and the moments of eta^2, xi^2 and xi eta about
    them; a flat section that lies askew keeps its small moment there. None: the file's axes do.
    """

    area: float
    plain_area: float
    centroid: complex
    xx: float
    yy: float
    xy: float
    reason: str | None
    frame: tuple[complex, float, float, float] | None = None

    @property
    def principal(self) -> tuple[float, float]:
        """Largest and smallest second moment [L^4]."""
        _, xx, yy, xy = self._axes
        u = 0.5 * (xx + yy) + math.hypot(0.5 * (xx - yy), xy)
        # The determinant over the largest loses no digit of a flat section along the axes.
        return u, (xx * yy - xy**2) / u if u > 0.0 else 0.0

    @property
    def _axes(self) -> tuple[complex, float, float, float]:
        """Axes to solve in and the moments about them."""
        return (1.0 + 0.0j, self.xx, self.yy, self.xy) if self.frame is None else self.frame

    @property
    def angle(self) -> float | None:
        """Angle of the major axis u from x [rad], in (-pi/2, pi/2]; None where every axis is principal."""
        u, v = self.principal
        if u <= 0.0 or u - v <= _ROUND * u:
            return None
        if abs(self.xy) <= 1e-13 * u:
            return 0.0 if self.xx > self.yy else math.pi / 2
        return 0.5 * math.atan2(-2.0 * self.xy, self.xx - self.yy)

    def slope(self, of_x: float, of_y: float) -> complex:
        """a + i b from [Iyy Ixy; Ixy Ixx][a b] = [of_x of_y]; defined only where `reason` is None."""
        axis, xx, yy, xy = self._axes
        given = complex(of_x, of_y) * axis.conjugate()
        det = xx * yy - xy**2
        a = (xx * given.real - xy * given.imag) / det
        b = (yy * given.imag - xy * given.real) / det
        return complex(a, b) * axis


def inertia(graph: Network) -> Inertia:
    """Area to second moments by quadrature exact to round-off.

    A second moment counts as zero below 1e-11 of the largest one: what is left then is round-off.
    """
    pieces = graph.pieces
    weight = pieces.eta
    area = float(weight.sum() + graph.boom.sum())
    plain = float((0.5 * (pieces.t0 + pieces.t1) * pieces.length).sum() + graph.boom_area.sum())
    origin = complex(np.mean(graph.node))
    if area <= 0.0:
        return Inertia(area, plain, origin, 0.0, 0.0, 0.0, "no wall or boom carries direct stress")
    place = pieces.curves.moved(-origin).position(pieces.u)
    node = graph.node - origin
    shift = complex(((weight * place).sum() + (graph.boom * node).sum()) / area)
    place, node = place - shift, node - shift
    xx = float((weight * place.imag**2).sum() + (graph.boom * node.imag**2).sum())
    yy = float((weight * place.real**2).sum() + (graph.boom * node.real**2).sum())
    xy = float((weight * place.real * place.imag).sum() + (graph.boom * node.real * node.imag).sum())
    found = Inertia(area, plain, origin + shift, xx, yy, xy, None)
    angle = found.angle
    if angle is not None and xy != 0.0:
        axis = complex(math.cos(angle), math.sin(angle))
        turned, at_node = place * axis.conjugate(), node * axis.conjugate()
        moments = (
            float((weight * turned.imag**2).sum() + (graph.boom * at_node.imag**2).sum()),
            float((weight * turned.real**2).sum() + (graph.boom * at_node.real**2).sum()),
            float(
                (weight * turned.real * turned.imag).sum() + (graph.boom * at_node.real * at_node.imag).sum()
            ),
        )
        found = replace(found, frame=(axis, *moments))
    u, v = found.principal
    if v > FLAT * u:
        return found
    reason = (
        "all direct-stress material lies on one straight line: thin-walled theory has no bending stiffness "
        "across it"
    )
    return replace(found, reason=reason)
