"""A table of texts, which every output lays out in its own way."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["Table"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A table of texts.

    Parameters
    ----------
    title : str
        Heading with the unit.
    columns : tuple of str
        Column headings.
    rows : tuple of tuple of str
        Cells.
    note : str
        Line under the table.
    bars : tuple of float
        Bar at the end of each row, as a fraction of the longest; empty for none [-].
    """

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    note: str = ""
    bars: tuple[float, ...] = ()
