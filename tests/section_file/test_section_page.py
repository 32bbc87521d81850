"""The page on the section file: every key has an example, every example is read."""

from __future__ import annotations

import re
import shutil
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from crosscheck.section_file.json_schema import json_schema
from crosscheck.section_file.reader import SectionSource, read_source, section_from
from crosscheck.section_file.table_columns import COLUMNS

SECTIONS = Path(__file__).parents[2] / "cases" / "sections"
PAGE = (SECTIONS / "README.md").read_text(encoding="utf-8")
EXAMPLES = re.findall(r"^```toml\n(.*?)^```", PAGE, flags=re.DOTALL | re.MULTILINE)
TABLES = dict(re.findall(r"^`(\w+\.csv)`\n\n```csv\n(.*?)^```", PAGE, flags=re.DOTALL | re.MULTILINE))

Pattern = tuple[str, ...]


def schema_keys(schema: dict[str, Any], node: Any, path: Pattern = ()) -> Iterator[Pattern]:
    """Every key of the schema, names of the file's own as *."""
    if "$ref" in node:
        node = schema["$defs"][node["$ref"].rpartition("/")[2]]
    for key, below in node.get("properties", {}).items():
        yield (*path, key)
        yield from schema_keys(schema, below, (*path, key))
    if isinstance(node.get("additionalProperties"), dict):
        yield from schema_keys(schema, node["additionalProperties"], (*path, "*"))
    if "items" in node:
        yield from schema_keys(schema, node["items"], path)
    for each in (*node.get("anyOf", ()), *node.get("oneOf", ())):
        if "required" not in each:
            yield from schema_keys(schema, each, path)


def used_keys(node: Any, known: set[Pattern], path: Pattern = ()) -> Iterator[Pattern]:
    """Every key that a document uses, in the same form."""
    if isinstance(node, dict):
        for key, below in node.items():
            here = (*path, key) if (*path, key) in known else (*path, "*")
            yield here
            yield from used_keys(below, known, here)
    elif isinstance(node, list):
        for each in node:
            yield from used_keys(each, known, path)


def test_every_key_has_an_example() -> None:
    schema = json_schema()
    known = set(schema_keys(schema, schema))
    used = {key for text in EXAMPLES for key in used_keys(tomllib.loads(text), known)}

    def shared(key: Pattern) -> Pattern:
        """Walls of a profile have the keys of walls, allowables of a wall those of every wall."""
        if key[:3] == ("profiles", "*", "walls"):
            return key[2:]
        return ("allowables", *key[3:]) if key[:3] == ("allowables", "walls", "*") else key

    assert len(known) > 100
    assert not {shared(key) for key in known} - {shared(key) for key in used}


def test_every_column_has_an_example() -> None:
    for kind, columns in COLUMNS.items():
        header = TABLES[f"{kind}.csv"].splitlines()[0]
        names = {re.sub(r"\[.*\]", "", cell).strip() for cell in re.split("[;,]", header)}
        assert names == set(columns), kind


@pytest.mark.parametrize("number", range(len(EXAMPLES)))
def test_every_example_is_read(number: int, tmp_path: Path) -> None:
    for name, text in TABLES.items():
        (tmp_path / name).write_text(text, encoding="utf-8")
    shutil.copy(SECTIONS / "extruded_door_sill.dxf", tmp_path)
    (tmp_path / "part.toml").write_text(EXAMPLES[number], encoding="utf-8")
    source = read_source(tmp_path / "part.toml")
    if "units" not in source.document:
        whole = {**tomllib.loads(EXAMPLES[0]), **source.document}
        source = SectionSource(source.path, source.sha256, whole, source.tables)
    section = section_from(source)
    assert section.walls or section.outline is not None
