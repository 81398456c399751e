"""Where are the data, and which state of them is this?"""

from __future__ import annotations

import hashlib
from functools import lru_cache
from pathlib import Path

from tuner.errors import LibraryError

PACKAGE = Path(__file__).resolve().parents[1]
"""Folder of the package `tuner`, in a checkout or as installed."""

DATA_SUFFIXES = (".csv", ".toml", ".json")


@lru_cache(maxsize=1)
def data_folder() -> Path:
    """The shipped data: `tuner/_libraries` of an installed wheel, or `libraries` beside `tuner` in a
    checkout.

    Raises LibraryError where neither exists, which means that the installation is incomplete.
    """
    for folder in (PACKAGE / "_libraries", PACKAGE.parent / "libraries"):
        if folder.is_dir():
            return folder
    raise LibraryError("the data folder of the program is missing", remedy="install the program again")


def data_files(folder: Path) -> tuple[Path, ...]:
    """Every data file (CSV, TOML, JSON) below `folder`, sorted by relative path."""
    found = (p for p in folder.rglob("*") if p.suffix in DATA_SUFFIXES and p.is_file())
    return tuple(sorted(found, key=lambda p: p.relative_to(folder).as_posix()))


def data_version(shipped: Path | None = None, overlay: Path | None = None) -> str:
    """Twelve hexadecimal digits that change whenever any shipped data file, or one of the user's folder,
    changes.

    `shipped` is `data_folder()` unless given.

    SHA-256 over relative paths and contents; line ends are taken as LF, so a checkout on any system agrees.
    """
    digest = hashlib.sha256()
    for folder in (shipped or data_folder(), *((overlay,) if overlay is not None else ())):
        for path in data_files(folder):
            content = path.read_bytes().replace(b"\r\n", b"\n")
            digest.update(f"{path.relative_to(folder).as_posix()}\0{len(content)}\0".encode())
            digest.update(content)
    return digest.hexdigest()[:12]


def require_folder(overlay: Path) -> Path:
    """The user's own library folder as an absolute path; LibraryError where it is no folder."""
    if not overlay.is_dir():
        raise LibraryError(
            "the library folder does not exist", place=overlay, remedy="name an existing folder"
        )
    return overlay.resolve()
