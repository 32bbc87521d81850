"""The small text pictures of the hand sheet: axes and signs, and a sketch of the walls with their numbers."""

from __future__ import annotations

import numpy as np

import beam_theory
from crosscheck.comparison.panels import line_of
from crosscheck.section_file.model import SectionFile

WIDTH, HEIGHT = 64, 22
# A character is about twice as tall as it is wide.
ASPECT = 2.0

AXES: tuple[str, ...] = (
    "```text",
    "      y",
    "      ^      <--.            x right, y up, z out of the page, towards you.",
    "      |          \\ T > 0     Vx, Vy, T, N, M, B act on the face whose normal is z.",
    "      |           |          Mx > 0: tension at +y.  My > 0: tension at +x.",
    "      o-------> x            q > 0 from 1 to 2 along each wall.",
    "     z                       Cells are numbered; their flows turn anticlockwise.",
    "```",
)


def section_sketch(section: SectionFile, solution: beam_theory.Solution) -> list[str]:
    """Walls as dots with their numbers of section order, C the centroid, S the shear centre.

    Parameters
    ----------
    section : SectionFile
        Walls.
    solution : beam_theory.Solution
        For both centres.
    """
    at = np.linspace(0.0, 1.0, 97)
    walls = [wall for wall in section.walls if wall.seen_by != "fe"]
    runs = {wall.name: line_of(section, wall).places(at) for wall in walls}
    marks = {}
    for letter, name in (("C", "centroid"), ("S", "shear_centre")):
        x, y = (solution.quantities[f"{name}_{axis}"].value for axis in "xy")
        if x is not None and y is not None:
            marks[letter] = np.array((x, y))
    everything = np.vstack([*runs.values(), *(place[None] for place in marks.values())])
    low, size = everything.min(axis=0), np.ptp(everything, axis=0)
    step = max(size[0] / (WIDTH - 1), size[1] / (ASPECT * (HEIGHT - 1)), 1e-300)
    rows = round(float(size[1] / (ASPECT * step))) + 1
    grid = [[" "] * WIDTH for _ in range(rows)]

    def put(place: np.ndarray, text: str) -> None:
        column = round(float((place[0] - low[0]) / step))
        row = rows - 1 - round(float((place[1] - low[1]) / (ASPECT * step)))
        for offset, letter in enumerate(text[: WIDTH - column]):
            grid[row][column + offset] = letter

    for run in runs.values():
        for place in run:
            put(place, ".")
    for run in runs.values():
        put(run[0], "+")
        put(run[-1], "+")
    for index, run in enumerate(runs.values(), start=1):
        put(run[len(run) // 2], str(index))
    for letter, place in marks.items():
        put(place, letter)
    drawn = ["".join(row).rstrip() for row in grid]
    names = "; ".join(f"{index} {name}" for index, name in enumerate(runs, start=1))
    return ["", "```text", *drawn, "```", "", f"Walls in the sketch: {names}. C centroid, S shear centre."]
