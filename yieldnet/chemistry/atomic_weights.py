"""Abridged standard atomic weights, read once from the table shipped with the package."""

from __future__ import annotations

import csv
from fractions import Fraction
from functools import cache
from importlib.resources import files

from yieldnet.foundation.sourced import SourcedValue

__all__ = ["atomic_weight", "is_element"]


@cache
def _table() -> dict[str, SourcedValue]:
    text = files("yieldnet.chemistry").joinpath("data/atomic_weights.csv").read_text("utf-8")
    return {
        row["symbol"]: SourcedValue(
            value=Fraction(row["weight"]), unit="g/mol", source=row["source"], note=row["name"]
        )
        for row in csv.DictReader(text.splitlines())
    }


def is_element(symbol: str) -> bool:
    """Whether the symbol is an element that has a standard atomic weight.

    Examples
    --------
    >>> is_element("C"), is_element("Xx")
    (True, False)
    """
    return symbol in _table()


def atomic_weight(symbol: str) -> SourcedValue:
    """Abridged standard atomic weight of an element [g/mol].

    Parameters
    ----------
    symbol : str
        Element symbol.

    Returns
    -------
    SourcedValue
        Weight with its source [g/mol].

    Raises
    ------
    KeyError
        If the element has no standard atomic weight.

    Examples
    --------
    >>> float(atomic_weight("C").value)
    12.011
    """
    return _table()[symbol]
