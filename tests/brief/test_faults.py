"""Is every slip named with its file, its line or key, and what would be right?"""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from tests.brief.conftest import SOUND
from tuner.brief import read_brief
from tuner.errors import BriefError

CHANGED = [
    # (old text, new text, parts of the message)
    ("tolerance", "tolerence", ("line 6", "target.tolerence", 'did you mean "tolerance"?')),
    ("ph = 6.5", 'ph = "6.5"', ("line 5", "target.ph", "bare number")),
    ("ph = 6.5", "ph = true", ("line 5", "target.ph", "number")),
    ("ph = 6.5", "ph = nan", ("target.ph", "between -10 and 16")),
    ("ph = 6.5", "ph = 17", ("target.ph", "between -10 and 16", "a pH")),
    ("ph = 6.5", "ph = -11", ("target.ph", "between -10 and 16")),
    ("ph = 6.5\n", "", ("target.ph", "missing")),
    ("tolerance = 0.3", "tolerance = 10", ("target.tolerance", "pH units, not per cent")),
    ("tolerance = 0.3", "tolerance = 0", ("target.tolerance", "0.01")),
    ("tolerance = 0.3", "tolerance = -0.3", ("target.tolerance", "0.01")),
    ("tolerance = 0.3", 'tolerance = "5 %"', ("target.tolerance", "unit is pH units")),
    ("temperature_c = 25", "temperature_c = 298", ("line 9", "medium.temperature_c", "24.85")),
    ("temperature_c = 25", "temperature_c = 298.15", ("degC", "25; write that")),
    ("temperature_c = 25", "temperature_c = -5", ("medium.temperature_c", "between 0 and 100")),
    ("temperature_c = 25", "temperature = 25", ("medium.temperature", 'did you mean "temperature_c"?')),
    ("temperature_c = 25", "ionic_strength_m = 150", ("mmol/L", "0.15")),
    ("temperature_c = 25", "ionic_strength_m = -1", ("between 0 and 3", "mol/L")),
    ("temperature_c = 25", "surface_potential_mv = -0.05", ("volt", "write -50")),
    ("temperature_c = 25", "offset = 40", ("offset", "surface_potential_mv")),
    ("temperature_c = 25", 'cosolvent = "ethanol"', ("medium.cosolvent", "cosolvent_mass_percent")),
    ("temperature_c = 25", "cosolvent_mass_percent = 20", ("without a cosolvent", "add cosolvent")),
    (
        "temperature_c = 25",
        'cosolvent = "ethanol"\ncosolvent_mass_percent = 0.3',
        ("fraction", "write 30 for per cent"),
    ),
    ("[medium]\ntemperature_c = 25", "medium = 25", ("target.medium", "top of the file")),
    ("[medium]", "[mediun]", ("line 8", "mediun", 'did you mean "medium"?')),
    ('cores = ["4-nitrophenol"]', "cores = []", ("cores", "no core is named")),
    ('cores = ["4-nitrophenol"]', 'cores = "4-nitrophenol"', ("cores", "a list of texts")),
    ('cores = ["4-nitrophenol"]', "cores = [4]", ("cores", "double quotes")),
    ('cores = ["4-nitrophenol"]', 'cores = ["4-nitrophenl"]', ("line 2", 'did you mean "4-nitrophenol"?')),
    ('cores = ["4-nitrophenol"]', 'cores = ["phenol", "phenol"]', ("cores", "twice")),
    ('cores = ["4-nitrophenol"]', 'cores = ["phenol", "Phenol"]', ("cores", "twice")),
    (
        'cores = ["4-nitrophenol"]',
        'cores = ["4-arylazophenol", "4-(phenylazo)phenol"]',
        ("the same core", "keep one"),
    ),
    ('cores = ["4-nitrophenol"]\n', "", ("cores", "missing")),
    ('cores = ["4-nitrophenol"]', 'cores = ["4-nitrophenol"]\nph = 6', ("key ph", "under [target]")),
    ("ph = 6.5", "ph = 6.5\nph = 7", ("line 6",)),
    ("[target]\nph = 6.5\ntolerance = 0.3\n", "", ("target", "missing")),
    ('title = "a test"', "title = 3", ("title", "text")),
    ('title = "a test"', "title = a test", ("line 1", "TOML")),
    ('title = "a test"', 'measured = "none.csv"', ("measured", 'no file "none.csv"')),
    ('title = "a test"', 'overlay = "none"', ("overlay", 'no folder "none"')),
]


@pytest.mark.parametrize(("old", "new", "parts"), CHANGED)
def test_a_changed_line_is_named(
    changed: Callable[[str, str], Path], old: str, new: str, parts: tuple[str, ...]
) -> None:
    path = changed(old, new)
    with pytest.raises(BriefError) as caught:
        read_brief(path)
    for part in (str(path), *parts):
        assert part in caught.value.text
    assert "\n" not in caught.value.text


ADDED = [
    # (table to add, parts of the message)
    ('[groups]\nallow = ["nitor"]', ("line 11", "groups.allow", 'did you mean "nitro"?')),
    ('[groups]\nallow = ["NO2", "nitro"]', ("groups.allow", "the same group")),
    ('[groups]\nallow = ["CO2H", "CO2-"]', ("groups.allow", "the same group")),
    ('[groups]\nallow = ["family:halogens"]', ("groups.allow", 'did you mean "halogen"?')),
    ('[groups]\nallow = ["smarts: "]', ("groups.allow", "pattern is empty")),
    ('[groups]\nallow = [""]', ("groups.allow", "empty")),
    ('[groups]\nrequire = ["Cl"]\nforbid = ["chloro"]', ("groups.require", "also under forbid")),
    ('[groups]\nallow = ["Cl"]\nforbid = ["Cl"]', ("groups.allow", "also under forbid")),
    ('[groups]\nallow = ["Cl"]\nrequire = ["Br"]', ("groups.require", "not allowed")),
    ('[groups]\nrequire = ["H"]', ("groups.require", "hydrogen")),
    ("[anchor]\nhandles = []", ("anchor.handles", "no handle")),
    ('[anchor]\nhandles = ["family:carboxyl"]', ("anchor.handles", "one by one")),
    ('[anchor]\nhandles = ["CO2H"]\n[groups]\nforbid = ["CO2H"]', ("anchor.handles", "forbidden")),
    ('[anchor]\nhandle = ["CO2H"]', ("anchor.handle", 'did you mean "handles"?')),
    ('[reagents]\nshelf = "exampel"', ("reagents.shelf", 'no shelf "exampel"')),
    ('[reagents]\ninclude = ["x"]\nexclude = ["x"]', ("reagents.include", "also under exclude")),
    ('[reagents]\ninclude = ["x", "x"]', ("reagents.include", "twice")),
    ("[limits]\nmax_steps = 2.5", ("limits.max_steps", "whole number")),
    ("[limits]\nmax_steps = -1", ("limits.max_steps", "between 0 and 30")),
    ("[limits]\nmax_molar_mass_g_mol = 0.45", ("kg/mol", "write 450")),
    ("[limits]\nmin_substituents = 3\nmax_substituents = 2", ("limits.min_substituents", "larger")),
    ("[limits]\nmin_clogp = 3\nmax_clogp = 2", ("limits.min_clogp", "larger")),
    ('[limits.flags]\ndinitrophenol = "hide"', ("limits.flags.dinitrophenol", "exclude")),
    (
        '[limits]\nmax_substituents = 1\n[groups]\nrequire = ["Cl", "Br"]',
        ("limits.max_substituents", "raise it to 2"),
    ),
    ("[ranking]\nstep_costs = -0.1", ("ranking.step_costs", "between 0 and 1")),
    ("[ranking]\nstep_costs = 5", ("ranking.step_costs", "per cent", "0.05")),
    ("[ranking]\nrows = 0", ("ranking.rows", "between 1 and 5000")),
    ('[ranking]\ndiverse = "yes"', ("ranking.diverse", "true or false")),
    ("[ranking]\nuser_objective_costs = 0.1", ("without a function", "user_objective")),
    ('[ranking]\nuser_objective = "dull"', ("names no function", "mine.py:brightness")),
    ('[ranking]\nuser_objective = "no.py:dull"', ('no file "no.py"',)),
    ('[search]\nmethod = "fast"', ("search.method", "evolutionary")),
    ("[search]\nseed = -1", ("search.seed", "between 0")),
    ("[search]\nresolution_pka = 1", ("search.resolution_pka", "0.2")),
    ("[[also]]\nph = 6.5\ntolerance = 0.2", ("also[1]", "repeats")),
    ("[[also]]\nph = 9\ntolerance = 0.2", ("also[1]", "no dye can")),
    ('[[also]]\nph = 7\nrole = "stays_off"', ("also[1]", "no dye can")),
    ('[[also]]\nph = 6\nrole = "stays_on"\n', ("also[1]", "no dye can")),
    ('[[also]]\nph = 6\nrole = "off"', ("line 12", "also[1].role", "stays_off")),
    ("[[also]]\nph = 7\ntolerance = 0.2\nmedium = { temperature_c = 310 }", ("also[1].medium", "36.85")),
    ("[also]\nph = 7", ("key also", "[[also]]")),
]


@pytest.mark.parametrize(("table", "parts"), ADDED)
def test_an_added_table_is_named(written: Callable[[str], Path], table: str, parts: tuple[str, ...]) -> None:
    path = written(f"{SOUND}{table}\n")
    with pytest.raises(BriefError) as caught:
        read_brief(path)
    for part in (str(path), *parts):
        assert part in caught.value.text
    assert "\n" not in caught.value.text


@pytest.mark.parametrize("text", ["", "\n\n", "# only a comment\n"])
def test_an_empty_file_is_called_empty(written: Callable[[str], Path], text: str) -> None:
    with pytest.raises(BriefError, match="empty"):
        read_brief(written(text))


def test_bytes_that_are_no_text_are_named(tmp_path: Path) -> None:
    path = tmp_path / "brief.toml"
    path.write_bytes(b"\xff\xfe\x00")
    with pytest.raises(BriefError, match="UTF-8"):
        read_brief(path)


def test_a_cost_free_function_of_the_user_is_refused(written: Callable[[str], Path], tmp_path: Path) -> None:
    (tmp_path / "mine.py").write_text("def dull(smiles):\n    return 0.0\n", encoding="utf-8")
    with pytest.raises(BriefError, match="no cost"):
        read_brief(written(SOUND + '[ranking]\nuser_objective = "mine.py:dull"\n'))
