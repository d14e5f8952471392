"""The section ``concentrations`` of a case file: how much of each compound there is.

``5 mmol/L``, ``0.1 to 10 mmol/L``, of a gas ``0.2 bar``. Concentrations serve the Gibbs energy of
reactions alone; balances do not look at them.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import library_names
from yieldnet.chemistry.thermochemistry import species_of
from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.foundation.findings import Severity, near
from yieldnet.foundation.units import AMOUNT_UNITS, UnitError
from yieldnet.model.case import Concentration
from yieldnet.model.network import BIOMASS
from yieldnet.reading.fields import text, unsplit_pairs

if TYPE_CHECKING:
    from collections.abc import Callable, Collection, Mapping

    from yieldnet.foundation.findings import Findings, SourceSpan
    from yieldnet.model.network import Compound
    from yieldnet.reading.nodes import Node

__all__ = ["PRESSURE_UNITS", "VOLUME_UNITS", "read_concentrations"]

VOLUME_UNITS = {"L": Fraction(1), "mL": Fraction(1, 1000), "m3": Fraction(1000)}
"""Units of a volume of broth [L]."""
PRESSURE_UNITS = {
    "bar": Fraction(1),
    "mbar": Fraction(1, 1000),
    "kPa": Fraction(1, 100),
    "Pa": Fraction(1, 100_000),
    "atm": Fraction(101_325, 100_000),
}
"""Units of a pressure [bar]."""
_MICROMOL = ("umol", "µmol", "μmol")
_SPELLINGS = {"l": "L", "ml": "mL", "gDW": "g"}


def read_concentrations(
    node: Node | None,
    resolve: Callable[[str, SourceSpan], str | None],
    compounds: Mapping[str, Compound],
    carriers: Collection[str],
    findings: Findings,
) -> tuple[Concentration, ...]:
    """Concentrations and pressures, with a finding for each that cannot be.

    Parameters
    ----------
    node : Node or None
        The section.
    resolve : callable
        Name of a compound, or ``None`` with a finding.
    compounds : mapping of str to Compound
        Compounds of the equation and of the network.
    carriers : collection of str
        Carriers of the network, which have no concentration of their own.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    tuple of Concentration
        Each compound once, in written order.
    """
    found: dict[str, Concentration] = {}
    if node is None:
        return ()
    known = (*compounds, *library_names())
    for key, value in unsplit_pairs(node, "'concentrations'", findings, known):
        label = f"concentration of {key.text}"
        written = text(value, label, findings)
        name = None
        if key.text in carriers:
            _add(findings, "YN860", f"{key.text!r} is a carrier and has no concentration", key.span)
        else:
            name = resolve(key.text, key.span)
        if name is not None and compounds and name not in compounds:
            findings.add(
                "YN503",
                f"{label} speaks of a compound that is neither in the equation nor in a network",
                key.span,
                hint=near(key.text, compounds) or "Leave the line out.",
            )
            name = None
        if written is None:
            continue
        try:
            low, high, unit = _bounds(written)
            factor, gas = _factor(unit, compounds.get(name) if name else None)
        except (NumberTextError, UnitError) as error:
            findings.add(error.code, f"{label}: {error.reason}", value.span, hint=error.hint)
            continue
        if low <= 0:
            findings.add(
                "YN210",
                f"{label} {written} is not above zero",
                value.span,
                hint="Of what is hardly there write a small value, such as 0.001 mmol/L.",
            )
            continue
        if low > high:
            findings.add(
                "YN511",
                f"{label}: the low end is above the high end",
                value.span,
                left=f"written {written}",
                hint="Exchange them.",
            )
            continue
        if name is None:
            continue
        if name in found:
            findings.add(
                "YN504",
                f"{name!r} has two concentrations",
                key.span,
                left=f"first {found[name].text}",
                right=f"again {written}",
                hint="Write one range: 0.1 to 10 mmol/L.",
            )
            continue
        if name in compounds and not _suits(name, gas, key.span, findings):
            continue
        found[name] = Concentration(
            compound=name,
            low=low * factor,
            high=high * factor,
            gas=gas,
            text=written,
            span=key.span,
        )
    return tuple(found.values())


def _add(findings: Findings, code: str, message: str, span: SourceSpan) -> None:
    findings.add(code, message, span, hint="Leave the line out.")


def _bounds(written: str) -> tuple[Fraction, Fraction, str]:
    words = written.split()
    if "±" in written or "+-" in written or "+/-" in written:
        raise NumberTextError("an error stands where a range belongs", "Write 4 to 6 mmol/L.")
    if words[0] == "at":
        raise NumberTextError("both ends of a range are needed", "Write 0.1 to 10 mmol/L.")
    low = read_number(words[0]).value
    if words[1:2] == ["to"]:
        if len(words) < 3:
            raise NumberTextError("nothing stands after 'to'", "Write 0.1 to 10 mmol/L.")
        return low, read_number(words[2]).value, " ".join(words[3:])
    return low, low, " ".join(words[1:])


def _factor(unit: str, compound: Compound | None) -> tuple[Fraction, bool]:
    """Factor to mol/L or bar, and whether it is a pressure."""
    hint = "Write mol/L, mmol/L, g/L, or of a gas bar, mbar, kPa."
    if not unit:
        raise UnitError("the unit is missing", hint)
    if unit in PRESSURE_UNITS:
        return PRESSURE_UNITS[unit], True
    parts = [_SPELLINGS.get(part.strip(), part.strip()) for part in unit.split("/")]
    if len(parts) != 2 or parts[1] not in VOLUME_UNITS:
        raise UnitError(f"{unit!r} is no concentration and no pressure", hint)
    amount, volume = parts
    if amount in _MICROMOL:
        return Fraction(1, 10**6) / VOLUME_UNITS[volume], False
    if amount not in AMOUNT_UNITS:
        raise UnitError(f"{unit!r} is no concentration and no pressure", hint)
    if compound is None:
        return Fraction(1), False
    return compound.weight.mol_per(amount) / VOLUME_UNITS[volume], False


def _suits(name: str, gas: bool, span: SourceSpan, findings: Findings) -> bool:
    """Whether a species of the table takes the concentration; what is not used is told."""
    states = {"cells"} if name == BIOMASS else {item.state for item in species_of(name)}
    if not states or states <= {"liquid", "cells", "solid"}:
        why = "no Gibbs energy is known for it" if not states else "its activity is one"
        findings.add(
            "YN861",
            f"the concentration of {name!r} is not used: {why}",
            span,
            hint="Leave the line out.",
            severity=Severity.WARNING,
        )
        return False
    if states == {"ratio"}:
        _add(
            findings,
            "YN860",
            f"{name!r} is kept without its phosphate or carrier and has no concentration here",
            span,
        )
        return False
    wanted = "gas" if gas else "dissolved"
    if wanted in states:
        return True
    findings.add(
        "YN860",
        f"{name!r} is {'dissolved' if gas else 'a gas'} in the table of Gibbs energies",
        span,
        left=f"written as {'a pressure' if gas else 'a concentration'}",
        hint="Write mmol/L." if gas else "Write its partial pressure in bar.",
    )
    return False
