"""Views of the compound library and of the shipped networks."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from yieldnet.chemistry.library import (
    biomass_entries,
    compound_entries,
    find_biomass,
    find_compound,
)
from yieldnet.report.library_view import (
    compound_form,
    compound_lines,
    compounds_table,
    find_entries,
    network_form,
    network_lines,
    networks_table,
    reproduced_form,
    reproduced_table,
)
from yieldnet.verbs import read_reproducing_network, reproduce

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.chemistry.library import BiomassEntry, CompoundEntry
    from yieldnet.model.network import Network

NETWORK = """
network: Small
about: |
  First paragraph
  of it.

  Second paragraph.
parameters: {po: {value: 1.5, low: 1, high: 2, unit: mol/mol}, bare: 2}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing: {in: [glucose, oxygen, ammonia], out: [biomass, lactate], either: [water, carbon dioxide]}
reactions:
  fermentation: glucose -> 2 lactate + (bare) ATP
  respiration: {equation: NADH + 1/2 oxygen -> water + (po) ATP, group: breathing}
strains: {without air: [breathing]}
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  equation: 0.2 glucose + 0.2 ammonia + ATP -> biomass + ? water + ? NADH + ? carbon dioxide
"""


def _compound(word: str) -> CompoundEntry:
    entry = find_compound(word)
    assert entry is not None
    return entry


def _biomass(word: str) -> BiomassEntry:
    entry = find_biomass(word)
    assert entry is not None
    return entry


def test_without_a_word_everything_is_found() -> None:
    entries, names = find_entries(None)
    assert entries == [*compound_entries(), *biomass_entries()]
    assert set(names) >= {"glucose", "dextrose", "generic biomass"}


@pytest.mark.parametrize(
    ("word", "names"),
    [
        ("succinate", ["succinate"]),
        ("Succinic Acid", ["succinate"]),
        ("generic biomass", ["generic biomass"]),
        ("no such thing", []),
    ],
)
def test_a_word_names_one_entry_or_none(word: str, names: list[str]) -> None:
    assert [entry.name for entry in find_entries(word)[0]] == names


def test_a_part_of_a_name_finds_all_that_hold_it() -> None:
    found = [entry.name for entry in find_entries("SUCCIN")[0]]
    assert {"succinate", "succinyl-CoA", "succinate semialdehyde"} <= set(found)
    # Synonyms count too, and so do biomasses.
    assert "glucose" in [entry.name for entry in find_entries("dextro")[0]]
    assert "Escherichia coli" in [entry.name for entry in find_entries("escherich")[0]]


def test_a_compound_is_told_with_formula_mass_electrons_and_source() -> None:
    lines = [text for text, _ in compound_lines(_compound("succinate"))]
    text = "\n".join(lines)
    assert lines[0] == "succinate"
    for words in ("C4H6O4", "succinic acid", "118.088 g/mol", "14 per mol", "3.50 per C-mol"):
        assert words in text
    assert "reference" not in text


def test_a_compound_with_nitrogen_has_three_references() -> None:
    text = "\n".join(text for text, _ in compound_lines(_compound("ammonia")))
    # NH3: 3 - 3 = 0 with ammonia, 3 with nitrogen gas, 3 + 5 = 8 with nitrate.
    assert "0 per mol (ammonia as reference)" in text
    assert "3 per mol (nitrogen as reference)" in text
    assert "8 per mol (nitrate as reference)" in text
    assert "C-mol" not in text


def test_a_biomass_is_told_with_its_ash_and_how_its_source_was_seen() -> None:
    entry = next(item for item in biomass_entries() if item.ash)
    text = "\n".join(text for text, _ in compound_lines(entry))
    assert "5 % of the dry weight" in text
    assert f"{float(entry.formula.molar_mass) / 0.95:.3f} g/mol" in text
    assert f"({entry.status})" in " ".join(text.split())
    ashless = "\n".join(text for text, _ in compound_lines(_biomass("generic biomass")))
    assert "of the dry weight" not in ashless


def test_no_line_of_any_entry_is_wider_than_80() -> None:
    for entry in find_entries(None)[0]:
        for text, _ in compound_lines(entry):
            assert max(len(line) for line in text.split("\n")) <= 80, entry.name


def test_the_table_of_compounds() -> None:
    entries: list[CompoundEntry | BiomassEntry] = [
        _compound("water"),
        _biomass("generic biomass"),
    ]
    table = compounds_table(entries)
    assert table.columns == ("name", "formula", "g/mol", "electrons")
    assert table.rows == (
        ("water", "H2O", "18.015", "0"),
        ("generic biomass", "CH1.8O0.5N0.2", "24.626", "4.20"),
    )


def test_an_element_without_valence_has_no_electrons() -> None:
    entry = next(
        item
        for item in compound_entries()
        if {symbol for symbol, _ in item.formula.elements} - set("CHONSP")
    )
    assert compounds_table([entry]).rows[0][-1] == ""
    assert compound_form(entry)["available_electrons"] is None
    assert "electrons" not in "".join(text for text, _ in compound_lines(entry))


def test_entries_as_json() -> None:
    water = compound_form(_compound("water"))
    assert water["formula"] == "H2O"
    assert water["molar_mass"] == pytest.approx(18.015)
    assert (water["charge"], water["kind"]) == (0, "crossing")
    assert isinstance(water["synonyms"], list)
    biomass = compound_form(_biomass("generic biomass"))
    assert (biomass["kind"], biomass["ash"]) == ("biomass", None)
    assert compound_form(_compound("H+"))["charge"] == 1


@pytest.fixture(scope="module")
def network(network_of: Callable[[str], Network]) -> Network:
    return network_of(NETWORK)


def test_a_network_is_told_in_full(network: Network) -> None:
    lines = [text for text, _ in network_lines("small", network)]
    text = "\n".join(lines)
    assert lines[0] == "Small"
    for words in (
        "taken up    glucose, oxygen, ammonia",
        "given off   biomass, lactate",
        "either way  water, carbon dioxide",
        "groups      breathing",
        "strain 'without air' switches off: breathing",
        "po = 1.50 (1 … 2) mol/mol",
        "bare = 2",
        "respiration [breathing]",
        "  NADH + 1/2 oxygen -> water + (po) ATP",
        "growth (biomass CH1.8O0.5N0.2, ash 5 %)",
    ):
        assert words in text, words
    assert all(len(line) <= 80 for line in text.split("\n"))


def test_what_a_network_does_not_have_is_not_told(network_of: Callable[[str], Network]) -> None:
    least = network_of(
        "network: Least\ncrossing: {in: [glucose], out: [lactate]}\n"
        "reactions: {fermentation: glucose -> 2 lactate}\n"
    )
    text = "\n".join(text for text, _ in network_lines("least", least))
    for word in ("either way", "groups", "strain", "growth"):
        assert word not in text


def test_networks_in_a_table_and_as_json(network: Network) -> None:
    table = networks_table([("small", network, ())])
    assert table.columns == ("name", "substrates", "products", "reactions", "checked")
    # Where it does not say what it is meant for, what crosses is told.
    assert table.rows == (("small", "glucose, oxygen, ammonia", "biomass, lactate", "2", "0"),)
    form = network_form("small", network)
    assert form["name"] == "small"
    assert form["about"] == "First paragraph of it. Second paragraph."
    assert form["taken_up"] == ["glucose", "oxygen", "ammonia"]
    assert form["given_off"] == ["biomass", "lactate"]
    assert form["either_way"] == ["water", "carbon dioxide"]
    assert form["groups"] == ["breathing"]
    assert form["strains"] == {"without air": ["breathing"]}
    assert form["parameters"] == {"po": 1.5, "bare": 2}
    assert form["reactions"]["fermentation"] == "glucose -> 2 lactate + (bare) ATP"
    assert (form["meant_for"], form["parameter_sets"], form["reproduces"]) == (None, [], [])


ENTRIES = (
    "  exact: {equation: glucose -> ? lactate, aim: most lactate, value: 2, source: by hand}\n",
    "  wrong: {equation: glucose -> ? lactate, aim: most lactate, value: 7/3, source: by hand}\n",
    "  grams: {equation: glucose -> ? lactate, aim: most lactate, value: 1.00 g/g, source: by"
    " hand}\n",
    "  third: {equation: glucose -> ? lactate, aim: most lactate, value: 1 C-mmol/g, source: by"
    " hand}\n",
    "  never: {equation: glucose -> ? lactate, aim: most lactate, demands: {lactate: at least 3},"
    " value: 3, source: by hand}\n",
)
SECTIONS = """
meant for: {substrates: [glucose], products: [lactate]}
parameter sets: {little: {about: the poor branch, source: from memory, values: {po: 1, bare: 3},
  maintenance: {ATP: 3 mmol/g/h}}}
reproduces:
"""


@pytest.fixture(scope="module")
def meant(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("networks") / "meant.yaml"
    path.write_text(NETWORK + SECTIONS + "".join(ENTRIES), "utf-8")
    return path


def test_what_a_network_is_meant_for_its_sets_and_what_it_reproduces(meant: Path) -> None:
    network, reproductions = read_reproducing_network(meant)
    lines = network_lines("meant", network, reproductions)
    text = "\n".join(text for text, _ in lines)
    for words in (
        "meant for   glucose to lactate",
        "parameter set 'little': po = 1, bare = 3, maintenance ATP 3 mmol/g/h; the poor\n"
        "    branch\n    source: from memory",
        "reproduces 'exact': most lactate, 2 mol/mol\n    source: by hand",
        "reproduces 'grams': most lactate, 1.00 g/g",
    ):
        assert words in text, words
    assert all(len(line) <= 80 for line in text.split("\n"))
    table = networks_table([("meant", network, reproductions)])
    assert table.rows == (("meant", "glucose", "lactate", "2", "5"),)
    form = network_form("meant", network, reproductions)
    assert form["meant_for"] == {"substrates": ["glucose"], "products": ["lactate"]}
    assert form["parameter_sets"] == [
        {
            "name": "little",
            "values": {"po": 1, "bare": 3},
            "maintenance_mol_per_g_h": 0.003,
            "about": "the poor branch",
            "source": "from memory",
        }
    ]
    assert form["reproduces"][0] == {
        "name": "exact",
        "equation": "glucose -> ? lactate",
        "aim": "most lactate",
        "expected": 2,
        "expected_text": "2",
        "unit": "mol/mol",
        "source": "by hand",
    }


def test_expected_beside_found(meant: Path) -> None:
    found = reproduce(meant)
    table = reproduced_table("meant", found)
    assert table.columns == ("name", "expected", "found", "agrees", "source")
    assert [row[:4] for row in table.rows] == [
        ("exact", "2 mol/mol", "2", "yes"),
        ("wrong", "7/3 mol/mol", "2", "no"),
        # Both have the formula CH2O: a gram becomes a gram, here with one digit more than written.
        ("grams", "1.00 g/g", "1.000", "yes"),
        # 6000 C-mmol over 180.156 g is 500000/15013, too long to be read, so a decimal.
        ("third", "1 C-mmol/g", "33.3044695", "no"),
        ("never", "3 mol/mol", "infeasible", "no"),
    ]
    assert table.note == "3 of 5 do not agree."
    form = reproduced_form("meant", found)
    assert (form["network"], form["agrees"]) == ("meant", False)
    assert [item["agrees"] for item in form["values"]] == [True, False, True, False, False]
    assert form["values"][1]["found"] == 2
    assert form["values"][1]["found_exact"] == "2"
    assert form["values"][-1]["status"] == "infeasible"
    assert form["values"][-1]["found"] is None
    assert reproduced_table("meant", found[:1]).note == "All 1 agree."
    assert reproduced_form("meant", found[:1])["agrees"] is True


def test_nothing_to_reproduce_is_said() -> None:
    assert "nothing to check" in reproduced_table("x", ()).note
