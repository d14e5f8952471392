"""Every answer of the solver is proven a second time, and both engines give the same fractions.

All examples, all files of ``cases`` and all questions of the reference rows are asked.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import pytest

from tests.reference.checking import check_answer, check_equation, closes_over_the_cell
from tests.reference.tables import QUESTIONS
from yieldnet.optimum.proof import Status
from yieldnet.report.json_form import prediction_form

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from tests.reference.rows import Answered, Question

    Ask = Callable[..., Answered]

CHOSEN = frozenset({"relaxations", "without_effect", "not_offered", "findings"})
"""Keys with words or counts that depend on which of several optimal points or directions an engine
came upon; their exact numbers are compared all the same."""


@pytest.mark.parametrize("question", QUESTIONS, ids=str)
def test_every_answer_is_proven_and_closes(question: Question, answered: Ask) -> None:
    found = answered(question)
    for answer in found.answers:
        check_answer(answer)
    case = found.prediction.case
    optimal = [answer for answer in found.answers if answer.status is Status.OPTIMAL]
    closing = sum(closes_over_the_cell(case, answer) for answer in optimal)
    assert closing >= sum(rung.value is not None for rung in found.prediction.ladder)
    check_equation(found.prediction)


@pytest.mark.parametrize("question", QUESTIONS, ids=str)
def test_engines_agree_exactly(question: Question, answered: Ask) -> None:
    one, other = (
        prediction_form(answered(question, engine).prediction) for engine in ("glpk", "optlang")
    )
    exact = dict(_exact_numbers(one))
    assert exact or one["status"] == "infeasible"
    assert exact == dict(_exact_numbers(other))
    assert {key: one[key] for key in one if key not in CHOSEN} == {
        key: other[key] for key in other if key not in CHOSEN
    }


def _exact_numbers(form: Any, place: str = "") -> Iterator[tuple[str, str | None]]:
    """Every number that the JSON gives as a fraction, with its place."""
    if isinstance(form, dict):
        for key, value in form.items():
            if key == "exact" or key.startswith("exact_"):
                yield f"{place}/{key}", value
            else:
                yield from _exact_numbers(value, f"{place}/{key}")
    elif isinstance(form, list):
        for number, value in enumerate(form):
            yield from _exact_numbers(value, f"{place}/{number}")
