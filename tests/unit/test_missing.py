"""Compounds without which an equation cannot close, and the line that adds them."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

import yieldnet

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.prediction.result import Prediction

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

NETWORK = """
network: Small
crossing:
  in: [glucose, sulfate, ammonia]
  out: [ethanol, lysine, lactate]
  either: [carbon dioxide, water]
reactions:
  lactate path: glucose -> 2 lactate
  ethanol path: lactate -> ethanol + carbon dioxide
"""


def _told(
    case_of: CaseOf, text: str, verb: Callable[[Case], Prediction] = yieldnet.balance
) -> list[tuple[str, str]]:
    """What a case that is refused for a missing compound is told."""
    case, findings = case_of("case: x\n" + text)
    assert case is not None, findings.items
    with pytest.raises(yieldnet.InputError, match="YN507") as caught:
        verb(case)
    return [(item.message, item.hint) for item in caught.value.findings]


def _accepted(case_of: CaseOf, text: str) -> bool:
    case, findings = case_of("case: x\n" + text)
    assert case is not None, findings.items
    return yieldnet.balance(case).outcome in ("solved", "infeasible")


@pytest.mark.parametrize(
    "text",
    [
        "equation: glucose -> ? ethanol\neither side: [carbon dioxide, water]\n",
        "equation: glucose -> ? lactate\n",
        # A coefficient that the user fixed at a number is the user's affair, even where it is 0.
        "equation: glucose -> ? lactate + 1/2 ethanol\neither side: [carbon dioxide]\n",
    ],
)
def test_an_equation_that_closes_lacks_nothing(case_of: CaseOf, text: str) -> None:
    assert _accepted(case_of, text)


@pytest.mark.parametrize(
    ("text", "message", "hint"),
    [
        # Without carbon dioxide the carbon of ethanol and glucose do not meet.
        (
            "equation: glucose -> ? ethanol\neither side: [water]\n",
            "the elements of 'glucose' cannot all go somewhere in this equation",
            "Add the line 'either side: [water, carbon dioxide]'.",
        ),
        (
            "equation: glucose -> ? biomass + ? ethanol\neither side: [carbon dioxide, water]\n"
            "compounds: {biomass: CH1.8O0.5N0.2}\n",
            "'biomass' is forced to zero, since the equation lacks what it needs",
            "Add '+ ? ammonia' to the left side.",
        ),
        (
            "equation: glucose + ? ammonia -> ? carbon dioxide\neither side: [water]\n",
            "the elements of 'glucose' cannot all go somewhere in this equation",
            "Add '+ ? oxygen' to the left side.",
        ),
        # 24 electrons of glucose make 4/3 citrate of 18, which takes 2 carbon dioxide and gives
        # water: both are needed, neither helps alone.
        (
            "equation: glucose -> ? citrate\n",
            "the elements of 'glucose' cannot all go somewhere in this equation",
            "Add the line 'either side: [carbon dioxide, water]'.",
        ),
    ],
)
def test_what_is_missing_is_told_with_the_line_to_add(
    case_of: CaseOf, text: str, message: str, hint: str
) -> None:
    assert _told(case_of, text) == [(message, hint)]


def test_nothing_is_told_where_nothing_would_help(case_of: CaseOf) -> None:
    # Sulfur has no source among the usual compounds.
    text = "equation: glucose -> ? lactate + ? cysteine\neither side: [carbon dioxide, water]\n"
    assert _accepted(case_of, text)


def test_with_a_network_its_own_crossing_compounds_are_offered(
    case_of: CaseOf, tmp_path: Path
) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")
    head = "network: network.yaml\n"
    assert _told(case_of, head + "equation: glucose -> ? ethanol\n", yieldnet.predict) == [
        (
            "the elements of 'glucose' cannot all go somewhere in this equation",
            "Add the line 'either side: [carbon dioxide]'.",
        )
    ]
    lysine = head + "equation: glucose -> ? lysine\neither side: [carbon dioxide, water]\n"
    ((message, hint),) = _told(case_of, lysine, yieldnet.predict)
    assert message == "the elements of 'glucose' cannot all go somewhere in this equation"
    assert hint == "Add '+ ? ammonia' to the left side."
