"""Blocks of the screen below the comparison: levels beside each other, what governs, tables on request."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from collections.abc import Set as AbstractSet
from dataclasses import replace
from typing import Literal

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from crosscheck.comparison.load_results import BoomFibre, Governing, NamedProbe, WallEnvelope
from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import LEVELS, QuantityResult, Result
from crosscheck.faults import one_line
from crosscheck.reports.result_table import ResultTable, table_text
from crosscheck.reports.wording import difference_text, name_of, number_text, percent_text, worst_first

# Quantities shown at every level: those at which the levels differ most.
LEVEL_ROWS = 4
# Levels nearer to each other than this share of the criterion say the same.
SAME = 0.02
# Differences above this share of their criterion have their causes told, at most so many.
WORTH_A_CAUSE = 0.5
MOST_CAUSES = 3
KIND_WORDS = {"flow": "flow", "direct": "direct stress", "von_mises": "von Mises stress"}
NAMED = 3
# Walls whose flows are off, told by name.
MOST_NAMED = 8


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
    """Which load governs the walls, by kind; nothing with fewer than two loads."""
    loads = {entry.load for entry in result.stresses}
    if len(loads) < 2:
        return
    for kind, words in KIND_WORDS.items():
        entries = [entry for entry in result.wall_envelopes if entry.kind == kind and _counts(entry)]
        if entries:
            yield one_line(f"Governs, {words}: {_governs(entries)}", 400)
        elif kind == "direct" and (booms := list(_at_booms(result))):
            yield one_line(f"Governs, {words} at theory's booms: {_governs(booms, 'booms')}", 400)


def _at_booms(result: Result) -> Iterator[WallEnvelope]:
    """Largest direct stress of both sides at every boom of theory that both have one at."""
    booms: dict[int, list[BoomFibre]] = {}
    for fibre in result.boom_fibres:
        if fibre.theory is not None and fibre.fe is not None:
            booms.setdefault(fibre.boom, []).append(fibre)
    for fibres in booms.values():
        hand = max(fibres, key=lambda fibre: abs(fibre.theory or 0.0))
        fe = max(fibres, key=lambda fibre: abs(fibre.fe or 0.0))
        governing = Governing(hand.theory or 0.0, hand.load, 0.0), Governing(fe.fe or 0.0, fe.load, 0.0)
        yield WallEnvelope("direct", hand.place, hand.unit, *governing, difference=None)


def probe_lines(result: Result) -> Iterator[str]:
    """Largest flow at every named probe, and the load of one fastener where its pitch is given."""
    places: dict[str, list[NamedProbe]] = {}
    for row in result.named_probes:
        places.setdefault(row.label, []).append(row)
    for label, rows in places.items():
        hand = max(rows, key=lambda row: abs(row.theory or 0.0))
        fe = max(rows, key=lambda row: abs(row.fe or 0.0))
        unit, by = hand.unit, "" if fe.load == hand.load or hand.theory is None else f" ({fe.load})"
        if hand.theory is None:
            told = f"largest flow in FE {number_text(fe.fe)} {unit} ({fe.load}); {hand.reason}"
        else:
            other = f"FE {number_text(fe.fe)}{by}" if fe.fe is not None else str(hand.reason)
            told = f"largest flow {number_text(hand.theory)} {unit} ({hand.load}), {other}"
        if hand.pitch is not None:
            loads = [row for row in (hand.theory_fastener, fe.fe_fastener) if row is not None]
            values = ", FE ".join(number_text(abs(value)) for value in loads)
            only = "" if hand.theory_fastener is not None else "FE "
            told += f"; one fastener, pitch {hand.pitch:g}: {only}{values} {hand.fastener_unit}"
        yield one_line(f"{label}: {told}", 300)


def wall_line(result: Result) -> str | None:
    """In how many walls the flow is off by more than the criterion, where most and why, and their means."""
    known = [row for row in result.walls_by_loads if row.difference is not None]
    over = [row for row in known if row.verdict == "outside"]
    if not over:
        return None
    worst, of = over[0], {row.wall for row in known}
    way = "high" if (worst.difference or 0.0) > 0 else "low"
    cause = "" if worst.cause is None else f", mostly {worst.cause.step}"
    line = (
        f"Walls: flow off by more than {100 * worst.criterion:g} % of the wall's own peak in "
        f"{_which({row.wall for row in over}, of)}; most: {worst.wall}, {worst.load}: "
        f"{percent_text(worst.difference or 0.0)} {way}{cause}"
    )
    means = {row.wall for row in known if abs(row.mean_difference or 0.0) > row.criterion}
    return one_line(f"{line}. Mean flow off by more: in {_which(means, of)}. --table walls", 600)


def _which(walls: AbstractSet[str], of: AbstractSet[str]) -> str:
    """How many of the walls, and which: by name those that are, or are not, as long as they are few."""
    rest = of - walls
    number = f"{len(walls)} of {len(of)}"
    if walls and rest and len(rest) <= min(len(walls), MOST_NAMED):
        return f"{number} (all but {', '.join(sorted(rest))})"
    return f"{number} ({', '.join(sorted(walls))})" if 0 < len(walls) <= MOST_NAMED else number


def model_lines(result: Result) -> Iterator[str]:
    """What each side sees where the file gives them models of their own, and how far those are apart."""
    seen = result.models
    if seen is None:
        return
    sides = []
    for side, walls, booms in (
        ("theory", seen.theory_walls, seen.theory_booms),
        ("FE", seen.fe_walls, seen.fe_booms),
    ):
        with_booms = f" and {booms} booms" if booms else ""
        sides.append(f"{side} sees {walls} walls{with_booms}")
    area, x, y = (result.quantity(name) for name in ("area", "centroid_x", "centroid_y"))
    apart = ", ".join(
        f"{name} {number_text(row.judged_theory)} and {number_text(row.fe.value)} {row.unit} "
        f"({difference_text(row, result.length_unit)})"
        for name, row in (("area", area), ("centroid x", x), ("y", y))
    )
    yield one_line(
        f"Two models: {', '.join(sides)}; {seen.panels} walls compared by name. Hand and FE: {apart}.", 400
    )


def margin_lines(result: Result) -> Iterator[str]:
    """Smallest margin of both sides, and walls whose margin changes its sign."""
    if not result.margins:
        return
    told = []
    for side, stress in (("theory", "theory_stress"), ("fe", "fe_stress")):
        known = [row for row in result.margins if getattr(row, side) is not None]
        if known:
            least = min(known, key=lambda row: float(getattr(row, side)))
            words = f"{least.wall}, {least.kind.replace('_', ' ')}, {getattr(least, stress).load}"
            name = "by hand" if side == "theory" else "with FE"
            told.append(f"{name} {number_text(getattr(least, side), 3)} ({words})")
    if told:
        yield one_line(f"Smallest margin, allowable / stress - 1: {'; '.join(told)}", 400)
    for row in result.margins:
        if row.changes_sign:
            hand, fe = number_text(row.theory, 3), number_text(row.fe, 3)
            kind = row.kind.replace("_", " ")
            yield one_line(f"Margin of {row.wall}, {kind}: {hand} by hand but {fe} with FE", 300)


def _counts(entry: WallEnvelope) -> bool:
    """Whether a wall has anything that governs."""
    return entry.theory is not None and entry.fe is not None and entry.fe.value != 0.0


def _governs(entries: Sequence[WallEnvelope], noun: str = "walls") -> str:
    """Loads with the walls or booms they govern; where the sides name different loads, both."""
    groups: dict[str, list[str]] = {}
    for entry in entries:
        assert entry.theory is not None
        assert entry.fe is not None
        hand, fe = entry.theory.load, entry.fe.load
        groups.setdefault(hand if hand == fe else f"hand {hand}, FE {fe}", []).append(entry.wall)
    told = []
    for load, walls in groups.items():
        if len(groups) == 1:
            told.append(f"{load} (all {len(walls)} {noun})" if len(walls) > 1 else load)
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
    text = table_text(table)
    if not text.rows:
        return Group(Text(), Text(f"{table.title}: nothing to show", style="bold"))
    columns = range(len(text.columns))
    least = [max(_least_width(row[i]) for row in (text.columns, *text.rows)) for i in columns]
    many = len(text.columns)
    while many > 1 and sum(least[i] + 1 for i in range(many)) > width:
        many -= 1
    wanted = [max(len(row[i]) for row in (text.columns, *text.rows)) for i in range(many)]
    shown = Table(box=None, padding=(0, 1, 0, 0), header_style="dim", pad_edge=False)
    spare = width - sum(least[i] + 1 for i in range(many))
    for i in range(many):
        more = min(wanted[i] - least[i], spare)
        spare -= more
        justify: Literal["left", "right"] = "right" if text.numeric[i] else "left"
        shown.add_column(text.columns[i], justify=justify, width=least[i] + more, overflow="fold")
    for row in text.rows:
        shown.add_row(*(Text(one_line(cell, 60)) for cell in row[:many]))
    return Group(Text(), Text(table.title, style="bold"), shown)


def _least_width(cell: str) -> int:
    """Columns that a cell needs without breaking a word; very long words may break."""
    return min(max(map(len, cell.split()), default=0), 16)
