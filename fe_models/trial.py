"""The method on a mesh that the caller brings: for checks of the elements, equations and fields themselves.

Uniform meshes of a given size, coarse orders and prescribed strains are no use for answers; with them the
observed order of convergence is compared with the expected one.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike

from .band import Array, band
from .boundary import Arc, Piece
from .contour import loops
from .element import element, gradients, values
from .fields import Fields, Moduli, Pair, inertia, solve, solve_pairs
from .mesh import Bend, Mesh, StripMesh
from .section import Section, Wall
from .space import Equations, Space, equations, space
from .stress_function import Contours, contours

# Vertices this close to a circle, as a share of its radius, lie on it.
ON_CIRCLE = 1e-9


@dataclass(frozen=True)
class Trial:
    """A mesh with an element order and moduli.

    Parameters
    ----------
    mesh : Mesh
    order : int
        1 to 6.
    moduli : Moduli
        Ratios of each element [-].
    """

    mesh: Mesh
    order: int
    moduli: Moduli

    @cached_property
    def space(self) -> Space:
        """The space in the caller's coordinates."""
        return space(self.mesh, self.order, np.zeros(2))

    @cached_property
    def contours(self) -> Contours:
        """Boundary values of the stress function."""
        return contours(self.space, self.moduli.e)

    @cached_property
    def above(self) -> Equations:
        """Equations of the kinematic side."""
        return equations(self.space, self.moduli.g, np.arange(self.space.count) - 1)

    @cached_property
    def below(self) -> Equations:
        """Equations of the static side."""
        return equations(self.space, 1.0 / self.moduli.g, self.contours.unknown)

    def pair(self, slopes: ArrayLike, strain: Array) -> Pair:
        """Both fields for a load f = a x + b y and a prescribed strain, see ``fields.solve_pairs``.

        Parameters
        ----------
        slopes : (2,) array
            a and b; the load of the whole section must vanish.
        strain : (e, q, 2) array
            Prescribed strain at the quadrature points.
        """
        pairs, _ = solve_pairs(
            self.above, self.below, self.contours, self.moduli, [np.asarray(slopes, dtype=float)], [strain]
        )
        return pairs[0]

    def fields(self) -> Fields:
        """Torsion and flexure about the centroid, as in every solution."""
        centroid = inertia(self.space, self.moduli, np.zeros(2)).centroid
        on = space(self.mesh, self.order, centroid)
        return solve(on, self.moduli, inertia(on, self.moduli, centroid))


def trial(
    vertices: Array,
    triangles: ArrayLike,
    order: int,
    *,
    e: ArrayLike = 1.0,
    g: ArrayLike = 1.0,
    circles: Sequence[tuple[tuple[float, float], float]] = (),
) -> Trial:
    """A trial on given triangles.

    Parameters
    ----------
    vertices : (v, 2) array
        [L]
    triangles : (n, 3) array of int
        Anticlockwise.
    order : int
    e, g : floats or (n,) arrays
        Moduli of each triangle [-].
    circles : sequence of (centre, radius)
        Boundary edges with both ends on one of these circles follow it [L].

    Returns
    -------
    Trial
        Places as given [L].
    """
    cells = np.asarray(triangles, dtype=np.int64)
    n = len(cells)
    zero = np.zeros(n, dtype=np.int64)
    plain = Mesh(np.asarray(vertices, dtype=float), cells, zero, zero, np.zeros(n), {}, ("trial",))
    bends = [b for centre, radius in circles for b in _bends(plain, np.array(centre), radius)]
    mesh = Mesh(plain.vertices, cells, zero, zero, plain.boom, {}, plain.labels, tuple(bends))
    return Trial(mesh, order, _moduli(n, e, g))


def strip_trial(
    section: Section, wall: Wall, columns: int, layers: int, order: int, *, e: ArrayLike = 1.0
) -> Trial:
    """A trial on one wall of a section alone, as strips are meshed: ``columns`` by ``layers`` by two.

    Parameters
    ----------
    section, wall : Section, Wall
    columns, layers : int
        Along and across the wall.
    order : int
        Of the elements, 1 to 6.
    e : float or (n,) array
        Young's modulus of each triangle over that of the base material [-].

    Returns
    -------
    Trial
    """
    line = band(wall, section)
    s, n = np.linspace(0.0, line.length, columns + 1), np.linspace(-1.0, 1.0, layers + 1)
    at_s, at_n = np.meshgrid(s, n, indexing="ij")
    ids = np.arange(at_s.size).reshape(at_s.shape)
    p, q, r, t = ids[:-1, :-1], ids[1:, :-1], ids[1:, 1:], ids[:-1, 1:]
    own = np.stack([np.stack([p, q, r], -1), np.stack([p, r, t], -1)], axis=2).reshape(-1, 3)
    zero = np.zeros(len(own), dtype=np.int64)
    table = np.arange(len(own)).reshape(columns, 2 * layers)
    places = line.place(at_s, at_n * line.half(at_s)).reshape(-1, 2)
    strips = {wall.name: StripMesh(line, s, n, table)}
    mesh = Mesh(places, own, zero, zero, np.zeros(len(own)), strips, ("trial",))
    return Trial(mesh, order, _moduli(len(own), e, 1.0))


def _moduli(n: int, e: ArrayLike, g: ArrayLike) -> Moduli:
    return Moduli(*(np.array(np.broadcast_to(np.asarray(v, dtype=float), n)) for v in (g, e)))


def _bends(mesh: Mesh, centre: Array, radius: float) -> list[Bend]:
    """Boundary edges of a mesh that lie on a circle, as curved edges."""
    made = []
    for loop in loops(mesh):
        for a, b in zip(loop.vertices.tolist(), np.roll(loop.vertices, -1).tolist(), strict=True):
            p, q = mesh.vertices[a] - centre, mesh.vertices[b] - centre
            if max(abs(np.hypot(*p) - radius), abs(np.hypot(*q) - radius)) > ON_CIRCLE * radius:
                continue
            first = float(np.arctan2(p[1], p[0]))
            turn = float(np.arctan2(p[0] * q[1] - p[1] * q[0], p @ q))
            arc = Arc(centre, radius, first, first + turn)
            made.append(Bend(a, b, Piece("arc", mesh.vertices[a], mesh.vertices[b], arc=arc), (0.0, 1.0)))
    return made


def imbalance(fields: Fields) -> Array:
    """What the static fields of torsion, unit Vx and unit Vy leave unbalanced.

    The largest  integral of s . grad v - e f v  of all basis functions v of one order more than the fields',
    over the largest contribution of one element. It vanishes only for a field in equilibrium point by point,
    from element to element and on every boundary, holes included.

    Parameters
    ----------
    fields : Fields

    Returns
    -------
    (3,) array
        [-]
    """
    on, el = fields.space, fields.space.element
    more, at = el.order + 1, el.points
    finer = element(more)
    tested = replace(
        space(on.mesh, more, fields.inertia.centroid),
        element=replace(
            finer, points=at, weights=el.weights, values=values(more, at), gradients=gradients(more, at)
        ),
    )
    found = []
    for pair, slopes in zip(
        (fields.torsion, *fields.flexure),
        (np.zeros(2), fields.inertia.slopes(1.0, 0.0), fields.inertia.slopes(0.0, 1.0)),
        strict=True,
    ):
        load = tested.load(fields.moduli.e[:, None] * (on.points @ slopes))
        left = np.abs(load - tested.flux_load(pair.static)).max()
        found.append(float(left) / tested.flux_scale(pair.static))
    return np.array(found)
