"""Each question is answered once an engine; the rows that read from it share the answer."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from tests.reference.checking import recording
from tests.reference.rows import FOLDER, Answered, Question
from yieldnet.verbs import balance, predict, read_case

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.model.case import Case


@pytest.fixture(scope="session")
def answered(tmp_path_factory: pytest.TempPathFactory) -> Callable[[Question, str], Answered]:
    """Answer of a question by an engine, with every answer of the solver on the way."""
    folder = tmp_path_factory.mktemp("cases")
    known: dict[tuple[Question, str], Answered] = {}
    cases: dict[Question, Case] = {}

    def read(question: Question) -> Case:
        path = FOLDER / question.file
        if not question.file:
            path = folder / f"{len(cases)}.yaml"
            path.write_text(question.text(), "utf-8")
        return read_case(path)

    def answer(question: Question, engine: str = "glpk") -> Answered:
        key = (question, engine)
        if key not in known:
            case = cases.get(question) or cases.setdefault(question, read(question))
            with recording() as answers:
                solve = balance if case.network is None else predict
                prediction = solve(case, engine=engine)
            known[key] = Answered(prediction=prediction, answers=tuple(answers))
        return known[key]

    return answer
