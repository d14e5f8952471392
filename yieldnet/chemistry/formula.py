"""Chemical formulas in exact fractions.

A formula maps elements to amounts; charge belongs to the compound, but a charge written at the end
of the formula (``HCO3-``, ``Ca+2``, ``NH4^+``) is understood. Hydrate dots are refused: write the
sum, since a comma or a dot between two formulas is read differently by different people.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.chemistry.atomic_weights import atomic_weight, is_element
from yieldnet.foundation.errors import TextError
from yieldnet.foundation.exact import NumberTextError, decimal_text, read_number

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = [
    "MAX_ATOMS",
    "MAX_DEPTH",
    "Formula",
    "FormulaTextError",
    "NitrogenReference",
    "electron_valences",
    "read_formula",
]

MAX_ATOMS = 100_000
"""Most atoms of one element in a formula; more is a slip of the hand [-]."""
MAX_DEPTH = 20
"""Deepest nesting of brackets in a formula [-]."""
MAX_LENGTH = 400
"""Longest formula text; no compound of metabolism comes near [characters]."""

NitrogenReference = str
_NITROGEN = {"ammonia": -3, "nitrogen": 0, "nitrate": 5}
_VALENCE = {"C": 4, "H": 1, "O": -2, "P": 5}
_SULPHUR = {"sulfate": 6, "sulfide": -2}
_OPEN = {"(": ")", "[": "]", "{": "}"}
_TOKEN = re.compile(r"([A-Z][a-z]?)|(\d+(?:\.\d+)?)|([()\[\]{}])", re.ASCII)
_UNCLEAR_CHARGE = re.compile(r"(?:[A-Z][a-z]?\d+|.*[\])}]\d+|.*[A-Z][a-z]?\d\d+)[+-]", re.ASCII)
_CHARGE = re.compile(r"(?:\^?([+-])(\d*)|\^(\d+)([+-]))$", re.ASCII)


class FormulaTextError(TextError):
    """A text that is not a usable formula."""

    usual_code = "YN204"


def electron_valences(
    nitrogen: NitrogenReference = "ammonia", sulphur: str = "sulfate"
) -> dict[str, int]:
    """Available electrons of one mol of each element: see :meth:`Formula.degree_of_reduction`.

    Parameters
    ----------
    nitrogen : {"ammonia", "nitrogen", "nitrate"}
        Nitrogen source that counts as zero.
    sulphur : {"sulfate", "sulfide"}
        Sulphur source that counts as zero.

    Returns
    -------
    dict of str to int
        By element; an element without an agreed valence is not in it [mol/mol].

    Examples
    --------
    >>> electron_valences("nitrate")["N"]
    5
    """
    return {**_VALENCE, "N": _NITROGEN[nitrogen], "S": _SULPHUR[sulphur]}


@dataclass(frozen=True, slots=True)
class Formula:
    """Elements and their amounts in one mol of a compound.

    Parameters
    ----------
    elements : tuple of (str, Fraction)
        Amount of each element, in the order in which it was first written [mol/mol].
    charge : int
        Charge [mol/mol].
    """

    elements: tuple[tuple[str, Fraction], ...]
    charge: int = 0

    def __getitem__(self, element: str) -> Fraction:
        """Amount of one element; 0 if it is not there [mol/mol]."""
        for symbol, amount in self.elements:
            if symbol == element:
                return amount
        return Fraction(0)

    def __str__(self) -> str:
        parts = []
        for symbol, amount in self.elements:
            digits = decimal_text(amount) or f"({amount})"
            parts.append(symbol + ("" if amount == 1 else digits))
        if self.charge:
            size = "" if abs(self.charge) == 1 else str(abs(self.charge))
            sign = ("+" if self.charge > 0 else "-") + size
            unclear = _UNCLEAR_CHARGE.fullmatch("".join(parts) + sign)
            parts.append(f"^{sign}" if unclear else sign)
        return "".join(parts)

    @property
    def molar_mass(self) -> Fraction:
        """Mass of one mol from the abridged standard atomic weights [g/mol].

        Examples
        --------
        >>> float(read_formula("C6H12O6").molar_mass)
        180.156
        """
        return sum(
            (amount * atomic_weight(symbol).value for symbol, amount in self.elements), Fraction(0)
        )

    def degree_of_reduction(
        self, nitrogen: NitrogenReference = "ammonia", sulphur: str = "sulfate"
    ) -> Fraction:
        """Available electrons of one mol, gamma = 4 C + H - 2 O + v(N) N + v(S) S + 5 P - charge.

        Parameters
        ----------
        nitrogen : {"ammonia", "nitrogen", "nitrate"}
            Nitrogen source that counts as zero: v(N) is -3, 0 or 5 [-].
        sulphur : {"sulfate", "sulfide"}
            Sulphur source that counts as zero: v(S) is 6 or -2 [-]. Phosphate is the
            phosphorus reference.

        Returns
        -------
        Fraction
            Electron equivalents per mol of formula, not per mol of carbon [mol/mol].

        Raises
        ------
        FormulaTextError
            If the formula holds an element without an agreed valence.

        References
        ----------
        Roels, J. A. (1983) Energetics and Kinetics in Biotechnology: generalised degree of
        reduction relative to the nitrogen source.

        Examples
        --------
        >>> read_formula("C6H12O6").degree_of_reduction()
        Fraction(24, 1)
        >>> read_formula("CH1.8O0.5N0.2").degree_of_reduction("nitrate")
        Fraction(29, 5)
        """
        valence = electron_valences(nitrogen, sulphur)
        total = Fraction(-self.charge)
        for symbol, amount in self.elements:
            if symbol not in valence:
                raise FormulaTextError(
                    f"element {symbol} in {self} has no agreed valence in the degree of reduction"
                )
            total += valence[symbol] * amount
        return total

    @classmethod
    def of(cls, amounts: Mapping[str, Fraction], charge: int = 0) -> Formula:
        """Formula from a mapping of element to amount; zero amounts are left out."""
        return cls(tuple((symbol, amount) for symbol, amount in amounts.items() if amount), charge)


def read_formula(text: str) -> Formula:
    """Formula from its text.

    Parameters
    ----------
    text : str
        ``C6H12O6``, ``CH1.8O0.5N0.2``, ``Ca(OH)2``, ``HCO3-``, ``NH4^+``, ``Fe+3``.

    Returns
    -------
    Formula
        Elements in written order, and charge.

    Raises
    ------
    FormulaTextError
        If the text is no formula, names no element, or goes beyond the bounds.

    Examples
    --------
    >>> str(read_formula("Ca(OH)2"))
    'CaO2H2'
    >>> read_formula("HCO3-").charge
    -1
    """
    plain = text.strip().replace("−", "-").replace("⁺", "+").replace("⁻", "-")
    if not plain:
        raise FormulaTextError("the formula is empty", "Write it as C6H12O6.")
    if len(plain) > MAX_LENGTH:
        raise FormulaTextError(
            f"a formula of {len(plain)} characters is too long", f"The limit is {MAX_LENGTH}."
        )
    if any(dot in plain for dot in "·•*"):
        raise FormulaTextError(
            f"{plain!r} has a hydrate dot", "Write the sum instead: CuSO4·5H2O is CuSO9H10."
        )
    if _UNCLEAR_CHARGE.fullmatch(plain):
        raise FormulaTextError(
            f"the number before the sign of {plain!r} may be atoms or charge",
            "Write the charge with a caret or after its sign: Ca^2+, Ca+2, SO4^2-.",
        )
    charge = 0
    if found := _CHARGE.search(plain):
        sign, size = (found[1], found[2]) if found[1] else (found[4], found[3])
        charge = int(size or 1) * (1 if sign == "+" else -1) if len(size) < 4 else 0
        if len(size) >= 4:
            raise FormulaTextError(f"the charge of {plain!r} is too large")
        plain = plain[: found.start()]
    return Formula.of(_count(plain), charge)


def _count(text: str) -> dict[str, Fraction]:
    """Amounts of the elements in a text without charge, brackets on a stack of our own."""
    levels: list[dict[str, Fraction]] = [{}]
    awaited: list[str] = []
    tokens = _tokens(text)
    at = 0
    while at < len(tokens):
        token = tokens[at]
        at += 1
        if token in _OPEN:
            if len(levels) > MAX_DEPTH:
                raise FormulaTextError(f"brackets are nested more than {MAX_DEPTH} deep")
            levels.append({})
            awaited.append(_OPEN[token])
            continue
        if token in _OPEN.values():
            if not awaited or awaited.pop() != token:
                raise FormulaTextError(f"{text!r} has a bracket {token!r} that opens nowhere")
            group = levels.pop()
        elif token[0].isalpha():
            if not is_element(token):
                raise FormulaTextError(
                    f"{token!r} in {text!r} is not an element with a standard atomic weight"
                )
            group = {token: Fraction(1)}
        else:
            raise FormulaTextError(f"{text!r} has a number {token!r} where an element belongs")
        times = Fraction(1)
        if at < len(tokens) and tokens[at][0].isdigit():
            times = _amount(tokens[at], text)
            at += 1
        for symbol, amount in group.items():
            total = levels[-1].get(symbol, Fraction(0)) + amount * times
            if total > MAX_ATOMS:
                raise FormulaTextError(
                    f"{total} {symbol} in {text!r} is more than {MAX_ATOMS} atoms",
                    code="YN205",
                )
            levels[-1][symbol] = total
    if awaited:
        raise FormulaTextError(f"{text!r} has a bracket that is never closed")
    if not any(levels[0].values()):
        raise FormulaTextError(f"{text!r} has no atoms")
    return levels[0]


def _amount(digits: str, text: str) -> Fraction:
    try:
        return read_number(digits).value
    except NumberTextError as error:
        raise FormulaTextError(f"{text!r}: {error.reason}", error.hint, "YN205") from None


def _tokens(text: str) -> list[str]:
    tokens: list[str] = []
    at = 0
    while at < len(text):
        found = _TOKEN.match(text, at)
        if found is None:
            hint = "Amounts are written with a point: CH1.8." if text[at] == "," else ""
            if text[at] == ".":
                hint = "If this is a hydrate, write the sum of both parts."
            raise FormulaTextError(f"{text[at]!r} in {text!r} belongs to no formula", hint)
        tokens.append(found[0])
        at = found.end()
    return tokens
