"""Whether a network still gives the values that its file says it reproduces."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.ladder import climb_down
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.result import Outcome

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.reproduction import Reproduction
    from yieldnet.prediction.prepare import Prepared

__all__ = ["Reproduced", "reproduce_all"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Reproduced:
    """One value that was to be reproduced, and what came out.

    Parameters
    ----------
    reproduction : Reproduction
        The entry of the network file.
    outcome : Outcome
        Whether its case has a best value.
    found : Fraction or None
        Best value in the unit of the entry; ``None`` if there is none.
    findings : tuple of Finding
        What is doubtful in its case.
    """

    reproduction: Reproduction
    outcome: Outcome
    found: Fraction | None
    findings: tuple[Finding, ...] = ()

    @property
    def name(self) -> str:
        """Name of the entry."""
        return self.reproduction.name

    @property
    def expected(self) -> Fraction:
        """Value that must come out, in the unit of the entry."""
        return self.reproduction.value

    @property
    def agrees(self) -> bool:
        """Whether it came out; integers and fractions exactly."""
        return self.found is not None and self.reproduction.agrees(self.found)

    @property
    def source(self) -> str:
        """Where the expected value stands."""
        return self.reproduction.source


def reproduce_all(
    reproductions: Sequence[Reproduction], engine: str = "glpk"
) -> tuple[Reproduced, ...]:
    """Best value of the case of each entry, beside the value that must come out.

    Parameters
    ----------
    reproductions : sequence of Reproduction
        Entries of a network file.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    tuple of Reproduced
        In the order given.

    Raises
    ------
    InputError
        If the network or a case must be refused; carries the findings of all entries.
    """
    optimiser = Optimiser(engine_named(engine))
    refused = Findings()
    found: list[Reproduced] = []
    for item in reproductions:
        try:
            ready = prepare(item.case, optimiser)
        except InputError as error:
            refused.extend(error.findings)
            continue
        outcome, value = _best(ready)
        found.append(
            Reproduced(
                reproduction=item,
                outcome=outcome,
                found=None if value is None else value / item.factor,
                findings=ready.findings,
            )
        )
    if refused.refused:
        raise InputError(refused.sorted())
    return tuple(found)


def _best(ready: Prepared) -> tuple[Outcome, Fraction | None]:
    objective = ready.objective
    assert objective is not None, "an entry has an aim"
    if ready.point is None:
        return Outcome.INFEASIBLE, None
    _, best = climb_down(ready.optimiser, ready.layers, objective, ready.point)
    assert best is not None, "an aim has a meaning at the last rung"
    if best.status is Status.UNBOUNDED:
        return Outcome.UNBOUNDED, None
    return Outcome.SOLVED, best.value
