"""Pages of a workbook: cells with their looks, names of the key cells, set-up for print.

In: texts, numbers and live formulas. Out: an openpyxl workbook, and what each formula comes to now.
How a cell looks says what it is, and so does the word beside it: yours to change, from the linear
problem, a constant, or a formula.
"""

from __future__ import annotations

import math
import re
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING, cast

from yieldnet.report.figures import DIGITS
from yieldnet.report.picture_file import COLOURS
from yieldnet.report.workbook_live import Live, Place

if TYPE_CHECKING:
    from collections.abc import Sequence

    from openpyxl import Workbook
    from openpyxl.cell.cell import Cell
    from openpyxl.worksheet.worksheet import Worksheet

    from yieldnet.report.workbook_live import Value

__all__ = ["ENTRY", "Book", "Kind", "Page", "defined_name", "number_format"]

ENTRY = ("", "value", "unit", "what it is", "how it follows", "source")
"""Headings of a list of numbers."""
_FONT = "Arial"
_SIZE = 10
_INK, _PALE = "333333", "666666"
_LINE = "999999"
_MOST_PLACES = 6
_EMPTY = "none"
_FIRST_TABLE_ROW = 5
_WIDE = 30
_CHART_ROWS = 17
_CENTIMETRES = 2.54 / 72
"""A point in centimetres [cm/pt]."""
_LETTERS = 1.2
"""Letters of a text in the room of one digit, in which widths are told [-]."""
_BOLD_LETTERS = 0.8
"""The same of a heading, whose few words break early [-]."""
_LINE_HEIGHT = 13
"""Height of a line of a text [pt]."""
_TITLE_HEIGHT = 18
"""Height of the line of the title [pt]."""
_TEXT_COLUMNS = {
    *ENTRY[2:],
    "side",
    "measured; status",
    "formula",
    "species",
    "closes",
    "holds",
    "what it adds",
    "why there is none",
    "change",
    "way out",
}
_PLAIN = re.compile(r"[^A-Za-z0-9_]+", re.ASCII)


class Kind(StrEnum):
    """What a number is."""

    YOURS = "yours to change"
    PREDICTED = "from the linear problem"
    CONSTANT = "constant"
    FORMULA = "formula"


_FILLS = {Kind.YOURS: "FFF2CC", Kind.PREDICTED: "DCE6F1", Kind.CONSTANT: "EEEEEE"}


def defined_name(key: str) -> str:
    """Name that a spreadsheet takes for a cell.

    Parameters
    ----------
    key : str
        Name in words.

    Returns
    -------
    str
        The words joined by underscores.

    Examples
    --------
    >>> defined_name("yield of carbon dioxide"), defined_name("yield of 1,3-propanediol")
    ('yield_of_carbon_dioxide', 'yield_of_1_3_propanediol')
    """
    return _PLAIN.sub("_", key).strip("_")


def number_format(value: float) -> str:
    """Format that shows a number in three significant digits.

    Parameters
    ----------
    value : float
        The number as it is now.

    Returns
    -------
    str
        Format of a spreadsheet.

    Examples
    --------
    >>> number_format(0.0123), number_format(1.5), number_format(23600.4), number_format(2e-9)
    ('0.0000', '0.00', '#,##0', '0.00E+00')
    """
    if not value or not math.isfinite(value):
        return "0.00"
    places = DIGITS - 1 - math.floor(math.log10(abs(value)))
    if places > _MOST_PLACES:
        return "0.00E+00"
    return "0." + "0" * places if places > 0 else "#,##0"


class Book:
    """A workbook that is being filled.

    Parameters
    ----------
    title : str
        What stands at the top of every page.
    """

    def __init__(self, title: str) -> None:
        from openpyxl import Workbook

        self.title = title
        self.workbook: Workbook = Workbook()
        self.workbook.remove(self.workbook.worksheets[0])
        self.pages: dict[str, Page] = {}
        self.values: dict[tuple[str, str], Value] = {}
        self.sources: dict[tuple[str, str], None] = {}
        self._known: dict[str, Live] = {}
        self._taken: set[str] = set()

    def page(self, name: str, widths: Sequence[float], about: str) -> Page:
        """A new page.

        Parameters
        ----------
        name : str
            Name of the sheet.
        widths : sequence of float
            Widths of the columns [characters].
        about : str
            What the page holds.

        Returns
        -------
        Page
            The page, with its heading.
        """
        page = Page(self, name, widths, about)
        self.pages[name] = page
        return page

    def define(self, key: str, cell: Live) -> Live:
        """Give a cell a name, by which formulas call it from then on.

        Parameters
        ----------
        key : str
            Name in words, once in a workbook.
        cell : Live
            The cell.

        Returns
        -------
        Live
            The cell under its name.
        """
        from openpyxl.workbook.defined_name import DefinedName

        assert key not in self._known, f"{key!r} is named twice"
        assert cell.place is not None
        name, number = defined_name(key), 1
        # Two compounds may differ in a sign alone; a spreadsheet does not tell capitals apart.
        while name.lower() in self._taken:
            number += 1
            name = f"{defined_name(key)}_{number}"
        self._taken.add(name.lower())
        self.workbook.defined_names[name] = DefinedName(name, attr_text=cell.place.whole)
        self._known[key] = Live(text=name, value=cell.value, place=cell.place)
        return self._known[key]

    def __getitem__(self, key: str) -> Live:
        """Cell by its name in words."""
        return self._known[key]

    def __contains__(self, key: object) -> bool:
        """Whether a cell has that name."""
        return key in self._known

    def finish(self, banner: Live) -> None:
        """Put a line under the heading of every page, and a frame round each printed page.

        Parameters
        ----------
        banner : Live
            The line.
        """
        for page in self.pages.values():
            page.write(1, banner, row=2, bold=True)
            page.set_up_print()

    def sort(self, order: Sequence[str]) -> None:
        """Put the sheets in an order; those that are not there are left out."""
        names = [name for name in order if name in self.pages]
        assert len(names) == len(self.pages)
        for place, name in enumerate(names):
            away = place - self.workbook.sheetnames.index(name)
            self.workbook.move_sheet(name, away)


class Page:
    """A sheet that is filled from top to bottom."""

    def __init__(self, book: Book, name: str, widths: Sequence[float], about: str) -> None:
        from openpyxl.utils import get_column_letter

        self.book = book
        self.name = name
        self.sheet: Worksheet = book.workbook.create_sheet(name)
        self.sheet.sheet_view.showGridLines = False
        self.sheet.sheet_format.defaultRowHeight = _LINE_HEIGHT
        self.sheet.sheet_format.customHeight = True
        for column, width in enumerate(widths, start=1):
            self.sheet.column_dimensions[get_column_letter(column)].width = width
        # Where columns are narrow a long text runs over the empty cells beside it.
        self.wraps = len(widths) > 4 and widths[4] >= _WIDE
        self.row = 1
        self.write(1, f"{book.title}: {name}", bold=True, size=_SIZE + 3)
        self.sheet.row_dimensions[1].height = _TITLE_HEIGHT
        self.row = 3
        self.write(1, about, pale=True)
        self.row = _FIRST_TABLE_ROW
        self.sheet.freeze_panes = f"B{_FIRST_TABLE_ROW - 1}"

    def _cell(self, column: int, row: int) -> Cell:
        return cast("Cell", self.sheet.cell(row=row, column=column))

    def write(
        self,
        column: int,
        value: Live | Fraction | float | str | None,
        *,
        row: int | None = None,
        kind: Kind | None = None,
        shown: str = "",
        bold: bool = False,
        pale: bool = False,
        wrap: bool = False,
        size: int = _SIZE,
    ) -> Live:
        """Write a cell.

        Parameters
        ----------
        column : int
            From 1 on [-].
        value : Live, Fraction, float, str or None
            Formula, number or text; ``None`` for an empty cell that may be filled in.
        row : int or None
            ``None`` for the row at hand [-].
        kind : Kind or None
            What the number is, for its colour.
        shown : str
            Format of the number; empty for three significant digits.
        bold, pale, wrap : bool
            How a text looks.
        size : int
            Of the letters [pt].

        Returns
        -------
        Live
            The cell.
        """
        from openpyxl.styles import Alignment, Font, PatternFill

        place = Place(sheet=self.name, column=column, row=row or self.row)
        cell = self._cell(column, place.row)
        cell.font = Font(name=_FONT, size=size, bold=bold, color=_PALE if pale else _INK)
        if kind in _FILLS:
            cell.fill = PatternFill("solid", fgColor=_FILLS[kind])
        told: Value
        if value is None:
            told = ""
        elif isinstance(value, str):
            told = value
            cell.value = value
            # A text of the user may begin with a sign of equality, and stays a text.
            cell.data_type = "s"
            # Numbers stand right, so a text in the next column keeps away from them.
            cell.alignment = Alignment(
                horizontal="left", wrap_text=wrap, vertical="top", indent=int(column > 1)
            )
            if wrap:
                self._make_room(cell, value)
        else:
            told = value.value if isinstance(value, Live) else float(value)
            if isinstance(value, Live):
                cell.value = "=" + value.text.replace(f"'{self.name}'!", "")
                assert not isinstance(told, float) or math.isfinite(told), (place, value.text)
                self.book.values[self.name, cell.coordinate] = told
            else:
                cell.value = told
            numeric = not isinstance(told, str)
            cell.number_format = shown or (number_format(float(told)) if numeric else "0.00")
            right = numeric or told == _EMPTY
            cell.alignment = Alignment(
                horizontal="right" if right else "left",
                vertical="top",
                indent=int(column > 1 and not right),
            )
        return Live(text=place.whole, value=told, place=place)

    def _make_room(self, cell: Cell, text: str, letters: float = _LETTERS) -> None:
        """Make a row as high as its longest text, which not every spreadsheet does by itself."""
        width = self.sheet.column_dimensions[cell.column_letter].width
        lines = sum(max(1, math.ceil(len(part) / (width * letters))) for part in text.split("\n"))
        row = self.sheet.row_dimensions[cell.row]
        row.height = max(row.height or _LINE_HEIGHT, _LINE_HEIGHT * lines)

    def heading(self, text: str) -> None:
        """A heading of a section, after a gap."""
        self.row += self.row > _FIRST_TABLE_ROW
        self.write(1, text, bold=True, size=_SIZE + 1)
        self.row += 1

    def header(self, *texts: str) -> None:
        """A row of column headings."""
        from openpyxl.styles import Alignment, Border, Side

        for column, text in enumerate(texts, start=1):
            self.write(column, text, bold=True)
            cell = self._cell(column, self.row)
            cell.border = Border(bottom=Side(style="thin", color=_LINE))
            words = column == 1 or text in _TEXT_COLUMNS
            cell.alignment = Alignment(
                wrap_text=True,
                vertical="bottom",
                horizontal="left" if words else "right",
                indent=int(words and column > 1),
            )
            self._make_room(cell, text, _BOLD_LETTERS)
        self.row += 1

    def list_header(self) -> None:
        """Headings of a list of numbers; without sources where columns are narrow."""
        from openpyxl.styles import Alignment

        row = self.row
        self.header(*(ENTRY if self.wraps else ENTRY[:-1]))
        if not self.wraps:
            cell = self._cell(len(ENTRY) - 1, row)
            cell.alignment = Alignment(horizontal="left", vertical="bottom", indent=1)
            self.sheet.row_dimensions[row].height = _LINE_HEIGHT

    def entry(
        self,
        name: str,
        value: Live | Fraction | float | str | None,
        unit: str,
        kind: Kind,
        how: str = "",
        source: str = "",
        key: str = "",
        shown: str = "",
    ) -> Live:
        """A row of a list under the headings of :data:`ENTRY`.

        Parameters
        ----------
        name : str
            Label.
        value : Live, Fraction, float, str or None
            Formula or number; ``None`` for an empty cell.
        unit : str
            Unit as text.
        kind : Kind
            What it is.
        how : str
            How it follows.
        source : str
            Where it comes from.
        key : str
            Name of the cell in words; empty for none.
        shown : str
            Format of the number; empty for the usual one of its kind.

        Returns
        -------
        Live
            The cell of the value.
        """
        given = kind in (Kind.YOURS, Kind.CONSTANT)
        self.write(1, name)
        found = self.write(2, value, kind=kind, shown=shown or ("General" if given else ""))
        self.write(3, unit)
        self.write(4, str(kind), pale=True)
        self.write(5, how, wrap=self.wraps)
        self.write(6, " ".join(source.split()) or None, wrap=self.wraps)
        if source and kind is Kind.CONSTANT:
            self.book.sources[name, " ".join(source.split())] = None
        self.row += 1
        return self.book.define(key, found) if key else found

    def note(self, text: str) -> None:
        """A line under a table."""
        self.write(1, text, pale=True)
        self.row += 1

    def bars(self, title: str, first: int, last: int) -> None:
        """A chart of the numbers in the second column, under what has been written.

        Parameters
        ----------
        title : str
            What it shows, with the unit.
        first, last : int
            Rows [-].
        """
        from openpyxl.chart import BarChart, Reference

        chart = BarChart()
        chart.type = "bar"
        chart.title = title
        chart.add_data(Reference(self.sheet, min_col=2, min_row=first, max_row=last))
        chart.set_categories(Reference(self.sheet, min_col=1, min_row=first, max_row=last))
        chart.legend = None
        chart.gapWidth = 60
        chart.width, chart.height = 18, _CHART_ROWS * _LINE_HEIGHT * _CENTIMETRES
        values = [self.sheet.cell(row=row, column=2).value for row in range(first, last + 1)]
        # Bars are compared by their lengths, so they begin at 0.
        if all(not isinstance(item, int | float) or item >= 0 for item in values):
            chart.y_axis.scaling.min = 0
        # Bars lie, so the first row of the table is meant to be on top.
        chart.x_axis.scaling.orientation = "maxMin"
        chart.x_axis.delete = chart.y_axis.delete = False
        chart.series[0].graphicalProperties.solidFill = COLOURS[0].removeprefix("#")
        self.sheet.add_chart(chart, f"A{self.row + 1}")
        self.row += _CHART_ROWS + 2

    def set_up_print(self) -> None:
        """A4 across, as wide as the page, the heading on each page."""
        from openpyxl.worksheet.properties import PageSetupProperties

        sheet = self.sheet
        sheet.page_setup.orientation = "landscape"
        sheet.page_setup.paperSize = sheet.PAPERSIZE_A4
        sheet.page_setup.fitToWidth = 1
        sheet.page_setup.fitToHeight = 0
        sheet.sheet_properties.pageSetUpPr = PageSetupProperties(fitToPage=True)
        sheet.print_title_rows = f"1:{_FIRST_TABLE_ROW - 2}"
        sheet.page_margins.left = sheet.page_margins.right = 0.4
        sheet.page_margins.top = sheet.page_margins.bottom = 0.75
        footer = sheet.oddFooter
        assert footer is not None
        assert footer.left is not None
        assert footer.right is not None
        footer.left.text = f"yieldnet, {self.name}"
        footer.right.text = "&P / &N"
