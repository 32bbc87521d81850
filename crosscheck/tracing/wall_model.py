"""The walls of a solid: faces, medial axis, strands, points."""

from __future__ import annotations

import fe_models
from crosscheck.tracing.assembly import Draft, join, stand_in
from crosscheck.tracing.faces import faced
from crosscheck.tracing.fairing import faired
from crosscheck.tracing.joining import bent, strands, united
from crosscheck.tracing.medial_axis import medial_axis
from crosscheck.tracing.model import Remark, WallModel

# Largest distance of a face from its fitted one over the thickness, where the user gives none.
TOLERANCE = 0.005


def wall_model(solid: fe_models.Solid, tolerance: float | None = None, caution: int = 0) -> WallModel:
    """Find the walls of a solid.

    Parameters
    ----------
    solid : fe_models.Solid
    tolerance : float, optional
        Largest distance of a drawn face from its wall's over the thickness [-]; 0.005, or what the
        unevenness of the drawn boundary asks for, without.
    caution : int
        0; 1 without links between walls whose midlines miss each other; 2 with one wall that stands in.

    Raises
    ------
    fe_models.OutlineError
        Rings that bound no solid.
    """
    even = faired(solid)
    outline = faced(fe_models.outline_of_solid(even.solid))
    share = max(TOLERANCE, 3.0 * even.noise / outline.thickness) if tolerance is None else tolerance
    axis = medial_axis(outline)
    found = strands(axis, share)
    clear = sum(s.wall.at_thickness(0.0) * r.length for s, r in zip(found, axis.runs, strict=True))
    knots = dict(axis.knots)
    found = united(found, knots, share)
    found, knots = bent(found, knots, outline.faces)
    draft = Draft(linked=caution == 0)
    if even.remark:
        draft.remarks.append(Remark(even.remark))
    if found and caution < 2:
        join(draft, found, knots, outline)
    else:
        stand_in(draft, outline)
    return WallModel(
        tuple(draft.points),
        tuple(draft.walls),
        tuple(draft.lumps),
        tuple(draft.remarks),
        outline,
        even.polygon or outline.polygon,
        even.solid,
        share,
        even.noise,
        min(clear / outline.polygon.area, 1.0),
        len(outline.polygon.interiors),
    )
