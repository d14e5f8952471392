"""Substrate per biomass against maintenance per biomass: one exact line of straight pieces.

Everything in a case is told per mol of basis, and biomass may be set to 1 mol instead: measured
values, written coefficients and demands are ratios and become rows without a constant. Then the
maintenance per mol biomass, m M/mu, is the only number on the right side of a linear problem, and
the least basis per biomass is a convex function of it made of straight pieces. Along each piece the
law of Herbert and Pirt holds exactly: 1/Y = 1/Y_true + m_S/mu. A piece ends where a limit changes.

References
----------
Pirt, S. J. (1965) The maintenance energy of bacteria in growing cultures, Proceedings of the Royal
Society B 163:224-231; Herbert, D. (1958) Some principles of continuous culture (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import yield_column
from yieldnet.model.network import BIOMASS
from yieldnet.optimum.problem import FREE, MADE, SHUT, Bounds, Column, Matrix, Problem, Row
from yieldnet.optimum.proof import Status
from yieldnet.optimum.slopes import slopes
from yieldnet.prediction.layers import surplus_column

if TYPE_CHECKING:
    from yieldnet.optimum.proof import Answer, Optimiser

__all__ = ["Piece", "PirtLine", "per_biomass"]

_ZERO = Fraction(0)
_ONE = Fraction(1)
_NEED = "maintenance per biomass"
_TILT = Fraction(10**6)
"""Worth of the need in the objective of a slope, so that a level piece has a slope that is not
zero and an end that is looked for; no ATP brings a million mol of basis [mol/mol]."""


def per_biomass(problem: Problem, basis: str, carrier: str, *, exact: bool) -> Problem:
    """Problem of a case told per mol of biomass, with maintenance as a number of its own.

    Parameters
    ----------
    problem : Problem
        All layers but maintenance, statements in; 1 mol of basis is taken up.
    basis : str
        Basis.
    carrier : str
        Energy carrier of maintenance; empty if the network has none.
    exact : bool
        Whether the surplus of the carrier is the maintenance, and not at least it.

    Returns
    -------
    Problem
        1 mol biomass is made; the basis is free, and the row of the maintenance too.

    Raises
    ------
    ValueError
        If a column besides the basis has a bound that is not zero.
    """
    place = problem.column(yield_column(basis))
    columns: list[Column] = []
    for item in problem.columns:
        bounds = item.bounds
        if item.name == yield_column(basis):
            bounds = Bounds(None, _ZERO)
        elif item.name == yield_column(BIOMASS):
            bounds = Bounds(_ONE, _ONE)
        elif item.name == surplus_column(carrier):
            bounds = FREE
        elif bounds.low or bounds.high:
            raise ValueError(f"column {item.name!r} has a bound that is not zero")
        columns.append(Column(name=item.name, bounds=bounds))
    need = len(columns)
    columns.append(Column(name=_NEED, bounds=FREE))
    rows: list[Row] = []
    entries: list[tuple[tuple[int, Fraction], ...]] = []

    def add(
        row: Row, line: tuple[tuple[int, Fraction], ...], bound: Fraction, kept: Bounds
    ) -> None:
        # A bound of b per mol of basis is a line through zero: sum + b (yield of basis), which is
        # negative as it is taken up.
        found = dict(line)
        found[place] = found.get(place, _ZERO) + bound
        rows.append(Row(name=row.name, layer=row.layer, bounds=kept))
        entries.append(tuple((j, value) for j, value in found.items() if value))

    for row, line in zip(problem.rows, problem.matrix.rows, strict=True):
        low, high = row.bounds.low, row.bounds.high
        if low is None or high is None or low == high:
            bound = low if low is not None else high if high is not None else _ZERO
            kept = Bounds(None if low is None else _ZERO, None if high is None else _ZERO)
            add(row, line, bound, kept)
        else:
            add(row, line, low, MADE)
            upper = Row(name=f"{row.name}, at most", layer=row.layer, bounds=FREE)
            add(upper, line, high, Bounds(None, _ZERO))
    if carrier:
        rows.append(Row(name="maintenance", layer="maintenance", bounds=SHUT if exact else MADE))
        entries.append(((problem.column(surplus_column(carrier)), _ONE), (need, -_ONE)))
    rows.append(Row(name=_NEED, layer="maintenance", bounds=FREE))
    entries.append(((need, _ONE),))
    return Problem(
        columns=tuple(columns),
        rows=tuple(rows),
        matrix=Matrix(tuple(entries), len(columns)),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Piece:
    """A straight piece: basis = constant + slope x maintenance, all per mol of biomass.

    Parameters
    ----------
    low, high : Fraction or None
        Maintenance from which and to which it holds [mol/mol biomass]; a high of ``None`` means
        that it goes on without an end.
    constant : Fraction
        Basis without maintenance, on this line [mol/mol biomass].
    slope : Fraction
        Basis for one ATP of maintenance [mol/mol].
    starts, stops : tuple of str
        What flows from here on and did not before, and the reverse: ``acetate given off``, a
        reaction, or a demand that is met to the limit; empty for the first piece.
    """

    low: Fraction
    high: Fraction | None
    constant: Fraction
    slope: Fraction
    starts: tuple[str, ...] = ()
    stops: tuple[str, ...] = ()

    def basis(self, need: Fraction) -> Fraction:
        """Basis per mol of biomass at a maintenance on this piece [mol/mol]."""
        return self.constant + self.slope * need


@dataclass(slots=True)
class PirtLine:
    """The line of a problem that :func:`per_biomass` made.

    Parameters
    ----------
    optimiser : Optimiser
        Solves and proves.
    problem : Problem
        The problem.
    basis : str
        Basis.
    """

    optimiser: Optimiser
    problem: Problem
    basis: str

    def at(self, need: Fraction) -> Answer:
        """Proven answer with the least basis at one maintenance per biomass."""
        fixed = self.problem.with_rows({_NEED: Bounds(need, need)})
        return self.optimiser.optimise(fixed, {yield_column(self.basis): _ONE})

    def ends(self) -> tuple[Fraction, Fraction | None] | None:
        """Least and most maintenance at which there is growth; ``None`` if there is none.

        Returns
        -------
        tuple of (Fraction, Fraction or None) or None
            Both ends, none below zero [mol/mol biomass].
        """
        positive = self.problem.with_rows({_NEED: MADE})
        least = self.optimiser.optimise(positive, {_NEED: _ONE}, maximise=False)
        if least.status is not Status.OPTIMAL:
            return None
        most = self.optimiser.optimise(positive, {_NEED: _ONE})
        return least.value, most.value if most.status is Status.OPTIMAL else None

    def pieces(self, furthest: Fraction) -> tuple[Piece, ...]:
        """Straight pieces from the least maintenance on, at least up to ``furthest``.

        Parameters
        ----------
        furthest : Fraction
            Most maintenance that is asked for [mol/mol biomass].

        Returns
        -------
        tuple of Piece
            In order, the last one whole; empty if there is no growth.
        """
        ends = self.ends()
        if ends is None:
            return ()
        found: list[Piece] = []
        low, last = ends
        before: Answer | None = None
        while True:
            answer = self.at(low)
            least = -answer.value
            (slope,) = slopes(self.optimiser, self._tilted(answer, low), [{_NEED: _ONE}])
            if slope.value is None:
                # Growth is possible at this very maintenance and at no higher one.
                if not found:
                    found.append(Piece(low=low, high=low, constant=least, slope=_ZERO))
                break
            rise = -(slope.value + _TILT)
            high = None if slope.until is None else low + slope.until
            inside = self.at(low + slope.until / 2 if slope.until else low + 1)
            starts, stops = _changes(before, inside) if before is not None else ((), ())
            found.append(
                Piece(
                    low=low,
                    high=high,
                    constant=least - rise * low,
                    slope=rise,
                    starts=starts,
                    stops=stops,
                )
            )
            if high is None or high >= furthest or (last is not None and high >= last):
                break
            before, low = inside, high
        return tuple(found)

    def _tilted(self, answer: Answer, need: Fraction) -> Answer:
        """The same optimum under the objective that no piece leaves level."""
        objective = {yield_column(self.basis): _ONE, _NEED: -_TILT}
        fixed = self.problem.with_rows({_NEED: Bounds(need, need)})
        assert answer.status is Status.OPTIMAL
        return self.optimiser.optimise(fixed, objective)


def _changes(before: Answer, after: Answer) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """What is at a bound in one of two answers and not in the other."""
    was, now = _flowing(before), _flowing(after)
    return (
        tuple(name for name in now if name not in was),
        tuple(name for name in was if name not in now),
    )


def _flowing(answer: Answer) -> dict[str, None]:
    """Coefficients and fluxes that are not zero, and limits that are met exactly."""
    found: dict[str, None] = {}
    for i, row in enumerate(answer.problem.rows):
        bounds = row.bounds
        one_sided = (bounds.low is None) != (bounds.high is None)
        if one_sided and row.layer == "demands" and answer.activity(i) == 0:
            found[f"{row.name} at its limit"] = None
    for j, item in enumerate(answer.problem.columns):
        value = answer.primal[j]
        kind, _, name = item.name.partition(" of ")
        if not value or item.name == _NEED:
            continue
        if kind == "yield":
            found[f"{name} {'given off' if value > 0 else 'taken up'}"] = None
        elif kind == "flux":
            backwards = " backwards" if value < 0 else ""
            found[f"{name}{backwards}"] = None
    return found
