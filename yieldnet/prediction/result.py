"""What a prediction answers, as values."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import SolveError
from yieldnet.optimum.ranges import Range

if TYPE_CHECKING:
    import pandas

    from yieldnet.balance.freedom import Freedom
    from yieldnet.balance.redundancy import DataTest
    from yieldnet.foundation.findings import Finding
    from yieldnet.foundation.sourced import Assumption
    from yieldnet.foundation.units import Weight
    from yieldnet.model.case import Case, Measurement
    from yieldnet.model.network import Direction
    from yieldnet.prediction.certificate import Certificate
    from yieldnet.prediction.conflict import Conflict
    from yieldnet.prediction.fluxes import Fluxes
    from yieldnet.prediction.growth_energy import AtpYield
    from yieldnet.prediction.ladder import LadderRung
    from yieldnet.prediction.limits import Limit
    from yieldnet.prediction.relaxations import RelaxationReport
    from yieldnet.prediction.shares import Shares

__all__ = [
    "AimValue",
    "CarbonDioxideNeed",
    "CoefficientAnswer",
    "CoefficientStatus",
    "EquationTerm",
    "Outcome",
    "Prediction",
    "Reconciled",
    "Recovery",
]


class Outcome(StrEnum):
    """How a prediction ended."""

    SOLVED = "solved"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"
    REFUSED = "refused"


class CoefficientStatus(StrEnum):
    """How a coefficient is known; the first that holds."""

    RECONCILED = "reconciled"
    MEASURED = "measured"
    FIXED_BY_ELEMENTS = "fixed by elements"
    FIXED_BY_NETWORK = "fixed by network"
    BRACKETED = "bracketed"
    OPEN = "open"


@dataclass(frozen=True, slots=True, kw_only=True)
class AimValue:
    """Best value of the aim.

    Parameters
    ----------
    direction, compound : str
        The aim.
    value : Fraction or None
        Best value at the reconciled point [mol/mol basis]; ``None`` if there is none.
    within_bands : Fraction or None
        Best value over the bands of the measured values [mol/mol basis].
    """

    direction: str
    compound: str
    value: Fraction | None
    within_bands: Fraction | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Reconciled:
    """Reconciled value of a measured coefficient.

    Parameters
    ----------
    value : Fraction
        Value at the reconciled point [mol/mol basis].
    mean : Fraction
        Weighted mean of the measured values [mol/mol basis].
    sd : Fraction or None
        Standard deviation of that mean; ``None`` if exact [mol/mol basis].
    """

    value: Fraction
    mean: Fraction
    sd: Fraction | None

    @property
    def moved_sd(self) -> float:
        """How far the value was moved, in standard deviations [-]."""
        return float((self.value - self.mean) / self.sd) if self.sd else 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class CoefficientAnswer:
    """All that is said of one coefficient; every number is positive on its declared side.

    Parameters
    ----------
    compound : str
        Which compound.
    side : Direction
        Declared side.
    weight, basis_weight : Weight
        For the conversion to g/g and C-mol/C-mol.
    measurements : tuple of Measurement
        Measured values, set aside or not.
    set_aside : bool
        Whether they were set aside because the coefficient is the aim.
    reconciled : Reconciled or None
        Reconciled value.
    elements, network, at_aim : Range or None
        Ranges [mol/mol basis].
    percent : Fraction or None
        Network against elements, as a fraction of 1 [-].
    status : CoefficientStatus
        How it is known.
    """

    compound: str
    side: Direction
    weight: Weight
    basis_weight: Weight
    measurements: tuple[Measurement, ...]
    set_aside: bool
    reconciled: Reconciled | None
    elements: Range | None
    network: Range | None
    at_aim: Range | None
    percent: Fraction | None
    status: CoefficientStatus


@dataclass(frozen=True, slots=True, kw_only=True)
class EquationTerm:
    """One term of the filled-in overall equation.

    Parameters
    ----------
    compound : str
        Which compound.
    side : Direction
        Side on which ``range`` is positive; ``either`` if it can be both.
    range : Range
        Its coefficient [mol/mol basis].
    """

    compound: str
    side: Direction
    range: Range


@dataclass(frozen=True, slots=True, kw_only=True)
class Recovery:
    """Where the carbon or the available electrons of the substrate are found.

    Parameters
    ----------
    quantity : {"carbon", "electrons"}
        What is counted.
    measured : Fraction or None
        Share held by measured products alone, at the values as measured [-].
    total : Fraction or None
        Share held by everything in the filled-in equation; 1 where it closes [-].
    shares : tuple of (str, Fraction)
        Share of each compound whose coefficient is unique [-].
    """

    quantity: str
    measured: Fraction | None
    total: Fraction | None
    shares: tuple[tuple[str, Fraction], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class CarbonDioxideNeed:
    """Carbon dioxide that a best value needs from outside.

    Parameters
    ----------
    least, most : Fraction
        Net uptake at the aim [mol/mol basis].
    without : Fraction or None
        Best value if none may be taken up [mol/mol basis]; ``None`` if there is none.
    """

    least: Fraction
    most: Fraction
    without: Fraction | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Prediction:
    """Answer to a case.

    Parameters
    ----------
    case : Case
        The question.
    outcome : Outcome
        How it ended; yields are there only if it is ``solved``.
    aim : AimValue or None
        Best value of the aim.
    freedom : tuple of Freedom
        Degrees of freedom layer by layer.
    coefficients : tuple of CoefficientAnswer
        One for each coefficient, in the order of the case.
    ladder : tuple of LadderRung
        Best value of the aim rung by rung.
    terms : tuple of EquationTerm
        Filled-in overall equation, basis first.
    recoveries : tuple of Recovery
        Carbon and electrons.
    respiratory_quotient : Fraction or None
        Carbon dioxide given off per oxygen taken up [mol/mol], where both are unique.
    net_carbon_dioxide : Range or None
        Net carbon dioxide of the filled-in equation, given off positive [mol/mol basis].
    movements : tuple of tuple of (str, Fraction)
        Directions in which coefficients that are not unique move together [mol/mol basis].
    relaxations : RelaxationReport or None
        What each thing given back would bring; ``None`` without a best value.
    limits : tuple of Limit
        How the aim changes as balances and statements move by a little.
    conflict : Conflict or None
        If infeasible, the statements that cannot hold together.
    shares : Shares or None
        Order-free share of each layer in the whole loss.
    other_order : tuple of (str, Fraction or None)
        Ladder in the order asked for [mol/mol basis].
    fluxes : Fluxes or None
        Fluxes at the aim, if asked for.
    certificate : Certificate or None
        The proof on paper, if asked for.
    carbon_dioxide_need : CarbonDioxideNeed or None
        If the best value needs it from outside.
    findings : tuple of Finding
        What is doubtful.
    assumptions : tuple of Assumption
        What was taken for granted.
    tests : tuple of DataTest
        Chi-square test of the measured values, by layer.
    y_atp : AtpYield or None
        Dry weight per ATP of growth and maintenance at the aim; ``None`` without growth.
    """

    case: Case
    outcome: Outcome
    aim: AimValue | None
    freedom: tuple[Freedom, ...]
    ladder: tuple[LadderRung, ...]
    findings: tuple[Finding, ...]
    assumptions: tuple[Assumption, ...]
    coefficients: tuple[CoefficientAnswer, ...] = ()
    terms: tuple[EquationTerm, ...] = ()
    recoveries: tuple[Recovery, ...] = ()
    respiratory_quotient: Fraction | None = None
    net_carbon_dioxide: Range | None = None
    movements: tuple[tuple[tuple[str, Fraction], ...], ...] = ()
    relaxations: RelaxationReport | None = None
    limits: tuple[Limit, ...] = ()
    conflict: Conflict | None = None
    shares: Shares | None = None
    other_order: tuple[tuple[str, Fraction | None], ...] = ()
    fluxes: Fluxes | None = None
    certificate: Certificate | None = None
    carbon_dioxide_need: CarbonDioxideNeed | None = None
    tests: tuple[DataTest, ...] = ()
    y_atp: AtpYield | None = None

    def __repr__(self) -> str:
        best = f", {self.case.aim}" if self.case.aim else ""
        if self.aim is not None and self.aim.value is not None:
            best += f" {float(self.aim.value):.4g} mol/mol"
        return f"Prediction({self.case.title!r}: {self.outcome}{best})"

    def _repr_html_(self) -> str:
        """Title, ladder and coefficients, for a notebook."""
        from html import escape

        parts = [f"<p><b>{escape(self.case.title)}</b>: {self.outcome}</p>"]
        if self.ladder:
            parts.append(self.ladder_table().to_html(na_rep="", float_format="{:.4g}".format))
        if self.coefficients:
            parts.append(self.coefficient_table().to_html(na_rep="", float_format="{:.4g}".format))
        return "".join(parts)

    def best_yield_mol_per_mol(self) -> float:
        """Best value of the aim [mol/mol basis].

        Returns
        -------
        float
            Best value [mol/mol].

        Raises
        ------
        SolveError
            If the case has no aim, or no best value; the message says why.
        """
        if self.case.aim is None:
            raise SolveError("the case has no aim")
        if self.aim is None or self.aim.value is None:
            reasons = [item.reason for item in self.ladder if item.reason]
            raise SolveError(f"the case is {self.outcome}: {(reasons or ['no value'])[-1]}")
        return float(self.aim.value)

    def coefficient(self, compound: str) -> CoefficientAnswer:
        """Answer for one coefficient.

        Parameters
        ----------
        compound : str
            Name as in the case.

        Returns
        -------
        CoefficientAnswer
            All that is said of it.

        Raises
        ------
        KeyError
            If the overall equation does not list it.
        """
        for item in self.coefficients:
            if item.compound == compound:
                return item
        raise KeyError(compound)

    def coefficient_records(self) -> tuple[dict[str, str | float | None], ...]:
        """Coefficients as records of plain numbers in mol/mol basis, for tables and CSV.

        Returns
        -------
        tuple of dict
            One a coefficient; ``None`` where there is no value or no bound [mol/mol].
        """

        def number(value: Fraction | None) -> float | None:
            return None if value is None else float(value)

        found: list[dict[str, str | float | None]] = []
        for item in self.coefficients:
            known = item.reconciled
            record: dict[str, str | float | None] = {
                "compound": item.compound,
                "side": str(item.side),
                "measured": float(known.mean) if known else None,
                "s.d.": number(known.sd) if known else None,
                "reconciled": float(known.value) if known else None,
            }
            for name, value in (
                ("elements", item.elements),
                ("network", item.network),
                ("at aim", item.at_aim),
            ):
                record[f"{name} low"] = number(value.low) if value else None
                record[f"{name} high"] = number(value.high) if value else None
            record["percent"] = None if item.percent is None else 100 * float(item.percent)
            record["status"] = str(item.status)
            found.append(record)
        return tuple(found)

    def coefficient_table(self) -> pandas.DataFrame:
        """Coefficients as a table, numbers in mol/mol basis.

        Returns
        -------
        pandas.DataFrame
            One row a coefficient, indexed by compound; unbounded ends are missing values
            [mol/mol].
        """
        import pandas

        return pandas.DataFrame(list(self.coefficient_records())).set_index("compound")

    def ladder_table(self) -> pandas.DataFrame:
        """Ladder as a table, numbers in mol/mol basis.

        Returns
        -------
        pandas.DataFrame
            One row a rung, indexed by its name [mol/mol].
        """
        import pandas

        rows = [
            {
                "rung": item.rung,
                "value": None if item.value is None else float(item.value),
                "loss": None if item.loss is None else float(item.loss),
                "reason": item.reason,
            }
            for item in self.ladder
        ]
        return pandas.DataFrame(rows, columns=["rung", "value", "loss", "reason"]).set_index("rung")
