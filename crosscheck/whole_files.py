"""Output files written whole or not at all."""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Iterable, Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path


def write_whole(path: Path, content: bytes | Iterable[bytes]) -> None:
    """Write a file so that it is either the old one or the whole new one, whatever happens meanwhile.

    Parameters
    ----------
    path : Path
        Where; its folder must exist.
    content : bytes or iterable of bytes
        What; in pieces where it need not be in memory all at once.

    Raises
    ------
    OSError
        Where the folder cannot be written; nothing is left behind.
    """
    descriptor, name = tempfile.mkstemp(prefix=f".{path.name}.", suffix=".part", dir=path.parent)
    temporary = Path(name)
    try:
        with os.fdopen(descriptor, "wb") as stream:
            stream.writelines((content,) if isinstance(content, bytes) else content)
            stream.flush()
            os.fsync(stream.fileno())
        # mkstemp makes the file private to its owner; a report is as readable as any other file.
        temporary.chmod(0o666 & ~_umask())
        temporary.replace(path)
    except BaseException:
        temporary.unlink(missing_ok=True)
        raise


def write_folder(folder: Path, files: Mapping[str, bytes]) -> tuple[Path, ...]:
    """Write files into a folder, made where missing; each appears whole, in the given order.

    Another run that writes into the folder waits, so that all files of the same names are of one run.

    Parameters
    ----------
    folder : Path
        Where.
    files : mapping of name to bytes
        What; names without any folder part.

    Returns
    -------
    tuple of Path
        The files written.

    Raises
    ------
    ValueError
        Where a name would leave the folder.
    OSError
        Where the folder cannot be made or written.
    """
    for name in files:
        if name in ("", ".", "..") or Path(name).name != name:
            raise ValueError(f"{name!r} is not a plain file name")
    folder.mkdir(parents=True, exist_ok=True)
    written = []
    with _held(folder):
        for name, content in files.items():
            write_whole(folder / name, content)
            written.append(folder / name)
    return tuple(written)


@contextmanager
def _held(folder: Path) -> Iterator[None]:
    """Keep others who ask from a folder; where the system has no such lock, none is taken."""
    try:
        import fcntl
    except ImportError:
        yield
        return
    descriptor = os.open(folder, os.O_RDONLY)
    try:
        # some network folders know no locks
        with suppress(OSError):
            fcntl.flock(descriptor, fcntl.LOCK_EX)
        yield
    finally:
        os.close(descriptor)


def _umask() -> int:
    """The process's mask; reading it needs setting it."""
    mask = os.umask(0)
    os.umask(mask)
    return mask


def write_tree(folder: Path, files: Mapping[str, bytes]) -> None:
    """Write a folder with folders inside so that it is the old one or the whole new one.

    Parameters
    ----------
    folder : Path
        Where; what is there goes when the new one is complete.
    files : mapping of name to bytes
        What; names relative to the folder, parts separated by ``/``.

    Raises
    ------
    ValueError
        Where a name would leave the folder.
    OSError
        Where the folder cannot be made or written; nothing is left behind.
    """
    for name in files:
        parts = name.split("/")
        if not all(part and part not in (".", "..") and Path(part).name == part for part in parts):
            raise ValueError(f"{name!r} is not a name inside a folder")
    folder.parent.mkdir(parents=True, exist_ok=True)
    made = Path(tempfile.mkdtemp(prefix=f".{folder.name}.", suffix=".part", dir=folder.parent))
    try:
        for name, content in files.items():
            path = made / name
            path.parent.mkdir(parents=True, exist_ok=True)
            write_whole(path, content)
        # mkdtemp makes the folder private to its owner.
        made.chmod(0o777 & ~_umask())
        if folder.exists():
            with tempfile.TemporaryDirectory(prefix=f".{folder.name}.", dir=folder.parent) as aside:
                folder.replace(Path(aside) / "old")
                made.replace(folder)
        else:
            made.replace(folder)
    except BaseException:
        shutil.rmtree(made, ignore_errors=True)
        raise
