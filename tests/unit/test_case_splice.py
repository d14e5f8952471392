"""Sections put into the text of a case file, all else left as it stands."""

from __future__ import annotations

from yieldnet.reading.case_splice import splice, stated_already

CASE = """# why this is asked
case: A
equation: glucose -> ? ethanol   # basis first

# what was measured last year
measured:
  ethanol: 1.5 ± 0.1
  # old
conditions:
  substrate uptake: 3 mmol/g/h
  temperature: 30 degC
# the aim comes last
aim: most ethanol
"""


def test_a_section_that_is_there_is_replaced_and_all_else_kept() -> None:
    new = splice(CASE, "a.yaml", {"measured": ["ethanol: 1.7 ± 0.05"]})
    assert new == CASE.replace("  ethanol: 1.5 ± 0.1\n  # old\n", "  ethanol: 1.7 ± 0.05\n")


def test_a_section_that_is_not_there_comes_last() -> None:
    new = splice(CASE, "a.yaml", {"correlations": ["ethanol:", "  biomass: 0.5"]})
    assert new == CASE + "correlations:\n  ethanol:\n    biomass: 0.5\n"


def test_a_section_without_lines_is_taken_out() -> None:
    new = splice(CASE, "a.yaml", {"measured": []})
    assert "measured:" not in new
    assert "# what was measured last year" in new
    assert "aim: most ethanol" in new


def test_a_condition_replaces_the_line_of_its_key_alone() -> None:
    lines = ["substrate uptake: 4 ± 0.2 mmol/g/h", "# growth rate is in it"]
    new = splice(CASE, "a.yaml", {}, lines)
    assert new == CASE.replace("  substrate uptake: 3 mmol/g/h\n", "").replace(
        "  temperature: 30 degC\n",
        "  temperature: 30 degC\n  substrate uptake: 4 ± 0.2 mmol/g/h\n  # growth rate is in it\n",
    )


def test_conditions_in_braces_are_written_line_by_line() -> None:
    text = "case: A\nequation: b -> c\nconditions: {temperature: 30 degC, growth rate: 0.1 1/h}\n"
    new = splice(text, "a.yaml", {}, ["substrate uptake: 4 mmol/g/h"])
    assert new == (
        "case: A\nequation: b -> c\nconditions:\n  temperature: 30 degC\n"
        "  growth rate: 0.1 1/h\n  substrate uptake: 4 mmol/g/h\n"
    )


def test_conditions_that_are_not_there_are_added() -> None:
    new = splice("case: A\nequation: b -> c\n", "a.yaml", {}, ["substrate uptake: 4 mmol/g/h"])
    assert new == "case: A\nequation: b -> c\nconditions:\n  substrate uptake: 4 mmol/g/h\n"


def test_what_is_stated_already_is_told_in_the_order_of_the_file() -> None:
    assert stated_already(CASE, "a.yaml", ("aim", "measured", "demands")) == ("measured", "aim")
