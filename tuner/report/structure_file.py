"""How do the candidates look as a structure file that other programs read?"""

from __future__ import annotations

from collections.abc import Mapping

from tuner.report.columns import COLUMNS, written
from tuner.report.records import Exhibit
from tuner.search.result import Candidate, DesignResult

END_OF_BLOCK = "M  END"
RECORD_END = "$$$$"


def candidates_sdf(result: DesignResult, exhibits: Mapping[str, Exhibit]) -> bytes:
    """One record per candidate that has a connection table: name, structure, every non-empty column as a
    data item.
    """
    records = [_record(c, exhibits[c.smiles].mol_block) for c in result.candidates if _has_block(c, exhibits)]
    return "".join(records).encode("utf-8")


def _has_block(candidate: Candidate, exhibits: Mapping[str, Exhibit]) -> bool:
    """Whether there is a structure to write."""
    return candidate.smiles in exhibits and bool(exhibits[candidate.smiles].mol_block)


def _record(candidate: Candidate, mol_block: str) -> str:
    """One record; its first line is the analog's name."""
    body = mol_block.split(END_OF_BLOCK)[0].split("\n", 1)[1]
    lines = [candidate.analog + "\n" + body + END_OF_BLOCK]
    for column in COLUMNS:
        text = " ".join(written(column, candidate).split())
        if text:
            lines.append(f"> <{column.name}>\n{text}\n")
    return "\n".join(lines) + f"\n{RECORD_END}\n"
