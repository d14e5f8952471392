"""A cell small enough to be worked by hand, for tests of growth.

CH2O weighs 30.026 g/mol. Growth takes 1/6 glucose and 2 ATP; burning a glucose gives 20 ATP,
fermenting it 2; maintenance is 1 mmol/g/h. With k ATP of maintenance per mol biomass:

- air without end: glucose = 1/6 + (2 + k)/20 = 4/15 + k/20;
- at most 3 oxygen per glucose: burnt = glucose/2 once that is reached, and
  2 + k = 10 glucose + 2 (glucose/2 - 1/6), so glucose = 7/33 + k/11;
- both are equal at k = 4/3.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import yieldnet

if TYPE_CHECKING:
    from pathlib import Path

    from yieldnet.model.case import Case

__all__ = ["GRAMS", "case_of"]

GRAMS = "30.026"
"""Mass of one mol of the biomass [g/mol]."""
NETWORK = """
network: A cell worked by hand
carriers: {ATP: {kind: energy}}
crossing: {in: [glucose, oxygen], out: [biomass, ethanol, carbon dioxide], either: [water]}
reactions:
  burning: glucose + 6 oxygen -> 6 carbon dioxide + 6 water + 20 ATP
  fermenting: glucose -> 2 ethanol + 2 carbon dioxide + 2 ATP
growth:
  biomass: {formula: CH2O}
  equation: 1/6 glucose + GROWTH ATP -> biomass
maintenance: {ATP: {value: 1 mmol/g/h, source: chosen by hand}}
"""
CASE = """
case: A cell worked by hand
network: cell.yaml
equation: glucose + ? oxygen -> ? biomass + ? ethanol + ? carbon dioxide
either side: [water]
"""


def case_of(folder: Path, more: str = "", growth: str = "2", maintenance: bool = True) -> Case:
    """Case of the cell with further lines, other ATP of growth, or without maintenance."""
    text = NETWORK.replace("GROWTH", growth)
    if not maintenance:
        text = text[: text.index("maintenance:")]
    (folder / "cell.yaml").write_text(text, "utf-8")
    path = folder / "cell.case.yaml"
    path.write_text(CASE + more, "utf-8")
    return yieldnet.read_case(path)
