"""ATP of making a cell in theory, and published yields on ATP."""

from __future__ import annotations

from fractions import Fraction

from yieldnet.chemistry.growth_atp import (
    LEAST_SEEN,
    MOST_IN_THEORY,
    published_atp_yields,
    theoretical_atp,
)
from yieldnet.chemistry.macromolecules import compose


def test_the_cost_of_a_macromolecule_goes_with_its_share() -> None:
    half = Fraction(1, 2)
    cell = compose({"protein": half, "glycogen": half})
    atp = theoretical_atp(cell)
    # Table: 191.4e-4 mol/g of cells with 52.4 % protein; 20.6e-4 with 16.6 % polysaccharide.
    assert atp.of("polymerisation") == half * Fraction("0.01914") / Fraction("0.524")
    assert atp.polymerisation == atp.of("polymerisation")
    assert atp.of("made from glucose") == half * Fraction("0.00206") / Fraction("0.166")
    # Half an ATP for each ammonium.
    assert atp.of("ammonium") == cell.moles("N") / 2
    assert atp.total == sum(item.amount for item in atp.steps)
    assert {item.macromolecule for item in atp.steps} == {"protein", "carbohydrate", "transport"}


def test_what_has_no_known_cost_is_named() -> None:
    cell = compose({"chitin": Fraction(1, 2), "polyhydroxybutyrate": Fraction(1, 2)})
    assert theoretical_atp(cell).not_counted == ("chitin", "polyhydroxybutyrate")


def test_a_phospholipid_costs_what_a_lipid_costs() -> None:
    one = Fraction(1)
    named = theoretical_atp(compose({"phospholipid": one}))
    assert named.of("made from glucose") == theoretical_atp(compose({"lipid": one})).of(
        "made from glucose"
    )


def test_published_yields_have_sources_and_lie_between_the_doubtful_ends() -> None:
    found = published_atp_yields()
    assert found[0].high == MOST_IN_THEORY.value
    for item in found:
        assert LEAST_SEEN.value < item.low <= item.high <= MOST_IN_THEORY.value
        assert item.source
        assert item.status in {"S", "S2", "from memory"}
