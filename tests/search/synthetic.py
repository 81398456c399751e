"""Random look-up tables of the kind that the other rooms hand to the search: small for twins, large for
timings.
"""

from __future__ import annotations

from itertools import permutations, product
from math import inf

import numpy as np

from tuner.acidity.tables import PairwiseSum
from tuner.search.space import CountLimit
from tuner.search.tables import FLAG_UNIT, MASS_UNIT, PKA_UNIT, Condition, Goal, SpaceTables, fixed_sum
from tuner.synthesis.records import NO_ROUTE, ListedPart, SplitStepTable, StepPart, StepTable, StepWay

Rng = np.random.Generator


def every_row(shape):
    """All patterns, in lexicographic order."""
    return np.array(list(product(*map(range, shape))), dtype=np.int64).reshape(-1, len(shape))


def random_group(rng: Rng, n: int) -> tuple[tuple[int, ...], ...]:
    """A small symmetry group on n positions: none, one swap, or all orders of three positions."""
    kind = int(rng.integers(3))
    if n < 2 or kind == 0:
        return (tuple(range(n)),)
    chosen = sorted(rng.choice(n, size=min(n, 3 if kind == 2 else 2), replace=False).tolist())
    group = []
    for order in permutations(chosen):
        row = list(range(n))
        for place, origin in zip(chosen, order, strict=True):
            row[place] = origin
        group.append(tuple(row))
    return tuple(sorted(group, key=lambda p: p != tuple(range(n))))


def orbits(group, n):
    """Which orbit each position belongs to."""
    return [min(p[k] for p in group) for k in range(n)]


def symmetric_sum(rng: Rng, shape, group, scale: float, base: float, grain: float = 0.0) -> PairwiseSum:
    """A random pairwise sum that the group leaves unchanged; coarse values (`grain`) make ties."""
    n = len(shape)
    orbit = orbits(group, n)

    def noise(*size):
        values = rng.normal(0, scale, size)
        return np.round(values / grain) * grain if grain else values

    by_orbit = {o: noise(shape[orbit.index(o)]) for o in sorted(set(orbit))}
    pair = {}
    for p in range(n):
        for q in range(p + 1, n):
            if rng.random() < 0.5:
                table = noise(shape[p], shape[q]) * 0.3
                for g in group:
                    a, b = g.index(p), g.index(q)
                    if a < b:
                        pair[a, b] = pair.get((a, b), 0) + table
                    else:
                        pair[b, a] = pair.get((b, a), 0) + table.T
    return PairwiseSum(base, tuple(by_orbit[o] for o in orbit), pair)


def random_steps(rng: Rng, shape, group) -> StepTable | SplitStepTable:
    """Random classes and counts, invariant under the group, some analogs without a route; at times in two
    ways of independent parts.
    """
    n = len(shape)
    if len(group) == 1 and n > 1 and rng.random() < 0.4:
        return SplitStepTable(tuple(_random_way(rng, shape) for _ in range(int(rng.integers(1, 3)))))
    orbit = orbits(group, n)
    classes = {o: rng.integers(0, 3, shape[orbit.index(o)]) for o in sorted(set(orbit))}
    counts = rng.integers(0, 5, (3,) * n).astype(np.uint8)
    counts[rng.random((3,) * n) < 0.1] = NO_ROUTE
    counts = np.min([counts.transpose(g) for g in group], axis=0)
    return StepTable(tuple(classes[o] for o in orbit), counts)


def _random_way(rng: Rng, shape) -> StepWay:
    """A constant and two parts that share out the positions."""
    order = rng.permutation(len(shape))
    cut = int(rng.integers(1, len(shape)))
    parts = []
    for positions in (order[:cut], order[cut:]):
        counts = rng.integers(0, 4, (3,) * len(positions)).astype(np.uint8)
        counts[rng.random(counts.shape) < 0.1] = NO_ROUTE
        classes = tuple(rng.integers(0, 3, shape[p]) for p in positions)
        part = StepPart(tuple(int(p) for p in positions), classes, counts)
        parts.append(_listed(part, shape) if rng.random() < 0.5 else part)
    return StepWay(int(rng.integers(0, 2)), tuple(parts))


def _listed(part: StepPart, shape) -> ListedPart:
    """The same part with its makeable patterns listed, positions in ascending order."""
    positions = tuple(sorted(part.positions))
    sizes = tuple(shape[p] for p in positions)
    rows = every_row(sizes)
    whole = np.zeros((len(rows), len(shape)), dtype=np.int64)
    whole[:, positions] = rows
    counts = part.at(whole)
    kept = counts < NO_ROUTE
    return ListedPart(positions, sizes, np.flatnonzero(kept).astype(np.int64), counts[kept])


def random_limits(rng: Rng, shape, group) -> tuple[CountLimit, ...]:
    """Zero to two counting limits that weigh symmetric positions alike."""
    orbit = orbits(group, len(shape))
    found = []
    if rng.random() < 0.5:
        weights = tuple((np.arange(k) > 0).astype(np.int64) for k in shape)
        found.append(CountLimit("substituents", weights, 0, int(rng.integers(1, len(shape) + 1))))
    if rng.random() < 0.3:
        drawn = {o: rng.integers(0, 2, shape[orbit.index(o)]) for o in sorted(set(orbit))}
        found.append(CountLimit("wanted group", tuple(drawn[o] for o in orbit), 1, len(shape)))
    return tuple(found)


def random_tables(rng: Rng, rank: int = 0, *, conditions: bool = False) -> SpaceTables:
    """One small random space with everything that can occur."""
    n = int(rng.integers(1, 5))
    group = random_group(rng, n)
    orbit = orbits(group, n)
    sizes = {o: int(rng.integers(1, 6)) for o in sorted(set(orbit))}
    shape = tuple(sizes[o] for o in orbit)
    grain = float(rng.choice([0.0, 0.25]))
    pka = symmetric_sum(rng, shape, group, 0.8, 7.0, grain)
    variance = symmetric_sum(rng, shape, group, 0.01, 0.1)
    mass = symmetric_sum(rng, shape, group, 30.0, 150.0, 10.0)
    flags = PairwiseSum(0.0, tuple((np.arange(k) % 3 == 2).astype(float) for k in shape), {})
    also = ()
    if conditions:
        unary = tuple(t * 0.95 for t in pka.unary)
        other = PairwiseSum(pka.base - 0.3, unary, {k: t * 0.95 for k, t in pka.pair.items()})
        moved = fixed_sum(other, PKA_UNIT)
        centre = round(6.7 / PKA_UNIT) if rng.random() < 0.5 else None
        high = round(7.5 / PKA_UNIT)
        also = (Condition("elsewhere", moved, fixed_sum(variance), round(6.0 / PKA_UNIT), high, centre),)
    return SpaceTables(
        name=f"core {rank}",
        rank=rank,
        shape=shape,
        pka=fixed_sum(pka, PKA_UNIT),
        variance=fixed_sum(variance),
        mass=fixed_sum(PairwiseSum(mass.base, mass.unary, {}), MASS_UNIT),
        flags=fixed_sum(flags, FLAG_UNIT),
        steps=random_steps(rng, shape, group),
        limits=random_limits(rng, shape, group),
        symmetry=group,
        conditions=also,
    )


def random_goal(rng: Rng) -> Goal:
    """A goal near the middle of `random_tables`."""
    return Goal(
        target_ph=float(rng.normal(7.0, 0.7)),
        tolerance=float(rng.choice([0.1, 0.3])),
        step_costs=float(rng.choice([0.0, 0.05])),
        hundred_g_mol_costs=float(rng.choice([0.0, 0.03])),
        max_steps=int(rng.integers(2, 6)),
        max_molar_mass_g_mol=float(rng.choice([inf, 190.0])),
        max_pka_sd=float(rng.choice([inf, 0.34])),
    )


def large_tables(
    positions: int, choices: int, seed: int = 1, *, swap: bool = True, classes: int = 6
) -> SpaceTables:
    """A space of realistic proportions: hydrogen first, groups of 15-130 g/mol, dense covariances, steps
    that grow with the number and difficulty of the groups.
    """
    rng = np.random.default_rng(seed)
    shape = (choices,) * positions
    sigma = np.concatenate(([0.0], rng.normal(0.2, 0.35, choices - 1)))
    weak = rng.uniform(0.25, 1.0, positions)
    if swap:
        weak[-1] = weak[0]
    unary = tuple(-2.2 * w * sigma for w in weak)
    pairs, spread = {}, {}
    error = np.concatenate(([0.0], rng.uniform(0.02, 0.2, choices - 1)))
    for p in range(positions):
        for q in range(p + 1, positions):
            spread[p, q] = np.outer(sigma, sigma) * 2e-3 * weak[p] * weak[q]
            if q == p + 1 or (p, q) == (0, positions - 1):
                bulky = np.concatenate(([0.0], rng.integers(0, 2, choices - 1)))
                pairs[p, q] = 0.25 * np.outer(bulky, bulky)
    kind = np.concatenate(([0], rng.integers(1, classes, choices - 1)))
    difficulty = np.concatenate(([0], rng.integers(0, 3, classes - 1)))
    total = np.zeros((classes,) * positions, dtype=np.int64)
    for p in range(positions):
        total += difficulty.reshape([-1 if d == p else 1 for d in range(positions)])
        used = (np.arange(classes) > 0).astype(np.int64)
        total += used.reshape([-1 if d == p else 1 for d in range(positions)])
    counts = np.where(total > 8, NO_ROUTE, np.maximum(total - 1, 0)).astype(np.uint8)
    mass = np.concatenate(([0.0], np.round(rng.uniform(14, 130, choices - 1), 3)))
    if swap:
        group = (tuple(range(positions)), (positions - 1, *range(1, positions - 1), 0))
        pairs = {k: t for k, t in pairs.items() if 0 not in k and positions - 1 not in k}
    else:
        group = (tuple(range(positions)),)
    return SpaceTables(
        name="large",
        rank=0,
        shape=shape,
        pka=fixed_sum(PairwiseSum(9.9, unary, pairs), PKA_UNIT),
        variance=fixed_sum(PairwiseSum(0.0064, tuple((error * w) ** 2 for w in weak), spread)),
        mass=fixed_sum(PairwiseSum(139.11, (mass,) * positions, {}), MASS_UNIT),
        flags=fixed_sum(PairwiseSum(0.0, (np.zeros(choices),) * positions, {}), FLAG_UNIT),
        steps=StepTable((kind,) * positions, counts),
        symmetry=group,
    )
