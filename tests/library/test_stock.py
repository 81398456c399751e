"""What stands on the shelf, and do include and exclude mean what a chemist writes?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.brief.records import Reagents
from tuner.errors import LibraryError, TunerError
from tuner.library import load_library
from tuner.library.folders import data_folder
from tuner.library.stock import apply_reagents, read_roles, read_shelf, shelf_names, shipped_stock
from tuner.library.tables import read_toml
from tuner.screening.rules import load_rules
from tuner.screening.screen import screen
from tuner.structure.molecule import canonical_smiles

ROLES = ("brominating", "base", "phenol")
SHELF = (
    "# a shelf\nname,smiles,roles,in_stock\nphenol,C1=CC=CC=C1O,phenol,yes\nbromine,BrBr,brominating,\n"
    "potash,O=C([O-])[O-].[K+].[K+],base,no\n"
)


def shelf(tmp_path: Path, text: str = SHELF) -> Path:
    path = tmp_path / "mine.csv"
    path.write_text(text)
    return path


def names(reagents: Reagents, base: Path) -> list[str]:
    return [item.name for item in apply_reagents(reagents, base=base, canonical=canonical_smiles)]


def test_a_shelf_is_read_and_spelled_canonically(tmp_path: Path) -> None:
    items = read_shelf(shelf(tmp_path), canonical=canonical_smiles, roles=ROLES)
    assert [(i.name, i.smiles, i.in_stock, i.row) for i in items] == [
        ("phenol", "Oc1ccccc1", True, 3),
        ("bromine", "BrBr", True, 4),
        ("potash", "O=C([O-])[O-].[K+].[K+]", False, 5),
    ]
    assert items[1].price_per_mol != items[1].price_per_mol  # an empty price is unknown, not zero


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ("C1=CC=CC=C1O", "C1=CC=CC=C1(O", ["row 3, column smiles", "cannot be read as SMILES"]),
        ("C1=CC=CC=C1O", "", ["row 3, column smiles", "the cell is empty"]),
        ("brominating", "bromating", ["row 4, column roles", 'did you mean "brominating"']),
        ("bromine,", "Phenol,", ["row 4", '"Phenol" stands already in row 3']),
        ("BrBr", "Oc1ccccc1", ["row 4", '"bromine" is the same compound as "phenol" in row 3']),
        ("phenol,yes", "phenol,maybe", ["row 3, column in_stock", "write yes or no"]),
        ("name,smiles", "name,structure", ['"structure" is not known']),
    ],
)
def test_slips_on_a_shelf(tmp_path: Path, old: str, new: str, said: list[str]) -> None:
    path = shelf(tmp_path, SHELF.replace(old, new, 1))
    with pytest.raises(TunerError) as caught:
        read_shelf(path, canonical=canonical_smiles, roles=ROLES)
    for words in ("mine.csv", *said):
        assert words in caught.value.text


def test_a_users_row_without_roles_takes_the_usual_ones(tmp_path: Path) -> None:
    items = read_shelf(
        shelf(tmp_path, "name,smiles\nbromine from the cellar,BrBr\n"), canonical=canonical_smiles
    )
    assert items[0].roles == ("brominating",)


def test_unknown_shelf_names_the_shipped_ones() -> None:
    with pytest.raises(
        LibraryError, match=r'no shelf "exmaple"; name a CSV file or a shipped shelf \(example'
    ):
        read_shelf("exmaple")


def test_out_of_stock_is_left_out_until_included(tmp_path: Path) -> None:
    shelf(tmp_path)
    assert names(Reagents("mine.csv"), tmp_path) == ["phenol", "bromine"]
    assert names(Reagents("mine.csv", include=("potash",)), tmp_path) == ["phenol", "bromine", "potash"]


@pytest.mark.parametrize("entry", ["aniline", "Aniline", "Nc1ccccc1", "C1=CC=CC=C1N"])
def test_include_by_name_or_structure(tmp_path: Path, entry: str) -> None:
    shelf(tmp_path)
    assert names(Reagents("mine.csv", include=(entry,)), tmp_path) == ["phenol", "bromine", "aniline"]


def test_include_a_compound_that_is_on_no_shelf(tmp_path: Path) -> None:
    shelf(tmp_path)
    assert (
        names(Reagents("mine.csv", include=("Oc1ccc(CCCCCCCC=O)cc1",)), tmp_path)[-1]
        == "O=CCCCCCCCc1ccc(O)cc1"
    )


@pytest.mark.parametrize("entry", ["bromine", "BrBr", "role:brominating"])
def test_exclude_by_name_structure_or_role(tmp_path: Path, entry: str) -> None:
    shelf(tmp_path)
    assert names(Reagents("mine.csv", exclude=(entry,)), tmp_path) == ["phenol"]


def test_exclude_wins_over_an_included_role(tmp_path: Path) -> None:
    shelf(tmp_path)
    left = names(Reagents("mine.csv", include=("role:iodinating",), exclude=("iodine",)), tmp_path)
    assert left == ["phenol", "bromine", "N-iodosuccinimide"]


@pytest.mark.parametrize(
    ("reagents", "said"),
    [
        (Reagents("mine.csv", include=("bormine",)), 'did you mean "bromine"'),
        (Reagents("mine.csv", exclude=("xyzzy",)), "a SMILES or role:NAME"),
        (Reagents("mine.csv", include=("role:brominatin",)), 'did you mean "brominating"'),
        (Reagents("mine.csv", include=("bromine",), exclude=("bromine",)), "both included and excluded"),
        (Reagents("mine.csv", exclude=("phenol", "bromine")), "no reagent is left"),
        (Reagents("mine.csv", exclude=("Oc1ccc(CCCCCCCC=O)cc1",)), "no reagent that is known here"),
    ],
)
def test_entries_that_mean_nothing(tmp_path: Path, reagents: Reagents, said: str) -> None:
    shelf(tmp_path)
    with pytest.raises(TunerError) as caught:
        apply_reagents(reagents, base=tmp_path, canonical=canonical_smiles)
    assert said in caught.value.text
    assert "\n" not in caught.value.text


def test_the_shipped_shelves_are_sound() -> None:
    roles = read_roles()
    assert shelf_names() == ("example", "small")
    for name in shelf_names():
        items = read_shelf(name, canonical=canonical_smiles)
        assert [i.name for i in items if canonical_smiles(i.smiles) != i.smiles] == []
        assert [i.name for i in items if not i.roles] == []
        assert {role for i in items for role in i.roles} <= set(roles)
    assert len(read_shelf("example")) >= 240


def test_the_shipped_smiles_are_written_canonically() -> None:
    for name in shelf_names():
        assert [i.smiles for i in read_shelf(name)] == [
            i.smiles for i in read_shelf(name, canonical=canonical_smiles)
        ]


def test_shipped_stock_holds_each_compound_once() -> None:
    smiles = [item.smiles for item in shipped_stock(canonical_smiles)]
    assert len(smiles) == len(set(smiles))


def test_every_bottle_that_a_reaction_names_is_on_the_example_shelf() -> None:
    table = read_toml(data_folder() / "reactions.toml").table("reaction")
    named = {
        (rule, canonical_smiles(bottle))
        for rule, reaction in table.tables().items()
        for bottle in reaction.table("gives").values.values()
        if bottle
    }
    shelf = {item.smiles for item in read_shelf("example")}
    assert sorted((rule, bottle) for rule, bottle in named if bottle not in shelf) == []


def test_no_shelf_holds_a_listed_amine_or_an_energetic_start() -> None:
    library = load_library()
    listed = {amine.smiles for amine in load_rules(library).amines}
    for name in shelf_names():
        items = read_shelf(name)
        assert [item.name for item in items if item.smiles in listed] == []
        starts = [i for i in items if {"phenol", "naphthol", "aniline", "arene", "dye"} & set(i.roles)]
        withheld = [f.smiles for f in screen([i.smiles for i in starts], library) if f.withheld]
        assert withheld == []
