"""What does not balance is refused: rows A1.20, B11, B13, D5.1 to D5.5.

Both sides of each failing element are compared with the count made by hand.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction

import pytest

from tests.reference.rows import FOLDER
from yieldnet.foundation.findings import Finding, Severity
from yieldnet.prediction.result import Outcome
from yieldnet.verbs import audit, balance, predict

_PAIR = re.compile(r"(-?[\d.]+) (\w+)")


@dataclass(frozen=True, slots=True, kw_only=True)
class Refused:
    """A printed reaction that does not close.

    Parameters
    ----------
    row : str
        Row of the table of published values.
    network, reaction : str
        Where it stands.
    left, right : dict of str to str
        Count of each failing element, and of charge, on either side [mol/mol].
    source : str
        Where it is printed.
    """

    row: str
    network: str
    reaction: str
    left: dict[str, str]
    right: dict[str, str]
    source: str


ELONGATION = "Biotechnology for Biofuels, s13068-017-0788-y, Table 1; counts derived by hand"
REFUSED = (
    Refused(
        row="B13",
        network="misprinted-growth",
        reaction="growth",
        left={"C": "3.0486", "H": "6.0972", "O": "3.0486", "N": "0"},
        right={"C": "2.547", "H": "5.28", "O": "2.334", "N": "0.168"},
        source="S. A. Wahl, TU Delft course exercise 2015/16; counts derived by hand",
    ),
    Refused(
        row="D5.1",
        network="misprinted",
        reaction="butyrate from carbon monoxide as printed",
        left={"O": "10"},
        right={"O": "14"},
        source="PMC6317499, Table 2; counts derived by hand",
    ),
    Refused(
        row="D5.2",
        network="misprinted",
        reaction="caproate with hydrogen as printed",
        left={"H": "28", "O": "3", "charge": "2"},
        right={"H": "19", "O": "6", "charge": "-1"},
        source=ELONGATION,
    ),
    Refused(
        row="D5.3",
        network="misprinted",
        reaction="caproate from butyrate as printed",
        left={"H": "18", "O": "3", "charge": "0"},
        right={"H": "15", "O": "4", "charge": "-1"},
        source=ELONGATION,
    ),
)


def _errors(network: str) -> tuple[Finding, ...]:
    result = audit(FOLDER / "networks" / f"{network}.yaml")
    assert result.refused
    return tuple(item for item in result.findings if item.severity is Severity.ERROR)


def _counts(text: str) -> dict[str, Fraction]:
    return {element: Fraction(count) for count, element in _PAIR.findall(text)}


@pytest.mark.parametrize("item", REFUSED, ids=lambda item: item.row)
def test_misprinted_reaction_is_refused_with_its_elements(item: Refused) -> None:
    (finding,) = [
        finding for finding in _errors(item.network) if f"'{item.reaction}'" in finding.message
    ]
    assert finding.code == "YN401"
    assert _counts(finding.left) == {key: Fraction(value) for key, value in item.left.items()}
    assert _counts(finding.right) == {key: Fraction(value) for key, value in item.right.items()}


@pytest.mark.parametrize("network", ["misprinted", "misprinted-growth"])
def test_nothing_but_the_misprints_is_refused(network: str) -> None:
    """The corrected reactions close, and so do D5.4 and D5.5, whose energies alone are wrong."""
    expected = [item.reaction for item in REFUSED if item.network == network]
    errors = _errors(network)
    assert {finding.code for finding in errors} == {"YN401"}
    assert [finding.message.split("'")[1] for finding in errors] == expected


def test_corrected_reactions_are_there() -> None:
    names = [item.name for item in audit(FOLDER / "networks/misprinted.yaml").bound.reactions]
    assert len(names) == 8
    assert sum(name.endswith("corrected") for name in names) == 3


def test_chemostat_with_too_much_carbon_is_infeasible() -> None:
    """B11: at 0.06 1/h the products hold 114 % of the carbon, more than 3 % errors can mend.

    By hand, what carbon dioxide would have to be with all else at the end of its band that takes
    least carbon: biomass 0.376 and glycerol 0.188, and ethanol for the electrons that are left,
    (24 - 4.136 * 0.376 - 14 * 0.188)/12 = 1.651072; then 6 - 0.376 - 2 * 1.651072 - 3 * 0.188 =
    1.757856, against 2.533 - 2 * 0.076 = 2.381 at the low end of its band.
    """
    result = balance(FOLDER / "cases/yeast-chemostat.yaml")
    assert result.outcome is Outcome.INFEASIBLE
    (error,) = [item for item in result.findings if item.severity is Severity.ERROR]
    assert error.code == "YN601"
    assert "'measured'" in error.message
    assert result.conflict is not None
    needs = {item.name: item.needs for item in result.conflict.members}
    assert needs == {
        "measured biomass": None,
        "measured ethanol": None,
        "measured carbon dioxide": Fraction("1.757856") - Fraction("2.381"),
    }


def test_hydrogen_with_acetate_alone_is_infeasible() -> None:
    """A1.20: NADH and ferredoxin kept apart, two NADH have no way out."""
    result = predict(FOLDER / "cases/hydrogen-with-acetate-alone.yaml")
    assert result.outcome is Outcome.INFEASIBLE
    assert [(item.rung, item.value) for item in result.ladder] == [
        ("elements", Fraction(12)),
        ("pathways", Fraction(4)),
        ("redox", None),
        ("energy", None),
    ]
    assert result.conflict is not None
    assert {item.name for item in result.conflict.members} == {
        "ethanol",
        "butyrate",
        "lactate",
        "electron-confurcating hydrogenase",
    }


def test_refused_rows_are_all_there() -> None:
    assert [item.row for item in REFUSED] == ["B13", "D5.1", "D5.2", "D5.3"]
