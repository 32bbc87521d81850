"""The wall model of an outline: points, walls between them, lumps, and what was lost."""

from __future__ import annotations

from dataclasses import dataclass

from shapely.geometry import Polygon

import fe_models
from crosscheck.tracing.faces import Array, FacedOutline
from crosscheck.tracing.wall_fit import FittedWall


@dataclass(frozen=True)
class TracedPoint:
    """A place where walls meet or end.

    Attributes
    ----------
    place : [L]
    kind : "free end", "corner" (of two walls) or "joint"
    inner, outer : radii of its rounding; None where sharp, outer also where it follows from the inner [L]
    """

    place: Array
    kind: str
    inner: float | None = None
    outer: float | None = None


@dataclass(frozen=True)
class TracedWall:
    """A wall between two points (numbers), its thickness at both [L] and a third place on its arc [L]."""

    start: int
    end: int
    thickness: tuple[float, float]
    through: Array | None
    fitted: FittedWall

    @property
    def length(self) -> float:
        """Of the fitted midline [L]."""
        return self.fitted.span[1] - self.fitted.span[0]


@dataclass(frozen=True)
class Lump:
    """Area beyond the walls' [L^2], at a point or on a wall at a fraction of it, and its own centroid [L]."""

    area: float
    place: Array
    point: int | None = None
    wall: int | None = None
    at: float | None = None


@dataclass(frozen=True)
class Remark:
    """What the walls do not represent, and where [L]; None where it is no place."""

    text: str
    place: Array | None = None


@dataclass(frozen=True)
class WallModel:
    """Walls found in an outline.

    Attributes
    ----------
    points, walls, lumps : what was found
    remarks : what could not be represented
    outline : the outline as faces
    tolerance : share of the thickness within which faces follow their walls [-]
    drawn : the solid as drawn
    even : the solid with its uneven boundary evened, on which walls were found
    noise : standard deviation of the drawn boundary's unevenness [L]
    clear_share : share of the area that lies in clear walls [-]
    holes : openings of the drawing
    """

    points: tuple[TracedPoint, ...]
    walls: tuple[TracedWall, ...]
    lumps: tuple[Lump, ...]
    remarks: tuple[Remark, ...]
    outline: FacedOutline
    drawn: Polygon
    even: fe_models.Solid
    tolerance: float
    noise: float
    clear_share: float
    holes: int

    @property
    def cells(self) -> int:
        """Closed cells of the walls."""
        return len(self.walls) - len(self.points) + 1
