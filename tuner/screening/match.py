"""Which of the pattern rules apply to a structure?"""

from __future__ import annotations

from functools import lru_cache

from tuner.screening.rules import Rule
from tuner.structure.scan import pattern_counts


@lru_cache(maxsize=16)
def _layout(rules: tuple[Rule, ...]) -> tuple[tuple[str, ...], tuple[tuple[int, int, int], ...]]:
    """All patterns in one row; for each rule where its own begin, where `unless` begins, and the end."""
    patterns: list[str] = []
    spans: list[tuple[int, int, int]] = []
    for rule in rules:
        start = len(patterns)
        patterns += (*rule.smarts, *rule.unless)
        spans.append((start, start + len(rule.smarts), len(patterns)))
    return tuple(patterns), tuple(spans)


def applying(smiles: str, rules: tuple[Rule, ...]) -> tuple[Rule, ...]:
    """The rules that apply to a structure as written, in the order given; the structure is read once.

    Raises StructureError where the structure cannot be read.
    """
    patterns, spans = _layout(rules)
    counts = pattern_counts(smiles, patterns)
    return tuple(
        rule
        for rule, (start, middle, end) in zip(rules, spans, strict=True)
        if sum(counts[start:middle]) >= rule.at_least and not any(counts[middle:end])
    )
