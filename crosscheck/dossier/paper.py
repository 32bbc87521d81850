"""The dossier as a typeset PDF, and its equations as pictures for the page.

typst reads content as data (JSON) and never as markup; the only markup is our own ``.typ`` files.
"""

from __future__ import annotations

import json
import re
import tempfile
from collections.abc import Iterator, Mapping
from importlib import resources
from pathlib import Path
from typing import Any, Literal
from unicodedata import bidirectional

from crosscheck.dossier.content import Block, Chapter, Diagram, Dossier, Figure, Symbol
from crosscheck.dossier.equations import EQUATIONS
from crosscheck.pictures.fonts import covered_text, font_folder

# Longer runs of letters get places where a line may break, after so many of them.
LONGEST_WORD, PIECE = 18, 6
_LONG = re.compile(rf"\S{{{LONGEST_WORD + 1},}}")


def pdf_bytes(dossier: Dossier) -> bytes:
    """The whole document as PDF, without a date of its own.

    Raises
    ------
    ModuleNotFoundError
        Where typst is not installed.
    """
    pictures: dict[str, bytes] = {}
    content = _document(dossier, pictures)
    files = {
        "content.json": json.dumps(content, ensure_ascii=False).encode(),
        **pictures,
    }
    return _typeset("dossier.typ", files, "pdf")[0]


def equation_pictures() -> dict[str, bytes]:
    """Every equation as SVG, by its name."""
    source = '#import "equations.typ": equations\n#set page(width: auto, height: auto, margin: 2pt)\n'
    source += "#set text(size: 11pt)\n#for name in equations.keys().sorted() { page(equations.at(name)) }\n"
    pages = _typeset("pages.typ", {"pages.typ": source.encode()}, "svg")
    return dict(zip(sorted(EQUATIONS), pages, strict=True))


def _typeset(main: str, files: Mapping[str, bytes], kind: Literal["pdf", "svg"]) -> list[bytes]:
    """Pages that typst makes of our templates and the given files."""
    import typst

    home = resources.files("crosscheck.dossier")
    with tempfile.TemporaryDirectory(prefix="dossier") as folder:
        for name in ("dossier.typ", "equations.typ"):
            (Path(folder) / name).write_bytes((home / name).read_bytes())
        for name, data in files.items():
            (Path(folder) / name).write_bytes(data)
        made = typst.compile(
            str(Path(folder) / main),
            root=folder,
            font_paths=[str(font_folder())],
            ignore_system_fonts=True,
            format=kind,
        )
    pages = made if isinstance(made, list) else [made]
    return [bytes(page) for page in pages]


def _document(dossier: Dossier, pictures: dict[str, bytes]) -> dict[str, Any]:
    """The document as plain data; figures go into ``pictures`` by file name."""
    return {
        "title": printable(dossier.title),
        "short": printable(_short(dossier.title)),
        "run_id": dossier.run_id,
        "notice": dossier.notice,
        "keywords": list(dossier.keywords),
        "fields": [[printable(text) for text in row] for row in dossier.fields],
        "changes": [[printable(text) for text in row] for row in dossier.changes],
        "outcome": list(_blocks(dossier.outcome, pictures)),
        "parts": [
            {
                "title": printable(part.title),
                "chapters": [_chapter(chapter, pictures) for chapter in part.chapters],
            }
            for part in dossier.parts
        ],
    }


def _short(title: str) -> str:
    return title if len(title) <= 80 else f"{title[:77]}..."


def _chapter(chapter: Chapter, pictures: dict[str, bytes]) -> dict[str, Any]:
    return {
        "title": printable(chapter.title),
        "wide": chapter.wide,
        "blocks": list(_blocks(chapter.blocks, pictures)),
    }


def _blocks(blocks: tuple[Block, ...], pictures: dict[str, bytes]) -> Iterator[dict[str, Any]]:
    """Blocks as plain data, each with its type; the diagram is for the page only."""
    for block in blocks:
        if isinstance(block, Diagram):
            continue
        if isinstance(block, Figure):
            name = f"figure{len(pictures) + 1}.svg"
            pictures[name] = block.svg
            yield {
                "type": "Figure",
                "file": name,
                "caption": printable(block.caption),
                "alternative": printable(block.alternative),
                "width_mm": block.width_mm,
            }
            continue
        yield {"type": type(block).__name__, **_plain(block)}


def _plain(value: Any) -> Any:
    """A block, its parts and its text as plain data."""
    if isinstance(value, str):
        return printable(value)
    if isinstance(value, Symbol):
        return {"symbol": printable(value.text)}
    if isinstance(value, (tuple, list)):
        return [_plain(entry) for entry in value]
    if hasattr(value, "__dataclass_fields__"):
        return {name: _plain(getattr(value, name)) for name in value.__dataclass_fields__}
    return value


def printable(text: str) -> str:
    """Text that paper can show: control characters and letters without a shape by their numbers.

    Very long words get places to break, so that they stay on the paper; text with letters that run from right
    to left is isolated, so that it turns nothing beside it.
    """
    plain = (c if c == "\n" or c.isprintable() else f"[U+{ord(c):04X}]" for c in text.replace("\t", "    "))
    shown = covered_text("".join(plain))
    shown = _LONG.sub(lambda word: "\u200b".join(_pieces(word[0])), shown)
    return f"\u2068{shown}\u2069" if any(bidirectional(c) in ("R", "AL") for c in text) else shown


def _pieces(word: str) -> list[str]:
    return [word[i : i + PIECE] for i in range(0, len(word), PIECE)]
