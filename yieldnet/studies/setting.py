"""The setting of a study: one problem of a case, its product and its biomass, moved in place.

Studies ask what the cell would do if it were free to grow, so statements about biomass and about
the product are given up; everything else that the case says stays at the reconciled point.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import is_exact, side_sign, with_point, yield_column
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.model.network import BIOMASS
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.problem import FREE, SHUT
from yieldnet.optimum.proof import Optimiser
from yieldnet.prediction.layers import flux_column
from yieldnet.prediction.prepare import prepare

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.optimum.problem import Problem
    from yieldnet.prediction.layers import Layers
    from yieldnet.prediction.prepare import Prepared

__all__ = ["Setting", "set_up"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """A case made ready for a study.

    Parameters
    ----------
    case : Case
        The case.
    ready : Prepared
        Its problems, reconciled point and doubts.
    bound : BoundNetwork
        Its network in numbers.
    problem : Problem
        All layers, demands, and the measured values of other coefficients than product and
        biomass at the reconciled point.
    product : str
        Compound of the aim.
    product_column, biomass_column : str
        Their columns; ``biomass_column`` is empty if biomass is not in the equation.
    product_sign : int
        +1 if the product counts when it leaves the cell, -1 if when it enters.
    """

    case: Case
    ready: Prepared
    bound: BoundNetwork
    problem: Problem
    product: str
    product_column: str
    biomass_column: str
    product_sign: int

    @property
    def optimiser(self) -> Optimiser:
        """Solves and proves."""
        return self.ready.optimiser

    @property
    def layers(self) -> Layers:
        """Layers of the case."""
        return self.ready.layers

    def product_objective(self) -> dict[str, Fraction]:
        """Objective that counts the product, positive on its side."""
        return {self.product_column: Fraction(self.product_sign)}

    def biomass_objective(self) -> dict[str, Fraction]:
        """Objective that counts biomass; empty without biomass."""
        return {self.biomass_column: Fraction(1)} if self.biomass_column else {}

    def candidates(self) -> tuple[str, ...]:
        """Reactions that are not switched off already, growth left out."""
        return tuple(
            item.name
            for item in self.case.network.reactions  # type: ignore[union-attr]
            if not self.is_off(item.name)
        )

    def is_off(self, reaction: str) -> bool:
        """Whether the case switches a reaction off already."""
        column = self.problem.column(flux_column(reaction))
        bounds = self.problem.columns[column].bounds
        return bounds.low == 0 and bounds.high == 0

    def without(self, reactions: Iterable[str]) -> Problem:
        """The problem with reactions switched off as well."""
        return self.problem.with_columns({flux_column(name): SHUT for name in reactions})


def set_up(case: Case, engine: str = "glpk", freed: Iterable[str] = (BIOMASS,)) -> Setting:
    """Setting of a study of a case.

    Parameters
    ----------
    case : Case
        The case, with a network and an aim that is a coefficient.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.
    freed : iterable of str
        Coefficients besides the product whose statements are given up.

    Returns
    -------
    Setting
        The problem, with the product and those coefficients free.

    Raises
    ------
    InputError
        If the case has no such aim, or cannot be answered as it stands.
    """
    ready = prepare(case, Optimiser(engine_named(engine)))
    findings = Findings(list(ready.findings))
    if case.aim is None or case.aim.is_energy:
        findings.add(
            "YN701",
            "a study needs a product as its aim",
            case.aim.span if case.aim else case.span,
            hint="Add 'aim: most ...' with a compound of the equation.",
        )
        raise InputError(findings.sorted())
    if ready.point is None:
        findings.add(
            "YN702",
            "the case is infeasible as it stands, so no idea can be compared with it",
            case.span,
            hint="Run 'yieldnet predict' on it: the conflict is named there.",
        )
        raise InputError(findings.sorted())
    bound = ready.layers.bound
    product = case.coefficient(case.aim.compound)
    assert bound is not None
    assert product is not None
    return Setting(
        case=case,
        ready=ready,
        bound=bound,
        problem=_free_problem(ready, ready.point, {product.name, *freed}),
        product=product.name,
        product_column=yield_column(product.name),
        biomass_column=yield_column(BIOMASS) if case.coefficient(BIOMASS) else "",
        product_sign=side_sign(product.side),
    )


def _free_problem(ready: Prepared, point: Mapping[str, Fraction], freed: set[str]) -> Problem:
    """The final problem at the reconciled point, statements about some coefficients given up."""
    layers = ready.layers
    rows = {item.label: FREE for item in layers.statements.measured if item.compound in freed}
    rows |= {
        f"demand {item.compound}": FREE
        for item in layers.statements.demands
        if item.compound in freed
    }
    rows |= {
        f"written {item.name}": FREE
        for item in ready.case.coefficients
        if item.name in freed and is_exact(item)
    }
    return with_point(layers.final, layers.statements, point).with_rows(rows)
