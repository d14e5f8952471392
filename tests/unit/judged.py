"""Small data sets that can be judged on paper, for the tests of everything that judges data.

Fermentation: glucose -> a ethanol + b carbon dioxide. Carbon says 2 a + b = 6 and electrons say
12 a = 24, so a = b = 2 and both measured values are checked twice.

Two products: glucose -> a ethanol + b lactate, with carbon dioxide and water on either side.
Electrons say 12 a + 12 b = 24; the other balances only tell carbon dioxide = a and water = 0.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import yieldnet
from yieldnet.model.case import Correlation, Measurement

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path
    from typing import Any

    from yieldnet.foundation.findings import Findings
    from yieldnet.model.case import Case
    from yieldnet.prediction.reconciliation import Reconciliation

    CaseOf = Callable[[str], tuple[Case | None, Findings]]

NETWORK = """
network: Both together
crossing: {in: [glucose], out: [ethanol, lactate], either: [carbon dioxide, water]}
reactions:
  together: glucose -> ethanol + lactate + carbon dioxide
"""
"""Ethanol, lactate and carbon dioxide in one reaction: ethanol and lactate must be the same."""
FERMENTATION = "case: Fermentation\nequation: glucose -> ? ethanol + ? carbon dioxide\n"
TWO_PRODUCTS = (
    "case: Two products\nequation: glucose -> ? ethanol + ? lactate\n"
    "either side: [carbon dioxide, water]\n"
)


def case_from(case_of: CaseOf, text: str) -> Case:
    """Case of a text that is good."""
    case, findings = case_of(text)
    assert case is not None, findings.items
    return case


def fermentation(ethanol: str, carbon_dioxide: str, more: str = "") -> str:
    """Text of the fermentation with its measured values."""
    return (
        f"{FERMENTATION}measured: {{ethanol: {ethanol}, carbon dioxide: {carbon_dioxide}}}\n{more}"
    )


def two_products(ethanol: str, lactate: str, more: str = "") -> str:
    """Text of the two products with their measured values."""
    return f"{TWO_PRODUCTS}measured: {{ethanol: {ethanol}, lactate: {lactate}}}\n{more}"


def measured(compound: str, value: str, sd: str | None, label: str = "") -> Measurement:
    """Measured value; with a label of its own it does not stand under ``measured``."""
    return Measurement(
        compound=compound,
        value=Fraction(value),
        sd=None if sd is None else Fraction(sd),
        text=value,
        label=label or f"measured {compound}",
    )


def correlated(first: str, second: str, value: str) -> Correlation:
    """Correlation of two measured values."""
    return Correlation(first=first, second=second, value=Fraction(value))


def judge(folder: Path, text: str, **options: Any) -> Reconciliation:
    """Answer to a case beside which the network lies."""
    (folder / "network.yaml").write_text(NETWORK, "utf-8")
    path = folder / "case.yaml"
    path.write_text(text, "utf-8")
    return yieldnet.reconcile(path, **options)
