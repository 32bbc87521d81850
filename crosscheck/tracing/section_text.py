"""The section file of a wall model, to be read and edited by a person."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from crosscheck.tracing.drawing_source import DrawingSource
from crosscheck.tracing.faces import Array
from crosscheck.tracing.held_faces import Moves, held_sides, point_moves, through_move
from crosscheck.tracing.model import Lump, WallModel
from crosscheck.tracing.naming import Names, names
from crosscheck.tracing.toml_text import number_text, quoted, table_lines, value_text

# Coordinates and thicknesses are rounded to a decimal no coarser than this share of the least thickness.
ROUNDING = 3e-4
FACTOR = "thickness_factor"
# Said of what makes the walls another section than the drawing, so that both are compared all the same.
SEEN = 'seen_by = "theory"'


def section_text(
    model: WallModel, drawing: DrawingSource, remarks: Sequence[str], *, apart: bool = False
) -> str:
    """A section file as text.

    Parameters
    ----------
    model : WallModel
    drawing : DrawingSource
        What the walls were found in; it stays attached.
    remarks : what the walls do not represent, one sentence each
    apart : bool
        True where walls and lumps make another area or centroid than the drawing.
    """
    return _Writer(model, apart).text(drawing, remarks)


class _Writer:
    """Writes one section file."""

    def __init__(self, model: WallModel, apart: bool) -> None:
        self.model = model
        self.walls_apart = apart and not model.lumps
        self.lumps_apart = apart
        self.names: Names = names(model)
        least = min(t.value for t in self.names.thicknesses)
        self.decimals = max(0, math.ceil(-math.log10(ROUNDING * least)))
        self.sides = held_sides(model)
        self.moves = point_moves(model, self.sides, self.names.thickness_of)
        self.values = [self._round(t.value) for t in self.names.thicknesses]

    def text(self, drawing: DrawingSource, remarks: Sequence[str]) -> str:
        """The whole file."""
        unit = drawing.units.split()[0]
        lines = [
            f"# Walls found in {quoted(drawing.name)}. FE runs on the drawing, theory on the walls below.",
            "# Where a parameter changes the walls, the drawing no longer applies: FE runs on them as well.",
            f"# Numbers are rounded to {10.0**-self.decimals:g} {unit}; drawn faces follow their",
            f"# walls within {100.0 * self.model.tolerance:.2g} % of the thickness.",
        ]
        lines += ["#", "# What the walls do not represent:"] if remarks else []
        for remark in remarks:
            lines += _comment(remark)
        lines += ["schema = 1", f"title = {quoted(drawing.title)}", f"units = {quoted(drawing.units)}"]
        lines += table_lines("outline", drawing.outline)
        lines += ["", "[parameters]"]
        lines += [f"{key} = {value_text(value)}" for key, value in drawing.parameters.items()]
        lines += [f"{FACTOR} = 1  # multiplies every thickness; outer faces stay"]
        for t, value in zip(self.names.thicknesses, self.values, strict=True):
            lines.append(f'{t.name} = "{number_text(value)} * {FACTOR}"')
        for key, table in drawing.kept.items():
            lines += table_lines(key, table)
        if "loads" not in drawing.kept:
            lines += ["", "# Add [materials] for results in real units, and [[loads]]."]
        lines += ["", "[points]"]
        for name, point, moves in zip(self.names.points, self.model.points, self.moves, strict=True):
            lines.append(f"{name} = {self._place(point.place, moves)}")
        for i in range(len(self.model.walls)):
            lines += self._wall(i)
        lines += self._corners()
        for lump in self.model.lumps:
            lines += self._boom(lump)
        return "\n".join(lines) + "\n"

    def _wall(self, i: int) -> list[str]:
        wall = self.model.walls[i]
        first, last = (self.names.thicknesses[n].name for n in self.names.thickness_of[i])
        ends = (self.names.points[k] for k in (wall.start, wall.end))
        lines = ["", "[[walls]]", f"name = {quoted(self.names.walls[i])}"]
        lines.append(f"path = [{', '.join(map(quoted, ends))}]")
        if wall.through is not None:
            move = self.names.thickness_of[i][0], through_move(wall, self.sides[i])
            moves: Moves = (move,) if self.sides[i] else ()
            lines.append(f"arc = {{ through = {self._place(wall.through, moves)} }}")
        thickness = quoted(first) if first == last else f"{{ from = {quoted(first)}, to = {quoted(last)} }}"
        lines.append(f"thickness = {thickness}")
        if self.walls_apart:
            lines.append(SEEN)
        return lines

    def _corners(self) -> list[str]:
        lines = []
        for number, (name, point) in enumerate(zip(self.names.points, self.model.points, strict=True)):
            if point.inner is None:
                continue
            keys = f"inner_radius = {number_text(self._round(point.inner))}"
            if point.outer is not None:
                keys += f", outer_radius = {self._outer_radius(number, point.outer)}"
            lines.append(f"{name} = {{ {keys} }}")
        return ["", "[corners]", *lines] if lines else []

    def _outer_radius(self, point: int, radius: float) -> str:
        """That of a free end follows the thickness, since a thinner wall has no room for it as it is."""
        ends = [
            self.names.thickness_of[i][place]
            for i, wall in enumerate(self.model.walls)
            for place, end in enumerate((wall.start, wall.end))
            if end == point
        ]
        if len(ends) != 1:
            return number_text(self._round(radius))
        # Rounded down: half the thickness is the most that an end has room for.
        share = math.floor(1e6 * radius / self.values[ends[0]]) / 1e6
        name = self.names.thicknesses[ends[0]].name
        return quoted(f"{name} / 2" if share >= 0.499 else f"{number_text(share)} * {name}")

    def _boom(self, lump: Lump) -> list[str]:
        x, y = (self._round(v) for v in lump.place)
        lines = [
            "",
            f"# A lump of the drawing, its own centroid at ({number_text(x)}, {number_text(y)}).",
            "[[booms]]",
        ]
        if lump.point is not None:
            lines.append(f"at = {quoted(self.names.points[lump.point])}")
        elif lump.wall is not None:
            lines += [f"wall = {quoted(self.names.walls[lump.wall])}", f"at = {lump.at:.4f}"]
        digits = max(0, 3 - math.floor(math.log10(lump.area)))
        lines.append(f"area = {number_text(round(lump.area, digits))}")
        if self.lumps_apart:
            lines.append(SEEN)
        return lines

    def _place(self, place: Array, moves: Moves) -> str:
        """A place as TOML, with the arithmetic that moves it where thicknesses change."""
        constants = np.array(place)
        terms: list[list[str]] = [[], []]
        for number, move in moves:
            for axis in (0, 1):
                share = round(float(move[axis]), 6)
                if abs(share) > 1e-6:
                    constants[axis] -= share * self.values[number]
                    sign = "-" if share < 0.0 else "+"
                    name = self.names.thicknesses[number].name
                    half = f"{name} / 2" if abs(share) == 0.5 else f"{number_text(abs(share))} * {name}"
                    terms[axis].append(f"{sign} {half}")
        entries = []
        for constant, more in zip(constants, terms, strict=True):
            text = number_text(self._round(float(constant)))
            if more and text == "0":
                text, more = more[0].removeprefix("+ "), more[1:]
                entries.append(quoted(" ".join([text, *more])))
            else:
                entries.append(quoted(" ".join([text, *more])) if more else text)
        return f"[{', '.join(entries)}]"

    def _round(self, value: float) -> float:
        return round(float(value), self.decimals) + 0.0


def _comment(text: str) -> list[str]:
    """A sentence as comment lines."""
    lines, line = [], "# -"
    for word in text.split():
        if len(line) + len(word) > 106:
            lines.append(line)
            line = "#  "
        line += f" {word}"
    return [*lines, line]
