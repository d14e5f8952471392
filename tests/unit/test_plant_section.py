"""The section ``plant``: what is read, and what is refused."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

from tests.unit.plants import LACTATE, case_at
from yieldnet.reading.case_file import load_case
from yieldnet.reading.plant_section import AERATION_KEYS, PHASE_KEYS, PLANT_KEYS
from yieldnet.reading.schema import case_schema

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.model.plant import Plant


def _plant(folder: Path, more: str, text: str = LACTATE) -> Plant:
    found = case_at(folder, text + more).plant
    assert found is not None
    return found


def _codes(folder: Path, text: str) -> list[str]:
    path = folder / "case.yaml"
    path.write_text(text, "utf-8")
    return [item.code for item in load_case(str(path))[1]]


def test_the_schema_knows_the_keys_of_the_reader() -> None:
    form = case_schema()["properties"]["plant"]
    assert tuple(form["properties"]) == PLANT_KEYS
    assert tuple(form["properties"]["phases"]["properties"]) == PHASE_KEYS
    assert tuple(form["properties"]["aeration"]["properties"]) == AERATION_KEYS


def test_numbers_are_exact_and_in_the_units_of_the_plant(tmp_path: Path) -> None:
    plant = _plant(
        tmp_path,
        "  recovery: {filter: 98 %, drying: 0.9}\n  feedstock purity: {glucose: 0.85}\n"
        "  titre: 80 g/L\n  productivity: 48 g/L/d\n  temperature: 310.15 K\n  pH: 6.5\n"
        "  base: caustic soda\n  stirrer: 1.0 W/L\n  vessel: 200 m3\n  fill: 0.8\n"
        "  aeration: {pressure: 150 kPa, vvm: 0.3, kLa: 0.1 1/s, dissolved oxygen: 20 %}\n"
        "  prices: {glucose: 250 EUR/t, sodium hydroxide: 0.4 EUR/kg}\n",
    )
    assert plant.output.value == 8_000_000
    assert plant.overall_recovery() == Fraction("0.882")
    assert plant.purity("glucose") == Fraction("0.85")
    assert plant.purity("lactate") is None
    assert plant.titre is not None
    assert plant.titre.value == 80
    assert plant.productivity is not None
    assert plant.productivity.value == 2
    assert plant.temperature is not None
    assert plant.temperature.value == 37
    assert plant.base == "sodium hydroxide"
    assert plant.stirrer is not None
    assert plant.stirrer.value == 1
    assert plant.aeration is not None
    assert [
        item.value if item else None
        for item in (
            plant.aeration.pressure,
            plant.aeration.vvm,
            plant.aeration.kla,
            plant.aeration.dissolved_oxygen,
        )
    ] == [Fraction(3, 2), Fraction(3, 10), 360, Fraction(1, 5)]
    price = plant.price("glucose")
    assert price is not None
    assert (price.value, price.currency) == (Fraction(1, 4), "EUR")
    assert plant.price("lactate") is None


def test_an_output_per_hour_counts_the_hours_on_stream(tmp_path: Path) -> None:
    text = LACTATE.replace("8000 t/y", "2 t/h")
    assert _plant(tmp_path, "", text).output.value == 16_000_000


def test_the_product_is_the_aim_where_none_is_named(tmp_path: Path) -> None:
    text = LACTATE.replace("  product: lactate\n", "").replace(
        "plant:", "aim: most lactate\nplant:"
    )
    plant = _plant(tmp_path, "", text)
    assert (plant.product, plant.product_given) == ("lactate", False)


def test_the_ph_of_the_conditions_serves_a_base(tmp_path: Path) -> None:
    text = LACTATE.replace("plant:", "conditions: {pH: 6.0}\nplant:")
    plant = _plant(tmp_path, "  base: ammonia\n", text)
    assert plant.ph is not None
    assert plant.ph.value == 6


@pytest.mark.parametrize(
    ("more", "codes"),
    [
        ("  titre: 80\n", ["YN203"]),
        ("  titre: many g/L\n", ["YN201"]),
        ("  titre: 80 ± 2 g/L\n", ["YN203"]),
        ("  temperature: 400 degC\n", ["YN900"]),
        ("  recovery: {a: 0.9 g}\n", ["YN203"]),
        ("  recovery: much\n", ["YN201"]),
        ("  prices: {glucose: cheap EUR/kg}\n", ["YN201"]),
        ("  prices: {glucose: -1 EUR/kg}\n", ["YN908"]),
        ("  nitrogen feed: guano\n  base: ammonia\n  pH: 6\n", ["YN905"]),
        ("  nitrogen feed: ammonia\n", ["YN917"]),
        ("  phases: {turnaround: 8 h}\n", ["YN111", "YN916", "YN916"]),
        ("  phases: 8 h\n", ["YN112"]),
        (
            "  titre: 9 g/L\n  phases: {growth: 8 h, inoculum: 100 %, cells: 5 g/L}\n",
            ["YN901", "YN916", "YN916"],
        ),
        ("  aeration: 8 h\n", ["YN112"]),
        ("  base: [ammonia]\n", ["YN112"]),
        ("  titre: [80]\n", ["YN112"]),
        ("  temperature: [37]\n", ["YN112"]),
        ("  temperature: 37\n", ["YN203"]),
        ("  recovery: [0.9]\n", ["YN112"]),
        ("  recovery: 0.9 0.8\n", ["YN203"]),
        ("  nitrogen feed: [urea]\n", ["YN112"]),
        ("  prices: {glucose: [1]}\n", ["YN112"]),
        ("  prices: {nectar: 1 EUR/kg}\n", ["YN301"]),
        ("  feedstock purity: {nectar: 0.9}\n", ["YN301"]),
        ("  pH: sour\n  base: ammonia\n", ["YN201"]),
    ],
)
def test_what_cannot_be_read_is_told(tmp_path: Path, more: str, codes: list[str]) -> None:
    assert sorted(_codes(tmp_path, LACTATE + more)) == sorted(codes)


def test_a_plant_that_is_no_mapping(tmp_path: Path) -> None:
    text = LACTATE.split("plant:", maxsplit=1)[0] + "plant: large\n"
    assert _codes(tmp_path, text) == ["YN112"]


def test_a_recovery_of_ninety_says_what_to_write(tmp_path: Path) -> None:
    path = tmp_path / "case.yaml"
    path.write_text(LACTATE + "  recovery: 90\n", "utf-8")
    (finding,) = load_case(str(path))[1]
    assert finding.hint == "Write 0.9, or 90 %."


def test_what_is_wrong_is_told_all_at_once(tmp_path: Path) -> None:
    text = LACTATE.replace("8000 t/y", "0 t/y") + "  recovery: 2\n  base: soap\n  titre: 0 g/L\n"
    assert _codes(tmp_path, text) == ["YN900", "YN901", "YN905", "YN900"]


@pytest.mark.parametrize("key", ["output", "on-stream"])
def test_what_is_required_is_missed(tmp_path: Path, key: str) -> None:
    kept = [line for line in LACTATE.splitlines() if not line.strip().startswith(f"{key}:")]
    assert _codes(tmp_path, "\n".join(kept) + "\n") == ["YN111"]


def test_a_product_under_an_unknown_name(tmp_path: Path) -> None:
    assert _codes(tmp_path, LACTATE.replace("product: lactate", "product: nectar")) == ["YN301"]
    assert _codes(tmp_path, LACTATE.replace("product: lactate", "product: [lactate]")) == ["YN112"]


def test_an_equation_that_cannot_be_read_is_told_alone(tmp_path: Path) -> None:
    text = LACTATE.replace("-> ?", "?") + "  prices: {glucose: 0.3 EUR/kg}\n"
    assert _codes(tmp_path, text) == ["YN208"]
