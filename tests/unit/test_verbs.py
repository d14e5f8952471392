"""The verbs as functions, and the package that hands them out."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import pytest

import yieldnet

if TYPE_CHECKING:
    from yieldnet.prediction.result import Prediction

Answers = dict[str, "Prediction"]


def test_every_exported_name_is_there_and_no_other() -> None:
    for name in yieldnet.__all__:
        assert getattr(yieldnet, name) is not None
        assert name in dir(yieldnet)
    assert "__version__" in dir(yieldnet)
    with pytest.raises(AttributeError, match="module 'yieldnet' has no attribute 'prediction_of'"):
        _ = yieldnet.prediction_of


def test_a_case_may_be_given_as_text_path_or_value(answers: Answers) -> None:
    expected = answers["energy"]
    case = expected.case
    assert yieldnet.predict(case) == expected
    assert yieldnet.predict(case.file) == expected
    assert yieldnet.predict(Path(case.file)) == expected
    assert yieldnet.read_case(case.file) == case


def test_a_network_may_be_given_by_name_path_or_value(checkout: Path) -> None:
    by_name = yieldnet.read_network("lysine-coryneform")
    path = checkout / "models" / "lysine-coryneform.yaml"
    assert yieldnet.read_network(path) == by_name
    assert yieldnet.audit(by_name).network is by_name
    assert yieldnet.audit(path) == yieldnet.audit("lysine-coryneform")


def test_balance_leaves_the_network_out(answers: Answers) -> None:
    result = yieldnet.balance(answers["solved"].case)
    assert all(item.network is None for item in result.coefficients)
    assert [item.rung for item in result.ladder] == ["elements", "measured", "demands"]


def test_balance_of_an_energy_aim_has_no_best_value(answers: Answers) -> None:
    result = yieldnet.balance(answers["energy"].case)
    assert result.ladder == ()
    assert result.aim is not None
    assert result.aim.value is None


def test_a_prediction_without_a_network_is_refused_with_the_way_out(answers: Answers) -> None:
    with pytest.raises(yieldnet.InputError, match=r"YN512.*names no network") as caught:
        yieldnet.predict(answers["taken up"].case)
    (finding,) = caught.value.findings
    assert "yieldnet balance" in finding.hint


@pytest.mark.parametrize("verb", [yieldnet.read_case, yieldnet.predict, yieldnet.balance])
def test_a_missing_case_is_an_input_error(verb: object) -> None:
    assert callable(verb)
    with pytest.raises(yieldnet.InputError, match="YN101"):
        verb("nowhere.yaml")


@pytest.mark.parametrize("verb", [yieldnet.read_network, yieldnet.audit])
def test_a_missing_network_is_an_input_error(verb: object) -> None:
    assert callable(verb)
    with pytest.raises(yieldnet.InputError, match="YN101"):
        verb("nowhere.yaml")


@pytest.mark.parametrize("name", ["solved", "no aim", "energy", "infeasible"])
def test_both_engines_give_the_same_answer(answers: Answers, name: str) -> None:
    other = yieldnet.predict(answers[name].case, engine="optlang")
    assert other.outcome == answers[name].outcome
    assert other.ladder == answers[name].ladder
    assert other.coefficients == answers[name].coefficients


@pytest.mark.parametrize("word", ["RQ", "rq", "YN401", "yn401", "bracketed", "elements"])
def test_words_and_codes_are_explained(word: str) -> None:
    assert yieldnet.explain(word).endswith(".")


def test_a_word_that_is_none_is_not_explained() -> None:
    with pytest.raises(KeyError, match="NOTHING OF THE KIND"):
        yieldnet.explain("nothing of the kind")


def test_schemas_by_name() -> None:
    assert yieldnet.schema("case")["title"] == "yieldnet case"
    assert yieldnet.schema("network")["title"] == "yieldnet network"
    with pytest.raises(KeyError, match="recipe"):
        yieldnet.schema("recipe")


def test_an_engine_that_is_not_there_is_told(answers: Answers) -> None:
    with pytest.raises(ValueError, match="engine 'abacus' is not known; known: glpk, optlang"):
        yieldnet.predict(answers["energy"].case, engine="abacus")
