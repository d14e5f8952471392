"""Values that carry their unit and source."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from fractions import Fraction

__all__ = ["Assumption", "SourcedValue"]


@dataclass(frozen=True, slots=True, kw_only=True)
class SourcedValue:
    """A number with its unit and where it comes from.

    Parameters
    ----------
    value : Fraction
        The number, in ``unit``.
    unit : str
        Unit as text; ``-`` if none.
    source : str
        Where the number comes from.
    note : str
        Remark, if any.
    """

    value: Fraction
    unit: str
    source: str
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Assumption:
    """Something the answer takes for granted, shown with it.

    Parameters
    ----------
    text : str
        The assumption in words.
    value : Fraction or None
        Its number in ``unit``, if it has one.
    unit : str
        Unit as text; empty if none.
    source : str
        Where it comes from.
    """

    text: str
    value: Fraction | None = None
    unit: str = ""
    source: str = ""
