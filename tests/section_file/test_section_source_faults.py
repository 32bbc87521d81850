"""Files that hold no section: each refused with one line, soon."""

from __future__ import annotations

import os
import time
from pathlib import Path

import pytest

from crosscheck.faults import SectionFaults
from crosscheck.section_file.reader import read_section


def _only_line(path: str | Path) -> str:
    with pytest.raises(SectionFaults) as caught:
        read_section(path)
    (line,) = caught.value.lines
    return line


def test_missing_file(tmp_path: Path) -> None:
    path = tmp_path / "none.toml"
    assert _only_line(path) == f"{path}: must be a section file, got no such file; check the path"


def test_directory(tmp_path: Path) -> None:
    assert _only_line(tmp_path) == f"{tmp_path}: must be a section file, got a directory; name a file in it"


@pytest.mark.parametrize(
    ("content", "found"),
    [
        (b"", "must be a section file, got an empty file"),
        (b" \n\t\n", "must be a section file, got an empty file"),
        (b"# nothing\n", "must be a section file, got no keys"),
        (b"\x89PNG\r\n\x1a\n", "must be UTF-8 text, got a binary file (byte 0x89 at offset 0)"),
        (b"title = \0", "must be UTF-8 text, got a binary file (byte 0 at offset 8)"),
        (b"a = 1\n" * 700_000, "must be at most 4 MB, got a larger file"),
        (b"a = " + b"[" * 20_000, "must be valid TOML, got lists or tables nested very deep"),
        (b"a." * 200_000 + b"a = 1", "must be without keys of more than 16 dotted parts, got a longer key"),
        (
            b'",".' * 200_000 + b"a = 1",
            "must be without keys of more than 16 dotted parts, got a longer key",
        ),
    ],
)
def test_files_that_are_no_section_files(tmp_path: Path, content: bytes, found: str) -> None:
    path = tmp_path / "odd.toml"
    path.write_bytes(content)
    began = time.perf_counter()
    assert _only_line(path).startswith(f"{path}: {found}")
    assert time.perf_counter() - began < 2.0


def test_pipe_does_not_block(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    assert _only_line(tmp_path / "pipe").endswith("must be a section file, got a pipe or device")
