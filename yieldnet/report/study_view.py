"""Views of studies of knock-outs: one idea before and after, and screens."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.report.figures import figure, range_text, with_sign
from yieldnet.report.json_form import FORMAT, findings_form, prediction_form
from yieldnet.report.table import Table
from yieldnet.report.why_view import relaxations_table

if TYPE_CHECKING:
    from fractions import Fraction

    from yieldnet.studies.behaviour import Behaviour
    from yieldnet.studies.knockout import KnockOutResult
    from yieldnet.studies.screen import ScreenResult

__all__ = [
    "behaviour_form",
    "knockout_form",
    "knockout_headline",
    "knockout_tables",
    "screen_form",
    "screen_headline",
    "screen_notes",
    "screen_table",
]

SHOWN = 20
"""Entries of a screen that a text shows; CSV and JSON hold all [-]."""


def knockout_headline(result: KnockOutResult) -> str:
    """What the idea does, in one line."""
    before, after = (
        None if item.aim is None else item.aim.value for item in (result.before, result.after)
    )
    aim = result.case.aim
    names = " and ".join(f"'{name}'" for name in result.names)
    if before is None:
        return f"without {names}: the case has no best value to begin with"
    if after is None:
        return f"without {names}: {result.after.outcome}; before, {aim} was {figure(before)}"
    change = with_sign(after - before)
    return f"without {names}: {aim} {figure(after)} mol/mol, before {figure(before)} ({change})"


def _behaviour_rows(before: Behaviour, after: Behaviour, product: str) -> list[tuple[str, ...]]:
    def cell(item: Behaviour, value: Fraction | None) -> str:
        return "cannot live" if not item.feasible else "" if value is None else figure(value)

    rows = [
        (label, *(cell(item, getattr(item, name)) for item in (before, after)))
        for label, name in (
            ("most biomass", "most_biomass"),
            (f"{product} at most growth, at most", "product_at_most_growth"),
            (f"{product} at most growth, guaranteed", "guaranteed"),
            (f"most {product}", "most_product"),
            (f"biomass at most {product}", "biomass_at_most_product"),
        )
    ]
    coupling = tuple(
        "" if item.coupling is None else str(item.coupling) for item in (before, after)
    )
    return [*rows, ("growth makes product", *coupling)]


def knockout_tables(result: KnockOutResult) -> tuple[Table, ...]:
    """Coefficients before and after, ladder with its own rung, behaviour, relaxations after."""
    after = {item.compound: item for item in result.after.coefficients}
    rows = []
    for item in result.before.coefficients:
        then = after.get(item.compound)
        rows.append(
            (
                item.compound,
                range_text(item.network),
                range_text(then.network) if then else "",
                range_text(item.at_aim),
                range_text(then.at_aim) if then else "",
            )
        )
    ladder = tuple(
        (
            item.rung,
            "none" if item.value is None else figure(item.value),
            "" if item.loss is None else figure(item.loss),
        )
        for item in result.ladder
    )
    reasons = [f"{item.rung}: {item.reason}." for item in result.ladder if item.reason]
    assert result.case.aim is not None
    tables = [
        Table(
            title="Coefficients, mol/mol",
            columns=("", "before", "after", "at aim before", "after"),
            rows=tuple(rows),
        ),
        Table(
            title=f"Ladder: {result.case.aim}, mol/mol",
            columns=("rung", "best", "costs"),
            rows=ladder,
            note=" ".join(reasons),
        ),
        Table(
            title="What the cell would do if it were free to grow, mol/mol",
            columns=("", "before", "after"),
            rows=tuple(
                _behaviour_rows(
                    result.behaviour_before, result.behaviour_after, result.case.aim.compound
                )
            ),
        ),
    ]
    helps = relaxations_table(result.after)
    return (*tables, helps) if helps is not None else tuple(tables)


def behaviour_form(item: Behaviour) -> dict[str, Any]:
    """Behaviour for JSON, exact."""

    def exact(value: Fraction | None) -> str | None:
        return None if value is None else str(value)

    return {
        "feasible": item.feasible,
        "most_biomass": exact(item.most_biomass),
        "product_at_most_growth": exact(item.product_at_most_growth),
        "guaranteed": exact(item.guaranteed),
        "most_product": exact(item.most_product),
        "biomass_at_most_product": exact(item.biomass_at_most_product),
        "coupling": None if item.coupling is None else str(item.coupling),
    }


def knockout_form(result: KnockOutResult) -> dict[str, Any]:
    """One idea for JSON."""
    return {
        "format": FORMAT,
        "case": result.case.title,
        "names": list(result.names),
        "before": prediction_form(result.before),
        "after": prediction_form(result.after),
        "ladder": [
            {
                "rung": item.rung,
                "value": None if item.value is None else float(item.value),
                "exact": None if item.value is None else str(item.value),
                "loss": None if item.loss is None else float(item.loss),
                "exact_loss": None if item.loss is None else str(item.loss),
                "reason": item.reason or None,
            }
            for item in result.ladder
        ],
        "behaviour": {
            "before": behaviour_form(result.behaviour_before),
            "after": behaviour_form(result.behaviour_after),
        },
    }


def screen_headline(result: ScreenResult) -> str:
    """What was looked at, in one line."""
    assert result.case.aim is not None
    words = {
        "guaranteed": f"{result.case.aim.compound} guaranteed at most growth",
        "product": f"most {result.case.aim.compound} at the required growth",
        "product-growth": f"guaranteed {result.case.aim.compound} x biomass",
    }
    return (
        f"Knock-outs to depth {result.depth}, ranked by {words[str(result.score)]};"
        f" the case as it stands: {figure(result.host_score)}"
    )


def screen_table(result: ScreenResult) -> Table:
    """The best sets, proven where exact figures stand."""
    rows = []
    for item in result.entries[:SHOWN]:
        exact = item.exact
        rows.append(
            (
                " + ".join(item.names),
                figure(item.score),
                "" if exact is None or exact.guaranteed is None else figure(exact.guaranteed),
                "" if exact is None or exact.most_biomass is None else figure(exact.most_biomass),
                "" if exact is None or exact.coupling is None else str(exact.coupling),
                "yes" if item.together else "",
            )
        )
    return Table(
        title="Sets that change it, best first, mol/mol",
        columns=("switched off", "score", "guaranteed", "biomass", "coupled", "together"),
        rows=tuple(rows),
    )


def screen_notes(result: ScreenResult) -> tuple[str, ...]:
    """What stands under the table of a screen."""
    notes = [
        f"{result.looked_at:,} sets looked at, {result.solved:,} problems solved;"
        f" {result.without_effect:,} sets change nothing, {result.lethal:,} are lethal."
        f" {max(0, len(result.entries) - SHOWN):,} more entries with --csv or --json.",
        "Scores are floating-point (largest residual of the case as it stands"
        f" {result.residual:.1e}); guaranteed, biomass and coupling are proven in fractions.",
        "coupled: whether growth makes product. together: the set does more than any smaller set of"
        " its members.",
    ]
    if result.essential:
        notes.append(f"Essential: {', '.join(result.essential)}.")
    if result.chains:
        chains = "; ".join(", ".join(chain) for chain in result.chains)
        notes.append(f"Counted once, by the first of each chain: {chains}.")
    return tuple(notes)


def screen_form(result: ScreenResult) -> dict[str, Any]:
    """A screen for JSON."""
    return {
        "format": FORMAT,
        "case": result.case.title,
        "score": str(result.score),
        "depth": result.depth,
        "host": behaviour_form(result.host),
        "host_score": result.host_score,
        "entries": [
            {
                "names": list(item.names),
                "score": item.score,
                "together": item.together,
                "exact": None if item.exact is None else behaviour_form(item.exact),
            }
            for item in result.entries
        ],
        "essential": list(result.essential),
        "chains": [list(chain) for chain in result.chains],
        "looked_at": result.looked_at,
        "solved": result.solved,
        "without_effect": result.without_effect,
        "lethal": result.lethal,
        "residual": result.residual,
        "interrupted": result.interrupted,
        "findings": findings_form(result.findings),
    }
