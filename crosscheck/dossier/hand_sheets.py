"""Hand sheets as blocks: the Markdown of :mod:`crosscheck.hand_sheet`, which is ours and knows few marks."""

from __future__ import annotations

import html

from crosscheck.dossier.content import Block, Column, Heading, Paragraph, Table, Verbatim


def sheet_blocks(markdown: str) -> list[Block]:
    """Blocks of one sheet: headings, paragraphs, tables, and text pictures as they are."""
    blocks: list[Block] = []
    lines = markdown.split("\n")
    at = 0
    while at < len(lines):
        line = lines[at]
        if line.startswith("```"):
            end = lines.index("```", at + 1)
            blocks.append(Verbatim("\n".join(lines[at + 1 : end])))
            at = end + 1
        elif line.startswith("|"):
            end = at
            while end < len(lines) and lines[end].startswith("|"):
                end += 1
            blocks.append(_table(lines[at:end]))
            at = end
        elif line.startswith("#"):
            blocks.append(Heading(html.unescape(line.lstrip("#").strip())))
            at += 1
        else:
            if line.strip():
                blocks.append(Paragraph(html.unescape(line.strip())))
            at += 1
    return blocks


def _table(lines: list[str]) -> Table:
    """A table; columns of numbers stand to the right."""
    rows = [tuple(html.unescape(cell.strip()) for cell in line.strip("|").split("|")) for line in lines]
    head, body = rows[0], tuple(row for row in rows[2:])
    columns = tuple(
        Column(name, "number" if body and all(_is_number(row[i]) for row in body) else "word")
        for i, name in enumerate(head)
    )
    return Table("", columns, body)


def _is_number(text: str) -> bool:
    try:
        float(text)
    except ValueError:
        return text == ""
    return True
