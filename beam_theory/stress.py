"""Direct, shear and von Mises stress of a load along every wall, at both faces."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.errors import LoadError, UndefinedQuantity
from beam_theory.faces import has_warping
from beam_theory.flow import Flow
from beam_theory.section import Load, Wall
from beam_theory.solution import Solution

__all__ = ["KINDS", "BoomStress", "Stress", "StressPeak", "stress"]

KINDS = ("direct", "shear", "von_mises")
_GOLDEN = 0.6180339887498949


@dataclass(frozen=True)
class StressPeak:
    """Largest stress of a kind in magnitude, with its sign.

    Attributes
    ----------
    kind : "direct", "shear" or "von_mises"
    wall, at : the wall, and the fraction of its length [-]
    face : "left" or "right" of the wall's direction
    stress : [F/L^2]
    """

    kind: str
    wall: str
    at: float
    face: str
    stress: float


@dataclass(frozen=True)
class BoomStress:
    """Direct stress of a boom.

    Attributes
    ----------
    boom : its number in the section, from 0
    stress : its direct stress, tension positive [F/L^2]
    """

    boom: int
    stress: float


@dataclass(frozen=True)
class Stress:
    """Stress of one load; every method returns (n, 2): the faces left and right of the wall's direction.

    Parameters
    ----------
    solution, load : Solution, Load
        What it is of.
    slope : complex
        a + i b of the bending stress e (a x + b y) [F/L^3].
    axial : float
        N/A [F/L^2].
    warping : float
        B/I_w [F/L^4].
    flow : Flow or None
        None where the load has neither shear nor torque.
    """

    solution: Solution = field(repr=False)
    load: Load
    slope: complex
    axial: float
    warping: float
    flow: Flow | None = field(repr=False)

    def direct(self, wall: str, fractions: Floats) -> Floats:
        """sigma = e (N/A + a x + b y + B omega/I_w), (n, 2) [F/L^2]; zero in a wall with direct_share 0."""
        piece, u = self.solution.graph.place(wall, fractions)
        p = self.solution.graph.pieces
        own = self._wall(wall)
        if own.direct_share == 0.0:
            return np.zeros((len(u), 2))
        curves = p.curves.pick(piece)
        z, tangent = curves.position(u[:, None])[:, 0], curves.tangent(u[:, None])[:, 0]
        half = 0.5 * (p.t0[piece] + (p.t1 - p.t0)[piece] * u)
        faces = np.stack([z + 1j * tangent * half, z - 1j * tangent * half], axis=1) - self._centroid
        value = self.axial + (np.conj(self.slope) * faces).real
        if self.warping != 0.0:
            omega = np.repeat(self.solution.warping_at(wall, fractions)[:, None], 2, axis=1)
            if self.solution.level == "corrected" and self.solution.shear_centre is not None:
                # Across a wall omega changes by -n r_t, as in the secondary warping constant.
                along = (np.conj(tangent) * (z - self.solution.shear_centre)).real
                omega = omega + np.stack([-half * along, half * along], axis=1)
            value = value + self.warping * omega
        return np.asarray(own.e * value)

    def shear(self, wall: str, fractions: Floats) -> Floats:
        """tau along the wall's direction, (n, 2) [F/L^2]: q/t, and -+ g T t/J in walls in no cell.

        At level "corrected" walls of cells have the second part too, and in an arc of curvature k the mean
        stress q/t grows towards the inside: d tau/dn = -2 g twist + k tau with n to the left (the balance of
        a curved layer; a round tube then has tau = T r/J exactly).
        """
        piece, u = self.solution.graph.place(wall, fractions)
        if self.flow is None:
            return np.zeros((len(u), 2))
        p = self.solution.graph.pieces
        t = p.t0[piece] + (p.t1 - p.t0)[piece] * u
        mean = self.flow.at(wall, fractions) / t
        twist = np.zeros(len(u))
        if not self.solution.in_cell(wall) or self.solution.level == "corrected":
            twist = p.g[piece] * t * self.flow.twist
        if self.solution.level == "corrected":
            twist = twist - 0.5 * t * mean * p.curves.sweep[piece] / p.length[piece]
        return np.stack([mean - twist, mean + twist], axis=1)

    def von_mises(self, wall: str, fractions: Floats) -> Floats:
        """sqrt(sigma^2 + 3 tau^2), (n, 2) [F/L^2]."""
        sigma, tau = self.direct(wall, fractions), self.shear(wall, fractions)
        return np.asarray(np.sqrt(sigma**2 + 3.0 * tau**2))

    def booms(self) -> tuple[BoomStress, ...]:
        """Direct stress of every boom of the section, at its point on the midline."""
        section = self.solution.graph.section
        out = []
        for number, boom in enumerate(section.booms):
            wall, at = boom.wall, boom.at
            if boom.point is not None:
                wall = next(w.name for w in section.walls if boom.point in (w.start, w.end))
                at = 0.0 if self._wall(wall).start == boom.point else 1.0
            assert wall is not None
            fraction = np.array([at], dtype=np.float64)
            z = complex(*self.solution.place(wall, fraction)[0]) - self._centroid
            value = self.axial + (self.slope.conjugate() * z).real
            if self.warping != 0.0:
                value += self.warping * float(self.solution.warping_at(wall, fraction)[0])
            out.append(BoomStress(number, boom.e * value))
        return tuple(out)

    def largest(self, kind: str, wall: str | None = None) -> StressPeak:
        """Largest stress of a kind in magnitude and where, in one wall or in all.

        Searched at ends, booms and 33 places of every stretch, then narrowed down by golden section.

        Raises
        ------
        LoadError
            For an unknown kind or wall.
        """
        if kind not in KINDS:
            raise LoadError(f"kind of stress: one of {KINDS}, got {kind!r}")
        along: Callable[[str, Floats], Floats] = getattr(self, kind)
        best = StressPeak(kind, "", 0.0, "left", 0.0)
        for name in (wall,) if wall is not None else tuple(self.solution.graph.walls):
            found = self._peak(kind, name, along)
            if not best.wall or abs(found.stress) > abs(best.stress) * (1.0 + 1e-12):
                best = found
        return best

    def _peak(self, kind: str, wall: str, along: Callable[[str, Floats], Floats]) -> StressPeak:
        """Largest stress of one wall."""
        p = self.solution.graph.pieces
        rows = self.solution.graph.rows(wall)
        best = StressPeak(kind, wall, 0.0, "left", 0.0)
        for first, last in zip(p.first[rows].tolist(), p.last[rows].tolist(), strict=True):
            # A boom belongs to the stretch before it: start just after.
            low = first + 1e-13 if first > 0.0 else 0.0
            at = np.linspace(low, last, 33)
            value = along(wall, at)
            row, face = divmod(int(np.argmax(np.abs(value))), 2)
            low, high = float(at[max(row - 1, 0)]), float(at[min(row + 1, 32)])
            place, stress = float(at[row]), float(value[row, face])
            for _ in range(48):
                a, b = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
                pair = along(wall, np.array([a, b]))[:, face]
                if abs(pair[0]) > abs(pair[1]):
                    high = b
                else:
                    low = a
                i = int(np.argmax(np.abs(pair)))
                if abs(pair[i]) > abs(stress):
                    place, stress = (a, b)[i], float(pair[i])
            if abs(stress) > abs(best.stress):
                best = StressPeak(kind, wall, place, ("left", "right")[face], stress)
        return best

    @property
    def _centroid(self) -> complex:
        return complex(self.solution.require("centroid_x"), self.solution.require("centroid_y"))

    def _wall(self, name: str) -> Wall:
        return self.solution.graph.section.walls[self.solution.graph.walls[name][0]]


def stress(solution: Solution, load: Load) -> Stress:
    """Stress of N, Mx, My, Vx, Vy on a line, T and B.

    [Iyy Ixy; Ixy Ixx][a b] = [My Mx] with the second moments of the solution's level.

    Parameters
    ----------
    solution : Solution
    load : Load

    Returns
    -------
    Stress
        [F/L^2] at any place of any wall.

    Raises
    ------
    UndefinedQuantity
        Where theory has no stiffness against a resultant of the load.
    """
    axial = 0.0
    if load.axial != 0.0:
        axial = load.axial / solution.require("area")
    slope = _bending(solution, load)
    warping = 0.0
    if load.bimoment != 0.0:
        if solution.warp is None or not has_warping(solution):
            raise UndefinedQuantity(f"load {load.name!r}: bimoment: the midline warping constant is zero")
        warping = load.bimoment / solution.require("warping_constant")
    flow = solution.flow(load) if load.shear != (0.0, 0.0) or load.torque != 0.0 else None
    return Stress(solution, load, slope, axial, warping, flow)


def _bending(solution: Solution, load: Load) -> complex:
    """a + i b; on a section with stiffness in one plane only, for moments in that plane."""
    mx, my = load.moment
    if mx == 0.0 and my == 0.0:
        return 0.0 + 0.0j
    names = ("second_moment_yy", "product_moment_xy", "second_moment_xx")
    yy, xy, xx = (solution.quantities[name].value or 0.0 for name in names)
    matrix, moment = np.array([[yy, xy], [xy, xx]]), np.array([my, mx])
    if xx + yy <= 0.0:
        raise UndefinedQuantity(f"load {load.name!r}: bending: {solution.mass.reason}")
    found, _, _, _ = np.linalg.lstsq(matrix, moment, rcond=1e-12)
    if float(np.abs(matrix @ found - moment).max()) > 1e-9 * float(np.abs(moment).max()):
        raise UndefinedQuantity(f"load {load.name!r}: bending: {solution.mass.reason}")
    return complex(found[0], found[1])
