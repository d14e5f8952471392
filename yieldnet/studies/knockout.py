"""One idea, before and after: what switching reactions off does to a case."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import with_point
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, Severity, near
from yieldnet.optimum.problem import SHUT
from yieldnet.optimum.proof import Status
from yieldnet.prediction.ladder import LadderRung, objective_of
from yieldnet.prediction.layers import flux_column, switched_off
from yieldnet.prediction.predict import predict_case
from yieldnet.studies.behaviour import behaviour
from yieldnet.studies.setting import set_up

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.model.case import Case
    from yieldnet.prediction.result import Prediction
    from yieldnet.studies.behaviour import Behaviour
    from yieldnet.studies.setting import Setting

__all__ = ["KNOCK_OUTS", "KnockOutResult", "check_names", "knock_out"]

KNOCK_OUTS = "knock-outs"
"""Name of the rung that the idea under test adds to the ladder."""


@dataclass(frozen=True, slots=True, kw_only=True)
class KnockOutResult:
    """A case before and after an idea.

    Parameters
    ----------
    case : Case
        The case before.
    names : tuple of str
        Reactions or groups that the idea switches off.
    before, after : Prediction
        Both answers in full.
    ladder : tuple of LadderRung
        Ladder before, with one more rung for the idea.
    behaviour_before, behaviour_after : Behaviour
        What the cell would do if it were free to grow.
    """

    case: Case
    names: tuple[str, ...]
    before: Prediction
    after: Prediction
    ladder: tuple[LadderRung, ...]
    behaviour_before: Behaviour
    behaviour_after: Behaviour


def check_names(case: Case, names: Sequence[str]) -> Findings:
    """Findings for names that are unknown, off already, or the only uptake of the basis.

    Parameters
    ----------
    case : Case
        The case, with a network.
    names : sequence of str
        Reactions or groups.

    Returns
    -------
    Findings
        What is wrong with them.
    """
    findings = Findings()
    network = case.network
    assert network is not None
    off = set(switched_off(case))
    known = (*(item.name for item in network.reactions), *network.groups())
    gone = set(off)
    for name in names:
        members = network.members(name)
        if not members:
            findings.add(
                "YN703",
                f"{name!r} is neither a reaction nor a group of the network",
                hint=near(name, known) or "'yieldnet networks NAME' lists them.",
            )
        elif all(member in off for member in members):
            findings.add(
                "YN704",
                f"{name!r} is switched off in the case already",
                hint="Take it out of the strain or the knock-outs of the case first.",
                severity=Severity.WARNING,
            )
        gone.update(members)
    uptakes = [
        item.name
        for item in network.reactions
        if case.basis.name in item.equation.names() and item.name not in off
    ]
    if uptakes and all(name in gone for name in uptakes):
        findings.add(
            "YN705",
            f"this leaves no uptake of {case.basis.name!r}",
            left=f"uptakes: {', '.join(uptakes)}",
            hint="Leave one of them in.",
        )
    return findings


def knock_out(case: Case, names: Sequence[str], engine: str = "glpk") -> KnockOutResult:
    """A case before and after switching reactions or groups off.

    Parameters
    ----------
    case : Case
        The case, with a network and a product as its aim.
    names : sequence of str
        Reactions or groups to switch off.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    KnockOutResult
        Both answers, and what the cell would do.

    Raises
    ------
    InputError
        If a name is unknown, or the case cannot be studied.
    """
    setting = set_up(case, engine)
    findings = check_names(case, names)
    if findings.refused:
        raise InputError(findings.sorted())
    assert case.network is not None
    before = predict_case(case, engine)
    after = predict_case(case.with_knock_outs(*names), engine)
    members = {member for name in names for member in case.network.members(name)}
    return KnockOutResult(
        case=case,
        names=tuple(names),
        before=before,
        after=after,
        ladder=(*before.ladder, _rung(setting, members, before.ladder[-1].value)),
        behaviour_before=behaviour(setting, setting.problem),
        behaviour_after=behaviour(setting, setting.without(members)),
    )


def _rung(setting: Setting, members: set[str], last: Fraction | None) -> LadderRung:
    """Rung of the idea: the final problem at the same reconciled point, more switched off."""
    ready = setting.ready
    objective = objective_of(setting.case)
    assert objective is not None
    assert ready.point is not None
    shut = {flux_column(name): SHUT for name in members}
    problem = with_point(ready.layers.final, ready.layers.statements, ready.point)
    answer = objective.best(setting.optimiser, problem.with_columns(shut))
    if answer.status is not Status.OPTIMAL:
        reason = "no point keeps all balances and statements without them"
        if answer.status is Status.UNBOUNDED:
            reason = "the aim has no bound"
        return LadderRung(rung=KNOCK_OUTS, value=None, loss=None, reason=reason)
    loss = None if last is None else abs(last - answer.value)
    return LadderRung(rung=KNOCK_OUTS, value=answer.value, loss=loss)
