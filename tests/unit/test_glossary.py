"""The words of the program, explained."""

from __future__ import annotations

import pytest

from yieldnet.foundation.glossary import GLOSSARY
from yieldnet.prediction.layers import RUNGS
from yieldnet.prediction.result import CoefficientStatus, Outcome


@pytest.mark.parametrize("word", GLOSSARY)
def test_every_word_is_explained_in_a_sentence(word: str) -> None:
    assert GLOSSARY[word].endswith(".")
    assert GLOSSARY[word][0].isupper()


def test_no_word_is_there_twice_in_other_capitals() -> None:
    assert len({word.casefold() for word in GLOSSARY}) == len(GLOSSARY) > 30


@pytest.mark.parametrize(
    "words",
    [RUNGS, tuple(CoefficientStatus), tuple(Outcome)],
    ids=["rungs", "statuses", "outcomes"],
)
def test_every_word_that_an_answer_uses_is_explained(words: tuple[str, ...]) -> None:
    assert set(map(str, words)) <= set(GLOSSARY)


def test_the_glossary_cannot_be_changed() -> None:
    with pytest.raises(TypeError, match="does not support item assignment"):
        GLOSSARY["aim"] = "x"  # type: ignore[index]
