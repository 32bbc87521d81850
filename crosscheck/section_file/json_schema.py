"""The JSON Schema of section files, for completion and checks in editors.

It is made from the tables of ``schema.py`` and travels with an installation as ``section.schema.json``.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from crosscheck.units import UNIT_SYSTEMS

SCHEMA_FILE = Path(__file__).with_name("section.schema.json")


def json_schema() -> dict[str, Any]:
    """JSON Schema of the section file."""
    from crosscheck.comparison.quantities import QUANTITIES
    from crosscheck.section_file.schema import SectionDocument

    made = SectionDocument.model_json_schema(by_alias=True)
    tables = made["$defs"]
    for table in (made, *tables.values()):
        table.pop("title", None)
        for entry in table.get("properties", {}).values():
            entry.pop("title", None)
            if entry.get("default", ...) is None:  # stands for "absent": TOML has no null
                del entry["default"]
    _loosen(made["properties"])
    for table in tables.values():
        _loosen(table["properties"])
    names = {"enum": list(QUANTITIES)}
    made["properties"]["units"]["enum"] = list(UNIT_SYSTEMS)
    made["properties"]["criteria"]["propertyNames"] = names
    tables["StatedTable"]["properties"]["quantity"] |= names
    head = {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": "Section file of crosscheck"}
    return head | made


def _loosen(node: Any) -> None:
    """Let a value have several of the forms that a key allows: names are texts, as arithmetic is."""
    if isinstance(node, dict):
        if "oneOf" in node and not any("required" in each for each in node["oneOf"]):
            node["anyOf"] = node.pop("oneOf")
        for child in node.values():
            _loosen(child)
    elif isinstance(node, list):
        for child in node:
            _loosen(child)


def schema_text() -> str:
    """The JSON Schema as the text of its file."""
    return json.dumps(json_schema(), indent=2) + "\n"
