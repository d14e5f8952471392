"""What knock-outs do: rows A1.12 to A1.15, A4.1 to A4.3, and a network worked by hand.

The networks of A1.12 to A1.15 are written down from overall equations, so the equation with growth
comes out again by construction; that nothing else is left, the equations without growth, and both
forms of the one pair of electrons are what is tested. Strains of A4 are compared with limits by
sign, since a measured yield need not reach any.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.reference.rows import Question
from yieldnet.chemistry.library import find_compound
from yieldnet.model.network import BIOMASS
from yieldnet.optimum.problem import Bounds
from yieldnet.optimum.proof import Status
from yieldnet.prediction.layers import surplus_column
from yieldnet.studies.behaviour import Behaviour, Coupling, behaviour
from yieldnet.studies.coupling import CouplingDesign, DesignStatus, couple
from yieldnet.studies.setting import Setting, set_up
from yieldnet.verbs import balance, predict, read_case

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

TRINH = "Trinh, Unrean and Srienc 2008, Applied and Environmental Microbiology 74:3634, Table 3"
HUNDREDTH = 0.005
"""Half of the last printed place: what a printed value may differ by [-]."""
FITTED = 0.01
"""A whole last place where three rounded numbers of the equation were put into growth [-]."""
FOUR = "four knock-outs"
SINKS = "? biomass + ? ethanol + ? lactate + ? acetate + ? succinate"
GLUCOSE = Question(
    equation=f"glucose + ? ammonia -> {SINKS}",
    network="ethanol-strains",
    strain=FOUR,
    aim="most ethanol",
)
HYDROGEN = replace(GLUCOSE, equation=f"{GLUCOSE.equation} + ? hydrogen")
FORMATE = replace(GLUCOSE, equation=f"{GLUCOSE.equation} + ? formate")
XYLOSE = replace(HYDROGEN, equation=HYDROGEN.equation.replace("glucose", "xylose"))
HAND = Question(
    equation="glucose -> ? biomass + ? lactate + ? acetate + ? ethanol + ? formate",
    network="coupling-words",
    aim="most acetate",
    either=("water",),
)


@pytest.fixture
def studied(tmp_path: Path) -> Callable[[Question], Setting]:
    def _studied(question: Question) -> Setting:
        path = tmp_path / "case.yaml"
        path.write_text(question.text(), "utf-8")
        return set_up(read_case(path))

    return _studied


def _grams(yield_mol: Fraction, product: str, substrate: str) -> float:
    masses = []
    for name in (product, substrate):
        entry = find_compound(name)
        assert entry is not None
        masses.append(entry.formula.molar_mass)
    return float(yield_mol * masses[0] / masses[1])


def _least_and_most(setting: Setting, column: str, **held: Fraction) -> tuple[Fraction, Fraction]:
    """Range of a column, some coefficients held; compounds by name, spaces as underscores."""
    problem = setting.problem.with_columns(
        {f"yield of {name.replace('_', ' ')}": Bounds(value, value) for name, value in held.items()}
    )
    ends = [
        setting.optimiser.optimise(problem, {column: Fraction(1)}, maximise)
        for maximise in (False, True)
    ]
    assert all(end.status is Status.OPTIMAL for end in ends)
    return ends[0].value, ends[1].value


@dataclass(frozen=True, slots=True, kw_only=True)
class NoGrowth:
    """A row without growth.

    Parameters
    ----------
    row : str
        Row of the table of published values.
    question : Question
        Strain and substrate.
    exact : Fraction
        Ethanol and carbon dioxide [mol/mol].
    printed : float
        As printed [mol/mol].
    most_atp : float
        Most ATP left, as printed [mol/mol].
    exact_atp : Fraction
        The same, worked by hand [mol/mol].
    """

    row: str
    question: Question
    exact: Fraction
    printed: float
    most_atp: float
    exact_atp: Fraction


NO_GROWTH = (
    # Glycolysis leaves 4 - 2 ATP per glucose.
    NoGrowth(
        row="A1.12",
        question=HYDROGEN,
        exact=Fraction(2),
        printed=2.0,
        most_atp=2.0,
        exact_atp=Fraction(2),
    ),
    # Per xylose 2 ATP to take up, 2/3 to split two thirds of a hexose, 10/3 from 5/3 of a triose.
    NoGrowth(
        row="A1.15",
        question=XYLOSE,
        exact=Fraction(5, 3),
        printed=1.67,
        most_atp=0.67,
        exact_atp=Fraction(2, 3),
    ),
)


@pytest.mark.parametrize("fact", NO_GROWTH, ids=lambda fact: fact.row)
def test_without_growth_only_ethanol_and_carbon_dioxide_are_left(
    fact: NoGrowth, studied: Callable[[Question], Setting]
) -> None:
    setting = studied(fact.question)
    for name in ("ethanol", "carbon dioxide"):
        ends = _least_and_most(setting, f"yield of {name}", biomass=Fraction(0))
        assert ends == (fact.exact, fact.exact)
        assert abs(float(ends[0]) - fact.printed) <= HUNDREDTH
    # One ATP yield is left as well; how much of it is wasted, down to the printed 0, is free.
    ends = _least_and_most(setting, surplus_column("ATP"), biomass=Fraction(0))
    assert ends == (fact.exact_atp, fact.exact_atp)
    assert abs(float(fact.exact_atp) - fact.most_atp) <= HUNDREDTH
    substrate = setting.case.basis.name
    assert abs(_grams(fact.exact, "ethanol", substrate) - 0.51) <= HUNDREDTH
    # Before the knock-outs neither holds: ethanol can be left out altogether.
    host = studied(replace(fact.question, strain=""))
    low, high = _least_and_most(host, "yield of ethanol", biomass=Fraction(0))
    assert low == 0
    assert high >= fact.exact


@pytest.mark.parametrize(
    ("row", "question", "printed"),
    [
        (
            "A1.13",
            HYDROGEN,
            {"biomass": 1.79, "ethanol": 1.40, "hydrogen": 0.11, "carbon dioxide": 1.41},
        ),
        (
            "A1.14",
            FORMATE,
            {"biomass": 1.79, "ethanol": 1.40, "formate": 0.11, "carbon dioxide": 1.30},
        ),
    ],
)
def test_most_growth_gives_the_printed_equation_and_forces_its_ethanol(
    row: str,
    question: Question,
    printed: dict[str, float],
    studied: Callable[[Question], Setting],
) -> None:
    setting = studied(question)
    found = behaviour(setting, setting.problem)
    assert found.most_biomass is not None
    for name, value in printed.items():
        low, high = _least_and_most(setting, f"yield of {name}", biomass=found.most_biomass)
        assert low == high, (row, name)
        assert abs(float(low) - value) <= FITTED, (row, name)
    low, high = _least_and_most(setting, "yield of ammonia", biomass=found.most_biomass)
    assert low == high
    assert abs(-float(low) - 0.49) <= HUNDREDTH
    assert found.guaranteed == found.product_at_most_growth
    assert found.guaranteed is not None
    assert abs(_grams(found.guaranteed, "ethanol", "glucose") - 0.36) <= HUNDREDTH
    assert found.coupling is Coupling.ALWAYS
    # The host grows more and is not forced to make ethanol at every growth.
    host_setting = studied(replace(question, strain=""))
    host = behaviour(host_setting, host_setting.problem)
    assert host.most_biomass is not None
    assert host.guaranteed is not None
    assert host.most_biomass > found.most_biomass
    assert host.guaranteed < found.guaranteed
    assert host.coupling is not Coupling.ALWAYS


def _members(design: CouplingDesign) -> list[set[str]]:
    return [set(item.members) for item in design.sets]


def test_the_published_knock_outs_hold_a_smallest_set(
    studied: Callable[[Question], Setting],
) -> None:
    host = studied(replace(HYDROGEN, strain=""))
    assert host.case.network is not None
    strain = host.case.network.strain(FOUR)
    assert strain is not None
    # 1.3 ethanol whenever there is 1 biomass: below what the strain makes at most growth, 1.40.
    design = couple(host, Fraction(13, 10), Fraction(1), 3)
    assert design.status is DesignStatus.FOUND
    assert len(design.sets[0].members) == 3
    # Fumarate reductase is one of a chain, so it is not among them by that name.
    published = set(strain.off)
    assert any(names <= published for names in _members(design))
    for item in design.sets:
        assert item.forced >= Fraction(13, 10)
        assert item.behaviour.coupling is Coupling.ALWAYS
    assert couple(host, Fraction(13, 10), Fraction(1), 2).status is DesignStatus.BEYOND_REACH


def test_coupling_words_worked_by_hand(studied: Callable[[Question], Setting]) -> None:
    acetate = studied(HAND)
    assert behaviour(acetate, acetate.problem) == Behaviour(
        most_biomass=Fraction(9, 5),
        product_at_most_growth=Fraction(7, 10),
        guaranteed=Fraction(7, 10),
        most_product=Fraction(1),
        biomass_at_most_product=Fraction(0),
        coupling=Coupling.AT_HIGH_GROWTH,
    )
    without = behaviour(acetate, acetate.without(["lactate dehydrogenase"]))
    assert without.coupling is Coupling.ALWAYS
    assert without.guaranteed == Fraction(7, 10)
    lactate = studied(replace(HAND, aim="most lactate"))
    host = behaviour(lactate, lactate.problem)
    assert (host.coupling, host.guaranteed) == (Coupling.NONE, Fraction(0))
    mixed = ("pyruvate-formate lyase", "acetate kinase", "alcohol dehydrogenase")
    after = behaviour(lactate, lactate.without(mixed))
    assert (after.coupling, after.guaranteed) == (Coupling.ALWAYS, Fraction(14, 9))
    # Acetate sets in where growth passes 4/3, what lactate alone can bear.
    for grown, least in ((Fraction(4, 3), Fraction(0)), (Fraction(8, 5), Fraction(2, 5))):
        low, _ = _least_and_most(acetate, "yield of acetate", biomass=grown)
        # A >= 6 x - 3 (1 - x) + 1 with x = grown / 6, and nothing below.
        assert low == max(Fraction(0), Fraction(3, 2) * grown - 2) == least


def test_designs_worked_by_hand(studied: Callable[[Question], Setting]) -> None:
    acetate = studied(HAND)
    design = couple(acetate, Fraction(7, 10), Fraction(1, 2))
    assert [(item.members, item.forced) for item in design.sets] == [
        (("lactate dehydrogenase",), Fraction(7, 10))
    ]
    # From 8/5 biomass on 2/5 comes without any knock-out; no knock-out forces 3/4.
    assert couple(acetate, Fraction(2, 5), Fraction(8, 5)).sets[0].members == ()
    beyond = couple(acetate, Fraction(3, 4), Fraction(8, 5))
    assert beyond.status is DesignStatus.BEYOND_REACH
    assert beyond.best is not None
    assert beyond.best.members == ("lactate dehydrogenase",)
    assert beyond.best.forced == Fraction(7, 10)
    lactate = studied(replace(HAND, aim="most lactate"))
    by_reaction = couple(lactate, Fraction(14, 9), Fraction(1, 2))
    # In the order of the file; each alone stops the mixed acids.
    assert [item.members for item in by_reaction.sets] == [
        ("pyruvate-formate lyase",),
        ("acetate kinase",),
        ("alcohol dehydrogenase",),
    ]
    assert {item.forced for item in by_reaction.sets} == {Fraction(14, 9)}
    by_group = couple(
        lactate, Fraction(14, 9), Fraction(1, 2), things=("mixed acids", "lactate dehydrogenase")
    )
    assert [item.members for item in by_group.sets] == [("mixed acids",)]
    too_much = couple(lactate, Fraction(1), Fraction(2))
    assert too_much.status is DesignStatus.TOO_MUCH_GROWTH
    assert too_much.most_biomass == Fraction(9, 5)


MIXED = "glucose -> ? succinate + ? acetate + ? ethanol + ? lactate"


def _best(strain: str, tmp_path: Path) -> Fraction:
    """Best succinate of a strain of rows A1.1 to A1.4."""
    path = tmp_path / "strain.yaml"
    question = Question(equation=MIXED, network="four-carbon", strain=strain, aim="most succinate")
    path.write_text(question.text(), "utf-8")
    aim = predict(read_case(path)).aim
    assert aim is not None
    assert aim.value is not None
    return aim.value


def test_a_strain_with_by_products_closed_lies_between_the_limits(tmp_path: Path) -> None:
    # A4.1, Jantama and others 2008 as quoted in a review: 1.2 to 1.6 mol/mol, and 1.71 at best.
    measured = (Fraction(12, 10), Fraction(16, 10))
    shunt = _best("glucokinase uptake with glyoxylate shunt", tmp_path)
    assert abs(float(shunt) - 1.71) <= HUNDREDTH
    assert measured[1] < shunt
    # It beats the limits of the host's own uptake, with the shunt and without: uptake has changed.
    assert measured[1] > _best("phosphotransferase uptake with glyoxylate shunt", tmp_path)
    assert measured[0] > _best("phosphotransferase uptake", tmp_path)


def test_taking_out_the_phosphotransferase_raises_what_can_be_reached(tmp_path: Path) -> None:
    # A4.2, Lee and others 2005, Applied and Environmental Microbiology 71:7880: without the
    # glucose phosphotransferase and both pyruvate kinases succinate rose more than 7-fold. A limit
    # says no more than the sign.
    with_it = _best("phosphotransferase uptake", tmp_path)
    without = _best("glucokinase uptake", tmp_path)
    assert without > with_it


def test_a_carbon_balance_above_one_is_seen_and_the_product_is_within_its_limit(
    tmp_path: Path,
) -> None:
    # A4.3, strain EB216, 72 h: aem.asm.org highwire table 9352. Products in mM of 46.39 mM glucose,
    # with printed shares of the glucose used in percent; biomass, printed 6, is given in mM carbon.
    # The shares come out if each acetyl unit is charged with the carbon dioxide that it set free.
    glucose = Fraction("46.39")
    printed = {
        "pyruvate": ("15.45", 0, 16),
        "lactate": ("8.64", 0, 9),
        "acetate": ("1.38", 1, 1),
        "ethanol": ("18.53", 1, 20),
        "butyrate": ("2.06", 2, 4),
        "n-butanol": ("22.84", 2, 49),
    }
    shares = {BIOMASS: Fraction("15.42") / (6 * glucose)}
    for name, (amount, acetyl_units, share) in printed.items():
        entry = find_compound(name)
        assert entry is not None
        carbon = entry.formula["C"] + acetyl_units
        shares[name] = carbon * Fraction(amount) / (6 * glucose)
        # Printed shares are whole percent, some cut and some rounded.
        assert abs(float(100 * shares[name]) - share) < 1
    # Yeast extract brought carbon that the balance of glucose does not hold.
    total = sum(shares.values())
    assert total > 1
    assert abs(float(100 * total) - 107) < 1
    path = tmp_path / "butanol.yaml"
    path.write_text(
        "case: Butanol\nequation: glucose -> ? n-butanol\n"
        "either side: [carbon dioxide, water]\naim: most n-butanol\n",
        "utf-8",
    )
    aim = balance(read_case(path)).aim
    assert aim is not None
    assert aim.value == 1
    assert 0 < Fraction("22.84") / glucose < aim.value
