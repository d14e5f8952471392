"""A workbook as a file: the same answer gives the same bytes, and every formula has its value.

In: a filled workbook. Out: a file that a viewer without a calculator shows rightly and that a
spreadsheet calculates anew when it opens it. It holds no date, no macro and no external link.
"""

from __future__ import annotations

from io import BytesIO
from typing import TYPE_CHECKING
from xml.etree import ElementTree
from xml.sax.saxutils import escape
from zipfile import ZIP_DEFLATED, ZipFile, ZipInfo

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.report.workbook_live import Value
    from yieldnet.report.workbook_page import Book

__all__ = ["write_book"]

_MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
_PREFIXES = {
    "": _MAIN,
    "r": "http://schemas.openxmlformats.org/officeDocument/2006/relationships",
}
_MAKER = (
    '<Properties xmlns="http://schemas.openxmlformats.org/officeDocument/2006/extended-properties">'
    "<Application>yieldnet</Application></Properties>"
)
_TITLE = (
    '<cp:coreProperties xmlns:cp="http://schemas.openxmlformats.org/package/2006/metadata/'
    'core-properties" xmlns:dc="http://purl.org/dc/elements/1.1/"><dc:creator>yieldnet</dc:creator>'
    "<dc:title>{title}</dc:title></cp:coreProperties>"
)


def write_book(book: Book, path: Path) -> None:
    """Write a workbook.

    Parameters
    ----------
    book : Book
        The workbook, finished.
    path : Path
        Where to.
    """
    plain = BytesIO()
    book.workbook.calculation.fullCalcOnLoad = True
    book.workbook.save(plain)
    sheets = {f"xl/worksheets/sheet{k}.xml": name for k, name in enumerate(_names(book), start=1)}
    with ZipFile(plain) as old, ZipFile(path, "w", ZIP_DEFLATED) as new:
        for name in old.namelist():
            content = old.read(name)
            if name in sheets:
                content = _with_values(content, sheets[name], book)
            elif name == "docProps/app.xml":
                content = _MAKER.encode()
            elif name == "docProps/core.xml":
                content = _TITLE.format(title=escape(book.title)).encode()
            entry = ZipInfo(name)  # its date is the oldest that there is
            entry.compress_type = ZIP_DEFLATED
            new.writestr(entry, content)


def _names(book: Book) -> list[str]:
    return list(book.workbook.sheetnames)


def _with_values(content: bytes, sheet: str, book: Book) -> bytes:
    """A sheet with what each of its formulas comes to."""
    for prefix, address in _PREFIXES.items():
        ElementTree.register_namespace(prefix, address)
    root = ElementTree.fromstring(content)
    for cell in root.iter(f"{{{_MAIN}}}c"):
        formula = cell.find(f"{{{_MAIN}}}f")
        if formula is None:
            continue
        value = book.values[sheet, cell.attrib["r"]]
        kind, text = _stored(value)
        if kind:
            cell.set("t", kind)
        stored = cell.find(f"{{{_MAIN}}}v")
        assert stored is not None, "a formula is written with room for its value"
        stored.text = text
    whole: bytes = ElementTree.tostring(root, encoding="UTF-8", xml_declaration=True)
    return whole


def _stored(value: Value) -> tuple[str, str]:
    """Type and text of a stored value."""
    return ("str", value) if isinstance(value, str) else ("", repr(float(value)))
