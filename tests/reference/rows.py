"""What a reference row is: a question, how to read the answer, and the number that must come out.

A number with its conditions, source and status. ``Status`` says how the number was come by: seen in
the source (``S``), seen on a page that quotes the source (``S2``), from memory, or derived by hand.
Exact fractions are compared exactly; printed decimals within half a unit of their last digit, which
is all that a printed number says, unless the row gives another tolerance and its reason. Comparison
is signed: what is taken up is negative in ``made`` and positive in ``taken_up``.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from yieldnet.model.network import Direction

if TYPE_CHECKING:
    from collections.abc import Callable

    from yieldnet.optimum.proof import Answer
    from yieldnet.prediction.result import Prediction

    Reading = Callable[[Prediction], Fraction]

__all__ = [
    "FOLDER",
    "Answered",
    "Ladder",
    "Printed",
    "Question",
    "Row",
    "Status",
    "best",
    "found_again",
    "grams",
    "inverse",
    "made",
    "number",
    "respiratory_quotient",
    "rung",
    "taken_up",
]

FOLDER = Path(__file__).resolve().parent
Status = Literal["S", "S2", "from memory", "derived by hand"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Question:
    """A case, as the text of its file or the path of one.

    Parameters
    ----------
    equation : str
        Overall equation.
    either : tuple of str
        Compounds of either side.
    network, strain : str
        Name of a file of ``networks``, or of a shipped network; empty for elements alone.
    knock_outs : tuple of str
        Reactions or groups.
    aim : str
        As in a case file.
    file : str
        A path below this folder, instead of all the above.
    """

    equation: str = ""
    either: tuple[str, ...] = ("carbon dioxide", "water")
    network: str = ""
    strain: str = ""
    knock_outs: tuple[str, ...] = ()
    aim: str = ""
    file: str = ""

    def __str__(self) -> str:
        parts = (self.equation, self.network, self.strain, *self.knock_outs, self.aim)
        return self.file or "; ".join(part for part in parts if part)

    def text(self) -> str:
        """Text of the case file."""
        lines = ["case: reference", f"equation: {self.equation}"]
        if self.network:
            own = FOLDER / "networks" / f"{self.network}.yaml"
            lines.append(f"network: {own if own.exists() else self.network}")
        if self.strain:
            lines.append(f"strain: {self.strain}")
        if self.aim:
            lines.append(f"aim: {self.aim}")
        for key, names in (("either side", self.either), ("knock-outs", self.knock_outs)):
            if names:
                lines += [f"{key}:", *(f"  - {name}" for name in names)]
        return "\n".join(lines) + "\n"


@dataclass(frozen=True, slots=True, kw_only=True)
class Answered:
    """The answer to a question, and every answer of the solver on the way to it."""

    prediction: Prediction
    answers: tuple[Answer, ...]


@dataclass(frozen=True, slots=True)
class Printed:
    """A number as printed.

    Parameters
    ----------
    text : str
        Its digits.
    tolerance : Fraction or None
        How far off the answer may be; ``None`` for half a unit of the last digit.
    why : str
        Reason of another tolerance.
    """

    text: str
    tolerance: Fraction | None = None
    why: str = "half a unit of the last printed digit"

    def agrees(self, value: Fraction) -> bool:
        """Whether a value is this number within its tolerance."""
        half = Fraction(1, 2) / 10 ** len(self.text.partition(".")[2])
        allowed = half if self.tolerance is None else self.tolerance
        return abs(value - Fraction(self.text)) <= allowed


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One reference number.

    Parameters
    ----------
    row : str
        Row of the table of published values that it stands for.
    what : str
        Quantity.
    value : Fraction or Printed
        The number.
    unit : str
        Its unit.
    conditions : str
        What decides the number.
    source : str
        Where it stands, or how it was derived.
    status : Status
        How it was come by.
    question : Question
        The case.
    read : Reading
        Reads the number from the answer.
    """

    row: str
    what: str
    value: Fraction | Printed
    unit: str
    conditions: str
    source: str
    status: Status
    question: Question
    read: Reading

    def agrees(self, found: Fraction) -> bool:
        """Whether the number read is the one expected."""
        if isinstance(self.value, Printed):
            return self.value.agrees(found)
        return found == self.value


@dataclass(frozen=True, slots=True, kw_only=True)
class Ladder:
    """A whole ladder: best value of the aim rung by rung.

    Parameters
    ----------
    row : str
        Row of the table of published values that it belongs to.
    rungs : tuple of (str, Fraction)
        Rung and value [mol/mol].
    source : str
        Where it stands, or how it was derived.
    status : Status
        How it was come by.
    question : Question
        The case.
    """

    row: str
    rungs: tuple[tuple[str, Fraction], ...]
    source: str
    status: Status
    question: Question


def number(
    row: str,
    what: str,
    value: Fraction | Printed,
    source: str,
    status: Status,
    question: Question,
    compound: str = "",
    *,
    unit: str = "mol/mol",
    conditions: str = "",
) -> Row:
    """Row that reads a compound's coefficient [mol/mol] or mass yield [g/g], or else the aim."""
    read: Reading = best
    if compound:
        read = grams(compound) if unit == "g/g" else made(compound)
    return Row(
        row=row,
        what=what,
        value=value,
        unit=unit,
        conditions=conditions or question.strain or str(question),
        source=source,
        status=status,
        question=question,
        read=read,
    )


def best(prediction: Prediction) -> Fraction:
    """Best value of the aim [mol/mol]."""
    assert prediction.aim is not None
    assert prediction.aim.value is not None
    return prediction.aim.value


def rung(name: str) -> Reading:
    """Reads the best value of the aim at a rung of the ladder [mol/mol]."""

    def read(prediction: Prediction) -> Fraction:
        (value,) = [item.value for item in prediction.ladder if item.rung == name]
        assert value is not None
        return value

    return read


def made(compound: str) -> Reading:
    """Reads a coefficient that must be unique, production positive [mol/mol]."""

    def read(prediction: Prediction) -> Fraction:
        (term,) = [item for item in prediction.terms if item.compound == compound]
        assert term.range.low is not None
        assert term.range.single, f"{compound} is not unique"
        return -term.range.low if term.side is Direction.CONSUMED else term.range.low

    return read


def taken_up(compound: str) -> Reading:
    """Reads a unique coefficient, consumption positive [mol/mol]."""
    produced = made(compound)
    return lambda prediction: -produced(prediction)


def inverse(read: Reading) -> Reading:
    """Reads one over a number."""
    return lambda prediction: 1 / read(prediction)


def grams(compound: str, per: str = "") -> Reading:
    """Reads g of a compound, production positive, per g of another or of the basis [g/g].

    Biomass weighs with its ash.
    """

    def mass(prediction: Prediction, name: str) -> Fraction:
        molar = prediction.case.compound(name).weight.molar_mass
        assert molar is not None
        return made(name)(prediction) * molar

    def read(prediction: Prediction) -> Fraction:
        return mass(prediction, compound) / abs(mass(prediction, per or prediction.case.basis.name))

    return read


def respiratory_quotient(prediction: Prediction) -> Fraction:
    """Carbon dioxide given off per oxygen taken up [mol/mol]."""
    assert prediction.respiratory_quotient is not None
    return prediction.respiratory_quotient


def found_again(quantity: str) -> Reading:
    """Reads the share of carbon or electrons that the measured products hold [-]."""

    def read(prediction: Prediction) -> Fraction:
        (item,) = [item for item in prediction.recoveries if item.quantity == quantity]
        assert item.measured is not None
        return item.measured

    return read
