"""Small cases of every outcome, answered once for all tests of what is said of an answer."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

import yieldnet

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from yieldnet.prediction.result import Prediction

NETWORK = """
network: Small
parameters: {po: {value: 1.5, source: from memory}}
carriers:
  ATP: {kind: energy}
  NADH: {kind: redox, formula: H2}
crossing:
  in: [glucose, oxygen, ammonia]
  out: [biomass, ethanol, lactate]
  either: [carbon dioxide, water, hydrogen]
reactions:
  glycolysis: glucose -> 2 pyruvate + 2 NADH + 2 ATP
  lactate dehydrogenase: pyruvate + NADH <-> lactate
  ethanol path: pyruvate + NADH -> ethanol + carbon dioxide
  respiration: NADH + 1/2 oxygen -> water + (po) ATP
  burning: pyruvate + 3 water -> 3 carbon dioxide + 5 NADH
  hydrogenase: hydrogen <-> NADH
growth:
  biomass: {formula: CH1.8O0.5N0.2, ash: 0.05}
  equation: 0.2 glucose + 0.2 ammonia + 2 ATP -> biomass + ? carbon dioxide + ? water + ? NADH
maintenance: {ATP: 2 mmol/g/h}
"""
CASES = {
    # One product, measured biomass, a demand, everything that a network can say.
    "solved": """
case: Solved
network: network.yaml
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? ethanol
either side: [carbon dioxide, water]
conditions: {growth rate: 0.1 ± 0.01 1/h, substrate uptake: 13 mmol/g/h, temperature: 30 degC}
measured: {biomass: 0.3 ± 0.02, ethanol: 1.0 ± 0.1}
demands: {oxygen: at most 1}
aim: most ethanol
knock-outs: [hydrogenase]
""",
    "no aim": """
case: No aim
network: network.yaml
equation: glucose + ? ammonia + ? oxygen -> ? biomass + ? ethanol
either side: [carbon dioxide, water]
""",
    "energy": """
case: Energy
network: network.yaml
equation: glucose + ? oxygen -> ? ethanol
either side: [carbon dioxide, water]
aim: most ATP
""",
    # Without the network hydrogen could feed ethanol without end.
    "half open": """
case: Half open
network: network.yaml
equation: glucose -> ? ethanol + ? lactate
either side: [carbon dioxide, water, hydrogen]
aim: most ATP
parameters: {po: 1}
""",
    "infeasible": """
case: Infeasible
network: network.yaml
equation: glucose + ? oxygen -> ? ethanol
either side: [carbon dioxide, water]
measured: {ethanol: 1.9 ± 0.01}
demands: {oxygen: at least 3}
aim: most carbon dioxide
""",
}
ALONE = {
    # 6 C, 12 H, 6 O against C4H6O4: 24 electrons over 14 give 12/7, with 6/7 carbon dioxide.
    "taken up": """
case: Taken up
equation: glucose -> ? succinate
either side: [carbon dioxide, water]
aim: most succinate
""",
    "runaway": """
case: Runaway
equation: glucose -> ? ethanol
either side: [carbon dioxide, water, hydrogen]
aim: most ethanol
""",
    "charged": """
case: Charged
equation: glucose + ? ammonium -> ? H+ + ? biomass
either side: [carbon dioxide, water, oxygen]
compounds: {ammonium: NH4+, biomass: CH1.8O0.5N0.2}
aim: least H+
measured: {biomass: 1/2}
""",
    "impossible": """
case: Impossible
equation: glucose -> ? ethanol
either side: [carbon dioxide, water]
measured: {ethanol: 2.5 ± 0.1}
""",
}


@pytest.fixture(scope="session")
def answers(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Prediction]:
    """Answers by the name of the case."""
    folder: Path = tmp_path_factory.mktemp("answers")
    (folder / "network.yaml").write_text(NETWORK, "utf-8")
    found: dict[str, Prediction] = {}
    for cases, verb in ((CASES, yieldnet.predict), (ALONE, yieldnet.balance)):
        for name, text in cases.items():
            path = folder / f"{name}.yaml"
            path.write_text(text, "utf-8")
            found[name] = verb(path)
    return found


@pytest.fixture
def predict(tmp_path: Path) -> Callable[..., Prediction]:
    """Answers a case on the small network; a test may write another network beside it first."""
    network = tmp_path / "network.yaml"
    network.write_text(NETWORK, "utf-8")

    def _predict(text: str, **options: bool) -> Prediction:
        path = tmp_path / "case.yaml"
        path.write_text(
            "case: x\nnetwork: network.yaml\neither side: [carbon dioxide, water]\n" + text, "utf-8"
        )
        return yieldnet.predict(path, **options)  # type: ignore[arg-type]

    return _predict
