"""The audit of a network: every rule, all findings."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from yieldnet.audit import flux, rules
from yieldnet.foundation.findings import Severity
from yieldnet.model.binding import bind
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from yieldnet.foundation.findings import Finding, Findings, SourceSpan
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.network import Network

__all__ = ["AuditResult", "audit_network", "refusing_rules"]

_PLAIN = (
    rules.closure,
    rules.negative_coefficients,
    rules.one_sided_compounds,
    rules.untouched_crossing,
    rules.duplicates,
    rules.unused_parameters,
    rules.parameter_ranges,
    rules.growth_energy,
)
_OF_THE_WHOLE = (rules.one_sided_compounds, rules.untouched_crossing)
_REFUSING = (rules.closure, rules.negative_coefficients, rules.parameter_ranges)


@dataclass(frozen=True, slots=True, kw_only=True)
class AuditResult:
    """What an audit found.

    Parameters
    ----------
    network : Network
        The network.
    bound : BoundNetwork
        Its numbers, every ``?`` solved.
    findings : tuple of Finding
        All findings, in the order of the file.
    """

    network: Network
    bound: BoundNetwork
    findings: tuple[Finding, ...]

    @property
    def clean(self) -> bool:
        """Whether there is neither an error nor a warning."""
        return all(item.severity is Severity.NOTE for item in self.findings)

    @property
    def refused(self) -> bool:
        """Whether there is an error."""
        return any(item.severity is Severity.ERROR for item in self.findings)


def audit_network(network: Network, engine: str = "glpk") -> AuditResult:
    """Findings of every rule over a network.

    Parameters
    ----------
    network : Network
        The network.
    engine : {"glpk", "optlang"}
        Engine for the rules that need a linear problem.

    Returns
    -------
    AuditResult
        The findings.
    """
    bound, findings = bind(network)
    # A reaction whose ? could not be solved is missing from the numbers; what looks at the network
    # as a whole would then blame its neighbours.
    whole = not findings.refused
    for rule in _PLAIN:
        if whole or rule not in _OF_THE_WHOLE:
            findings.extend(rule(bound))
    if not whole:
        return AuditResult(network=network, bound=bound, findings=findings.sorted())
    optimiser = Optimiser(engine_named(engine))
    findings.extend(flux.energy_from_nothing(bound, optimiser))
    findings.extend(flux.energy_for_nothing(bound, optimiser))
    findings.extend(flux.tied_carriers(bound, optimiser))
    findings.extend(flux.blocked_reactions(bound, optimiser))
    return AuditResult(network=network, bound=bound, findings=findings.sorted())


def refusing_rules(
    network: Network,
    overrides: Mapping[str, Fraction],
    optimiser: Optimiser,
    places: Mapping[str, SourceSpan] | None = None,
) -> tuple[BoundNetwork, Findings]:
    """Numbers of a network, and the findings without which no prediction is made.

    Parameters
    ----------
    network : Network
        The network.
    overrides : mapping of str to Fraction
        Other values of some parameters.
    optimiser : Optimiser
        Solves the problem of energy from nothing.
    places : mapping of str to SourceSpan, optional
        Where those other values were written.

    Returns
    -------
    BoundNetwork
        Its numbers.
    Findings
        Closure, negative coefficients, parameters out of range, energy from nothing.
    """
    bound, findings = bind(network, overrides, places)
    for rule in _REFUSING:
        findings.extend(rule(bound))
    if not findings.refused:
        findings.extend(flux.energy_from_nothing(bound, optimiser))
    return bound, findings
