"""View of a design for coupling: which sets force product once the cell grows."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from yieldnet.report.figures import figure
from yieldnet.report.json_form import FORMAT
from yieldnet.report.study_view import behaviour_form
from yieldnet.report.table import Table

if TYPE_CHECKING:
    from yieldnet.studies.coupling import CoupledSet, CouplingDesign

__all__ = ["coupling_form", "coupling_headline", "coupling_notes", "coupling_table"]


def coupling_headline(result: CouplingDesign) -> str:
    """What was asked, and whether it can be had, in one line."""
    asked = (
        f"at least {figure(result.least_yield)} mol/mol {result.product} whenever biomass is at"
        f" least {figure(result.least_growth)} mol/mol"
    )
    if not result.sets:
        return f"{asked}: {result.status}"
    smallest = len(result.sets[0].members)
    if not smallest:
        return f"{asked}: nothing need be knocked out"
    return f"{asked}: {smallest} knock-out{'s' if smallest > 1 else ''} at the least"


def _row(item: CoupledSet) -> tuple[str, ...]:
    behaviour = item.behaviour
    return (
        " + ".join(item.members) or "nothing",
        figure(item.forced),
        "" if behaviour.guaranteed is None else figure(behaviour.guaranteed),
        "" if behaviour.most_biomass is None else figure(behaviour.most_biomass),
    )


def coupling_table(result: CouplingDesign) -> Table:
    """The sets, smallest first; if there are none, the one that forces most."""
    sets = result.sets or ((result.best,) if result.best is not None else ())
    title = "Sets, smallest first, mol/mol" if result.sets else "What forces most, mol/mol"
    return Table(
        title=title,
        columns=("knocked out", "forced", "guaranteed", "biomass"),
        rows=tuple(_row(item) for item in sets),
        note="forced: least product at that growth or more; guaranteed: at most growth. All are"
        " proven in fractions.",
    )


def coupling_notes(result: CouplingDesign) -> tuple[str, ...]:
    """What stands under the table."""
    notes = []
    if result.cut_short:
        sizes = ", ".join(str(size) for size in result.cut_short)
        notes.append(f"There are more sets of size {sizes}; ask with --alternatives.")
    same = {
        member: others
        for item in result.sets
        for member, others in zip(item.members, item.same, strict=True)
        if others
    }
    for member, others in same.items():
        notes.append(f"{', '.join(others)} would do as well as {member}.")
    return tuple(notes)


def coupling_form(result: CouplingDesign) -> dict[str, Any]:
    """A design for coupling for JSON."""

    def one(item: CoupledSet) -> dict[str, Any]:
        return {
            "members": list(item.members),
            "same": [list(others) for others in item.same],
            "forced": float(item.forced),
            "exact_forced": str(item.forced),
            "behaviour": behaviour_form(item.behaviour),
        }

    return {
        "format": FORMAT,
        "status": str(result.status),
        "product": result.product,
        "least_yield": str(result.least_yield),
        "least_growth": str(result.least_growth),
        "depth": result.most_deletions,
        "sets": [one(item) for item in result.sets],
        "cut_short": list(result.cut_short),
        "best": None if result.best is None else one(result.best),
    }
