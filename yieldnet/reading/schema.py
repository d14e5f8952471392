"""JSON Schema of the two files, for editors that complete and check while one types.

The schema knows shapes, not chemistry: a file that it accepts can still hold findings.

References
----------
JSON Schema, draft 2020-12, https://json-schema.org/draft/2020-12/schema
"""

from __future__ import annotations

from typing import Any

from yieldnet.chemistry.bases import NITROGEN_FEEDS, base_names
from yieldnet.reading.reproductions import REPRODUCTION_KEYS

__all__ = ["case_schema", "network_schema"]

_DRAFT = "https://json-schema.org/draft/2020-12/schema"
_TEXT = {"type": "string"}
_NUMBER = {"type": ["number", "string"]}
_NAMES = {"type": "array", "items": {"type": "string"}}


def _mapping(
    properties: dict[str, Any], required: tuple[str, ...] = (), about: str = ""
) -> dict[str, Any]:
    form: dict[str, Any] = {
        "type": "object",
        "properties": properties,
        "additionalProperties": False,
    }
    if required:
        form["required"] = list(required)
    if about:
        form["description"] = about
    return form


def _named(value: Any, about: str) -> dict[str, Any]:
    return {"type": "object", "additionalProperties": value, "description": about}


def _either(*forms: Any) -> dict[str, Any]:
    return {"anyOf": list(forms)}


def network_schema() -> dict[str, Any]:
    """JSON Schema of a network file.

    Returns
    -------
    dict
        The schema.

    Examples
    --------
    >>> network_schema()["required"]
    ['network', 'crossing', 'reactions']
    """
    parameter = _either(
        _NUMBER,
        _mapping(
            {
                "value": _NUMBER,
                "low": _NUMBER,
                "high": _NUMBER,
                "unit": _TEXT,
                "about": _TEXT,
                "source": _TEXT,
            },
            ("value",),
        ),
    )
    compound = _either(
        _TEXT, _mapping({"formula": _TEXT, "charge": _NUMBER, "about": _TEXT}, ("formula",))
    )
    carrier = _mapping(
        {"kind": {"enum": ["energy", "redox"]}, "formula": _TEXT, "about": _TEXT}, ("kind",)
    )
    reaction = _either(
        _TEXT,
        _mapping(
            {"equation": _TEXT, "group": _TEXT, "about": _TEXT, "source": _TEXT}, ("equation",)
        ),
    )
    biomass = _either(
        _TEXT,
        _mapping({"formula": _TEXT, "ash": _NUMBER, "about": _TEXT}, ("formula",)),
        _composed(),
    )
    growth = _mapping(
        {
            "biomass": biomass,
            "per": {"enum": ["mol", "g"]},
            "equation": _TEXT,
            "about": _TEXT,
            "source": _TEXT,
        },
        ("biomass", "equation"),
        "How biomass is made",
    )
    rate = _either(_TEXT, _mapping({"value": _TEXT, "source": _TEXT}, ("value",)))
    parameter_set = _mapping(
        {
            "about": _TEXT,
            "source": _TEXT,
            "values": _named(_NUMBER, "Value of each parameter"),
            "maintenance": _named(rate, "Maintenance that goes with them"),
        },
        ("source",),
    )
    asked = _asked()
    reproduction = _mapping(
        {
            **{key: asked[key] for key in REPRODUCTION_KEYS if key in asked},
            "value": {**_NUMBER, "description": "Best value, mol/mol unless a unit follows"},
            "source": {**_TEXT, "description": "Where it stands, or how it was derived by hand"},
        },
        ("equation", "aim", "value", "source"),
    )
    form = _mapping(
        {
            "network": {**_TEXT, "description": "Title"},
            "about": {**_TEXT, "description": "Scope, assumptions, sources"},
            "meant for": _mapping(
                {"substrates": _NAMES, "products": _NAMES},
                ("substrates", "products"),
                "What it was written for; a warning stands beside an answer beyond it",
            ),
            "parameters": _named(parameter, "Numbers that coefficients use by name"),
            "parameter sets": _named(parameter_set, "Values that a case can choose by a name"),
            "compounds": _named(compound, "Formulas of compounds that the library lacks"),
            "carriers": _named(carrier, "Energy and redox carriers"),
            "crossing": _mapping(
                {"in": _NAMES, "out": _NAMES, "either": _NAMES},
                about="What may enter or leave the cell, and which way",
            ),
            "reactions": _named(reaction, "Equation of each reaction"),
            "strains": _named(_NAMES, "Presets: reactions or groups switched off"),
            "growth": growth,
            "maintenance": _named(rate, "Energy for staying alive, such as ATP: 2.5 mmol/g/h"),
            "reproduces": _named(reproduction, "Small cases with the best value of each"),
        },
        ("network", "crossing", "reactions"),
    )
    return {"$schema": _DRAFT, "title": "yieldnet network", **form}


def case_schema() -> dict[str, Any]:
    """JSON Schema of a case file.

    Returns
    -------
    dict
        The schema.

    Examples
    --------
    >>> case_schema()["required"]
    ['case', 'equation']
    """
    form = _mapping(
        {
            "case": {**_TEXT, "description": "Title"},
            "about": {**_TEXT, "description": "Remarks"},
            "network": {**_TEXT, "description": "Path from this file, or name of a shipped one"},
            **_asked(),
        },
        ("case", "equation"),
    )
    return {"$schema": _DRAFT, "title": "yieldnet case", **form}


def _composed() -> dict[str, Any]:
    """Biomass put together from macromolecules."""
    return _mapping(
        {
            "from": _named(_NUMBER, "Share of the dry weight of each macromolecule"),
            "ash": _NUMBER,
            "monomers": _either(
                _TEXT, _named(_NUMBER, "Amount of each monomer; 'like' an organism")
            ),
            "normalise": {"enum": ["yes", "no", True, False]},
            "about": _TEXT,
        },
        ("from",),
    )


def _asked() -> dict[str, Any]:
    """What a case asks of its network, in the order of the case keys."""
    compound = _either(
        _TEXT,
        _mapping({"formula": _TEXT, "ash": _NUMBER, "about": _TEXT}, ("formula",)),
        _composed(),
    )
    return {
        "strain": {**_TEXT, "description": "Preset of the network"},
        "parameter set": {**_TEXT, "description": "Named parameter values of the network"},
        "equation": {
            **_TEXT,
            "description": "Overall equation, ? for unknown coefficients, basis first",
        },
        "either side": {**_NAMES, "description": "Compounds whose side is not known"},
        "compounds": _named(compound, "Formulas, for a case without a network"),
        "conditions": _mapping(
            {
                "growth rate": _TEXT,
                "substrate uptake": _TEXT,
                "temperature": _TEXT,
                "pH": _NUMBER,
            },
            about="Such as 'growth rate: 0.08 ± 0.004 1/h'",
        ),
        "concentrations": _named(_TEXT, "5 mmol/L; 0.1 to 10 mmol/L; of a gas 0.2 bar"),
        "measured": _named(_NUMBER, "Value, standard deviation, unit of each coefficient"),
        "correlations": _named(
            _named(_NUMBER, "Correlation with each other measured coefficient"),
            "Correlations of the errors of measured values",
        ),
        "demands": _named(_TEXT, "at most 0.65; at least 0.1 g/g; 0.05 to 0.30"),
        "aim": {"type": "string", "pattern": "^(most|least) .+"},
        "energy surplus": {"enum": ["lost", "none"]},
        "knock-outs": {**_NAMES, "description": "Reactions or groups switched off"},
        "parameters": _named(_NUMBER, "Other values of network parameters"),
        "plant": _plant(),
    }


def _plant() -> dict[str, Any]:
    """What a plant is to make, in the order of its keys."""
    phases = {
        "growth": {**_TEXT, "description": "Time at most biomass: 12 h"},
        "production": {**_TEXT, "description": "Where titre over productivity does not tell it"},
        "turnaround": {**_TEXT, "description": "Harvest to next filling: 8 h"},
        "inoculum": {**_NUMBER, "description": "Volume of the seed: 5 %"},
        "cells": {**_TEXT, "description": "Dry weight at the end of growth: 20 g/L"},
    }
    aeration = {
        "pressure": {**_TEXT, "description": "Absolute: 1.5 bar"},
        "vvm": {**_NUMBER, "description": "Dry air at 0 degC and 1.01325 bar per broth and min"},
        "kLa": {**_TEXT, "description": "What the vessel reaches: 200 1/h"},
        "dissolved oxygen": {**_NUMBER, "description": "Over saturation with air: 0.2"},
    }
    share = "Share of 1, or with %"
    return _mapping(
        {
            "product": {**_TEXT, "description": "Compound that is sold; the aim if left out"},
            "output": {**_TEXT, "description": "20000 t/y"},
            "on-stream": {**_TEXT, "description": "7800 h/y"},
            "recovery": _either(_NUMBER, _named(_NUMBER, "Share that each step keeps")),
            "feedstock purity": _named(_NUMBER, "g pure per g feedstock"),
            "titre": {**_TEXT, "description": "80 g/L, as free acid"},
            "productivity": {**_TEXT, "description": "1.8 g/L/h; with phases, of production"},
            "phases": _mapping(phases, ("growth",), "Growth before production"),
            "pH": _NUMBER,
            "base": {"enum": list(base_names())},
            "nitrogen feed": {"enum": [item.name for item in NITROGEN_FEEDS]},
            "temperature": {**_TEXT, "description": "37 degC"},
            "aeration": _mapping(aeration, (), "As far as known"),
            "stirrer": {**_TEXT, "description": "1.0 kW/m3"},
            "vessel": {**_TEXT, "description": "Whole volume of one: 200 m3"},
            "fill": {**_NUMBER, "description": share},
            "prices": _named(_TEXT, "0.25 EUR/kg of pure compound, all in one currency"),
        },
        ("output", "on-stream"),
        "What a plant is to make",
    )
