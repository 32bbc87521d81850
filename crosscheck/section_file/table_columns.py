"""Columns of the CSV tables beside a section file: the key that each stands for, and its dimension."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from crosscheck.faults import KeyPath

Powers = tuple[int, int]
LENGTH, AREA, FORCE, MOMENT, PLAIN = (1, 0), (2, 0), (0, 1), (1, 1), (0, 0)


@dataclass(frozen=True)
class Column:
    """One column.

    Attributes
    ----------
    key : path of keys within the entry that a row stands for
    powers : of length and force in its unit; None for names and words
    required : whether every table has to have it
    """

    key: KeyPath
    powers: Powers | None = None
    required: bool = False


COLUMNS: Mapping[str, Mapping[str, Column]] = {
    "points": {
        "name": Column(("name",), required=True),
        "x": Column(("place", 0), LENGTH, required=True),
        "y": Column(("place", 1), LENGTH, required=True),
    },
    "walls": {
        "name": Column(("name",)),
        "start": Column(("path", 0), required=True),
        "end": Column(("path", 1), required=True),
        "thickness": Column(("thickness",), LENGTH),
        "thickness_from": Column(("thickness", "from"), LENGTH),
        "thickness_to": Column(("thickness", "to"), LENGTH),
        "through_x": Column(("arc", "through", 0), LENGTH),
        "through_y": Column(("arc", "through", 1), LENGTH),
        "line": Column(("line",)),
        "direct_share": Column(("direct_share",), PLAIN),
        "seen_by": Column(("seen_by",)),
        "material": Column(("material",)),
    },
    "booms": {
        "point": Column(("at",)),
        "wall": Column(("wall",)),
        "at": Column(("at",), PLAIN),
        "area": Column(("area",), AREA, required=True),
        "seen_by": Column(("seen_by",)),
        "material": Column(("material",)),
    },
    "loads": {
        "name": Column(("name",), required=True),
        "shear_x": Column(("shear", 0), FORCE),
        "shear_y": Column(("shear", 1), FORCE),
        "through": Column(("through",)),
        "through_x": Column(("through", 0), LENGTH),
        "through_y": Column(("through", 1), LENGTH),
        "torque": Column(("torque",), MOMENT),
        "axial": Column(("axial",), FORCE),
        "moment_x": Column(("moment", 0), MOMENT),
        "moment_y": Column(("moment", 1), MOMENT),
        "bimoment": Column(("bimoment",), (2, 1)),
        "kind": Column(("kind",)),
    },
}
# Columns that stand together: a row has both of them or neither. What is left out of any other pair is 0.
TOGETHER: Mapping[str, tuple[tuple[str, str], ...]] = {
    "points": (("x", "y"),),
    "walls": (("start", "end"), ("through_x", "through_y"), ("thickness_from", "thickness_to")),
    "booms": (),
    "loads": (("through_x", "through_y"),),
}
