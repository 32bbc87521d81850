"""Continuous piecewise polynomials on a mesh: numbering, geometry at quadrature points, integrals.

Sizes used throughout: e elements, k nodes of an element, q quadrature points, N nodes.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.sparse import csc_matrix
from scipy.sparse.linalg import SuperLU, splu

from .band import Array
from .element import EDGES, Element, element
from .errors import SolveError
from .mesh import Index, Mesh


@dataclass(frozen=True)
class Space:
    """Lagrange space of one order on a mesh.

    Parameters
    ----------
    mesh : Mesh
    element : Element
    nodes : (e, k) array of int
        Global node numbers of each element; the mesh's vertices come first.
    count : int
        Number of nodes N.
    places : (e, k, 2) array
        Node positions [L].
    offsets : (e, k, 2) array
        The same from each element's first corner: positions would lose the digits of tiny elements [L].
    """

    mesh: Mesh
    element: Element
    nodes: Index
    count: int
    places: Array
    offsets: Array

    @cached_property
    def jacobian(self) -> Array:
        """d(x, y)/d(reference) at the quadrature points, (e, q, 2, 2)."""
        return np.einsum("eka,qkb->eqab", self.offsets, self.element.gradients)

    @cached_property
    def inverse(self) -> Array:
        """Inverse of the Jacobian, (e, q, 2, 2)."""
        j, d = self.jacobian, self.determinant
        flipped = np.stack(
            [np.stack([j[..., 1, 1], -j[..., 0, 1]], -1), np.stack([-j[..., 1, 0], j[..., 0, 0]], -1)],
            axis=-2,
        )
        return flipped / d[..., None, None]

    @cached_property
    def determinant(self) -> Array:
        """Determinant of the Jacobian, (e, q) [L^2]."""
        j = self.jacobian
        d = j[..., 0, 0] * j[..., 1, 1] - j[..., 0, 1] * j[..., 1, 0]
        if not (d > 0.0).all():
            raise SolveError(f"{int((~(d > 0.0)).any(axis=1).sum())} elements of the mesh are inverted")
        return d

    @cached_property
    def weights(self) -> Array:
        """Quadrature weights with the area, (e, q) [L^2]."""
        return self.element.weights * self.determinant

    @cached_property
    def points(self) -> Array:
        """Quadrature points, (e, q, 2) [L]."""
        return np.einsum("eka,qk->eqa", self.places, self.element.values)

    def gradient(self, local: Array) -> Array:
        """Gradient of a function given by its element values, (e, k) -> (e, q, 2).

        Values are taken relative to each element's first node, which keeps the digits of a small
        gradient of a large function.
        """
        relative = local - local[:, :1]
        reference = np.einsum("ek,qkb->eqb", relative, self.element.gradients, optimize=True)
        return np.einsum("eqb,eqba->eqa", reference, self.inverse)

    def value(self, local: Array) -> Array:
        """Values at the quadrature points, (e, k) -> (e, q)."""
        return local @ self.element.values.T

    def integral(self, at_points: Array) -> float:
        """Integral over the section of values at the quadrature points, (e, q)."""
        return float(np.sum(self.weights * at_points))

    def load(self, density: Array) -> Array:
        """Integral of density times each basis function: (e, q) -> (N,)."""
        local = (self.weights * density) @ self.element.values
        return np.asarray(np.bincount(self.nodes.ravel(), local.ravel(), self.count), dtype=float)

    def flux_load(self, field: Array) -> Array:
        """Integral of field . grad of each basis function: (e, q, 2) -> (N,)."""
        local = self._flux(field)
        return np.asarray(np.bincount(self.nodes.ravel(), local.ravel(), self.count), dtype=float)

    def flux_scale(self, field: Array) -> float:
        """Largest contribution of one element to ``flux_load``, before contributions cancel."""
        return float(np.abs(self._flux(field)).max())

    def _flux(self, field: Array) -> Array:
        """Integral of field . grad of each basis function over each element: (e, q, 2) -> (e, k)."""
        weighted = np.einsum("eq,eqba,eqa->eqb", self.weights, self.inverse, field, optimize=True)
        k = self.element.nodes.shape[0]
        return weighted.reshape(len(weighted), -1) @ self.element.gradients.transpose(0, 2, 1).reshape(-1, k)

    def stiffness(self, weight: Array) -> Array:
        """Element matrices of the integral of weight grad u . grad v; weight (e,), result (e, k, k)."""
        g = self.element.gradients
        q, k, _ = g.shape
        metric = np.einsum("eqab,eqcb->eqac", self.inverse, self.inverse)
        metric *= (weight[:, None] * self.weights)[..., None, None]
        if not self.curved.any():
            # on straight triangles the metric is one matrix times the quadrature weights
            total = metric.sum(axis=1) / self.element.weights.sum()
            products = np.einsum("q,qia,qjb->abij", self.element.weights, g, g, optimize=True)
            return (total.reshape(-1, 4) @ products.reshape(4, -1)).reshape(-1, k, k)
        products = np.einsum("qia,qjb->qabij", g, g, optimize=True)
        return (metric.reshape(-1, 4 * q) @ products.reshape(4 * q, -1)).reshape(-1, k, k)

    @cached_property
    def curved(self) -> NDArrayBool:
        """True for elements whose sides are not straight or whose nodes are not evenly spaced, (e,)."""
        flat = np.einsum("kc,eca->eka", _linear(self.element), self.places[:, :3])
        size = np.ptp(self.places[:, :3], axis=1).max(axis=1)
        return np.asarray(np.abs(self.places - flat).max(axis=(1, 2)) > 1e-12 * size)


NDArrayBool = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]


def _linear(el: Element) -> Array:
    """Corner functions at the element's nodes, (k, 3)."""
    x, y = el.nodes.T
    return np.column_stack([1.0 - x - y, x, y])


def space(mesh: Mesh, order: int, centre: Array) -> Space:
    """Number the nodes of a mesh for an order; coordinates are taken from ``centre``."""
    el = element(order)
    t = mesh.triangles
    pairs = np.concatenate([t[:, list(e)] for e in EDGES])
    low, high = pairs.min(axis=1), pairs.max(axis=1)
    key, edge = np.unique(low * np.int64(len(mesh.vertices)) + high, return_inverse=True)
    edge = edge.reshape(3, -1)
    columns = [t]
    inner = order - 1
    base = len(mesh.vertices)
    for i, (a, b) in enumerate(EDGES):
        step = np.arange(inner)
        forward = (t[:, a] < t[:, b])[:, None]
        columns.append(base + edge[i][:, None] * inner + np.where(forward, step, inner - 1 - step))
    base += len(key) * inner
    inside = el.nodes.shape[0] - 3 - 3 * inner
    columns.append(base + np.arange(len(t))[:, None] * inside + np.arange(inside))
    nodes = np.concatenate(columns, axis=1)
    corners = (mesh.vertices - centre)[t]
    offsets = np.einsum("kc,eca->eka", _linear(el), corners - corners[:, :1])
    straight = corners[:, :1] + offsets
    places = straight.copy()
    _bend(places, mesh, el, centre)
    bent = (places != straight).any(axis=(1, 2))
    offsets[bent] = places[bent] - places[bent, :1]
    return Space(mesh, el, nodes, int(base + len(t) * inside), places, offsets)


def _bend(places: Array, mesh: Mesh, el: Element, centre: Array) -> None:
    """Move nodes onto curved boundaries: those of curved strips by the wall's own map, those of clusters
    by blending the displacement of their curved edges into the element."""
    _follow(places, mesh, el, centre)
    for strip in mesh.strips.values():
        if strip.band.straight:
            continue
        s, n = strip_coordinates(strip.s, strip.n)
        lin = _linear(el)
        at_s, at_n = s @ lin.T, n @ lin.T
        places[strip.triangles.ravel()] = strip.band.place(at_s, at_n * strip.band.half(at_s)) - centre


def _follow(places: Array, mesh: Mesh, el: Element, centre: Array) -> None:
    """Put the nodes of clusters' curved edges on their pieces.

    At a node with corner weights (l0, l1, l2) the displacement of edge 0-1 is taken at l1 / (l0 + l1). What
    its interpolant of degree d adds to that of degree d - 1 is of size h^d and enters with the factor
    (l0 + l1)^d: derivatives of the map then shrink like h^d, which keeps the order of the element.

    References
    ----------
    .. [1] M. Lenoir, "Optimal isoparametric finite elements and error estimates for domains involving curved
       boundaries", SIAM J. Numer. Anal. 23, 1986, pp. 562-580 (from memory).
    """
    if not mesh.bends:
        return
    t = mesh.triangles
    edge = {(int(t[e, a]), int(t[e, b])): (e, a, b) for e in _touching(mesh) for a, b in EDGES}
    weight = _linear(el)
    for bend in mesh.bends:
        e, a, b = edge[bend.start, bend.end]
        share = weight[:, a] + weight[:, b]
        along = np.divide(weight[:, b], share, out=np.zeros(len(share)), where=share > 0.0)
        chord = bend.piece.at(np.array(bend.u))
        lower = np.zeros((len(share), 2))
        for degree in range(2, el.order + 1):
            at = np.arange(degree + 1) / degree
            off = bend.piece.at(bend.u[0] + at * (bend.u[1] - bend.u[0]))
            off = off - (chord[0] + at[:, None] * (chord[1] - chord[0]))
            whole = np.vander(along, degree + 1) @ np.linalg.solve(np.vander(at), off)
            places[e] += share[:, None] ** degree * (whole - lower)
            lower = whole


def _touching(mesh: Mesh) -> list[int]:
    """Triangles with a vertex on a curved edge."""
    on = np.zeros(len(mesh.vertices), dtype=bool)
    on[[b.start for b in mesh.bends]] = True
    return [int(e) for e in np.flatnonzero(on[mesh.triangles].any(axis=1))]


def strip_coordinates(s: Array, n: Array) -> tuple[Array, Array]:
    """Corner coordinates (s, n) of the triangles of a strip in the order of its table, two (e, 3) arrays."""
    m, layers = len(s) - 1, len(n) - 1
    i, j = np.meshgrid(np.arange(m), np.arange(layers), indexing="ij")
    corners_s = np.stack([[s[i], s[i + 1], s[i + 1]], [s[i], s[i + 1], s[i]]])
    corners_n = np.stack([[n[j], n[j], n[j + 1]], [n[j], n[j + 1], n[j + 1]]])
    return (
        corners_s.transpose(2, 3, 0, 1).reshape(-1, 3),
        corners_n.transpose(2, 3, 0, 1).reshape(-1, 3),
    )


@dataclass(frozen=True)
class Equations:
    """A factorized stiffness on the free unknowns of a space.

    Parameters
    ----------
    space : Space
    unknown : (N,) array of int
        Unknown of each node; -1 where its value is held at zero; equal numbers share one value.
    """

    space: Space
    unknown: Index
    factors: SuperLU

    @property
    def size(self) -> int:
        return int(self.unknown.max()) + 1

    def solve(self, load: Array) -> Array:
        """Node values (N, m) for loads (N, m)."""
        free = self.unknown >= 0
        reduced = np.zeros((self.size, load.shape[1]))
        np.add.at(reduced, self.unknown[free], load[free])
        answer = self.factors.solve(reduced)
        result = np.zeros(load.shape)
        result[free] = answer[self.unknown[free]]
        return result


def equations(space: Space, weight: Array, unknown: Index) -> Equations:
    """Assemble and factorize the integral of weight grad u . grad v on the unknowns."""
    local = space.stiffness(weight)
    number = unknown[space.nodes]
    rows = np.broadcast_to(number[:, :, None], local.shape)
    columns = np.broadcast_to(number[:, None, :], local.shape)
    kept = (rows >= 0) & (columns >= 0)
    size = int(unknown.max()) + 1
    matrix = csc_matrix((local[kept], (rows[kept], columns[kept])), shape=(size, size))
    try:
        factors = splu(
            matrix, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options={"SymmetricMode": True}
        )
    except RuntimeError as fault:
        raise SolveError(f"factorization of {size} unknowns failed: {fault}") from None
    return Equations(space, unknown, factors)
