"""Growth energetics and make-up of cells: rows of B, C2, C11, F1, F5.

Rows B1, B4 to B6, B8, B9, B12, B14 to B16, B18 and B20. B11 and B12 as data, with the fit of z and
maintenance, stand in ``test_data_rows.py``, B13 in ``test_refused.py``. Left out: B2 and B3, whose
costs of transport are not known here; B7, which needs the thesis' own oxygen yields; B10, two
constants; B17 and B19, measured on other strains.
A status in brackets is that of the table of published values.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import pytest

import yieldnet
from tests.reference.rows import Printed
from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.growth_atp import published_atp_yields, theoretical_atp
from yieldnet.chemistry.library import find_compound
from yieldnet.chemistry.macromolecules import compose, find_macromolecule, find_make_up

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.chemistry.macromolecules import BiomassComposition
    from yieldnet.model.case import Case

STOUTHAMER = {
    "protein": Fraction("0.524"),
    "RNA": Fraction("0.157"),
    "DNA": Fraction("0.032"),
    "lipid": Fraction("0.094"),
    "carbohydrate": Fraction("0.166"),
}
"""Cell of Stouthamer 1973, after Morowitz (from memory); what is missing is taken as ash."""


def _within(value: Fraction | float, printed: str, tolerance: str) -> bool:
    return abs(float(value) - float(printed)) <= float(tolerance)


# --- B: ATP ------------------------------------------------------------------------------------


def _cell_of_theory() -> BiomassComposition:
    return compose(STOUTHAMER, 1 - sum(STOUTHAMER.values(), Fraction(0)))


def test_b1_theoretical_yield_on_atp() -> None:
    """B1, 34.7 mmol/g and 28.8 g/mol; Stouthamer 1973, Antonie van Leeuwenhoek 39:545 [S].

    Here ammonium is counted by the nitrogen of the cell, 9.06 mmol/g instead of 8.48 of the table,
    which is 0.3 mmol ATP/g: so within 1 %.
    """
    atp = theoretical_atp(_cell_of_theory())
    without = atp.total - atp.of("ammonium")
    # The rest is the table's own, and with its ammonium the sum is the printed one exactly.
    assert Printed("34.7").agrees(1000 * (without + Fraction("0.00424")))
    assert Printed("28.8").agrees(1 / (without + Fraction("0.00424")))
    assert _within(1000 * atp.total, "34.7", "0.35")
    assert _within(1 / atp.total, "28.8", "0.3")


def test_b1_four_atp_per_amino_acid() -> None:
    """B1, 4 ATP per amino acid polymerised [S]; within 1.2 %, as the mean residue is ours."""
    atp = theoretical_atp(_cell_of_theory())
    protein = find_macromolecule("protein")
    bacterium = find_make_up("Escherichia coli")
    assert protein is not None
    assert bacterium is not None
    residues = STOUTHAMER["protein"] / protein.unit(bacterium).molar_mass
    spent = next(
        item.amount
        for item in atp.steps
        if (item.macromolecule, item.step) == ("protein", "polymerisation")
    )
    assert _within(spent / residues, "4", "0.048")


def test_b4_transport_takes_a_sixth_of_the_atp() -> None:
    """B4, transport takes 15 to 20 % of the ATP; abstract of Stouthamer 1973 [S]."""
    atp = theoretical_atp(_cell_of_theory())
    assert Fraction(15, 100) <= atp.transport / atp.total <= Fraction(20, 100)


@pytest.mark.parametrize(
    ("name", "row", "grams", "millimoles"),
    [
        ("average of growing cultures", "B5", "10.5", "95.2"),  # Bauchop and Elsden 1960 [S2]
        ("Escherichia coli, aerobic chemostat, without maintenance", "B6", "13.9", "71.9"),  # [S2]
    ],
)
def test_published_yields_turned_over(name: str, row: str, grams: str, millimoles: str) -> None:
    assert row
    (item,) = [one for one in published_atp_yields() if one.name == name]
    assert item.low == item.high == Fraction(grams)
    assert Printed(millimoles).agrees(1000 / item.low)


@pytest.fixture
def succinate(checkout: Path) -> Case:
    return yieldnet.read_case(checkout / "examples" / "succinate-from-xylose" / "case.yaml")


def test_b6_and_b8_are_what_a_shipped_network_grows_by(succinate: Case) -> None:
    """B6, 13.9 g/mol without maintenance [S2]; B8, maintenance of 1 to 3 mmol/g/h [S]."""
    curve = yieldnet.growth(succinate, rates=[0.05])
    assert curve.atp_growth is not None
    assert Printed("13.9").agrees(1 / curve.atp_growth)
    assert Fraction(1, 1000) <= curve.atp_maintenance <= Fraction(3, 1000)


YEAST = """
case: Yeast without air
network: {models}/yeast.yaml
strain: without air
equation: glucose + ? ammonia -> ? biomass + ? ethanol + ? glycerol
either side: [carbon dioxide, water]
aim: {aim}
"""


def _yeast(folder: Path, checkout: Path, aim: str) -> Case:
    path = folder / "yeast.case.yaml"
    path.write_text(YEAST.format(models=checkout / "models", aim=aim), "utf-8")
    return yieldnet.read_case(path)


def test_b9_three_atp_from_glucose_6_phosphate(tmp_path: Path, checkout: Path) -> None:
    """B9, 2.8 to 3.2 ATP net; Muir, Williams and Ferenci 1985 [S]. B18, 2 from glucose [S].

    Glycolysis alone gives 3 from glucose 6-phosphate: the 2 from glucose, and the one that
    hexokinase spent.
    """
    result = yieldnet.predict(_yeast(tmp_path, checkout, "most ATP"))
    assert result.aim is not None
    assert result.aim.value == 2
    assert Fraction("2.8") <= result.aim.value + 1 <= Fraction("3.2")


def test_b12_maintenance_costs_half_a_glucose_per_atp(tmp_path: Path, checkout: Path) -> None:
    """B12, qS = ... + mS with 2 ATP per glucose to ethanol [derived by hand]."""
    curve = yieldnet.growth(_yeast(tmp_path, checkout, "most biomass"), rates=[0.06, 0.1, 0.28])
    (piece,) = curve.pieces
    assert piece.maintenance == curve.atp_maintenance / 2


def test_b12_z_as_a_yield_on_atp() -> None:
    """B12, z = 2.10 ATP per C-mol is 11.9 g/mol ATP [derived by hand].

    2.10 is rounded, so the quotient is 11.92 to 11.98.
    """
    mass = read_formula("CH1.76O0.56N0.168").molar_mass
    assert mass / Fraction("2.105") < Fraction("11.95") < mass / Fraction("2.095")


def test_b14_glycerol_takes_up_the_electrons_of_growth(tmp_path: Path, checkout: Path) -> None:
    """B14, 5.0 or 7.5 mmol/g by route, Nordstrom [S]; B11, 16 to 20 mmol/g in all [S].

    The network makes 8.8 mmol/g: more than either route of B14, since its precursors make more
    NADH (serine, glycine, lysine), and less than B11, which holds more than biosynthesis.
    """
    result = yieldnet.predict(_yeast(tmp_path, checkout, "most biomass"))
    glycerol, biomass = (result.coefficient(name).at_aim for name in ("glycerol", "biomass"))
    assert glycerol is not None
    assert biomass is not None
    assert glycerol.single
    assert glycerol.low is not None
    assert biomass.low is not None
    mass = result.case.compound("biomass").weight.molar_mass
    assert mass is not None
    assert Fraction("7.5") < 1000 * glycerol.low / (biomass.low * mass) < 16


def test_b15_equation_of_anaerobic_yeast() -> None:
    """B15, carbon 0.999 and electrons 3.992 of 4 per C-mol glucose; Villadsen, from memory."""
    biomass = read_formula("CH1.74O0.6N0.12")
    per_carbon = {
        "0.137": biomass.degree_of_reduction(),
        "0.510": Fraction(12, 2),
        "0.077": Fraction(14, 3),
        "0.275": Fraction(0),
    }
    assert Printed("0.999").agrees(sum(map(Fraction, per_carbon), Fraction(0)))
    electrons = sum((Fraction(c) * e for c, e in per_carbon.items()), Fraction(0))
    assert Printed("3.992").agrees(electrons)


def test_b16_anaerobic_yeast_makes_a_tenth_of_its_sugar(tmp_path: Path, checkout: Path) -> None:
    """B16, about 0.10 g/g and 14 to 16 g/mol ATP; Verduyn and others 1990, from memory.

    The network's growth alone is at the upper end, with maintenance at 0.2 1/h inside.
    """
    curve = yieldnet.growth(_yeast(tmp_path, checkout, "most biomass"), rates=[0.1, 0.2])
    assert curve.atp_growth is not None
    assert 1 / curve.atp_growth / 1000 == pytest.approx(0.016)
    slow, fast = curve.points
    assert slow.yield_mol is not None
    assert fast.y_atp is not None
    assert Printed("0.10").agrees(curve.grams_per_gram(slow.yield_mol))
    assert 14 <= fast.y_atp <= 16


def test_b20_gibbs_energy_of_maintenance(tmp_path: Path, checkout: Path) -> None:
    """B20, 3.3 kJ/C-mol/h without air and 4.5 with it, 298 K; Tijhuis and others 1993, from memory.

    Maintenance of the yeast network times the Gibbs energy of what it burns: glucose to ethanol
    -235.0 kJ/mol (row D4.4) [S], glucose burnt -2872.0 (row D4.14) [S]. A third is allowed,
    which is about the scatter of that correlation.
    """
    without = yieldnet.growth(_yeast(tmp_path, checkout, "most biomass"), rates=[0.1])
    burning = yieldnet.growth(checkout / "examples" / "growth" / "case.yaml", rates=[0.3])
    for curve, gibbs, published in ((without, "235.0", "3.3"), (burning, "2872.0", "4.5")):
        mass = curve.weight.molar_mass
        assert mass is not None
        spent = curve.pieces[0].maintenance * mass * Fraction(gibbs)
        assert abs(spent / Fraction(published) - 1) < Fraction(1, 3)


# --- C and F: what cells are made of -----------------------------------------------------------

YEAST_SHARES = {
    "protein": "0.450",
    "glycogen": "0.084",
    "trehalose": "0.008",
    "mannan": "0.131",
    "carbohydrate": "0.184",
    "RNA": "0.063",
    "DNA": "0.004",
    "free amino acids": "0.011",
    "lipid": "0.029",
}
"""F5: anaerobic chemostat at 0.1 1/h; Schulze 1995, Oura 1972, Bruinenberg and others 1983 [S2]."""


def _yeast_cell() -> BiomassComposition:
    shares = {name: Fraction(text) for name, text in YEAST_SHARES.items()}
    return compose(shares, Fraction("0.05"), find_make_up("yeast"), normalise=True)


def test_f5_the_printed_shares_sum_to_101_4_percent() -> None:
    assert _yeast_cell().scaled_from == Fraction("1.014")


def test_f5_whole_cell_from_its_macromolecules() -> None:
    """F5, about CH1.61O0.53N0.16, 38.8 mmol C/g, kappa 4.08 [S2, recomputed by hand].

    The printed formula counts H and O of phosphate, and the printed kappa those but not the
    phosphorus; the lipid of the hand calculation is not told, so 0.01 and 0.1 mmol/g are allowed.
    """
    cell = _yeast_cell()
    whole = cell.whole_formula
    assert _within(whole["H"], "1.61", "0.01")
    assert _within(whole["O"], "0.53", "0.01")
    assert Printed("0.16").agrees(whole["N"])
    assert _within(1000 * cell.moles("C"), "38.8", "0.1")
    as_printed = 4 + whole["H"] - 2 * whole["O"] - 3 * whole["N"]
    assert Printed("4.08").agrees(as_printed)
    # With phosphorus counted, the electrons are those of the formula that balances use.
    assert cell.degree_of_reduction == as_printed + 5 * whole["P"]


def test_f5_and_c11_protein_of_yeast() -> None:
    """F5, CH1.582O0.313N0.271 from the amino acids; C11, CH1.581O0.318N0.275S0.003 [S2].

    F5 is the same calculation; C11 was measured on another culture: 0.006 is allowed.
    """
    protein, yeast = find_macromolecule("protein"), find_make_up("yeast")
    assert protein is not None
    assert yeast is not None
    unit = protein.unit(yeast)
    for element, own, printed in (
        ("H", "1.582", "1.581"),
        ("O", "0.313", "0.318"),
        ("N", "0.271", "0.275"),
        ("S", "0.003", "0.003"),
    ):
        share = unit[element] / unit["C"]
        assert Printed(own).agrees(share)
        assert _within(share, printed, "0.006")
    amounts = sum((amount for _, amount in yeast.of_kind("amino acids")), Fraction(0))
    assert amounts == Fraction("3.685")
    assert Printed("0.400").agrees(amounts * unit.molar_mass / 1000)


def test_c2_bacterium_from_its_macromolecules() -> None:
    """C2, CH1.77O0.49N0.24, kappa 4.07 [S], against shares of Stouthamer 1973 (from memory).

    Elemental analysis keeps some water, which moves H and O and no electron: so electrons are
    compared, within 3 %, and nitrogen within 0.02.
    """
    cell = _cell_of_theory()
    assert _within(cell.degree_of_reduction, "4.07", "0.12")
    assert _within(cell.formula["N"], "0.24", "0.02")


def test_f1_carbon_and_electrons_of_the_precursors() -> None:
    """F1, 42.56 mmol C/g and 174.8 meq/g; Neidhardt and others 1990, from memory.

    Electrons: precursors 145.5, NADPH 18.225 used and NADH 3.547 made, two each.
    """
    amounts = {
        "glucose 6-phosphate": "0.205",
        "fructose 6-phosphate": "0.0709",
        "ribose 5-phosphate": "0.8977",
        "erythrose 4-phosphate": "0.361",
        "dihydroxyacetone phosphate": "0.129",
        "3-phosphoglycerate": "1.496",
        "phosphoenolpyruvate": "0.5191",
        "pyruvate": "2.8328",
        "acetyl-CoA": "3.7478",
        "2-oxoglutarate": "1.0789",
        "oxaloacetate": "1.7867",
    }
    carbon = electrons = Fraction(0)
    for name, text in amounts.items():
        entry = find_compound(name)
        assert entry is not None
        carbon += Fraction(text) * entry.formula["C"]
        electrons += Fraction(text) * entry.formula.degree_of_reduction()
    assert Printed("42.56").agrees(carbon)
    assert Printed("145.5").agrees(electrons)
    assert Printed("174.8").agrees(electrons + 2 * (Fraction("18.225") - Fraction("3.547")))


def test_the_library_holds_many_organisms_each_with_source_and_status() -> None:
    from yieldnet.chemistry.library import biomass_entries

    organisms = {" ".join(item.name.split(",")[0].split()[:2]) for item in biomass_entries()}
    assert len(organisms) >= 15
    assert all(item.source and item.status for item in biomass_entries())
