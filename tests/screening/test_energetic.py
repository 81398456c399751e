"""Are energetic compounds found, by the molecule and by the sums of a search, with the same answer?"""

from __future__ import annotations

import numpy as np
import pytest

from tuner.library import load_library
from tuner.library.records import Core
from tuner.screening.energetic import energetic_weights, oxygen_balance
from tuner.screening.screen import is_energetic, screen
from tuner.structure.assemble import assemble
from tuner.structure.cores import prepare_core

LIBRARY = load_library()

NO2 = "[N+](=O)[O-]"


@pytest.mark.parametrize(
    ("smiles", "printed"),
    [
        # oxygen balances as any textbook on explosives prints them; rounded there to whole per cent
        (f"Cc1c({NO2})cc({NO2})cc1{NO2}", -74),  # 2,4,6-trinitrotoluene
        (f"Oc1c({NO2})cc({NO2})cc1{NO2}", -45),  # picric acid
        (f"O=[N+]([O-])OCC(CO{NO2})O{NO2}", 4),  # glycerol trinitrate, +3.5
        (f"C{NO2}", -39),  # nitromethane
    ],
)
def test_oxygen_balance_of_well_known_compounds(smiles: str, printed: int) -> None:
    assert oxygen_balance(smiles) == pytest.approx(
        printed, abs=0.6
    )  # half a unit of the last digit, and masses


def test_halogen_neither_burns_nor_dilutes() -> None:
    # by hand, 2,6-dibromo-4-nitrophenol C6H3Br2NO3: (12 + (3 - 2)/2 - 3) * 1600 / (297 - 160) = 111
    # half a unit: masses were rounded to whole numbers
    assert oxygen_balance(f"Oc1c(Br)cc({NO2})cc1Br") == pytest.approx(-111, abs=0.6)


@pytest.mark.parametrize(
    "smiles",
    [
        f"Oc1c({NO2})cc({NO2})cc1{NO2}",
        f"[O-]c1c({NO2})cc({NO2})cc1{NO2}",
        f"Oc1c({NO2})cc(N=Nc2ccc({NO2})cc2)cc1{NO2}",
        "Oc1ccc(N=[N+]=[N-])cc1",
        "Oc1ccc([N-][N+]#N)cc1",
        "Oc1ccc(C(C)(C)OO)cc1",
        "Oc1ccc(CC(=O)OOC(C)=O)cc1",
        f"Oc1ccc(CO{NO2})cc1",
        "Oc1ccc([N+]#N)cc1",
        f"CN({NO2})c1ccc(O)cc1",
        "O=C(N(Cl)c1ccccc1)C",
        f"Oc1ccc(C({NO2}){NO2})cc1",
        f"Oc1cc(O)c({NO2})cc1{NO2}",  # by its oxygen balance
        "Oc1ccc(-c2nnn[nH]2)cc1",
        "Oc1ccc2nonc2c1",
    ],
)
def test_energetic(smiles: str) -> None:
    assert is_energetic(smiles, LIBRARY)


# Compounds that any handbook lists as explosives, by their usual names: each must be caught.
KNOWN = {
    "TNT": f"Cc1c({NO2})cc({NO2})cc1{NO2}",
    "tetryl": f"CN({NO2})c1c({NO2})cc({NO2})cc1{NO2}",
    "TATB": f"Nc1c({NO2})c(N)c({NO2})c(N)c1{NO2}",
    "styphnic acid": f"Oc1c({NO2})cc({NO2})c(O)c1{NO2}",
    "ammonium picrate": f"[NH4+].[O-]c1c({NO2})cc({NO2})cc1{NO2}",
    "hexanitrostilbene": f"C(=Cc1c({NO2})cc({NO2})cc1{NO2})c1c({NO2})cc({NO2})cc1{NO2}",
    "dinol": f"O=C1C=C({NO2})C=C({NO2})C1=[N+]=[N-]",
    "RDX": f"C1N({NO2})CN({NO2})CN1{NO2}",
    "nitroguanidine": f"NC(=N)N{NO2}",
    "PETN": f"C(CO{NO2})(CO{NO2})(CO{NO2})CO{NO2}",
    "TATP": "CC1(C)OOC(C)(C)OOC(C)(C)OO1",
    "HMTD": "C1OOCN2COOCN1COOC2",
    "benzoyl peroxide": "O=C(OOC(=O)c1ccccc1)c1ccccc1",
    "lead azide": "[N-]=[N+]=[N-].[N-]=[N+]=[N-].[Pb+2]",
    "mercury fulminate": "[C-]#[N+][O-].[C-]#[N+][O-].[Hg+2]",
    "silver acetylide": "[C-]#[C-].[Ag+].[Ag+]",
    "benzenediazonium chloride": "N#[N+]c1ccccc1.[Cl-]",
    "nitrogen triiodide": "IN(I)I",
    "ethyl perchlorate": "CCOCl(=O)(=O)=O",
    "benzotrifuroxan": "[O-][n+]1onc2c1c1c(no[n+]1[O-])c1c2no[n+]1[O-]",
    "tetranitromethane": f"C({NO2})({NO2})({NO2}){NO2}",
}


@pytest.mark.parametrize("name", sorted(KNOWN))
def test_known_explosives_are_withheld(name: str) -> None:
    assert is_energetic(KNOWN[name], LIBRARY)


@pytest.mark.parametrize(
    "smiles",
    [
        f"Oc1ccc({NO2})cc1{NO2}",  # 2,4-dinitrophenol: flagged, sold moist, not withheld
        f"Nc1ccc({NO2})cc1{NO2}",
        f"Oc1c(Br)cc({NO2})cc1Br",
        "Oc1ccc(N=Nc2ccccc2)cc1",
        "O=Nc1ccc(O)cc1",
        "Oc1c(Br)cc(Br)cc1Br",
        "COc1ccc(O)cc1",
        "O=c1ccc2ccc(O)cc2o1",
        "Oc1ccc(-n2ccnc2)cc1",
        "Nc1ccc(S(N)(=O)=O)cc1",
    ],
)
def test_not_energetic(smiles: str) -> None:
    assert not is_energetic(smiles, LIBRARY)


GROUP_NAMES = ("H", "Me", "OMe", "Br", "NO2", "NO", "CN", "N=NPh", "CO2H", "SO3H", "OH", "NH2", "N3", "CF3")
CORES = {
    "phenol": "Oc1c([*:2])c([*:3])c([*:4])c([*:5])c1[*:6]",
    "nitrophenol": f"Oc1c([*:2])c([*:3])c({NO2})c([*:5])c1[*:6]",
    "azophenol": "Oc1c([*:2])cc(N=Nc2c([*:12])cc([*:14])cc2)cc1[*:6]",
    "aniline": "[*:1]Nc1c([*:2])cc([*:4])cc1[*:6]",
}


@pytest.mark.parametrize("name", sorted(CORES))
def test_sums_over_positions_say_the_same_as_the_molecule(name: str) -> None:
    core = Core(name, name, CORES[name], "anilinium" if name == "aniline" else "phenol")
    prepared = prepare_core(core)
    relations = [prepared.slot(label).relation for label in prepared.open_labels]
    groups = [LIBRARY.substituents[short] for short in GROUP_NAMES if short in LIBRARY.substituents]
    limits = energetic_weights(core.smiles, relations, [groups] * len(relations), LIBRARY)
    rng = np.random.default_rng(20240611)
    patterns = rng.integers(len(groups), size=(150, len(relations)))
    by_sum = [
        all(
            lim.low <= sum(int(w[k]) for w, k in zip(lim.weights, row, strict=True)) <= lim.high
            for lim in limits
        )
        for row in patterns
    ]
    analogs = [
        assemble(core, {label: groups[k].smiles for label, k in zip(prepared.open_labels, row, strict=True)})
        for row in patterns
    ]
    by_molecule = [not flags.withheld for flags in screen(analogs, LIBRARY)]
    assert by_sum == by_molecule
    assert 0 < sum(by_sum) < len(by_sum)


def test_weights_are_exact_whole_numbers_and_fit() -> None:
    groups = list(LIBRARY.substituents.values())
    for limit in energetic_weights(CORES["phenol"], ["ortho"] * 5, [groups] * 5, LIBRARY):
        assert all(weights.dtype == np.int64 for weights in limit.weights)
        largest = sum(int(np.abs(weights).max()) for weights in limit.weights) + abs(limit.low)
        assert largest < 2**62


def test_an_energetic_core_leaves_nothing() -> None:
    h = [LIBRARY.substituents["H"]]
    limits = energetic_weights("Oc1c([*:2])cc(N=[N+]=[N-])cc1", ["ortho"], [h], LIBRARY)
    assert any(int(limit.weights[0][0]) > limit.high for limit in limits)


def test_no_shipped_core_is_withheld() -> None:
    bare = {name: assemble(core, {}) for name, core in LIBRARY.cores.items()}
    assert [name for name, smiles in bare.items() if is_energetic(smiles, LIBRARY)] == []
