"""The bytes of a section file and the document in them, refused with one clear line when there is none."""

from __future__ import annotations

import hashlib
import os
import re
import stat
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from crosscheck.faults import FaultList, SectionFaults, quoted
from crosscheck.section_file.keys import FILE_LIMIT, KEY_PARTS_LIMIT

# One match per token from every position, unterminated strings included: the scan is linear.
_STRINGS_AND_COMMENTS = re.compile(
    r'"""(?:[^\\]|\\.)*?(?:"""|\Z)'
    r"|'''.*?(?:'''|\Z)"
    r'|"(?:[^"\\\n]|\\.)*(?:"|\n|\Z)'
    r"|'[^'\n]*(?:'|\n|\Z)"
    r"|#[^\n]*",
    re.DOTALL,
)
_BETWEEN_KEYS = re.compile(r"[,=\[\]{}\n]")
_PLACE = re.compile(
    r"\A(?P<what>.*) \(at (?P<where>line (?P<line>[0-9]+), column [0-9]+|end of document)\)\Z", re.S
)


@dataclass(frozen=True)
class TableSource:
    """A table beside a section file: name as given there, digest of its bytes, text.

    ``fault``: found, allowed and remedy where it cannot be read.
    """

    name: str
    sha256: str = ""
    text: str = ""
    fault: tuple[str, str, str] | None = None


@dataclass(frozen=True)
class SectionSource:
    """A section file as it stands on disk: name as given, digest of its bytes, parsed document, its
    tables."""

    path: str
    sha256: str
    document: dict[str, Any]
    tables: Mapping[str, TableSource] = field(default_factory=dict)


def read_source(path: str | os.PathLike[str]) -> SectionSource:
    """Read a section file and parse its TOML.

    Parameters
    ----------
    path : the file

    Returns
    -------
    SectionSource

    Raises
    ------
    SectionFaults : missing, not a plain file, unreadable, too large, empty, binary, not TOML
    """
    name = os.fspath(path)
    faults = FaultList(name)
    content = plain_content(name, faults)
    text = plain_text(content, faults)
    check_key_lengths(text, faults)
    document = toml_document(text, faults)
    return SectionSource(name, hashlib.sha256(content).hexdigest(), document, _tables(name, document))


def _tables(section_file: str, document: dict[str, Any]) -> dict[str, TableSource]:
    """The tables that a document names, read; what is no name of a file is left to the schema."""
    named = document.get("tables")
    names = named.items() if isinstance(named, dict) else ()
    return {key: _table(Path(section_file).parent, name) for key, name in names if isinstance(name, str)}


def _table(folder: Path, name: str) -> TableSource:
    """One table from the section file's own folder."""
    allowed = "a file in the folder of the section file"
    faults = FaultList(name)
    try:
        inside = (folder / name).resolve().is_relative_to(folder.resolve())
        if not name.isprintable() or not inside or Path(name).is_absolute() or ".." in Path(name).parts:
            return TableSource(name, fault=(quoted(name), allowed, "name it from there, as in loads.csv"))
        content = plain_content(str(folder / name), faults, allowed)
        text = plain_text(content, faults, "a first line with the names of the columns")
    except SectionFaults as error:
        (first, *_) = error.faults
        return TableSource(name, fault=(f"{quoted(name)}: {first.found}", first.allowed, first.remedy))
    except (OSError, ValueError, RuntimeError) as error:
        return TableSource(name, fault=(f"{quoted(name)}: {error}", allowed, ""))
    return TableSource(name, hashlib.sha256(content).hexdigest(), text)


def plain_content(
    name: str, faults: FaultList, allowed: str = "a section file", limit: int = FILE_LIMIT
) -> bytes:
    """Bytes of a plain file of bounded size; faults are raised."""
    found, remedy = "", ""
    content = b""
    try:
        # A pipe or device could block or never end, so the kind is looked at before opening.
        kind = os.stat(name).st_mode
        if stat.S_ISDIR(kind):
            found, remedy = "a directory", "name a file in it"
        elif not stat.S_ISREG(kind):
            found = "a pipe or device"
        else:
            with open(name, "rb") as file:
                content = file.read(limit + 1)
    except FileNotFoundError:
        found, remedy = "no such file", "check the path"
    except NotADirectoryError:
        found, remedy = "no such file", "a part of the path is a file, not a directory"
    except PermissionError:
        found = "a file that may not be read (permission denied)"
    except (OSError, ValueError) as error:
        found = f"a file that cannot be read ({getattr(error, 'strerror', None) or error})"
    if found:
        faults.add((), found, allowed, remedy)
    elif len(content) > limit:
        faults.add((), "a larger file", f"at most {limit / 1e6:g} MB")
    elif b"\0" in content:
        faults.add((), f"a binary file (byte 0 at offset {content.index(0)})", "UTF-8 text")
    faults.raise_any()
    return content


def plain_text(
    content: bytes,
    faults: FaultList,
    start: str = 'units = "mm N", [points] and [[walls]]',
    allowed: str = "a section file",
) -> str:
    """The text, without a byte order mark and with plain line ends; faults are raised."""
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        byte = content[error.start]
        faults.add((), f"a binary file (byte 0x{byte:02x} at offset {error.start})", "UTF-8 text")
        faults.raise_any()
        raise  # unreachable: the fault was raised
    if not text.strip():
        faults.add((), "an empty file", allowed, f"start with {start}")
        faults.raise_any()
    return text.replace("\r\n", "\n")


def check_key_lengths(text: str, faults: FaultList) -> None:
    """Refuse keys of very many dotted parts: the parser's time grows with their square."""
    blank = _STRINGS_AND_COMMENTS.sub(lambda m: "\n" if m[0].startswith("#") else "s", text)
    if any(piece.count(".") >= KEY_PARTS_LIMIT for piece in _BETWEEN_KEYS.split(blank)):
        faults.add((), "a longer key", f"without keys of more than {KEY_PARTS_LIMIT} dotted parts")
        faults.raise_any()


def toml_document(text: str, faults: FaultList) -> dict[str, Any]:
    """The parsed document."""
    try:
        document = tomllib.loads(text)
    except RecursionError:
        faults.add((), "lists or tables nested very deep", "valid TOML")
    except ValueError as error:
        match = _PLACE.match(str(error))
        what = match["what"] if match else str(error)
        where = match["where"] if match else ""
        number = int(match["line"]) if match and match["line"] else 0
        lines = text.split("\n")
        found = quoted(lines[number - 1].strip()) if 0 < number <= len(lines) else "an error"
        remedy = f"{what[:1].lower()}{what[1:]}"
        if what.startswith("Exceeds the limit"):
            found, remedy = "an integer of thousands of digits", ""
        if what.startswith(("Cannot overwrite", "Cannot declare", "Cannot mutate")):
            remedy = f"this key stands twice ({remedy})"
        faults.add((), found, "valid TOML", remedy, key=where)
    else:
        if not document:
            faults.add((), "no keys", "a section file", 'start with units = "mm N", [points] and [[walls]]')
        faults.raise_any()
        return document
    faults.raise_any()
    raise AssertionError("a fault was raised above")
