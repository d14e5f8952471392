"""The table of atomic weights."""

from __future__ import annotations

import csv
from fractions import Fraction
from itertools import pairwise
from typing import TYPE_CHECKING

import pytest

from yieldnet.chemistry.atomic_weights import atomic_weight, is_element

if TYPE_CHECKING:
    from pathlib import Path


@pytest.mark.parametrize(
    ("symbol", "weight", "name"),
    # IUPAC 2021 abridged standard atomic weights, Prohaska et al. 2022, Pure Appl. Chem. 94:573.
    [
        ("H", "1.0080", "hydrogen"),
        ("C", "12.011", "carbon"),
        ("N", "14.007", "nitrogen"),
        ("O", "15.999", "oxygen"),
        ("Na", "22.990", "sodium"),
        ("Mg", "24.305", "magnesium"),
        ("P", "30.974", "phosphorus"),
        ("S", "32.06", "sulfur"),
        ("Cl", "35.45", "chlorine"),
        ("K", "39.098", "potassium"),
        ("Ca", "40.078", "calcium"),
        ("Fe", "55.845", "iron"),
    ],
)
def test_weights_that_fermentations_need(symbol: str, weight: str, name: str) -> None:
    value = atomic_weight(symbol)
    assert value.value == Fraction(weight)
    assert (value.unit, value.note) == ("g/mol", name)
    assert "IUPAC" in value.source


@pytest.mark.parametrize("symbol", ["C", "U", "Ce"])
def test_an_element_is_known(symbol: str) -> None:
    assert is_element(symbol)


@pytest.mark.parametrize("symbol", ["", "c", "D", "Tc", "Pm", "Xx", "CO", "carbon"])
def test_what_has_no_standard_weight_is_no_element(symbol: str) -> None:
    assert not is_element(symbol)
    with pytest.raises(KeyError, match="'"):
        atomic_weight(symbol)


def test_weights_rise_with_the_atomic_number_save_where_they_are_known_not_to(
    checkout: Path,
) -> None:
    path = checkout / "yieldnet" / "chemistry" / "data" / "atomic_weights.csv"
    rows = list(csv.DictReader(path.read_text("utf-8").splitlines()))
    numbers = [int(row["number"]) for row in rows]
    assert numbers == sorted(set(numbers))
    assert all(atomic_weight(row["symbol"]).value == Fraction(row["weight"]) for row in rows)
    falls = [
        (lighter["symbol"], heavier["symbol"])
        for lighter, heavier in pairwise(rows)
        if Fraction(lighter["weight"]) >= Fraction(heavier["weight"])
    ]
    assert falls == [("Ar", "K"), ("Co", "Ni"), ("Te", "I"), ("Th", "Pa")]
