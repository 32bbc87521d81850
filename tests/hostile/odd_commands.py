"""Rows of verify, ranges of sweep and threshold, packages of dossier, evidence, output folders."""

from __future__ import annotations

import hashlib
import json
import os
from typing import Any

from trial import CHANNEL, Content, Trial

SOURCE = '[sources.notes]\nwork = "Notes"\n'
CASE = '[[cases]]\nname = "rail"\nsection = "rail.toml"\n'
ROW = (
    '[[cases.rows]]\nname = "area"\nquantity = "area"\nvalue = "240"\ntolerance = "printed"\nsource = "notes"\n'
    'place = "page 1"\nobtained = "read"\nside = "theory"\n'
)


def rows(name: str, content: Content, status: int, *words: str, **files: Content) -> Trial:
    """A row file given to verify, with the channel beside it."""
    beside = {key.replace("_", "."): value for key, value in files.items()}
    return Trial(
        name, {"rows.toml": content, "rail.toml": CHANNEL, **beside}, status, words, ("verify", "rows.toml")
    )


def row(old: str, new: str) -> str:
    text = SOURCE + CASE + ROW
    assert old in text, old
    return text.replace(old, new)


def vary(
    name: str, *words: str, ranges: tuple[str, ...], command: str = "sweep", more: tuple[str, ...] = ()
) -> Trial:
    """Ranges that cannot be used."""
    given = [part for each in ranges for part in ("--vary", each)]
    return Trial(name, {"given.toml": CHANNEL}, 2, words, (command, "given.toml", *given, *more))


def package(name: str, status: int, *words: str, seal: bool = True, **changes: Any) -> Trial:
    """A package of one section with some of its manifest changed, sealed as it should be."""
    files = {"s/inputs/a.toml": CHANNEL, "s/result.json": "[]", "s/verification.json": "{}"}
    content: dict[str, Any] = {
        "schema": "crosscheck.package/1",
        "run": "x",
        "made": "2001-02-03",
        "options": _options(),
        **changes,
    }
    if not isinstance(changes.get("files"), list):
        sums = {name: hashlib.sha256(text.encode()).hexdigest() for name, text in files.items()}
        content["files"] = {**sums, **changes.get("files", {})}
    text = json.dumps(content, ensure_ascii=False, indent=1, sort_keys=True)
    whole = {**content, "seal": hashlib.sha256(text.encode()).hexdigest() if seal else "0"}
    made = f"{json.dumps(whole, ensure_ascii=False, indent=1, sort_keys=True)}\n"
    laid = {f"d/{each}": text for each, text in files.items()}
    return Trial(name, {**laid, "d/manifest.json": made}, status, words, ("dossier", "--check", "d"))


def evidence(name: str, content: Content, *words: str) -> Trial:
    command = ("dossier", "given.toml", "--out", "out", "--evidence", "e.json")
    return Trial(name, {"given.toml": CHANNEL, "e.json": content}, 2, words, command)


def _options(**changes: Any) -> dict[str, Any]:
    sections = [{"folder": "s", "file": "s/inputs/a.toml"}]
    versions = {"version": "0", "packages": {}}
    return {"sections": sections, "accuracy": 1e-2, "overrides": [], "envelope": None, **versions, **changes}


ROWS = (
    rows("rows cut short", SOURCE + "[[cases", 2, "valid TOML"),
    rows("no rows", SOURCE, 2, "cases"),
    rows("empty row file", "", 2, "cases"),
    rows("binary row file", b"\xff\xfe\0", 2, "rows.toml"),
    rows("row file that is a pipe", os.mkfifo, 2, "rows.toml"),
    rows("row file that is a device", lambda path: path.symlink_to("/dev/zero"), 2, "rows.toml"),
    rows("sources that are a device", CASE + ROW, 2, "sources",
         sources_toml=lambda path: path.symlink_to("/dev/zero")),
    rows("row file of 5 MB", SOURCE + "#" * 5_000_000, 2, "at most 4 MB"),
    rows("huge integer in a row", row('"240"', "9" * 5000), 2, "rows.toml"),
    rows("deep lists in a row", SOURCE + "x = " + "[" * 100_000, 2, "rows.toml"),
    rows("row without source", row('source = "notes"\n', ""), 2, "source"),
    rows("row without place", row('place = "page 1"\n', ""), 2, "place"),
    rows("row without tolerance", row('tolerance = "printed"\n', ""), 2, "tolerance"),
    rows("row without value", row('value = "240"\n', ""), 2, "value"),
    rows("row of an unknown quantity", row('"area"\nvalue', '"beauty"\nvalue'), 2, "quantity"),
    rows("row with code", row('"240"', "\"__import__('os')\""), 2, "value"),
    rows("row with nan", row('"240"', '"nan"'), 2, "value"),
    rows("row with no room", row('"printed"', "{ relative = 0 }"), 2, "tolerance"),
    rows("row with all room", row('"printed"', '{ relative = 1e9 }\nwhy = "x"'), 2, "tolerance"),
    rows("row of no section", row("rail.toml", "absent.toml"), 2, "absent.toml"),
    rows("row of a faulty section", row("rail.toml", "rows.toml"), 2, "rows.toml"),
    rows("row named by escape codes", row('name = "area"', 'name = "\\u001b[2J"'), 2, "name"),
    rows("unknown key of a row", row("obtained", "obtainer"), 2, "obtainer"),
    rows("row that fails", row('"240"', '"250"'), 1, "250"),
    Trial("no such row file", {}, 2, ("absent.toml",), ("verify", "absent.toml")),
    Trial("folder without rows", {"a/b.toml": CHANNEL}, 2, ("a",), ("verify", "a")),
    Trial("256 and one workers", {}, 2, ("from 1 to 256",), ("verify", "--workers", "257")),
)  # fmt: skip

RANGES = (
    vary("range of nothing", "of the form", ranges=("",)),
    vary("range of prose", "of the form", ranges=("make it thicker",)),
    vary("range without end", "of the form", ranges=("t from 1 to",)),
    vary("range of one value", "2 to 100000", ranges=("t from 1 to 5 in 1",)),
    vary("range of a milliard", "2 to 100000", ranges=("t from 1 to 5 in 1000000000",)),
    vary("range of minus five", "2 to 100000", ranges=("t from 1 to 5 in -5",)),
    vary("range between equal ends", "different ends", ranges=("t from 2 to 2",)),
    vary("range of code", "arithmetic", ranges=("t from 1 to __import__('os')",)),
    vary("range to infinity", "vary", ranges=("t from 1 to 1e999",)),
    vary("logarithm of 0", "for log", ranges=("t from 0 to 5 log",)),
    vary("unknown parameter", "a parameter of [parameters]", ranges=("u from 1 to 5",)),
    vary("parameter twice", "second time", ranges=("t from 1 to 5", "t in 1, 2")),
    vary("three parameters", "vary", ranges=("t in 1, 2", "t in 3, 4", "t in 5, 6")),
    vary("range and override", "second time", ranges=("t in 1, 2",), more=("--set", "t = 3")),
    vary("ratio of code", "ratio", ranges=("t in 1, 2",), more=("--ratio", "open('x')")),
    vary("unknown quantity to draw", "--quantity", ranges=("t in 1, 2",), more=("--quantity", "beauty")),
    vary("no time", "seconds above 0", ranges=("t in 1, 2",), more=("--time-limit", "0")),
    vary("time of nan", "seconds above 0", ranges=("t in 1, 2",), more=("--time-limit", "nan")),
    vary("threshold of prose", "of the form", ranges=("thicker",), command="threshold"),
    vary("threshold of a list", "vary", ranges=("t in 1, 1",), command="threshold"),
    Trial("journal that is none", {"given.toml": CHANNEL, "out/journal.jsonl": "hello\n"}, 2, ("not a journal",),
          ("sweep", "given.toml", "--vary", "t in 1, 2", "--out", "out")),
    Trial("journal of random bytes", {"given.toml": CHANNEL, "out/journal.jsonl": bytes(range(256)) * 9}, 2, ("journal",),
          ("sweep", "given.toml", "--vary", "t in 1, 2", "--out", "out", "--resume")),
    Trial("every member refused", {"given.toml": CHANNEL}, 2, (),
          ("sweep", "given.toml", "--vary", "t in -1, -2", "--workers", "1")),
)  # fmt: skip

PACKAGES = (
    Trial("no package", {}, 2, ("must be the folder of a dossier",), ("dossier", "--check", "d")),
    Trial("package without manifest", {"d/x": ""}, 1, ("manifest.json",), ("dossier", "--check", "d")),
    Trial("manifest of no JSON", {"d/manifest.json": "{"}, 1, ("altered",), ("dossier", "--check", "d")),
    Trial("manifest of deep lists", {"d/manifest.json": "[" * 100_000}, 1, ("altered",), ("dossier", "--check", "d")),
    Trial("manifest that is a device", {"d/manifest.json": lambda path: path.symlink_to("/dev/zero")}, 1, ("manifest.json",),
          ("dossier", "--check", "d")),
    Trial("manifest that is a pipe", {"d/manifest.json": os.mkfifo}, 1, ("manifest.json",), ("dossier", "--check", "d")),
    package("results of nothing", 1, "other keys"),
    package("manifest with a wrong seal", 1, "altered", seal=False),
    package("manifest without options", 1, "manifest.json", options={}),
    package("manifest with options of text", 1, "manifest.json", options="x"),
    package("manifest with files as a list", 1, "manifest.json", files=["x"]),
    package("manifest of a file above", 1, "must be a file of the package", files={"../../secret.csv": "0" * 64}),
    package("manifest of a file elsewhere", 1, "must be a file of the package", files={"/etc/passwd": "0" * 64}),
    package("manifest of a device", 1, "must be a file of the package", files={"/dev/zero": "0" * 64}),
    package("manifest of a section above", 1, "manifest.json",
            options=_options(sections=[{"folder": "..", "file": "../given.toml"}])),
    package("manifest of an envelope above", 1, "manifest.json", options=_options(envelope="../given.json")),
    package("manifest with folders of numbers", 1, "manifest.json", options=_options(sections=[{"folder": 1, "file": [2]}])),
    package("manifest with a wild accuracy", 1, "manifest.json", options=_options(accuracy="1e-400")),
    evidence("evidence of no JSON", "{", "outcomes"),
    evidence("evidence of deep lists", "[" * 100_000, "outcomes"),
    evidence("evidence that is a pipe", os.mkfifo, "e.json"),
    evidence("evidence that is a device", lambda path: path.symlink_to("/dev/zero"), "e.json"),
    evidence("evidence without checks", '{"outcomes": [], "obtained": {}, "version": 1, "whole": 1, "quick": 0}', "an empty list"),
    Trial("dossier of nothing", {}, 2, ("must have section files",), ("dossier", "--out", "out")),
    Trial("dossier over other files", {"given.toml": CHANNEL, "out/x": ""}, 2, ("an older package",),
          ("dossier", "given.toml", "--out", "out")),
)  # fmt: skip


def envelope(name: str, content: Content, *words: str) -> Trial:
    """An envelope that a section is held against."""
    command = ("compare", "given.toml", "--accuracy", "1e-2", "--envelope", "e.json")
    return Trial(name, {"given.toml": CHANNEL, "e.json": content}, 2, words, command)


def enveloped(**changes: Any) -> str:
    """An envelope of another shape, with some of it changed."""
    made = {
        "schema": "crosscheck.envelope/1",
        "shape": {"shape_sha256": "0", "set": []},
        "parameters": [{"name": "t", "from": 1, "to": 5}],
        "edge": 0.01,
        "lines": [{"second": None, "gaps": [], "quantities": []}],
    }
    return json.dumps({**made, **changes})


ENVELOPES = (
    Trial("envelope of another shape", {"given.toml": CHANNEL, "e.json": enveloped()}, 0, ("another shape",),
          ("compare", "given.toml", "--accuracy", "1e-2", "--envelope", "e.json")),
    envelope("envelope of no JSON", "{", "no JSON"),
    envelope("envelope of deep lists", "[" * 100_000, "no JSON"),
    envelope("envelope of another schema", '{"schema": "x"}', "another document"),
    envelope("envelope that is a device", lambda path: path.symlink_to("/dev/zero"), "a pipe or device"),
    envelope("envelope without lines", enveloped(lines=[]), "lines"),
    envelope("envelope without shape", enveloped(shape={}), "shape.shape_sha256"),
    envelope("envelope with text for a number", enveloped(edge="x"), "edge"),
    envelope("envelope of three parameters", enveloped(parameters=[{"name": "t", "from": 1, "to": 5}] * 3), "parameters"),
)  # fmt: skip


OUTPUTS = (
    Trial("output folder that is a file", {"given.toml": CHANNEL, "out": "x"}, 2, ("a folder that can be written",),
          ("sweep", "given.toml", "--vary", "t in 1, 2", "--out", "out")),
    Trial("JSON into no folder", {"given.toml": CHANNEL}, 2, ("a file that can be written",),
          ("compare", "given.toml", "--accuracy", "1e-2", "--json", "absent/x.json")),
    Trial("JSON onto a folder", {"given.toml": CHANNEL, "out/x": ""}, 2, ("a file that can be written",),
          ("compare", "given.toml", "--accuracy", "1e-2", "--json", "out")),
    Trial("picture of no kind", {"given.toml": CHANNEL}, 2, ("out.exe",), ("draw", "given.toml", "--out", "out.exe")),
    Trial("picture of no width", {"given.toml": CHANNEL}, 2, ("--width",),
          ("draw", "given.toml", "--out", "out.svg", "--width", "nan")),
    Trial("template of no shape", {}, 2, ("did you mean",), ("template", "chanel")),
    Trial("template of a path", {}, 2, ("template",), ("template", "../sections/zed_door_frame")),
    Trial("template of a million cells", {}, 2, ("cells",), ("template", "box", "--cells", "1000000")),
)  # fmt: skip

COMMANDS = (*ROWS, *RANGES, *PACKAGES, *ENVELOPES, *OUTPUTS)
