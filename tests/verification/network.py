"""A second, deliberately different route to thin-walled theory: stiffness of the wall network.

Every wall is a two-node element in the axial displacement w per unit length of beam, with inner modes beside
the two ends; besides w the unknowns are the two slopes and the mean of the load f = a x + b y + c. The work

    W = integral g t (dw/ds + theta p)^2 ds/2 + theta^2 integral g t^3/6 ds - integral e t f w ds

is stationary in w, and the resultants of q = g t (dw/ds + theta p) must be Vx and Vy. Three states are
solved: Vx = 1 and Vy = 1 at theta = 0, and theta = 1 without shear; the torques give J and the centre.
No cells are found, nothing is cut, no centroid, no second moment and no sectorial area is used, and no code
is shared with beam_theory: a section's geometry is taken from its points alone.
"""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from scipy.linalg import lu_factor, lu_solve

import beam_theory

POINTS = 28
MODES = 12


@dataclass(frozen=True)
class Piece:
    """A stretch of wall between two nodes at POINTS Gauss points.

    z: places. dz: tangent times weight. ds: weights. t, e, g. mode (m, q), slope (m, q): functions of w and
    their derivative in s; the first two are those of the ends.
    """

    nodes: tuple[int, int]
    wall: str
    span: tuple[float, float]
    z: np.ndarray
    dz: np.ndarray
    ds: np.ndarray
    t: np.ndarray
    e: float
    g: float
    mode: np.ndarray
    slope: np.ndarray
    unknowns: np.ndarray

    @property
    def arm(self) -> np.ndarray:
        """Distance of the tangent from the origin."""
        return (np.conj(self.z) * self.dz).imag / self.ds


def modes() -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Gauss fractions and weights, functions and their slopes: linear ones, then integrated Legendre."""
    x, w = np.polynomial.legendre.leggauss(POINTS)
    value, slope = [0.5 * (1 - x), 0.5 * (1 + x)], [-0.5 + 0 * x, 0.5 + 0 * x]
    for k in range(1, MODES + 1):
        series = np.polynomial.Legendre.basis(k)
        value.append(series.integ(lbnd=-1)(x))
        slope.append(series(x))
    return 0.5 * (x + 1), 0.5 * w, np.array(value), 2.0 * np.array(slope)


def curve(
    section: beam_theory.Section, wall: beam_theory.Wall, u: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Places and derivative by the fraction u of a wall, complex."""
    a, b = complex(*section.points[wall.start]), complex(*section.points[wall.end])
    if wall.arc_through is None:
        return a + u * (b - a), (b - a) + 0 * u
    m = complex(*wall.arc_through)
    one, two = b - a, m - a
    centre = a + 1j * (one * abs(two) ** 2 - two * abs(one) ** 2) / (2 * (one.conjugate() * two).imag)
    to_m, to_b = cmath.phase((m - centre) / (a - centre)), cmath.phase((b - centre) / (a - centre))
    if not 0 < to_m / to_b < 1:
        to_b -= math.copysign(2 * math.pi, to_b)
    # the chord from the start keeps the digits of shallow arcs
    z = a + (a - centre) * np.expm1(1j * to_b * u)
    return z, 1j * to_b * (z - centre)


def parts_a_graph(walls: tuple[beam_theory.Wall, ...], without: int) -> bool:
    """Whether taking out one wall leaves its ends unconnected."""
    reached, edge = {walls[without].start}, [walls[without].start]
    while edge:
        here = edge.pop()
        for i, w in enumerate(walls):
            if i != without and here in (w.start, w.end):
                other = w.end if here == w.start else w.start
                if other not in reached:
                    reached.add(other)
                    edge.append(other)
    return walls[without].end not in reached


def refined(k: np.ndarray, right: np.ndarray) -> np.ndarray:
    """Solution of k x = right with rows and columns scaled to one, and what is left over taken off twice."""
    rows = 1 / np.abs(k).max(axis=1)
    columns = 1 / np.abs(k * rows[:, None]).max(axis=0)
    factors = lu_factor(k * rows[:, None] * columns)
    found = np.zeros(right.shape)
    for _ in range(3):
        found += columns[:, None] * lu_solve(factors, rows[:, None] * (right - k @ found))
    return found


class WallNetwork:
    """The solved network: quantities in the file's axes, G = 1."""

    def __init__(self, section: beam_theory.Section) -> None:
        self.section = section
        # an origin amid the points keeps digits far from the file's own
        self.origin = sum(complex(*p) for p in section.points.values()) / len(section.points)
        names = list(dict.fromkeys(n for w in section.walls for n in (w.start, w.end)))
        number = {n: i for i, n in enumerate(names)}
        self.place = [complex(*section.points[n]) - self.origin for n in names]
        self.boom = [0.0] * len(names)
        cuts: dict[str, dict[float, float]] = {w.name: {} for w in section.walls}
        for b in section.booms:
            if b.point is not None:
                self.boom[number[b.point]] += b.e * b.area
            else:
                cuts[b.wall][b.at] = cuts[b.wall].get(b.at, 0.0) + b.e * b.area
        for w in section.walls:
            # polynomials follow 1/t where t changes by less than a factor of two
            rise = w.thickness[1] / w.thickness[0]
            steps = math.ceil(abs(math.log2(rise)) - 1e-12)
            for i in range(1, steps):
                cuts[w.name].setdefault((rise ** (i / steps) - 1) / (rise - 1), 0.0)
        u, weight, value, slope = modes()
        self.pieces: list[Piece] = []
        for w in section.walls:
            at = sorted(cuts[w.name])
            nodes = [number[w.start]]
            for c in at:
                nodes.append(len(self.place))
                self.place.append(complex(curve(section, w, np.array([c]))[0][0]) - self.origin)
                self.boom.append(cuts[w.name][c])
            nodes.append(number[w.end])
            for (low, high), pair in zip(pairwise([0.0, *at, 1.0]), pairwise(nodes), strict=True):
                z, rate = curve(section, w, low + (high - low) * u)
                rate = rate * (high - low)
                t = w.thickness[0] + (low + (high - low) * u) * (w.thickness[1] - w.thickness[0])
                per_length = slope / np.abs(rate)
                self.pieces.append(
                    Piece(pair, w.name, (low, high), z - self.origin, rate * weight, np.abs(rate) * weight, t,
                          w.e * w.direct_share, w.g, value, per_length, np.zeros(0))
                )  # fmt: skip
        n = len(self.place)
        for i, p in enumerate(self.pieces):
            inner = n + i * MODES + np.arange(MODES)
            object.__setattr__(p, "unknowns", np.concatenate([p.nodes, inner]))
        n += MODES * len(self.pieces)
        self._solve(n)

    def _solve(self, n: int) -> None:
        """The bordered system: w, a, b, c against Vx, Vy and theta; the first node holds w = 0."""
        size = float(np.ptp([z.real for z in self.place]) + np.ptp([z.imag for z in self.place]))
        bridges = {w.name: parts_a_graph(self.section.walls, i) for i, w in enumerate(self.section.walls)}
        k, right = np.zeros((n + 3, n + 3)), np.zeros((n + 3, 3))
        a, b, c = range(n, n + 3)
        own = 0.0
        for p in self.pieces:
            stiff = p.g * p.t * p.ds
            k[np.ix_(p.unknowns, p.unknowns)] += (p.slope * stiff) @ p.slope.T
            right[p.unknowns, 2] -= (p.slope * stiff) @ p.arm
            own += p.g * ((p.t**3 / 3) @ p.ds) if bridges[p.wall] else 0.0
            for row, f in ((a, p.z.real), (b, p.z.imag), (c, np.ones(POINTS))):
                k[p.unknowns, row] -= (p.mode * (p.e * p.t * p.ds)) @ f
            # resultants of q along x and y
            for row, d in ((a, p.dz.real), (b, p.dz.imag)):
                k[row, p.unknowns] += (p.slope * (p.g * p.t)) @ d
                right[row, 2] -= (p.g * p.t * p.arm) @ d
        for i, boom in enumerate(self.boom):
            k[i, [a, b, c]] -= boom * np.array([self.place[i].real, self.place[i].imag, 1.0])
        # the mean of w is free and the sum of all its equations gives c: hold the first node
        k[c, 0] = 1.0
        right[a, 0] = right[b, 1] = 1.0
        self.w = refined(k, right)[:n]
        torque = np.zeros(3)
        for p in self.pieces:
            torque += self.flows(p) @ (p.arm * p.ds)
        torque[2] += own
        self.size, self.torsion_constant = size, torque[2]
        self.shear_centre = self.origin + complex(torque[1], -torque[0])

    def flows(self, piece: Piece) -> np.ndarray:
        """Flows of unit Vx and Vy through the shear centre and of a unit rate of twist, (3, q)."""
        slope = self.w[piece.unknowns].T @ piece.slope
        slope[2] += piece.arm
        return piece.g * piece.t * slope

    def flexibility(self) -> np.ndarray:
        """Integrals of q q ds/(g t) of unit Vx and Vy through the shear centre, (2, 2)."""
        out = np.zeros((2, 2))
        for p in self.pieces:
            q = self.flows(p)[:2]
            out += (q * (p.ds / (p.g * p.t))) @ q.T
        return out

    def warping_constant(self) -> float:
        """Integral of e omega^2: the warping of unit twist less what x, y and 1 explain of it."""
        rows, value, weight = [], [], []
        for p in self.pieces:
            rows.append(np.stack([p.z.real, p.z.imag, np.ones(POINTS)]))
            value.append(self.w[p.unknowns, 2] @ p.mode)
            weight.append(p.e * p.t * p.ds)
        for i, boom in enumerate(self.boom):
            z = self.place[i]
            rows.append(np.array([[z.real], [z.imag], [1.0]]))
            value.append(self.w[[i], 2])
            weight.append(np.array([boom]))
        r, v, m = np.concatenate(rows, axis=1), np.concatenate(value), np.sqrt(np.concatenate(weight))
        scale = np.abs(r).max(axis=1)
        found = np.linalg.lstsq((r / scale[:, None] * m).T, v * m, rcond=None)[0]
        left = v * m - (r / scale[:, None] * m).T @ found
        return float(left @ left)
