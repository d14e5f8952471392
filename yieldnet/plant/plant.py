"""The feasibility study of a case: from its predicted equation to a plant sheet."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings
from yieldnet.foundation.sourced import Assumption
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.plant.base import proton_balance, tell_solubility
from yieldnet.plant.constants import ATMOSPHERE, USUAL_FILL
from yieldnet.plant.cost import Ends, cost_figures, cost_line
from yieldnet.plant.equation import (
    GROWTH_ASSUMPTIONS,
    growth_case,
    growth_share,
    product_mass,
    settled_equation,
    together,
)
from yieldnet.plant.heat import heat_figures
from yieldnet.plant.oxygen import air_per_broth, demand_of, oxygen_figures
from yieldnet.plant.sheet import Figure, Input, PlantSheet
from yieldnet.plant.streams import (
    balances_of,
    check_closed,
    ions_of,
    scale_of,
    streams_of,
)
from yieldnet.plant.vessels import production_rate, vessels_of
from yieldnet.prediction.assumptions import KEPT
from yieldnet.prediction.predict import Wanted, balance_case, predict_case
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.spread import worst_end

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.model.case import Case
    from yieldnet.model.plant import Plant, Price
    from yieldnet.plant.base import ProtonBalance
    from yieldnet.plant.equation import GrowthShare
    from yieldnet.plant.vessels import Vessels
    from yieldnet.prediction.result import Prediction

__all__ = ["plant_case", "plant_cases", "plant_of"]

_ZERO = Fraction(0)


def plant_cases(cases: Sequence[Case], engine: str = "glpk") -> tuple[PlantSheet, ...]:
    """Plant sheets of several cases that are to stand side by side.

    Parameters
    ----------
    cases : sequence of Case
        Questions with a section ``plant``.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    tuple of PlantSheet
        One sheet a case.

    Raises
    ------
    InputError
        If any sheet cannot be made, or prices are in two currencies; carries all findings.
    """
    sheets: list[PlantSheet] = []
    refused = Findings()
    first: Price | None = None
    for case in cases:
        try:
            sheets.append(plant_case(case, engine))
        except InputError as error:
            refused.extend(error.findings)
        own = case.plant.prices[0] if case.plant is not None and case.plant.prices else None
        first = first or own
        if own is not None and first is not None and own.currency != first.currency:
            refused.add(
                "YN907",
                f"{case.title!r} has its prices in another currency than the cases before it",
                own.span,
                left=f"before {first.currency}",
                right=f"here {own.currency}",
                hint="Turn all prices into one currency: no rate of exchange is built in.",
            )
    if refused.refused:
        raise InputError(refused.sorted())
    return tuple(sheets)


def plant_case(case: Case, engine: str = "glpk") -> PlantSheet:
    """Plant sheet of a case: predict, then :func:`plant_of`.

    Parameters
    ----------
    case : Case
        The question, with a section ``plant``.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    PlantSheet
        The sheet.

    Raises
    ------
    InputError
        If the case has no section ``plant``, or no sheet can be made.
    """
    if case.plant is None:
        findings = Findings(list(case.findings))
        findings.add(
            "YN913",
            "the case has no section 'plant'",
            case.span,
            hint="Add 'plant: ' with output and on-stream.",
        )
        raise InputError(findings.sorted())
    return plant_of(case, _predicted(case, engine), engine)


def _predicted(case: Case, engine: str) -> Prediction:
    if case.network is None:
        return balance_case(case, engine)
    return predict_case(case, engine, Wanted(fluxes=case.aim is not None))


def plant_of(case: Case, prediction: Prediction, engine: str = "glpk") -> PlantSheet:
    """Plant sheet of a case and its prediction.

    Parameters
    ----------
    case : Case
        The question, with a section ``plant``.
    prediction : Prediction
        Its answer, with fluxes where it has a network and an aim.
    engine : {"glpk", "optlang"}
        Engine for the growth phase and for the ends of the bands.

    Returns
    -------
    PlantSheet
        Streams, heat, oxygen, vessels and cost.

    Raises
    ------
    InputError
        If there is no equation that makes product, an acid has no pKa, the phases do not fit, or
        the streams would not close.
    ValueError
        If the case has no section ``plant``.
    """
    plant = case.plant
    if plant is None:
        raise ValueError("the case has no section 'plant'")
    # Fluxes are asked for by this function and not by the user, who need not hear of them.
    findings = Findings([item for item in prediction.findings if item.code != "YN607"])
    production = settled_equation(case, prediction, findings)
    made = dict(production)
    if made[plant.product] <= 0:
        findings.add(
            "YN913",
            f"the predicted equation makes no {plant.product}",
            plant.span,
            hint="Aim at it, or measure it.",
        )
        raise InputError(findings.sorted())
    rate = production_rate(plant)
    amounts, share = production, None
    grown: Prediction | None = None
    growth: dict[str, Fraction] | None = None
    if plant.phases is not None:
        before = growth_case(case)
        grown = _predicted(before, engine)
        growth = dict(settled_equation(before, grown, findings))
        share = growth_share(case, plant, made, growth, rate, findings)
        amounts = together(production, growth, share.share)
    overall = dict(amounts)
    scale = scale_of(case, plant, overall)
    protons = proton_balance(case, plant, overall, findings)
    vessels = vessels_of(plant, scale, share)
    celsius = _celsius(case, plant)
    air = _passing_air(plant, vessels)
    streams = streams_of(case, plant, overall, scale, protons, air)
    ions = ions_of(protons, scale)
    balances = balances_of(streams, ions)
    check_closed(balances, case, findings)
    tell_solubility(plant, findings)
    demands = demand_of(case, plant, made, growth, share, rate)
    figures = (
        *_yields(case, plant, overall, made),
        *_proton_figures(protons),
        *vessels.figures,
        *oxygen_figures(plant, demands, celsius, findings),
        *heat_figures(case, plant, overall, scale, protons, vessels, celsius, air, findings),
    )
    if plant.prices:
        phases = (
            proton_balance(case, plant, made, findings, refuse=False),
            None if growth is None else proton_balance(case, plant, growth, findings, refuse=False),
        )
        line = cost_line(case, plant, made, growth, share, phases)
        ends = _ends(case, prediction, plant.product, made[plant.product], engine)
        figures += cost_figures(case, plant, line, ends, streams, findings)
    return PlantSheet(
        case=case,
        plant=plant,
        prediction=prediction,
        growth=grown,
        equation=amounts,
        streams=streams,
        ions=ions,
        figures=figures,
        balances=balances,
        findings=findings.sorted(),
        assumptions=(
            *(item for item in prediction.assumptions if item.text not in KEPT.values()),
            *_assumptions(case, plant, overall, protons, share),
        ),
    )


def _celsius(case: Case, plant: Plant) -> Fraction | None:
    """Temperature of the broth: of the plant, else of the conditions."""
    if plant.temperature is not None:
        return plant.temperature.value
    return case.temperature.value if case.temperature is not None else None


def _passing_air(plant: Plant, vessels: Vessels) -> Fraction | None:
    """Dry air blown in, as a mean over the time on stream [mol/h]."""
    if plant.aeration is None or plant.aeration.vvm is None or vessels.volume is None:
        return None
    return air_per_broth(plant.aeration.vvm.value) * vessels.volume * vessels.running


def _yields(
    case: Case, plant: Plant, overall: dict[str, Fraction], made: dict[str, Fraction]
) -> tuple[Figure, ...]:
    """Yields of production and of the whole plant."""
    ratio = product_mass(case, plant) / case.basis.formula.molar_mass
    recovery = plant.overall_recovery()
    best = made[plant.product] * ratio
    total = overall[plant.product] * ratio
    inside = Input(name="yield over all phases", value=total, unit="g/g")
    return (
        Figure(
            section="Yields",
            name="yield of production",
            value=best,
            unit="g/g",
            formula="predicted equation, product / substrate",
            inputs=(Input(name="yield of production", value=made[plant.product], unit="mol/mol"),),
        ),
        Figure(
            section="Yields",
            name="yield over all phases",
            value=total,
            unit="g/g",
            formula="product in the broth / substrate of growth, seed and production",
            inputs=(Input(name="over all phases", value=overall[plant.product], unit="mol/mol"),),
        ),
        Figure(
            section="Yields",
            name="yield sold",
            value=total * recovery,
            unit="g/g",
            formula="yield over all phases x recovery",
            inputs=(inside, Input(name="recovery", value=recovery, unit="-")),
        ),
    )


def _proton_figures(protons: ProtonBalance | None) -> tuple[Figure, ...]:
    """Protons of each acid and nitrogen source, and the base that takes them up."""
    if protons is None:
        return ()
    section = "Base"
    ph = Input(name="pH", value=protons.ph, unit="-")
    found = [
        Figure(
            section=section,
            name=f"protons of {item.compound}",
            value=item.protons,
            unit="mol/mol substrate",
            formula=f"amount x protons per mol; {item.rule}",
            inputs=(
                Input(name="amount", value=item.amount, unit="mol/mol"),
                Input(name="protons per mol", value=item.each, unit="mol/mol"),
                ph,
            ),
            source=item.source,
        )
        for item in protons.terms
    ]
    parts = tuple(item.as_input() for item in found)
    return (
        *found,
        Figure(
            section=section,
            name=f"{protons.base.name} as base",
            value=protons.base_amount,
            unit="mol/mol substrate",
            formula="sum of the protons / protons taken up by one mol of base",
            inputs=(
                *parts,
                Input(
                    name="protons taken up by one mol",
                    value=Fraction(protons.base.equivalents),
                    unit="mol/mol",
                ),
            ),
        ),
    )


def _ends(case: Case, prediction: Prediction, product: str, best: Fraction, engine: str) -> Ends:
    """Ends of the yield of production over the bands of the measured values."""
    aim = case.aim
    if aim is not None and aim.compound == product and prediction.aim is not None:
        ready = prepare(case, Optimiser(engine_named(engine)), network=case.network is not None)
        worse: Fraction | None = None
        if ready.objective is not None:
            worse = worst_end(ready.optimiser, ready.layers, ready.objective).value
        ends = (prediction.aim.within_bands, worse)
    else:
        answer = prediction.coefficient(product)
        found = answer.network or answer.elements
        ends = (found.high, found.low) if found is not None else (None, None)
    known = [item for item in ends if item is not None]
    if len(known) < len(ends):
        return Ends(best=best, better=ends[0], worse=ends[1])
    return Ends(best=best, better=max(known), worse=min(known))


def _assumptions(
    case: Case,
    plant: Plant,
    amounts: dict[str, Fraction],
    protons: ProtonBalance | None,
    share: GrowthShare | None,
) -> tuple[Assumption, ...]:
    """What the sheet takes for granted."""
    found = [
        Assumption(text="all substrate that is fed is used; losses downstream are product alone")
    ]
    if not plant.product_given:
        found.append(Assumption(text=f"the product is the aim, {plant.product}"))
    if not plant.recovery:
        found.append(Assumption(text="no recovery is given, so nothing is lost", value=Fraction(1)))
    if plant.purity(case.basis.name) is None:
        found.append(Assumption(text=f"no purity is given, so {case.basis.name} is pure"))
    if plant.temperature is None and case.temperature is not None:
        found.append(
            Assumption(
                text="temperature of the broth from the conditions",
                value=case.temperature.value,
                unit="degC",
            )
        )
    if plant.vessel is not None and plant.fill is None:
        found.append(
            Assumption(
                text="broth over volume of a vessel",
                value=USUAL_FILL.value,
                unit="-",
                source=USUAL_FILL.source,
            )
        )
    if amounts.get("oxygen", _ZERO) < 0:
        if plant.aeration is None or plant.aeration.pressure is None:
            found.append(
                Assumption(
                    text="no pressure is given, so that of the atmosphere",
                    value=ATMOSPHERE.value,
                    unit="bar",
                )
            )
        if plant.aeration is None or plant.aeration.dissolved_oxygen is None:
            found.append(
                Assumption(text="no dissolved oxygen is given, so none in the broth", value=_ZERO)
            )
    if share is not None:
        found += GROWTH_ASSUMPTIONS
        phases = plant.phases
        if phases is not None and phases.turnaround is None:
            found.append(Assumption(text="no turnaround is given, so it takes no time"))
    if protons is not None:
        found.append(
            Assumption(
                text="pKa at 25 degC without salt; acids taken up are fed undissociated; carbonate"
                " in the broth, and phosphate and sulfate of the minerals, need no base"
            )
        )
        if protons.uncharged:
            names = ", ".join(protons.uncharged)
            found.append(Assumption(text=f"counted neither as acid nor as base: {names}"))
    else:
        found.append(Assumption(text="no base is given, so acids stay undissociated"))
    if amounts.get("carbon dioxide", _ZERO) < 0:
        found.append(Assumption(text="carbon dioxide is taken up net and must be fed", value=None))
    return tuple(found)
