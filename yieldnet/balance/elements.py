"""The balances over the cell: each element of the listed compounds, and charge where it counts."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import (
    add_coefficient_columns,
    add_statement_rows,
    yield_column,
)
from yieldnet.model.binding import composition
from yieldnet.model.network import BIOMASS
from yieldnet.optimum.problem import Bounds, ProblemBuilder

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.balance.statements import Statements
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem

__all__ = ["element_matrix", "element_problem"]

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
