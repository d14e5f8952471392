"""Cells of a sheet, and how many of them are read."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.foundation.findings import SourceSpan

__all__ = ["MAX_COLUMNS", "MAX_LETTERS", "MAX_ROWS", "Cell", "cell_of"]

MAX_ROWS = 5_000
"""Most rows of a sheet; a sample a minute for three days is less [-]."""
MAX_COLUMNS = 200
"""Most columns of a sheet [-]."""
MAX_LETTERS = 200
"""Longest text of a cell that is read; a longer one is a remark [characters]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """One cell.

    Parameters
    ----------
    text : str
        What stands in it, without blanks round it.
    span : SourceSpan
        Row and column.
    fault : str
        Why the cell holds no plain text or number; empty if it does. It is told only where the
        cell is used.
    """

    text: str
    span: SourceSpan
    fault: str = ""


def cell_of(text: str, span: SourceSpan, fault: str = "") -> Cell:
    """Cell of a text as the file holds it: blanks folded, and nothing longer than a heading.

    Parameters
    ----------
    text : str
        What stands in it.
    span : SourceSpan
        Row and column.
    fault : str
        Why it holds no plain text or number.

    Returns
    -------
    Cell
        The cell.
    """
    folded = " ".join(text.split())
    if len(folded) > MAX_LETTERS:
        fault = fault or f"the cell holds a text of {len(folded):,} characters"
        folded = folded[:MAX_LETTERS]
    return Cell(text=folded, span=span, fault=fault)
