"""What a comparison found for its loads beside the rows: stresses, fibres of booms, fillets, envelopes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

Series = tuple[float | None, ...]


@dataclass(frozen=True)
class FaceSeries:
    """Stress along one face of a wall, one value a probe [F/L^2]; None where a side reports nothing.

    ``fe_error`` is that of FE's shear stress; its direct stress is exact for FE's own constants, but for the
    part of a bimoment, which is an estimate.
    """

    direct: Series
    shear: Series
    von_mises: Series
    fe_direct: Series
    fe_shear: Series
    fe_von_mises: Series
    fe_error: Series


@dataclass(frozen=True)
class WallStress:
    """Stress of one load at both real faces of a wall; ``faces`` by "left" and "right" of its direction."""

    load: str
    wall: str
    unit: str
    s: tuple[float, ...]
    labels: tuple[str | None, ...]
    faces: Mapping[str, FaceSeries]
    reason: str | None = None


@dataclass(frozen=True)
class BoomFibre:
    """Direct stress of one boom of the file under one load, at its place on the midline [F/L^2]."""

    load: str
    boom: int
    place: str
    unit: str
    theory: float | None
    fe: float | None
    reason: str | None = None


@dataclass(frozen=True)
class FilletPeak:
    """FE's largest shear stress on one filleted or curved boundary under one load [F/L^2]: an estimate."""

    load: str
    where: str
    x: float
    y: float
    value: float
    error: float
    unit: str


@dataclass(frozen=True)
class Governing:
    """The value that governs, with its sign, the load it belongs to, and where.

    ``face`` is there for stresses, ``error`` for FE's.
    """

    value: float
    load: str
    s: float
    face: str | None = None
    error: float | None = None


@dataclass(frozen=True)
class WallEnvelope:
    """Largest flow or stress of a wall over all loads at the probes, on both sides.

    ``difference``: theory minus FE in magnitude over FE's; ``kind``: flow, direct or von_mises.
    """

    kind: str
    wall: str
    unit: str
    theory: Governing | None
    fe: Governing | None
    difference: float | None


@dataclass(frozen=True)
class ProbeEnvelope:
    """Lowest and highest flow or stress at one probe over all loads, on both sides."""

    kind: str
    wall: str
    s: float
    label: str | None
    unit: str
    theory_low: Governing | None
    theory_high: Governing | None
    fe_low: Governing | None
    fe_high: Governing | None


@dataclass(frozen=True)
class FlowStep:
    """What one assumption adds to the difference of a wall's flow, over the wall's own peak [-]."""

    step: str
    change: float


@dataclass(frozen=True)
class WallByLoad:
    """How far theory's flow is from FE's in one wall under one load; null with a reason where not compared.

    ``difference``, ``uncertainty`` are over ``normaliser``, the wall's own FE peak and at least 5 % of the
    section's; ``theory`` and ``fe`` are the flows there, at ``s``, the means those over the wall's strip,
    whose difference is over the same. ``steps`` add up to the difference.
    """

    load: str
    wall: str
    unit: str
    criterion: float
    difference: float | None = None
    uncertainty: float | None = None
    normaliser: float | None = None
    verdict: str | None = None
    s: float | None = None
    theory: float | None = None
    fe: float | None = None
    theory_mean: float | None = None
    fe_mean: float | None = None
    mean_difference: float | None = None
    steps: tuple[FlowStep, ...] = ()
    reason: str | None = None

    @property
    def cause(self) -> FlowStep | None:
        """The step that adds most in the sense of the difference."""
        if self.difference is None or not self.steps:
            return None
        sign = 1.0 if self.difference >= 0.0 else -1.0
        return max(self.steps, key=lambda step: sign * step.change)


@dataclass(frozen=True)
class Margin:
    """Allowable over stress minus one in one wall [-], by theory and by FE, with the loads that govern.

    ``kind``: shear_flow, shear_stress, direct_stress or von_mises_stress; ``fe_low``, ``fe_high``: with the
    FE error; ``effect``: that of using theory's stress. A side without stress in the wall has None.
    """

    wall: str
    kind: str
    unit: str
    allowable: float
    source: str
    theory: float | None
    fe: float | None
    fe_low: float | None
    fe_high: float | None
    theory_stress: Governing | None
    fe_stress: Governing | None
    effect: str | None
    reason: str | None = None

    @property
    def changes_sign(self) -> bool:
        """Whether one side finds the wall strong enough and the other does not."""
        return self.theory is not None and self.fe is not None and (self.theory < 0.0) != (self.fe < 0.0)


@dataclass(frozen=True)
class NamedProbe:
    """Flow of both sides at one of the user's probes under one load, and the load of one fastener.

    ``fe_error``: half of FE's interval of the flow; fastener loads are flow times ``pitch``, if given.
    """

    label: str
    wall: str
    s: float
    x: float
    y: float
    load: str
    unit: str
    theory: float | None
    fe: float | None
    fe_error: float | None
    pitch: float | None
    fastener_unit: str
    theory_fastener: float | None
    fe_fastener: float | None
    reason: str | None = None
