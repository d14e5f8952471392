"""The reconciled point, worked by hand.

Glucose to ethanol, lactate, carbon dioxide and water leaves one degree of freedom over the cell:
ethanol + lactate = 2 and carbon dioxide = ethanol, since lactate is ethanol and carbon dioxide
together. So two measured values that add up to something else than 2 must give way.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.balance.covariance import Pooled
from yieldnet.balance.elements import element_problem
from yieldnet.balance.reconciled import nearest_point, reconciled_point
from yieldnet.balance.statements import statements_of, with_demands
from yieldnet.model.case import Correlation, Measurement
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

CASE = "case: x\nequation: glucose -> ? ethanol + ? lactate\neither side: [carbon dioxide, water]\n"


def _measured(compound: str, value: str, sd: str | None, label: str = "") -> Measurement:
    return Measurement(
        compound=compound,
        value=Fraction(value),
        sd=None if sd is None else Fraction(sd),
        text=value,
        label=label or f"measured {compound}",
    )


def _point(
    case_of: CaseOf,
    *measured: Measurement,
    demand: str = "",
    text: str = CASE,
    correlations: tuple[Correlation, ...] = (),
) -> dict[str, Fraction] | None:
    case, findings = case_of(text + demand)
    assert case is not None, findings.items
    case = replace(case, measured=measured, correlations=correlations)
    statements = statements_of(case)
    problem = with_demands(element_problem(case, statements), statements)
    return reconciled_point(Optimiser(engine_named("glpk")), problem, case, statements)


def test_nothing_measured_is_an_empty_point(case_of: CaseOf) -> None:
    assert _point(case_of) == {}


@pytest.mark.parametrize(
    ("ethanol", "lactate", "expected"),
    [
        pytest.param(("1.2", "0.1"), ("0.8", "0.3"), ("1.2", "0.8"), id="they agree"),
        pytest.param(("1.2", "0.1"), ("1.0", "0.1"), ("1.1", "0.9"), id="same weight"),
        # The excess of 0.2 is shared by the variances, 4 to 1.
        pytest.param(("1.2", "0.2"), ("1.0", "0.1"), ("1.04", "0.96"), id="other weights"),
        # 0.55 shared 4 to 1 would move ethanol by 2.2 s.d.: it stops at 2, lactate takes the rest.
        pytest.param(("1.55", "0.2"), ("1.0", "0.1"), ("1.15", "0.85"), id="end of a band"),
        # At 0.6 both stand at the ends of their bands, and that is the only point left.
        pytest.param(("1.6", "0.2"), ("1.0", "0.1"), ("1.2", "0.8"), id="both ends"),
        # The side cuts the band: no more ethanol than 2, however little lactate there is.
        pytest.param(("2.05", "0.1"), ("0.01", "0.1"), ("2", "0"), id="side"),
        pytest.param(("1.2", None), ("0.7", "0.1"), ("1.2", "0.8"), id="one exact"),
    ],
)
def test_two_values_that_must_add_up(
    case_of: CaseOf,
    ethanol: tuple[str, str | None],
    lactate: tuple[str, str | None],
    expected: tuple[str, str],
) -> None:
    one, two = _measured("ethanol", *ethanol), _measured("lactate", *lactate)
    wanted = {"ethanol": Fraction(expected[0]), "lactate": Fraction(expected[1])}
    assert _point(case_of, one, two) == wanted
    assert _point(case_of, two, one) == wanted


@pytest.mark.parametrize(
    ("ethanol", "lactate"),
    [
        pytest.param(("1.601", "0.2"), ("1.0", "0.1"), id="past both bands"),
        pytest.param(("2.3", "0.1"), ("0", "0.1"), id="past the side"),
        pytest.param(("1.2", None), ("1.0", None), id="two exact values"),
    ],
)
def test_bands_that_hold_no_point(
    case_of: CaseOf, ethanol: tuple[str, str | None], lactate: tuple[str, str | None]
) -> None:
    assert _point(case_of, _measured("ethanol", *ethanol), _measured("lactate", *lactate)) is None


def test_three_values_on_two_balances(case_of: CaseOf) -> None:
    # Carbon dioxide = ethanol and lactate = 2 - ethanol, all of one weight: ethanol is the mean of
    # 1.1, 1.2 and 2 - 0.7.
    point = _point(
        case_of,
        _measured("ethanol", "1.1", "0.1"),
        _measured("carbon dioxide", "1.2", "0.1"),
        _measured("lactate", "0.7", "0.1"),
    )
    assert point == {
        "ethanol": Fraction(6, 5),
        "carbon dioxide": Fraction(6, 5),
        "lactate": Fraction(4, 5),
    }


def test_two_values_of_one_coefficient_meet_at_their_mean(case_of: CaseOf) -> None:
    point = _point(
        case_of, _measured("ethanol", "1", "1/10"), _measured("ethanol", "1.1", "1/20", "again")
    )
    # Weights 1 to 4.
    assert point == {"ethanol": Fraction("1.08")}


@pytest.mark.parametrize("exact_first", [True, False])
def test_an_exact_value_beats_a_measured_one_of_the_same_coefficient(
    case_of: CaseOf, exact_first: bool
) -> None:
    values = [_measured("ethanol", "1", None, "exact"), _measured("ethanol", "1.1", "1/10")]
    point = _point(case_of, *(values if exact_first else reversed(values)))
    assert point == {"ethanol": Fraction(1)}


def test_a_demand_moves_a_value(case_of: CaseOf) -> None:
    value = _measured("ethanol", "1.1", "0.1")
    assert _point(case_of, value, demand="demands: {ethanol: at most 1}\n") == {
        "ethanol": Fraction(1)
    }
    assert _point(case_of, value, demand="demands: {ethanol: at most 0.8}\n") is None


def test_a_value_taken_up_is_positive_on_its_side(case_of: CaseOf) -> None:
    text = "case: x\nequation: glucose + ? oxygen -> ? carbon dioxide + ? water\n"
    point = _point(case_of, _measured("oxygen", "5.9", "0.1"), text=text)
    assert point == {"oxygen": Fraction(6)}


def test_weights_that_no_decimal_holds_stay_exact(case_of: CaseOf) -> None:
    # Standard deviations of 1/3 and 1/7: the excess of 2/10 is shared 49 to 9.
    point = _point(case_of, _measured("ethanol", "1.2", "1/3"), _measured("lactate", "1", "1/7"))
    assert point == {
        "ethanol": Fraction(6, 5) - Fraction(1, 5) * Fraction(49, 58),
        "lactate": 1 - Fraction(1, 5) * Fraction(9, 58),
    }


def _correlated(value: str) -> tuple[Correlation, ...]:
    return (Correlation(first="ethanol", second="lactate", value=Fraction(value)),)


@pytest.mark.parametrize(
    ("correlation", "ethanol", "lactate"),
    [
        # Without a correlation the excess of 0.2 is shared 4 to 1, as above.
        ("0", "26/25", "24/25"),
        # With 1/2 the covariance is (0.04 0.01; 0.01 0.01): each takes its row sum, 5 to 2.
        ("1/2", "37/35", "33/35"),
        # With -1/2 the rows sum to 0.03 and 0: lactate keeps its value, though it is known well.
        ("-1/2", "1", "1"),
        # With -4/5 the row of lactate sums to -0.006, and of ethanol to 0.024: it moves the same
        # way as the excess, since an ethanol too high goes with a lactate too low.
        ("-4/5", "14/15", "16/15"),
    ],
)
def test_correlated_errors_move_together(
    case_of: CaseOf, correlation: str, ethanol: str, lactate: str
) -> None:
    one, two = _measured("ethanol", "1.2", "0.2"), _measured("lactate", "1.0", "0.1")
    point = _point(case_of, one, two, correlations=_correlated(correlation))
    assert point == {"ethanol": Fraction(ethanol), "lactate": Fraction(lactate)}


def test_bands_hold_with_correlated_errors_too(case_of: CaseOf) -> None:
    # An excess of 0.5 with a correlation of -4/5 would move ethanol by -2/3, beyond its 0.4; at the
    # end of that band lactate takes the rest.
    one, two = _measured("ethanol", "1.5", "0.2"), _measured("lactate", "1.0", "0.1")
    point = _point(case_of, one, two, correlations=_correlated("-4/5"))
    assert point == {"ethanol": Fraction("1.1"), "lactate": Fraction("0.9")}


def test_the_nearest_point_needs_no_bands(case_of: CaseOf) -> None:
    # An excess of 1 beyond every band is shared all the same, by the variances 4 to 1; only sides
    # and balances count.
    case, findings = case_of(CASE)
    assert case is not None, findings.items
    problem = element_problem(case, statements_of(case))
    variances = ((Fraction("0.04"), Fraction(0)), (Fraction(0), Fraction("0.01")))
    wanted = Pooled(
        names=("ethanol", "lactate"), values=(Fraction(2), Fraction(1)), covariance=variances
    )
    optimiser = Optimiser(engine_named("glpk"))
    assert nearest_point(optimiser, problem, case, wanted) == {
        "ethanol": Fraction("1.2"),
        "lactate": Fraction("0.8"),
    }
