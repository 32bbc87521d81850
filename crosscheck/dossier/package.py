"""The package: both documents, inputs, results, plates and a manifest that seals them."""

from __future__ import annotations

import hashlib
import json
import os
import shlex
import time
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import Any

from crosscheck.dossier.bench import Bench, is_large
from crosscheck.dossier.composing import compose, plate_extras, run_id
from crosscheck.dossier.evidence import Envelope, SectionEvidence, evidence_record
from crosscheck.dossier.page import page_bytes
from crosscheck.dossier.paper import equation_pictures, pdf_bytes
from crosscheck.dossier.suite import SuiteEvidence
from crosscheck.file_names import free_name
from crosscheck.pictures.plates import PLATES, Plate, plate
from crosscheck.reports.result_json import json_text

SCHEMA = "crosscheck.package/1"
MANIFEST = "manifest.json"
SUITE, ENVELOPE = "attached/verification.json", "attached/envelope.json"


def today() -> str:
    """The day in UTC; SOURCE_DATE_EPOCH stands for it where that is set, as reproducible builds have it."""
    stamp = os.environ.get("SOURCE_DATE_EPOCH", "")
    seconds = float(stamp) if stamp.isdigit() else time.time()
    return time.strftime("%Y-%m-%d", time.gmtime(seconds))


def package_files(
    evidence: Sequence[SectionEvidence],
    suite: SuiteEvidence | None,
    hand_sheets: Sequence[str],
    tell: Callable[[str], None],
    envelope: Envelope | None = None,
) -> dict[str, bytes]:
    """Every file of a package by its name, the manifest last.

    Parameters
    ----------
    evidence : sequence of SectionEvidence
        One entry a section.
    suite : SuiteEvidence, optional
        Stored evidence of the suite.
    hand_sheets : sequence of str
        Loads whose hand sheets are wanted; none: the load that governs most walls.
    tell : callable
        Told in words what is being done.
    envelope : Envelope, optional
        That the sections were held against.
    """
    made, number = today(), run_id(evidence, suite)
    folders: list[str] = []
    for each in evidence:
        folders.append(free_name(Path(each.section.path).stem, folders, "section"))
    drawn: list[Mapping[str, Plate]] = []
    files: dict[str, bytes] = {}
    for folder, each in zip(folders, evidence, strict=True):
        with Bench(plate, (each.result, plate_extras(each, suite), number), is_large(each.result)) as bench:
            own = bench.work(list(PLATES), f"{each.result.title}: plates", tell)
        drawn.append({each.name: each for each in own})
        files |= _section_files(folder, each, own)
    if suite is not None:
        files[SUITE] = suite.content
    if envelope is not None:
        files[ENVELOPE] = envelope.content
    options = _options(evidence, folders, hand_sheets)
    options["evidence"] = None if suite is None else SUITE
    options["envelope"] = None if envelope is None else ENVELOPE
    tell("document")
    document = compose(evidence, drawn, suite, made, again(options), hand_sheets)
    tell("PDF")
    files["dossier.pdf"] = pdf_bytes(document)
    tell("HTML")
    files["dossier.html"] = page_bytes(document, equation_pictures())
    files = dict(sorted(files.items()))
    files[MANIFEST] = manifest_bytes(number, made, options, files)
    return files


def _section_files(folder: str, evidence: SectionEvidence, own: Sequence[Plate]) -> dict[str, bytes]:
    """Inputs, result, verification and plates of one section."""
    files = {f"{folder}/inputs/{name}": data for name, data in evidence.files.items()}
    files[f"{folder}/result.json"] = json_text([evidence.result]).encode()
    record = json.dumps(evidence_record(evidence), ensure_ascii=False, allow_nan=False, indent=1)
    files[f"{folder}/verification.json"] = f"{record}\n".encode()
    for each in own:
        for kind, data in each.files.items():
            files[f"{folder}/plates/{each.number:02d}_{each.name}.{kind}"] = data
    return files


def _options(
    evidence: Sequence[SectionEvidence],
    folders: Sequence[str],
    hand_sheets: Sequence[str],
) -> dict[str, Any]:
    """What makes the package again."""
    sections = [
        {"folder": folder, "file": f"{folder}/inputs/{next(iter(each.files))}"}
        for folder, each in zip(folders, evidence, strict=True)
    ]
    first = evidence[0]
    return {
        "sections": sections,
        "accuracy": first.result.accuracy,
        "overrides": [f"{name} = {text}" for name, text in first.section.overrides.items()],
        "hand_sheets": list(hand_sheets),
        "version": first.result.provenance.version,
        "packages": dict(first.result.provenance.packages),
    }


def again(options: Mapping[str, Any]) -> str:
    """The command that makes a package again from its own inputs."""
    words = ["crosscheck", "dossier", *(section["file"] for section in options["sections"]), "--out", "again"]
    words += ["--accuracy", f"{options['accuracy']:g}"]
    for text in options["overrides"]:
        words += ["--set", text]
    for name in ("evidence", "envelope"):
        if options[name]:
            words += [f"--{name}", options[name]]
    for load in options["hand_sheets"]:
        words += ["--hand-sheet", load]
    return shlex.join(words)


def manifest_bytes(number: str, made: str, options: Mapping[str, Any], files: Mapping[str, bytes]) -> bytes:
    """The manifest: hash of every file, and a seal over itself, so that a change anywhere is seen.

    The seal shows accident and carelessness; against intent keep the hash of the manifest elsewhere.
    """
    content: dict[str, Any] = {
        "schema": SCHEMA,
        "run": number,
        "made": made,
        "options": dict(options),
        "files": {name: hashlib.sha256(data).hexdigest() for name, data in files.items()},
    }
    return sealed(content)


def sealed(content: Mapping[str, Any]) -> bytes:
    """A manifest with its seal, written in the one way that the seal stands for."""
    text = json.dumps(content, ensure_ascii=False, indent=1, sort_keys=True)
    whole = {**content, "seal": hashlib.sha256(text.encode()).hexdigest()}
    return f"{json.dumps(whole, ensure_ascii=False, indent=1, sort_keys=True)}\n".encode()
