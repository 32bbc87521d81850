"""Both writers: what they say is the content, nothing of a user's runs, nothing is left empty."""

from __future__ import annotations

import html.parser
import io
import json
import re
from dataclasses import replace
from importlib import resources

import pypdf
import pytest

from crosscheck.comparison.quantities import QUANTITIES
from crosscheck.dossier.composing import compose
from crosscheck.dossier.content import Chapter, Equation, Figure, Heading, Listing, Paragraph, Table
from crosscheck.dossier.equations import EQUATIONS
from crosscheck.dossier.page import page_bytes
from crosscheck.dossier.paper import equation_pictures, pdf_bytes, printable
from crosscheck.dossier.suite import read_suite
from crosscheck.family.validity import Standing
from crosscheck.pictures.plates import Plate

from .conftest import suite_file
from .sections import EVERY, LONG, MARKUP, NO_SHAPE, RIGHT_TO_LEFT, TEX, TYPESET

SVG = (
    b'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 160 40" width="160mm" height="40mm">'
    b'<path d="M0 0L9 9"/></svg>'
)
PLATES = (
    "section", "both_sides", "unit_flows", "governing_load", "walls_by_loads", "criteria", "causes",
    "numerical_error", "holding", "suite",
)  # fmt: skip
PLACEHOLDERS = ("TODO", "TBD", "FIXME", "lorem", "placeholder", "None", "nan", "inf ")


def plain_plates() -> dict[str, Plate]:
    """Ten plates with next to nothing on them."""
    files = {"svg": SVG, "pdf": b"", "png": b""}
    return {
        name: Plate(i, name, f"what plate {i} has to say", files) for i, name in enumerate(PLATES, start=1)
    }


class Reader(html.parser.HTMLParser):
    """Tables as lists of rows of text, scripts with their attributes, all text, attributes of every tag."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tables: list[list[list[str]]] = []
        self.scripts: list[dict[str, str | None]] = []
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.words: list[str] = []
        self._inside = ""
        self.feed(text)

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, dict(attrs)))
        self._inside = tag
        if tag == "table":
            self.tables.append([])
        elif tag == "tr":
            self.tables[-1].append([])
        elif tag in ("td", "th"):
            self.tables[-1][-1].append("")
        elif tag == "script":
            self.scripts.append(dict(attrs))

    def handle_endtag(self, tag):
        if tag in ("td", "th", "script", "style"):
            self._inside = ""

    def handle_data(self, data):
        if self._inside in ("script", "style"):
            return
        self.words.append(data)
        if self._inside in ("td", "th", "i", "sub") and self.tables and self.tables[-1]:
            self.tables[-1][-1][-1] += data


def pdf_text(data: bytes) -> str:
    """Text of a PDF without spaces and break marks, which depend on where lines end."""
    pages = pypdf.PdfReader(io.BytesIO(data)).pages
    return squeezed("".join(page.extract_text() for page in pages))


def squeezed(text: str) -> str:
    """Text without spaces, marks of possible breaks and soft hyphens."""
    return re.sub(r"[\s\u200b\u00ad]", "", text)


@pytest.fixture(scope="module")
def document(rail, tmp_path_factory):
    suite = read_suite(str(suite_file(tmp_path_factory.mktemp("suite") / "e.json")))
    return compose([rail], [plain_plates()], suite, "2026-01-01", "crosscheck dossier")


@pytest.fixture(scope="module")
def hostile(hostile_evidence):
    return compose([hostile_evidence], [plain_plates()], None, "2026-01-01", "crosscheck dossier")


def chapters(dossier) -> list[Chapter]:
    return [chapter for part in dossier.parts for chapter in part.chapters]


def test_no_chapter_is_empty_and_no_word_is_a_stopgap(document):
    titles = [chapter.title for chapter in chapters(document)]
    assert len(titles) == len(set(titles)) >= 19
    for chapter in chapters(document):
        words = " ".join(all_words(chapter))
        assert len(words) > 20, chapter.title
        for stopgap in PLACEHOLDERS:
            assert not re.search(rf"(?<![\w-]){re.escape(stopgap)}(?!\w)", words), (chapter.title, stopgap)


def all_words(chapter: Chapter) -> list[str]:
    found: list[str] = []
    for block in chapter.blocks:
        if isinstance(block, (Paragraph, Heading)):
            found.append(block.text)
        elif isinstance(block, Listing):
            found += block.items
        elif isinstance(block, Table):
            assert block.rows, block.caption
            assert all(len(row) == len(block.columns) for row in block.rows), block.caption
            assert not block.tones or len(block.tones) == len(block.rows)
            found += [str(cell) for row in block.rows for cell in row]
        elif isinstance(block, Figure):
            assert block.alternative
            found.append(block.caption)
    return found


def test_numbers_of_the_page_are_those_of_the_json(package):
    page = Reader(package.text("dossier.html"))
    (table,) = [t for t in page.tables if t[0][:2] == ["verdict", "quantity"] and "factor" in t[0]]
    shown = {row[1]: dict(zip(table[0], row, strict=True)) for row in table[1:]}
    judged = [row for row in package.result["quantities"] if row["verdict"] is not None]
    assert len(shown) == len(judged)
    turn = 180.0 / 3.141592653589793
    for row in judged:
        name = QUANTITIES[row["name"]].words + (f", {row['load']}" if row["load"] else "")
        cells = shown[name]
        assert cells["verdict"] == row["verdict"]
        scale = turn if row["unit"] == "rad" else 1.0
        small = 1e-9 * (row["normaliser"] or 1.0) * scale
        for side, value in (("hand", row["theory"]["midline"]), ("FE", row["fe"]["value"])):
            assert float(cells[side]) == pytest.approx(value * scale, rel=6e-4, abs=small), (name, side)


def test_the_pdf_has_the_same_numbers_as_the_page(package):
    text = pdf_text((package.folder / "dossier.pdf").read_bytes())
    page = Reader(package.text("dossier.html"))
    compared = 0
    for table in page.tables:
        for row in table[1:]:
            for cell in row:
                compared += 1
                assert squeezed(printable(cell)) in text or len(cell) > 40, cell
    assert compared > 800


def test_front_matter_and_evidence_stand_on_both(package):
    page = " ".join(Reader(package.text("dossier.html")).words)
    text = pdf_text((package.folder / "dossier.pdf").read_bytes())
    result = package.result
    for words in (
        "WR-17",
        "winch rail",
        "A. Nother",
        "first issue",
        result["provenance"]["sha256"],
        "evidence.json",
    ):
        assert words in page
        assert squeezed(words) in text
    assert "neither test evidence nor an approval" in page


def test_outcome_and_failures_stand_on_page_one(package):
    first = pypdf.PdfReader(package.folder / "dossier.pdf").pages[0].extract_text()
    assert "Hand methods" in first
    failing = [row for row in package.result["quantities"] if row["verdict"] == "outside"]
    assert failing, "the winch rail is stout on purpose"
    assert "outside" in first


def test_without_evidence_the_document_says_so_plainly(rail):
    document = compose([rail], [plain_plates()], None, "2026-01-01", "crosscheck dossier")
    (code,) = [chapter for chapter in chapters(document) if chapter.key == "code"]
    (said,) = code.blocks
    assert isinstance(said, Paragraph)
    assert said.tone == "bad"
    assert said.text.startswith("NOT ATTACHED")


def test_every_equation_is_typeset_told_in_words_and_used(document):
    source = (resources.files("crosscheck.dossier") / "equations.typ").read_text(encoding="utf-8")
    assert set(re.findall(r"^  (\w+): \$", source, flags=re.MULTILINE)) == set(EQUATIONS)
    used = {b.name for chapter in chapters(document) for b in chapter.blocks if isinstance(b, Equation)}
    assert used == set(EQUATIONS)
    assert all(picture.startswith(b"<svg") for picture in equation_pictures().values())


def test_hostile_words_are_words_on_paper(hostile):
    text = pdf_text(pdf_bytes(hostile))
    for words in (MARKUP, TYPESET, TEX, LONG):
        assert squeezed(words) in text
    assert f"[U+{ord(NO_SHAPE):04X}]" in text
    assert any(squeezed(form) in text for form in (RIGHT_TO_LEFT.split()[0], RIGHT_TO_LEFT.split()[0][::-1]))


def test_hostile_words_are_words_on_the_page(hostile):
    page = Reader(page_bytes(hostile, dict.fromkeys(EQUATIONS, SVG)).decode())
    words = " ".join(page.words)
    for each in EVERY:
        assert each in words
    # Our own script, and one of data.
    assert page.scripts == [{"type": "application/json"}, {}]
    assert not [attrs for _, attrs in page.tags if any(name.startswith("on") for name in attrs)]
    assert {attrs["src"][:5] for tag, attrs in page.tags if tag == "img"} == {"data:"}
    policy = next(attrs["content"] for tag, attrs in page.tags if attrs.get("http-equiv"))
    assert policy.startswith("default-src 'none'; img-src data:; style-src 'sha256-")
    assert "unsafe" not in policy


def test_several_sections_begin_with_their_matrix(rail):
    document = compose([rail, rail], [plain_plates()] * 2, None, "2026-01-01", "crosscheck dossier")
    matrix = next(block for block in document.outcome if isinstance(block, Table))
    assert len(matrix.rows) == 2
    keys = [chapter.key for chapter in chapters(document)]
    assert len(keys) == len(set(keys))
    assert [part.title for part in document.parts][1:] == [
        f"Section {i}: {rail.result.title}" for i in (1, 2)
    ]


def test_data_of_the_diagram_cannot_end_its_script(hostile):
    text = page_bytes(hostile, dict.fromkeys(EQUATIONS, SVG)).decode()
    data = re.search(r'<script type="application/json">(.*?)</script>', text, flags=re.DOTALL)
    assert data is not None
    walls = json.loads(data[1])["walls"]
    assert MARKUP in walls


def test_a_standing_outside_the_envelope_is_seen(rail):
    rows = [row for row in rail.result.quantities if row.load is None][:2]
    words = ("inside", "outside")
    found = tuple(
        Standing(row.name, None, word, f"reason {word}") for row, word in zip(rows, words, strict=True)
    )
    document = compose(
        [replace(rail, standings=found)], [plain_plates()], None, "2026-01-01", "crosscheck dossier"
    )
    (chapter,) = [chapter for chapter in chapters(document) if chapter.key == "holding"]
    table = chapter.blocks[-1]
    assert isinstance(table, Table)
    assert [row[0] for row in table.rows] == ["outside", "inside"]
    assert table.tones == ("bad", "plain")
