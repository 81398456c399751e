"""Does `tuner show` show every table and every entry?"""

from __future__ import annotations

from pathlib import Path
from xml.etree import ElementTree

import pytest

from tests.cli.conftest import Tuner
from tuner.library import load_library


def test_every_group_is_listed(tuner: Tuner) -> None:
    seen = tuner("show", "substituents")
    groups = load_library().substituents
    assert f"{len(groups)} groups" in seen.out
    listed = {line.split()[0] for line in seen.out.splitlines() if line.strip()}
    assert set(groups) <= listed


@pytest.mark.parametrize("name", ["nitro", "NO2", "*[N+](=O)[O-]"])
def test_a_group_is_found_by_name_short_name_and_structure(tuner: Tuner, name: str) -> None:
    seen = tuner("show", "substituents", name)
    assert seen.out.startswith("nitro (NO2)")
    assert "sigma meta" in seen.out
    assert "Hansch" in seen.out, "the source is told in full"


def test_series_come_with_units(tuner: Tuner) -> None:
    seen = tuner("show", "series")
    assert "kJ/mol" in seen.out
    assert "9.99 ± 0.03" in seen.out


def test_one_series_tells_its_source(tuner: Tuner) -> None:
    assert "Perrin" in tuner("show", "series", "anilinium").out


def test_every_core_is_listed(tuner: Tuner) -> None:
    seen = tuner("show", "cores")
    for name in load_library().cores:
        assert name in seen.out


def test_a_core_is_drawn_with_its_positions(tuner: Tuner) -> None:
    seen = tuner("show", "cores", "4-arylazophenol")
    assert "4-(phenylazo)phenol" in seen.out
    for label in ("2", "3'", "6'"):
        assert f"\n {label} " in seen.out
    path = Path("4-arylazophenol.svg")
    assert str(path) in seen.out
    assert ElementTree.parse(path).getroot().tag.endswith("svg")


def test_the_drawing_goes_where_it_is_asked_to(tuner: Tuner) -> None:
    tuner("show", "cores", "4'-hydroxychalcone", "--out", "core.svg")
    assert [path.name for path in Path().iterdir()] == ["core.svg"]


def test_bottles_are_listed_and_told(tuner: Tuner) -> None:
    assert "bottles" in tuner("show", "stock").out
    assert tuner("show", "stock", "aniline").out.startswith("aniline (shelf ")


@pytest.mark.parametrize(
    ("kind", "name", "part"),
    [
        ("substituents", "nitor", 'did you mean "nitro"?'),
        ("series", "phenl", 'did you mean "phenol"?'),
        ("cores", "4-nitrophenl", 'did you mean "4-nitrophenol"?'),
        ("stock", "anilin", 'did you mean "aniline"?'),
    ],
)
def test_an_unknown_entry_points_to_the_nearest(tuner: Tuner, kind: str, name: str, part: str) -> None:
    seen = tuner("show", kind, name)
    assert seen.code == 2
    assert part in seen.fault


def test_only_a_core_is_drawn(tuner: Tuner) -> None:
    seen = tuner("show", "substituents", "nitro", "--out", "x.svg")
    assert (seen.code, list(Path().iterdir())) == (2, [])


def test_a_folder_of_ones_own_is_laid_over(tuner: Tuner) -> None:
    Path("mine").mkdir()
    core = '[core."my dye"]\ntitle = "my dye"\nsmiles = "Oc1c([*:2])cccc1"\nseries = "phenol"\n'
    Path("mine/cores.toml").write_text(core, encoding="utf-8")
    assert "my dye" in tuner("show", "cores", "--overlay", "mine").out


def test_reactions_are_listed_and_told_with_their_source(tuner: Tuner) -> None:
    assert " reactions" in tuner("show", "reactions").out.splitlines()[0]
    seen = tuner("show", "reactions", "azo-coupling")
    for part in ("nitrosating", "4-arylazophenol", "never isolate", "Vogel"):
        assert part in seen.out
    assert "nitration" in tuner("show", "reactions", "nitraton").fault


def test_a_reaction_of_ones_own_is_shown(tuner: Tuner) -> None:
    Path("mine").mkdir()
    rule = '[reaction."my step"]\ntitle = "mine"\nkind = "exchange"\ngives = { "CN" = "" }\n'
    rule += 'source = "Vogel1989"\n'
    Path("mine/reactions.toml").write_text(rule, encoding="utf-8")
    assert "my step" in tuner("show", "reactions", "--overlay", "mine").out
