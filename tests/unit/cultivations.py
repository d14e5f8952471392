"""Runs made in a test: an equation, columns of values with their errors, and what is added.

All compounds and numbers are invented.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from yieldnet.chemistry.formula import read_formula
from yieldnet.chemistry.library import find_compound
from yieldnet.foundation.exact import WrittenNumber
from yieldnet.foundation.findings import SourceSpan
from yieldnet.model.case import OverallCoefficient
from yieldnet.model.cultivation import (
    Additions,
    Calibration,
    Cultivation,
    CultivationKind,
    Gas,
    Method,
    Reading,
    Series,
)
from yieldnet.model.equation import Equation, Term
from yieldnet.model.network import Compound, Direction

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

BIOMASS = Compound(name="biomass", formula=read_formula("CH1.8O0.5N0.2"), ash=Fraction("0.05"))
BIOMASS_MASS = float(BIOMASS.weight.molar_mass or 0)
"""Dry weight with ash of one mol of the formula [g/mol]."""
LEFT = ("glucose", "oxygen", "ammonia")
RIGHT = ("biomass", "ethanol", "carbon dioxide")
ONE = WrittenNumber(Fraction(1), "1")
AIR = {"oxygen": 0.2095, "carbon dioxide": 0.0004}
"""Mole fractions of dry air as the tests use it; round values from memory [mol/mol]."""

Column = tuple["Sequence[float | None]", "float | Sequence[float]"]


def place(line: int, column: int = 1, file: str = "sheet.csv") -> SourceSpan:
    """Place in a sheet that nobody reads."""
    return SourceSpan(file=file, line=line, column=column)


def reading(value: float, sd: float = 0.0) -> Reading:
    """A reading without a place: a source of its own."""
    return Reading(value=value, sd=sd)


def series(compound: str, values: Sequence[float | None], sds: float | Sequence[float]) -> Series:
    """A column; one s.d. for all rows, or one for each."""
    each = [sds] * len(values) if isinstance(sds, int | float) else sds
    return Series(
        compound=compound,
        heading=compound,
        readings=tuple(
            None if value is None else Reading(value=value, sd=sd)
            for value, sd in zip(values, each, strict=True)
        ),
        span=place(1),
    )


def shared(compound: str, value: float, sd: float, rows: int) -> Series:
    """A column in which one and the same reading stands in every row."""
    return Series(compound=compound, heading=compound, readings=(reading(value, sd),) * rows)


def contents(**levels: tuple[float, float]) -> tuple[tuple[str, Reading], ...]:
    """Concentrations of what is added."""
    return tuple((name, reading(*level)) for name, level in levels.items())


def addition(
    name: str,
    levels: Mapping[str, tuple[float, float]],
    *,
    added: Column | None = None,
    rate: Column | None = None,
) -> Additions:
    """A feed or a base."""
    return Additions(
        name=name,
        contents=contents(**levels),
        added=series("", *added) if added else None,
        rate=series("", *rate) if rate else None,
    )


def gas(
    *,
    flow_in: Column | Series | None = None,
    flow_out: Column | None = None,
    inlet: Mapping[str, tuple[float, float]],
    outlet: Mapping[str, Column],
    **more: Any,
) -> Gas:
    """Gas at 0 degC and 101.325 kPa unless said so; one reading of the inlet in all rows."""
    rows = len(next(iter(outlet.values()))[0])
    return Gas(
        **{
            "flow_in": series("", *flow_in) if isinstance(flow_in, tuple) else flow_in,
            "flow_out": series("", *flow_out) if flow_out else None,
            "inlet": tuple(shared(name, *level, rows) for name, level in inlet.items()),
            "outlet": tuple(series(name, *column) for name, column in outlet.items()),
            "normal_temperature": 273.15,
            "normal_pressure": 101.325,
            **more,
        }
    )


def cultivation(
    kind: str,
    *,
    broth: Mapping[str, Column],
    times: Sequence[float] = (),
    states: Sequence[str] = (),
    method: str = "exponential",
    left: Sequence[str] = LEFT,
    right: Sequence[str] = RIGHT,
    either: Sequence[str] = ("water",),
    volume: Column | Reading | None = None,
    sampled: Column | None = None,
    dilution_rate: Column | None = None,
    calibration: tuple[float, float] | None = None,
    **more: Any,
) -> Cultivation:
    """A run from columns: (values, standard deviations) by compound."""
    names = (*left, *right, *either)
    rows = max(len(times), len(states))
    return Cultivation(
        **{
            "title": "Invented run",
            "kind": CultivationKind(kind),
            "method": Method(method),
            "equation": Equation(
                left=tuple(Term(name=name, coefficient=ONE) for name in left),
                right=tuple(Term(name=name, coefficient=ONE) for name in right),
            ),
            "basis": _compound(left[0]),
            "coefficients": tuple(
                OverallCoefficient(name=name, side=side)
                for group, side in (
                    (left[1:], Direction.CONSUMED),
                    (right, Direction.PRODUCED),
                    (either, Direction.EITHER),
                )
                for name in group
            ),
            "compounds": tuple(_compound(name) for name in names),
            "times": tuple(times),
            "states": tuple(states) or ("",) * rows,
            "rows": tuple(place(row + 2) for row in range(rows)),
            "broth": tuple(series(name, *column) for name, column in broth.items()),
            "calibration": Calibration(signal="optical density", factor=reading(*calibration))
            if calibration
            else None,
            "volume": series("", *volume) if isinstance(volume, tuple) else volume,
            "sampled": series("", *sampled) if sampled else None,
            "dilution_rate": series("", *dilution_rate) if dilution_rate else None,
            "span": place(1, file="run.yaml"),
            **more,
        }
    )


def _compound(name: str) -> Compound:
    if name == "biomass":
        return BIOMASS
    entry = find_compound(name)
    assert entry is not None, name
    return Compound(name=name, formula=entry.formula)
