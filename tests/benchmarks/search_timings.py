"""How fast is the search, as ratios against stated alternatives in the same run?

Prints a table and, with `--write`, keeps it in `tests/benchmarks/results.md`:

    python -m tests.benchmarks.search_timings --write

The alternative is the loop that a chemist would script: for each analog parse its SMILES, write it
canonically, take molar mass, calculated logP and polar surface, add up a pKa from a dictionary.
"""

from __future__ import annotations

import platform
import resource
import sys
from dataclasses import dataclass
from datetime import date
from os import cpu_count
from pathlib import Path
from time import perf_counter

import numpy as np

from tests.search.synthetic import large_tables
from tuner.search.blocks import BlockPlan
from tuner.search.certified import search_certified
from tuner.search.evolve import search_evolutionary
from tuner.search.exact import Search, search_exact
from tuner.search.hypervolume import hypervolume, usual_box
from tuner.search.tables import PKA_UNIT, Goal

RESULTS = Path(__file__).parent / "results.md"
GOAL = Goal(7.5, 0.2, max_steps=5)
HUNDREDTH = round(0.01 / PKA_UNIT)
LOOPED = 3000


@dataclass(frozen=True)
class Line:
    """One line of the table: what was measured, how large, the figure, and what must be reached."""

    what: str
    size: str
    figure: str
    wanted: str
    reached: bool


def loop_rate() -> float:
    """Analogs per second of the molecule-by-molecule loop."""
    from rdkit import Chem
    from rdkit.Chem import Crippen, Descriptors, rdMolDescriptors

    sigma = {
        "C": -0.07,
        "Cl": 0.37,
        "Br": 0.39,
        "F": 0.34,
        "OC": 0.12,
        "C#N": 0.56,
        "C(C)=O": 0.38,
        "I": 0.35,
    }
    names = sorted(sigma)
    rng = np.random.default_rng(1)
    picked = rng.integers(0, len(names), (LOOPED, 2))
    start = perf_counter()
    for a, b in picked:
        first, second = names[a], names[b]
        mol = Chem.MolFromSmiles(f"Oc1cc({first})c([N+](=O)[O-])cc1{second}")
        Chem.MolToSmiles(mol)
        Descriptors.MolWt(mol), Crippen.MolLogP(mol), rdMolDescriptors.CalcTPSA(mol)
        abs(7.15 - 2.2 * (sigma[first] + sigma[second]) - 6.4)
    return LOOPED / (perf_counter() - start)


def evaluation_rate(seconds: float = 2.0) -> float:
    """Analogs per second of full evaluation (pKa', error, hit probability, steps, mass, offset) on all
    cores.
    """
    from concurrent.futures import ThreadPoolExecutor

    plan = BlockPlan(large_tables(5, 60), 2**18)
    prefixes = plan.prefixes(np.arange(plan.count)).tolist()
    cores = cpu_count() or 1
    plan.evaluate(prefixes[0], GOAL)
    start, done = perf_counter(), 0
    with ThreadPoolExecutor(cores) as pool:
        while perf_counter() - start < seconds:
            for _ in pool.map(lambda p: plan.evaluate(p, GOAL).hit.size, prefixes[done : done + 4 * cores]):
                done += 1
    return done * plan.inner_size / (perf_counter() - start)


def speed_lines() -> list[Line]:
    """Evaluation against the loop."""
    loop, rate = loop_rate(), evaluation_rate()
    ratio = rate / loop
    return [
        Line("molecule-by-molecule loop", f"{LOOPED:,} analogs", f"{loop:,.0f} per second", "", True),
        Line(
            "full evaluation by broadcasting",
            "7.8e8 analogs",
            f"{rate / 1e6:.0f} million per second",
            "20 million per second",
            rate >= 20e6,
        ),
        Line("the same, ratio to the loop", "", f"{ratio:,.0f} times", "2,000 times", ratio >= 2000.0),
    ]


def exact_line() -> Line:
    """Going through a space of 10^9."""
    tables = large_tables(5, 63)
    start = perf_counter()
    found = search_exact(Search((tables,), GOAL, 200))
    seconds = perf_counter() - start
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 2**20
    figure = f"{seconds:.1f} s, {memory:.2f} GiB, front of {len(found.front)}"
    return Line(
        "exact front and best 200", f"{tables.size:.2g}", figure, "30 s, 2 GB", seconds < 30 and memory < 1.86
    )


def certified_lines() -> list[Line]:
    """Bounding over growing spaces: time and prefixes bounded per (positions x choices)."""
    lines = []
    for positions, choices, classes in ((5, 63, 6), (6, 60, 6), (6, 100, 6), (8, 75, 4), (10, 100, 3)):
        tables = large_tables(positions, choices, classes=classes)
        bounded = [0]

        def note(stage: str, done: int, total: int, kept: list[int] = bounded) -> None:
            kept[0] = done

        start = perf_counter()
        search_certified(Search((tables,), GOAL, 200, HUNDREDTH), progress=note)
        seconds = perf_counter() - start
        each = bounded[0] / (positions * choices)
        figure = f"{seconds:.1f} s, {bounded[0]:.2g} prefixes bounded, {each:,.0f} per position and choice"
        size = f"{positions} x {choices}: {float(tables.size):.1e}"
        lines.append(Line("certified front (0.01 pKa) and best 200", size, figure, "60 s", seconds < 60.0))
    return lines


def evolution_line() -> Line:
    """Evolution against the exact hypervolume, not seeded."""
    tables = large_tables(5, 40)
    box = usual_box(GOAL, 139.0, 500.0)
    best = hypervolume(search_exact(Search((tables,), GOAL, 1)).front, None, box)
    found = search_evolutionary((tables,), GOAL, box)
    share, spent = found.hypervolumes[-1] / best, found.evaluations / tables.size
    figure = f"{100 * share:.2f} % of the exact hypervolume with {100 * spent:.4f} % of the evaluations"
    return Line("evolution", f"{tables.size:.2g}", figure, "99 % with 1 %", share >= 0.99 and spent < 0.01)


def measure() -> list[Line]:
    """Every line of the table."""
    return [*speed_lines(), exact_line(), *certified_lines(), evolution_line()]


def as_table(lines: list[Line]) -> str:
    """The lines as a table in Markdown, with machine and date."""
    rows = ["| measured | space | figure | wanted | reached |", "|---|---|---|---|---|"]
    rows += [
        f"| {n.what} | {n.size} | {n.figure} | {n.wanted} | {'yes' if n.reached else 'no'} |" for n in lines
    ]
    machine = f"{cpu_count()} cores, {platform.machine()}, Python {platform.python_version()}"
    command = "python -m tests.benchmarks.search_timings --write"
    head = [
        "# Timings of the search",
        "",
        f"Written by `{command}` on {date.today():%Y-%m-%d}; {machine}.",
        "",
    ]
    note = "The spaces are random tables of realistic proportions (tests/search/synthetic.py)."
    return "\n".join([*head, note, "", *rows, ""])


def main() -> None:
    """Measure, print, and keep the table if asked."""
    table = as_table(measure())
    print(table)
    if "--write" in sys.argv[1:]:
        RESULTS.write_text(table, encoding="utf-8")


if __name__ == "__main__":
    main()
