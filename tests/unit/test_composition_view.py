"""Biomass put together, as text, JSON and CSV."""

from __future__ import annotations

import csv
import json
from fractions import Fraction

import pytest
from click.testing import CliRunner

from yieldnet.chemistry.macromolecules import compose
from yieldnet.cli.main import main
from yieldnet.report.composition_view import (
    composition_form,
    composition_lines,
    composition_tables,
)

LINE = "protein 0.52, RNA 0.16, DNA 0.03, lipid 0.09, carbohydrate 0.15, ash 0.05"


def _run(*arguments: str) -> tuple[int, str]:
    result = CliRunner().invoke(main, ["compounds", *arguments])
    return result.exit_code, " ".join(result.output.split())


def test_formula_electrons_mass_and_parts_are_printed() -> None:
    code, text = _run("--biomass-from", LINE)
    assert code == 0
    for words in (
        "formula CH1.582O0.363N0.231 per C-mol",
        "degree of reduction 4.16 per C-mol",
        "25.6 g/C-mol of dry weight",
        "28.8 g/mol ATP",
        "from memory",
        "What each part brings",
        "protein polymerisation",
    ):
        assert words in text


def test_shares_of_carbon_nitrogen_and_electrons_sum_to_a_hundred() -> None:
    cell = compose({"protein": Fraction("0.6"), "glycogen": Fraction("0.4")})
    table = composition_tables(cell)[0]
    for column in (3, 4, 5):
        assert sum(float(row[column]) for row in table.rows) == pytest.approx(100, abs=0.2)


def test_what_was_divided_and_what_has_no_cost_is_said() -> None:
    cell = compose({"chitin": Fraction("0.6"), "glycogen": Fraction("0.6")}, normalise=True)
    text = "\n".join(composition_lines(cell))
    assert "divided by their sum, 1.20" in text
    assert "no ATP is known for chitin" in text


def test_json_has_exact_elements_and_every_part() -> None:
    result = CliRunner().invoke(main, ["compounds", "--biomass-from", LINE, "--json"])
    form = json.loads(result.output)
    biomass = form["biomass"]
    shares = dict(piece.rsplit(" ", 1) for piece in LINE.split(", "))
    ash = Fraction(shares.pop("ash"))
    formula, _ = compose({name: Fraction(text) for name, text in shares.items()}, ash).rounded
    assert biomass["formula"] == str(formula)
    assert Fraction(biomass["elements_per_carbon"]["C"]["exact"]) == 1
    assert [item["name"] for item in biomass["parts"]] == [
        "protein",
        "RNA",
        "DNA",
        "lipid",
        "carbohydrate",
    ]
    assert sum(item["mmol_c_per_g"] for item in biomass["parts"]) == pytest.approx(
        biomass["mmol_c_per_g"]
    )
    assert biomass["atp_in_theory"]["total_mmol_per_g"] == pytest.approx(
        sum(item["mmol_per_g"] for item in biomass["atp_in_theory"]["steps"])
    )
    cell = compose({"glycogen": Fraction(1)})
    assert composition_form(cell)["biomass"]["scaled_from"] is None


def test_csv_has_a_row_a_part() -> None:
    result = CliRunner().invoke(main, ["compounds", "--biomass-from", LINE, "--csv"])
    rows = list(csv.reader(result.output.splitlines()))
    assert [row[0] for row in rows[1:]] == ["protein", "RNA", "DNA", "lipid", "carbohydrate"]


def test_monomers_and_normalising_are_options() -> None:
    code, text = _run(
        "--biomass-from", "protein 0.5, glycogen 0.6", "--monomers", "yeast", "--normalise"
    )
    assert code == 0
    assert "monomers of yeast" in text
    assert "divided by their sum, 1.10" in text


def test_slips_are_findings_and_wrong_options_wrong_usage() -> None:
    code, text = _run("--biomass-from", "protien 0.5")
    assert code == 1
    assert "YN883" in text
    assert "Did you mean 'protein'?" in text
    result = CliRunner().invoke(main, ["compounds", "--biomass-from", "protein 0.5", "--json"])
    form = json.loads(result.stdout)
    assert form["biomass"] is None
    assert [item["code"] for item in form["findings"]] == ["YN884"]
    assert _run("succinate", "--biomass-from", LINE)[0] == 2
    assert _run("--normalise")[0] == 2
    assert _run("--monomers", "yeast")[0] == 2
