"""Exact factors of a basis, on matrices whose solution is known by hand."""

from __future__ import annotations

import pytest
from flint import fmpq

from yieldnet.optimum.factors import Factors, SingularBasis

Rows = list[dict[int, fmpq]]


def _rows(*lines: tuple[int, ...]) -> Rows:
    return [{j: fmpq(x) for j, x in enumerate(line) if x} for line in lines]


@pytest.mark.parametrize(
    ("rows", "right", "solution"),
    [
        pytest.param(_rows((4,)), [6], [fmpq(3, 2)], id="one number"),
        # x + 2 y = 4 and 3 x + 4 y = 10.
        pytest.param(_rows((1, 2), (3, 4)), [4, 10], [2, 1], id="dense"),
        pytest.param(_rows((0, 1, 0), (0, 0, 1), (1, 0, 0)), [1, 2, 3], [3, 1, 2], id="order"),
        # Taking the first row out of the second leaves it a zero where both had an entry.
        pytest.param(
            _rows((1, 1, 0), (1, 1, 1), (0, 1, 1)), [3, 6, 5], [1, 2, 3], id="cancellation"
        ),
        # No row and no column has one entry only, so nothing can be peeled off.
        pytest.param(
            _rows((2, 1, 1, 0), (1, 2, 0, 1), (1, 0, 2, 1), (0, 1, 1, 3)),
            [4, 4, 4, 5],
            [1, 1, 1, 1],
            id="no triangle",
        ),
        pytest.param([], [], [], id="nothing"),
    ],
)
def test_solutions_by_hand(rows: Rows, right: list[int], solution: list[fmpq]) -> None:
    assert Factors(rows).solve([fmpq(x) for x in right]) == solution


def test_the_transpose_is_solved_with_the_same_factors() -> None:
    factors = Factors(_rows((1, 2), (3, 4)))
    # x + 3 y = 7 and 2 x + 4 y = 10.
    assert factors.solve_transposed([fmpq(7), fmpq(10)]) == [1, 2]
    assert factors.solve([fmpq(4), fmpq(10)]) == [2, 1]


def test_a_matrix_that_floats_cannot_invert_is_exact() -> None:
    # The matrix of Hilbert of order 12 has a condition number near 1e16.
    size = 12
    rows = [{j: fmpq(1, i + j + 1) for j in range(size)} for i in range(size)]
    right = [sum(row.values(), fmpq(0)) for row in rows]
    assert Factors(rows).solve(right) == [1] * size


def test_the_rows_that_are_given_stay_as_they_are() -> None:
    rows = _rows((1, 2), (3, 4))
    Factors(rows)
    assert rows == _rows((1, 2), (3, 4))


@pytest.mark.parametrize(
    "rows",
    [
        pytest.param(_rows((0,)), id="zero"),
        pytest.param(_rows((1, 2), (2, 4)), id="twice the same row"),
        pytest.param(_rows((1, 0), (2, 0)), id="empty column"),
        pytest.param(_rows((1, 1, 0), (0, 1, 1), (1, 2, 1)), id="sum of two rows"),
    ],
)
def test_dependent_columns_are_no_basis(rows: Rows) -> None:
    with pytest.raises(SingularBasis, match=r"^$"):
        Factors(rows)
