"""What pictures need beside the numbers of a result: shapes, loads as drawn, the mesh, curves along walls."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class WallShape:
    """A wall as drawn: midline samples (n, 2), left normals (n, 2), thickness (n,), distance s (n,) [L].

    ``turn`` is +1 where reports show it along its own direction, -1 against: cells run anticlockwise, other
    walls up or right.
    """

    name: str
    points: Array
    normals: Array
    thickness: Array
    s: Array
    strip: tuple[float, float] | None
    seen_by: str
    turn: int = 1


@dataclass(frozen=True)
class BoomMark:
    """A boom as drawn: place [L], area [L^2], and which side sees it."""

    x: float
    y: float
    area: float
    seen_by: str


@dataclass(frozen=True)
class LoadLine:
    """A load as drawn: force components [F], a point on its line of action [L], torque [F L]."""

    name: str
    shear: tuple[float, float]
    through: tuple[float, float] | None
    torque: float

    @property
    def has_shear(self) -> bool:
        """Whether it makes shear stress."""
        return self.shear != (0.0, 0.0) or self.torque != 0.0


@dataclass(frozen=True)
class PictureMesh:
    """The FE mesh as linear triangles.

    Nodes (n, 2) [L], triangles (m, 3), warping function (n,) [L^2] about ``pole`` [L], and the elements' own
    edges (k, 2), which are fewer than the triangles' where elements of high order are cut up.
    """

    nodes: Array
    triangles: NDArray[np.int64]
    warping: Array
    pole: tuple[float, float]
    edges: NDArray[np.int64]


@dataclass(frozen=True)
class Drawing:
    """What pictures need beside the numbers: geometry of both sides and curves along the walls.

    ``walls`` are the panels at which the sides are compared, and walls of one side alone; ``hand_walls``
    theory's own. Names are those of the panels:
    ``flows[load][wall]`` and ``warping[wall]`` are theory's values at the samples of the wall's shape;
    ``fe_warping[wall]`` are FE's at its probes: distance along the wall and omega (k, 2).
    """

    points: Mapping[str, tuple[float, float]]
    walls: tuple[WallShape, ...]
    loops: tuple[Array, ...]
    extent: float
    loads: tuple[LoadLine, ...]
    flows: Mapping[str, Mapping[str, Array]]
    warping: Mapping[str, Array]
    fe_warping: Mapping[str, Array]
    mesh: PictureMesh | None
    hand_walls: tuple[WallShape, ...] = ()
    booms: tuple[BoomMark, ...] = ()
