"""The section ``plant`` of a case: what a plant is to make, and under which conditions."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan

__all__ = ["Aeration", "Phases", "Plant", "Price", "Stated"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Stated:
    """A number of the section with the place where it was written.

    Parameters
    ----------
    value : Fraction
        In the unit that the key says.
    text : str
        As written.
    name : str
        What it belongs to, such as a step or a compound; empty where the key says it.
    span : SourceSpan or None
        Where it was written.
    """

    value: Fraction
    text: str
    name: str = ""
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Price:
    """Price of a compound.

    Parameters
    ----------
    name : str
        Compound, base or form of the nitrogen source.
    value : Fraction
        Per kg of pure compound, in ``currency`` [1/kg].
    currency : str
        As written.
    span : SourceSpan or None
        Where it was written.
    """

    name: str
    value: Fraction
    currency: str
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Phases:
    """A growth phase, then a production phase, then a turnaround.

    Parameters
    ----------
    growth : Stated
        Time of growth at most biomass [h].
    production : Stated or None
        Time of production; ``None`` if titre over productivity tells it [h].
    turnaround : Stated or None
        Time for harvest, cleaning, sterilising and filling [h].
    inoculum : Stated or None
        Volume of the seed over that of the vessel [-].
    cells : Stated or None
        Dry weight at the end of growth [kg/m3].
    span : SourceSpan or None
        Where it was written.
    """

    growth: Stated
    production: Stated | None = None
    turnaround: Stated | None = None
    inoculum: Stated | None = None
    cells: Stated | None = None
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Aeration:
    """How air is given.

    Parameters
    ----------
    pressure : Stated or None
        Absolute pressure in the vessel [bar].
    vvm : Stated or None
        Dry air at 0 degC and 1.01325 bar, per volume of broth [1/min].
    kla : Stated or None
        What the vessel reaches [1/h].
    dissolved_oxygen : Stated or None
        What the cells need, over saturation with air at the pressure of the vessel [-].
    span : SourceSpan or None
        Where it was written.
    """

    pressure: Stated | None = None
    vvm: Stated | None = None
    kla: Stated | None = None
    dissolved_oxygen: Stated | None = None
    span: SourceSpan | None = field(default=None, compare=False, repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Plant:
    """What a plant is to make.

    Parameters
    ----------
    product : str
        Compound that is sold, on the right of the equation.
    product_given : bool
        Whether the section names it, rather than the aim.
    output : Stated
        Product sold [kg/y].
    on_stream : Stated
        Hours of work in a year [h/y].
    recovery : tuple of Stated
        Share that each downstream step keeps, by its name [-].
    purities : tuple of Stated
        Pure compound per feedstock, by compound [g/g].
    titre : Stated or None
        Product in the broth, as free acid [kg/m3].
    productivity : Stated or None
        Product per volume and time; with phases, of the production phase [kg/m3/h].
    phases : Phases or None
        Growth before production.
    ph : Stated or None
        pH of the broth [-].
    base : str
        What holds the pH; empty for none.
    nitrogen_feed : str
        Form in which the nitrogen source is fed; empty for the usual one.
    temperature : Stated or None
        Temperature of the broth [degC].
    aeration : Aeration or None
        How air is given.
    stirrer : Stated or None
        Power of the stirrer per volume of broth [kW/m3].
    vessel : Stated or None
        Whole volume of one vessel [m3].
    fill : Stated or None
        Broth in a vessel over its volume [-].
    prices : tuple of Price
        All in one currency.
    span : SourceSpan or None
        Where it was written.
    """

    product: str
    output: Stated
    on_stream: Stated
    product_given: bool = True
    recovery: tuple[Stated, ...] = ()
    purities: tuple[Stated, ...] = ()
    titre: Stated | None = None
    productivity: Stated | None = None
    phases: Phases | None = None
    ph: Stated | None = None
    base: str = ""
    nitrogen_feed: str = ""
    temperature: Stated | None = None
    aeration: Aeration | None = None
    stirrer: Stated | None = None
    vessel: Stated | None = None
    fill: Stated | None = None
    prices: tuple[Price, ...] = ()
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def overall_recovery(self) -> Fraction:
        """Product sold over product in the broth; 1 where no step is given [-]."""
        found = Fraction(1)
        for item in self.recovery:
            found *= item.value
        return found

    def purity(self, compound: str) -> Fraction | None:
        """Pure compound per feedstock; ``None`` if not given [g/g]."""
        return next((item.value for item in self.purities if item.name == compound), None)

    def price(self, name: str) -> Price | None:
        """Price by name; ``None`` if not given."""
        return next((item for item in self.prices if item.name == name), None)
