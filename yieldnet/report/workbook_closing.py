"""Which yields follow the others so that the elements stay closed, and by how much.

In: compounds of a case with exact formulas. Out: closing compounds, those that are free, and exact
ratios between them. A closing compound is carbon dioxide, water, a nitrogen source or oxygen, and
each closes one element; where one is missing from the equation, an element is left open.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.bases import NITROGEN_SOURCES
from yieldnet.chemistry.library import find_compound
from yieldnet.model.network import BIOMASS
from yieldnet.prediction.heat import same_formula

if TYPE_CHECKING:
    from yieldnet.model.case import Case
    from yieldnet.model.network import Compound

__all__ = ["Closing", "closing_of"]

_CLOSERS = (("carbon dioxide", "C"), *((name, "N") for name in NITROGEN_SOURCES), ("water", "H"),
            ("oxygen", "O"))  # fmt: skip
"""What closes which element: oxygen, last, closes what the others leave of the electrons."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Closing:
    """Closing compounds.

    Parameters
    ----------
    free : tuple of Compound
        Basis and every compound that may be changed, in the order of the case.
    closing : tuple of Compound
        Those that follow, in the order of the case.
    elements : tuple of str
        What they close.
    ratios : tuple of tuple of Fraction
        For each free compound what is made of each closing one per mol made of it [mol/mol].
    """

    free: tuple[Compound, ...]
    closing: tuple[Compound, ...]
    elements: tuple[str, ...]
    ratios: tuple[tuple[Fraction, ...], ...]

    @property
    def order(self) -> tuple[Compound, ...]:
        """All compounds, those that close the elements last."""
        return (*self.free, *self.closing)


def closing_of(case: Case, product: str = "") -> Closing:
    """What closes the elements of a case.

    Parameters
    ----------
    case : Case
        The question.
    product : str
        Compound that is sold, which never follows.

    Returns
    -------
    Closing
        Closing compounds with exact ratios.
    """
    chosen: dict[str, Compound] = {}
    for name, element in _CLOSERS:
        for item in case.compounds:
            entry = find_compound(item.name)
            held = item.name in (case.basis.name, product, BIOMASS)
            if entry is None or entry.name != name or held or element in chosen:
                continue
            # Another formula under the name of the library may not close what it should.
            if same_formula(entry.formula, item.formula):
                chosen[element] = item
    closing = tuple(item for item in case.compounds if item in chosen.values())
    free = tuple(item for item in case.compounds if item not in closing)
    elements = tuple(chosen)
    ratios = []
    for item in free:
        rows = [[other.formula[element] for other in closing] for element in elements]
        ratios.append(_solved(rows, [-item.formula[element] for element in elements]))
    return Closing(free=free, closing=closing, elements=elements, ratios=tuple(ratios))


def _solved(rows: list[list[Fraction]], right: list[Fraction]) -> tuple[Fraction, ...]:
    """Solution of a small square system by elimination.

    It always has one: of nitrogen source, carbon dioxide, water and oxygen each holds an element
    that those after it do not.
    """
    table = [[*row, value] for row, value in zip(rows, right, strict=True)]
    size = len(table)
    for k in range(size):
        pivot = next(i for i in range(k, size) if table[i][k])
        table[k], table[pivot] = table[pivot], table[k]
        table[k] = [value / table[k][k] for value in table[k]]
        for i in range(size):
            if i != k and table[i][k]:
                factor = table[i][k]
                table[i] = [
                    value - factor * other for value, other in zip(table[i], table[k], strict=True)
                ]
    return tuple(row[size] for row in table)
