"""A value that a network file says its network gives again: a small case with its answer."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.exact import WrittenNumber
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.model.case import Case

__all__ = ["Reproduction"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Reproduction:
    """One entry of ``reproduces``.

    Parameters
    ----------
    name : str
        What it is called in the file.
    case : Case
        The question, with the network and an aim.
    written : WrittenNumber
        The best value that must come out, in ``unit``.
    unit : str
        Unit of the value.
    factor : Fraction
        mol/mol basis in one ``unit`` [mol/mol].
    source : str
        Where the value stands, or how it was derived.
    span : SourceSpan or None
        Where the entry was written.
    """

    name: str
    case: Case
    written: WrittenNumber
    unit: str
    factor: Fraction
    source: str
    span: SourceSpan | None = field(default=None, compare=False, repr=False)

    @property
    def value(self) -> Fraction:
        """The best value that must come out, in ``unit``."""
        return self.written.value

    @property
    def last_place(self) -> Fraction | None:
        """Worth of its last digit in ``unit``; ``None`` if it is exact."""
        return self.written.last_place

    def agrees(self, found: Fraction) -> bool:
        """Whether a value is the one written, within half a unit of the last digit of a decimal.

        Parameters
        ----------
        found : Fraction
            Best value that was found, in ``unit``.

        Returns
        -------
        bool
            Whether they agree.
        """
        if self.last_place is None:
            return found == self.value
        return abs(found - self.value) <= self.last_place / 2
