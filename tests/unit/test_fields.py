"""Typed access to nodes: each wrong shape is a finding, and reading goes on."""

from __future__ import annotations

from fractions import Fraction

import pytest

from yieldnet.foundation.findings import Findings
from yieldnet.reading.fields import Fields, entries, number, text, text_list, unsplit_pairs
from yieldnet.reading.nodes import Node, compose


def _node(source: str) -> Node:
    """Value of the key ``a``."""
    root = compose(f"a: {source}", "a.yaml", Findings())
    assert root is not None
    return root.pairs[0][1]


def test_a_text_is_read() -> None:
    findings = Findings()
    assert text(_node("x y"), "it", findings) == "x y"
    assert text(_node("''"), "it", findings) == ""
    assert list(findings) == []


@pytest.mark.parametrize(
    ("source", "found"),
    [
        ("", "nothing"),
        ("null", "nothing"),
        ("[x]", "a list"),
        ("{x: y}", "a mapping (name: value)"),
    ],
)
def test_another_shape_than_a_text_says_both_shapes(source: str, found: str) -> None:
    for reader, wanted in ((text, "a text"), (number, "a number")):
        findings = Findings()
        assert reader(_node(source), "it", findings) is None
        (finding,) = findings
        assert finding.code == "YN112"
        assert finding.message == "it has the wrong shape"
        assert (finding.left, finding.right) == (f"expected {wanted}", f"found {found}")


def test_a_number_is_read_exactly() -> None:
    findings = Findings()
    written = number(_node("0.1"), "it", findings)
    assert written is not None
    assert written.value == Fraction(1, 10)
    assert list(findings) == []


@pytest.mark.parametrize(
    ("source", "code"), [("'1,5'", "YN201"), ("many", "YN201"), ("1e99", "YN202"), ("1/0", "YN207")]
)
def test_a_bad_number_names_the_field(source: str, code: str) -> None:
    findings = Findings()
    assert number(_node(source), "it", findings) is None
    (finding,) = findings
    assert finding.code == code
    assert finding.message.startswith("it: ")


def test_entries_of_a_mapping_and_of_anything_else() -> None:
    findings = Findings()
    assert [key.text for key, _ in entries(_node("{x: 1, y: 2}"), "it", findings)] == ["x", "y"]
    assert list(findings) == []
    assert entries(_node("x"), "it", findings) == ()
    assert [item.right for item in findings] == ["found a text"]


def test_a_list_of_texts() -> None:
    findings = Findings()
    assert [node.text for node in text_list(_node("[x, y]"), "it", findings)] == ["x", "y"]
    assert list(findings) == []
    assert text_list(_node("x"), "it", findings) == ()
    assert [item.left for item in findings] == ["expected a list"]


def test_an_entry_of_another_shape_is_left_out_with_a_finding() -> None:
    findings = Findings()
    nodes = text_list(_node("[x, [y], z]"), "it", findings)
    assert [node.text for node in nodes] == ["x", "z"]
    assert [item.message for item in findings] == ["an entry of it has the wrong shape"]


def test_a_name_split_by_its_comma_is_recognised() -> None:
    findings = Findings()
    known = ("1,3-propanediol", "lactate")
    nodes = text_list(_node("[lactate, 1,3-Propanediol, acetate]"), "it", findings, known)
    assert [node.text for node in nodes] == ["lactate", "acetate"]
    (finding,) = findings
    assert finding.code == "YN114"
    assert "'1,3-Propanediol'" in finding.message
    assert '"1,3-Propanediol"' in finding.hint


def test_a_name_with_several_commas_is_recognised_too() -> None:
    findings = Findings()
    known = ("1,2,4-butanetriol",)
    assert text_list(_node("[1,2,4-butanetriol]"), "it", findings, known) == ()
    (finding,) = findings
    assert finding.left == "'1' and '2' and '4-butanetriol'"


def test_a_name_split_among_keys_is_recognised() -> None:
    findings = Findings()
    node = _node("{lactate: 1, 1,3-propanediol: 2}")
    pairs = unsplit_pairs(node, "it", findings, ("1,3-propanediol",))
    assert [key.text for key, _ in pairs] == ["lactate"]
    (finding,) = findings
    assert finding.code == "YN114"
    assert "a colon behind it" in finding.hint


def test_keys_of_a_block_are_never_taken_for_a_split_name() -> None:
    findings = Findings()
    node = _node("\n  1: x\n  3-propanediol: y\n")
    assert len(unsplit_pairs(node, "it", findings, ("1,3-propanediol",))) == 2
    assert list(findings) == []


def test_one_name_a_line_is_not_split() -> None:
    findings = Findings()
    node = _node("\n  - 1,3-propanediol\n  - '1'\n  - 3-propanediol\n")
    assert len(text_list(node, "it", findings, ("1,3-propanediol",))) == 3
    assert list(findings) == []


@pytest.fixture
def fields() -> tuple[Fields, Findings]:
    findings = Findings()
    node = _node("{name: x, size: 0.5, list: [1], nothing: }")
    return Fields(
        node, "the thing", ("name", "size", "list", "nothing", "more"), findings
    ), findings


def test_fields_give_texts_and_numbers(fields: tuple[Fields, Findings]) -> None:
    it, findings = fields
    size = it.number("size")
    assert it.text("name") == "x"
    assert size is not None
    assert size.value == Fraction(1, 2)
    assert (it.text("more"), it.number("more"), it.get("more")) == ("", None, None)
    assert list(findings) == []


def test_fields_of_the_wrong_shape_are_told_by_name(fields: tuple[Fields, Findings]) -> None:
    it, findings = fields
    assert it.text("list") == ""
    assert it.number("name") is None
    assert it.text("nothing") == ""
    assert [item.message for item in findings] == [
        "'list' of the thing has the wrong shape",
        "'size' of the thing: 'x' is not a number".replace("size", "name"),
        "'nothing' of the thing has the wrong shape",
    ]


def test_a_needed_field_that_is_missing_is_told_with_the_hint(
    fields: tuple[Fields, Findings],
) -> None:
    it, findings = fields
    assert it.need("name", "Give it.") is not None
    assert it.need("more", "Give more.") is None
    (finding,) = findings
    assert (finding.code, finding.hint) == ("YN111", "Give more.")
    assert finding.message == "the thing has no 'more'"


def test_the_place_of_a_field_is_its_key_or_the_whole(fields: tuple[Fields, Findings]) -> None:
    it, _ = fields
    assert it.span("size").column > it.span("name").column
    assert it.span("more") == it.node.span


def test_an_unknown_key_is_told_with_its_near_match_or_all_keys() -> None:
    findings = Findings()
    Fields(_node("{nam: x, zzzz: y}"), "the thing", ("name", "size"), findings)
    assert [(item.code, item.hint) for item in findings] == [
        ("YN110", "Did you mean 'name'?"),
        ("YN110", "Known keys: name, size."),
    ]


def test_fields_of_what_is_no_mapping() -> None:
    findings = Findings()
    it = Fields(_node("x"), "the thing", ("name",), findings)
    assert it.need("name", "Give it.") is None
    assert [item.code for item in findings] == ["YN112"]
