"""Walls that no side could take: parts, crossings, touches, overlaps, one line each."""

from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]

HEAD = 'units = "mm N"\n'
CLEAR = "must be clear of other walls except at shared points"


def points_and_paths(points: str, *paths: str, extra: str = "") -> str:
    """A file with points "a 0 0; b 1 0" and walls along paths "a b c"."""
    lines = [HEAD, "[points]"]
    for point in points.split(";"):
        name, x, y = point.split()
        lines.append(f"{name} = [{x}, {y}]")
    for path in paths:
        names = ", ".join(f'"{name}"' for name in path.split())
        lines.append(f"[[walls]]\npath = [{names}]\nthickness = 0.1\n{extra}")
    return "\n".join(lines)


# One row: name, text, key, and the rest of the only line.
ONE_FAULT = [
    (
        "two parts",
        points_and_paths("a 0 0;b 1 0;c 0 1;d 1 1", "a b", "c d"),
        "walls",
        'must be one connected section, got 2 parts: "a-b" | "c-d"; '
        "let the parts share a point, or add a wall between them",
    ),
    (
        "crossing",
        points_and_paths("a 0 0;b 10 10;c 10 0;d 0 10", "a b", "c d"),
        "walls[1].path",
        f'{CLEAR}, got "c-d" crossing "a-b" (walls[0]) at (5, 5); add a point there to both paths',
    ),
    (
        "end on a middle",
        points_and_paths("a 0 0;b 10 0;c 4 0;d 4 7", "a b", "d c"),
        "walls[1].path",
        f'{CLEAR}, got "d-c" ending at "c" on the middle of "a-b" (walls[0]); '
        'add the point "c" to the path of "a-b"',
    ),
    (
        "end on a later middle",
        points_and_paths("a 0 0;b 10 0;c 4 0;d 4 7", "d c", "a b"),
        "walls[0].path",
        f'{CLEAR}, got "d-c" ending at "c" on the middle of "a-b" (walls[1]); '
        'add the point "c" to the path of "a-b"',
    ),
    (
        "overlap apart",
        points_and_paths("a 0 0;b 10 0;c 4 0;d 14 0", "a b", "c d"),
        "walls[1].path",
        f'{CLEAR}, got "c-d" overlapping "a-b" (walls[0]) at (4, 0); let one wall end where the other begins',
    ),
    (
        "overlap from a shared point",
        points_and_paths("a 0 0;b 10 0;c 4 0", "a b", "a c"),
        "walls[1].path",
        f'{CLEAR}, got "a-c" overlapping "a-b" (walls[0]) at (4, 0); let one wall end where the other begins',
    ),
    (
        "overlap of a path with itself",
        points_and_paths("a 0 0;b 10 0;c 4 0", "a b c"),
        "walls[0].path",
        f'{CLEAR}, got "b-c" overlapping "a-b" (walls[0]) at (4, 0); let one wall end where the other begins',
    ),
    (
        "same points without names",
        points_and_paths("a 0 0;b 10 0;c 4 5", "a b c", "b a"),
        "walls[1].name",
        "must be given where two walls join the same points, got no name at walls[0] or walls[1], "
        'which both join "b" and "a"; two straight walls between the same points also lie on each other: '
        "bend one to an arc",
    ),
    (
        "same points, same default name",
        points_and_paths("a 0 0;b 10 0;c 4 5", "a b c", "a b"),
        "walls[1].name",
        "must be given where two walls join the same points, got no name at walls[0] or walls[1], "
        'which both join "a" and "b"; two straight walls between the same points also lie on each other: '
        "bend one to an arc",
    ),
    (
        "repeated wall name",
        points_and_paths("a 0 0;b 10 0;c 4 5", "a b", "b c", extra='name = "web"\n'),
        "walls[1].name",
        'must be unique, got "web" again (first at walls[0]); give each wall a name of its own',
    ),
]


@pytest.mark.parametrize(
    ("text", "key", "words"), [row[1:] for row in ONE_FAULT], ids=[row[0] for row in ONE_FAULT]
)
def test_one_line(fault_lines: Lines, text: str, key: str, words: str) -> None:
    assert fault_lines(text) == [f"{key}: {words}"]


def test_zero_length_wall(fault_lines: Lines) -> None:
    lines = fault_lines(points_and_paths("a 0 0;b 1 1;c 1 1", "a b c"))
    assert lines == [
        'points.c: must be a place of its own, got the place of "b", (1, 1); use "b" in the paths instead',
        'walls[0].path: must be walls of a length > 0, got a length of 0 from "b" to "c"',
    ]


def test_a_crossing_that_both_sides_see_is_said_once(fault_lines: Lines) -> None:
    text = points_and_paths("a 0 0;b 10 10;c 10 0;d 0 10;e 20 20", "a b", "c d")
    text += '[[walls]]\npath = ["b", "e"]\nthickness = 0.1\nseen_by = "fe"\n'
    assert len(fault_lines(text)) == 1
