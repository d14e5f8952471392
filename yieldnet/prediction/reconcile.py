"""Judging the measured values of a case: classification, tests, suspects, errors, what to measure.

The result holds, in this order, what a person with a data set asks: what do the balances say of
each coefficient, do the values agree, which one is wrong, what are the best values and how sure are
they, what follows from them, and what should be measured next.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from math import sqrt
from typing import TYPE_CHECKING

from yieldnet.balance.elements import balances_by_name
from yieldnet.balance.recovery import measured_recoveries
from yieldnet.balance.statements import (
    is_exact,
    side_sign,
    with_bands,
    with_point,
    yield_column,
)
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.exact import product, root_of_square
from yieldnet.foundation.findings import Findings, Severity, near
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser, Status
from yieldnet.prediction.assumptions import assumptions_of
from yieldnet.prediction.coefficients import layer_equations
from yieldnet.prediction.data_tests import (
    DEFAULT_LEVEL,
    failed_findings,
    judge_layers,
    missing_product_hypotheses,
    serial_elimination,
)
from yieldnet.prediction.ladder import objective_of
from yieldnet.prediction.next_measurement import DEFAULT_PRECISION, next_measurements
from yieldnet.prediction.prepare import prepare
from yieldnet.prediction.reconciliation import (
    CalculatedValue,
    Classified,
    JudgedValue,
    OptimumSpread,
    Reconciliation,
)
from yieldnet.prediction.spread import best_variance, draw_values, worst_end

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from yieldnet.balance.covariance import Pooled
    from yieldnet.balance.freedom import CoefficientEquations
    from yieldnet.foundation.exact import Matrix
    from yieldnet.model.case import Case
    from yieldnet.prediction.data_tests import LayerData
    from yieldnet.prediction.layers import Layers
    from yieldnet.prediction.next_measurement import NextMeasurement
    from yieldnet.prediction.prepare import Prepared
    from yieldnet.prediction.spread import Draws

__all__ = ["DEFAULT_DRAWS", "reconcile_case"]

DEFAULT_DRAWS = 400
"""Sets of values drawn where there is no closed form: their s.d. is then known to 4 % [-]."""
_ZERO = Fraction(0)


def reconcile_case(
    case: Case,
    *,
    network: bool = True,
    level: float = DEFAULT_LEVEL,
    of: str = "",
    precision: Fraction = DEFAULT_PRECISION,
    draws: int = DEFAULT_DRAWS,
    engine: str = "glpk",
    tick: Callable[[int, int], None] | None = None,
) -> Reconciliation:
    """Judge the measured values of a case.

    Parameters
    ----------
    case : Case
        The question with its measured values.
    network : bool
        Whether the network of the case counts; without one the elements alone do.
    level : float
        Probability with which a test passes values whose errors are as stated [-].
    of : str
        Coefficient whose range the next measurement is to narrow; the aim if empty.
    precision : Fraction
        Standard deviation of the next measurement, as a share of its value [-].
    draws : int
        Sets to draw where there is no closed form [-].
    engine : {"glpk", "optlang"}
        Solver whose answers are proven in fractions.
    tick : callable, optional
        Called with the sets drawn and the sets in all.

    Returns
    -------
    Reconciliation
        Tests, suspects, reconciled and calculated values, the next measurement.

    Raises
    ------
    InputError
        If the files must be refused, nothing is measured, or ``of`` is not in the equation.
    ValueError
        If the level or the precision is no share between 0 and 1, or fewer than two sets are
        drawn.
    """
    if not (0 < level < 1 and 0 <= precision < 1 and draws > 1):
        raise ValueError("level and precision are shares between 0 and 1, and two draws the least")
    optimiser = Optimiser(engine_named(engine))
    with_network = network and case.network is not None
    # The data are judged together: the aim's own values are set aside for predicting it only.
    ready = prepare(replace(case, aim=None), optimiser, with_network)
    findings = Findings(list(ready.findings))
    layers = ready.layers
    if not any(item.sd for item in layers.statements.measured):
        findings.add(
            "YN111",
            "no value with an error is measured, so there is nothing to reconcile",
            case.span,
            hint="Write 'measured:' with value ± error unit.",
        )
        raise InputError(findings.sorted())
    target, column = _target(case, of, findings)
    equations = layer_equations(layers)
    tested = judge_layers(layers, equations, level)
    judged = _Judged(layers, tested[-1], ready.point)
    aimed = _aimed(case, ready, optimiser, with_network)
    drawn: Draws | None = None
    if judged.held:
        drawn = draw_values(layers, judged.pooled, judged.point, None, draws, tick)
    optimum, aim_draws = _optimum(case, aimed, level, optimiser, draws, tick)
    failed = next((item for item in tested if item.test and not item.test.passed), None)
    eliminations = (
        serial_elimination(layers, equations, failed.layer, level) if failed is not None else ()
    )
    findings.extend(_doubts(case, tested, judged))
    nexts: tuple[NextMeasurement, ...] = ()
    if column:
        on_aim = aimed is not None and case.aim is not None and case.aim.compound == target
        chosen = aimed if on_aim and aimed is not None else ready
        nexts = _next(chosen, target, column, precision, optimiser, findings)
    contents = balances_by_name(case, layers.growth_residual)
    return Reconciliation(
        case=case,
        with_network=with_network,
        level=level,
        feasible=ready.point is not None,
        classified=_classified(layers, tested, equations),
        recoveries=measured_recoveries(case, contents, judged.pooled, _known_exactly(layers)),
        tested=tested,
        eliminations=eliminations,
        missing=missing_product_hypotheses(layers),
        values=judged.values(drawn),
        covariance=tuple(tuple(float(value) for value in row) for row in judged.variances(drawn)),
        held=judged.held,
        calculated=_calculated(layers, equations, judged, drawn),
        optimum=optimum,
        draws=drawn or aim_draws,
        target=target,
        precision=precision,
        next=nexts,
        findings=findings.sorted(),
        assumptions=assumptions_of(ready.case, layers.statements, layers.bound),
    )


class _Judged:
    """Reconciled values with their covariance, by equalities and at the reconciled point."""

    def __init__(
        self, layers: Layers, last: LayerData, point: Mapping[str, Fraction] | None
    ) -> None:
        self.layers = layers
        self.last = last
        self.pooled = layers.statements.pooled()
        data = last.redundancy
        place = {item.compound: k for k, item in reversed(list(enumerate(data.measured)))}
        self.own = tuple(place[name] for name in self.pooled.names)
        adjustments = data.adjustments()
        self.by_equalities = {
            name: data.measured[k].value + adjustments[k]
            for name, k in zip(self.pooled.names, self.own, strict=True)
        }
        spread = data.adjusted_covariance()
        self.covariance = tuple(tuple(spread[i][j] for j in self.own) for i in self.own)
        self.shares = _own_shares(self.pooled, self.covariance)
        self.infeasible = point is None
        self.point = dict(self.by_equalities if point is None else point)
        self.held = (
            ()
            if point is None
            else tuple(
                name for name in self.pooled.names if point[name] != self.by_equalities[name]
            )
        )

    def variances(self, drawn: Draws | None) -> Sequence[Sequence[Fraction | float]]:
        """Covariance of the reconciled values, sampled where directions hold some."""
        return self.covariance if drawn is None else drawn.covariance()

    def values(self, drawn: Draws | None) -> tuple[JudgedValue, ...]:
        """Measured values before and after."""
        case = self.layers.case
        spread = self.variances(drawn)
        found = []
        for k, name in enumerate(self.pooled.names):
            target = self.pooled[name]
            less = target.variance - self.covariance[k][k]
            moved = self.by_equalities[name] - target.value
            found.append(
                JudgedValue(
                    compound=name,
                    weight=case.compound(name).weight,
                    basis_weight=case.basis.weight,
                    measured=target.value,
                    measured_sd=root_of_square(target.variance),
                    reconciled=self.point[name],
                    reconciled_sd=sqrt(max(0.0, float(spread[k][k]))),
                    residual=float(moved / root_of_square(less)) if less else None,
                    own_share=self.shares[k],
                )
            )
        return tuple(found)


def _own_shares(pooled: Pooled, after: Matrix) -> tuple[Fraction, ...]:
    """Share of its own error that each measured coefficient shows, of the means of its values.

    Notes
    -----
    As in :meth:`Redundancy.own_share`, with R' P^-1 R = V^-1 (V - C) V^-1 for the covariances V
    before and C after.
    """
    precision = pooled.precision()
    lost = [
        [a - b for a, b in zip(row, other, strict=True)]
        for row, other in zip(pooled.covariance, after, strict=True)
    ]
    shown = product(product(precision, lost), precision)
    return tuple(shown[k][k] / precision[k][k] for k in range(len(pooled)))


def _target(case: Case, of: str, findings: Findings) -> tuple[str, str]:
    """Coefficient whose range is to be narrowed, and its column; empty if there is none."""
    if not of:
        objective = objective_of(case)
        return (case.aim.compound, objective.column) if case.aim and objective else ("", "")
    if case.coefficient(of) is None:
        findings.add(
            "YN503",
            f"{of!r} is not in the overall equation",
            case.span,
            hint=near(of, [item.name for item in case.coefficients])
            or "Name a coefficient of the equation.",
        )
        raise InputError(findings.sorted())
    return of, yield_column(of)


def _aimed(
    case: Case, ready: Prepared, optimiser: Optimiser, with_network: bool
) -> Prepared | None:
    """The case with its aim; ``None`` without an aim that has a meaning here."""
    if case.aim is None or (case.aim.is_energy and not with_network):
        return None
    coefficient = case.coefficient(case.aim.compound)
    stated = any(
        item.compound == case.aim.compound for item in ready.layers.statements.measured
    ) or (coefficient is not None and coefficient.written is not None)
    if stated:
        return prepare(case, optimiser, with_network)
    return replace(ready, objective=objective_of(case))


def _optimum(
    case: Case,
    aimed: Prepared | None,
    level: float,
    optimiser: Optimiser,
    draws: int,
    tick: Callable[[int, int], None] | None,
) -> tuple[OptimumSpread | None, Draws | None]:
    """Best value of the aim with its error, and the draws that it took."""
    if aimed is None or aimed.objective is None or aimed.point is None or case.aim is None:
        return None, None
    layers, objective, point = aimed.layers, aimed.objective, aimed.point
    best = objective.best(optimiser, with_point(layers.final, layers.statements, point))
    if best.status is not Status.OPTIMAL:
        return None, None
    tested = judge_layers(layers, layer_equations(layers), level)
    judged = _Judged(layers, tested[-1], point)
    variance: Fraction | None = None
    drawn: Draws | None = None
    if not judged.held:
        variance = best_variance(optimiser, layers, best, judged.pooled.names, judged.covariance)
    if variance is None:
        drawn = draw_values(layers, judged.pooled, point, objective, draws, tick)
    banded = objective.best(optimiser, with_bands(layers.final, layers.statements))
    spread = OptimumSpread(
        direction=str(case.aim.direction),
        compound=case.aim.compound,
        value=best.value,
        sd=sqrt(float(variance)) if variance is not None else drawn.best_sd() if drawn else 0.0,
        sampled=drawn is not None,
        better=banded.value if banded.status is Status.OPTIMAL else None,
        worse=worst_end(optimiser, layers, objective),
    )
    return spread, drawn


def _known_exactly(layers: Layers) -> dict[str, Fraction]:
    """Coefficients without an error, positive on their sides."""
    written = {
        item.name: item.written.value
        for item in layers.case.coefficients
        if is_exact(item) and item.written is not None
    }
    return written | {
        item.compound: item.value for item in layers.statements.measured if not item.sd
    }


def _classified(
    layers: Layers,
    tested: Sequence[LayerData],
    equations: Mapping[str, CoefficientEquations],
) -> tuple[Classified, ...]:
    exact = _known_exactly(layers)
    measured = layers.statements.measured_compounds()
    redundant: dict[str, str] = {}
    for item in reversed(tested):
        for place, value in enumerate(item.redundancy.measured):
            if any(item.redundancy.column(place)):
                redundant[value.compound] = item.layer
    calculable: dict[str, str] = {}
    for rung in layers.rungs:
        for name in equations[rung].calculable(measured):
            calculable.setdefault(name, rung)
    return tuple(
        Classified(
            compound=item.name,
            side=item.side,
            known="exact"
            if item.name in exact
            else "measured"
            if item.name in measured
            else "not measured",
            redundant=redundant.get(item.name, ""),
            calculable=""
            if item.name in exact or item.name in measured
            else calculable.get(item.name, ""),
        )
        for item in layers.case.coefficients
    )


def _calculated(
    layers: Layers,
    equations: Mapping[str, CoefficientEquations],
    judged: _Judged,
    drawn: Draws | None,
) -> tuple[CalculatedValue, ...]:
    """Coefficients that follow from the reconciled values by equalities, with their errors.

    Notes
    -----
    With the factors K of the measured values in a coefficient and their covariance C its variance
    is K C K'.
    """
    case = layers.case
    measured = layers.statements.measured_compounds()
    signs = {item.name: side_sign(item.side) for item in case.coefficients}
    exact = _known_exactly(layers)
    spread = judged.variances(drawn)
    place = {name: k for k, name in enumerate(judged.pooled.names)}
    found: dict[str, CalculatedValue] = {}
    for rung in layers.rungs:
        for name, (factors, constant) in equations[rung].expressed(measured).items():
            if name in found:
                continue
            sides = {other: signs[name] * signs[other] * f for other, f in factors.items()}
            at = {**exact, **judged.point}
            value = sum((f * at[other] for other, f in sides.items()), signs[name] * constant)
            known = [(f, place[other]) for other, f in sides.items() if other in place]
            variance = sum(float(f * g) * float(spread[i][j]) for f, i in known for g, j in known)
            found[name] = CalculatedValue(
                compound=name,
                weight=case.compound(name).weight,
                basis_weight=case.basis.weight,
                layer=rung,
                value=value,
                sd=sqrt(max(0.0, variance)),
            )
    return tuple(found[item.name] for item in case.coefficients if item.name in found)


def _next(
    ready: Prepared,
    target: str,
    column: str,
    precision: Fraction,
    optimiser: Optimiser,
    findings: Findings,
) -> tuple[NextMeasurement, ...]:
    """What to measure next; none if the range has no width or no end, which is told."""
    found = None
    if ready.point is not None and ready.layers.final.has_column(column):
        found = next_measurements(optimiser, ready.layers, column, precision)
    if found is None:
        findings.add(
            "YN807",
            f"the range of {target} has no width or no end that a measurement could narrow",
            ready.case.span,
            hint="Name another coefficient with --of.",
            severity=Severity.NOTE,
        )
    return found or ()


def _doubts(case: Case, tested: Sequence[LayerData], judged: _Judged) -> Findings:
    """What is doubtful about the data."""
    findings = failed_findings(tested, case, "The tables of suspects say where to look.")
    for item in case.measured:
        if item.sd is None:
            findings.add(
                "YN803",
                f"{item.label} has no error, so it is taken as exact and cannot be judged",
                item.span,
                hint="Write its standard deviation: value ± error unit.",
                severity=Severity.WARNING,
            )
    if not tested[-1].redundancy.consistent:
        findings.add(
            "YN804",
            "values without an error contradict the balances among themselves",
            case.span,
            hint="Give them errors, or correct one of them.",
            severity=Severity.WARNING,
        )
    if tested[-1].redundancy.consistent and not tested[-1].redundancy.degrees:
        findings.add(
            "YN805",
            "no balance ties the measured values together: none of them can be tested",
            case.span,
            hint="Measure one more coefficient.",
            severity=Severity.NOTE,
        )
    if judged.infeasible:
        findings.add(
            "YN601",
            "no point keeps all balances, sides and demands within two s.d. of every value",
            case.span,
            hint="The reconciled values below keep the equalities alone; "
            "'yieldnet predict' names the conflict.",
            severity=Severity.WARNING,
        )
    if judged.held:
        findings.add(
            "YN806",
            f"directions or demands hold {', '.join(judged.held)} where the equalities would not",
            case.span,
            hint="Their standard deviations are sampled; no chi-square test judges this move.",
            severity=Severity.WARNING,
        )
    failed = next((item for item in tested if item.test and not item.test.passed), None)
    if failed is not None and failed.test is not None:
        worst = failed.suspects()[0]
        names = " or ".join(item.label for item in worst.members)
        left = worst.p_left
        findings.add(
            "YN802",
            f"most suspect: {names}",
            worst.members[0].span,
            left=f"without it chi-square {float(worst.statistic_left):.3g}"
            f" instead of {float(failed.test.statistic):.3g}",
            right="nothing left to test" if left is None else f"p = {left:.2g}",
            hint="Look at this measurement first; the table of suspects has the others.",
            severity=Severity.WARNING,
        )
    return findings
