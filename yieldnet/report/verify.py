"""A report against its own repetition: figure by figure, and byte by byte where versions agree.

In: a report as it was given, and the page that its inputs make now. Out: what differs, and where.
Pictures are compared only where the same versions drew both, since another version draws the same
numbers otherwise; their words are compared always.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from difflib import SequenceMatcher
from html.parser import HTMLParser
from typing import TYPE_CHECKING

from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.reading.study_inputs import ReportFile

__all__ = [
    "Difference",
    "Verification",
    "compare_pages",
    "differences_table",
    "page_texts",
]

_ALONE = {"h1", "h2", "h3", "p", "li", "dt", "dd", "th", "td", "caption", "figcaption", "pre"}
"""Elements whose text is compared as a whole."""
_UNSEEN = {"script", "style", "svg"}
_SHOWN = 30
"""Differences that a text shows; JSON has all [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Difference:
    """Something that a report tells otherwise than its repetition.

    Parameters
    ----------
    place : str
        Section, table, row and column.
    report : str
        What the report tells; empty for nothing.
    run : str
        What the run gives; empty for nothing.
    """

    place: str
    report: str
    run: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Verification:
    """A report compared with its repetition.

    Parameters
    ----------
    compared : int
        Figures and words of the repetition that were compared [-].
    differences : tuple of Difference
        What differs.
    notes : tuple of str
        What could not be compared, and why.
    """

    compared: int
    differences: tuple[Difference, ...]
    notes: tuple[str, ...] = ()

    @property
    def same(self) -> bool:
        """Whether nothing differs."""
        return not self.differences


@dataclass(frozen=True, slots=True)
class _Piece:
    place: str
    text: str


@dataclass(slots=True)
class _Reader(HTMLParser):
    """Takes the text of a page apart; what tells of the machine alone is left out."""

    pieces: list[_Piece] = field(default_factory=list)
    section: str = ""
    caption: str = ""
    heads: list[str] = field(default_factory=list)
    in_head: bool = False
    row: str = ""
    column: int = 0
    unseen: str = ""
    local: bool = False
    told: list[str] = field(default_factory=list)

    def __post_init__(self) -> None:
        HTMLParser.__init__(self, convert_charrefs=True)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        named = dict(attrs)
        if tag == "svg":
            self._add(f"{self.section}, picture", named.get("aria-label") or "")
        if not self.unseen and tag in _UNSEEN:
            self.unseen = tag
        if tag == "table":
            self.local = "data-local" in named
            self.caption, self.heads = "", []
        if tag in ("thead", "tbody"):
            self.in_head = tag == "thead"
        if tag == "tr":
            self.column, self.row = 0, ""
        if tag in _ALONE:
            self.take_loose()

    def take_loose(self) -> None:
        """Text that stands in none of the elements that are compared as a whole."""
        text = " ".join("".join(self.told).split())
        self.told = []
        if text:
            self._add(self.section, text)

    def handle_data(self, data: str) -> None:
        if not self.unseen:
            self.told.append(data)

    def handle_endtag(self, tag: str) -> None:
        if self.unseen:
            self.unseen = "" if tag == self.unseen else self.unseen
            return
        if tag == "table":
            self.local, self.caption = False, ""
        if tag not in _ALONE:
            return
        text = "".join(self.told)
        text = text if tag == "pre" else " ".join(text.split())
        self.told = []
        if self.local:
            return
        if tag in ("h1", "h2"):
            self.section = text
        if tag == "caption":
            self.caption = text
        self._add(self._place(tag, text), text)

    def _place(self, tag: str, text: str) -> str:
        if tag not in ("th", "td"):
            return self.section
        column, self.column = self.column, self.column + 1
        if self.in_head:
            self.heads.append(text)
        elif column == 0:
            self.row = text
        head = self.heads[column] if column < len(self.heads) else ""
        return f"{self.section}, {self.caption!r}, {self.row!r}, {head!r}"

    def _add(self, place: str, text: str) -> None:
        self.pieces.append(_Piece(place, text))


def _pieces(page: str) -> list[_Piece]:
    reader = _Reader()
    reader.feed(page)
    reader.close()
    reader.take_loose()
    return reader.pieces


def page_texts(page: str) -> tuple[tuple[str, str], ...]:
    """Texts of a page in their order, each with its place; what is told of the machine left out.

    Parameters
    ----------
    page : str
        The HTML file.

    Returns
    -------
    tuple of (str, str)
        Place and text.
    """
    return tuple((item.place, item.text) for item in _pieces(page))


def compare_pages(
    told: ReportFile, page: str, versions: tuple[tuple[str, str], ...]
) -> Verification:
    """A report compared with the page that its inputs make now.

    Parameters
    ----------
    told : ReportFile
        The report as it was given.
    page : str
        The page made anew.
    versions : tuple of (str, str)
        Programs that made it anew.

    Returns
    -------
    Verification
        What differs.
    """
    found = [
        Difference(
            place=f"SHA-256 of the {item.role} {item.name!r}", report=digest, run=item.digest
        )
        for item, (_, digest) in zip(told.inputs.texts(), told.digests, strict=True)
        if digest != item.digest
    ]
    given, made = _pieces(told.page), _pieces(page)
    found += _differences(given, made)
    notes = []
    if dict(told.versions) != dict(versions):
        now = dict(versions)
        changed = [
            f"{name} {value} then, {now.get(name, 'none')} now"
            for name, value in told.versions
            if now.get(name) != value
        ]
        notes.append(
            "Pictures and layout are not compared, since other versions made the report:"
            f" {'; '.join(changed) or 'it does not name all of them'}."
        )
    elif not found and told.page != page:
        found.append(
            Difference(
                place="pictures, layout or script",
                report="changed, or something added",
                run="as the same versions make them",
            )
        )
    return Verification(compared=len(made), differences=tuple(found), notes=tuple(notes))


def _differences(given: Sequence[_Piece], made: Sequence[_Piece]) -> list[Difference]:
    found = []
    matcher = SequenceMatcher(
        None, [item.text for item in given], [item.text for item in made], autojunk=False
    )
    for kind, start, end, start_made, end_made in matcher.get_opcodes():
        if kind == "equal":
            continue
        left, right = given[start:end], made[start_made:end_made]
        for place in range(max(len(left), len(right))):
            one = left[place] if place < len(left) else None
            two = right[place] if place < len(right) else None
            known = two or one
            assert known is not None
            found.append(
                Difference(
                    place=known.place,
                    report="" if one is None else one.text,
                    run="" if two is None else two.text,
                )
            )
    return found


def differences_table(result: Verification) -> Table:
    """What differs, as a table.

    Parameters
    ----------
    result : Verification
        What was found.

    Returns
    -------
    Table
        Place, report and run; long texts are cut to where they part.
    """
    rows = []
    for item in result.differences[:_SHOWN]:
        report, run = _parting(item.report, item.run)
        rows.append((item.place, report, run))
    more = len(result.differences) - len(rows)
    return Table(
        title="What the report tells otherwise",
        columns=("where", "report", "run"),
        rows=tuple(rows),
        note=f"{more} more in JSON." if more else "",
    )


_LONG = 60
"""Longest text that is shown whole [characters]."""


def _parting(one: str, two: str) -> tuple[str, str]:
    """Two texts from a little before they part; an ellipsis says where something was cut."""
    if max(len(one), len(two)) <= _LONG:
        return one or "nothing", two or "nothing"
    same = next(
        (place for place, (a, b) in enumerate(zip(one, two, strict=False)) if a != b),
        min(len(one), len(two)),
    )
    start = max(0, same - _LONG // 3)
    cut = [text[start : start + _LONG] for text in (one, two)]
    shown = [
        ("…" if start and piece else "")
        + " ".join(piece.split())
        + ("…" if len(text) > start + _LONG else "")
        for text, piece in zip((one, two), cut, strict=True)
    ]
    return shown[0] or "nothing", shown[1] or "nothing"
