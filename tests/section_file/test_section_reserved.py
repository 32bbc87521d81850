"""Keys that the file format reserves and that are not built yet: refused by name."""

from __future__ import annotations

from collections.abc import Callable

import pytest

Lines = Callable[..., list[str]]

GOOD = (
    'units = "mm N"\n[points]\na = [0, 0]\nb = [50, 0]\nc = [50, 80]\nd = [0, 80]\n'
    '[[walls]]\npath = ["a", "b", "c"]\nthickness = 2\n'
)

NOT_BUILT_LINES = [
    (GOOD + '[tables]\npoints = "p.csv"\n', "tables.points"),
]


@pytest.mark.parametrize(("text", "key"), NOT_BUILT_LINES, ids=[row[1] for row in NOT_BUILT_LINES])
def test_reserved_keys_are_not_supported_yet(fault_lines: Lines, text: str, key: str) -> None:
    (line,) = fault_lines(text)
    assert line.startswith(f"{key}: must be ")
    assert "not supported yet" in line
