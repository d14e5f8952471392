"""JSON Schema of the two files, for editors that complete and check while one types.

The schema knows shapes, not chemistry: a file that it accepts can still hold findings.

References
----------
JSON Schema, draft 2020-12, https://json-schema.org/draft/2020-12/schema
"""

from __future__ import annotations

from typing import Any

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
        _TEXT, _mapping({"formula": _TEXT, "ash": _NUMBER, "about": _TEXT}, ("formula",))
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
    form = _mapping(
        {
            "network": {**_TEXT, "description": "Title"},
            "about": {**_TEXT, "description": "Scope, assumptions, sources"},
            "parameters": _named(parameter, "Numbers that coefficients use by name"),
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
    compound = _either(
        _TEXT, _mapping({"formula": _TEXT, "ash": _NUMBER, "about": _TEXT}, ("formula",))
    )
    form = _mapping(
        {
            "case": {**_TEXT, "description": "Title"},
            "about": {**_TEXT, "description": "Remarks"},
            "network": {**_TEXT, "description": "Path from this file, or name of a shipped one"},
            "strain": {**_TEXT, "description": "Preset of the network"},
            "equation": {
                **_TEXT,
                "description": "Overall equation, ? for unknown coefficients, basis first",
            },
            "either side": {**_NAMES, "description": "Compounds whose side is not known"},
            "compounds": _named(compound, "Formulas, for a case without a network"),
            "conditions": _mapping(
                {"growth rate": _TEXT, "substrate uptake": _TEXT, "temperature": _TEXT},
                about="Such as 'growth rate: 0.08 ± 0.004 1/h'",
            ),
            "measured": _named(_NUMBER, "Value, standard deviation, unit of each coefficient"),
            "demands": _named(_TEXT, "at most 0.65; at least 0.1 g/g; 0.05 to 0.30"),
            "aim": {"type": "string", "pattern": "^(most|least) .+"},
            "energy surplus": {"enum": ["lost", "none"]},
            "knock-outs": {**_NAMES, "description": "Reactions or groups switched off"},
            "parameters": _named(_NUMBER, "Other values of network parameters"),
        },
        ("case", "equation"),
    )
    return {"$schema": _DRAFT, "title": "yieldnet case", **form}
