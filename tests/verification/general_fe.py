"""Torsion and flexure at nu = 0 through a general-purpose finite-element library, on other meshes.

scikit-fem assembles and solves; the weak forms are all that is ours. With R = (-y, x) and f = a x + b y:

    torsion   integral g (grad omega + R) . grad v = 0        J = integral g |grad omega + R|^2, from above
    stress    integral curl phi . curl psi/g = integral R . curl psi    J = integral R . curl phi, from below
    flexure   integral g grad chi . grad v = integral e f v   1/A_V = integral e f chi, from below

The shear centre is that of the flexure stress, x_s = integral g (x chi_y - y chi_x) for unit Vy.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_matrix
from skfem import Basis, BilinearForm, ElementTriP3, LinearForm, MeshTri, condense, solve
from skfem.helpers import dot, grad

LOW, HIGH = slice(None, -1), slice(1, None)
# Corners of every cell of a grid, anticlockwise.
CORNERS = ((LOW, LOW), (HIGH, LOW), (HIGH, HIGH), (LOW, HIGH))


@dataclass(frozen=True)
class Answer:
    """Centroid, J from above and from below, shear centre, A_Vx and A_Vy from above, e-weighted area."""

    area: float
    centroid: np.ndarray
    above: float
    below: float
    shear_centre: np.ndarray
    shear_area: np.ndarray


def answer(
    vertices: np.ndarray, triangles: np.ndarray, e: np.ndarray | float = 1.0, g: np.ndarray | float = 1.0
) -> Answer:
    """Solve on straight triangles with cubic elements; e and g by triangle."""
    mesh = MeshTri(vertices.T, triangles.T)
    basis = Basis(mesh, ElementTriP3(), intorder=6)
    count = triangles.shape[0]
    e_q = np.broadcast_to(np.broadcast_to(e, count)[:, None], basis.dx.shape)
    g_q = np.broadcast_to(np.broadcast_to(g, count)[:, None], basis.dx.shape)
    x, y = np.asarray(basis.global_coordinates())
    area = float((e_q * basis.dx).sum())
    centroid = np.array([float((e_q * v * basis.dx).sum()) / area for v in (x, y)])
    x, y = x - centroid[0], y - centroid[1]
    arm = np.stack([-y, x])

    stiffness = BilinearForm(lambda u, v, w: w.g * dot(grad(u), grad(v))).assemble(basis, g=g_q)
    pull = LinearForm(lambda v, w: -w.g * dot(w.arm, grad(v))).assemble(basis, g=g_q, arm=arm)
    held = np.array([0])
    omega = solve(*condense(stiffness, pull, D=held))
    slope = basis.interpolate(omega).grad
    above = float((g_q * ((np.asarray(slope) + arm) ** 2).sum(axis=0) * basis.dx).sum())

    tensor = np.array([[e_q * x * x, e_q * x * y], [e_q * x * y, e_q * y * y]]) * basis.dx
    tensor = tensor.sum(axis=(2, 3))
    areas, torque = [], []
    for unit in np.eye(2):
        a, b = np.linalg.solve(tensor, unit)
        load = LinearForm(lambda v, w: w.f * v).assemble(basis, f=e_q * (a * x + b * y))
        chi = solve(*condense(stiffness, load, D=held))
        areas.append(1.0 / float(load @ chi))
        tau = np.asarray(basis.interpolate(chi).grad)
        torque.append(float((g_q * (x * tau[1] - y * tau[0]) * basis.dx).sum()))
    centre = centroid + np.array([torque[1], -torque[0]])
    return Answer(area, centroid, above, _from_below(mesh, basis, g_q, x, y), centre, np.array(areas))


def _from_below(mesh: MeshTri, basis: Basis, g: np.ndarray, x: np.ndarray, y: np.ndarray) -> float:
    """phi zero on the outer boundary and one free constant on each hole."""
    flexibility = BilinearForm(lambda u, v, w: dot(grad(u), grad(v)) / w.g).assemble(basis, g=g)
    # R . curl psi = -y psi_y - x psi_x
    load = LinearForm(lambda v, w: -(w.px * grad(v)[0] + w.py * grad(v)[1])).assemble(basis, px=x, py=y)
    loops = boundary_loops(mesh, basis)
    number = np.arange(basis.N)
    for loop in loops[1:]:
        number[loop] = loop[0]
    kept, column = np.unique(number, return_inverse=True)
    fold = csr_matrix((np.ones(basis.N), (np.arange(basis.N), column)), shape=(basis.N, len(kept)))
    outside = np.unique(column[loops[0]])
    phi = fold @ solve(*condense((fold.T @ flexibility @ fold).tocsr(), fold.T @ load, D=outside))
    return float(load @ phi)


def boundary_loops(mesh: MeshTri, basis: Basis) -> list[np.ndarray]:
    """Degrees of freedom of each boundary, the longest (outer) one first."""
    facets = mesh.boundary_facets()
    ends = mesh.facets[:, facets]
    group = {int(v): int(v) for v in np.unique(ends)}

    def root(v: int) -> int:
        while group[v] != v:
            v = group[v]
        return v

    for a, b in ends.T.tolist():
        group[root(a)] = root(b)
    heads = np.array([root(int(a)) for a in ends[0]])
    found = []
    for head in np.unique(heads):
        own = facets[heads == head]
        found.append(
            (np.ptp(mesh.p[:, mesh.facets[:, own].ravel()], axis=1).max(), basis.get_dofs(own).flatten())
        )
    return [dofs for _, dofs in sorted(found, key=lambda pair: -pair[0])]


def rectilinear(
    xs: np.ndarray, ys: np.ndarray, inside: Callable[[np.ndarray, np.ndarray], np.ndarray]
) -> tuple[np.ndarray, np.ndarray]:
    """Vertices and triangles of the cells between grid lines whose middles lie inside."""
    at_x, at_y = np.meshgrid(xs, ys, indexing="ij")
    ids = np.arange(at_x.size).reshape(at_x.shape)
    mid_x, mid_y = np.meshgrid(0.5 * (xs[1:] + xs[:-1]), 0.5 * (ys[1:] + ys[:-1]), indexing="ij")
    kept = inside(mid_x, mid_y)
    p, q, r, t = (ids[corner][kept] for corner in CORNERS)
    triangles = np.concatenate([np.stack([p, q, t], -1), np.stack([q, r, t], -1)])
    used, number = np.unique(triangles, return_inverse=True)
    return np.stack([at_x.ravel(), at_y.ravel()], -1)[used], number.reshape(-1, 3)
