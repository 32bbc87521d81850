"""What it costs that a family of sections leaves the drawing: told beside sweeps and thresholds."""

from __future__ import annotations

import argparse
from collections.abc import Sequence

COST = (
    "The drawing is of the file's own walls; where a parameter changes them, FE of every member takes the "
    "solid they make. "
)


def tell_tracing_cost(arguments: argparse.Namespace) -> None:
    """The cost on standard output, where there is one."""
    cost = tracing_cost(arguments.path, arguments.overrides, arguments.accuracy)
    if cost is None:
        return
    from rich.console import Console

    Console(highlight=False, markup=False, emoji=False).print(cost)


def tracing_cost(path: str, overrides: Sequence[str], accuracy: float) -> str | None:
    """FE of the walls' own solid against FE of the drawing, for the file as it stands, in words.

    None where the file has no outline beside its walls, or the two sides cannot be compared.
    """
    from crosscheck.faults import SectionFaults
    from crosscheck.section_file.reader import read_section

    try:
        section = read_section(path, tuple(overrides))
    except SectionFaults:
        return None
    if section.outline is None or not section.walls:
        return None

    import beam_theory
    import fe_models
    from crosscheck.comparison.causes import TRACED
    from crosscheck.comparison.comparing import compare
    from crosscheck.comparison.quantities import QUANTITIES
    from crosscheck.reports.wording import percent_text

    try:
        result = compare(section, accuracy)
    except (fe_models.FeError, beam_theory.TheoryError):
        return None
    steps = [step for step in result.causes if step.step == TRACED]
    if not steps:
        return f"{COST}What that costs is not known: the file's own walls make no solid."
    worst = max(steps, key=lambda step: abs(step.change))
    words, torsion = QUANTITIES[worst.quantity].words, "torsion_constant"
    line = (
        f"{COST}For the file as it stands that changes FE by at most {percent_text(worst.change)} ({words})"
    )
    own = next((step for step in steps if step.quantity == torsion), worst)
    if own is worst:
        return f"{line}."
    return f"{line}, the {QUANTITIES[torsion].words} by {percent_text(own.change)}."
