"""Case files: what every section means, and what each mistake is told as."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.foundation.findings import Severity
from yieldnet.model.case import AimDirection, EnergySurplus
from yieldnet.model.network import Direction
from yieldnet.reading.case_file import load_case

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

F = Fraction
NETWORK = """
network: Small
parameters: {po: 1.5, gain: 2}
parameter sets:
  little pumping: {source: from memory, values: {po: 0.5, gain: 1}}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, oxygen, ammonia]
  out: [biomass, ethanol, lactate]
  either: [carbon dioxide, water]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  ethanol path: pyruvate + NADH -> ethanol + carbon dioxide
  respiration:
    equation: NADH + 1/2 oxygen -> water + (po) ATP
    group: breathing
strains:
  without air: [breathing]
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  equation: 0.2 glucose + ? ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH
maintenance: {ATP: 2 mmol/g/h}
"""
GOOD = """
case: Small
about: for tests
network: network.yaml
strain: without air
equation: glucose + ? ammonia + 1/2 oxygen -> ? biomass + ? ethanol + 0.25 lactate
either side: [carbon dioxide, water]
conditions:
  growth rate: 0.1 ± 0.01 1/h
  substrate uptake: 4 mmol/g/h
  temperature: 310.15 K
measured:
  biomass: 0.1 ± 0.01 g/g
demands:
  ethanol: 0.1 to 0.5 C-mol/C-mol
aim: most ethanol
energy surplus: none
knock-outs: [respiration]
parameters: {po: 5/4}
"""
ALONE = """
case: Alone
equation: glucose + ? oxygen -> ? ethanol + ? sweat
either side: [carbon dioxide, water]
compounds:
  sweat: {formula: CH1.8O0.5, ash: 0.1, about: invented}
measured: {ethanol: 1.0}
"""


@pytest.fixture
def beside(tmp_path: Path) -> None:
    (tmp_path / "network.yaml").write_text(NETWORK, "utf-8")


@pytest.fixture
def case(beside: None, case_of: CaseOf) -> Case:
    case, findings = case_of(GOOD)
    assert case is not None, findings.items
    assert list(findings) == []
    return case


@pytest.fixture
def alone(case_of: CaseOf) -> Case:
    case, findings = case_of(ALONE)
    assert case is not None, findings.items
    return case


def test_title_network_and_equation(case: Case, tmp_path: Path) -> None:
    assert case.title == "Small"
    assert case.file == str(tmp_path / "case.yaml")
    assert case.network is not None
    assert case.network.title == "Small"
    assert case.basis.name == "glucose"
    assert repr(case) == (
        "Case('Small': glucose + ? ammonia + 1/2 oxygen -> ? biomass + ? ethanol + 0.25 lactate)"
    )


def test_coefficients_stand_on_their_sides(case: Case) -> None:
    assert [(item.name, item.side) for item in case.coefficients] == [
        ("ammonia", Direction.CONSUMED),
        ("oxygen", Direction.CONSUMED),
        ("biomass", Direction.PRODUCED),
        ("ethanol", Direction.PRODUCED),
        ("lactate", Direction.PRODUCED),
        ("carbon dioxide", Direction.EITHER),
        ("water", Direction.EITHER),
    ]
    assert [item.name for item in case.compounds] == [
        "glucose",
        *(item.name for item in case.coefficients),
    ]


def test_written_numbers_are_known_and_only_decimals_stay_unknown(case: Case) -> None:
    written = {item.name: item.written for item in case.coefficients if item.written}
    assert {name: item.value for name, item in written.items()} == {
        "oxygen": F(1, 2),
        "lactate": F(1, 4),
    }
    # Seven coefficients, of which the fraction 1/2 alone is exact.
    assert case.unknowns() == 6


def test_conditions_in_their_own_units(case: Case) -> None:
    rate, uptake, temperature = case.growth_rate, case.substrate_uptake, case.temperature
    assert rate is not None
    assert uptake is not None
    assert temperature is not None
    assert (rate.value, rate.sd, rate.text) == (F(1, 10), F(1, 100), "0.1 ± 0.01 1/h")
    assert (uptake.value, uptake.sd) == (F(4, 1000), None)
    assert (temperature.value, temperature.sd) == (F(37), None)


def test_a_measured_value_in_grams_counts_the_ash(case: Case) -> None:
    (measured,) = case.measured
    sugar = case.basis.weight.molar_mass
    cell = case.compound("biomass").weight.molar_mass
    assert sugar is not None
    assert cell is not None
    assert measured.compound == "biomass"
    assert measured.label == "measured biomass"
    assert measured.text == "0.1 ± 0.01 g/g"
    assert measured.value == F(1, 10) * sugar / cell
    assert measured.sd == measured.value / 10
    # 180.156 g glucose and 24.6263/0.95 g biomass: 0.1 g/g is 0.695 mol/mol.
    assert float(measured.value) == pytest.approx(0.1 * 180.156 / (24.6263 / 0.95), rel=1e-9)


def test_a_demand_in_carbon_mols(case: Case) -> None:
    (demand,) = case.demands
    # Ethanol has 2 carbons, glucose 6: x C-mol/C-mol is 3x mol/mol.
    assert (demand.compound, demand.low, demand.high) == ("ethanol", F(3, 10), F(3, 2))


def test_aim_surplus_switches_and_parameters(case: Case) -> None:
    assert case.aim is not None
    assert (case.aim.direction, case.aim.compound) == (AimDirection.MOST, "ethanol")
    assert str(case.aim) == "most ethanol"
    assert not case.aim.is_energy
    assert case.energy_surplus is EnergySurplus.NONE
    assert case.energy_surplus_given
    assert case.strain is not None
    assert case.strain.name == "without air"
    assert [item.name for item in case.knock_outs] == ["respiration"]
    assert case.parameters == (("po", F(5, 4)),)


def test_an_energy_carrier_may_be_the_aim(beside: None, case_of: CaseOf) -> None:
    case, findings = case_of(
        GOOD.replace("aim: most ethanol", "aim: most ATP").replace("energy surplus: none\n", "")
    )
    assert case is not None, findings.items
    assert case.aim is not None
    assert case.aim.is_energy


def test_what_is_left_out_has_its_default(beside: None, case_of: CaseOf) -> None:
    case, _ = case_of("case: x\nnetwork: network.yaml\nequation: glucose -> ? ethanol\n")
    assert case is not None
    assert case.energy_surplus is EnergySurplus.LOST
    assert not case.energy_surplus_given
    assert (case.aim, case.strain, case.growth_rate, case.temperature) == (None,) * 4
    assert [*case.measured, *case.demands, *case.knock_outs, *case.parameters] == []


def test_a_case_of_elements_alone_may_define_compounds(alone: Case) -> None:
    assert alone.network is None
    sweat = alone.compound("sweat")
    assert (str(sweat.formula), sweat.ash) == ("CH1.8O0.5", F(1, 10))
    assert alone.compound("oxygen").formula["O"] == 2
    assert alone.measured[0].sd is None


def test_a_shipped_network_by_name(case_of: CaseOf) -> None:
    case, findings = case_of(
        "case: x\nnetwork: lysine-coryneform\n"
        "equation: glucose + ? ammonia + ? oxygen -> ? L-lysine\n"
        "either side: [carbon dioxide, water]\n"
    )
    assert case is not None, findings.items
    assert case.network is not None
    assert case.network.title == "Coryneform lysine former on glucose"


def test_another_loader_is_chosen_by_the_ending_of_the_name(
    beside: None, case: Case, tmp_path: Path
) -> None:
    asked: list[str] = []

    def loader(path: str) -> tuple[object, Findings]:
        asked.append(path)
        from yieldnet.reading.network_file import load_network

        return load_network(path.removesuffix(".other"))

    (tmp_path / "network.yaml.other").touch()
    path = tmp_path / "case.yaml"
    path.write_text(GOOD.replace("network.yaml", "network.yaml.other"), "utf-8")
    found, findings = load_case(str(path), {".other": loader})  # type: ignore[dict-item]
    assert found == case
    assert list(findings) == []
    assert asked == [str(tmp_path / "network.yaml.other")]


def test_a_parameter_set_lies_under_the_parameters_of_the_case(case_of: CaseOf, case: Case) -> None:
    assert case.overrides() == {"po": F(5, 4)}
    text = GOOD.replace("strain:", "parameter set: little pumping\nstrain:")
    chosen, findings = case_of(text)
    assert chosen is not None, findings.items
    assert chosen.parameter_set is not None
    assert chosen.parameter_set.name == "little pumping"
    assert chosen.parameters == (("po", F(5, 4)),)
    assert chosen.overrides() == {"po": F(5, 4), "gain": 1}
    places = chosen.override_spans()
    lines = text.split("\n")
    assert lines[places["gain"].line - 1] == "parameter set: little pumping"
    assert lines[places["po"].line - 1] == "parameters: {po: 5/4}"
    # A study that changes a parameter changes it above the set, too.
    assert chosen.with_parameter("gain", F(3)).overrides() == {"po": F(5, 4), "gain": 3}


def test_look_ups_and_changed_copies(case: Case) -> None:
    assert case.coefficient("ethanol") is not None
    assert case.coefficient("glucose") is None
    assert case.compound("glucose") is case.basis
    with pytest.raises(KeyError, match="ethane"):
        case.compound("ethane")
    assert case.with_parameter("po", F(2)).parameters == (("po", F(2)),)
    with pytest.raises(KeyError, match="other"):
        case.with_parameter("other", F(2))
    with pytest.raises(KeyError, match="glycolisis"):
        case.with_knock_outs("glycolisis")
    more = case.with_knock_outs("ethanol path", "glycolysis")
    assert [item.name for item in more.knock_outs] == ["respiration", "ethanol path", "glycolysis"]
    assert [item.name for item in case.knock_outs] == ["respiration"]


@pytest.mark.parametrize(
    ("old", "new", "code", "message"),
    [
        ("case: Small", "cases: Small", "YN110", "'cases' is not a key of the case file"),
        ("case: Small", "case: [x]", "YN112", "'case' of the case file has the wrong shape"),
        # network
        (
            "network: network.yaml",
            "network: netwerk.yaml",
            "YN513",
            "'netwerk.yaml' does not exist",
        ),
        ("network: network.yaml", "network: lysine", "YN513", "is neither a file nor a shipped"),
        ("network: network.yaml", "network: [x]", "YN112", "'network' has the wrong shape"),
        # strain and knock-outs
        ("strain: without air", "strain: with air", "YN302", "strain 'with air' is not in the"),
        ("strain: without air", "strain: [x]", "YN112", "'strain' has the wrong shape"),
        # parameter set
        (
            "strain: without air",
            "parameter set: littel pumping",
            "YN302",
            "parameter set 'littel pumping' is not in the network",
        ),
        ("strain: without air", "parameter set: x", "YN302", "parameter set 'x' is not in"),
        ("strain: without air", "parameter set: [x]", "YN112", "'parameter set' has the wrong"),
        ("[respiration]", "[respirations]", "YN302", "knock-out 'respirations' is neither"),
        ("[respiration]", "respiration", "YN112", "'knock-outs' has the wrong shape"),
        (
            "[respiration]",
            "[glycolysis, ethanol path, lactate dehydrogenase]",
            "YN508",
            "no reaction is left",
        ),
        # equation
        ("equation: glucose", "equation: 2 glucose", "YN501", "the basis 'glucose' has the coeff"),
        ("equation: glucose", "equation: (po) glucose", "YN501", "has the coefficient (po)"),
        ("equation: glucose", "equation: [glucose]\nx: y", "YN112", "the equation has the wrong"),
        ("+ 0.25 lactate", "+ glucose", "YN501", "the basis 'glucose' stands twice"),
        ("+ 0.25 lactate", "+ ? ethanol", "YN305", "'ethanol' stands twice in the equation"),
        ("+ 0.25 lactate", "+ (po) lactate", "YN208", "(po) of 'lactate' is an expression"),
        ("+ 0.25 lactate", "+ ? lactatee", "YN301", "compound 'lactatee' is not known"),
        ("+ 0.25 lactate", "+ ? acetate", "YN505", "'acetate' is in the library, but not in this"),
        ("+ 0.25 lactate", "+ ? pyruvate", "YN505", "'pyruvate' does not cross"),
        ("-> ? biomass", "+ ? lactate -> ? biomass", "YN305", "'lactate' stands twice"),
        ("1/2 oxygen -> ? biomass", "? biomass -> 1/2 oxygen", "YN505", "'oxygen' is given off"),
        # either side
        ("[carbon dioxide, water]", "[ethanol, water]", "YN305", "and under 'either side'"),
        ("[carbon dioxide, water]", "[glucose, water]", "YN305", "and under 'either side'"),
        ("[carbon dioxide, water]", "[wat, water]", "YN301", "compound 'wat' is not known"),
        ("[carbon dioxide, water]", "water", "YN112", "'either side' has the wrong shape"),
        # compounds
        ("aim: most", "compounds: {x: C}\naim: most", "YN110", "'compounds' is for cases without"),
        # conditions
        ("growth rate: 0.1", "growth rat: 0.1", "YN110", "'growth rat' is not a key"),
        ("0.1 ± 0.01 1/h", "0.1", "YN203", "growth rate: the unit is missing"),
        ("0.1 ± 0.01 1/h", "0.1 g/g", "YN203", "growth rate: 'g/g' is not a growth rate"),
        ("0.1 ± 0.01 1/h", "0 1/h", "YN210", "growth rate 0 is not positive"),
        ("0.1 ± 0.01 1/h", "[0.1]", "YN112", "condition 'growth rate' has the wrong shape"),
        ("0.1 ± 0.01 1/h", "fast", "YN201", "growth rate: 'fast' is not a number"),
        ("4 mmol/g/h", "4", "YN203", "substrate uptake: the unit is missing"),
        ("4 mmol/g/h", "4 1/h", "YN203", "substrate uptake: '1/h' is not a specific rate"),
        ("4 mmol/g/h", "-4 mmol/g/h", "YN210", "substrate uptake -4 is not positive"),
        ("310.15 K", "310", "YN203", "temperature: the unit is missing"),
        ("310.15 K", "310 h", "YN203", "temperature: 'h' is not a temperature"),
        # measured
        ("biomass: 0.1 ±", "glucose: 0.1 ±", "YN503", "measured 'glucose' speaks of the basis"),
        ("biomass: 0.1 ±", "pyruvate: 0.1 ±", "YN503", "'pyruvate' is not in the overall eq"),
        ("biomass: 0.1 ±", "nothing: 0.1 ±", "YN301", "compound 'nothing' is not known"),
        (
            "biomass: 0.1 ±",
            "oxygen: 0.1 ±",
            "YN504",
            "'oxygen' is measured, and the equation fixes",
        ),
        ("biomass: 0.1 ± 0.01 g/g", "biomass: much", "YN201", "'much' is not a number"),
        ("biomass: 0.1 ± 0.01 g/g", "biomass: [1]", "YN112", "measured 'biomass' has the wrong"),
        ("biomass: 0.1 ± 0.01 g/g", "biomass: 1 1/h", "YN203", "'1/h' is not a yield"),
        ("biomass: 0.1 ± 0.01 g/g", "water: 1 C-mol/mol", "YN506", "'water' has no carbon"),
        ("measured:\n  biomass: 0.1 ± 0.01 g/g", "measured: much", "YN112", "'measured' has"),
        # demands
        ("ethanol: 0.1 to", "glucose: 0.1 to", "YN503", "demand 'glucose' speaks of the basis"),
        ("ethanol: 0.1 to", "pyruvate: 0.1 to", "YN503", "demand 'pyruvate' is not in the"),
        ("0.1 to 0.5 C-mol/C-mol", "0.5 to 0.1", "YN511", "the low end 0.5 is above the high"),
        ("0.1 to 0.5 C-mol/C-mol", "0.1", "YN201", "'0.1' is no bound"),
        ("0.1 to 0.5 C-mol/C-mol", "at most 1 K", "YN203", "'K' is not a yield"),
        ("0.1 to 0.5 C-mol/C-mol", "[1]", "YN112", "demand 'ethanol' has the wrong shape"),
        ("demands:\n  ethanol: 0.1 to 0.5 C-mol/C-mol", "demands: 5", "YN112", "'demands' has"),
        # aim and surplus
        ("aim: most ethanol", "aim: ethanol", "YN112", "the aim 'ethanol' is not understood"),
        ("aim: most ethanol", "aim: most", "YN112", "the aim 'most' is not understood"),
        ("aim: most ethanol", "aim: [most]", "YN112", "'aim' has the wrong shape"),
        ("aim: most ethanol", "aim: most glucose", "YN502", "the aim is the basis 'glucose'"),
        ("aim: most ethanol", "aim: most pyruvate", "YN503", "the aim 'pyruvate' is not in the"),
        ("aim: most ethanol", "aim: most ethanoll", "YN301", "compound 'ethanoll' is not known"),
        ("aim: most ethanol", "aim: least ATP", "YN503", "the least ATP is no question"),
        (
            "aim: most ethanol",
            "aim: most ATP",
            "YN515",
            "'energy surplus: none' says there is none",
        ),
        ("energy surplus: none", "energy surplus: lots", "YN112", "'energy surplus' 'lots' is not"),
        # parameters
        ("{po: 5/4}", "{p_o: 5/4}", "YN302", "parameter 'p_o' is not in the network"),
        ("{po: 5/4}", "{po: '1,5'}", "YN201", "parameter 'po': '1,5' is written with"),
        ("{po: 5/4}", "5/4", "YN112", "'parameters' has the wrong shape"),
    ],
)
def test_a_mistake_is_told_and_refuses(
    beside: None, case_of: CaseOf, old: str, new: str, code: str, message: str
) -> None:
    assert GOOD.count(old) == 1, "the mistake must be made in one place"
    text = GOOD.replace(old, new)
    case, findings = case_of(text)
    assert case is None
    assert any(item.code == code and message in item.message for item in findings), findings.items
    assert all(item.severity is Severity.ERROR for item in findings)
    for item in findings:
        assert item.where is not None
        assert item.where.line <= text.count("\n") + 1
        assert item.hint or item.code in {"YN112", "YN201"}


@pytest.mark.parametrize(
    ("old", "new", "code", "message"),
    [
        (
            "{formula: CH1.8O0.5, ash: 0.1",
            "{ash: 0.1",
            "YN111",
            "compound 'sweat' has no 'formula'",
        ),
        ("{formula: CH1.8O0.5", "{formula: CH1.8O.", "YN204", "compound 'sweat': "),
        ("{formula: CH1.8O0.5", "{formula: [C]", "YN112", "compound 'sweat' has the wrong shape"),
        ("ash: 0.1", "ash: 10", "YN210", "ash 10 is not a fraction of the dry weight"),
        ("  sweat:", "  ethanol: C2H5OHO\n  sweat:", "YN304", "'ethanol' has another formula"),
        ("measured:", "strain: x\nmeasured:", "YN111", "'strain' needs a 'network'"),
        ("measured:", "parameter set: x\nmeasured:", "YN111", "'parameter set' needs a 'network'"),
        ("measured:", "knock-outs: [x]\nmeasured:", "YN111", "'knock-outs' needs a 'network'"),
        ("measured:", "parameters: {x: 1}\nmeasured:", "YN111", "'parameters' needs a 'network'"),
        (
            "equation: glucose + ? oxygen -> ? ethanol + ? sweat",
            "about: x",
            "YN111",
            "has no 'equation'",
        ),
    ],
)
def test_a_mistake_in_a_case_of_elements_alone(
    case_of: CaseOf, old: str, new: str, code: str, message: str
) -> None:
    assert ALONE.count(old) == 1, "the mistake must be made in one place"
    case, findings = case_of(ALONE.replace(old, new))
    assert case is None
    assert any(item.code == code and message in item.message for item in findings), findings.items


@pytest.mark.parametrize(
    ("text", "code", "message"),
    [
        ("", "YN102", "the file is empty"),
        ("a: [\n", "YN104", "the file is not YAML"),
        ("- x\n", "YN112", "the file has the wrong shape"),
        ("reactions: {}\n", "YN113", "this is a network file, and a case is wanted here"),
        ("crossing: {}\n", "YN113", "this is a network file, and a case is wanted here"),
    ],
)
def test_a_text_that_is_no_case_is_told(
    case_of: CaseOf, text: str, code: str, message: str
) -> None:
    case, findings = case_of(text)
    assert case is None
    assert any(item.code == code and message in item.message for item in findings), findings.items


@pytest.mark.parametrize(
    ("old", "new", "code", "message"),
    [
        (
            "demands:\n  ethanol: 0.1 to 0.5",
            "demands:\n  ethanol: at most 1\n  Ethanol: 0.1 to 0.5",
            "YN504",
            "'ethanol' is demanded twice",
        ),
        (
            "measured:\n  biomass: 0.1",
            "measured:\n  lactate: 0.2\n  Lactate: 0.1",
            "YN504",
            "'lactate' is measured twice",
        ),
    ],
)
def test_one_coefficient_stated_twice_under_two_spellings(
    beside: None, case_of: CaseOf, old: str, new: str, code: str, message: str
) -> None:
    case, findings = case_of(GOOD.replace(old, new))
    assert case is None
    assert {"YN303", code} <= {item.code for item in findings}
    assert any(message in item.message for item in findings)


def test_a_knock_out_written_twice_is_doubtful_and_counts_once(
    beside: None, case_of: CaseOf
) -> None:
    case, findings = case_of(GOOD.replace("[respiration]", "[respiration, respiration]"))
    assert case is not None
    assert len(case.knock_outs) == 1
    (finding,) = findings
    assert (finding.code, finding.severity) == ("YN305", Severity.WARNING)
    # What was doubtful on reading goes with the case, so that no answer loses it.
    assert case.findings == (finding,)


def test_a_growth_rate_needs_growth_in_the_network(case_of: CaseOf, tmp_path: Path) -> None:
    cut = NETWORK[: NETWORK.index("growth:")].replace("biomass, ", "")
    (tmp_path / "network.yaml").write_text(cut, "utf-8")
    case, findings = case_of(
        "case: x\nnetwork: network.yaml\nequation: glucose -> ? ethanol\n"
        "conditions: {growth rate: 0.1 1/h}\n"
    )
    assert case is None
    assert [item.code for item in findings] == ["YN510"]


def test_a_bad_network_is_told_in_its_own_file_and_its_names_are_not_doubted(
    case_of: CaseOf, tmp_path: Path
) -> None:
    path = tmp_path / "network.yaml"
    path.write_text(NETWORK.replace("(po) ATP", "(p_o) ATP"), "utf-8")
    case, findings = case_of(GOOD)
    assert case is None
    assert [(item.code, item.where.file if item.where else "") for item in findings] == [
        ("YN302", str(path))
    ]
