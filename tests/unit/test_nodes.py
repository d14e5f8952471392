"""YAML text to nodes: raw text decides, every piece knows its place."""

from __future__ import annotations

import pytest

from yieldnet.foundation.findings import Findings
from yieldnet.reading.nodes import MAX_NESTING, Kind, Node, compose


def _good(text: str) -> Node:
    findings = Findings()
    root = compose(text, "a.yaml", findings)
    assert list(findings) == []
    assert root is not None
    return root


def _value(text: str) -> Node:
    """Value of the first key."""
    return _good(text).pairs[0][1]


@pytest.mark.parametrize(
    "word", ["NO", "yes", "null2", "1e3", "0x1F", "2024-01-01", "1:30", "=", "<<"]
)
def test_text_stays_text(word: str) -> None:
    assert _value(f"a: {word}").text == word


@pytest.mark.parametrize("word", ["NO", "1,2", "<<", "2024-01-01"])
def test_a_key_stays_text_too(word: str) -> None:
    assert _good(f"{word}: 1").pairs[0][0].text == word


@pytest.mark.parametrize(
    ("text", "empty"),
    [
        ("a:", True),
        ("a: ~", True),
        ("a: null", True),
        ("a: ''", False),
        ("a: 'null'", False),
        ("a: NULL", False),
        ("a: x", False),
        ("a: []", False),
        ("a: {}", False),
    ],
)
def test_nothing_written_is_told_from_an_empty_text(text: str, empty: bool) -> None:
    assert _value(text).empty is empty


def test_a_block_and_a_flow_are_told_apart() -> None:
    assert _value("a: [x, y]").flow
    assert not _value("a:\n  - x\n  - y").flow
    assert _value("a: {x: y}").flow
    assert not _value("a:\n  x: y").flow


def test_lists_and_mappings_keep_their_order_and_place() -> None:
    root = _good("b: 1\na:\n  - x\n  - [y, z]\n")
    assert root.kind is Kind.MAPPING
    assert [key.text for key, _ in root.pairs] == ["b", "a"]
    listed = root.pairs[1][1]
    assert listed.kind is Kind.LIST
    assert [item.text for item in listed.items] == ["x", ""]
    assert [item.text for item in listed.items[1].items] == ["y", "z"]
    places = [(item.span.line, item.span.column) for item in listed.items]
    assert places == [(3, 5), (4, 5)]
    assert str(root.pairs[1][0].span) == "a.yaml:2:1"


def test_an_empty_mapping_and_an_empty_list() -> None:
    assert _value("a: {}").kind is Kind.MAPPING
    assert _value("a: {}").pairs == ()
    assert _value("a: []").kind is Kind.LIST
    assert _value("a: []").items == ()


def test_folded_and_quoted_text_is_joined_and_stripped() -> None:
    assert _value("a: >\n  one\n  two\n").text == "one two"
    assert _value("a: ' x '").text == "x"
    assert not _value("a: ' x '").plain


@pytest.mark.parametrize(
    ("text", "code", "reason", "line"),
    [
        ("# only this\n", "YN102", "nothing but comments", 1),
        ("a: [1, 2\nb: 3\n", "YN104", "the file is not YAML here", 2),
        ("a: 'x\n", "YN104", "the file is not YAML here", 2),
        ("a: x: y\n", "YN104", "the file is not YAML here", 1),
        ("a: @x\n", "YN104", "the file is not YAML here", 1),
        ("a: 1\n b: 2\n", "YN104", "the file is not YAML here", 2),
        ("a: 1\n---\nb: 2\n", "YN104", "the file is not YAML here", 2),
        ("a: 1\nb: \x07\n", "YN104", "a control character", 2),
        ("a: &x 1\n", "YN107", "anchors and aliases are not used here (&x)", 1),
        ("a: *x\n", "YN104", "the file is not YAML here", 1),
        ("a: 1\nb: 2\na: 3\n", "YN109", "'a' is written twice", 3),
        ("[x]: 1\n", "YN112", "a list cannot be a name", 1),
        ("? {x: 1}\n: 2\n", "YN112", "a mapping cannot be a name", 1),
        ("a: ? x -> y\n", "YN115", "begins with ? means something else", 1),
        ("a: 1\nb:\n  ? [x]\n", "YN112", "a list cannot be a name", 3),
        ("a: " + "[" * 3000, "YN108", "nested too deep", 1),
        ("a: " + "[" * (MAX_NESTING + 1) + "]" * (MAX_NESTING + 1), "YN108", "nested too deep", 1),
    ],
)
def test_what_cannot_be_used_is_a_finding_with_a_place(
    text: str, code: str, reason: str, line: int
) -> None:
    findings = Findings()
    compose(text, "a.yaml", findings)
    finding = next(iter(findings))
    assert finding.code == code
    assert reason in finding.message
    assert finding.where is not None
    assert finding.where.line == line


def test_nesting_up_to_the_limit_is_read() -> None:
    node = _value("a: " + "[" * MAX_NESTING + "]" * MAX_NESTING)
    assert node.kind is Kind.LIST


def test_a_colon_inside_a_text_has_its_own_hint() -> None:
    findings = Findings()
    compose("about: this: that\n", "a.yaml", findings)
    (finding,) = findings
    assert finding.hint == "Put the text after the first colon in quotes: it holds another colon."
    assert finding.left == "about: this: that"


def test_a_key_written_twice_keeps_its_first_value() -> None:
    findings = Findings()
    root = compose("a: 1\na: 2\n", "a.yaml", findings)
    assert root is not None
    assert [(key.text, value.text) for key, value in root.pairs] == [("a", "1")]
    (finding,) = findings
    assert (finding.left, finding.right) == ("first at line 1", "again at line 2")


def test_what_follows_an_anchor_is_still_read() -> None:
    findings = Findings()
    root = compose("a: &x 1\nb: 2\nc: *x\n", "a.yaml", findings)
    assert root is not None
    # The keys stay, so that they are not called missing; their values are refused already.
    assert [(key.text, value.text, value.broken) for key, value in root.pairs] == [
        ("a", "", True),
        ("b", "2", False),
        ("c", "", True),
    ]
    assert not any(value.empty for _, value in root.pairs)
    assert {item.code for item in findings} == {"YN107"}


@pytest.mark.parametrize("tag", ["!!python/object:os.system", "!own", "!!binary", "!!set"])
def test_a_tag_before_a_value_is_refused(tag: str) -> None:
    findings = Findings()
    root = compose(f"a: {tag} x\nb: 2\n", "a.yaml", findings)
    assert root is not None
    assert root.pairs[0][1].broken
    (finding,) = findings
    assert finding.code == "YN112"
    assert "a YAML tag stands before the value" in finding.message


def test_a_control_character_written_as_an_escape_is_refused_too() -> None:
    findings = Findings()
    compose('a: "x\\u0007y"\n', "a.yaml", findings)
    (finding,) = findings
    assert (finding.code, finding.message) == ("YN104", "the text holds a control character")


def test_dashes_are_counted_as_nesting() -> None:
    findings = Findings()
    assert compose("a:\n  " + "- " * (MAX_NESTING + 1) + "x\n", "a.yaml", findings) is None
    (finding,) = findings
    assert (finding.code, str(finding.where)) == ("YN108", "a.yaml:2:1")


@pytest.mark.parametrize(
    ("source", "piece", "line", "column"),
    [
        ("a: one + two -> three", "one", 1, 4),
        ("a: one + two -> three", "three", 1, 17),
        ("a: one\n  + two\n  -> three", "two", 2, 5),
        # Only the last word of a piece may stand on another line than its first.
        ("a: one +\n  2\n  two", "2 two", 3, 3),
        ("a: one", "nowhere", 1, 4),
        ("a: one", "", 1, 4),
    ],
)
def test_a_piece_of_a_text_is_located(source: str, piece: str, line: int, column: int) -> None:
    place = _value(source).locate(piece)
    assert (place.line, place.column) == (line, column)
