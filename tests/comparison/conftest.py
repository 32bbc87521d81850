"""Fixtures of the comparison's tests."""

from __future__ import annotations

import pytest

from crosscheck.comparison.comparing import join
from crosscheck.section_file.model import SectionFile

from .stand_in import both_sides, channel_file


@pytest.fixture
def channel() -> SectionFile:
    return channel_file()


@pytest.fixture
def sides(channel):
    return both_sides(channel)


@pytest.fixture
def result(channel, sides):
    return join(channel, *sides, pictures=True)
