"""Section files of families, and the command line as a process of its own."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]

CHANNEL = """\
schema = 1
title = "Battery rail, plain channel"
units = "mm N"
[parameters]
depth = 100
flange = "depth / 2"
slenderness = 40
t = "depth / slenderness"
[points]
a = ["flange", 0]
b = [0, 0]
c = [0, "depth"]
d = ["flange", "depth"]
[[walls]]
name = "rail"
path = ["a", "b", "c", "d"]
thickness = "t"
[[loads]]
name = "battery"
shear = [0, -900]
through = "b"
"""

# Two walls only: the cheapest section there is.
ANGLE = """\
schema = 1
title = "Hatch edge, angle"
units = "mm N"
[parameters]
leg = 30
t = 2
[points]
a = ["leg", 0]
b = [0, 0]
c = [0, "leg"]
[[walls]]
path = ["a", "b"]
thickness = "t"
[[walls]]
path = ["b", "c"]
thickness = "t"
"""


@pytest.fixture
def channel(tmp_path):
    path = tmp_path / "channel.toml"
    path.write_text(CHANNEL)
    return path


@pytest.fixture
def angle(tmp_path):
    path = tmp_path / "angle.toml"
    path.write_text(ANGLE)
    return path


def command(*arguments: object) -> list[str]:
    """The command line as a process."""
    return [sys.executable, "-m", "crosscheck", *map(str, arguments)]


def started(*arguments: object, **options) -> subprocess.Popen[str]:
    """A process that runs the command line in the project's folder."""
    return subprocess.Popen(
        command(*arguments),
        cwd=ROOT,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        env={**os.environ, "COLUMNS": "100"},
        **options,
    )


@pytest.fixture(scope="session")
def channel_text():
    return CHANNEL


@pytest.fixture(scope="session")
def command_started():
    """Starts a process of the command line."""
    return started


@pytest.fixture
def process():
    """Start a process of the command line; one that still runs afterwards is ended."""
    running: list[subprocess.Popen[str]] = []

    def start(*arguments: object, **options) -> subprocess.Popen[str]:
        running.append(started(*arguments, **options))
        return running[-1]

    yield start
    for each in running:
        if each.poll() is None:
            each.kill()
        each.communicate()


@pytest.fixture
def run(process):
    """Run the command line to its end: status and both streams."""

    def call(*arguments: object) -> tuple[int, str, str]:
        running = process(*arguments)
        out, err = running.communicate(timeout=600)
        return running.returncode, out, err

    return call
