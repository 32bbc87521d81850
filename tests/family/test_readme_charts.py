"""The README's charts: each has the shipped command that makes it beside it, and that command makes it."""

from __future__ import annotations

import re
import shlex
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
TEXT = (ROOT / "README.md").read_text(encoding="utf-8")
CHARTS = re.findall(
    r"^    crosscheck (.*)\n\n!\[[^\]]+\]\((cases/charts/\S+\.svg)\)$", TEXT, flags=re.MULTILINE
)


def test_there_are_three_and_each_stands_under_its_command():
    assert len(CHARTS) == 3
    assert {ROOT / chart for _, chart in CHARTS} == set((ROOT / "cases" / "charts").iterdir())


def shapes(svg: bytes) -> list[tuple[str, list[float]]]:
    """Every path of a drawing: its letters and its numbers."""
    paths = re.findall(r'\bd="([^"]+)"', svg.decode())
    number = r"-?\d+(?:\.\d+)?(?:e-?\d+)?"
    return [(re.sub(number, "", path), [float(x) for x in re.findall(number, path)]) for path in paths]


@pytest.mark.long
@pytest.mark.parametrize(("command", "chart"), CHARTS)
def test_the_command_makes_the_chart(run, tmp_path, command, chart):
    arguments = shlex.split(command)
    assert arguments[-2:] == ["--out", "out"]
    status, _, err = run(*arguments[:-1], tmp_path)
    assert (status, err) == (1, "")
    shipped = shapes((ROOT / chart).read_bytes())
    made = [shapes(path.read_bytes()) for path in tmp_path.glob("*.svg") if "80mm" not in path.name]
    assert any(
        len(each) == len(shipped)
        and all(
            a[0] == b[0] and a[1] == pytest.approx(b[1], abs=0.01) for a, b in zip(each, shipped, strict=True)
        )
        for each in made
    )
