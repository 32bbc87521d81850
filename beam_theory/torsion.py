"""Saint-Venant torsion of a wall graph: Bredt-Batho cells and open walls."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from beam_theory.arrays import Floats, Integers
from beam_theory.network import Network

__all__ = ["Torsion", "closing", "flexibility_matrix", "torsion"]

# Above this many cells a sparse solve is faster than a dense one.
_DENSE = 16


@dataclass(frozen=True)
class Torsion:
    """Per unit rate of twist and G_base = 1: cell flows (c,) [L^2], cell and open parts of J [L^4]."""

    cell_flow: Floats
    cell_part: float
    open_part: float
    open_piece: Floats

    @property
    def constant(self) -> float:
        """Torsion constant J [L^4]."""
        return self.cell_part + self.open_part


def flexibility_matrix(graph: Network, flexibility: Floats) -> Floats:
    """(c, c): integral of ds/(g t) round each cell; minus that of shared walls off the diagonal [-]."""
    rows, columns, terms = _entries(graph, flexibility)
    matrix = np.zeros((graph.cells.count, graph.cells.count))
    np.add.at(matrix, (rows, columns), terms)
    return matrix


def closing(graph: Network, gap: Floats, flexibility: Floats | None = None) -> Floats:
    """Cell flows (c, r) that make F c = gap (c, r); flexibility of each piece (m,), None: of the midline."""
    own = graph.pieces.flexibility if flexibility is None else flexibility
    count = graph.cells.count
    if count == 0:
        return np.zeros(gap.shape)
    if count <= _DENSE:
        return np.asarray(np.linalg.solve(flexibility_matrix(graph, own), gap))
    from scipy.sparse import coo_array
    from scipy.sparse.linalg import splu

    rows, columns, terms = _entries(graph, own)
    matrix = coo_array((terms, (rows, columns)), shape=(count, count)).tocsc()
    return np.asarray(splu(matrix).solve(np.ascontiguousarray(gap)))


def _entries(graph: Network, flexibility: Floats) -> tuple[Integers, Integers, Floats]:
    """Row, column and value of every term of the flexibility matrix; terms on one place add up."""
    left, right = graph.left, graph.right
    rows = np.concatenate([left, right, left, right])
    columns = np.concatenate([left, right, right, left])
    terms = np.concatenate([flexibility, flexibility, -flexibility, -flexibility])
    real = (rows >= 0) & (columns >= 0)
    return rows[real], columns[real], terms[real]


def torsion(graph: Network) -> Torsion:
    """Torsion constant: F c = 2 A_m, J = 2 A_m . c + integral of g t^3/3 ds over walls in no cell.

    References
    ----------
    R. Bredt, Zeitschrift des VDI 40, 1896; S. B. Batho, Engineering 1916 (common practice).
    """
    twice = 2.0 * graph.cell_area
    flow = closing(graph, twice[:, None])[:, 0]
    p = graph.pieces
    cubes = (p.t0 + p.t1) * (p.t0**2 + p.t1**2) / 4.0
    alone = (graph.left < 0) & (graph.right < 0)
    open_piece = np.where(alone, p.g * p.length * cubes / 3.0, 0.0)
    return Torsion(flow, float(twice @ flow), float(open_piece.sum()), open_piece)
