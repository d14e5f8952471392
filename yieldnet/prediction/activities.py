"""Which species stands for a compound of a case, and how much of it there is.

In: a case. Out: species with bounds of their activity, from the section ``concentrations`` or from
defaults that the answer lists.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.gibbs import STANDARD_KELVIN, STANDARD_PH, Part, biomass_gibbs
from yieldnet.chemistry.library import find_compound
from yieldnet.chemistry.thermochemistry import (
    GENERIC_BIOMASS,
    KnownValue,
    Species,
    heat_of_biomass,
    species_of,
)
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.network import BIOMASS, CarrierKind
from yieldnet.prediction.heat import same_formula

if TYPE_CHECKING:
    from yieldnet.chemistry.formula import Formula
    from yieldnet.model.case import Case, Concentration
    from yieldnet.model.network import Compound

__all__ = [
    "DEFAULT_DISSOLVED",
    "DEFAULT_OXYGEN",
    "DEFAULT_PRESSURE",
    "INSIDE_DISSOLVED",
    "INSIDE_PRESSURE",
    "Activities",
    "species_of_biomass",
]

DEFAULT_DISSOLVED = Fraction(1, 1000)
"""Concentration where none is given [mol/L]: the usual reference of 1 mmol/L (from memory)."""
DEFAULT_PRESSURE = Fraction(1, 10)
"""Pressure of a gas where none is given [bar]: our choice, the order of a vented vessel."""
DEFAULT_OXYGEN = Fraction(1, 5)
"""Pressure of oxygen where none is given [bar]: that of air, a fifth of one bar."""
INSIDE_DISSOLVED = (Fraction(1, 10**6), Fraction(1, 100))
"""Bounds of a concentration inside the cell [mol/L]: 0.001 to 10 mmol/L, usual in thermodynamic
studies of pathways (from memory)."""
INSIDE_PRESSURE = (Fraction(1, 10**4), Fraction(1))
"""Bounds of the pressure of a gas with which a step is in equilibrium [bar]: our choice."""
_OXYGEN = "oxygen"


def species_of_biomass(biomass: Compound) -> Species | None:
    """Species of biomass: the published value for CH1.8O0.5N0.2, else estimated by its electrons.

    Parameters
    ----------
    biomass : Compound
        Biomass of a case.

    Returns
    -------
    Species or None
        For one mol of its formula [kJ/mol]; ``None`` with elements besides C, H, O and N.
    """
    formula = biomass.formula
    carbon = formula["C"]
    (published,) = species_of(GENERIC_BIOMASS)
    generic = dict(read_formula("CH1.8O0.5N0.2").elements)
    if carbon and {symbol: n / carbon for symbol, n in formula.elements} == generic:
        assert published.enthalpy is not None
        return replace(
            published,
            compound=BIOMASS,
            formula=formula,
            gibbs=replace(published.gibbs, value=published.gibbs.value * carbon),
            enthalpy=replace(published.enthalpy, value=published.enthalpy.value * carbon),
        )
    value = biomass_gibbs(formula) if carbon else None
    if value is None:
        return None
    return Species(
        compound=BIOMASS,
        formula=formula,
        protons=0,
        waters=0,
        state="cells",
        gibbs=KnownValue(
            value=Fraction(f"{value:.3f}"),
            source="Heijnen, Example 7b: 33.840 kJ per electron of biomass",
            status="estimated",
        ),
        enthalpy=_enthalpy_of_biomass(formula),
    )


def _enthalpy_of_biomass(formula: Formula) -> KnownValue:
    """Enthalpy of formation from the heat of combustion, which is to nitrogen gas [kJ/mol]."""
    heat = heat_of_biomass(formula)
    (water,) = species_of("water")
    gas = species_of("carbon dioxide")[0]
    assert heat is not None
    assert water.enthalpy is not None
    assert gas.enthalpy is not None
    burnt = formula["C"] * gas.enthalpy.value + formula["H"] / 2 * water.enthalpy.value
    return KnownValue(
        value=burnt + heat.value, source="from its heat of combustion", status="estimated"
    )


@dataclass(frozen=True, slots=True)
class Activities:
    """Species and activities of the compounds of a case.

    Parameters
    ----------
    case : Case
        The case.
    """

    case: Case

    @property
    def ph(self) -> float:
        """PH of the broth [-]."""
        return STANDARD_PH if self.case.ph is None else float(self.case.ph.value)

    @property
    def kelvin(self) -> float:
        """Temperature [K]."""
        celsius = self.case.temperature
        return STANDARD_KELVIN if celsius is None else float(celsius.value) + 273.15

    def _given(self, name: str) -> Concentration | None:
        return next((item for item in self.case.concentrations if item.compound == name), None)

    def species(self, compound: Compound) -> Species | None:
        """Species that stands for a compound; ``None`` where no Gibbs energy is known."""
        if compound.name == BIOMASS:
            return species_of_biomass(compound)
        entry = find_compound(compound.name)
        if entry is None or not same_formula(entry.formula, compound.formula):
            return None
        known = species_of(entry.name)
        given = self._given(compound.name)
        if given is not None:
            wanted = "gas" if given.gas else "dissolved"
            known = tuple(item for item in known if item.state == wanted) or known
        return known[0] if known else None

    def carrier(self, name: str) -> Species | None:
        """Species of a carrier of the network, if the table knows it under this name."""
        network = self.case.network
        carriers = network.carriers if network is not None else ()
        found = next((item for item in carriers if item.name == name), None)
        if found is None or find_compound(name) is not None:
            return None
        two_hydrogens = found.kind is CarrierKind.REDOX and str(found.formula) == "H2"
        token = found.kind is CarrierKind.ENERGY and not found.formula.elements
        known = species_of(name)
        if not known or not (token if name == "ATP" else two_hydrogens):
            return None
        return known[0]

    def outside(self, compound: Compound, amount: Fraction) -> Part | None:
        """Compound with its activity in the broth, as given or by default."""
        species = self.species(compound)
        if species is None:
            return None
        low, high = self._bounds(compound.name, species, self._default(compound.name, species))
        return Part(species=species, amount=float(amount), low=low, high=high)

    def inside(self, name: str, compound: Compound | None, amount: Fraction) -> Part | None:
        """Compound or carrier of a step, with the widest bounds that the case leaves."""
        species = self.carrier(name) if compound is None else self.species(compound)
        if species is None:
            return None
        bounds = INSIDE_PRESSURE if species.state == "gas" else INSIDE_DISSOLVED
        low, high = self._bounds(name, species, bounds)
        return Part(species=species, amount=float(amount), low=low, high=high)

    def _default(self, name: str, species: Species) -> tuple[Fraction, Fraction]:
        if species.state != "gas":
            return DEFAULT_DISSOLVED, DEFAULT_DISSOLVED
        pressure = DEFAULT_OXYGEN if name == _OXYGEN else DEFAULT_PRESSURE
        return pressure, pressure

    def _bounds(
        self, name: str, species: Species, default: tuple[Fraction, Fraction]
    ) -> tuple[float, float]:
        if species.state == "ratio":
            assert species.low is not None
            assert species.high is not None
            return float(species.low), float(species.high)
        if species.state not in ("dissolved", "gas"):
            return 1.0, 1.0
        given = self._given(name)
        low, high = default if given is None else (given.low, given.high)
        return float(low), float(high)

    def assumptions(self, used: tuple[Part, ...], names: tuple[str, ...]) -> list[Assumption]:
        """Defaults that a Gibbs energy used, and the species that stand for its compounds.

        Parameters
        ----------
        used : tuple of Part
            Parts of the overall equation.
        names : tuple of str
            Their names in the case.

        Returns
        -------
        list of Assumption
            In words, with sources.
        """
        found = []
        if self.case.ph is None:
            found.append(
                Assumption(
                    text="pH (default)", value=Fraction(7), source="pH of the tables of energies"
                )
            )
        if self.case.temperature is None:
            found.append(
                Assumption(
                    text="temperature of the Gibbs energies (default)",
                    value=Fraction(25),
                    unit="degC",
                    source="temperature of the tables",
                )
            )
        groups: dict[tuple[str, Fraction], list[str]] = {}
        for part, name in zip(used, names, strict=True):
            state = part.species.state
            if state in ("dissolved", "gas") and self._given(name) is None:
                default = self._default(name, part.species)[0]
                groups.setdefault((state, default), []).append(name)
        sources = {
            DEFAULT_DISSOLVED: "usual reference of 1 mmol/L (from memory)",
            DEFAULT_PRESSURE: "our choice, the order of a vented vessel",
            DEFAULT_OXYGEN: "that of air, a fifth of one bar",
        }
        for (state, value), members in groups.items():
            gas = state == "gas"
            word = "pressure" if gas else "concentration"
            found.append(
                Assumption(
                    text=f"{word} (default) of {', '.join(members)}",
                    value=value if gas else value * 1000,
                    unit="bar" if gas else "mmol/L",
                    source=sources[value],
                )
            )
        ions = [
            f"{name} as {part.species.formula}"
            for part, name in zip(used, names, strict=True)
            if part.species.formula is not None and part.species.formula.charge
        ]
        if ions:
            found.append(Assumption(text="stand for their compounds: " + ", ".join(ions)))
        found += [
            Assumption(
                text=f"Gibbs energy of {name}, estimated by its electrons",
                value=part.species.gibbs.value,
                unit="kJ/mol",
                source=part.species.gibbs.source,
            )
            for part, name in zip(used, names, strict=True)
            if part.species.gibbs.status == "estimated"
        ]
        return found
