"""Structured meshes of simple solids, for checks that need a mesh of a known size."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Index = NDArray[np.int64]


def plate(x: Array, y: Array) -> tuple[Array, Index]:
    """Triangles between the grid lines x and y, the diagonals alternating: vertices and triangles."""
    at_x, at_y = np.meshgrid(x, y, indexing="ij")
    ids = np.arange(at_x.size).reshape(at_x.shape)
    i, j = np.meshgrid(np.arange(len(x) - 1), np.arange(len(y) - 1), indexing="ij")
    return np.stack([at_x.ravel(), at_y.ravel()], -1), _halves(ids, (i + j) % 2 == 1)


def ring(inner: float, outer: float, layers: int, round_it: int) -> tuple[Array, Index]:
    """Triangles of a circular ring about the origin: ``layers`` through it, ``round_it`` round it."""
    r, a = np.meshgrid(
        np.linspace(inner, outer, layers + 1), 2.0 * np.pi * np.arange(round_it) / round_it, indexing="ij"
    )
    ids = np.arange(r.size).reshape(r.shape)
    ids = np.concatenate([ids, ids[:, :1]], axis=1)
    return np.stack([(r * np.cos(a)).ravel(), (r * np.sin(a)).ravel()], -1), _halves(ids, None)


def angle(lines: Array) -> tuple[Array, Index]:
    """Triangles of a sharp angle: a square without its upper right quarter.

    Parameters
    ----------
    lines : (2 n + 1,) array
        Grid lines of both directions; the re-entrant corner is at the middle one.
    """
    n = (len(lines) - 1) // 2
    at_x, at_y = np.meshgrid(lines, lines, indexing="ij")
    ids = np.arange(at_x.size).reshape(at_x.shape)
    i, j = np.meshgrid(np.arange(2 * n), np.arange(2 * n), indexing="ij")
    # diagonals run towards the corner, so that both arms are alike
    triangles = _halves(ids, (i < n) ^ (j < n)).reshape(2 * n, 2 * n, 2, 3)
    kept = triangles[(i < n) | (j < n)].reshape(-1, 3)
    used, number = np.unique(kept, return_inverse=True)
    return np.stack([at_x.ravel(), at_y.ravel()], -1)[used], number.reshape(-1, 3)


def graded_lines(n: int, power: float) -> Array:
    """2 n + 1 grid lines from -1 to 1 whose steps shrink towards 0 like (i/n)^power."""
    up = (np.arange(1, n + 1) / n) ** power
    return np.concatenate([-up[::-1], [0.0], up])


def _halves(ids: Index, other: NDArray[np.bool_] | None) -> Index:
    """Two triangles of every cell of a grid of vertex numbers, split the other way where asked."""
    p, q, r, t = ids[:-1, :-1], ids[1:, :-1], ids[1:, 1:], ids[:-1, 1:]
    one = np.stack([np.stack([p, q, r], -1), np.stack([p, r, t], -1)], axis=2)
    if other is not None:
        two = np.stack([np.stack([p, q, t], -1), np.stack([q, r, t], -1)], axis=2)
        one = np.where(other[:, :, None, None], two, one)
    return one.reshape(-1, 3)
