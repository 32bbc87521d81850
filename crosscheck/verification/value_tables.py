"""Tables of values beside the row files: published.json and rolled_sections.json, each entry as row keys.

A row says `published = "C01"`, or `rolled = "IPE 300"` with `property = "Iw_mm6"`; keys it gives itself win.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Any

PUBLISHED, ROLLED = "published.json", "rolled_sections.json"

# Printed properties of rolled sections in our names; x and y as the section files of cases/reference have.
PROPERTIES = {
    "A_mm2": "area",
    "Iy_mm4": "second_moment_xx",
    "Iz_mm4": "second_moment_yy",
    "Iu_mm4": "principal_moment_u",
    "Iv_mm4": "principal_moment_v",
    "It_mm4": "torsion_constant",
    "Iw_mm6": "warping_constant",
}
AS_SUGGESTED = "suggested with the value: digits printed, or error of the recomputation"
AS_FOUND = "rounding of print and dimensions, and the formula behind the print"


@cache
def entries(table: Path) -> Mapping[str, Mapping[str, Any]]:
    """Entries of a table by their id; empty where the file is missing.

    Raises
    ------
    ValueError
        Where it is no JSON list of entries with an id.
    """
    if not table.is_file():
        return {}
    try:
        return {entry["id"]: entry for entry in json.loads(table.read_text(encoding="utf-8"))}
    except (TypeError, KeyError, UnicodeDecodeError, json.JSONDecodeError) as fault:
        raise ValueError(f"a list of entries with an id ({fault})") from fault


def published_keys(entry: Mapping[str, Any], independent: bool) -> dict[str, Any]:
    """Row keys of an entry of published.json: of its own value, or of its independent recomputation."""
    place = str(entry["source"])
    keys: dict[str, Any] = {"note": str(entry["title"]), "unit": str(entry["unit"])}
    if independent:
        method = entry["independent_method"]
        return keys | {
            "value": repr(float(entry["independent_value"])),
            "place": f"{place}; recomputed by {method}",
            "obtained": "exact" if "exact" in method or method.endswith("series") else "recomputed",
        }
    return keys | {
        "value": f"{float(entry['value']):.12g}" if float(entry["value"]) != 0.0 else "0",
        "tolerance": {"relative": float(entry["tolerance"])},
        "why": AS_SUGGESTED,
        "place": place,
        "obtained": _obtained(entry),
    }


def rolled_keys(entry: Mapping[str, Any], name: str, side: str) -> dict[str, Any]:
    """Row keys of one property of an entry of rolled_sections.json, with the tolerance for a side."""
    use = entry["use"].get(name, {})
    percent = use.get("classical_formula_tolerance_percent" if side == "theory" else "fe_tolerance_percent")
    keys: dict[str, Any] = {
        "note": f"{entry['id']}: {name}, printed {entry['as_printed'][name]}",
        "unit": _unit(name),
        "value": f"{float(entry['published'][name]):.12g}",
        "place": str(entry["source"]),
        "obtained": "read" if str(entry["provenance"]).startswith("read") else "from memory",
        "why": "; ".join(text for text in (AS_FOUND, str(use.get("remark", ""))) if text),
    }
    if name in PROPERTIES:
        keys["quantity"] = PROPERTIES[name]
    if percent is not None:
        keys["tolerance"] = {"relative": float(percent) / 100.0}
    return keys


def _obtained(entry: Mapping[str, Any]) -> str:
    """Provenance of a published entry in our words."""
    provenance = str(entry["provenance"])
    if provenance == "read":
        return "read"
    if provenance == "derived":
        made_here = entry["kind"] == "solid_reference" or "recomputed here" in str(entry["source"])
        return "recomputed" if made_here else "exact"
    return "from memory"


def _unit(name: str) -> str:
    """Unit that a property's name ends in: Iw_mm6 is in mm^6."""
    power = name[-1]
    return f"mm^{power}" if power.isdigit() else "mm"
