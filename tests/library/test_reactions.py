"""Does a faulty rule file get one line with file, key and remedy, and is the shipped one whole?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.synthesis.benches import book, library, workshop
from tuner.errors import LibraryError
from tuner.library.reactions import load_reactions
from tuner.library.stock import shipped_stock
from tuner.structure.molecule import canonical_smiles
from tuner.synthesis.joining import check_halves

RULE = """\
[reaction."mine"]
title = "my reaction"
kind = "exchange"
takes = ["CHO"]
gives = { "CO2H" = "" }
roles = ["oxidising"]
source = "own"
"""
JOINING = """\
[joining."mine"]
title = "my joining"
roles = ["base"]
[joining."mine".cores."4-arylazophenol"]
first = { core = "phenol", labels = { "2" = "2" } }
"""


def load(folder: Path, text: str) -> None:
    """Read an overlay with this rule file."""
    (folder / "reactions.toml").write_text(text, encoding="utf-8")
    load_reactions(library().substituents, overlay=folder)


@pytest.mark.parametrize(
    ("old", "new", "key", "part", "remedy"),
    [
        ('takes = ["CHO"]', 'takes = ["CHOO"]', "takes", "unknown group 'CHOO'", "CHO"),
        ('takes = ["CHO"]', 'takes = ["family:aldehyd"]', "takes", "unknown family 'aldehyd'", ""),
        ('"CO2H" = ""', '"COOH" = ""', "gives", "unknown group 'COOH'", ""),
        ('"CO2H" = ""', '"CHO" = ""', "gives", "gives what it takes: CHO", "different groups"),
        ('roles = ["oxidising"]', 'roles = ["oxidizing"]', "roles", "unknown role 'oxidizing'", "oxidising"),
        ('kind = "exchange"', 'kind = "swap"', "kind", "swap", "exchange"),
        ('kind = "exchange"', 'kind = "ring substitution"', "takes", "must not have 'takes'", "hydrogen"),
        ('takes = ["CHO"]\n', "", "takes", "lacks 'takes'", ""),
        ('source = "own"', 'spoils = ["Foo"]', "spoils", "unknown group 'Foo'", ""),
        ('source = "own"', "burden = 99", "burden", "99", ""),
        ('source = "own"', 'steps = "none"', "steps", "not known", ""),
        ('title = "my reaction"\n', "", "title", "", ""),
    ],
)
def test_a_faulty_rule_is_named(tmp_path: Path, old: str, new: str, key: str, part: str, remedy: str) -> None:
    assert old in RULE
    with pytest.raises(LibraryError) as caught:
        load(tmp_path, RULE.replace(old, new))
    fault = caught.value
    assert "reactions.toml" in fault.place
    assert key in fault.place or key in fault.what
    assert part in fault.what
    assert remedy in fault.remedy


def test_a_sound_rule_is_laid_over_the_shipped_ones(tmp_path: Path) -> None:
    (tmp_path / "reactions.toml").write_text(RULE + JOINING, encoding="utf-8")
    own = load_reactions(library().substituents, overlay=tmp_path)
    assert len(own.reactions) == len(book().reactions) + 1
    assert {"mine"} == {rule.name for rule in own.reactions} - {rule.name for rule in book().reactions}


@pytest.mark.parametrize(
    ("old", "new", "part", "remedy"),
    [
        ('core = "phenol"', 'core = "phenl"', "unknown core 'phenl'", "phenol"),
        ('"2" = "2"', '"9" = "2"', "the core '4-arylazophenol' has no open position 9", "2'"),
        ('"2" = "2"', '"2" = "7"', "the half has no open position 7", "6"),
        ('core = "phenol", ', "", "a core or a template", "one of the two"),
        ("first =", "twin =", "a twin needs a half before it", "first half"),
        ('{ "2" = "2" }', '{ "2" = "2" }, free = ["8"]', "the half has no open position 8", "6"),
    ],
)
def test_an_impossible_assembly_is_named(tmp_path: Path, old: str, new: str, part: str, remedy: str) -> None:
    assert old in JOINING
    (tmp_path / "reactions.toml").write_text(JOINING.replace(old, new), encoding="utf-8")
    own = load_reactions(library().substituents, overlay=tmp_path)
    joining = next(j for j in own.joinings if j.name == "mine")
    with pytest.raises(LibraryError) as caught:
        check_halves(workshop((), (), own), joining, library().cores["4-arylazophenol"])
    assert "reactions.toml" in caught.value.place
    assert "4-arylazophenol" in caught.value.place
    assert part in caught.value.what
    assert remedy in caught.value.remedy


def test_the_shipped_joinings_fit_their_cores() -> None:
    bench = workshop((), ())
    checked = 0
    for joining in book().joinings:
        for name in joining.cores:
            check_halves(bench, joining, library().cores[name])
            checked += 1
    assert checked > 20


def test_every_source_resolves_and_every_role_is_used() -> None:
    rules = (*book().reactions, *book().joinings, *book().protections)
    assert {rule.source for rule in rules} <= set(library().sources)
    assert len(book().reactions) >= 60


def test_structures_that_rules_name_can_be_read() -> None:
    spelled = {canonical_smiles(s) for rule in book().reactions for s in rule.gives.values() if s}
    shelf = {item.smiles for item in shipped_stock(canonical_smiles)}
    assert len(spelled & shelf) > len(spelled) // 2


def test_nothing_is_free() -> None:
    """No step costs nothing, but for seeing a core as another one, and that never leads back."""
    free = [joining for joining in book().joinings if joining.steps == 0]
    seen_as = {
        core: {half.core for half in halves} for joining in free for core, halves in joining.cores.items()
    }
    assert seen_as
    assert not {core for halves in seen_as.values() for core in halves} & set(seen_as)
