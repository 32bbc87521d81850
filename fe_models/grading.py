"""Where the points go along a piece: small at singular corners, growing away from them.

Near a corner of interior angle alpha the stress grows like r^(pi/alpha - 1), so the energy lost in the
first element goes like (h/t)^(2 pi/alpha). The size at a corner is chosen to lose the same share everywhere:

    h = t eta^(alpha / (2 pi))                                                                  (1)

which is 0.1 t at a right convex corner and 0.001 t at a right re-entrant one for eta = 1e-4.
"""

from __future__ import annotations

import numpy as np

from .band import Array

# Corners flatter than this [rad] are no corners.
FLAT = 0.02
# No element is smaller than this share of the thickness: below, round-off moves its corners.
SMALLEST = 1e-6


def corner_size(alpha: float, scale: float, eta: float) -> float:
    """Size of the first element at a corner, equation (1) [L].

    Parameters
    ----------
    alpha : float
        Interior angle [rad].
    scale : float
        Thickness of the thinner wall at the corner [L].
    eta : float
        Share of the energy that may be lost there [-].
    """
    bend = abs(alpha - np.pi)
    if bend < FLAT:
        return float(scale)
    # a slight corner carries a slight singularity: its energy goes with the square of the bend
    share = min(1.0, eta * max(1.0, (0.5 * np.pi / bend) ** 2))
    return float(scale * max(SMALLEST, share ** (alpha / (2.0 * np.pi))))


def graded(length: float, first: float, last: float, largest: float, slope: float) -> Array:
    """Fractions 0 ... 1 of points along a line of the given length.

    The wanted size at distance d from the start is min(first + slope d, last + slope (length - d), largest);
    the points share its integral evenly.

    Returns
    -------
    (m,) array
        Fractions including both ends [-].
    """
    first, last = min(first, largest), min(last, largest)
    rise, fall = (largest - first) / slope, (largest - last) / slope
    if rise + fall <= length:
        top = largest
    else:
        rise = float(np.clip((last - first + slope * length) / (2.0 * slope), 0.0, length))
        fall = length - rise
        top = min(first + slope * rise, last + slope * fall)
    up, down = np.log1p(slope * rise / first) / slope, np.log1p(slope * fall / last) / slope
    flat = max(0.0, length - rise - fall) / top
    total = up + flat + down
    count = max(1, int(np.ceil(total - 1e-9)))
    n = np.linspace(0.0, total, count + 1)
    d = np.where(
        n <= up,
        first * np.expm1(slope * np.minimum(n, up)) / slope,
        np.where(
            n <= up + flat,
            rise + (n - up) * top,
            length - last * np.expm1(slope * np.minimum(total - n, down)) / slope,
        ),
    )
    d[0], d[-1] = 0.0, length
    return np.asarray(d / length)


def stretched(length: float, first: float, ratio: float, largest: float) -> Array:
    """Fractions 0 ... 1 along a strip: elements grow from both ends by ``ratio``, alike on both sides."""
    half = 0.5 * length
    if half <= 0.75 * first:
        return np.array([0.0, 1.0])
    sizes: list[float] = []
    size = min(first, largest)
    while sum(sizes) < half * (1.0 - 1e-12):
        sizes.append(size)
        size = min(size * ratio, largest)
    if len(sizes) > 1 and half - sum(sizes[:-1]) < 0.5 * sizes[-1]:
        sizes.pop()
    grown = np.cumsum(sizes) / sum(sizes) * 0.5
    grown[-1] = 0.5
    return np.concatenate([[0.0], grown, (1.0 - grown[:-1])[::-1], [1.0]])
