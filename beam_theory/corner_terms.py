"""Published and derived corrections of the torsion constant at ends and joints of walls.

Every term is meant for one convention: the plain sum of g t^3/3 over midline lengths up to the points (and
Bredt-Batho with midline lengths and areas) plus these terms.
"""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np

from beam_theory.arrays import Floats

__all__ = [
    "CELL_CORNER_RANGE",
    "FREE_END",
    "SHARP_CORNER",
    "TEE_RANGE",
    "cell_corner_area",
    "cell_corner_length",
    "fillet_corner",
    "tee",
]

# Free end of a wall: half of 0.630 t/b of a thin rectangle, J = b t^3/3 (1 - 0.630249 t/b).
# S. Timoshenko and J. N. Goodier, Theory of Elasticity, 3rd ed. 1970, art. 109 (from memory):
# 192/pi^5 times the sum of 1/n^5 over odd n, over 6 here.
FREE_END = 0.630248876 / 6.0

# Sharp right-angled corner of two walls of equal thickness, arms longer than about 2 t. No outside source: a
# two-sided finite-element solution of 10 x 10 x 1 and 20 x 20 x 1 angles (cases/reference, row D16).
SHARP_CORNER = 0.07249075

# tw/tf and r/tf for which the tee formula is used here; it was fitted for 0.5 <= tw/tf <= 1 and r/tf up to 1
# (from memory), beyond r/tf = 1 it is up to 5 % off in J against finite elements (cases/reference, IPE rows).
TEE_RANGE = (0.5, 1.0, 0.0, 2.0)

# Smallest and largest turn [degrees] and largest ratio of thicknesses for a corner of a cell.
CELL_CORNER_RANGE = (1.0, 160.0, 3.0)


def tee(t_flange: float, t_stem: float, fillet: float) -> float:
    """Joint of a straight-through flange and a stem at right angles, [L^4], midline convention.

    alpha D^4 with alpha = -0.042 + 0.2204 tw/tf + 0.1355 r/tf - 0.0865 tw r/tf^2 - 0.0725 (tw/tf)^2 and
    D = ((tf + r)^2 + tw (r + tw/4))/(2 r + tf) the diameter of the largest circle in the joint. The formula
    counts the stem from the face of the flange, hence - tf tw^3/6 here.

    References
    ----------
    I. A. El Darwish and B. G. Johnston, Torsion of structural shapes, J. Struct. Div. ASCE 91 ST1, 1965,
    203-227 (from memory; reproduces rows D18 and D19 of cases/reference).
    """
    w, r = t_stem / t_flange, fillet / t_flange
    alpha = -0.042 + 0.2204 * w + 0.1355 * r - 0.0865 * w * r - 0.0725 * w**2
    diameter = ((t_flange + fillet) ** 2 + t_stem * (fillet + t_stem / 4.0)) / (2.0 * fillet + t_flange)
    return alpha * diameter**4 - t_flange * t_stem**3 / 6.0


def fillet_corner(t_1: float, t_2: float, fillet: float) -> float:
    """Right-angled corner, sharp outside and with a fillet inside, [L^4], midline convention.

    alpha D^4 with alpha = (d/b)(0.07 + 0.076 r/b), b and d the thicker and thinner wall, and
    D = 2 (b + d + 3 r - sqrt(2 (2 r + b)(2 r + d))). The thicker wall runs through to the outer face
    there and the other starts at its face, hence the change of length here.

    References
    ----------
    G. W. Trayer and H. W. March, NACA report 334, 1930; W. C. Young and R. G. Budynas, Roark's Formulas for
    Stress and Strain, 7th ed. 2002, table 10.1, p. 407 (reproduces row D10 and the tables of channels).
    """
    b, d = max(t_1, t_2), min(t_1, t_2)
    alpha = d / b * (0.07 + 0.076 * fillet / b)
    diameter = 2.0 * (b + d + 3.0 * fillet - math.sqrt(2.0 * (2.0 * fillet + b) * (2.0 * fillet + d)))
    return alpha * diameter**4 + d * b**3 / 6.0 - b * d**3 / 6.0


def cell_corner_length(turn: float, t_1: float, t_2: float) -> float:
    """What a sharp corner takes from the integral of ds/t round a cell: an addend, mostly negative [-].

    From the conformal map of the strip 0 < Im W < 1 on the bent wall,
    dz/dW = ((exp(pi W) + a)/(exp(pi W) - 1))^(turn/pi), a^(turn/pi) = t_2/t_1. For equal walls it is
    tan(turn/2) + (2/pi)(psi(1/2 - turn/(2 pi)) - psi(1/2)); at a right angle -(2/pi) ln 2.

    References
    ----------
    Right angles: P. M. Hall, Resistance calculations for thin film patterns, Thin Solid Films 1, 1968, 277
    (from memory: the corner square counts 0.559). Other angles derived here.
    """
    return _length(abs(turn), t_2 / t_1)


@lru_cache(maxsize=1)
def _gauss() -> tuple[Floats, Floats]:
    """Gauss points and weights on 0..1."""
    z, w = np.polynomial.legendre.leggauss(200)
    return 0.5 * (z + 1.0), 0.5 * w


@lru_cache(maxsize=512)
def _length(turn: float, b: float) -> float:
    """cell_corner_length for t_1 = 1, t_2 = b."""
    gamma = turn / math.pi
    a = b ** (1.0 / gamma)
    z, w = _gauss()
    # v = exp(-pi |W|) runs from 0 far away to 1 at the outer corner; the power smooths the corner.
    power = 1.0 / (1.0 - gamma)
    left_out = z**power
    weight = w * power * z ** (power - 1.0)
    v = 1.0 - left_out
    first = ((1.0 + a * v) / left_out) ** gamma - 1.0
    second = ((a + v) / left_out) ** gamma - b
    c1 = float((weight * first / (math.pi * v)).sum())
    c2 = float((weight * second / (math.pi * v)).sum())
    sine, cosine = math.sin(turn), math.cos(turn)
    x1, x2 = (b - cosine) / (2.0 * sine), (1.0 - b * cosine) / (2.0 * sine)
    return x1 - c1 + (x2 - c2) / b


def cell_corner_area(turn: float, t_1: float, t_2: float) -> float:
    """What a sharp corner adds to the area of the cell on its inside (and takes from that outside) [L^2].

    What counts is the area under h, harmonic, 1 on the inner and 0 on the outer face: kappa t^2 more than the
    midline encloses, kappa = c - 5 T/4 + 2 T D, T = tan(turn/2),
    c = -(psi(1/2 - turn/(2 pi)) - psi(1/2))/pi, D = (1 - integral of y^2 ds)/2 along the bisector, with
    y = I(sin^2(pi s/2)) the regularised incomplete beta function of ((1 - turn/pi)/2, (1 + turn/pi)/2).
    At a right angle kappa = -0.105166. Exact for equal walls; t_1 t_2 stands for t^2 otherwise.

    References
    ----------
    Derived here; square tubes of rows D050 to D054 in cases/reference follow to 1e-8, 1e-9, 2e-5 of J.
    """
    return _area(abs(turn)) * t_1 * t_2


@lru_cache(maxsize=512)
def _area(turn: float) -> float:
    """kappa of a turn."""
    from scipy.special import betainc, digamma

    gamma = turn / math.pi
    z, w = _gauss()
    s = z**3 * (10.0 - 15.0 * z + 6.0 * z**2)
    weight = w * 30.0 * z**2 * (1.0 - z) ** 2
    y = betainc(0.5 * (1.0 - gamma), 0.5 * (1.0 + gamma), np.sin(0.5 * np.pi * s) ** 2)
    along = 0.5 - 0.5 * float((weight * y**2).sum())
    c = -float(digamma(0.5 - 0.5 * gamma) - digamma(0.5)) / math.pi
    tangent = math.tan(0.5 * turn)
    return c - 1.25 * tangent + 2.0 * tangent * along
