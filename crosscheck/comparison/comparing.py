"""Both sides of one section joined: every quantity with its difference, verdict, effect and factor."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import replace
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import TYPE_CHECKING

import numpy as np

import beam_theory
import fe_models
from crosscheck.comparison import models
from crosscheck.comparison.causes import causes, stations
from crosscheck.comparison.drawing import drawing_of
from crosscheck.comparison.levels import Levels, solve_levels, solve_real_walls
from crosscheck.comparison.load_comparison import compare_loads
from crosscheck.comparison.outline_agreement import outline_agreement
from crosscheck.comparison.panels import two_models
from crosscheck.comparison.properties import indicator_rows, shear_coefficient_rows, stiffness_rows
from crosscheck.comparison.provenance import provenance
from crosscheck.comparison.result import CheckResult, FeValue, MeshResult, Result
from crosscheck.comparison.section_rows import section_rows
from crosscheck.comparison.stated_values import judge_stated
from crosscheck.hand_sheet.sheet import hand_sheets

if TYPE_CHECKING:
    from crosscheck.section_file.model import SectionFile

Progress = Callable[[str], None]
DEFAULT_ACCURACY = 1e-5
# What depends on Poisson's ratio.
WITH_NU = ("shear_centre_x", "shear_centre_y", "shear_area_x", "shear_area_y")


def compare(
    section: SectionFile,
    accuracy: float = DEFAULT_ACCURACY,
    progress: Progress | None = None,
    *,
    pictures: bool = False,
    working: bool = False,
    fields: Sequence[str] = (),
) -> Result:
    """Solve a section on both sides and compare.

    Parameters
    ----------
    section : SectionFile
        As read.
    accuracy : float
        Half-width asked of FE's intervals, over J and over the larger overall dimension [-].
    progress : callable, optional
        Told in words what is being done.
    pictures : bool
        True where pictures will be drawn: the result then carries geometry and curves as well.
    working : bool
        True where the hand sheet of every load is wanted.
    fields : sequence of str
        Formats, vtu or msh, in which FE's mesh and fields are wanted.

    Returns
    -------
    Result

    Raises
    ------
    fe_models.OutlineError
        Where the walls do not make a solid.
    fe_models.SolveError
        Where the FE side fails.
    beam_theory.TheoryError
        Where theory cannot take the section.

    Notes
    -----
    Verification and model comparison: both sides are prismatic, linear elastic, Saint-Venant, with an
    undistorted cross-section.
    """
    tell = progress or (lambda _: None)
    clock = time.perf_counter
    start = clock()
    tell("classical theory")
    levels = solve_levels(section)
    after_theory = clock()
    agreement = outline_agreement(section, levels)
    tell("finite elements")
    fe = models.fe_solution(section, accuracy, lambda text: tell(f"finite elements, {text}"))
    after_fe = clock()
    tell("comparison")
    seconds = {"theory": after_theory - start, "fe": after_fe - after_theory}
    notes = () if agreement is None else (agreement,)
    return join(
        section,
        levels,
        fe,
        accuracy,
        seconds=seconds,
        pictures=pictures,
        working=working,
        fields=fields,
        notes=notes,
    )


def join(
    section: SectionFile,
    levels: Levels,
    fe: fe_models.Solution,
    accuracy: float = DEFAULT_ACCURACY,
    *,
    seconds: Mapping[str, float] | None = None,
    pictures: bool = False,
    working: bool = False,
    fields: Sequence[str] = (),
    notes: Sequence[str] = (),
) -> Result:
    """Compare solutions of one section; see :func:`compare`."""
    start = time.perf_counter()
    nu_reason = models.reason_without_nu(section, fe)
    values = {
        name: replace(fe_value(interval), nu_reason=nu_reason) if name in WITH_NU else fe_value(interval)
        for name, interval in fe.quantities.items()
    }
    real = solve_real_walls(section)
    loads = compare_loads(section, levels, fe, values, real)
    rows = [*section_rows(section, levels, fe, values), loads.torsion_modulus, *loads.rows]
    theory = levels.judged_solution
    drawing = drawing_of(section, theory, fe, loads.cases, loads.judged_flows) if pictures else None
    sheets = None
    if working:
        sheets = hand_sheets(section, levels, loads.cases) if levels.solutions else {}
    stages = {**(seconds or {}), "compare": time.perf_counter() - start}
    return Result(
        title=section.title,
        length_unit=section.length_unit,
        force_unit=section.force_unit,
        judged=section.judged,
        per_modulus=not section.materials,
        quantities=tuple(rows),
        flows=loads.flows,
        theory_peaks=loads.theory_peaks,
        stated=judge_stated(section, rows, loads.flows),
        causes=causes(stations(section, levels.solutions, fe, accuracy, real), rows),
        working=sheets,
        mesh=MeshResult(fe.mesh.order, fe.mesh.unknowns, fe.mesh.elements, fe.mesh.strips, fe.mesh.joints),
        checks=(*_theory_checks(levels), *_checks("FE", fe.checks)),
        accuracy=accuracy,
        accuracy_met=bool(fe.met),
        accuracy_note=fe.accuracy_note,
        outline_notes=(*notes, *fe.outline.notes),
        provenance=provenance(str(section.path), section.sha256, stages, section.tables),
        drawing=drawing,
        stresses=loads.stresses,
        boom_fibres=loads.boom_fibres,
        fillet_peaks=loads.fillet_peaks,
        wall_envelopes=loads.wall_envelopes,
        probe_envelopes=loads.probe_envelopes,
        stiffness=stiffness_rows(section, levels, values),
        indicators=indicator_rows(section, levels, values),
        theory_notes={level: tuple(solution.notes) for level, solution in levels.solutions.items()},
        section_notes=section.notes,
        walls_by_loads=loads.walls_by_loads,
        margins=loads.margins,
        named_probes=loads.named_probes,
        load_kinds={load.name: load.kind for load in section.loads if load.kind is not None},
        models=two_models(section),
        overall=_overall(fe),
        outline_alone=not levels.solutions,
        nu=None if fe.poisson is None else fe.poisson.nu,
        nu_reason=nu_reason,
        shear_coefficients=shear_coefficient_rows(levels, fe, values),
        field_files=field_files(fe, fields, section.length_unit),
    )


def _overall(fe: fe_models.Solution) -> tuple[float, float]:
    """Width and height of FE's solid [L]."""
    width, height = np.ptp(fe.outline.loops[0], axis=0)
    return float(width), float(height)


def field_files(fe: fe_models.Solution, formats: Sequence[str], length_unit: str) -> dict[str, bytes]:
    """Mesh and fields as the bytes of a file of every format, by name."""
    made = {}
    with TemporaryDirectory() as folder:
        for ending in formats:
            path = Path(folder) / f"fields.{ending}"
            fe_models.write_fields(fe, path, length_unit)
            made[path.name] = path.read_bytes()
    return made


def fe_value(interval: fe_models.Interval) -> FeValue:
    """FE's interval as the result records it."""
    return FeValue(
        interval.value, interval.low, interval.high, interval.basis, interval.with_nu, interval.reason
    )


def _theory_checks(levels: Levels) -> Iterator[CheckResult]:
    """Self-checks of every level, the midline's first and without a name."""
    for level, solution in levels.solutions.items():
        yield from _checks("theory" if level == "midline" else f"theory, {level}", solution.checks)


def _checks(
    side: str, checks: Sequence[beam_theory.Check] | Sequence[fe_models.Check]
) -> tuple[CheckResult, ...]:
    """Self-checks of one side, with the side in front of the name."""
    return tuple(
        CheckResult(f"{side}: {check.name}", float(check.value), float(check.allowed), bool(check.passed))
        for check in checks
    )
