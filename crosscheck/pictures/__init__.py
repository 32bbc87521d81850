"""Pictures of a result: vector and raster, for 80 mm columns and 160 mm pages."""

from __future__ import annotations

from matplotlib.figure import Figure

from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.comparison.result import Result
from crosscheck.file_names import free_name
from crosscheck.pictures.both_sides import both_sides_picture
from crosscheck.pictures.canvas import WIDTHS, picture_bytes
from crosscheck.pictures.causes import causes_picture
from crosscheck.pictures.criteria import criteria_picture
from crosscheck.pictures.flow import flow_picture
from crosscheck.pictures.joints import joints_picture
from crosscheck.pictures.section import section_picture
from crosscheck.pictures.walls_by_loads import walls_by_loads_picture
from crosscheck.pictures.warping import warping_picture

__all__ = [
    "both_sides_picture",
    "causes_picture",
    "criteria_picture",
    "every_picture",
    "flow_picture",
    "joints_picture",
    "picture_bytes",
    "section_picture",
    "walls_by_loads_picture",
    "warping_picture",
]


def every_picture(result: Result) -> dict[str, bytes]:
    """All pictures of a result as files: name to bytes, SVG and PNG, both widths.

    Parameters
    ----------
    result : Result
        What a comparison found.

    Returns
    -------
    dict of file name to bytes
        ``section.svg`` is 160 mm wide, ``section_80mm.svg`` 80 mm.
    """
    files: dict[str, bytes] = {}
    for width in WIDTHS:
        suffix = "" if width == WIDTHS[0] else f"_{width}mm"
        for name, figure in figures(result, width).items():
            for kind in ("svg", "png"):
                files[f"{name}{suffix}.{kind}"] = picture_bytes(figure, kind)
    return files


def figures(result: Result, width_mm: int) -> dict[str, Figure]:
    """Every figure that has something to show, by the name of its file."""
    drawn: dict[str, Figure | None] = {
        "section": section_picture(result, width_mm),
        "both_sides": both_sides_picture(result, width_mm),
        "criteria": criteria_picture(result, width_mm),
        "causes": causes_picture(result, width_mm),
    }
    for load in (*UNIT_LOADS, *(line.name for line in result.require_drawing().loads if line.has_shear)):
        drawn[free_name(f"flow_{load}", drawn)] = flow_picture(result, load, width_mm)
    drawn["walls_by_loads"] = walls_by_loads_picture(result, width_mm)
    drawn["warping"] = warping_picture(result, width_mm)
    drawn["joints"] = joints_picture(result, width_mm)
    return {name: figure for name, figure in drawn.items() if figure is not None}
