"""Every reference row and every ladder comes out, and none is lost.

The questions are answered once (``conftest.py``); the rows read from the same answers.
"""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING, get_args

import pytest

from tests.reference.compositions import COMPOSITIONS
from tests.reference.element_limits import PRODUCTS
from tests.reference.rows import Answered, Ladder, Printed, Row, Status
from tests.reference.tables import CASES, EXAMPLES, LADDERS, ROWS
from yieldnet.prediction.result import Outcome

if TYPE_CHECKING:
    from collections.abc import Callable

    Ask = Callable[..., Answered]

EXPECTED_ROWS = {
    "A1.1": 1,
    "A1.2": 5,
    "A1.2 xylose": 2,
    "A1.3": 4,
    "A1.4": 2,
    "A1.5": 9,
    "A1.6": 5,
    "A1.8": 1,
    "A1.9": 1,
    "A1.10": 6,
    "A1.12": 4,
    "A1.13": 4,
    "A1.14": 2,
    "A1.15": 4,
    "A1.16": 2,
    "A1.17": 4,
    "A1.18": 4,
    "A1.19": 4,
    "A1.20": 5,
    "A1.22": 3,
    "A1.23": 2,
    "A1.24": 8,
    "A1.26": 2,
    "A1.27": 1,
    "A2": 92,
    "A3.1": 3,
    "A3.2": 5,
    "A3.3": 1,
    "E10": 4,
    "E11": 3,
    "E12": 3,
    "E13": 8,
    "E14": 7,
    "E15": 4,
    "E16": 1,
    "E17": 2,
    "E18": 2,
    "E19": 4,
}
"""How many numbers each row of the table of published values has here: none may get lost."""


def _row_name(row: Row) -> str:
    value = row.value.text if isinstance(row.value, Printed) else str(row.value)
    return f"{row.row} {row.what}, {row.conditions}: {value} {row.unit}"


def _ladder_name(item: Ladder) -> str:
    return f"{item.row} {item.question}"


@pytest.mark.parametrize("row", ROWS, ids=_row_name)
def test_reference_row(row: Row, answered: Ask) -> None:
    prediction = answered(row.question).prediction
    assert prediction.outcome is Outcome.SOLVED
    found = row.read(prediction)
    assert row.agrees(found), f"{found} = {float(found)} against {row.value}: {row.source}"


@pytest.mark.parametrize("item", LADDERS, ids=_ladder_name)
def test_ladder(item: Ladder, answered: Ask) -> None:
    rungs = answered(item.question).prediction.ladder
    assert tuple((rung.rung, rung.value) for rung in rungs) == item.rungs
    steps = zip(item.rungs, item.rungs[1:], strict=False)
    assert [rung.loss for rung in rungs] == [None, *(a - b for (_, a), (_, b) in steps)]


def test_no_row_is_lost() -> None:
    assert Counter(row.row for row in ROWS) == EXPECTED_ROWS
    assert len(ROWS) == 224
    assert len(LADDERS) == 18
    assert len(COMPOSITIONS) == 29
    assert len(PRODUCTS) == 24
    assert len(CASES) == 20
    assert EXAMPLES


def test_rows_tell_their_source_and_status() -> None:
    for row in ROWS:
        assert row.source
        assert row.unit
        assert row.conditions
        assert row.status in get_args(Status)
        assert (row.status == "derived by hand") <= ("derived by hand" in row.source), row
    assert len(set(map(_row_name, ROWS))) == len(ROWS)
