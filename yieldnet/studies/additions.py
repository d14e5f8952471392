"""Additions: what each candidate reaction, or pair of them, would bring to the aim of a case.

All candidates stand in one extended network, switched off. Adding one is a change of bounds, so
that the duals of a proven optimum settle most of them without a solve.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import combinations
from typing import TYPE_CHECKING

from yieldnet.audit.flux import closed_network, energy_loop
from yieldnet.balance.statements import with_point
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, Severity
from yieldnet.model.case import AimDirection, Named
from yieldnet.model.network import CarrierKind
from yieldnet.optimum.problem import SHUT, Bounds, flux_bounds
from yieldnet.optimum.proof import Status
from yieldnet.prediction.ladder import climb_down, runaway_words
from yieldnet.prediction.layers import build_layers, flux_column, switched_off
from yieldnet.studies.addition_result import (
    Addition,
    AdditionResult,
    AdditionWithDeletion,
    Relief,
)
from yieldnet.studies.behaviour import behaviour
from yieldnet.studies.candidates import merge
from yieldnet.studies.setting import set_up

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.model.case import Case
    from yieldnet.model.network import Network
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers
    from yieldnet.studies.candidates import Idea, Merged
    from yieldnet.studies.setting import Setting

__all__ = ["TOP", "add_candidates"]

TOP = 5
"""Best additions on top of which knock-outs are tried, unless said otherwise [-]."""
PAIRS_WITH_LADDER = 20
"""Best pairs for which the rungs they relieve are looked for [-]."""
_ZERO = Fraction(0)


def add_candidates(
    case: Case,
    candidates: Network,
    *,
    pairs: bool = False,
    with_deletions: bool = False,
    top: int = TOP,
    engine: str = "glpk",
) -> AdditionResult:
    """What the candidates of a file would bring to the aim of a case, exact.

    Parameters
    ----------
    case : Case
        The case, with a network and a product as its aim.
    candidates : Network
        The candidate file.
    pairs : bool
        Whether pairs are tried as well.
    with_deletions : bool
        Whether knock-outs are tried on top of the best additions.
    top : int
        How many of the best additions get knock-outs [-].
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    AdditionResult
        Additions, ranked by gain.

    Raises
    ------
    InputError
        If the case has no product as its aim, is infeasible or unbounded as it stands, or cannot
        grow though knock-outs were asked for.
    """
    setting = set_up(case, engine)
    if with_deletions:
        _need_growth(setting)
    merged = merge(setting.bound, frozenset(switched_off(case)), candidates)
    bench = _Bench(setting, merged)
    findings = Findings(list(setting.ready.findings))
    findings.extend(merged.findings)
    makes_energy = [idea for idea in merged.ideas if bench.makes_energy((idea,))]
    for idea in makes_energy:
        findings.add(
            "YN408",
            f"candidate {idea.name!r} would make energy from nothing in this network,"
            " and is not offered",
            severity=Severity.NOTE,
        )
    offered = [idea for idea in merged.ideas if idea not in makes_energy]
    singles, answers = bench.singles(offered)
    better = {item.names[0] for item in singles}
    found_pairs, with_energy = bench.pairs(offered, answers) if pairs else (None, 0)
    guaranteed_before, deletions = None, None
    if with_deletions:
        guaranteed_before, deletions = _with_deletions(bench, singles, top)
    return AdditionResult(
        case=case,
        source=candidates.title,
        before=bench.best.value,
        ladder=bench.ladder,
        singles=singles,
        pairs=found_pairs,
        deletions=deletions,
        guaranteed_before=guaranteed_before,
        without_effect=tuple(idea.name for idea in offered if idea.name not in better),
        makes_energy=tuple(idea.name for idea in makes_energy),
        pairs_with_energy=with_energy,
        merged=merged,
        findings=findings.sorted(),
    )


def _need_growth(setting: Setting) -> None:
    """Refuse a case in which knock-outs cannot be judged by what growth guarantees."""
    case = setting.case
    assert case.aim is not None
    if setting.biomass_column and case.aim.direction is AimDirection.MOST:
        return
    findings = Findings(list(setting.ready.findings))
    findings.add(
        "YN701",
        "knock-outs on top of additions are judged by the least product at most growth, which this"
        " case does not have",
        case.aim.span,
        left=f"aim: {case.aim}",
        right="biomass is in the equation" if setting.biomass_column else "no biomass made",
        hint="Aim at the most of a product, and let the equation make '? biomass'.",
    )
    raise InputError(findings.sorted())


class _Bench:
    """The extended problem of a case, on which candidates are tried."""

    def __init__(self, setting: Setting, merged: Merged) -> None:
        ready = setting.ready
        assert ready.objective is not None
        assert ready.point is not None
        self.optimiser = setting.optimiser
        self.objective: Objective = ready.objective
        self.point: Mapping[str, Fraction] = ready.point
        self.ways = {item.name: flux_bounds(item.reversible) for item in merged.bound.reactions}
        names = [name for idea in merged.ideas for name in idea.reactions]
        case = replace(
            setting.case,
            network=merged.bound.network,
            knock_outs=(*setting.case.knock_outs, *(Named(name=name) for name in names)),
        )
        layers = build_layers(
            case, ready.layers.statements, merged.bound, merged.bound.growth_residual()
        )
        self.layers: Layers = layers
        # The rows of the extended problem hold those of the study, whose bounds move over.
        rows = {row.name: row.bounds for row in setting.problem.rows}
        self.setting = replace(
            setting,
            case=case,
            ready=replace(ready, case=case, layers=layers),
            bound=merged.bound,
            problem=layers.final.with_rows(rows),
        )
        off = frozenset(switched_off(setting.case))
        self.closed = closed_network(merged.bound.without(off)).with_columns(
            dict.fromkeys(names, SHUT)
        )
        self.energy = [
            item.name for item in merged.bound.network.carriers if item.kind is CarrierKind.ENERGY
        ]
        problem = with_point(layers.final, layers.statements, self.point)
        self.best = self.objective.best(self.optimiser, problem)
        if self.best.status is not Status.OPTIMAL:
            findings = Findings(list(ready.findings))
            aim = setting.case.aim
            findings.add(
                "YN602",
                f"the aim '{aim}' has no best value before anything is added:"
                f" {runaway_words(self.best)}",
                aim.span if aim else None,
                hint="Bound one of these: measure it, demand a limit, or take it off the equation.",
            )
            raise InputError(findings.sorted())
        self.ladder, _ = climb_down(self.optimiser, layers, self.objective, self.point)

    def opened(self, ideas: Sequence[Idea]) -> dict[str, Bounds]:
        """Bounds of the flux columns that candidates bring."""
        return {flux_column(name): self.ways[name] for idea in ideas for name in idea.reactions}

    def makes_energy(self, ideas: Sequence[Idea]) -> bool:
        """Whether candidates make energy in the network of the case with nothing crossing."""
        problem = self.closed.with_columns(
            {name: self.ways[name] for idea in ideas for name in idea.reactions}
        )
        return any(energy_loop(self.optimiser, problem, name) is not None for name in self.energy)

    def with_ideas(self, ideas: Sequence[Idea]) -> Problem:
        """The final problem with candidates in it."""
        return self.best.problem.with_columns(self.opened(ideas))

    def singles(self, ideas: Sequence[Idea]) -> tuple[tuple[Addition, ...], dict[str, Answer]]:
        """Candidates that help, and the proven answer with each candidate."""
        found: list[Addition] = []
        answers: dict[str, Answer] = {}
        for idea in ideas:
            problem = self.with_ideas((idea,))
            if self.best.stays_best(problem):
                answers[idea.name] = self.best
                continue
            answer = answers[idea.name] = self.objective.best(self.optimiser, problem)
            addition = self._addition((idea,), answer)
            if addition is not None:
                found.append(self._with_ladder(addition))
        return _ranked(found), answers

    def pairs(
        self, ideas: Sequence[Idea], answers: Mapping[str, Answer]
    ) -> tuple[tuple[Addition, ...], int]:
        """Pairs that bring more than either alone, and how many would make energy."""
        found: list[Addition] = []
        with_energy = 0
        for pair in combinations(ideas, 2):
            alone = [answers[idea.name] for idea in pair]
            if any(item.status is Status.UNBOUNDED for item in alone):
                continue
            better = max(alone, key=lambda item: self._gain(item.value))
            # A candidate pruned by the duals of the optimum leaves the column where it was, so one
            # test on each answer settles the pair.
            problem = self.with_ideas(pair)
            if better.stays_best(problem):
                continue
            answer = self.objective.best(self.optimiser, problem)
            if answer.status is Status.OPTIMAL and answer.value == better.value:
                continue
            if self.makes_energy(pair):
                with_energy += 1
                continue
            addition = self._addition(pair, answer)
            assert addition is not None
            most = self._gain(better.value)
            beyond = None if addition.gain is None else addition.gain - most
            found.append(replace(addition, beyond=beyond, only_together=not most))
        ranked = _ranked(found)
        head = tuple(self._with_ladder(item) for item in ranked[:PAIRS_WITH_LADDER])
        return (*head, *ranked[PAIRS_WITH_LADDER:]), with_energy

    def _gain(self, value: Fraction) -> Fraction:
        change = value - self.best.value
        return change if self.objective.maximise else -change

    def _addition(self, ideas: tuple[Idea, ...], answer: Answer) -> Addition | None:
        if answer.status is Status.UNBOUNDED:
            return Addition(ideas=ideas, value=None, gain=None, reason=runaway_words(answer))
        gain = self._gain(answer.value)
        return Addition(ideas=ideas, value=answer.value, gain=gain) if gain else None

    def _with_ladder(self, addition: Addition) -> Addition:
        network = self.layers.network
        assert network is not None
        layers = replace(self.layers, network=network.with_columns(self.opened(addition.ideas)))
        ladder, _ = climb_down(self.optimiser, layers, self.objective, self.point)
        before = {item.rung: item.loss for item in self.ladder}
        return replace(
            addition,
            ladder=ladder,
            relieves=tuple(
                Relief(rung=item.rung, before=cost, after=item.loss)
                for item in ladder
                if (cost := before[item.rung]) is not None
                and item.loss is not None
                and item.loss < cost
            ),
        )


def _ranked(found: Sequence[Addition]) -> tuple[Addition, ...]:
    """Unbounded ones first, then the largest gain first, else in the order of the file."""
    return tuple(sorted(found, key=lambda item: (item.gain is not None, -(item.gain or _ZERO))))


@dataclass(frozen=True, slots=True)
class _Guarantee:
    """Least product at most growth, and the reactions that run in that solution."""

    value: Fraction | None
    used: frozenset[str]


def _guarantee(setting: Setting, problem: Problem) -> _Guarantee:
    grown = setting.optimiser.optimise(problem, setting.biomass_objective())
    if grown.status is not Status.OPTIMAL or not grown.value:
        return _Guarantee(None, frozenset())
    least = setting.optimiser.optimise(
        grown.optimal_face(), setting.product_objective(), maximise=False
    )
    if least.status is not Status.OPTIMAL:
        return _Guarantee(None, frozenset())
    used = {item.name for item in setting.bound.reactions if least[flux_column(item.name)]}
    return _Guarantee(least.value, frozenset(used))


def _with_deletions(
    bench: _Bench, singles: Sequence[Addition], top: int
) -> tuple[Fraction | None, tuple[AdditionWithDeletion, ...]]:
    """What is guaranteed before, and the knock-outs that raise it on top of the best additions.

    A reaction that stands still in the last solution leaves that solution, and so what is
    guaranteed, when it is switched off; such knock-outs are not solved.
    """
    setting = bench.setting
    start = _guarantee(setting, setting.problem)
    alone: dict[str, Fraction | None] = {}
    found: list[AdditionWithDeletion] = []
    for addition in [item for item in singles if item.value is not None][:top]:
        problem = setting.problem.with_columns(bench.opened(addition.ideas))
        before = _guarantee(setting, problem)
        for name in setting.candidates():
            if name not in before.used:
                continue
            shut = {flux_column(name): SHUT}
            after = _guarantee(setting, problem.with_columns(shut))
            if after.value is None or after.value <= (before.value or _ZERO):
                continue
            if name not in alone:
                known = start.value is None or name in start.used
                alone[name] = (
                    _guarantee(setting, setting.problem.with_columns(shut)).value
                    if known
                    else start.value
                )
            found.append(
                AdditionWithDeletion(
                    addition=addition.names[0],
                    deletion=name,
                    guaranteed=after.value,
                    with_addition=before.value,
                    with_deletion=alone[name],
                    behaviour=behaviour(setting, problem.with_columns(shut)),
                )
            )
    found.sort(key=lambda item: -item.guaranteed)
    return start.value, tuple(found)
