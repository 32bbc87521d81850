"""Tables of a result by name: levels, stiffness, envelope, probes, stresses, and those of load_tables."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from crosscheck.comparison.load_results import Governing
from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.comparison.result import LEVELS, PropertyRow, Result
from crosscheck.reports.load_tables import margins_table, places_table, stated_table, walls_table
from crosscheck.reports.result_table import Cell, ResultTable


def levels_table(result: Result) -> ResultTable:
    """Every quantity at every level of theory beside FE, with differences over the normaliser."""
    rows: list[tuple[Cell, ...]] = []
    for row in result.quantities:
        fe = (row.fe.value, row.fe.low, row.fe.high)
        reasons = "; ".join(f"{level}: {reason}" for level, reason in row.theory_reasons.items())
        rows.append(
            (
                row.name, QUANTITIES[row.name].words, row.load, row.unit,
                *(row.theory.get(level) for level in LEVELS), *fe,
                *(row.difference.get(level) for level in LEVELS), row.normaliser,
                row.reason or reasons or None,
            )
        )  # fmt: skip
    differences = (f"difference {level}" for level in LEVELS)
    columns = (
        "quantity", "words", "load", "unit", *LEVELS, "FE", "FE low", "FE high", *differences, "normaliser",
        "remark",
    )  # fmt: skip
    shown = ("words", "load", *LEVELS, "FE", "unit")
    return ResultTable("levels", "Levels of theory beside FE", columns, tuple(rows), shown)


def stiffness_table(result: Result) -> ResultTable:
    """Stiffnesses and offsets for a beam model, then the indicators."""
    columns = ("name", "symbol", "words", "unit", *LEVELS, "FE", "FE low", "FE high", "FE with nu", "remark")
    shown = (*result.stiffness, *result.shear_coefficients, *result.indicators)
    rows = tuple(_property_cells(row) for row in shown)
    per = " per unit modulus (E = G = 1)" if result.per_modulus else ""
    title = f"Stiffness for a beam model{per}, offsets from the origin"
    names = ("symbol", "words", *LEVELS, "FE", "unit", "FE with nu")
    return ResultTable("stiffness", title, columns, rows, names)


def _property_cells(row: PropertyRow) -> tuple[Cell, ...]:
    remarks = [f"{level}: {reason}" for level, reason in row.theory_reasons.items()]
    if row.fe.value is None and row.fe.reason:
        remarks.append(row.fe.reason)
    if row.fe.nu_reason:
        remarks.append(f"with nu: {row.fe.nu_reason}")
    values = (row.theory.get(level) for level in LEVELS)
    fe = (row.fe.value, row.fe.low, row.fe.high, row.fe.with_nu)
    return (row.name, row.symbol, row.words, row.unit, *values, *fe, "; ".join(remarks) or None)


def envelope_table(result: Result) -> ResultTable:
    """Governing load of every wall on both sides."""
    columns = (
        "kind", "wall", "unit", "hand", "hand load", "hand s", "hand face", "FE", "FE load", "FE s", "FE "
        "face",
        "difference",
    )  # fmt: skip
    rows = tuple(
        (entry.kind, entry.wall, entry.unit, *_cells(entry.theory), *_cells(entry.fe), entry.difference)
        for entry in result.wall_envelopes
    )
    title = "Largest over all loads, wall by wall, at the probes"
    shown = ("kind", "wall", "hand", "hand load", "FE", "FE load", "unit")
    return ResultTable("envelope", title, columns, rows, shown)


def probes_table(result: Result) -> ResultTable:
    """Lowest and highest value at every probe over all loads, on both sides."""
    sides = [f"{side} {end}" for side in ("hand", "FE") for end in ("low", "high")]
    columns = ("kind", "wall", "s", "label", "unit", *(c for side in sides for c in (side, f"{side} load")))
    rows = []
    for entry in result.probe_envelopes:
        ends = (entry.theory_low, entry.theory_high, entry.fe_low, entry.fe_high)
        cells = [cell for end in ends for cell in _cells(end)[:2]]
        rows.append((entry.kind, entry.wall, entry.s, entry.label, entry.unit, *cells))
    title = "Lowest and highest over all loads, probe by probe"
    shown = (
        "kind",
        "wall",
        "s",
        "hand low",
        "hand low load",
        "hand high",
        "hand high load",
        "FE low",
        "FE high",
    )
    return ResultTable("probes", title, columns, tuple(rows), shown)


def _cells(found: Governing | None) -> tuple[Cell, ...]:
    return (None,) * 4 if found is None else (found.value, found.load, found.s, found.face)


def stresses_table(result: Result) -> ResultTable:
    """Direct, shear and von Mises stress of every load along every wall, face by face."""
    names = ("direct", "shear", "von_mises", "fe_direct", "fe_shear", "fe_von_mises", "fe_error")
    heads = (
        "hand direct",
        "hand shear",
        "hand von Mises",
        "FE direct",
        "FE shear",
        "FE von Mises",
        "FE error",
    )
    rows: list[tuple[Cell, ...]] = []
    for wall in result.stresses:
        for face, series in wall.faces.items():
            columns = [getattr(series, name) or (None,) * len(wall.s) for name in names]
            for i, s in enumerate(wall.s):
                values = (column[i] for column in columns)
                rows.append((wall.load, wall.wall, face, s, wall.labels[i], wall.unit, *values, wall.reason))
    all_columns = ("load", "wall", "face", "s", "label", "unit", *heads, "remark")
    title = "Stress at the real faces, at the probes"
    if any(wall.reason for wall in result.stresses):
        title += "; empty where a side has none, as in walls that carry shear only: the CSV says why"
    shown = (
        "load",
        "wall",
        "face",
        "s",
        "hand direct",
        "FE direct",
        "hand von Mises",
        "FE von Mises",
    )
    return ResultTable("stresses", title, all_columns, tuple(rows), shown)


TABLES: Mapping[str, Callable[[Result], ResultTable]] = {
    "levels": levels_table,
    "stated": stated_table,
    "walls": walls_table,
    "margins": margins_table,
    "places": places_table,
    "stiffness": stiffness_table,
    "envelope": envelope_table,
    "probes": probes_table,
    "stresses": stresses_table,
}
