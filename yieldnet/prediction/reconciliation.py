"""What judging measured values answers, as values."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from yieldnet.balance.gross_errors import Elimination, MissingProduct
    from yieldnet.balance.recovery import MeasuredRecovery
    from yieldnet.foundation.findings import Finding
    from yieldnet.foundation.sourced import Assumption
    from yieldnet.foundation.units import Weight
    from yieldnet.model.case import Case
    from yieldnet.model.network import Direction
    from yieldnet.prediction.data_tests import LayerData
    from yieldnet.prediction.next_measurement import NextMeasurement
    from yieldnet.prediction.spread import Draws, WorstEnd

__all__ = [
    "CalculatedValue",
    "Classified",
    "JudgedValue",
    "OptimumSpread",
    "Reconciliation",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Classified:
    """What is known of one coefficient, and how.

    Parameters
    ----------
    compound : str
        The coefficient.
    side : Direction
        Declared side.
    known : str
        ``measured``, ``exact`` or ``not measured``.
    redundant : str
        Layer whose equations tell a measured value from the others; empty if none does.
    calculable : str
        Layer whose equations tell a coefficient that is not measured; empty if none does.
    """

    compound: str
    side: Direction
    known: str
    redundant: str
    calculable: str


@dataclass(frozen=True, slots=True, kw_only=True)
class JudgedValue:
    """One measured coefficient before and after reconciliation.

    Parameters
    ----------
    compound : str
        The coefficient.
    weight, basis_weight : Weight
        For the conversion to g/g and C-mol/C-mol.
    measured : Fraction
        Mean of its measured values [mol/mol basis].
    measured_sd : Fraction
        Standard deviation of that mean [mol/mol basis].
    reconciled : Fraction
        Value that keeps every balance [mol/mol basis].
    reconciled_sd : float
        Its standard deviation [mol/mol basis].
    residual : float or None
        Adjustment by equalities over its own standard deviation, standard normal if all errors
        are as stated; ``None`` for a value that nothing checks [-].
    own_share : Fraction
        Share of its own error that shows in the adjustments, 0 to 1 [-].
    """

    compound: str
    weight: Weight
    basis_weight: Weight
    measured: Fraction
    measured_sd: Fraction
    reconciled: Fraction
    reconciled_sd: float
    residual: float | None
    own_share: Fraction

    @property
    def moved_sd(self) -> float:
        """How far the value was moved, in standard deviations of the measurement [-]."""
        return float((self.reconciled - self.measured) / self.measured_sd)


@dataclass(frozen=True, slots=True, kw_only=True)
class CalculatedValue:
    """A coefficient that is not measured and follows from the reconciled values.

    Parameters
    ----------
    compound : str
        The coefficient.
    weight, basis_weight : Weight
        For the conversion to g/g and C-mol/C-mol.
    layer : str
        Layer whose equations tell it.
    value : Fraction
        Positive on its declared side [mol/mol basis].
    sd : float
        Standard deviation [mol/mol basis].
    """

    compound: str
    weight: Weight
    basis_weight: Weight
    layer: str
    value: Fraction
    sd: float


@dataclass(frozen=True, slots=True, kw_only=True)
class OptimumSpread:
    """The best value of the aim with its error.

    Parameters
    ----------
    direction, compound : str
        The aim.
    value : Fraction
        Best value at the reconciled point [mol/mol basis].
    sd : float
        Standard deviation from the errors of the measured values [mol/mol basis].
    sampled : bool
        Whether it was found from drawn sets rather than from slopes.
    better : Fraction or None
        Best value over the bands [mol/mol basis].
    worse : WorstEnd
        Least of the best values over the bands [mol/mol basis].
    """

    direction: str
    compound: str
    value: Fraction
    sd: float
    sampled: bool
    better: Fraction | None
    worse: WorstEnd


@dataclass(frozen=True, slots=True, kw_only=True)
class Reconciliation:
    """What the balances say of the measured values of a case.

    Parameters
    ----------
    case : Case
        The question.
    with_network : bool
        Whether its network counts.
    level : float
        Probability with which a test passes values whose errors are as stated [-].
    feasible : bool
        Whether some point keeps all bands, sides and demands; if not, the reconciled values keep
        the equalities alone.
    classified : tuple of Classified
        Every coefficient of the equation.
    recoveries : tuple of MeasuredRecovery
        Elements and electrons at the values as measured.
    tested : tuple of LayerData
        Equations between measured values and their test, by layer.
    eliminations : tuple of Elimination
        Serial elimination in the first layer that fails, else empty.
    missing : tuple of MissingProduct
        Overlooked products that would explain the deviations from the elements.
    values : tuple of JudgedValue
        Measured values with errors.
    covariance : tuple of tuple of float
        Of their reconciled values, in the same order [(mol/mol basis)^2].
    held : tuple of str
        Measured coefficients that directions or demands move beyond what the equalities ask.
    calculated : tuple of CalculatedValue
        Coefficients that follow.
    optimum : OptimumSpread or None
        The aim with its error.
    draws : Draws or None
        Sets that were drawn where there is no closed form.
    target : str
        Coefficient whose range the next measurement is to narrow; empty if none.
    precision : Fraction
        Standard deviation of the next measurement, as a share of its value [-].
    next : tuple of NextMeasurement
        Most useful first.
    findings : tuple of Finding
        What is doubtful.
    assumptions : tuple of Assumption
        What is taken for granted.
    """

    case: Case
    with_network: bool
    level: float
    feasible: bool
    classified: tuple[Classified, ...]
    recoveries: tuple[MeasuredRecovery, ...]
    tested: tuple[LayerData, ...]
    eliminations: tuple[Elimination, ...]
    missing: tuple[MissingProduct, ...]
    values: tuple[JudgedValue, ...]
    covariance: tuple[tuple[float, ...], ...]
    held: tuple[str, ...]
    calculated: tuple[CalculatedValue, ...]
    optimum: OptimumSpread | None
    draws: Draws | None
    target: str
    precision: Fraction
    next: tuple[NextMeasurement, ...]
    findings: tuple[Finding, ...]
    assumptions: tuple[Assumption, ...]

    @property
    def contradictory(self) -> bool:
        """Whether values without an error contradict the balances, so that no test can pass."""
        return not self.tested[-1].redundancy.consistent

    @property
    def failed(self) -> LayerData | None:
        """First layer whose test the values fail."""
        return next(
            (item for item in self.tested if item.test is not None and not item.test.passed), None
        )
