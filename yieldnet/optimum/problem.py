"""A linear problem as a value: exact columns, named rows with a layer each, bounds.

A changed problem is a new one that shares the matrix, so an engine that has it loaded moves bounds
only.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.model.network import Direction

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = [
    "FREE",
    "MADE",
    "SHUT",
    "Bounds",
    "Column",
    "Matrix",
    "Problem",
    "ProblemBuilder",
    "Row",
    "crossing_bounds",
    "flux_bounds",
]


@dataclass(frozen=True, slots=True)
class Bounds:
    """Least and most of a column or row; ``None`` where there is none."""

    low: Fraction | None = None
    high: Fraction | None = None

    def __post_init__(self) -> None:
        if self.low is not None and self.high is not None and self.low > self.high:
            raise ValueError(f"low {self.low} is above high {self.high}")

    @property
    def fixed(self) -> bool:
        """Whether only one value is left."""
        return self.low is not None and self.low == self.high

    def as_floats(self) -> tuple[float | None, float | None]:
        """Low and high as floats."""
        low, high = self.low, self.high
        # The same as float(low), in half the time.
        return (
            None if low is None else low.numerator / low.denominator,
            None if high is None else high.numerator / high.denominator,
        )


FREE = Bounds()
"""No bound on either side."""
MADE = Bounds(Fraction(0), None)
"""Zero or more."""
SHUT = Bounds(Fraction(0), Fraction(0))
"""Zero."""
_CROSSING = {
    Direction.CONSUMED: Bounds(None, Fraction(0)),
    Direction.PRODUCED: MADE,
    Direction.EITHER: FREE,
}


def crossing_bounds(direction: Direction) -> Bounds:
    """Bounds of what may cross the cell boundary that way; what is given off counts positive."""
    return _CROSSING[direction]


def flux_bounds(reversible: bool) -> Bounds:
    """Bounds of the flux of a reaction."""
    return FREE if reversible else MADE


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """A variable: a coefficient, a flux or a surplus."""

    name: str
    bounds: Bounds


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """A balance or a statement.

    Parameters
    ----------
    name : str
        What it balances or states.
    layer : str
        Rung of the ladder to which it belongs.
    bounds : Bounds
        Least and most of its sum.
    """

    name: str
    layer: str
    bounds: Bounds


@dataclass(frozen=True, slots=True, eq=False)
class Matrix:
    """Coefficients by row; two problems with the same object differ in bounds only.

    Parameters
    ----------
    rows : tuple of tuple of (int, Fraction)
        Column index and coefficient of each entry, row by row.
    columns : int
        Number of columns [-].
    """

    rows: tuple[tuple[tuple[int, Fraction], ...], ...]
    columns: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """Columns, rows and the matrix between them.

    Parameters
    ----------
    columns : tuple of Column
        Variables.
    rows : tuple of Row
        Balances and statements.
    matrix : Matrix
        Coefficients.
    """

    columns: tuple[Column, ...]
    rows: tuple[Row, ...]
    matrix: Matrix
    _column_index: dict[str, int] = field(default_factory=dict, compare=False, repr=False)
    _row_index: dict[str, int] = field(default_factory=dict, compare=False, repr=False)

    def __post_init__(self) -> None:
        if not self._column_index:
            self._column_index.update({item.name: i for i, item in enumerate(self.columns)})
            self._row_index.update({item.name: i for i, item in enumerate(self.rows)})
            if len(self._column_index) != len(self.columns) or len(self._row_index) != len(
                self.rows
            ):
                raise ValueError("two columns or two rows have the same name")

    def column(self, name: str) -> int:
        """Index of a column."""
        return self._column_index[name]

    def row(self, name: str) -> int:
        """Index of a row."""
        return self._row_index[name]

    def has_column(self, name: str) -> bool:
        """Whether there is a column of that name."""
        return name in self._column_index

    def all_bounds(self) -> list[Bounds]:
        """Bounds of the columns, then of the rows."""
        return [item.bounds for item in self.columns] + [item.bounds for item in self.rows]

    def with_columns(self, bounds: Mapping[str, Bounds]) -> Problem:
        """The problem with other bounds of some columns."""
        columns = list(self.columns)
        for name, value in bounds.items():
            place = self._column_index[name]
            columns[place] = replace(columns[place], bounds=value)
        return replace(self, columns=tuple(columns))

    def with_rows(self, bounds: Mapping[str, Bounds]) -> Problem:
        """The problem with other bounds of some rows."""
        rows = list(self.rows)
        for name, value in bounds.items():
            place = self._row_index[name]
            rows[place] = replace(rows[place], bounds=value)
        return replace(self, rows=tuple(rows))


@dataclass(slots=True)
class ProblemBuilder:
    """Gathers columns and rows, then freezes them."""

    columns: list[Column] = field(default_factory=list)
    rows: list[Row] = field(default_factory=list)
    entries: list[tuple[tuple[int, Fraction], ...]] = field(default_factory=list)
    index: dict[str, int] = field(default_factory=dict)

    def add_column(self, name: str, bounds: Bounds) -> None:
        """Add a variable."""
        self.index[name] = len(self.columns)
        self.columns.append(Column(name=name, bounds=bounds))

    def add_row(
        self, name: str, layer: str, bounds: Bounds, coefficients: Mapping[str, Fraction]
    ) -> None:
        """Add a balance or statement over columns that are there already."""
        self.rows.append(Row(name=name, layer=layer, bounds=bounds))
        self.entries.append(
            tuple((self.index[column], value) for column, value in coefficients.items() if value)
        )

    def build(self) -> Problem:
        """The problem as a value."""
        return Problem(
            columns=tuple(self.columns),
            rows=tuple(self.rows),
            matrix=Matrix(tuple(self.entries), len(self.columns)),
        )
