"""Worked examples of elemental balances: rows A1.13, A1.14, E10 to E19."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from tests.reference.rows import (
    Printed,
    Question,
    Row,
    Status,
    best,
    found_again,
    grams,
    inverse,
    made,
    respiratory_quotient,
    taken_up,
)

if TYPE_CHECKING:
    from tests.reference.rows import Reading
    from yieldnet.prediction.result import Prediction

__all__ = ["BALANCE_ROWS"]

TRINH = "Trinh, Unrean and Srienc 2008, Applied and Environmental Microbiology 74:3634, Table 3"
DORAN = "Doran, Bioprocess Engineering Principles"
EXERCISE = f"exercise text after {DORAN}"
BY_HAND = "solution derived by hand"
MOL, MASS = "mol/mol", "g/g"

Value = Fraction | Printed


def _rows(
    row: str, file: str, source: str, status: Status, *numbers: tuple[str, Value, str, Reading]
) -> list[Row]:
    """Rows that read several numbers from one case; its file tells the conditions."""
    question = Question(file=f"cases/{file}.yaml")
    return [
        Row(
            row=row,
            what=what,
            value=value,
            unit=unit,
            conditions=f"as {question.file} says",
            source=source,
            status=status,
            question=question,
            read=read,
        )
        for what, value, unit, read in numbers
    ]


def _per(compound: str, other: str) -> Reading:
    """Reads a coefficient, production positive, per amount of another [mol/mol]."""
    over, under = made(compound), made(other)
    return lambda prediction: over(prediction) / abs(under(prediction))


def _plant_oxygen(prediction: Prediction) -> Fraction:
    """Oxygen taken up by 10 kg of sucrose an hour [mol/min]."""
    mass = prediction.case.basis.weight.molar_mass
    assert mass is not None
    return taken_up("oxygen")(prediction) * 10_000 / mass / 60


def _share_of_most(prediction: Prediction) -> Fraction:
    """Ethanol per 2 mol, the electron limit on glucose [%]."""
    return 100 * made("ethanol")(prediction) / 2


BALANCE_ROWS: tuple[Row, ...] = (
    *_rows(
        "A1.13",
        "bacteria-with-hydrogen",
        TRINH,
        "S",
        ("ethanol / glucose", Printed("1.40"), MOL, made("ethanol")),
        ("carbon dioxide / glucose", Printed("1.41"), MOL, made("carbon dioxide")),
        ("ammonia taken up / glucose", Printed("0.49"), MOL, taken_up("ammonia")),
        ("ethanol / glucose", Printed("0.36"), MASS, grams("ethanol")),
    ),
    *_rows(
        "A1.14",
        "bacteria-with-formate",
        TRINH,
        "S",
        ("ethanol / glucose", Printed("1.40"), MOL, made("ethanol")),
        ("carbon dioxide / glucose", Printed("1.30"), MOL, made("carbon dioxide")),
    ),
    *_rows(
        "E10",
        "ethanol-by-yeast",
        f"{DORAN}, problem 4.10; {BY_HAND}",
        "derived by hand",
        ("ethanol / glucose", Printed("0.439"), MASS, grams("ethanol")),
        ("share of the most", Printed("85.9"), "%", _share_of_most),
    ),
    *_rows(
        "E10",
        "ethanol-by-zymomonas",
        f"{DORAN}, problem 4.10; {BY_HAND}",
        "derived by hand",
        ("ethanol / glucose", Printed("0.479"), MASS, grams("ethanol")),
        ("share of the most", Printed("93.6"), "%", _share_of_most),
    ),
    *_rows(
        "E11",
        "methane-from-acetate",
        f"{DORAN}, problem 4.8; {BY_HAND}",
        "derived by hand",
        ("methane / acetate", Printed("0.914"), MOL, made("methane")),
        ("methane / acetate", Printed("0.244"), MASS, grams("methane")),
        ("biomass / acetate", Printed("0.172"), "C-mol/mol", made("biomass")),
    ),
    *_rows(
        "E12",
        "cells-on-glucose",
        f"{EXERCISE}; {BY_HAND}",
        "derived by hand",
        ("oxygen taken up / glucose", Printed("2.52"), MOL, taken_up("oxygen")),
    ),
    *_rows(
        "E12",
        "most-cells-on-glucose",
        f"{EXERCISE}; {BY_HAND}",
        "derived by hand",
        ("biomass / glucose", Fraction(2400, 414), "C-mol/mol", best),
        ("biomass / glucose", Printed("0.863"), MASS, grams("biomass")),
    ),
    *_rows(
        "E13",
        "most-cells-on-ethanol",
        "derived by hand: ethanol has two carbon",
        "derived by hand",
        ("biomass / ethanol", Fraction(2), "C-mol/mol", best),
        ("biomass / ethanol", Printed("1.16"), MASS, grams("biomass")),
        ("oxygen taken up / ethanol", Fraction("0.93"), MOL, taken_up("oxygen")),
        ("carbon dioxide / ethanol", Fraction(0), MOL, made("carbon dioxide")),
    ),
    *_rows(
        "E13",
        "most-cells-on-ethanol-and-carbon-dioxide",
        f"{DORAN}, Example 4.8: 2.90 C-mol/mol, 1.69 g/g, an electron bound only",
        "S",
        ("biomass / ethanol", Fraction(1200, 414), "C-mol/mol", best),
        ("biomass / ethanol", Printed("2.90"), "C-mol/mol", best),
        ("biomass / ethanol", Printed("1.69"), MASS, grams("biomass")),
        (
            "carbon dioxide taken up / ethanol",
            Fraction(1200, 414) - 2,
            MOL,
            taken_up("carbon dioxide"),
        ),
    ),
    *_rows(
        "E14",
        "cells-from-hexadecane",
        f"{EXERCISE}; {BY_HAND}",
        "derived by hand",
        (
            "oxygen taken up / hexadecane",
            Fraction(64200, 5141),
            MOL,
            inverse(taken_up("hexadecane")),
        ),
        ("oxygen taken up", Printed("-12.49"), MOL, _per("oxygen", "hexadecane")),
        ("ammonia taken up", Printed("-2.13"), MOL, _per("ammonia", "hexadecane")),
        ("biomass", Printed("10.63"), MOL, _per("biomass", "hexadecane")),
        ("carbon dioxide", Printed("5.37"), MOL, _per("carbon dioxide", "hexadecane")),
        ("water", Printed("11.37"), MOL, _per("water", "hexadecane")),
    ),
    *_rows(
        "E14",
        "cells-on-hexadecane",
        f"{EXERCISE}: RQ 0.43",
        "S",
        ("respiratory quotient", Fraction("0.43"), MOL, respiratory_quotient),
    ),
    *_rows(
        "E15",
        "cells-from-tetradecane",
        f"exercise page; {BY_HAND}",
        "derived by hand",
        (
            "oxygen taken up / tetradecane",
            Fraction(516, 37),
            MOL,
            inverse(taken_up("tetradecane")),
        ),
        ("tetradecane taken up", Printed("-1.337"), MASS, grams("tetradecane", "biomass")),
        ("ammonia taken up", Printed("-0.161"), MASS, grams("ammonia", "biomass")),
        ("oxygen taken up", Printed("-3.006"), MASS, grams("oxygen", "biomass")),
    ),
    *_rows(
        "E16",
        "plant-cells",
        f"{EXERCISE}; {BY_HAND}",
        "derived by hand",
        ("oxygen taken up", Printed("3.78"), "mol/min", _plant_oxygen),
    ),
    *_rows(
        "E17",
        "propionic-acid",
        "Barbirato et al. 1997, Applied Microbiology and Biotechnology 47:441, abstract; "
        "shares derived by hand",
        "derived by hand",
        ("carbon in measured products", Printed("0.975"), "-", found_again("carbon")),
        ("electrons in measured products", Printed("0.961"), "-", found_again("electrons")),
    ),
    *_rows(
        "E18",
        "citric-acid",
        "Folia Microbiologica, doi 10.1007/BF02927594; cells and carbon dioxide derived by hand",
        "S",
        ("oxygen taken up / glucose", Printed("-0.42"), MASS, grams("oxygen")),
        ("carbon dioxide / glucose", Fraction(7, 5), MOL, made("carbon dioxide")),
    ),
    *_rows(
        "E19",
        "bakers-yeast",
        "exercise page",
        "S",
        ("ammonia taken up / glucose", Fraction("0.48"), MOL, taken_up("ammonia")),
        ("biomass / glucose", Fraction("0.48"), MOL, made("biomass")),
        ("water / glucose", Fraction("4.32"), MOL, made("water")),
        ("carbon dioxide / glucose", Fraction("3.12"), MOL, made("carbon dioxide")),
    ),
)
