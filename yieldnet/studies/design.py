"""A design for coupling asked of a case: yield and growth in the user's terms."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError, TextError
from yieldnet.foundation.exact import read_number
from yieldnet.foundation.findings import Findings
from yieldnet.foundation.units import read_unit, yield_factor
from yieldnet.model.case import DEFAULT_YIELD_UNIT
from yieldnet.optimum.proof import Status
from yieldnet.studies.coupling import couple
from yieldnet.studies.setting import set_up

if TYPE_CHECKING:
    from yieldnet.model.case import Case
    from yieldnet.studies.coupling import CouplingDesign
    from yieldnet.studies.setting import Setting

__all__ = ["design_case"]


def design_case(
    case: Case,
    *,
    least_yield: str | Fraction,
    growth_share: float,
    depth: int,
    alternatives: int,
    groups: bool,
    engine: str = "glpk",
) -> CouplingDesign:
    """Smallest knock-out sets of a case that force product whenever the cell grows.

    Parameters
    ----------
    case : Case
        The case, with growth and a product as its aim.
    least_yield : str or Fraction
        Product to force, in mol/mol basis or as a text with a unit [mol/mol].
    growth_share : float
        Growth from which on it is forced, as a share of the most [-].
    depth, alternatives : int
        Largest set to look for, and most sets of one size [-].
    groups : bool
        Whether groups are knocked out as wholes.
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.

    Returns
    -------
    CouplingDesign
        Sets with what they force, exact.

    Raises
    ------
    InputError
        If the case cannot be studied, or the yield cannot be read.
    """
    setting = set_up(case, engine)
    findings = Findings(list(setting.ready.findings))
    wanted = _yield(setting, least_yield, findings)
    if not setting.biomass_column:
        findings.add(
            "YN701",
            "coupling needs biomass in the overall equation",
            case.span,
            hint="Add '+ ? biomass' to the right side.",
        )
    if findings.refused or wanted is None:
        raise InputError(findings.sorted())
    most = setting.optimiser.optimise(setting.problem, setting.biomass_objective())
    if most.status is not Status.OPTIMAL or not most.value:
        findings.add(
            "YN701",
            "coupling needs a cell that grows, and not without bound",
            case.span,
            hint="Run 'yieldnet predict' with 'aim: most biomass' to see why.",
        )
        raise InputError(findings.sorted())
    share = Fraction(growth_share).limit_denominator(10**6)
    network = case.network
    assert network is not None
    things: tuple[str, ...] = ()
    if groups:
        open_reactions = set(setting.candidates())
        things = tuple(
            dict.fromkeys(
                item.group or item.name for item in network.reactions if item.name in open_reactions
            )
        )
    return couple(
        setting,
        wanted,
        share * most.value,
        most_deletions=depth,
        alternatives=alternatives,
        things=things,
    )


def _yield(setting: Setting, least_yield: str | Fraction, findings: Findings) -> Fraction | None:
    """Yield in mol/mol basis, or ``None`` with a finding."""
    if isinstance(least_yield, Fraction):
        return least_yield
    number, _, unit = least_yield.strip().partition(" ")
    case = setting.case
    try:
        factor = yield_factor(
            read_unit(unit or DEFAULT_YIELD_UNIT),
            case.compound(setting.product).weight,
            case.basis.weight,
        )
        return read_number(number).value * factor
    except TextError as error:
        findings.add(error.code, f"least yield: {error.reason}", hint=error.hint)
        return None
