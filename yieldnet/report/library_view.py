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
from yieldnet.report.energy_lines import energy_form, energy_lines
from yieldnet.report.figures import figure, percent
from yieldnet.report.table import Table
from yieldnet.report.text import wrapped

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.model.network import Network
    from yieldnet.model.reproduction import Reproduction
    from yieldnet.prediction.reproduce import Reproduced

    Shelved = tuple[str, Network, tuple[Reproduction, ...]]

__all__ = [
    "compound_form",
    "compound_lines",
    "compounds_table",
    "find_entries",
    "found_text",
    "network_form",
    "network_lines",
    "networks_table",
    "reproduced_form",
    "reproduced_table",
]

_LONGEST_FRACTION = 11
"""Longest fraction that is read at a glance; a longer one is shown as a decimal [characters]."""
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
    lines += energy_lines(entry)
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
    form.update(energy_form(entry))
    return form


def _crossing(network: Network, direction: Direction) -> list[str]:
    return [name for name, way in network.crossing if way is direction]


def _substrates(network: Network) -> tuple[str, ...]:
    if network.meant_for is not None:
        return network.meant_for.substrates
    return tuple(_crossing(network, Direction.CONSUMED))


def _products(network: Network) -> tuple[str, ...]:
    if network.meant_for is not None:
        return network.meant_for.products
    return tuple(_crossing(network, Direction.PRODUCED))


def networks_table(chosen: Sequence[Shelved]) -> Table:
    """Networks as a table: what each is meant for, its size, how many values it reproduces.

    Parameters
    ----------
    chosen : sequence of (str, Network, tuple of Reproduction)
        Name, network and the values it says it gives again.

    Returns
    -------
    Table
        One row a network.
    """
    return Table(
        title="Shipped networks",
        columns=("name", "substrates", "products", "reactions", "checked"),
        rows=tuple(
            (
                name,
                ", ".join(_substrates(network)),
                ", ".join(_products(network)),
                str(len(network.reactions)),
                str(len(reproductions)),
            )
            for name, network, reproductions in chosen
        ),
        note="Checked: how many values with a source the network gives again; 'yieldnet networks"
        " NAME --check' compares them. 'yieldnet networks NAME' shows one in full; a case names it"
        " in 'network:'.",
    )


def _with_unit(text: str, reproduction: Reproduction) -> str:
    return f"{text} {reproduction.unit}"


def found_text(item: Reproduced) -> str:
    """What came out: exact beside an exact value, with one digit more beside a decimal."""
    if item.found is None:
        return item.outcome.value
    last = item.reproduction.last_place
    if last is None:
        exact = str(item.found)
        return exact if len(exact) <= _LONGEST_FRACTION else f"{float(item.found):.9g}"
    places = max(0, len(str(int(1 / last))))
    return f"{float(item.found):.{places}f}"


def reproduced_table(name: str, found: Sequence[Reproduced]) -> Table:
    """What a network was to reproduce beside what came out.

    Parameters
    ----------
    name : str
        Name of the network.
    found : sequence of Reproduced
        The values.

    Returns
    -------
    Table
        One row an entry.
    """
    wrong = sum(not item.agrees for item in found)
    verdict = f"{wrong} of {len(found)} do not agree." if wrong else f"All {len(found)} agree."
    return Table(
        title=f"Values that {name} reproduces",
        columns=("name", "expected", "found", "agrees", "source"),
        rows=tuple(
            (
                item.name,
                _with_unit(item.reproduction.written.text, item.reproduction),
                found_text(item),
                "yes" if item.agrees else "no",
                " ".join(item.source.split()),
            )
            for item in found
        ),
        note=verdict if found else "The file has no 'reproduces', so there is nothing to check.",
    )


def reproduced_form(name: str, found: Sequence[Reproduced]) -> dict[str, Any]:
    """What a network was to reproduce beside what came out, for JSON."""
    return {
        "network": name,
        "agrees": all(item.agrees for item in found),
        "values": [
            {
                **_reproduction_form(item.reproduction),
                "status": item.outcome.value,
                "found": None if item.found is None else float(item.found),
                "found_exact": None if item.found is None else str(item.found),
                "agrees": item.agrees,
            }
            for item in found
        ],
    }


def _reproduction_form(item: Reproduction) -> dict[str, Any]:
    return {
        "name": item.name,
        "equation": str(item.case.equation),
        "aim": str(item.case.aim),
        "expected": float(item.value),
        "expected_text": item.written.text,
        "unit": item.unit,
        "source": " ".join(item.source.split()),
    }


def network_lines(name: str, network: Network, reproductions: Sequence[Reproduction] = ()) -> Lines:
    """One network in full, from its scope to its reactions.

    Parameters
    ----------
    name : str
        Its name.
    network : Network
        The network.
    reproductions : sequence of Reproduction
        The values it says it gives again.

    Returns
    -------
    list of (str, str or None)
        Lines with their style.
    """
    lines: Lines = [
        (network.title, "bold"),
        (wrapped(f"{name}: {network.file}"), "dim"),
        ("", None),
    ]
    for paragraph in network.about.split("\n"):
        if paragraph.strip():
            lines += [(wrapped(paragraph.strip()), None), ("", None)]
    if network.meant_for is not None:
        meant = f"{', '.join(_substrates(network))} to {', '.join(_products(network))}"
        lines.append((wrapped(f"{'meant for':<12}{meant}", "", " " * 12), None))
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
    for chosen in network.parameter_sets:
        values = ", ".join(f"{key} = {figure(value)}" for key, value in chosen.values)
        if chosen.maintenance is not None:
            alive = chosen.maintenance
            rate = f"maintenance {alive.carrier} {alive.written.text} {alive.unit}"
            values = f"{values}, {rate}" if values else rate
        about = f"; {' '.join(chosen.about.split())}" if chosen.about else ""
        text = f"parameter set '{chosen.name}': {values}{about}"
        lines.append((wrapped(text, "", "    "), None))
        lines.append((wrapped(f"source: {' '.join(chosen.source.split())}", "    "), "dim"))
    lines.append(("", None))
    for again in reproductions:
        text = f"reproduces '{again.name}': {again.case.aim}, {again.written.text} {again.unit}"
        lines.append((wrapped(text, "", "    "), None))
        lines.append((wrapped(f"source: {' '.join(again.source.split())}", "    "), "dim"))
    if reproductions:
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


def network_form(
    name: str, network: Network, reproductions: Sequence[Reproduction] = ()
) -> dict[str, Any]:
    """One network for JSON, with the values it says it gives again."""
    meant = network.meant_for
    return {
        "name": name,
        "title": network.title,
        "about": " ".join(network.about.split()),
        "meant_for": None
        if meant is None
        else {"substrates": list(meant.substrates), "products": list(meant.products)},
        "taken_up": _crossing(network, Direction.CONSUMED),
        "given_off": _crossing(network, Direction.PRODUCED),
        "either_way": _crossing(network, Direction.EITHER),
        "groups": list(network.groups()),
        "strains": {item.name: list(item.off) for item in network.strains},
        "parameters": {item.name: float(item.value) for item in network.parameters},
        "parameter_sets": [
            {
                "name": item.name,
                "values": {key: float(value) for key, value in item.values},
                "maintenance_mol_per_g_h": None
                if item.maintenance is None
                else float(item.maintenance.rate_mol_per_gram_hour),
                "about": " ".join(item.about.split()),
                "source": " ".join(item.source.split()),
            }
            for item in network.parameter_sets
        ],
        "reproduces": [_reproduction_form(item) for item in reproductions],
        "reactions": {item.name: str(item.equation) for item in network.reactions},
    }
