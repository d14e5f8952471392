"""The view of heat and Gibbs energy: closure first, then heat two ways, energy, steps, yields."""

from __future__ import annotations

from typing import TYPE_CHECKING

from yieldnet.chemistry.thermochemistry import CALORIMETRIC_OXYGEN_HEAT, TEXTBOOK_OXYGEN_HEAT
from yieldnet.model.network import BIOMASS
from yieldnet.prediction.result import Outcome
from yieldnet.report.figures import assumption_rows, figure
from yieldnet.report.table import Table
from yieldnet.report.view import PredictionView, view_of

if TYPE_CHECKING:
    from fractions import Fraction

    from yieldnet.prediction.energetics import Closure, Energetics
    from yieldnet.prediction.heat import HeatAnswer

__all__ = ["SAFETY", "energetics_view", "heat_rows"]

SAFETY = (
    "Figures are for screening. Cooling, pressure and gases (carbon dioxide suffocates, hydrogen"
    " and methane burn) need licensed practice and local codes."
)
"""What is printed below every heat."""
_SHOWN = 8
"""Steps that are shown, those nearest to uphill first; JSON has all [-]."""


def energetics_view(result: Energetics) -> PredictionView:
    """View of heat and Gibbs energy.

    Parameters
    ----------
    result : Energetics
        What was found.

    Returns
    -------
    PredictionView
        Texts in the order of showing.
    """
    plain = view_of(result.prediction)
    tables = [_heat(result), _combustion(result), _gibbs(result), _steps(result), _yields(result)]
    return PredictionView(
        title=plain.title,
        setting=plain.setting,
        headline=_headline(result, plain.headline),
        equation=_equation(result),
        conflict=plain.conflict,
        tables=tuple(table for table in tables if table is not None),
        proof=(),
        proof_tables=(),
        remarks=_remarks(result),
        findings=tuple((str(item.severity), str(item)) for item in result.findings),
        assumptions=assumption_rows(result.assumptions),
    )


def _share(item: Closure) -> str:
    if item.ratio is None:
        return f"{item.quantity} not counted ({item.reason})"
    return f"{float(100 * item.ratio):.1f} % of the {item.quantity}"


def _headline(result: Energetics, plain: str) -> str:
    if result.prediction.outcome is not Outcome.SOLVED:
        return plain
    if not result.amounts:
        return "the overall equation is not settled, so it has no one heat"
    counted = [item for item in result.closures if item.ratio is not None]
    closes = all(item.closes for item in counted)
    words = " and ".join(_share(item) for item in reversed(result.closures))
    told = [("it closes: " if closes else "IT DOES NOT CLOSE: ") + f"{words} come out"]
    per = f"mol {result.case.basis.name}"
    if result.heat is not None:
        heat = result.heat.by_combustion
        word = "heat given off" if heat >= 0 else "heat taken up"
        told.append(f"{word} {figure(abs(heat))} kJ/{per}")
    else:
        told.append("heat not told")
    told.append(
        f"Gibbs energy {figure(result.gibbs.middle)} kJ/{per}"
        if result.gibbs is not None
        else "Gibbs energy not told"
    )
    return "; ".join(told)


def _equation(result: Energetics) -> str:
    sides: tuple[list[str], list[str]] = ([], [])
    for name, amount in result.amounts:
        if amount:
            size = abs(amount)
            sides[amount > 0].append(name if size == 1 else f"{figure(size)} {name}")
    if not result.amounts:
        return ""
    return " + ".join(sides[0]) + " -> " + (" + ".join(sides[1]) or "nothing")


def heat_rows(heat: HeatAnswer) -> tuple[tuple[str, Fraction], ...]:
    """Heat given off by each way, the one by combustion first [kJ/mol basis]."""
    found = [("combustion", heat.by_combustion)]
    for rule in (CALORIMETRIC_OXYGEN_HEAT, TEXTBOOK_OXYGEN_HEAT):
        value = heat.by_oxygen(rule)
        if value is not None:
            found.append((f"oxygen, {rule} kJ/mol", value))
    return tuple(found)


def _heat(result: Energetics) -> Table | None:
    heat = result.heat
    if heat is None:
        return None
    reference = heat.by_combustion
    rows = []
    for way, value in heat_rows(heat):
        apart = value - reference
        rows.append(
            (
                way,
                figure(value),
                figure(value / heat.biomass_grams) if heat.biomass_grams > 0 else "",
                figure(value / heat.oxygen) if heat.oxygen > 0 else "",
                "" if way == "combustion" else figure(apart),
                ""
                if way == "combustion" or not reference
                else f"{float(100 * apart / abs(reference)):+.0f} %",
            )
        )
    note = "No oxygen is taken up, so the rule for oxygen says nothing." if len(rows) == 1 else ""
    return Table(
        title=f"Heat given off, kJ per mol {result.case.basis.name}",
        columns=("by", "kJ/mol", "kJ/g biomass", "kJ/mol oxygen", "apart", ""),
        rows=tuple(rows),
        note=note,
    )


def _combustion(result: Energetics) -> Table | None:
    if result.heat is None:
        return None
    rows = [
        (
            item.compound,
            figure(item.amount),
            figure(item.heat.value),
            figure(item.given),
            item.heat.state,
            item.heat.known.status,
        )
        for item in result.heat.terms
        if item.amount
    ]
    return Table(
        title="Heats of combustion, to nitrogen gas and liquid water",
        columns=("compound", "mol/mol", "kJ/mol", "adds kJ", "state", "known"),
        rows=tuple(rows),
        note="'yieldnet compounds NAME' shows the source of each value.",
    )


def _gibbs(result: Energetics) -> Table | None:
    gibbs = result.gibbs
    if gibbs is None:
        return None
    rows = [("all concentrations 1 mol/L, gases 1 bar", figure(gibbs.standard))]
    if gibbs.low < gibbs.high:
        rows += [
            ("at the middle of the bounds", figure(gibbs.middle)),
            ("over the bounds", f"{figure(gibbs.low)} … {figure(gibbs.high)}"),
        ]
    else:
        rows.append(("at the concentrations", figure(gibbs.middle)))
    per_carbon = result.dissipation_kj_per_cmol
    if per_carbon is not None:
        rows.append(("dissipated per C-mol biomass", figure(per_carbon)))
    ph = 7.0 if result.case.ph is None else float(result.case.ph.value)
    return Table(
        title=f"Gibbs energy, kJ per mol {result.case.basis.name},"
        f" pH {ph:g} and {gibbs.kelvin - 273.15:.1f} degC",
        columns=("", "kJ"),
        rows=tuple(rows),
        note="Negative runs by itself.",
    )


def _steps(result: Energetics) -> Table | None:
    if not result.running:
        return None
    nearest = sorted(result.steps, key=lambda item: -item.gibbs.low)[:_SHOWN]
    rows = tuple(
        (
            item.reaction + (" (backwards)" if item.flux < 0 else ""),
            figure(item.gibbs.low),
            figure(item.gibbs.high),
            "uphill" if item.uphill else "possible",
        )
        for item in nearest
    )
    hidden = len(result.steps) - len(rows)
    note = f"{len(result.steps)} of {result.running} running steps could be judged"
    if len(result.steps) < result.running:
        note += "; the others hold a compound without a Gibbs energy"
    note += "."
    return Table(
        title="Steps nearest to uphill, kJ per mol of the step as it runs",
        columns=("step", "least", "most", ""),
        rows=rows,
        note=note + (f" {hidden} more in JSON." if hidden else ""),
    )


def _yields(result: Energetics) -> Table | None:
    if not result.opinions:
        return None
    biomass = result.case.compound(BIOMASS)
    grams = float(biomass.formula.molar_mass / (1 - biomass.ash) / biomass.formula["C"])
    basis = result.case.basis.formula.molar_mass
    rows = [
        (
            "this case",
            figure(result.biomass_carbon),
            figure(float(result.biomass_carbon) * grams / float(basis)),
            "",
        )
    ]
    rows += [
        (
            item.method,
            "none" if item.value is None else figure(item.value),
            "" if item.value is None else figure(item.value * grams / float(basis)),
            item.reason or item.source,
        )
        for item in result.opinions
    ]
    return Table(
        title=f"Biomass from {result.case.basis.name} alone, by several ways",
        columns=("by", "C-mol/mol", "g/g", ""),
        rows=tuple(rows),
        note="The last two hold for growth alone on one organic substrate with ammonium; not for"
        " cells that fix carbon dioxide or drive electrons backwards.",
    )


def _remarks(result: Energetics) -> tuple[str, ...]:
    if result.heat is None:
        return (SAFETY,)
    return ("Heats of solution, neutralising, stirring and evaporation are not in it.", SAFETY)
