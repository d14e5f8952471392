"""What one change gives back: rows A1.1 to A1.4 explained by relaxations alone.

The published best yields of succinate on glucose, 1, 4/3, 6/5 and 12/7, differ by one reaction or
group each. Whoever asks about one strain must be told the numbers of the others, as what undoing a
single entry of its list would bring, and no other entry may promise anything.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING, get_args

import pytest

from tests.reference.rows import FOLDER, Answered, Question, Status, best
from yieldnet.report.why_view import relaxation_words
from yieldnet.verbs import read_network

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.prediction.relaxations import Relaxation
    from yieldnet.prediction.result import Prediction

    Ask = Callable[..., Answered]

CHENG = (
    "Cheng, Wang, Zeng and Zhang 2013, BioMed Research International 2013:538790, Table 2: "
    "printed 1.0, 1.33, 1.2, 1.71; the fractions follow from the stoichiometry"
)
MIXED = "glucose -> ? succinate + ? acetate + ? ethanol + ? lactate"
UNDO = "strain entry"


def _question(strain: str, equation: str = MIXED) -> Question:
    return Question(equation=equation, network="four-carbon", strain=strain, aim="most succinate")


PEP_UPTAKE = _question("phosphotransferase uptake")
ATP_UPTAKE = _question("glucokinase uptake")
PEP_UPTAKE_AND_SHUNT = _question(
    "phosphotransferase uptake with glyoxylate shunt", f"{MIXED} + ? formate"
)
ATP_UPTAKE_AND_SHUNT = _question("glucokinase uptake with glyoxylate shunt")


@dataclass(frozen=True, slots=True, kw_only=True)
class Given:
    """One thing given back, and the best yield that it must bring.

    Parameters
    ----------
    row : str
        Row of the table of published values that holds the number.
    question : Question
        The strain that is asked about.
    kind, name : str
        What is given back.
    value : Fraction
        Best yield then, to be met exactly: the network is exact [mol/mol].
    words : str
        How the answer tells it.
    source : str
        Where the number stands, or how it was derived.
    status : Status
        How it was come by.
    """

    row: str
    question: Question
    kind: str
    name: str
    value: Fraction
    words: str
    source: str
    status: Status

    def __str__(self) -> str:
        return f"{self.row}: {self.question.strain}, {self.kind} {self.name}"


def _undone(
    row: str, question: Question, name: str, value: Fraction, figures: str, source: str = ""
) -> Given:
    return Given(
        row=row,
        question=question,
        kind=UNDO,
        name=name,
        value=value,
        words=f"undoing '{name}' gives {figures}",
        source=source or CHENG,
        status="derived by hand" if source else "S",
    )


GIVEN = (
    _undone("A1.2", PEP_UPTAKE, "glucokinase", Fraction(4, 3), "1.33"),
    _undone("A1.3", PEP_UPTAKE, "glyoxylate shunt", Fraction(6, 5), "1.20"),
    _undone("A1.4", ATP_UPTAKE, "glyoxylate shunt", Fraction(12, 7), "1.71"),
    _undone("A1.4", PEP_UPTAKE_AND_SHUNT, "glucokinase", Fraction(12, 7), "1.71"),
    _undone(
        "A1.3",
        PEP_UPTAKE_AND_SHUNT,
        "formate route",
        Fraction(7, 5),
        "1.40",
        "derived by hand: 24 e = 14 * 7/5 + 2 * 1 + 8 * 3/10, formate 1 and acetate 3/10",
    ),
    _undone(
        "A1.2",
        ATP_UPTAKE,
        "oxidative branch",
        Fraction(12, 7),
        "1.71",
        "derived by hand: pyruvate oxidised to succinate keeps every electron, 24/14",
    ),
    Given(
        row="A1.2",
        question=ATP_UPTAKE,
        kind="source",
        name="NADH",
        value=Fraction(2),
        words="with a free source of NADH gives 2",
        source="derived by hand: 2 phosphoenolpyruvate per glucose, one carbon dioxide each",
        status="derived by hand",
    ),
    Given(
        row="A1.5",
        question=PEP_UPTAKE_AND_SHUNT,
        kind="compound",
        name="oxygen",
        value=Fraction(3, 2),
        words="with oxygen taken up too gives 1.50",
        source="derived by hand: 1 from phosphoenolpyruvate, 1/2 from the acetyl-CoA of pyruvate",
        status="derived by hand",
    ),
)
"""Every number is mol succinate per mol glucose."""

BEFORE = (
    (PEP_UPTAKE, Fraction(1)),
    (ATP_UPTAKE, Fraction(4, 3)),
    (PEP_UPTAKE_AND_SHUNT, Fraction(6, 5)),
    (ATP_UPTAKE_AND_SHUNT, Fraction(12, 7)),
)


def _found(prediction: Prediction, kind: str, name: str) -> Relaxation:
    assert prediction.relaxations is not None
    (found,) = [item for item in prediction.relaxations.helpful if item.parts == ((kind, name),)]
    return found


@pytest.mark.parametrize(("question", "value"), BEFORE, ids=lambda item: str(item))
def test_best_yield_before_anything_is_given_back(
    question: Question, value: Fraction, answered: Ask
) -> None:
    assert best(answered(question).prediction) == value


@pytest.mark.parametrize("given", GIVEN, ids=str)
def test_one_change_gives_back_what_is_published(given: Given, answered: Ask) -> None:
    prediction = answered(given.question).prediction
    found = _found(prediction, given.kind, given.name)
    assert found.value == given.value
    assert found.gain == given.value - best(prediction)
    assert found.gain > 0
    assert not found.reason
    assert relaxation_words(found) == given.words


@pytest.mark.parametrize("given", [item for item in GIVEN if item.kind == UNDO], ids=str)
def test_undoing_an_entry_is_a_case_without_it(given: Given, answered: Ask) -> None:
    network = read_network(FOLDER / "networks" / f"{given.question.network}.yaml")
    strain = network.strain(given.question.strain)
    assert strain is not None
    assert given.name in strain.off
    others = tuple(name for name in strain.off if name != given.name)
    without = replace(given.question, strain="", knock_outs=others)
    assert best(answered(without).prediction) == given.value


def _undoing(prediction: Prediction) -> dict[str, Fraction | None]:
    assert prediction.relaxations is not None
    return {
        name: item.value
        for item in prediction.relaxations.helpful
        for kind, name in item.parts
        if kind == UNDO
    }


def test_no_other_entry_promises_anything(answered: Ask) -> None:
    for question, _ in BEFORE:
        expected = {
            item.name: item.value
            for item in GIVEN
            if item.question == question and item.kind == UNDO
        }
        assert _undoing(answered(question).prediction) == expected


def test_at_the_electron_limit_only_another_source_of_electrons_helps(answered: Ask) -> None:
    prediction = answered(ATP_UPTAKE_AND_SHUNT).prediction
    assert prediction.relaxations is not None
    better = [item for item in prediction.relaxations.helpful if item.gain is None or item.gain > 0]
    # 12/7 is all that the 24 electrons of glucose can make; xylose and NADH bring more of them.
    assert {item.parts for item in better} == {(("source", "NADH"),), (("compound", "xylose"),)}
    assert _found(prediction, "source", "NADH").value == 2


def test_a_second_sugar_is_told_as_endless_and_first(answered: Ask) -> None:
    for question, _ in BEFORE:
        report = answered(question).prediction.relaxations
        assert report is not None
        first, *others = report.helpful
        assert first.parts == (("compound", "xylose"),)
        assert (first.value, first.gain) == (None, None)
        assert "xylose taken up" in first.reason
        assert "succinate made" in first.reason
        assert first.reason.endswith("can grow together without limit")
        gains = [item.gain or Fraction(0) for item in others]
        assert gains == sorted(gains, reverse=True)


def test_rows_tell_their_source_and_status() -> None:
    assert len({str(item) for item in GIVEN}) == len(GIVEN)
    for item in GIVEN:
        assert item.source
        assert item.status in get_args(Status)
        assert (item.status == "derived by hand") == item.source.startswith("derived by hand")
