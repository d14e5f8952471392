"""Exact linear algebra: sparse factors and elimination against plain arithmetic in fractions."""

from __future__ import annotations

from fractions import Fraction
from random import Random

import pytest
from flint import fmpq
from hypothesis import given, settings
from hypothesis import strategies as st

from yieldnet.foundation.exact import eliminate
from yieldnet.optimum.factors import Factors, SingularBasis

Matrix = list[list[Fraction]]
ZERO = Fraction(0)


def _matrix(size: int, seed: int) -> Matrix:
    """A sparse matrix with an inverse: a row order of a triangle, then some rows added up."""
    rng = Random(f"matrix {seed}")
    rows: Matrix = []
    for i in range(size):
        row = [ZERO] * size
        row[i] = Fraction(rng.choice((-3, -2, -1, 1, 2, 5)), rng.choice((1, 1, 2, 7)))
        for j in range(i):
            if rng.random() < 0.25:
                row[j] = Fraction(rng.randint(-3, 3), rng.choice((1, 1, 3)))
        rows.append(row)
    for _ in range(size // 2):
        one, two = rng.randrange(size), rng.randrange(size)
        if one != two:
            factor = rng.choice((-1, 1, 2))
            rows[one] = [a + factor * b for a, b in zip(rows[one], rows[two], strict=True)]
    order = rng.sample(range(size), size)
    return [[row[j] for j in order] for row in rng.sample(rows, size)]


def _sparse(matrix: Matrix) -> list[dict[int, fmpq]]:
    return [{j: fmpq(x.numerator, x.denominator) for j, x in enumerate(row) if x} for row in matrix]


def _fractions(values: list[fmpq]) -> list[Fraction]:
    return [Fraction(int(fmpq(x).p), int(fmpq(x).q)) for x in values]


def _times(matrix: Matrix, vector: list[Fraction]) -> list[Fraction]:
    return [sum((a * b for a, b in zip(row, vector, strict=True)), ZERO) for row in matrix]


@given(st.integers(1, 14), st.integers(0, 10**6))
@settings(max_examples=150)
def test_factors_solve_both_ways(size: int, seed: int) -> None:
    matrix = _matrix(size, seed)
    factors = Factors(_sparse(matrix))
    rng = Random(seed)
    # The same factors serve many right sides, zeros among them.
    for density in (1.0, 0.3, 0.0):
        right = [
            Fraction(rng.randint(-5, 5), rng.choice((1, 3))) if rng.random() < density else ZERO
            for _ in range(size)
        ]
        side = [fmpq(x.numerator, x.denominator) for x in right]
        assert _times(matrix, _fractions(factors.solve(side))) == right
        turned = [list(column) for column in zip(*matrix, strict=True)]
        assert _times(turned, _fractions(factors.solve_transposed(side))) == right


@given(st.integers(1, 10), st.integers(0, 10**6))
@settings(max_examples=60)
def test_a_matrix_without_inverse_is_refused(size: int, seed: int) -> None:
    matrix = _matrix(size, seed)
    rng = Random(seed)
    place = rng.randrange(size)
    others = [row for i, row in enumerate(matrix) if i != place]
    factors = [Fraction(rng.randint(-2, 2)) for _ in others]
    dependent = [
        sum((f * row[j] for f, row in zip(factors, others, strict=True)), ZERO) for j in range(size)
    ]
    matrix[place] = dependent
    with pytest.raises(SingularBasis, match=r"^$"):
        Factors(_sparse(matrix))
    turned = [list(column) for column in zip(*matrix, strict=True)]
    with pytest.raises(SingularBasis, match=r"^$"):
        Factors(_sparse(turned))


@given(st.integers(1, 8), st.integers(1, 8), st.integers(0, 10**6))
@settings(max_examples=100)
def test_elimination_keeps_the_row_space(rows: int, columns: int, seed: int) -> None:
    rng = Random(seed)
    matrix = [
        [Fraction(rng.choice((0, 0, 1, -1, 2)), rng.choice((1, 3))) for _ in range(columns)]
        for _ in range(rows)
    ]
    form = eliminate(matrix, columns)
    assert len(form.rows) == form.rank
    assert list(form.pivots) == sorted(set(form.pivots))
    for place, (pivot, row) in enumerate(zip(form.pivots, form.rows, strict=True)):
        assert row[pivot] == 1
        assert not any(row[:pivot])
        assert all(not other[pivot] for at, other in enumerate(form.rows) if at != place)
    # A row of the matrix is the combination of reduced rows that its pivot entries name.
    for line in matrix:
        combined = [
            sum((line[p] * row[j] for p, row in zip(form.pivots, form.rows, strict=True)), ZERO)
            for j in range(columns)
        ]
        assert combined == line
    # The other way round: the reduced rows add nothing to the matrix.
    assert eliminate([*matrix, *form.rows], columns).rank == form.rank
