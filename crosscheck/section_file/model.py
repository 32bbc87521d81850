"""A section file after reading: numbers and names only, frozen, free of faults."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import fe_models

Place = tuple[float, float]

MIDLINE_SHEAR_CENTRE = "midline shear centre"
EVERY_BEND = "every_bend"
# Poisson's ratio where the file names no material.
NU_WITHOUT_MATERIAL = 0.3


@dataclass(frozen=True)
class Material:
    """Linear-elastic material: E, G [F/L^2], nu [-]."""

    name: str
    E: float
    G: float
    nu: float


@dataclass(frozen=True)
class WallSpec:
    """One wall between two points.

    Attributes
    ----------
    name : its own name, unique among the walls that one side sees
    start, end : names of its points; start -> end is its direction
    thickness : at start and end [L]
    arc_through : a third place on its arc [L]; None for a straight wall
    material : name; None when the file names no materials
    direct_share : share of the wall that carries direct stress [-]
    theory_share : that share as theory sees it where the file gives each side its own [-], else None
    seen_by : "both", "theory" or "fe"
    key : where the file defines it, such as "walls[2]"
    """

    name: str
    start: str
    end: str
    thickness: tuple[float, float]
    arc_through: Place | None = None
    material: str | None = None
    direct_share: float = 1.0
    theory_share: float | None = None
    seen_by: str = "both"
    key: str = ""

    @property
    def share_in_theory(self) -> float:
        """Share of the wall that carries direct stress in theory's model [-]."""
        return self.direct_share if self.theory_share is None else self.theory_share


@dataclass(frozen=True)
class BoomSpec:
    """A concentrated area [L^2] at a point, or on a wall at a fraction of its length [-]."""

    area: float
    point: str | None = None
    wall: str | None = None
    at: float | None = None
    material: str | None = None
    seen_by: str = "both"


@dataclass(frozen=True)
class CornerSpec:
    """Rounding of one point, or of every bend (`point` is "every_bend"): radii [L].

    `outer_radius` None: inner radius and thickness.
    """

    point: str
    inner_radius: float
    outer_radius: float | None = None


@dataclass(frozen=True)
class LoadSpec:
    """One load case.

    Attributes
    ----------
    name : its own name, unique
    shear : Vx, Vy [F]
    through : a place on the line of action [L], or "midline shear centre"; None without shear
    torque : a couple added to what the shear makes [F L], anticlockwise positive
    axial : N [F] at each side's own centroid, tension positive
    moment : Mx, My [F L]; Mx > 0 puts +y in tension, My > 0 puts +x in tension
    bimoment : B [F L^2]
    through_point : name of the point that `through` was given as, None otherwise
    kind : "limit" or "ultimate", a label that is only echoed; None where the file gives none
    """

    name: str
    shear: tuple[float, float] = (0.0, 0.0)
    through: Place | str | None = None
    torque: float = 0.0
    axial: float = 0.0
    moment: tuple[float, float] = (0.0, 0.0)
    bimoment: float = 0.0
    through_point: str | None = None
    kind: str | None = None


@dataclass(frozen=True)
class CutSpec:
    """Where the hand method cuts a cell: wall and fraction of its length [-]."""

    wall: str
    at: float


@dataclass(frozen=True)
class ProbeSpec:
    """A named place on a wall: fraction of its length [-], and the pitch of its fasteners [L] or None."""

    label: str
    wall: str
    at: float
    pitch: float | None = None


@dataclass(frozen=True)
class StatedSpec:
    """A number of the user's to be judged.

    Attributes
    ----------
    quantity : a name of the results
    value : as stated, in the file's units
    source : where it is stated
    tolerance : difference up to which it stands [-]; None where the file gives none
    measured_from : datum of a position: a place [L], the name of a point or wall, or None
    load : the load or unit load it belongs to; None for a quantity of the section
    level : level of theory that it is held to; None for the nearest
    probe : label of the probe that a flow_at_probes belongs to; None for the worst of all
    """

    quantity: str
    value: float
    source: str = ""
    tolerance: float | None = None
    measured_from: Place | str | None = None
    load: str | None = None
    level: str | None = None
    probe: str | None = None


@dataclass(frozen=True)
class AllowableSpec:
    """A strength that margins are taken against.

    Attributes
    ----------
    wall : the wall it holds for; None for every wall that has none of its own of this kind
    kind : "shear_stress", "direct_stress" or "von_mises_stress" [F/L^2], or "shear_flow" [F/L]
    value : larger than zero
    source : where it is stated
    """

    wall: str | None
    kind: str
    value: float
    source: str = ""


@dataclass(frozen=True)
class SectionFile:
    """One section file, read, resolved to numbers and checked.

    Attributes
    ----------
    path, sha256 : the file as named by the user, and the digest of its bytes
    title : its title, or the file's name without suffix
    length_unit, force_unit : such as "mm", "N"
    judged : level of theory that verdicts judge
    parameters : values in file order, overrides applied
    overrides : names and texts of the overrides, in the order given
    materials : by name; empty when the file names none (results are per unit modulus, nu = 0.3)
    base_material : material with e = g = 1; None when the file names none
    points : places [L] by name, in file order
    walls, booms, corners, loads, cuts, probes, stated : in file order
    criteria : largest accepted difference [-] by quantity name, as given in the file
    allowables : those of every wall first, then wall by wall
    tolerances : "thickness" and "material" relative [-], "dimension" [L]; those that the file gives
    document : front matter of the dossier: texts by key, and "changes", a list of tables of texts
    outline : the solid that FE sees instead of the walls; None where it sees the walls
    notes : remarks that are no faults, one sentence each
    tables : digest of each table and drawing beside the file, by the name the file gives it
    """

    path: str
    sha256: str
    title: str
    length_unit: str
    force_unit: str
    points: Mapping[str, Place]
    walls: tuple[WallSpec, ...]
    judged: str = "midline"
    parameters: Mapping[str, float] = field(default_factory=dict)
    overrides: Mapping[str, str] = field(default_factory=dict)
    materials: Mapping[str, Material] = field(default_factory=dict)
    base_material: str | None = None
    booms: tuple[BoomSpec, ...] = ()
    corners: tuple[CornerSpec, ...] = ()
    loads: tuple[LoadSpec, ...] = ()
    cuts: tuple[CutSpec, ...] = ()
    probes: tuple[ProbeSpec, ...] = ()
    stated: tuple[StatedSpec, ...] = ()
    criteria: Mapping[str, float] = field(default_factory=dict)
    allowables: tuple[AllowableSpec, ...] = ()
    tolerances: Mapping[str, float] = field(default_factory=dict)
    document: Mapping[str, Any] = field(default_factory=dict)
    outline: fe_models.Solid | None = None
    notes: tuple[str, ...] = ()
    tables: Mapping[str, str] = field(default_factory=dict)

    def wall(self, name: str, side: str | None = None) -> WallSpec:
        """The wall of that name, of those that a side ("theory" or "fe") sees where one is given.

        Raises
        ------
        KeyError : when there is none
        """
        for wall in self.walls:
            if wall.name == name and (side is None or wall.seen_by in ("both", side)):
                return wall
        raise KeyError(name)

    @property
    def extent(self) -> float:
        """Larger overall dimension of the midlines' points, arcs by their third point too [L]."""
        places = [self.points[name] for wall in self.walls for name in (wall.start, wall.end)]
        places += [wall.arc_through for wall in self.walls if wall.arc_through is not None]
        xs, ys = zip(*places, strict=True)
        return float(max(max(xs) - min(xs), max(ys) - min(ys)))


def arc_angle(start: Place, through: Place, end: Place) -> tuple[Place, float, float]:
    """Centre [L], start angle and signed sweep (anticlockwise positive) of an arc [rad].

    With start at the origin, b the third place and c the end, the centre u solves
    b.u = |b|^2/2, c.u = |c|^2/2.

    Raises
    ------
    ZeroDivisionError : when the three places lie exactly on one line
    """
    bx, by = through[0] - start[0], through[1] - start[1]
    cx, cy = end[0] - start[0], end[1] - start[1]
    twice_area = bx * cy - by * cx
    b2, c2 = bx * bx + by * by, cx * cx + cy * cy
    ux = (cy * b2 - by * c2) / (2.0 * twice_area)
    uy = (bx * c2 - cx * b2) / (2.0 * twice_area)
    first, last = math.atan2(-uy, -ux), math.atan2(cy - uy, cx - ux)
    # A positive area means that start, through, end turn anticlockwise.
    sweep = (last - first) % math.tau if twice_area > 0 else -((first - last) % math.tau)
    return (start[0] + ux, start[1] + uy), first, sweep
