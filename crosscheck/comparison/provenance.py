"""Where a result comes from: file, hash, versions and times."""

from __future__ import annotations

import hashlib
import importlib.metadata
import platform
from collections.abc import Mapping
from functools import cache
from pathlib import Path

from crosscheck.comparison.result import Provenance

PACKAGES: tuple[str, ...] = ("numpy", "scipy", "gmsh", "shapely", "matplotlib", "rich", "pydantic")


@cache
def installed_version(package: str) -> str:
    """Version of an installed distribution; ``not installed`` where there is none."""
    try:
        return importlib.metadata.version(package)
    except importlib.metadata.PackageNotFoundError:
        return "not installed"


@cache
def code_digest() -> str:
    """SHA-256 of the sources of both sides and of the comparison: a version that no one forgets to raise."""
    root = Path(__file__).resolve().parents[2]
    digest = hashlib.sha256()
    for package in ("beam_theory", "crosscheck", "fe_models"):
        for path in sorted((root / package).rglob("*.py")):
            digest.update(f"{path.relative_to(root).as_posix()}\n".encode())
            digest.update(path.read_bytes())
    return digest.hexdigest()


def provenance(
    section_file: str, sha256: str, seconds: Mapping[str, float], tables: Mapping[str, str] | None = None
) -> Provenance:
    """Provenance of a run on this machine.

    Parameters
    ----------
    section_file : str
        Path as the user gave it.
    sha256 : str
        Hash of the file's bytes, hexadecimal.
    seconds : mapping of stage to seconds
        Wall-clock time of each stage [s].
    tables : mapping of name to str
        Hash of each table that the file names.

    Returns
    -------
    Provenance
    """
    return Provenance(
        section_file=section_file,
        sha256=sha256,
        version=installed_version("crosscheck"),
        packages={package: installed_version(package) for package in PACKAGES},
        python=platform.python_version(),
        seconds=dict(seconds),
        tables=dict(tables or {}),
    )
