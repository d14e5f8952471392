"""What additions are told as: values, gains and ladders, with a table."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import pandas

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.case import Case
    from yieldnet.prediction.ladder import LadderRung
    from yieldnet.studies.behaviour import Behaviour
    from yieldnet.studies.candidates import Idea, Merged

__all__ = ["COLUMNS", "Addition", "AdditionResult", "AdditionWithDeletion", "Relief"]

COLUMNS = (
    "addition",
    "value",
    "gain",
    "beyond",
    "only together",
    "relieves",
    "reason",
    "equations",
)
"""Columns of the table of additions."""
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Relief:
    """A rung that costs less once something is added.

    Parameters
    ----------
    rung : str
        Its name.
    before, after : Fraction
        What it costs without and with the addition [mol/mol basis].
    """

    rung: str
    before: Fraction
    after: Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Addition:
    """What one candidate, or two together, bring to the aim.

    Parameters
    ----------
    ideas : tuple of Idea
        The candidate, or both.
    value : Fraction or None
        Best value of the aim with it; ``None`` if it has no bound then [mol/mol basis].
    gain : Fraction or None
        How much better that is than before, positive for better [mol/mol basis].
    beyond : Fraction or None
        For a pair, how much better than the better of both alone [mol/mol basis].
    only_together : bool
        Whether neither of a pair brings anything alone.
    reason : str
        Why there is no value.
    ladder : tuple of LadderRung
        Ladder with it in place; empty if it was not looked for.
    relieves : tuple of Relief
        Rungs that cost less with it.
    """

    ideas: tuple[Idea, ...]
    value: Fraction | None
    gain: Fraction | None
    beyond: Fraction | None = None
    only_together: bool = False
    reason: str = ""
    ladder: tuple[LadderRung, ...] = ()
    relieves: tuple[Relief, ...] = ()

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the candidates."""
        return tuple(item.name for item in self.ideas)


@dataclass(frozen=True, slots=True, kw_only=True)
class AdditionWithDeletion:
    """A knock-out on top of an addition, judged by what growth guarantees.

    Parameters
    ----------
    addition : str
        Candidate that is added.
    deletion : str
        Reaction that is switched off.
    guaranteed : Fraction
        Least product at most growth with both [mol/mol basis].
    with_addition, with_deletion : Fraction or None
        The same with one of them alone; ``None`` if there is none [mol/mol basis].
    behaviour : Behaviour
        What the cell would do with both.
    """

    addition: str
    deletion: str
    guaranteed: Fraction
    with_addition: Fraction | None
    with_deletion: Fraction | None
    behaviour: Behaviour

    @property
    def gain(self) -> Fraction:
        """How much the knock-out raises what the addition guarantees [mol/mol basis]."""
        return self.guaranteed - (self.with_addition or _ZERO)


@dataclass(frozen=True, slots=True, kw_only=True)
class AdditionResult:
    """All additions to a case.

    Parameters
    ----------
    case : Case
        The case before.
    source : str
        Title of the candidate file.
    before : Fraction
        Best value of the aim without any addition [mol/mol basis].
    ladder : tuple of LadderRung
        Ladder without any addition.
    singles : tuple of Addition
        Candidates that help, unbounded ones first, then the largest gain first.
    pairs : tuple of Addition or None
        Pairs that bring more than either alone, in the same order; ``None`` if not asked for.
    deletions : tuple of AdditionWithDeletion or None
        Knock-outs that raise what the best additions guarantee; ``None`` if not asked for.
    guaranteed_before : Fraction or None
        Least product at most growth before; ``None`` if not asked for, or if there is none
        [mol/mol basis].
    without_effect : tuple of str
        Candidates that change nothing alone.
    makes_energy : tuple of str
        Candidates that would make energy from nothing, and are not offered.
    pairs_with_energy : int
        Pairs that would, and are not offered [-].
    merged : Merged
        Candidates as they fit the network, and those that do not.
    findings : tuple of Finding
        What is wrong or doubtful in case and candidates.
    """

    case: Case
    source: str
    before: Fraction
    ladder: tuple[LadderRung, ...]
    singles: tuple[Addition, ...]
    pairs: tuple[Addition, ...] | None
    deletions: tuple[AdditionWithDeletion, ...] | None
    guaranteed_before: Fraction | None
    without_effect: tuple[str, ...]
    makes_energy: tuple[str, ...]
    pairs_with_energy: int
    merged: Merged
    findings: tuple[Finding, ...]

    def __repr__(self) -> str:
        return (
            f"AdditionResult({self.case.title!r}: {len(self.singles)} of"
            f" {len(self.merged.ideas)} candidates help)"
        )

    @property
    def clean(self) -> bool:
        """Whether every candidate is right in itself."""
        return not self.merged.refused

    def records(self) -> tuple[dict[str, str | float | bool | None], ...]:
        """Additions as records of plain numbers, singles first, for tables and CSV.

        Returns
        -------
        tuple of dict
            One an addition; ``None`` where the aim has no bound [mol/mol].
        """

        def number(value: Fraction | None) -> float | None:
            return None if value is None else float(value)

        return tuple(
            dict(
                zip(
                    COLUMNS,
                    (
                        " + ".join(item.names),
                        number(item.value),
                        number(item.gain),
                        number(item.beyond),
                        item.only_together,
                        ", ".join(relief.rung for relief in item.relieves),
                        item.reason,
                        "; ".join(text for idea in item.ideas for text in idea.equations),
                    ),
                    strict=True,
                )
            )
            for item in (*self.singles, *(self.pairs or ()))
        )

    def table(self) -> pandas.DataFrame:
        """Additions as a table, numbers in mol/mol basis.

        Returns
        -------
        pandas.DataFrame
            One row an addition, indexed by its name; a value without a bound is missing
            [mol/mol].
        """
        import pandas

        return pandas.DataFrame(list(self.records()), columns=list(COLUMNS)).set_index("addition")
