"""Growth of acetogens on gas: row B19, a band of measured yields.

Diender, Stams and Sousa 2015, Frontiers in Microbiology 6:1275, Table 3 (PMC4652020), status S:
1.28 to 3.38 g dry weight per mol carbon monoxide and 0.37 to 1.7 per mol hydrogen, over six
organisms. The best value of a network without maintenance must reach into the band and need not
stay below its end, since it is an upper limit; one of another order would be wrong.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

import yieldnet

if TYPE_CHECKING:
    from pathlib import Path

BANDS = {"carbon monoxide": (1.28, 3.38), "hydrogen": (0.37, 1.7)}
STRAINS = ("Acetobacterium on gas or sugar", "Clostridium on gas or sugar")


@pytest.mark.parametrize("strain", STRAINS)
@pytest.mark.parametrize("gas", BANDS)
def test_biomass_on_gas_lies_in_the_band_of_measured_yields(
    tmp_path: Path, gas: str, strain: str
) -> None:
    path = tmp_path / "case.yaml"
    path.write_text(
        f"case: Growth on {gas}\nnetwork: acetogen\nstrain: {strain}\n"
        f"equation: {gas} + ? ammonia -> ? biomass + ? acetate\n"
        "either side: [carbon dioxide, water]\naim: most biomass\n",
        "utf-8",
    )
    answer = yieldnet.predict(path)
    mass = answer.case.compound("biomass").weight.molar_mass
    assert mass is not None
    low, high = BANDS[gas]
    assert low < answer.best_yield_mol_per_mol() * float(mass) < high
