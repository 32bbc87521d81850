"""The section as the finite-element side sees it: points joined by walls of real thickness."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field


@dataclass(frozen=True)
class Wall:
    """One wall between two points.

    Parameters
    ----------
    name : str
        Unique name.
    start, end : str
        Names of the points it joins; its own direction runs from start to end.
    thickness : (float, float)
        Thickness at start and at end, linear between [L].
    arc_through : (float, float), optional
        A third point of a circular midline [L]; straight without.
    e, g : float
        Moduli over those of the base material [-].
    direct_share : float
        Share of the wall that carries direct stress, 0 to 1 [-].
    """

    name: str
    start: str
    end: str
    thickness: tuple[float, float]
    arc_through: tuple[float, float] | None = None
    e: float = 1.0
    g: float = 1.0
    direct_share: float = 1.0


@dataclass(frozen=True)
class Boom:
    """A concentrated area, spread over its joint or over a patch of its wall.

    Parameters
    ----------
    area : float
        e times area [L^2].
    point : str, optional
        Name of the point it sits at.
    wall, at : str and float, optional
        Or the wall and the fraction of it.
    """

    area: float
    point: str | None = None
    wall: str | None = None
    at: float = 0.0


@dataclass(frozen=True)
class Rounding:
    """Radii at a point.

    Parameters
    ----------
    inner : float
        Radius of every re-entrant corner at the point [L]; 0 leaves it sharp.
    outer : float, optional
        Radius of the outer side of a bend [L]; inner radius plus thickness without.
    """

    inner: float
    outer: float | None = None


@dataclass(frozen=True)
class Section:
    """Points and the walls that join them, one connected graph.

    Parameters
    ----------
    points : place (x, y) of each point by its name [L]
    walls : at least one
    corners : rounding by point name
    booms : areas that carry direct stress only
    nu : Poisson's ratio where all walls share it [-]
    """

    points: Mapping[str, tuple[float, float]]
    walls: tuple[Wall, ...]
    corners: Mapping[str, Rounding] = field(default_factory=dict)
    booms: tuple[Boom, ...] = ()
    nu: float | None = None
