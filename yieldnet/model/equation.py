"""Equations as written: terms with numbers, parameter expressions or ``?`` on two sides."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import WrittenNumber
from yieldnet.model.expression import Expression

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan

__all__ = ["UNKNOWN", "Coefficient", "Equation", "Term", "Unknown"]


@dataclass(frozen=True, slots=True)
class Unknown:
    """A coefficient written as ``?``."""

    def __str__(self) -> str:
        return "?"


UNKNOWN = Unknown()
Coefficient = WrittenNumber | Expression | Unknown


@dataclass(frozen=True, slots=True, kw_only=True)
class Term:
    """One term of an equation.

    Parameters
    ----------
    name : str
        Compound.
    coefficient : WrittenNumber, Expression or Unknown
        What stands before it; the number 1 where nothing does [mol].
    span : SourceSpan or None
        Where it was written.
    """

    name: str
    coefficient: Coefficient
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    def __str__(self) -> str:
        if isinstance(self.coefficient, WrittenNumber):
            text = self.coefficient.text
            return self.name if text == "1" else f"{text} {self.name}"
        return f"{self.coefficient} {self.name}"


@dataclass(frozen=True, slots=True, kw_only=True)
class Equation:
    """What is consumed on the left and produced on the right.

    Parameters
    ----------
    left, right : tuple of Term
        Terms in written order.
    reversible : bool
        Whether it may run backwards.
    """

    left: tuple[Term, ...]
    right: tuple[Term, ...]
    reversible: bool = False

    def __str__(self) -> str:
        arrow = "<->" if self.reversible else "->"
        sides = [" + ".join(str(term) for term in side) for side in (self.left, self.right)]
        return f"{sides[0]} {arrow} {sides[1]}".strip()

    def terms(self) -> tuple[tuple[int, Term], ...]:
        """Terms with their sign: -1 consumed, +1 produced."""
        return tuple((-1, term) for term in self.left) + tuple((1, term) for term in self.right)

    def names(self) -> tuple[str, ...]:
        """Compounds in written order, each once."""
        return tuple(dict.fromkeys(term.name for _, term in self.terms()))
