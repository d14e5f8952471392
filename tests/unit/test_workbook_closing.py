"""Which yields of a workbook follow the others."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.plants import case_at
from yieldnet.report.workbook_closing import closing_of

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.model.network import Compound

GROWTH = """\
case: t
compounds: {biomass: CH1.8O0.5N0.2}
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? lactate
either side: [carbon dioxide, water]
"""


def _names(items: tuple[Compound, ...]) -> list[str]:
    return [item.name for item in items]


def test_four_compounds_close_four_elements(tmp_path: Path) -> None:
    closing = closing_of(case_at(tmp_path, GROWTH), "lactate")
    assert _names(closing.closing) == ["ammonia", "oxygen", "carbon dioxide", "water"]
    assert _names(closing.order) == ["glucose", "biomass", "lactate", *_names(closing.closing)]
    assert closing.elements == ("C", "N", "H", "O")
    # Respiration of glucose: 6 oxygen to 6 carbon dioxide and 6 water; told per mol made.
    assert closing.ratios[0] == tuple(map(Fraction, (0, 6, -6, -6)))


def test_every_ratio_closes_every_element(tmp_path: Path) -> None:
    closing = closing_of(case_at(tmp_path, GROWTH))
    for item, ratios in zip(closing.free, closing.ratios, strict=True):
        for element in ("C", "H", "O", "N"):
            total = item.formula[element] + sum(
                ratio * other.formula[element]
                for ratio, other in zip(ratios, closing.closing, strict=True)
            )
            assert total == 0, (item.name, element)


def test_without_oxygen_the_electrons_stay_open(tmp_path: Path) -> None:
    text = GROWTH.replace(" + ? oxygen", "")
    closing = closing_of(case_at(tmp_path, text))
    assert closing.elements == ("C", "N", "H")
    # One lactate more: 3 carbon dioxide less, 3 water less, and 3 - 6 - 3 oxygen atoms are left.
    assert closing.ratios[2] == (Fraction(0), Fraction(-3), Fraction(-3))


@pytest.mark.parametrize(
    ("equation", "product", "names"),
    [
        ("carbon dioxide + ? water -> ? glucose + ? oxygen", "oxygen", ["water"]),
        ("glucose -> ? lactate", "lactate", []),
        ("glucose + ? nitrate + ? ammonia -> ? L-lysine", "", ["ammonia"]),
    ],
)
def test_basis_and_product_never_follow_and_each_element_has_one(
    tmp_path: Path, equation: str, product: str, names: list[str]
) -> None:
    case = case_at(tmp_path, f"case: t\nequation: {equation}\n")
    assert _names(closing_of(case, product).closing) == names
