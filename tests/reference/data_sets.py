"""Published data sets: rows A4.3, B11, E3, E7, E8, E9, E12, E13, E17, E18, E19.

Amounts are those printed, exactly; yields are their quotients. The sources give no errors: where a
set is judged, each amount is taken as good to a share of itself that its row states.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from tests.reference.rows import Printed

if TYPE_CHECKING:
    from tests.reference.rows import Status

__all__ = ["CHEMOSTATS", "DATA_SETS", "DataSet", "named"]


@dataclass(frozen=True, slots=True, kw_only=True)
class DataSet:
    """Measured amounts of one culture, with the recoveries that they give.

    Parameters
    ----------
    row : str
        Row of the table of published values.
    name : str
        Which of the sets of that row.
    equation : str
        Overall equation; water is on either side.
    compounds : tuple of (str, str)
        Formulas of compounds that the library does not have, or not this one.
    basis : str
        Amount of substrate, in the unit of ``amounts``.
    amounts : str
        Compound and amount, ``name = amount`` separated by commas.
    error : str
        Standard deviation taken for each amount, as a share of it.
    recoveries : tuple of (str, Printed)
        Quantity and recovery [%].
    conditions : str
        What else decides the numbers.
    source : str
        Where they stand.
    status : Status
        How the recoveries were come by.
    """

    row: str
    name: str
    equation: str
    compounds: tuple[tuple[str, str], ...] = ()
    basis: str = "1"
    amounts: str
    error: str = "1/20"
    recoveries: tuple[tuple[str, Printed], ...]
    conditions: str
    source: str
    status: Status

    def __str__(self) -> str:
        return f"{self.row} {self.name}"

    def yields(self) -> dict[str, Fraction]:
        """Measured yields by compound [mol/mol basis]."""
        pairs = (item.split(" = ") for item in self.amounts.split(", "))
        return {name: Fraction(amount) / Fraction(self.basis) for name, amount in pairs}

    def text(self, *left_out: str, scale: str = "1") -> str:
        """Text of the case file, some measured values left out, errors times a factor."""
        lines = [f"case: {self}", f"equation: {self.equation}", "either side: [water]"]
        if self.compounds:
            lines += ["compounds:", *(f"  {name}: {form}" for name, form in self.compounds)]
        lines.append("measured:")
        for name, value in self.yields().items():
            if name not in left_out:
                lines.append(
                    f"  {name}: {value} ± {value * Fraction(self.error) * Fraction(scale)}"
                )
        return "\n".join(lines) + "\n"


def _percent(**quantities: str) -> tuple[tuple[str, Printed], ...]:
    return tuple((name, Printed(text)) for name, text in quantities.items())


CELLS = (("biomass", "CH1.8O0.5N0.2"),)
YEAST = (("biomass", "CH1.76O0.56N0.168"),)
WAHL = "S. A. Wahl, TU Delft course exercise 2015/16; recoveries derived by hand"
# Rates in mol/C-mol biomass/h: growth, glucose, ethanol, glycerol, carbon dioxide; then recoveries
# of carbon and electrons.
_CHEMOSTATS = (
    ("0.28", "0.50", "0.71", "0.12", "0.89", "98.3", "94.7"),
    ("0.21", "0.39", "0.56", "0.09", "0.73", "99.6", "94.5"),
    ("0.15", "0.29", "0.44", "0.07", "0.59", "105.2", "98.9"),
    ("0.10", "0.22", "0.33", "0.04", "0.47", "102.3", "93.4"),
    ("0.06", "0.15", "0.25", "0.03", "0.38", "114.4", "101.9"),
)
CHEMOSTATS = tuple(
    DataSet(
        row="B11",
        name=f"at {growth} 1/h",
        equation="glucose + ? ammonia -> ? biomass + ? ethanol + ? glycerol + ? carbon dioxide",
        compounds=YEAST,
        basis=glucose,
        amounts=f"biomass = {growth}, ethanol = {ethanol}, glycerol = {glycerol}, "
        f"carbon dioxide = {carbon_dioxide}",
        error="3/100",
        recoveries=_percent(carbon=carbon, electrons=electrons),
        conditions="yields are rates over that of glucose",
        source=WAHL,
        status="derived by hand",
    )
    for growth, glucose, ethanol, glycerol, carbon_dioxide, carbon, electrons in _CHEMOSTATS
)
THERMOCELLUM = "PNAS 2016 113:13180, Table S1, PMC5135332"
PRODUCTS = (
    "? biomass + ? lactate + ? formate + ? acetate + ? ethanol + ? hydrogen + ? carbon dioxide"
)
CELLOBIOSE = (
    "biomass = 8.32, lactate = 5.9, formate = 4.9, acetate = 8.6, ethanol = 14.7, hydrogen = 12.4"
)
THERMOANAEROBACTER = "Frontiers in Microbiology 2016 7:1330, Table 3, PMC5002420"


def _thermoanaerobacter(strain: str, glucose: str, amounts: str, gas: str, carbon: str) -> DataSet:
    """A strain of row E9: products are per mol glucose, glucose and carbon dioxide in mM."""
    return DataSet(
        row="E9",
        name=strain,
        equation="glucose -> ? hydrogen + ? acetate + ? lactate + ? ethanol + ? carbon dioxide",
        amounts=f"{amounts}, carbon dioxide = {Fraction(gas) / Fraction(glucose)}",
        recoveries=_percent(carbon=carbon),
        conditions="carbon dioxide over glucose; cells are not given",
        source=f"{THERMOANAEROBACTER}; recovery derived by hand from the listed products",
        status="derived by hand",
    )


DATA_SETS = (
    DataSet(
        row="A4.3",
        name="butanol strain",
        equation="glucose + ? ammonia -> ? biomass + ? pyruvate + ? lactate + ? acetate"
        " + ? ethanol + ? butyrate + ? n-butanol + ? carbon dioxide",
        compounds=(("biomass", "CH1.77O0.49N0.24"),),
        basis="46.39",
        # 1.38 + 18.53 + 2 * 2.06 + 2 * 22.84
        amounts="biomass = 15.42, pyruvate = 15.45, lactate = 8.64, acetate = 1.38, "
        "ethanol = 18.53, butyrate = 2.06, n-butanol = 22.84, carbon dioxide = 69.71",
        recoveries=_percent(carbon="106.6"),
        conditions="one carbon dioxide for each acetyl unit of a product, which is not measured;"
        " over 100 % because of yeast extract",
        source="aem.asm.org highwire table 9352, strain EB216, 72 h: 107 %; 106.6 derived by hand",
        status="S",
    ),
    *CHEMOSTATS,
    DataSet(
        row="E7",
        name="as measured",
        equation=f"cellobiose + ? ammonia -> {PRODUCTS}",
        compounds=(("biomass", "C5H8O2N"),),
        basis="11.8",
        amounts=CELLOBIOSE,
        recoveries=(
            ("carbon", Printed("78.2")),
            ("carbon", Printed("78.4", Fraction(2, 10), "as printed; the amounts give 78.2")),
        ),
        conditions="41.6 mM carbon of biomass are 8.32 mM; carbon dioxide does not count",
        source=THERMOCELLUM,
        status="S",
    ),
    DataSet(
        row="E7",
        name="with carbon dioxide",
        equation=f"cellobiose + ? ammonia -> {PRODUCTS}",
        compounds=(("biomass", "C5H8O2N"),),
        basis="11.8",
        amounts=f"{CELLOBIOSE}, carbon dioxide = 18.4",
        recoveries=_percent(carbon="91.2", electrons="92.7"),
        conditions="carbon dioxide = acetate + ethanol - formate",
        source=f"{THERMOCELLUM}; carbon dioxide and recoveries derived by hand",
        status="derived by hand",
    ),
    _thermoanaerobacter(
        "strain PCO",
        "17.9",
        "hydrogen = 0.22, acetate = 0.29, lactate = 0.92, ethanol = 0.39",
        "12.2",
        "80.0",
    ),
    _thermoanaerobacter(
        "thermohydrosulfuricus",
        "17.8",
        "hydrogen = 0.61, acetate = 0.38, lactate = 0.64, ethanol = 0.86",
        "22.2",
        "94.1",
    ),
    _thermoanaerobacter(
        "wiegelii",
        "17.7",
        "hydrogen = 0.90, acetate = 0.39, lactate = 0.22, ethanol = 1.45",
        "32.6",
        "103.0",
    ),
    DataSet(
        row="E17",
        name="propionic acid",
        equation="glycerol + ? ammonia -> ? biomass + ? propionate + ? succinate + ? acetate"
        " + ? formate + ? n-propanol + ? carbon dioxide",
        compounds=CELLS,
        amounts="propionate = 0.844, succinate = 0.055, acetate = 0.023, formate = 0.020, "
        "n-propanol = 0.036",
        recoveries=_percent(carbon="97.5", electrons="96.1"),
        conditions="cells are not given",
        source="Barbirato et al. 1997, Applied Microbiology and Biotechnology 47:441, abstract; "
        "recoveries derived by hand",
        status="derived by hand",
    ),
    DataSet(
        row="E18",
        name="citric acid",
        equation="glucose + ? ammonia + ? oxygen -> ? biomass + ? citrate + ? carbon dioxide",
        compounds=CELLS,
        # Oxygen: 0.42 * 180.156 / 31.998.
        amounts="oxygen = 2.3647, biomass = 0.60, citrate = 2/3, carbon dioxide = 1.40",
        recoveries=(
            ("carbon", Printed("100", Fraction(0), "closes exactly")),
            ("electrons", Printed("100", Fraction(1, 5), "42 % of the mass has two digits")),
        ),
        conditions="oxygen 42 % of the mass of the sugar, two thirds of its carbon to citrate",
        source="Folia Microbiologica, doi 10.1007/BF02927594; cells and carbon dioxide derived by"
        " hand",
        status="S",
    ),
    DataSet(
        row="E19",
        name="baker's yeast",
        equation="glucose + ? ammonia + ? oxygen -> ? biomass + ? carbon dioxide",
        compounds=(("biomass", "C6H10NO3"),),
        amounts="ammonia = 0.48, oxygen = 3, biomass = 0.48, carbon dioxide = 3.12",
        recoveries=tuple(
            (quantity, Printed("100", Fraction(0), "closes exactly"))
            for quantity in ("carbon", "electrons", "nitrogen")
        ),
        conditions="oxygen takes up 12 of the 24 electrons; it counts as found",
        source="exercise page: glucose + 3 O2 + 0.48 NH3 -> 0.48 C6H10NO3 + 4.32 H2O + 3.12 CO2",
        status="S",
    ),
)


def named(name: str) -> DataSet:
    """Set of a row and a name."""
    (found,) = [item for item in DATA_SETS if str(item) == name]
    return found
