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
    """Equations between the unknown coefficients, fluxes projected out.

    Parameters
    ----------
    names : tuple of str
        Unknown coefficients by compound; inside, production is positive.
    rows : tuple of tuple of Fraction
        Left sides of independent equations over them.
    constants : tuple of Fraction
        Their right sides, from the basis and all else that is fixed; zero if left out
        [mol/mol basis].
    """

    names: tuple[str, ...]
    rows: tuple[tuple[Fraction, ...], ...]
    constants: tuple[Fraction, ...] = ()

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

    def expressed(self, known: Iterable[str]) -> dict[str, tuple[dict[str, Fraction], Fraction]]:
        """Coefficients that follow from known ones, each as a sum over them and a constant.

        Parameters
        ----------
        known : iterable of str
            Coefficients that are known.

        Returns
        -------
        dict of str to (dict of str to Fraction, Fraction)
            For each that follows and is not known itself: factor of each known one, constant
            [mol/mol basis]; inside, production is positive.
        """
        given = [name for name in self.names if name in set(known)]
        hidden = [name for name in self.names if name not in given]
        order = [self.names.index(name) for name in (*hidden, *given)]
        table = [
            (*(row[place] for place in order), constant)
            for row, constant in zip(self.rows, self.constants, strict=True)
        ]
        form = eliminate(table, len(order) + 1)
        size = len(hidden)
        return {
            hidden[pivot]: (
                {name: -row[size + k] for k, name in enumerate(given) if row[size + k]},
                row[-1],
            )
            for pivot, row in zip(form.pivots, form.rows, strict=True)
            if pivot < size and not any(row[j] for j in range(size) if j != pivot)
        }

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
    last = len(place)
    rows = []
    for row, entries in zip(problem.rows, problem.matrix.rows, strict=True):
        if row.bounds.fixed:
            assert row.bounds.low is not None
            line = [Fraction(0)] * last + [row.bounds.low]
            for j, value in entries:
                if j in place:
                    line[place[j]] = value
                else:
                    fixed = problem.columns[j].bounds.low
                    assert fixed is not None
                    line[last] -= value * fixed
            rows.append(line)
    form = eliminate(rows, last + 1)
    first = len(others)
    # A pivot in the last column would say 0 = 1: then nothing is feasible, which is told elsewhere.
    kept_rows = [
        row for pivot, row in zip(form.pivots, form.rows, strict=True) if first <= pivot < last
    ]
    return CoefficientEquations(
        names,
        tuple(row[first:last] for row in kept_rows),
        tuple(row[last] for row in kept_rows),
    )
