"""Errors of measured values together, worked by hand."""

from __future__ import annotations

from fractions import Fraction

import pytest

from tests.unit.judged import correlated, measured
from yieldnet.balance.covariance import Target, covariance_of, pool

F = Fraction


def test_values_of_one_coefficient_are_pooled_by_their_weights() -> None:
    targets = pool(
        [
            measured("ethanol", "1", "1", "one"),
            measured("lactate", "3", "2"),
            measured("ethanol", "2", "1/2", "two"),
        ]
    )
    # Weights 1 and 4: (1 + 8)/5, and a variance of 1/5.
    assert dict(targets.items()) == {
        "ethanol": Target(F(9, 5), F(1, 5)),
        "lactate": Target(F(3), F(4)),
    }
    assert targets.covariance == ((F(1, 5), F(0)), (F(0), F(4)))


def test_the_pooled_values_are_looked_up_by_name() -> None:
    targets = pool([measured("ethanol", "1", "1/2"), measured("lactate", "3", "2")])
    assert len(targets) == 2
    assert list(targets) == ["ethanol", "lactate"]
    assert "ethanol" in targets
    assert "acetate" not in targets
    assert targets["lactate"] == targets.of("lactate") == Target(F(3), F(4))
    assert targets.of("acetate") is None
    assert targets.precision() == ((F(4), F(0)), (F(0), F(1, 4)))
    with pytest.raises(ValueError, match=r"tuple\.index"):
        targets["acetate"]


@pytest.mark.parametrize("first", [True, False])
def test_an_exact_value_leaves_nothing_to_pool(first: bool) -> None:
    values = [measured("ethanol", "1", "1/10"), measured("ethanol", "2", None, "two")]
    targets = pool(values if first else values[::-1])
    assert len(targets) == 0
    assert targets.precision() == ()


def test_nothing_measured_is_nothing_pooled() -> None:
    assert pool([]).names == ()


def test_a_covariance_is_the_correlation_times_both_deviations() -> None:
    values = [
        measured("ethanol", "1", "1/5"),
        measured("lactate", "1", "1/10"),
        measured("acetate", "1", "1/2"),
    ]
    # The order of the two names says nothing: 1/2 · 1/5 · 1/10 = 1/100, -1/4 · 1/10 · 1/2 = -1/80.
    found = covariance_of(
        values,
        [correlated("lactate", "ethanol", "1/2"), correlated("lactate", "acetate", "-1/4")],
    )
    assert found == (
        (F(1, 25), F(1, 100), F(0)),
        (F(1, 100), F(1, 100), F(-1, 80)),
        (F(0), F(-1, 80), F(1, 4)),
    )


def test_only_values_under_measured_are_correlated() -> None:
    # The biomass that follows from growth rate and uptake does not share their measurement.
    values = [
        measured("biomass", "1", "1/10"),
        measured("biomass", "1", "1/10", "growth rate / substrate uptake"),
        measured("ethanol", "1", "1/10"),
    ]
    assert [item.is_direct for item in values] == [True, False, True]
    found = covariance_of(values, [correlated("biomass", "ethanol", "1/2")])
    hundredth, half = F(1, 100), F(1, 200)
    assert found == ((hundredth, F(0), half), (F(0), hundredth, F(0)), (half, F(0), hundredth))


def test_values_that_are_pooled_carry_their_correlation_along() -> None:
    # Biomass twice, 1 and 2 with variances of 1; ethanol 3 with variance 1, correlated 1/2 with the
    # first. The mean of biomass has the weights w and 1 - w. Ethanol is taken at its own value only
    # if the other value of biomass tells nothing about it, which is not so. With the residual
    # r = 1 - 2 = -1 of variance 2, whose covariance with ethanol is 1/2 and with the first is 1:
    # biomass 1 - 1 · (-1)/2 = 3/2, ethanol 3 - 1/2 · (-1)/2 = 13/4;
    # variances 1 - 1/2 = 1/2 and 1 - 1/8 = 7/8, covariance 1/2 - 1 · 1/2 / 2 = 1/4.
    targets = pool(
        [
            measured("biomass", "1", "1"),
            measured("biomass", "2", "1", "growth rate / substrate uptake"),
            measured("ethanol", "3", "1"),
        ],
        [correlated("biomass", "ethanol", "1/2")],
    )
    assert targets.values == (F(3, 2), F(13, 4))
    assert targets.covariance == ((F(1, 2), F(1, 4)), (F(1, 4), F(7, 8)))
