"""The result of one comparison: frozen records that every report is a pure function of."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from crosscheck.comparison.drawn import Drawing
from crosscheck.comparison.load_results import (
    BoomFibre,
    FilletPeak,
    Margin,
    NamedProbe,
    ProbeEnvelope,
    WallByLoad,
    WallEnvelope,
    WallStress,
)

Verdict = Literal["within", "outside", "inconclusive"]
Effect = Literal["conservative", "unconservative", "depends"]

SCHEMA = "crosscheck.result/1"
LEVELS: tuple[str, str, str] = ("midline", "corrected", "lumped")


@dataclass(frozen=True)
class FeValue:
    """An FE number with its interval; ``basis`` says whether that is exact, a bound or an estimate.

    ``with_nu``: the same with Poisson's ratio, where it depends on it; ``nu_reason``: why that is missing.
    """

    value: float | None
    low: float | None
    high: float | None
    basis: str
    with_nu: float | None = None
    reason: str | None = None
    nu_reason: str | None = None

    @property
    def half_width(self) -> float | None:
        """Largest distance from the value to an end of its interval, in the unit of the value."""
        if self.value is None or self.low is None or self.high is None:
            return None
        return max(self.high - self.value, self.value - self.low, 0.0)


@dataclass(frozen=True)
class QuantityResult:
    """One row of the comparison: both sides, difference, criterion, verdict, effect and factor.

    ``theory`` and ``difference`` have every level; ``theory_reasons`` says why a level has none.
    """

    name: str
    symbol: str
    unit: str
    load: str | None
    theory: Mapping[str, float | None]
    fe: FeValue
    difference: Mapping[str, float | None]
    normaliser: float | None
    criterion: float
    criterion_source: Literal["default", "file"]
    uncertainty: float | None
    verdict: Verdict | None
    effect: Mapping[str, Effect] | None
    factor: float | None
    reason: str | None
    judged: str = "midline"
    note: str | None = None
    theory_reasons: Mapping[str, str] = field(default_factory=dict)

    @property
    def criterion_used(self) -> float | None:
        """Share of the criterion used by difference and FE error together [-]."""
        judged = self.judged_difference
        if judged is None or self.uncertainty is None:
            return None
        return (abs(judged) + self.uncertainty) / self.criterion

    @property
    def judged_difference(self) -> float | None:
        """Difference of the judged level over the normaliser [-]."""
        return self.difference.get(self.judged)

    @property
    def judged_theory(self) -> float | None:
        """Value of the judged level, in the unit of the quantity."""
        return self.theory.get(self.judged)


@dataclass(frozen=True)
class PropertyRow:
    """A number of the section that is shown and not judged: a stiffness or an indicator."""

    name: str
    symbol: str
    words: str
    unit: str
    theory: Mapping[str, float | None]
    fe: FeValue
    theory_reasons: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class ProbeResult:
    """Shear flow of both sides at one place on a wall; ``s`` runs along the wall from its start [L].

    ``theory`` is the judged level's, ``levels`` every level's.
    """

    s: float
    x: float
    y: float
    theory: float | None
    fe: float | None
    fe_error: float | None
    label: str | None = None
    levels: Mapping[str, float | None] = field(default_factory=dict)


@dataclass(frozen=True)
class WallFlow:
    """Flows of one load in one wall; difference over its own FE peak, at least 5 % of the section's."""

    load: str
    wall: str
    unit: str
    probes: tuple[ProbeResult, ...]
    difference: float | None
    normaliser: float | None
    reason: str | None = None


@dataclass(frozen=True)
class TheoryPeak:
    """Theory's own largest flow, direct stress or von Mises stress of a load, wherever it is (``kind``).

    ``has_fe`` is False in a joint, where FE has no counterpart.
    """

    load: str
    wall: str
    s: float
    x: float
    y: float
    value: float
    has_fe: bool
    kind: str = "flow"


@dataclass(frozen=True)
class CauseStep:
    """One step of the breakdown of a difference: the change as one assumption changes, normalised [-]."""

    quantity: str
    load: str | None
    step: str
    change: float
    uncertainty: float
    note: str | None = None


@dataclass(frozen=True)
class StatedJudgement:
    """A number of the user's judged against both sides, all values in the terms of its statement.

    ``measured_from``: datum of a position in words. ``difference_fe``, ``difference_theory``: stated minus
    FE and minus theory at ``level``, over the normaliser; ``level`` is the one that the file holds it to,
    else the nearest; ``near``: levels so near that the value may well come from them. ``place``: where a
    stated position lies, in the file's axes [L]. ``probe``: the named place of a stated flow, whose
    normaliser is FE's flow there.
    """

    quantity: str
    symbol: str
    unit: str
    load: str | None
    value: float
    source: str
    measured_from: str | None
    theory: Mapping[str, float | None]
    fe: FeValue
    normaliser: float | None
    uncertainty: float | None
    difference_fe: float | None
    difference_theory: float | None
    level: str | None
    near: tuple[str, ...]
    tolerance: float
    tolerance_source: str
    verdict: Verdict | None
    theory_verdict: Verdict | None
    effect: Mapping[str, Effect] | None
    reason: str | None
    place: tuple[float, float] | None
    probe: str | None = None


@dataclass(frozen=True)
class TwoModels:
    """How many walls and booms each side sees, and how many panels are compared."""

    theory_walls: int
    theory_booms: int
    fe_walls: int
    fe_booms: int
    panels: int


@dataclass(frozen=True)
class CheckResult:
    """One self-check of a side: what was found and what is allowed."""

    name: str
    value: float
    allowed: float
    passed: bool


@dataclass(frozen=True)
class MeshResult:
    """Size of the FE model."""

    order: int
    unknowns: int
    elements: int
    strips: int
    joints: int


@dataclass(frozen=True)
class Provenance:
    """Where the numbers come from; the only part of a result that differs between two runs of one file."""

    section_file: str
    sha256: str
    version: str
    packages: Mapping[str, str]
    python: str
    seconds: Mapping[str, float]
    tables: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class Result:
    """Everything one comparison found, in the file's units of length [L] and force [F].

    Attributes
    ----------
    title, length_unit, force_unit, judged : as in the file
    per_modulus : True where it names no material, so that what hangs on E and G is over them
    quantities : every quantity of the section and of each load: theory at all levels, FE's interval,
        verdict
    flows, stresses, boom_fibres : both sides at the probes of each wall [F/L], at its faces and at
        booms [F/L^2]
    theory_peaks, fillet_peaks : theory's own largest values; FE's on rounded boundaries [F/L^2]
    stated, causes : the user's numbers judged; the largest differences in steps [-]
    walls_by_loads, margins, named_probes, wall_envelopes, probe_envelopes : worst first; allowable over
        stress
        minus one [-]; flow [F/L] and fastener load [F]; extremes over all loads
    stiffness, indicators, shear_coefficients : EA, EI, GJ ...; lengths and Wagner coefficients; A_V/A
        by two
        definitions [-]
    mesh, checks, accuracy, accuracy_met, accuracy_note : what FE solved, self-checks of both sides,
        half-width
        asked and whether it was reached [-]
    working, drawing, field_files : hand sheets as Markdown, geometry for pictures, FE's fields; where
        asked for
    theory_notes, section_notes, outline_notes : remarks of each level, made on reading, and on the solid
    outline_alone : the section has no walls, so theory says nothing and nothing is judged
    nu, nu_reason : Poisson's ratio of values with nu [-], or why there are none
    load_kinds, models : "limit" or "ultimate" by load; what each side is made of where the file says
    overall : width and height of FE's solid [L]
    provenance : versions, hashes, time
    """

    title: str
    length_unit: str
    force_unit: str
    judged: str
    per_modulus: bool
    quantities: tuple[QuantityResult, ...]
    flows: tuple[WallFlow, ...]
    theory_peaks: tuple[TheoryPeak, ...]
    stated: tuple[StatedJudgement, ...]
    causes: tuple[CauseStep, ...]
    working: Mapping[str, str] | None
    mesh: MeshResult
    checks: tuple[CheckResult, ...]
    accuracy: float
    accuracy_met: bool
    accuracy_note: str
    outline_notes: tuple[str, ...]
    provenance: Provenance
    drawing: Drawing | None = None
    stresses: tuple[WallStress, ...] = ()
    boom_fibres: tuple[BoomFibre, ...] = ()
    fillet_peaks: tuple[FilletPeak, ...] = ()
    wall_envelopes: tuple[WallEnvelope, ...] = ()
    probe_envelopes: tuple[ProbeEnvelope, ...] = ()
    stiffness: tuple[PropertyRow, ...] = ()
    indicators: tuple[PropertyRow, ...] = ()
    theory_notes: Mapping[str, tuple[str, ...]] = field(default_factory=dict)
    section_notes: tuple[str, ...] = ()
    outline_alone: bool = False
    nu: float | None = None
    nu_reason: str | None = None
    shear_coefficients: tuple[PropertyRow, ...] = ()
    field_files: Mapping[str, bytes] = field(default_factory=dict)
    walls_by_loads: tuple[WallByLoad, ...] = ()
    margins: tuple[Margin, ...] = ()
    named_probes: tuple[NamedProbe, ...] = ()
    load_kinds: Mapping[str, str] = field(default_factory=dict)
    models: TwoModels | None = None
    overall: tuple[float, float] | None = None

    def require_drawing(self) -> Drawing:
        """The drawing; ValueError where the comparison was made without."""
        if self.drawing is None:
            raise ValueError("drawing: must be there for pictures; compare with pictures=True")
        return self.drawing

    def quantity(self, name: str, load: str | None = None) -> QuantityResult:
        """Row of a quantity and, for those of a load, of that load."""
        for row in self.quantities:
            if row.name == name and row.load == load:
                return row
        raise KeyError(f"no row {name!r} for load {load!r} in this result")
