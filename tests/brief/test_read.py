"""Does a sound brief arrive whole, with the defaults that the records promise?"""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from math import inf
from pathlib import Path

import pytest

from tests.brief.conftest import SOUND
from tuner.brief import demo_briefs, find_brief, read_brief
from tuner.brief.records import Groups, Limits, Medium, Ranking, Reagents, SearchPlan
from tuner.errors import BriefError

FULL = """\
title = "all keys"
cores = ["phenol", "4-(phenylazo)phenol"]
measured = "mine.csv"
overlay = "mine"

[target]
ph = 7
tolerance = 0.25

[medium]
temperature_c = 37
ionic_strength_m = 0.15
cosolvent = "ethanol"
cosolvent_mass_percent = 10
offset = -0.2
offset_sd = 0.1
surface_potential_mv = -40

[reagents]
shelf = "shelf.csv"
include = ["aniline"]
exclude = ["role:base"]
switched_off = ["nitration"]

[groups]
allow = ["nitro", "family:halogen", "smarts:[#6]=O", "Me"]
forbid = ["tBu"]
require = ["Cl"]

[anchor]
handles = ["carboxy", "NH2"]

[limits]
max_steps = 3
max_molar_mass_g_mol = 350
min_substituents = 1
max_substituents = 4
min_clogp = -1
max_clogp = 4.5
max_tpsa_a2 = 90
max_pka_sd = 0.5
flags = { dinitrophenol = "exclude" }

[ranking]
step_costs = 0.1
hundred_g_mol_costs = 0
flag_costs = 0.2
rows = 10
diverse = true
user_objective = "mine.py:dull"
user_objective_costs = 0.1

[search]
method = "exact"
seed = 7
resolution_pka = 0.02
workers = 2

[[also]]
name = "warm"
role = "stays_off"
ph = 5.5
medium = { temperature_c = 50 }
"""


def test_a_short_brief_takes_the_defaults(written: Callable[[str], Path]) -> None:
    brief = read_brief(written(SOUND))
    assert (brief.title, brief.cores, brief.also) == ("a test", ("4-nitrophenol",), ())
    assert (brief.target.ph, brief.target.tolerance, brief.target.role) == (6.5, 0.3, "switches")
    assert brief.target.medium == Medium()
    assert (brief.reagents, brief.groups, brief.limits) == (Reagents(), Groups(), Limits())
    assert (brief.ranking, brief.search) == (Ranking(), SearchPlan())
    assert brief.overlay is None
    assert brief.measured is None


def test_the_brief_knows_its_file_and_hash(written: Callable[[str], Path]) -> None:
    path = written(SOUND)
    brief = read_brief(path)
    assert brief.path == path
    assert brief.sha256 == hashlib.sha256(SOUND.encode()).hexdigest()


def test_every_key_arrives(written: Callable[[str], Path], tmp_path: Path) -> None:
    (tmp_path / "mine").mkdir()
    (tmp_path / "mine.csv").write_text("smiles,pka\nOc1ccccc1,9.99\n", encoding="utf-8")
    (tmp_path / "mine.py").write_text("def dull(smiles):\n    return 0.0\n", encoding="utf-8")
    (tmp_path / "shelf.csv").write_text("name,smiles\nphenol,Oc1ccccc1\n", encoding="utf-8")
    brief = read_brief(written(FULL))
    assert brief.cores == ("phenol", "4-arylazophenol")
    assert brief.target.medium == Medium(37.0, 0.15, "ethanol", 10.0, -0.2, 0.1, -40.0)
    assert brief.reagents == Reagents("shelf.csv", ("aniline",), ("role:base",), ("nitration",))
    assert brief.groups.allow == ("NO2", "family:halogen", "smarts:[#6]=O", "Me")
    assert (brief.groups.forbid, brief.groups.require) == (("tBu",), ("Cl",))
    assert brief.groups.anchors == ("CO2H", "NH2")
    assert brief.limits == Limits(3, 350.0, 1, 4, -1.0, 4.5, 90.0, 0.5, (("dinitrophenol", "exclude"),))
    assert brief.ranking == Ranking(0.1, 0.0, 0.2, 10, True, "mine.py:dull", 0.1)
    assert brief.search == SearchPlan("exact", 7, 0.02, 2)
    assert (brief.overlay, brief.measured) == (tmp_path / "mine", tmp_path / "mine.csv")


def test_a_further_target_changes_only_what_it_names(written: Callable[[str], Path], tmp_path: Path) -> None:
    also = '[[also]]\nph = 5.0\nrole = "stays_off"\nmedium = { ionic_strength_m = 0.1 }\n'
    text = SOUND.replace("temperature_c = 25", "temperature_c = 40") + also
    other = read_brief(written(text)).also[0]
    assert other.medium == Medium(temperature_c=40.0, ionic_strength_m=0.1)
    assert (other.ph, other.tolerance, other.role) == (5.0, 0.0, "stays_off")


def test_a_charged_group_means_its_free_form(written: Callable[[str], Path]) -> None:
    brief = read_brief(written(SOUND + '[groups]\nallow = ["CO2-", "NO2"]\n'))
    assert brief.groups.allow == ("CO2H", "NO2")


def test_unbounded_limits_stay_unbounded(written: Callable[[str], Path]) -> None:
    limits = read_brief(written(SOUND + "[limits]\nmax_steps = 2\n")).limits
    assert (limits.max_steps, limits.max_molar_mass_g_mol, limits.min_clogp) == (2, inf, -inf)


@pytest.mark.parametrize("name", ["acid-leach", "bioreactor-patch", "freshness-label"])
def test_the_demo_briefs_are_found_by_name_and_sound(name: str) -> None:
    assert name in demo_briefs()
    brief = read_brief(find_brief(name))
    assert brief.path.stem == name


def test_a_file_wins_over_a_demo_of_the_same_name(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    Path("acid-leach").write_text(SOUND, encoding="utf-8")
    assert find_brief("acid-leach") == Path("acid-leach")


def test_an_unknown_name_points_to_the_nearest_demo() -> None:
    with pytest.raises(BriefError, match=r'no brief "freshnes-label".*did you mean "freshness-label"'):
        find_brief("freshnes-label")


def test_a_folder_is_no_brief(tmp_path: Path) -> None:
    with pytest.raises(BriefError, match="this is a folder"):
        find_brief(str(tmp_path))


def test_a_folder_of_the_same_name_does_not_hide_a_demo(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    Path("acid-leach").mkdir()
    assert find_brief("acid-leach").name == "acid-leach.toml"
