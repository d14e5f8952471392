"""Relaxations: the final problem with one thing given back, and what the aim gains by it.

Every candidate is a change of bounds on the one network problem. Where the duals of the proven
optimum already show that it stays optimal, nothing is solved.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from itertools import combinations
from typing import TYPE_CHECKING

from yieldnet.balance.statements import is_exact, kind_of, yield_column
from yieldnet.model.case import EnergySurplus
from yieldnet.model.network import GROWTH, CarrierKind, Direction
from yieldnet.optimum.problem import FREE, MADE, SHUT, Bounds, crossing_bounds, flux_bounds
from yieldnet.optimum.proof import Status
from yieldnet.prediction.ladder import runaway_words
from yieldnet.prediction.layers import (
    exchange_column,
    flux_column,
    off_entries,
    surplus_column,
    switch_kind,
)

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from yieldnet.balance.statements import Statements
    from yieldnet.optimum.problem import Problem
    from yieldnet.optimum.proof import Answer, Optimiser
    from yieldnet.prediction.ladder import Objective
    from yieldnet.prediction.layers import Layers

__all__ = ["Candidate", "Relaxation", "RelaxationReport", "candidates_of", "relax"]

_ZERO = Fraction(0)
_CARBON_DIOXIDE = "carbon dioxide"


@dataclass(frozen=True, slots=True)
class Candidate:
    """One thing that could be given back.

    Parameters
    ----------
    kind : str
        What it is: ``carrier``, ``exchange``, ``source``, ``knock-out``, ``strain entry``,
        ``compound``, ``reaction``, ``measured``, ``written``, ``demand``, ``condition`` or
        ``tightening``.
    name : str
        Its name.
    columns, rows : mapping of str to Bounds
        Bounds that change.
    words : str
        What giving it back means.
    """

    kind: str
    name: str
    columns: Mapping[str, Bounds] = field(default_factory=dict)
    rows: Mapping[str, Bounds] = field(default_factory=dict)
    words: str = ""

    def applied(self, problem: Problem) -> Problem:
        """The problem with this given back."""
        return problem.with_columns(self.columns).with_rows(self.rows)


@dataclass(frozen=True, slots=True, kw_only=True)
class Relaxation:
    """What giving something back does to the aim.

    Parameters
    ----------
    parts : tuple of (str, str)
        Kind and name of each thing given back; two where no single one helps.
    value : Fraction or None
        Best value then [mol/mol basis]; ``None`` if there is none.
    gain : Fraction or None
        How much better that is, positive for better whether most or least is looked for
        [mol/mol basis].
    reason : str
        Why there is no value.
    words : str
        What giving it back means.
    unbounded : bool
        Whether there is no value because the aim then has no bound.
    """

    parts: tuple[tuple[str, str], ...]
    value: Fraction | None
    gain: Fraction | None
    reason: str
    words: str
    unbounded: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class RelaxationReport:
    """All relaxations of a case.

    Parameters
    ----------
    helpful : tuple of Relaxation
        Those that change the aim: unbounded ones first, then the largest gain first.
    without_effect : int
        How many change nothing [-].
    not_offered : int
        How many reactions backwards would make energy from nothing [-].
    pairs : bool
        Whether pairs were tried, because nothing helps alone.
    """

    helpful: tuple[Relaxation, ...] = ()
    without_effect: int = 0
    not_offered: int = 0
    pairs: bool = False


def candidates_of(layers: Layers) -> tuple[Candidate, ...]:
    """Everything that a case could give back, in the order of the design.

    Parameters
    ----------
    layers : Layers
        The problems of the case.

    Returns
    -------
    tuple of Candidate
        Candidates; a last one tightens instead (no net uptake of carbon dioxide).
    """
    case, bound = layers.case, layers.bound
    found: list[Candidate] = []
    if bound is not None:
        found += _carrier_candidates(layers)
        found += _switch_candidates(layers)
        found += _crossing_candidates(layers)
        found += _backward_candidates(layers)
    for item in layers.statements.measured:
        found.append(
            Candidate(kind_of(item), item.label, {}, {item.label: FREE}, f"without '{item.label}'")
        )
    for coefficient in case.coefficients:
        if is_exact(coefficient) and coefficient.name != (case.aim.compound if case.aim else ""):
            label = f"written {coefficient.name}"
            found.append(Candidate("written", label, {}, {label: FREE}, f"without '{label}'"))
    for demand in layers.statements.demands:
        label = f"demand {demand.compound}"
        found.append(Candidate("demand", label, {}, {label: FREE}, f"without '{label}'"))
    for name in layers.statements.measured_compounds():
        labels = [item.label for item in layers.statements.measured if item.compound == name]
        if len(labels) > 1:
            found.append(
                Candidate(
                    "measured",
                    f"all values of {name}",
                    {},
                    dict.fromkeys(labels, FREE),
                    f"without the {len(labels)} values of {name}",
                )
            )
    carbon_dioxide = case.coefficient(_CARBON_DIOXIDE)
    if bound is not None and carbon_dioxide and carbon_dioxide.side is Direction.EITHER:
        found.append(
            Candidate(
                "tightening",
                "net carbon dioxide uptake forbidden",
                {yield_column(_CARBON_DIOXIDE): MADE},
                {},
                "without net uptake of carbon dioxide",
            )
        )
    return tuple(found)


def _carrier_candidates(layers: Layers) -> list[Candidate]:
    case, bound = layers.case, layers.bound
    assert bound is not None
    found = []
    aim = case.aim.compound if case.aim else ""
    maintenance = {"maintenance": FREE} if "maintenance" in layers.rungs else {}
    for carrier in bound.network.carriers:
        if carrier.kind is CarrierKind.ENERGY and carrier.name != aim:
            found.append(
                Candidate(
                    "carrier",
                    carrier.name,
                    {surplus_column(carrier.name): FREE},
                    maintenance,
                    f"with {carrier.name} free",
                )
            )
    if case.energy_surplus is EnergySurplus.NONE:
        energy = [item.name for item in bound.network.carriers if item.kind is CarrierKind.ENERGY]
        need = layers.tightened["maintenance"][1]["maintenance"].low if maintenance else None
        found.append(
            Candidate(
                "condition",
                "energy surplus: none",
                {surplus_column(name): MADE for name in energy},
                {"maintenance": Bounds(need, None)} if maintenance else {},
                "with spare energy lost",
            )
        )
    redox = [item.name for item in bound.network.carriers if item.kind is CarrierKind.REDOX]
    if len(redox) > 1:
        found.append(
            Candidate(
                "exchange",
                ", ".join(redox),
                {exchange_column(name): FREE for name in redox},
                {},
                f"with {', '.join(redox)} exchangeable",
            )
        )
    if redox:
        freed = {
            row.name: FREE
            for row in layers.final.rows
            if row.name.endswith("of exchanged carriers")
        }
        found.append(
            Candidate(
                "source",
                ", ".join(redox),
                {exchange_column(name): MADE for name in redox},
                freed,
                f"with a free source of {' and '.join(redox)}",
            )
        )
    return found


def _switch_candidates(layers: Layers) -> list[Candidate]:
    bound = layers.bound
    assert bound is not None
    entries = off_entries(layers.case)
    ways = {item.name: flux_bounds(item.reversible) for item in bound.reactions}
    found = []
    for name, members in entries.items():
        elsewhere = {member for other, more in entries.items() if other != name for member in more}
        opened = [member for member in members if member not in elsewhere and member in ways]
        if opened:
            found.append(
                Candidate(
                    switch_kind(layers.case, name),
                    name,
                    {flux_column(member): ways[member] for member in opened},
                    {},
                    f"undoing '{name}'",
                )
            )
    return found


def _crossing_candidates(layers: Layers) -> list[Candidate]:
    bound = layers.bound
    assert bound is not None
    listed = {item.name for item in layers.case.compounds}
    words = {
        Direction.CONSUMED: "taken up too",
        Direction.PRODUCED: "given off too",
        Direction.EITHER: "crossing too",
    }
    return [
        Candidate(
            "compound",
            name,
            {yield_column(name): crossing_bounds(direction)},
            {},
            f"with {name} {words[direction]}",
        )
        for name, direction in bound.network.crossing
        if name not in listed
    ]


def _backward_candidates(layers: Layers) -> list[Candidate]:
    bound = layers.bound
    assert bound is not None
    off = {member for members in off_entries(layers.case).values() for member in members}
    return [
        Candidate(
            "reaction",
            item.name,
            {flux_column(item.name): FREE},
            {},
            f"with '{item.name}' backwards too",
        )
        for item in bound.reactions
        if not item.reversible and item.name not in off and item.name != GROWTH
    ]


def relax(
    optimiser: Optimiser,
    layers: Layers,
    objective: Objective,
    best: Answer,
) -> RelaxationReport:
    """What each thing given back does to the aim.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    layers : Layers
        The problems.
    objective : Objective
        The aim.
    best : Answer
        Proven optimum of the final problem at the reconciled point.

    Returns
    -------
    RelaxationReport
        Exact gains, ranked.
    """
    candidates = candidates_of(layers)
    bench = _Bench(optimiser, layers, objective, best)
    helpful: list[Relaxation] = []
    tried: list[Candidate] = []
    not_offered = 0
    for candidate in candidates:
        found = bench.outcome((candidate,))
        if found is None:
            tried.append(candidate)
            continue
        if candidate.kind in ("reaction", "exchange") and bench.makes_energy(candidate):
            if candidate.kind == "reaction":
                not_offered += 1
                continue
            found = replace(found, words=f"{found.words} (which makes energy from nothing)")
        tried.append(candidate)
        helpful.append(found)
    singles = len(helpful)
    pairs = not any(item.unbounded or (item.gain or _ZERO) > 0 for item in helpful)
    if pairs:
        offered = [item for item in tried if item.kind != "tightening"]
        for pair in combinations(offered, 2):
            found = bench.outcome(pair)
            turned = [item for item in pair if item.kind == "reaction"]
            if found is not None and not (turned and bench.makes_energy(*turned)):
                helpful.append(found)
    order = sorted(
        range(len(helpful)),
        key=lambda i: (
            not helpful[i].unbounded,
            helpful[i].gain is None,
            -(helpful[i].gain or _ZERO),
            i,
        ),
    )
    return RelaxationReport(
        helpful=tuple(helpful[i] for i in order),
        without_effect=len(tried) - singles,
        not_offered=not_offered,
        pairs=pairs,
    )


def _statement_rows(layers: Layers, statements: Statements) -> frozenset[str]:
    """Rows of everything the case states, maintenance included."""
    return frozenset(
        (
            "maintenance",
            *(item.label for item in statements.measured),
            *(f"demand {item.compound}" for item in statements.demands),
            *(f"written {item.name}" for item in layers.case.coefficients),
        )
    )


class _Bench:
    """Tries candidates on the final problem."""

    def __init__(
        self, optimiser: Optimiser, layers: Layers, objective: Objective, best: Answer
    ) -> None:
        self.optimiser = optimiser
        self.layers = layers
        self.objective = objective
        self.best = best

    def makes_energy(self, *candidates: Candidate) -> bool:
        """Whether something given back makes energy with nothing crossing the cell boundary."""
        bound = self.layers.bound
        assert bound is not None
        statements = self.layers.statements
        problem = self.best.problem
        for candidate in candidates:
            problem = candidate.applied(problem)
        problem = problem.with_columns(
            {yield_column(name): SHUT for name, _ in bound.network.crossing}
        ).with_rows(
            dict.fromkeys(
                (
                    row.name
                    for row in self.best.problem.rows
                    if row.name in _statement_rows(self.layers, statements)
                ),
                FREE,
            )
        )
        for item in bound.network.carriers:
            if item.kind is CarrierKind.ENERGY:
                column = surplus_column(item.name)
                open_problem = problem.with_columns({column: FREE})
                answer = self.optimiser.optimise(open_problem, {column: Fraction(1)})
                if answer.status is Status.UNBOUNDED:
                    return True
        return False

    def outcome(self, parts: Sequence[Candidate]) -> Relaxation | None:
        """Relaxation of one or two candidates together, or ``None`` if it changes nothing."""
        problem = self.best.problem
        for part in parts:
            problem = part.applied(problem)
        if self.best.stays_best(problem):
            return None
        answer = self.objective.best(self.optimiser, problem)
        names = tuple((part.kind, part.name) for part in parts)
        words = " and ".join(part.words for part in parts)
        if answer.status is Status.UNBOUNDED:
            return Relaxation(
                parts=names,
                value=None,
                gain=None,
                reason=runaway_words(answer),
                words=words,
                unbounded=True,
            )
        if answer.status is Status.INFEASIBLE:
            return Relaxation(
                parts=names,
                value=None,
                gain=None,
                reason="then no point keeps all statements",
                words=words,
            )
        change = answer.value - self.best.value
        if not change:
            return None
        return Relaxation(
            parts=self._named(parts, names, answer),
            value=answer.value,
            gain=change if self.objective.maximise else -change,
            reason="",
            words=self._words(parts, words, answer),
        )

    def _used(self, part: Candidate, answer: Answer) -> list[str]:
        """Carriers that a best point must draw, the last ones spared first."""
        prefix = exchange_column("")
        problem = answer.optimal_face()
        used = []
        for column in reversed(list(part.columns)):
            spared = problem.with_columns({column: SHUT})
            if self.optimiser.optimise(spared, {}).status is Status.INFEASIBLE:
                used.append(column.removeprefix(prefix))
            else:
                problem = spared
        return used[::-1]

    def _named(
        self,
        parts: Sequence[Candidate],
        names: tuple[tuple[str, str], ...],
        answer: Answer,
    ) -> tuple[tuple[str, str], ...]:
        return tuple(
            (kind, ", ".join(self._used(part, answer)) or name)
            if kind == "source"
            else (kind, name)
            for part, (kind, name) in zip(parts, names, strict=True)
        )

    def _words(self, parts: Sequence[Candidate], words: str, answer: Answer) -> str:
        """Words, a free source naming the carriers that are really drawn."""
        if len(parts) == 1 and parts[0].kind == "source":
            used = self._used(parts[0], answer)
            if used:
                return f"with a free source of {' and '.join(used)}"
        return words
