"""What is drawn of each candidate? Drawings, connection tables and response curves for the report."""

from __future__ import annotations

from tuner.library import load_library
from tuner.report import Exhibit, ph_grid
from tuner.report.columns import shown_pka
from tuner.report.page import CARDS
from tuner.search.result import Candidate, DesignResult, Progress


def exhibits_of(result: DesignResult, progress: Progress) -> dict[str, Exhibit]:
    """SMILES -> exhibit: every candidate, intermediates of the first routes, and shared intermediates."""
    from tuner.structure.depict import draw_analog, draw_molecule
    from tuner.structure.sdf import mol_block

    cores = load_library(result.brief.overlay).cores

    shown: dict[str, Exhibit] = {}
    total = len(result.candidates)
    for n, candidate in enumerate(result.candidates, start=1):
        shown[candidate.smiles] = Exhibit(
            svg=draw_analog(cores[candidate.core], candidate.smiles),
            mol_block=mol_block(candidate.smiles, title=candidate.analog, core=cores[candidate.core]),
            response=_response(candidate, result.brief.target.ph),
        )
        progress("drawing", n, total)
    for smiles in _on_the_way(result):
        shown.setdefault(smiles, Exhibit(svg=draw_molecule(smiles)))
    return shown


def _response(candidate: Candidate, target_ph: float) -> tuple[float, ...]:
    """Ionised share of the reporting group at each pH of the grid."""
    import numpy as np

    from tuner.acidity.response import alpha

    grid = np.array(ph_grid(target_ph))
    return tuple(float(share) for share in alpha(grid, np.array(shown_pka(candidate))))


def _on_the_way(result: DesignResult) -> list[str]:
    """Intermediates that the page draws, each once, in order of appearance."""
    steps = [s.product for c in result.candidates[:CARDS] if c.route for s in c.route.steps]
    shared = [smiles for smiles, _ in result.campaign.shared] if result.campaign else []
    return list(dict.fromkeys([*steps, *shared]))
