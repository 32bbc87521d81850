"""Everything a dossier says about one section, gathered before anything is written."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import Any

from crosscheck.comparison.comparing import compare
from crosscheck.comparison.result import Result
from crosscheck.dossier.bench import Bench, comparison_of, is_large
from crosscheck.dossier.convergence import Convergence, converge
from crosscheck.dossier.holding import Holding, holding
from crosscheck.dossier.uncertainty import Uncertainty, uncertainty
from crosscheck.family.validity import Standing, read_envelope, standings
from crosscheck.section_file.model import SectionFile
from crosscheck.section_file.source import read_source

SCHEMA = "crosscheck.dossier/1"


@dataclass(frozen=True)
class Envelope:
    """An envelope of ``threshold`` that sections are held against: its file, whole, and what it says."""

    name: str
    content: bytes
    document: Mapping[str, Any]


def read_envelope_file(path: str) -> Envelope:
    """An envelope with its bytes.

    Raises
    ------
    SectionFaults
        Where it is none.
    """
    document = read_envelope(path)
    return Envelope(Path(path).name, Path(path).read_bytes(), document)


@dataclass(frozen=True)
class SectionEvidence:
    """One section: its files as they are, both sides compared, solution verification, budget, reach.

    ``files``: bytes of the section file and of every table beside it, by name, the section file first.
    """

    section: SectionFile
    files: Mapping[str, bytes]
    result: Result
    convergence: Convergence
    uncertainty: Uncertainty
    holding: Holding | None
    standings: tuple[Standing, ...] | None = None


def gather(
    section: SectionFile, accuracy: float, tell: Callable[[str], None], envelope: Envelope | None = None
) -> SectionEvidence:
    """Solve everything that the dossier of one section needs.

    Parameters
    ----------
    section : SectionFile
        As read; its files must still be what was read.
    accuracy : float
        Half-width asked of FE's intervals [-].
    tell : callable
        Told in words what is being done.
    envelope : Envelope, optional
        Held against the section.

    Raises
    ------
    fe_models.FeError, beam_theory.TheoryError
        Where a side fails.
    OSError
        Where a file cannot be read again.
    """
    path = Path(section.path)
    files = {path.name: path.read_bytes()}
    files |= {Path(name).as_posix(): (path.parent / name).read_bytes() for name in section.tables}
    result = compare(section, accuracy, tell, pictures=True, working=True)
    with Bench(comparison_of, None, is_large(result)) as bench:
        convergence = converge(section, result, bench, tell)
        budget = uncertainty(section, result, bench, tell)
        reach = holding(section, result, bench, tell)
    found = None
    if envelope is not None:
        found = tuple(standings(envelope.document, read_source(section.path), section, result))
    return SectionEvidence(section, files, result, convergence, budget, reach, found)


def evidence_record(evidence: SectionEvidence) -> dict[str, Any]:
    """Solution verification and budget as plain mappings, for JSON."""
    return {
        "schema": SCHEMA,
        "solution_verification": asdict(evidence.convergence),
        "uncertainty": asdict(evidence.uncertainty),
        "holding": None if evidence.holding is None else asdict(evidence.holding),
        "standings": None if evidence.standings is None else [asdict(each) for each in evidence.standings],
    }
