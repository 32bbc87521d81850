"""The finite-element answer for a section, and the loop that refines until it is accurate enough."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike

from .band import Array, Band, band
from .bridges import open_walls
from .checks import Check, self_checks
from .density import Density
from .errors import OutlineError, SolveError
from .faces import Actions, FaceStress, Peak, boundary_peaks, face_stress, sampled_faces
from .fields import Fields, Moduli, inertia
from .fields import solve as solve_fields
from .intervals import Interval
from .location import PointStress, point_stress
from .mesh import Mesh, StripMesh, mesh
from .outline import Outline, outline
from .picture import PictureMesh, picture_mesh
from .poisson import PoissonFlexure, poisson_flexure
from .quantities import quantities
from .recovery import CURVED, FlowSamples, closing_error, flow_samples, sampled_flow
from .section import Section
from .section_lines import SolidWall, disagreement, solid_walls
from .solid import Solid, outline_of_solid
from .space import space

DEFAULT_ACCURACY = 1e-5
# Accuracies that may be asked for: finer ones drown in round-off, coarser ones are no reference.
ACCURACY_RANGE = (1e-8, 1e-2)
MOST_UNKNOWNS = 500_000
MOST_PASSES = 8
# Mean length over thickness of the walls below which the first mesh is made finer.
STOUT = 12.0

Progress = Callable[[str], None]


@dataclass(frozen=True)
class MeshSummary:
    """What was solved.

    Attributes
    ----------
    order, unknowns, elements : order of the elements, unknowns of the larger field, number of elements [-]
    strips, joints, passes : numbers of strips, joints and refinement passes [-]
    """

    order: int
    unknowns: int
    elements: int
    strips: int
    joints: int
    passes: int


@dataclass(frozen=True)
class Solution:
    """The finite-element answer.

    Parameters
    ----------
    quantities : mapping of name to Interval
        Names as in the comparison's list; positions in the file's axes [L].
    strips : mapping of wall name to (from, to) or None
        Fractions of each wall between which flows can be asked for [-].
    checks : tuple of Check
    mesh : MeshSummary
    outline : Outline
    met : bool
        True where the asked accuracy was reached for J and both shear-centre coordinates.
    accuracy_note : str
        What was asked and what was reached.
    fields, open_walls : what the quantities come from; walls in no cell
    poisson : PoissonFlexure or None
        Flexure with Poisson's ratio; None where walls share none.
    solid_walls : mapping of wall name to SolidWall or None
        Walls drawn over a solid that is given by its outline.
    """

    quantities: Mapping[str, Interval]
    strips: Mapping[str, tuple[float, float] | None]
    checks: tuple[Check, ...]
    mesh: MeshSummary
    outline: Outline
    met: bool
    accuracy_note: str
    fields: Fields = field(repr=False)
    open_walls: frozenset[str] = field(repr=False)
    poisson: PoissonFlexure | None = field(default=None, repr=False)
    solid_walls: Mapping[str, SolidWall | None] = field(default_factory=dict, repr=False)

    def flow_at(self, wall: str, fractions: ArrayLike) -> FlowSamples:
        """Flows of the three unit loads at fractions of a wall.

        Raises
        ------
        ValueError
            The wall has no strip, or a fraction lies outside it.
        """
        closing = np.zeros(3) if wall in self.open_walls else self.closing_error
        over = self.solid_walls.get(wall)
        if over is not None:
            at = self._distances(over.band, over.span, fractions)
            allowance = CURVED * max(over.band.thickness)
            return sampled_flow(self.fields, over.chords(self.fields, at), len(at), allowance, closing)
        strip = self._strip(wall)
        at = np.asarray(fractions, dtype=float) * strip.band.length
        return flow_samples(self.fields, strip, at, closing)

    def face_stress(self, wall: str, fractions: ArrayLike, actions: Actions) -> FaceStress:
        """Direct and shear stress on both faces of a wall at fractions of it, for stress resultants.

        Raises
        ------
        ValueError
            The wall has no strip.
        """
        over = self.solid_walls.get(wall)
        if over is not None:
            at = self._distances(over.band, over.span, fractions)
            samples = over.on_faces(self.fields, at)
            return sampled_faces(self.fields, samples, over.band.direction(at), self.shear_centre, actions)
        strip = self._strip(wall)
        at = np.asarray(fractions, dtype=float) * strip.band.length
        return face_stress(self.fields, strip, at, self.shear_centre, actions)

    def boundary_peaks(self, actions: Actions) -> list[Peak]:
        """Largest shear stress on each joint's filleted and curved boundary, largest first."""
        return boundary_peaks(self.fields, actions)

    def stress_at(self, places: ArrayLike, actions: Actions, *, with_nu: bool = False) -> PointStress:
        """Shear stress of a load at places (n, 2) in the file's axes.

        ``with_nu`` takes flexure with Poisson's ratio instead of nu = 0.

        Raises
        ------
        ValueError
            A place outside the section, or no Poisson's ratio.
        """
        if with_nu and self.poisson is None:
            raise ValueError("the section has no Poisson's ratio")
        return point_stress(self.fields, np.asarray(places), actions, self.poisson if with_nu else None)

    @cached_property
    def closing_error(self) -> Array:
        """Estimated error of the flows of walls in cells for each unit load, (3,)."""
        if self.solid_walls:
            return disagreement(self.fields, (w for w in self.solid_walls.values() if w and w.in_cell))
        strips = self.fields.space.mesh.strips
        return closing_error(self.fields, [s for name, s in strips.items() if name not in self.open_walls])

    @property
    def shear_centre(self) -> Array:
        """(x_s, y_s) in the file's axes, (2,) [L]."""
        return np.array([self.quantities["shear_centre_x"].known, self.quantities["shear_centre_y"].known])

    @staticmethod
    def _distances(of: Band, span: tuple[float, float], fractions: ArrayLike) -> Array:
        """Distances [L] of fractions of a wall, which must lie in its span."""
        at = np.atleast_1d(np.asarray(fractions, dtype=float)) * of.length
        if (at < span[0] - 1e-9 * of.length).any() or (at > span[1] + 1e-9 * of.length).any():
            raise ValueError(f"place outside the strip of wall {of.name}: {span[0]} to {span[1]}")
        return np.asarray(at)

    def _strip(self, wall: str) -> StripMesh:
        strip = self.fields.space.mesh.strips.get(wall)
        if strip is None:
            raise ValueError(f"wall {wall} has no strip: it is part of its joints")
        return strip

    def picture_mesh(self) -> PictureMesh:
        """The mesh in the file's axes, with the warping function about the shear centre."""
        return picture_mesh(self.fields, self.shear_centre)


def solve(section: Section, accuracy: float = DEFAULT_ACCURACY, progress: Progress | None = None) -> Solution:
    """Solve a section until J and the shear centre are known to the asked accuracy.

    Parameters
    ----------
    section : Section
    accuracy : float
        Largest half-width of J over J, and of a shear-centre coordinate over the larger dimension [-].
    progress : callable, optional
        Told each pass in a few words.

    Returns
    -------
    Solution
        Intervals with lengths in the unit of the points [L].

    Raises
    ------
    OutlineError
        The walls do not make a solid.
    SolveError
        The mesh or the equations failed.
    ValueError
        An accuracy out of range.
    """
    _check_accuracy(accuracy)
    return _solution(outline(section), accuracy, progress)


def solve_solid(
    solid: Solid,
    accuracy: float = DEFAULT_ACCURACY,
    progress: Progress | None = None,
    walls: Section | None = None,
) -> Solution:
    """Solve a solid given by its outline; parameters and errors as in ``solve``.

    Parameters
    ----------
    solid, accuracy, progress : as in ``solve``
    walls : walls drawn over the solid, where flows and stresses can be asked for: their strips are where the
        solid is as thick as they are; without walls ``Solution.strips`` is empty

    Returns
    -------
    Solution
        Intervals with lengths in the unit of the outline [L].
    """
    _check_accuracy(accuracy)
    made = _solution(outline_of_solid(solid), accuracy, progress)
    if walls is None:
        return made
    over = solid_walls(made.outline, [band(w, walls) for w in walls.walls])
    strips = {
        name: None if w is None else (w.span[0] / w.band.length, w.span[1] / w.band.length)
        for name, w in over.items()
    }
    not_in_cells = frozenset(name for name, w in over.items() if w is not None and not w.in_cell)
    return replace(made, strips=strips, open_walls=not_in_cells, solid_walls=over)


def _check_accuracy(accuracy: float) -> None:
    low, high = ACCURACY_RANGE
    if not low <= accuracy <= high:
        raise ValueError(f"accuracy must be from {low:g} to {high:g}, got {accuracy:g}")


def _solution(solid: Outline, accuracy: float, progress: Progress | None) -> Solution:
    """The refined answer for an outline, with its checks."""
    section = solid.section
    solved, found, passes = _refinement(solid, accuracy, progress)
    uniform = len(set(solid.moduli.values())) == 1 and not section.booms
    poisson = poisson_flexure(solved, section.nu) if section.nu is not None and uniform else None
    worst = _excess(found, solid.extent, accuracy)
    note = f"asked {accuracy:g}, reached {worst * accuracy:.1e}"
    if worst > 1.0:
        note += ": NOT REACHED, stopped at the mesh's limit"
    m = solved.space.mesh
    summary = MeshSummary(
        solved.space.element.order,
        solved.unknowns,
        len(m.triangles),
        len(m.strips),
        len(solid.parts.clusters),
        passes,
    )
    checks = self_checks(solved, solid, found)
    return Solution(
        quantities=_with_nu(found, poisson),
        strips=_spans(solid, m),
        checks=checks,
        mesh=summary,
        outline=solid,
        met=worst <= 1.0,
        accuracy_note=note,
        fields=solved,
        open_walls=open_walls(section),
        poisson=poisson,
    )


def _refinement(
    solid: Outline, accuracy: float, progress: Progress | None
) -> tuple[Fields, dict[str, Interval], int]:
    """Last fields, the intersection of all passes' intervals, and the number of passes."""
    levels: dict[str, float] = {}
    density, solved = _first(solid, accuracy)
    found = quantities(solved, solid)
    for passes in range(1, MOST_PASSES + 1):
        worst = _excess(found, solid.extent, accuracy)
        if progress is not None:
            progress(f"pass {passes}: {solved.unknowns} unknowns, {worst:.2g} of the asked half-width")
        # chords of a crowded joint do not get nearer to their curve
        most = 2 if solid.chorded else MOST_PASSES
        if worst <= 1.0 or solved.unknowns > MOST_UNKNOWNS or passes == most:
            break
        levels = _refined(solved, levels, worst)
        if passes % 2 == 0:
            # cuts are shared, so the number of layers is one for all parts
            density = replace(density, layers=2 * density.layers, first=0.5 * density.first)
        try:
            solved = _fields(solid, density, levels)
        except (OutlineError, SolveError):
            # a mesh that grew too fine to be made leaves the last good answer standing
            break
        found = {n: q.meet(found[n]) for n, q in quantities(solved, solid).items()}
    return solved, found, passes


def _first(solid: Outline, accuracy: float) -> tuple[Density, Fields]:
    """The first density and its fields; coarser than the accuracy asks for where that mesh were too large."""
    density = _start(solid, accuracy)
    try:
        return density, _fields(solid, density, {})
    except OutlineError as fault:
        if fault.kind != "unknowns":
            raise
    density = _start(solid, ACCURACY_RANGE[1])
    return density, _fields(solid, density, {})


def _with_nu(found: Mapping[str, Interval], poisson: PoissonFlexure | None) -> dict[str, Interval]:
    """Intervals with the values for Poisson's ratio beside them."""
    made = dict(found)
    if poisson is not None:
        area = found["area"].known
        beside = {
            "shear_centre_x": poisson.shear_centre[0],
            "shear_centre_y": poisson.shear_centre[1],
            "shear_area_x": poisson.energy_coefficient[0] * area,
            "shear_area_y": poisson.energy_coefficient[1] * area,
        }
        made.update({n: replace(made[n], with_nu=float(v)) for n, v in beside.items()})
    return made


def _spans(solid: Outline, m: Mesh) -> dict[str, tuple[float, float] | None]:
    """Fractions of every wall between which it is a strip."""
    made: dict[str, tuple[float, float] | None] = {}
    for name, b in solid.bands.items():
        strip = m.strips.get(name)
        made[name] = None if strip is None else (float(strip.s[0] / b.length), float(strip.s[-1] / b.length))
    return made


def _start(solid: Outline, accuracy: float) -> Density:
    """Density that usually reaches an accuracy in one pass.

    What corners and ends cost is compared with what the walls hold, so stout walls start finer.
    """
    level = float(np.clip(np.log2(STOUT / solid.slenderness), 0.0, 2.0))
    order = 4 if solid.curved or accuracy < 3e-6 else 3
    if accuracy >= 1e-4:
        start = Density(order, eta=1e-3, slope=1.5)
    elif accuracy >= 3e-6:
        start = Density(order)
    else:
        start = Density(order, eta=1e-5, largest=0.5, slope=0.7, layers=2, first=0.5)
    return start.finer(level)


def _fields(solid: Outline, density: Density, levels: Mapping[str, float]) -> Fields:
    made = mesh(solid, density, levels)
    unknowns = len(made.triangles) * density.order**2 // 2
    if unknowns > MOST_UNKNOWNS:
        raise OutlineError("unknowns", (), f"some {unknowns} unknowns")
    own = np.array(list(solid.moduli.values()))[made.owner]
    moduli = Moduli(own[:, 1], own[:, 0] + made.boom)
    rough = made.vertices.mean(axis=0)
    centroid = inertia(space(made, density.order, rough), moduli, rough).centroid
    on = space(made, density.order, centroid)
    return solve_fields(on, moduli, inertia(on, moduli, centroid))


def _excess(found: Mapping[str, Interval], extent: float, accuracy: float) -> float:
    """Largest half-width over the asked one."""
    j = found["torsion_constant"]
    widths = [j.half_width / abs(j.known)]
    widths += [found[n].half_width / extent for n in ("shear_centre_x", "shear_centre_y")]
    return max(widths) / accuracy


def _refined(solved: Fields, levels: Mapping[str, float], worst: float) -> dict[str, float]:
    """Levels one up for the parts that hold most of the gaps, so that the rest is below half the wish."""
    m = solved.space.mesh
    share = np.zeros(len(m.labels))
    for pair in (solved.torsion, *solved.flexure):
        gap = np.bincount(m.region, solved.gap(pair), len(m.labels))
        if gap.sum() > 0.0:
            share = np.maximum(share, gap / gap.sum())
    share /= share.sum()
    order = np.argsort(-share)
    left = 1.0 - np.cumsum(share[order])
    count = 1 + int(np.argmax(left <= 0.4 / max(worst, 1.0)))
    made = dict(levels)
    for i in order[:count]:
        made[m.labels[i]] = made.get(m.labels[i], 0) + 1
    return made
