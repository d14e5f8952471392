"""Biomass written as shares of its macromolecules: in a file, or in one line of a command."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.macromolecules import (
    DEFAULT_MAKE_UP,
    PLACES,
    BiomassComposition,
    MakeUp,
    compose,
    find_macromolecule,
    find_make_up,
    macromolecules,
    make_ups,
    monomers,
)
from yieldnet.foundation.exact import NumberTextError, decimal_text, read_number
from yieldnet.foundation.findings import Findings, near
from yieldnet.reading.fields import entries, number, text
from yieldnet.reading.nodes import Kind

if TYPE_CHECKING:
    from yieldnet.chemistry.formula import Formula
    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.reading.fields import Fields
    from yieldnet.reading.nodes import Node

__all__ = ["COMPOSED_KEYS", "Composed", "is_composed", "read_composed", "read_composition_line"]

COMPOSED_KEYS = ("from", "monomers", "normalise")
"""Keys of a biomass that only one put together from macromolecules has."""
_YES = {"yes": True, "no": False}


@dataclass(frozen=True, slots=True, kw_only=True)
class Composed:
    """A biomass put together, as a file takes it.

    Parameters
    ----------
    composition : BiomassComposition
        All of it, exact.
    formula : Formula
        Per mol of carbon, in six decimals.
    minerals : Fraction
        Ash, HPO3 and sulphur, in six decimals [g/g].
    about : str
        How it was put together.
    """

    composition: BiomassComposition
    formula: Formula
    minerals: Fraction
    about: str


@dataclass(slots=True)
class _Shares:
    """Shares as they are read, with what is needed to judge them."""

    findings: Findings
    label: str
    span: SourceSpan | None
    shares: dict[str, Fraction] = field(default_factory=dict)
    ash: Fraction = Fraction(0)
    make_up: MakeUp | None = None
    normalise: bool = False
    sound: bool = True

    def wrong(
        self, code: str, message: str, span: SourceSpan | None, hint: str, left: str = ""
    ) -> None:
        self.findings.add(code, message, span, left=left, hint=hint)
        self.sound = False

    def take(self, name: str, value: Fraction, shown: str, span: SourceSpan | None) -> None:
        """Take one share, or ash."""
        if not 0 <= value <= 1:
            self.wrong(
                "YN885",
                f"{self.label}: the share {shown} of {name!r} is not between 0 and 1",
                span,
                "Write 0.52 for 52 % of the dry weight.",
            )
            return
        if name == "ash":
            self.ash = value
            return
        found = find_macromolecule(name)
        if found is None:
            known = [item.name for item in macromolecules()]
            self.wrong(
                "YN883",
                f"{self.label}: {name!r} is no macromolecule that is known here",
                span,
                near(name, known) or "Known: " + ", ".join(known) + ".",
            )
        elif found.name in self.shares:
            self.wrong("YN885", f"{self.label}: {found.name!r} stands twice", span, "Keep one.")
        else:
            self.shares[found.name] = value

    def result(self) -> Composed | None:
        """The biomass, or ``None`` with findings."""
        if not self.sound:
            return None
        total = sum(self.shares.values(), self.ash)
        if total != 1 and not self.normalise:
            self.wrong(
                "YN884",
                f"{self.label}: macromolecules and ash do not sum to 1",
                self.span,
                "Add what is missing, or say 'normalise: yes' to divide all by their sum.",
                left=f"sum {decimal_text(total) or float(total)}",
            )
            return None
        try:
            cell = compose(self.shares, self.ash, self.make_up, normalise=self.normalise)
        except ValueError as error:
            self.wrong("YN885", f"{self.label}: {error}", self.span, "Give their shares.")
            return None
        formula, minerals = cell.rounded
        return Composed(
            composition=cell, formula=formula, minerals=minerals, about=_words(cell, self.shares)
        )


def _words(cell: BiomassComposition, shares: dict[str, Fraction]) -> str:
    listed = ", ".join(
        f"{name} {decimal_text(value) or float(value)}" for name, value in shares.items()
    )
    scaled = "" if cell.scaled_from is None else ", all divided by their sum"
    return (
        f"put together from {listed}{scaled}; monomers of {cell.make_up.name}"
        f" [{'; '.join(cell.make_up.sources)}]; HPO3 and sulphur counted with the ash;"
        f" rounded to {PLACES} decimals"
    )


def is_composed(fields: Fields) -> bool:
    """Whether a mapping says what biomass is put together from."""
    return any(fields.get(key) is not None for key in COMPOSED_KEYS)


def read_composed(fields: Fields, label: str, findings: Findings) -> Composed | None:
    """Biomass of a mapping with ``from``, ``ash``, ``monomers`` and ``normalise``.

    Parameters
    ----------
    fields : Fields
        The mapping.
    label : str
        Its name in messages.
    findings : Findings
        Receives what is wrong.

    Returns
    -------
    Composed or None
        The biomass; ``None`` with findings.
    """
    node = fields.get("from")
    reading = _Shares(findings, label, fields.span("from"))
    if fields.get("formula") is not None:
        reading.wrong(
            "YN885",
            f"{label} has a formula and is put together from macromolecules",
            fields.span("formula"),
            "Keep 'formula' or 'from'.",
        )
    if node is None:
        lonely = next(name for name in COMPOSED_KEYS if fields.get(name) is not None)
        reading.wrong(
            "YN885",
            f"{label} has {lonely!r} without 'from'",
            fields.span(lonely),
            "Add 'from' with the share of each macromolecule.",
        )
    pairs = entries(node, f"'from' of {label}", findings) if node is not None else ()
    if node is not None and not pairs:
        reading.sound = False
    for key, value in pairs:
        if key.text == "ash":
            reading.wrong(
                "YN885", f"{label}: ash stands in 'from'", key.span, "Write 'ash' beside 'from'."
            )
            continue
        written = number(value, f"the share of {key.text!r} in {label}", findings)
        if written is None:
            reading.sound = False
        else:
            reading.take(key.text, written.value, written.text, value.span)
    ash = fields.number("ash")
    if ash is not None:
        reading.take("ash", ash.value, ash.text, fields.span("ash"))
    elif fields.get("ash") is not None:
        reading.sound = False
    wanted = fields.get("normalise")
    if wanted is not None:
        word = text(wanted, f"'normalise' of {label}", findings)
        if word not in _YES:
            reading.wrong(
                "YN885",
                f"{label}: 'normalise' is {word!r}",
                wanted.span,
                "Write 'normalise: yes' or leave it out.",
            )
        else:
            reading.normalise = _YES[word]
    chosen = fields.get("monomers")
    if chosen is not None:
        _read_make_up(chosen, reading)
    return reading.result()


def _named_make_up(word: str, reading: _Shares, span: SourceSpan | None) -> MakeUp | None:
    found = find_make_up(word)
    if found is None:
        known = [item.name for item in make_ups()]
        reading.wrong(
            "YN883",
            f"{reading.label}: the monomers of {word!r} are not known here",
            span,
            near(word, known) or "Known: " + ", ".join(known) + "; or list your own amounts.",
        )
    return found


def _read_make_up(node: Node, reading: _Shares) -> None:
    """Monomers by the name of an organism, or as amounts."""
    if node.kind is not Kind.MAPPING:
        word = text(node, f"'monomers' of {reading.label}", reading.findings)
        if word is None:
            reading.sound = False
        else:
            reading.make_up = _named_make_up(word, reading, node.span)
        return
    base = find_make_up(DEFAULT_MAKE_UP)
    amounts: dict[str, Fraction] = {}
    for key, value in node.pairs:
        if key.text == "like":
            word = text(value, "'like' of the monomers", reading.findings)
            base = None if word is None else _named_make_up(word, reading, value.span)
            reading.sound = reading.sound and word is not None
            continue
        if key.text not in monomers():
            reading.wrong(
                "YN883",
                f"{reading.label}: {key.text!r} is no monomer that is known here",
                key.span,
                near(key.text, monomers()) or "Known: " + ", ".join(monomers()) + ".",
            )
            continue
        written = number(value, f"the amount of {key.text!r}", reading.findings)
        if written is None:
            reading.sound = False
        elif written.value < 0:
            reading.wrong(
                "YN885",
                f"{reading.label}: the amount {written.text} of {key.text!r} is negative",
                value.span,
                "Write what there is of it, in any unit of amount; ratios count.",
            )
        else:
            amounts[key.text] = written.value
    if base is not None:
        reading.make_up = base.with_amounts(amounts) if amounts else base


def read_composition_line(
    line: str, monomers_of: str = DEFAULT_MAKE_UP, *, normalise: bool = False
) -> tuple[Composed | None, Findings]:
    """Biomass of a line such as ``protein 0.52, RNA 0.16, ..., ash 0.05``.

    Parameters
    ----------
    line : str
        Macromolecules with their shares, comma between.
    monomers_of : str
        Organism whose monomers are taken.
    normalise : bool
        Whether all are divided by their sum.

    Returns
    -------
    Composed or None
        The biomass; ``None`` with findings.
    Findings
        What is wrong.

    Examples
    --------
    >>> composed, _ = read_composition_line("glycogen 0.95, ash 0.05")
    >>> str(composed.formula)
    'CH1.666667O0.833333'
    """
    findings = Findings()
    reading = _Shares(findings, "the biomass", None, normalise=normalise)
    seen_ash = False
    for piece in line.split(","):
        name, _, digits = piece.strip().rpartition(" ")
        try:
            written = read_number(digits)
        except NumberTextError as error:
            reading.wrong(error.code, f"{piece.strip()!r}: {error.reason}", None, error.hint)
            continue
        if not name.strip():
            reading.wrong(
                "YN885",
                f"{piece.strip()!r} names no macromolecule",
                None,
                "Write 'protein 0.52', with a decimal point and a comma between the parts.",
            )
            continue
        if name.strip() == "ash" and seen_ash:
            reading.wrong("YN885", "the biomass: 'ash' stands twice", None, "Keep one.")
        seen_ash = seen_ash or name.strip() == "ash"
        reading.take(name.strip(), written.value, written.text, None)
    reading.make_up = _named_make_up(monomers_of, reading, None)
    return reading.result(), findings
