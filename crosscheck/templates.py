"""Ready section files of common shapes, to start from: their names and their texts."""

from __future__ import annotations

from crosscheck.case_files import case_folder
from crosscheck.faults import CrosscheckError, nearest, quoted

N_CELL_BOX = "n_cell_box"
MOST_CELLS = 200
_N_CELL_HEAD = """\
# Box with {cells} equal cells side by side. All dimensions run along midlines.
schema = 1
title = "Box with {cells} cells"
units = "mm N"

[parameters]
cell_width = 50  # between web midlines
height = 50      # between floor and roof midlines
skin_thickness = 1.5
web_thickness = 1.2

[materials.sheet]
E = 72000  # N/mm^2
nu = 0.33

[points]
"""
_N_CELL_LOAD = """
# Along the first web: shear and torque.
[[loads]]
name = "first web load"
shear = [0, 3000]
through = "low_0"
"""


def template_names() -> tuple[str, ...]:
    """Names of the shapes, in alphabetical order."""
    files = (path.stem for path in (case_folder() / "templates").glob("*.toml"))
    return tuple(sorted([*files, N_CELL_BOX]))


def template_title(name: str) -> str:
    """First words of a template: its leading comment's first line."""
    return template_text(name).split("\n", 1)[0].lstrip("# ")


def template_text(name: str, cells: int | None = None) -> str:
    """The section file of a shape.

    Parameters
    ----------
    name : one of `template_names`; spaces and hyphens stand for underscores
    cells : number of cells of the n-cell box, 4 unless given; other shapes have none to choose

    Returns
    -------
    str : TOML

    Raises
    ------
    CrosscheckError : for an unknown name, a number of cells outside 1 to 200 or where there are none
    """
    known = template_names()
    plain = name.strip().lower().replace(" ", "_").replace("-", "_")
    if plain not in known:
        near = nearest(plain, known)
        hint = f"; did you mean {quoted(near)}?" if near else ""
        raise CrosscheckError(f"template: must be one of {', '.join(known)}, got {quoted(name)}{hint}")
    if plain != N_CELL_BOX:
        if cells is not None:
            raise CrosscheckError(f"cells: must be left out except for {N_CELL_BOX}, got {cells}")
        return (case_folder() / "templates" / f"{plain}.toml").read_text(encoding="utf-8")
    cells = 4 if cells is None else cells
    if not 1 <= cells <= MOST_CELLS:
        raise CrosscheckError(f"cells: must be 1 to {MOST_CELLS}, got {cells}")
    return _n_cell_box(cells)


def _n_cell_box(cells: int) -> str:
    """Points and walls of a row of cells; skins run from web to web so that each panel has a name."""
    lines = [_N_CELL_HEAD.format(cells=cells)]
    for i in range(cells + 1):
        x = f'"{i} * cell_width"' if i else "0"
        lines.append(f'low_{i} = [{x}, 0]\nhigh_{i} = [{x}, "height"]\n')
    for i in range(cells + 1):
        lines.append(_wall(f"web {i}", f"low_{i}", f"high_{i}", "web_thickness"))
    for i in range(cells):
        lines.append(_wall(f"floor {i + 1}", f"low_{i}", f"low_{i + 1}", "skin_thickness"))
        lines.append(_wall(f"roof {i + 1}", f"high_{i + 1}", f"high_{i}", "skin_thickness"))
    return "".join([*lines, _N_CELL_LOAD])


def _wall(name: str, start: str, end: str, thickness: str) -> str:
    return f'\n[[walls]]\nname = "{name}"\npath = ["{start}", "{end}"]\nthickness = "{thickness}"\n'
