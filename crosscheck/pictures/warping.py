"""The warping function along the walls."""

from __future__ import annotations

import numpy as np
from matplotlib.figure import Figure

from crosscheck.comparison.quantities import unit_text
from crosscheck.comparison.result import Result
from crosscheck.pictures.canvas import plain_unit
from crosscheck.pictures.diagram import Mark, along_walls
from crosscheck.reports.wording import full_difference_text, number_text

# A warping function below this share of D^2 is drawn as small as it is.
LEAST_WARPING = 0.02


def warping_picture(result: Result, width_mm: int = 160) -> Figure | None:
    """Warping diagram of both sides; None where theory has no shear centre to twist about.

    Parameters
    ----------
    result : Result
        What a comparison found.
    width_mm : int
        Width of the paper.

    Returns
    -------
    Figure or None
    """
    drawing = result.require_drawing()
    if not drawing.warping:
        return None
    unit = plain_unit(unit_text(2, 0, result.length_unit, result.force_unit))
    marks = {
        name: _marks(rows, drawing.warping.get(name), name, result)
        for name, rows in drawing.fe_warping.items()
    }
    constant = result.quantity("warping_constant")
    judged = full_difference_text(constant, result.length_unit)
    title = f"Warping function about each side's own shear centre [{unit}]: warping constant by hand {judged}"
    caption = (
        "Line: hand method. Circles: FE on the midline. Axial displacement = warping function times rate of "
        "twist; mean zero. Drawn on the right of a wall walked up, right or anticlockwise where positive."
    )
    figure, _ = along_walls(
        drawing,
        drawing.warping,
        marks,
        width_mm,
        title,
        caption,
        result.length_unit,
        lambda omega: number_text(omega, 3),
        turned=False,
        least_peak=LEAST_WARPING * drawing.extent**2,
    )
    return figure


def _marks(rows: np.ndarray, theory: np.ndarray | None, name: str, result: Result) -> tuple[Mark, ...]:
    """FE's values of one wall, with theory's beside them."""
    s = next(wall.s for wall in result.require_drawing().walls if wall.name == name)
    return tuple(
        Mark(float(at), float(omega), 0.0, None if theory is None else float(np.interp(at, s, theory)))
        for at, omega in rows
        if np.isfinite(omega)
    )
