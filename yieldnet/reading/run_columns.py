"""From the sheet of a run to series of readings in the units of the run."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.foundation.findings import near
from yieldnet.foundation.units import UnitError
from yieldnet.model.cultivation import CultivationKind, Reading, Series
from yieldnet.reading.measures import PERCENT, Measure, Scale, scale_of
from yieldnet.reading.run_labels import Label, LabelBook, Role
from yieldnet.reading.run_quantities import check_value

if TYPE_CHECKING:
    from collections.abc import Iterator

    from yieldnet.foundation.findings import Findings
    from yieldnet.reading.cells import Cell
    from yieldnet.reading.nodes import Node
    from yieldnet.reading.run_errors import ErrorBook
    from yieldnet.reading.sheet import Sheet

__all__ = ["NOT_MEASURED", "Column", "ColumnReader", "Columns"]

NOT_MEASURED = ("n/a", "-")
"""Cells that say that nothing was measured."""

_HEADING = re.compile(r"(?P<name>.*?)\s*(?:\[(?P<unit>[^\[\]]*)\]|(?<=\s)\((?P<round>[^()]*)\))?")
_DEVIATION = re.compile(r"(?:±\s*(?P<after>.+)|(?P<before>.+?)\s*(?:±|\b(?:s\.d\.?|sd)))", re.I)
_ALWAYS = frozenset({Role.VOLUME, Role.BASE_RATE, Role.BROTH, Role.GAS_IN, Role.GAS_OUT})
_ALWAYS |= {Role.OPTICAL_DENSITY, Role.WET_WEIGHT, Role.FLOW_IN, Role.FLOW_OUT, Role.TIME}
_OF_KIND = {
    CultivationKind.BATCH: _ALWAYS | {Role.SAMPLED, Role.BASE_ADDED},
    CultivationKind.FED_BATCH: _ALWAYS | {Role.SAMPLED, Role.BASE_ADDED, Role.FED, Role.FEED_RATE},
    CultivationKind.CHEMOSTAT: _ALWAYS
    | {Role.STATE, Role.DILUTION_RATE, Role.FEED_RATE, Role.FEED},
}
# What closes the volume of the broth or orders the rows must be known in every row.
_EVERY_ROW = frozenset(
    {
        Role.TIME,
        Role.STATE,
        Role.DILUTION_RATE,
        Role.VOLUME,
        Role.SAMPLED,
        Role.FED,
        Role.FEED_RATE,
        Role.BASE_ADDED,
        Role.BASE_RATE,
    }
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """A column that was understood.

    Parameters
    ----------
    label : Label
        What it holds.
    heading : Cell
        Its heading.
    unit : str
        Unit as written.
    series : Series
        Its readings in the unit of the run.
    numbers : tuple of (Cell, float or None)
        Cells with the number in them, in the unit of the sheet.
    """

    label: Label
    heading: Cell
    unit: str
    series: Series
    numbers: tuple[tuple[Cell, float | None], ...]


@dataclass(slots=True, kw_only=True)
class Columns:
    """All columns of a sheet.

    Parameters
    ----------
    times : tuple of (Cell, float)
        Time of each row [h]; empty without such a column.
    states : tuple of str
        Name of the steady state of each row; empty without such a column.
    found : dict of (Role, str) to Column
        The others by what they measure.
    named : set of (Role, str)
        What the sheet has a column for, even if it could not be read.
    understood : bool
        Whether every heading was understood, so that what is missing is missing indeed.
    """

    times: tuple[tuple[Cell, float], ...] = ()
    states: tuple[str, ...] = ()
    found: dict[tuple[Role, str], Column] = field(default_factory=dict)
    named: set[tuple[Role, str]] = field(default_factory=set)
    understood: bool = True

    def of(self, role: Role) -> tuple[Column, ...]:
        """Columns of a role, in the order of the sheet."""
        return tuple(item for (its_role, _), item in self.found.items() if its_role is role)

    def one(self, role: Role) -> Series | None:
        """Series of a role that has a single column."""
        return next((item.series for item in self.of(role)), None)

    def has(self, role: Role) -> bool:
        """Whether the sheet has a column of a role."""
        return any(its_role is role for its_role, _ in self.named)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Place:
    """A column on the way: where it stands and what its heading says."""

    index: int
    heading: Cell
    name: str
    unit: str
    unit_cell: Cell
    label: Label


@dataclass(slots=True, kw_only=True)
class ColumnReader:
    """Reads the columns of one sheet.

    Parameters
    ----------
    sheet : Sheet
        The grid.
    labels : LabelBook
        What headings stand for.
    errors : ErrorBook
        Errors of columns without a column of standard deviations.
    findings : Findings
        Receives what is wrong.
    kind : CultivationKind or None
        How the vessel was run; ``None`` if that is not known.
    ignored : tuple of Node
        Headings that are left alone.
    """

    sheet: Sheet
    labels: LabelBook
    errors: ErrorBook
    findings: Findings
    kind: CultivationKind | None
    ignored: tuple[Node, ...] = ()

    def read(self) -> Columns:
        """Every column, with findings for those that cannot be read."""
        columns = Columns()
        before = len(self.findings.items)
        values: dict[tuple[Role, str], _Place] = {}
        deviations: dict[str, _Place] = {}
        for place, is_deviation in self._places():
            label = place.label
            first: _Place | None
            if is_deviation:
                first = deviations.setdefault(label.name, place)
            else:
                first = values.setdefault(label.thing, place)
            if first is not place:
                self.findings.add(
                    "YN127",
                    f"{place.heading.text!r} and {first.heading.text!r} are two columns of one"
                    " thing",
                    place.heading.span,
                    left=f"first in column {first.heading.span.column}",
                    hint="Keep one, and list the other under 'ignore'.",
                )
            elif not is_deviation:
                columns.named.add(label.thing)
        columns.understood = len(self.findings.items) == before
        for name, place in deviations.items():
            if all(item.label.name != name for item in values.values()):
                self.findings.add(
                    "YN133",
                    f"{place.heading.text!r} is the error of no column",
                    place.heading.span,
                    hint=f"Add the column {name!r}, or list this one under 'ignore'.",
                )
        for thing, place in values.items():
            deviation = deviations.get(place.label.name)
            if place.label.role is Role.STATE:
                columns.states = tuple(self._text(row[place.index]) for row in self.sheet.rows)
            elif place.label.role is Role.TIME:
                self._times(place, deviation, columns)
            elif (column := self._column(place, deviation)) is not None:
                columns.found[thing] = column
        return columns

    def _places(self) -> Iterator[tuple[_Place, bool]]:
        """Headings that were understood, and whether each holds standard deviations."""
        ignored = {node.text.casefold(): node for node in self.ignored}
        left: set[str] = set()
        seen: list[str] = []
        for index, heading in enumerate(self.sheet.headings):
            cells = [row[index] for row in self.sheet.rows]
            if not heading.text and not heading.fault:
                if any(cell.text or cell.fault for cell in cells):
                    self.findings.add(
                        "YN126",
                        "the column has no heading",
                        heading.span,
                        hint="Write what it holds, with its unit in brackets.",
                    )
                continue
            if heading.fault:
                self._faulty(heading, "heading")
                continue
            parts = _HEADING.fullmatch(heading.text)
            name = parts["name"] if parts else heading.text
            seen.append(name)
            written = {heading.text.casefold(), name.casefold()} & set(ignored)
            if written:
                left |= written
                continue
            deviation = _DEVIATION.fullmatch(name)
            if deviation:
                name = (deviation["after"] or deviation["before"]).strip()
            label = self.labels.find(name)
            if label is None or label.role is Role.BASE:
                self.labels.refuse(name, "column", heading.span, self.findings, column=True)
                continue
            if self.kind is not None and label.role not in _OF_KIND[self.kind]:
                self.findings.add(
                    "YN128",
                    f"a {self.kind} cannot use the column {heading.text!r}",
                    heading.span,
                    hint="Check 'kind', or list the column under 'ignore'.",
                )
                continue
            below = self.sheet.units[index] if self.sheet.units else heading
            bracket = (parts["unit"] or parts["round"] or "") if parts else ""
            unit = below.text if self.sheet.units else bracket.strip()
            place = _Place(
                index=index, heading=heading, name=name, unit=unit, unit_cell=below, label=label
            )
            yield place, deviation is not None
        for word, node in ignored.items():
            if word not in left:
                self.findings.add(
                    "YN126",
                    f"'ignore': the sheet has no column {node.text!r}",
                    node.span,
                    hint=near(node.text, seen) or "Leave it out.",
                )

    def _text(self, cell: Cell) -> str:
        if cell.fault:
            self._faulty(cell, "state")
        elif not cell.text or cell.text.casefold() in NOT_MEASURED:
            self.findings.add(
                "YN124",
                "the state of this row is not named",
                cell.span,
                hint="Give every row the name of its steady state.",
            )
        return cell.text

    def _faulty(self, cell: Cell, name: str) -> None:
        self.findings.add("YN125", f"{name}: {cell.fault}", cell.span, hint="Write a plain value.")

    def _number(self, cell: Cell, name: str, must: bool) -> tuple[bool, float | None]:
        """Whether a cell could be read, and its number; ``None`` where nothing was measured."""
        if cell.fault:
            self._faulty(cell, name)
            return False, None
        if not cell.text:
            self.findings.add(
                "YN124",
                f"{name}: the cell is empty",
                cell.span,
                hint="Write the value." if must else "Write n/a where nothing was measured.",
            )
            return False, None
        if cell.text.casefold() in NOT_MEASURED:
            if must:
                self.findings.add(
                    "YN124",
                    f"{name}: {cell.text!r} cannot stand here",
                    cell.span,
                    hint="It must be known in every row; write 0 where nothing was added or drawn.",
                )
            return not must, None
        try:
            return True, float(read_number(cell.text).value)
        except NumberTextError as error:
            self.findings.add(error.code, f"{name}: {error.reason}", cell.span, hint=error.hint)
            return False, None

    def _scale(self, place: _Place) -> Scale | None:
        label = place.label
        try:
            return scale_of(place.unit, label.measure, label.weight, label.multiple)
        except UnitError as error:
            self.findings.add(
                error.code,
                f"column {place.heading.text!r}: {error.reason}",
                place.unit_cell.span,
                hint=error.hint,
            )
            return None

    def _times(self, place: _Place, deviation: _Place | None, columns: Columns) -> None:
        if deviation is not None:
            self.findings.add(
                "YN133",
                "'time' has no error here",
                deviation.heading.span,
                hint="List the column under 'ignore'.",
            )
        scale = self._scale(place)
        found: list[tuple[Cell, float]] = []
        for row in self.sheet.rows:
            cell = row[place.index]
            _, number = self._number(cell, place.name, must=True)
            if number is not None and scale is not None:
                found.append((cell, scale.value(number)))
        columns.times = tuple(found)

    def _column(self, place: _Place, deviation: _Place | None) -> Column | None:
        label = place.label
        scale = self._scale(place)
        rule = None
        spread: tuple[Scale, bool] | None = None
        if deviation is None:
            rule = self.errors.rule(label, place.unit, place.heading.span)
        else:
            spread = self._spread(deviation)
        readings: list[Reading | None] = []
        numbers: list[tuple[Cell, float | None]] = []
        whole = scale is not None and (rule is not None or spread is not None)
        for row in self.sheet.rows:
            cell = row[place.index]
            fine, number = self._number(cell, label.name, must=label.role in _EVERY_ROW)
            numbers.append((cell, number))
            if number is None:
                whole &= fine
                readings.append(None)
                continue
            sd: float | None = None
            value = scale.value(number) if scale else number
            shown = f"{cell.text} {place.unit}".strip()
            fine = scale is not None and check_value(
                value, label.measure, cell.span, label.name, self.findings, shown
            )
            if deviation is not None and spread is not None:
                sd = self._deviation(row[deviation.index], label, *spread, value)
            elif rule is not None and fine:
                sd = self.errors.sd_of(rule, value, label, cell.span)
            if sd is None or not fine:
                whole = False
                readings.append(None)
            else:
                readings.append(Reading(value=value, sd=sd, span=cell.span))
        if not whole:
            return None
        series = Series(
            compound=label.compound,
            readings=tuple(readings),
            heading=place.heading.text,
            span=place.heading.span,
        )
        return Column(
            label=label,
            heading=place.heading,
            unit=place.unit,
            series=series,
            numbers=tuple(numbers),
        )

    def _spread(self, place: _Place) -> tuple[Scale, bool] | None:
        """Scale of a column of standard deviations, and whether they are shares of the value."""
        if place.unit in PERCENT and place.label.measure is not Measure.FRACTION:
            return Scale(factor=1e-2), True
        scale = self._scale(place)
        return None if scale is None else (scale, False)

    def _deviation(
        self, cell: Cell, label: Label, scale: Scale, relative: bool, value: float
    ) -> float | None:
        name = f"s.d. of {label.name}"
        fine, number = self._number(cell, name, must=False)
        if number is None:
            if fine:
                self.findings.add(
                    "YN131",
                    f"{label.name!r} has no standard deviation in this row",
                    cell.span,
                    hint="Write it, or n/a for the value as well.",
                )
            return None
        if number < 0:
            self.findings.add(
                "YN209",
                f"{name}: the standard deviation {cell.text} is negative",
                cell.span,
                hint="Write its size without a sign.",
            )
            return None
        sd = scale.sd(number) * (abs(value) if relative else 1.0)
        if sd == 0:
            self.findings.add(
                "YN132",
                f"{name}: the standard deviation is {cell.text if not number else 'a share of 0'}",
                cell.span,
                hint="Write how far repeated measurements differ; what is exact has no such column"
                " and stands under 'errors'.",
            )
            return None
        return sd
