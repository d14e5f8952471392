"""All knock-outs of reactions or groups to a depth, ranked by what they do for the product.

The whole screen runs in floats on one warm problem; the entries at the top are proven afterwards.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from math import comb
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.optimum.fast import FEASIBILITY, FastProblem, FastStatus
from yieldnet.prediction.layers import flux_column
from yieldnet.studies.behaviour import behaviour
from yieldnet.studies.deletions import DeletionRun, delete_all, linear_chains
from yieldnet.studies.setting import set_up

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    import pandas

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.case import Case
    from yieldnet.studies.behaviour import Behaviour
    from yieldnet.studies.deletions import Deletion
    from yieldnet.studies.setting import Setting

__all__ = ["MAX_SECONDS", "Score", "ScreenEntry", "ScreenResult", "screen_case"]

MAX_SECONDS = 60.0
"""Longest screen that starts without being confirmed [s]."""
PROVEN = 10
"""Entries at the top of a screen that are proven [-]."""
NOTICEABLE = 1e-6
"""Least difference between two float scores that counts; GLPK keeps bounds to 1e-7 [mol/mol]."""


class Score(StrEnum):
    """What a set of knock-outs is ranked by."""

    GUARANTEED = "guaranteed"
    PRODUCT = "product"
    PRODUCT_TIMES_GROWTH = "product-growth"


@dataclass(frozen=True, slots=True, kw_only=True)
class ScreenEntry:
    """One set of knock-outs.

    Parameters
    ----------
    names : tuple of str
        Reactions or groups switched off.
    score : float
        What it is ranked by, in floats [mol/mol basis; for product times growth its square].
    together : bool
        Whether it does more than each smaller set of its members.
    exact : Behaviour or None
        Proven behaviour, for the entries at the top.
    """

    names: tuple[str, ...]
    score: float
    together: bool
    exact: Behaviour | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class ScreenResult:
    """A screen of knock-outs.

    Parameters
    ----------
    case : Case
        The case.
    score : Score
        What it is ranked by.
    depth : int
        Most knock-outs at once [-].
    entries : tuple of ScreenEntry
        Best first; sets that change nothing are left out.
    host : Behaviour
        The case as it stands, proven.
    host_score : float
        Its score, in floats.
    essential : tuple of str
        Without any one of these the cell cannot grow (or take up the basis).
    chains : tuple of tuple of str
        Reactions that run or stand still together; the first stands for all.
    looked_at, solved, without_effect, lethal : int
        Sets looked at, problems solved for them, sets that change nothing, sets without which the
        cell cannot live [-].
    residual : float
        Largest amount by which the host's float solution misses a balance [mol/mol].
    interrupted : bool
        Whether it was stopped before its end.
    findings : tuple of Finding
        What was doubtful.
    """

    case: Case
    score: Score
    depth: int
    entries: tuple[ScreenEntry, ...]
    host: Behaviour
    host_score: float
    essential: tuple[str, ...]
    chains: tuple[tuple[str, ...], ...]
    looked_at: int
    solved: int
    without_effect: int
    lethal: int
    residual: float
    interrupted: bool
    findings: tuple[Finding, ...]

    def table(self) -> pandas.DataFrame:
        """Entries as a table.

        Returns
        -------
        pandas.DataFrame
            One row a set: names, score [mol/mol basis], whether it matters only together.
        """
        import pandas

        return pandas.DataFrame(
            [
                {
                    "knock-outs": "; ".join(item.names),
                    "score": item.score,
                    "together": item.together,
                }
                for item in self.entries
            ],
            columns=["knock-outs", "score", "together"],
        )


@dataclass(slots=True)
class _Evaluator:
    """Scores the problem as it stands, in floats."""

    setting: Setting
    problem: FastProblem
    score: Score
    least_biomass: float

    def __post_init__(self) -> None:
        setting = self.setting
        self.product = setting.problem.column(setting.product_column)
        self.biomass = setting.problem.column(setting.biomass_column)
        if self.score is Score.PRODUCT:
            self.problem.bound_column(self.biomass, self.least_biomass, None)
            self.problem.aim({self.product: float(setting.product_sign)})

    product: int = 0
    biomass: int = 0

    def __call__(self) -> tuple[FastStatus, float | None]:
        problem = self.problem
        if self.score is Score.PRODUCT:
            status = problem.solve(dual=True)
            return status, problem.value if status is FastStatus.OPTIMAL else None
        problem.aim({self.biomass: 1.0})
        status = problem.solve(dual=True)
        if status is not FastStatus.OPTIMAL:
            return status, None
        grown = problem.value
        # What growth guarantees: the least product, growth held where it just was.
        problem.bound_column(self.biomass, max(0.0, grown - FEASIBILITY), None)
        problem.aim({self.product: float(self.setting.product_sign)}, maximise=False)
        status = problem.solve()
        value = problem.value if status is FastStatus.OPTIMAL else None
        problem.bound_column(self.biomass, 0.0, None)
        if value is not None and self.score is Score.PRODUCT_TIMES_GROWTH:
            value *= grown
        return status, value


def screen_case(
    case: Case,
    *,
    depth: int = 1,
    groups: bool = False,
    score: Score = Score.GUARANTEED,
    growth_share: float = 0.1,
    confirmed: bool = False,
    engine: str = "glpk",
    tick: Callable[[int, int], None] | None = None,
    clock: Callable[[], float] | None = None,
) -> ScreenResult:
    """All knock-outs of a case to a depth, ranked.

    Parameters
    ----------
    case : Case
        The case, with growth and a product as its aim.
    depth : int
        Most knock-outs at once [-].
    groups : bool
        Whether groups are switched off as wholes; reactions without a group stay single.
    score : Score
        What is ranked: product guaranteed at most growth, most product at a required growth, or
        guaranteed product times growth.
    growth_share : float
        Required growth for ``product``, as a share of the host's most biomass [-].
    confirmed : bool
        Whether it may take longer than a minute.
    engine : {"glpk", "optlang"}
        Engine whose bases prove the entries at the top.
    tick : callable, optional
        Called with the sets done and the sets in all.
    clock : callable, optional
        Seconds that pass, to estimate the time of a long screen; none is refused without it [s].

    Returns
    -------
    ScreenResult
        Ranked sets; those at the top proven.

    Raises
    ------
    InputError
        If the case cannot be studied, or the screen would take too long.
    """
    setting = set_up(case, engine)
    findings = Findings(list(setting.ready.findings))
    if not setting.biomass_column:
        findings.add(
            "YN701",
            "a screen needs biomass in the overall equation",
            case.span,
            hint="Add '+ ? biomass' to the right side.",
        )
        raise InputError(findings.sorted())
    host = behaviour(setting, setting.problem)
    things, chains = _things(setting, groups)
    fast = FastProblem(setting.problem)
    least = growth_share * float(host.most_biomass or 0)
    bounds = [item.bounds.as_floats() for item in setting.problem.columns]
    run = DeletionRun(
        problem=fast,
        groups=[columns for _, columns in things],
        bounds=bounds,
        evaluate=_Evaluator(setting, fast, score, least),
    )
    total = sum(comb(len(things), size) for size in range(depth + 1))
    if clock is not None and depth > 1 and not confirmed:
        _estimate(run, len(things), depth, total, clock, findings, case)
    done: list[Deletion] = []
    interrupted = False
    residual = 0.0
    try:
        for item in delete_all(run, depth, None if tick is None else lambda n: tick(n, total)):
            done.append(item)
            if not item.members:
                residual = fast.residual()
    except KeyboardInterrupt:
        interrupted = True
        findings.add(
            "YN707",
            f"interrupted after {len(done):,} of {total:,} sets",
            hint="Only these are ranked.",
        )
    entries, without_effect, lethal = _ranked(done, [name for name, _ in things])
    return ScreenResult(
        case=case,
        score=score,
        depth=depth,
        entries=tuple(_proven(setting, entries, groups)),
        host=host,
        host_score=done[0].value or 0.0 if done else 0.0,
        essential=_essential(setting, things),
        chains=chains,
        looked_at=len(done),
        solved=sum(item.solved for item in done),
        without_effect=without_effect,
        lethal=lethal,
        residual=residual,
        interrupted=interrupted,
        findings=findings.sorted(),
    )


Thing = tuple[str, list[int]]


def _things(setting: Setting, groups: bool) -> tuple[list[Thing], tuple[tuple[str, ...], ...]]:
    """What can be switched off, each with its columns; and chains that count once."""
    network = setting.case.network
    assert network is not None
    open_reactions = setting.candidates()
    column = {name: setting.problem.column(flux_column(name)) for name in open_reactions}
    if groups:
        found: dict[str, list[int]] = {}
        for item in network.reactions:
            if item.name in column:
                found.setdefault(item.group or item.name, []).append(column[item.name])
        return list(found.items()), ()
    chain = linear_chains(setting.problem, [column[name] for name in open_reactions])
    members: dict[int, list[str]] = {}
    for place, name in enumerate(open_reactions):
        members.setdefault(chain[place], []).append(name)
    things = [(names[0], [column[names[0]]]) for names in members.values()]
    return things, tuple(tuple(names) for names in members.values() if len(names) > 1)


def _estimate(
    run: DeletionRun,
    count: int,
    depth: int,
    total: int,
    clock: Callable[[], float],
    findings: Findings,
    case: Case,
) -> None:
    """Refuse a screen that would take too long, judged by the time of its single knock-outs."""
    start = clock()
    for _ in delete_all(run, 1):
        pass
    seconds = (clock() - start) / max(1, count) * total
    if seconds > MAX_SECONDS:
        findings.add(
            "YN706",
            f"{total:,} sets would take about {seconds / 60:.0f} min at the most",
            case.span,
            left=f"{count} things to switch off, depth {depth}",
            hint="Take a smaller depth, switch off groups, or confirm with --yes.",
        )
        raise InputError(findings.sorted())


def _ranked(done: list[Deletion], names: list[str]) -> tuple[list[ScreenEntry], int, int]:
    """Sets that change the score, best first; how many change nothing; how many are lethal."""
    score = {item.members: item.value for item in done}
    entries: list[ScreenEntry] = []
    without_effect = lethal = 0
    for item in done[1:]:
        parts = [
            score[item.members[:place] + item.members[place + 1 :]]
            for place in range(len(item.members))
        ]
        if any(_same(item.value, part) for part in parts):
            without_effect += 1
            continue
        if item.value is None:
            lethal += 1
            continue
        better = all(part is None or item.value > part + NOTICEABLE for part in parts)
        entries.append(
            ScreenEntry(
                names=tuple(names[place] for place in item.members),
                score=item.value,
                together=len(item.members) > 1 and better,
            )
        )
    entries.sort(key=lambda item: (-item.score, len(item.names)))
    return entries, without_effect, lethal


def _same(one: float | None, other: float | None) -> bool:
    if one is None or other is None:
        return one is other
    return abs(one - other) <= NOTICEABLE


def _proven(setting: Setting, entries: list[ScreenEntry], groups: bool) -> Iterator[ScreenEntry]:
    network = setting.case.network
    assert network is not None
    for place, item in enumerate(entries):
        if place >= PROVEN:
            yield item
            continue
        members = [
            member
            for name in item.names
            for member in (network.members(name) if groups else (name,))
        ]
        yield ScreenEntry(
            names=item.names,
            score=item.score,
            together=item.together,
            exact=behaviour(setting, setting.without(members)),
        )


def _essential(setting: Setting, things: list[Thing]) -> tuple[str, ...]:
    """Things without which there is no growth, or no uptake of the basis."""
    fast = FastProblem(setting.problem)
    fast.aim({setting.problem.column(setting.biomass_column): 1.0})
    bounds = [item.bounds.as_floats() for item in setting.problem.columns]
    run = DeletionRun(problem=fast, groups=[columns for _, columns in things], bounds=bounds)
    return tuple(
        things[item.members[0]][0]
        for item in delete_all(run, 1)
        if item.members and (item.value is None or item.value <= NOTICEABLE)
    )
