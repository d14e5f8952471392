"""Degrees of freedom, exact: which coefficients the equalities of a layer tie together.

Fluxes are projected out: what is left are equations between coefficients alone, on which freedom,
calculability and redundancy are small linear algebra.

References
----------
van der Heijden, R. T. J. M., Heijnen, J. J., Hellinga, C., Romein, B., Luyben, K. Ch. A. M. (1994)
Linear constraint relations in biochemical reaction systems: I. Classification of the calculability
and the balanceability of conversion rates, Biotechnol. Bioeng. 43:3-10.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import yield_column
from yieldnet.foundation.exact import eliminate

if TYPE_CHECKING:
    from collections.abc import Iterable

    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem

__all__ = ["CoefficientEquations", "Freedom", "coefficient_equations"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Freedom:
    """Degrees of freedom of one layer.

    Parameters
    ----------
    layer : str
        Name of the rung.
    unknowns : int
        Unknown coefficients [-].
    free : int
        Dimension of the coefficient vectors that the equalities so far allow [-].
    free_in_fact : int or None
        The same, counting equalities that follow from signs alone; ``None`` without a point
        [-].
    """

    layer: str
    unknowns: int
    free: int
    free_in_fact: int | None = None

    @property
    def rank(self) -> int:
        """Independent equations among the unknown coefficients [-]."""
        return self.unknowns - self.free


@dataclass(frozen=True, slots=True)
class CoefficientEquations:
    """Homogeneous equations between the unknown coefficients, fluxes projected out.

    Parameters
    ----------
    names : tuple of str
        Unknown coefficients by compound.
    rows : tuple of tuple of Fraction
        Independent equations over them.
    """

    names: tuple[str, ...]
    rows: tuple[tuple[Fraction, ...], ...]

    def free(self, known: Iterable[str] = ()) -> int:
        """Dimension that is left when some coefficients are known [-]."""
        return len(self.names) - eliminate(self.with_known(known), len(self.names)).rank

    def calculable(self, known: Iterable[str] = ()) -> frozenset[str]:
        """Coefficients that follow when some are known, those included."""
        form = eliminate(self.with_known(known), len(self.names))
        return frozenset(
            self.names[pivot]
            for pivot, row in zip(form.pivots, form.rows, strict=True)
            if not any(entry for j, entry in enumerate(row) if j != pivot)
        )

    def with_known(self, known: Iterable[str]) -> list[tuple[Fraction, ...]]:
        """The equations, with one more for each coefficient that is known."""
        units: list[tuple[Fraction, ...]] = []
        for name in known:
            if name in self.names:
                unit = [Fraction(0)] * len(self.names)
                unit[self.names.index(name)] = Fraction(1)
                units.append(tuple(unit))
        return [*self.rows, *units]


def coefficient_equations(case: Case, problem: Problem) -> CoefficientEquations:
    """Equations between the unknown coefficients that the equalities of a problem imply.

    Parameters
    ----------
    case : Case
        Says which coefficients are unknown.
    problem : Problem
        Rows and columns with equal bounds are its equalities.

    Returns
    -------
    CoefficientEquations
        Independent equations.
    """
    names = tuple(
        item.name
        for item in case.coefficients
        if item.written is None or item.written.last_place is not None
    )
    kept = [problem.column(yield_column(name)) for name in names]
    wanted = set(kept)
    others = [
        j for j, column in enumerate(problem.columns) if j not in wanted and not column.bounds.fixed
    ]
    place = {j: at for at, j in enumerate([*others, *kept])}
    rows = []
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        if row.bounds.fixed:
            line = [Fraction(0)] * len(place)
            for j, value in entries:
                if j in place:
                    line[place[j]] = value
            rows.append(line)
    form = eliminate(rows, len(place))
    first = len(others)
    return CoefficientEquations(
        names,
        tuple(
            row[first:] for pivot, row in zip(form.pivots, form.rows, strict=True) if pivot >= first
        ),
    )
