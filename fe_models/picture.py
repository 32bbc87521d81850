"""The mesh as linear triangles, for pictures."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from .band import Array
from .element import EDGES, Element
from .fields import Fields
from .intervals import warping_function
from .mesh import Index


@dataclass(frozen=True)
class PictureMesh:
    """Elements cut into linear triangles through all their nodes.

    Parameters
    ----------
    nodes : (n, 2) array
        In the file's axes [L].
    triangles : (m, 3) array of int
    warping : (n,) array
        omega about ``pole``, mean zero [L^2].
    pole : (2,) array
        The shear centre [L].
    edges : (k, 2) array of int
        Pieces of the elements' own edges.
    """

    nodes: Array
    triangles: Index
    warping: Array
    pole: Array
    edges: Index


def picture_mesh(fields: Fields, pole: Array) -> PictureMesh:
    """Nodes, triangles and warping function of a solution about a pole."""
    space = fields.space
    nodes = np.zeros((space.count, 2))
    nodes[space.nodes] = space.places + fields.inertia.centroid
    warping = np.zeros(space.count)
    warping[space.nodes] = warping_function(fields, pole)
    triangles = space.nodes[:, cells_of(space.element)].reshape(-1, 3)
    inner = space.element.order - 1
    rows = [[a, *(3 + i * inner + np.arange(inner)), b] for i, (a, b) in enumerate(EDGES)]
    parts = np.array([[row[j], row[j + 1]] for row in rows for j in range(inner + 1)])
    edges = np.sort(space.nodes[:, parts].reshape(-1, 2), axis=1)
    return PictureMesh(nodes, triangles, warping, pole, np.unique(edges, axis=0))


def cells_of(el: Element) -> Index:
    """Local nodes of the order^2 small triangles of an element."""
    p = el.order
    lattice = np.rint(el.nodes * p).astype(int)
    number = {(int(i), int(j)): k for k, (i, j) in enumerate(lattice)}
    cells = []
    for i in range(p):
        for j in range(p - i):
            cells.append([number[i, j], number[i + 1, j], number[i, j + 1]])
            if i + j < p - 1:
                cells.append([number[i + 1, j], number[i + 1, j + 1], number[i, j + 1]])
    return np.array(cells, dtype=np.int64)
