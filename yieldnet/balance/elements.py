"""The balances over the cell: each element of the listed compounds, and charge where it counts."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import (
    add_coefficient_columns,
    add_statement_rows,
    yield_column,
)
from yieldnet.chemistry.formula import electron_valences
from yieldnet.model.binding import CHARGE, composition
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.optimum.problem import Bounds, ProblemBuilder

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.balance.statements import Statements
    from yieldnet.chemistry.formula import NitrogenReference
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem

__all__ = ["balances_by_name", "element_matrix", "element_problem", "nitrogen_reference"]

_WORDS = {
    "C": "carbon",
    "N": "nitrogen",
    "O": "oxygen",
    "H": "hydrogen",
    "S": "sulphur",
    "P": "phosphorus",
}


_NO_RESIDUAL: Mapping[str, Fraction] = {}


def element_matrix(
    case: Case, growth_residual: Mapping[str, Fraction] = _NO_RESIDUAL
) -> dict[str, dict[str, Fraction]]:
    """Amount of every conserved quantity in every compound of the overall equation.

    Parameters
    ----------
    case : Case
        The case.
    growth_residual : mapping of str to Fraction
        Elements that one mol of growth makes from nothing within its written digits; charged to
        biomass, so that both layers carry the same error [mol/mol].

    Returns
    -------
    dict of str to dict of str to Fraction
        Element (or charge), then compound, to atoms [mol/mol].
    """
    table: dict[str, dict[str, Fraction]] = {}
    for item in case.compounds:
        for element, atoms in composition(item.formula).items():
            table.setdefault(element, {})[item.name] = atoms
    if case.coefficient(BIOMASS) is not None:
        for element, extra in growth_residual.items():
            line = table.setdefault(element, {})
            line[BIOMASS] = line.get(BIOMASS, Fraction(0)) - extra
    return table


def element_problem(
    case: Case,
    statements: Statements,
    growth_residual: Mapping[str, Fraction] = _NO_RESIDUAL,
) -> Problem:
    """Linear problem of the elements alone, statements present but free.

    Parameters
    ----------
    case : Case
        The case.
    statements : Statements
        Its quantitative statements.
    growth_residual : mapping of str to Fraction
        See :func:`element_matrix`.

    Returns
    -------
    Problem
        One column a coefficient, one row an element, one row a statement.
    """
    builder = ProblemBuilder()
    add_coefficient_columns(builder, case)
    zero = Fraction(0)
    for element, atoms in element_matrix(case, growth_residual).items():
        builder.add_row(
            f"{element} balance",
            "elements",
            Bounds(zero, zero),
            {yield_column(name): value for name, value in atoms.items()},
        )
    add_statement_rows(builder, case, statements)
    return builder.build()


def nitrogen_reference(case: Case) -> NitrogenReference:
    """Nitrogen source whose degree of reduction counts as zero: nitrate if only that is fed."""
    fed = {item.name for item in case.coefficients if item.side is not Direction.PRODUCED}
    if "nitrate" in fed and not fed & {"ammonia", "urea"}:
        return "nitrate"
    if "nitrogen" in fed and not fed & {"ammonia", "urea", "nitrate"}:
        return "nitrogen"
    return "ammonia"


def balances_by_name(
    case: Case, growth_residual: Mapping[str, Fraction] = _NO_RESIDUAL
) -> dict[str, dict[str, Fraction]]:
    """Contents of every compound under the names an engineer gives them, best known first.

    Parameters
    ----------
    case : Case
        The case.
    growth_residual : mapping of str to Fraction
        See :func:`element_matrix`.

    Returns
    -------
    dict of str to dict of str to Fraction
        ``carbon``, ``electrons``, ``nitrogen`` and so on, then compound, to atoms or electron
        equivalents [mol/mol]. Electrons are left out where an element has no agreed valence.

    Notes
    -----
    The electrons are the degree of reduction (Roels 1983), a sum over the elements, so that their
    balance holds wherever those of the elements do.
    """
    table = element_matrix(case, growth_residual)
    valences: dict[str, Fraction] = {
        **{name: Fraction(v) for name, v in electron_valences(nitrogen_reference(case)).items()},
        CHARGE: Fraction(-1),
    }
    found = {"carbon": dict(table.get("C", {}))}
    if all(element in valences for element in table):
        electrons: dict[str, Fraction] = {}
        for element, contents in table.items():
            for name, atoms in contents.items():
                electrons[name] = electrons.get(name, Fraction(0)) + valences[element] * atoms
        found["electrons"] = electrons
    for element in (*_WORDS, *table):
        word = _WORDS.get(element, element)
        if element in table and word not in found:
            found[word] = dict(table[element])
    return {name: contents for name, contents in found.items() if any(contents.values())}
