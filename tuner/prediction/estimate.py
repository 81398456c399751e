"""Which constants does a group have that no table lists?

Rules, first that applies:

1. A tabulated group is taken as it is.
2. A saturated carbon: methyl plus the field effects of what it carries, attenuated (0.43 towards meta, 0.62
   towards para; a charge that is further away falls off more slowly than a dipole).
3. An aromatic ring: the bare ring plus a share of the constants of what it carries; a ring that is aromatic
   only with what it carries (pyridone, chromone) is taken blindly, with a very wide error.
4. Anything else: the nearest tabulated relative, found by simplifying the group's far end step by step (a
   chain to methyl, a substituted ring to the bare ring), plus a share of the difference between what was
   there and what was put instead.
5. No relative in the table: the field effect of the entry atom's neighbours alone, with a very wide error.

The shares were set by eye on tabulated pairs (CH2Cl, CH2CN, COCF3, OCF3, SCF3, SO2CF3, 4-nitrophenyl,
4-nitrophenylazo, 4-nitrostyryl, 2-nitrovinyl); common practice, no source. Every estimate carries a wider
error and says so.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache
from math import hypot, nan

from tuner.library.catalogue import Library
from tuner.library.records import Substituent, Value
from tuner.structure.anatomy import Anatomy, Branch, anatomy, rebuild
from tuner.structure.groups import HYDROGEN_GROUP, canonical_group

METHYL, PHENYL, BARE_HYDROGEN = "*C", "*c1ccccc1", HYDROGEN_GROUP
DOUBLY_BOUND = "*="
SOURCE = "estimate:analogs"

CARBON_META, CARBON_PARA = 0.43, 0.62  # share of a field effect through one saturated carbon
CHARGE_THROUGH_CARBON = 0.70  # the same for a charge, which acts through space as well
LATER_CHARGE = 0.80
RING_META, RING_PARA, RING_MINUS = 0.25, 0.32, 0.30  # share of a constant through a benzene ring
RING_FAR = 0.20
LINK = {"O": 0.60, "S": 0.50, "N": 0.50, "C": 0.40, "P": 0.40, "Si": 0.40, "B": 0.40, "Se": 0.50, "As": 0.40}
DOUBLE_META, DOUBLE_PARA, DOUBLE_MINUS = 0.40, 0.40, 0.63  # through C=C, N=N, C=N
PARA_METHYL, ORTHO_METHYL, ORTHO_OVER_PARA, ORTHO_CHAIN_SD = -0.17, -0.13, 1.5, 0.2
PULL = 0.3  # sigma-para-minus above sigma-para by this much: between vinyl (0.2) and 2-acylvinyl (0.4)
BASE_SD, RELATIVE_SD, BLIND_SD = 0.06, 0.35, 0.30
MOST_STEPS = 12  # of simplification; chains longer than this do not change any more


@dataclass(frozen=True, slots=True)
class Effect:
    """The four constants that an estimate works with (dimensionless), and their common standard error."""

    meta: float
    para: float
    minus: float
    field: float
    sd: float

    def plus(self, other: Effect, meta: float, para: float, minus: float) -> Effect:
        """This effect with a share of another added."""
        share = Effect(meta * other.meta, para * other.para, minus * other.minus, meta * other.field, 0.0)
        widen = RELATIVE_SD * max(abs(share.meta), abs(share.para), abs(share.minus))
        return Effect(
            self.meta + share.meta,
            self.para + share.para,
            self.minus + share.minus,
            self.field + share.field,
            hypot(self.sd, widen),
        )

    def minus_effect(self, other: Effect) -> Effect:
        """Difference of two effects."""
        return Effect(
            self.meta - other.meta,
            self.para - other.para,
            self.minus - other.minus,
            self.field - other.field,
            0.0,
        )


NO_EFFECT = Effect(0.0, 0.0, 0.0, 0.0, 0.0)


@dataclass(frozen=True, slots=True)
class _Estimate:
    """An effect, the tabulated relative it was built on ("" for none), and the bulk class."""

    effect: Effect
    relative: str
    bulk: int


def effect_of(group: Substituent) -> Effect:
    """The effect of a tabulated group; a missing constant is filled from the others."""
    meta = _first(group.sigma_meta.value, group.field_effect, 0.0)
    para = _first(group.sigma_para.value, meta)
    minus = _first(group.sigma_para_minus.value, para)
    return Effect(meta, para, minus, _first(group.field_effect, meta), _first(group.sigma_meta.sd, BASE_SD))


def _first(*values: float) -> float:
    """The first number that is none of the missing ones."""
    return next((v for v in values if v == v), nan)


class Estimator:
    """Estimates constants of groups from a library's table; results are kept."""

    def __init__(self, library: Library) -> None:
        self._library = library
        self._estimate: Callable[[str], _Estimate] = lru_cache(maxsize=8192)(self._work_out)

    def group(self, smiles: str) -> tuple[Substituent, bool]:
        """The group with this `*...` SMILES and whether it had to be estimated.

        Raises
        ------
        StructureError
            Not a group.
        """
        text = canonical_group(smiles)
        found = self._library.find_by_smiles(text)
        if found is not None:
            return found, False
        return self._record(text), True

    def field(self, smiles: str) -> float:
        """Field effect of a group (dimensionless)."""
        return self._estimate(canonical_group(smiles)).effect.field

    def relative_field(self, smiles: str) -> float:
        """Field effect (dimensionless) of the tabulated relative that a group's estimate is built on; its
        own where there is none.
        """
        made = self._estimate(canonical_group(smiles))
        relative = self._library.find_by_smiles(made.relative) if made.relative else None
        return effect_of(relative).field if relative is not None else made.effect.field

    def _record(self, text: str) -> Substituent:
        """An estimate as a library record."""
        made = self._estimate(text)
        relative = self._library.find_by_smiles(made.relative) if made.relative else None
        built = anatomy(text)
        effect, sd = made.effect, max(made.effect.sd, BASE_SD)
        basis = (
            f"estimated, built on {relative.short}"
            if relative is not None
            else "estimated, no relative in the table"
        )
        return Substituent(
            name=text,
            short=_short_name(text),
            smiles=text,
            family="estimated",
            sigma_meta=Value(effect.meta, sd),
            sigma_para=Value(effect.para, 1.3 * sd),
            sigma_para_minus=Value(effect.minus, 1.6 * sd),
            sigma_ortho_phenol=_ortho_of_charged_chain(built, effect),
            sigma_ortho_aniline=_ortho_of_charged_chain(built, effect),
            field_effect=effect.field,
            resonance=effect.para - effect.field,
            bulk=made.bulk,
            para_acceptor=bool(relative and relative.para_acceptor) or _pulls_through(built, effect),
            twistable=bool(relative and relative.twistable),
            hbond_acceptor=bool(relative and relative.hbond_acceptor),
            hbond_donor=bool(relative and relative.hbond_donor),
            charge=built.charge,
            ionises="",
            other_form="",
            hazards=(),
            source=SOURCE,
            note=basis,
        )

    def _work_out(self, text: str) -> _Estimate:
        """Rules 1 to 5 on a canonical group."""
        found = self._library.find_by_smiles(text)
        if found is not None:
            return _Estimate(effect_of(found), text, found.bulk)
        built = anatomy(text)
        if built.symbol == "H":
            return _Estimate(NO_EFFECT, text, 0)
        if built.ring or built.on_ring:
            return self._ring(built)
        if built.symbol == "C" and built.entry_charge == 0 and all(b.order == 1 for b in built.branches):
            return self._saturated(built)
        return self._relative(built)

    def _saturated(self, built: Anatomy) -> _Estimate:
        """Rule 2."""
        methyl = self._estimate(METHYL).effect
        meta, para, sd = methyl.meta, methyl.para, BASE_SD
        for branch in built.branches:
            inner = self._estimate(branch.smiles)
            far = anatomy(branch.smiles)
            charged = far.charge != 0 and far.symbol == "C" and far.entry_charge == 0
            share = LATER_CHARGE / CARBON_META if charged else 1.0
            step = inner.effect.field * share
            meta += CARBON_META * step
            para += CARBON_PARA * step if not charged else CARBON_META * step
            sd = hypot(sd, RELATIVE_SD * CARBON_META * abs(step))
        field = (meta - 0.37 * para) / 0.63  # from sigma_m = F + 0.37 R and sigma_p = F + R
        return _Estimate(Effect(meta, para, para, field, sd), METHYL, max(1, len(built.branches)))

    def _ring(self, built: Anatomy) -> _Estimate:
        """Rule 3."""
        bare = self._library.find_by_smiles(built.ring)
        if bare is None:
            wide = 0.5 if built.charge > 0 else 0.15
            base, relative = Effect(wide, wide, 2 * wide, wide, BLIND_SD), ""
        else:
            base, relative = effect_of(bare), built.ring
        for relation, smiles in built.on_ring:
            if smiles.startswith(DOUBLY_BOUND):  # part of what makes the ring aromatic: in the blind base
                continue
            inner = self._estimate(smiles).effect
            if relation == "para":
                base = base.plus(inner, RING_META, RING_PARA, RING_MINUS)
            elif relation in ("meta", "ortho"):
                level = Effect(inner.meta, inner.meta, inner.meta, inner.field, inner.sd)
                base = base.plus(level, RING_META, RING_META, RING_META)
            else:
                level = Effect(inner.meta, inner.para, inner.para, inner.field, inner.sd)
                base = base.plus(level, RING_FAR, RING_FAR, RING_FAR)
        base = Effect(base.meta, base.para, base.minus, base.field, hypot(base.sd, BASE_SD))
        return _Estimate(base, relative, 2)

    def _relative(self, built: Anatomy) -> _Estimate:
        """Rule 4, falling back on rule 5."""
        branches = built.branches
        for _ in range(MOST_STEPS):
            simpler = tuple(Branch(b.order, self._simplify(b)) for b in branches)
            if simpler == branches:
                break
            branches = simpler
            text = rebuild(built.entry, branches)
            found = self._library.find_by_smiles(text) if text else None
            if found is not None:
                effect = self._corrected(effect_of(found), built, branches)
                return _Estimate(
                    effect, text, max(found.bulk, min(3, sum(b.order == 1 for b in built.branches)))
                )
        return self._blind(built)

    def _corrected(self, base: Effect, built: Anatomy, put: tuple[Branch, ...]) -> Effect:
        """A relative's effect plus a share of what differs at each branch."""
        for own, other in zip(built.branches, put, strict=True):
            if own == other:
                continue
            if own.order == 1:
                share = LINK.get(built.symbol, 0.4)
                inner, outer = self._estimate(own.smiles).effect, self._estimate(other.smiles).effect
                base = base.plus(inner.minus_effect(outer), share, share, share)
            else:
                for mine, theirs in self._behind(own, other):
                    inner, outer = self._estimate(mine).effect, self._estimate(theirs).effect
                    base = base.plus(inner.minus_effect(outer), DOUBLE_META, DOUBLE_PARA, DOUBLE_MINUS)
        return Effect(base.meta, base.para, base.minus, base.field, hypot(base.sd, BASE_SD))

    def _behind(self, own: Branch, other: Branch) -> list[tuple[str, str]]:
        """Pieces behind a double bond, mine and the simplified ones, side by side."""
        mine = anatomy("*" + own.smiles[2:]).branches
        theirs = anatomy("*" + other.smiles[2:]).branches
        padded = [b.smiles for b in theirs] + [BARE_HYDROGEN] * (len(mine) - len(theirs))
        return [(m.smiles, t) for m, t in zip(mine, padded, strict=False) if m.order == 1]

    def _simplify(self, branch: Branch) -> str:
        """The next simpler piece in the place of this one; the same where nothing is simpler."""
        head, text = branch.smiles[: 1 + (branch.order > 1)], "*" + branch.smiles[1 + (branch.order > 1) :]
        try:
            built = anatomy(text)
        except ValueError:
            return branch.smiles
        if built.ring or (not built.branches and built.heavy_atoms > 1):
            return head + self._simpler_ring(text, built)[1:]
        singles = [b for b in built.branches if b.order == 1]
        if branch.order == 1 and built.symbol == "C" and len(singles) == len(built.branches):
            return METHYL
        if not singles:
            return branch.smiles
        inner = tuple(Branch(b.order, self._simplify(b)) for b in built.branches)
        if inner == built.branches:
            inner = tuple(b for b in built.branches if b.order != 1)  # drop what hangs there altogether
        made = rebuild(built.entry, inner)
        return head + made[1:] if made else branch.smiles

    def _simpler_ring(self, text: str, built: Anatomy) -> str:
        """A substituted ring to the bare ring, a bare ring to phenyl, phenyl to methyl."""
        if built.ring and built.ring != text:
            return built.ring
        return METHYL if text == PHENYL else PHENYL

    def _blind(self, built: Anatomy) -> _Estimate:
        """Rule 5."""
        start = {"O": 0.30, "N": 0.15, "S": 0.25, "P": 0.2, "C": 0.15}.get(built.symbol, 0.2)
        field = start + 0.9 * built.entry_charge
        for branch in built.branches:
            if branch.order == 1:
                field += 0.4 * self._estimate(branch.smiles).effect.field
            else:
                field += 0.2
        return _Estimate(
            Effect(field, field, 1.4 * field, field, BLIND_SD), "", min(3, max(1, len(built.branches)))
        )


def _ortho_of_charged_chain(built: Anatomy, effect: Effect) -> Value:
    """Apparent ortho constant of a chain that carries a charge; unknown for every other group.

    One and a half times what the charge adds at para (ammoniomethyl, dimethylammoniomethyl, ammonioethyl).
    """
    if not built.charge or built.symbol != "C" or built.ring or any(b.order > 1 for b in built.branches):
        return Value()
    return Value(ORTHO_METHYL + ORTHO_OVER_PARA * (effect.para - PARA_METHYL), ORTHO_CHAIN_SD)


def _pulls_through(built: Anatomy, effect: Effect) -> bool:
    """Whether a chain that begins with a carbon double bond has become an acceptor by what stands behind it,
    although the relative it is built on (vinyl, say) is none: merocyanines.
    """
    doubly_bound = built.symbol == "C" and any(b.order == 2 for b in built.branches)
    return doubly_bound and effect.minus - effect.para >= PULL


def _short_name(text: str) -> str:
    """How an estimated group is shown: its SMILES without the open valence."""
    return text.removeprefix("*")
