"""Row files: TOML with cases and their rows, read with all faults at once.

[sources.roark]                       # or in sources.toml beside the row files
work = "Young & Budynas, Roark's Formulas for Stress and Strain"
edition = "7th ed., 2002"

[[cases]]
name = "sharp channel"
section = "sections/channel.toml"     # from the row file's folder
set = { flange = 50, web = 100, t = 2 }
quick = true                          # part of the quick run
accuracy = 1e-6                       # of FE; default 1e-5

[[cases.rows]]                        # every key below may also stand in the case, for all its rows
name = "shear centre of a channel"
quantity = "-shear_centre_x"          # arithmetic on our names and the file's parameters
value = "3 * flange**2 / (6 * flange + web)"   # a number as printed, or arithmetic on the parameters
tolerance = { relative = 1e-9 }       # or { absolute = 0.1 }, or "printed": half a unit of the last digit
why = "closed formula on the midline" # of the tolerance; not with "printed"
source = "roark"
place = "Table 10.2, case 1"          # page, table, equation
obtained = "exact"                    # read, exact, procedure, recomputed, common practice, from memory
side = "theory"                       # theory, fe, both
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from pathlib import Path
from typing import Any, TypeGuard

from crosscheck.faults import ExpressionError, FaultList, KeyPath, SectionFaults, quoted, shown
from crosscheck.section_file.arithmetic import evaluate, names_in
from crosscheck.section_file.keys import FILE_LIMIT
from crosscheck.section_file.model import SectionFile
from crosscheck.section_file.reader import read_section, read_source
from crosscheck.section_file.source import check_key_lengths, plain_content, plain_text, toml_document
from crosscheck.verification.reference import (
    KINDS,
    NAMES,
    OBTAINED,
    SIDES,
    ReferenceCase,
    ReferenceRow,
    Source,
    Tolerance,
)
from crosscheck.verification.value_tables import PUBLISHED, ROLLED, entries, published_keys, rolled_keys

SOURCES = "sources.toml"
FILE_KEYS = ("schema", "title", "sources", "cases")
ROW_TEXTS = (
    "name", "quantity", "value", "why", "source", "place", "obtained", "side", "level", "kind", "unit",
    "load", "wall", "face", "note", "known_problem", "published", "rolled", "property", "take",
)  # fmt: skip
# Those that a row keeps as they are.
KEPT_TEXTS = (
    "quantity", "place", "obtained", "side", "level", "kind", "unit", "load", "wall", "face", "note",
    "known_problem",
)  # fmt: skip
ROW_KEYS = (*ROW_TEXTS, "tolerance", "at", "point", "nu")
CASE_KEYS = ("section", "set", "quick", "accuracy", "rows")
CHOICES = {
    "side": SIDES,
    "level": ("midline", "corrected", "lumped"),
    "kind": KINDS,
    "obtained": OBTAINED,
    "face": ("left", "right"),
    "take": ("value", "independent value"),
}
_DECIMAL = re.compile(r"[+-]?(?:\d+\.?(\d*)|\.(\d+))(?:[eE]([+-]?\d+))?\Z")


def read_rows(path: Path) -> tuple[ReferenceCase, ...]:
    """Cases of a row file.

    Raises
    ------
    SectionFaults
        All faults of the file, of its sections and of its rows.
    """
    faults = FaultList(str(path))
    document = _document(path, faults)
    for key in document:
        if key not in FILE_KEYS:
            faults.add((key,), quoted(key), "a known key", near=(key, FILE_KEYS))
    sources = _sources(path, document, faults)
    listed = document.get("cases")
    if not isinstance(listed, list) or not listed or not all(isinstance(c, dict) for c in listed):
        faults.add(("cases",), shown(listed), "a list of cases, each [[cases]]")
        listed = []
    reader = _Reader(path, sources, faults)
    cases = [reader.case(i, raw) for i, raw in enumerate(listed)]
    faults.raise_any(document)
    return tuple(case for case in cases if case is not None)


def row_files(given: Path) -> tuple[Path, ...]:
    """The row file itself, or the row files of a folder: those with [[cases]]."""
    if not given.is_dir():
        return (given,)
    return tuple(
        path
        for path in sorted(given.glob("*.toml"))
        if path.is_file()
        and path.stat().st_size <= FILE_LIMIT
        and re.search(r"^\s*\[\[\s*cases\s*\]\]", path.read_text(encoding="utf-8", errors="replace"), re.M)
    )


def printed_half_unit(text: str) -> float | None:
    """Half a unit of the last digit of a number as printed; None where it is no plain number."""
    match = _DECIMAL.match(text.strip())
    if match is None:
        return None
    digits = len(match[1] or match[2] or "")
    return 0.5 * 10.0 ** (int(match[3] or 0) - digits)


def _document(path: Path, faults: FaultList) -> dict[str, Any]:
    text = plain_text(plain_content(str(path), faults, "a row file"), faults, "[[cases]]", "a row file")
    check_key_lengths(text, faults)
    return toml_document(text, faults)


def _sources(path: Path, document: Mapping[str, Any], faults: FaultList) -> dict[str, Source]:
    """Sources of the folder and of the file, by key."""
    shared = path.parent / SOURCES
    beside = _document(shared, FaultList(str(shared))) if shared.is_file() else {}
    found: dict[str, Source] = {}
    for table in (beside.get("sources", {}), document.get("sources", {})):
        for key, raw in table.items() if isinstance(table, dict) else ():
            work = raw.get("work") if isinstance(raw, dict) else None
            edition = raw.get("edition", "") if isinstance(raw, dict) else ""
            if not _is_text(work) or not isinstance(edition, str) or not edition.isprintable():
                faults.add(("sources", key), shown(raw), 'a table with work = "author, title" and edition')
                continue
            found[key] = Source(key, work, edition)
    return found


def _is_text(raw: Any) -> TypeGuard[str]:
    """Whether a value is text that a screen can show on one line."""
    return isinstance(raw, str) and bool(raw.strip()) and raw.isprintable()


class _Reader:
    """Cases of one file; faults go to one list."""

    def __init__(self, path: Path, sources: Mapping[str, Source], faults: FaultList) -> None:
        self.path, self.sources, self.faults = path, sources, faults
        self.names: set[str] = set()

    def case(self, number: int, raw: dict[str, Any]) -> ReferenceCase | None:
        at: KeyPath = ("cases", number)
        known = (*CASE_KEYS, *ROW_KEYS)
        for key in raw:
            if key not in known:
                self.faults.add((*at, key), quoted(key), "a known key of a case", near=(key, known))
        name = raw.get("name")
        if not _is_text(name):
            self.faults.add((*at, "name"), shown(name), "the name of the case in quotes")
        section, overrides, smooth = self._section(at, raw)
        rows = raw.get("rows")
        if not isinstance(rows, list) or not rows or not all(isinstance(r, dict) for r in rows):
            self.faults.add((*at, "rows"), shown(rows), "a list of rows, each [[cases.rows]]")
            rows = []
        shared = {key: value for key, value in raw.items() if key in ROW_KEYS and key != "name"}
        made = [self.row((*at, "rows", i), {**shared, **r}, r, section) for i, r in enumerate(rows)]
        accuracy = raw.get("accuracy", 1e-5)
        if isinstance(accuracy, bool) or not isinstance(accuracy, float) or not 1e-8 <= accuracy <= 1e-2:
            self.faults.add((*at, "accuracy"), shown(accuracy), "a number from 1e-8 to 1e-2")
        if not isinstance(raw.get("quick", False), bool):
            self.faults.add((*at, "quick"), shown(raw["quick"]), "true or false")
        kept = tuple(row for row in made if row is not None)
        if section is None or len(kept) < len(made) or not isinstance(name, str):
            return None
        quick = bool(raw.get("quick", False))
        return ReferenceCase(name, str(self.path), section, kept, overrides, accuracy, smooth, quick)

    def _section(
        self, at: KeyPath, raw: Mapping[str, Any]
    ) -> tuple[SectionFile | None, dict[str, str], bool]:
        """The section with its parameters set, and whether any of its walls is smooth."""
        file, given = raw.get("section"), raw.get("set", {})
        if not isinstance(file, str) or not file:
            self.faults.add((*at, "section"), shown(file), "a section file, named from this file's folder")
            return None, {}, False
        if not isinstance(given, dict):
            self.faults.add((*at, "set"), shown(given), "a table of parameters and their values")
            return None, {}, False
        overrides = {str(key): str(value) for key, value in given.items()}
        try:
            path = self.path.parent / file
            section = read_section(path, overrides)
            walls = read_source(path).document.get("walls", [])
        except SectionFaults as fault:
            for line in fault.lines:
                self.faults.add((*at, "section"), line, "a section file without fault")
            return None, overrides, False
        return section, overrides, any(isinstance(w, dict) and w.get("smooth") is True for w in walls)

    def row(
        self, at: KeyPath, keys: dict[str, Any], own: Mapping[str, Any], section: SectionFile | None
    ) -> ReferenceRow | None:
        """One row; `keys` with the case's defaults, `own` as written."""
        before = len(self.faults) + self.faults.left_out
        for key in own:
            if key not in ROW_KEYS:
                self.faults.add((*at, key), quoted(key), "a known key of a row", near=(key, ROW_KEYS))
        keys = {**self._from_table(at, keys), **keys}
        for key in ROW_TEXTS:
            if key in keys and not _is_text(keys[key]):
                if key == "value" and isinstance(keys[key], (int, float)) and not isinstance(keys[key], bool):
                    keys[key] = repr(keys[key])
                elif key not in ("note", "unit"):
                    self.faults.add((*at, key), shown(keys[key]), "text in quotes")
        for key, allowed in CHOICES.items():
            if isinstance(keys.get(key), str) and keys[key] not in allowed:
                words = f"one of {', '.join(map(quoted, allowed))}"
                self.faults.add((*at, key), quoted(keys[key]), words, near=(keys[key], allowed))
        for key, words in (
            ("name", "the name of the row, its own"),
            ("quantity", "what is asked"),
            ("value", "the value as the source has it"),
            ("tolerance", 'given: { relative = 1e-3 }, { absolute = 0.1 } or "printed"'),
            ("source", "given: the key of a source"),
            ("place", "given: page, table or equation in the source"),
            ("obtained", f"given: one of {', '.join(OBTAINED)}"),
        ):
            if key not in keys:
                self.faults.add((*at, key), "nothing", words)
        name = keys.get("name")
        if isinstance(name, str):
            if name in self.names:
                self.faults.add((*at, "name"), quoted(name), "a name that no other row has")
            self.names.add(name)
        source = self.sources.get(str(keys.get("source")))
        if source is None and isinstance(keys.get("source"), str):
            words = f"a key of [sources], here or in {SOURCES}"
            self.faults.add(
                (*at, "source"), quoted(keys["source"]), words, near=(keys["source"], self.sources)
            )
        parameters = {} if section is None else section.parameters
        self._check_quantity(at, keys, section)
        value = self._value(at, keys, parameters)
        tolerance = self._tolerance(at, keys, value)
        place, point = self._places(at, keys)
        if len(self.faults) + self.faults.left_out > before or section is None:
            return None
        assert source is not None
        assert tolerance is not None
        assert value is not None
        texts = {key: keys[key] for key in KEPT_TEXTS if key in keys}
        return ReferenceRow(
            name=keys["name"], value=value, printed=keys["value"], tolerance=tolerance, source=source,
            at=place, point=point, nu=bool(keys.get("nu", False)), **texts,
        )  # fmt: skip

    def _from_table(self, at: KeyPath, keys: Mapping[str, Any]) -> dict[str, Any]:
        """Keys that a table beside the file gives."""
        published, rolled = keys.get("published"), keys.get("rolled")
        name = published if isinstance(published, str) else rolled
        if not isinstance(name, str):
            return {}
        key, table = ("published", PUBLISHED) if name is published else ("rolled", ROLLED)
        try:
            known = entries(self.path.parent / table)
        except ValueError as fault:
            self.faults.add((*at, key), f"{table}: {fault}", "an entry of a table")
            return {}
        if name not in known:
            self.faults.add((*at, key), quoted(name), f"the id of an entry of {table}", near=(name, known))
            return {}
        if key == "published":
            return published_keys(known[name], keys.get("take") == "independent value")
        wanted = keys.get("property")
        if not isinstance(wanted, str) or wanted not in known[name]["published"]:
            words = f"one of {', '.join(known[name]['published'])}"
            self.faults.add((*at, "property"), shown(wanted), words)
            return {}
        return rolled_keys(known[name], wanted, str(keys.get("side", "both")))

    def _check_quantity(self, at: KeyPath, keys: Mapping[str, Any], section: SectionFile | None) -> None:
        """Names of the quantity, and walls and loads that it needs."""
        quantity = keys.get("quantity")
        if section is None or not isinstance(quantity, str):
            return
        known = (*NAMES, *section.parameters)
        for name in names_in(quantity):
            if name not in known:
                self.faults.add(
                    (*at, "quantity"), quoted(name), "a quantity or parameter", near=(name, known)
                )
        walls = [wall.name for wall in section.walls]
        if keys.get("wall") is not None and keys["wall"] not in walls:
            self.faults.add((*at, "wall"), shown(keys["wall"]), "a wall of the section file",
                            near=(str(keys["wall"]), walls))  # fmt: skip
        loads = ["unit Vx", "unit Vy", "unit T", *(load.name for load in section.loads)]
        if keys.get("load") is not None and keys["load"] not in loads:
            self.faults.add((*at, "load"), shown(keys["load"]), "a load of the section file, or a unit load",
                            near=(str(keys["load"]), loads))  # fmt: skip

    def _value(self, at: KeyPath, keys: Mapping[str, Any], parameters: Mapping[str, float]) -> float | None:
        if not isinstance(keys.get("value"), str):
            return None
        try:
            return evaluate(keys["value"], parameters)
        except ExpressionError as fault:
            words = "a number as printed, or arithmetic on the file's parameters"
            self.faults.add((*at, "value"), f"{quoted(keys['value'])}: {fault}", words)
            return None

    def _tolerance(self, at: KeyPath, keys: Mapping[str, Any], value: float | None) -> Tolerance | None:
        raw, why = keys.get("tolerance"), keys.get("why", "")
        if raw == "printed":
            half = printed_half_unit(str(keys.get("value", "")))
            if half is None:
                self.faults.add((*at, "tolerance"), '"printed"', "a number where the value is arithmetic")
                return None
            return Tolerance("printed", half, "digits printed")
        if raw is None:
            return None
        if isinstance(raw, dict) and len(raw) == 1:
            ((kind, size),) = raw.items()
            number = isinstance(size, (int, float)) and not isinstance(size, bool) and 0 < size < float("inf")
            if kind in ("relative", "absolute") and number:
                if not why:
                    self.faults.add((*at, "why"), "nothing", "given: why this tolerance")
                if kind == "relative" and size >= 1.0:
                    self.faults.add((*at, "tolerance"), shown(raw), "below 1, or zero would pass")
                if kind == "relative" and value == 0.0:
                    self.faults.add((*at, "tolerance"), "relative, of zero", "absolute where the value is 0")
                return Tolerance(kind, float(size), str(why))
        words = '{ relative = 1e-3 }, { absolute = 0.1 } or "printed"'
        self.faults.add((*at, "tolerance"), shown(raw), words)
        return None

    def _places(self, at: KeyPath, keys: Mapping[str, Any]) -> tuple[float, tuple[float, float] | None]:
        """Fraction of the wall, and place in the solid."""
        place, point = keys.get("at", 0.5), keys.get("point")
        if isinstance(place, bool) or not isinstance(place, (int, float)) or not 0 <= place <= 1:
            self.faults.add((*at, "at"), shown(place), "a fraction of the wall from 0 to 1")
            place = 0.5
        if not isinstance(keys.get("nu", False), bool):
            self.faults.add((*at, "nu"), shown(keys["nu"]), "true or false")
        if point is None:
            return float(place), None
        if (
            not isinstance(point, list)
            or len(point) != 2
            or not all(isinstance(v, (int, float)) and not isinstance(v, bool) for v in point)
        ):
            self.faults.add((*at, "point"), shown(point), "a place [x, y]")
            return float(place), None
        return float(place), (float(point[0]), float(point[1]))
