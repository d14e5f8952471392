"""Wrong values and overlooked products: found as often as theory says, and told apart.

What can be expected is worked out from the statistics of the method, not from what it does. With
the deviations e of covariance P and the column f of a measured value, the root of its likelihood
ratio, with its sign, is normal with an s.d. of 1. A wrong value of size b moves its own root by
d = b sqrt(f'P^-1 f), and that of another by d r, where r is the cosine of the angle between the two
columns under P^-1, which is also the correlation of the two roots. The sum of squares is noncentral
chi-square with d^2.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from functools import cache
from itertools import combinations
from typing import TYPE_CHECKING

import pytest

from tests.property.measured_sets import (
    NAMED,
    case_of_text,
    judge,
    named_set,
    random_sets,
    simulated,
    with_values,
)
from yieldnet.balance.gross_errors import missing_products, suspects
from yieldnet.balance.redundancy import redundancy_of
from yieldnet.foundation.exact import eliminate
from yieldnet.prediction import data_tests

if TYPE_CHECKING:
    from collections.abc import Sequence

    from tests.property.measured_sets import Judged
    from yieldnet.balance.gross_errors import Suspect
    from yieldnet.balance.redundancy import Redundancy

DRAWS = 500
PLANTED = 8
"""Size of a planted error [s.d.]."""
OWN_SHARE = Fraction(3, 10)
"""Share of its own error that a value must show to be expected to be found [-]."""
SURE = 0.999
"""Probability with which a count of a correct program stays within a limit of chance [-]."""
ZERO = Fraction(0)


def _pulls(data: Redundancy, columns: Sequence[Sequence[Fraction]], size: Fraction) -> list[float]:
    """Move of its own root by an error of a size in the first column, and its cosine with each."""
    first = columns[0]
    own = float(data.weighed(first, first)) ** 0.5
    return [
        float(size) * own,
        *(
            float(data.weighed(first, other)) / (own * float(data.weighed(other, other)) ** 0.5)
            for other in columns[1:]
        ),
    ]


def _missed(move: float, cosines: Sequence[float]) -> float:
    """Bound on the probability that another root is larger than the one that was moved.

    Another one is larger in size only if the difference or the sum of the two changes its sign.
    Their means are move (1 - r) and move (1 + r), their variances 2 (1 - r) and 2 (1 + r).
    """
    from scipy.stats import norm  # type: ignore[import-untyped]

    return min(
        1.0,
        sum(
            float(norm.sf(move * ((1 - sign * r) / 2) ** 0.5)) for r in cosines for sign in (1, -1)
        ),
    )


def _least(count: int, share: float) -> int:
    """Number that is reached in all but one of a thousand tries with this chance."""
    from scipy.stats import binom

    return int(binom.ppf(1 - SURE, count, share))


@cache
def _found_where_planted(name: str) -> list[tuple[str, float, float, int, int]]:
    """For each value that shows enough of its own error: what is expected, and what was found."""
    from scipy.stats import chi2, ncx2

    judged = named_set(name)
    data = judged.data
    found = []
    for place, item in enumerate(data.measured):
        assert item.sd is not None
        if data.own_share(place) < OWN_SHARE:
            continue
        others = [data.column(k) for k in range(len(data.measured)) if k != place]
        columns = [data.column(place), *(column for column in others if any(column))]
        move, *cosines = _pulls(data, columns, PLANTED * item.sd)
        power = float(ncx2.sf(chi2.isf(0.05, data.degrees), data.degrees, move**2))
        failed = named = 0
        for draw, values in enumerate(simulated(data, DRAWS, seed=10 + place)):
            wrong = list(values)
            wrong[place] += (PLANTED if draw % 2 else -PLANTED) * item.sd
            tests = [
                with_values(layer.redundancy, wrong).test(layer.layer, 0.95)
                for layer in judged.tested
            ]
            failed += any(test is not None and not test.passed for test in tests)
            first = suspects(with_values(data, wrong))[0]
            named += [member.compound for member in first.members] == [item.compound]
        found.append((item.compound, power, 1 - _missed(move, cosines), failed, named))
    return found


@pytest.mark.parametrize("name", NAMED)
def test_planted_error_is_found(name: str) -> None:
    """The last test alone would find it with the power of a noncentral chi-square."""
    for compound, power, _, failed, _ in _found_where_planted(name):
        assert failed >= 0.95 * DRAWS, compound
        assert failed >= _least(DRAWS, power), compound


@pytest.mark.parametrize("name", NAMED)
def test_planted_error_is_named_first_as_often_as_columns_allow(name: str) -> None:
    for compound, _, expected, _, named in _found_where_planted(name):
        assert named >= _least(DRAWS, expected), compound
        if expected >= 0.97:
            assert named >= 0.95 * DRAWS, compound


def test_most_values_that_show_their_error_can_be_named() -> None:
    # Else the test above would promise little.
    expected = [item[2] for name in NAMED for item in _found_where_planted(name)]
    assert len(expected) >= 9
    assert sum(share >= 0.97 for share in expected) >= 4
    assert sum(share >= 0.8 for share in expected) >= 6


@cache
def _sets() -> list[Judged]:
    return [*map(named_set, NAMED), *random_sets(30), *random_sets(20, correlated=False)]


def _moved(judged: Judged) -> Redundancy:
    """Its values with one more draw of errors, so that none agree by construction."""
    (values,) = simulated(judged.data, 1, seed=20)
    return with_values(judged.data, values)


def test_likelihood_ratio_is_the_fall_of_the_sum_of_squares_without_the_value() -> None:
    seen = 0
    for judged in _sets():
        data = _moved(judged)
        for suspect in suspects(data):
            for member in suspect.members:
                rest = redundancy_of(
                    judged.case,
                    judged.last,
                    [item for item in data.measured if item is not member],
                    judged.case.correlations,
                )
                assert rest.degrees == suspect.degrees_left == data.degrees - 1
                assert rest.statistic == suspect.statistic_left
                assert data.statistic - rest.statistic == suspect.statistic
                seen += 1
    assert seen > 200


def test_bias_of_a_suspect_is_what_the_others_ask_of_it() -> None:
    # Taken off the value, it leaves the sum of squares of the others.
    for judged in _sets():
        data = _moved(judged)
        for suspect in suspects(data):
            for member, bias in zip(suspect.members, suspect.bias, strict=True):
                values = [item.value - bias * (item is member) for item in data.measured]
                assert with_values(data, values).statistic == suspect.statistic_left


@pytest.mark.parametrize("name", NAMED)
def test_errors_of_a_bias_are_those_of_simulated_sets(name: str) -> None:
    import numpy as np

    data, count = named_set(name).data, 400
    biases: dict[str, list[float]] = {}
    stated: dict[str, float] = {}
    for values in simulated(data, count, seed=21):
        for suspect in suspects(with_values(data, values)):
            for member, bias, sd in zip(
                suspect.members, suspect.bias, suspect.bias_sd, strict=True
            ):
                biases.setdefault(member.compound, []).append(float(bias))
                stated[member.compound] = float(sd)
    assert len(biases) == len(data.measured)
    for compound, found in biases.items():
        assert len(found) == count
        # Four standard deviations of a sampled one, 1/sqrt(2 n), and of a mean, 1/sqrt(n).
        assert np.std(found, ddof=1) == pytest.approx(stated[compound], rel=4 / (2 * count) ** 0.5)
        assert abs(np.mean(found)) <= 4 * stated[compound] / count**0.5


def _places(data: Redundancy, suspect: Suspect) -> list[int]:
    members = {item.label for item in suspect.members}
    return [k for k, item in enumerate(data.measured) if item.label in members]


def test_values_with_parallel_columns_are_one_group_and_no_others() -> None:
    groups = 0
    for judged in _sets():
        data = judged.data
        columns = [data.column(k) for k in range(len(data.measured))]
        named = [_places(data, suspect) for suspect in suspects(_moved(judged))]
        groups += sum(len(group) > 1 for group in named)
        assert sorted(k for group in named for k in group) == [
            k for k, column in enumerate(columns) if any(column)
        ]
        of = {k: number for number, group in enumerate(named) for k in group}
        for one, other in combinations(of, 2):
            parallel = eliminate([columns[one], columns[other]], data.degrees).rank == 1
            assert parallel == (of[one] == of[other])
    assert groups > 10


def test_acids_of_one_composition_are_one_group() -> None:
    # Acetate and lactate are both CH2O per carbon.
    (group,) = [
        suspect.members
        for suspect in suspects(named_set("mixed acid").data)
        if len(suspect.members) > 1
    ]
    assert [item.compound for item in group] == ["acetate", "lactate"]


OVERLOOKED = {
    "succinate": """
case: anaerobic bacterium, succinate overlooked
equation: glucose + ? ammonia -> ? biomass + ? acetate + ? ethanol + ? formate + ? succinate
either side: [carbon dioxide, water]
compounds:
  biomass: CH1.8O0.5N0.2
measured:
  biomass: 0.5 ± 0.002
  acetate: 0.7 ± 0.002
  ethanol: 0.8 ± 0.002
  formate: 0.6 ± 0.002
  carbon dioxide: 0.7 ± 0.002
  succinate: 0.3 ± 0.002
""",
    "glycerol": """
case: anaerobic yeast, glycerol overlooked
equation: glucose + ? ammonia -> ? biomass + ? ethanol + ? carbon dioxide + ? glycerol
either side: [water]
compounds:
  biomass: CH1.8O0.5N0.2
measured:
  biomass: 0.6 ± 0.001
  ethanol: 1.55 ± 0.002
  carbon dioxide: 1.6 ± 0.002
  glycerol: 0.2 ± 0.001
""",
    "L-lysine": """
case: aerobic bacterium, an amino acid overlooked
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? carbon dioxide + ? L-lysine
either side: [water]
compounds:
  biomass: CH1.8O0.5N0.2
measured:
  ammonia: 0.8 ± 0.004
  oxygen: 2.0 ± 0.01
  biomass: 2.0 ± 0.01
  carbon dioxide: 2.3 ± 0.01
  L-lysine: 0.25 ± 0.004
""",
}
"""Cases with one product that is then left out, by its name."""
UNIQUE = ("succinate", "L-lysine")
"""Products whose column no other compound of the library has; glycerol has that of propionate."""


@pytest.mark.parametrize("product", OVERLOOKED)
def test_overlooked_product_is_found_with_its_amount(
    product: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Its group leads as often as the columns of the other compounds of the library allow."""
    from scipy.stats import norm

    whole = judge(case_of_text(OVERLOOKED[product]))
    moves = zip(whole.data.measured, whole.data.adjustments(), strict=True)
    values = {item.compound: item.value + move for item, move in moves}
    case = replace(
        whole.case,
        coefficients=tuple(i for i in whole.case.coefficients if i.name != product),
        compounds=tuple(i for i in whole.case.compounds if i.name != product),
        measured=tuple(
            replace(item, value=values[item.compound])
            for item in whole.case.measured
            if item.compound != product
        ),
    )
    kept: list[Redundancy] = []
    monkeypatch.setattr(data_tests, "missing_products", kept.append)
    data_tests.missing_product_hypotheses(judge(case).layers)
    (data,) = kept
    assert not {item.compound for item in case.measured} & {name for name, _ in data.others}

    # Without noise it explains everything, with the very amount.
    lead = missing_products(data)[0]
    assert dict(zip(lead.compounds, lead.amounts, strict=True))[product] == values[product]
    assert lead.statistic_left == 0
    columns = dict(data.others)
    own = columns.pop(product)
    apart = [
        column
        for column in columns.values()
        if any(column) and eliminate([own, column], data.degrees).rank == 2
    ]
    alone = {name for name, c in columns.items() if eliminate([own, c], data.degrees).rank == 1}
    assert set(lead.compounds) - {product} == alone
    assert (product in UNIQUE) == (not alone)

    move, *cosines = _pulls(data, [own, *dict.fromkeys(apart)], values[product])
    led = near = count = 0
    for drawn in simulated(data, 60, seed=30):
        found = missing_products(with_values(data, drawn))
        count += 1
        led += product in found[0].compounds
        (mine,) = [item for item in found if product in item.compounds]
        place = mine.compounds.index(product)
        away = mine.amounts[place] - values[product]
        near += abs(away) <= 3 * mine.amount_sd[place]
    assert near >= _least(count, float(1 - 2 * norm.sf(3)))
    expected = 1 - _missed(move, cosines)
    assert led >= _least(count, expected)
    assert expected >= 0.95
