"""What does each table of a brief say? One reader per table; each checks types, units and names."""

from __future__ import annotations

from math import inf

from tuner.brief import units
from tuner.brief.records import Groups, Limits, Medium, Ranking, Reagents, SearchPlan, Target
from tuner.brief.table import SECTIONS, BriefTable
from tuner.errors import TunerError
from tuner.library import Library
from tuner.library.checks import nearest
from tuner.library.records import HYDROGEN_SHORT, Substituent

FAMILY = "family:"
SMARTS = "smarts:"
ROLES = ("switches", "stays_off", "stays_on")
METHODS = ("auto", "exact", "certified", "evolutionary")
FLAG_ACTIONS = ("exclude", "penalise", "show")
MAX_STEPS = 30
MAX_ROWS = 5000
MAX_WORKERS = 1024
MAX_SEED = 2**32 - 1
ANY_NUMBER_OF_GROUPS = 99


def read_target(table: BriefTable, medium: Medium) -> Target:
    """`[target]`: ph and tolerance."""
    table.only(*SECTIONS["target"])
    return Target(
        ph=units.quantity(table, "ph", units.PH),
        tolerance=units.quantity(table, "tolerance", units.TOLERANCE),
        medium=medium,
    )


def read_medium(table: BriefTable, base: Medium) -> Medium:
    """`[medium]`, or the table `medium` of a further target, which changes only what it names."""
    table.only(*SECTIONS["medium"])
    cosolvent = table.text("cosolvent", base.cosolvent)
    share = units.quantity(table, "cosolvent_mass_percent", units.COSOLVENT, base.cosolvent_mass_percent)
    if cosolvent and not share:
        table.fail(f'"{cosolvent}" is named without a share', "cosolvent", "add cosolvent_mass_percent")
    if share and not cosolvent:
        table.fail("a share is given without a cosolvent", "cosolvent_mass_percent", "add cosolvent")
    return Medium(
        temperature_c=units.quantity(table, "temperature_c", units.TEMPERATURE, base.temperature_c),
        ionic_strength_m=units.quantity(
            table, "ionic_strength_m", units.IONIC_STRENGTH, base.ionic_strength_m
        ),
        cosolvent=cosolvent,
        cosolvent_mass_percent=share,
        offset=units.quantity(table, "offset", units.OFFSET, base.offset),
        offset_sd=units.quantity(table, "offset_sd", units.OFFSET_SD, base.offset_sd),
        surface_potential_mv=units.quantity(
            table, "surface_potential_mv", units.POTENTIAL, base.surface_potential_mv
        ),
    )


def read_also(table: BriefTable, base: Medium) -> Target:
    """One `[[also]]`: a further target in its own medium; the margin may be 0 where it must not switch."""
    table.only(*SECTIONS["also"])
    role = table.one_word("role", ROLES, ROLES[0])
    if role == ROLES[0]:
        tolerance = units.quantity(table, "tolerance", units.TOLERANCE)
    else:
        tolerance = units.quantity(table, "tolerance", units.MARGIN, 0.0)
    return Target(
        ph=units.quantity(table, "ph", units.PH),
        tolerance=tolerance,
        medium=read_medium(table.table("medium"), base),
        role=role,
        name=table.text("name", ""),
    )


def read_cores(table: BriefTable, library: Library) -> tuple[str, ...]:
    """`cores`: names as the library spells them, in the brief's order."""
    if not table.has("cores"):
        table.fail("the key is missing", "cores", 'it must list cores, such as ["4-nitrophenol"]')
    asked = table.names("cores")
    if not asked:
        table.fail("no core is named", "cores", nearest("", library.cores))
    found: list[str] = []
    for entry in asked:
        try:
            name = library.find_core(entry).name
        except TunerError as fault:
            table.fail(fault.what, "cores", fault.remedy)
        if name in found:
            table.fail(f'"{entry}" is the same core as "{name}"', "cores", "keep one of them")
        found.append(name)
    return tuple(found)


def read_reagents(table: BriefTable) -> Reagents:
    """`[reagents]`; names on the lists are looked up when the shelf is read."""
    table.only(*SECTIONS["reagents"])
    return Reagents(
        shelf=table.text("shelf", Reagents().shelf),
        include=table.names("include"),
        exclude=table.names("exclude"),
        switched_off=table.names("switched_off"),
    )


def read_groups(table: BriefTable, anchor: BriefTable, library: Library) -> Groups:
    """`[groups]` and `[anchor]`; names become short names, `family:` and `smarts:` stay."""
    table.only(*SECTIONS["groups"])
    anchor.only(*SECTIONS["anchor"])
    handles = _group_names(anchor, "handles", library)
    if anchor.values and not handles:
        anchor.fail("no handle is named", "handles", 'list at least one, such as ["CO2H"]')
    for entry in handles:
        if entry.startswith((FAMILY, SMARTS)) or entry == HYDROGEN_SHORT:
            anchor.fail(f'"{entry}" is no single handle', "handles", "name groups one by one")
    return Groups(
        allow=_group_names(table, "allow", library),
        forbid=_group_names(table, "forbid", library),
        require=_group_names(table, "require", library),
        anchors=handles,
    )


def _group_names(table: BriefTable, key: str, library: Library) -> tuple[str, ...]:
    """A list of groups: each a known name, `family:NAME` or `smarts:PATTERN`."""
    found: list[str] = []
    for entry in table.names(key):
        name = _group_name(table, key, entry, library)
        if name in found:
            table.fail(f'"{entry}" is the same group as "{name}"', key, "keep one of them")
        found.append(name)
    return tuple(found)


def _group_name(table: BriefTable, key: str, entry: str, library: Library) -> str:
    """One entry of a list of groups."""
    if entry.startswith(SMARTS):
        if not entry.removeprefix(SMARTS).strip():
            table.fail("the pattern is empty", key, 'write it like "smarts:[N+](=O)[O-]"')
        return entry
    if entry.startswith(FAMILY):
        family = entry.removeprefix(FAMILY).strip()
        if family not in library.families():
            table.fail(f'there is no family "{family}"', key, nearest(family, library.families()))
        return FAMILY + family
    try:
        return _free_form(library.find_substituent(entry), library).short
    except TunerError as fault:
        table.fail(fault.what, key, fault.remedy)


def _free_form(group: Substituent, library: Library) -> Substituent:
    """The group as it is written in a free dye: a carboxylate is asked for as its acid."""
    other = library.substituents.get(group.other_form, group)
    return min(group, other, key=lambda form: (abs(form.charge), -form.charge))


def read_limits(table: BriefTable) -> Limits:
    """`[limits]`."""
    table.only(*SECTIONS["limits"])
    flags = table.table("flags")
    limits = Limits(
        max_steps=table.whole("max_steps", 0, MAX_STEPS, Limits().max_steps),
        max_molar_mass_g_mol=units.quantity(table, "max_molar_mass_g_mol", units.MOLAR_MASS, inf),
        min_substituents=table.whole("min_substituents", 0, ANY_NUMBER_OF_GROUPS, 0),
        max_substituents=table.whole("max_substituents", 0, ANY_NUMBER_OF_GROUPS, ANY_NUMBER_OF_GROUPS),
        min_clogp=units.quantity(table, "min_clogp", units.CLOGP, -inf),
        max_clogp=units.quantity(table, "max_clogp", units.CLOGP, inf),
        max_tpsa_a2=units.quantity(table, "max_tpsa_a2", units.TPSA, inf),
        max_pka_sd=units.quantity(table, "max_pka_sd", units.PKA_SD, inf),
        flags=tuple((flag, flags.one_word(flag, FLAG_ACTIONS, "")) for flag in flags.values),
    )
    for low, high in (("min_substituents", "max_substituents"), ("min_clogp", "max_clogp")):
        if getattr(limits, low) > getattr(limits, high):
            table.fail(f"{low} is larger than {high}", low, "nothing could pass; lower it")
    return limits


def read_ranking(table: BriefTable) -> Ranking:
    """`[ranking]`; costs are worths in hit probability, so they lie between 0 and 1."""
    table.only(*SECTIONS["ranking"])
    usual = Ranking()
    ranking = Ranking(
        step_costs=units.quantity(table, "step_costs", units.WORTH, usual.step_costs),
        hundred_g_mol_costs=units.quantity(
            table, "hundred_g_mol_costs", units.WORTH, usual.hundred_g_mol_costs
        ),
        flag_costs=units.quantity(table, "flag_costs", units.WORTH, usual.flag_costs),
        rows=table.whole("rows", 1, MAX_ROWS, usual.rows),
        diverse=table.flag("diverse", usual.diverse),
        user_objective=table.text("user_objective", ""),
        user_objective_costs=units.quantity(table, "user_objective_costs", units.WORTH, 0.0),
    )
    _check_user_objective(table, ranking)
    return ranking


def _check_user_objective(table: BriefTable, ranking: Ranking) -> None:
    """A function of the user's own needs a name like `file.py:function` and a cost, both or neither."""
    named, costs = ranking.user_objective, ranking.user_objective_costs
    if costs and not named:
        table.fail("a cost is given without a function", "user_objective_costs", "add user_objective")
    if not named:
        return
    file, _, function = named.rpartition(":")
    if not file.endswith(".py") or not function.isidentifier():
        table.fail(f'"{named}" names no function', "user_objective", 'write it like "mine.py:brightness"')
    if not (table.path.parent / file).is_file():
        table.fail(f'there is no file "{file}" beside the brief', "user_objective", "check the name")
    if not costs:
        remedy = "add user_objective_costs, what one unit of it costs in hit probability"
        table.fail("the function has no cost, so it would rank nothing", "user_objective", remedy)


def read_search(table: BriefTable) -> SearchPlan:
    """`[search]`."""
    table.only(*SECTIONS["search"])
    usual = SearchPlan()
    return SearchPlan(
        method=table.one_word("method", METHODS, usual.method),
        seed=table.whole("seed", 0, MAX_SEED, usual.seed),
        resolution_pka=units.quantity(table, "resolution_pka", units.RESOLUTION, usual.resolution_pka),
        workers=table.whole("workers", 0, MAX_WORKERS, usual.workers),
    )
