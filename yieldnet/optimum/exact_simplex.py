"""Exact bounded simplex method over one matrix, from a basis that floats suggest.

Primal values, duals and reduced costs of the basis are solved in rational arithmetic. Where the
floats were wrong, exact pivots with Bland's rule go on from there, so every status is proven: an
optimum by primal and dual, an infeasible problem by a combination of rows that cannot hold, an
unbounded one by a direction.

References
----------
Bland, R. G. (1977) New finite pivoting rules for the simplex method, Math. Oper. Res. 2:103-107.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.answer import Answer, Status
from yieldnet.optimum.basis import Basis
from yieldnet.optimum.factors import Factors, SingularBasis

if TYPE_CHECKING:
    from collections.abc import Mapping

    from yieldnet.optimum.problem import Bounds, Matrix, Problem

__all__ = ["MAX_PIVOTS", "ExactSimplex"]

MAX_PIVOTS = 5_000
"""Most exact pivots before a problem is given up as too large to prove [-]."""
Rational = Any
_ZERO = Fraction(0)


class ExactSimplex:
    """Exact bounded simplex over one matrix."""

    def __init__(self, matrix: Matrix) -> None:
        from flint import fmpq

        self.fmpq = fmpq
        self.matrix = matrix
        self.size = matrix.columns
        self.rows = [{j: self._in(value) for j, value in row} for row in matrix.rows]
        self.columns: list[dict[int, Rational]] = [{} for _ in range(matrix.columns)]
        for i, row in enumerate(self.rows):
            for j, value in row.items():
                self.columns[j][i] = value
        self.zero = fmpq(0)
        self.factors: dict[tuple[int, ...], tuple[list[int], list[int], Factors]] = {}
        self.seen: list[Bounds | None] = [None] * (matrix.columns + len(matrix.rows))
        self.low: list[Rational | None] = [None] * len(self.seen)
        self.high: list[Rational | None] = [None] * len(self.seen)

    def _in(self, value: Fraction) -> Rational:
        return self.fmpq(value.numerator, value.denominator)

    def _take_bounds(self, problem: Problem) -> None:
        """Convert the bounds that are other objects than at the last call."""
        for j, bounds in enumerate(problem.all_bounds()):
            if bounds is not self.seen[j]:
                self.seen[j] = bounds
                self.low[j] = None if bounds.low is None else self._in(bounds.low)
                self.high[j] = None if bounds.high is None else self._in(bounds.high)

    def _out(self, value: Rational) -> Fraction:
        return Fraction(int(value.p), int(value.q)) if value else _ZERO

    def _factor(self, basic: tuple[int, ...]) -> tuple[list[int], list[int], Factors]:
        """Basic columns, rows that are not basic, and the factors of the block between them."""
        kept = self.factors.get(basic)
        if kept is None:
            size = self.size
            inner = [j for j in basic if j < size]
            basic_rows = {j - size for j in basic if j >= size}
            tight = [i for i in range(len(self.rows)) if i not in basic_rows]
            if len(inner) != len(tight):
                raise SingularBasis
            place = {j: at for at, j in enumerate(inner)}
            block = [
                {place[j]: value for j, value in self.rows[i].items() if j in place} for i in tight
            ]
            kept = self.factors[basic] = (inner, tight, Factors(block))
        return kept

    def prove(
        self,
        problem: Problem,
        start: Basis,
        costs: Mapping[int, Fraction],
        objective: tuple[tuple[str, Fraction], ...],
        maximise: bool,
    ) -> Answer:
        self._take_bounds(problem)
        try:
            self._factor(start.basic)
            run = _Run(self, self.low, self.high, start)
        except SingularBasis:
            slack = tuple(range(self.size, self.size + len(self.rows)))
            run = _Run(self, self.low, self.high, Basis(slack, frozenset()))
        sign = -1 if maximise else 1
        target = {j: self._in(value) * sign for j, value in costs.items()}

        def answer(status: Status, **parts: Any) -> Answer:
            return Answer(
                status=status,
                problem=problem,
                basis=Basis(run.basic, frozenset(run.at_high)),
                objective=objective,
                maximise=maximise,
                **parts,
            )

        if not run.make_feasible():
            return answer(Status.INFEASIBLE)
        runaway = run.minimise(target)
        if runaway is not None:
            direction = tuple(
                (problem.columns[j].name, self._out(runaway[j]))
                for j in range(self.size)
                if runaway.get(j)
            )
            return answer(Status.UNBOUNDED, direction=direction)
        out = self._out
        return answer(
            Status.OPTIMAL,
            primal=tuple(out(value) for value in run.values[: self.size]),
            reduced_costs=tuple(
                out(value * sign) if value else _ZERO for value in run.reduced[: self.size]
            ),
            duals=tuple(out(value * sign) if value else _ZERO for value in run.duals),
        )


class _Run:
    """One run of the exact simplex method: a basis that moves, values that follow."""

    def __init__(
        self,
        exact: ExactSimplex,
        low: list[Rational | None],
        high: list[Rational | None],
        start: Basis,
    ) -> None:
        self.exact = exact
        self.low = low
        self.high = high
        self.basic = start.basic
        self.at_high = {j for j in start.at_high if high[j] is not None}
        self.pivots = 0
        self.values: list[Rational] = []
        self.duals: list[Rational] = []
        self.reduced: list[Rational] = []
        self._find_values()

    def _resting(self, j: int) -> Rational:
        if j in self.at_high:
            return self.high[j]
        if self.low[j] is not None:
            return self.low[j]
        if self.high[j] is not None:
            self.at_high.add(j)
            return self.high[j]
        return self.exact.zero

    def _find_values(self) -> None:
        """Values of all variables at the basis."""
        exact = self.exact
        size = exact.size
        inner, tight, factors = exact._factor(self.basic)
        chosen = set(self.basic)
        values: list[Rational] = [exact.zero] * (size + len(exact.rows))
        for j in range(len(values)):
            if j not in chosen:
                values[j] = self._resting(j)
        right = []
        for i in tight:
            side = values[size + i]
            for j, entry in exact.rows[i].items():
                if j not in chosen and values[j]:
                    side = side - entry * values[j]
            right.append(side)
        for j, value in zip(inner, factors.solve(right), strict=True):
            values[j] = value or exact.zero
        for j in self.basic:
            if j >= size:
                total = exact.zero
                for k, entry in exact.rows[j - size].items():
                    if values[k]:
                        total = total + entry * values[k]
                values[j] = total
        self.values = values

    def _find_reduced(self, costs: Mapping[int, Rational]) -> None:
        """Duals of the rows and reduced costs of all variables for a cost on some of them."""
        exact = self.exact
        size = exact.size
        inner, tight, factors = exact._factor(self.basic)
        duals: list[Rational] = [exact.zero] * len(exact.rows)
        for j in self.basic:
            if j >= size and costs.get(j):
                duals[j - size] = -costs[j]
        right = []
        for j in inner:
            side = costs.get(j, exact.zero)
            for i, entry in exact.columns[j].items():
                if duals[i]:
                    side = side - entry * duals[i]
            right.append(side)
        for i, value in zip(tight, factors.solve_transposed(right), strict=True):
            duals[i] = value or exact.zero
        reduced = [exact.zero] * (size + len(exact.rows))
        for j in range(size):
            total = costs.get(j, exact.zero)
            for i, entry in exact.columns[j].items():
                if duals[i]:
                    total = total - entry * duals[i]
            reduced[j] = total
        for i, dual in enumerate(duals):
            reduced[size + i] = costs.get(size + i, exact.zero) + dual
        self.duals = duals
        self.reduced = reduced

    def _change(self, entering: int) -> dict[int, Rational]:
        """Change of each basic variable per unit of the entering one."""
        exact = self.exact
        size = exact.size
        inner, tight, factors = exact._factor(self.basic)
        if entering < size:
            column = exact.columns[entering]
            right = [-column[i] if i in column else exact.zero for i in tight]
        else:
            one = exact.fmpq(1)
            right = [one if i == entering - size else exact.zero for i in tight]
        change = {j: value for j, value in zip(inner, factors.solve(right), strict=True) if value}
        for j in self.basic:
            if j >= size:
                total = exact.zero
                for k, entry in exact.rows[j - size].items():
                    if k in change:
                        total = total + entry * change[k]
                    elif k == entering:
                        total = total + entry
                if total:
                    change[j] = total
        return change

    def _violation(self, j: int) -> int:
        value, low, high = self.values[j], self.low[j], self.high[j]
        if low is not None and value < low:
            return -1
        if high is not None and value > high:
            return 1
        return 0

    def make_feasible(self) -> bool:
        """Walk to a feasible basis; False if there is none, which is then proven."""
        one = self.exact.fmpq(1)
        while True:
            wrong = {j: side for j in self.basic if (side := self._violation(j))}
            if not wrong:
                return True
            self._find_reduced({j: one * side for j, side in wrong.items()})
            entering = self._entering()
            if entering is None:
                return False
            if self._step(entering, wrong) is not None:
                raise SolveError("the least violation of the bounds has no bound: a solver fault")

    def minimise(self, costs: Mapping[int, Rational]) -> dict[int, Rational] | None:
        """Walk to an optimal basis; the direction of descent if there is no optimum."""
        while True:
            self._find_reduced(costs)
            entering = self._entering()
            if entering is None:
                return None
            direction = self._step(entering, {})
            if direction is not None:
                return direction

    def _entering(self) -> int | None:
        """First variable whose move would improve the objective (Bland's rule)."""
        chosen = set(self.basic)
        for j, reduced in enumerate(self.reduced):
            if not reduced or j in chosen:
                continue
            low, high = self.low[j], self.high[j]
            if low is not None and low == high:
                continue
            free = low is None and high is None
            if free or (reduced > 0) == (j in self.at_high):
                return j
        return None

    def _step(self, entering: int, wrong: Mapping[int, int]) -> dict[int, Rational] | None:
        """Move the entering variable as far as it goes; its direction if nothing stops it."""
        self.pivots += 1
        if self.pivots > MAX_PIVOTS:
            raise SolveError(
                f"more than {MAX_PIVOTS} exact pivots: this problem is too large to prove"
            )
        up = bool(self.reduced[entering] < 0)
        change = self._change(entering)
        if not up:
            change = {j: -value for j, value in change.items()}
        best: Rational | None = None
        leaving = entering
        to_high = up
        low, high = self.low[entering], self.high[entering]
        if low is not None and high is not None:
            best = high - low
        for j in sorted(change):
            limit = self._limit(j, change[j], wrong.get(j, 0))
            if limit is None:
                continue
            length, end_high = limit
            if best is None or length < best or (length == best and j < leaving):
                best, leaving, to_high = length, j, end_high
        if best is None:
            step = self.exact.fmpq(1)
            return {**change, entering: step if up else -step}
        if leaving == entering:
            self.at_high ^= {entering}
        else:
            self.basic = tuple(sorted((set(self.basic) - {leaving}) | {entering}))
            self.at_high.discard(entering)
            self.at_high.discard(leaving)
            if to_high:
                self.at_high.add(leaving)
        self._find_values()
        return None

    def _limit(self, j: int, speed: Rational, wrong: int) -> tuple[Rational, bool] | None:
        """How far a basic variable lets the step go, and whether it stops at its upper bound.

        A variable outside its bounds stops at the bound it has passed, on its way back; going
        further out it does not stop.
        """
        rising = bool(speed > 0)
        value = self.values[j]
        if wrong:
            if (wrong < 0) != rising:
                return None
            bound: Rational | None = self.low[j] if wrong < 0 else self.high[j]
            assert bound is not None
            return (bound - value) / speed, wrong > 0
        bound = self.high[j] if rising else self.low[j]
        return None if bound is None else ((bound - value) / speed, rising)
