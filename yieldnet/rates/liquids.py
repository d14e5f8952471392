"""Volumes of a batch or a fed-batch: broth, samples, and what was added between the rows."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

from yieldnet.model.cultivation import Reading
from yieldnet.rates.values import place_of, row_count

if TYPE_CHECKING:
    from yieldnet.model.cultivation import Additions
    from yieldnet.rates.values import Notes, PerhapsQuantity, Quantity, Values

__all__ = ["Liquids", "find_liquids"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Liquids:
    """Volumes with their errors.

    Parameters
    ----------
    volumes : tuple of float, value with errors or None
        Broth at each row, before its sample is taken [L]; ``None`` where it is not known.
    sampled : tuple of float or value with errors
        Withdrawn at each row [L].
    added : tuple of (Additions, tuple of float, value with errors or None)
        Each liquid that is added, with its volume between each row and the next [L].
    """

    volumes: tuple[PerhapsQuantity, ...]
    sampled: tuple[Quantity, ...]
    added: tuple[tuple[Additions, tuple[PerhapsQuantity, ...]], ...]

    def check(self, values: Values, rows: range, notes: Notes) -> None:
        """Tell where a volume is missing that the rows from first to last need."""
        for row in rows:
            gone = ["volume"] if self.volumes[row] is None else []
            if row != rows[-1]:
                gone += [
                    f"volume of {item.name}" for item, steps in self.added if not _ok(steps[row])
                ]
            for what in gone:
                notes.findings.add(
                    "YN831",
                    f"the {what} is missing at {values.run.times[row]:g} h",
                    place_of(values.run, row),
                    hint="Give it in every row of the window, or leave the rows out.",
                )


def _ok(step: PerhapsQuantity) -> bool:
    return step is not None


def find_liquids(values: Values, notes: Notes) -> Liquids:
    """Volumes of all rows of a batch or a fed-batch.

    Parameters
    ----------
    values : Values
        Values of the run.
    notes : Notes
        Takes findings and assumptions.

    Returns
    -------
    Liquids
        Volumes [L].

    Notes
    -----
    A volume column is taken as it stands. One volume alone is that of the first row, and goes on
    by what is sampled and added. Without any, amounts are those of one litre.
    """
    run = values.run
    rows = row_count(run)
    sampled = [values.cell(run.sampled, row) if run.sampled else 0.0 for row in range(rows)]
    if any(item is None for item in sampled):
        notes.assume("no sample was withdrawn where the sheet gives no sampled volume")
    withdrawn = tuple(0.0 if item is None else item for item in sampled)
    added = []
    for item in run.additions:
        steps = _steps(values, item, notes)
        if steps is not None:
            added.append((item, steps))
    volumes = _volumes(values, withdrawn, [steps for _, steps in added], notes)
    return Liquids(volumes=volumes, sampled=withdrawn, added=tuple(added))


def _steps(values: Values, item: Additions, notes: Notes) -> tuple[PerhapsQuantity, ...] | None:
    """Volume added between each row and the next [L]; ``None`` for a liquid never added."""
    times = values.run.times
    if item.added is not None:
        totals = [values.cell(item.added, row) for row in range(len(times))]
        return tuple(
            None if before is None or after is None else after - before
            for before, after in pairwise(totals)
        )
    if item.rate is not None:
        notes.assume(f"the rate of {item.name} is straight between the rows")
        rates = [values.cell(item.rate, row) for row in range(len(times))]
        return tuple(
            None
            if before is None or after is None
            else (before + after) / 2 * (times[at + 1] - times[at])
            for at, (before, after) in enumerate(pairwise(rates))
        )
    notes.findings.add(
        "YN831",
        f"the contents of {item.name} are given, and not how much of it was added",
        values.run.span,
        left=f"{len(item.contents) + len(item.contents_by_row)} contents",
        right="no volume",
        hint="Give the volume added or its rate, or leave the contents out.",
    )
    return None


def _volumes(
    values: Values,
    sampled: tuple[Quantity, ...],
    steps: list[tuple[PerhapsQuantity, ...]],
    notes: Notes,
) -> tuple[PerhapsQuantity, ...]:
    run = values.run
    rows = len(sampled)
    if run.volume is not None and not isinstance(run.volume, Reading):
        return tuple(values.cell(run.volume, row) for row in range(rows))
    if run.volume is None:
        if run.sampled is None and not steps and run.gas is None:
            notes.assume("no volume is given, so it is constant and rates are those of one litre")
            return (1.0,) * rows
        notes.findings.add(
            "YN830",
            "the broth volume is missing",
            run.span,
            hint="Samples, feed, base and gas count against it: give a volume.",
        )
        return (None,) * rows
    level: PerhapsQuantity = values.of(run.volume)
    found = [level]
    for row in range(rows - 1):
        parts = [step[row] for step in steps]
        if level is not None:
            gone = any(part is None for part in parts)
            level = None if gone else level - sampled[row] + sum(parts)
        found.append(level)
    if run.sampled is not None or steps:
        notes.assume(
            "the volume given is that of the first row; it goes on by what is sampled and added"
        )
    else:
        notes.assume("the broth volume is constant")
    return tuple(found)
