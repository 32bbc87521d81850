"""Terms of the walls' own thickness in second moments and in the warping constant."""

from __future__ import annotations

import numpy as np

from beam_theory.network import Network

__all__ = ["own_second_moments", "secondary_warping", "thin_plate_centre"]


def own_second_moments(graph: Network, centroid: complex) -> tuple[complex, float, float, float]:
    """Own-axis terms: first moment of curved walls (complex) [L^3], and addends of Ixx, Iyy, Ixy [L^4].

    With n across the midline, N its left normal and k its curvature, dA = (1 - k n) dn ds, so a wall has the
    first moment t P - k t^3/12 N and the second moment t P P + t^3/12 (N N - k (P N + N P)) per length: exact
    for straight walls of constant thickness and for concentric arcs.
    """
    p = graph.pieces
    cube = (p.e / 12.0)[:, None] * p.t**3 * p.ds
    normal = 1j * p.curves.tangent(p.u)
    place = p.curves.moved(-centroid).position(p.u)
    k = (p.curves.sweep / p.curves.length)[:, None]
    first = complex(-(cube * k * normal).sum())
    xx = float((cube * (normal.imag**2 - 2.0 * k * place.imag * normal.imag)).sum())
    yy = float((cube * (normal.real**2 - 2.0 * k * place.real * normal.real)).sum())
    cross = normal.real * normal.imag - k * (place.real * normal.imag + place.imag * normal.real)
    return first, xx, yy, float((cube * cross).sum())


def secondary_warping(graph: Network, pole: complex) -> float:
    """Secondary warping constant: integral of e t^3/12 r_t^2 ds, r_t the arm of the wall's normal [L^6].

    Across a wall the warping function changes by -n r_t, r_t = (P - S) . tangent.

    References
    ----------
    S. P. Timoshenko and J. M. Gere, Theory of Elastic Stability, 2nd ed. 1961, ch. 5: t^3 (a^3 + b^3)/36 for
    an angle, (t_f^3 b^3/4 + t_w^3 h^3)/36 for a tee, b^3 t^3/144 for a narrow rectangle.
    """
    p = graph.pieces
    along = np.conj(p.curves.tangent(p.u)) * p.curves.moved(-pole).position(p.u)
    return float((((p.e / 12.0)[:, None] * p.t**3 * p.ds) * along.real**2).sum())


def thin_plate_centre(graph: Network) -> complex:
    """Shear centre of a section whose walls all lie on one line: the mean place weighted with e t^3 [L].

    References
    ----------
    E. Trefftz, Zeitschrift fuer angewandte Mathematik und Mechanik 15, 1935, 220-225 (thin profile, from
    memory).
    """
    p = graph.pieces
    weight = p.e[:, None] * p.t**3 * p.ds
    origin = complex(np.mean(graph.node))
    return origin + complex((weight * p.curves.moved(-origin).position(p.u)).sum() / weight.sum())
