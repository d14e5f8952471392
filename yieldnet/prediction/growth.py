"""Yield against growth rate: Herbert and Pirt's law from the ATP balance of a network.

Takes a case, sets its growth rate, its uptake and its aim aside, and asks for the most biomass at
one growth rate after the other; all else that the case says is kept. What comes out are yields, the
true yield and the maintenance coefficient of each straight piece, and the yield on ATP.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import with_point
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Finding, Findings, Severity
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.case import Aim, AimDirection, EnergySurplus
from yieldnet.model.network import BIOMASS, CarrierKind, Direction
from yieldnet.optimum.engine import engine_named
from yieldnet.optimum.proof import Optimiser
from yieldnet.optimum.ranges import Range
from yieldnet.prediction.assumptions import assumptions_of
from yieldnet.prediction.growth_energy import AtpYield, atp_of_growth, doubtful_atp_yield
from yieldnet.prediction.pirt_line import PirtLine, per_biomass
from yieldnet.prediction.prepare import prepare

if TYPE_CHECKING:
    from collections.abc import Sequence

    from yieldnet.balance.statements import Statements
    from yieldnet.foundation.units import Weight
    from yieldnet.model.binding import BoundNetwork
    from yieldnet.model.case import Case
    from yieldnet.prediction.pirt_line import Piece

__all__ = ["DEFAULT_RATES", "GrowthCurve", "GrowthPoint", "PirtPiece", "grow_case"]

DEFAULT_RATES = tuple(Fraction(text) for text in ("0.02", "0.05", "0.1", "0.2", "0.3", "0.5"))
"""Growth rates that are shown where a case gives none [1/h]."""
_ROUND_THE_CASE = tuple(Fraction(text) for text in ("1/4", "1/2", "3/4", "1", "3/2", "2", "3"))
"""Growth rates that are shown over that of the case [-]."""
_ZERO = Fraction(0)


@dataclass(frozen=True, slots=True, kw_only=True)
class GrowthPoint:
    """What the cell does at one growth rate.

    Parameters
    ----------
    rate : Fraction
        Growth rate [1/h].
    yield_mol : Fraction or None
        Most biomass [mol/mol basis]; ``None`` if there is no growth at this rate, or growth needs
        nothing of the basis.
    uptake : Fraction or None
        Uptake of the basis [mol/g/h].
    y_atp : Fraction or None
        Dry weight per ATP of growth and maintenance [g/mol]; ``None`` if growth spends no ATP.
    piece : int or None
        Which straight piece it lies on, counted from 0 [-].
    """

    rate: Fraction
    yield_mol: Fraction | None
    uptake: Fraction | None
    y_atp: Fraction | None
    piece: int | None


@dataclass(frozen=True, slots=True, kw_only=True)
class PirtPiece:
    """A range of growth rates on which 1/Y = 1/Y_true + m_S/mu holds exactly.

    Parameters
    ----------
    fastest, slowest : Fraction or None
        Ends of the range [1/h]; ``None`` for growth without an end, or down to none.
    true_yield : Fraction or None
        Yield on this line without maintenance [mol/mol basis]; ``None`` if the line has none.
    maintenance : Fraction
        Basis that maintenance takes on this line [mol/g/h].
    starts, stops : tuple of str
        What flows on this piece and not on the one of faster growth, and the reverse.
    """

    fastest: Fraction | None
    slowest: Fraction | None
    true_yield: Fraction | None
    maintenance: Fraction
    starts: tuple[str, ...]
    stops: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class GrowthCurve:
    """Yield against growth rate.

    Parameters
    ----------
    case : Case
        The case as asked.
    weight, basis_weight : Weight
        Of biomass and basis, for g/g.
    points : tuple of GrowthPoint
        In the order of the growth rates.
    pieces : tuple of PirtPiece
        Straight pieces from fast to slow growth; empty if there is no growth at all.
    atp_growth : Fraction or None
        ATP that growth spends [mol/g].
    atp_maintenance : Fraction
        ATP that maintenance spends [mol/g/h].
    findings : tuple of Finding
        What is doubtful.
    assumptions : tuple of Assumption
        What was taken for granted.
    """

    case: Case
    weight: Weight
    basis_weight: Weight
    points: tuple[GrowthPoint, ...]
    pieces: tuple[PirtPiece, ...]
    atp_growth: Fraction | None
    atp_maintenance: Fraction
    findings: tuple[Finding, ...]
    assumptions: tuple[Assumption, ...]

    @property
    def grows(self) -> bool:
        """Whether there is growth at any of the rates."""
        return any(item.yield_mol is not None for item in self.points)

    def grams_per_gram(self, yield_mol: Fraction) -> Fraction:
        """A yield in g/g; both compounds have a mass, since both have carbon or hydrogen.

        Parameters
        ----------
        yield_mol : Fraction
            Yield [mol/mol].

        Returns
        -------
        Fraction
            The same yield [g/g].
        """
        assert self.weight.molar_mass
        assert self.basis_weight.molar_mass
        return yield_mol * self.weight.molar_mass / self.basis_weight.molar_mass


def grow_case(case: Case, rates: Sequence[Fraction] = (), engine: str = "glpk") -> GrowthCurve:
    """Most biomass of a case at a series of growth rates.

    Parameters
    ----------
    case : Case
        The case; its aim, growth rate and uptake are set aside.
    rates : sequence of Fraction
        Growth rates [1/h]; a series round that of the case, or :data:`DEFAULT_RATES`, if empty.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    GrowthCurve
        Yields, straight pieces, yields on ATP.

    Raises
    ------
    InputError
        If the case does not grow, or its network must be refused.
    ValueError
        If a growth rate is not above zero.

    Notes
    -----
    Measured values are taken at their reconciled point without maintenance, the same at every
    growth rate; measured biomass is set aside.
    """
    if any(rate <= 0 for rate in rates):
        raise ValueError("growth rates are above zero")
    _refuse_what_does_not_grow(case)
    asked = replace(
        case,
        growth_rate=None,
        substrate_uptake=None,
        aim=Aim(direction=AimDirection.MOST, compound=BIOMASS, span=case.span),
    )
    optimiser = Optimiser(engine_named(engine))
    # Maintenance takes the spare ATP, so without it "no surplus" would say too much.
    ready = prepare(replace(asked, energy_surplus=EnergySurplus.LOST), optimiser)
    bound = ready.layers.bound
    assert bound is not None
    network = bound.network
    wanted = tuple(sorted(set(rates or _default_rates(case))))
    mass = case.compound(BIOMASS).weight.molar_mass or _ZERO
    rate_atp, carrier = _ZERO, ""
    if network.maintenance is not None:
        rate_atp, carrier = network.maintenance.rate_mol_per_gram_hour, network.maintenance.carrier
    else:
        carrier = next(
            (item.name for item in network.carriers if item.kind is CarrierKind.ENERGY), ""
        )
    findings = Findings(list(ready.findings))
    if network.maintenance is None:
        findings.add(
            "YN882",
            "the network has no maintenance, so the yield is the same at every growth rate",
            case.span,
            hint="Give the network its maintenance, such as 'ATP: 2.5 mmol/g/h'.",
            severity=Severity.WARNING,
        )
    pieces: tuple[Piece, ...] = ()
    if ready.point is not None:
        problem = per_biomass(
            with_point(ready.layers.final, ready.layers.statements, ready.point),
            case.basis.name,
            carrier,
            exact=case.energy_surplus is EnergySurplus.NONE,
        )
        line = PirtLine(optimiser=optimiser, problem=problem, basis=case.basis.name)
        pieces = line.pieces(rate_atp * mass / wanted[0])
    spent = atp_of_growth(bound)
    points = tuple(_point(rate, pieces, rate_atp, mass, spent) for rate in wanted)
    curve = GrowthCurve(
        case=case,
        weight=case.compound(BIOMASS).weight,
        basis_weight=case.basis.weight,
        points=points,
        pieces=tuple(_pirt(piece, rate_atp, mass) for piece in pieces),
        atp_growth=None if spent is None else spent / mass,
        atp_maintenance=rate_atp,
        findings=(),
        assumptions=_assumptions(asked, bound, ready.layers.statements),
    )
    if any(item.uptake == 0 for item in points):
        findings.add(
            "YN887",
            f"biomass can be made of the other substrates alone, without {case.basis.name}",
            case.span,
            hint="Measure or bound the other substrates, or take them off the equation.",
        )
    elif not curve.grows:
        findings.add(
            "YN886",
            "the statements of the case leave no biomass at any of these growth rates",
            case.span,
            hint="Give up a statement, add what the network lacks, or ask for other rates.",
        )
    numbers = [item.y_atp for item in points if item.y_atp is not None]
    if numbers and spent is not None:
        seen = AtpYield(
            range=Range(min(numbers), max(numbers)), growth=spent / mass, with_maintenance=True
        )
        findings.extend(doubtful_atp_yield(seen, case.span))
    return replace(curve, findings=findings.sorted())


def _refuse_what_does_not_grow(case: Case) -> None:
    why = ""
    coefficient = case.coefficient(BIOMASS)
    if case.network is None:
        why = "the case names no network"
    elif case.network.growth is None:
        why = "the network has no growth"
    elif coefficient is None or coefficient.side is Direction.CONSUMED:
        why = "biomass does not stand on the right of the equation"
    if why:
        raise InputError(
            [
                Finding(
                    code="YN881",
                    message=f"{why}, so there is no yield against growth rate",
                    where=case.span,
                    hint="Name a network with growth and write '? biomass' on the right.",
                )
            ]
        )


def _default_rates(case: Case) -> tuple[Fraction, ...]:
    if case.growth_rate is None:
        return DEFAULT_RATES
    return tuple(factor * case.growth_rate.value for factor in _ROUND_THE_CASE)


def _point(
    rate: Fraction,
    pieces: Sequence[Piece],
    rate_atp: Fraction,
    mass: Fraction,
    spent: Fraction | None,
) -> GrowthPoint:
    need = rate_atp * mass / rate
    for place, piece in enumerate(pieces):
        if piece.low <= need and (piece.high is None or need <= piece.high):
            basis = piece.basis(need)
            return GrowthPoint(
                rate=rate,
                yield_mol=1 / basis if basis else None,
                uptake=basis * rate / mass,
                y_atp=None if spent is None else mass / (spent + need),
                piece=place,
            )
    return GrowthPoint(rate=rate, yield_mol=None, uptake=None, y_atp=None, piece=None)


def _pirt(piece: Piece, rate_atp: Fraction, mass: Fraction) -> PirtPiece:
    """A piece in growth rates: maintenance per biomass is m M/mu."""
    times = rate_atp * mass
    slowest = None if piece.high is None or not times else times / piece.high
    return PirtPiece(
        fastest=times / piece.low if piece.low and times else None,
        slowest=slowest,
        true_yield=1 / piece.constant if piece.constant > 0 else None,
        maintenance=piece.slope * rate_atp,
        starts=piece.starts,
        stops=piece.stops,
    )


def _assumptions(
    asked: Case, bound: BoundNetwork, statements: Statements
) -> tuple[Assumption, ...]:
    """Those of a prediction, with maintenance as it is used here."""
    without = replace(bound, network=replace(bound.network, maintenance=None))
    found = list(assumptions_of(replace(asked, network=without.network), statements, without))
    maintenance = bound.network.maintenance
    if maintenance is not None:
        found.append(
            Assumption(
                text=f"maintenance {maintenance.carrier}, the same at every growth rate",
                value=1000 * maintenance.rate_mol_per_gram_hour,
                unit="mmol/g/h",
                source=maintenance.source,
            )
        )
    if statements.measured:
        found.append(
            Assumption(
                text="measured values are reconciled without maintenance, once for all rates"
            )
        )
    found.append(Assumption(text="growth rate, substrate uptake and aim of the case are set aside"))
    return tuple(found)
