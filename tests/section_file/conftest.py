"""Section files written on the spot, and their faults as lines."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from crosscheck.section_file.reader import SectionFaults, SectionFile, read_section

HEAD = 'units = "mm N"\n'


@pytest.fixture
def write(tmp_path: Path) -> Callable[[str], Path]:
    """Writes a text to part.toml."""

    def write_text(text: str) -> Path:
        path = tmp_path / "part.toml"
        path.write_text(text, encoding="utf-8")
        return path

    return write_text


@pytest.fixture
def read(write: Callable[[str], Path]) -> Callable[..., SectionFile]:
    """Reads a text as a section file."""

    def read_text(text: str, overrides: object = ()) -> SectionFile:
        return read_section(write(text), overrides)  # type: ignore[arg-type]

    return read_text


@pytest.fixture
def fault_lines(write: Callable[[str], Path], monkeypatch: pytest.MonkeyPatch) -> Callable[..., list[str]]:
    """Lines of the faults of a text, without the name of the file."""

    def lines(text: str, overrides: object = ()) -> list[str]:
        path = write(text)
        monkeypatch.chdir(path.parent)
        with pytest.raises(SectionFaults) as caught:
            read_section(path.name, overrides)  # type: ignore[arg-type]
        found = caught.value.lines
        assert all(line.startswith("part.toml: ") and "\n" not in line for line in found)
        return [line.removeprefix("part.toml: ") for line in found]

    return lines
