"""Best yields that the elements set: rows A1.8, A1.15 to A1.19, A1.22, A1.23, A1.27, A2, A3.2.

The limits of table A2 are derived by hand there and here. Electrons per mol are counted as 4 C + H
- 2 O - 3 N, 24 for glucose and 14 for glycerol; with carbon dioxide free the limit is their ratio.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

from tests.reference.rows import Printed, Question, Row, best, grams, inverse, made, number

__all__ = ["ELEMENT_ROWS", "PRODUCTS", "Product"]

ELECTRONS = {"glucose": 24, "glycerol": 14}
MOL = "mol/mol"
FREE = "carbon dioxide and water free"


@dataclass(frozen=True, slots=True)
class Product:
    """A line of table A2.

    Parameters
    ----------
    name : str
        Product.
    electrons : int
        Available electrons of one mol, counted by hand [mol/mol].
    grams : str
        Printed mass yield at the electron limit [g/g].
    carbon_limit : str
        Printed limit without fixation of carbon dioxide, exact as printed [mol/mol]; empty if the
        table gives none.
    substrate : str
        Substrate.
    """

    name: str
    electrons: int
    grams: str
    carbon_limit: str
    substrate: str = "glucose"

    @property
    def electron_limit(self) -> Fraction:
        """Electrons of the substrate per electrons of the product [mol/mol]."""
        return Fraction(ELECTRONS[self.substrate], self.electrons)


PRODUCTS = (
    Product("ethanol", 12, "0.5114", "3"),
    Product("lactate", 12, "1.000", "2"),
    Product("3-hydroxypropionate", 12, "1.000", "2"),
    Product("acetate", 8, "1.000", "3"),
    Product("succinate", 14, "1.124", "1.5"),
    Product("malate", 12, "1.489", "1.5"),
    Product("fumarate", 12, "1.289", "1.5"),
    Product("citrate", 18, "1.422", "1.0"),
    Product("itaconate", 18, "0.963", "1.2"),
    Product("L-glutamate", 18, "1.089", "1.2"),
    Product("L-lysine", 28, "0.696", "1.0"),
    Product("L-threonine", 16, "0.992", "1.5"),
    Product("1,4-butanediol", 22, "0.546", "1.5"),
    Product("2,3-butanediol", 22, "0.546", "1.5"),
    Product("n-butanol", 24, "0.411", "1.5"),
    Product("isobutanol", 24, "0.411", "1.5"),
    Product("1,3-propanediol", 16, "0.634", "2"),
    Product("adipate", 26, "0.749", "1.0"),
    Product("mevalonate", 28, "0.705", "1.0"),
    Product("palmitate", 92, "0.371", "0.375"),
    Product("hydrogen", 2, "0.134", ""),
    Product("methane", 8, "0.267", ""),
    Product("ethanol", 12, "0.584", "1.5", "glycerol"),
    Product("1,3-propanediol", 16, "0.723", "1.0", "glycerol"),
)


def _left(item: Product, *others: str) -> str:
    ammonia = ["? ammonia"] if item.name.startswith("L-") else []
    return " + ".join([item.substrate, *ammonia, *others])


def _rows_of(item: Product) -> list[Row]:
    aim = f"most {item.name}"
    free = Question(equation=f"{_left(item)} -> ? {item.name}", aim=aim)
    without_fixation = Question(
        equation=f"{_left(item, '? oxygen')} -> ? {item.name} + ? carbon dioxide",
        either=("water",),
        aim=aim,
    )
    # Hydrogen on either side stands for electrons without limit: carbon alone decides.
    carbon_alone = Question(
        equation=f"{_left(item)} -> ? {item.name} + ? carbon dioxide",
        either=("water", "hydrogen"),
        aim=aim,
    )
    limit = Row(
        row="A2",
        what=f"{item.name} / {item.substrate}, electron limit",
        value=item.electron_limit,
        unit=MOL,
        conditions=FREE,
        source=f"derived by hand: {ELECTRONS[item.substrate]} e / {item.electrons} e",
        status="derived by hand",
        question=free,
        read=best,
    )
    rows = [
        limit,
        replace(
            limit,
            what=f"{item.name} / {item.substrate}, electron limit by mass",
            value=Printed(item.grams),
            unit="g/g",
            source="derived by hand, from the electron limit and the molar masses",
            read=grams(item.name),
        ),
    ]
    if item.carbon_limit:
        carbon = Fraction(item.carbon_limit)
        rows += [
            replace(
                limit,
                what=f"{item.name} / {item.substrate}, carbon limit",
                value=carbon,
                conditions="carbon dioxide only given off, electrons without limit",
                source="derived by hand: carbon of the substrate / carbon of the product",
                question=carbon_alone,
            ),
            replace(
                limit,
                what=f"{item.name} / {item.substrate}, without fixation of carbon dioxide",
                value=min(carbon, item.electron_limit),
                conditions="oxygen taken up, carbon dioxide only given off",
                source="derived by hand: the lower of electron limit and carbon limit",
                question=without_fixation,
            ),
        ]
    return rows


VILLADSEN = (
    "Villadsen, Nielsen and Liden 2003, Bioreaction Engineering Principles, 2nd ed., p. 77: "
    "6/7 = 0.857 C-mol/C-mol, and both have six carbon"
)
TRINH = "Trinh, Unrean and Srienc 2008, Applied and Environmental Microbiology 74:3634, Table 3"
DIHYDROXYBUTYRATE = "Nature Communications 2023, s41467-023-37558-x, Table 1"
HANDBOOK = "handbook chapter, Processes for Production of Chemicals from Carbohydrates, CRC, p. 243"
PROPIONIC = "encyclopedia page, Propionic acid fermentation"
SYNGAS = "PMC6317499, Table 2"
TERPENOID = "derived by hand beside Gruchattka et al. 2013, Microbial Cell Factories 12:84"

_LYSINE = Question(equation="glucose + ? ammonia -> ? L-lysine", aim="most L-lysine")
_XYLOSE = Question(equation="xylose -> ? ethanol", aim="most ethanol")
_ISOBUTANOL = Question(equation="glucose -> ? isobutanol", aim="most isobutanol")
_PROPIONATE = Question(equation="glucose -> 4/3 propionate + ? acetate")
_PROPIONATE_LACTATE = Question(equation="lactate -> 2/3 propionate + ? acetate")
_ISOPRENE = Question(equation="glucose -> ? isoprene", aim="most isoprene")


def _oxygen_per_product(product: str, question: Question, value: str, row: str) -> Row:
    consumed, produced = made("oxygen"), made(product)
    return Row(
        row=row,
        what=f"oxygen taken up / {product}",
        value=Printed(value, Fraction(1, 20), "printed to one place, 2.75 became 2.8"),
        unit=MOL,
        conditions="carbon dioxide only given off",
        source=DIHYDROXYBUTYRATE,
        status="S",
        question=question,
        read=lambda prediction: -consumed(prediction) / produced(prediction),
    )


_RUMP = Question(
    equation="methanol + ? oxygen -> 2/9 2,4-dihydroxybutyrate + ? carbon dioxide",
    either=("water",),
)
_METHANOL = Question(
    equation="methanol + ? oxygen -> ? 2,4-dihydroxybutyrate + ? carbon dioxide",
    either=("water",),
    aim="most 2,4-dihydroxybutyrate",
)
_GLYCOL = replace(_METHANOL, equation=_METHANOL.equation.replace("methanol", "ethylene glycol"))
NO_FIXATION = "oxygen taken up, carbon dioxide only given off"
ACID = "2,4-dihydroxybutyrate"

_PUBLISHED = [
    number("A1.8", "L-lysine / glucose", Fraction(6, 7), VILLADSEN, "S", _LYSINE, conditions=FREE),
    number("A1.15", "ethanol / xylose", Fraction(5, 3), TRINH, "S", _XYLOSE, conditions=FREE),
    number("A1.15", "ethanol / xylose", Printed("1.67"), TRINH, "S", _XYLOSE, conditions=FREE),
    number(
        "A1.15",
        "carbon dioxide / xylose",
        Fraction(5, 3),
        TRINH,
        "S",
        _XYLOSE,
        "carbon dioxide",
        conditions=FREE,
    ),
    number(
        "A1.15",
        "ethanol / xylose",
        Printed("0.51"),
        TRINH,
        "S",
        _XYLOSE,
        "ethanol",
        unit="g/g",
        conditions=FREE,
    ),
    _oxygen_per_product(ACID, _RUMP, "2.8", "A1.16"),
    number(
        "A1.16",
        f"{ACID} / methanol",
        Printed("0.83"),
        DIHYDROXYBUTYRATE,
        "S",
        _RUMP,
        ACID,
        unit="g/g",
        conditions="2/9 mol/mol, the limit of its route, given",
    ),
    number(
        "A1.17",
        f"{ACID} / methanol",
        Fraction(1, 4),
        DIHYDROXYBUTYRATE,
        "S",
        _METHANOL,
        conditions=NO_FIXATION,
    ),
    number(
        "A1.17",
        f"{ACID} / methanol",
        Printed("0.94"),
        DIHYDROXYBUTYRATE,
        "S",
        _METHANOL,
        ACID,
        unit="g/g",
        conditions=NO_FIXATION,
    ),
    _oxygen_per_product(ACID, _METHANOL, "2.0", "A1.17"),
    number(
        "A1.17",
        f"{ACID} / methanol, electron limit",
        Fraction(3, 8),
        "derived by hand: 6 e / 16 e",
        "derived by hand",
        Question(equation=f"methanol -> ? {ACID}", aim=f"most {ACID}"),
        conditions=FREE,
    ),
    number(
        "A1.18",
        f"{ACID} / ethylene glycol",
        Fraction(1, 2),
        DIHYDROXYBUTYRATE,
        "S",
        _GLYCOL,
        conditions=NO_FIXATION,
    ),
    number(
        "A1.18",
        f"{ACID} / ethylene glycol",
        Printed("0.97"),
        DIHYDROXYBUTYRATE,
        "S",
        _GLYCOL,
        ACID,
        unit="g/g",
        conditions=NO_FIXATION,
    ),
    _oxygen_per_product(ACID, _GLYCOL, "1.0", "A1.18"),
    number(
        "A1.18",
        f"{ACID} / ethylene glycol, electron limit",
        Fraction(5, 8),
        "derived by hand: 10 e / 16 e",
        "derived by hand",
        Question(equation=f"ethylene glycol -> ? {ACID}", aim=f"most {ACID}"),
        conditions=FREE,
    ),
    number(
        "A1.19", "isobutanol / glucose", Fraction(1), HANDBOOK, "S", _ISOBUTANOL, conditions=FREE
    ),
    number(
        "A1.19",
        "isobutanol / glucose",
        Printed("0.41"),
        HANDBOOK,
        "S",
        _ISOBUTANOL,
        "isobutanol",
        unit="g/g",
        conditions=FREE,
    ),
    number(
        "A1.19",
        "carbon dioxide / glucose",
        Fraction(2),
        HANDBOOK,
        "S",
        _ISOBUTANOL,
        "carbon dioxide",
        conditions=FREE,
    ),
    number(
        "A1.19",
        "water / glucose",
        Fraction(1),
        HANDBOOK,
        "S",
        _ISOBUTANOL,
        "water",
        conditions=FREE,
    ),
    number(
        "A1.22",
        "acetate / glucose",
        Fraction(2, 3),
        PROPIONIC,
        "S",
        _PROPIONATE,
        "acetate",
        conditions="4/3 propionate given",
    ),
    number(
        "A1.22",
        "carbon dioxide / glucose",
        Fraction(2, 3),
        PROPIONIC,
        "S",
        _PROPIONATE,
        "carbon dioxide",
        conditions="4/3 propionate given",
    ),
    number(
        "A1.22",
        "propionate / glucose",
        Printed("0.548"),
        "derived by hand from the equation of the page",
        "derived by hand",
        _PROPIONATE,
        "propionate",
        unit="g/g",
        conditions="4/3 propionate given",
    ),
    number(
        "A1.23",
        "acetate / lactate",
        Fraction(1, 3),
        PROPIONIC,
        "S",
        _PROPIONATE_LACTATE,
        "acetate",
        conditions="2/3 propionate given",
    ),
    number(
        "A1.23",
        "carbon dioxide / lactate",
        Fraction(1, 3),
        PROPIONIC,
        "S",
        _PROPIONATE_LACTATE,
        "carbon dioxide",
        conditions="2/3 propionate given",
    ),
    number(
        "A1.27",
        "isoprene / glucose",
        Fraction(6, 7),
        f"{TERPENOID}: 0.714 C-mol/C-mol, 24 e / 28 e",
        "derived by hand",
        _ISOPRENE,
        conditions=FREE,
    ),
    *(
        Row(
            row="A3.2",
            what=f"carbon monoxide / {product}",
            value=Fraction(value),
            unit=MOL,
            conditions=FREE,
            source=SYNGAS,
            status="S",
            question=Question(equation=f"carbon monoxide -> ? {product}", aim=f"most {product}"),
            read=inverse(best),
        )
        for product, value in (
            ("acetate", 4),
            ("ethanol", 6),
            ("n-butanol", 12),
            ("hydrogen", 1),
            ("methane", 4),
        )
    ),
]

ELEMENT_ROWS: tuple[Row, ...] = (
    *(row for item in PRODUCTS for row in _rows_of(item)),
    *_PUBLISHED,
)
