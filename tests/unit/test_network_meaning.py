"""What a network says that it is meant for."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from yieldnet.model.network import MeantFor
from yieldnet.reading.network_file import parse_network

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.network import Network

CROSSING = """
network: Small
crossing:
  in: [glucose, oxygen]
  out: [lactate]
  either: [acetate, water]
reactions: {fermentation: glucose -> 2 lactate, acetate path: glucose -> 3 acetate}
"""


def test_substrates_and_products_in_written_order(network_of: Callable[[str], Network]) -> None:
    # A compound of either way can be both.
    network = network_of(
        CROSSING + "meant for: {substrates: [acetate, glucose], products: [lactate, acetate]}\n"
    )
    assert network.meant_for == MeantFor(
        substrates=("acetate", "glucose"), products=("lactate", "acetate")
    )
    assert network.meant_for.span is not None
    assert network.meant_for.span.line == 8


def test_a_network_need_not_say_it(network_of: Callable[[str], Network]) -> None:
    assert network_of(CROSSING).meant_for is None


@pytest.mark.parametrize(
    ("section", "code", "words"),
    [
        ("[glucose]", "YN112", "'meant for' has the wrong shape (expected a mapping"),
        ("{substrates: [glucose]}", "YN111", "'meant for' has no 'products'"),
        ("{substrates: glucose, products: [lactate]}", "YN112", "has the wrong shape"),
        (
            "{substrates: [glucose], products: []}",
            "YN111",
            "'products' of 'meant for' is empty. List its products",
        ),
        (
            "{substrates: [lactate], products: [acetate]}",
            "YN505",
            "meant for 'lactate', which cannot be taken up (substrates: taken up; crossing:"
            " produced). Add it to 'in' of 'crossing'",
        ),
        (
            "{substrates: [glucose], products: [oxygen]}",
            "YN505",
            "meant for 'oxygen', which cannot be given off (products: given off; crossing:"
            " consumed). Add it to 'out' of 'crossing'",
        ),
        (
            "{substrates: [xylose], products: [lactate]}",
            "YN505",
            "meant for 'xylose', which cannot be taken up (substrates: taken up; crossing: not",
        ),
        ("{substrates: [glukose], products: [lactate]}", "YN301", "Did you mean 'glucose'"),
    ],
)
def test_what_it_cannot_be_meant_for(section: str, code: str, words: str) -> None:
    network, findings = parse_network(f"{CROSSING}meant for: {section}\n", "n.yaml")
    assert network is None
    (finding,) = findings
    assert finding.code == code
    assert words in str(finding)
    assert finding.where is not None
    assert finding.where.line == 8


def test_without_crossing_only_its_absence_is_told() -> None:
    text = "network: x\nreactions: {a: glucose -> 2 lactate}\n"
    meant = "meant for: {substrates: [glucose], products: [lactate]}\n"
    _, findings = parse_network(text + meant, "n.yaml")
    assert [item.message for item in findings] == ["the network file has no 'crossing'"]
