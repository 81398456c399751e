"""Which molecule is this pattern of groups on a core?

The core's SMILES is kept as a template, written from the reporting atom on; a group is written into the
place of its position as a branch, with ring-closure digits that the core does not use. One reading and one
canonical writing per molecule is all that it costs (about 0.2 ms).
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from functools import lru_cache

from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.cores import form_of
from tuner.structure.groups import HYDROGEN_GROUP, canonical_group

_FIRST_GROUP_RING = 30
"""Ring-closure numbers below belong to cores (whose drawings need fewer than thirty rings open at once)."""

_TOKEN = re.compile(r"\[[^\]]*\]|%\d\d|\d|.")
_POSITION = re.compile(r"\(\[\*:(\d+)\]\)|\[\*:(\d+)\]")


@lru_cache(maxsize=16384)
def branch_of(group: str) -> str:
    """A group as the text that replaces its position in a template: "" for hydrogen, else "-..." from its
    first atom.

    >>> branch_of("*Oc1ccccc1")
    '-Oc%30ccccc%30'
    """
    smiles = canonical_group(group)
    if smiles == HYDROGEN_GROUP:
        return ""
    mol = Chem.MolFromSmiles(smiles)
    root = next(a.GetIdx() for a in mol.GetAtoms() if a.GetAtomicNum() == 0)
    rooted = str(Chem.MolToSmiles(mol, rootedAtAtom=root))
    body = []
    # beside a metalloid the toolkit writes the open valence as `[*]`
    for token in _TOKEN.findall(rooted.removeprefix("[*]").removeprefix("*")):
        if token.isdigit() or token.startswith("%"):
            body.append(f"%{_FIRST_GROUP_RING - 1 + int(token.lstrip('%'))}")
        else:
            body.append(token)
    return "-" + "".join(body)


@lru_cache(maxsize=256)
def _pieces(template: str) -> tuple[str, ...]:
    """The template cut at its positions: text, position, text, position ... text."""
    pieces: list[str] = []
    end = 0
    for match in _POSITION.finditer(template):
        pieces += [template[end : match.start()], match.group(1) or match.group(2)]
        end = match.end()
    return (*pieces, template[end:])


def written(core: Core, groups: Mapping[str, str]) -> str:
    """The molecule as a valid but not canonical SMILES; see `assemble`."""
    form = form_of(core)
    labels = form.prepared.open_labels
    unknown = sorted(set(groups) - set(labels))
    if unknown:
        raise StructureError(
            f"position {', '.join(unknown)} is not open",
            place=f"core '{core.name}'",
            remedy=f"open positions are {', '.join(labels) or 'none'}",
        )
    pieces = _pieces(form.template)
    text = [pieces[0]]
    for position, after in zip(pieces[1::2], pieces[2::2], strict=True):
        branch = branch_of(groups.get(labels[int(position) - 1], HYDROGEN_GROUP))
        text.append(f"({branch})" if branch else "([H])")
        text.append(after)
    return "".join(text)


def assemble(core: Core, groups: Mapping[str, str]) -> str:
    """Put groups on a core.

    Parameters
    ----------
    core : Core
        A library core; its open positions are the labels of `prepare_core(core).open_labels`.
    groups : mapping label -> `*...` SMILES
        Positions that are not named hold hydrogen.

    Returns
    -------
    str
        Canonical SMILES without stereo; `dissect` on it gives the groups back (up to equal labelings).

    Raises
    ------
    StructureError
        A label that is not open, a string that is no group, or a molecule that cannot exist.

    >>> core = Core("phenol", "", "Oc1c([*:2])c([*:3])c([*:4])c([*:5])c1[*:6]", "phenol")
    >>> assemble(core, {"2": "*Cl", "4": "*[N+](=O)[O-]"})
    'O=[N+]([O-])c1ccc(O)c(Cl)c1'
    """
    text = written(core, groups)
    mol = Chem.MolFromSmiles(text)
    if mol is None:
        raise StructureError(
            f"the groups {dict(groups)} do not fit", place=f"core '{core.name}'", remedy="check their SMILES"
        )
    return str(Chem.MolToSmiles(mol, isomericSmiles=False))
