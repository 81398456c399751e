"""How does a folder of results come into being whole or not at all?

Everything is written to a temporary neighbour, flushed to the disk, and renamed in one go. An interrupted
run leaves no half-written folder behind.
"""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Mapping
from pathlib import Path

from tuner.errors import TunerError

ELSEWHERE = "choose another place with --out"

MANIFEST = "manifest.json"
"""The file by which a folder is known to be a run's."""


def check_free(folder: Path, again: bool) -> None:
    """A TunerError where results must not be put: an existing path, unless it is an earlier run and `again`
    is set.
    """
    if not folder.exists() and not folder.is_symlink():
        _check_writable(folder)
        return
    if again and (folder / MANIFEST).is_file():
        return
    if again and folder.is_dir() and not any(folder.iterdir()):
        return
    remedy = "choose another folder" if again else "choose another folder, or replace the run with --again"
    what = "there is something else already" if again else "this exists already"
    raise TunerError(what, place=folder, remedy=remedy)


def _check_writable(folder: Path) -> None:
    """A TunerError where the nearest existing folder above cannot take a new one: better before a search
    than after it.
    """
    above = next(parent for parent in folder.absolute().parents if parent.exists())
    if not above.is_dir():
        raise TunerError("cannot be written (a file is in the way)", place=folder, remedy=ELSEWHERE)
    if not os.access(above, os.W_OK | os.X_OK):
        raise TunerError("cannot be written (permission denied)", place=folder, remedy=ELSEWHERE)


def free_folder(parent: Path, name: str) -> Path:
    """`parent/name`, or the first of `name-2`, `name-3` ... that does not exist."""
    folder = parent / name
    n = 2
    while folder.exists():
        folder = parent / f"{name}-{n}"
        n += 1
    return folder


def write_folder(folder: Path, files: Mapping[str, bytes], *, again: bool = False) -> None:
    """Write all files into a new folder, or replace an earlier run by it.

    Parameters
    ----------
    folder : Path
        Must not exist, unless `again` is set and it holds an earlier run.
    files : mapping from file name to content

    Raises
    ------
    TunerError
        The folder is taken, or cannot be written.
    """
    check_free(folder, again)
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        growing = Path(tempfile.mkdtemp(prefix=f".{folder.name}.", dir=folder.parent))
    except OSError as fault:
        raise _cannot(folder, fault) from None
    try:
        for name, content in files.items():
            _write(growing / name, content)
        growing.chmod(0o755)
        _sync(growing)
        _put_in_place(growing, folder)
    except OSError as fault:
        raise _cannot(folder, fault) from None
    finally:
        shutil.rmtree(growing, ignore_errors=True)


def write_file(path: Path, content: bytes) -> None:
    """Write one file whole: to a temporary neighbour, flushed, then renamed over the old one."""
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        handle, name = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.parent)
        os.close(handle)
    except OSError as fault:
        raise _cannot(path, fault) from None
    growing = Path(name)
    try:
        _write(growing, content)
        growing.chmod(0o644)
        growing.replace(path)
    except OSError as fault:
        raise _cannot(path, fault) from None
    finally:
        growing.unlink(missing_ok=True)


def _write(path: Path, content: bytes) -> None:
    """Content to disk, not only to the system's memory."""
    with path.open("wb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())


def _sync(folder: Path) -> None:
    """The folder's own entries to disk, where the system can do that."""
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError:  # some systems open no folders; the rename is still whole there
        return
    try:
        os.fsync(handle)
    finally:
        os.close(handle)


def _put_in_place(growing: Path, folder: Path) -> None:
    """Rename; an earlier run steps aside first and comes back if that fails."""
    if not folder.exists():
        growing.rename(folder)
        return
    aside = folder.with_name(f".{folder.name}.replaced-{os.getpid()}")
    folder.rename(aside)
    try:
        growing.rename(folder)
    except OSError:
        aside.rename(folder)
        raise
    shutil.rmtree(aside, ignore_errors=True)


def _cannot(path: Path, fault: OSError) -> TunerError:
    """The system's refusal in our words."""
    reason = (fault.strerror or "the system refused").lower()
    return TunerError(f"cannot be written ({reason})", place=path, remedy=ELSEWHERE)
