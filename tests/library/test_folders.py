"""Are the data found in a checkout and in an installed wheel, and is their state told?"""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest

from tuner.errors import LibraryError
from tuner.library import folders


@pytest.fixture
def package(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """An empty place where the package could be installed."""
    place = tmp_path / "site" / "tuner"
    place.mkdir(parents=True)
    monkeypatch.setattr(folders, "PACKAGE", place)
    folders.data_folder.cache_clear()
    yield place
    folders.data_folder.cache_clear()


def test_in_a_checkout_the_data_lie_beside_the_package(package: Path) -> None:
    (package.parent / "libraries").mkdir()
    assert folders.data_folder() == package.parent / "libraries"


def test_in_a_wheel_they_lie_inside_it(package: Path) -> None:
    (package / "_libraries").mkdir()
    (package.parent / "libraries").mkdir()  # some other program's folder beside it must not be taken
    assert folders.data_folder() == package / "_libraries"


def test_an_incomplete_installation_says_so(package: Path) -> None:
    with pytest.raises(LibraryError, match="install the program again"):
        folders.data_folder()


def test_every_shipped_data_file_counts_in_the_version(tmp_path: Path) -> None:
    names = {path.name for path in folders.data_files(folders.data_folder())}
    wanted = {"substituents.csv", "reactions.toml", "example_shelf.csv", "constants.csv", "hazards.toml"}
    assert wanted <= names
    shipped = tmp_path / "data"
    (shipped / "deep").mkdir(parents=True)
    (shipped / "deep" / "a.csv").write_text("x\n")
    before = folders.data_version(shipped)
    (shipped / "deep" / "a.csv").write_text("y\n")
    after = folders.data_version(shipped)
    (shipped / "deep" / "a.csv").rename(shipped / "deep" / "b.csv")
    assert len({before, after, folders.data_version(shipped)}) == 3
    assert len(before) == 12
    (shipped / "notes.txt").write_text("no data file")
    assert folders.data_version(shipped) == folders.data_version(shipped, None)


def test_a_users_folder_changes_the_version(tmp_path: Path) -> None:
    own = tmp_path / "own"
    own.mkdir()
    plain = folders.data_version(overlay=own)
    (own / "cores.toml").write_text("# mine\n")
    assert folders.data_version(overlay=own) != plain == folders.data_version()
