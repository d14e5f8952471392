"""The trade-off: all that two coefficients of a case can be together, as an exact polygon.

The case is taken as in other studies: statements about the two coefficients are given up and
listed, everything else that it says stays at the reconciled point. At every corner all other
coefficients are filled in, and along every edge it is told which of them appear or vanish.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.balance.statements import is_exact, side_sign, statements_of, yield_column
from yieldnet.foundation.errors import InputError
from yieldnet.foundation.findings import Findings, near
from yieldnet.model.case import Aim, AimDirection
from yieldnet.model.network import BIOMASS
from yieldnet.optimum.polygon import Axis, Point, project
from yieldnet.optimum.problem import SHUT, Bounds
from yieldnet.optimum.ranges import column_ranges
from yieldnet.prediction.coefficients import own_side
from yieldnet.studies.setting import set_up

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from yieldnet.foundation.findings import Finding
    from yieldnet.model.case import Case
    from yieldnet.optimum.polygon import Polygon
    from yieldnet.optimum.ranges import Range
    from yieldnet.studies.setting import Setting

__all__ = [
    "OVER",
    "Change",
    "Corner",
    "Edge",
    "Region",
    "Switch",
    "Tradeoff",
    "TradeoffAxis",
    "trade_off",
]

OVER = {"growth-rate": BIOMASS, "oxygen": "oxygen"}
"""Axes that have a name of their own, with the coefficient that each shows."""


class Change(StrEnum):
    """What becomes of a coefficient from one corner to the next."""

    APPEARS = "appears"
    VANISHES = "vanishes"
    TURNS = "turns"


@dataclass(frozen=True, slots=True, kw_only=True)
class TradeoffAxis:
    """What an axis shows.

    Parameters
    ----------
    name : str
        Compound, or ``growth rate``.
    compound : str
        Coefficient behind it.
    unit : str
        ``mol/mol`` of the basis, or ``1/h``.
    """

    name: str
    compound: str
    unit: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Switch:
    """A coefficient that is none at one end of an edge, or turns from one side to the other.

    Parameters
    ----------
    compound : str
        Which.
    change : Change
        What becomes of it.
    certain : bool
        Whether it must be there at the other end, rather than may.
    places : tuple of Point
        Where a coefficient that turns can be zero on the way: the first and the last place, mostly
        the same. Empty for the other changes, which happen at the corner where it is none.
    """

    compound: str
    change: Change
    certain: bool
    places: tuple[Point, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Corner:
    """A corner of the polygon with everything else filled in.

    Parameters
    ----------
    x, y : Fraction
        Place on both axes, each in its own unit.
    coefficients : tuple of (str, Range)
        Every coefficient at the corner, positive on its side [mol/mol basis].
    """

    x: Fraction
    y: Fraction
    coefficients: tuple[tuple[str, Range], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Edge:
    """Way from one corner to the next, counter-clockwise.

    Parameters
    ----------
    start, end : int
        Places of the corners.
    slope : Fraction or None
        Change of y per x, in their units; ``None`` where x stands still.
    switches : tuple of Switch
        What appears, vanishes or turns on the way.
    """

    start: int
    end: int
    slope: Fraction | None
    switches: tuple[Switch, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """What two coefficients of one case can be together.

    Parameters
    ----------
    case : Case
        The case.
    polygon : Polygon
        Corners and, if it has no end, its rays.
    corners : tuple of Corner
        The corners, filled in.
    edges : tuple of Edge
        The edges between corners.
    given_up : tuple of str
        Statements about the two coefficients, which do not count here.
    findings : tuple of Finding
        What was doubtful in the case.
    """

    case: Case
    polygon: Polygon
    corners: tuple[Corner, ...]
    edges: tuple[Edge, ...]
    given_up: tuple[str, ...]
    findings: tuple[Finding, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Tradeoff:
    """Regions of one or several cases on the same axes.

    Parameters
    ----------
    x, y : TradeoffAxis
        What the axes show.
    basis : str
        Substrate per mol of which yields are told.
    regions : tuple of Region
        One a case, in the order given.
    """

    x: TradeoffAxis
    y: TradeoffAxis
    basis: str
    regions: tuple[Region, ...]


def trade_off(
    cases: Sequence[Case], x: str = "", y: str = "", over: str = "", engine: str = "glpk"
) -> Tradeoff:
    """Exact polygons of two coefficients, one a case.

    Parameters
    ----------
    cases : sequence of Case
        At least one; all with the same basis.
    x : str
        Coefficient along x; biomass if empty.
    y : str
        Coefficient along y; the aim of the first case if empty.
    over : {"", "growth-rate", "oxygen"}
        Axis with a name of its own, instead of ``x``.
    engine : {"glpk", "optlang"}
        Engine whose bases are proven.

    Returns
    -------
    Tradeoff
        Corners, each proven [mol/mol basis], growth rates [1/h].

    Raises
    ------
    InputError
        If a case cannot be studied on these axes; carries all findings.
    ValueError
        If there is no case, or ``over`` is not known or stands beside ``x``.

    Notes
    -----
    Growth rate over the yields is told at the substrate uptake q of the case: the growth rate is
    q x Y x M, with Y the biomass yield [mol/mol] and M the mass of a mol of biomass with its ash
    [g/mol], and maintenance takes m/q of ATP per mol of substrate at every growth rate. So this is
    one uptake shared out between growth, product and maintenance, and the set is a polygon, too;
    a stated growth rate is a statement about biomass, and is given up.
    """
    if not cases:
        raise ValueError("a trade-off needs a case")
    if over and (x or over not in OVER):
        raise ValueError(f"over={over!r} is not one of {', '.join(OVER)}, or stands beside x")
    first = cases[0]
    aim = first.aim.compound if first.aim and not first.aim.is_energy else ""
    compounds = (OVER[over] if over else x or BIOMASS, y or aim)
    growth = over == "growth-rate"
    findings = Findings()
    for case in cases:
        findings.extend(_misfits(case, first, compounds, growth))
    if findings.refused:
        raise InputError(findings.sorted())
    name, unit = ("growth rate", "1/h") if growth else (compounds[0], "mol/mol")
    return Tradeoff(
        x=TradeoffAxis(name=name, compound=compounds[0], unit=unit),
        y=TradeoffAxis(name=compounds[1], compound=compounds[1], unit="mol/mol"),
        basis=first.basis.name,
        regions=tuple(_region(case, compounds, growth, engine) for case in cases),
    )


def _misfits(case: Case, first: Case, compounds: tuple[str, str], growth: bool) -> Findings:
    """Why a case cannot be shown on the axes."""
    findings = Findings()
    x, y = compounds
    if not y:
        findings.add(
            "YN701",
            "a trade-off needs a product",
            case.span,
            hint="Name a coefficient for y, or add 'aim: most ...' with one.",
        )
    elif x == y:
        findings.add(
            "YN701",
            f"both axes would show {x!r}",
            case.span,
            hint="Name two different coefficients.",
        )
    if case.basis.name != first.basis.name:
        findings.add(
            "YN710",
            "the cases have different bases",
            case.span,
            left=f"first case: {first.basis.name}",
            right=f"this case: {case.basis.name}",
            hint="Show each basis in a trade-off of its own.",
        )
    for name in dict.fromkeys(name for name in compounds if name):
        if name == case.basis.name:
            findings.add(
                "YN502",
                f"{name!r} is the basis, so its coefficient is always 1",
                case.span,
                hint="Name another coefficient.",
            )
        elif case.coefficient(name) is None:
            known = [item.name for item in case.coefficients]
            findings.add(
                "YN503",
                f"{name!r} is not in the overall equation of {case.title!r}",
                case.span,
                hint=near(name, known) or f"Coefficients: {', '.join(known)}.",
            )
    for name in dict.fromkeys(compounds):
        one, two = first.coefficient(name), case.coefficient(name)
        if one is not None and two is not None and side_sign(one.side) != side_sign(two.side):
            findings.add(
                "YN710",
                f"{name!r} counts on the other side than in the first case",
                two.span,
                left=f"first case: {one.side}",
                right=f"this case: {two.side}",
                hint="Write it on the same side of both equations.",
            )
    if growth and case.substrate_uptake is None:
        findings.add(
            "YN709",
            "growth rates need the substrate uptake of the case",
            case.span,
            hint="Add 'substrate uptake: ... mmol/g/h' to its conditions, or show biomass.",
        )
    return findings


def _region(case: Case, compounds: tuple[str, str], growth: bool, engine: str) -> Region:
    # The product of the study is y, so that what is measured of another aim still counts.
    studied = replace(case, aim=Aim(direction=AimDirection.MOST, compound=compounds[1]))
    setting = set_up(studied, engine, freed=compounds[:1])
    axes = [_axis(case, name) for name in compounds]
    if growth:
        assert case.substrate_uptake is not None
        mass = case.compound(BIOMASS).weight.molar_mass
        assert mass is not None
        axes[0] = replace(axes[0], factor=case.substrate_uptake.value * mass)
    polygon = project(setting.optimiser, setting.problem, axes[0], axes[1])
    assert polygon is not None
    corners = tuple(_corner(setting, axes, at) for at in polygon.corners)
    edges = tuple(
        _edge(setting, axes, corners, places, frozenset(compounds)) for places in polygon.edges()
    )
    return Region(
        case=case,
        polygon=polygon,
        corners=corners,
        edges=edges,
        given_up=tuple(_given_up(studied, compounds)),
        findings=setting.ready.findings,
    )


def _axis(case: Case, compound: str) -> Axis:
    item = case.coefficient(compound)
    assert item is not None
    return Axis(yield_column(compound), Fraction(side_sign(item.side)))


def _corner(setting: Setting, axes: Sequence[Axis], at: tuple[Fraction, Fraction]) -> Corner:
    """A corner with the range of every coefficient there."""
    held = {}
    for axis, place in zip(axes, at, strict=True):
        value = place / axis.factor
        held[axis.column] = Bounds(value, value)
    columns = [yield_column(item.name) for item in setting.case.coefficients]
    ranges = column_ranges(setting.optimiser, setting.problem.with_columns(held), columns)
    assert ranges is not None
    return Corner(x=at[0], y=at[1], coefficients=tuple(own_side(setting.case, ranges).items()))


def _edge(
    setting: Setting,
    axes: Sequence[Axis],
    corners: Sequence[Corner],
    places: tuple[int, int],
    shown: frozenset[str],
) -> Edge:
    """An edge with what changes on the way."""
    here, there = (corners[place] for place in places)
    run = there.x - here.x
    switches = []
    for (name, before), (_, after) in zip(here.coefficients, there.coefficients, strict=True):
        change = None if name in shown else _change(before, after)
        if change is not None:
            switches.append(
                Switch(
                    compound=name,
                    change=change,
                    certain=_way(before) != 0 or _way(after) != 0,
                    places=_turns(setting, axes, here, there, name)
                    if change is Change.TURNS
                    else (),
                )
            )
    slope = (there.y - here.y) / run if run else None
    return Edge(start=places[0], end=places[1], slope=slope, switches=tuple(switches))


def _turns(
    setting: Setting, axes: Sequence[Axis], here: Corner, there: Corner, compound: str
) -> tuple[Point, ...]:
    """First and last place between two corners at which a coefficient can be zero."""
    along = (there.x - here.x, there.y - here.y)

    def objective(x: Fraction, y: Fraction) -> dict[str, Fraction]:
        return {axes[0].column: x * axes[0].factor, axes[1].column: y * axes[1].factor}

    # Nothing lies beyond an edge, so its points are the optimal ones of its outward normal.
    rim = setting.optimiser.optimise(setting.problem, objective(along[1], -along[0]))
    zero = rim.optimal_face().with_columns({yield_column(compound): SHUT})
    ends = (setting.optimiser.optimise(zero, objective(*along), most) for most in (False, True))
    return tuple(
        (end[axes[0].column] * axes[0].factor, end[axes[1].column] * axes[1].factor) for end in ends
    )


def _change(before: Range, after: Range) -> Change | None:
    if _none(before) != _none(after):
        return Change.APPEARS if _none(before) else Change.VANISHES
    one, two = _way(before), _way(after)
    return Change.TURNS if one * two < 0 else None


def _none(value: Range) -> bool:
    return value.low == 0 and value.high == 0


def _way(value: Range) -> int:
    """+1 or -1 if only that sign is possible, else 0."""
    if value.low is not None and value.low > 0:
        return 1
    return -1 if value.high is not None and value.high < 0 else 0


def _given_up(case: Case, compounds: Sequence[str]) -> Iterator[str]:
    """Statements about the coefficients on the axes, in words."""
    statements = statements_of(case)
    for name in compounds:
        for item in statements.of(name):
            yield f"{item.label}: {item.text}"
        for demand in statements.demands:
            if demand.compound == name:
                yield f"demand {name}: {demand.text}"
        coefficient = case.coefficient(name)
        assert coefficient is not None
        if is_exact(coefficient) and coefficient.written is not None:
            yield f"written {name}: {coefficient.written.text}"
