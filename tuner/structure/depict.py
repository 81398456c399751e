"""How does a molecule, or a core with its numbered positions, look?

Scalable drawings (SVG), black lines on a transparent ground, the same bytes for the same input. Analogs can
be laid onto the drawing of their core, so that a page of them reads at a glance.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from rdkit import Chem
from rdkit.Chem.Draw import rdMolDraw2D

from tuner.library.records import Core
from tuner.structure.cores import form_of
from tuner.structure.layout import core_layout, laid_out

Mol = Any

SIZE_PX = (260, 200)
CORE_SIZE_PX = (380, 300)
_LOCANT_COLOUR = (0.0, 0.2, 0.6)
_REPORTING_COLOUR = (1.0, 0.88, 0.55)
_BOND_LENGTH_PX = 26.0


def _svg(mol: Mol, size: tuple[int, int], marked: Sequence[int] = (), title: str = "") -> str:
    """Draw a molecule that has coordinates."""
    drawer = rdMolDraw2D.MolDraw2DSVG(*size)
    options = drawer.drawOptions()
    options.useBWAtomPalette()
    options.updateAtomPalette({0: _LOCANT_COLOUR})
    options.clearBackground = False
    options.fixedBondLength = _BOND_LENGTH_PX
    options.padding = 0.04
    options.bondLineWidth = 1.6
    options.highlightRadius = 0.42
    options.prepareMolsBeforeDrawing = False
    ready = rdMolDraw2D.PrepareMolForDrawing(mol, kekulize=True, addChiralHs=False, forceCoords=False)
    drawer.DrawMolecule(
        ready,
        highlightAtoms=list(marked),
        highlightAtomColors=dict.fromkeys(marked, _REPORTING_COLOUR),
        highlightBonds=[],
    )
    drawer.FinishDrawing()
    return _tidied(str(drawer.GetDrawingText()), title)


def _tidied(svg: str, title: str) -> str:
    """One element that can stand in a page or in a file: no XML head, no comments, a title for screen
    readers."""
    start = svg.index("<svg")
    body = "\n".join(line for line in svg[start:].splitlines() if not line.startswith("<!--"))
    if title:
        safe = title.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
        at = body.index(">", body.index("<svg")) + 1
        body = f"{body[:at]}\n<title>{safe}</title>{body[at:]}"
    return body + "\n"


def draw_molecule(smiles: str, *, size: tuple[int, int] = SIZE_PX, title: str = "") -> str:
    """Drawing of any structure.

    Parameters
    ----------
    smiles : str
    size : (width, height) [px]
    title : str
        Text for screen readers; not drawn.

    Returns
    -------
    str
        One `<svg>` element with a transparent ground.

    >>> draw_molecule("Oc1ccccc1").startswith("<svg")
    True
    """
    return _svg(laid_out(smiles), size, title=title)


def draw_core(core: Core, *, size: tuple[int, int] = CORE_SIZE_PX) -> str:
    """Drawing of a core: locants at its open positions, the reporting atom on a pale disc.

    >>> svg = draw_core(Core("p", "phenol", "Oc1c([*:2])cccc1[*:6]", "phenol"))
    >>> svg.count("<svg"), "phenol" in svg
    (1, True)
    """
    form = form_of(core)
    laid, kept = core_layout(core.smiles)
    mol = Chem.RWMol(laid)
    for atom in mol.GetAtoms():
        if atom.GetAtomicNum() == 0:
            number = atom.GetAtomMapNum() or atom.GetIsotope()
            atom.SetProp("atomLabel", core.labels.get(number, str(number)))
            atom.SetAtomMapNum(0)
            atom.SetIsotope(0)
    return _svg(mol.GetMol(), size, [kept[form.reporting]], title=core.title or core.name)


def draw_analog(
    core: Core,
    smiles: str,
    *,
    groups: Mapping[str, str] | None = None,
    size: tuple[int, int] = SIZE_PX,
    title: str = "",
) -> str:
    """Drawing of an analog laid onto the drawing of its core, so that several read alike.

    Parameters
    ----------
    core : Core
    smiles : str
        The analog; where the core is not found in it, it is drawn by itself.
    groups : mapping label -> `*...`
        Which group stands where, as the table names them; without it the lowest labeling is taken.
    size, title :
        As in `draw_molecule`.
    """
    return _svg(laid_out(smiles, core, groups), size, title=title)
