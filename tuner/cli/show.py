"""Command `tuner show`: what stands in the library, as tables; one entry in full."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from tuner.cli.console import LONG_LINES, facts, say, show, table
from tuner.cli.show_reactions import all_reactions, one_reaction
from tuner.errors import TunerError
from tuner.library import Library, load_library
from tuner.library.checks import nearest
from tuner.library.records import Core, Series, StockItem, Value
from tuner.report.digits import MISSING, signed


def _library(overlay: Path | None) -> Library:
    """The library; a user's own rows are checked by the chemistry toolkit, which is loaded only then."""
    if overlay is None:
        return load_library()
    from tuner.structure.own_library import load_checked_library

    return load_checked_library(overlay)


def run(kind: str, name: str, overlay: Path | None, svg: Path | None) -> None:
    """Print the table of one kind, or one entry of it."""
    library = _library(overlay)
    if svg is not None and not (kind == "cores" and name):
        raise TunerError(
            "only one core is drawn", place="--out", remedy="write tuner show cores NAME --out FILE.svg"
        )
    if kind == "cores" and name:
        _one_core(library.find_core(name), library, svg)
        return
    whole: dict[str, Callable[[Library], None]] = {
        "substituents": _substituents,
        "series": _series,
        "cores": _cores,
        "stock": _stock,
        "reactions": all_reactions,
    }
    single: dict[str, Callable[[Library, str], None]] = {
        "substituents": _one_substituent,
        "series": _one_series,
        "stock": _one_item,
        "reactions": one_reaction,
    }
    if name:
        single[kind](library, name)
    else:
        whole[kind](library)


def _number(value: Value, decimals: int = 2) -> str:
    """A constant with its error, or a dash."""
    if not value.known:
        return MISSING
    spread = f" ± {value.sd:.{decimals}f}" if value.sd == value.sd else ""
    return signed(value.value, decimals) + spread


def _substituents(library: Library) -> None:
    headings = (
        ("short", "left"),
        ("name", "left"),
        ("family", "left"),
        ("sigma meta", "right"),
        ("sigma para", "right"),
        ("sigma para-", "right"),
        ("bulk", "right"),
    )
    rows = [
        (
            g.short,
            g.name,
            g.family,
            *(_plain(v) for v in (g.sigma_meta, g.sigma_para, g.sigma_para_minus)),
            str(g.bulk),
        )
        for g in library.substituents.values()
    ]
    caption = (
        "published base constants, no unit; errors, sources and ortho values: tuner show substituents NAME"
    )
    show(table(f"{len(rows)} groups", headings, rows, caption))


def _plain(value: Value) -> str:
    """A constant without its error."""
    return signed(value.value) if value.known else MISSING


def _one_substituent(library: Library, name: str) -> None:
    g = library.find_substituent(name)
    yes = {True: "yes", False: "no"}
    facts(
        f"{g.name} ({g.short})",
        [
            ("structure", g.smiles),
            ("family", g.family),
            ("sigma meta", _number(g.sigma_meta)),
            ("sigma para", _number(g.sigma_para)),
            ("sigma para-", _number(g.sigma_para_minus)),
            ("ortho, phenols", _number(g.sigma_ortho_phenol)),
            ("ortho, anilines", _number(g.sigma_ortho_aniline)),
            ("field, resonance", f"{signed(g.field_effect)}, {signed(g.resonance)}"),
            ("bulk (0-3)", str(g.bulk)),
            ("acceptor at para", yes[g.para_acceptor]),
            ("turned by flanks", yes[g.twistable]),
            ("accepts H bond", yes[g.hbond_acceptor]),
            ("ionises as", g.ionises),
            ("other form", g.other_form),
            ("hazards", ", ".join(g.hazards)),
            ("note", g.note),
            ("source", library.reference(g.source)),
        ],
    )


def _series(library: Library) -> None:
    headings = (
        ("series", "left"),
        ("equilibrium", "left"),
        ("parent pKa", "right"),
        ("rho", "right"),
        ("enthalpy, kJ/mol", "left"),
    )
    rows = [
        (
            s.name,
            s.title,
            _number(s.parent_pka).lstrip("+"),
            _number(s.rho).lstrip("+"),
            _enthalpy(s),
        )
        for s in library.series.values()
    ]
    show(table("Reaction series", headings, rows, "pKa of 25 °C, water, zero ionic strength"))


def _enthalpy(series: Series) -> str:
    """The enthalpy regularity, in kJ/mol: intercept and slope with the pKa, and its error."""
    slope = f" {signed(series.enthalpy_slope_kj_mol)} x pKa" if series.enthalpy_slope_kj_mol else ""
    return f"{series.enthalpy_intercept_kj_mol:.1f}{slope} ± {series.enthalpy_sd_kj_mol:.1f}"


def _one_series(library: Library, name: str) -> None:
    s = library.find_series(name)
    facts(
        f"{s.title} ({s.name})",
        [
            ("pKa of parent", f"{_number(s.parent_pka).lstrip('+')} (25 °C, water, zero ionic strength)"),
            ("rho", _number(s.rho).lstrip("+")),
            ("acid charge", f"{s.acid_charge:+d}" if s.acid_charge else "0"),
            (
                "enthalpy",
                f"{_enthalpy(s)} kJ/mol",
            ),
            ("source", library.reference(s.source)),
        ],
    )


def _cores(library: Library) -> None:
    headings = (("core", "whole"), ("series", "left"), ("parent pKa", "right"), ("acid to base form", "left"))
    rows = [
        (
            c.name,
            c.series,
            _number(c.parent_pka).lstrip("+"),
            " to ".join(c.colours) if any(c.colours) else MISSING,
        )
        for c in library.cores.values()
    ]
    caption = "parent: hydrogen at every open position; drawing and positions: tuner show cores NAME"
    show(table(f"{len(rows)} cores", headings, rows, caption))


def _one_core(core: Core, library: Library, svg: Path | None) -> None:
    """Facts, positions, and a drawing with numbered positions in a file."""
    from tuner.report.folder import write_file
    from tuner.structure.cores import prepare_core
    from tuner.structure.depict import draw_core

    prepared = prepare_core(core)
    facts(
        f"{core.title} ({core.name})",
        [
            ("structure", core.smiles),
            ("series", library.series[core.series].title),
            ("parent pKa", f"{_number(core.parent_pka).lstrip('+')} at {core.parent_temperature_c:g} °C"),
            ("measured in", library.reference(core.parent_pka_source)),
            ("colours", " to ".join(core.colours) if any(core.colours) else ""),
            ("built by", ", ".join(core.assembly)),
            ("destroyed by", ", ".join(core.destroyed_by)),
            ("cautions", "; ".join(core.cautions)),
            ("note", core.note),
            ("source", library.reference(core.source)),
        ],
    )
    headings = (
        ("position", "left"),
        ("relation", "left"),
        ("constant", "left"),
        ("share that arrives", "right"),
    )
    slots = [prepared.slot(label) for label in prepared.open_labels]
    show(table("", headings, [(s.label, s.relation, s.column, f"{s.transmission:.2f}") for s in slots]))
    path = svg if svg is not None else Path(f"{file_name(core.name)}.svg")
    write_file(path, draw_core(core).encode("utf-8"))
    say(f"drawing with numbered positions: {path}")


def file_name(name: str) -> str:
    """A name of a core as a name of a file.

    >>> file_name("4-(dimethylamino)azobenzene"), file_name("4'-hydroxychalcone")
    ('4-dimethylamino-azobenzene', '4-hydroxychalcone')
    """
    spaced = "".join(
        sign if sign.isalnum() or sign == "," else "-" if sign in "( )-" else "" for sign in name
    )
    return "-".join(part for part in spaced.split("-") if part)


def _shelves() -> list[tuple[str, StockItem]]:
    """Every bottle of every shipped shelf, with the shelf's name."""
    from tuner.library.stock import read_shelf, shelf_names

    return [(shelf, item) for shelf in shelf_names() for item in read_shelf(shelf)]


def _stock(library: Library) -> None:
    rows = [
        (shelf, item.name, item.smiles, ", ".join(item.roles), "yes" if item.in_stock else "no")
        for shelf, item in _shelves()
    ]
    headings = (
        ("shelf", "left"),
        ("bottle", "left"),
        ("structure", "left"),
        ("roles", "left"),
        ("in stock", "left"),
    )
    show(
        table(f"{len(rows)} bottles", headings, rows, "an invented shelf of real compounds"), piped=LONG_LINES
    )


def _one_item(library: Library, name: str) -> None:
    found = [(shelf, item) for shelf, item in _shelves() if item.name.casefold() == name.strip().casefold()]
    if not found:
        raise TunerError(
            f'there is no bottle "{name}"', remedy=nearest(name, [item.name for _, item in _shelves()])
        )
    for shelf, item in found:
        price = f"{item.price_per_mol:g} per mol" if item.price_per_mol == item.price_per_mol else ""
        facts(
            f"{item.name} (shelf {shelf})",
            [
                ("structure", item.smiles),
                ("roles", ", ".join(item.roles)),
                ("price", price),
                ("in stock", "yes" if item.in_stock else "no"),
                ("note", item.note),
            ],
        )
