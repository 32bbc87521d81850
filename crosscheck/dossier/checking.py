"""Is a package whole and unaltered, and do its numbers come out again?"""

from __future__ import annotations

import hashlib
import json
import os
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from crosscheck.comparison.provenance import provenance
from crosscheck.dossier.evidence import evidence_record, gather, read_envelope_file
from crosscheck.dossier.package import MANIFEST, SCHEMA, sealed
from crosscheck.faults import FaultList, SectionFaults, one_line
from crosscheck.reports.result_json import document
from crosscheck.section_file.reader import read_section
from crosscheck.section_file.source import plain_content
from fe_models import ACCURACY_RANGE

# Numbers that agree to this share of their scale are the same numbers [-].
SAME = 1e-9
# Orders are slopes of logarithms of small differences, which bring out round-off: another number of numerical
# threads moves them in the eighth digit.
ORDERS, SAME_ORDER = ("interval_order", "order"), 1e-5
MANIFEST_LIMIT = 10_000_000  # bytes
# What differs between two runs of one file, and residuals, of which only the outcome counts.
LEFT_OUT = {"provenance", "working", "seconds"}
# Keys that have no dimension: their scale is one.
PLAIN = {
    "difference", "uncertainty", "change", "factor", "numerical", "curves", "shares", "moves", "poisson",
    "total", "index", "midline", "corrected", "lumped", "difference_fe", "difference_theory",
    "interval_order",
}  # fmt: skip
MOST_TOLD = 8


@dataclass(frozen=True)
class PackageCheck:
    """What came of it: faults a line each, and what was found in order, a line each."""

    faults: tuple[str, ...]
    found: tuple[str, ...]

    @property
    def passed(self) -> bool:
        """Whether nothing is wrong."""
        return not self.faults


def check_package(folder: Path, tell: Callable[[str], None]) -> PackageCheck:
    """Check every file against the manifest, then solve the inputs of the package again and compare.

    Parameters
    ----------
    folder : Path
        The package.
    tell : callable
        Told in words what is being done.
    """
    tell("files")
    manifest, faults = read_manifest(folder)
    if manifest is None:
        return PackageCheck(tuple(faults), ())
    faults += list(_altered(folder, manifest))
    if faults:
        return PackageCheck(tuple(faults), ())
    found = [f"{len(manifest['files'])} files are whole and unaltered (run {manifest['run']})"]
    options = manifest["options"]
    for section in options["sections"]:
        differences, count, exact = _numbers(folder, section, options, tell)
        if differences:
            more = f" and {len(differences) - MOST_TOLD} more" if len(differences) > MOST_TOLD else ""
            told = "; ".join(differences[:MOST_TOLD])
            faults.append(f"{section['folder']}: numbers do not come out again: {told}{more}")
        else:
            found.append(
                f"{section['folder']}: {count} numbers come out again, {exact} of them to the last digit"
            )
    versions = _other_versions(options)
    if versions:
        found.append(f"solved here with other versions than then: {', '.join(versions)}")
    return PackageCheck(tuple(faults), tuple(found))


def read_manifest(folder: Path) -> tuple[dict[str, Any] | None, list[str]]:
    """The manifest of a package, or what is wrong with it."""
    path = folder / MANIFEST
    try:
        data = plain_content(str(path), FaultList(str(path)), "the manifest of a dossier", MANIFEST_LIMIT)
    except SectionFaults as faults:
        return None, list(faults.lines)
    try:
        content = json.loads(data)
        seal = content.pop("seal")
        right = content["schema"] == SCHEMA and isinstance(seal, str) and sealed(content) == data
    except (ValueError, KeyError, AttributeError, TypeError, RecursionError):
        right = False
    if not right:
        return None, [f"{path}: altered: its seal does not fit its content"]
    if not _complete(content):
        return None, [f"{path}: must have the entries that 'crosscheck dossier' writes, got others"]
    return content, []


def _complete(content: Mapping[str, Any]) -> bool:
    """Whether a manifest has every entry in its form, and names no place outside the package."""
    files, options = content.get("files"), content.get("options")
    if not (isinstance(files, dict) and isinstance(options, dict) and isinstance(content.get("run"), str)):
        return False
    sections, overrides = options.get("sections"), options.get("overrides")
    packages, accuracy = options.get("packages"), options.get("accuracy")
    if not (isinstance(sections, list) and sections and isinstance(overrides, list)):
        return False
    if not (isinstance(packages, dict) and isinstance(options.get("version"), str)):
        return False
    if options.get("envelope", "") not in (None, *files):
        return False
    low, high = ACCURACY_RANGE
    if isinstance(accuracy, bool) or not isinstance(accuracy, (int, float)) or not low <= accuracy <= high:
        return False
    if not all(isinstance(text, str) for text in overrides):
        return False
    return all(
        isinstance(section, dict)
        and isinstance(section.get("file"), str)
        and section["file"] in files
        and {f"{section.get('folder')}/{name}" for name in ("result.json", "verification.json")} <= set(files)
        for section in sections
    )


def _altered(folder: Path, manifest: Mapping[str, Any]) -> Iterator[str]:
    """Files that are missing, altered or not in the manifest."""
    files: dict[str, str] = manifest["files"]
    for name, digest in files.items():
        path = folder / name
        try:
            # a name that leads out of the package, and what is no plain file, is not opened
            inside = path.resolve().is_relative_to(folder.resolve()) and path.is_file()
            if not inside and (path.exists() or ".." in path.parts):
                yield f"{path}: must be a file of the package, got another place"
                continue
            with path.open("rb") as stream:
                found = hashlib.file_digest(stream, "sha256").hexdigest()
        except (OSError, ValueError, RuntimeError) as fault:
            yield f"{path}: missing or unreadable: {getattr(fault, 'strerror', None) or fault}"
            continue
        if found != digest:
            yield f"{path}: altered: its SHA-256 is not that of the manifest"
    for where, _, names in os.walk(folder):
        for name in names:
            own = (Path(where) / name).relative_to(folder).as_posix()
            if own not in files and own != MANIFEST:
                yield f"{folder / own}: not in the manifest"


def _numbers(
    folder: Path, section: Mapping[str, str], options: Mapping[str, Any], tell: Callable[[str], None]
) -> tuple[list[str], int, int]:
    """Differences between stored numbers and those of a new run; counts of all and of exact ones."""
    read = read_section(str(folder / section["file"]), tuple(options["overrides"]))
    envelope = None if options["envelope"] is None else read_envelope_file(str(folder / options["envelope"]))
    evidence = gather(read, float(options["accuracy"]), tell, envelope)
    home = folder / section["folder"]
    stored_result = json.loads((home / "result.json").read_bytes())
    stored_record = json.loads((home / "verification.json").read_bytes())
    pairs = [
        *compared(stored_result, _plain(document(evidence.result))),
        *compared(stored_record, _plain(evidence_record(evidence))),
    ]
    differences = [f"{where}: {told}" for where, told, _ in pairs if told]
    return differences, len(pairs), sum(exact for _, _, exact in pairs)


def _plain(content: Any) -> Any:
    """As it is after writing and reading."""
    return json.loads(json.dumps(content))


def compared(old: Any, new: Any, where: str = "", scale: float = 0.0) -> Iterator[tuple[str, str, bool]]:
    """Every pair of values: place, what differs (empty where they are the same), and whether exactly "
    "equal."""
    if isinstance(old, dict) and isinstance(new, dict):
        if old.keys() != new.keys():
            yield where, "other keys", False
            return
        yard = old.get("normaliser")
        scale = abs(yard) if isinstance(yard, (int, float)) else scale
        if "passed" in old and "allowed" in old:
            # A residual is round-off: its value is chance, its verdict is not.
            yield where, "" if old["passed"] == new["passed"] else "a check turned", old == new
            return
        for key in old:
            if key not in LEFT_OUT:
                inner = 1.0 if key in PLAIN and where.split(".")[-1] != "theory" else scale
                yield from compared(old[key], new[key], f"{where}.{key}" if where else key, inner)
    elif isinstance(old, list) and isinstance(new, list):
        if len(old) != len(new):
            yield where, f"{len(old)} entries, now {len(new)}", False
            return
        size = max((abs(v) for v in old if isinstance(v, (int, float))), default=0.0)
        peers = _peers(old)
        for number, (a, b) in enumerate(zip(old, new, strict=True)):
            yield from compared(a, b, f"{where}[{number}]", max(scale, size, peers))
    else:
        yield _pair(old, new, where, scale)


def _peers(entries: Sequence[Any]) -> float:
    """Largest flow of a list of probes: beside it round-off is nothing."""
    found = [entry.get("fe") for entry in entries if isinstance(entry, dict) and "fe_error" in entry]
    return max((abs(value) for value in found if isinstance(value, (int, float))), default=0.0)


def _pair(old: Any, new: Any, where: str, scale: float) -> tuple[str, str, bool]:
    numbers = all(isinstance(v, (int, float)) and not isinstance(v, bool) for v in (old, new))
    if old == new:
        return where, "", True
    same = SAME_ORDER if where.rpartition(".")[2] in ORDERS else SAME
    if numbers and abs(old - new) <= same * max(abs(old), abs(new), scale):
        return where, "", False
    return where, one_line(f"{old!r}, now {new!r}", 120), False


def _other_versions(options: Mapping[str, Any]) -> list[str]:
    """Packages whose version is another one than when the package was made."""
    here = provenance("", "", {})
    now = {"crosscheck": here.version, **here.packages}
    then = {"crosscheck": options["version"], **options["packages"]}
    return [
        f"{name} {version}, now {now.get(name)}" for name, version in then.items() if now.get(name) != version
    ]
