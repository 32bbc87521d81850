"""The solved section: quantities, flows, warping and self-checks at one level of theory."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

import numpy as np

from beam_theory.arrays import Floats
from beam_theory.errors import LoadError, UndefinedQuantity
from beam_theory.flow import Flow
from beam_theory.inertia import Inertia
from beam_theory.joints import Joint
from beam_theory.network import Network
from beam_theory.quantity import Check, Quantity
from beam_theory.section import Load
from beam_theory.shear import Shear
from beam_theory.torsion import Torsion
from beam_theory.warping import Warping, along

__all__ = ["Solution"]


@dataclass(frozen=True)
class Solution:
    """Thin-walled theory of one section.

    Parameters
    ----------
    level : str
        "midline", "corrected" or "lumped".
    graph, mass, twist, shear, warp : Network, Inertia, Torsion, Shear, Warping
        What the quantities come from; no shear and warp where theory has none.
    shear_centre : complex or None
        x + i y in the file's axes [L].
    quantities : mapping of name to Quantity
        Positions in the file's axes [L], second moments about the centroid, e-weighted [L^4]; J [L^4] and
        shear areas [L^2] for G_base = 1.
    checks : tuple of Check
    notes : tuple of str
        What a reader has to know about this level for this section.
    joints : tuple of Joint
        Level "corrected" only: every point with its correction and its source.
    """

    level: str
    graph: Network = field(repr=False)
    mass: Inertia = field(repr=False)
    twist: Torsion = field(repr=False)
    shear: Shear | None = field(repr=False)
    warp: Warping | None = field(repr=False)
    shear_centre: complex | None
    quantities: Mapping[str, Quantity]
    checks: tuple[Check, ...]
    notes: tuple[str, ...] = ()
    joints: tuple[Joint, ...] = field(default=(), repr=False)

    @property
    def cells(self) -> tuple[tuple[tuple[str, int], ...], ...]:
        """Each cell as (wall name, +1 along / -1 against its own direction), anticlockwise."""
        names = [wall.name for wall in self.graph.section.walls]
        return tuple(tuple((names[w], sign) for w, sign in loop) for loop in self.graph.cells.loops)

    @property
    def cell_areas(self) -> Floats:
        """Area enclosed by the midlines of each cell, (c,) [L^2]."""
        return self.graph.cell_area

    def in_cell(self, wall: str) -> bool:
        """Whether a wall belongs to a cell."""
        self.graph.rows(wall)
        return bool(self.graph.cells.in_cell[self.graph.walls[wall][0]])

    def unit_flow(self, name: str) -> Flow:
        """Flow of "Vx" or "Vy" = 1 through the own shear centre, or of "T" = 1.

        Raises
        ------
        UndefinedQuantity
            Where theory defines no shear flow for the section.
        LoadError
            For another name.
        """
        loads = {"Vx": Load(name, (1.0, 0.0)), "Vy": Load(name, (0.0, 1.0)), "T": Load(name, torque=1.0)}
        if name not in loads:
            raise LoadError(f"unit load: one of {sorted(loads)}, got {name!r}")
        return self.flow(loads[name])

    def for_load(self, load: Load) -> Solution:
        """The solution that carries a load: this one; at level "lumped" that with the load's own booms."""
        return self

    def flow(self, load: Load) -> Flow:
        """Shear flow of a load: its shear at zero twist and its torque about the shear centre.

        T_sc = T + (x_p - x_s) Vy - (y_p - y_s) Vx, shared between cells and open walls as their stiffness.

        Raises
        ------
        UndefinedQuantity
            When the load has a shear that theory cannot carry.
        """
        vx, vy = load.shear
        torque = load.torque
        slope = 0.0 + 0.0j
        start = np.zeros(len(self.graph.pieces.t0))
        if vx != 0.0 or vy != 0.0:
            if self.shear is None or self.shear_centre is None:
                raise UndefinedQuantity(f"load {load.name!r}: shear flow: {self.mass.reason}")
            slope = self.mass.slope(vx, vy)
            start = (np.conj(slope) * self.shear.start).real
            if load.through is not None:
                arm = complex(*load.through) - self.shear_centre
                torque += arm.real * vy - arm.imag * vx
        twist = torque / self.twist.constant
        flow = twist * self.graph.cell_sum(self.twist.cell_flow)
        rest = twist * self.twist.open_part
        if self.level == "corrected":
            # Flows act on the midline while J counts the thickness: the walls themselves carry what is left.
            rest = torque - 2.0 * twist * float(self.graph.cell_area @ self.twist.cell_flow)
        return Flow(self.graph, self.mass.centroid, slope, start, flow, torque, rest, twist)

    def warping_at(self, wall: str, fractions: Floats) -> Floats:
        """Warping function omega at fractions (n,) of a wall, (n,) [L^2]; displacement = omega times twist.

        Raises
        ------
        UndefinedQuantity
            Where there is no shear centre to twist about.
        """
        if self.warp is None:
            raise UndefinedQuantity(f"warping function: {self.mass.reason}")
        piece, u = self.graph.place(wall, fractions)
        rise = along(self.graph, self.mass, self.warp.cell_flow, self.warp.pole, piece, u[:, None])[:, 0]
        return np.asarray(self.warp.node[self.graph.pieces.start[piece]] + rise)

    def surface_shear(self, torque: float, wall: str, fractions: Floats) -> Floats:
        """Saint-Venant shear stress g T t/J at the faces of a wall in no cell, (n,) [F/L^2]; zero in a cell.

        torque is the whole torque about the shear centre [F L]; the stress runs along +s on the face to the
        right of the wall's direction where the result is positive, and against it on the other face.
        """
        piece, u = self.graph.place(wall, fractions)
        p = self.graph.pieces
        if self.in_cell(wall):
            return np.zeros(len(u))
        t = p.t0[piece] + (p.t1[piece] - p.t0[piece]) * u
        return np.asarray(p.g[piece] * torque * t / self.twist.constant)

    def place(self, wall: str, fractions: Floats) -> Floats:
        """Midline coordinates at fractions (n,) of a wall, (n, 2) [L]."""
        piece, u = self.graph.place(wall, fractions)
        xy = self.graph.pieces.curves.pick(piece).position(u[:, None])[:, 0]
        return np.column_stack([xy.real, xy.imag])

    def require(self, name: str) -> float:
        """Value of a quantity; raises UndefinedQuantity with the reason when there is none."""
        return self.quantities[name].require(name)


def frozen(quantities: dict[str, Quantity]) -> Mapping[str, Quantity]:
    """A mapping that cannot be changed."""
    return MappingProxyType(quantities)
