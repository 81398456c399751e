"""Positions of cores, worked out of the structure alone; the expected relations are textbook locants."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import product

import pytest

from tuner.errors import StructureError
from tuner.library.records import Core, Position, Value
from tuner.structure.assemble import assemble
from tuner.structure.cores import prepare_core
from tuner.structure.molecule import canonical_smiles

AZO = "Oc1c([*:2])c([*:3])c(/N=N/c2c([*:12])c([*:13])c([*:14])c([*:15])c2[*:16])c([*:5])c1[*:6]"
AZO_LABELS = {12: "2'", 13: "3'", 14: "4'", 15: "5'", 16: "6'"}


def _core(smiles: str, series: str = "phenol", **more: object) -> Core:
    return Core("trial", "trial", smiles, series, **more)  # type: ignore[arg-type]


def _relations(core: Core) -> dict[str, str]:
    return {s.label: s.relation for s in prepare_core(core).slots}


def test_phenol() -> None:
    core = _core("Oc1c([*:2])c([*:3])c([*:4])c([*:5])c1[*:6]")
    assert _relations(core) == {"2": "ortho", "3": "meta", "4": "para", "5": "meta", "6": "ortho"}
    prepared = prepare_core(core)
    assert prepared.scaffold == "phenol"
    assert prepared.slot("3").neighbours == ("2", "4")
    assert prepared.symmetry == ((0, 1, 2, 3, 4), (4, 3, 2, 1, 0))


def test_aniline_with_open_nitrogen() -> None:
    core = _core("[*:7]N([*:8])c1ccc([*:4])cc1", "anilinium", labels={7: "N", 8: "N'"})
    prepared = prepare_core(core)
    assert prepared.open_labels == ("4", "N", "N'")
    assert [s.relation for s in prepared.slots] == ["para", "nitrogen", "nitrogen"]
    assert prepared.symmetry == ((0, 1, 2), (0, 2, 1))


def test_of_a_diarylamine_the_open_ring_reports() -> None:
    prepared = prepare_core(_core("[*:9]N(c1ccccc1)c1ccc([*:4])cc1", "anilinium", labels={9: "N"}))
    assert prepared.slot("4").relation == "para"
    assert prepared.slot("N'").fixed == "*c1ccccc1"


def test_view_of_a_lone_ring_has_fixed_slots() -> None:
    prepared = prepare_core(_core(AZO, labels=AZO_LABELS))
    assert prepared.scaffold == "phenol"
    assert prepared.slot("4").fixed == "*N=Nc1ccccc1"
    assert prepared.slot("4").neighbours == ("3", "5")
    assert prepared.slot("3").neighbours == ("2", "4")
    assert prepared.slot("4'").relation == "remote"
    assert (prepared.slot("4'").column, prepared.slot("3'").column) == ("para", "meta")
    assert (
        0.1 < prepared.slot("4'").transmission < 0.6
    )  # one ring through azo; measured sets lie in this range
    assert len(prepared.symmetry) == 4


def test_fixed_groups_on_nitrogen_and_old_locants() -> None:
    """4-Aminoazobenzene counted from the azo carbon: the fixed azo group gets the locant that is left."""
    core = _core("CN(C)c1c([*:3])c([*:2])c(N=Nc2ccccc2)c([*:6])c1[*:5]", "nn_dialkyl_anilinium")
    prepared = prepare_core(core)
    assert {s.label: s.fixed for s in prepared.slots if s.fixed} == {
        "1": "*N=Nc1ccccc1",
        "N": "*C",
        "N'": "*C",
    }
    assert prepared.slot("3").relation == "ortho"
    assert prepared.slot("1").relation == "para"


@pytest.mark.parametrize(
    ("smiles", "relations", "para_like"),
    [
        (  # 1-naphthol: 2, 4, 5 and 7 take the charge of the anion, 3, 6 and 8 do not
            "Oc1c([*:2])c([*:3])c([*:4])c2c([*:5])c([*:6])c([*:7])c([*:8])c12",
            {
                "2": "ortho",
                "3": "meta",
                "4": "para",
                "5": "remote",
                "6": "remote",
                "7": "remote",
                "8": "remote",
            },
            {"5", "7"},
        ),
        (  # 2-naphthol: 1, 3, 6 and 8 take it
            "Oc1c([*:1])c2c([*:8])c([*:7])c([*:6])c([*:5])c2c([*:4])c1[*:3]",
            {
                "1": "ortho",
                "3": "ortho",
                "4": "meta",
                "5": "remote",
                "6": "remote",
                "7": "remote",
                "8": "remote",
            },
            {"6", "8"},
        ),
        (  # 7-hydroxycoumarin: 3 is conjugated with the oxygen, 4 is not
            "Oc1c([*:6])c([*:5])c2c([*:4])c([*:3])c(=O)oc2c1[*:8]",
            {"3": "remote", "4": "remote", "5": "meta", "6": "ortho", "8": "ortho"},
            {"3"},
        ),
    ],
)
def test_fused_rings(smiles: str, relations: Mapping[str, str], para_like: set[str]) -> None:
    core = _core(smiles)
    prepared = prepare_core(core)
    assert prepared.scaffold == "trial"
    assert _relations(core) == relations
    assert {s.label for s in prepared.slots if s.relation == "remote" and s.column == "para"} == para_like
    assert all(0 < s.transmission < 1 for s in prepared.slots if s.relation == "remote")


def test_each_link_takes_its_share() -> None:
    def tau(bridge: str) -> float:
        return prepare_core(_core(f"Oc1ccc({bridge}c2ccc([*:4])cc2)cc1")).slot("4").transmission

    assert tau("C") < tau("O") < tau("-")
    assert tau("CC") < tau("C")
    assert tau("C(=O)N") < tau("C(=O)")
    ring = prepare_core(_core("Oc1ccc(-c2ccc(-c3ccc([*:4])cc3)cc2)cc1")).slot("4").transmission
    assert ring < tau("-")
    meta = prepare_core(_core("Oc1cccc(-c2ccc([*:4])cc2)c1")).slot("4").transmission
    assert meta < tau("-")


def test_twin_arms_are_treated_alike() -> None:
    arms = "Oc1c([*:2])cc(C2(c3cc([*:12])c(O)cc3)OS(=O)(=O)c3ccccc32)cc1"
    core = _core(arms, labels={2: "3'", 12: "3''"}, parent_pka=Value(8.0, 0.1))
    prepared = prepare_core(core)
    assert prepared.scaffold == "trial"
    one, other = prepared.slot("3'"), prepared.slot("3''")
    assert (one.relation, one.transmission) == (other.relation, other.transmission)
    assert prepared.symmetry == ((0, 1), (1, 0))
    one_arm = prepare_core(
        _core(
            arms.replace("([*:12])", ""),
            labels={2: "3'"},
            parent_pka=Value(8.0, 0.1),
            reporting_smarts="[OX2H1]c1c([#0])cccc1",
        )
    )
    assert one_arm.slot("3'").transmission == one.transmission  # the other arm takes its share all the same


def test_twin_arms_share_what_was_given() -> None:
    arms = "Oc1c([*:2])cc(C2(c3cc([*:12])c(O)cc3)OS(=O)(=O)c3ccccc32)cc1"
    labels = {2: "3'", 12: "3''"}
    given = {"3''": Position("3''", "remote", 0.6, 0.05, "ortho", True)}
    core = _core(arms, labels=labels, parent_pka=Value(8.0, 0.1), given_positions=given)
    one, other = (prepare_core(core).slot(label) for label in ("3'", "3''"))
    assert (one.relation, one.transmission, one.column) == ("ortho", 0.6, "ortho")
    assert (other.relation, other.transmission, other.column) == ("ortho", 0.6, "ortho")
    assert one.ring != other.ring  # groups on different arms are not on one ring
    quarrel = given | {"3'": Position("3'", "ortho", 0.7, 0.05, "ortho", True)}
    with pytest.raises(StructureError, match="described differently"):
        prepare_core(_core(arms, labels=labels, parent_pka=Value(8.0, 0.1), given_positions=quarrel))


def test_symmetric_positions_of_shipped_cores_act_alike(cores: Mapping[str, Core]) -> None:
    for core in cores.values():
        prepared = prepare_core(core)
        for perm in prepared.symmetry:
            for k, label in enumerate(prepared.open_labels):
                one, other = prepared.slot(label), prepared.slot(prepared.open_labels[perm[k]])
                assert (one.relation, one.transmission, one.column) == (
                    other.relation,
                    other.transmission,
                    other.column,
                )


def test_the_author_has_the_last_word() -> None:
    given = {"4'": Position("4'", "remote", 0.45, 0.02, "para_minus", True)}
    slot = prepare_core(_core(AZO, labels=AZO_LABELS, given_positions=given)).slot("4'")
    assert (slot.transmission, slot.transmission_sd, slot.column) == (0.45, 0.02, "para_minus")


@pytest.mark.parametrize(
    ("core", "words"),
    [
        (_core("Oc1c([*:2])cccc1C("), "cannot be read as SMILES"),
        (_core("Cc1c([*:2])cccc1"), "no reporting hydroxyl"),
        (_core("Oc1c([*:2])ccc(O)c1"), "2 different groups could report"),
        (_core("Oc1c([*])cccc1"), "no number"),
        (_core("Oc1c([*:2])cccc1[*:2]"), "stands twice"),
        (
            _core("Oc1c([*:2])cccc1", given_positions={"9": Position("9", "meta")}),
            "9 are described but not open",
        ),
        (_core("Oc1c([*:2])cccc1.[Cl-]"), "one molecule"),
        (_core("Oc1ccc([*:2])s1"), "six-membered"),
        (_core("Oc1c([*:2])cccc1", reporting_smarts="[C"), "SMARTS"),
        (_core("Oc1c([*:2])cccc1C(=[*:3])C"), "one single bond"),
    ],
)
def test_bad_cores_are_named(core: Core, words: str) -> None:
    with pytest.raises(StructureError) as caught:
        prepare_core(core)
    assert words in str(caught.value)
    assert "core 'trial'" in str(caught.value)


def test_reporting_smarts_decides() -> None:
    resorcinol = "Oc1c([*:9])ccc(O)c1"
    beside = _core(resorcinol, reporting_smarts="[OX2H1]c1c([#0])cccc1")
    opposite = _core(resorcinol, reporting_smarts="[OX2H1]c1ccc([#0])cc1")
    assert prepare_core(beside).slot("9").relation == "ortho"
    assert prepare_core(opposite).slot("9").relation == "para"
    with pytest.raises(StructureError, match="no reporting"):
        prepare_core(_core(resorcinol, reporting_smarts="[OX2H1]c1c(Cl)cccc1"))


def test_shipped_cores_prepare(cores: Mapping[str, Core]) -> None:
    for core in cores.values():
        prepared = prepare_core(core)
        assert prepared.open_labels
        assert prepared.symmetry[0] == tuple(range(len(prepared.open_labels)))
        assert prepared.bare_mass_g_mol > 90


def test_symmetry_is_exactly_that_of_the_molecules() -> None:
    """Twin by brute force: patterns are images of each other if and only if they are the same molecule."""
    core = _core(AZO, labels=AZO_LABELS)
    labels = ("2", "6", "3'", "5'", "4'")
    prepared = prepare_core(core)
    all_labels = prepared.open_labels
    groups = ("*[H]", "*C", "*Cl")
    by_molecule: dict[str, set[tuple[str, ...]]] = {}
    for pattern in product(groups, repeat=len(labels)):
        smiles = assemble(core, dict(zip(labels, pattern, strict=True)))
        full = dict.fromkeys(all_labels, "*[H]") | dict(zip(labels, pattern, strict=True))
        by_molecule.setdefault(smiles, set()).add(tuple(full[label] for label in all_labels))
    for members in by_molecule.values():
        first = min(members)
        images = {tuple(first[k] for k in perm) for perm in prepared.symmetry}
        assert members == {
            i for i in images if all(i[all_labels.index(x)] == "*[H]" for x in ("3", "5", "2'", "6'"))
        }


def test_bare_core_is_what_is_weighed() -> None:
    core = _core("Oc1c([*:2])cc([N+](=O)[O-])cc1[*:6]")
    assert canonical_smiles(assemble(core, {})) == canonical_smiles("Oc1ccc([N+](=O)[O-])cc1")
    # C6H5NO3 added by hand from the standard atomic masses; 0.002 is their rounding
    assert prepare_core(core).bare_mass_g_mol == pytest.approx(139.110, abs=0.002)
