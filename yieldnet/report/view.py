"""One view of a prediction: labels, numbers, units and notes, decided once for every output."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import statements_of
from yieldnet.foundation.units import UnitError, read_unit, yield_factor
from yieldnet.model.network import Direction
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.layers import switched_off
from yieldnet.report.atp_yield_view import atp_yield_line
from yieldnet.report.figures import assumption_rows, figure, p_words, percent, range_text, signed
from yieldnet.report.table import Table
from yieldnet.report.why_view import (
    conflict_lines,
    fluxes_table,
    limits_table,
    movement_lines,
    proof_lines,
    proof_tables,
    relaxations_table,
)

if TYPE_CHECKING:
    from yieldnet.balance.freedom import Freedom
    from yieldnet.balance.redundancy import DataTest
    from yieldnet.prediction.result import CoefficientAnswer, Prediction

__all__ = ["UNITS", "PredictionView", "equation_text", "view_of"]

UNITS = ("mol/mol", "g/g", "C-mol/C-mol")
"""Units in which a text can tell yields."""
_SIDE_WORD = {
    Direction.CONSUMED: "taken up",
    Direction.PRODUCED: "given off",
    Direction.EITHER: "either way",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class PredictionView:
    """Everything a text shows of a prediction, in its order.

    Parameters
    ----------
    title, setting : str
        Heading and the line under it.
    headline : str
        The answer in one line.
    equation : str
        Filled-in overall equation.
    conflict : tuple of str
        Statements that cannot hold together.
    tables : tuple of Table
        Coefficients, equation, ladder, relaxations, limits, fluxes; empty ones left out.
    proof : tuple of str
        The line of arithmetic that bounds the aim, and how to check it.
    proof_tables : tuple of Table
        Worths and fluxes of the proof.
    remarks : tuple of str
        Recoveries, respiratory quotient, carbon dioxide.
    findings : tuple of (str, str)
        Severity and text of each finding.
    assumptions : tuple of (str, str, str)
        Text, value with unit, source.
    """

    title: str
    setting: str
    headline: str
    equation: str
    conflict: tuple[str, ...]
    tables: tuple[Table, ...]
    proof: tuple[str, ...]
    proof_tables: tuple[Table, ...]
    remarks: tuple[str, ...]
    findings: tuple[tuple[str, str], ...]
    assumptions: tuple[tuple[str, str, str], ...]


def view_of(result: Prediction, unit: str = "mol/mol") -> PredictionView:
    """View of a prediction.

    Parameters
    ----------
    result : Prediction
        The answer.
    unit : {"mol/mol", "g/g", "C-mol/C-mol"}
        Unit of the coefficient table.

    Returns
    -------
    PredictionView
        Texts in the order of showing.
    """
    tables = [_coefficients(result, unit)] if result.coefficients else []
    if any(item.measurements for item in result.coefficients):
        tables.append(_side_by_side(result, unit))
    if result.terms:
        tables.append(_filled(result))
    if result.ladder:
        tables.append(_ladder(result))
    elif result.freedom:
        tables.append(_freedom(result))
    why = (relaxations_table(result), limits_table(result), fluxes_table(result))
    tables += [table for table in why if table is not None]
    return PredictionView(
        title=result.case.title,
        setting=_setting(result),
        headline=_headline(result),
        equation=equation_text(result),
        conflict=conflict_lines(result),
        tables=tuple(tables),
        proof=proof_lines(result),
        proof_tables=proof_tables(result),
        remarks=_remarks(result),
        findings=tuple((str(item.severity), str(item)) for item in result.findings),
        assumptions=assumption_rows(result.assumptions),
    )


def _setting(result: Prediction) -> str:
    case = result.case
    parts = [f"per mol {case.basis.name}"]
    if case.network is not None and _has_network(result):
        parts.append(f"network: {case.network.title}")
        if case.strain is not None:
            parts.append(f"strain: {case.strain.name}")
        if case.knock_outs:
            parts.append("knocked out: " + ", ".join(item.name for item in case.knock_outs))
        if case.parameter_set is not None:
            parts.append(f"parameter set: {case.parameter_set.name}")
    elif not _has_network(result):
        parts.append("elements alone")
    return "; ".join(parts)


def _has_network(result: Prediction) -> bool:
    return any(item.layer == "pathways" for item in result.freedom)


def _headline(result: Prediction) -> str:
    case, aim = result.case, result.aim
    if result.outcome != "solved":
        codes = {"YN601": "infeasible", "YN602": "unbounded"}
        reasons = [item.message for item in result.findings if item.code in codes]
        return reasons[0] if reasons else str(result.outcome)
    if case.aim is not None and case.aim.is_energy and not _has_network(result):
        return f"the aim is spare {case.aim.compound}, which elements alone do not know"
    if aim is None or aim.value is None:
        return "no aim: every coefficient is told by its range"
    unit = "mol/mol"
    text = f"{case.aim}: {figure(aim.value)} {unit}"
    if aim.within_bands is not None and aim.within_bands != aim.value:
        text += f" ({figure(aim.within_bands)} within 2 s.d.)"
    if case.aim is not None and not case.aim.is_energy:
        item = result.coefficient(aim.compound)
        grams = _factor(item, "g/g")
        if grams is not None:
            text += f" = {figure(aim.value * grams)} g/g"
        if item.percent is not None:
            text += f"; {percent(item.percent)} of the best without the network"
        if item.set_aside and aim.value:
            value = item.measurements[0].value
            text += f"; measured {figure(value)} is {percent(value / aim.value)} of it"
    return text


def _factor(item: CoefficientAnswer, unit: str) -> Fraction | None:
    """Amount of ``unit`` in one mol/mol; ``None`` where the unit means nothing."""
    try:
        return 1 / yield_factor(read_unit(unit), item.weight, item.basis_weight)
    except UnitError:
        return None


def _scaled(value: Range | None, factor: Fraction) -> Range | None:
    if value is None:
        return None
    return Range(
        None if value.low is None else value.low * factor,
        None if value.high is None else value.high * factor,
    )


def _coefficients(result: Prediction, unit: str) -> Table:
    rows: list[tuple[str, ...]] = []
    with_network = _has_network(result)
    for item in result.coefficients:
        factor = _factor(item, unit)
        if factor is None:
            blank = ("",) * (3 if with_network else 1)
            rows.append((item.compound, f"no {unit}", *blank, str(item.status)))
            continue
        measured = ""
        if item.reconciled is not None:
            mean, sd = item.reconciled.mean * factor, item.reconciled.sd
            measured = figure(mean) + (f"±{figure(sd * factor)}" if sd else " exact")
        elif item.measurements:
            measured = f"({figure(item.measurements[0].value * factor)})"
        cells = [item.compound, measured, range_text(_scaled(item.elements, factor))]
        if with_network:
            cells.append(range_text(_scaled(item.network, factor)))
            cells.append(percent(item.percent).removesuffix(" %"))
        cells.append(str(item.status))
        rows.append(tuple(cells))
    network_columns = ("network", "%") if with_network else ()
    columns = ("", "measured", "elements", *network_columns, "status")
    note = ""
    if any(item.side is Direction.EITHER for item in result.coefficients):
        note = "Either-side compounds: given off is positive, taken up negative."
    if any(item.set_aside for item in result.coefficients):
        note += " (In brackets: set aside, since it is the aim.)"
    banded = any(item.sd for item in statements_of(result.case).measured)
    return Table(
        title=f"Coefficients, {unit}" + (", ranges within two standard deviations" * banded),
        columns=columns,
        rows=tuple(rows),
        note=note.strip(),
    )


def _side_by_side(result: Prediction, unit: str) -> Table:
    """Measured, reconciled and predicted value of every coefficient that is measured."""
    rows = []
    for item in result.coefficients:
        factor = _factor(item, unit)
        if not item.measurements or factor is None:
            continue
        known, first = item.reconciled, item.measurements[0]
        mean, sd = (known.mean, known.sd) if known else (first.value, first.sd)
        predicted = item.at_aim
        if predicted is None and known is not None:
            predicted = Range(known.value, known.value)
        rows.append(
            (
                item.compound,
                figure(mean * factor) + (f"±{figure(sd * factor)}" if sd else " exact"),
                figure(known.value * factor) if known else "set aside",
                signed(known.moved_sd) if known and known.sd else "",
                range_text(_scaled(predicted, factor)),
            )
        )
    notes = [f"{item.layer}: {_test_words(item)}." for item in result.tests]
    return Table(
        title=f"Measured, reconciled and predicted, {unit}",
        columns=("", "measured", "reconciled", "moved s.d.", "predicted"),
        rows=tuple(rows),
        note=("Test of the data by " + " ".join(notes)) if notes else "",
    )


def _test_words(test: DataTest) -> str:
    plural = "s" * (test.degrees != 1)
    verdict = "agree" if test.passed else "fail"
    return (
        f"{verdict} (chi-square {figure(test.statistic)}, {test.degrees} equation{plural},"
        f" {p_words(test.p_value)})"
    )


def _filled(result: Prediction) -> Table:
    carbon = {
        name: share
        for recovery in result.recoveries
        if recovery.quantity == "carbon"
        for name, share in recovery.shares
    }
    answers = {item.compound: item for item in result.coefficients}
    rows = []
    for term in result.terms:
        item = answers.get(term.compound)
        factor = Fraction(1) if item is None else _factor(item, "g/g")
        grams = "" if factor is None else range_text(_scaled(term.range, factor))
        zero = term.range.single and term.range.low == 0
        side = "none" if zero else _SIDE_WORD[term.side]
        rows.append(
            (
                term.compound,
                side,
                range_text(term.range),
                grams,
                percent(carbon.get(term.compound)).removesuffix(" %"),
            )
        )
    measured = statements_of(result.case).measured
    place = "at the aim" if result.aim and result.aim.value is not None else "as far as known"
    return Table(
        title=f"Filled in {place}" + (", at the reconciled point" * bool(measured)),
        columns=("", "", "mol/mol", "g/g", "% of carbon"),
        rows=tuple(rows),
    )


def _ladder(result: Prediction) -> Table:
    free = {item.layer: _free(item) for item in result.freedom}
    shares = {}
    if result.shares is not None:
        shares = {item.layer: figure(item.share) for item in result.shares.shares}
    rows = tuple(
        (
            item.rung,
            _rung_words(result, item.rung),
            free[item.rung],
            "none" if item.value is None else figure(item.value),
            "" if item.loss is None else figure(item.loss),
            *((shares.get(item.rung, ""),) if shares else ()),
        )
        for item in result.ladder
    )
    reasons: dict[str, list[str]] = {}
    for item in result.ladder:
        if item.reason:
            reasons.setdefault(item.reason, []).append(item.rung)
    notes = [f"{', '.join(rungs)}: {reason}." for reason, rungs in reasons.items()]
    notes.append(f"free: how many of the {result.case.unknowns()} unknowns are left.")
    if shares:
        notes.append("share: the cost averaged over all orders of the layers.")
    elif result.shares is not None:
        notes.append(f"No shares: {result.shares.reason}.")
    if result.other_order:
        other = "; ".join(f"{rung} {figure(value)}" for rung, value in result.other_order)
        notes.append(f"In the order asked for: {other}.")
    if any("(" in text for text in free.values()):
        notes.append("In brackets: counting equalities that signs force.")
    if "redox" in free:
        notes.append("The total electron balance is already in 'elements'.")
    return Table(
        title=f"Ladder: {result.case.aim}, mol/mol",
        columns=("rung", "what it adds", "free", "best", "costs", *(("share",) * bool(shares))),
        rows=rows,
        note=" ".join(notes),
        bars=_bars(result),
    )


def _rung_words(result: Prediction, rung: str) -> str:
    case, network = result.case, result.case.network
    if rung == "elements":
        return (
            "elements and charge over the cell" if _charged(result) else ("elements over the cell")
        )
    if rung == "measured":
        return "values of " + _listed(list(statements_of(case).measured_compounds()))
    if rung == "demands":
        return "bounds on " + _listed([item.compound for item in case.demands])
    if network is None:
        return ""
    carriers: dict[str, list[str]] = {"energy": [], "redox": []}
    for item in network.carriers:
        carriers[str(item.kind)].append(item.name)
    if rung == "pathways":
        growth = 0 if network.growth is None else 1
        total = len(network.reactions) + growth
        off = len(switched_off(case))
        return f"{total - off} of {total} reactions" if off else f"{total} reactions"
    if rung == "redox":
        return _listed(carriers["redox"]) + (" apart" if len(carriers["redox"]) > 1 else "")
    if rung == "energy":
        return " and ".join(carriers["energy"]) + " made covers use"
    return f"{' and '.join(carriers['energy'])} for staying alive"


def _listed(names: list[str]) -> str:
    """First names, and how many more there are."""
    return ", ".join(names) if len(names) <= 3 else ", ".join(names[:2]) + f" +{len(names) - 2}"


def _charged(result: Prediction) -> bool:
    return any(item.formula.charge for item in result.case.compounds)


def _free(item: Freedom) -> str:
    """Degrees of freedom, with those left in fact where signs take some away."""
    if item.free_in_fact is None or item.free_in_fact == item.free:
        return str(item.free)
    return f"{item.free} ({item.free_in_fact})"


def _bars(result: Prediction) -> tuple[float, ...]:
    values = [item.value for item in result.ladder]
    longest = max((abs(value) for value in values if value is not None), default=Fraction(0))
    if not longest:
        return ()
    return tuple(0.0 if value is None else float(abs(value) / longest) for value in values)


def _freedom(result: Prediction) -> Table:
    return Table(
        title="Degrees of freedom",
        columns=("rung", "unknowns", "rank", "free"),
        rows=tuple(
            (item.layer, str(item.unknowns), str(item.rank), _free(item)) for item in result.freedom
        ),
    )


def _remarks(result: Prediction) -> tuple[str, ...]:
    found = []
    basis = result.case.basis.name
    for item in result.recoveries:
        words = "Carbon" if item.quantity == "carbon" else "Available electrons"
        parts = []
        if item.total is not None:
            parts.append(f"{percent(item.total)} found again in the filled-in equation")
        if item.measured is not None:
            parts.append(f"{percent(item.measured)} of the {basis} in measured products alone")
        if parts:
            found.append(f"{words}: " + "; ".join(parts) + ".")
    if result.respiratory_quotient is not None:
        found.append(f"RQ: {figure(result.respiratory_quotient)} mol/mol.")
    if result.y_atp is not None:
        found.append(atp_yield_line(result.y_atp))
    net = result.net_carbon_dioxide
    if net is not None:
        found.append(f"Net carbon dioxide, mol/mol: {_net_words(net)}.")
    need = result.carbon_dioxide_need
    if need is not None:
        amount = Range(need.least, need.most)
        without = (
            "the case is infeasible"
            if need.without is None
            else f"the best is {figure(need.without)} mol/mol"
        )
        found.append(
            f"The best value takes up {range_text(amount)} mol carbon dioxide net;"
            f" without net uptake {without}."
        )
    found += movement_lines(result)
    return tuple(found)


def _net_words(value: Range) -> str:
    if value.single and value.low is not None:
        side = "taken up" if value.low < 0 else "given off"
        return f"{figure(abs(value.low))} {side}"
    if value.high is not None and value.high <= 0:
        return f"{range_text(value.turned())} taken up"
    if value.low is not None and value.low >= 0:
        return f"{range_text(value)} given off"
    low = "unbounded" if value.low is None else figure(-value.low)
    return f"{low} taken up … {figure(value.high)} given off"


def equation_text(result: Prediction) -> str:
    """Filled-in overall equation; a bracket where a coefficient is not unique.

    Parameters
    ----------
    result : Prediction
        The answer.

    Returns
    -------
    str
        The equation, empty if there is none; terms that are zero are left out.
    """
    sides: dict[bool, list[str]] = {True: [], False: []}
    for term in result.terms:
        value = term.range
        if value.single and value.low == 0:
            continue
        if value.single:
            text = term.compound if value.low == 1 else f"{figure(value.low)} {term.compound}"
        else:
            text = f"[{range_text(value)}] {term.compound}"
        sides[term.side is Direction.CONSUMED].append(text)
    if not result.terms:
        return ""
    return " + ".join(sides[True]) + " -> " + (" + ".join(sides[False]) or "nothing")
