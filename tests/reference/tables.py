"""All reference rows and ladders together, and every question that is asked."""

from __future__ import annotations

from tests.reference.element_limits import ELEMENT_ROWS
from tests.reference.network_limits import LADDERS, NETWORK_ROWS
from tests.reference.rows import FOLDER, Question
from tests.reference.worked_balances import BALANCE_ROWS

__all__ = ["CASES", "EXAMPLES", "LADDERS", "QUESTIONS", "ROWS"]

ROWS = (*NETWORK_ROWS, *ELEMENT_ROWS, *BALANCE_ROWS)
EXAMPLES = tuple(
    Question(file=f"../../examples/{path.parent.name}/case.yaml")
    for path in sorted((FOLDER.parent.parent / "examples").glob("*/case.yaml"))
)
CASES = tuple(
    Question(file=f"cases/{path.name}") for path in sorted((FOLDER / "cases").glob("*.yaml"))
)
QUESTIONS = tuple(
    dict.fromkeys(
        (
            *EXAMPLES,
            *CASES,
            *(row.question for row in ROWS),
            *(ladder.question for ladder in LADDERS),
        )
    )
)
