"""STEP and mesh files read in a process of its own: what a file does to native code, memory or time costs a
refusal only."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
from contextlib import suppress
from functools import lru_cache
from pathlib import Path
from typing import Any

from .errors import LibraryError, OutlineError, SolveError
from .mesh_file import rings_of_mesh
from .solid import ClosedLine
from .step_face import rings_of_step

STEP_ENDINGS = (".step", ".stp")
SECONDS = 60.0
# Address space of the reader [bytes]; libraries take most of the first milliard.
MEMORY = 3_000_000_000
CHILD = "from fe_models.apart import answer; answer()"


def rings_apart(
    path: Path, length_unit: str = "mm", chord_error: float | None = None
) -> tuple[ClosedLine, ...]:
    """Rings of a STEP or mesh file of unknown origin, as ``rings_of_step`` and ``rings_of_mesh`` have them.

    Parameters
    ----------
    path : Path
        Its ending tells the format.
    length_unit : str
        Of a STEP file's answer: ``mm``, ``m`` or ``in``. A mesh file has no unit.
    chord_error : float, optional
        STEP: largest distance of arcs from curves that are neither lines nor circles [L].

    Returns
    -------
    tuple of ClosedLine
        Places in ``length_unit``, or as the mesh file has them [L].

    Raises
    ------
    OutlineError
        Not readable, or it takes more than SECONDS or MEMORY, or brings its reader down.
    LibraryError, SolveError
        The library that reads it is missing.
    """
    found = path.stat()
    return _rings(str(path.resolve()), found.st_mtime_ns, found.st_size, length_unit, chord_error)


@lru_cache(maxsize=8)
def _rings(
    path: str, _changed: int, _size: int, length_unit: str, chord_error: float | None
) -> tuple[ClosedLine, ...]:
    """As ``rings_apart``; a file that has not changed is read once."""
    name = Path(path).name
    kind = "step" if Path(path).suffix.lower() in STEP_ENDINGS else "mesh"
    asked = json.dumps([kind, path, length_unit, chord_error])
    here = os.pathsep.join([str(Path(__file__).parents[1]), *filter(None, sys.path)])
    try:
        # -P: no module of the folder at hand is taken for a library
        ran = subprocess.run(
            [sys.executable, "-P", "-c", CHILD],
            input=asked.encode(),
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            env={**os.environ, "PYTHONPATH": here, "OPENBLAS_NUM_THREADS": "1"},
            timeout=SECONDS,
            check=False,
        )
    except subprocess.TimeoutExpired:
        raise OutlineError(kind, (name,), f"a file that takes more than {SECONDS:g} s to read") from None
    try:
        told = json.loads(ran.stdout)
    except ValueError:
        how = f"status {ran.returncode}"
        with suppress(ValueError):
            how = signal.Signals(-ran.returncode).name
        raise OutlineError(kind, (name,), f"a file that brings its reader down ({how})") from None
    if "rings" not in told:
        raise _error(*told["fault"])
    return tuple(_ring(*each) for each in told["rings"])


def _error(kind: str, walls: list[str], found: str) -> Exception:
    """The fault that the other process met."""
    if kind in ("library", "solve"):
        return LibraryError(found) if kind == "library" else SolveError(found)
    return OutlineError(kind, tuple(walls), found)


def _ring(points: list[Any], through: list[Any]) -> ClosedLine:
    places = tuple((x, y) for x, y in points)
    return ClosedLine(places, tuple(None if at is None else (at[0], at[1]) for at in through))


def answer() -> None:
    """The other process: reads what is asked from standard input, answers on standard output."""
    kind, path, length_unit, chord_error = json.loads(sys.stdin.buffer.read())
    # what a library prints must not get among the answer
    out = os.dup(1)
    os.dup2(os.open(os.devnull, os.O_WRONLY), 1)
    _limit_memory()
    told: dict[str, Any]
    try:
        rings = (
            rings_of_step(Path(path), length_unit, chord_error)
            if kind == "step"
            else rings_of_mesh(Path(path))
        )
        told = {"rings": [[ring.points, ring.through] for ring in rings]}
    except OutlineError as fault:
        told = {"fault": [fault.kind, fault.walls, fault.found]}
    except (LibraryError, SolveError) as fault:
        told = {"fault": ["library" if isinstance(fault, LibraryError) else "solve", [], str(fault)]}
    except Exception as fault:  # whatever a library makes of a bad file
        told = {"fault": [kind, [Path(path).name], f"a file that cannot be read ({type(fault).__name__})"]}
    with os.fdopen(out, "wb") as stream:
        stream.write(json.dumps(told).encode())


def _limit_memory() -> None:
    """Keep this process within MEMORY, where the system can."""
    try:
        import resource
    except ImportError:
        return
    with suppress(ValueError, OSError):
        resource.setrlimit(resource.RLIMIT_AS, (MEMORY, MEMORY))
