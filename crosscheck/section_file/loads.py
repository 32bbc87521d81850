"""Loads of a section file, and of a load reference: a point and axes that they are given about."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass
from typing import Any

from crosscheck.comparison.quantities import UNIT_LOADS
from crosscheck.faults import KeyPath, quoted
from crosscheck.section_file.model import MIDLINE_SHEAR_CENTRE, LoadSpec, Place
from crosscheck.section_file.numbers import Numbers

_DIRECTIONS: Mapping[str, tuple[int, int]] = {"+x": (1, 0), "-x": (-1, 0), "+y": (0, 1), "-y": (0, -1)}


@dataclass(frozen=True)
class _Reference:
    """Where loads without a line of action act, and what their x and y are in the file's axes.

    ``at`` and ``point`` as LoadSpec.through and through_point; ``x``, ``y`` unit vectors; ``hand`` +1 where
    x turns to y anticlockwise, -1 where clockwise.
    """

    at: Place | str | None
    point: str | None
    x: tuple[int, int]
    y: tuple[int, int]
    axial_known: bool

    @property
    def hand(self) -> int:
        return self.x[0] * self.y[1] - self.x[1] * self.y[0]

    def in_file_axes(self, pair: tuple[float, float]) -> tuple[float, float]:
        """Components along the file's x and y of those along the reference's."""
        a, b = pair
        # Adding zero turns -0.0 into 0.0.
        return a * self.x[0] + b * self.y[0] + 0.0, a * self.x[1] + b * self.y[1] + 0.0


class LoadReader:
    """Reads [load_reference] and [[loads]].

    Parameters
    ----------
    document : well-formed document
    numbers : resolves numbers and takes faults
    points : places of points that are without fault, as the file has them [L]
    declared_points : all point names of the file, faulty ones too
    """

    def __init__(
        self,
        document: Mapping[str, Any],
        numbers: Numbers,
        points: Mapping[str, Place],
        declared_points: Collection[str],
    ) -> None:
        self.document = document
        self.numbers = numbers
        self.faults = numbers.faults
        self.points = points
        self.declared_points = declared_points
        self.reference = self._reference()

    def _reference(self) -> _Reference | None:
        table = self.document.get("load_reference")
        if table is None:
            return None
        path: KeyPath = ("load_reference",)
        at, point = self._through((*path, "at"), table.get("at"))
        x, y = table.get("x_axis", "+x"), table.get("y_axis", "+y")
        if x[1] == y[1]:
            others = " or ".join(quoted(name) for name in _DIRECTIONS if name[1] != x[1])
            self.faults.add((*path, "y_axis"), quoted(y), f"{others} beside x_axis = {quoted(x)}")
        return _Reference(at, point, _DIRECTIONS[x], _DIRECTIONS[y], "axial_at" in table)

    def loads(self) -> tuple[LoadSpec, ...]:
        """Load cases in file order."""
        loads = []
        names: dict[str, int] = {}
        for index, table in enumerate(self.document.get("loads", [])):
            path: KeyPath = ("loads", index)
            name = table.get("name")
            if name in names:
                first = self.faults.key(("loads", names[name]))
                self.faults.add((*path, "name"), f"{quoted(name)} again (first at {first})", "unique")
            elif name in UNIT_LOADS:
                self.faults.add((*path, "name"), quoted(name), "named otherwise: unit loads have this name")
            elif name is not None:
                names[name] = index
            loads.append(self._load(path, str(name), table))
        return tuple(loads)

    def _load(self, path: KeyPath, name: str, table: Mapping[str, Any]) -> LoadSpec:
        """One load case; faulty numbers are 0."""
        number = self.numbers.number
        shear = self.numbers.pair((*path, "shear"), table.get("shear"))
        torque = number((*path, "torque"), table.get("torque"))
        axial = number((*path, "axial"), table.get("axial"))
        moment = self.numbers.pair((*path, "moment"), table.get("moment"))
        bimoment = number((*path, "bimoment"), table.get("bimoment"))
        through, through_point = self._through((*path, "through"), table.get("through"))
        reference = None if "through" in table else self.reference
        if reference is None and shear is not None and any(shear) and "through" not in table:
            remedy = f'coordinates [x, y], a point name or "{MIDLINE_SHEAR_CENTRE}"'
            self.faults.add((*path, "through"), "nothing", "given with a shear", remedy)
        given = {"shear": shear, "torque": torque, "axial": axial, "moment": moment, "bimoment": bimoment}
        parts = [given[key] for key in given if key in table]
        if not parts and not self.faults.any_at(path):
            self.faults.add(path, "no force", "given a force", "give shear with through, or torque")
        elif parts and None not in parts and not any(part not in (0.0, (0.0, 0.0)) for part in parts):
            self.faults.add(path, "zero in every part", "a force other than zero")
        V, M = shear or (0.0, 0.0), moment or (0.0, 0.0)
        T, B = torque or 0.0, bimoment or 0.0
        if reference is not None:
            if axial and not reference.axial_known:
                words = 'left out, or [load_reference] with axial_at = "centroid"'
                remedy = (
                    "N is taken at each side's centroid: add the moment of an N at the reference to moment"
                )
                self.faults.add((*path, "axial"), f"{axial:.6g}", words, remedy)
            V = reference.in_file_axes(V)
            # Mx goes with tension on the side of y, My with tension on the side of x.
            M = reference.in_file_axes((M[1], M[0]))[::-1]
            T, B = reference.hand * T + 0.0, reference.hand * B + 0.0
            if any(V):
                through, through_point = reference.at, reference.point
        return LoadSpec(
            name=name,
            shear=V,
            through=through,
            torque=T,
            axial=axial or 0.0,
            moment=M,
            bimoment=B,
            through_point=through_point,
            kind=table.get("kind"),
        )

    def _through(self, path: KeyPath, raw: Any) -> tuple[Place | str | None, str | None]:
        """Place or "midline shear centre", and the point's name where it was given by one."""
        if raw is None:
            return None, None
        if isinstance(raw, list):
            return self.numbers.pair(path, raw), None
        if raw == MIDLINE_SHEAR_CENTRE:
            return MIDLINE_SHEAR_CENTRE, None
        if raw not in self.declared_points:
            words = f'coordinates [x, y], a point of [points] or "{MIDLINE_SHEAR_CENTRE}"'
            near = (raw, (*self.declared_points, MIDLINE_SHEAR_CENTRE))
            self.faults.add(path, quoted(raw), words, near=near)
        return self.points.get(raw), raw
