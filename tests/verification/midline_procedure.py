"""Section constants by the tabular procedure of the European standards, a third route beside both sides.

EN 1993-1-3:2006, Annex C, and EN 1999-1-1:2007, Annex J (from memory; both print the same procedure): a
section is a run of straight parts between nodes; branches are gone out along with their thickness and back
along with none. A closed part has I_t = 4 A_t^2/S_t (J.6). Nothing of beam_theory or fe_models is used.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

Place = tuple[float, float]


def open_section(nodes: Sequence[Place], thickness: Sequence[float]) -> dict[str, float]:
    """Constants of an open section by our names; thickness (n - 1) of the parts between nodes (n)."""
    y, z = np.array(nodes, dtype=float).T
    t = np.array(thickness, dtype=float)
    y0, y1, z0, z1 = y[:-1], y[1:], z[:-1], z[1:]
    part = t * np.hypot(y1 - y0, z1 - z0)
    area = part.sum()

    def first(a: np.ndarray) -> float:
        return float(((a[1:] + a[:-1]) * part).sum() / 2)

    def second(a: np.ndarray, b: np.ndarray) -> float:
        """Integral of a b over the area, less that of the means."""
        ends = 2 * a[:-1] * b[:-1] + 2 * a[1:] * b[1:] + a[:-1] * b[1:] + a[1:] * b[:-1]
        return float((ends * part).sum() / 6) - first(a) * first(b) / area

    omega = np.concatenate([[0.0], np.cumsum(y0 * z1 - y1 * z0)])
    iy, iz, iyz = second(z, z), second(y, y), second(y, z)
    iyw, izw, iww = second(y, omega), second(z, omega), second(omega, omega)
    below = iy * iz - iyz**2
    y_sc = (izw * iz - iyw * iyz) / below
    z_sc = (-iyw * iy + izw * iyz) / below
    return {
        "area": float(area),
        "centroid_x": first(y) / area,
        "centroid_y": first(z) / area,
        "second_moment_xx": iy,
        "second_moment_yy": iz,
        "product_moment_xy": iyz,
        "torsion_constant": float((part * t**2).sum() / 3),
        "shear_centre_x": y_sc,
        "shear_centre_y": z_sc,
        "warping_constant": iww + z_sc * iyw - y_sc * izw,
    }


def closed_part(nodes: Sequence[Place], thickness: Sequence[float]) -> float:
    """I_t = 4 A_t^2/S_t of a closed run of parts; the last part goes back to the first node."""
    y, z = np.array(nodes, dtype=float).T
    after_y, after_z = np.roll(y, -1), np.roll(z, -1)
    enclosed = 0.5 * float(((after_y - y) * (after_z + z)).sum())
    length = np.hypot(after_y - y, after_z - z)
    return 4.0 * enclosed**2 / float((length / np.array(thickness)).sum())
