"""Booms made from single walls, rule by rule, against closed formulas and sums over the midline."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
from numpy.polynomial import Polynomial
from numpy.typing import NDArray

import beam_theory
from beam_theory.lumps import Lump, lumps
from crosscheck.verification.code_checks.finding import Finding, code_check
from crosscheck.verification.code_checks.shapes import Shape, Wall

GROUP = "levels of theory"
ROUND_OFF = 1e-9
Array = NDArray[np.float64]
LENGTH, SHARE = 30.0, 0.8


def _made(wall: Wall, end: tuple[float, float], stress: Callable[[str, Array], Array]) -> tuple[Lump, ...]:
    shape = Shape({"a": (0.0, 0.0), "b": end}, (wall,), {})
    return lumps(beam_theory.solve(shape.theory()), stress, 1)


def _linear(first: float, second: float) -> Callable[[str, Array], Array]:
    """f from ``first`` to ``second`` along a wall."""
    return lambda _, u: np.asarray(first + (second - first) * u)


def _off(made: tuple[Lump, ...], want: list[tuple[float, float]]) -> float:
    """Largest difference of places [-] and areas (relative) from those wanted; infinite for another count."""
    if len(made) != len(want):
        return math.inf
    pairs = zip(made, want, strict=True)
    return max(max(abs(m.at - at), abs(m.area / area - 1.0)) for m, (at, area) in pairs)


def ratios() -> Finding:
    """A wall of one thickness under f = f_1 .. f_2, for ratios on both sides of every limit.

    From -2 to -1/2 and above 1/10: A_1 = t b/6 (2 + f_2/f_1), A_2 alike. Else, with a change of sign, two
    triangles, each with 3/4 of its area at two thirds of its height; with one sign, one boom where the block
    acts, of its force over the stress there.
    """
    t = 2.0
    whole = SHARE * t * LENGTH
    wall = Wall("a", "b", (t, t), direct_share=SHARE)
    worst = 0.0
    for r in (1.0, 0.5, 0.11, 0.105, 0.095, 0.05, 0.0, -0.1, -0.3, -0.48, -0.52, -1.0, -1.5, -1.95):
        for first, second in ((3.0, 3.0 * r), (3.0 * r, 3.0)):
            if 0.0 <= r < 0.1:
                force = 0.5 * whole * (first + second)
                at = (first + 2.0 * second) / (3.0 * (first + second))
                want = [(at, force / (first + (second - first) * at))]
            elif -0.5 < r < 0.0:
                zero = first / (first - second)
                want = [(zero / 3.0, 0.75 * whole * zero)]
                want += [((2.0 + zero) / 3.0, 0.75 * whole * (1.0 - zero))]
            else:
                want = [(0.0, whole / 6.0 * (2.0 + second / first))]
                want += [(1.0, whole / 6.0 * (2.0 + first / second))]
            made = _made(wall, (LENGTH, 0.0), _linear(first, second))
            worst = max(worst, _off(made, want))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of booms for 14 ratios, both ways.")


def tapered() -> Finding:
    """A tapered wall: A_1 = integral of t (1 - xi) f/f_1 ds by polynomials, or one boom for each sign."""
    t = Polynomial((3.0, -1.4))
    wall = Wall("a", "b", (3.0, 1.6), direct_share=SHARE)
    worst = 0.0
    for first, second in ((2.0, 1.0), (1.0, -1.2), (4.0, 0.1), (0.1, -4.0)):
        f, xi = Polynomial((first, second - first)), Polynomial((0.0, 1.0))

        def over(weight: Polynomial, low: float = 0.0, high: float = 1.0, f: Polynomial = f) -> float:
            inside = (weight * t * f).integ()
            return SHARE * LENGTH * float(inside(high) - inside(low))

        if second * first < 0.0 and abs(second) > 2.0 * abs(first):
            zero = first / (first - second)
            parts = [(0.0, zero), (zero, 1.0)]
        else:
            parts = [(0.0, 1.0)]
        if min(abs(first), abs(second)) >= 0.5:
            want = [(0.0, over(1.0 - xi) / first), (1.0, over(xi) / second)]
        else:
            want = []
            for low, high in parts:
                force = over(Polynomial((1.0,)), low, high)
                at = over(xi, low, high) / force
                want.append((at, force / float(f(at))))
        made = _made(wall, (LENGTH, 0.0), _linear(first, second))
        worst = max(worst, _off(made, want))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of booms of four distributions.")


def arcs() -> Finding:
    """Half a ring under 48 distributions: parts of at most 22.5 degrees, areas above zero, force kept.

    In a third of them a part has little stress at its ends and more of the other sign between: it is halved.
    A boom's stress is that of its place.
    """
    radius, t = 20.0, (1.5, 1.0)
    wall = Wall("a", "b", t, through=(radius, radius))
    x, w = np.polynomial.legendre.leggauss(40)
    u = 0.5 * (x + 1.0)
    weight = 0.5 * w * math.pi * radius * (t[0] + (t[1] - t[0]) * u)
    worst, told = 0.0, 0
    for turn in np.arange(16) * math.pi / 8.0 + math.pi / 16.0 + 1e-4:
        for shift in (0.0, 0.35, 1.0005 * math.cos(math.pi / 16.0)):

            def stress(_: str, at: Array, turn: float = turn, shift: float = shift) -> Array:
                return np.asarray(np.cos(math.pi * at + turn) - shift)

            made = _made(wall, (2.0 * radius, 0.0), stress)
            told += len(made)
            ends = {round(8.0 * m.at, 9) for m in made}
            force = sum(m.area * m.stress for m in made)
            f = stress("", u)
            want = float(weight @ f)
            area = float(weight.sum())
            worst = max(worst, abs(force - want) / area)
            worst = max(worst, *(abs(m.stress - float(stress("", np.array([m.at]))[0])) for m in made))
            if min(m.area for m in made) <= 0.0 or max(m.area for m in made) > 0.5 * area or len(ends) < 6:
                worst = math.inf
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of 48 distributions, {told} booms.")


def split_arcs() -> Finding:
    """Quarter of a ring in four parts, the stress vanishing near an end of one: two booms by quadrature."""
    radius, t, share = 20.0, 1.5, 0.5 * math.pi
    half = radius * math.sqrt(0.5)
    wall = Wall("a", "b", (t, t), through=(half, half))
    x, w = np.polynomial.legendre.leggauss(20)
    worst = 0.0
    for zero in (0.26, 0.31, 0.45, 0.49, 0.74, 0.76):

        def stress(_: str, at: Array, zero: float = zero) -> Array:
            return np.asarray(np.sin(share * (at - zero)) + 0.4 * np.sin(share * (at - zero)) ** 2)

        shape = Shape({"a": (0.0, radius), "b": (radius, 0.0)}, (wall,), {})
        made = lumps(beam_theory.solve(shape.theory()), stress, 4)
        part = math.floor(4.0 * zero) / 4.0
        want = []
        for low, high in ((part, zero), (zero, part + 0.25)):
            u = low + 0.5 * (high - low) * (x + 1.0)
            weight = 0.5 * (high - low) * w * t * share * radius * stress("", u)
            at = float((weight * u).sum() / weight.sum())
            want.append((at, float(weight.sum() / stress("", np.array([at]))[0])))
        inside = tuple(m for m in made if part + 1e-9 < m.at < part + 0.25 - 1e-9)
        worst = max(worst, _off(inside, want))
    return Finding(worst, ROUND_OFF, f"Largest difference {worst:.1e} of six zeros.")


CHECKS = (
    code_check("booms for every ratio of stresses", GROUP, "theory", ratios, quick=True),
    code_check("booms of a tapered wall", GROUP, "theory", tapered, quick=True, features={"taper"}),
    code_check("booms of an arc, split", GROUP, "theory", split_arcs, quick=True, features={"arc"}),
    code_check("booms of an arc", GROUP, "theory", arcs, quick=True, features={"arc"}),
)
