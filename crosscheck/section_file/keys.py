"""What section files may hold for the time being: keys not built yet, limits."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from crosscheck.faults import FaultList, KeyPath, shown

# Keys that the file format reserves and that are refused until they are built. Taking a row out
# switches its key on; schema, reading and checks are ready for it unless the row says "reserved".
# "key" is the key itself, indices and free names left out; "key{}" its form as a table;
# 'key="text"' one of its values. The text beside it says what works today.
NOT_BUILT: dict[str, str] = {
    "tables.points": "write points in this file; loads may come from a table",  # reserved
}

# Limits of one file; a fault names the limit that is passed.
# Walls after paths are taken apart: as many as the FE side takes. Written here again because reading a file
# must not import FE; a test holds both together.
WALL_LIMIT = 2_000
FILE_LIMIT = 4_000_000  # bytes
KEY_PARTS_LIMIT = 16  # dotted parts of one key
ENTRY_LIMITS: dict[str, int] = {
    "parameters": 2_000,
    "materials": 1_000,
    "points": 2 * WALL_LIMIT,
    "walls": WALL_LIMIT,
    "profiles": 100,
    "placed": 1_000,
    "booms": 20_000,
    "corners": 2 * WALL_LIMIT,
    "loads": 1_000,
    "cuts": 5_000,
    "probes": 5_000,
}
NUMBER_LIMIT = 1e30  # magnitude of a number; its inverse is the smallest other than zero
OFFSET_LIMIT = 1e6  # distance from the origin over the overall dimension: digits are lost beyond
SLENDERNESS_LIMIT = 1e6  # overall dimension over the thinnest wall

TABLES_OF_FREE_NAMES = ("parameters", "materials", "points", "corners", "criteria", "profiles")


def refuse_unbuilt(document: dict[str, Any], faults: FaultList) -> None:
    """Note every key of NOT_BUILT in a document as a fault and take it out of the document."""
    for path, parent, key in list(_nodes((), document, 3)):
        value = parent[key]
        pattern = _pattern(path)
        spellings = [pattern]
        if isinstance(value, dict):
            spellings.append(pattern + "{}")
        elif isinstance(value, str) and len(value) < 40:
            spellings.append(f'{pattern}="{value}"')
        for spelling in spellings:
            if spelling in NOT_BUILT:
                words = "left out" if spelling == pattern else "given otherwise"
                faults.add(path, shown(value), words, f"not supported yet: {NOT_BUILT[spelling]}")
                del parent[key]
                break


def _nodes(path: KeyPath, node: Any, depth: int) -> Iterator[tuple[KeyPath, dict[str, Any], str]]:
    """Path, table and key of every entry of every table, down to a depth."""
    if isinstance(node, dict):
        for key, child in node.items():
            yield (*path, key), node, key
            if depth > 0:
                yield from _nodes((*path, key), child, depth - 1)
    elif isinstance(node, list) and depth > 0:
        for index, child in enumerate(node):
            yield from _nodes((*path, index), child, depth - 1)


def _pattern(path: KeyPath) -> str:
    """A key path without indices and free names, as NOT_BUILT spells it."""
    parts = [part for part in path if isinstance(part, str)]
    if len(parts) > 1 and parts[0] in TABLES_OF_FREE_NAMES:
        parts[1] = "*"
    return ".".join(parts)
