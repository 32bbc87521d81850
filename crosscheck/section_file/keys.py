"""Limits of section files, and tables whose keys are names of the file's own."""

from __future__ import annotations

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
