"""Statements of a case as rows: measured values, written decimals, growth, demands.

Inside, production is positive; a statement's row is positive on the declared side of its compound,
so its bounds are the numbers the user wrote.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.covariance import pool
from yieldnet.foundation.exact import root_of_square
from yieldnet.model.case import BAND, Measurement
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.optimum.problem import FREE, Bounds, crossing_bounds

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.balance.covariance import Pooled
    from yieldnet.model.case import Case, Correlation, Demand, OverallCoefficient
    from yieldnet.optimum.problem import Problem, ProblemBuilder

__all__ = [
    "GROWTH_OVER_UPTAKE",
    "Statements",
    "add_coefficient_columns",
    "add_statement_rows",
    "band",
    "is_exact",
    "kind_of",
    "side_sign",
    "statements_of",
    "with_bands",
    "with_demands",
    "with_point",
    "yield_column",
]

GROWTH_OVER_UPTAKE = "growth rate / substrate uptake"
"""Name of the biomass coefficient that follows from growth rate and substrate uptake."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Statements:
    """The quantitative statements of a case.

    Parameters
    ----------
    measured : tuple of Measurement
        Measured values, written decimals and growth over uptake, those of the aim left out.
    set_aside : tuple of Measurement
        Those of the aim's own coefficient.
    demands : tuple of Demand
        As in the case.
    correlations : tuple of Correlation
        As in the case.
    """

    measured: tuple[Measurement, ...]
    set_aside: tuple[Measurement, ...]
    demands: tuple[Demand, ...]
    correlations: tuple[Correlation, ...] = ()

    def pooled(self) -> Pooled:
        """One value for each measured coefficient, with the covariance of all."""
        return pool(self.measured, self.correlations)

    def of(self, compound: str) -> tuple[Measurement, ...]:
        """Measured values of one coefficient, the aim's own included."""
        return tuple(
            item for item in (*self.measured, *self.set_aside) if item.compound == compound
        )

    def measured_compounds(self) -> tuple[str, ...]:
        """Coefficients with a measured value, each once."""
        return tuple(dict.fromkeys(item.compound for item in self.measured))


def statements_of(case: Case) -> Statements:
    """Statements of a case, growth over uptake and written decimals among the measured values.

    Notes
    -----
    A written decimal such as 1.79 stands for the interval of its last digit, 1.785 to 1.795: its
    standard deviation is a quarter of one unit in the last place, so that the band of two standard
    deviations is that interval. Growth rate over substrate uptake gives g biomass per mol basis;
    relative variances add.
    """
    found: list[Measurement] = list(case.measured)
    own = case.aim.compound if case.aim and not case.aim.is_energy else None
    for item in case.coefficients:
        # An exact coefficient is a row of its own, unless it is the aim's, which is set aside.
        if item.written is not None and (item.written.last_place is not None or item.name == own):
            place = item.written.last_place
            found.append(
                Measurement(
                    compound=item.name,
                    value=item.written.value,
                    sd=None if place is None else place / (2 * BAND),
                    text=item.written.text,
                    label=f"written {item.name}",
                    span=item.span,
                )
            )
    growth = _growth_over_uptake(case)
    if growth is not None:
        found.append(growth)
    return Statements(
        measured=tuple(item for item in found if item.compound != own),
        set_aside=tuple(item for item in found if item.compound == own),
        demands=case.demands,
        correlations=case.correlations,
    )


def _growth_over_uptake(case: Case) -> Measurement | None:
    rate, uptake = case.growth_rate, case.substrate_uptake
    if rate is None or uptake is None or case.coefficient(BIOMASS) is None:
        return None
    mass = case.compound(BIOMASS).weight.molar_mass
    if not mass:
        return None
    value = rate.value / uptake.value / mass
    variance = sum(((item.sd / item.value) ** 2 for item in (rate, uptake) if item.sd), Fraction(0))
    return Measurement(
        compound=BIOMASS,
        value=value,
        sd=value * root_of_square(variance) if variance else None,
        text=f"{rate.text} / {uptake.text}",
        label=GROWTH_OVER_UPTAKE,
        span=rate.span,
    )


def kind_of(item: Measurement) -> str:
    """``written`` for a decimal of the equation, else ``measured``."""
    return "written" if item.label.startswith("written ") else "measured"


def is_exact(item: OverallCoefficient) -> bool:
    """Whether a coefficient is written as an integer, a fraction, or with ``exact``."""
    return item.written is not None and item.written.last_place is None


def yield_column(compound: str) -> str:
    """Name of the column that holds a compound's coefficient, production positive."""
    return f"yield of {compound}"


def side_sign(side: Direction) -> int:
    """+1 where production counts as positive, -1 where consumption does."""
    return -1 if side is Direction.CONSUMED else 1


def add_coefficient_columns(builder: ProblemBuilder, case: Case) -> None:
    """Add the basis (1 mol taken up) and every coefficient of the overall equation."""
    one = Fraction(-1)
    builder.add_column(yield_column(case.basis.name), Bounds(one, one))
    for item in case.coefficients:
        builder.add_column(yield_column(item.name), crossing_bounds(item.side))


def add_statement_rows(builder: ProblemBuilder, case: Case, statements: Statements) -> None:
    """Add a row for every statement: exact coefficients fixed, the others free for now.

    The functions below give the free rows their bounds.
    """
    aim = case.aim.compound if case.aim and not case.aim.is_energy else ""
    for item in case.coefficients:
        # The aim's own coefficient is set aside, as its measured values are.
        if is_exact(item) and item.name != aim:
            assert item.written is not None
            builder.add_row(
                f"written {item.name}",
                "elements",
                Bounds(item.written.value, item.written.value),
                {yield_column(item.name): Fraction(side_sign(item.side))},
            )
    names = [(item.label, item.compound, "measured") for item in statements.measured]
    names += [(f"demand {item.compound}", item.compound, "demands") for item in statements.demands]
    for label, compound, layer in names:
        coefficient = case.coefficient(compound)
        assert coefficient is not None
        builder.add_row(
            label, layer, FREE, {yield_column(compound): Fraction(side_sign(coefficient.side))}
        )


def _demand_bounds(statements: Statements) -> dict[str, Bounds]:
    return {f"demand {item.compound}": Bounds(item.low, item.high) for item in statements.demands}


def band(item: Measurement) -> Bounds:
    """Band of two standard deviations round a measured value."""
    half = BAND * (item.sd or Fraction(0))
    return Bounds(item.value - half, item.value + half)


def with_bands(problem: Problem, statements: Statements) -> Problem:
    """The problem with every measured coefficient inside its band."""
    return problem.with_rows({item.label: band(item) for item in statements.measured})


def with_point(problem: Problem, statements: Statements, point: Mapping[str, Fraction]) -> Problem:
    """The problem with every measured coefficient at the reconciled point."""
    return problem.with_rows(
        {
            item.label: Bounds(point[item.compound], point[item.compound])
            for item in statements.measured
        }
    )


def with_demands(problem: Problem, statements: Statements) -> Problem:
    """The problem with the demands."""
    return problem.with_rows(_demand_bounds(statements))
