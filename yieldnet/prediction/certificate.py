"""The proof on paper: worths of compounds and carriers that show no higher yield is possible.

Give every compound and carrier a worth, in mol of the aim. If no reaction that is allowed makes
worth, what leaves the cell is worth no more than what entered: one line of arithmetic bounds the
aim. The worths are the duals of the balances, so the line ends exactly at the best value.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import yield_column
from yieldnet.prediction.fluxes import least_fluxes
from yieldnet.prediction.layers import flux_column

if TYPE_CHECKING:
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.layers import Layers

__all__ = ["Certificate", "CertificateReaction", "CertificateTerm", "certificate"]


@dataclass(frozen=True, slots=True)
class CertificateTerm:
    """One product of the line of arithmetic.

    Parameters
    ----------
    name : str
        What it is: the basis, a statement, maintenance.
    worth : Fraction
        Worth of one mol [mol aim/mol].
    amount : Fraction
        How much of it there is, as written [mol/mol basis].
    """

    name: str
    worth: Fraction
    amount: Fraction


@dataclass(frozen=True, slots=True)
class CertificateReaction:
    """A reaction with its flux and the worth it makes.

    Parameters
    ----------
    name : str
        The reaction.
    flux : Fraction
        In the pattern of least total flux [mol/mol basis].
    made : Fraction
        Worth made per turn: zero where it runs, never for the better where it does not
        [mol aim/mol].
    """

    name: str
    flux: Fraction
    made: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Certificate:
    """Proof of a best value.

    Parameters
    ----------
    value : Fraction
        Best value [mol/mol basis].
    terms : tuple of CertificateTerm
        Their products sum to ``value``.
    worths : tuple of (str, Fraction)
        Worth of each compound and carrier [mol aim/mol]; zero ones are left out.
    reactions : tuple of CertificateReaction
        All reactions that are not switched off.
    """

    value: Fraction
    terms: tuple[CertificateTerm, ...]
    worths: tuple[tuple[str, Fraction], ...]
    reactions: tuple[CertificateReaction, ...]


def certificate(optimiser: Optimiser, layers: Layers, best: Answer) -> Certificate:
    """Proof on paper of a best value.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    best : Answer
        Proven optimum of the final problem at the reconciled point.

    Returns
    -------
    Certificate
        Exact worths, the line of arithmetic and the fluxes that reach it.

    Notes
    -----
    Formula: aim = sum over everything held at a bound of (worth x amount); by linear programming
    duality no feasible point is better.
    """
    assert layers.bound is not None
    problem = best.problem
    terms: list[CertificateTerm] = []
    prefix = yield_column("")
    for j, column in enumerate(problem.columns):
        pull, value = best.reduced_costs[j], best.primal[j]
        if pull and value:
            name = column.name.removeprefix(prefix)
            sign = -1 if value < 0 else 1
            terms.append(CertificateTerm(name, sign * pull, abs(value)))
    for i, row in enumerate(problem.rows):
        dual, level = best.duals[i], best.activity(i)
        if dual and level:
            terms.append(CertificateTerm(row.name, dual, level))
    worths = tuple(
        (row.name.removesuffix(" balance"), -best.duals[i])
        for i, row in enumerate(problem.rows)
        if row.name.endswith(" balance") and best.duals[i]
    )
    pattern = least_fluxes(optimiser, layers, best)
    shut = Fraction(0)
    reactions = []
    for item in layers.bound.reactions:
        place = problem.column(flux_column(item.name))
        bounds = problem.columns[place].bounds
        if bounds.low == shut and bounds.high == shut:
            continue
        reactions.append(
            CertificateReaction(item.name, pattern[item.name], best.reduced_costs[place])
        )
    return Certificate(
        value=best.value, terms=tuple(terms), worths=worths, reactions=tuple(reactions)
    )
