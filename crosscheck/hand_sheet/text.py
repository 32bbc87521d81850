"""Markdown of the hand sheet: headings, tables and numbers with a fixed count of digits."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

DIGITS = 7


def number(value: float) -> str:
    """A number with seven significant digits, plain where that is short."""
    text = f"{value:.{DIGITS}g}"
    return "0" if float(text) == 0.0 else text


def term(value: float) -> str:
    """A number inside a sum or product: in parentheses where it is negative."""
    text = number(value)
    return f"({text})" if text.startswith("-") else text


def snapped(value: float, scale: float) -> float:
    """Zero for what is round-off beside a scale of the same unit."""
    return 0.0 if abs(value) <= 1e-11 * abs(scale) else value


def escaped(text: str) -> str:
    """Text of a file inside Markdown: no tag, no cell border."""
    return text.replace("&", "&amp;").replace("<", "&lt;").replace("|", "&#124;")


def heading(text: str) -> list[str]:
    """A heading with air around."""
    return ["", f"## {text}", ""]


def table(head: Sequence[str], rows: Iterable[Sequence[str]]) -> list[str]:
    """A Markdown table."""
    lines = [f"| {' | '.join(head)} |", f"|{'|'.join('---' for _ in head)}|"]
    lines += [f"| {' | '.join(escaped(cell) for cell in row)} |" for row in rows]
    return lines
