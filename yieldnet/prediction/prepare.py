"""From a case to its problems: what prediction and studies both start from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.audit.audit import refusing_rules
from yieldnet.balance.missing import missing_compounds
from yieldnet.balance.reconciled import reconciled_point
from yieldnet.balance.statements import statements_of
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.model.binding import bind
from yieldnet.prediction.checks import beyond_the_scope, growth_conditions
from yieldnet.prediction.ladder import objective_of
from yieldnet.prediction.layers import build_layers

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.optimum.proof import Optimiser
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers

__all__ = ["Prepared", "prepare"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Prepared:
    """A case with its problems.

    Parameters
    ----------
    case : Case
        The case.
    layers : Layers
        Its problems, statements free.
    objective : Objective or None
        Its aim.
    point : mapping of str to Fraction or None
        Reconciled point [mol/mol basis]; ``None`` if no point keeps all statements.
    findings : tuple of Finding
        What was doubtful so far.
    optimiser : Optimiser
        Solves and proves.
    """

    case: Case
    layers: Layers
    objective: Objective | None
    point: Mapping[str, Fraction] | None
    findings: tuple[Finding, ...]
    optimiser: Optimiser


def prepare(case: Case, optimiser: Optimiser, network: bool = True) -> Prepared:
    """Problems and reconciled point of a case.

    Parameters
    ----------
    case : Case
        The case.
    optimiser : Optimiser
        Solves and proves.
    network : bool
        Whether the network counts, rather than elements alone.

    Returns
    -------
    Prepared
        What prediction and studies start from.

    Raises
    ------
    InputError
        If the network is missing or must be refused, or the equation cannot close.
    """
    findings = Findings(list(case.findings))
    bound: BoundNetwork | None = None
    residual: Mapping[str, Fraction] = {}
    if network:
        if case.network is None:
            findings.add(
                "YN512",
                "the case names no network",
                case.span,
                hint="Add 'network: ' with a file or a shipped name, or run 'yieldnet balance'.",
            )
            raise InputError(findings)
        places = case.override_spans()
        bound, doubts = refusing_rules(case.network, case.overrides(), optimiser, places)
        findings.extend(doubts)
        findings.extend(growth_conditions(case))
        findings.extend(beyond_the_scope(case))
        residual = bound.growth_residual()
    elif case.network is not None:
        # The element layer charges the residual of growth, so that both verbs say the same.
        residual = bind(case.network, case.overrides())[0].growth_residual()
    findings.extend(missing_compounds(case, optimiser, residual))
    if findings.refused:
        raise InputError(findings.sorted())
    statements = statements_of(case)
    layers = build_layers(case, statements, bound, residual)
    meaningful = bound is not None or not (case.aim and case.aim.is_energy)
    return Prepared(
        case=case,
        layers=layers,
        objective=objective_of(case) if meaningful else None,
        point=reconciled_point(optimiser, layers.final, case, statements),
        findings=findings.sorted(),
        optimiser=optimiser,
    )
