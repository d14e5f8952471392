"""From a cultivation run to rates and yields with their full covariance: :func:`find_rates`.

What comes in is a run as read; what goes out is a :class:`~yieldnet.rates.result.RateResult`. The
balances of elements are not asked here, so a run whose carbon does not close gets its rates.
"""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.model.cultivation import CultivationKind, Method
from yieldnet.model.network import BIOMASS
from yieldnet.rates.amounts import amount_rates
from yieldnet.rates.chemostat import chemostat_rates
from yieldnet.rates.exponential import exponential_rates
from yieldnet.rates.gas_checks import check_gas
from yieldnet.rates.offgas import CARBON_DIOXIDE
from yieldnet.rates.result import RateResult
from yieldnet.rates.values import Notes, Values, listed, place_of

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Cultivation
    from yieldnet.rates.values import Listed

__all__ = ["find_rates"]


def find_rates(run: Cultivation) -> RateResult:
    """Specific rates, volumetric rates and yields of a run, with their covariance.

    Parameters
    ----------
    run : Cultivation
        The run as read.

    Returns
    -------
    RateResult
        One state for a batch or a fed-batch, one for each steady state of a chemostat; growth
        rate [1/h], specific rates [mol/g/h], volumetric rates [mol/L/h], yields [mol/mol basis].

    Raises
    ------
    InputError
        If the run cannot give rates; with all findings.
    """
    notes = Notes()
    values = Values(run)
    items = listed(run)
    _check(values, items, notes)
    _refuse(notes)
    _tell_assumptions(run, items, notes)
    if run.kind is CultivationKind.CHEMOSTAT:
        states = chemostat_rates(values, items, notes)
    else:
        find = exponential_rates if run.method is Method.EXPONENTIAL else amount_rates
        state = find(values, items, notes)
        states = [] if state is None else [state]
    _refuse(notes)
    return RateResult(
        run=run,
        states=tuple(states),
        findings=(*run.findings, *notes.findings.sorted()),
        assumptions=tuple(notes.assumptions),
    )


def _refuse(notes: Notes) -> None:
    if notes.findings.refused:
        raise InputError(notes.findings.sorted())


def _check(values: Values, items: tuple[Listed, ...], notes: Notes) -> None:
    """What no method can do with."""
    run = values.run
    if not items or items[0].name != run.basis.name:
        notes.findings.add(
            "YN820",
            f"nothing was measured of {run.basis.name}, the basis",
            run.span,
            hint="Yields are counted per mol of it: give its concentration, its gas fraction or"
            " what was fed of it.",
        )
    for group, series in (
        ("broth", run.broth),
        ("entering gas", run.gas.inlet if run.gas else ()),
        ("leaving gas", run.gas.outlet if run.gas else ()),
    ):
        for name, times in Counter(item.compound for item in series).items():
            if times > 1:
                second = [item for item in series if item.compound == name][1]
                notes.findings.add(
                    "YN837",
                    f"{name} stands twice in the {group}",
                    second.span or run.span,
                    left=f"columns: {times}",
                    right="one",
                    hint="Keep one column.",
                )
    dissolved = run.gas.dissolved if run.gas else None
    if dissolved is not None and any(item.compound == CARBON_DIOXIDE for item in run.broth):
        notes.findings.add(
            "YN837",
            "carbon dioxide of the broth is measured and calculated",
            dissolved.ph.span or run.span,
            left="column of the broth",
            right="pH and leaving gas",
            hint="Keep one of the two.",
        )
    for item in run.additions:
        for column in item.contents_by_row:
            for row, reading in enumerate(column.readings):
                if reading is None:
                    notes.findings.add(
                        "YN831",
                        f"{column.compound} in {item.name} is missing",
                        place_of(run, row),
                        hint="Give it in every row, or once for the whole run.",
                    )
    if run.gas is not None and run.volume is None and any(item.in_gas for item in items):
        notes.findings.add(
            "YN830",
            "the broth volume is missing",
            run.span,
            left="gas is measured for the whole vessel",
            right="rates are per litre and per gram",
            hint="Give the volume.",
        )
    check_gas(values, notes)


def _tell_assumptions(run: Cultivation, items: tuple[Listed, ...], notes: Notes) -> None:
    for item in items:
        if item.name == BIOMASS:
            continue
        if item.only_added:
            notes.assume(
                f"{item.name} has no concentration in the broth: what was added was taken up in"
                " full"
            )
        elif item.broth is None and not (
            item.name == CARBON_DIOXIDE and run.gas is not None and run.gas.dissolved is not None
        ):
            notes.assume(f"{item.name} dissolved in the broth is left out")
    exponential = run.kind is not CultivationKind.CHEMOSTAT and run.method is Method.EXPONENTIAL
    if run.window is not None and not exponential:
        notes.assume("the window is not used: it belongs to the method exponential")
    if BIOMASS in {item.name for item in items}:
        biomass = run.compound(BIOMASS)
        notes.assume(
            f"biomass is {biomass.formula}; its dry weight holds ash",
            biomass.ash,
            "g/g",
            biomass.about,
        )
    notes.assume("errors of different readings are independent, and small enough to be added up")
