"""Heat and Gibbs energy of predicted equations: closure, point, steps, opinions, findings."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.gibbs import STANDARD_KELVIN
from yieldnet.chemistry.thermochemistry import species_of
from yieldnet.model.network import Compound
from yieldnet.prediction.activities import Activities, species_of_biomass
from yieldnet.prediction.biomass_methods import yield_by_dissipation, yield_by_electrons
from yieldnet.prediction.energetics import Energetics, energetics_case

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case

    Read = Callable[[str], tuple[Case | None, Findings]]

NETWORK = """
network: Glucose to ethanol, cells and carbon dioxide
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
  quinol: {kind: redox, formula: H2}
crossing:
  in: [glucose, ammonia, oxygen]
  out: [biomass, ethanol, glycerol]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 ATP + 2 NADH
  pyruvate decarboxylase: pyruvate -> acetaldehyde + carbon dioxide
  alcohol dehydrogenase: acetaldehyde + NADH <-> ethanol
  glycerol branch: 1/2 glucose + ATP + NADH -> glycerol
  oxidation: {equation: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH}
  dehydrogenase: NADH -> quinol
  oxidase: quinol + 1/2 oxygen -> water + ATP
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  equation: 1/3 pyruvate + 2 ATP + ? ammonia + ? NADH -> biomass + ? water
"""
CASE = """
case: t
network: network.yaml
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? ethanol
either side: [carbon dioxide, water]
aim: most biomass
"""


@pytest.fixture
def answer(case_of: Read, tmp_path: Path) -> Callable[[str], Energetics]:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")

    def _answer(text: str) -> Energetics:
        case, findings = case_of(text)
        assert case is not None, findings.items
        return energetics_case(case)

    return _answer


def _codes(result: Energetics) -> set[str]:
    return {item.code for item in result.findings}


def test_an_equation_of_elements_alone_has_its_heat(answer: Callable[[str], Energetics]) -> None:
    result = answer(
        "case: t\nequation: glucose -> ? ethanol\neither side: [carbon dioxide, water]\n"
    )
    assert dict(result.amounts) == {
        "glucose": -1,
        "ethanol": 2,
        "carbon dioxide": 2,
        "water": 0,
    }
    assert [item.ratio for item in result.closures] == [1, 1]
    assert result.heat is not None
    assert result.heat.by_combustion == 69
    assert result.gibbs is not None
    assert result.gibbs.standard == pytest.approx(-235.0, abs=0.05)
    # By default 1 mmol/L and 0.1 bar: both pull.
    assert result.gibbs.middle < result.gibbs.standard
    assert (result.steps, result.running, result.opinions) == ((), 0, ())
    assert result.dissipation_kj_per_cmol is None
    assert repr(result) == "Energetics('t': solved, 69 kJ/mol of heat)"
    texts = {item.text: item.value for item in result.assumptions}
    assert texts["concentration (default) of glucose, ethanol"] == 1
    assert texts["pressure (default) of carbon dioxide"] == Fraction(1, 10)
    assert texts["pH (default)"] == 7


def test_the_equation_is_that_of_the_fluxes(answer: Callable[[str], Energetics]) -> None:
    result = answer(CASE)
    amounts = dict(result.amounts)
    prediction = result.prediction
    assert prediction.aim is not None
    assert amounts["biomass"] == prediction.aim.value
    for term in prediction.terms:
        assert term.range.single
        assert abs(amounts[term.compound]) == abs(term.range.low or 0)
    assert result.not_unique == ()
    assert result.biomass_carbon == amounts["biomass"]
    assert all(item.closes and item.ratio == 1 for item in result.closures)
    assert result.heat is not None
    assert result.gibbs is not None
    assert result.gibbs.middle < 0 < result.heat.by_combustion
    dissipated = result.dissipation_kj_per_cmol
    assert dissipated is not None
    assert dissipated * float(amounts["biomass"]) == pytest.approx(-result.gibbs.middle)


def test_heat_and_entropy_make_the_gibbs_energy(answer: Callable[[str], Energetics]) -> None:
    """A second way: enthalpies of formation give nearly the heat by combustion.

    What differs is dissolving: sugar takes some up, ethanol gives some off.
    """
    result = answer(CASE)
    assert result.heat is not None
    enthalpy = 0.0
    for name, amount in result.amounts:
        key = "generic biomass" if name == "biomass" else name
        value = species_of(key)[0].enthalpy
        assert value is not None
        enthalpy += float(amount) * float(value.value)
    assert -enthalpy == pytest.approx(float(result.heat.by_combustion), rel=0.05)


def test_several_best_points_are_told_and_one_is_taken(
    answer: Callable[[str], Energetics],
) -> None:
    text = CASE.replace("+ ? ethanol", "+ ? ethanol + ? glycerol").replace(
        "most biomass", "least biomass"
    )
    result = answer(text)
    assert "YN869" in _codes(result)
    assert "ethanol" in result.not_unique
    assert result.heat is not None


def test_without_an_aim_the_open_equation_has_no_heat(answer: Callable[[str], Energetics]) -> None:
    result = answer(CASE.replace("aim: most biomass\n", ""))
    assert result.amounts == ()
    assert result.closures == ()
    assert (result.heat, result.gibbs) == (None, None)
    assert _codes(result) == {"YN870"}
    assert repr(result) == "Energetics('t': solved)"


def test_without_an_aim_a_settled_equation_is_taken(answer: Callable[[str], Energetics]) -> None:
    result = answer(
        "case: t\nnetwork: network.yaml\nequation: glucose -> 2 ethanol\n"
        "either side: [carbon dioxide, water]\n"
    )
    assert dict(result.amounts)["carbon dioxide"] == 2
    assert result.running == 0


def test_an_infeasible_case_has_no_numbers(answer: Callable[[str], Energetics]) -> None:
    result = answer(CASE + "demands: {biomass: at least 100}\n")
    assert result.prediction.outcome == "infeasible"
    assert result.amounts == ()
    assert _codes(result) == {"YN601"}


def test_steps_are_judged_where_every_compound_has_a_value(
    answer: Callable[[str], Energetics],
) -> None:
    result = answer(CASE.replace("most biomass", "most ethanol"))
    judged = {item.reaction: item for item in result.steps}
    assert set(judged) == {"glycolysis", "pyruvate decarboxylase", "alcohol dehydrogenase"}
    assert result.running == 3
    assert not any(item.uphill for item in result.steps)
    # Lumped glycolysis from -146 + 2 x 31.8 + NADH, one turn: strongly down at 1 mol/L and M/M.
    assert judged["glycolysis"].gibbs.low < judged["glycolysis"].gibbs.high


def test_a_quinol_has_no_value_and_its_steps_are_counted(
    answer: Callable[[str], Energetics],
) -> None:
    result = answer(CASE)
    assert result.running > len(result.steps) > 0
    assert "oxidase" not in {item.reaction for item in result.steps}


def test_a_step_backwards_is_judged_as_it_runs(answer: Callable[[str], Energetics]) -> None:
    forwards = answer(CASE.replace("most biomass", "most ethanol"))
    (step,) = [item for item in forwards.steps if item.reaction == "alcohol dehydrogenase"]
    assert step.flux > 0
    # Acetaldehyde and NADH to ethanol: E0' -0.197 against -0.320 V is -23.7 kJ (from memory).
    assert step.gibbs.standard == pytest.approx(-23.7, abs=1.5)


def test_concentrations_reach_overall_equation_and_steps(
    answer: Callable[[str], Energetics],
) -> None:
    text = CASE.replace("most biomass", "most ethanol")
    plain = answer(text)
    given = answer(text + "concentrations: {ethanol: 0.5 to 1 mol/L, glucose: 1 mmol/L}\n")
    assert plain.gibbs is not None
    assert given.gibbs is not None
    assert given.gibbs.low > plain.gibbs.middle
    assert given.gibbs.low < given.gibbs.middle < given.gibbs.high
    last = [item.gibbs.low for item in (plain.steps[-1], given.steps[-1])]
    assert last[1] > last[0]
    assert not any("of glucose" in item.text for item in given.assumptions)


def test_temperature_and_ph_are_used_and_not_called_unused(
    answer: Callable[[str], Energetics],
) -> None:
    text = CASE + "conditions: {temperature: 37 degC, pH: 6.5}\nconcentrations: {oxygen: 0.1 bar}\n"
    result = answer(text)
    assert result.gibbs is not None
    assert result.gibbs.kelvin == pytest.approx(310.15)
    assert not any("not used here" in item.text for item in result.assumptions)
    unused = [item.text for item in result.prediction.assumptions if "not used here" in item.text]
    assert len(unused) == 3
    assert "pH (default)" not in {item.text for item in result.assumptions}


def test_opinions_stand_beside_elements_and_network(answer: Callable[[str], Energetics]) -> None:
    result = answer(CASE.replace("most biomass", "most ethanol"))
    by_method = {item.method: item for item in result.opinions}
    elements, network = (by_method[f"{way}, best"] for way in ("elements alone", "network"))
    assert elements.value == pytest.approx(24 / 4.2)
    assert network.value is not None
    assert network.value < 24 / 4.2
    # Without oxygen in the point, ethanol is the one product that electrons can go to.
    for name in ("Gibbs energy dissipation", "electron equivalents"):
        opinion = by_method[name]
        assert opinion.value is not None
        assert 0.3 < opinion.value < 1.5
        assert opinion.source.endswith("electrons to ethanol")


def test_opinions_of_aerobic_growth_take_oxygen(answer: Callable[[str], Energetics]) -> None:
    result = answer(CASE)
    *_, dissipation, electrons = result.opinions
    # Measured yields on glucose are near 3.6 C-mol/mol; the methods say so within their error.
    assert dissipation.value == pytest.approx(3.6, rel=0.4)
    assert electrons.value == pytest.approx(3.6, rel=0.4)
    assert dissipation.source.endswith("electrons to oxygen")


@pytest.mark.parametrize(
    ("equation", "words"),
    [
        ("hydrogen + ? oxygen + ? ammonia + 0.01 carbon dioxide -> ? biomass", "holds no carbon"),
        ("carbon monoxide + ? ammonia -> ? biomass", "fixes carbon dioxide"),
        ("shikimate + ? oxygen + ? ammonia -> 1 biomass", "no Gibbs energy is known"),
        ("methionine + ? oxygen -> 1 biomass + ? ammonia + ? sulfate", "no Gibbs energy"),
        ("glucose + 1/10 ethanol + ? oxygen + ? ammonia -> 1 biomass", "second carbon source"),
        (
            "glucose + 1/10 calcium carbonate + ? oxygen + ? ammonia -> 1 biomass"
            " + ? calcium hydroxide",
            "second carbon source",
        ),
        ("glucose + ? nitrate + ? oxygen -> 1 biomass", "nitrate takes electrons"),
        ("ethanol + 1/2 carbon dioxide + ? ammonia + ? oxygen -> ? biomass", "net carbon dioxide"),
        ("glucose + ? ammonia -> 1/2 biomass + 1 lactate + ? ethanol", "one single product"),
        ("urea + ? lactate -> 1/10 biomass + ? ammonia", "no electrons to give"),
    ],
)
def test_the_methods_say_where_they_do_not_hold(
    answer: Callable[[str], Energetics], equation: str, words: str
) -> None:
    sides = [n for n in ("carbon dioxide", "water") if f" {n}" not in equation]
    result = answer(
        f"case: t\ncompounds: {{biomass: CH1.8O0.5N0.2}}\nequation: {equation}\n"
        f"either side: [{', '.join(sides)}]\n"
    )
    assert result.amounts, result.findings
    *_, dissipation, electrons = result.opinions
    for opinion in (dissipation, electrons):
        assert opinion.value is None
        assert words in opinion.reason


def test_what_is_called_biomass_and_holds_no_carbon_has_no_yield(
    answer: Callable[[str], Energetics],
) -> None:
    result = answer(
        "case: t\ncompounds: {biomass: H2O}\nequation: hydrogen + ? oxygen -> ? biomass\n"
    )
    assert result.opinions == ()
    carbon, electrons = result.closures
    assert (carbon.ratio, carbon.reason, carbon.closes) == (None, "no carbon goes in", False)
    assert electrons.ratio == 1


def test_far_from_ph_7_an_acid_with_known_constants_is_not_doubted(
    answer: Callable[[str], Energetics],
) -> None:
    text = "case: t\nequation: glucose -> 3 acetate\nconditions: {pH: 4}\n"
    result = answer(text)
    assert "YN871" not in _codes(result)
    assert result.gibbs is not None
    # Of acetic acid at pH 4 most is undissociated: worth less than a full proton for each.
    at_7 = answer(text.replace("4", "7")).gibbs
    assert at_7 is not None
    assert 0 < result.gibbs.standard - at_7.standard < 3 * 3 * 5.71


def test_biomass_with_sulfur_is_outside_the_methods(answer: Callable[[str], Energetics]) -> None:
    result = answer(
        "case: t\ncompounds: {biomass: CH1.8O0.5N0.2S0.01}\n"
        "equation: glucose + ? ammonia + ? oxygen + ? sulfate -> 1 biomass\n"
        "either side: [carbon dioxide, water]\n"
    )
    assert "besides C, H, O and N" in result.opinions[-1].reason
    assert "YN865" in _codes(result)
    assert result.heat is not None
    assert result.heat.estimated == ("biomass",)


def test_a_long_substrate_is_beyond_the_correlation_alone(
    answer: Callable[[str], Energetics],
) -> None:
    result = answer(
        "case: t\ncompounds: {biomass: CH1.8O0.5N0.2}\n"
        "equation: sucrose + ? ammonia + ? oxygen -> 6 biomass\n"
        "either side: [carbon dioxide, water]\n"
    )
    *_, dissipation, electrons = result.opinions
    assert "ends at 6 carbon atoms" in dissipation.reason
    assert electrons.value is not None


def test_a_case_that_no_electrons_pay_for_says_so(answer: Callable[[str], Energetics]) -> None:
    # Electrons of acetate lie below those of glucose: passing them there costs energy.
    result = answer(
        "case: t\ncompounds: {biomass: CH1.8O0.5N0.2}\n"
        "equation: acetate + ? ammonia -> 1/100 biomass + ? glucose\n"
        "either side: [carbon dioxide, water]\n"
    )
    *_, dissipation, electrons = result.opinions
    assert "gives no energy" in dissipation.reason
    assert "gives no energy" in electrons.reason
    assert "YN866" in _codes(result)


def test_yields_by_the_methods_are_bounded_by_electrons() -> None:
    # A dissipation of nothing: all electrons into cells, and never more.
    assert yield_by_dissipation(0, 24, 4, donor=40, acceptor=-78) == 6
    assert yield_by_electrons(24, 4, donor=400, acceptor=-78, pyruvate=35) == 6


def test_the_methods_close_their_own_energy_balance() -> None:
    donor, acceptor, cells, electrons = 39.9, -78.7, 33.84, 24.0
    found = yield_by_dissipation(236, electrons, 4.2, donor, acceptor)
    passed = electrons / found - 4.2
    assert 4.2 * (donor - cells) + passed * (donor - acceptor) == pytest.approx(236)


@pytest.mark.parametrize("formula", ["CH1.8O0.5N0.2", "C2H3.6ON0.4"])
def test_published_biomass_is_scaled_to_its_formula(formula: str) -> None:
    biomass = Compound(name="biomass", formula=read_formula(formula))
    species = species_of_biomass(biomass)
    assert species is not None
    assert species.gibbs.value == -67 * biomass.formula["C"]
    assert species.gibbs.status == "seen"
    assert species.enthalpy is not None
    assert species.enthalpy.value == -91 * biomass.formula["C"]


def test_other_biomass_is_estimated_and_marked() -> None:
    biomass = Compound(name="biomass", formula=read_formula("CH1.75O0.43N0.22"))
    species = species_of_biomass(biomass)
    assert species is not None
    assert species.gibbs.status == "estimated"
    assert species.enthalpy is not None
    assert species.enthalpy.status == "estimated"
    generic = Compound(name="biomass", formula=read_formula("CH1.8O0.5N0.2"))
    published = species_of_biomass(generic)
    assert published is not None
    # The enthalpy by the heat of combustion, 560, is that of the table, -91.
    by_heat = -393.51 + 0.9 * -285.8 + 560
    assert published.enthalpy is not None
    assert by_heat == pytest.approx(float(published.enthalpy.value), abs=1)
    assert species_of_biomass(Compound(name="biomass", formula=read_formula("H2O"))) is None


def test_a_name_of_the_library_with_another_formula_has_no_species(
    case_of: Read,
) -> None:
    case, _ = case_of("case: t\nequation: glucose -> 3 acetate\n")
    assert case is not None
    activities = Activities(case)
    acetate = case.compound("acetate")
    assert activities.species(acetate) is not None
    other = replace(acetate, formula=read_formula("C2H3O2"))
    assert activities.species(other) is None
    assert activities.outside(other, Fraction(1)) is None
    assert activities.carrier("ATP") is None
    assert activities.inside("nothing", None, Fraction(1)) is None
    assert activities.kelvin == STANDARD_KELVIN


def test_a_carrier_of_another_kind_is_not_taken_for_the_known_one(
    case_of: Read, tmp_path: Path
) -> None:
    strange = NETWORK.replace("ATP: {kind: energy}", "ATP: {kind: redox, formula: H2}")
    strange = strange.replace("NADH: {kind: redox, formula: H2}", "NADH: {kind: energy}")
    (tmp_path / "network.yaml").write_text(strange, "utf-8")
    case, findings = case_of(CASE)
    assert case is not None, findings.items
    activities = Activities(case)
    assert activities.carrier("ATP") is None
    assert activities.carrier("NADH") is None
    assert activities.carrier("quinol") is None


def test_carbon_dioxide_in_solution_is_bicarbonate(answer: Callable[[str], Energetics]) -> None:
    text = (
        "case: t\nequation: glucose -> ? ethanol\neither side: [carbon dioxide, water]\n"
        "concentrations: {carbon dioxide: 5 mmol/L}\n"
    )
    result = answer(text)
    texts = {item.text for item in result.assumptions}
    assert "stand for their compounds: carbon dioxide as HCO3-" in texts


def test_the_verb_takes_a_path_and_a_case(checkout: Path) -> None:
    path = checkout / "examples" / "energetics" / "case.yaml"
    case = yieldnet.read_case(path)
    assert yieldnet.energetics(case).amounts == yieldnet.energetics(path).amounts


def test_both_engines_say_the_same(answer: Callable[[str], Energetics]) -> None:
    case = answer(CASE).case
    first, second = (energetics_case(case, engine) for engine in ("glpk", "optlang"))
    assert first.amounts == second.amounts
    assert first.heat == second.heat
    assert first.gibbs == second.gibbs
