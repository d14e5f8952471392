"""The text of a first run file and its sheet, for a cultivation that is still to be done.

In: a :class:`~yieldnet.studies.starting_case.StartingCase` with the best value of biomass. Out: a
run file, every line explained, and a sheet of placeholders that can be read and answered at once.
The placeholders are a point inside what the network can do, half of the best product and 0.3 of the
best biomass, so that the filled case has an answer. Left out: gas; its columns are in the README.
"""

from __future__ import annotations

import csv
import io
from dataclasses import dataclass
from math import exp
from typing import TYPE_CHECKING

from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.exact import decimal_text
from yieldnet.foundation.findings import Findings
from yieldnet.model.cultivation import CultivationKind
from yieldnet.model.network import BIOMASS
from yieldnet.report.new_case import GASES, REPLACE, explained, title_of, trailing

if TYPE_CHECKING:
    from collections.abc import Sequence
    from fractions import Fraction

    from yieldnet.studies.starting_case import StartingCase

__all__ = ["SHEET", "RunPlan", "plan_run", "run_lines", "sheet_text"]

SHEET = "sheet.csv"
"""Name of the sheet."""
_OF_PRODUCT, _OF_BIOMASS = 0.5, 0.3
"""Shares of the two best values: together less than the whole substrate [-]."""
_RATE = 0.1
"""Growth rate of the placeholders [1/h]."""
_START, _USED = 20.0, 10.0
"""Substrate at the start, and used in all [g/L]."""
_HOURS = (0, 2, 4, 6, 8, 10, 12)
"""Times of the samples [h]."""
_FEED = 400.0
"""Substrate in the feed of a fed-batch [g/L]."""
_LEFT = 0.1
"""Substrate left in a chemostat [g/L]."""
_SCATTER = (0.995, 1.0, 1.005)
"""Three samples of one steady state over their mean [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class RunPlan:
    """What a run measures.

    Parameters
    ----------
    start : StartingCase
        The case it belongs to.
    kind : CultivationKind
        How the vessel is run.
    yields : tuple of (str, float)
        Placeholder of each compound that the sheet has, biomass first [g/g substrate].
    """

    start: StartingCase
    kind: CultivationKind
    yields: tuple[tuple[str, float], ...]

    @property
    def grows(self) -> bool:
        """Whether biomass is measured."""
        return any(name == BIOMASS for name, _ in self.yields)


def plan_run(start: StartingCase, kind: str, most_biomass: Fraction | None) -> RunPlan:
    """What a run of a case measures.

    Parameters
    ----------
    start : StartingCase
        The case.
    kind : {"batch", "fed-batch", "chemostat"}
        How the vessel is run.
    most_biomass : Fraction or None
        Best value of biomass; ``None`` if the network makes none [mol/mol basis].

    Returns
    -------
    RunPlan
        Compounds of the sheet with their placeholders.

    Raises
    ------
    InputError
        If the substrate is a gas, nothing that is made stays in the broth, or a chemostat would
        have no cells.
    """
    findings = Findings()
    if start.substrate in GASES:
        findings.add(
            "YN934",
            f"{start.substrate} enters as gas, and this sheet has columns of the broth only",
            hint="Leave --run out, and write a run file with gas columns as examples/chemostat has"
            " them.",
        )
    chosen = CultivationKind(kind)
    found: list[tuple[str, float]] = []
    if most_biomass is not None:
        # The rest of the substrate stays for what keeps the cells alive.
        share = _OF_BIOMASS + (_OF_PRODUCT if start.product == BIOMASS else 0)
        found.append((BIOMASS, share * _grams(start, BIOMASS, most_biomass)))
    elif chosen is CultivationKind.CHEMOSTAT:
        findings.add(
            "YN934",
            f"{start.network.title!r} has no growth, and a chemostat lives on it",
            hint="Write --run batch or --run fed-batch.",
        )
    if start.product != BIOMASS and start.product not in GASES:
        found.append((start.product, _OF_PRODUCT * _grams(start, start.product, start.best)))
    if not found:
        findings.add(
            "YN934",
            f"{start.product} leaves as gas, and nothing else that is made is measured",
            hint="Leave --run out, and write a run file with gas columns as examples/chemostat has"
            " them.",
        )
    if findings.refused:
        raise InputError(findings.sorted())
    return RunPlan(start=start, kind=chosen, yields=tuple(found))


def _grams(start: StartingCase, name: str, value: Fraction) -> float:
    """A yield in g/g, biomass with its ash."""
    made, used = start.network.compound(name), start.network.compound(start.substrate)
    assert made is not None
    assert used is not None
    return float(value * (made.weight.molar_mass or 0) / (used.weight.molar_mass or 1))


def run_lines(plan: RunPlan) -> list[str]:
    """Lines of the run file.

    Parameters
    ----------
    plan : RunPlan
        What the run measures.

    Returns
    -------
    list of str
        The lines.
    """
    start, kind = plan.start, plan.kind
    names = [name for name, _ in plan.yields]
    lines = [
        *explained(
            f"A {kind} that is still to be done. The sheet beside this file holds placeholders, not"
            " data: replace all its numbers. Then:"
        ),
        "# yieldnet rates run.yaml",
        "# yieldnet rates run.yaml --into case.yaml --out filled.yaml",
        "# yieldnet predict filled.yaml",
        "",
        "# Title, shown above the rates.",
        f"run: {title_of(start)}, placeholders of a {kind}",
        "# batch, fed-batch or chemostat.",
        f"kind: {kind}",
        "# What was measured, one row a sample, units in brackets behind the names.",
        f"sheet: {SHEET}",
        "# What the run is to find: a ? for each compound that the sheet has a column of.",
        f"equation: {start.substrate} -> {' + '.join(f'? {name}' for name in names)}",
        *_compounds(plan),
    ]
    if not plan.grows:
        lines += ["# Without biomass only start and end can be compared.", "method: start and end"]
    if kind is CultivationKind.FED_BATCH:
        lines += [
            "# What the feed holds.",
            "feed:",
            _stated(start.substrate, f"{_FEED:g} ± 2 g/L", "weighed in"),
        ]
    return [*lines, *_errors(plan)]


def _compounds(plan: RunPlan) -> list[str]:
    """Formulas that the library does not know."""
    lines = []
    for name in (plan.start.substrate, *(name for name, _ in plan.yields)):
        held = plan.start.network.compound(name)
        assert held is not None
        if name == BIOMASS:
            ash = decimal_text(held.ash) or str(held.ash)
            line = f"  {name}: {{formula: {held.formula}, ash: {ash}}}"
            lines.append(trailing(line, "as in the network"))
        elif find_compound(name) is None:
            lines.append(trailing(f"  {name}: {held.formula}", "as in the network"))
    return ["# Formulas; ash is its share of the dry weight.", "compounds:", *lines] * bool(lines)


def _errors(plan: RunPlan) -> list[str]:
    substrate = plan.start.substrate
    lines = ["# Standard deviation of each column.", "errors:"]
    if plan.kind is CultivationKind.CHEMOSTAT:
        lines.append(_stated("dilution rate", "1 % of value", "of the pump"))
        lines.append(_stated(f"feed {substrate}", "0.1 g/L", "of the assay"))
    if plan.kind is CultivationKind.FED_BATCH:
        lines.append(_stated("volume", "0.2 % of value", "of the scale"))
        lines.append(_stated("fed", "0.1 mL and 0.5 % of value", "of the pump"))
    lines.append(_stated(substrate, "0.05 g/L and 1 % of value", "of the assay"))
    for name, _ in plan.yields:
        own = "2 % of value" if name == BIOMASS else "0.02 g/L and 2 % of value"
        lines.append(_stated(name, own, "of the assay"))
    return lines


def _stated(key: str, value: str, words: str) -> str:
    return trailing(f"  {key}: {value}", f"{words}; {REPLACE}")


def sheet_text(plan: RunPlan) -> str:
    """The sheet: headings with units, and placeholders.

    Parameters
    ----------
    plan : RunPlan
        What the run measures.

    Returns
    -------
    str
        Text of a CSV file.

    Notes
    -----
    Biomass grows as exp(mu t), everything else in proportion to it. A chemostat has three samples
    of one steady state. A fed-batch is fed what it uses, so that its substrate stays as it is.
    """
    rows = {
        CultivationKind.BATCH: _batch,
        CultivationKind.FED_BATCH: _fed_batch,
        CultivationKind.CHEMOSTAT: _chemostat,
    }[plan.kind](plan)
    out = io.StringIO()
    csv.writer(out, lineterminator="\n").writerows(rows)
    return out.getvalue()


def _heads(plan: RunPlan) -> list[str]:
    return [f"{name} [g/L]" for name in (plan.start.substrate, *(name for name, _ in plan.yields))]


def _used(plan: RunPlan) -> list[tuple[int, float]]:
    """Substrate used since the start at each time [g/L]."""
    times = _HOURS if plan.grows else (_HOURS[0], _HOURS[-1])
    whole = exp(_RATE * _HOURS[-1]) - 1
    return [(hour, _USED * (exp(_RATE * hour) - 1) / whole) for hour in times]


def _made(plan: RunPlan, used: float) -> list[float]:
    """What was made and, of biomass, was there at the start [g/L]."""
    before = _USED / (exp(_RATE * _HOURS[-1]) - 1)
    return [each * (used + (before if name == BIOMASS else 0)) for name, each in plan.yields]


def _batch(plan: RunPlan) -> list[Sequence[str]]:
    rows: list[Sequence[str]] = [["time [h]", *_heads(plan)]]
    for hour, used in _used(plan):
        rows.append([str(hour), *_texts([_START - used, *_made(plan, used)])])
    return rows


def _fed_batch(plan: RunPlan) -> list[Sequence[str]]:
    rows: list[Sequence[str]] = [["time [h]", "volume [L]", "fed [L]", *_heads(plan)]]
    for hour, used in _used(plan):
        # One litre at the start; what is fed brings what was used.
        fed = used / _FEED
        inside = [_START, *_made(plan, used)]
        held = [amount / (1 + fed) for amount in inside]
        rows.append([str(hour), *_texts([1 + fed]), f"{fed:.5f}", *_texts(held)])
    return rows


def _chemostat(plan: RunPlan) -> list[Sequence[str]]:
    substrate = plan.start.substrate
    rows: list[Sequence[str]] = [
        ["state", "dilution rate [1/h]", f"feed {substrate} [g/L]", *_heads(plan)],
    ]
    for factor in _SCATTER:
        made = [factor * each * (_START - _LEFT) for _, each in plan.yields]
        rows.append(["first", f"{_RATE:g}", f"{_START:g}", *_texts([_LEFT * factor, *made])])
    return rows


def _texts(values: Sequence[float]) -> list[str]:
    return [f"{value:.4f}" for value in values]
