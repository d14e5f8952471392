"""Third opinions on the biomass yield: two published methods beside elements and network.

Both ask how much of the electrons of the substrate must go to an acceptor to pay for making the
cell; neither knows a network. They hold for growth alone, on one organic substrate with ammonium.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from math import exp
from typing import TYPE_CHECKING

from yieldnet.chemistry.formula import FormulaTextError
from yieldnet.chemistry.gibbs import electron_energy
from yieldnet.chemistry.library import find_compound
from yieldnet.chemistry.thermochemistry import BIOMASS_ELECTRON_ENERGY, species_of
from yieldnet.model.case import Aim, AimDirection
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.prediction.heat import same_formula
from yieldnet.prediction.predict import balance_case, predict_case

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.model.case import Case
    from yieldnet.model.network import Compound

__all__ = [
    "PYRUVATE_TO_CELLS",
    "TRANSFER_EFFICIENCY",
    "YieldOpinion",
    "dissipation",
    "yield_by_dissipation",
    "yield_by_electrons",
    "yield_opinions",
]

TRANSFER_EFFICIENCY = 0.6
"""Share of the energy that is not lost in each transfer [-] (McCarty 1971, from memory)."""
PYRUVATE_TO_CELLS = 18.8
"""Energy from pyruvate and ammonium to cells [kJ per electron equivalent of cells].

3.33 kJ/g of C5H7O2N, 113 g for 20 electron equivalents (McCarty 1971, from memory).
"""
_MOST_CARBON = 6
"""Carbon atoms of a substrate up to which the dissipation correlation holds [-]."""
_CORRELATION = "Heijnen and van Dijken 1992, Biotechnol Bioeng 39:833; within 40 %"
_ELECTRONS = "McCarty 1971 (from memory), efficiency 0.6"
_NOT_PRODUCTS = (BIOMASS, "carbon dioxide", "water", "ammonia", "oxygen")


@dataclass(frozen=True, slots=True, kw_only=True)
class YieldOpinion:
    """Biomass yield of the basis by one way.

    Parameters
    ----------
    method : str
        Which way.
    value : float or None
        Biomass [C-mol/mol basis]; ``None`` where the method cannot say.
    reason : str
        Why not, where it cannot.
    source : str
        Where the method comes from.
    """

    method: str
    value: float | None
    reason: str = ""
    source: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Growth:
    """What the methods need of a case, or why it is not theirs."""

    carbon: Fraction
    electrons: Fraction
    biomass_electrons: Fraction
    acceptor: str


def dissipation(carbon: float, degree_of_reduction: float) -> float:
    """Gibbs energy that growth dissipates per C-mol of biomass.

    Parameters
    ----------
    carbon : float
        Carbon atoms of the substrate, 1 to 6 [-].
    degree_of_reduction : float
        Degree of reduction of the substrate per carbon, ammonia as zero [-].

    Returns
    -------
    float
        200 + 18 (6 - C)^1.8 + exp{[(3.8 - g)^2]^0.16 (3.6 + 0.4 C)} [kJ/C-mol].

    References
    ----------
    Heijnen and van Dijken 1992, Biotechnol Bioeng 39:833; within 40 %.

    Examples
    --------
    >>> round(dissipation(1, 6))
    698
    """
    gap = ((3.8 - degree_of_reduction) ** 2) ** 0.16
    length = float((_MOST_CARBON - carbon) ** 1.8)
    return 200 + 18 * length + exp(gap * (3.6 + 0.4 * carbon))


def yield_by_dissipation(
    dissipated: float,
    electrons: float,
    biomass_electrons: float,
    donor: float,
    acceptor: float,
    cells: float = float(BIOMASS_ELECTRON_ENERGY),
) -> float:
    """Biomass yield that dissipates a given Gibbs energy.

    Parameters
    ----------
    dissipated : float
        Gibbs energy dissipated [kJ/C-mol biomass].
    electrons : float
        Electrons of the substrate [mol/mol].
    biomass_electrons : float
        Electrons of biomass [mol/C-mol].
    donor, acceptor, cells : float
        Energy of an electron in substrate, acceptor and biomass, bicarbonate as zero [kJ/mol].

    Returns
    -------
    float
        Biomass [C-mol/mol substrate]; at most what the electrons allow.

    Notes
    -----
    Per C-mol of biomass the electrons in it fall from donor to cells and n others from donor to
    acceptor: dissipated = g (donor - cells) + n (donor - acceptor).
    """
    passed = (dissipated - biomass_electrons * (donor - cells)) / (donor - acceptor)
    return electrons / (biomass_electrons + max(passed, 0.0))


def yield_by_electrons(
    electrons: float,
    biomass_electrons: float,
    donor: float,
    acceptor: float,
    pyruvate: float,
    efficiency: float = TRANSFER_EFFICIENCY,
) -> float:
    """Biomass yield by electron equivalents.

    Parameters
    ----------
    electrons : float
        Electrons of the substrate [mol/mol].
    biomass_electrons : float
        Electrons of biomass [mol/C-mol].
    donor, acceptor, pyruvate : float
        Energy of an electron in each [kJ/mol].
    efficiency : float
        Share of energy kept in each transfer [-].

    Returns
    -------
    float
        Biomass [C-mol/mol substrate].

    Notes
    -----
    A = (dGp/e^n + dGpc/e) / (e dG), the electrons to the acceptor per electron in cells, with
    dGp = pyruvate - donor, n = 1 where that costs energy and -1 where it gives some, dGpc = 18.8,
    dG = donor - acceptor. The share of electrons in cells is 1 / (1 + A).
    """
    to_pyruvate = pyruvate - donor
    cost = to_pyruvate / efficiency if to_pyruvate > 0 else to_pyruvate * efficiency
    passed = (cost + PYRUVATE_TO_CELLS / efficiency) / (efficiency * (donor - acceptor))
    return electrons / biomass_electrons / (1 + max(passed, 0.0))


def yield_opinions(
    case: Case, amounts: Mapping[str, Fraction], engine: str
) -> tuple[YieldOpinion, ...]:
    """Best biomass by elements and by network, and what the two methods say.

    Parameters
    ----------
    case : Case
        The case; its measured values, demands and growth rate are left out here.
    amounts : mapping of str to Fraction
        Overall equation, production positive [mol/mol basis].
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    tuple of YieldOpinion
        Elements, network, dissipation, electron equivalents; empty without biomass [C-mol/mol].
    """
    coefficient = case.coefficient(BIOMASS)
    if coefficient is None or coefficient.side is not Direction.PRODUCED:
        return ()
    if not case.compound(BIOMASS).formula["C"]:
        return ()
    return (*_best(case, engine), *_published(case, amounts))


def _best(case: Case, engine: str) -> tuple[YieldOpinion, ...]:
    carbon = float(case.compound(BIOMASS).formula["C"])
    asked = replace(
        case,
        aim=Aim(direction=AimDirection.MOST, compound=BIOMASS, span=case.span),
        measured=(),
        correlations=(),
        demands=(),
        growth_rate=None,
    )
    found = []
    for method, wanted in (("elements alone, best", False), ("network, best", True)):
        if wanted and case.network is None:
            continue
        answer = predict_case(asked, engine) if wanted else balance_case(asked, engine)
        value = answer.aim.value if answer.aim is not None else None
        found.append(
            YieldOpinion(
                method=method,
                value=None if value is None else float(value) * carbon,
                reason="" if value is not None else f"{answer.outcome} without the statements",
                source="measured values and demands left out",
            )
        )
    return tuple(found)


def _published(case: Case, amounts: Mapping[str, Fraction]) -> tuple[YieldOpinion, ...]:
    names = ("Gibbs energy dissipation", "electron equivalents")
    growth = _growth(case, amounts)
    if isinstance(growth, str):
        return tuple(YieldOpinion(method=name, value=None, reason=growth) for name in names)
    electrons, cells = float(growth.electrons), float(growth.biomass_electrons)
    by_dissipation = by_electrons = None
    too_long = ""
    if growth.carbon > _MOST_CARBON:
        too_long = f"the correlation ends at {_MOST_CARBON} carbon atoms"
    else:
        donor, acceptor = _energies(case, growth, bicarbonate=True)
        per_carbon = float(growth.electrons / growth.carbon)
        if donor > acceptor:
            by_dissipation = yield_by_dissipation(
                dissipation(float(growth.carbon), per_carbon), electrons, cells, donor, acceptor
            )
    donor, acceptor = _energies(case, growth, bicarbonate=False)
    pyruvate = _electron_energy("pyruvate", bicarbonate=False)
    assert pyruvate is not None
    if donor > acceptor:
        by_electrons = yield_by_electrons(electrons, cells, donor, acceptor, pyruvate)
    uphill = f"passing electrons to {growth.acceptor} gives no energy"
    return (
        YieldOpinion(
            method=names[0],
            value=by_dissipation,
            reason="" if by_dissipation is not None else too_long or uphill,
            source=f"{_CORRELATION}; electrons to {growth.acceptor}",
        ),
        YieldOpinion(
            method=names[1],
            value=by_electrons,
            reason="" if by_electrons is not None else uphill,
            source=f"{_ELECTRONS}; electrons to {growth.acceptor}",
        ),
    )


def _electron_energy(name: str, bicarbonate: bool) -> float | None:
    entry = find_compound(name)
    known = species_of(name)
    if entry is None or not known:
        return None
    return electron_energy(known[0], entry.formula, bicarbonate)


def _energies(case: Case, growth: _Growth, bicarbonate: bool) -> tuple[float, float]:
    donor = _electron_energy(case.basis.name, bicarbonate)
    acceptor = _electron_energy(growth.acceptor, bicarbonate)
    assert donor is not None
    assert acceptor is not None
    return donor, acceptor


def _in_library(compound: Compound) -> bool:
    entry = find_compound(compound.name)
    return entry is not None and same_formula(entry.formula, compound.formula)


def _growth(case: Case, amounts: Mapping[str, Fraction]) -> _Growth | str:
    """What the methods need, or the reason why they do not hold for the case."""
    basis, biomass = case.basis, case.compound(BIOMASS).formula
    if any(symbol not in "CHON" for symbol, _ in biomass.elements):
        return "biomass holds elements besides C, H, O and N"
    if not basis.formula["C"]:
        return f"{basis.name} holds no carbon; cells that fix carbon dioxide are left out"
    if basis.name == "carbon monoxide":
        return "growth on carbon monoxide fixes carbon dioxide and is outside the methods"
    unknown = f"no Gibbs energy is known for {basis.name}"
    if not _in_library(basis) or any(symbol not in "CHON" for symbol, _ in basis.formula.elements):
        return unknown
    electrons = basis.formula.degree_of_reduction()
    if electrons <= 0:
        return f"{basis.name} has no electrons to give"
    if _electron_energy(basis.name, bicarbonate=True) is None:
        return unknown
    second = [
        item.name
        for item in case.coefficients
        if amounts.get(item.name, 0) < 0
        and item.name != "oxygen"
        and _gives_carbon(case.compound(item.name))
    ]
    if amounts.get("carbon dioxide", 0) < 0:
        return "net carbon dioxide is taken up, which is outside the methods"
    if second:
        return f"{', '.join(second)} is a second carbon source, which is outside the methods"
    for nitrogen in ("nitrate", "nitrogen", "nitrite"):
        if amounts.get(nitrogen, 0) < 0:
            return f"{nitrogen} takes electrons, and the methods count ammonium"
    acceptor = "oxygen" if amounts.get("oxygen", 0) < 0 else _fermentation_product(case, amounts)
    if acceptor is None:
        return "without oxygen the methods need one single product of known Gibbs energy"
    return _Growth(
        carbon=basis.formula["C"],
        electrons=electrons,
        biomass_electrons=biomass.degree_of_reduction() / biomass["C"],
        acceptor=acceptor,
    )


def _gives_carbon(compound: Compound) -> bool:
    """Whether it is a carbon source; urea, which has no electrons to give, is a nitrogen source."""
    if not compound.formula["C"]:
        return False
    try:
        return compound.formula.degree_of_reduction() > 0
    except FormulaTextError:
        return True


def _fermentation_product(case: Case, amounts: Mapping[str, Fraction]) -> str | None:
    made = [
        item.name
        for item in case.coefficients
        if item.name not in _NOT_PRODUCTS and amounts.get(item.name, 0) > 0
    ]
    if len(made) != 1 or not _in_library(case.compound(made[0])):
        return None
    return made[0] if _electron_energy(made[0], bicarbonate=True) is not None else None
