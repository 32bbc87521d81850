"""A small section file and a way to run the command line in this process."""

from __future__ import annotations

from dataclasses import dataclass

import pytest

from crosscheck.command_line import main

CHANNEL = """\
schema = 1
title = "Winch rail, plain channel"
units = "mm N"
[parameters]
depth = 80
width = 35
t = 4
[points]
a = ["width", 0]
b = [0, 0]
c = [0, "depth"]
d = ["width", "depth"]
[[walls]]
name = "bottom"
path = ["a", "b"]
thickness = "t"
[[walls]]
name = "web"
path = ["b", "c"]
thickness = "t"
[[walls]]
name = "top"
path = ["c", "d"]
thickness = "t"
[[loads]]
name = "gust"
shear = [0, -1200]
through = "b"
"""


@dataclass(frozen=True)
class Ran:
    """What a run gave: exit status and both streams."""

    status: int
    out: str
    err: str


@pytest.fixture
def channel(tmp_path):
    path = tmp_path / "channel.toml"
    path.write_text(CHANNEL)
    return path


@pytest.fixture
def run(capsys, monkeypatch):
    """Run the command line in this process at 80 columns."""
    monkeypatch.setenv("COLUMNS", "80")

    def call(*arguments: object) -> Ran:
        status = main([str(argument) for argument in arguments])
        captured = capsys.readouterr()
        return Ran(status, captured.out, captured.err)

    return call
