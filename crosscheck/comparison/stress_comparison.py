"""Direct, shear and von Mises stress of both sides at the real faces of the walls, at the same probes."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.drawn import Array
from crosscheck.comparison.flow_comparison import Probe
from crosscheck.comparison.levels import TheoryStress
from crosscheck.comparison.load_case import LoadCase
from crosscheck.comparison.load_results import FaceSeries, Series, WallStress
from crosscheck.comparison.panels import Panel
from crosscheck.comparison.result import FeValue
from crosscheck.comparison.verdicts import ROUND_OFF

if TYPE_CHECKING:
    import beam_theory
    from crosscheck.section_file.model import SectionFile

FACES = ("left", "right")
# Factor on the estimated error of a largest stress, see fe_peak.
MAXIMUM_FACTOR = 2.0
SHEAR_ONLY = "{side}'s wall carries shear only: its direct stress is in the booms"


@dataclass(frozen=True)
class UnitFaces:
    """FE's stress at both faces of a wall per unit resultant; NaN at probes outside its strip.

    ``shear``, ``error`` (3, 2, n): of Vx, Vy and T. ``direct`` (4, 2, n): of N, Mx, My and B.
    ``bimoment_share``: relative error of the part of B.
    """

    shear: Array
    error: Array
    direct: Array
    bimoment_share: float


@dataclass(frozen=True)
class WallFaces:
    """Stress of one load in one wall: theory by level and FE, each (2, 2, n) as direct and shear by face.

    ``fe_error`` (2, 2, n). Theory's levels that have none are absent; FE is NaN outside the strip.
    ``shear_only``: the side whose wall alone carries no direct stress, so that neither that nor von Mises
    stress can be compared.
    """

    wall: str
    probes: tuple[Probe, ...]
    s: Array
    theory: Mapping[str, Array]
    fe: Array
    fe_error: Array
    shear_only: str | None = None

    @property
    def both_sides(self) -> bool:
        """Whether theory sees the wall at all."""
        return bool(self.theory)


@dataclass(frozen=True)
class LoadStress:
    """Stress of one load in every wall; ``reason``: why the judged level or FE has none."""

    case: LoadCase
    walls: tuple[WallFaces, ...]
    reasons: Mapping[str, str]
    reason: str | None


@dataclass(frozen=True)
class FacePeak:
    """Largest stress in magnitude over the probes, with its interval, and where."""

    value: float
    low: float
    high: float
    wall: str
    face: str
    s: float


def unit_faces(
    section: SectionFile, fe: fe_models.Solution, panel: Panel, probes: Sequence[Probe], *, bimoment: bool
) -> UnitFaces:
    """FE's stress per unit resultant at the probes of a panel; faces are those of the panel's direction.

    Shear resultants make no direct stress and the others no shear stress, so each call carries one of both.
    FE's direct stress is that smeared over the wall (direct_share) and over the patch of a boom; it is turned
    into that of the wall's own material, which is what theory gives.

    Parameters
    ----------
    section : SectionFile
        For the wall's material and share.
    fe : fe_models.Solution
        Solved.
    panel : Panel
        Where; FE's walls run along it.
    probes : sequence of Probe
        Where.
    bimoment : bool
        Whether the part of a bimoment is wanted.
    """
    n = len(probes)
    inside = np.array([probe.in_strip for probe in probes], dtype=bool)
    shear, error = np.full((3, 2, n), np.nan), np.full((3, 2, n), np.nan)
    direct = np.full((4, 2, n), np.nan)
    warping = fe.quantities["warping_constant"]
    share = warping.half_width / warping.value if bimoment and warping.value else 0.0
    if not inside.any() or panel.fe is None:
        return UnitFaces(shear, error, direct, share)
    spec = panel.fe.wall
    wall, at = spec.name, panel.fe.on_wall(np.array([probe.at for probe in probes])[inside])
    actions = (
        fe_models.Actions(shear=(1.0, 0.0), axial=1.0),
        fe_models.Actions(shear=(0.0, 1.0), moment=(1.0, 0.0)),
        fe_models.Actions(torque=1.0, moment=(0.0, 1.0)),
    )
    found = [fe.face_stress(wall, at, action) for action in actions]
    shear[:, :, inside] = [each.shear for each in found]
    error[:, :, inside] = [each.error for each in found]
    if spec.direct_share > 0.0:
        area = fe.quantities["area"].value
        assert area is not None
        own = models.modulus_ratios(section, spec.material)[0] / (found[0].direct * area)
        direct[:3, :, inside] = [each.direct * own for each in found]
        direct[3] = 0.0 * direct[0]
        if bimoment:
            direct[3][:, inside] = fe.face_stress(wall, at, fe_models.Actions(bimoment=1.0)).direct * own
    else:
        direct[:, :, inside] = 0.0
    return UnitFaces(shear, error, direct, share)


def load_stress(
    case: LoadCase,
    theory: Mapping[str, TheoryStress],
    judged: str,
    units: Mapping[str, UnitFaces],
    torque: FeValue,
    panels: Mapping[str, Panel],
    probes: Mapping[str, Sequence[Probe]],
) -> LoadStress:
    """Stress of one load on both sides.

    Parameters
    ----------
    case : LoadCase
        The load.
    theory : mapping of level to TheoryStress
        Theory's stress of it.
    judged : str
        The level that verdicts judge.
    units : mapping of panel to UnitFaces
        FE's, per unit resultant.
    torque : FeValue
        Torque about FE's shear centre [F L].
    panels, probes : mapping of name
        Geometry and the walls of both sides, and where.
    """
    reasons = {level: found.reason for level, found in theory.items() if found.reason is not None}
    reason = theory[judged].reason or torque.reason
    walls = []
    for name, panel in panels.items():
        at = np.array([probe.at for probe in probes[name]])
        by_level = {
            level: faces_on(panel, found.stress, at)
            for level, found in theory.items()
            if found.stress is not None and panel.theory is not None
        }
        fe, error = _fe_faces(case, torque, units[name])
        s = at * panel.line.length
        walls.append(WallFaces(name, tuple(probes[name]), s, by_level, fe, error, panel.shear_only))
    return LoadStress(case, tuple(walls), reasons, reason)


def faces_on(panel: Panel, stress: beam_theory.Stress, at: Array) -> Array:
    """Theory's direct and shear stress (2, 2, n) at the left and right face of a panel's direction."""
    assert panel.theory is not None
    wall, places = panel.theory.wall.name, panel.theory.on_wall(at)
    direct, shear = stress.direct(wall, places).T, panel.theory.sign * stress.shear(wall, places).T
    turned = slice(None, None, -1) if panel.theory.sign < 0 else slice(None)
    return np.stack([direct[turned], shear[turned]])


def _fe_faces(case: LoadCase, torque: FeValue, unit: UnitFaces) -> tuple[Array, Array]:
    """FE's direct and shear stress (2, 2, n) of a load, and their errors."""
    if torque.value is None:
        return np.full((2, *unit.direct.shape[1:]), np.nan), np.full((2, *unit.direct.shape[1:]), np.nan)
    along = np.array((*case.shear, torque.value))
    shear = np.tensordot(along, unit.shear, axes=1)
    shear_error = np.tensordot(np.abs(along), unit.error, axes=1)
    shear_error = shear_error + (torque.half_width or 0.0) * np.abs(unit.shear[2])
    parts = np.array((case.axial, *case.moment, case.bimoment))
    direct = np.tensordot(parts, unit.direct, axes=1)
    direct_error = unit.bimoment_share * np.abs(case.bimoment * unit.direct[3])
    return np.stack([direct, shear]), np.stack([direct_error, shear_error])


def von_mises(stress: Array) -> Array:
    """sqrt(sigma^2 + 3 tau^2) of direct and shear stress (2, ...) [F/L^2]."""
    return np.asarray(np.sqrt(stress[0] ** 2 + 3.0 * stress[1] ** 2))


def measure(kind: str, stress: Array) -> Array:
    """Stress of a kind, "direct", "shear", "von_mises" or "surface" (2, n), from direct and shear (2, 2, n).

    "surface": half of what the shear stress at the right face exceeds that at the left.
    """
    if kind == "von_mises":
        return von_mises(stress)
    if kind == "surface":
        half = 0.5 * (stress[1, 1] - stress[1, 0])
        return np.stack([half, half])
    return np.asarray(stress[0 if kind == "direct" else 1])


def counted(kind: str, wall: WallFaces) -> Array:
    """Probes (n,) that the largest stress of a kind is taken from: of shear those clear of the joints.

    Near a sharp re-entrant corner shear stress at a face depends on how near, so a largest one would be that
    of an
    arbitrary place. Direct stress is smooth and counts all along the strip. Where no probe of a wall is
    clear, all
    count.
    """
    seen = np.isfinite(wall.fe[1, 0])
    clear = seen & np.array([probe.clear for probe in wall.probes], dtype=bool)
    return np.asarray(clear if kind != "direct" and clear.any() else seen)


def fe_peak(kind: str, walls: Sequence[WallFaces]) -> FacePeak | None:
    """FE's largest stress of a kind over the probes of walls, with its interval.

    On a finer mesh the largest one may sit at another place. The interval therefore reaches up to the largest
    value + error of any place, and both ways by the largest error of all places looked at, at least
    round-off. It is an estimate, with a factor of 2: without, 3 of 128 such values of 13 shapes at depth
    over thickness 6, 12 and 30, found at accuracy 1e-7, lay outside the interval of 1e-5, by 28 % of its
    half-width at most.
    """
    best: FacePeak | None = None
    high, widest = 0.0, 0.0
    for wall in walls:
        value = np.where(counted(kind, wall), np.abs(measure(kind, wall.fe)), np.nan)
        if not np.isfinite(value).any():
            continue
        error = peak_error(kind, wall)
        high = max(high, float(np.nanmax(value + error)))
        widest = max(widest, float(np.nanmax(np.where(np.isfinite(value), error, np.nan))))
        face, i = np.unravel_index(int(np.nanargmax(value)), value.shape)
        if best is None or value[face, i] > best.value * (1.0 + 1e-9):
            best = FacePeak(
                float(value[face, i]), 0.0, 0.0, wall.wall, FACES[int(face)], float(wall.s[int(i)])
            )
    if best is None:
        return None
    half = max(MAXIMUM_FACTOR * max(high - best.value, widest), ROUND_OFF * best.value)
    return FacePeak(best.value, max(best.value - half, 0.0), best.value + half, best.wall, best.face, best.s)


def peak_error(kind: str, wall: WallFaces) -> Array:
    """Error of a kind of stress (2, n): the parts' errors pass to von Mises stress at most undiminished."""
    direct, shear = wall.fe_error
    if kind == "direct":
        return np.asarray(direct)
    if kind == "von_mises":
        return np.asarray(np.sqrt(direct**2 + 3.0 * shear**2))
    return np.asarray(shear)


def level_peak(kind: str, level: str, walls: Sequence[WallFaces]) -> float | None:
    """Theory's largest stress of a kind, in magnitude, over the probes where FE reports too."""
    found = [
        float(np.abs(measure(kind, wall.theory[level]))[:, counted(kind, wall)].max())
        for wall in walls
        if level in wall.theory and counted(kind, wall).any()
    ]
    return max(found, default=None)


def wall_stresses(found: LoadStress, judged: str, unit: str) -> tuple[WallStress, ...]:
    """Stress of a load along every wall, as the result records it."""
    made = []
    for wall in found.walls:
        theory = wall.theory.get(judged)
        faces = {face: _face_series(theory, wall, i) for i, face in enumerate(FACES)}
        labels = tuple(probe.label for probe in wall.probes)
        reason = found.reason
        if reason is None and wall.shear_only is not None:
            reason = SHEAR_ONLY.format(side=wall.shear_only)
        s = tuple(float(s) for s in wall.s)
        made.append(WallStress(found.case.name, wall.wall, unit, s, labels, faces, reason))
    return tuple(made)


def _face_series(theory: Array | None, wall: WallFaces, face: int) -> FaceSeries:
    """Stress along one face of a wall."""

    def of(kind: str, stress: Array | None) -> Series:
        return _series(None if stress is None else measure(kind, stress)[face])

    # The direct stress of a wall that carries none is in its neighbours: it is not zero there but not told.
    full = None if wall.shear_only == "theory" else theory
    fe_full = None if wall.shear_only == "FE" else wall.fe
    return FaceSeries(
        direct=of("direct", full),
        shear=of("shear", theory),
        von_mises=of("von_mises", full),
        fe_direct=of("direct", fe_full),
        fe_shear=of("shear", wall.fe),
        fe_von_mises=of("von_mises", fe_full),
        fe_error=_series(wall.fe_error[1][face]),
    )


def _series(values: Array | None) -> Series:
    """Numbers with None for what is not there; empty where a side has none at all."""
    if values is None:
        return ()
    return tuple(None if np.isnan(value) else float(value) for value in values)
