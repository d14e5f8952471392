"""The view of judged data: classification, tests, suspects, reconciled values, next measurement."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import sqrt
from typing import TYPE_CHECKING

from yieldnet.foundation.units import UnitError, read_unit, yield_factor
from yieldnet.model.network import Direction
from yieldnet.prediction.spread import SEED
from yieldnet.report.figures import (
    assumption_rows,
    figure,
    p_words,
    percent,
    probability,
    range_text,
    signed,
    with_error,
)
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.balance.redundancy import RedundancyEquation
    from yieldnet.foundation.units import Weight
    from yieldnet.model.case import Measurement
    from yieldnet.prediction.reconciliation import Classified, Reconciliation

__all__ = [
    "DataView",
    "data_view",
    "equation_words",
    "words_of_test",
]

_SHOWN = 8
"""Rows of a ranked table that are shown; JSON has all [-]."""
_NAMES = 3
"""Names of a group that are shown before the rest is counted [-]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DataView:
    """Everything a text shows of judged data, in its order.

    Parameters
    ----------
    title, setting, headline : str
        Heading, the line under it, and the verdict.
    equations : tuple of str
        Equations between measured values, in words.
    tables : tuple of Table
        Empty ones left out.
    aim : str
        The best value with its error; empty without an aim.
    remarks : tuple of str
        How standard deviations were found.
    next : Table or None
        The next measurement.
    assumptions : tuple of (str, str, str)
        Text, value with unit, source.
    """

    title: str
    setting: str
    headline: str
    equations: tuple[str, ...]
    tables: tuple[Table, ...]
    aim: str
    remarks: tuple[str, ...]
    next: Table | None
    assumptions: tuple[tuple[str, str, str], ...]


def data_view(result: Reconciliation, unit: str = "mol/mol") -> DataView:
    """View of judged data.

    Parameters
    ----------
    result : Reconciliation
        What was found.
    unit : {"mol/mol", "g/g", "C-mol/C-mol"}
        Unit of the tables of values.

    Returns
    -------
    DataView
        Texts in the order of showing.
    """
    tables = [
        _classes(result),
        _recoveries(result),
        _tests(result),
        *_blame(result),
        _values(result, unit),
        _calculated(result, unit),
    ]
    case = result.case
    return DataView(
        title=case.title,
        setting=f"per mol {case.basis.name}"
        + (f"; network: {case.network.title}" if case.network and result.with_network else "")
        + ("; elements alone" if not result.with_network else ""),
        headline=_headline(result),
        equations=tuple(equation_words(item) for item in result.tested[-1].redundancy.equations()),
        tables=tuple(table for table in tables if table is not None and table.rows),
        aim=_aim(result),
        remarks=_remarks(result),
        next=_next(result),
        assumptions=assumption_rows(result.assumptions),
    )


def _headline(result: Reconciliation) -> str:
    failed = result.failed
    if failed is not None and failed.test is not None:
        return f"The measured values fail their test against '{failed.layer}': " + words_of_test(
            failed.test.statistic, failed.test.degrees, failed.test.p_value
        )
    if result.contradictory:
        return "Values without an error contradict the balances: no measured value can agree."
    last = result.tested[-1].test
    if last is None:
        return "The measured values cannot be tested: no balance ties them together."
    return "The measured values agree within their errors: " + words_of_test(
        last.statistic, last.degrees, last.p_value
    )


def words_of_test(statistic: Fraction, degrees: int, p_value: float) -> str:
    """A chi-square test in words."""
    plural = "s" * (degrees != 1)
    return (
        f"chi-square {figure(statistic)} with {degrees} degree{plural} of freedom,"
        f" {p_words(p_value)}"
    )


def equation_words(item: RedundancyEquation) -> str:
    """An equation between measured values, and how far they are from it.

    Parameters
    ----------
    item : RedundancyEquation
        The equation.

    Returns
    -------
    str
        ``carbon balance: biomass + 2 ethanol = 6; measured 5.95``.
    """
    parts: list[str] = []
    for measured, factor in item.terms:
        size = "" if abs(factor) == 1 else f"{figure(abs(factor))} "
        sign = ("- " if factor < 0 else "") if not parts else ("- " if factor < 0 else "+ ")
        repeated = sum(measured.compound == other.compound for other, _ in item.terms) > 1
        parts.append(f"{sign}{size}{measured.label if repeated else measured.compound}")
    name = f"{item.name}: " if item.name else "all balances together: "
    return f"{name}{' '.join(parts)} = {figure(item.constant)}; measured {figure(item.sum())}"


def _classes(result: Reconciliation) -> Table:
    def word(item: Classified) -> str:
        if item.known == "exact":
            return "taken as exact"
        if item.known == "measured":
            if item.redundant:
                return f"redundant by {item.redundant}"
            return "not redundant"
        if item.calculable:
            return f"calculable by {item.calculable}"
        return "not calculable"

    return Table(
        title="What the equalities say of each coefficient",
        columns=("", "known", "class"),
        rows=tuple((item.compound, item.known, word(item)) for item in result.classified),
        note="redundant: the other values say what it should be, so its error can show.",
    )


def _recoveries(result: Reconciliation) -> Table:
    return Table(
        title="Recovery at the values as measured, % of what is taken up",
        columns=("", "found", "s.d.", "holds some of it and is not measured"),
        rows=tuple(
            (
                item.quantity,
                figure(100 * item.ratio),
                figure(100 * item.sd),
                _some(item.left_out),
            )
            for item in result.recoveries
        ),
    )


def _some(names: Sequence[str]) -> str:
    """First names, and how many more there are."""
    more = len(names) - _NAMES
    return ", ".join(names[:_NAMES]) + (f" and {more} more" if more > 0 else "")


def _tests(result: Reconciliation) -> Table:
    return Table(
        title=f"Chi-square test at {100 * result.level:g} %",
        columns=("layer", "equations", "chi-square", "limit", "p", "verdict"),
        rows=tuple(
            (
                item.layer,
                str(item.test.degrees),
                figure(item.test.statistic),
                figure(item.test.limit),
                probability(item.test.p_value),
                "agrees" if item.test.passed else "fails",
            )
            for item in result.tested
            if item.test is not None
        ),
        note="Each layer counts the equations of those above it.",
    )


def _labels(members: Sequence[Measurement]) -> str:
    return " or ".join(item.label for item in members)


def _blame(result: Reconciliation) -> list[Table]:
    """Who may be wrong; only where a test fails."""
    failed = result.failed
    if failed is None:
        return []
    found = [
        Table(
            title=f"If one value alone were wrong, by '{failed.layer}' (likelihood ratio), mol/mol",
            columns=("", "wrong by", "chi-square left", "p of the rest"),
            rows=tuple(
                (
                    _labels(item.members),
                    with_error(item.bias[0], item.bias_sd[0]),
                    figure(item.statistic_left),
                    probability(item.p_left),
                )
                for item in failed.suspects()[:_SHOWN]
            ),
            note="'or': the balances cannot tell these apart; wrong by is for the first.",
        ),
        Table(
            title="Taken out one after the other until the rest agrees",
            columns=("step", "taken out", "chi-square left", "p of the rest"),
            rows=tuple(
                (
                    str(step),
                    _labels(item.members),
                    "0" if item.test is None else figure(item.test.statistic),
                    probability(None if item.test is None else item.test.p_value),
                )
                for step, item in enumerate(result.eliminations, 1)
            ),
        ),
    ]
    if failed.layer in ("elements", "measured"):
        found.append(
            Table(
                title="If all values were right and one product overlooked, mol/mol",
                columns=("", "amount", "chi-square left", "p of the rest"),
                rows=tuple(
                    (
                        _some(item.compounds),
                        with_error(item.amounts[0], item.amount_sd[0]),
                        figure(item.statistic_left),
                        probability(item.p_left),
                    )
                    for item in result.missing[:_SHOWN]
                ),
                note="Names in one row cannot be told apart by these balances; the amount is that"
                " of the first.",
            )
        )
    return found


def _factor(weight: Weight, basis: Weight, unit: str) -> Fraction | None:
    """Amount of ``unit`` in one mol/mol; ``None`` where the unit means nothing."""
    try:
        return 1 / yield_factor(read_unit(unit), weight, basis)
    except UnitError:
        return None


def _values(result: Reconciliation, unit: str) -> Table:
    rows = []
    for item in result.values:
        factor = _factor(item.weight, item.basis_weight, unit)
        if factor is None:
            rows.append((item.compound, f"no {unit}", "", "", "", ""))
            continue
        rows.append(
            (
                item.compound,
                with_error(item.measured * factor, item.measured_sd * factor),
                with_error(item.reconciled * factor, item.reconciled_sd * float(factor)),
                signed(item.moved_sd),
                "none" if item.residual is None else signed(item.residual),
                percent(item.own_share).removesuffix(" %"),
            )
        )
    notes = [
        "residual: the adjustment over its own s.d.; beyond 2 is rare.",
        "checked: share of its own error that shows, %.",
    ]
    if not result.feasible:
        notes.insert(0, "No point keeps all bands and sides: these values keep equalities alone.")
    return Table(
        title=f"Measured and reconciled, {unit}",
        columns=("", "measured", "reconciled", "moved s.d.", "residual", "checked"),
        rows=tuple(rows),
        note=" ".join(notes),
    )


def _calculated(result: Reconciliation, unit: str) -> Table:
    sides = {item.compound: item.side for item in result.classified}
    rows = []
    for item in result.calculated:
        factor = _factor(item.weight, item.basis_weight, unit)
        side = sides[item.compound]
        words = {Direction.CONSUMED: "taken up", Direction.PRODUCED: "given off"}.get(side, "")
        if not words:
            words = "taken up" if item.value < 0 else "given off"
        size = abs(item.value) if side is Direction.EITHER else item.value
        rows.append(
            (
                item.compound,
                words,
                f"no {unit}"
                if factor is None
                else with_error(size * factor, item.sd * float(factor)),
                item.layer,
            )
        )
    return Table(
        title=f"Calculated from them, {unit}",
        columns=("", "", "value", "told by"),
        rows=tuple(rows),
    )


def _aim(result: Reconciliation) -> str:
    optimum = result.optimum
    if optimum is None:
        return ""
    text = (
        f"{optimum.direction} {optimum.compound}:"
        f" {figure(optimum.value)} ± {figure(optimum.sd)} mol/mol"
    )
    ends = [optimum.worse.value, optimum.better]
    if None not in ends:
        low, high = sorted(end for end in ends if end is not None)
        text += f"; {figure(low)} to {figure(high)} within two s.d. of all measured values"
    elif optimum.worse.reason:
        text += f"; its worse end within two s.d. is not told: {optimum.worse.reason}"
    return text


def _remarks(result: Reconciliation) -> tuple[str, ...]:
    found = []
    if result.draws is not None:
        what = "reconciled values" if result.held else "the best value"
        error = percent(Fraction(1 / sqrt(2 * result.draws.asked)).limit_denominator(10**4))
        found.append(
            f"Standard deviations of {what} are from {result.draws.asked} drawn sets (seed {SEED}),"
            f" so known to about {error}; all others are in closed form."
        )
    return tuple(found)


def _next(result: Reconciliation) -> Table | None:
    if not result.next:
        return None
    rows = []
    for item in result.next:
        left = "no end" if item.expected is None else figure(item.expected)
        rows.append(
            (
                item.compound,
                range_text(item.range),
                left,
                "no end" if item.worst is None else figure(item.worst),
            )
        )
    before = figure(result.next[0].before)
    share = percent(result.precision)
    return Table(
        title=f"The next measurement: what it leaves of the {before} that {result.target} can vary",
        columns=("if known", "it could be", "left, mean", "at worst"),
        rows=tuple(rows),
        note=f"mol/mol; known with a s.d. of {share} of its value; mean over all values it could"
        " have. Bars: how much is expected to go.",
        bars=tuple(item.narrowing for item in result.next),
    )
