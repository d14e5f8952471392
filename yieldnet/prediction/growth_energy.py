"""Dry weight per ATP: what growth and maintenance spend at the aim, beside published numbers.

References
----------
Stouthamer, A. H. (1973) Antonie van Leeuwenhoek 39:545: 28.8 g/mol, the most in theory on glucose.
Bauchop, T. and Elsden, S. R. (1960) Journal of General Microbiology 23:457: 10.5 g/mol, an average.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.growth_atp import LEAST_SEEN, MOST_IN_THEORY
from yieldnet.foundation.findings import Finding, Severity
from yieldnet.model.network import BIOMASS, GROWTH, CarrierKind
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.layers import maintenance_row

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.prediction.layers import MaintenanceRow

__all__ = ["AtpYield", "atp_of_growth", "atp_yield", "doubtful_atp_yield"]

_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class AtpYield:
    """Dry weight made per ATP that growth and maintenance spend.

    Parameters
    ----------
    range : Range
        The yield [g/mol ATP]; one number where biomass is unique.
    growth : Fraction
        ATP that growth spends [mol/g].
    with_maintenance : bool
        Whether maintenance counts; without it the case names no rate that would give it.
    """

    range: Range
    growth: Fraction
    with_maintenance: bool


def atp_of_growth(bound: BoundNetwork) -> Fraction | None:
    """Energy carriers that the growth equation spends per mol of biomass.

    Parameters
    ----------
    bound : BoundNetwork
        The network in numbers.

    Returns
    -------
    Fraction or None
        ATP and its like [mol/mol]; ``None`` without growth, or if growth spends none.
    """
    growth = bound.reaction(GROWTH)
    if growth is None:
        return None
    energy = {item.name for item in bound.network.carriers if item.kind is CarrierKind.ENERGY}
    amounts = dict(growth.coefficients)
    made = amounts.get(BIOMASS, _ZERO)
    spent = -sum((amount for name, amount in amounts.items() if name in energy), _ZERO)
    return spent / made if made > 0 and spent > 0 else None


def atp_yield(case: Case, bound: BoundNetwork | None, biomass: Range | None) -> AtpYield | None:
    """Yield of dry weight on ATP at the aim.

    Parameters
    ----------
    case : Case
        The case.
    bound : BoundNetwork or None
        The network in numbers.
    biomass : Range or None
        Biomass of the filled-in equation [mol/mol basis].

    Returns
    -------
    AtpYield or None
        ``None`` without a network, without growth, or if growth spends no ATP.

    Notes
    -----
    Y_ATP = M Y / (a Y + m): Y mol biomass of M g/mol per mol basis, a mol ATP per mol biomass in
    the growth equation, m mol ATP maintenance per mol basis. ATP spent on the way to the
    precursors of growth is in the reactions of the network and not in Y_ATP; spare ATP is not
    counted either.
    """
    if bound is None or biomass is None:
        return None
    spent = atp_of_growth(bound)
    mass = case.compound(BIOMASS).weight.molar_mass
    low = biomass.low
    if spent is None or not mass or low is None or low < 0 or biomass.high == 0:
        return None
    row = maintenance_row(case)
    return AtpYield(
        range=Range(
            _grams_per_atp(low, spent, mass, row), _grams_per_atp(biomass.high, spent, mass, row)
        ),
        growth=spent / mass,
        with_maintenance=row is not None,
    )


def _grams_per_atp(
    biomass: Fraction | None, spent: Fraction, mass: Fraction, row: MaintenanceRow | None
) -> Fraction:
    """Yield on ATP at one amount of biomass, ``None`` meaning beyond all bounds [g/mol]."""
    per_biomass = spent + (row.per_biomass if row else _ZERO)
    constant = row.constant if row else _ZERO
    if biomass is None or not constant:
        return mass / per_biomass
    return mass * biomass / (per_biomass * biomass + constant)


def doubtful_atp_yield(found: AtpYield | None, span: SourceSpan | None) -> tuple[Finding, ...]:
    """Say so if a yield on ATP lies wholly outside what is known.

    Parameters
    ----------
    found : AtpYield or None
        The yield.
    span : SourceSpan or None
        Place of the case.

    Returns
    -------
    tuple of Finding
        A warning above the most in theory, a note below the least that is reported.
    """
    if found is None:
        return ()
    low, high = found.range.low, found.range.high
    if low is not None and low > MOST_IN_THEORY.value:
        what, known, severity = "more than theory allows", MOST_IN_THEORY, Severity.WARNING
        number = low
    elif high is not None and high < LEAST_SEEN.value:
        what, known, severity = "less than is reported", LEAST_SEEN, Severity.NOTE
        number = high
    else:
        return ()
    return (
        Finding(
            code="YN880",
            message=f"growth makes {what} of an ATP",
            where=span,
            left=f"here {float(number):.3g} g/mol ATP",
            right=f"known {float(known.value):.3g} g/mol ATP, {known.source}",
            hint="Check the ATP of the growth equation and the maintenance.",
            severity=severity,
        ),
    )
