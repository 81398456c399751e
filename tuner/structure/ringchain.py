"""In which ring-chain form is a triarylmethane or xanthene dye treated?

Sulfonephthaleins and phthaleins are drawn closed (sultone, lactone) or open (quinoid, with the free acid);
xanthene dyes (fluoresceins) likewise. The library's cores are written in one form each: closed for phthaleins
and sulfonephthaleins, quinoid for fluoresceins; a structure drawn the other way is redrawn, with a note.
Textbook equilibria, common practice, no single source.
"""

from __future__ import annotations

from typing import Any

from rdkit import Chem
from rdkit.Chem import rdChemReactions

Mol = Any

_QUINONE = "[C:4](=[C:5]1[#6:6]=[#6:7][#6:8](=[O:9])[#6:10]=[#6:11]1)"
_PHENOL = "[C:4]1([c:5]2[c:6][c:7][c:8]([OH:9])[c:10][c:11]2)"
_HYDROXYARYL = "[c;$(c1cc[c]([OX2H1])cc1):12]"

_FORMS = (
    (
        f"{_QUINONE}(-{_HYDROXYARYL})-[c:20][c:21]-[S:1](=[O:2])(=[O:22])[OH:3]",
        f"{_PHENOL}(-[c:12])-[c:20][c:21]-[S:1](=[O:2])(=[O:22])[O:3]1",
        "drawn open, treated as the sultone",
    ),
    (
        f"{_QUINONE}(-{_HYDROXYARYL})-[c:20][c:21]-[C:1](=[O:2])[OH:3]",
        f"{_PHENOL}(-[c:12])-[c:20][c:21]-[C:1](=[O:2])[O:3]1",
        "drawn open, treated as the lactone",
    ),
    (
        (
            "[O:1]=[C:2]1[O:3][C;X4:4]2([c:5]3[c:6][c:7][c:8]([OX2H1:9])[c:10][c:11]3[O:12]"
            "[c:13]4[c:15][c:16]([OX2H1:17])[c:18][c:19][c:14]42)[c:20][c:21]1"
        ),
        (
            "[O:1]=[C:2]([OH:3])[c:21][c:20][C:4]2=[C:5]3[C:6]=[C:7][C:8](=[O:9])[C:10]=[C:11]3[O:12]"
            "[c:13]4[c:15][c:16]([OH:17])[c:18][c:19][c:14]42"
        ),
        "drawn as the lactone, treated as the quinoid form",
    ),
)


def _rules() -> list[tuple[Any, Mol, str]]:
    """The forms as reactions, with a search pattern for a quick look, read once."""
    if not _RULES:
        for found, becomes, note in _FORMS:
            reaction = rdChemReactions.ReactionFromSmarts(f"{found}>>{becomes}")
            reaction.Initialize()
            _RULES.append((reaction, reaction.GetReactantTemplate(0), note))
    return _RULES


_RULES: list[tuple[Any, Mol, str]] = []


def usual_ring_form(mol: Mol, notes: list[str]) -> Mol:
    """Redraw phthaleins, sulfonephthaleins and fluoresceins as the library writes them; a change adds a note.

    Atoms keep their `_input` number. Where the two arms differ, the form whose SMILES comes first is taken.
    """
    for reaction, pattern, note in _rules():
        if not mol.HasSubstructMatch(pattern):
            continue
        best: tuple[str, Mol] | None = None
        for (product,) in reaction.RunReactants((mol,), 50):
            try:
                Chem.SanitizeMol(product)
            except (Chem.KekulizeException, Chem.AtomValenceException):
                continue
            spelled = Chem.MolToSmiles(product)
            if best is None or spelled < best[0]:
                best = (spelled, product)
        if best is None:
            continue
        redrawn = best[1]
        for atom in redrawn.GetAtoms():
            origin = mol.GetAtomWithIdx(atom.GetIntProp("react_atom_idx"))
            if origin.HasProp("_input"):
                atom.SetIntProp("_input", origin.GetIntProp("_input"))
        notes.append(note)
        return redrawn
    return mol
