"""Which file does the user mean by the name of a brief?"""

from __future__ import annotations

from pathlib import Path

from tuner.errors import BriefError
from tuner.library.checks import nearest
from tuner.library.folders import data_folder

DEMO_FOLDER = "demo"
ENDING = ".toml"


def demo_briefs() -> tuple[str, ...]:
    """Names of the shipped demo briefs, sorted."""
    return tuple(sorted(path.stem for path in (data_folder() / DEMO_FOLDER).glob(f"*{ENDING}")))


def find_brief(name: str) -> Path:
    """The file itself where it exists, otherwise the shipped demo brief of this name.

    Raises
    ------
    BriefError
        Neither exists, or the name is a folder.
    """
    path = Path(name)
    if path.is_file():
        return path
    if name in demo_briefs():
        return data_folder() / DEMO_FOLDER / f"{name}{ENDING}"
    if path.is_dir():
        raise BriefError("this is a folder", place=path, remedy="name the TOML file in it")
    remedy = f"name a TOML file or a demo brief; {nearest(name, demo_briefs())}"
    raise BriefError(f'there is no brief "{name}"', remedy=remedy)
