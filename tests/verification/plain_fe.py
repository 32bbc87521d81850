"""A plain finite-element program for the tests: triangles of any order on grids of quadrilaterals.

It shares nothing with fe_models: its own grids of the exact outline, its own element, its own equations;
numpy and scipy only. What it gives for torsion are bounds whatever its mesh: a compatible field never has
less than the exact energy and a balanced one never more (Saint-Venant torsion with G = 1; Timoshenko and
Goodier, Theory of Elasticity, 3rd ed., chapter 10).
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from scipy.sparse import coo_matrix, csc_matrix
from scipy.sparse.linalg import splu


def graded(length: float, first: float, last: float, ratio: float = 1.6) -> np.ndarray:
    """Fractions 0 ... 1: steps grow by ``ratio`` from ``first`` at the start and from ``last`` at the end."""
    up, down = [first], [last]
    while sum(up) + sum(down) < length:
        (up if up[-1] <= down[-1] else down).append(ratio * min(up[-1], down[-1]))
    steps = np.array(up + down[::-1])
    return np.concatenate([[0.0], np.cumsum(steps) / steps.sum()])


@dataclass(frozen=True)
class Grid:
    """Triangles of one order: nodes (n, 2), elements (e, k) with the corners first."""

    order: int
    nodes: np.ndarray
    elements: np.ndarray


def grid(quads: Sequence[np.ndarray], order: int = 3) -> Grid:
    """Triangles of quadrilaterals, (m, 4, 2) arrays of corners anticlockwise; equal places are one node."""
    corners = np.concatenate([np.asarray(q, dtype=float).reshape(-1, 4, 2) for q in quads])
    triangles = np.concatenate([corners[:, [0, 1, 2]], corners[:, [0, 2, 3]]])
    one, two = triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0]
    triangles = triangles[one[:, 0] * two[:, 1] - one[:, 1] * two[:, 0] > 0]
    x, y = lattice(order).T
    places = np.stack([1 - x - y, x, y], axis=-1) @ triangles
    size = float(np.ptp(places.reshape(-1, 2), axis=0).max())
    keys = np.rint(places.reshape(-1, 2) / (1e-12 * size)).astype(np.int64)
    _, first, number = np.unique(keys, axis=0, return_index=True, return_inverse=True)
    return Grid(order, places.reshape(-1, 2)[first], number.reshape(len(places), -1))


def lattice(order: int) -> np.ndarray:
    """Reference places of the nodes, corners first, (k, 2)."""
    rest = [(i, j) for i in range(order + 1) for j in range(order + 1 - i)]
    corners = [(0, 0), (order, 0), (0, order)]
    return np.array(corners + [p for p in rest if p not in corners]) / order


def block(corners: np.ndarray, u: np.ndarray, v: np.ndarray) -> np.ndarray:
    """Small quadrilaterals of a bilinear block with corners (4, 2) anticlockwise, (m, 4, 2)."""
    u, v = np.meshgrid(u, v, indexing="ij")
    shape = np.stack([(1 - u) * (1 - v), u * (1 - v), u * v, (1 - u) * v], axis=-1)
    p = shape @ corners
    return np.stack([p[:-1, :-1], p[1:, :-1], p[1:, 1:], p[:-1, 1:]], axis=2).reshape(-1, 4, 2)


def fan(centre: np.ndarray, rim: np.ndarray, rings: np.ndarray) -> np.ndarray:
    """Small quadrilaterals between copies of a row of points (k, 2), scaled by ``rings`` about a centre.

    Rings from 0 give triangles at the centre, where two corners of a quadrilateral fall together.
    """
    r, on = np.meshgrid(rings, np.arange(len(rim)), indexing="ij")
    p = centre + r[..., None] * (rim - centre)[on]
    return np.stack([p[:-1, :-1], p[1:, :-1], p[1:, 1:], p[:-1, 1:]], axis=2).reshape(-1, 4, 2)


def rings(smallest: float, ratio: float = 0.4) -> np.ndarray:
    """0, then scales from about ``smallest`` to 1 that grow by 1/ratio."""
    count = int(np.ceil(np.log(smallest) / np.log(ratio)))
    return np.concatenate([[0.0], ratio ** np.arange(count, -1.0, -1.0)])


def row(*parts: tuple[np.ndarray, np.ndarray, int]) -> np.ndarray:
    """Points along straight parts (from, to, count), each end once, (k, 2)."""
    found = [a + np.arange(n)[:, None] / n * (b - a) for a, b, n in parts]
    return np.concatenate([*found, parts[-1][1][None]])


def rectilinear(xs: np.ndarray, ys: np.ndarray, inside: Callable[[float, float], bool]) -> np.ndarray:
    """Small rectangles between grid lines whose middles lie inside, (m, 4, 2)."""
    found = [
        [(a, c), (b, c), (b, d), (a, d)]
        for a, b in pairwise(xs)
        for c, d in pairwise(ys)
        if inside(0.5 * (a + b), 0.5 * (c + d))
    ]
    return np.array(found)


def basis(order: int, at: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Values (q, k) and reference gradients (q, k, 2) of the Lagrange triangle."""
    powers = [(i, j) for i in range(order + 1) for j in range(order + 1 - i)]

    def table(p: np.ndarray, di: int = 0, dj: int = 0) -> np.ndarray:
        columns = [
            (i if di else 1) * (j if dj else 1) * p[:, 0] ** max(i - di, 0) * p[:, 1] ** max(j - dj, 0)
            for i, j in powers
        ]
        return np.stack(columns, axis=-1)

    inverse = np.linalg.inv(table(lattice(order)))
    return table(at) @ inverse, np.stack([table(at, 1, 0) @ inverse, table(at, 0, 1) @ inverse], axis=-1)


def quadrature(order: int) -> tuple[np.ndarray, np.ndarray]:
    """Gauss points of a square folded onto the triangle, (q, 2) and (q,): exact to degree 2 order + 2."""
    g, w = np.polynomial.legendre.leggauss(order + 2)
    g, w = 0.5 * (g + 1), 0.5 * w
    x = g[:, None] * (1 - g)
    return np.column_stack([x.ravel(), np.tile(g, len(g))]), (w[:, None] * w * (1 - g)).ravel()


class Plate:
    """Integrals over a grid, from its centroid."""

    def __init__(self, of: Grid) -> None:
        self.elements, self.order = of.elements, of.order
        points, weights = quadrature(of.order)
        value, slope = basis(of.order, points)
        rough = of.nodes - of.nodes.mean(axis=0)
        for _ in range(2):
            corners = rough[of.elements[:, :3]]
            sides = np.stack([corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]], axis=-1)
            area = np.linalg.det(sides)
            assert (area > 0).all()
            self.weights = weights * area[:, None]
            self.points = np.einsum("qk,eka->eqa", value, rough[of.elements])
            rough = rough - np.einsum("eq,eqa->a", self.weights, self.points) / self.weights.sum()
        self.nodes, self.value = rough, value
        self.centroid = of.nodes[0] - rough[0]
        self.slope = np.einsum("qkb,eba->eqka", slope, np.linalg.inv(sides))
        x, y = self.points[..., 0], self.points[..., 1]
        self.area, self.xx, self.yy, self.xy = (
            float((self.weights * f).sum()) for f in (np.ones_like(x), y * y, x * x, x * y)
        )
        scaled = self.slope * self.weights[:, :, None, None]
        local = np.einsum("eqia,eqja->eij", scaled, self.slope, optimize=True)
        k = of.elements.shape[1]
        rows = np.repeat(of.elements, k, axis=1).ravel()
        columns = np.tile(of.elements, (1, k)).ravel()
        n = len(rough)
        self.stiffness: csc_matrix = coo_matrix((local.ravel(), (rows, columns)), shape=(n, n)).tocsc()

    def load(self, density: np.ndarray) -> np.ndarray:
        """Integral of density (e, q) times each basis function, (n,)."""
        local = (self.weights * density) @ self.value
        return np.bincount(self.elements.ravel(), local.ravel(), len(self.nodes))

    def flux_load(self, field: np.ndarray) -> np.ndarray:
        """Integral of field (e, q, 2) . gradient of each basis function, (n,)."""
        local = np.einsum("eq,eqka,eqa->ek", self.weights, self.slope, field)
        return np.bincount(self.elements.ravel(), local.ravel(), len(self.nodes))

    def gradient(self, at_nodes: np.ndarray) -> np.ndarray:
        return np.einsum("eqka,ek->eqa", self.slope, at_nodes[self.elements])

    def energy(self, field: np.ndarray) -> float:
        return float(np.sum(self.weights * (field**2).sum(axis=-1)))

    @property
    def arm(self) -> np.ndarray:
        """R = (-y, x), (e, q, 2)."""
        return np.stack([-self.points[..., 1], self.points[..., 0]], axis=-1)

    def boundary_loops(self) -> list[np.ndarray]:
        """Nodes on each boundary, the one round the largest area first."""
        x, y = lattice(self.order).T
        sides = [
            (0, 1, np.flatnonzero(y == 0)),
            (1, 2, np.flatnonzero(x + y > 1 - 1e-9)),
            (2, 0, np.flatnonzero(x == 0)),
        ]
        t = self.elements
        edges = np.concatenate([t[:, [a, b]] for a, b, _ in sides])
        nodes = np.concatenate([t[:, on] for _, _, on in sides])
        _, first, count = np.unique(np.sort(edges, axis=1), axis=0, return_index=True, return_counts=True)
        onward = {int(edges[i, 0]): (int(edges[i, 1]), nodes[i]) for i in first[count == 1]}
        found = []
        while onward:
            here, corners, on = next(iter(onward)), [], []
            while here in onward:
                corners.append(here)
                here, along = onward.pop(here)
                on.append(along)
            found.append((abs(_area(self.nodes[corners])), np.unique(np.concatenate(on))))
        return [nodes for _, nodes in sorted(found, key=lambda loop: -loop[0])]


def _area(p: np.ndarray) -> float:
    q = np.roll(p, -1, axis=0)
    return 0.5 * float(np.sum(p[:, 0] * q[:, 1] - q[:, 0] * p[:, 1]))


def _solve(matrix: csc_matrix, load: np.ndarray) -> np.ndarray:
    factors = splu(matrix, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True})
    found = factors.solve(load)
    return found + factors.solve(load - matrix @ found)


def warping(on: Plate) -> np.ndarray:
    """omega at the nodes: minimises the integral of |grad omega + R|^2."""
    omega = np.zeros(len(on.nodes))
    omega[1:] = _solve(on.stiffness[1:, 1:].tocsc(), -on.flux_load(on.arm)[1:])
    return omega


def torsion_above(on: Plate) -> float:
    """J from above: the integral of |grad omega + R|^2 of a compatible field."""
    return on.energy(on.gradient(warping(on)) + on.arm)


def torsion_below(on: Plate) -> float:
    """J from below: 2 integral R . s - |s|^2, s = curl phi, phi zero outside and constant on each hole."""
    number = np.zeros(len(on.nodes), dtype=np.int64)
    boundaries = on.boundary_loops()
    for i, loop in enumerate(boundaries):
        number[loop] = -1 - i
    free, holes = number == 0, len(boundaries) - 1
    number[free] = holes + np.arange(free.sum())
    for i in range(holes):
        number[number == -2 - i] = i
    kept = np.flatnonzero(number >= 0)
    n = int(number.max()) + 1
    fold = csc_matrix((np.ones(len(kept)), (kept, number[kept])), shape=(len(on.nodes), n))

    def curl(slope: np.ndarray) -> np.ndarray:
        return np.stack([slope[..., 1], -slope[..., 0]], axis=-1)

    # R . curl psi = R_x psi_y - R_y psi_x
    turned = np.stack([-on.arm[..., 1], on.arm[..., 0]], axis=-1)
    phi = fold @ _solve((fold.T @ on.stiffness @ fold).tocsc(), fold.T @ on.flux_load(turned))
    s = curl(on.gradient(phi))
    return float(np.sum(on.weights * (2 * (on.arm * s).sum(axis=-1) - (s**2).sum(axis=-1))))


def shear_area_above(on: Plate, axis: int) -> float:
    """A_Vx (axis 0) or A_Vy (axis 1), nu = 0, from above: 1/A_V >= 2 integral f chi - |grad chi|^2."""
    f = on.points @ np.linalg.solve(np.array([[on.yy, on.xy], [on.xy, on.xx]]), np.eye(2)[axis])
    load = on.load(f)
    chi = np.zeros(len(on.nodes))
    chi[1:] = _solve(on.stiffness[1:, 1:].tocsc(), load[1:])
    return 1.0 / (2 * float(load @ chi) - on.energy(on.gradient(chi)))


def shear_centre(on: Plate) -> np.ndarray:
    """Trefftz's shear centre from the warping function's moments, (2,): an approximation, no bound."""
    omega = np.einsum("qk,ek->eq", on.value, warping(on)[on.elements])
    mean = float((on.weights * omega).sum()) / on.area
    x, y = on.points[..., 0], on.points[..., 1]
    wx, wy = (float((on.weights * (omega - mean) * r).sum()) for r in (x, y))
    # omega_C - (y_s x - x_s y) is orthogonal to x and y
    y_s, minus_x_s = np.linalg.solve(np.array([[on.yy, on.xy], [on.xy, on.xx]]), [wx, wy])
    return on.centroid + np.array([-minus_x_s, y_s])
