"""Blocks of the screen below the comparison: levels beside each other, what governs, tables on request."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from crosscheck.comparison.load_results import WallEnvelope
from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import LEVELS, QuantityResult, Result
from crosscheck.faults import one_line
from crosscheck.reports.tables import Cell, ResultTable
from crosscheck.reports.wording import difference_text, name_of, number_text, worst_first

# Quantities shown at every level: those at which the levels differ most.
LEVEL_ROWS = 4
# Levels nearer to each other than this share of the criterion say the same.
SAME = 0.02
# Differences above this share of their criterion have their causes told, at most so many.
WORTH_A_CAUSE = 0.5
MOST_CAUSES = 3
KIND_WORDS = {"flow": "flow", "direct": "direct stress", "von_mises": "von Mises stress"}
NAMED = 3


def levels_block(result: Result) -> Table | None:
    """Hand values of every level against FE, where the levels differ most; None where they all agree."""
    compared = [row for row in result.quantities if row.name != "flow_at_probes"]
    ranked = sorted(compared, key=lambda row: -spread(row))
    kinds: dict[str, QuantityResult] = {}
    for row in ranked:
        kinds.setdefault(row.name, row)
    rows = list(kinds.values())[:LEVEL_ROWS]
    torsion = next((row for row in compared if row.name == "torsion_constant"), None)
    if torsion is not None and torsion not in rows:
        rows = [torsion, *rows[: LEVEL_ROWS - 1]]
    rows = [row for row in rows if row is torsion or spread(row) > SAME]
    if not rows or not any(spread(row) > SAME for row in rows):
        return None
    table = Table(box=None, padding=(0, 1, 0, 0), header_style="dim", pad_edge=False)
    table.add_column("level, hand is", width=24)
    for level in LEVELS:
        table.add_column(f"{level}{' (judged)' if level == result.judged else ''}", width=19)
    for row in rows:
        table.add_row(
            Text(one_line(name_of(row))),
            *(Text(level_text(row, level, result.length_unit)) for level in LEVELS),
        )
    return table


def level_lines(result: Result) -> Iterator[str]:
    """Where the corrected level has no torsion constant, or one farther from FE than the midline's."""
    row = next((row for row in result.quantities if row.name == "torsion_constant"), None)
    if row is None:
        return
    plain, corrected = row.difference.get("midline"), row.difference.get("corrected")
    if corrected is None and "corrected" in row.theory_reasons:
        yield one_line(f"Level corrected, torsion constant: {row.theory_reasons['corrected']}", 300)
    elif (
        plain is not None and corrected is not None and abs(corrected) > abs(plain) + (row.uncertainty or 0.0)
    ):
        yield (
            f"Level corrected is farther from FE than midline in the torsion constant here: "
            f"{level_text(row, 'corrected', result.length_unit)} against "
            f"{level_text(row, 'midline', result.length_unit)}."
        )


def cause_lines(result: Result) -> Iterator[str]:
    """Why the largest differences are there: their steps, the largest first."""
    told_of = 0
    for row in worst_first(result.quantities):
        steps = [c for c in result.causes if (c.quantity, c.load) == (row.name, row.load)]
        if not steps or abs(row.judged_difference or 0.0) < WORTH_A_CAUSE * row.criterion:
            continue
        told_of += 1
        if told_of > MOST_CAUSES:
            return
        ranked = sorted(steps, key=lambda c: -abs(c.change))
        told = "; ".join(f"{c.step} {c.change * 100:+.2g} %" for c in ranked if abs(c.change) >= 5e-5)
        yield one_line(f"Why, {name_of(row)}: {told}", 300)


def spread(row: QuantityResult) -> float:
    """Largest distance between levels over the criterion [-]; 0 where only one has a value."""
    found = [value for value in row.difference.values() if value is not None]
    return (max(found) - min(found)) / row.criterion if len(found) > 1 else 0.0


def level_text(row: QuantityResult, level: str, length_unit: str) -> str:
    """How one level is from FE, in words."""
    if row.difference.get(level) is None:
        return "not available"
    return difference_text(replace(row, judged=level), length_unit)


def governing_lines(result: Result) -> Iterator[str]:
    """Which load governs the walls, by kind, and at the named probes; nothing with fewer than two loads."""
    loads = {entry.load for entry in result.stresses}
    if len(loads) < 2:
        return
    for kind, words in KIND_WORDS.items():
        entries = [entry for entry in result.wall_envelopes if entry.kind == kind and _counts(entry)]
        if entries:
            yield one_line(f"Governs, {words}: {_governs(entries)}", 400)
    for probe in result.probe_envelopes:
        if (
            probe.label is None
            or probe.kind != "flow"
            or probe.theory_low is None
            or probe.theory_high is None
        ):
            continue
        hand = max(probe.theory_low, probe.theory_high, key=lambda end: abs(end.value))
        ends = [end for end in (probe.fe_low, probe.fe_high) if end is not None]
        fe = max(ends, key=lambda end: abs(end.value), default=None)
        told = "no FE value in a joint" if fe is None else f"FE {number_text(fe.value)}"
        by = "" if fe is None or fe.load == hand.load else f" ({fe.load})"
        yield one_line(
            f"{probe.label}: largest flow {number_text(hand.value)} {probe.unit} ({hand.load}), {told}{by}",
            300,
        )


def _counts(entry: WallEnvelope) -> bool:
    """Whether a wall has anything that governs."""
    return entry.theory is not None and entry.fe is not None and entry.fe.value != 0.0


def _governs(entries: Sequence[WallEnvelope]) -> str:
    """Loads with the walls they govern; where the sides name different loads, both."""
    groups: dict[str, list[str]] = {}
    for entry in entries:
        assert entry.theory is not None
        assert entry.fe is not None
        hand, fe = entry.theory.load, entry.fe.load
        groups.setdefault(hand if hand == fe else f"hand {hand}, FE {fe}", []).append(entry.wall)
    told = []
    for load, walls in groups.items():
        if len(groups) == 1:
            told.append(f"{load} (all {len(walls)} walls)" if len(walls) > 1 else load)
            continue
        more = f" and {len(walls) - NAMED} more" if len(walls) > NAMED else ""
        told.append(f"{load} ({', '.join(walls[:NAMED])}{more})")
    return "; ".join(told)


def restrained_line(result: Result) -> str | None:
    """Length over which restrained warping matters, as FE has it."""
    row = next((row for row in result.indicators if row.name == "characteristic_length"), None)
    if row is None or not row.fe.value:
        return None
    lacking = "FE lacks" if result.outline_alone else "neither side has"
    return (
        f"Restrained warping, which {lacking}, matters over about {number_text(row.fe.value, 3)} "
        f"{row.unit} "
        "(sqrt(E I_w/(G J))) from where it is held."
    )


def poisson_line(result: Result) -> str | None:
    """What Poisson's ratio makes of FE's shear coefficients and shear centre; None without it."""
    if result.nu is None:
        return None
    told = []
    for words in ("by energy", "by mean displacement (Cowper)"):
        rows = [row for row in result.shear_coefficients if row.words.endswith(words)]
        told.append(f"{', '.join(number_text(row.fe.with_nu, 4) for row in rows)} {words}")
    x, y = (result.quantity(f"shear_centre_{axis}") for axis in "xy")
    least = 1e-9 * (x.normaliser or 0.0)
    place = [number_text(v if v is None or abs(v) > least else 0.0) for v in (x.fe.with_nu, y.fe.with_nu)]
    return (
        f"With nu = {result.nu:g}, beside the comparison: FE's shear coefficients A_V/A along x, y "
        f"{'; '.join(told)}; shear centre at zero mean twist ({', '.join(place)}) {result.length_unit}."
    )


def curved_boundary_lines(result: Result) -> Iterator[str]:
    """Largest shear stress on curved boundaries of a section without walls, load by load."""
    told: set[str] = set(UNIT_LOADS)
    for peak in result.fillet_peaks if result.outline_alone else ():
        if peak.load not in told:
            told.add(peak.load)
            least = 1e-9 * max(abs(peak.x), abs(peak.y))
            x, y = (number_text(v if abs(v) > least else 0.0) for v in (peak.x, peak.y))
            yield one_line(
                f"Largest shear stress on a curved boundary, {peak.load}: {number_text(peak.value)} "
                f"~{number_text(peak.error, 1)} {peak.unit} at ({x}, {y})",
                300,
            )


def table_block(table: ResultTable, width: int) -> RenderableType:
    """A table for the screen: numbers are never broken; the last columns go where room is short."""
    filled = {
        name: [_cell(row[i]) for row in table.rows]
        for i, name in enumerate(table.columns)
        if any(row[i] is not None for row in table.rows)
    }
    names = [name for name in table.shown if name in filled]
    least = {name: max(_least_width(cell) for cell in filled[name]) for name in names}
    while len(names) > 1 and sum(least[name] + 1 for name in names) > width:
        names.pop()
    shown = Table(box=None, padding=(0, 1, 0, 0), header_style="dim", pad_edge=False, width=width)
    for name in names:
        numeric = any(isinstance(row[table.columns.index(name)], float) for row in table.rows)
        shown.add_column(name, justify="right" if numeric else "left", min_width=least[name], overflow="fold")
    for row in zip(*(filled[name] for name in names), strict=True):
        shown.add_row(*(Text(cell) for cell in row))
    return Group(Text(), Text(table.title, style="bold"), shown)


def _least_width(cell: str) -> int:
    """Columns that a cell needs without breaking a word; very long words may break."""
    return min(max(map(len, cell.split()), default=0), 16)


def _cell(cell: Cell) -> str:
    if cell is None:
        return ""
    return one_line(cell, 60) if isinstance(cell, str) else number_text(cell)
