"""Tables of what loads make: walls by loads, margins, named probes."""

from __future__ import annotations

from crosscheck.comparison.load_results import Governing
from crosscheck.comparison.panels import ONLY_FE, ONLY_THEORY
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import LEVELS, Result
from crosscheck.reports.result_table import Cell, ResultTable
from crosscheck.reports.stated import STANDS, method_text

KIND_WORDS = {
    "shear_flow": "shear flow",
    "shear_stress": "shear stress",
    "direct_stress": "direct stress",
    "von_mises_stress": "von Mises stress",
}


def walls_table(result: Result) -> ResultTable:
    """Difference of flow of every wall under every load on the wall's own peak, worst first, and why."""
    columns = (
        "wall", "load", "load kind", "hand", "FE", "unit", "s", "hand is [%]", "FE error [%]",
        "criterion [%]", "verdict", "hand mean", "FE mean", "mean is [%]", "largest cause", "of it [%]",
        "other causes", "remark",
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    one_sided = [row for row in result.walls_by_loads if row.reason in (ONLY_FE, ONLY_THEORY)]
    told = [row for row in result.walls_by_loads if row not in one_sided]
    for row in (*told, *one_sided):
        cause = row.cause
        others = "; ".join(f"{s.step} {100 * s.change:+.2g} %" for s in row.steps if s is not cause) or None
        rows.append(
            (
                row.wall, row.load, result.load_kinds.get(row.load), row.theory, row.fe, row.unit, row.s,
                _percent(row.difference), _percent(row.uncertainty), _percent(row.criterion),
                row.verdict or "not compared",
                row.theory_mean, row.fe_mean, _percent(row.mean_difference),
                None if cause is None else cause.step, None if cause is None else _percent(cause.change),
                others, row.reason,
            )
        )  # fmt: skip
    title = (
        "Walls by loads: shear flow where hand and FE are farthest apart, in per cent of the wall's own peak "
        "(hand high +, low -), worst first"
    )
    if one_sided:
        title += f"; walls that only one side sees ({len({row.wall for row in one_sided})}) are in the CSV"
    shown = ("wall", "load", "hand", "FE", "hand is [%]", "mean is [%]", "verdict", "largest cause", "remark")
    return ResultTable("walls", title, columns, tuple(rows), shown, len(told))


def margins_table(result: Result) -> ResultTable:
    """Margin of every wall with an allowable by theory and by FE, the smallest first."""
    columns = (
        "wall", "kind", "allowable", "unit", "margin hand", "margin FE", "FE low", "FE high", "using hand is",
        "hand", "hand load", "FE", "FE load", "load kind", "source", "remark",
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    for row in result.margins:
        governing = row.fe_stress or row.theory_stress
        kind = None if governing is None else result.load_kinds.get(governing.load)
        rows.append(
            (
                row.wall, KIND_WORDS[row.kind], row.allowable, row.unit, row.theory, row.fe, row.fe_low,
                row.fe_high, row.effect, *_value_and_load(row.theory_stress), *_value_and_load(row.fe_stress),
                kind, row.source or None, row.reason,
            )
        )  # fmt: skip
    title = "Margins: allowable over the largest stress at the probes, minus 1, the smallest first"
    shown = ("wall", "kind", "allowable", "unit", "margin hand", "margin FE", "using hand is", "FE load")
    return ResultTable("margins", title, columns, tuple(rows), shown)


def stated_table(result: Result) -> ResultTable:
    """Stated values beside every level of theory and FE, with what is said of them."""
    columns = (
        "stated", "load", "from", "value", "unit", "source", "verdict", "FE", "FE low", "FE high",
        "off FE [%]", "tolerance [%]", *LEVELS, "level", "off level [%]", "remark",
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = [
        (
            QUANTITIES[row.quantity].words, row.load, row.measured_from, row.value, row.unit,
            row.source or None, STANDS[row.verdict], row.fe.value, row.fe.low, row.fe.high,
            _percent(row.difference_fe), _percent(row.tolerance), *(row.theory.get(each) for each in LEVELS),
            row.level, _percent(row.difference_theory), row.reason or method_text(row) or None,
        )
        for row in result.stated
    ]  # fmt: skip
    title = "Stated values (per cent of the FE value; of positions, of the larger overall dimension)"
    shown = ("stated", "load", "value", "FE", "unit", "off FE [%]", "verdict", "source", "remark")
    return ResultTable("stated", title, columns, tuple(rows), shown)


def places_table(result: Result) -> ResultTable:
    """Flow and fastener load at every named probe under every load."""
    columns = (
        "place", "wall", "s", "x", "y", "load", "load kind", "hand", "FE", "FE error", "unit", "pitch",
        "hand fastener", "FE fastener", "fastener unit", "remark",
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = [
        (
            row.label, row.wall, row.s, row.x, row.y, row.load, result.load_kinds.get(row.load), row.theory,
            row.fe, row.fe_error, row.unit, row.pitch, row.theory_fastener, row.fe_fastener,
            row.fastener_unit if row.pitch is not None else None, row.reason,
        )
        for row in result.named_probes
    ]  # fmt: skip
    title = "Named probes: flow along the wall, and flow times pitch for one fastener"
    shown = ("place", "load", "hand", "FE", "unit", "hand fastener", "FE fastener", "fastener unit", "remark")
    return ResultTable("places", title, columns, tuple(rows), shown)


def share_text(share: float) -> str:
    """A share in per cent with its sign, as cells of the walls by loads have it."""
    percent = 100.0 * share
    return "0" if abs(percent) < 0.05 else f"{percent:+.1f}" if abs(percent) < 10 else f"{percent:+.0f}"


def _percent(share: float | None) -> float | None:
    return None if share is None else 100.0 * share


def _value_and_load(found: Governing | None) -> tuple[Cell, Cell]:
    return (None, None) if found is None else (found.value, found.load)
