"""The JSON Schema: the one that is shipped is the one that is read by, and shipped section files keep it."""

from __future__ import annotations

import json
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from crosscheck.section_file.json_schema import SCHEMA_FILE, json_schema, schema_text

CASES = Path(__file__).parents[2] / "cases"
SHIPPED = sorted([*CASES.glob("sections/*.toml"), *CASES.glob("templates/*.toml")])
SCHEMA = json_schema()


def entries(schema: dict[str, Any]) -> Iterator[tuple[str, dict[str, Any]]]:
    """Every key of every table with what the schema says of it."""
    for name, table in [("the file", schema), *schema["$defs"].items()]:
        for key, entry in table["properties"].items():
            yield f"{name}: {key}", entry


def test_the_shipped_file_is_the_generated_one() -> None:
    assert SCHEMA_FILE.read_text(encoding="utf-8") == schema_text()


def test_what_an_editor_needs() -> None:
    text = json.dumps(SCHEMA)
    jsonschema.Draft202012Validator.check_schema(SCHEMA)
    assert SCHEMA["required"] == ["units"]
    ways = [["points", "walls"], ["outline"], ["tables"]]
    assert SCHEMA["anyOf"] == [{"required": keys} for keys in ways]
    assert SCHEMA["additionalProperties"] is False
    assert SCHEMA["$defs"]["WallTable"]["required"] == ["path", "thickness"]
    assert "from" in SCHEMA["$defs"]["TaperTable"]["properties"]
    assert "mm N" in SCHEMA["properties"]["units"]["enum"]
    assert "torsion_constant" in SCHEMA["$defs"]["StatedTable"]["properties"]["quantity"]["enum"]
    assert "null" not in text
    assert "\\u001f" not in text
    assert not [key for key, entry in entries(SCHEMA) if not entry.get("description")]


@pytest.mark.parametrize("path", SHIPPED, ids=lambda path: f"{path.parent.name}/{path.stem}")
def test_shipped_section_files_keep_the_schema(path: Path) -> None:
    jsonschema.Draft202012Validator(SCHEMA).validate(tomllib.loads(path.read_text(encoding="utf-8")))


BASE = {
    "units": "mm N",
    "points": {"a": [0, 0], "b": [9, 0]},
    "walls": [{"path": ["a", "b"], "thickness": 1}],
}


@pytest.mark.parametrize(
    "fault",
    [
        {"unit": "mm N"},
        {"units": "furlong N"},
        {"walls": [{"path": ["a"], "thickness": 1}]},
        {"walls": [{"path": ["a", "b"]}]},
        {"walls": [{"path": ["a", "b"], "thickness": True}]},
        {"walls": [{"path": ["a", "b"], "thickness": 1, "line": "left"}]},
        {"criteria": {"torsion": 0.1}},
        {"mirror": {"about": "z"}},
        {"outline": {"boundary": [], "file": "a.dxf"}},
    ],
    ids=str,
)
def test_faults_of_form_are_faults_of_the_schema(fault: dict[str, Any]) -> None:
    jsonschema.Draft202012Validator(SCHEMA).validate(BASE)
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.Draft202012Validator(SCHEMA).validate({**BASE, **fault})
