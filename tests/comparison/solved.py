"""Section files written as text, read and solved on both sides."""

from __future__ import annotations

from functools import cache
from pathlib import Path
from tempfile import TemporaryDirectory

from crosscheck.comparison.comparing import compare
from crosscheck.comparison.result import Result
from crosscheck.section_file.model import SectionFile
from crosscheck.section_file.reader import read_section


def section_of(text: str) -> SectionFile:
    """A section file from its text."""
    with TemporaryDirectory() as folder:
        path = Path(folder) / "part.toml"
        path.write_text(text)
        return read_section(path)


@cache
def compared(text: str) -> Result:
    """Both sides of a text, solved once for all tests."""
    return compare(section_of(text))
