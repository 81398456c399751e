"""How much of a remote group's effect reaches the reporting group, where nobody has measured it?

Defaults for `Position.transmission` (tau) of positions that are not on the reporting ring; a core's author
overrides them with `given_positions`, and measurements on a core refit them.

A path from the position to the reporting ring is cut into links; tau is the product of their factors.

=============  ======  =======================================================================
link           factor  basis
=============  ======  =======================================================================
fused ring      0.50   position that the reporting group cannot conjugate with (even distance)
                0.40   position that it conjugates with (odd distance; acts with the para column);
                       both sized on the nitro-1- and -2-naphthylamines (Perrin 1965), rounded
far benzene     0.30   one ring to the next (biphenyl); estimate from the rho of biphenyl acids
azo             1.00   times the far ring: 0.30; estimate
vinylene, CH=N  0.90   estimate
ethynylene      0.85   estimate
CO              0.85   estimate
SO, SO2, S      0.90   estimate
O               0.80   estimate
NH, NR          1.00   estimate
CONH            0.50   both atoms together; estimate
CH2, CHR, CR2   0.50   estimate (a whole CH2 between chain and ring passes 0.4 to 0.5)
meta bridge     0.70   the bridge stands meta to the reporting group; estimate
N-aryl          0.90   the far ring sits on the reporting nitrogen itself; estimate
=============  ======  =======================================================================

Estimates are common practice, no source; their errors (`*_SD`) are wide on purpose.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from rdkit import Chem

Mol = Any

FUSED_EVEN = 0.50
FUSED_ODD = 0.40
FUSED_SD = 0.15
NEXT_RING = 0.30
CHAIN_START = 0.50
N_ARYL = 0.90
META_BRIDGE = 0.70
BRIDGE_SD = 0.10
AMIDE = 0.50

DOUBLE = {("N", "N"): 1.0, ("C", "C"): 0.9, ("C", "N"): 0.9}
TRIPLE = 0.85
SINGLE = {"O": 0.80, "S": 0.90, "N": 1.00, "C": 0.50, "Si": 0.50, "P": 0.60, "B": 0.60, "Se": 0.90}
CARBONYL = 0.85


def ring_systems(mol: Mol) -> dict[int, int]:
    """Atom -> number of its aromatic ring system (rings that share atoms count as one); chain atoms are
    absent."""
    systems: list[set[int]] = []
    for ring in mol.GetRingInfo().AtomRings():
        if not all(mol.GetAtomWithIdx(k).GetIsAromatic() for k in ring):
            continue
        merged = set(ring)
        for other in [s for s in systems if s & merged]:
            merged |= other
            systems.remove(other)
        systems.append(merged)
    systems.sort(key=min)
    return {atom: number for number, system in enumerate(systems) for atom in system}


def _is_carbonyl(atom: Any) -> bool:
    """Whether an atom carries =O or =S outside the path (CO, CS, SO, SO2 ...)."""
    return any(
        b.GetBondType() == Chem.BondType.DOUBLE and b.GetOtherAtom(atom).GetAtomicNum() in (8, 16)
        for b in atom.GetBonds()
    )


def _chain_factor(mol: Mol, chain: list[int]) -> float:
    """Product of the link factors of consecutive chain atoms."""
    factor = 1.0
    k = 0
    while k < len(chain):
        atom = mol.GetAtomWithIdx(chain[k])
        after = mol.GetAtomWithIdx(chain[k + 1]) if k + 1 < len(chain) else None
        kind = mol.GetBondBetweenAtoms(chain[k], chain[k + 1]).GetBondType() if after is not None else None
        if after is not None and kind == Chem.BondType.DOUBLE:
            pair = sorted((atom.GetSymbol(), after.GetSymbol()))
            factor *= DOUBLE.get((pair[0], pair[1]), 0.8)
            k += 2
        elif after is not None and kind == Chem.BondType.TRIPLE:
            factor *= TRIPLE
            k += 2
        elif (
            after is not None
            and {atom.GetSymbol(), after.GetSymbol()} == {"C", "N"}
            and (_is_carbonyl(atom) or _is_carbonyl(after))
        ):
            factor *= AMIDE
            k += 2
        else:
            carbonyl = atom.GetAtomicNum() == 6 and _is_carbonyl(atom)
            factor *= CARBONYL if carbonyl else SINGLE.get(atom.GetSymbol(), 0.5)
            k += 1
    return factor


def _odd_distance(mol: Mol, first: int, last: int) -> bool:
    """Whether two atoms are an odd number of bonds apart: then they conjugate."""
    return first != last and len(Chem.GetShortestPath(mol, first, last)) % 2 == 0


def remote_transmission(
    mol: Mol, place: int, reporting: int, ipso: int, ring: tuple[int, ...]
) -> tuple[float, float, str]:
    """Default (tau, its error, column) of a position that is not on the reporting ring.

    Parameters
    ----------
    mol : the bare core
    place : atom that carries the position
    reporting, ipso : the reporting atom and the ring atom that carries it
    ring : atoms of the reporting ring

    The column is "para" where the position conjugates towards the bridge (odd number of bonds inside its
    own ring system), "meta" otherwise.
    """
    systems = ring_systems(mol)
    home = systems.get(ipso)
    path = list(Chem.GetShortestPath(mol, place, reporting if reporting != place else ipso))
    on_chain = systems.get(place) is None
    tau = CHAIN_START if on_chain else 1.0
    sd = FUSED_SD if on_chain else BRIDGE_SD
    column = "meta"
    k = 0
    while k < len(path) and path[k] not in ring and path[k] != reporting:
        last = _segment_end(systems, path, k, ring)
        system = systems.get(path[k])
        if system is None:
            tau *= _chain_factor(mol, path[k + (on_chain and k == 0) : last + 1])
        elif system == home:
            odd = _odd_distance(mol, path[k], ipso)
            tau *= FUSED_ODD if odd else FUSED_EVEN
            sd = FUSED_SD
            column = "para" if odd and k == 0 else column
        else:
            tau *= N_ARYL if path[last + 1] == reporting else NEXT_RING
            column = "para" if k == 0 and _odd_distance(mol, path[0], path[last]) else column
        k = last + 1
    bridged = 0 < k < len(path) and systems.get(path[k - 1]) != home
    if bridged and path[k] in ring and len(Chem.GetShortestPath(mol, path[k], ipso)) == 3:
        tau *= META_BRIDGE
    return round(tau, 3), sd, column


def _segment_end(systems: Mapping[int, int], path: list[int], k: int, ring: tuple[int, ...]) -> int:
    """Last index of the stretch of a path that lies in one ring system (or on one chain) from `k` on."""
    last = k
    while (
        last + 1 < len(path)
        and systems.get(path[last + 1]) == systems.get(path[k])
        and path[last + 1] not in ring
    ):
        last += 1
    return last
