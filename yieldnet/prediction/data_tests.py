"""Tests of the measured values, layer by layer: elements alone, then what the network adds."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.elements import balances_by_name, element_matrix
from yieldnet.balance.freedom import CoefficientEquations
from yieldnet.balance.gross_errors import (
    eliminate_serially,
    missing_products,
    suspects,
)
from yieldnet.balance.redundancy import redundancy_of
from yieldnet.balance.statements import is_exact, side_sign
from yieldnet.chemistry.library import compound_entries
from yieldnet.foundation.exact import eliminate
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.binding import composition

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.balance.gross_errors import Elimination, MissingProduct, Suspect
    from yieldnet.balance.redundancy import DataTest, Redundancy
    from yieldnet.model.case import Case, Measurement
    from yieldnet.prediction.layers import Layers

__all__ = [
    "DEFAULT_LEVEL",
    "LayerData",
    "failed_findings",
    "judge_layers",
    "missing_product_hypotheses",
    "serial_elimination",
    "stated_assumptions",
]

_ZERO = Fraction(0)
DEFAULT_LEVEL = 0.95
"""Probability with which a test passes values whose errors are as stated [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class LayerData:
    """What one layer says of the measured values.

    Parameters
    ----------
    layer : str
        ``elements``, or the rung of the network that adds equations between measured values.
    redundancy : Redundancy
        Its equations between measured values, those of the layers above included.
    test : DataTest or None
        Their test; ``None`` if nothing is tied together.
    """

    layer: str
    redundancy: Redundancy
    test: DataTest | None

    def suspects(self) -> tuple[Suspect, ...]:
        """Values that may be wrong, most suspect first."""
        return suspects(self.redundancy)


def judge_layers(
    layers: Layers, equations: Mapping[str, CoefficientEquations], level: float
) -> tuple[LayerData, ...]:
    """Equations between measured values of each layer, with their test.

    Parameters
    ----------
    layers : Layers
        The problems.
    equations : mapping of str to CoefficientEquations
        Equalities of each rung.
    level : float
        Probability with which correct values pass [-].

    Returns
    -------
    tuple of LayerData
        The elements first; a rung only where it ties more values together than those above it.
    """
    found: list[LayerData] = []
    for rung in layers.rungs:
        if found and equations[rung].rows == equations[found[-1].layer].rows:
            continue
        data = _redundancy(layers, equations[rung], layers.statements.measured)
        if found and data.degrees == found[-1].redundancy.degrees:
            continue
        found.append(LayerData(layer=rung, redundancy=data, test=data.test(rung, level)))
    return tuple(found)


def _redundancy(
    layers: Layers, equations: CoefficientEquations, measured: Sequence[Measurement]
) -> Redundancy:
    names = balances_by_name(layers.case, layers.growth_residual)
    return redundancy_of(
        layers.case,
        equations,
        measured,
        layers.statements.correlations,
        {f"{name.removesuffix('s')} balance": content for name, content in names.items()},
    )


def serial_elimination(
    layers: Layers, equations: Mapping[str, CoefficientEquations], layer: str, level: float
) -> tuple[Elimination, ...]:
    """Values taken out one after the other until the rest passes.

    Parameters
    ----------
    layers : Layers
        The problems.
    equations : mapping of str to CoefficientEquations
        Equalities of each rung.
    layer : str
        Layer whose equations count.
    level : float
        Probability with which correct values pass [-].

    Returns
    -------
    tuple of Elimination
        Steps; empty if all values pass together.
    """
    return eliminate_serially(
        layers.statements.measured,
        lambda kept: _redundancy(layers, equations[layer], kept),
        layer,
        level,
    )


def missing_product_hypotheses(layers: Layers) -> tuple[MissingProduct, ...]:
    """Compounds of the library that would close the elements as one overlooked product.

    Parameters
    ----------
    layers : Layers
        The problems.

    Returns
    -------
    tuple of MissingProduct
        Those of which a positive amount is missing, by what they explain. Compounds with elements
        that the equation does not have, and compounds found only inside cells, are not tried.
    """
    case = layers.case
    matrix = element_matrix(case, layers.growth_residual)
    listed = {item.name for item in case.compounds}
    others = {
        item.name: composition(item.formula)
        for item in compound_entries()
        if item.kind == "crossing"
        and item.name not in listed
        and set(composition(item.formula)) <= set(matrix)
    }
    exact = {
        item.name: side_sign(item.side) * item.written.value
        for item in case.coefficients
        if is_exact(item) and item.written is not None
    }
    unknown = tuple(item.name for item in case.coefficients if item.name not in exact)
    names = (*unknown, *others)
    rows: list[tuple[Fraction, ...]] = []
    for element, atoms in matrix.items():
        row = [atoms.get(name, _ZERO) for name in unknown]
        row += [parts.get(element, _ZERO) for parts in others.values()]
        known = sum((atoms.get(name, _ZERO) * value for name, value in exact.items()), _ZERO)
        rows.append((*row, atoms.get(case.basis.name, _ZERO) - known))
    form = eliminate(rows, len(names) + 1)
    equations = CoefficientEquations(
        names,
        tuple(row[:-1] for row in form.rows),
        tuple(row[-1] for row in form.rows),
    )
    return missing_products(
        redundancy_of(
            case,
            equations,
            layers.statements.measured,
            layers.statements.correlations,
            others=tuple(others),
        )
    )


def failed_findings(
    tested: Sequence[LayerData],
    case: Case,
    hint: str = "Run 'yieldnet reconcile' on this case: it names the suspects.",
) -> Findings:
    """A warning for the first layer whose test the measured values fail."""
    findings = Findings()
    for item in tested:
        test = item.test
        if test is None or test.passed:
            continue
        findings.add(
            "YN801",
            f"the measured values fail the test against '{item.layer}'",
            case.span,
            left=f"chi-square {float(test.statistic):.3g} with {test.degrees}"
            f" degree{'s' * (test.degrees > 1)} of freedom, p = {test.p_value:.2g}",
            right=f"at most {test.limit:.3g} in {100 * test.level:g} % of correct sets",
            hint=hint,
            severity=Severity.WARNING,
        )
        return findings
    return findings


def stated_assumptions(tested: Sequence[LayerData]) -> tuple[Assumption, ...]:
    """What an answer takes for granted if it goes on with values that fail their test."""
    return tuple(
        Assumption(
            text=f"the measured values are used as they are, although they fail the test against"
            f" '{item.layer}' (p = {item.test.p_value:.2g})"
        )
        for item in tested
        if item.test is not None and not item.test.passed
    )[:1]
