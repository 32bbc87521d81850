"""The form of a document against the schema: faults in words, and the document without what is faulty."""

from __future__ import annotations

from collections.abc import Mapping
from copy import deepcopy
from typing import Any

from pydantic import BaseModel, ValidationError
from pydantic_core import ErrorDetails

from crosscheck.faults import FaultList, KeyPath, key_text, quoted, shown
from crosscheck.section_file import schema
from crosscheck.section_file.keys import ENTRY_LIMITS, TABLES_OF_FREE_NAMES
from crosscheck.section_file.schema_values import UNION_TAGS
from crosscheck.units import UNIT_SYSTEMS

_TABLES: Mapping[str, type[BaseModel]] = {
    "": schema.SectionDocument,
    "materials.*": schema.MaterialTable,
    "walls": schema.WallTable,
    "walls.thickness": schema.TaperTable,
    "walls.arc": schema.ArcTable,
    "walls.direct_share": schema.ShareTable,
    "profiles.*": schema.ProfileTable,
    "placed": schema.PlacedTable,
    "booms": schema.BoomTable,
    "corners.*": schema.CornerTable,
    "loads": schema.LoadTable,
    "load_reference": schema.LoadReferenceTable,
    "cuts": schema.CutTable,
    "probes": schema.ProbeTable,
    "stated": schema.StatedTable,
    "mirror": schema.MirrorTable,
    "tables": schema.TablesTable,
    "tolerances": schema.TolerancesTable,
    "allowables": schema.AllowablesTable,
    "allowables.walls.*": schema.AllowableTable,
    "document": schema.DocumentTable,
    "document.changes": schema.ChangeTable,
}
_UNITS_TEXT = ", ".join(quoted(name) for name in UNIT_SYSTEMS)
# What is asked for where the key alone says more than the kind of value.
_ALLOWED_AT: Mapping[str, str] = {
    "units": f"one of {_UNITS_TEXT}",
    "walls": "a list of at least one wall, each under [[walls]]",
    "points": 'a table of places, [points] with lines like a = [0, "depth"]',
    "points.*": "a place [x, y]",
    "walls.path": "a list of at least two point names",
    "walls.thickness": "a thickness > 0: one value, or a list with one per wall of the path",
    "walls.arc.through": "a place [x, y]",
    "loads.shear": "a pair [Vx, Vy]",
    "loads.moment": "a pair [Mx, My]",
    "loads.through": 'a place [x, y], a point name or "midline shear centre"',
}
_ALLOWED_BY_TYPE: Mapping[str, str] = {
    "missing": "given",
    "list_type": "a list",
    "dict_type": "a table",
    "model_type": "a table",
    "model_attributes_type": "a table",
    "union_tag_invalid": "of another form",
    "union_tag_not_found": "of another form",
}


def well_formed(document: Mapping[str, Any], faults: FaultList) -> dict[str, Any]:
    """Copy of a document that holds only what the schema allows; the rest is noted as faults.

    Parameters
    ----------
    document : the parsed file, left as it is
    faults : receives a fault for every key that is unknown, missing or of the wrong form

    Returns
    -------
    The copy: every value left in it has the form that the schema gives; required ones may be missing.
    """
    kept = _within_limits(document, faults)
    if "outline" not in document:
        for key in schema.WALLED:
            if key not in document:
                faults.add((key,), shown(None), _ALLOWED_AT[key])
    try:
        schema.SectionDocument.model_validate(kept)
    except ValidationError as error:
        # The input of an error is looked up below, in its bounded form.
        for details in error.errors(include_url=False, include_input=False):
            _note(details, kept, document, faults)
        for details in error.errors(include_url=False, include_input=False, include_context=False):
            _take_out(kept, _path(details))
    return kept


def _within_limits(document: Mapping[str, Any], faults: FaultList) -> dict[str, Any]:
    """Copy of a document without tables that have too many entries."""
    kept: dict[str, Any] = {}
    for key, value in document.items():
        limit = ENTRY_LIMITS.get(key)
        if limit is not None and isinstance(value, (dict, list)) and len(value) > limit:
            faults.add((key,), f"{len(value)} entries", f"a table of at most {limit} entries")
            faults.raise_any(document)
        try:
            kept[key] = deepcopy(value)
        except RecursionError:
            faults.add((key,), "tables nested very deep", "a table of this file format")
            faults.raise_any({})
    return kept


def _note(
    details: ErrorDetails, kept: Mapping[str, Any], document: Mapping[str, Any], faults: FaultList
) -> None:
    """Turn one error of the schema into a fault."""
    path = _path(details)
    kind = details["type"]
    pattern = _pattern(path)
    context = details.get("ctx", {})
    if kind == "extra_forbidden":
        where = key_place(path[:-1])
        top = len(path) > 1 and path[-1] in _TABLES and isinstance(_value_at(document, path), list)
        faults.add(
            path,
            quoted(str(path[-1])),
            f"a known key of {where}",
            f"a list {path[-1]} = [...] of the file stands above its first [table]" if top else "",
            near=(str(path[-1]), known_keys(path[:-1])),
        )
        return
    if _is_about_key(details):
        faults.add(path, quoted(str(path[-1])), f"named by {context.get('allowed', 'text')}")
        return
    value = _value_at(kept, path)
    if kind == "missing":
        if _value_at(document, path) is not None:
            return  # it was there and is refused already
        value = None
    found = f"a list of {context['actual_length']}" if kind in ("too_short", "too_long") else shown(value)
    allowed = _ALLOWED_AT.get(pattern, "")
    if kind == "refused":
        allowed = str(context["allowed"])
        if pattern == "walls.thickness":
            allowed = f"a thickness > 0, {allowed}"
    elif not allowed:
        fewest = context.get("min_length")
        allowed = f"a list of at least {fewest}" if fewest else _ALLOWED_BY_TYPE.get(kind, details["msg"])
    faults.add(path, found, allowed, _remedy(path, kind, document))


def _remedy(path: KeyPath, kind: str, document: Mapping[str, Any]) -> str:
    """What to do about a missing key or a table of the wrong kind, where it can be told."""
    if kind == "list_type" and len(path) == 1:
        return f"write [[{path[0]}]] with two brackets"
    if kind == "missing" and path == ("units",):
        below = [key for key, value in document.items() if isinstance(value, dict) and "units" in value]
        return f"move units above [{below[0]}]" if below else 'write units = "mm N" at the top'
    return ""


def known_keys(path: KeyPath) -> tuple[str, ...]:
    """Keys that the schema knows in the table at a path; none where keys are free names."""
    model = _TABLES.get(_pattern(path))
    if model is None:
        return ()
    return tuple(entry.alias or name for name, entry in model.model_fields.items())


def key_place(path: KeyPath) -> str:
    """A table as the file writes it: [[walls]], [materials.skin]; "the file" at the top."""
    name = key_text(tuple(part for part in path if isinstance(part, str)))
    if not name:
        return "the file"
    return f"[[{name}]]" if any(isinstance(part, int) for part in path) else f"[{name}]"


def _path(details: ErrorDetails) -> KeyPath:
    """Key path of an error, without the tags of unions."""
    parts = [part for part in details["loc"] if part not in UNION_TAGS]
    return tuple(parts[:-1]) if _is_about_key(details) else tuple(parts)


def _is_about_key(details: ErrorDetails) -> bool:
    """True when a free name is refused, not what stands under it; a file may have a key "[key]" too."""
    return len(details["loc"]) > 1 and details["loc"][-1] == "[key]" and details["type"] == "refused"


def _pattern(path: KeyPath) -> str:
    """A key path without indices, free names as *."""
    parts = [part for part in path if isinstance(part, str)]
    if len(parts) > 2 and parts[0] == "profiles":
        return _pattern(path[2:])  # points and walls of a profile are as those of the file
    if len(parts) > 1 and parts[0] in TABLES_OF_FREE_NAMES:
        parts[1] = "*"
    if parts[:2] == ["allowables", "walls"] and len(parts) > 2:
        parts[2] = "*"
    return ".".join(parts)


def _value_at(document: Any, path: KeyPath) -> Any:
    """The value at a key path; None when there is none."""
    node = document
    for part in path:
        try:
            node = node[part]
        except (KeyError, IndexError, TypeError):
            return None
    return node


def _take_out(document: dict[str, Any], path: KeyPath) -> None:
    """Take the innermost table entry that holds a faulty value out of the document.

    An entry of a list of tables that is no table becomes an empty one: the others keep their index.
    """
    if len(path) == 2 and isinstance(path[1], int) and not isinstance(_value_at(document, path), dict):
        document[str(path[0])][path[1]] = {}
        return
    for stop in range(len(path), 0, -1):
        parent = _value_at(document, path[: stop - 1])
        key = path[stop - 1]
        if isinstance(key, str):
            if isinstance(parent, dict):
                parent.pop(key, None)
            return
