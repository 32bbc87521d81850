"""The ten plates of a dossier: figures that each carry one message, stamped with number, units and run."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import matplotlib as mpl
from matplotlib.figure import Figure

from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import Result
from crosscheck.faults import one_line
from crosscheck.pictures.both_sides import both_sides_picture
from crosscheck.pictures.canvas import FONT, MM, SOFT, STYLE, picture_bytes
from crosscheck.pictures.causes import causes_picture
from crosscheck.pictures.criteria import criteria_picture
from crosscheck.pictures.flow import flow_picture
from crosscheck.pictures.holding import Curve, holding_picture
from crosscheck.pictures.intervals import Line, intervals_picture
from crosscheck.pictures.section import section_picture
from crosscheck.pictures.shares import Share, shares_picture
from crosscheck.pictures.unit_flows import unit_flows_picture
from crosscheck.pictures.walls_by_loads import walls_by_loads_picture
from crosscheck.pictures.words import words_picture
from crosscheck.reports.wording import verdict_sentence

WIDTH = 160
PNG_DPI = 300
STAMP_MM = 4.5


@dataclass(frozen=True)
class Plate:
    """A finished plate: its message in a sentence, and its bytes by kind (svg, pdf, png)."""

    number: int
    name: str
    message: str
    files: dict[str, bytes]


@dataclass(frozen=True)
class Extras:
    """What plates show beside the result: intervals, reach over thickness, the suite's checks."""

    intervals: Sequence[Line]
    corner_order: float | None
    suite: Sequence[Share]
    suite_words: str
    factors: Sequence[float]
    curves: Sequence[Curve]
    holding_words: str


def plate(context: tuple[Result, Extras, str], name: str) -> Plate:
    """A plate of one section; ``context`` has result, extras and run number, the same for all plates."""
    result, extras, run_id = context
    number = list(PLATES).index(name) + 1
    message, figure = PLATES[name](result, extras)
    shown = figure or words_picture(message, WIDTH)
    units = f"Units {result.length_unit}, {result.force_unit}"
    if result.per_modulus:
        units += ", per unit modulus"
    stamp(shown, f"Plate {number} of {len(PLATES)}, {one_line(result.title, 60)}. {units}. Run {run_id}.")
    files = {kind: picture_bytes(shown, kind, PNG_DPI) for kind in ("svg", "pdf", "png")}
    return Plate(number, name, message, files)


# Message of a plate and its figure; without a figure the message says why.
Drawn = tuple[str, Figure | None]


def _section(result: Result, _: Extras) -> Drawn:
    message = "The section with its axes, signs, loads and both shear centres."
    return message, section_picture(result, WIDTH)


def _both_sides(result: Result, _: Extras) -> Drawn:
    figure = both_sides_picture(result, WIDTH)
    if figure is None:
        return "The section has no walls: only FE sees it.", None
    return "What each side sees: midlines of theory over the solid of FE.", figure


def _unit_flows(result: Result, _: Extras) -> Drawn:
    figure = unit_flows_picture(result, WIDTH)
    message = "Shear flow of the unit loads on both sides." if figure else "No unit load makes a flow here."
    return message, figure


def _governing_load(result: Result, _: Extras) -> Drawn:
    governing, words = governing_load(result)
    return words, None if governing is None else flow_picture(result, governing, WIDTH)


def _walls_by_loads(result: Result, _: Extras) -> Drawn:
    figure = walls_by_loads_picture(result, WIDTH)
    if figure is None:
        return "No wall has a flow that both sides report.", None
    return "How far the hand flow is from FE's, wall by wall and load by load.", figure


def _criteria(result: Result, _: Extras) -> Drawn:
    return verdict_sentence(result), criteria_picture(result, WIDTH)


def _causes(result: Result, _: Extras) -> Drawn:
    figure = causes_picture(result, WIDTH)
    if figure is None:
        return "No difference is large enough for its causes to be told apart.", None
    return "Where the largest differences come from.", figure


def _numerical_error(_: Result, extras: Extras) -> Drawn:
    figure = intervals_picture(extras.intervals, extras.corner_order, WIDTH)
    if figure is None:
        return "Every FE value is exact or has one mesh only, so there is no error to follow.", None
    return "How the FE interval shrinks as unknowns are added.", figure


def _holding(_: Result, extras: Extras) -> Drawn:
    words = extras.holding_words
    return words, holding_picture(extras.factors, extras.curves, words, WIDTH)


def _suite(_: Result, extras: Extras) -> Drawn:
    figure = shares_picture(extras.suite, extras.suite_words, WIDTH) if extras.suite else None
    return extras.suite_words, figure


# The ten plates in order.
PLATES: dict[str, Callable[[Result, Extras], Drawn]] = {
    "section": _section,
    "both_sides": _both_sides,
    "unit_flows": _unit_flows,
    "governing_load": _governing_load,
    "walls_by_loads": _walls_by_loads,
    "criteria": _criteria,
    "causes": _causes,
    "numerical_error": _numerical_error,
    "holding": _holding,
    "suite": _suite,
}


def governing_load(result: Result) -> tuple[str | None, str]:
    """The load that has the largest hand flow in most walls, and the sentence that says so."""
    entries = [e for e in result.wall_envelopes if e.kind == "flow" and e.theory is not None]
    loads = Counter(
        e.theory.load for e in entries if e.theory is not None and e.theory.load not in UNIT_LOADS
    )
    if not any(flow.load == "unit Vy" for flow in result.flows):
        return None, "The section has no walls, so no load makes a flow along one."
    if not loads:
        return "unit Vy", "The file has no load with shear; the flow of a unit Vy stands for it."
    load, count = loads.most_common(1)[0]
    fe = sum(1 for e in entries if e.fe is not None and e.fe.load == load)
    return load, (
        f"Load {one_line(load, 60)} governs the flow in {count} of {len(entries)} walls by hand, in "
        f"{fe} by FE."
    )


def stamp(figure: Figure, text: str) -> None:
    """A line under a figure, which grows by its height; nothing on it moves."""
    old = figure.get_figheight() / MM
    new = old + STAMP_MM
    figure.set_size_inches(figure.get_figwidth(), new * MM)
    for axes in figure.axes:
        box = axes.get_position(original=True)
        axes.set_position((box.x0, (box.y0 * old + STAMP_MM) / new, box.width, box.height * old / new))
    for label in figure.texts:
        x, y = label.get_position()
        label.set_position((x, (y * old + STAMP_MM) / new))
    with mpl.rc_context(STYLE):
        figure.text(0.02, 1.2 / new, text, va="bottom", fontsize=FONT - 1, color=SOFT)
