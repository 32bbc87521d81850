"""What a reference case exercises, seen from its section and its rows: nobody declares it."""

from __future__ import annotations

from collections import Counter

import beam_theory
from crosscheck.comparison import models
from crosscheck.section_file.arithmetic import names_in
from crosscheck.section_file.model import EVERY_BEND, LoadSpec, SectionFile
from crosscheck.verification.reference import ReferenceCase, ReferenceRow

NU_NAMES = ("mean_coefficient_x", "mean_coefficient_y", "energy_coefficient_x", "energy_coefficient_y")


def section_features(case: ReferenceCase, midline: beam_theory.Solution | None) -> frozenset[str]:
    """Features of the case's section, whatever is asked of it; midline: theory's solution, if it has one."""
    section = case.section
    found: set[str] = set()
    solid = section.outline
    if solid is not None:
        found.add("outline solid")
        if len(solid.rings) > 1:
            found.add("hole in a solid")
    if midline is not None:
        inside = [midline.in_cell(wall.name) for wall in midline.graph.section.walls]
        cells = len(midline.cells)
        found |= {"open walls"} if not all(inside) else set()
        found |= {"closed cell"} if cells else set()
        found |= {"many cells"} if cells > 1 else set()
        found |= {"fins"} if cells and not all(inside) else set()
    curved = [wall for wall in section.walls if wall.arc_through is not None]
    if curved:
        found.add("smooth path" if case.smooth else "arc")
    if any(wall.thickness[0] != wall.thickness[1] for wall in section.walls):
        found.add("taper")
    if any(wall.direct_share == 0.0 for wall in section.walls):
        found.add("shear-only skin")
    if section.booms:
        found.add("boom")
    if len({wall.material for wall in section.walls}) > 1:
        found.add("two materials")
    if section.cuts:
        found.add("cut choice")
    return frozenset(found | _rounding(section))


def row_features(case: ReferenceCase, row: ReferenceRow) -> frozenset[str]:
    """Features of what a row asks: its load, and Poisson's ratio."""
    found: set[str] = set()
    if row.nu or any(name in NU_NAMES for name in names_in(row.quantity)):
        found.add("nu")
    if row.load is not None:
        found |= _load_features(row, {load.name: load for load in case.section.loads}.get(row.load))
    return frozenset(found)


def _load_features(row: ReferenceRow, load: LoadSpec | None) -> set[str]:
    if load is None:
        return {"torque"} if row.load == "unit T" else set()
    found = set()
    if isinstance(load.through, tuple) and load.shear != (0.0, 0.0):
        found.add("load on a line")
    if load.torque:
        found.add("torque")
    if load.axial or load.moment != (0.0, 0.0):
        found.add("axial and moment")
    if load.bimoment:
        found.add("bimoment")
    return found


def _rounding(section: SectionFile) -> set[str]:
    """Bends where two walls meet, fillets where more do."""
    meeting = Counter(name for wall in section.walls for name in (wall.start, wall.end))
    found = set()
    for corner in section.corners:
        if corner.point == EVERY_BEND:
            found |= {"bend"} if 2 in meeting.values() else set()
        elif meeting[corner.point] >= 3:
            found.add("fillet")
        elif meeting[corner.point] == 2:
            found.add("bend")
    return found


def midline_of(section: SectionFile) -> beam_theory.Solution | None:
    """Theory's midline solution; None where the section has no walls or theory refuses them."""
    if not any(wall.seen_by != "fe" for wall in section.walls):
        return None
    try:
        return beam_theory.solve(models.theory_section(section))
    except beam_theory.TheoryError:
        return None
