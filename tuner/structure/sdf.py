"""How is a structure written for other programs?

Connection tables in the open V2000 format (CTfile), with plane coordinates, without a time stamp, so that
the same input gives the same bytes.
"""

from __future__ import annotations

from collections.abc import Mapping

from rdkit import Chem

from tuner.errors import StructureError
from tuner.library.records import Core
from tuner.structure.layout import laid_out

PROGRAM_LINE = "  " + "tuner".ljust(8) + " " * 10 + "2D"
"""Second line of a block: no initials, the program, no date, plane coordinates."""

RECORD_END = "$$$$"


def _one_line(text: str) -> str:
    """A header or data line: printable, no line breaks."""
    return " ".join("".join(c if c.isprintable() else " " for c in text).split())


def mol_block(
    smiles: str, *, title: str = "", core: Core | None = None, groups: Mapping[str, str] | None = None
) -> str:
    """Connection table of a structure, from its title line to `M  END`.

    Parameters
    ----------
    smiles : str
    title : str
        First line, at most 80 characters of it.
    core, groups :
        Lay the structure onto the drawing of this core, as in `layout.laid_out`.

    Raises
    ------
    StructureError
        The structure cannot be read.

    >>> mol_block("Oc1ccccc1", title="phenol").splitlines()[0::3][:2]
    ['phenol', '  7  7  0  0  0  0  0  0  0  0999 V2000']
    """
    text = str(Chem.MolToMolBlock(laid_out(smiles, core, groups), forceV3000=False))
    lines = text.replace("-0.0000", " 0.0000").splitlines()  # the sign of zero differs between machines
    lines[0] = _one_line(title)[:80]
    lines[1] = PROGRAM_LINE
    return "\n".join(lines) + "\n"


def sdf_record(
    smiles: str,
    properties: Mapping[str, object],
    *,
    title: str = "",
    core: Core | None = None,
    groups: Mapping[str, str] | None = None,
) -> str:
    """One record of a structure file: connection table, data items in the given order, end mark.

    Empty values are left out; line breaks in a value become spaces.

    Raises
    ------
    StructureError
        The structure cannot be read, or a data name is empty or holds `<`, `>`.
    """
    parts = [mol_block(smiles, title=title, core=core, groups=groups)]
    for name, value in properties.items():
        if not name or any(c in name for c in "<>\n"):
            raise StructureError(f"'{name}' cannot name a data item", remedy="use letters, digits and _")
        text = _one_line(str(value))
        if text:
            parts.append(f"> <{name}>\n{text}\n\n")
    return "".join(parts) + RECORD_END + "\n"
