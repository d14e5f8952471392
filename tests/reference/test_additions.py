"""What additions bring: published best yields met by adding the reaction that makes the difference.

Rows A1.2 to A1.4 and A1.10 give the same network without and with one reaction or group. Adding it
from the candidates that ship must lift the one number to the other, exactly, and relieve the rung
on which it was lost. Each addition is checked by a second route: the case with the reaction written
into its network, and every pair and knock-out solved without pruning.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import combinations
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.reference.rows import FOLDER, Question
from yieldnet.audit.rules import closure
from yieldnet.model.binding import bind
from yieldnet.prediction.layers import switched_off
from yieldnet.reading.shipped import models_folder, shipped_candidates
from yieldnet.studies.behaviour import behaviour
from yieldnet.studies.candidates import merge
from yieldnet.studies.setting import set_up

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.model.case import Case
    from yieldnet.model.network import Network
    from yieldnet.studies.addition_result import AdditionResult

    CaseOf = Callable[[Question], Case]

F = Fraction
SHIPPED = shipped_candidates()
MIXED = "glucose -> ? succinate + ? acetate + ? ethanol + ? lactate"
FERREDOXIN = "  reduced ferredoxin: {kind: redox, formula: H2}"
SCHUSTER = "Schuster and von Kamp, poster, University of Jena (3/4); 6/7 is the element limit"
CHENG = (
    "Cheng, Wang, Zeng and Zhang 2013, BioMed Research International 2013:538790, Table 2: "
    "printed 1.0, 1.33, 1.2, 1.71"
)
BOGORAD = (
    "Bogorad, Lin and Liao 2013, Nature 502:693: three acetyl-CoA per hexose, two through pyruvate "
    "(from memory); follows from the carbon"
)


def _lysine(strain: str) -> Question:
    return Question(
        equation="glucose + ? ammonia + ? oxygen -> ? L-lysine",
        network="lysine-coryneform",
        strain=strain,
        aim="most L-lysine",
    )


def _succinate(strain: str) -> Question:
    return Question(equation=MIXED, network="four-carbon", strain=strain, aim="most succinate")


def _acetate(strain: str = "") -> Question:
    return Question(
        equation="glucose + ? oxygen -> ? acetate",
        network="acetate-from-glucose",
        strain=strain,
        aim="most acetate",
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Lift:
    """A best yield before and after something is added.

    Parameters
    ----------
    row : str
        Row of the table of published values.
    question : Question
        The case before.
    added : tuple of str
        Candidates.
    before, after : Fraction
        Best yields, to be met exactly: the networks are exact [mol/mol].
    rungs : tuple of str
        Rungs that it relieves.
    source : str
        Where the numbers stand, or how they were derived.
    """

    row: str
    question: Question
    added: tuple[str, ...]
    before: Fraction
    after: Fraction
    rungs: tuple[str, ...]
    source: str

    def __str__(self) -> str:
        return f"{self.row}: {self.question.strain}, {' and '.join(self.added)}"


def _lift(
    row: str,
    question: Question,
    added: str,
    before: Fraction,
    after: Fraction,
    rung: str,
    source: str,
) -> Lift:
    names = tuple(added.split(" & "))
    return Lift(
        row=row,
        question=question,
        added=names,
        before=before,
        after=after,
        rungs=(rung,),
        source=source,
    )


FREE = "transhydrogenase without cost"
PHOSPHOKETOLASE = "fructose 6-phosphate phosphoketolase"
LIFTS = (
    _lift(
        "A1.10",
        _lysine("no oxidative phosphorylation"),
        FREE,
        F(3, 4),
        F(6, 7),
        "energy",
        SCHUSTER,
    ),
    _lift(
        "A1.10",
        _lysine("no transhydrogenase"),
        FREE,
        F(30, 37),
        F(6, 7),
        "energy",
        f"{SCHUSTER}; 30/37 computed with a P/O ratio of 1.5",
    ),
    _lift(
        "A1.10",
        _lysine("no transhydrogenase and no malic enzyme"),
        FREE,
        F(3, 4),
        F(6, 7),
        "redox",
        SCHUSTER,
    ),
    _lift(
        "A1.10",
        _lysine("no transhydrogenase and no malic enzyme"),
        "NADP-dependent malic enzyme",
        F(3, 4),
        F(30, 37),
        "redox",
        f"{SCHUSTER}; 30/37 computed with a P/O ratio of 1.5",
    ),
    _lift(
        "A1.4",
        _succinate("glucokinase uptake"),
        "glyoxylate shunt",
        F(4, 3),
        F(12, 7),
        "pathways",
        CHENG,
    ),
    _lift(
        "A1.2",
        _succinate("phosphotransferase uptake"),
        "glucose facilitator and glucokinase",
        F(1),
        F(4, 3),
        "pathways",
        CHENG,
    ),
    _lift(
        "A1.3",
        _succinate("phosphotransferase uptake"),
        "glyoxylate shunt",
        F(1),
        F(6, 5),
        "pathways",
        CHENG,
    ),
    _lift(
        "A1.4",
        _succinate("phosphotransferase uptake"),
        "glucose facilitator and glucokinase & glyoxylate shunt",
        F(1),
        F(12, 7),
        "pathways",
        CHENG,
    ),
    _lift("NOG", _acetate(), PHOSPHOKETOLASE, F(2), F(3), "pathways", BOGORAD),
    _lift(
        "NOG",
        _acetate(),
        "xylulose 5-phosphate phosphoketolase",
        F(2),
        F(3),
        "pathways",
        BOGORAD,
    ),
    _lift("NOG", _acetate(), "non-oxidative glycolysis", F(2), F(3), "pathways", BOGORAD),
    _lift(
        "NOG",
        _acetate("no rearrangement"),
        "non-oxidative glycolysis",
        F(2),
        F(3),
        "pathways",
        BOGORAD,
    ),
)
QUESTIONS = tuple(dict.fromkeys(item.question for item in LIFTS))


@pytest.fixture(scope="module")
def shipped() -> Network:
    """The candidates that ship."""
    return yieldnet.read_network(SHIPPED)


@pytest.fixture(scope="module")
def case_of(tmp_path_factory: pytest.TempPathFactory) -> CaseOf:
    """Case of a question."""

    def _case_of(question: Question) -> Case:
        path = tmp_path_factory.mktemp("additions") / "case.yaml"
        path.write_text(question.text(), "utf-8")
        return yieldnet.read_case(path)

    return _case_of


@pytest.fixture(scope="module")
def results(case_of: CaseOf) -> dict[Question, AdditionResult]:
    """Additions, pairs included, to each case."""
    return {item: yieldnet.additions(case_of(item), pairs=True) for item in QUESTIONS}


@pytest.mark.parametrize("lift", LIFTS, ids=str)
def test_an_addition_lifts_one_published_yield_to_the_other(
    lift: Lift, results: dict[Question, AdditionResult]
) -> None:
    result = results[lift.question]
    assert result.pairs is not None
    (found,) = [item for item in (*result.singles, *result.pairs) if item.names == lift.added]
    assert (result.before, found.value) == (lift.before, lift.after)
    assert found.gain == lift.after - lift.before
    assert tuple(relief.rung for relief in found.relieves) == lift.rungs
    # What a rung costs less may cost more further down; only the whole ladder adds up.
    before, after = (
        sum(rung.loss or F(0) for rung in ladder) for ladder in (result.ladder, found.ladder)
    )
    assert before - after == found.gain


def test_a_phosphoketolase_alone_stands_still_without_the_rearrangement(
    results: dict[Question, AdditionResult],
) -> None:
    result = results[_acetate("no rearrangement")]
    assert [item.names for item in result.singles] == [("non-oxidative glycolysis",)]
    assert PHOSPHOKETOLASE in result.without_effect


def _extended(case: Case, shipped: Network, names: tuple[str, ...]) -> Case:
    """The case with candidates written into its network, by the merger but one at a time."""
    assert case.network is not None
    parts = tuple(item for item in shipped.reactions if (item.group or item.name) in names)
    bound, _ = bind(case.network, dict(case.parameters))
    found = merge(bound, switched_off(case), replace(shipped, reactions=parts))
    return replace(case, network=found.bound.network)


@pytest.mark.parametrize("question", QUESTIONS, ids=str)
def test_each_addition_is_the_case_with_it_written_in(
    question: Question,
    results: dict[Question, AdditionResult],
    case_of: CaseOf,
    shipped: Network,
) -> None:
    result = results[question]
    case = case_of(question)
    for item in (*result.singles, *(result.pairs or ())[:2]):
        setting = set_up(_extended(case, shipped, item.names))
        assert setting.ready.objective is not None
        answer = setting.ready.objective.best(setting.optimiser, setting.layers.final)
        assert answer.value == item.value, item.names


def test_no_pair_is_missed_by_pruning(
    results: dict[Question, AdditionResult], case_of: CaseOf, shipped: Network
) -> None:
    question = _succinate("phosphotransferase uptake")
    result, case = results[question], case_of(question)
    alone = {item.names: item.value for item in result.singles}
    found = {item.names: item.value for item in result.pairs or ()}
    ideas = [item.name for item in result.merged.ideas if not item.needs]
    assert len(ideas) > 15
    everything = _extended(case, shipped, tuple(ideas))
    assert everything.network is not None
    members = {item.name: item.reactions for item in result.merged.ideas}
    setting = set_up(everything)
    objective = setting.ready.objective
    assert objective is not None
    for pair in combinations(ideas, 2):
        rest = {name for idea in ideas if idea not in pair for name in members[idea]}
        problem = setting.without(rest)
        value = objective.best(setting.optimiser, problem).value
        best_alone = max((alone.get((name,)) or result.before) for name in pair)
        assert value == found.get(pair, best_alone), pair


def test_no_knock_out_on_top_is_missed_by_pruning(checkout: Path, shipped: Network) -> None:
    path = checkout / "examples" / "succinate-from-xylose" / "case.yaml"
    result = yieldnet.additions(path, with_deletions=True, top=2)
    assert result.deletions
    case = yieldnet.read_case(path)
    for item in result.singles[:2]:
        (name,) = item.names
        found = {
            entry.deletion: entry.guaranteed for entry in result.deletions if entry.addition == name
        }
        setting = set_up(_extended(case, shipped, (name,)))
        before = behaviour(setting, setting.problem).guaranteed or F(0)
        for reaction in setting.candidates():
            if reaction in item.ideas[0].reactions:
                continue
            after = behaviour(setting, setting.without((reaction,))).guaranteed
            better = after is not None and after > before
            assert found.get(reaction) == (after if better else None), reaction
    assert result.guaranteed_before is not None
    assert all(entry.guaranteed > (entry.with_addition or 0) for entry in result.deletions)


# The candidates that ship ------------------------------------------------------------------------


def _units(network: Network) -> list[str]:
    return list(dict.fromkeys(item.group or item.name for item in network.reactions))


def test_every_shipped_candidate_closes_and_names_its_source(shipped: Network) -> None:
    bound, findings = bind(shipped)
    assert findings.items == []
    assert closure(bound).items == []
    assert len(_units(shipped)) >= 40
    for item in shipped.reactions:
        assert item.source, item.name
    assert all(item.source for item in shipped.parameters)
    assert "genetically modified organisms" in shipped.about


def test_every_shipped_candidate_fits_a_network(
    shipped: Network, network_of: Callable[[str], Network]
) -> None:
    # The facultative host, with a ferredoxin and with what three of the candidates take or make.
    text = (models_folder() / "facultative-succinate.yaml").read_text("utf-8")
    text = text.replace("  quinol: {", f"{FERREDOXIN}\n  quinol: {{", 1)
    text = text.replace("in: [glucose,", "in: [galactose, glucose,", 1)
    text = text.replace("out: [biomass,", "out: [citramalate, biomass,", 1)
    host, _ = bind(network_of(text))
    found = merge(host, (), shipped)
    assert found.not_applicable == ()
    assert found.refused == ()
    ideas = {item.name: item for item in found.ideas}
    assert set(ideas) | set(found.already_there) == set(_units(shipped))
    assert "glyoxylate shunt" in found.already_there
    assert [item.name for item in found.ideas if item.needs] == []


def test_no_shipped_candidate_makes_energy_in_a_shipped_network(checkout: Path) -> None:
    for name in ("lysine", "succinate-from-xylose"):
        result = yieldnet.additions(checkout / "examples" / name / "case.yaml")
        assert result.makes_energy == ()
        assert result.clean


def test_a_strain_stays_what_it_is_without_additions(
    results: dict[Question, AdditionResult], case_of: CaseOf
) -> None:
    for question, result in results.items():
        prediction = yieldnet.predict(case_of(question))
        assert prediction.aim is not None
        assert result.before == prediction.aim.value
        assert result.ladder == prediction.ladder


def test_rows_tell_their_source() -> None:
    assert len({str(item) for item in LIFTS}) == len(LIFTS)
    for item in LIFTS:
        assert item.source
        assert (FOLDER / "networks" / f"{item.question.network}.yaml").exists() or (
            models_folder() / f"{item.question.network}.yaml"
        ).exists()
