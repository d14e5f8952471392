"""Heat of combustion and Gibbs energy of a library entry, with source and status of each value."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.chemistry.library import BiomassEntry
from yieldnet.chemistry.thermochemistry import (
    BY_ELECTRONS,
    GENERIC_BIOMASS,
    estimated_heat,
    heat_of_biomass,
    heat_of_combustion,
    species_of,
)
from yieldnet.report.figures import figure
from yieldnet.report.text import wrapped

if TYPE_CHECKING:
    from yieldnet.chemistry.library import CompoundEntry
    from yieldnet.chemistry.thermochemistry import Heat, KnownValue, Species

    Entry = CompoundEntry | BiomassEntry

__all__ = ["energy_form", "energy_lines"]

_INDENT = " " * 23


def _heat(entry: Entry) -> Heat | None:
    if isinstance(entry, BiomassEntry):
        return heat_of_biomass(entry.formula)
    return heat_of_combustion(entry.name) or estimated_heat(entry.formula)


def _species(entry: Entry) -> tuple[Species, ...]:
    if isinstance(entry, BiomassEntry) and entry.name != GENERIC_BIOMASS:
        return ()
    return species_of(entry.name)


def _told(label: str, text: str, known: KnownValue) -> list[tuple[str, str | None]]:
    note = f"; {known.note}" if known.note and known.note != BY_ELECTRONS else ""
    return [
        (wrapped(f"{label:<21}{text}{note}", "  ", _INDENT), None),
        (wrapped(f"{known.source} ({known.status})", _INDENT), "dim"),
    ]


def _as_species(item: Species) -> str:
    words = f" as {item.formula}" if item.formula is not None else ""
    words += ", ratio" if item.state == "ratio" else f" {item.state}"
    if item.protons:
        way = "given off" if item.protons > 0 else "taken up"
        words += f", {abs(item.protons)} H+ {way}"
    return words


def energy_lines(entry: Entry) -> list[tuple[str, str | None]]:
    """Lines of heat and Gibbs energy, each value followed by its source and status."""
    lines: list[tuple[str, str | None]] = []
    heat = _heat(entry)
    if heat is None:
        lines.append(("  heat of combustion   no value, and no estimate is possible", None))
    else:
        text = f"{figure(heat.value)} kJ/mol"
        if heat.estimated:
            text += f" (estimated: {BY_ELECTRONS})"
        else:
            text += f", {heat.state}"
        if heat.nitrogen:
            text += f", to nitrogen gas; {figure(heat.to_ammonia())} to ammonia"
        lines += _told("heat of combustion", text, heat.known)
    known = _species(entry)
    if not known:
        lines.append(("  Gibbs energy         no value", None))
    for item in known:
        text = f"{float(item.gibbs.value):.2f} kJ/mol{_as_species(item)}"
        lines += _told("Gibbs energy", text, item.gibbs)
        if item.enthalpy is not None:
            text = f"{float(item.enthalpy.value):.2f} kJ/mol, same species"
            lines += _told("enthalpy", text, item.enthalpy)
    return lines


def energy_form(entry: Entry) -> dict[str, Any]:
    """Heat and Gibbs energies for JSON, kJ/mol."""
    heat = _heat(entry)
    return {
        "heat_of_combustion": None
        if heat is None
        else {
            "value": float(heat.value),
            "to_ammonia": float(heat.to_ammonia()),
            "state": heat.state or None,
            "estimated": heat.estimated,
            "source": heat.known.source,
            "status": heat.known.status,
        },
        "gibbs_energies": [
            {
                "value": float(item.gibbs.value),
                "species": None if item.formula is None else str(item.formula),
                "state": item.state,
                "protons": item.protons,
                "source": item.gibbs.source,
                "status": item.gibbs.status,
                "enthalpy": None if item.enthalpy is None else float(item.enthalpy.value),
                "enthalpy_source": None if item.enthalpy is None else item.enthalpy.source,
                "enthalpy_status": None if item.enthalpy is None else item.enthalpy.status,
            }
            for item in _species(entry)
        ],
    }
