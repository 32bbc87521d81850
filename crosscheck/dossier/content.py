"""What a dossier says, before anybody writes it down: chapters of blocks that every writer can set.

Text is text: no block holds markup of any writer, and none is ever evaluated.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Literal

Tone = Literal["plain", "good", "bad", "doubt", "quiet"]


@dataclass(frozen=True)
class Symbol:
    """A symbol of the nomenclature, such as ``A_Vx``: what follows the underscore stands lower."""

    text: str


Cell = str | Symbol


@dataclass(frozen=True)
class Paragraph:
    """Text in one paragraph; ``tone`` says how it is to be taken."""

    text: str
    tone: Tone = "plain"
    strong: bool = False


@dataclass(frozen=True)
class Heading:
    """A heading inside a chapter."""

    text: str


@dataclass(frozen=True)
class Listing:
    """Short statements, one under the other."""

    items: tuple[str, ...]


@dataclass(frozen=True)
class Column:
    """A column: its heading; ``kind`` text is broken into lines, number and word are not."""

    head: str
    kind: Literal["text", "word", "number"] = "word"
    share: float = 1.0


@dataclass(frozen=True)
class Table:
    """Rows under their headings; ``tones`` has one entry a row, or none."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    tones: tuple[Tone, ...] = ()


@dataclass(frozen=True)
class Fields:
    """Labels with their values; an empty value is a line to write on."""

    rows: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Figure:
    """A picture (SVG) with what it shows in words, for those who cannot see it."""

    name: str
    svg: bytes
    caption: str
    alternative: str
    width_mm: int = 160


@dataclass(frozen=True)
class Equation:
    """An equation of :mod:`crosscheck.dossier.equations` by its name."""

    name: str


@dataclass(frozen=True)
class Verbatim:
    """Text as it stands in a file, every character of it."""

    text: str
    caption: str = ""


@dataclass(frozen=True)
class Diagram:
    """The section that answers to pointing: only the page has it; paper has the figures."""

    name: str
    svg: str
    values: Mapping[str, Any]
    loads: tuple[str, ...]
    caption: str


Block = Paragraph | Heading | Listing | Table | Fields | Figure | Equation | Verbatim | Diagram


@dataclass(frozen=True)
class Chapter:
    """A chapter; ``key`` names it in the page, ``wide`` asks for paper on its side."""

    key: str
    title: str
    blocks: tuple[Block, ...]
    wide: bool = False


@dataclass(frozen=True)
class Part:
    """Chapters of one section, or those that all sections share (``title`` empty)."""

    key: str
    title: str
    chapters: tuple[Chapter, ...]


@dataclass(frozen=True)
class Dossier:
    """The whole document: title page, then parts.

    ``run_id`` depends on inputs, versions and options alone; ``made`` is the one date that is not the user's.
    """

    title: str
    run_id: str
    made: str
    fields: tuple[tuple[str, str], ...]
    outcome: tuple[Block, ...]
    changes: tuple[tuple[str, str, str], ...]
    parts: tuple[Part, ...]
    notice: str
    keywords: tuple[str, ...] = field(default=())
