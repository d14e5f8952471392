"""Values of a run that carry their errors, and what is told on the way to its rates.

What was written once is one source of error, wherever it is used: a reading that stands in several
rows, the factor of a calibration, the concentration of a feed. Readings are the same source when
they are one object, or when they were written at the same place.

References
----------
Propagation is linear, by the package ``uncertainties``, which follows each source through all sums
and products.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from yieldnet.foundation.findings import Findings
from yieldnet.foundation.sourced import Assumption
from yieldnet.model.cultivation import Reading
from yieldnet.model.network import BIOMASS, Direction

if TYPE_CHECKING:
    from collections.abc import Sequence
    from fractions import Fraction

    import numpy as np
    from numpy.typing import NDArray

    from yieldnet.foundation.findings import SourceSpan
    from yieldnet.foundation.sourced import SourcedValue
    from yieldnet.model.cultivation import Additions, Cultivation, Series

__all__ = [
    "Listed",
    "Notes",
    "PerhapsQuantity",
    "Quantity",
    "Values",
    "covariance",
    "deviation",
    "listed",
    "nominal",
    "own_side",
    "place_of",
    "row_count",
]

Quantity = Any
"""A float, or a number of the package ``uncertainties`` that carries its errors."""

PerhapsQuantity = Any
"""A quantity, or ``None`` where nothing was measured."""


def nominal(quantity: Quantity) -> float:
    """Value without its errors."""
    import uncertainties  # type: ignore[import-untyped]

    return float(uncertainties.nominal_value(quantity))


def deviation(quantity: Quantity) -> float:
    """Standard deviation; 0 for a float."""
    import uncertainties

    return float(uncertainties.std_dev(quantity))


def covariance(quantities: Sequence[Quantity]) -> NDArray[np.float64]:
    """Covariance matrix of quantities, some of which may be floats.

    Parameters
    ----------
    quantities : sequence of float or value with errors
        In any units.

    Returns
    -------
    ndarray
        Square, in the order given, in products of the units.
    """
    import numpy as np

    columns: dict[object, int] = {}
    entries: list[tuple[int, int, float]] = []
    for row, quantity in enumerate(quantities):
        for source, slope in getattr(quantity, "derivatives", {}).items():
            column = columns.setdefault(source, len(columns))
            entries.append((row, column, slope * source.std_dev))
    shares = np.zeros((len(quantities), len(columns)))
    for row, column, share in entries:
        shares[row, column] = share
    found: NDArray[np.float64] = shares @ shares.T
    return found


@dataclass(frozen=True, slots=True, kw_only=True)
class Listed:
    """A compound of the equation for which the run has data.

    Parameters
    ----------
    name : str
        Compound.
    sign : int
        What turns given off into its own side: -1 for consumed, else 1 [-].
    side : Direction
        Its declared side; the basis is consumed.
    broth : Series or None
        Its concentrations in the broth.
    in_gas : bool
        Whether it is measured in the gas that leaves.
    """

    name: str
    sign: int
    side: Direction
    broth: Series | None
    in_gas: bool

    @property
    def only_added(self) -> bool:
        """Whether nothing but what was added of it is known."""
        return self.broth is None and not self.in_gas


def listed(run: Cultivation) -> tuple[Listed, ...]:
    """Compounds with data: the basis first, then in the order of the run."""
    broth = {series.compound: series for series in run.broth}
    gas = {series.compound for series in run.gas.outlet} if run.gas else set()
    added = {name for item in run.additions for name in _contents(item)}
    sides = {run.basis.name: Direction.CONSUMED}
    sides |= {item.name: item.side for item in run.coefficients}
    return tuple(
        Listed(
            name=name,
            sign=-1 if side is Direction.CONSUMED else 1,
            side=side,
            broth=broth.get(name),
            in_gas=name in gas,
        )
        for name, side in sides.items()
        if name in broth or name in gas or (name in added and name != BIOMASS)
    )


def own_side(items: Sequence[Listed]) -> NDArray[np.float64]:
    """Signs that turn given off into the own side of each compound [-]."""
    import numpy as np

    return np.array([item.sign for item in items], float)


def _contents(item: Additions) -> tuple[str, ...]:
    return (
        *(name for name, _ in item.contents),
        *(series.compound for series in item.contents_by_row),
    )


def place_of(run: Cultivation, row: int) -> SourceSpan | None:
    """Where a row begins; the top of the file where the run does not say."""
    return run.rows[row] if row < len(run.rows) else run.span


def row_count(run: Cultivation) -> int:
    """Rows of the sheet [-]."""
    return max(len(run.times), len(run.states))


class Values:
    """Values of a run that carry their errors, one source for what was written once.

    Parameters
    ----------
    run : Cultivation
        The run, which must outlive this object.
    """

    def __init__(self, run: Cultivation) -> None:
        self.run = run
        self._known: dict[object, Quantity] = {}
        self._broth = {series.compound: series for series in run.broth}

    @staticmethod
    def key(reading: Reading) -> object:
        """What tells one source of error from another."""
        if reading.span is None:
            return id(reading)
        return reading.span, reading.value, reading.sd

    def of(self, reading: Reading) -> Quantity:
        """Value of a reading; a float where it is exact."""
        if not reading.sd:
            return reading.value
        key = self.key(reading)
        if key not in self._known:
            import uncertainties

            self._known[key] = uncertainties.ufloat(reading.value, reading.sd)
        return self._known[key]

    def cell(self, series: Series | None, row: int) -> PerhapsQuantity:
        """Value of a column at a row; ``None`` where nothing was measured."""
        reading = series.readings[row] if series else None
        return None if reading is None else self.of(reading)

    def broth(self, name: str, row: int) -> PerhapsQuantity:
        """Concentration in the broth, biomass as dry weight [mol/L], [g/L]."""
        found = self.cell(self._broth.get(name), row)
        if found is None or name != BIOMASS or self.run.calibration is None:
            return found
        return found * self.of(self.run.calibration.factor)

    def content(self, item: Additions, name: str, row: int) -> Quantity:
        """Concentration in what is added; 0 where the run lists none [mol/L], [g/L]."""
        for series in item.contents_by_row:
            if series.compound == name:
                found = self.cell(series, row)
                return 0.0 if found is None else found
        for compound, reading in item.contents:
            if compound == name:
                return self.of(reading)
        return 0.0

    def volume_at(self, row: int) -> PerhapsQuantity:
        """Broth volume as written for a row, or the constant one [L]."""
        if isinstance(self.run.volume, Reading):
            return self.of(self.run.volume)
        return self.cell(self.run.volume, row)


@dataclass(slots=True)
class Notes:
    """Findings and assumptions in the making.

    Parameters
    ----------
    findings : Findings
        What was found so far.
    assumptions : list of Assumption
        What was taken for granted so far, each once.
    """

    findings: Findings = field(default_factory=Findings)
    assumptions: list[Assumption] = field(default_factory=list)

    def assume(
        self, text: str, value: Fraction | None = None, unit: str = "", source: str = ""
    ) -> None:
        """Add an assumption unless it is there already."""
        found = Assumption(text=text, value=value, unit=unit, source=source)
        if found not in self.assumptions:
            self.assumptions.append(found)

    def assume_constant(self, text: str, constant: SourcedValue) -> None:
        """Add a constant that was used, with its source."""
        self.assume(text, constant.value, constant.unit, constant.source)
