"""Heat and Gibbs energy as text, JSON and CSV."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import pytest

import yieldnet
from yieldnet.chemistry.library import find_biomass, find_compound
from yieldnet.report.energetics_form import (
    energetics_form,
    energetics_records,
    refused_energetics_form,
)
from yieldnet.report.energetics_view import SAFETY, energetics_view
from yieldnet.report.energy_lines import energy_form, energy_lines

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.prediction.energetics import Energetics
    from yieldnet.report.table import Table

    Read = Callable[[str], tuple[Case | None, Findings]]


@pytest.fixture(scope="module")
def example(checkout: Path) -> Energetics:
    return yieldnet.energetics(checkout / "examples" / "energetics" / "case.yaml")


@pytest.fixture
def answer(case_of: Read) -> Callable[[str], Energetics]:
    def _answer(text: str) -> Energetics:
        case, findings = case_of(text)
        assert case is not None, findings.items
        return yieldnet.energetics(case)

    return _answer


def _tables(result: Energetics) -> dict[str, Table]:
    return {table.title.split(",")[0]: table for table in energetics_view(result).tables}


FERMENTATION = "case: t\nequation: glucose -> ? ethanol\neither side: [carbon dioxide, water]\n"


def test_closure_is_told_before_any_heat(example: Energetics) -> None:
    headline = energetics_view(example).headline
    assert headline.startswith("it closes: 100.0 % of the electrons and 100.0 % of the carbon")
    assert headline.index("electrons") < headline.index("heat given off")
    assert headline.index("heat given off") < headline.index("Gibbs energy")


def test_an_equation_that_does_not_close_says_so_first(checkout: Path) -> None:
    path = checkout / "tests" / "bad_inputs" / "overall-does-not-close.case.yaml"
    result = yieldnet.energetics(path)
    assert energetics_view(result).headline.startswith("IT DOES NOT CLOSE: ")
    electrons = result.closures[1]
    assert electrons.quantity == "electrons"
    assert not electrons.closes


def test_every_heat_ends_with_the_line_on_safety(example: Energetics) -> None:
    assert energetics_view(example).remarks[-1] == SAFETY
    assert "licensed practice" in SAFETY


def test_heat_is_shown_by_each_way_and_how_far_they_are_apart(example: Energetics) -> None:
    table = _tables(example)["Heat given off"]
    combustion, calorimetric, textbook = table.rows
    assert (combustion[0], combustion[4]) == ("combustion", "")
    assert calorimetric[0] == "oxygen, 440 kJ/mol"
    assert (calorimetric[3], textbook[3]) == ("440", "460")
    assert example.heat is not None
    apart = float(-(example.heat.apart() or 0))
    assert float(calorimetric[4]) == pytest.approx(apart, rel=0.01)
    assert calorimetric[5].endswith(" %")


def test_without_oxygen_and_biomass_their_columns_are_empty(
    answer: Callable[[str], Energetics],
) -> None:
    tables = _tables(answer(FERMENTATION))
    heat = tables["Heat given off"]
    assert heat.rows == (("combustion", "69", "", "", "", ""),)
    assert "rule for oxygen says nothing" in heat.note
    assert set(tables) == {"Heat given off", "Heats of combustion", "Gibbs energy"}
    gibbs = tables["Gibbs energy"]
    assert [row[0] for row in gibbs.rows][-1] == "at the concentrations"


def test_a_heat_that_is_taken_up_is_called_so(answer: Callable[[str], Energetics]) -> None:
    result = answer(
        "case: t\nequation: propionate -> 1 acetate + ? hydrogen\n"
        "either side: [carbon dioxide, water]\n"
    )
    headline = energetics_view(result).headline
    assert "heat taken up 206 kJ/mol propionate" in headline
    assert energetics_view(result).equation == (
        "propionate + 2 water -> acetate + 3 hydrogen + carbon dioxide"
    )


def test_what_cannot_be_told_is_told(answer: Callable[[str], Energetics]) -> None:
    result = answer(
        "case: t\ncompounds: {sodium lactate: NaC3H5O3}\n"
        "equation: lactate + ? sodium hydroxide -> ? sodium lactate\neither side: [water]\n"
    )
    view = energetics_view(result)
    assert "electrons not counted" in view.headline
    assert "heat not told" in view.headline
    assert "Gibbs energy not told" in view.headline
    assert view.tables == ()
    assert view.remarks == (SAFETY,)


def test_an_equation_that_is_not_settled_has_a_headline(
    answer: Callable[[str], Energetics],
) -> None:
    text = FERMENTATION.replace("? ethanol", "? ethanol + ? lactate")
    view = energetics_view(answer(text))
    assert "not settled" in view.headline
    assert view.equation == ""


def test_an_infeasible_case_keeps_its_own_headline(answer: Callable[[str], Energetics]) -> None:
    view = energetics_view(answer(FERMENTATION + "demands: {ethanol: at least 3}\n"))
    assert view.headline.startswith("infeasible")
    assert view.conflict


def test_steps_nearest_to_uphill_come_first(example: Energetics) -> None:
    table = _tables(example)["Steps nearest to uphill"]
    least = [float(row[1]) for row in table.rows]
    assert least == sorted(least, reverse=True)
    assert f"{len(example.steps)} of {example.running} running steps" in table.note
    assert "more in JSON" in table.note


def test_yields_stand_side_by_side(example: Energetics) -> None:
    table = _tables(example)["Biomass from glucose alone"]
    assert [row[0] for row in table.rows] == [
        "this case",
        "elements alone, best",
        "network, best",
        "Gibbs energy dissipation",
        "electron equivalents",
    ]
    assert "fix carbon dioxide" in table.note


def test_a_yield_that_no_method_gives_is_none_with_its_reason(
    answer: Callable[[str], Energetics],
) -> None:
    result = answer(
        "case: t\ncompounds: {biomass: CH1.8O0.5N0.2}\n"
        "equation: sucrose + ? ammonia + ? oxygen -> 6 biomass\n"
        "either side: [carbon dioxide, water]\n"
    )
    rows = {row[0]: row for row in _tables(result)["Biomass from sucrose alone"].rows}
    assert rows["Gibbs energy dissipation"][1] == "none"
    assert "6 carbon atoms" in rows["Gibbs energy dissipation"][3]


def test_json_holds_what_the_text_says(example: Energetics) -> None:
    form: dict[str, Any] = json.loads(json.dumps(energetics_form(example)))
    assert set(form) == set(refused_energetics_form(()))
    assert form["format"] == 1
    assert form["status"] == "solved"
    ways = {item["by"]: item["value"] for item in form["heat"]["given_off"]}
    assert example.heat is not None
    assert ways["combustion"] == float(example.heat.by_combustion)
    total = -sum(item["amount"] * item["heat_of_combustion"] for item in form["heat"]["compounds"])
    assert total == pytest.approx(ways["combustion"])
    assert len(form["steps"]["judged"]) == len(example.steps)
    assert form["recoveries"][1] == {
        "quantity": "electrons",
        "ratio": 1.0,
        "closes": True,
        "reason": None,
    }
    low, middle, high = (form["gibbs_energy"][key] for key in ("low", "middle", "high"))
    assert low < middle < high


def test_json_of_what_cannot_be_told_is_null(answer: Callable[[str], Energetics]) -> None:
    text = FERMENTATION.replace("? ethanol", "? ethanol + ? lactate")
    form = energetics_form(answer(text))
    assert (form["heat"], form["gibbs_energy"], form["dissipation"]) == (None, None, None)
    assert form["equation"] == []


def test_the_table_for_a_spreadsheet(
    example: Energetics, answer: Callable[[str], Energetics]
) -> None:
    header, rows = energetics_records(example)
    assert header == ("quantity", "kJ/mol")
    assert [row[0] for row in rows] == [
        "heat by combustion",
        "heat by oxygen, 440 kJ/mol",
        "heat by oxygen, 460 kJ/mol",
        "Gibbs energy, standard",
        "Gibbs energy",
        "Gibbs energy, low",
        "Gibbs energy, high",
    ]
    text = FERMENTATION.replace("? ethanol", "? ethanol + ? lactate")
    assert energetics_records(answer(text))[1] == []


def test_the_command_prints_the_three_forms(run: Callable[..., Any]) -> None:
    path = "examples/energetics/case.yaml"
    assert "it closes" in run("energetics", path).output
    assert json.loads(run("energetics", path, "--json").output)["status"] == "solved"
    assert run("energetics", path, "--csv").output.startswith("quantity,kJ/mol\n")
    refused = run("energetics", "nothing.yaml", "--json")
    assert refused.exit_code == 1
    assert json.loads(refused.output)["status"] == "refused"
    assert run("energetics", "examples/contradiction/case.yaml").exit_code == 1


# The library -------------------------------------------------------------------------------------


def _text(name: str) -> str:
    entry = find_compound(name) or find_biomass(name)
    assert entry is not None
    return " ".join(" ".join(line.split()) for line, _ in energy_lines(entry))


def test_a_compound_shows_both_values_with_source_and_status() -> None:
    text = _text("acetate")
    assert "heat of combustion 875 kJ/mol, liquid Villadsen" in text
    assert "(seen)" in text
    assert "Gibbs energy -369.41 kJ/mol as C2H3O2- dissolved, 1 H+ given off" in text
    assert "enthalpy -486.01 kJ/mol, same species" in text


@pytest.mark.parametrize(
    ("name", "words"),
    [
        ("ammonia", "as NH4+ dissolved, 1 H+ taken up"),
        ("glycine", "973 kJ/mol, solid, to nitrogen gas; 590 to ammonia"),
        ("shikimate", "3220 kJ/mol (estimated: 115 kJ per electron equivalent"),
        ("shikimate", "Gibbs energy no value"),
        ("sodium hydroxide", "no value, and no estimate is possible"),
        ("glucose 6-phosphate", "as C6H12O6, ratio"),
        ("carbon dioxide", "as HCO3- dissolved, 1 H+ given off; bicarbonate"),
        ("generic biomass", "560 kJ/mol, solid, to nitrogen gas; 483 to ammonia"),
        ("generic biomass", "-67.00 kJ/mol as CH1.8O0.5N0.2 cells"),
        ("yeast", "544 kJ/mol (estimated"),
        ("yeast", "Gibbs energy no value"),
    ],
)
def test_what_stands_in_is_called_so(name: str, words: str) -> None:
    assert words in _text(name)


def test_the_library_in_json_has_the_same() -> None:
    acetate, caustic = find_compound("acetate"), find_compound("sodium hydroxide")
    assert acetate is not None
    assert caustic is not None
    form = energy_form(acetate)
    assert form["heat_of_combustion"]["value"] == 875
    assert form["heat_of_combustion"]["estimated"] is False
    (gibbs,) = form["gibbs_energies"]
    assert (gibbs["value"], gibbs["species"], gibbs["enthalpy"]) == (-369.41, "C2H3O2-", -486.01)
    assert energy_form(caustic) == {"heat_of_combustion": None, "gibbs_energies": []}
