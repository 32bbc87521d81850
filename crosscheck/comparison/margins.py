"""Margins from allowables: allowable over stress minus one, with theory's number and with FE's, wall by wall.

The stress is the largest in magnitude over all loads of the file at the probes of the wall, the same on both
sides; the allowable is the wall's own of its kind, else that of every wall.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

from crosscheck.comparison.load_results import Governing, Margin, WallEnvelope
from crosscheck.comparison.panels import Panel
from crosscheck.comparison.result import Effect
from crosscheck.comparison.stress_comparison import SHEAR_ONLY
from crosscheck.comparison.verdicts import ROUND_OFF
from crosscheck.section_file.model import AllowableSpec

# Kinds of allowables and of envelopes.
ENVELOPE_OF = {
    "shear_flow": "flow",
    "shear_stress": "shear",
    "direct_stress": "direct",
    "von_mises_stress": "von_mises",
}
NO_LOAD = "no load of the file stresses this wall in that way"


def margins(
    allowables: Sequence[AllowableSpec], envelopes: Iterable[WallEnvelope], panels: Mapping[str, Panel]
) -> tuple[Margin, ...]:
    """Margins of every wall that has an allowable, the smallest of either side first.

    Parameters
    ----------
    allowables : sequence of AllowableSpec
        Of the file.
    envelopes : iterable of WallEnvelope
        Largest flow, shear, direct and von Mises stress of every wall over the loads.
    panels : mapping of name to Panel
        For the walls' names on both sides.
    """
    by_kind = {(entry.kind, entry.wall): entry for entry in envelopes}
    made = []
    for kind, envelope_kind in ENVELOPE_OF.items():
        for name, panel in panels.items():
            allowable = _allowable(allowables, kind, panel)
            envelope = by_kind.get((envelope_kind, name))
            if allowable is not None and envelope is not None:
                made.append(_margin(allowable, kind, envelope, panel))
    return tuple(sorted(made, key=_smallest))


def _smallest(margin: Margin) -> float:
    """The smaller margin of the two sides; those without any come last."""
    known = [value for value in (margin.theory, margin.fe) if value is not None]
    return min(known, default=float("inf"))


def _allowable(allowables: Sequence[AllowableSpec], kind: str, panel: Panel) -> AllowableSpec | None:
    """Allowable of a kind that holds for a panel: its wall's own before that of every wall."""
    names = {panel.name} | {side.wall.name for side in (panel.theory, panel.fe) if side is not None}
    own = next((each for each in allowables if each.kind == kind and each.wall in names), None)
    return own or next((each for each in allowables if each.kind == kind and each.wall is None), None)


def _margin(allowable: AllowableSpec, kind: str, envelope: WallEnvelope, panel: Panel) -> Margin:
    """Margin of one wall."""
    theory, fe = envelope.theory, envelope.fe
    reason = panel.reason
    if kind in ("direct_stress", "von_mises_stress") and panel.shear_only is not None:
        theory, reason = None, SHEAR_ONLY.format(side=panel.shear_only)
    low = high = None
    if fe is not None and fe.value != 0.0:
        error = fe.error or 0.0
        low = allowable.value / (abs(fe.value) + error) - 1.0
        high = allowable.value / (abs(fe.value) - error) - 1.0 if error < abs(fe.value) else None
    hand, real = _of(allowable.value, theory), _of(allowable.value, fe)
    if hand is None and real is None:
        reason = reason or NO_LOAD
    return Margin(
        wall=envelope.wall,
        kind=kind,
        unit=envelope.unit,
        allowable=allowable.value,
        source=allowable.source,
        theory=hand,
        fe=real,
        fe_low=low,
        fe_high=high,
        theory_stress=theory,
        fe_stress=fe,
        effect=_effect(theory, fe),
        reason=reason,
    )


def _of(allowable: float, found: Governing | None) -> float | None:
    """Allowable over stress minus one; None without stress."""
    return None if found is None or found.value == 0.0 else allowable / abs(found.value) - 1.0


def _effect(theory: Governing | None, fe: Governing | None) -> Effect | None:
    """Effect of using theory's stress; None where the FE error hides it, or a side has none."""
    if theory is None or fe is None:
        return None
    gap = abs(theory.value) - abs(fe.value)
    if abs(gap) <= max(fe.error or 0.0, ROUND_OFF * abs(fe.value)):
        return None
    return "conservative" if gap > 0.0 else "unconservative"
