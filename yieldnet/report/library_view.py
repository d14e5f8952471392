"""Views of the libraries: compounds, biomass and shipped networks."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.chemistry.formula import FormulaTextError
from yieldnet.chemistry.library import (
    BiomassEntry,
    CompoundEntry,
    biomass_entries,
    compound_entries,
    find_biomass,
    find_compound,
    library_names,
)
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.report.figures import figure, percent
from yieldnet.report.table import Table
from yieldnet.report.text import wrapped

if TYPE_CHECKING:
    from yieldnet.model.network import Network

__all__ = [
    "compound_form",
    "compound_lines",
    "compounds_table",
    "find_entries",
    "network_form",
    "network_lines",
    "networks_table",
]

Entry = CompoundEntry | BiomassEntry
Lines = list[tuple[str, str | None]]


def find_entries(word: str | None) -> tuple[list[Entry], tuple[str, ...]]:
    """Library entries that a word names, exactly or in part, and all names for near matches."""
    names = (*library_names(), *(item.name for item in biomass_entries()))
    if word is None:
        return [*compound_entries(), *biomass_entries()], names
    exact = find_compound(word) or find_biomass(word)
    if exact is not None:
        return [exact], names
    part = word.casefold()
    found: list[Entry] = [
        item
        for item in compound_entries()
        if any(part in text.casefold() for text in (item.name, *item.synonyms))
    ]
    found += [item for item in biomass_entries() if part in item.name.casefold()]
    return found, names


def _reduction(entry: Entry, nitrogen: str = "ammonia") -> Fraction | None:
    try:
        return entry.formula.degree_of_reduction(nitrogen)
    except FormulaTextError:
        return None


def compounds_table(entries: list[Entry]) -> Table:
    """Library as a table: name, formula, molar mass, available electrons."""
    rows = []
    for item in entries:
        electrons = _reduction(item)
        rows.append(
            (
                item.name,
                str(item.formula),
                f"{float(item.formula.molar_mass):.3f}",
                "" if electrons is None else figure(electrons),
            )
        )
    return Table(
        title="Compounds (acids undissociated; inside compounds without phosphate and CoA)",
        columns=("name", "formula", "g/mol", "electrons"),
        rows=tuple(rows),
        note="Electrons: mol available electrons per mol, ammonia as nitrogen reference.",
    )


def compound_lines(entry: Entry) -> Lines:
    """One library entry in full."""
    formula = entry.formula
    lines: Lines = [(entry.name, "bold"), (f"  formula              {formula}", None)]
    if isinstance(entry, CompoundEntry) and entry.synonyms:
        lines.append((wrapped(f"also called          {', '.join(entry.synonyms)}", "  "), None))
    lines.append((f"  molar mass           {float(formula.molar_mass):.3f} g/mol", None))
    if isinstance(entry, BiomassEntry) and entry.ash is not None:
        whole = formula.molar_mass / (1 - entry.ash)
        lines.append(
            (
                f"  ash                  {percent(entry.ash)} of the dry weight; with it"
                f" {float(whole):.3f} g/mol",
                None,
            )
        )
    for reference in ("ammonia", "nitrogen", "nitrate") if formula["N"] else ("ammonia",):
        electrons = _reduction(entry, reference)
        if electrons is None:
            continue
        text = f"  available electrons  {figure(electrons)} per mol"
        if formula["C"]:
            text += f", {figure(electrons / formula['C'])} per C-mol"
        if formula["N"]:
            text += f" ({reference} as reference)"
        lines.append((text, None))
    status = f" ({entry.status})" if isinstance(entry, BiomassEntry) else ""
    lines.append((wrapped(f"source               {entry.source}{status}", "  "), "dim"))
    lines.append(("  atomic weights       IUPAC abridged standard atomic weights", "dim"))
    if entry.note:
        lines.append((wrapped(entry.note, "  "), None))
    return lines


def compound_form(entry: Entry) -> dict[str, Any]:
    """One library entry for JSON."""
    electrons = _reduction(entry)
    form: dict[str, Any] = {
        "name": entry.name,
        "formula": str(entry.formula),
        "charge": entry.formula.charge,
        "molar_mass": float(entry.formula.molar_mass),
        "available_electrons": None if electrons is None else float(electrons),
        "source": entry.source,
        "note": entry.note or None,
    }
    if isinstance(entry, CompoundEntry):
        form.update(kind=entry.kind, synonyms=list(entry.synonyms))
    else:
        ash = None if entry.ash is None else float(entry.ash)
        form.update(kind=BIOMASS, ash=ash, status=entry.status)
    return form


def _crossing(network: Network, direction: Direction) -> list[str]:
    return [name for name, way in network.crossing if way is direction]


def networks_table(chosen: list[tuple[str, Network]]) -> Table:
    """Shipped networks: name, size, title."""
    return Table(
        title="Shipped networks",
        columns=("name", "reactions", "what it is"),
        rows=tuple((name, str(len(network.reactions)), network.title) for name, network in chosen),
        note="'yieldnet networks NAME' shows one in full; a case names it in 'network:'.",
    )


def network_lines(name: str, network: Network) -> Lines:
    """One network in full: scope, crossing compounds, groups, strains, parameters, reactions."""
    lines: Lines = [
        (network.title, "bold"),
        (wrapped(f"{name}: {network.file}"), "dim"),
        ("", None),
    ]
    for paragraph in network.about.split("\n"):
        if paragraph.strip():
            lines += [(wrapped(paragraph.strip()), None), ("", None)]
    for label, direction in (
        ("taken up", Direction.CONSUMED),
        ("given off", Direction.PRODUCED),
        ("either way", Direction.EITHER),
    ):
        names = _crossing(network, direction)
        if names:
            lines.append((wrapped(f"{label:<12}{', '.join(names)}", "", " " * 12), None))
    if network.groups():
        lines.append((wrapped(f"{'groups':<12}{', '.join(network.groups())}", "", " " * 12), None))
    for strain in network.strains:
        text = f"strain '{strain.name}' switches off: {', '.join(strain.off)}"
        lines.append((wrapped(text, "", "    "), None))
    for item in network.parameters:
        ends = [figure(end) for end in (item.low, item.high) if end is not None]
        span = f" ({' … '.join(ends)})" if ends else ""
        text = f"{item.name} = {figure(item.value)}{span} {item.unit}".rstrip()
        lines.append((wrapped(text, "", "    "), None))
    lines.append(("", None))
    for reaction in network.reactions:
        group = f" [{reaction.group}]" if reaction.group else ""
        lines.append((f"{reaction.name}{group}", "bold"))
        lines.append((wrapped(str(reaction.equation), "  ", "    "), None))
    if network.growth is not None:
        biomass = network.growth.biomass
        ash = f", ash {percent(biomass.ash)}" if biomass.ash else ""
        lines.append((f"growth (biomass {biomass.formula}{ash})", "bold"))
        lines.append((wrapped(str(network.growth.equation), "  ", "    "), None))
    return lines


def network_form(name: str, network: Network) -> dict[str, Any]:
    """One network for JSON."""
    return {
        "name": name,
        "title": network.title,
        "about": " ".join(network.about.split()),
        "taken_up": _crossing(network, Direction.CONSUMED),
        "given_off": _crossing(network, Direction.PRODUCED),
        "either_way": _crossing(network, Direction.EITHER),
        "groups": list(network.groups()),
        "strains": {item.name: list(item.off) for item in network.strains},
        "parameters": {item.name: float(item.value) for item in network.parameters},
        "reactions": {item.name: str(item.equation) for item in network.reactions},
    }
