"""Heats, Gibbs energies and yields of growth against published numbers.

The numbers stand in the tables with their sources. S: seen in the source; S2: seen on a page that
quotes it; M: from memory. Where a printed number does not come out, the reason stands beside it.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from math import log, sqrt

import pytest

import yieldnet
from yieldnet.chemistry.atomic_weights import atomic_weight
from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.gibbs import (
    STANDARD_PH,
    Part,
    biomass_gibbs,
    electron_energy,
    proton_energy,
    reaction_gibbs,
)
from yieldnet.chemistry.library import biomass_entries, find_biomass, find_compound
from yieldnet.chemistry.thermochemistry import (
    AMMONIA_HEAT,
    BIOMASS_ELECTRON_ENERGY,
    CALORIMETRIC_OXYGEN_HEAT,
    ELECTRON_HEAT,
    GENERIC_BIOMASS,
    TEXTBOOK_OXYGEN_HEAT,
    Species,
    combustion_names,
    gibbs_names,
    heat_of_biomass,
    heat_of_combustion,
    species_of,
)
from yieldnet.prediction.biomass_methods import (
    dissipation,
    yield_by_dissipation,
    yield_by_electrons,
)

# Heats of combustion -----------------------------------------------------------------------------

# Villadsen, Nielsen, Liden 2003, Bioreaction Engineering Principles, Table 4.3, p. 104 (S):
# kJ/mol and kJ per electron as printed. Hydrogen and ammonia per electron follow from the first.
TABLE_4_3 = {
    "formate": (255, 127.5),
    "acetate": (875, 109.5),
    "propionate": (1527, 109.0),
    "butyrate": (2184, 109.2),
    "valerate": (2841, 109.2),
    "lactate": (1367, 114.0),
    "oxalate": (246, 123.0),
    "succinate": (1491, 106.6),
    "fumarate": (1335, 111.3),
    "malate": (1328, 110.7),
    "citrate": (1961, 109.0),
    "acetone": (1790, 112.0),
    "acetaldehyde": (1166, 116.6),
    "ammonia": (383, 127.7),
    "glucose": (2803, 116.8),
    "fructose": (2813, 117.2),
    "galactose": (2805, 117.0),
    "sucrose": (5644, 117.5),
    "lactose": (5651, 117.8),
    "hydrogen": (286, 143.0),
    "methane": (890, 111.3),
    "methanol": (727, 121.2),
    "ethanol": (1367, 113.8),
    "isopropanol": (2020, 112.2),
    "ethylene glycol": (1179, 118.0),
    "formaldehyde": (571, 142.8),
    "ethane": (1560, 111.4),
    "propane": (2220, 110.9),
}
# The printed kJ per electron are rounded unevenly, up to 0.2 off their own quotient.
PRINTED_KJ_PER_ELECTRON = 0.2


@pytest.mark.parametrize("name", TABLE_4_3)
def test_a_heat_of_combustion_per_electron_is_as_printed(name: str) -> None:
    per_mol, per_electron = TABLE_4_3[name]
    heat = heat_of_combustion(name)
    entry = find_compound(name)
    assert heat is not None
    assert entry is not None
    assert heat.value == per_mol
    assert heat.known.status == "seen"
    # Ammonia burns to nitrogen, which therefore is its reference.
    electrons = entry.formula.degree_of_reduction("nitrogen" if name == "ammonia" else "ammonia")
    assert float(heat.value / electrons) == pytest.approx(per_electron, abs=PRINTED_KJ_PER_ELECTRON)


def test_the_printed_mean_and_the_biomass_belong_to_ammonia_as_reference() -> None:
    biomass = heat_of_combustion(GENERIC_BIOMASS)
    assert biomass is not None
    assert biomass.value == 560
    # (560 - 0.2 x 383) / 4.2, worked by hand.
    assert float(biomass.to_ammonia() / Fraction("4.2")) == pytest.approx(115.1, abs=0.05)
    values = [
        Fraction(per_mol) / find_compound(name).formula.degree_of_reduction()  # type: ignore[union-attr]
        for name, (per_mol, _) in TABLE_4_3.items()
        if name != "ammonia"
    ]
    # Printed mean 115, s.d. 6 to 7 (S), over the rows of the book; some are not in our table.
    mean = sum(values) / len(values)
    assert float(mean) == pytest.approx(float(ELECTRON_HEAT), abs=1.5)
    spread = sqrt(sum(float(value - mean) ** 2 for value in values) / (len(values) - 1))
    assert 6 < spread < 10, "hydrogen and formaldehyde, at 143, are in it"


def test_small_molecules_are_the_outliers_of_the_mean() -> None:
    # Named beside the table: formic acid, formaldehyde, hydrogen, oxalic acid, methanol.
    far = {
        name
        for name, (per_mol, _) in TABLE_4_3.items()
        if name != "ammonia"
        and abs(
            Fraction(per_mol) / find_compound(name).formula.degree_of_reduction()  # type: ignore[union-attr]
            - ELECTRON_HEAT
        )
        > 6
    }
    small = {"formate", "formaldehyde", "hydrogen", "oxalate", "methanol"}
    assert small <= far
    # Two acids of several carboxyl groups lie low, by 7 and 5 %, and are not named there.
    assert far - small == {"succinate", "citrate"}


def test_the_oxygen_rules_are_the_published_ones() -> None:
    # Birou, Marison, von Stockar 1987, Biotechnol Bioeng 30:650 (S): 440 kJ/mol oxygen.
    assert CALORIMETRIC_OXYGEN_HEAT == 440
    # Imanaka and Aiba 1976 (S): 106 kcal per mol oxygen in chemostats is 443.5 kJ, 1 % above.
    assert float(CALORIMETRIC_OXYGEN_HEAT) == pytest.approx(106 * 4.184, rel=0.01)
    # Four electrons of 115 kJ (S).
    assert TEXTBOOK_OXYGEN_HEAT == 460


@pytest.mark.parametrize(
    ("name", "measured", "tolerance"),
    [
        # Cordier et al. 1987, Appl Microbiol Biotechnol 25:305 (S): kJ/g dry matter, averages of
        # bacteria and yeasts. Their ash and composition are not printed, so 5 %.
        ("Escherichia coli", 23.13, 0.05),
        ("yeast", 21.21, 0.05),
    ],
)
def test_biomass_burns_with_the_measured_heat(name: str, measured: float, tolerance: float) -> None:
    entry = find_biomass(name)
    assert entry is not None
    heat = heat_of_biomass(entry.formula)
    assert heat is not None
    assert heat.estimated
    assert float(heat.value / entry.formula.molar_mass) == pytest.approx(measured, rel=tolerance)


def test_citric_acid_agrees_with_a_second_source() -> None:
    # Moresi and Parente 2014 (S): 1962 kJ/mol; the table rounds to 1961.
    heat = heat_of_combustion("citrate")
    assert heat is not None
    assert float(heat.value) == pytest.approx(1962, abs=1)


def test_biomass_holds_the_electrons_and_the_heat_of_the_regularities() -> None:
    """Minkevich and Erickson, as quoted (S2): 4.291 e/C; 26.95 kcal per electron to oxygen."""
    per_carbon = [
        float(entry.formula.degree_of_reduction() / entry.formula["C"])
        for entry in biomass_entries()
    ]
    # The quoted mean is of other cells; that of ours lies within 5 % of it.
    assert sum(per_carbon) / len(per_carbon) == pytest.approx(4.291, rel=0.05)
    # 26.95 kcal with a coefficient of variation of 4 %.
    assert float(ELECTRON_HEAT) == pytest.approx(26.95 * 4.184, rel=0.04)


# Against a package of pure compounds -------------------------------------------------------------

# For rows of the book above, the package is a second source. The heats from memory were written
# with the package in view, as their status says: for them this guards against slips, and is no
# independent confirmation. Number by which the package knows a compound; the state is ours.
REGISTRY = {
    "fructose": "57-48-7",
    "mannose": "3458-28-4",
    "galactose": "59-23-4",
    "sorbose": "87-79-6",
    "ribose": "50-69-1",
    "sucrose": "57-50-1",
    "glycerol": "56-81-5",
    "xylitol": "87-99-0",
    "mannitol": "69-65-8",
    "methanol": "67-56-1",
    "ethanol": "64-17-5",
    "n-propanol": "71-23-8",
    "isopropanol": "67-63-0",
    "n-butanol": "71-36-3",
    "isobutanol": "78-83-1",
    "3-methyl-1-butanol": "123-51-3",
    "n-hexanol": "111-27-3",
    "n-octanol": "111-87-5",
    "ethylene glycol": "107-21-1",
    "1,2-propanediol": "57-55-6",
    "1,3-propanediol": "504-63-2",
    "1,4-butanediol": "110-63-4",
    "2,3-butanediol": "513-85-9",
    "formaldehyde": "50-00-0",
    "acetaldehyde": "75-07-0",
    "acetone": "67-64-1",
    "diacetyl": "431-03-8",
    "ethyl acetate": "141-78-6",
    "gamma-butyrolactone": "96-48-0",
    "formate": "64-18-6",
    "acetate": "64-19-7",
    "butyrate": "107-92-6",
    "valerate": "109-52-4",
    "isovalerate": "503-74-2",
    "caproate": "142-62-1",
    "caprylate": "124-07-2",
    "caprate": "334-48-5",
    "laurate": "143-07-7",
    "myristate": "544-63-8",
    "palmitate": "57-10-3",
    "stearate": "57-11-4",
    "acrylate": "79-10-7",
    "oxalate": "144-62-7",
    "malonate": "141-82-2",
    "succinate": "110-15-6",
    "fumarate": "110-17-8",
    "maleate": "110-16-7",
    "itaconate": "97-65-4",
    "glutarate": "110-94-1",
    "2-oxoglutarate": "328-50-7",
    "citrate": "77-92-9",
    "adipate": "124-04-9",
    "sebacate": "111-20-6",
    "dodecanedioate": "693-23-2",
    "ascorbate": "50-81-7",
    "benzoate": "65-85-0",
    "4-hydroxybenzoate": "99-96-7",
    "catechol": "120-80-9",
    "phenol": "108-95-2",
    "styrene": "100-42-5",
    "L-alanine": "56-41-7",
    "L-asparagine": "70-47-3",
    "L-aspartate": "56-84-8",
    "L-glutamate": "56-86-0",
    "L-glutamine": "56-85-9",
    "glycine": "56-40-6",
    "L-isoleucine": "73-32-5",
    "L-leucine": "61-90-5",
    "L-lysine": "56-87-1",
    "L-phenylalanine": "63-91-2",
    "L-proline": "147-85-3",
    "L-serine": "56-45-1",
    "L-threonine": "72-19-5",
    "L-tryptophan": "73-22-3",
    "L-tyrosine": "60-18-4",
    "L-valine": "72-18-4",
    "beta-alanine": "107-95-9",
    "4-aminobutyrate": "56-12-2",
    "caprolactam": "105-60-2",
    "hexamethylenediamine": "124-09-4",
    "1,3-butadiene": "106-99-0",
    "isobutene": "115-11-7",
    "ethylene": "74-85-1",
    "ethane": "74-84-0",
    "propane": "74-98-6",
    "isoprene": "78-79-5",
    "tetradecane": "629-59-4",
    "hexadecane": "544-76-3",
    "methane": "74-82-8",
    "carbon monoxide": "630-08-0",
    "hydrogen": "1333-74-0",
    "ammonia": "7664-41-7",
    "urea": "57-13-6",
    "hydrogen peroxide": "7722-84-1",
    "hydrogen sulfide": "7783-06-4",
}
# Heats of formation of the products, 298.15 K [kJ/mol] (CODATA, from memory).
BURNT = {"C": -393.51, "H": -285.83 / 2, "S": -909.27 + 285.83}
# Heats differ by a few tenths of a percent between tables, and ours are rounded to 1 kJ.
BETWEEN_TABLES = 0.004
# How far each of these is off was read from the comparison itself; the reasons are our reading.
OUTLIERS = {
    # The book prints 2020, near n-propanol; liquid isopropanol burns with 2006.
    "isopropanol": 0.0075,
    # Old and new values of these crystals and liquids differ by 0.5 to 1.4 %.
    "galactose": 0.006,
    "oxalate": 0.0135,
    "ethylene glycol": 0.005,
}


def _by_package(name: str, number: str, state: str) -> float:
    """Heat of combustion from the heat of formation that the package holds [kJ/mol]."""
    from chemicals import Hfg, Hfl, Hfs

    formed = {"solid": Hfs, "liquid": Hfl, "gas": Hfg}[state](number)
    assert formed is not None, name
    entry = find_compound(name)
    assert entry is not None
    burnt = sum(BURNT.get(symbol, 0.0) * float(n) for symbol, n in entry.formula.elements)
    # Dissolved sulfuric acid takes two of the hydrogens, which are no water then.
    return float(formed) / 1000 - burnt


@pytest.mark.parametrize("name", REGISTRY)
def test_a_heat_of_combustion_agrees_with_the_package(name: str) -> None:
    heat = heat_of_combustion(name)
    assert heat is not None
    expected = _by_package(name, REGISTRY[name], heat.state)
    # One kJ for the rounding of small values.
    allowed = max(1.0, OUTLIERS.get(name, BETWEEN_TABLES) * expected)
    assert float(heat.value) == pytest.approx(expected, abs=allowed)


def test_outliers_are_really_outside() -> None:
    for name in OUTLIERS:
        heat = heat_of_combustion(name)
        assert heat is not None
        expected = _by_package(name, REGISTRY[name], heat.state)
        assert abs(float(heat.value) - expected) > max(1.0, BETWEEN_TABLES * expected), name


def test_atomic_weights_agree_with_a_second_table() -> None:
    import periodictable

    for symbol in ("H", "C", "N", "O", "P", "S", "K", "Na", "Ca", "Mg", "Cl", "Fe"):
        other = float(getattr(periodictable, symbol).mass)
        # Abridged weights have four or five digits.
        assert float(atomic_weight(symbol).value) == pytest.approx(other, rel=2e-4), symbol


@pytest.mark.parametrize("name", [*combustion_names(), *gibbs_names()])
def test_molar_masses_agree_with_a_second_table(name: str) -> None:
    import periodictable

    entry = find_compound(name)
    if entry is None:
        assert name in {"generic biomass", "ATP", "NADH", "NADPH"}
        return
    other = sum(
        float(n) * float(getattr(periodictable, symbol).mass)
        for symbol, n in entry.formula.elements
    )
    assert float(entry.formula.molar_mass) == pytest.approx(other, rel=2e-4)


# Gibbs energies of reactions ---------------------------------------------------------------------

_WATER, _GAS, _H2, _CO = "water", "carbon dioxide", "hydrogen", "carbon monoxide"
Amounts = dict[str, float]
_ISME = "ISME J table, PMC4817626 Table 1"
_BURN = "PMC12125087 Table 1"
_SYNGAS = "PMC6317499 Table 2"
# Printed to two decimals; their values of formation differ from ours in the last digit, times the
# number of molecules. Aerobic rows carry that of oxygen's water most.
CLOSE, WHOLE = 0.15, 0.5
PRINTED: dict[str, tuple[Amounts, float, float, str]] = {
    "D4.1": ({"glucose": -1, _WATER: -2, "acetate": 2, _GAS: 2, _H2: 4}, -215.90, CLOSE, _ISME),
    "D4.2": ({"glucose": -1, "butyrate": 1, _GAS: 2, _H2: 2}, -264.10, CLOSE, _ISME),
    "D4.3": ({"glucose": -1, _H2: -2, "propionate": 2, _WATER: 2}, -359.25, CLOSE, _ISME),
    "D4.4": ({"glucose": -1, "ethanol": 2, _GAS: 2}, -235.00, CLOSE, _ISME),
    "D4.5": ({"acetate": -1, "methane": 1, _GAS: 1}, -35.78, CLOSE, _ISME),
    "D4.6": ({_H2: -1, _GAS: -0.25, "methane": 0.25, _WATER: 0.5}, -32.70, CLOSE, _ISME),
    "D4.7": ({_GAS: -0.5, _H2: -1, "acetate": 0.25, _WATER: 0.5}, -23.76, CLOSE, _ISME),
    "D4.8": ({"butyrate": -1, _WATER: -2, "acetate": 2, _H2: 2}, 48.20, CLOSE, _ISME),
    "D4.9": ({"propionate": -1, _WATER: -2, "acetate": 1, _H2: 3, _GAS: 1}, 71.68, CLOSE, _ISME),
    "D4.10": ({"ethanol": -1, _WATER: -1, "acetate": 1, _H2: 2}, 9.55, CLOSE, _ISME),
    "D4.11": ({"glucose": -1, _WATER: -6, _GAS: 6, _H2: 12}, -25.85, CLOSE, _ISME),
    "D4.12": ({"glucose": -1, "acetate": 3}, -310.92, CLOSE, _ISME),
    "D4.13": ({"glucose": -1, _WATER: -2, "methane": 2, _GAS: 4, _H2: 4}, -287.46, CLOSE, _ISME),
    "D4.14 glucose": ({"glucose": -1, "oxygen": -6, _GAS: 6, _WATER: 6}, -2872.0, CLOSE, _BURN),
    "D4.14 ethanol": ({"ethanol": -1, "oxygen": -3, _GAS: 2, _WATER: 3}, -1318.5, CLOSE, _BURN),
    "D4.14 butyrate": ({"butyrate": -1, "oxygen": -5, _GAS: 4, _WATER: 4}, -2133.7, CLOSE, _BURN),
    "D4.14 propionate": (
        {"propionate": -1, "oxygen": -3.5, _GAS: 3, _WATER: 3},
        -1493.7,
        CLOSE,
        _BURN,
    ),
    "D4.14 acetate": ({"acetate": -1, "oxygen": -2, _GAS: 2, _WATER: 2}, -853.8, CLOSE, _BURN),
    "D4.14 hydrogen": ({_H2: -1, "oxygen": -0.5, _WATER: 1}, -237.2, CLOSE, _BURN),
    "D4.15 hydrogen": ({_CO: -1, _WATER: -1, _H2: 1, _GAS: 1}, -20, WHOLE, _SYNGAS),
    "D4.15 acetate": ({_CO: -1, _WATER: -0.5, "acetate": 0.25, _GAS: 0.5}, -44, WHOLE, _SYNGAS),
    "D4.15 methane": ({_CO: -1, _WATER: -0.5, "methane": 0.25, _GAS: 0.75}, -53, WHOLE, _SYNGAS),
    # Printed -39 where -38.2 follows: 0.8 kJ, more than rounding; their methanol is lower.
    "D4.16 methanol": ({_CO: -1, _H2: -2, "methanol": 1}, -39, 1.0, _SYNGAS),
    "D4.16 ethanol": ({_CO: -1, _H2: -2, "ethanol": 0.5, _WATER: 0.5}, -72, WHOLE, _SYNGAS),
    "D4.16 methane": ({_CO: -1, _H2: -3, "methane": 1, _WATER: 1}, -151, WHOLE, _SYNGAS),
}
BUTANOL: dict[str, tuple[Amounts, float]] = {
    "D4.17 from carbon monoxide": (
        {_CO: -1, _WATER: -5 / 12, "n-butanol": 1 / 12, _GAS: 8 / 12},
        -40,
    ),
    "D4.17 with hydrogen": ({_CO: -1, _H2: -2, "n-butanol": 0.25, _WATER: 0.75}, -81),
}


def _species(name: str) -> Species:
    return species_of(name)[0]


def _standard(amounts: Amounts, ph: float = STANDARD_PH) -> float:
    parts = [Part(species=_species(name), amount=n) for name, n in amounts.items()]
    return reaction_gibbs(parts, ph).standard


def _unbalanced(amounts: Amounts) -> float:
    """Largest sum of an element over a reaction [mol]."""
    total: dict[str, float] = {}
    for name, n in amounts.items():
        entry = find_compound(name)
        assert entry is not None
        for symbol, atoms in entry.formula.elements:
            total[symbol] = total.get(symbol, 0.0) + n * float(atoms)
    return max(map(abs, total.values()))


@pytest.mark.parametrize("row", PRINTED)
def test_a_printed_reaction_energy_comes_out(row: str) -> None:
    amounts, printed, tolerance, _ = PRINTED[row]
    assert _unbalanced(amounts) < 1e-9
    assert _standard(amounts) == pytest.approx(printed, abs=tolerance)


@pytest.mark.parametrize("row", BUTANOL)
def test_the_butanol_rows_do_not_come_out_since_their_butanol_is_another(row: str) -> None:
    """D4.17, printed in PMC6317499 Table 2 (S): both rows point to a butanol 11 to 15 kJ higher."""
    amounts, printed = BUTANOL[row]
    assert _unbalanced(amounts) < 1e-9
    gap = printed - _standard(amounts)
    assert gap > 1
    assert gap / amounts["n-butanol"] == pytest.approx(13, abs=3)


def test_a_printed_energy_of_four_is_that_of_one() -> None:
    """D5.4 (Biotechnol Biofuels s13068-017-0788-y Table 1, S): -38.65 stands beside four turns."""
    one: Amounts = {"ethanol": -1, "acetate": -1, "butyrate": 1, _WATER: 1}
    assert _standard(one) == pytest.approx(-38.65, abs=0.05)
    assert _standard({name: 4 * n for name, n in one.items()}) != pytest.approx(-38.65, abs=100)


def test_a_printed_energy_belongs_to_protons_of_one_mol_per_litre() -> None:
    """D5.5 (same, S): -97.5 for lactate and acetate to butyrate; other rows are at pH 7."""
    amounts: Amounts = {"lactate": -1, "acetate": -1, "butyrate": 1, _WATER: 1, _GAS: 1}
    assert _standard(amounts) == pytest.approx(-57.7, abs=CLOSE)
    bare = [
        Part(species=replace(_species(name), acid_constants=()), amount=n)
        for name, n in amounts.items()
    ]
    assert reaction_gibbs(bare, ph=0.0).standard == pytest.approx(-97.6, abs=CLOSE)
    # At that pH the acids are not ions at all, which the program knows and the table does not.
    assert _standard(amounts, ph=0.0) == pytest.approx(-75.9, abs=0.5)


def test_a_printed_energy_of_lactate_does_not_come_out() -> None:
    """D5.6 (same, S): -6.9 printed; -9.4 follows from the values of formation."""
    amounts: Amounts = {"lactate": -1, _WATER: -1, "acetate": 1, _H2: 2, _GAS: 1}
    assert _standard(amounts) == pytest.approx(-9.4, abs=CLOSE)
    assert abs(_standard(amounts) - -6.9) > 2


# Growth ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("substrate", "expected"),
    [
        # Heijnen and van Dijken 1992; methanol as printed in Heijnen's chapter (S), the others
        # worked by hand from the formula. Whole kJ.
        ("methanol", 698),
        ("glucose", 236),
        ("acetate", 432),
        ("ethanol", 706),
        ("succinate", 297),
        ("glycerol", 428),
        ("formate", 651),
        ("oxalate", 872),
    ],
)
def test_the_dissipation_correlation_gives_its_numbers(substrate: str, expected: int) -> None:
    entry = find_compound(substrate)
    assert entry is not None
    carbon = entry.formula["C"]
    per_carbon = entry.formula.degree_of_reduction() / carbon
    assert dissipation(float(carbon), float(per_carbon)) == pytest.approx(expected, abs=1)


# Growth on oxalate, 0.086 C-mol per C-mol (Heijnen, Examples 1a and 7a, S): in library compounds,
# water counted so that bicarbonate and ions need -5.42 of it.
OXALATE = {
    "oxalate": -5.8140,
    "ammonia": -0.2,
    "oxygen": -1.8570,
    GENERIC_BIOMASS: 1.0,
    "carbon dioxide": 10.628,
    "water": 5.2140,
}


def test_the_equation_of_growth_on_oxalate_follows_from_its_yield() -> None:
    """D6.2 and D6.3: coefficients from 0.086 C-mol/C-mol by carbon, nitrogen, electrons."""
    oxalate = 1 / (2 * 0.086)
    assert -OXALATE["oxalate"] == pytest.approx(oxalate, abs=0.001)
    assert OXALATE["carbon dioxide"] == pytest.approx(2 * oxalate - 1, abs=0.001)
    oxygen = (2 * oxalate - 4.2) / 4
    assert -OXALATE["oxygen"] == pytest.approx(oxygen, abs=0.001)
    assert 1 / oxygen == pytest.approx(0.538, abs=0.001)
    assert 1 / (2 * oxalate - 1) == pytest.approx(0.094, abs=0.0005)
    # Water of the printed equation: 5.414 of ours go into bicarbonate.
    assert OXALATE["water"] - OXALATE["carbon dioxide"] == pytest.approx(-5.414, abs=0.001)


def test_growth_on_oxalate_dissipates_the_printed_energy() -> None:
    """D6.4 (Examples 1b and 7b, S): -1053 kJ/C-mol, all as bicarbonate, ammonium, pH 7."""
    parts = [
        Part(species=species_of(name)[1 if name == "carbon dioxide" else 0], amount=n)
        for name, n in OXALATE.items()
    ]
    # Half a kJ of the printed number, and the table's -39.87 for H+ where pH 7 is -39.96.
    assert reaction_gibbs(parts).standard == pytest.approx(-1053.3, abs=1)


def test_the_yield_on_oxalate_follows_back_from_its_dissipation() -> None:
    entry = find_compound("oxalate")
    oxygen = find_compound("oxygen")
    assert entry is not None
    assert oxygen is not None
    donor = electron_energy(_species("oxalate"), entry.formula, bicarbonate=True)
    acceptor = electron_energy(_species("oxygen"), oxygen.formula, bicarbonate=True)
    assert donor is not None
    assert acceptor is not None
    found = yield_by_dissipation(1053.3, 2, 4.2, donor, acceptor)
    assert found / 2 == pytest.approx(0.086, abs=0.0005)
    # The correlation, 872 kJ, is within its 40 % of the measured 1053.
    assert dissipation(2, 1) == pytest.approx(1053.3, rel=0.4)


@pytest.mark.parametrize(
    ("name", "printed"),
    # D6.5 (Heijnen, Example 7b, S): kJ per electron; 0.1 is what -39.87 for H+ makes.
    [("oxalate", 52.522), ("oxygen", -78.719)],
)
def test_energies_per_electron_are_as_printed(name: str, printed: float) -> None:
    entry = find_compound(name)
    assert entry is not None
    found = electron_energy(_species(name), entry.formula, bicarbonate=True)
    assert found == pytest.approx(printed, abs=0.1)


def test_the_electron_of_biomass_belongs_to_its_energy_of_formation() -> None:
    # D6.5: 33.840 kJ per electron and -67 kJ/C-mol are the same number (S).
    assert float(BIOMASS_ELECTRON_ENERGY) == 33.840
    formula = read_formula("CH1.8O0.5N0.2")
    assert biomass_gibbs(formula) == pytest.approx(-67, abs=0.5)


@pytest.mark.parametrize(
    ("name", "printed"),
    # McCarty's table of half reactions, kJ per electron of a donor (from memory). His glucose is
    # 41.35 and his pyruvate 35.09 with other values of formation.
    [("acetate", 27.40), ("ethanol", 31.18), ("glucose", 41.35), ("pyruvate", 35.09)],
)
def test_half_reactions_are_those_of_the_electron_method(name: str, printed: float) -> None:
    entry = find_compound(name)
    assert entry is not None
    found = electron_energy(_species(name), entry.formula, bicarbonate=False)
    assert found == pytest.approx(printed, abs=0.4)


def test_the_electron_method_gives_its_textbook_share_on_acetate() -> None:
    # Share of electrons in cells 0.59 for aerobic growth on acetate, efficiency 0.6 (from memory).
    found = yield_by_electrons(8, 4, donor=27.40, acceptor=-78.72, pyruvate=35.09)
    assert found * 4 / 8 == pytest.approx(0.59, abs=0.005)


def test_the_electron_bound_is_no_yield_where_carbon_binds_first(checkout_cases: str) -> None:
    """E13: Doran prints 2.90 C-mol/mol for C. utilis on ethanol; two carbon atoms make two."""
    result = yieldnet.energetics(f"{checkout_cases}/most-cells-on-ethanol.yaml")
    biomass = result.case.compound("biomass").formula
    electrons = 12 / float(biomass.degree_of_reduction() / biomass["C"])
    assert electrons == pytest.approx(2.90, abs=0.005)
    assert float(result.biomass_carbon) == pytest.approx(2.0)
    (elements, *_) = result.opinions
    assert elements.value == pytest.approx(2.0)


def test_the_electron_bound_on_glucose_is_as_worked(checkout_cases: str) -> None:
    """E12: 0.863 g/g ash-free and electron-limited is 24/4.14 C-mol/mol (worked by hand)."""
    result = yieldnet.energetics(f"{checkout_cases}/most-cells-on-glucose.yaml")
    biomass = result.case.compound("biomass").formula
    bound = 24 / float(biomass.degree_of_reduction() / biomass["C"])
    assert float(result.biomass_carbon) == pytest.approx(bound, rel=1e-9)
    grams = bound * float(biomass.molar_mass / biomass["C"]) / 0.95 / 180.156
    assert grams == pytest.approx(0.863, abs=0.001)


@pytest.fixture(scope="module")
def checkout_cases() -> str:
    from tests.reference.rows import FOLDER

    return str(FOLDER / "cases")


# Transformed values ------------------------------------------------------------------------------

# Alberty 2003, Tables 4.2 and 4.3, pp. 79-81 (S): pH 7, 298.15 K. Ionic strength 0.25 mol/L (M).
TRANSFORMED_GIBBS = {
    "succinate": -530.64,
    "sucrose": -667.85,
    "xylose": -342.83,
    "xylulose": -338.49,
    "ribulose": -328.28,
    "L-serine": -225.51,
    "L-tryptophan": 374.49,
    "L-tyrosine": 77.73,
    "L-valine": 89.78,
    "urea": -39.74,
    "sorbose": -422.76,
    # Companions from memory (M).
    "fructose": -426.32,
    "water": -155.66,
}
TRANSFORMED_ENTHALPY = {
    "succinate": -908.70,
    "sucrose": -2208.90,
    "xylose": -1050.04,
    "urea": -319.29,
    "L-valine": -616.50,
    "sorbose": -1268.23,
}
# Debye and Hueckel at 298.15 K, extended with 1.6 (Alberty 2003, from memory): Gibbs and enthalpy.
_GIBBS_ION, _ENTHALPY_ION, _STRENGTH = 2.91482, 1.4775, 0.25


def _transformed(name: str, value: float, factor: float, per_hydrogen: float) -> float:
    species = _species(name)
    assert species.formula is not None
    hydrogens = float(species.formula["H"])
    shape = sqrt(_STRENGTH) / (1 + 1.6 * sqrt(_STRENGTH))
    return (
        value - hydrogens * per_hydrogen + factor * (species.formula.charge**2 - hydrogens) * shape
    )


@pytest.mark.parametrize("name", TRANSFORMED_GIBBS)
def test_species_transform_into_the_printed_gibbs_energies(name: str) -> None:
    value = float(_species(name).gibbs.value)
    found = _transformed(name, value, -_GIBBS_ION, proton_energy(7.0))
    # Two decimals printed; the singly charged form of succinate, 4 %, adds 0.02.
    assert found == pytest.approx(TRANSFORMED_GIBBS[name], abs=0.03)


@pytest.mark.parametrize("name", TRANSFORMED_ENTHALPY)
def test_species_transform_into_the_printed_enthalpies(name: str) -> None:
    enthalpy = _species(name).enthalpy
    assert enthalpy is not None
    found = _transformed(name, float(enthalpy.value), _ENTHALPY_ION, 0.0)
    assert found == pytest.approx(TRANSFORMED_ENTHALPY[name], abs=0.03)


def test_glucose_of_the_reaction_table_is_not_that_of_the_transformed_table() -> None:
    """The first is -917.22, the second -915.9 (from memory -426.71 transformed): 1.3 kJ apart.

    A mixed sum carries that much; the table keeps the one that makes the printed reactions.
    """
    found = _transformed(
        "glucose", float(_species("glucose").gibbs.value), -_GIBBS_ION, proton_energy(7.0)
    )
    assert found - -426.71 == pytest.approx(-1.32, abs=0.03)


def test_hydrolysis_of_sucrose_is_about_minus_thirty() -> None:
    # Plausible published -29.5 kJ (M); with glucose of the other table 1.3 kJ lower.
    amounts = {"sucrose": -1.0, "water": -1.0, "glucose": 1.0, "fructose": 1.0}
    assert _standard(amounts) == pytest.approx(-29.5, abs=2)


# The table itself --------------------------------------------------------------------------------


def test_the_table_is_as_large_as_it_says() -> None:
    assert len(combustion_names()) >= 60
    assert len([name for name in gibbs_names() if _species(name).state != "ratio"]) >= 40


@pytest.mark.parametrize("name", [name for name in gibbs_names() if species_of(name)[0].formula])
def test_a_species_is_its_compound_with_protons_and_waters_off(name: str) -> None:
    entry = find_compound(name) or find_biomass(name)
    assert entry is not None
    for item in species_of(name):
        assert item.formula is not None
        total = dict(item.formula.elements)
        total["H"] = total.get("H", Fraction(0)) + item.protons + 2 * item.waters
        total["O"] = total.get("O", Fraction(0)) + item.waters
        assert {s: n for s, n in total.items() if n} == dict(entry.formula.elements)
        assert item.formula.charge + item.protons == entry.formula.charge


ORGANIC = [
    name
    for name in gibbs_names()
    if (entry := find_compound(name)) is not None
    and entry.formula["C"] > 1
    and all(symbol in "CHON" for symbol, _ in entry.formula.elements)
    and entry.formula.degree_of_reduction() > 2
]


@pytest.mark.parametrize("name", ORGANIC)
def test_gibbs_energy_per_electron_is_that_of_its_kind(name: str) -> None:
    """A slip of a digit from memory would show: compounds of two and more carbon atoms burn with
    105 to 126 kJ per electron, ammonium as zero; glyoxylate, an aldehyde beside an acid, with 129.
    """
    entry = find_compound(name)
    assert entry is not None
    oxygen = find_compound("oxygen")
    assert oxygen is not None
    own = electron_energy(_species(name), entry.formula, bicarbonate=False)
    to = electron_energy(_species("oxygen"), oxygen.formula, bicarbonate=False)
    assert own is not None
    assert to is not None
    assert 105 < own - to < (131 if name == "glyoxylate" else 126)


def test_equilibrium_of_carbon_dioxide_and_bicarbonate_is_at_its_constant() -> None:
    # Henry 0.033 mol/L/bar and pKa 6.35 (from memory): 1 bar at pH 7 holds 0.15 mol/L bicarbonate.
    gas, ion = species_of("carbon dioxide")
    step = reaction_gibbs([Part(species=gas, amount=-1), Part(species=ion, amount=1)])
    expected = -8.314462618e-3 * 298.15 * log(0.033 * 10 ** (7 - 6.35))
    # 0.3 kJ: the two values of formation are of older tables than the constants.
    assert step.standard == pytest.approx(expected, abs=0.3)


def test_nitrogen_is_turned_into_ammonia_by_its_own_heat() -> None:
    glycine = heat_of_combustion("glycine")
    assert glycine is not None
    assert glycine.value - glycine.to_ammonia() == AMMONIA_HEAT
