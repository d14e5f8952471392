"""Rates as lines of a case file, and put into one."""

from __future__ import annotations

import os
from dataclasses import replace as changed
from math import floor, log10
from pathlib import Path
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, near
from yieldnet.model.network import BIOMASS, Direction
from yieldnet.reading.case_file import load_case
from yieldnet.reading.case_splice import splice, stated_already
from yieldnet.report.whole_file import whole_file

if TYPE_CHECKING:
    from yieldnet.foundation.findings import Finding
    from yieldnet.model.case import Case
    from yieldnet.rates.result import RateResult, StateRates

__all__ = ["block_lines", "chosen_state", "estimate_text", "fill_case"]

_BLOCK_DIGITS = 4
"""Significant digits of a standard deviation in a block: its rounding is then far below it [-]."""
_CORRELATION_PLACES = 9
"""Decimals of a correlation in a block, so that strongly correlated values stay possible [-]."""
_SECTIONS = ("measured", "correlations")


def chosen_state(result: RateResult, name: str) -> StateRates:
    """The state of a run that is asked for.

    Parameters
    ----------
    result : RateResult
        Rates of the run.
    name : str
        Its name; empty for the only one.

    Returns
    -------
    StateRates
        The state.

    Raises
    ------
    InputError
        If there is none of that name, or several and none is named.
    """
    labels = [state.label for state in result.states]
    if name in labels:
        return result.state(name)
    if not name and len(labels) == 1:
        return result.states[0]
    findings = Findings()
    findings.add(
        "YN852",
        f"the run has no steady state {name!r}" if name else "the run has several steady states",
        result.run.span,
        hint=near(name, labels) or f"Name one with --state: {', '.join(labels)}.",
    )
    raise InputError(findings.sorted())


def estimate_text(value: float, sd: float) -> str:
    """Value ± s.d. for a file: the s.d. in four digits, the value to the same decimal.

    Parameters
    ----------
    value, sd : float
        Number and standard deviation, in one unit.

    Returns
    -------
    str
        Text that reads back as the same number to far below its error.

    Examples
    --------
    >>> estimate_text(0.1098765, 0.0123456), estimate_text(0.5, 0.0)
    ('0.10988 ± 0.01235', '0.5 exact')
    """
    if not sd:
        return f"{value:.12g} exact"
    places = max(0, _BLOCK_DIGITS - 1 - floor(log10(sd)))
    return f"{value:.{places}f} ± {sd:.{places}f}"


def block_lines(
    result: RateResult, state: StateRates, signs: dict[str, int] | None = None
) -> dict[str, list[str]]:
    """Lines of a case file that say what one state was measured to be.

    Parameters
    ----------
    result : RateResult
        Rates of the run.
    state : StateRates
        One of its states.
    signs : dict of str to int, optional
        -1 for a compound whose side in the case counts the other way; +1 for all if left out.

    Returns
    -------
    dict of str to list of str
        By key of the case file: ``measured``, ``correlations`` and the line of ``conditions``;
        each without the key itself. Biomass is told in g/g, since its formula may differ between
        run and case. The growth rate is a remark only: beside the uptake it would count the same
        biomass twice.
    """
    signs = signs or {}
    measured = []
    for name in state.products:
        sign = signs.get(name, 1)
        in_grams = name == BIOMASS
        plain = state.yield_in_grams(name) if in_grams else state.yield_of(name)
        unit = "g/g" if in_grams else "mol/mol"
        measured.append(f"{name}: {estimate_text(sign * plain.value, plain.sd)} {unit}")
    correlations = []
    for k, first in enumerate(state.products):
        lines = []
        for second in state.products[k + 1 :]:
            value = state.correlation(first, second)
            if value is None:
                continue
            value *= signs.get(first, 1) * signs.get(second, 1)
            text = f"{value:.{_CORRELATION_PLACES}f}"
            if float(text):
                lines.append(f"  {second}: {text}")
        if lines:
            correlations += [f"{first}:", *lines]
    conditions = []
    if state.specific_rates is not None:
        uptake = state.specific_rate(state.basis)
        text = estimate_text(1000 * uptake.value, 1000 * uptake.sd)
        conditions.append(f"substrate uptake: {text} mmol/g/h")
    if state.growth_rate is not None:
        rate = estimate_text(state.growth_rate.value, state.growth_rate.sd)
        conditions.append(f"# growth rate {rate} 1/h is in the biomass yield and the uptake")
    return {"conditions": conditions, "measured": measured, "correlations": correlations}


def fill_case(
    result: RateResult,
    state: StateRates,
    into: Path,
    out: Path | None = None,
    replace: bool = False,
) -> Case:
    """Put what one state was measured to be into a case file.

    Parameters
    ----------
    result : RateResult
        Rates of the run.
    state : StateRates
        One of its states.
    into : Path
        Case file whose sections ``measured`` and ``correlations`` and whose line
        ``substrate uptake`` are written; all else stays.
    out : Path, optional
        File that is written instead, in the same folder or in another; a path to a network is
        then told from there.
    replace : bool
        Whether sections that are there, or a file of the name ``out``, may be replaced.

    Returns
    -------
    Case
        The case as it now stands.

    Raises
    ------
    InputError
        If the case cannot be read, or run and case do not fit; nothing is written then.
    FileExistsError
        If ``out`` is there and may not be replaced.
    """
    case, findings = load_case(os.fspath(into))
    if case is None:
        raise InputError(findings.sorted())
    target = into if out is None else out
    source = into.read_text("utf-8")
    doubts = Findings()
    signs = _signs(case, result, state, doubts)
    stated = stated_already(source, os.fspath(into), _SECTIONS)
    if stated and not replace:
        doubts.add(
            "YN851",
            f"the case has its own {' and '.join(repr(key) for key in stated)}",
            case.span,
            hint="Give --force to replace them, or start from a case without them.",
        )
    if doubts.refused:
        raise InputError(doubts.sorted())
    blocks = block_lines(result, state, signs)
    conditions = blocks.pop("conditions")
    text = splice(source, os.fspath(into), blocks, conditions)
    if out is not None and out.parent.resolve() != into.parent.resolve():
        text = _moved_network(text, case, into, out)
    return _write_checked(text, target, replace or out is None)


def _signs(case: Case, result: RateResult, state: StateRates, findings: Findings) -> dict[str, int]:
    """How the run's sides count in the case, with a finding for each that does not fit."""
    run = result.run
    if case.basis.name != run.basis.name:
        findings.add(
            "YN850",
            "run and case have another basis",
            case.span,
            left=f"run {run.basis.name}",
            right=f"case {case.basis.name}",
            hint="Yields are told per mol of the basis: write both equations on the same one.",
        )
    sides = {item.name: item.side for item in run.coefficients}
    signs = {}
    for name in state.products:
        coefficient = case.coefficient(name)
        if coefficient is None:
            findings.add(
                "YN850",
                f"{name!r} is measured in the run and not in the equation of the case",
                case.span,
                hint=f"Add '? {name}' to the equation of the case, or leave it out of the run.",
            )
            continue
        here, there = coefficient.side, sides[name]
        if here is not there and Direction.EITHER not in (here, there):
            findings.add(
                "YN850",
                f"{name!r} stands on another side in the case",
                case.span,
                left=f"run: {there}",
                right=f"case: {here}",
                hint="Move it in one of the two equations.",
            )
        # A compound of either side counts as given off; so does a side that is 'produced'.
        counts = (Direction.CONSUMED is here) != (Direction.CONSUMED is there)
        signs[name] = -1 if counts else 1
    return signs


def _moved_network(text: str, case: Case, into: Path, out: Path) -> str:
    """The text with the path of its network told from the folder of another file."""
    lines = text.splitlines()
    for place, line in enumerate(lines):
        key, _, rest = line.partition(":")
        written = rest.partition(" #")[0].strip().strip("'\"")
        if key == "network" and (into.parent / written).is_file():
            away = os.path.relpath(into.parent / written, out.parent)
            lines[place] = f"network: {Path(away).as_posix()}"
    return "\n".join(lines) + "\n"


def _write_checked(text: str, target: Path, replace: bool) -> Case:
    """Write a case whole, after it has been read back; nothing is left if it cannot be."""
    with whole_file(target, replace) as half:
        half.write_text(text, encoding="utf-8", newline="\n")
        case, findings = load_case(os.fspath(half))
        if case is None:
            raise InputError([_at_target(item, half, target) for item in findings.sorted()])
    return case


def _at_target(finding: Finding, half: Path, target: Path) -> Finding:
    """The finding at the file that was meant."""
    where = finding.where
    if where is None or where.file != os.fspath(half):
        return finding
    return changed(finding, where=changed(where, file=os.fspath(target)))
