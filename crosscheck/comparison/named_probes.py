"""The user's probes under every load: flow on both sides, and a fastener's load where a pitch is given."""

from __future__ import annotations

from collections.abc import Sequence

from crosscheck.comparison.flow_comparison import LoadFlows
from crosscheck.comparison.load_results import NamedProbe
from crosscheck.comparison.quantities import UNIT_LOADS, unit_text
from crosscheck.section_file.model import SectionFile

IN_JOINT = "in a joint, where FE reports no flow"


def named_probes(section: SectionFile, flows: Sequence[LoadFlows]) -> tuple[NamedProbe, ...]:
    """Every named probe under every load, in file order; under the unit loads where the file has no other.

    Parameters
    ----------
    section : SectionFile
        Probes with their pitches.
    flows : sequence of LoadFlows
        Of all loads, unit loads first.
    """
    chosen = [found for found in flows if not found.case.unit] or list(flows)
    made = []
    for spec in section.probes:
        for found in chosen:
            for wall in found.walls:
                made += [
                    NamedProbe(
                        label=spec.label,
                        wall=wall.wall,
                        s=probe.s,
                        x=probe.x,
                        y=probe.y,
                        load=found.case.name,
                        unit=wall.unit,
                        theory=probe.theory,
                        fe=probe.fe,
                        fe_error=probe.fe_error,
                        pitch=spec.pitch,
                        fastener_unit=fastener_unit(section, found.case.name),
                        theory_fastener=_times(probe.theory, spec.pitch),
                        fe_fastener=_times(probe.fe, spec.pitch),
                        reason=_reason(wall.reason, probe.theory, probe.fe),
                    )
                    for probe in wall.probes
                    if probe.label == spec.label
                ]
    return tuple(made)


def fastener_unit(section: SectionFile, load: str) -> str:
    """Unit of flow times pitch: a force, or per unit force or torque of a unit load."""
    if load not in UNIT_LOADS:
        return section.force_unit
    return unit_text(-1 if load == UNIT_LOADS[2] else 0, 0, section.length_unit, section.force_unit)


def _times(flow: float | None, pitch: float | None) -> float | None:
    """Load of one fastener."""
    return None if flow is None or pitch is None else flow * pitch


def _reason(wall: str | None, theory: float | None, fe: float | None) -> str | None:
    """Why a side has no flow here."""
    if theory is not None and fe is not None:
        return None
    return wall or IN_JOINT
