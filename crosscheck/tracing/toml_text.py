"""Plain values and tables as TOML."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Any

_BARE = re.compile(r"\A[A-Za-z0-9_-]+\Z")


def number_text(value: float) -> str:
    """A number without needless digits."""
    text = f"{value:.12g}"
    return "0" if text == "-0" else text


def quoted(text: str) -> str:
    """A basic string."""
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + "".join(c if c.isprintable() else f"\\u{ord(c):04x}" for c in escaped) + '"'


def key_text(key: str) -> str:
    """A key, bare where it may be."""
    return key if _BARE.match(key) else quoted(key)


def value_text(value: Any) -> str:
    """A value on one line."""
    if isinstance(value, str):
        return quoted(value)
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, Mapping):
        return f"{{ {', '.join(f'{key_text(k)} = {value_text(v)}' for k, v in value.items())} }}"
    if isinstance(value, (list, tuple)):
        return f"[{', '.join(map(value_text, value))}]"
    return number_text(value) if isinstance(value, (int, float)) else str(value)


def table_lines(name: str, value: Any) -> list[str]:
    """A table, or a list of tables, under its heading."""
    if isinstance(value, list) and value and all(isinstance(v, Mapping) for v in value):
        return [line for entry in value for line in ("", f"[[{key_text(name)}]]", *_entries(entry))]
    if isinstance(value, Mapping) and value and all(isinstance(v, Mapping) for v in value.values()):
        parts = ((f"{key_text(name)}.{key_text(k)}", v) for k, v in value.items())
        return [line for head, entry in parts for line in ("", f"[{head}]", *_entries(entry))]
    if isinstance(value, Mapping):
        return ["", f"[{key_text(name)}]", *_entries(value)]
    return [f"{key_text(name)} = {value_text(value)}"]


def _entries(table: Mapping[str, Any]) -> list[str]:
    return [f"{key_text(k)} = {value_text(v)}" for k, v in table.items()]
