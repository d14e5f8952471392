"""What the balances demand of the measured values: equations among them alone, and their test.

Coefficients that are not measured are eliminated. What is left are equations in which only measured
values and known numbers stand. A value that stands in one of them is redundant: the others say what
it should be. The deviations from these equations, weighed with the errors of the values, are what a
chi-square test judges.

References
----------
van der Heijden, R. T. J. M., Heijnen, J. J., Hellinga, C., Romein, B., Luyben, K. Ch. A. M. (1994)
Linear constraint relations in biochemical reaction systems: I and II, Biotechnol. Bioeng. 43:3-20.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING

from yieldnet.balance.chi_square import chi_square_limit, chi_square_tail
from yieldnet.balance.covariance import covariance_of
from yieldnet.balance.statements import is_exact, side_sign
from yieldnet.foundation.exact import eliminate, inverse, product

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.balance.freedom import CoefficientEquations
    from yieldnet.foundation.exact import Matrix
    from yieldnet.model.case import Case, Correlation, Measurement

__all__ = ["DataTest", "Redundancy", "RedundancyEquation", "redundancy_of"]

_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class RedundancyEquation:
    """One equation in which only measured values and known numbers stand.

    Parameters
    ----------
    name : str
        ``carbon balance``, ``electron balance`` and the like; empty where no single balance says
        it.
    terms : tuple of (Measurement, Fraction)
        Measured values, positive on their declared sides, with their factors [-].
    constant : Fraction
        What the terms should sum to [mol/mol basis].
    """

    name: str
    terms: tuple[tuple[Measurement, Fraction], ...]
    constant: Fraction

    def sum(self) -> Fraction:
        """What the terms do sum to [mol/mol basis]."""
        return sum((factor * item.value for item, factor in self.terms), _ZERO)


@dataclass(frozen=True, slots=True, kw_only=True)
class DataTest:
    """Chi-square test of measured values against the balances of one layer.

    Parameters
    ----------
    layer : str
        The last layer whose equations count.
    statistic : Fraction
        Sum of squared deviations, weighed with the errors [-].
    degrees : int
        Degrees of freedom: independent equations between measured values [-].
    level : float
        Probability with which correct values pass [-].
    """

    layer: str
    statistic: Fraction
    degrees: int
    level: float

    @property
    def limit(self) -> float:
        """Largest statistic that passes [-]."""
        return chi_square_limit(self.level, self.degrees)

    @property
    def p_value(self) -> float:
        """Probability of so large a statistic by errors alone [-]."""
        return chi_square_tail(float(self.statistic), self.degrees)

    @property
    def passed(self) -> bool:
        """Whether the values agree within their errors."""
        return self.p_value >= 1 - self.level


@dataclass(frozen=True, kw_only=True)
class Redundancy:
    """Equations between measured values, with the covariance of those values.

    Parameters
    ----------
    measured : tuple of Measurement
        Measured values with errors, the columns of ``rows``.
    covariance : tuple of tuple of Fraction
        Of those values [(mol/mol)^2].
    rows : tuple of tuple of Fraction
        Independent equations over them.
    constants : tuple of Fraction
        Right sides [mol/mol basis].
    names : tuple of str
        Name of each equation, perhaps empty.
    consistent : bool
        Whether values said to be exact agree among themselves.
    others : tuple of (str, tuple of Fraction)
        For each further compound that could be listed, what a mol of it adds to each equation.
    """

    measured: tuple[Measurement, ...]
    covariance: Matrix
    rows: Matrix
    constants: tuple[Fraction, ...]
    names: tuple[str, ...]
    consistent: bool = True
    others: tuple[tuple[str, tuple[Fraction, ...]], ...] = ()

    @property
    def degrees(self) -> int:
        """Independent equations [-]."""
        return len(self.rows)

    def equations(self) -> tuple[RedundancyEquation, ...]:
        """The equations with their measured values."""
        return tuple(
            RedundancyEquation(
                name=name,
                terms=tuple((m, f) for m, f in zip(self.measured, row, strict=True) if f),
                constant=constant,
            )
            for name, row, constant in zip(self.names, self.rows, self.constants, strict=True)
        )

    @cached_property
    def deviations(self) -> tuple[Fraction, ...]:
        """How far each equation is from closing with the values as measured [mol/mol basis]."""
        return tuple(item.sum() - item.constant for item in self.equations())

    @cached_property
    def _spread_of_rows(self) -> Matrix:
        return product(self.rows, self.covariance)

    @cached_property
    def deviation_covariance(self) -> Matrix:
        """Covariance of the deviations [(mol/mol basis)^2]."""
        return product(self._spread_of_rows, tuple(zip(*self.rows, strict=True)))

    @cached_property
    def _weights(self) -> Matrix:
        return inverse(self.deviation_covariance) if self.rows else ()

    def weighed(self, left: Sequence[Fraction], right: Sequence[Fraction]) -> Fraction:
        """Product of two vectors of deviations under the inverse of their covariance."""
        total = _ZERO
        for a, row in zip(left, self._weights, strict=True):
            if a:
                total += a * sum((w * b for w, b in zip(row, right, strict=True)), _ZERO)
        return total

    @property
    def statistic(self) -> Fraction:
        """Sum of squares that has a chi-square distribution if all errors are as stated [-].

        Notes
        -----
        h = e' P^-1 e with the deviations e and their covariance P (Wang and Stephanopoulos 1983).
        """
        return self.weighed(self.deviations, self.deviations)

    def test(self, layer: str, level: float) -> DataTest | None:
        """Chi-square test; ``None`` if the balances tie no measured values together."""
        if not self.rows:
            return None
        return DataTest(layer=layer, statistic=self.statistic, degrees=self.degrees, level=level)

    def column(self, place: int) -> tuple[Fraction, ...]:
        """What a unit error of one measured value does to each equation [-]."""
        return tuple(row[place] for row in self.rows)

    def adjustments(self) -> tuple[Fraction, ...]:
        """What least squares adds to each value so that all equations hold [mol/mol basis].

        Notes
        -----
        -V R' P^-1 e with the covariance V of the values and the equations R.
        """
        if not self.rows:
            return tuple(_ZERO for _ in self.measured)
        scaled = [
            sum((w * b for w, b in zip(row, self.deviations, strict=True)), _ZERO)
            for row in self._weights
        ]
        return tuple(
            -sum((a * b for a, b in zip(column, scaled, strict=True)), _ZERO)
            for column in zip(*self._spread_of_rows, strict=True)
        )

    @cached_property
    def adjustment_covariance(self) -> Matrix:
        """Covariance of the adjustments: V R' P^-1 R V [(mol/mol basis)^2]."""
        if not self.rows:
            return tuple(tuple(_ZERO for _ in self.measured) for _ in self.measured)
        across = tuple(zip(*self._spread_of_rows, strict=True))
        return product(product(across, self._weights), self._spread_of_rows)

    def adjusted_covariance(self) -> Matrix:
        """Covariance of the adjusted values: V - V R' P^-1 R V [(mol/mol basis)^2]."""
        return tuple(
            tuple(a - b for a, b in zip(before, less, strict=True))
            for before, less in zip(self.covariance, self.adjustment_covariance, strict=True)
        )

    @cached_property
    def _precision(self) -> Matrix:
        return inverse(self.covariance)

    def own_share(self, place: int) -> Fraction:
        """Share of its own error that a measured value shows in its adjustment, 0 to 1 [-].

        Notes
        -----
        Diagonal of R' P^-1 R over that of V^-1: 0 for a value that nothing checks, 1 for one that
        the others tell exactly. Without correlations it is the diagonal of V R' P^-1 R; with them
        that one may leave 0 to 1, since an adjustment then answers to other errors too.
        """
        if not self.rows:
            return _ZERO
        column = self.column(place)
        return self.weighed(column, column) / self._precision[place][place]


def redundancy_of(
    case: Case,
    equations: CoefficientEquations,
    measured: Sequence[Measurement],
    correlations: Sequence[Correlation] = (),
    balances: Mapping[str, Mapping[str, Fraction]] | None = None,
    others: Sequence[str] = (),
) -> Redundancy:
    """Equations between the measured values of a case.

    Parameters
    ----------
    case : Case
        Says on which side each coefficient is positive.
    equations : CoefficientEquations
        What a layer's equalities say of the unknown coefficients.
    measured : sequence of Measurement
        Measured values, those without an error included.
    correlations : sequence of Correlation
        Correlations of their errors.
    balances : mapping of str to mapping, optional
        Well-known balances, content of each compound by name; where one of them is an equation
        between measured values, it is taken under its name, in the order given.
    others : sequence of str
        Names among the equations' unknowns that no case lists: see :class:`Redundancy`. One that an
        equation without measured values does not allow by itself is left out.

    Returns
    -------
    Redundancy
        Independent equations; none if nothing is tied together.
    """
    # A coefficient that the equation writes exactly may be measured too, as biomass by growth rate.
    exact = {
        item.name: item.written.value
        for item in case.coefficients
        if is_exact(item) and item.written is not None
    } | {item.compound: item.value for item in measured if not item.sd}
    kept = tuple(item for item in measured if item.sd)
    first: dict[str, int] = {}
    for place, item in enumerate(kept):
        first.setdefault(item.compound, place)
    free = [name for name in first if name not in exact]
    signs = {item.name: side_sign(item.side) for item in case.coefficients}
    form, barred, consistent = _eliminated(equations, free, exact, signs, others)
    # A balance in which a coefficient that is not measured has a share is none of these equations.
    hidden = set(equations.names) - {*free, *exact, *others}
    lines_of = {
        name: [content.get(compound, _ZERO) * signs[compound] for compound in free]
        for name, content in (balances or {}).items()
        if not any(content.get(compound) for compound in hidden)
    }
    form, names = _named_first(form, lines_of, len(free))
    size = len(kept)

    def over_values(row: Sequence[Fraction]) -> tuple[Fraction, ...]:
        line = [_ZERO] * size
        for name, factor in zip(free, row, strict=False):
            line[first[name]] = factor
        return tuple(line)

    lines = [over_values(row) for row in form]
    added = [row[len(free) : -1] for row in form]
    labels, ends = list(names), [row[-1] for row in form]
    for place, item in enumerate(kept):
        if item.compound in exact or first[item.compound] != place:
            line = [_ZERO] * size
            line[place] = Fraction(1 if item.compound in exact else -1)
            if item.compound not in exact:
                line[first[item.compound]] = Fraction(1)
            lines.append(tuple(line))
            added.append(tuple(_ZERO for _ in others))
            labels.append(f"values of {item.compound}")
            ends.append(exact.get(item.compound, _ZERO))
    return Redundancy(
        measured=kept,
        covariance=covariance_of(kept, correlations),
        rows=tuple(lines),
        constants=tuple(ends),
        names=tuple(labels),
        consistent=consistent,
        others=tuple(
            (name, tuple(row[k] for row in added))
            for k, name in enumerate(others)
            if name not in barred
        ),
    )


def _eliminated(
    equations: CoefficientEquations,
    free: Sequence[str],
    exact: Mapping[str, Fraction],
    signs: Mapping[str, int],
    others: Sequence[str],
) -> tuple[list[tuple[Fraction, ...]], set[str], bool]:
    """Equations over ``free``, ``others`` and a right side, each name positive on its own side.

    With them come the names of others that cannot be there alone, and whether what is exact agrees.
    """
    inside = {*free, *others, *exact}
    hidden = [name for name in equations.names if name not in inside]
    order = [*hidden, *free, *others]
    place = {name: k for k, name in enumerate(equations.names)}
    table = []
    for row, constant in zip(equations.rows, equations.constants, strict=True):
        known = sum(
            (row[place[name]] * signs[name] * exact[name] for name in exact if name in place),
            _ZERO,
        )
        line = [row[place[name]] * signs.get(name, 1) for name in order]
        table.append([*line, constant - known])
    form = eliminate(table, len(order) + 1)
    start, stop = len(hidden), len(hidden) + len(free)
    found = list(zip(form.pivots, form.rows, strict=True))
    rows = [row[start:] for pivot, row in found if start <= pivot < stop]
    # Where no measured value stands, nothing can make up for what another compound brings.
    barred = {
        name
        for pivot, row in found
        if pivot >= stop
        for name, factor in zip(others, row[stop:-1], strict=True)
        if factor
    }
    return rows, barred, len(order) not in form.pivots


def _named_first(
    form: list[tuple[Fraction, ...]], balances: Mapping[str, Sequence[Fraction]], size: int
) -> tuple[list[tuple[Fraction, ...]], list[str]]:
    """The same equations, as far as possible in the form of well-known balances.

    The rows come reduced: a combination of them has its factors in the columns of their pivots.
    """
    pivots = [next(k for k, value in enumerate(row) if value) for row in form]
    rows: list[tuple[Fraction, ...]] = []
    names: list[str] = []

    def is_new(row: tuple[Fraction, ...]) -> bool:
        return eliminate([other[:size] for other in (*rows, row)], size).rank > len(rows)

    for name, line in balances.items():
        factors = [line[pivot] for pivot in pivots]
        row = tuple(
            sum((f * other[k] for f, other in zip(factors, form, strict=True)), _ZERO)
            for k in range(len(form[0]) if form else 0)
        )
        if row and list(row[:size]) == list(line) and is_new(row):
            rows.append(row)
            names.append(name)
    for row in form:
        if is_new(row):
            rows.append(row)
            names.append("")
    return rows, names
