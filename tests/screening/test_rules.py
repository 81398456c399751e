"""Do the rules of caution say what they should, and are slips in a user's rules named?"""

from __future__ import annotations

from pathlib import Path

import pytest

from tuner.errors import BriefError, LibraryError, StructureError
from tuner.library import load_library
from tuner.screening.records import SEVERITIES, WITHHOLD
from tuner.screening.rules import ENERGETIC, load_rules
from tuner.screening.screen import flag_names, require_known_flags, screen
from tuner.structure.molecule import canonical_smiles, read_smarts

LIBRARY = load_library()
RULES = load_rules(LIBRARY)


@pytest.mark.parametrize(
    ("smiles", "rule"),
    [
        ("Oc1ccc([N+](=O)[O-])cc1[N+](=O)[O-]", "dinitrophenol"),
        ("Oc1c([N+](=O)[O-])cccc1[N+](=O)[O-]", "dinitrophenol"),
        ("Nc1ccc(-c2ccc(N)cc2)cc1", "benzidine"),
        ("Nc1ccc(-c2ccccc2)cc1", "4-aminobiphenyl"),
        ("Nc1ccc2ccccc2c1", "2-naphthylamine"),
        ("Nc1ccc(N)cc1", "1,4-phenylenediamine"),
        ("CN(C)c1ccc(N)cc1", "1,4-phenylenediamine"),
        ("Nc1ccc(O)cc1", "aminophenol"),
        ("Oc1ccc(O)cc1", "hydroquinone"),
        ("CN(N=O)c1ccccc1", "nitrosamine"),
        ("CNc1ccc(O)cc1", "nitrosatable amine"),
        ("O=C=Nc1ccc(O)cc1", "isocyanate"),
        ("O=C(Cl)c1ccc(O)cc1", "acyl halide"),
        ("OCCN(CCCl)c1ccccc1", "nitrogen mustard"),
        ("Oc1ccc(CBr)cc1", "alkyl halide"),
        ("Oc1c(Cl)cc(Cl)cc1Cl", "polychlorophenol"),
        ("CC(C)(c1ccc(O)cc1)c1ccc(O)cc1", "alkylphenol"),
        ("Oc1ccc(C2(c3ccc(O)cc3)OC(=O)c3ccccc32)cc1", "phthalein"),
        ("CN(C)c1ccc(N=Nc2ccccc2)cc1", "aminoazobenzene"),
        ("Oc1ccc(C(F)(F)F)cc1", "perfluoroalkyl"),
        ("Oc1ccc(C(F)F)cc1O", "hydroquinone"),
        ("C=CS(=O)(=O)c1ccc(O)cc1", "vinyl sulfone"),
    ],
)
def test_rule_applies(smiles: str, rule: str) -> None:
    assert rule in screen([smiles], LIBRARY)[0].names


@pytest.mark.parametrize(
    ("smiles", "rule"),
    [
        ("Oc1ccc([N+](=O)[O-])cc1", "dinitro"),
        ("CN(C)c1ccc(N=Nc2ccc(S(=O)(=O)O)cc2)cc1", "aminoazobenzene"),  # methyl orange: sulfonated
        ("CC(=O)Nc1ccc(O)cc1", "aminophenol"),  # amide
        ("O=C1OC2(c3ccc(O)cc3Oc3cc(O)ccc32)c2ccccc21", "phthalein"),  # fluorescein is none
        ("Oc1ccc(C(F)F)cc1", "perfluoroalkyl"),
        ("Nc1ccc(S(=O)(=O)O)cc1", "small aromatic amine"),
        ("Oc1cccc(O)c1", "hydroquinone"),  # resorcinol gives no quinone
        ("Nc1ccc([N+](=O)[O-])cc1", "1,4-phenylenediamine"),  # a nitro nitrogen is no amino nitrogen
        ("O=[N+]([O-])c1ccc(N=Nc2ccccc2)cc1", "aminoazobenzene"),
        # phenol red is drawn as a sultone, which alkylates nothing
        ("O=S1(=O)OC(c2ccc(O)cc2)(c2ccc(O)cc2)c2ccccc21", "sulfonate ester"),
    ],
)
def test_rule_does_not_apply(smiles: str, rule: str) -> None:
    assert rule not in screen([smiles], LIBRARY)[0].names


def test_order_of_input_is_kept_and_most_serious_flag_comes_first() -> None:
    azide, plain = screen(["Nc1ccc(N=[N+]=[N-])cc1", "O=Cc1ccc(O)cc1"], LIBRARY)
    assert azide.flags[0].severity == WITHHOLD
    assert azide.withheld is True
    assert plain.flags == ()
    assert plain.cautions == ""
    ranks = [SEVERITIES.index(flag.severity) for flag in azide.flags]
    assert ranks == sorted(ranks)


def test_unreadable_structure_is_an_error() -> None:
    with pytest.raises(StructureError):
        screen(["Oc1ccccc"], LIBRARY)


def test_every_pattern_can_be_read_and_every_source_resolves() -> None:
    patterns = [pattern for rule in RULES.rules for pattern in (*rule.smarts, *rule.unless)]
    assert all(read_smarts(pattern).GetNumAtoms() > 0 for pattern in patterns)
    cited = [rule.flag.source for rule in RULES.rules] + [RULES.oxygen.flag.source]
    assert all(LIBRARY.reference(citation) for citation in cited)


def test_words_are_short_and_one_clause_each() -> None:
    # 110: one line of a terminal table; a semicolon would run two flags of a cell together
    words = [rule.flag.words for rule in RULES.rules]
    assert [w for w in words if len(w) > 110 or ";" in w or w.endswith(".")] == []


def test_only_energetic_rules_withhold() -> None:
    assert {rule.flag.kind for rule in RULES.withholding} == {ENERGETIC}


def test_hazard_tags_of_the_groups_are_flags_that_exist() -> None:
    known = set(flag_names(LIBRARY))
    tags = {tag for group in LIBRARY.substituents.values() for tag in group.hazards}
    assert tags <= known


def own_folder(tmp_path: Path, text: str) -> Path:
    own = tmp_path / "own"
    own.mkdir()
    (own / "hazards.toml").write_text(text)
    return own


def test_a_brief_may_name_only_flags_that_exist() -> None:
    require_known_flags(["carcinogenic", "listed amine", "dinitrophenol"], LIBRARY)
    with pytest.raises(BriefError, match='no flag "carcinogen"; did you mean "carcinogenic"'):
        require_known_flags(["carcinogen"], LIBRARY)


SOUND = '[rule."blue"]\nclass = "mine"\nseverity = "warn"\nwords = "not in our house"\nsmarts = ["[Br]"]\n'


def test_users_own_rule(tmp_path: Path) -> None:
    library = load_library(own_folder(tmp_path, SOUND))
    assert "blue" in screen(["Oc1ccc(Br)cc1"], library)[0].names
    assert {"blue", "mine"} <= set(flag_names(library))
    assert "blue" not in flag_names(LIBRARY)


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('"blue"', '"azide"', "withholds energetic compounds and cannot be replaced"),
        ('["[Br]"]', "[]", "the rule has no pattern"),
        ('"warn"', '"wran"', 'did you mean "warn"'),
        ("words", "word", 'did you mean "words"'),
        ('words = "not in our house"\n', "", "the key is missing"),
        ('class = "mine"', 'class = "mine"\nsource = "Nobody1900"', 'there is no source "Nobody1900"'),
        ('class = "mine"', 'class = "mine"\nat_least = 0', "between 1 and 99"),
    ],
)
def test_slips_in_a_users_rule(tmp_path: Path, old: str, new: str, said: str) -> None:
    library = load_library(own_folder(tmp_path, SOUND.replace(old, new)))
    with pytest.raises(LibraryError) as caught:
        load_rules(library)
    assert said in caught.value.text
    assert "hazards.toml" in caught.value.text


def test_the_listed_amines_are_twenty_two_and_canonical() -> None:
    assert [amine.number for amine in RULES.amines] == list(range(1, 23))
    assert all(canonical_smiles(amine.smiles) == amine.smiles for amine in RULES.amines)
