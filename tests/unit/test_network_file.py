"""Network files: what every section means, and what each mistake is told as."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from yieldnet.chemistry.library import biomass_entries, find_biomass
from yieldnet.foundation.findings import Severity
from yieldnet.model.network import CarrierKind, Direction
from yieldnet.reading.network_file import load_network, parse_network

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.network import Network

F = Fraction
GOOD = """
network: Small
about: for tests
parameters:
  po: {value: 1.5, low: 1, high: 2.5, unit: mol/mol, about: P/O ratio, source: from memory}
  growth_atp: 2.0
compounds:
  sugar in the cell: C6H12O6
  ferric ion: {formula: Fe, charge: 3, about: an ion}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2, about: a pair}
crossing:
  in: [glucose, oxygen, ammonia]
  out:
    - biomass
    - 1,3-propanediol
  either: [carbon dioxide, water]
reactions:
  uptake: glucose + ATP -> sugar in the cell
  path:
    equation: sugar in the cell + 2 NADH <-> 2 1,3-propanediol + 2 water + ? NADH
    group: ending
    about: a step
    source: from memory
  respiration:
    equation: NADH + 1/2 oxygen -> water + (po) ATP
strains:
  dry: [ending, respiration]
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05, about: a guess}
  per: mol
  equation: 1/6 sugar in the cell + 0.2 ammonia + (growth_atp) ATP -> biomass + ? NADH + ? water
  about: lumped
  source: from memory
maintenance: {ATP: {value: 2.5 mmol/g/h, source: from memory}}
"""


@pytest.fixture(scope="module")
def network(network_of: Callable[[str], Network]) -> Network:
    return network_of(GOOD)


def test_title_and_prose(network: Network) -> None:
    assert (network.title, network.about, network.file) == ("Small", "for tests", "n.yaml")


def test_parameters_in_long_and_short_form(network: Network) -> None:
    po, growth_atp = network.parameters
    assert (po.name, po.value, po.low, po.high) == ("po", F(3, 2), F(1), F(5, 2))
    assert (po.unit, po.about, po.source) == ("mol/mol", "P/O ratio", "from memory")
    assert (growth_atp.name, growth_atp.value) == ("growth_atp", F(2))
    assert (growth_atp.low, growth_atp.high, growth_atp.unit) == (None, None, "")


def test_compounds_own_and_of_the_library(network: Network) -> None:
    names = [item.name for item in network.compounds]
    assert names == [
        "sugar in the cell",
        "ferric ion",
        "biomass",
        "glucose",
        "oxygen",
        "ammonia",
        "1,3-propanediol",
        "carbon dioxide",
        "water",
    ]
    ion = network.compound("ferric ion")
    assert ion is not None
    assert (str(ion.formula), ion.about) == ("Fe+3", "an ion")
    glucose = network.compound("glucose")
    assert glucose is not None
    assert str(glucose.formula) == "C6H12O6"
    assert glucose.span is None


def test_carriers(network: Network) -> None:
    atp, nadh = network.carriers
    assert (atp.name, atp.kind, atp.formula.elements) == ("ATP", CarrierKind.ENERGY, ())
    assert (nadh.name, nadh.kind, str(nadh.formula)) == ("NADH", CarrierKind.REDOX, "H2")


def test_crossing(network: Network) -> None:
    assert network.crossing == (
        ("glucose", Direction.CONSUMED),
        ("oxygen", Direction.CONSUMED),
        ("ammonia", Direction.CONSUMED),
        ("biomass", Direction.PRODUCED),
        ("1,3-propanediol", Direction.PRODUCED),
        ("carbon dioxide", Direction.EITHER),
        ("water", Direction.EITHER),
    )


def test_reactions_and_strains(network: Network) -> None:
    uptake, path, respiration = network.reactions
    assert str(uptake.equation) == "glucose + ATP -> sugar in the cell"
    assert (path.group, path.about, path.source) == ("ending", "a step", "from memory")
    assert path.equation.reversible
    assert str(respiration.equation).endswith("water + (po) ATP")
    assert path.span is not None
    assert path.span.line == 1 + GOOD[: GOOD.index("  path:")].count("\n")
    (dry,) = network.strains
    assert (dry.name, dry.off) == ("dry", ("ending", "respiration"))


def test_growth_and_maintenance(network: Network) -> None:
    growth, maintenance = network.growth, network.maintenance
    assert growth is not None
    assert maintenance is not None
    assert (str(growth.biomass.formula), growth.biomass.ash) == ("CH1.8O0.5N0.2", F(1, 20))
    assert (growth.per_gram, growth.about, growth.source) == (False, "lumped", "from memory")
    assert maintenance.carrier == "ATP"
    assert maintenance.rate_mol_per_gram_hour == F(5, 2000)
    assert (maintenance.written.text, maintenance.unit) == ("2.5", "mmol/g/h")
    assert maintenance.source == "from memory"


def test_growth_per_gram(network_of: Callable[[str], Network]) -> None:
    growth = network_of(GOOD.replace("per: mol", "per: g")).growth
    assert growth is not None
    assert growth.per_gram


def test_a_library_biomass_by_name(network_of: Callable[[str], Network]) -> None:
    with_ash = next(item for item in biomass_entries() if item.ash)
    for entry in (with_ash, find_biomass("generic biomass")):
        assert entry is not None
        text = GOOD.replace("{formula: CH1.8O0.5N0.2, ash: 0.05, about: a guess}", entry.name)
        growth = network_of(text).growth
        assert growth is not None
        assert growth.biomass.formula == entry.formula
        assert growth.biomass.ash == (entry.ash or 0)
        assert entry.source in growth.biomass.about


def test_a_network_needs_neither_growth_nor_carriers(network_of: Callable[[str], Network]) -> None:
    network = network_of(
        "network: Least\ncrossing: {in: [glucose], out: [lactate]}\n"
        "reactions: {fermentation: glucose -> 2 lactate}\n"
    )
    assert network.growth is None
    assert network.maintenance is None
    assert [*network.carriers, *network.parameters, *network.strains] == []


def test_a_loaded_file_is_the_parsed_text_and_names_its_path(
    tmp_path: Path, network: Network
) -> None:
    path = tmp_path / "n.yaml"
    path.write_text(GOOD, "utf-8")
    loaded, findings = load_network(str(path))
    assert loaded == network
    assert list(findings) == []
    assert loaded is not None
    assert loaded.file == str(path)
    assert loaded.span is not None
    assert loaded.span.file == str(path)


def test_a_file_that_cannot_be_read_is_no_network(tmp_path: Path) -> None:
    network, findings = load_network(str(tmp_path / "n.yaml"))
    assert network is None
    assert [item.code for item in findings] == ["YN101"]


def _told(text: str) -> tuple[Network | None, Findings]:
    network, findings = parse_network(text, "n.yaml")
    for item in findings:
        assert item.where is not None
        assert 1 <= item.where.line <= text.count("\n") + 1
    return network, findings


@pytest.mark.parametrize(
    ("old", "new", "code", "message"),
    [
        ("network: Small", "name: Small", "YN110", "'name' is not a key of the network file"),
        ("network: Small", "about2: x", "YN111", "the network file has no 'network'"),
        ("network: Small", "network: [Small]", "YN112", "'network' of the network file has"),
        # parameters
        ("  po: {value: 1.5", "  p-o: {value: 1.5", "YN206", "parameter 'p-o' cannot be used"),
        ("growth_atp: 2.0", "growth_atp: '2,0'", "YN201", "parameter 'growth_atp': '2,0' is"),
        ("value: 1.5, low", "low", "YN111", "parameter 'po' has no 'value'"),
        ("low: 1,", "low: 3,", "YN511", "parameter 'po' has its low end above its high end"),
        ("high: 2.5,", "higher: 2.5,", "YN110", "'higher' is not a key of parameter 'po'"),
        ("growth_atp: 2.0", "growth_atp: [2]", "YN112", "parameter 'growth_atp' has the wrong"),
        # compounds
        (": C6H12O6\n", ": C6H12O6*\n", "YN204", "compound 'sugar in the cell': "),
        (": C6H12O6\n", ":\n", "YN112", "compound 'sugar in the cell' has the wrong shape"),
        ("formula: Fe, charge: 3", "charge: 3", "YN111", "compound 'ferric ion' has no 'formula'"),
        ("charge: 3", "charge: 1/2", "YN201", "compound 'ferric ion': charge 1/2 is not whole"),
        ("sugar in the cell: C6", "ATP: C6", "YN305", "'ATP' is a carrier and a compound"),
        ("  ferric ion: {", "  acetate: C2H3O2-\n  ion: {", "YN304", "'acetate' has another form"),
        # carriers
        ("kind: energy}", "kind: power}", "YN112", "carrier 'ATP' has an unknown kind"),
        ("kind: energy}", "formula: H2}", "YN111", "carrier 'ATP' has no 'kind'"),
        ("kind: energy}", "kind: energy, formula: H2}", "YN415", "carrier 'ATP' is an energy"),
        ("kind: redox, formula: H2", "kind: redox", "YN111", "carrier 'NADH'"),
        ("formula: H2, about", "formula: 2H, about", "YN204", "carrier 'NADH': "),
        ("ATP: {kind: energy}", "ATP: energy", "YN112", "carrier 'ATP' has the wrong shape"),
        # crossing
        ("in: [glucose", "inn: [glucose", "YN110", "'inn' is not a key of 'crossing'"),
        ("in: [glucose", "in: [ATP, glucose", "YN305", "the carrier 'ATP' cannot cross"),
        ("in: [glucose", "in: [water, glucose", "YN305", "'water' crosses twice"),
        ("in: [glucose", "in: [glucosee, glucose", "YN301", "compound 'glucosee' is not known"),
        ("in: [glucose", "in: [1,3-propanediol, glucose", "YN114", "a comma splits the name"),
        ("    - biomass\n", "", "YN305", "growth makes 'biomass', which does not cross"),
        # reactions
        ("  uptake: ", "  growth: ", "YN305", "'growth' is the name of the growth equation"),
        ("group: ending", "group: respiration", "YN305", "the name of a reaction and of a group"),
        ("group: ending", "grup: ending", "YN110", "'grup' is not a key of reaction 'path'"),
        ("(po) ATP", "(p_o) ATP", "YN302", "reaction 'respiration': parameter 'p_o' is not known"),
        ("glucose + ATP ->", "glucose + ATP", "YN208", "reaction 'uptake': the equation has no"),
        ("uptake: glucose", "uptake: [glucose]\n  x: glucose", "YN112", "the equation of reaction"),
        ("glucose + ATP", "dextrose + ATP", "YN303", "'glucose' is written under two names"),
        ("respiration:\n    equation: ", "respiration:\n    about: ", "YN111", "has no 'equation'"),
        # strains
        ("dry: [ending", "dry: [endin", "YN302", "strain 'dry' switches off 'endin'"),
        ("dry: [ending, respiration]", "dry: ending", "YN112", "strain 'dry' has the wrong shape"),
        # growth
        ("ash: 0.05", "ash: 5", "YN210", "ash 5 is not a fraction of the dry weight"),
        ("ash: 0.05", "ash: -0.1", "YN210", "ash -0.1 is not a fraction"),
        ("O0.5N0.2, ash", "O0.5N0.2P0.01, ash", "YN413", "holds phosphorus"),
        ("formula: CH1.8O0.5N0.2,", "", "YN111", "the biomass has no 'formula'"),
        (
            "biomass: {formula: CH1.8O0.5N0.2, ash: 0.05, about: a guess}",
            "biomass: yeats",
            "YN301",
            "biomass 'yeats' is not in the library",
        ),
        (
            "biomass: {formula: CH1.8O0.5N0.2, ash: 0.05, about: a guess}",
            "biomass: [x]",
            "YN112",
            "the biomass has the wrong shape",
        ),
        (
            "  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05, about: a guess}\n",
            "",
            "YN111",
            "'growth' has no 'biomass'",
        ),
        ("per: mol", "per: kg", "YN112", "'per' of 'growth' is not known"),
        ("-> biomass +", "-> 2 biomass +", "YN414", "must make 'biomass' once"),
        ("-> biomass +", "->", "YN414", "must make 'biomass' once"),
        ("-> biomass +", "-> biomass + biomass +", "YN414", "must make 'biomass' once"),
        ("  equation: 1/6", "  equations: 1/6", "YN111", "'growth' has no 'equation'"),
        ("(growth_atp) ATP ->", "(growthatp) ATP ->", "YN302", "growth: parameter 'growthatp'"),
        # maintenance
        ("maintenance: {ATP:", "maintenance: {ATPP:", "YN302", "maintenance is told in 'ATPP'"),
        ("maintenance: {ATP:", "maintenance: {NADH:", "YN302", "which is no energy carrier"),
        ("{value: 2.5 mmol/g/h, source: from memory}", "2.5", "YN203", "the unit is missing"),
        ("{value: 2.5 mmol/g/h, source: from memory}", "2.5 g/g", "YN203", "is not a specific"),
        ("{value: 2.5 mmol/g/h, source: from memory}", "2.5 g/g/h", "YN203", "has no formula"),
        ("{value: 2.5 mmol/g/h, source: from memory}", "-1 mmol/g/h", "YN210", "is negative"),
        ("{value: 2.5 mmol/g/h, source: from memory}", "[2]", "YN112", "'maintenance' has the"),
        ("{value: 2.5 mmol/g/h, source: from memory}", "lots", "YN201", "'lots' is not a number"),
        ("value: 2.5 mmol/g/h, ", "", "YN111", "'maintenance' has no 'value'"),
        ("maintenance: {ATP: {", "maintenance: {ADP: 1 mmol/g/h, ATP: {", "YN112", "2 carriers"),
        (
            "maintenance: {ATP: {value: 2.5 mmol/g/h, source: from memory}}",
            "maintenance: 2.5",
            "YN112",
            "'maintenance' has the wrong shape",
        ),
    ],
)
def test_a_mistake_is_told_and_refuses(old: str, new: str, code: str, message: str) -> None:
    assert GOOD.count(old) == 1, "the mistake must be made in one place"
    network, findings = _told(GOOD.replace(old, new))
    assert network is None
    assert any(item.code == code and message in item.message for item in findings), findings.items
    assert all(item.severity is Severity.ERROR for item in findings)
    assert all(item.hint for item in findings if item.code not in {"YN112", "YN201", "YN204"})


@pytest.mark.parametrize(
    ("text", "code", "message"),
    [
        ("- x\n", "YN112", "the file has the wrong shape"),
        ("a: [\n", "YN104", "the file is not YAML"),
        ("case: x\n", "YN113", "this is a case file, and a network is wanted here"),
        ("equation: x\n", "YN113", "this is a case file, and a network is wanted here"),
        ("network: x\nreactions: {r: glucose -> 2 lactate}\n", "YN111", "has no 'crossing'"),
        ("network: x\ncrossing: {in: [glucose]}\n", "YN111", "has no 'reactions'"),
        ("network: x\ncrossing: {in: [glucose]}\nreactions: {}\n", "YN111", "is empty"),
        ("network: x\ncrossing: {in: [glucose]}\nreactions: []\n", "YN112", "'reactions' has"),
        ("network: x\ncrossing: [glucose]\nreactions: {}\n", "YN112", "'crossing' has the wrong"),
    ],
)
def test_a_text_that_is_no_network_is_told(text: str, code: str, message: str) -> None:
    network, findings = _told(text)
    assert network is None
    assert any(item.code == code and message in item.message for item in findings), findings.items


def test_all_mistakes_are_told_at_once_with_their_lines() -> None:
    text = (
        GOOD.replace("ash: 0.05", "ash: 5")
        .replace("(po) ATP", "(p_o) ATP")
        .replace("dry: [ending", "dry: [endin")
        .replace("growth_atp: 2.0", "growth_atp: '2,0'")
    )
    _, findings = _told(text)
    lines = {item.code: item.where.line for item in findings if item.where}

    def line(words: str) -> int:
        return text[: text.index(words)].count("\n") + 1

    assert lines["YN201"] == line("'2,0'")
    assert lines["YN210"] == line("ash: 5")
    # The parameter that could not be read is told as unknown where it is used, too.
    assert {item.code for item in findings} == {"YN201", "YN210", "YN302"}
