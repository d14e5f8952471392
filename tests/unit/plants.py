"""Cases with a plant, as texts, for several tests."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.plant.plant import plant_case
from yieldnet.reading.case_file import load_case

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.model.case import Case
    from yieldnet.plant.sheet import PlantSheet

__all__ = ["AEROBIC", "LACTATE", "NETWORK", "case_at", "sheet_at"]

LACTATE = """\
case: Lactate
equation: glucose -> ? lactate
plant:
  product: lactate
  output: 8000 t/y
  on-stream: 8000 h/y
"""
AEROBIC = """\
case: Fodder yeast
compounds:
  biomass: {formula: CH1.84O0.55N0.2, ash: 0.05}
equation: glucose + ? ammonia + ? oxygen -> ? biomass
either side: [carbon dioxide, water]
measured:
  biomass: 0.5 exact g/g
plant:
  product: biomass
  output: 8000 t/y
  on-stream: 8000 h/y
"""
NETWORK = """\
case: Grow, then make lactate
network: NETWORK
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? lactate + ? acetate
either side: [carbon dioxide, water]
conditions: {substrate uptake: 5 mmol/g/h}
aim: most lactate
plant:
  output: 8000 t/y
  on-stream: 8000 h/y
  titre: 90 g/L
  productivity: 3 g/L/h
"""


def case_at(folder: Path, text: str) -> Case:
    """Case of a text; it must be good."""
    path = folder / "case.yaml"
    path.write_text(text, "utf-8")
    case, findings = load_case(str(path))
    assert case is not None, [str(item) for item in findings]
    return case


def sheet_at(folder: Path, text: str) -> PlantSheet:
    """Plant sheet of a text."""
    return plant_case(case_at(folder, text))
