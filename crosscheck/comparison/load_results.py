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
    """The value that governs, with its sign, the load it belongs to, and where; ``face`` for stresses."""

    value: float
    load: str
    s: float
    face: str | None = None


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
