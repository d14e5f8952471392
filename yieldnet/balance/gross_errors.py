"""Which measured value is wrong, if the balances say that one is.

Two ways to the same question. The generalised likelihood ratio asks for each value how much better
all would agree if only that one were wrong, and by how much it would be wrong. Serial elimination
takes the most suspect value out and tests the rest again until it passes. Values whose errors do
the same to every equation cannot be told apart and are named together. A third hypothesis is that
no value is wrong and a product was overlooked.

References
----------
Wang, N. S., Stephanopoulos, G. (1983) Application of macroscopic balances to the identification of
gross measurement errors, Biotechnol. Bioeng. 25:2177-2208.
Narasimhan, S., Mah, R. S. H. (1987) Generalized likelihood ratio method for gross error
identification, AIChE Journal 33:1514-1521.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.chi_square import chi_square_tail
from yieldnet.foundation.exact import root_of_square

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from yieldnet.balance.redundancy import DataTest, Redundancy
    from yieldnet.model.case import Measurement

__all__ = [
    "Elimination",
    "MissingProduct",
    "Suspect",
    "eliminate_serially",
    "missing_products",
    "suspects",
]

Column = tuple[Fraction, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Suspect:
    """The hypothesis that one measured value, or one of a group, is wrong and all others are right.

    Parameters
    ----------
    members : tuple of Measurement
        The value; several where the balances cannot tell them apart.
    bias : tuple of Fraction
        By how much each member would be wrong, if it were that one [mol/mol basis].
    bias_sd : tuple of Fraction
        Standard deviations of those [mol/mol basis].
    statistic : Fraction
        By how much the sum of squares would fall: the generalised likelihood ratio [-].
    statistic_left : Fraction
        What would be left of it [-].
    degrees_left : int
        Degrees of freedom that would be left [-].
    """

    members: tuple[Measurement, ...]
    bias: tuple[Fraction, ...]
    bias_sd: tuple[Fraction, ...]
    statistic: Fraction
    statistic_left: Fraction
    degrees_left: int

    @property
    def p_value(self) -> float:
        """Probability of so large a fall if nothing is wrong with this value [-]."""
        return chi_square_tail(float(self.statistic), 1)

    @property
    def p_left(self) -> float | None:
        """P value of the test of the others; ``None`` if nothing is left to test [-]."""
        if not self.degrees_left:
            return None
        return chi_square_tail(float(self.statistic_left), self.degrees_left)


@dataclass(frozen=True, slots=True, kw_only=True)
class Elimination:
    """One step of serial elimination.

    Parameters
    ----------
    members : tuple of Measurement
        What was taken out; several where the balances cannot tell them apart.
    test : DataTest or None
        Test of what is left; ``None`` if nothing is left to test.
    """

    members: tuple[Measurement, ...]
    test: DataTest | None


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingProduct:
    """The hypothesis that all values are right and one product was overlooked.

    Parameters
    ----------
    compounds : tuple of str
        The product; several where the balances cannot tell them apart.
    amounts : tuple of Fraction
        How much of each there would be [mol/mol basis].
    amount_sd : tuple of Fraction
        Standard deviations of those [mol/mol basis].
    statistic : Fraction
        By how much the sum of squares would fall [-].
    statistic_left : Fraction
        What would be left of it [-].
    degrees_left : int
        Degrees of freedom that would be left [-].
    """

    compounds: tuple[str, ...]
    amounts: tuple[Fraction, ...]
    amount_sd: tuple[Fraction, ...]
    statistic: Fraction
    statistic_left: Fraction
    degrees_left: int

    @property
    def p_left(self) -> float | None:
        """P value of the test with the product; ``None`` if nothing is left to test [-]."""
        if not self.degrees_left:
            return None
        return chi_square_tail(float(self.statistic_left), self.degrees_left)


def _parallel_groups(columns: Sequence[Column]) -> list[list[int]]:
    """Places of columns that are multiples of each other; columns of zeros are left out."""
    groups: dict[Column, list[int]] = {}
    for place, column in enumerate(columns):
        lead = next((value for value in column if value), None)
        if lead is not None:
            groups.setdefault(tuple(value / lead for value in column), []).append(place)
    return list(groups.values())


def _explained(data: Redundancy, column: Column) -> tuple[Fraction, Fraction, Fraction]:
    """Size of an error with this column that explains most, its s.d., and what it explains.

    Notes
    -----
    With deviations e of covariance P and the column f: size f'P^-1 e / f'P^-1 f, variance
    1 / f'P^-1 f, and the sum of squares falls by (f'P^-1 e)^2 / f'P^-1 f.
    """
    weight = data.weighed(column, column)
    pull = data.weighed(column, data.deviations)
    return pull / weight, root_of_square(1 / weight), pull * pull / weight


def suspects(data: Redundancy) -> tuple[Suspect, ...]:
    """Every redundant value or group, most suspect first.

    Parameters
    ----------
    data : Redundancy
        Equations between measured values.

    Returns
    -------
    tuple of Suspect
        By falling statistic.
    """
    found = []
    columns = [data.column(place) for place in range(len(data.measured))]
    for group in _parallel_groups(columns):
        sizes = [_explained(data, columns[place]) for place in group]
        statistic = sizes[0][2]
        found.append(
            Suspect(
                members=tuple(data.measured[place] for place in group),
                bias=tuple(size for size, _, _ in sizes),
                bias_sd=tuple(sd for _, sd, _ in sizes),
                statistic=statistic,
                statistic_left=data.statistic - statistic,
                degrees_left=data.degrees - 1,
            )
        )
    return tuple(sorted(found, key=lambda item: -item.statistic))


def eliminate_serially(
    measured: Sequence[Measurement],
    without: Callable[[Sequence[Measurement]], Redundancy],
    layer: str,
    level: float,
) -> tuple[Elimination, ...]:
    """Values taken out one after the other until the rest passes its test.

    Parameters
    ----------
    measured : sequence of Measurement
        All measured values.
    without : callable
        Equations between the values that are left.
    layer : str
        Layer whose equations count.
    level : float
        Probability with which correct values pass [-].

    Returns
    -------
    tuple of Elimination
        Steps; empty if all values pass together.
    """
    kept = list(measured)
    steps: list[Elimination] = []
    while True:
        data = without(kept)
        test = data.test(layer, level)
        if steps:
            steps[-1] = Elimination(members=steps[-1].members, test=test)
        if test is None or test.passed:
            return tuple(steps)
        worst = suspects(data)[0]
        steps.append(Elimination(members=worst.members, test=None))
        # One of a group is enough: without it the others are tied to nothing any more.
        kept.remove(worst.members[0])


def missing_products(data: Redundancy) -> tuple[MissingProduct, ...]:
    """Compounds that, as an overlooked product, would make the balances close better.

    Parameters
    ----------
    data : Redundancy
        Equations between measured values, with the columns of the compounds that are tried.

    Returns
    -------
    tuple of MissingProduct
        Those of which a positive amount is missing, by falling statistic; compounds of the same
        composition ratio stand together.
    """
    if not data.rows:
        return ()
    # What a mol adds counts on the left side, as an error of a value does, with the other sign.
    columns = [tuple(-value for value in column) for _, column in data.others]
    found = []
    for parallel in _parallel_groups(columns):
        # Of compounds with parallel columns some may be missing and others too much.
        group = [place for place in parallel if data.weighed(columns[place], data.deviations) > 0]
        if not group:
            continue
        sizes = [_explained(data, columns[place]) for place in group]
        statistic = sizes[0][2]
        found.append(
            MissingProduct(
                compounds=tuple(data.others[place][0] for place in group),
                amounts=tuple(size for size, _, _ in sizes),
                amount_sd=tuple(sd for _, sd, _ in sizes),
                statistic=statistic,
                statistic_left=data.statistic - statistic,
                degrees_left=data.degrees - 1,
            )
        )
    return tuple(sorted(found, key=lambda item: -item.statistic))
