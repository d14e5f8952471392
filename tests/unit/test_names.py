"""One name a compound: own names first, then the library, never two spellings."""

from __future__ import annotations

import pytest

from yieldnet.chemistry.formula import read_formula
from yieldnet.foundation.findings import Findings, SourceSpan
from yieldnet.model.network import Compound
from yieldnet.reading.names import NameBook

OWN = Compound(name="xylose in the cell", formula=read_formula("C5H10O5"))


def _span(line: int = 1) -> SourceSpan:
    return SourceSpan(file="a.yaml", line=line, column=1)


@pytest.fixture
def book() -> NameBook:
    return NameBook(Findings(), own={OWN.name: OWN, "ATP": None, "succinic acid": None})


@pytest.mark.parametrize(
    ("word", "name"),
    [
        ("xylose in the cell", "xylose in the cell"),
        ("ATP", "ATP"),
        ("glucose", "glucose"),
        ("dextrose", "glucose"),
        ("Glucose", "glucose"),
        # The file's own spelling wins over the library's.
        ("succinate", "succinic acid"),
        ("succinic acid", "succinic acid"),
    ],
)
def test_a_word_is_resolved_to_one_name(book: NameBook, word: str, name: str) -> None:
    assert book.resolve(word, _span()) == name
    assert list(book.findings) == []


def test_a_library_compound_is_taken_with_its_formula(book: NameBook) -> None:
    book.resolve("dextrose", _span())
    assert list(book.taken) == ["glucose"]
    assert str(book.taken["glucose"].formula) == "C6H12O6"


@pytest.mark.parametrize(
    ("word", "hint"),
    [
        ("xylose in the cel", "Did you mean 'xylose in the cell'"),
        ("ethanoll", "Did you mean 'ethanol'"),
        ("qqqq", "Define it with its formula, or rename it."),
    ],
)
def test_an_unknown_word_is_told_with_near_matches(book: NameBook, word: str, hint: str) -> None:
    assert book.resolve(word, _span(4)) is None
    (finding,) = book.findings
    assert finding.code == "YN301"
    assert finding.where == _span(4)
    assert finding.hint.startswith(hint)


def test_two_spellings_of_one_compound_are_told_with_both_lines(book: NameBook) -> None:
    assert book.resolve("glucose", _span(2)) == "glucose"
    assert book.resolve("dextrose", _span(9)) == "glucose"
    (finding,) = book.findings
    assert finding.code == "YN303"
    assert (finding.left, finding.right) == ("'glucose' at line 2", "'dextrose' at line 9")


def test_beside_a_network_the_library_does_not_add_compounds() -> None:
    book = NameBook(Findings(), own={OWN.name: OWN, "glucose": None}, use_library=False)
    assert book.resolve("dextrose", _span()) == "glucose"
    assert book.resolve("ethanol", _span(1)) is None
    assert book.resolve("qqqq", _span(2)) is None
    assert [item.code for item in book.findings] == ["YN505", "YN301"]
    assert book.taken == {}


def test_a_carrier_of_the_network_cannot_be_listed_in_a_case() -> None:
    book = NameBook(Findings(), inside=frozenset({"ATP"}))
    assert book.resolve("ATP", _span()) is None
    (finding,) = book.findings
    assert (finding.code, finding.where) == ("YN505", _span())
    assert "most ATP" in finding.hint


def test_a_defined_name_counts_as_its_first_spelling() -> None:
    book = NameBook(Findings())
    book.define("succinic acid", OWN, _span(2))
    assert book.twin("succinate") == "succinic acid"
    assert book.twin("succinic acid") is None
    assert book.twin("ethanol") is None
    assert book.twin("qqqq") is None
    assert book.resolve("succinate", _span(5)) == "succinic acid"
    assert book.resolve("succinate", _span(6)) == "succinic acid"
    # Told once, not at every further place.
    (finding,) = book.findings
    assert (finding.code, finding.left) == ("YN303", "'succinic acid' at line 2")


def test_without_its_definitions_a_book_accepts_every_name() -> None:
    book = NameBook(Findings(), accept_all=True)
    assert book.resolve("qqqq", _span()) == "qqqq"
    assert list(book.findings) == []
